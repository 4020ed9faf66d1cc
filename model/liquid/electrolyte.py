"""The ions of a liquid, as double layers on electrodes and particles meet them."""

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike
from scipy.constants import Avogadro, Boltzmann, elementary_charge

from model.arrays import Real

#: Mean diffusivity of the ions of a simple salt, m²/s: K⁺ 1.96, Cl⁻ 2.03, Na⁺ 1.33·10⁻⁹ at 25 °C,
#: handbook tables.
DIFFUSIVITY = 2e-9


@dataclass(frozen=True)
class Electrolyte:
    """Ions that are dissolved together, neutral as a whole.

    Parameters
    ----------
    valences
        Charge numbers with sign, (n_ion,).
    diffusivities
        At the temperature, m²/s, (n_ion,).
    concentrations
        mol/m³, (n_ion, …): behind the ions any shape, e.g. that of the liquid's conductivity.
    temperature
        K.
    """

    valences: Real
    diffusivities: Real
    concentrations: Real
    temperature: float

    @cached_property
    def ionic_strength(self) -> Real:
        """I = ½ Σ z²c, mol/m³."""
        return np.asarray(0.5 * np.tensordot(self.valences**2, self.concentrations, axes=(0, 0)))

    def debye_length(self, permittivity: float) -> Real:
        """λ_D, m, in a liquid of `permittivity` in F/m."""
        return debye_length(permittivity, self.ionic_strength, self.temperature)


def debye_length(permittivity: float, ionic_strength: ArrayLike, temperature: float) -> Real:
    """λ_D = √(εkT/(2e²I)), m, of an ionic strength in mol/m³.

    >>> round(float(debye_length(78.4085 * 8.8541878e-12, 10.0, 298.15)) * 1e9, 4)
    3.0403
    """
    ions = 2.0 * elementary_charge**2 * Avogadro * np.asarray(ionic_strength)
    return np.asarray(np.sqrt(permittivity * Boltzmann * temperature / ions))


def simple_salt(conductivity: ArrayLike, temperature: float = 298.15) -> Electrolyte:
    """Ions of a liquid of which only the conductivity is known, S/m: one salt of charge number 1.

    Both ions have D = 2·10⁻⁹ m²/s, so that c = σkT/(2De²) and λ_D = √(εD/σ). A liquid that owes
    its conductivity to faster ions (acids) has fewer of them.

    >>> salt = simple_salt(2e-3)
    >>> round(float(salt.debye_length(78.4 * 8.854e-12)) * 1e9, 2)
    26.35
    """
    each = np.asarray(conductivity) * (
        Boltzmann * temperature / (2.0 * DIFFUSIVITY * elementary_charge**2 * Avogadro)
    )
    return Electrolyte(
        np.array([1.0, -1.0]), np.full(2, DIFFUSIVITY), np.stack([each, each]), temperature
    )
