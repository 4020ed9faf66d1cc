"""Particle kind: an ellipsoid in confocal layers, e.g. a rod or a red cell."""

from functools import lru_cache
from typing import Annotated, Any, ClassVar, Literal, TypeVar

import numpy as np
from numpy.typing import NDArray
from scipy.special import elliprf

from model import outlines
from model.arrays import Complex, Real
from model.declare import Choice, Quantities
from model.layered import LayeredParticle
from model.layers import NEW_LAYERS
from model.medium import Medium
from model.outlines import Outline
from model.particle import MEDIAN, Alignment, Sample
from model.quantity import plain_text

Number = TypeVar("Number", np.float64, np.complex128)
#: Semi-axes that differ by less count as equal.
_EQUAL = 1e-6


class Ellipsoid(LayeredParticle):
    """A core in confocal layers; rods are prolate, red cells oblate.

    Aligned, it turns the axis of largest Re K into the field, as the energy −2πabc·ε_m·Re K·E² of
    the induced dipole is least there. At random, forces are the mean over all orientations.

    Source: C. F. Bohren and D. R. Huffman, *Absorption and Scattering of Light by Small
    Particles* (1983), section 5.3; T. B. Jones, *Electromechanics of Particles* (1995), chapter 5.
    """

    usual: ClassVar[dict[str, Any]] = {
        "name": "rod",
        "semi_axes": ["1.5 um", "0.5 um", "0.5 um"],
        "core": {"relative_permittivity": 60.0, "conductivity": "0.3 S/m"},
        "layers": [NEW_LAYERS["membrane"]],
    }

    kind: Literal["ellipsoid"] = "ellipsoid"
    semi_axes: Annotated[
        tuple[float, float, float],
        Quantities(
            "Semi-axes",
            "Outer, of the median particle, in any order: half of length, width and thickness.",
            unit="um",
            low="5 nm",
            high="500 um",
            count=3,
        ),
    ]
    orientation: Annotated[
        Literal["aligned", "random"],
        Choice(
            "Orientation",
            "Aligned: the axis of largest Re K turns into the field. Random: tumbling, the mean "
            "of all orientations.",
            options={"aligned": "aligned by the field", "random": "random"},
        ),
    ] = "aligned"

    @classmethod
    def sized(cls, radius: float) -> dict[str, Any]:
        """Semi-axes of a sphere."""
        return {"semi_axes": [plain_text(radius, "um")] * 3}

    @property
    def equivalent_radius(self) -> float:
        """Radius of the sphere of equal volume, ∛(abc), m."""
        return float(np.cbrt(np.prod(self.semi_axes)))

    @property
    def hydrodynamic_radius(self) -> float:
        """1/R_F(a², b², c²), m: F. Perrin 1936 J. Phys. Radium 7:1, with Carlson's integral."""
        return float(1.0 / elliprf(*np.square(self.semi_axes)))

    @property
    def half_width(self) -> float:
        """The shortest semi-axis, m."""
        return min(self.semi_axes)

    @property
    def smallest_size(self) -> float:
        """Least relative size at which the layers leave a core."""
        return _smallest(self.semi_axes, tuple(layer.thickness for layer in self.layers))

    def outline(self, sample: Sample, dimensions: int) -> Outline:
        """An ellipsoid, its axes in the order of the semi-axes."""
        return outlines.ellipsoid(self.semi_axes, sample.size, dimensions)

    def polarisation(self, medium: Medium, sample: Sample = MEDIAN) -> Complex:
        """Polarisation factor K along the aligned axis, or the mean over all three."""
        factors = self.factors(medium, sample)
        if self.orientation == "random":
            return np.asarray(factors.mean(axis=0))
        return _along(factors, _aligned(factors))

    def membrane_gain(self, medium: Medium, sample: Sample = MEDIAN) -> Real | None:
        """Largest |ΔV|/E at the pole of the aligned axis, at random of any axis, m."""
        gains = self.gains(medium, sample)
        if gains is None:
            return None
        if self.orientation == "random":
            return np.asarray(gains.max(axis=0))
        return np.asarray(_along(gains, _aligned(self.factors(medium, sample))))

    def spinning_factor(self, medium: Medium, sample: Sample = MEDIAN) -> Complex:
        """Mean of the factors along the two longer semi-axes: it spins lying flat."""
        first, second, _ = self._by_length
        factors = self.factors(medium, sample)
        return np.asarray(0.5 * (factors[first] + factors[second]))

    @property
    def spinning_ease(self) -> float:
        """Share c in the rate −c·(ε_m/η)·Im K·E² about the shortest semi-axis.

        The torque is −4πabc·ε_m·Im K·E², K the mean of both axes in the plane as it spins slower
        than the field turns; the drag on an ellipsoid that spins about axis k is
        (8/3)πη·abc·(a_i² + a_j²)/(a_i²A_i + a_j²A_j), A. Edwardes 1893 Quart. J. Math. 26:70 and
        F. Perrin 1934 J. Phys. Radium 5:497, from memory.
        """
        first, second, _ = self._by_length
        outline = outlines.Ellipsoid(np.asarray(self.semi_axes))
        square = outline.poles**2
        drag = square * outline.depolarisation
        return float(1.5 * (drag[first] + drag[second]) / (square[first] + square[second]))

    def alignment(self, medium: Medium, sample: Sample = MEDIAN) -> Alignment | None:
        """Axis of largest Re K and its advantage; None at random, or if all axes are equal."""
        lengths = np.asarray(self.semi_axes)
        if self.orientation == "random" or np.ptp(lengths) <= _EQUAL * lengths.max():
            return None
        factors = self.factors(medium, sample).real
        axis = _aligned(factors)
        best = lengths[axis]
        unlike = np.abs(lengths.reshape(3, *(1,) * axis.ndim) - best) > _EQUAL * best
        next_one = np.where(unlike, factors, -np.inf).max(axis=0)
        return Alignment(lengths, axis, np.asarray(factors.max(axis=0) - next_one))

    @property
    def _by_length(self) -> tuple[int, ...]:
        """Semi-axes, the longest first."""
        return tuple(sorted(range(3), key=lambda axis: -self.semi_axes[axis]))


def _aligned(factors: Complex | Real) -> NDArray[np.intp]:
    """Axis of largest Re K; of equal ones the first."""
    return np.asarray(np.argmax(factors.real, axis=0))


def _along(values: NDArray[Number], axis: NDArray[np.intp]) -> NDArray[Number]:
    """Values (3, …) along the chosen axis, (…)."""
    return np.asarray(np.take_along_axis(values, axis[None], axis=0)[0])


@lru_cache(maxsize=64)
def _smallest(semi_axes: tuple[float, ...], thicknesses: tuple[float, ...]) -> float:
    """Least relative size of an ellipsoid that layers leave a core of, by bisection."""
    if not any(thicknesses):
        return 0.0

    def fits(size: float) -> bool:
        outline: Outline = outlines.Ellipsoid(size * np.asarray(semi_axes))
        try:
            for thickness in reversed(thicknesses):
                _, outline = outline.shell(thickness, 1.0)
        except ValueError:
            return False
        return True

    low, high = 0.0, 1.0
    while not fits(high):
        low, high = high, 2.0 * high
    while high - low > 1e-9 * high:
        middle = 0.5 * (low + high)
        low, high = (low, middle) if fits(middle) else (middle, high)
    return high
