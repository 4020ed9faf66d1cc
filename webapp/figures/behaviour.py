"""What a particle does in a liquid whatever the drive: found once, as mostly another knob moves."""

from dataclasses import dataclass
from functools import cached_property, lru_cache

import numpy as np

from model.arrays import Real
from model.crossover_curves import CrossoverCurve, crossover_curves
from model.crossovers import Crossover, particle_crossovers
from model.liquid.liquid import Liquid
from model.particle import Particle
from model.spectral_features import SpectralFeatures, spectral_features
from webapp.figures.branches import closed_branches

#: Particles in liquids that are kept; a design has at most twelve particles.
_MOST_KEPT = 96
#: Conductivities of the crossover map, S/m, those of the knob, and how many for a factor of ten.
_LEAST, _MOST, _PER_DECADE = 1e-4, 3.0, 20


@dataclass(frozen=True)
class Behaviour:
    """Crossovers, in order of frequency, and features of one spectrum."""

    crossovers: tuple[Crossover, ...]
    features: SpectralFeatures


@lru_cache(maxsize=_MOST_KEPT)
def behaviour(particle: Particle, liquid: Liquid) -> Behaviour:
    """Find what stands out in a particle's spectrum in a liquid."""
    return Behaviour(particle_crossovers(particle, liquid), spectral_features(particle, liquid))


@dataclass(frozen=True)
class CrossoverMap:
    """Rising and falling crossovers of one particle over conductivities in S/m, (n,)."""

    conductivity: Real
    curves: tuple[CrossoverCurve, CrossoverCurve]

    @cached_property
    def branches(self) -> tuple[Real, Real]:
        """Both curves with their ends, as lines (2, n) of conductivity and frequency."""
        return closed_branches(self.conductivity, *(curve.frequency for curve in self.curves))


def crossover_map(particle: Particle, liquid: Liquid) -> CrossoverMap:
    """Find the crossovers at all conductivities; the liquid's own only widens their range.

    A liquid with a recipe keeps the permittivity that it has as mixed for its own conductivity;
    without one nothing else depends on that, and one map does for all.
    """
    low, high = _LEAST, _MOST
    while liquid.conductivity < low:
        low /= 10.0
    while liquid.conductivity > high:
        high *= 10.0
    if liquid.recipe is None:
        liquid = liquid.model_copy(update={"conductivity": high})
    return _crossover_map(particle, liquid, low, high)


@lru_cache(maxsize=_MOST_KEPT)
def _crossover_map(particle: Particle, liquid: Liquid, low: float, high: float) -> CrossoverMap:
    """Map between two conductivities."""
    conductivity = np.geomspace(low, high, round(np.log10(high / low) * _PER_DECADE) + 1)
    return CrossoverMap(conductivity, crossover_curves(particle, liquid, conductivity))
