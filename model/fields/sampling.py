"""Chooses the heights and places at which lines are tabled."""

from itertools import pairwise

import numpy as np

from model.arrays import Real
from model.fields.lines import COUNT, LineTable, line_table
from model.fields.piecewise import Piecewise
from model.fields.section import Section

#: Lowest row over the shortest stretch between electrode edges.
LOWEST = 2e-3
#: Step between rows over the height.
STEP = 0.12
#: Places between neighbouring electrode edges or ends of the piece.
PLACES = 16


def sample_lines(
    section: Section, potential: Piecewise, heat: Piecewise, flows: Piecewise
) -> LineTable:
    """Table all patterns of a section over one period and all heights."""
    stops = _stops(section)
    columns = np.unique(np.concatenate([_crowded(a, b) for a, b in pairwise(stops)]))

    def evaluate(x: Real, y: Real) -> Real:
        points = np.stack([x, y])
        cell, place = potential.cells.locate(points)
        field = -potential.slopes(cell, place)[0]
        gradient = potential.square_gradients(cell, place)[0]
        warm = heat.values(*heat.cells.locate(points))
        return np.concatenate([field, gradient, warm, flows.values(cell, place)])

    heights = _heights(section, float(np.diff(stops).min()))
    return line_table(heights, columns, _unfold(section, columns), evaluate)


def _stops(section: Section) -> Real:
    """Find the ends of the piece and of the electrodes, along x."""
    mesh = section.mesh
    liquid = section.liquid().p[0]
    ends = [liquid.min(), liquid.max()]
    for name in section.electrodes:
        x = mesh.p[0, mesh.facets[:, mesh.boundaries[name]]]
        ends += [x.min(), x.max()]
    return np.unique(ends)


def _crowded(start: float, end: float) -> Real:
    """Places that crowd toward both ends."""
    return start + (end - start) * 0.5 * (1 - np.cos(np.pi * np.arange(PLACES + 1) / PLACES))


def _heights(section: Section, shortest: float) -> Real:
    """Rows from just above the floor to the lid, crowding toward both.

    Toward a lid without electrodes, where nothing is singular, they need not crowd as much.
    """
    top = section.height
    lowest = min(LOWEST * shortest, 0.01 * top)
    mesh = section.mesh
    bare = all(
        mesh.p[1, mesh.facets[:, mesh.boundaries[name]]].max() < 0.5 * top
        for name in section.electrodes
    )
    finest = 0.005 * top if bare else lowest
    rows = [lowest]
    while rows[-1] < top:
        y = rows[-1]
        rows.append(y + min(STEP * y, max((0.25 if bare else STEP) * (top - y), finest)))
    rows[-1] = top
    return np.array(rows)


def _unfold(section: Section, columns: Real) -> tuple[Real, np.ndarray, Real]:
    """Places of a line over one period, the column of each and the factors of the patterns."""
    fold = section.fold
    if not fold.mirrored:
        return columns, np.arange(columns.size), np.ones((COUNT, columns.size))
    if fold.period is None:
        x = np.concatenate([-columns[:0:-1], columns])
    else:
        x = np.concatenate([columns, fold.period - columns[-2::-1]])
    place, side, sign = fold.fold(x)
    source = np.abs(place[:, None] - columns).argmin(axis=1)
    signs = np.ones((COUNT, x.size))
    even = fold.parity == 1
    signs[0] = sign * (side if even else 1)
    signs[1] = sign * (1 if even else side)
    signs[[2, 5, 7]] = side
    return x, source, signs
