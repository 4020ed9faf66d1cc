"""Patterns along a line at any height, from a table made once."""

import math
from bisect import bisect_right
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from scipy.interpolate import CubicSpline

from model.arrays import Phasor, Real
from model.fields.stored import Stored


@dataclass(frozen=True)
class Rows:
    """Where each pattern stands in a table of a drive with one or two components.

    Each component of the field has two rows, then follow ∇|Ê|², the travelling pattern of two
    components, Θ, and the flows.
    """

    components: int

    @property
    def field(self) -> slice:
        """Ê, x and y of each component."""
        return slice(0, 2 * self.components)

    @property
    def forces(self) -> tuple[slice, ...]:
        """∇|Ê|² and, of two components, the travelling pattern."""
        first = 2 * self.components
        return tuple(slice(first + 2 * k, first + 2 * k + 2) for k in range(self.components))

    @property
    def temperature(self) -> int:
        """Θ."""
        return 4 * self.components

    @property
    def flows(self) -> tuple[slice, ...]:
        """U₁, U₂ and, of two components, U₃."""
        first = self.temperature + 1
        return tuple(slice(first + 2 * k, first + 2 * k + 2) for k in range(self.components + 1))

    @property
    def count(self) -> int:
        """Number of rows."""
        return self.temperature + 1 + 2 * (self.components + 1)

    def signs(self, side: Real, signs: Real) -> Real:
        """Factors (count, n) of all rows at folded places.

        A quantity of two components, of which one is odd and one even, has the parity of both
        together; `side` and `signs` are those of :meth:`Fold.fold`.
        """
        both = signs.prod(axis=0)
        found = np.ones((self.count, side.size))
        for k, sign in enumerate(signs):
            found[2 * k], found[2 * k + 1] = sign * side, sign
        for k, rows in enumerate((*self.forces, *self.flows)):
            mixed = both if k in (1, self.components + 2) and self.components == 2 else 1.0
            found[rows.start], found[rows.start + 1] = side * mixed, mixed
        return found


@dataclass(frozen=True, eq=False, repr=False)
class Line(Stored):
    """Patterns at one height over one period, or along any path.

    See :class:`ChipPatterns` for their units.

    Parameters
    ----------
    x
        Places (n,), m, increasing, both ends included; they crowd toward electrode edges, so
        mean over the period is ``numpy.trapezoid(values, x)/(x[-1] - x[0])``.
    field
        Ê, (2, n), real or, of a drive with two components, complex.
    gradient
        ∇|Ê|², (2, n).
    temperature
        Θ, (n,).
    flow_1, flow_2
        U₁ and U₂, (2, n); None, as is Θ, where the field alone is known.
    travelling, flow_3
        What two components add, (2, n); None if there is one.
    through
        In plan, mean velocity over the depth per flow rate, (2, n), 1/m²; else None.
    """

    x: Real
    field: Phasor
    gradient: Real
    temperature: Real | None
    flow_1: Real | None
    flow_2: Real | None
    travelling: Real | None = None
    flow_3: Real | None = None
    through: Real | None = None

    @classmethod
    def of(cls, x: Real, values: Real, rows: Rows) -> "Line":
        """Line at places `x` of a table's `values` (count, n)."""
        moving = rows.components == 2
        return cls(
            x,
            values[0:2] + 1j * values[2:4] if moving else values[0:2],
            values[rows.forces[0]],
            values[rows.temperature],
            values[rows.flows[0]],
            values[rows.flows[1]],
            values[rows.forces[1]] if moving else None,
            values[rows.flows[2]] if moving else None,
        )

    @property
    def square(self) -> Real:
        """|Ê|², (n,)."""
        return np.asarray((np.abs(self.field) ** 2).sum(axis=0))


@dataclass(frozen=True, eq=False, repr=False)
class LineTable(Stored):
    """Cubic splines in ln y of all patterns at the places of one half period.

    Field and force patterns are divided by their root mean square over the line, whose smoothed
    logarithm is kept apart, so that they stay as exact far above the array as near it.

    Parameters
    ----------
    rows
        Where each pattern stands.
    x
        Places of a line, (n,).
    source
        Column of the table of each place, (n,), and `signs` (count, n) its factors.
    columns
        Places of the columns, m.
    heights
        ln y of the rows, (m,).
    shapes
        Spline coefficients (m − 1, 4, count·columns).
    levels
        Spline coefficients of the logarithms of field and forces (m − 1, 4, 1 + n_component).
    floor
        Θ on the floor, (columns,).
    lowest, top
        Heights of the first and last row, m.
    """

    rows: Rows
    x: Real
    source: np.ndarray
    signs: Real
    columns: Real
    heights: tuple[float, ...]
    shapes: Real
    levels: Real
    floor: Real
    lowest: float
    top: float

    def line(self, y: float) -> Line:
        """Line at a height.

        Below the first row the field and gradient are that row's: on the floor itself they are
        infinite at electrode edges. There Θ is linear to its values on the floor, and the flow
        falls to 0.

        Raises
        ------
        ValueError
            If `y` is outside 0…top.
        """
        row, powers = self._place(y)
        rows = self.rows
        values = self.values(self.shapes, y)
        values *= self.signs
        for block, level in zip(
            (rows.field, *rows.forces), (powers @ self.levels[row]).tolist(), strict=True
        ):
            values[block] *= math.exp(level)
        if y < self.lowest:
            share, warm = y / self.lowest, values[rows.temperature]
            warm += (1 - share) * (self.floor.take(self.source) - warm)
            values[rows.temperature + 1 :] *= share
        return Line.of(self.x, values, rows)

    @property
    def grid(self) -> tuple[Real, Real]:
        """Place of every entry of the table, x and y, row by row."""
        heights = np.exp(self.heights)
        heights[[0, -1]] = self.lowest, self.top
        return np.tile(self.columns, heights.size), np.repeat(heights, self.columns.size)

    def spline(self, samples: Real) -> Real:
        """Spline coefficients (m − 1, 4, f·columns) of samples (f, n) on the grid."""
        rows = samples.reshape(len(samples), len(self.heights), -1).transpose(1, 0, 2)
        shapes = CubicSpline(self.heights, rows.reshape(len(rows), -1)).c
        return np.ascontiguousarray(shapes.transpose(1, 0, 2))

    def values(self, shapes: Real, y: float) -> Real:
        """Values (f, n) of splines at a height, unfolded but for the signs."""
        row, powers = self._place(y)
        columns = (powers @ shapes[row]).reshape(-1, self.columns.size)
        return np.asarray(columns.take(self.source, axis=1))

    def _place(self, y: float) -> tuple[int, Real]:
        """Row of a height and powers of the way on to the next."""
        if not 0 <= y <= self.top:
            raise ValueError(f"the height {y:g} m is outside the liquid, 0 to {self.top:g} m")
        place = math.log(max(y, self.lowest))
        row = min(bisect_right(self.heights, place) - 1, len(self.heights) - 2)
        t = place - self.heights[row]
        return row, np.array([t * t * t, t * t, t, 1.0])


def line_table(
    rows: Rows,
    heights: Real,
    columns: Real,
    unfold: tuple[Real, np.ndarray, Real],
    evaluate: Callable[[Real, Real], Real],
) -> LineTable:
    """Sample `evaluate` (x, y) ↦ (count, n) on heights × columns and fit the splines.

    `unfold` are the places of a line, the column each stands in, and its factors (count, n).
    """
    levels_count, places = heights.size, columns.size
    x, y = np.tile(columns, levels_count), np.repeat(heights, places)
    samples = evaluate(x, y).reshape(rows.count, levels_count, places).transpose(1, 0, 2).copy()
    blocks = (rows.field, *rows.forces)
    levels = np.empty((levels_count, len(blocks)))
    for part, block in enumerate(blocks):
        values = samples[:, block]
        size = np.sqrt((values**2).sum(axis=1).mean(axis=1))
        levels[:, part] = np.log(np.maximum(size, np.finfo(float).tiny ** 0.5))
        if part > 0:
            levels[:, part] = _smooth(levels[:, part])
        values /= np.exp(levels[:, part])[:, None, None]
    place = np.log(heights)
    shapes = CubicSpline(place, samples.reshape(levels_count, -1)).c
    return LineTable(
        rows,
        unfold[0],
        unfold[1],
        unfold[2],
        columns,
        tuple(place.tolist()),
        np.ascontiguousarray(shapes.transpose(1, 0, 2)),
        np.ascontiguousarray(CubicSpline(place, levels).c.transpose(1, 0, 2)),
        evaluate(columns, np.zeros(places))[rows.temperature],
        float(heights[0]),
        float(heights[-1]),
    )


def _smooth(levels: Real) -> Real:
    """Weighted mean of each row and its two neighbours on either side.

    Half-way between facing bars most of the gradient changes sign, which leaves a cusp.
    """
    padded = np.pad(levels, 2, mode="reflect", reflect_type="odd")  # goes on as it ends
    return np.asarray(np.convolve(padded, np.array([1, 2, 3, 2, 1]) / 9, mode="valid"))
