"""How the branches of a crossover map go on beyond the last conductivity that has them.

A branch ends for one of two reasons: it runs into the other one, as the two crossovers merge and
vanish, or its crossover leaves the band of frequencies. Both happen between two neighbouring
conductivities; without them the curves would stop in mid-air.
"""

import numpy as np

from model.arrays import Real
from model.crossover_curves import HIGHEST, LOWEST

#: Points of the bend in which two branches merge.
_BEND = np.linspace(1.0, -1.0, 9)
_GAP = np.full((2, 1), np.nan)


def closed_branches(conductivity: Real, rising: Real, falling: Real) -> tuple[Real, Real]:
    """Give both branches with their ends as (2, m) lines of conductivity and frequency.

    Parameters
    ----------
    conductivity
        S/m, growing in even steps of its logarithm, (n,).
    rising, falling
        Frequencies in Hz, NaN where there is none, (n,). The bend belongs to the rising one.
    """
    steps = np.log(conductivity)
    curves = [np.log(rising), np.log(falling)]
    lines = [[np.stack([steps, curve])] for curve in curves]
    for backward in (False, True):
        view = slice(None, None, -1 if backward else 1)
        x, (one, other) = steps[view], [curve[view] for curve in curves]
        ends = [_last_places(curve) for curve in (one, other)]
        for place in sorted(ends[0] & ends[1]):
            if _nears(one, other, place):
                lines[0] += [_GAP, _bend(x, one, other, place)]
                ends = [found - {place} for found in ends]
        for line, curve, places in zip(lines, (one, other), ends, strict=True):
            for place in sorted(places):
                line += [_GAP, _leaving(x, curve, place)]
    first, second = (np.exp(np.concatenate(parts, axis=1)) for parts in lines)
    return first, second


def _last_places(curve: Real) -> set[int]:
    """Where a branch has a value, also before, and none behind; the end of the axis is none."""
    known = np.isfinite(curve)
    last = known[1:-1] & known[:-2] & ~known[2:]
    return {int(place) + 1 for place in np.flatnonzero(last)}


def _nears(one: Real, other: Real, place: int) -> bool:
    """Whether the two come closer towards their end."""
    apart = np.abs(one - other)
    return bool(apart[place] < apart[place - 1])


def _bend(x: Real, one: Real, other: Real, place: int) -> Real:
    """Parabola from one branch to the other: where two zeros merge their distance² falls evenly.

    It turns where the distance² comes to zero on the line through the last two places, at most
    one step on.
    """
    before, last = (one[place - step] - other[place - step] for step in (1, 0))
    step = x[place + 1] - x[place]
    reach = step * min(last**2 / (before**2 - last**2), 1.0)
    middle = 0.5 * (one[place] + other[place])
    return np.stack([x[place] + reach * (1.0 - _BEND**2), middle + 0.5 * last * _BEND])


def _leaving(x: Real, curve: Real, place: int) -> Real:
    """Onward to the end of the band that the branch moves to, half a step on."""
    down = curve[place] < curve[place - 1]
    end = np.log(LOWEST if down else HIGHEST)
    return np.array([[x[place], 0.5 * (x[place] + x[place + 1])], [curve[place], end]])
