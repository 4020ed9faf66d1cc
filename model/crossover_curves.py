"""How a particle's crossovers move with the conductivity of the liquid, and how far they spread."""

from dataclasses import dataclass

import numpy as np

from model.arrays import Real
from model.liquid.liquid import Liquid
from model.particle import Particle, Sample

#: Band that is searched, Hz, and search points per factor of ten; the crossover between two
#: points is taken on the straight line of Re K against log frequency, good to some 10⁻³.
LOWEST, HIGHEST, POINTS_PER_DECADE = 100.0, 1e9, 24


@dataclass(frozen=True)
class CrossoverCurve:
    """The crossover of one direction at many conductivities; NaN where there is none.

    Parameters
    ----------
    rising
        Whether Re K grows with frequency there: of several the lowest such crossover, of the
        falling ones the highest.
    frequency
        Of the declared particle, Hz, (n_conductivity,).
    low, high
        One standard deviation of the population below and above, from the spread of sizes and of
        membrane capacitances, which are taken as independent and lognormal.
    """

    rising: bool
    frequency: Real
    low: Real
    high: Real


def crossover_curves(
    particle: Particle, liquid: Liquid, conductivity: Real
) -> tuple[CrossoverCurve, CrossoverCurve]:
    """Follow the rising and the falling crossover over conductivities in S/m, (n,).

    The spread is that of first order: half the change of log frequency from one standard deviation
    below to one above, of both causes as the root of the sum of squares.
    """
    size, membrane = (_deviation(cv) for cv in (particle.radius_cv, particle.membrane_spread))
    smallest = 1.001 * particle.smallest_size
    sizes = [1.0, *((max(1.0 / size, smallest), size) if size > 1.0 else ())]
    sizes += [1.0] * (2 if membrane > 1.0 else 0)
    membranes = [1.0] * (len(sizes) - (2 if membrane > 1.0 else 0))
    membranes += [1.0 / membrane, membrane] if membrane > 1.0 else []
    decades = np.log10(HIGHEST / LOWEST)
    log = np.linspace(np.log(LOWEST), np.log(HIGHEST), round(decades * POINTS_PER_DECADE) + 1)
    medium = liquid.medium(2.0 * np.pi * np.exp(log), conductivity[:, None, None])
    sample = Sample(np.array(sizes)[:, None], np.array(membranes)[:, None])
    factor = particle.polarisation(medium, sample).real
    return _curve(factor, log, rising=True), _curve(factor, log, rising=False)


def _deviation(variation: float) -> float:
    """Factor of one standard deviation of a lognormal with this coefficient of variation."""
    return float(np.exp(np.sqrt(np.log1p(variation**2))))


def _curve(factor: Real, log: Real, rising: bool) -> CrossoverCurve:
    """Crossovers of one direction from Re K, (n_conductivity, n_sample, n_frequency)."""
    above = factor > 0.0
    crosses = above[..., 1:] & ~above[..., :-1] if rising else above[..., :-1] & ~above[..., 1:]
    if rising:
        place = crosses.argmax(axis=-1)
    else:
        place = crosses.shape[-1] - 1 - crosses[..., ::-1].argmax(axis=-1)
    left, right = (
        np.take_along_axis(factor, (place + step)[..., None], axis=-1)[..., 0] for step in (0, 1)
    )
    with np.errstate(divide="ignore", invalid="ignore"):
        found = log[place] + (log[1] - log[0]) * left / (left - right)
    found = np.where(crosses.any(axis=-1), found, np.nan)
    own, square = found[:, 0], np.zeros(found.shape[0])
    for first in range(1, found.shape[1], 2):
        below, over = found[:, first], found[:, first + 1]
        # where one side has no crossover any more the other speaks for both
        half = np.where(np.isnan(below), over - own, own - below)
        half = np.where(np.isnan(below + over), half, 0.5 * (over - below))
        square = square + half**2
    wide = np.sqrt(square)
    return CrossoverCurve(rising, np.exp(own), np.exp(own - wide), np.exp(own + wide))
