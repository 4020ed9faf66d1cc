"""Chooses the heights and places at which lines are tabled."""

from itertools import pairwise

import numpy as np

from model.arrays import Real
from model.fields.lines import LineTable, Rows, line_table
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
    rows = Rows(len(section.potentials))
    edges = _edges(section)
    stops = np.unique([*_ends(section), *edges[0]])
    columns = np.unique(np.concatenate([_crowded(a, b) for a, b in pairwise(stops)]))

    def evaluate(x: Real, y: Real) -> Real:
        points = np.stack([x, y])
        cell, place = potential.cells.locate(points)
        warm = heat.values(*heat.cells.locate(points))
        return np.concatenate(
            [
                *-potential.slopes(cell, place),
                *potential.force_patterns(cell, place),
                warm,
                flows.values(cell, place),
            ]
        )

    heights = _heights(section, edges)
    return line_table(rows, heights, columns, _unfold(section, columns, rows), evaluate)


def _ends(section: Section) -> tuple[float, float]:
    """Ends of the piece along x."""
    x = section.liquid().p[0]
    return float(x.min()), float(x.max())


def _edges(section: Section) -> Real:
    """Places (2, n) where an electrode ends; at the ends of the piece it may go on."""
    mesh = section.mesh
    low, high = _ends(section)
    found = [np.zeros((2, 0))]
    for name in section.electrodes:
        nodes = mesh.p[:, mesh.facets[:, mesh.boundaries[name]].ravel()]
        if section.joined:
            nodes = np.where([[True], [False]] & (nodes == high), low, nodes)
        places, counts = np.unique(nodes, axis=1, return_counts=True)
        found.append(places[:, counts == 1])
    edges = np.concatenate(found, axis=1)
    inside = (edges[0] > low) & (edges[0] < high)
    return edges if section.joined else edges[:, inside]


def _shortest(section: Section, edges: Real) -> float:
    """Half the shortest stretch between neighbouring edges on one face."""
    low, high = _ends(section)
    upper = edges[1] > 0.5 * section.height
    shortest = high - low
    for x in (np.unique(edges[0, upper]), np.unique(edges[0, ~upper])):
        if x.size and section.joined:
            shortest = min(shortest, 0.5 * float(np.diff([*x, x[0] + high - low]).min()))
        elif x.size:
            shortest = min(shortest, float(np.diff([low, *x, high]).min()))
    return shortest


def _crowded(start: float, end: float) -> Real:
    """Places that crowd toward both ends."""
    return start + (end - start) * 0.5 * (1 - np.cos(np.pi * np.arange(PLACES + 1) / PLACES))


def _heights(section: Section, edges: Real) -> Real:
    """Rows from just above the floor to the lid, crowding toward both.

    Toward a lid without electrode edges, where nothing is singular, they need not crowd as much.
    """
    top = section.height
    lowest = min(LOWEST * _shortest(section, edges), 0.01 * top)
    bare = not np.any(edges[1] > 0.5 * top)
    finest = 0.005 * top if bare else STEP * lowest
    rows = [lowest]
    while rows[-1] < top:
        up, down = STEP * rows[-1], (0.25 if bare else STEP) * (top - rows[-1])
        # smooth from the one to the other: where steps change abruptly a spline is at its worst
        rows.append(rows[-1] + 1 / (1 / up + 1 / max(down, finest)))
    rows[-1] = top
    return np.array(rows)


def _unfold(section: Section, columns: Real, rows: Rows) -> tuple[Real, np.ndarray, Real]:
    """Places of a line over one period, the column of each and the factors of the patterns."""
    fold = section.fold
    if not fold.mirrored:
        return columns, np.arange(columns.size), np.ones((rows.count, columns.size))
    if fold.period is None:
        x = np.concatenate([-columns[:0:-1], columns])
    else:
        x = np.concatenate([columns, fold.period - columns[-2::-1]])
    place, side, signs = fold.fold(x)
    source = np.abs(place[:, None] - columns).argmin(axis=1)
    return x, source, rows.signs(side, signs)
