"""Crossover frequencies: where the real part of the polarisation factor changes its sign."""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from model.arrays import Real
from model.liquid.liquid import Liquid
from model.particle import Particle

#: Band that is searched, Hz.
LOWEST_FREQUENCY, HIGHEST_FREQUENCY = 1.0, 1e10
#: Search points per factor of ten in frequency. A dispersion of a layered sphere spreads over
#: more than a decade; two crossovers closer than one step (1.2 %) count as none, and Re K between
#: them stays below about 1e-4.
POINTS_PER_DECADE = 200
#: |Re K| below this is rounding noise, e.g. of a particle that equals its medium.
NOISE = 1e-13
_TOLERANCE = 1e-11
_MOST_STEPS = 100


@dataclass(frozen=True)
class Crossover:
    """Frequency in Hz at which Re K is zero; `rising` if it grows with frequency there."""

    frequency: float
    rising: bool

    @property
    def direction(self) -> str:
        """``rises`` (Re K from negative to positive) or ``falls``."""
        return "rises" if self.rising else "falls"


def find_crossovers(
    real_part: Callable[[Real], Real],
    lowest: float = LOWEST_FREQUENCY,
    highest: float = HIGHEST_FREQUENCY,
) -> tuple[Crossover, ...]:
    """Find all sign changes of Re K within a band, in order of frequency, to 1e-10 relative.

    Parameters
    ----------
    real_part
        Takes frequencies in Hz, shape ``(n,)``, and gives Re K, shape ``(n,)``.
    lowest, highest
        Band in Hz, by default 1 Hz to 10 GHz. It is searched at :data:`POINTS_PER_DECADE`,
        which is also the resolution; all brackets are then refined together (regula falsi with
        the Illinois correction, on the logarithm of frequency).

    Examples
    --------
    >>> find_crossovers(lambda frequency: 1.0 - frequency / 1e6)
    (Crossover(frequency=1000000.0, rising=False),)
    """
    decades = np.log10(highest / lowest)
    grid = np.geomspace(lowest, highest, int(np.ceil(decades * POINTS_PER_DECADE)) + 1)
    values = np.asarray(real_part(grid), dtype=float)
    told = np.abs(values) > NOISE
    grid, values = grid[told], values[told]
    change = np.flatnonzero(np.signbit(values[:-1]) != np.signbit(values[1:]))
    if change.size == 0:
        return ()
    roots = _refined(
        real_part,
        np.log(grid[change]),
        np.log(grid[change + 1]),
        values[change],
        values[change + 1],
    )
    return tuple(
        Crossover(float(f"{frequency:.12g}"), bool(rising))
        for frequency, rising in zip(np.exp(roots), values[change] < 0.0, strict=True)
    )


def particle_crossovers(particle: Particle, liquid: Liquid) -> tuple[Crossover, ...]:
    """Find every crossover of a particle in a liquid, in order of frequency."""

    def real_part(frequency: Real) -> Real:
        return np.asarray(particle.polarisation(liquid.medium(2.0 * np.pi * frequency)).real)

    return find_crossovers(real_part)


def _refined(
    real_part: Callable[[Real], Real], left: Real, right: Real, at_left: Real, at_right: Real
) -> Real:
    """Close in on one root in each bracket of log frequency; `right` is the latest estimate."""
    roots = right.copy()
    pending = np.arange(right.size)
    for _ in range(_MOST_STEPS):
        middle = (left * at_right - right * at_left) / (at_right - at_left)
        at_middle = np.asarray(real_part(np.exp(middle)), dtype=float)
        roots[pending] = middle
        moving = (np.abs(middle - right) > _TOLERANCE) & (at_middle != 0.0)
        if not moving.any():
            return roots
        same = np.signbit(at_middle) == np.signbit(at_right)
        pending = pending[moving]
        left = np.where(same, left, right)[moving]
        at_left = np.where(same, 0.5 * at_left, at_right)[moving]
        right, at_right = middle[moving], at_middle[moving]
    raise ArithmeticError("a crossover of the polarisation factor did not converge")
