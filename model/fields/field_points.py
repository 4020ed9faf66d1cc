"""Points of a field table set in order: a grid of columns and rows, or a cloud, without gaps."""

from typing import Protocol

import numpy as np
from scipy.interpolate import (
    CloughTocher2DInterpolator,
    CubicSpline,
    LinearNDInterpolator,
    NearestNDInterpolator,
    RectBivariateSpline,
)
from scipy.ndimage import convolve, maximum_filter
from scipy.spatial import Delaunay

from model.arrays import Phasor, Real, components, phasor
from model.fields.cells import Index
from model.fields.field_gaps import shown_length, usual_distance
from model.fields.field_header import FieldTableError
from model.fields.field_table import SAME_PLACE, FieldTable

#: Points that fill this share of a grid of all their x and y are meant as a grid.
GRID = 0.6
#: Fewest lines of a grid along each axis.
FEWEST_LINES = 5
#: A point of a grid with more than this times the field of all its neighbours stands on an edge of
#: metal, where the field is infinite and a solver's number has no meaning.
SPIKE = 2.0
#: Clouds up to this size are interpolated smoothly, larger ones linearly: they are fine enough,
#: and smooth slopes would take many seconds.
SMOOTH = 40_000


#: x from and to, y from and to, m.
Window = tuple[float, float, float, float]


class Sampled(Protocol):
    """A field over a rectangular window of the section."""

    @property
    def window(self) -> Window:
        """Rectangle that the points fill."""

    @property
    def spacing(self) -> tuple[float, float]:
        """Usual distance of points along x and y, m."""

    @property
    def normal_share(self) -> float | None:
        """Share of the mean |Ê|² that goes across the section; None if all is the same there."""

    @property
    def spikes(self) -> int:
        """Points on edges of metal, where what surrounds them was taken instead."""

    def counts(self, window: Window) -> tuple[float, float]:
        """Points along x and along y in a part of the window."""

    def quantiles(self, axis: int) -> Real:
        """Coordinates of the points along an axis, in order: as dense as the points are."""

    def __call__(self, x: Real, y: Real) -> Phasor:
        """Ê in the section at places (n,) of the window, (2, n), 1/m."""


def arranged(table: FieldTable, plane: float | None = None) -> Sampled:
    """Set the points in order.

    Of three dimensions take the plane z = `plane`, m, by default the middle.

    Raises
    ------
    FieldTableError
        If points are missing, or those of three dimensions are not on a grid.
    """
    axes, places = _lines(table.points)
    size = int(np.prod([len(axis) for axis in axes]))
    on_grid = len(table.points) >= GRID * size
    if on_grid:
        values = _gridded(table, axes, places)
        return _section(axes, values, plane) if len(axes) == 3 else Grid(axes[0], axes[1], values)
    if len(axes) == 3:
        raise FieldTableError(
            "has points in three dimensions that are on no grid of x, y and z; export a grid, or "
            "the plane of the section alone"
        )
    return Cloud.of(table.points, table.field)


def _lines(points: Real) -> tuple[list[Real], Index]:
    """Distinct coordinates along each axis, and which of them each point has, (axis, n)."""
    axes, places = [], []
    for values in points.T:
        step = SAME_PLACE * np.ptp(values)
        order = np.argsort(values, kind="stable")
        fresh = np.concatenate([[True], np.diff(values[order]) > step])
        place = np.empty(len(values), dtype=np.intp)
        place[order] = np.cumsum(fresh) - 1
        axes.append(values[order][fresh])
        places.append(place)
    return axes, np.stack(places)


def _gridded(table: FieldTable, axes: list[Real], places: Index) -> Phasor:
    """Field on the whole grid, (component, nx, ny[, nz])."""
    shape = tuple(map(len, axes))
    for name, count in zip("xyz", shape, strict=False):
        least = FEWEST_LINES if name != "z" else 1
        if count < least:
            raise FieldTableError(f"has {count} values of {name}; a grid needs at least {least}")
    number = np.ravel_multi_index(tuple(places), shape)
    missing = np.setdiff1d(np.arange(np.prod(shape)), number)
    if missing.size:
        where = np.unravel_index(missing[0], shape)
        spot = ", ".join(
            f"{name} = {shown_length(axis[k])}"
            for name, axis, k in zip("xyz", axes, where, strict=False)
        )
        raise FieldTableError(
            f"has gaps: {missing.size} of {np.prod(shape)} points of its grid are missing, such as "
            f"{spot}"
        )
    kind = complex if np.iscomplexobj(table.field) else float
    values: Phasor = np.empty((table.field.shape[1], int(np.prod(shape))), dtype=kind)
    values[:, number] = table.field.T
    return values.reshape(-1, *shape)


def _section(axes: list[Real], values: Phasor, plane: float | None) -> "Grid":
    """Section of a grid of three dimensions, interpolated between its layers."""
    x, y, z = axes
    at = 0.5 * (z[0] + z[-1]) if plane is None else plane
    slack = SAME_PLACE * (z[-1] - z[0])
    if not z[0] - slack <= at <= z[-1] + slack:
        raise FieldTableError(
            f"has z from {shown_length(z[0])} to {shown_length(z[-1])}, and the plane "
            f"z = {shown_length(at)} is not among them"
        )
    if len(z) > 3:
        layer = CubicSpline(z, values, axis=-1)(at)
    else:
        after = int(np.clip(np.searchsorted(z, at), 1, len(z) - 1))
        share = (at - z[after - 1]) / (z[after] - z[after - 1])
        layer = (1 - share) * values[..., after - 1] + share * values[..., after]
    square = (np.abs(layer) ** 2).mean(axis=(1, 2))
    total = float(square.sum())
    return Grid(x, y, layer[:2], float(square[2]) / total if total else 0.0)


class Grid:
    """A field on columns `x` and rows `y`, (2, nx, ny), with cubic splines between.

    Where a point stands on an edge of metal the mean of its neighbours is taken.
    """

    def __init__(self, x: Real, y: Real, values: Phasor, normal_share: float | None = None) -> None:
        self.x, self.y, self.normal_share = x, y, normal_share
        self.window = (float(x[0]), float(x[-1]), float(y[0]), float(y[-1]))
        self.spacing = (float(np.median(np.diff(x))), float(np.median(np.diff(y))))
        tamed, self.spikes = _without_spikes(values)
        self._splines = [
            [RectBivariateSpline(x, y, axis) for axis in part] for part in components(tamed)
        ]

    def counts(self, window: Window) -> tuple[float, float]:
        """Columns and rows in a part of the window."""
        low, high = np.array(window).reshape(2, 2).T
        columns, rows = (
            float(((line >= a) & (line <= b)).sum())
            for line, a, b in zip((self.x, self.y), low, high, strict=True)
        )
        return columns, rows

    def quantiles(self, axis: int) -> Real:
        """Columns or rows."""
        return self.y if axis else self.x

    def __call__(self, x: Real, y: Real) -> Phasor:
        """Splines at places; beyond the last line its value."""
        return phasor(np.array([[axis.ev(x, y) for axis in part] for part in self._splines]))


class Cloud:
    """A field at points (n, 2) in no order, (n, 2), on the triangles between them."""

    normal_share = None
    spikes = 0

    def __init__(self, points: Real, field: Phasor, spacing: tuple[float, float]) -> None:
        self.spacing = spacing
        low, high = points.min(axis=0), points.max(axis=0)
        self.window = (float(low[0]), float(high[0]), float(low[1]), float(high[1]))
        self._points = points
        self._scale = np.ptp(points, axis=0).max()
        mesh = Delaunay(points / self._scale)
        kind = CloughTocher2DInterpolator if len(points) <= SMOOTH else LinearNDInterpolator
        self._inside, self._beyond = kind(mesh, field), NearestNDInterpolator(mesh.points, field)

    @classmethod
    def of(cls, points: Real, field: Phasor) -> "Cloud":
        """Cloud without holes.

        Raises
        ------
        FieldTableError
            If a part of the window has no points.
        """
        spacing = usual_distance(points)
        return cls(points, field, (spacing, spacing))

    def counts(self, window: Window) -> tuple[float, float]:
        """Sides of a grid with as many points as a part of the window."""
        low, high = np.array(window).reshape(2, 2).T
        number = np.all((self._points >= low) & (self._points <= high), axis=1).sum()
        wide, tall = high - low
        return float(np.sqrt(number * wide / tall)), float(np.sqrt(number * tall / wide))

    def quantiles(self, axis: int) -> Real:
        """Sorted coordinates."""
        return np.sort(self._points[:, axis])

    def __call__(self, x: Real, y: Real) -> Phasor:
        """Between points on triangles; between the outermost points and the window, the nearest."""
        places = np.stack([x, y], axis=-1) / self._scale
        values: Phasor = self._inside(places)
        outside = np.isnan(values[..., 0])
        values[outside] = self._beyond(places[outside])
        return np.moveaxis(values, -1, 0)


def _without_spikes(values: Phasor) -> tuple[Phasor, int]:
    """A field on a grid with the mean of eight neighbours where it is far above all of them."""
    size = np.linalg.norm(values, axis=0)
    around = np.ones((3, 3))
    around[1, 1] = 0
    spikes = size > SPIKE * maximum_filter(size, footprint=around, mode="mirror")
    if not spikes.any():
        return values, 0
    tamed = components(values)
    for part in tamed.reshape(-1, *size.shape):
        part[spikes] = convolve(part, around / 8, mode="mirror")[spikes]
    return phasor(tamed), int(spikes.sum())
