"""Finds the cell and the place in it of any point of a mesh."""

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray
from skfem import Mesh

from model.arrays import Real
from model.fields.stored import Stored

#: Points this far outside a cell, in units of the cell, still count as in it: rounding of a
#: place that is far from 0, in the smallest cells.
TOLERANCE = 1e-7
#: Points this near a line of the search grid, over the size of the mesh, may be on either side.
ROUNDING = 1e-12
#: Most intervals per axis of the search grid.
MOST_INTERVALS = 96

Index = NDArray[np.intp]


@dataclass(frozen=True, eq=False, repr=False)
class Cells(Stored):
    """Corners of straight-sided triangles or quadrilaterals, (n_cell, 3 or 4, 2), m."""

    corners: Real

    @classmethod
    def of(cls, mesh: Mesh) -> "Cells":
        """Cells of a mesh."""
        return cls(np.ascontiguousarray(mesh.p[:, mesh.t].transpose(2, 1, 0)))

    def locate(self, points: Real) -> tuple[Index, Real]:
        """Find points (2, n).

        Returns
        -------
        cell, place
            Cell of each point (n,), −1 outside the mesh, and reference coordinates (2, n).
        """
        found = np.full(points.shape[1], -1)
        place = np.zeros_like(points)
        self._look(points, points, found, place)
        # beside a hole, a point on a grid line may belong to a cell on its other side
        reach = ROUNDING * np.ptp(self.corners, axis=(0, 1))[:, None]
        for senses in ((-1, -1), (-1, 1), (1, -1), (1, 1)):
            missing = np.flatnonzero(found < 0)
            if missing.size == 0:
                break
            there, spot = np.full(missing.size, -1), np.zeros((2, missing.size))
            beside = points[:, missing] + reach * np.array(senses)[:, None]
            self._look(points[:, missing], beside, there, spot)
            found[missing], place[:, missing] = there, spot
        return found, np.clip(place, 0.0, 1.0)

    def _look(self, points: Real, near: Real, found: Index, place: Real) -> None:
        """Find `points` among the cells of the boxes that `near` lie in; write what is found."""
        lines, table = self._search
        i, j = (
            np.clip(np.searchsorted(lines[axis], near[axis], side="right") - 1, 0, None)
            for axis in (0, 1)
        )
        i, j = np.minimum(i, table.shape[0] - 1), np.minimum(j, table.shape[1] - 1)
        for candidate in range(table.shape[2]):
            cells = table[i, j, candidate]
            waiting = np.flatnonzero((found < 0) & (cells >= 0))
            if waiting.size == 0:
                continue
            local = self._reference(cells[waiting], points[:, waiting])
            inside = self._contains(local)
            if not self._straight:
                inside &= self._hits(cells[waiting], local, points[:, waiting])
            found[waiting[inside]] = cells[waiting[inside]]
            place[:, waiting[inside]] = local[:, inside]

    def jacobian(self, cells: Index, place: Real) -> Real:
        """∂(x, y)/∂(reference), (2, 2, n), first index the component."""
        c = self.corners[cells]  # (n, corner, 2)
        if c.shape[1] == 3:
            return np.stack([c[:, 1] - c[:, 0], c[:, 2] - c[:, 0]]).transpose(2, 0, 1)
        r, s = place[0][:, None], place[1][:, None]
        along_r = (1 - s) * (c[:, 1] - c[:, 0]) + s * (c[:, 2] - c[:, 3])
        along_s = (1 - r) * (c[:, 3] - c[:, 0]) + r * (c[:, 2] - c[:, 1])
        return np.stack([along_r, along_s]).transpose(2, 0, 1)

    def twist(self, cells: Index) -> Real:
        """∂²(x, y)/∂r∂s of the reference map, (2, n); 0 for triangles and parallelograms."""
        c = self.corners[cells]
        if c.shape[1] == 3:
            return np.zeros((2, len(cells)))
        return (c[:, 0] - c[:, 1] + c[:, 2] - c[:, 3]).T

    def crossings(self, y: float) -> Real:
        """Increasing places where sides of cells meet the line at height `y`, (n,), m."""
        start = self.corners.reshape(-1, 2)
        end = np.roll(self.corners, -1, axis=1).reshape(-1, 2)
        met = (np.minimum(start[:, 1], end[:, 1]) <= y) & (y <= np.maximum(start[:, 1], end[:, 1]))
        start, end = start[met], end[met]
        rise = end[:, 1] - start[:, 1]
        level = rise == 0  # its other end is another side's start
        share = np.where(level, 0.0, (y - start[:, 1]) / np.where(level, 1.0, rise))
        x = np.sort(start[:, 0] + share * (end[:, 0] - start[:, 0]))
        return x[np.diff(x, prepend=-np.inf) > 1e-9 * np.ptp(self.corners[..., 0])]

    def _contains(self, local: Real) -> NDArray[np.bool_]:
        highest = local.sum(axis=0) if self.corners.shape[1] == 3 else local.max(axis=0)
        inside: NDArray[np.bool_] = (local.min(axis=0) >= -TOLERANCE) & (highest <= 1 + TOLERANCE)
        return inside

    def _hits(self, cells: Index, local: Real, points: Real) -> NDArray[np.bool_]:
        """Whether the Newton steps have arrived; far from a skewed cell they may not."""
        corners = self.corners[cells]
        miss = np.abs(points - self._map(corners, local))
        close: NDArray[np.bool_] = (miss <= 1e-7 * np.ptp(corners, axis=1).T).all(axis=0)
        return close

    def _reference(self, cells: Index, points: Real) -> Real:
        """Invert the reference map by Newton steps: one is exact for parallelograms."""
        c = self.corners[cells]
        local = np.full_like(points, 1 / 3 if c.shape[1] == 3 else 0.5)
        for _ in range(1 if self._straight else 12):
            matrix = self.jacobian(cells, local)
            miss = points - self._map(c, local)
            local = local + _solve(matrix, miss)
        return local

    @staticmethod
    def _map(corners: Real, local: Real) -> Real:
        r, s = local[0][:, None], local[1][:, None]
        if corners.shape[1] == 3:
            mapped = (1 - r - s) * corners[:, 0] + r * corners[:, 1] + s * corners[:, 2]
        else:
            mapped = (1 - s) * ((1 - r) * corners[:, 0] + r * corners[:, 1]) + s * (
                (1 - r) * corners[:, 3] + r * corners[:, 2]
            )
        return np.asarray(mapped.T)

    @cached_property
    def _straight(self) -> bool:
        size = np.ptp(self.corners, axis=1)
        return bool(np.all(np.abs(self.twist(np.arange(len(self.corners))).T) < 1e-12 * size))

    @cached_property
    def _search(self) -> tuple[tuple[Real, Real], Index]:
        """Grid lines of a search grid and the cells (padded with −1) that touch each box.

        The lines are quantiles of the corners, so that graded meshes spread evenly over it.
        """
        low, high = self.corners.min(axis=1), self.corners.max(axis=1)  # (n_cell, 2)
        lines = (_quantiles(self.corners[:, :, 0]), _quantiles(self.corners[:, :, 1]))
        first = [np.searchsorted(lines[a], low[:, a], side="right") - 1 for a in (0, 1)]
        # a cell that ends on a line does not reach into the next box
        last = [np.searchsorted(lines[a], high[:, a], side="left") - 1 for a in (0, 1)]
        counts = [last[a] - first[a] + 1 for a in (0, 1)]
        per_cell = counts[0] * counts[1]
        cell = np.repeat(np.arange(len(low)), per_cell)
        offset = np.arange(cell.size) - np.repeat(np.cumsum(per_cell) - per_cell, per_cell)
        i = first[0][cell] + offset // counts[1][cell]
        j = first[1][cell] + offset % counts[1][cell]
        shape = (lines[0].size - 1, lines[1].size - 1)
        box = i * shape[1] + j
        order = np.argsort(box, kind="stable")
        box, cell = box[order], cell[order]
        starts = np.searchsorted(box, np.arange(shape[0] * shape[1]))
        rank = np.arange(box.size) - starts[box]
        table = np.full((shape[0] * shape[1], int(rank.max()) + 1), -1)
        table[box, rank] = cell
        return lines, table.reshape(*shape, -1)


def _quantiles(values: Real) -> Real:
    distinct = np.unique(values)
    if distinct.size <= MOST_INTERVALS + 1:
        return distinct
    picked = distinct[np.linspace(0, distinct.size - 1, MOST_INTERVALS + 1).astype(int)]
    return np.unique(picked)


def _solve(matrix: Real, right: Real) -> Real:
    """Solve 2×2 systems (2, 2, n) for (2, n)."""
    determinant = matrix[0, 0] * matrix[1, 1] - matrix[0, 1] * matrix[1, 0]
    first = matrix[1, 1] * right[0] - matrix[0, 1] * right[1]
    second = matrix[0, 0] * right[1] - matrix[1, 0] * right[0]
    return np.stack([first / determinant, second / determinant])
