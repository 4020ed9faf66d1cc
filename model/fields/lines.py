"""Patterns along a line at any height, from a table made once."""

import math
from bisect import bisect_right
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from scipy.interpolate import CubicSpline

from model.arrays import Real
from model.fields.stored import Stored

#: Number of patterns in a row: field 2, gradient 2, temperature, two flows of 2.
COUNT = 9


@dataclass(frozen=True, eq=False, repr=False)
class Line(Stored):
    """Patterns at one height over one period; see :class:`ChipPatterns` for their units.

    Parameters
    ----------
    x
        Places (n,), m, increasing, both ends included; they crowd toward electrode edges, so
        mean over the period is ``numpy.trapezoid(values, x)/(x[-1] - x[0])``.
    field, gradient
        Ê and ∇|Ê|², (2, n).
    temperature
        Θ, (n,).
    flow_1, flow_2
        U₁ and U₂, (2, n).
    """

    x: Real
    field: Real
    gradient: Real
    temperature: Real
    flow_1: Real
    flow_2: Real


@dataclass(frozen=True, eq=False, repr=False)
class LineTable(Stored):
    """Cubic splines in ln y of all patterns at the places of one half period.

    Field and gradient are divided by their root mean square over the line, whose smoothed logarithm
    is kept apart, so that they stay as exact far above the array as near it.

    Parameters
    ----------
    x
        Places of a line, (n,).
    source
        Column of the table of each place, (n,), and `signs` (9, n) its factors.
    heights
        ln y of the rows, (m,).
    shapes
        Spline coefficients (m − 1, 4, 9·columns).
    levels
        Spline coefficients of the logarithms (m − 1, 4, 2).
    floor
        Θ on the floor, (columns,).
    lowest, top
        Heights of the first and last row, m.
    """

    x: Real
    source: np.ndarray
    signs: Real
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
        if not 0 <= y <= self.top:
            raise ValueError(f"the height {y:g} m is outside the liquid, 0 to {self.top:g} m")
        place = math.log(max(y, self.lowest))
        row = min(bisect_right(self.heights, place) - 1, len(self.heights) - 2)
        t = place - self.heights[row]
        powers = np.array([t * t * t, t * t, t, 1.0])
        columns = self.shapes.shape[2] // COUNT
        values = (powers @ self.shapes[row]).reshape(COUNT, columns).take(self.source, axis=1)
        values *= self.signs
        field, gradient = (powers @ self.levels[row]).tolist()
        values[0:2] *= math.exp(field)
        values[2:4] *= math.exp(gradient)
        if y < self.lowest:
            share = y / self.lowest
            values[4] += (1 - share) * (self.floor.take(self.source) - values[4])
            values[5:] *= share
        return Line(self.x, values[0:2], values[2:4], values[4], values[5:7], values[7:9])


def line_table(
    heights: Real,
    columns: Real,
    unfold: tuple[Real, np.ndarray, Real],
    evaluate: Callable[[Real, Real], Real],
) -> LineTable:
    """Sample `evaluate` (x, y) ↦ (9, n) on heights × columns and fit the splines.

    `unfold` are the places of a line, the column each stands in, and its factors (9, n).
    """
    rows, places = heights.size, columns.size
    x, y = np.tile(columns, rows), np.repeat(heights, places)
    samples = evaluate(x, y).reshape(COUNT, rows, places).transpose(1, 0, 2).copy()
    levels = np.empty((rows, 2))
    for part in (0, 1):
        block = samples[:, 2 * part : 2 * part + 2]
        size = np.sqrt((block**2).sum(axis=1).mean(axis=1))
        levels[:, part] = np.log(np.maximum(size, np.finfo(float).tiny ** 0.5))
        if part == 1:
            levels[:, part] = _smooth(levels[:, part])
        block /= np.exp(levels[:, part])[:, None, None]
    place = np.log(heights)
    shapes = CubicSpline(place, samples.reshape(rows, -1)).c
    return LineTable(
        unfold[0],
        unfold[1],
        unfold[2],
        tuple(place.tolist()),
        np.ascontiguousarray(shapes.transpose(1, 0, 2)),
        np.ascontiguousarray(CubicSpline(place, levels).c.transpose(1, 0, 2)),
        evaluate(columns, np.zeros(places))[4],
        float(heights[0]),
        float(heights[-1]),
    )


def _smooth(levels: Real) -> Real:
    """Weighted mean of each row and its two neighbours on either side.

    Half-way between facing bars most of the gradient changes sign, which leaves a cusp.
    """
    padded = np.pad(levels, 2, mode="reflect", reflect_type="odd")  # goes on as it ends
    return np.asarray(np.convolve(padded, np.array([1, 2, 3, 2, 1]) / 9, mode="valid"))
