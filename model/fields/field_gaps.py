"""Whether scattered points of a field leave gaps."""

import numpy as np
from scipy.spatial import Delaunay, cKDTree

from model.arrays import Real
from model.fields.field_header import FieldTableError
from model.quantity import format_quantity

#: Largest circle without points, its radius over the usual distance of the points around it.
HOLE = 5.0
#: Distance of an edge of the window from the nearest points, over their usual distance.
EDGE = 3.0


def usual_distance(points: Real) -> float:
    """Distance of points (n, 2) that fill a rectangle without gaps, m.

    Raises
    ------
    FieldTableError
        Where a circle holds none, or an edge of the rectangle is far from any.
    """
    low, high = points.min(axis=0), points.max(axis=0)
    mesh = Delaunay((points - low) / (high - low).max())
    corners = points[mesh.simplices]  # (triangle, corner, 2)
    near = _usual(mesh, corners)
    centres, radii = _circles(corners)
    around = _widened(mesh, near)[mesh.simplices].max(axis=1)
    inside = np.all((centres > low) & (centres < high), axis=1)
    bare = np.where(inside, radii / around, 0.0)
    worst = int(bare.argmax())
    if bare[worst] > HOLE:
        raise FieldTableError(
            f"has a gap: no point within {shown_length(radii[worst])} of x = "
            f"{shown_length(centres[worst, 0])}, y = {shown_length(centres[worst, 1])}, more than "
            f"{HOLE:g} times the usual distance of the points around it"
        )
    share = np.linspace(0, 1, 201)
    x, y = low[0] + share * (high - low)[0], low[1] + share * (high - low)[1]
    edge = np.concatenate(
        [np.stack(np.broadcast_arrays(x, level), 1) for level in (low[1], high[1])]
        + [np.stack(np.broadcast_arrays(level, y), 1) for level in (low[0], high[0])]
    )
    distance, nearest = cKDTree(points).query(edge)
    far = distance / _widened(mesh, near)[nearest]
    worst = int(far.argmax())
    if far[worst] > EDGE:
        raise FieldTableError(
            "does not fill its rectangle: there is no point near x = "
            f"{shown_length(edge[worst, 0])}, y = {shown_length(edge[worst, 1])}"
        )
    return float(np.sqrt(np.prod(high - low) / len(points)))


def _usual(mesh: Delaunay, corners: Real) -> Real:
    """Lower quartile of the lengths of the sides that meet in each point, (n,).

    Of points around a hole many sides go across it, but not the shortest.
    """
    lengths = np.linalg.norm(corners - np.roll(corners, -1, axis=1), axis=2)
    ends = np.stack([mesh.simplices, np.roll(mesh.simplices, -1, axis=1)])  # (2, triangle, side)
    point = ends.ravel()
    length = np.broadcast_to(lengths, ends.shape).ravel()
    order = np.lexsort((length, point))
    start = np.searchsorted(point[order], np.arange(len(mesh.points) + 1))
    return np.asarray(length[order][start[:-1] + np.diff(start) // 4])


def _widened(mesh: Delaunay, near: Real) -> Real:
    """The largest of each point and its neighbours, as corners have few sides of their own."""
    wide = np.zeros_like(near)
    np.maximum.at(wide, mesh.simplices, near[mesh.simplices].max(axis=1)[:, None])
    return wide


def _circles(corners: Real) -> tuple[Real, Real]:
    """Centre (n, 2) and radius (n,) of the circle through the corners of each triangle."""
    a, b = corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0]
    twice = 2 * (a[:, 0] * b[:, 1] - a[:, 1] * b[:, 0])
    aa, bb = (a**2).sum(axis=1), (b**2).sum(axis=1)
    with np.errstate(divide="ignore", invalid="ignore"):  # three points in line have none
        offset = np.stack([b[:, 1] * aa - a[:, 1] * bb, a[:, 0] * bb - b[:, 0] * aa], 1)
        offset = offset / twice[:, None]
    offset[~np.isfinite(offset)] = np.inf
    return corners[:, 0] + offset, np.linalg.norm(offset, axis=1)


def shown_length(value: float) -> str:
    """A length in words, for messages."""
    return format_quantity(float(value), "um", 4)
