"""Outlines of layered particles: spheres, and ellipsoids with confocal layers.

An outline gives what the layered solution asks for. Along each of its axes the field inside a
homogeneous ellipsoid is uniform, so that one recursion serves all shapes; only depolarising
factors, lengths and the shares of the volume differ. Arrays of an ellipsoid have its three axes in
front, those of a sphere do not.

Source: C. F. Bohren and D. R. Huffman, *Absorption and Scattering of Light by Small Particles*
(1983), section 5.3, for confocal ellipsoids; J. A. Osborn 1945 Phys. Rev. 67:351 for the
depolarising factors; B. C. Carlson 1979 Numer. Math. 33:1 for the integrals R_D and R_G.
"""

from dataclasses import dataclass
from functools import cached_property
from typing import Protocol

import numpy as np
from numpy.typing import ArrayLike
from scipy.special import elliprd, elliprg

from model.arrays import Real
from model.polarisation import Shell, Value

#: Least half-thickness of a core over that of what encloses it; below it rounding would decide.
LEAST_CORE = 1e-6


class Outline(Protocol):
    """Surface of a particle or of one of its layers."""

    @property
    def poles(self) -> Real:
        """Distance of the poles from the centre along each axis, m."""

    @property
    def depolarisation(self) -> Real:
        """Depolarising factor along each axis; their sum is 1."""

    @property
    def thin_length(self) -> Real:
        """Length ℓ of a thin membrane in series, 1/ε̃ = 1/ε̃in + 1/(c̃ℓ), along each axis, m."""

    def shell(self, thickness: float, permittivity: Value) -> tuple[Shell, "Outline"]:
        """Layer within this outline and the outline that is left inside it, thickness in m.

        Raises
        ------
        ValueError
            If nothing is left inside.
        """


@dataclass(frozen=True)
class Sphere:
    """A sphere; `radius` in m, of any shape."""

    radius: Real

    @property
    def poles(self) -> Real:
        """The radius."""
        return self.radius

    @property
    def depolarisation(self) -> Real:
        """One third."""
        return np.asarray(1.0 / 3.0)

    @property
    def thin_length(self) -> Real:
        """The radius."""
        return self.radius

    def shell(self, thickness: float, permittivity: Value) -> tuple[Shell, Outline]:
        """Concentric layer."""
        thinning = thickness / self.radius
        ratio = 1.0 - thinning
        _core_is_left(ratio)
        missing = thinning * (1.0 + ratio * (1.0 + ratio))  # 1 − ratio³, without cancelling
        return Shell(permittivity, missing, missing / 3.0, 1.0 / 3.0, thinning), Sphere(
            self.radius * ratio
        )


@dataclass(frozen=True)
class Ellipsoid:
    """An ellipsoid; semi-axes in m, (3, …)."""

    poles: Real

    @cached_property
    def depolarisation(self) -> Real:
        """A_k = (abc/3)·R_D of the squared semi-axes, that of axis k last.

        >>> Ellipsoid(np.array([3.0, 2.0, 1.0])).depolarisation.round(6)
        array([0.156301, 0.267154, 0.576545])
        """
        square = self.poles**2
        third = self.poles.prod(axis=0) / 3.0
        others = ((1, 2), (0, 2), (0, 1))
        integrals = [elliprd(square[i], square[j], square[k]) for k, (i, j) in enumerate(others)]
        return np.asarray(third * np.stack(integrals))

    @cached_property
    def mean_length(self) -> Real:
        """Three times the volume over the surface, m; the radius of a sphere."""
        square = self.poles**2
        area = elliprg(square[0] * square[1], square[0] * square[2], square[1] * square[2])
        return np.asarray(self.poles.prod(axis=0) / area)

    @property
    def thin_length(self) -> Real:
        """a_k² over :attr:`mean_length`, of a membrane between two confocal surfaces.

        Such a membrane is thicker where the outline is flatter, by just so much that the field
        inside stays uniform; its capacitance as a whole is that per area times the surface.
        """
        return self.poles**2 / self.mean_length

    def shell(self, thickness: float, permittivity: Value) -> tuple[Shell, Outline]:
        """Confocal layer, of the thickness that gives its capacitance per area while it is thin.

        Inner semi-axes √(a_k² − s) with s = t(2L − t), L the mean length; in a sphere s leaves
        a − t exactly.
        """
        removed = thickness * (2.0 * self.mean_length - thickness)
        left = self.poles**2 - removed
        _core_is_left(np.where(thickness < self.mean_length, left / self.poles**2, 0.0))
        inner = Ellipsoid(np.sqrt(left))
        thinning = removed / (self.poles * (self.poles + inner.poles))
        missing = -np.expm1(np.log1p(-thinning).sum(axis=0))
        factor = inner.depolarisation
        spread = factor - (1.0 - missing) * self.depolarisation
        return Shell(permittivity, missing, spread, factor, thinning), inner


def _core_is_left(ratio: Real) -> None:
    if not np.all(ratio >= LEAST_CORE):  # NaN fails too
        raise ValueError("the layers of a particle of this size leave no core")


def sphere(radius: float, size: ArrayLike) -> Sphere:
    """Spheres of `size` times a radius."""
    return Sphere(radius * np.asarray(size, dtype=float))


def ellipsoid(semi_axes: tuple[float, ...], size: ArrayLike, dimensions: int) -> Ellipsoid:
    """Ellipsoids of `size` times the semi-axes, with so many dimensions behind the axes."""
    sizes = np.asarray(size, dtype=float)
    axes = np.reshape(semi_axes, (3,) + (1,) * max(dimensions, sizes.ndim))
    return Ellipsoid(axes * sizes)
