"""Admittance per area of what lies between metal and liquid, S/m², phasors exp(+jωt).

All functions take arrays that broadcast, frequency the last axis.
"""

import numpy as np
from numpy.typing import ArrayLike
from scipy.constants import Avogadro, Boltzmann, elementary_charge

from model.arrays import Complex, Real

#: Mean diffusivity of the ions of a simple salt, m²/s: K⁺ 1.96, Cl⁻ 2.03, Na⁺ 1.33·10⁻⁹ at 25 °C,
#: handbook tables.
DIFFUSIVITY = 2e-9


def debye_length(permittivity: float, conductivity: ArrayLike) -> Real:
    """Estimate λ_D = √(εD/σ) from the conductivity of the liquid, m.

    Exact for a salt of two ions of one charge number and one diffusivity D = 2·10⁻⁹ m²/s; of
    σ = 2Dce²z²/(kT) and λ_D² = εkT/(2ce²z²), c ions of each kind per volume. A liquid that owes
    its conductivity to faster ions (acids) has a longer one.

    >>> round(float(debye_length(78.4 * 8.854e-12, 2e-3)) * 1e9, 2)
    26.35
    """
    return np.sqrt(permittivity * DIFFUSIVITY / np.asarray(conductivity))


def debye_length_of(permittivity: float, ionic_strength: float, temperature: float) -> float:
    """λ_D = √(εkT/(2e²I)) of a known ionic strength in mol/m³, m.

    >>> round(debye_length_of(78.4085 * 8.8541878e-12, 10.0, 298.15) * 1e9, 4)
    3.0403
    """
    ions = 2.0 * elementary_charge**2 * Avogadro * ionic_strength
    return float(np.sqrt(permittivity * Boltzmann * temperature / ions))


def capacitive(omega: Real, capacitance: float | Real) -> Complex:
    """Y = jωC of a capacitance per area, F/m²."""
    return np.asarray(1j * omega * capacitance)


def constant_phase(omega: Real, magnitude: float, exponent: float) -> Complex:
    """Y = Q(jω)ⁿ, Q in S·sⁿ/m²; n = 1 is a capacitance, n = ½ a diffusion impedance."""
    return np.asarray(magnitude * (1j * omega) ** exponent)


def slab(omega: Real, thickness: float, permittivity: float, conductivity: float) -> Complex:
    """Y = (σ + jωε)/d of a film, `permittivity` in F/m; only across it, so d ≪ electrode width."""
    return np.asarray((conductivity + 1j * omega * permittivity) / thickness)


def in_series(*admittances: Complex) -> Complex:
    """1/Y = Σ 1/Yᵢ."""
    return np.asarray(1.0 / sum(1.0 / part for part in admittances))
