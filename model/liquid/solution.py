"""A solution of known composition: its properties from those of what is dissolved."""

from dataclasses import dataclass
from functools import cached_property, lru_cache
from itertools import compress

import numpy as np
from scipy.constants import epsilon_0

from model.arrays import Real
from model.liquid import osmotic, water
from model.liquid.conduction import conductivity
from model.liquid.electrolyte import Electrolyte
from model.liquid.species import REFERENCE, Columns, columns, diffusivity

#: Density of water at 25 °C, kg/m³.
REFERENCE_DENSITY = float(water.density(REFERENCE))
#: Power of the relative viscosity by which ions are slowed among sugars: R. H. Stokes in *The
#: Structure of Electrolytic Solutions* (ed. W. J. Hamer 1959), for sucrose, from memory. Of ions
#: much larger than what thickens the water it would be 1 (Walden 1906).
SLOWING = 0.7
#: By how much more than their own volume molecules crowd one another: fitted with B to ICUMSA's
#: viscosities of sucrose up to 30 % by weight, from memory; the form is that of M. Mooney 1951.
CROWDING = 1.24
#: Most crowding that is modelled: 40 % of sucrose by weight, whose viscosity is then 6 % too high.
MOST_CROWDED = 0.37


@dataclass(frozen=True)
class Solution:
    """Species in water.

    Ratios to water are those at 25 °C and hold at other temperatures too: that of viscosities falls
    by some 0.2 %/K with much sugar.

    Parameters
    ----------
    names
        Keys of :data:`model.liquid.species.SPECIES`.
    concentrations
        mol/m³ at 25 °C, (n_species,) or (n_species, n); all that follows from it is () or (n,).
    """

    names: tuple[str, ...]
    concentrations: Real

    @property
    def columns(self) -> Columns:
        """Numbers of its species."""
        return columns(self.names)

    @cached_property
    def ionic_strength(self) -> Real:
        """I = ½ Σ z²c, mol/m³ at 25 °C."""
        return 0.5 * self._sum(self.columns.charges**2)

    @cached_property
    def water(self) -> Real:
        """Mass of water per volume at 25 °C, kg/m³, with volumes at infinite dilution."""
        return REFERENCE_DENSITY * (1.0 - self._sum(self.columns.volumes))

    @property
    def osmolality(self) -> Real:
        """At 25 °C, mol/kg; see :func:`model.liquid.osmotic.osmolality`."""
        return osmotic.osmolality(self.names, self.concentrations / self.water)

    def density(self, temperature: float) -> Real:
        """kg/m³; within 0.3 % up to 1 mol/L of ionic strength or of sugar."""
        return _water(temperature).warmed * (self.water + self._sum(self.columns.masses))

    @property
    def crowd(self) -> Real:
        """1.24 times the share of the volume that its molecules take, Σ Vc."""
        return CROWDING * self._sum(self.columns.volumes, ions=False)

    @cached_property
    def thickness(self) -> Real:
        """By how much its molecules raise the viscosity of water: exp(Σ Bc/(1 − 1.24 Σ Vc))."""
        room = 1.0 - np.minimum(self.crowd, MOST_CROWDED)
        return np.asarray(np.exp(self._sum(self.columns.thickening, ions=False) / room))

    def viscosity(self, temperature: float) -> Real:
        """Pa s: water's, raised by the molecules and by exp(Σ Bc) of the ions; within 3 %."""
        ions = self._sum(self.columns.thickening, ions=True)
        return np.asarray(_water(temperature).viscosity * np.exp(ions) * self.thickness)

    def permittivity(self, temperature: float) -> Real:
        """F/m: water's, lowered by all species in proportion at all temperatures."""
        lowered = 1.0 - self._sum(self.columns.decrements) / _POLAR
        return np.asarray(_water(temperature).permittivity * lowered)

    def conductivity(self, temperature: float) -> Real:
        """S/m: that of its ions in a liquid as thick and as polar as the molecules make it."""
        ions, of_water = self.columns.ions, _water(temperature)
        free = diffusivity(tuple(compress(self.names, ions)), temperature)
        return conductivity(
            self.columns.charges[ions],
            np.multiply.outer(free, self.thickness**-SLOWING),
            self.columns.sizes[ions],
            of_water.warmed * self.concentrations[ions],
            temperature,
            of_water.permittivity * (1.0 - self._sum(self.columns.decrements, ions=False) / _POLAR),
            of_water.viscosity * self.thickness,
        )

    def electrolyte(self, temperature: float, thickness: float) -> Electrolyte:
        """Its ions, with their diffusivities in a liquid whose molecules thicken it as told."""
        ions = self.columns.ions
        return Electrolyte(
            self.columns.charges[ions],
            diffusivity(tuple(compress(self.names, ions)), temperature) / thickness**SLOWING,
            _water(temperature).warmed * self.concentrations[ions],
            temperature,
        )

    def _sum(self, weights: Real, *, ions: bool | None = None) -> Real:
        """Σ of weights times concentrations, over all species, ions or molecules alone."""
        if ions is not None:
            weights = np.where(self.columns.ions == ions, weights, 0.0)
        return np.asarray(weights @ self.concentrations)


@dataclass(frozen=True)
class _Water:
    """Water: density over that at 25 °C, permittivity in F/m, viscosity in Pa s."""

    warmed: float
    permittivity: float
    viscosity: float


@lru_cache(maxsize=32)  # a stage has few temperatures; pure
def _water(temperature: float) -> _Water:
    return _Water(
        float(water.density(temperature)) / REFERENCE_DENSITY,
        epsilon_0 * float(water.relative_permittivity(temperature)),
        float(water.viscosity(temperature)),
    )


_POLAR = float(water.relative_permittivity(REFERENCE))
#: Water alone.
PURE = Solution((), np.zeros(0))
