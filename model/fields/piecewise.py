"""Finite-element functions as plain polynomials per cell, evaluated anywhere."""

from dataclasses import dataclass

import numpy as np
from numpy.polynomial import legendre

from model.arrays import Real
from model.fields.assembly import Space
from model.fields.cells import Cells, Index
from model.fields.stored import Stored

#: Places along each reference coordinate among which the greatest value is looked for.
GRID = 13
#: Cells that are searched closely: as many as meet in a corner.
CELLS_AROUND = 4


@dataclass(frozen=True, eq=False, repr=False)
class Piecewise(Stored):
    """Functions f(x, y) on the cells of a mesh.

    Parameters
    ----------
    cells
        Of the mesh.
    coefficients
        Of Legendre polynomials P_a(2r − 1)·P_b(2s − 1) of the reference coordinates,
        (n_function, n_cell, a, b).
    harmonic
        Whether ∇²f = 0, of which :meth:`curvatures` makes use.
    """

    cells: Cells
    coefficients: Real
    harmonic: bool = False

    @classmethod
    def of(
        cls, functions: Space, solutions: Real, cells: Cells, *, harmonic: bool = False
    ) -> "Piecewise":
        """Turn finite-element coefficients (n_function, n_unknown) into polynomials."""
        element = functions.element
        triangle = cells.corners.shape[1] == 3
        degree = functions.degree
        nodes = 0.5 - 0.5 * np.cos(np.pi * np.arange(degree + 1) / degree)
        r, s = (grid.ravel() for grid in np.meshgrid(nodes, nodes, indexing="ij"))
        a, b = (grid.ravel() for grid in np.meshgrid(*[np.arange(degree + 1)] * 2, indexing="ij"))
        if triangle:
            s = s * (1 - r)  # a square of nodes folded into the triangle: more than enough
            a, b = a[a + b <= degree], b[a + b <= degree]
        powers = (
            legendre.legvander(2 * r - 1, degree)[:, a]
            * legendre.legvander(2 * s - 1, degree)[:, b]
        )
        places = np.stack([r, s])
        local = np.stack([element.lbasis(places, i)[0] for i in range(len(functions.dofs))], 1)
        fit, *_ = np.linalg.lstsq(powers, local, rcond=None)  # exact: both span the same space
        packed = np.einsum("ti,fik->fkt", fit, solutions[:, functions.dofs])
        full = np.zeros((*packed.shape[:2], degree + 1, degree + 1))
        full[:, :, a, b] = packed
        return cls(cells, full, harmonic)

    def values(self, cell: Index, place: Real) -> Real:
        """Values at located points, (n_function, n)."""
        return self._evaluate(cell, place, 0, 0)

    def slopes(self, cell: Index, place: Real) -> Real:
        """Gradients at located points, (n_function, 2, n), per m."""
        inner = np.stack(
            [self._evaluate(cell, place, 1, 0), self._evaluate(cell, place, 0, 1)], axis=1
        )
        slopes: Real = np.einsum("frn,rcn->fcn", inner, self._inverse(cell, place))
        return slopes

    def curvatures(self, cell: Index, place: Real) -> Real:
        """Second derivatives at located points, (n_function, 2, 2, n), per m².

        Of harmonic functions ∂²/∂x² and −∂²/∂y² are two estimates of one number. Each is as bad
        as its cell is short along its axis, in flat cells from rounding alone, so they are
        averaged with the fourth power of the cell's size as weight.
        """
        raw = self._curvatures(cell, place)
        if not self.harmonic:
            return raw
        inverse = self._inverse(cell, place)
        steep = np.square(inverse).sum(axis=0)  # squared inverse sizes along x and y, (2, n)
        weight = steep[1] ** 2 / (steep[0] ** 2 + steep[1] ** 2)
        along = weight * raw[:, 0, 0] - (1 - weight) * raw[:, 1, 1]
        return np.stack(
            [np.stack([along, raw[:, 0, 1]], axis=1), np.stack([raw[:, 0, 1], -along], axis=1)],
            axis=1,
        )

    def force_patterns(self, cell: Index, place: Real) -> list[Real]:
        """What dielectrophoretic forces follow, of one or two functions φ, Ê = −∇φ.

        ∇|Ê|² of all functions together and, of two, 2(Ê₀·∂ᵢÊ₁ − Ê₁·∂ᵢÊ₀), each (2, n), 1/m³.
        """
        slopes, curvatures = self.slopes(cell, place), self.curvatures(cell, place)
        found = [np.asarray(2 * np.einsum("fcn,fcdn->dn", slopes, curvatures))]
        if len(slopes) == 2:
            across = np.einsum("fcn,fcdn->fdn", slopes, curvatures[::-1])
            found.append(2 * (across[0] - across[1]))
        return found

    def highest(self, cells: Index) -> Real:
        """Greatest value of each function (n_function,) on a grid of places in the given cells."""
        return np.asarray(self._on_grid(cells).reshape(len(self.coefficients), -1).max(axis=1))

    def place_of_highest(self, cells: Index) -> tuple[Index, Real]:
        """Cell (1,) and reference place (2, 1) of the greatest value of the first function.

        Of a smooth function it is found to a few thousandths of a cell, also at a cell's side.
        """
        grid = self._on_grid(cells)[0]
        tops = grid.max(axis=(1, 2))
        found: list[tuple[float, Index, Real]] = []
        for index in np.argsort(tops)[-CELLS_AROUND:]:
            cell, start = cells[[index]], np.unravel_index(int(grid[index].argmax()), (GRID, GRID))
            place = np.array(start)[:, None] / (GRID - 1)
            for level in range(1, 4):
                place = self._higher(cell, place, 6.0 / (GRID - 1) / 6.0**level)
            found.append((float(self.values(cell, place)[0, 0]), cell, place))
        _, cell, place = max(found, key=lambda one: one[0])
        return cell, place

    def _higher(self, cell: Index, place: Real, reach: float) -> Real:
        """Best of a grid of places around one in a cell, not farther than `reach` along each."""
        steps = np.linspace(-reach, reach, GRID)
        spots = place + np.stack(np.meshgrid(steps, steps)).reshape(2, -1)
        spots = np.clip(spots, 0.0, 1.0)
        if self.cells.corners.shape[1] == 3:
            spots = spots[:, spots.sum(axis=0) <= 1.0]
        values = self.values(np.repeat(cell, spots.shape[1]), spots)[0]
        return spots[:, [int(values.argmax())]]

    def _on_grid(self, cells: Index) -> Real:
        """Values on equally spaced reference coordinates, (n_function, n_cell, GRID, GRID)."""
        degree = self.coefficients.shape[2] - 1
        table = legendre.legvander(np.linspace(-1.0, 1.0, GRID), degree)
        grid = table @ self.coefficients[:, cells] @ table.T
        if self.cells.corners.shape[1] == 3:
            beyond = np.add.outer(np.arange(GRID), np.arange(GRID)) >= GRID
            grid = np.where(beyond, -np.inf, grid)
        return np.asarray(grid)

    def _curvatures(self, cell: Index, place: Real) -> Real:
        """Second derivatives as the polynomials have them, (n_function, 2, 2, n), 1/m²."""
        inverse = self._inverse(cell, place)
        slopes = self.slopes(cell, place)
        mixed = self._evaluate(cell, place, 1, 1)
        mixed = mixed - np.einsum("fcn,cn->fn", slopes, self.cells.twist(cell))
        inner = np.stack(
            [
                np.stack([self._evaluate(cell, place, 2, 0), mixed], axis=1),
                np.stack([mixed, self._evaluate(cell, place, 0, 2)], axis=1),
            ],
            axis=1,
        )
        curvatures: Real = np.einsum("frsn,rcn,sdn->fcdn", inner, inverse, inverse)
        return curvatures

    def _inverse(self, cell: Index, place: Real) -> Real:
        """∂(reference)/∂(x, y), (2, 2, n)."""
        j = self.cells.jacobian(cell, place)
        determinant = j[0, 0] * j[1, 1] - j[0, 1] * j[1, 0]
        return np.asarray(np.array([[j[1, 1], -j[0, 1]], [-j[1, 0], j[0, 0]]]) / determinant)

    def _evaluate(self, cell: Index, place: Real, along_r: int, along_s: int) -> Real:
        degree = self.coefficients.shape[2] - 1
        first = _powers(place[0], degree, along_r)
        second = _powers(place[1], degree, along_s)
        inner = np.einsum("fnab,nb->fna", self.coefficients[:, cell], second)
        values: Real = np.einsum("fna,na->fn", inner, first)
        return values


def _powers(reference: Real, degree: int, order: int) -> Real:
    """`order`-th derivative by the reference coordinate of each Legendre polynomial, (n, a)."""
    table = np.asarray(legendre.legvander(2 * reference - 1, degree), dtype=float)
    if order == 0:
        return table
    change = np.zeros((degree + 1, degree + 1))
    for power in range(order, degree + 1):
        derived = legendre.legder(np.eye(degree + 1)[power], order)
        change[power, : derived.size] = derived * 2.0**order
    return np.asarray(table @ change.T, dtype=float)
