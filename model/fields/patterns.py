"""A solved chip: patterns that any voltage, liquid and frequency merely scale."""

from collections.abc import Callable, Hashable, Mapping
from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING, TypeVar, cast

import numpy as np
from numpy.typing import ArrayLike, NDArray

from model.arrays import Complex, Phasor, Real, phasor
from model.fields.feedback import Feedback
from model.fields.grading import split
from model.fields.lines import Line, LineTable
from model.fields.piecewise import Piecewise
from model.fields.response import ElectrodeResponse
from model.fields.section import Fold, Folded, Rest
from model.fields.slip import SlipFlow
from model.fields.stored import Stored

UNKNOWN_HEAT = "heat and electrothermal flow of this chip are not known"
#: Results that are kept: lines of a plan, places that were probed, maps.
MOST_KEPT = 256

Values = TypeVar("Values", Real, Complex, Phasor)
Result = TypeVar("Result")

if TYPE_CHECKING:
    from model.layout import Layout


@dataclass(frozen=True)
class Warmth:
    """Numbers of Θ in the liquid: the largest, the mean, and the second order of the largest."""

    peak: float
    mean: float
    feedback: Feedback


@dataclass(frozen=True, eq=False, repr=False)
class ChipPatterns(Stored):
    r"""Field, heat and flow of a chip per 1 V rms between electrodes of opposite phase.

    With the liquid's permittivity ε, conductivity σ, thermal conductivity k and viscosity η, the
    angular frequency ω, α = d ln ε/dT, β = d ln σ/dT and the rms voltage V:

    - field E = V·Ê, with Ê from :meth:`electric_field` in 1/m;
    - temperature rise ΔT = (σV²/k)·Θ, Θ from :meth:`temperature`;
    - force on a small sphere of radius a and polarisation factor K
      F = 2πεa³V²·(Re K·∇|Ê|² + Im K·S), with :meth:`gradient_e2` and S from :meth:`travelling`;
    - electrothermal velocity, with s = ωε/σ,
      u = (εσV⁴/(kηL))·[(α − β)/(1 + s²)·(U₁ + s·U₃) − (α/2)·U₂], U from
      :meth:`electrothermal` and :meth:`electrothermal_travelling`, L the attribute `length`;
    - capacitance of one gap (of one pitch, if floor and lid are opposite) per metre of bar
      C = ε·`cell_factor`, its conductance σ·`cell_factor`.

    A drive of several phases gives a complex Ê = Ê₀ + jÊ₁; S and U₃ are what its two components
    add together, and vanish for a drive of one phase.

    Coordinates in m: x from a bar's centre along the flow, any x; y from the floor. In plan, both
    from the middle of the chip; all is the same over the depth, flows are means over it.
    Ohmic heat alone is counted. That warm liquid conducts better enters the hottest rise, through
    `feedback`, and nothing else: right for rises of a few kelvin.

    Parameters
    ----------
    chip
        What was solved.
    thermal_conductivity
        k of the liquid that was used, W/(m K).
    cell_factor
        C/ε per metre of bar and gap or pitch.
    length
        The pitch L, m.
    period
        Repeat of |Ê|², Θ and the flow along x, m; None if the chip does not repeat.
    height
        Of the liquid, m.
    warmth
        Numbers of Θ; None, as are heat and flows, where the field alone is known.
    response
        What an interface on the electrodes changes.
    slips
        Flows of the slips that electro-osmosis gives the electrodes; none if an electrode stands
        otherwise than along x.
    wall_factors
        The same as `cell_factor` for floor and lid, to first order in their admittance; empty if
        they stand outside the section.
    remarks
        What is to be told of how the patterns were found, as sentences.
    """

    chip: "Layout"
    thermal_conductivity: float
    cell_factor: float
    length: float
    height: float
    warmth: Warmth | None
    response: ElectrodeResponse
    slips: tuple[SlipFlow, ...]
    wall_factors: Mapping[str, float]
    fold: Fold
    rests: tuple[Rest, ...]
    potential: Piecewise
    heat: Piecewise | None
    flows: Piecewise | None
    table: LineTable | None
    through: Piecewise | None = None
    remarks: tuple[str, ...] = ()

    @property
    def period(self) -> float | None:
        """Repeat of the quadratic patterns along x, m."""
        return self.fold.period

    @property
    def has_heat(self) -> bool:
        """Whether heat and electrothermal flow are known; asking for them fails if not."""
        return self.warmth is not None

    @property
    def peak_temperature(self) -> float:
        """Largest Θ in the liquid."""
        return self._known_warmth.peak

    @property
    def mean_temperature(self) -> float:
        """Mean of Θ over the liquid."""
        return self._known_warmth.mean

    @property
    def feedback(self) -> Feedback:
        """Second order of the largest rise."""
        return self._known_warmth.feedback

    @property
    def _known_warmth(self) -> Warmth:
        if self.warmth is None:
            raise ValueError(UNKNOWN_HEAT)
        return self.warmth

    @cached_property
    def span(self) -> tuple[float, float]:
        """Least and greatest x of the piece that was solved, m."""
        x = self.potential.cells.corners[..., 0]
        return float(x.min()), float(x.max())

    @cached_property
    def reach(self) -> tuple[float, float]:
        """Least and greatest y of the liquid that the patterns cover, m."""
        y = self.potential.cells.corners[..., 1]
        return float(y.min()), float(y.max())

    def electric_field(self, x: ArrayLike, y: ArrayLike) -> tuple[Phasor, Phasor]:
        """Field Ê = −∇φ in 1/m, that is V/m per volt; `fold` tells how it repeats.

        Complex if the drive has two components.

        Parameters
        ----------
        x, y
            Places in the liquid, m; they broadcast.

        Raises
        ------
        ValueError
            If a place is not in the liquid.
        """
        spots = _spots(x, y)
        at = self.fold.place(spots.x, spots.y)
        field = -self.potential.slopes(*_within(self.potential, at.x, at.y))
        field = field * at.signs[:, None]
        field[:, 0] *= at.along
        field[:, 1] *= at.up
        return spots.shaped(phasor(field[:, 0])), spots.shaped(phasor(field[:, 1]))

    def gradient_e2(self, x: ArrayLike, y: ArrayLike) -> tuple[Real, Real]:
        """∇|Ê|² = 2 Re (Ê*·∇)Ê in 1/m³; arguments and errors as :meth:`electric_field`."""
        return self._force_pattern(x, y, 0)

    def travelling(self, x: ArrayLike, y: ArrayLike) -> tuple[Real, Real]:
        """S = 2(Ê₀·∂ᵢÊ₁ − Ê₁·∂ᵢÊ₀) in 1/m³, what a travelling or turning field adds.

        −2k|Ê|² along a wave exp(j(ωt − kx)). Arguments and errors as :meth:`electric_field`.
        """
        return self._force_pattern(x, y, 1)

    def _force_pattern(self, x: ArrayLike, y: ArrayLike, which: int) -> tuple[Real, Real]:
        spots = _spots(x, y)
        at = self.fold.place(spots.x, spots.y)
        found = self.potential.force_patterns(*_within(self.potential, at.x, at.y))
        if which == len(found):
            return np.zeros(spots.shape), np.zeros(spots.shape)
        return _turned(spots, at, found[which], odd=which == 1)

    def inside(self, x: ArrayLike, y: ArrayLike) -> NDArray[np.bool_]:
        """Whether places are in the liquid."""
        spots = _spots(x, y)
        at = self.fold.place(spots.x, spots.y)
        cell, _ = self.potential.cells.locate(np.stack([at.x, at.y]))
        return (cell >= 0).reshape(spots.shape)

    def temperature(self, x: ArrayLike, y: ArrayLike) -> Real:
        """Temperature rise Θ = ΔT·k/(σV²) in liquid and walls.

        Raises
        ------
        ValueError
            If a place is outside the chip, or heat is not known.
        """
        if self.heat is None:
            raise ValueError(UNKNOWN_HEAT)
        spots = _spots(x, y)
        at = self.fold.place(spots.x, spots.y)
        level, factor = at.y.copy(), np.ones_like(at.y)
        for rest in self.rests:
            low, high = sorted((rest.level, rest.outside))
            beyond = (level >= low) & (level <= high)
            factor[beyond] = 1 - rest.falloff * np.abs(level[beyond] - rest.level)
            level[beyond] = rest.level
        values = self.heat.values(*_within(self.heat, at.x, level))[0]
        return spots.shaped(values * factor)

    def electrothermal(
        self, x: ArrayLike, y: ArrayLike
    ) -> tuple[tuple[Real, Real], tuple[Real, Real]]:
        """Velocity patterns U₁ of the force (∇Θ·Ê)Ê and U₂ of |Ê|²∇Θ, each (x, y), no unit.

        Arguments and errors as :meth:`temperature`. The liquid as a whole is not pumped:
        without a pressure difference no net flow is driven along a symmetric array.
        """
        first, second = (self._flow_pattern(x, y, which) for which in (0, 1))
        return first, second

    def electrothermal_travelling(self, x: ArrayLike, y: ArrayLike) -> tuple[Real, Real]:
        """U₃ of the force (∇Θ·Ê₁)Ê₀ − (∇Θ·Ê₀)Ê₁, which pumps along a travelling wave."""
        return self._flow_pattern(x, y, 2)

    def _flow_pattern(self, x: ArrayLike, y: ArrayLike, which: int) -> tuple[Real, Real]:
        if self.flows is None:
            raise ValueError(UNKNOWN_HEAT)
        spots = _spots(x, y)
        at = self.fold.place(spots.x, spots.y)
        u = self.flows.values(*_within(self.flows, at.x, at.y))
        if 2 * which == len(u):
            return np.zeros(spots.shape), np.zeros(spots.shape)
        return _turned(spots, at, u[2 * which : 2 * which + 2], odd=which == 2)

    def flow_through(self, x: ArrayLike, y: ArrayLike) -> tuple[Real, Real]:
        """Mean velocity over the depth of the flow through a plan, over the flow rate, 1/m².

        Brinkman's equation with the friction 12/h² of floor and lid at depth h and no slip on
        the sides: exact far from the sides and for a channel much deeper than wide. Arguments
        and errors as :meth:`electric_field`.

        Raises
        ------
        ValueError
            Also if the chip is not seen in plan.
        """
        if self.through is None:
            raise ValueError("only a chip that is seen in plan has a pattern of its flow")
        spots = _spots(x, y)
        at = self.fold.place(spots.x, spots.y)
        u = self.through.values(*_within(self.through, at.x, at.y))
        return spots.shaped(u[0]), spots.shaped(u[1] * at.along * at.up)

    def line(self, y: float) -> Line:
        """All patterns along one period at the height `y`, in tens of microseconds.

        In plan, along the whole piece and its mirror image at this y, and of a field that is given
        along its window; kept once found.

        Raises
        ------
        ValueError
            If the height is not in the liquid.
        """
        if self.table is not None:
            return self.table.line(y)
        return self.remembered(("row", y), lambda: self._row(y))

    def path(self, x: Real, y: Real) -> Line:
        """All patterns at any places in the liquid, (n,) each, m; kept once found.

        Raises
        ------
        ValueError
            If a place is not in the liquid.
        """
        return self.remembered((x.tobytes(), y.tobytes()), lambda: self._at(x, y))

    def _row(self, y: float) -> Line:
        """Patterns where a level line of a plan meets the sides of cells, and between."""
        piece = abs(y) if self.fold.upright else y
        x = split(self.potential.cells.crossings(piece), 2)
        if self.fold.mirrored:
            x = np.concatenate([-x[x > 0][::-1], x])
        return self._at(*np.broadcast_arrays(x[self.inside(x, y)], y))

    def _at(self, x: Real, y: Real) -> Line:
        moving, heat = len(self.fold.parities) == 2, self.has_heat
        flows = [np.array(self._flow_pattern(x, y, k)) if heat else None for k in (0, 1, 2)]
        return Line(
            x,
            np.asarray(self.electric_field(x, y), dtype=complex if moving else float),
            np.array(self.gradient_e2(x, y)),
            self.temperature(x, y) if heat else None,
            flows[0],
            flows[1],
            np.array(self.travelling(x, y)) if moving else None,
            flows[2] if moving else None,
            None if self.through is None else np.array(self.flow_through(x, y)),
        )

    def remembered(self, key: Hashable, make: Callable[[], Result]) -> Result:
        """What `make` gives from these patterns alone, made once under its key and kept with them.

        Whatever asks may keep its results here, so that they live as long as the chip does.
        """
        if key not in self._kept:
            if len(self._kept) >= MOST_KEPT:
                self._kept.clear()
            self._kept[key] = make()
        return cast(Result, self._kept[key])

    @cached_property
    def _kept(self) -> dict[Hashable, object]:
        """Results by their keys."""
        return {}


@dataclass(frozen=True)
class _Spots:
    """Flattened places and the shape to give back."""

    x: Real
    y: Real
    shape: tuple[int, ...]

    def shaped(self, values: Values) -> Values:
        return values.reshape(self.shape)


def _turned(spots: _Spots, at: Folded, values: Real, odd: bool) -> tuple[Real, Real]:
    """Vectors (2, n) of the piece as they stand at the places that were asked for.

    `odd` if they have the parity of both components of the drive together.
    """
    lift = at.signs.prod(axis=0) if odd else np.ones_like(at.x)
    return spots.shaped(values[0] * at.along * lift), spots.shaped(values[1] * at.up * lift)


def _spots(x: ArrayLike, y: ArrayLike) -> _Spots:
    wide, tall = np.broadcast_arrays(np.asarray(x, dtype=float), np.asarray(y, dtype=float))
    return _Spots(wide.ravel(), tall.ravel(), wide.shape)


def _within(functions: Piecewise, x: Real, y: Real) -> tuple[np.ndarray, Real]:
    cell, place = functions.cells.locate(np.stack([x, y]))
    if np.any(cell < 0):
        worst = int(np.argmax(cell < 0))
        raise ValueError(f"x = {x[worst]:g} m, y = {y[worst]:g} m is outside the section")
    return cell, place
