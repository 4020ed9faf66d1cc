"""Admittance per area of what lies between metal and liquid, S/m², phasors exp(+jωt).

All functions take arrays that broadcast, frequency the last axis.
"""

import numpy as np

from model.arrays import Complex, Real


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
