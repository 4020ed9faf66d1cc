"""Streamlines of the flow on a map: lines along which its stream function keeps one value."""

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from model.arrays import Real
from model.maps import SectionMaps

#: Values of the stream function, over its greatest, of the lines that are drawn.
SHARES = (0.05, 0.22, 0.42, 0.64, 0.88)
#: Sides of a cell between corners (0, 0), (1, 0), (1, 1), (0, 1) of its row and column.
_LEFT, _TOP, _RIGHT, _BOTTOM = range(4)


def streamlines(maps: SectionMaps, shares: Sequence[float] = SHARES) -> list[Real]:
    """Trace the flow at even steps of the stream function, so that close lines mean fast flow.

    Returns
    -------
    list
        Polylines (2, k), m, each in the sense of the flow; none of a flow that is at rest.
    """
    nodes, stream = maps.patterns.nodes, maps.stream
    most = float(np.nanmax(np.abs(stream)))
    if most == 0.0:
        return []
    repeat = _columns(nodes.x, maps.period)
    x, stream = nodes.x[: repeat + 1], stream[:, : repeat + 1]
    lines = [
        _smooth(line if _with_flow(line, maps) > 0 else line[:, ::-1])
        for share in shares
        for level in (share * most, -share * most)
        for line in contours(x, nodes.y, stream, level)
    ]
    shifts = nodes.x[: -repeat or None : repeat] - nodes.x[0]
    return [line + np.array([[shift], [0.0]]) for shift in shifts for line in lines]


def _columns(x: Real, period: float | None) -> int:
    """How many columns make one repeat; all of them if none fits."""
    if period is None:
        return x.size - 1
    count = period / (x[1] - x[0])
    whole = round(count)
    fits = abs(count - whole) < 1e-6 and 0 < whole < x.size and (x.size - 1) % whole == 0
    return whole if fits else x.size - 1


def _smooth(line: Real) -> Real:
    """Through the middles of its pieces, which lie on it as truly as their ends."""
    middles = 0.5 * (line[:, 1:] + line[:, :-1])
    closed = bool(np.all(line[:, 0] == line[:, -1]))
    ends = (line[:, :0], middles[:, :1]) if closed else (line[:, :1], line[:, -1:])
    return np.concatenate([ends[0], middles, ends[1]], axis=1)


def _with_flow(line: Real, maps: SectionMaps) -> float:
    """Positive if a line runs as the liquid does, judged by the nodes next to it."""
    nodes = maps.patterns.nodes
    middle, step = 0.5 * (line[:, 1:] + line[:, :-1]), np.diff(line, axis=1)
    column = np.rint((middle[0] - nodes.x[0]) / (nodes.x[1] - nodes.x[0])).astype(int)
    row = np.rint((middle[1] - nodes.y[0]) / (nodes.y[1] - nodes.y[0])).astype(int)
    return float(np.nansum(step * maps.velocity[:, row, column]))


def contours(x: Real, y: Real, height: Real, level: float) -> list[Real]:
    """Trace where a function that is linear along grid lines takes one value.

    Parameters
    ----------
    x, y
        Grid lines, (n,) and (m,).
    height
        The function at their crossings, (m, n); no line leads through cells with a NaN corner.
    level
        The value.

    Returns
    -------
    list
        Polylines (2, k), in the units of `x` and `y`; a closed one ends where it starts.

    Notes
    -----
    Marching squares: each cell joins the crossings of its sides; where all four are crossed, the
    mean of the corners decides which belong together.
    """
    above = height > level
    across, up = above[:, 1:] != above[:, :-1], above[1:] != above[:-1]
    with np.errstate(invalid="ignore", divide="ignore"):
        shares_x = (level - height[:, :-1]) / np.diff(height, axis=1)
        shares_y = (level - height[:-1]) / np.diff(height, axis=0)
    count = across.size
    numbers = np.arange(count).reshape(across.shape)
    numbers_up = count + np.arange(up.size).reshape(up.shape)
    place_x = np.concatenate(
        [(x[:-1] + shares_x * np.diff(x)).ravel(), np.broadcast_to(x, up.shape).ravel()]
    )
    place_y = np.concatenate(
        [
            np.broadcast_to(y[:, None], across.shape).ravel(),
            (y[:-1, None] + shares_y * np.diff(y)[:, None]).ravel(),
        ]
    )
    sides = np.stack([numbers_up[:, :-1], numbers[1:], numbers_up[:, 1:], numbers[:-1]])
    crossed = np.stack([up[:, :-1], across[1:], up[:, 1:], across[:-1]])
    corners = height[:-1, :-1] + height[:-1, 1:] + height[1:, 1:] + height[1:, :-1]
    pairs = _pairs(sides, crossed & np.isfinite(corners), (corners > 4 * level) == above[:-1, :-1])
    return [np.stack([place_x[line], place_y[line]]) for line in _joined(pairs)]


def _pairs(
    sides: NDArray[np.intp], crossed: NDArray[np.bool_], together: NDArray[np.bool_]
) -> NDArray[np.intp]:
    """Numbers of the two crossings of every piece of a line, (2, n).

    `together` tells whether the middle of a cell is on the side of its first corner.
    """
    total = crossed.sum(axis=0)
    row, column = np.nonzero(total == 2)
    found = sides[:, row, column].T[crossed[:, row, column].T].reshape(-1, 2).T
    row, column = np.nonzero(total == 4)
    saddle, first = sides[:, row, column], together[row, column]
    one = np.where(first, saddle[[_LEFT, _TOP]], saddle[[_LEFT, _BOTTOM]])
    other = np.where(first, saddle[[_RIGHT, _BOTTOM]], saddle[[_RIGHT, _TOP]])
    return np.concatenate([found, one, other], axis=1)


def _joined(pairs: NDArray[np.intp]) -> list[list[int]]:
    """Chains of the pieces: first those with ends, then the closed ones."""
    next_to: dict[int, list[int]] = {}
    for one, other in pairs.T.tolist():
        next_to.setdefault(one, []).append(other)
        next_to.setdefault(other, []).append(one)
    ends = [number for number, near in next_to.items() if len(near) == 1]
    lines = []
    for start in [*ends, *next_to]:
        if not next_to.get(start):
            continue
        line = [start]
        while near := next_to[line[-1]]:
            following = near.pop()
            next_to[following].remove(line[-1])
            line.append(following)
        lines.append(line)
    return lines
