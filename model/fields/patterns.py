"""A solved chip: patterns that any voltage, liquid and frequency merely scale."""

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING, TypeVar

import numpy as np
from numpy.typing import ArrayLike, NDArray

from model.arrays import Complex, Phasor, Real
from model.fields.feedback import Feedback
from model.fields.lines import Line, LineTable
from model.fields.piecewise import Piecewise
from model.fields.response import ElectrodeResponse
from model.fields.section import Fold, Rest
from model.fields.stored import Stored

Values = TypeVar("Values", Real, Complex, Phasor)

if TYPE_CHECKING:
    from model.layout import Layout


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

    Coordinates in m: x from a bar's centre along the flow, any x; y from the floor.
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
    peak_temperature
        Largest Θ in the liquid.
    mean_temperature
        Mean of Θ over the liquid.
    feedback
        Second order of the largest rise.
    response
        What an interface on the electrodes changes.
    wall_factors
        The same as `cell_factor` for floor and lid, to first order in their admittance; empty if
        they stand outside the section.
    """

    chip: "Layout"
    thermal_conductivity: float
    cell_factor: float
    length: float
    height: float
    peak_temperature: float
    mean_temperature: float
    feedback: Feedback
    response: ElectrodeResponse
    wall_factors: Mapping[str, float]
    fold: Fold
    rests: tuple[Rest, ...]
    potential: Piecewise
    heat: Piecewise
    flows: Piecewise
    table: LineTable

    @property
    def period(self) -> float | None:
        """Repeat of the quadratic patterns along x, m."""
        return self.fold.period

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
        place, side, signs = self.fold.fold(spots.x)
        field = -self.potential.slopes(*_within(self.potential, place, spots.y))
        field = field * signs[:, None]
        field[:, 0] *= side
        return spots.shaped(_phasor(field[:, 0])), spots.shaped(_phasor(field[:, 1]))

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
        place, side, signs = self.fold.fold(spots.x)
        found = self.potential.force_patterns(*_within(self.potential, place, spots.y))
        if which == len(found):
            return np.zeros(spots.shape), np.zeros(spots.shape)
        lift = signs.prod(axis=0) if which else 1.0
        return spots.shaped(found[which][0] * side * lift), spots.shaped(found[which][1] * lift)

    def inside(self, x: ArrayLike, y: ArrayLike) -> NDArray[np.bool_]:
        """Whether places are in the liquid."""
        spots = _spots(x, y)
        place, _, _ = self.fold.fold(spots.x)
        cell, _ = self.potential.cells.locate(np.stack([place, spots.y]))
        return (cell >= 0).reshape(spots.shape)

    def temperature(self, x: ArrayLike, y: ArrayLike) -> Real:
        """Temperature rise Θ = ΔT·k/(σV²) in liquid and walls.

        Raises
        ------
        ValueError
            If a place is outside the chip.
        """
        spots = _spots(x, y)
        place, _, _ = self.fold.fold(spots.x)
        level, factor = spots.y.copy(), np.ones_like(spots.y)
        for rest in self.rests:
            low, high = sorted((rest.level, rest.outside))
            beyond = (level >= low) & (level <= high)
            factor[beyond] = 1 - rest.falloff * np.abs(level[beyond] - rest.level)
            level[beyond] = rest.level
        values = self.heat.values(*_within(self.heat, place, level))[0]
        return spots.shaped(values * factor)

    def electrothermal(
        self, x: ArrayLike, y: ArrayLike
    ) -> tuple[tuple[Real, Real], tuple[Real, Real]]:
        """Velocity patterns U₁ of the force (∇Θ·Ê)Ê and U₂ of |Ê|²∇Θ, each (x, y), no unit.

        Arguments and errors as :meth:`electric_field`. The liquid as a whole is not pumped:
        without a pressure difference no net flow is driven along a symmetric array.
        """
        first, second = (self._flow_pattern(x, y, which) for which in (0, 1))
        return first, second

    def electrothermal_travelling(self, x: ArrayLike, y: ArrayLike) -> tuple[Real, Real]:
        """U₃ of the force (∇Θ·Ê₁)Ê₀ − (∇Θ·Ê₀)Ê₁, which pumps along a travelling wave."""
        return self._flow_pattern(x, y, 2)

    def _flow_pattern(self, x: ArrayLike, y: ArrayLike, which: int) -> tuple[Real, Real]:
        spots = _spots(x, y)
        place, side, signs = self.fold.fold(spots.x)
        u = self.flows.values(*_within(self.flows, place, spots.y))
        if 2 * which == len(u):
            return np.zeros(spots.shape), np.zeros(spots.shape)
        lift = signs.prod(axis=0) if which == 2 else 1.0
        along, up = u[2 * which : 2 * which + 2]
        return spots.shaped(along * side * lift), spots.shaped(up * lift)

    def line(self, y: float) -> Line:
        """All patterns along one period at the height `y`, in tens of microseconds.

        Raises
        ------
        ValueError
            If the height is not in the liquid.
        """
        return self.table.line(y)


@dataclass(frozen=True)
class _Spots:
    """Flattened places and the shape to give back."""

    x: Real
    y: Real
    shape: tuple[int, ...]

    def shaped(self, values: Values) -> Values:
        return values.reshape(self.shape)


def _phasor(components: Real) -> Phasor:
    """Real field of one component (1, n), complex of two."""
    if len(components) == 1:
        return np.asarray(components[0])
    return np.asarray(components[0] + 1j * components[1])


def _spots(x: ArrayLike, y: ArrayLike) -> _Spots:
    wide, tall = np.broadcast_arrays(np.asarray(x, dtype=float), np.asarray(y, dtype=float))
    return _Spots(wide.ravel(), tall.ravel(), wide.shape)


def _within(functions: Piecewise, x: Real, y: Real) -> tuple[np.ndarray, Real]:
    cell, place = functions.cells.locate(np.stack([x, y]))
    if np.any(cell < 0):
        worst = int(np.argmax(cell < 0))
        raise ValueError(f"x = {x[worst]:g} m, y = {y[worst]:g} m is outside the section")
    return cell, place
