"""Four poles around a point, on the diagonals of a channel that passes between them."""

import math
from collections.abc import Mapping
from typing import Annotated, Literal

import numpy as np
from pydantic import model_validator

from model.arrays import Real
from model.declare import Choice, Quantity, misfit
from model.drawing import Dimension, Drawing, Shape, box
from model.fields.poles import Pole, pole_quarter
from model.fields.section import Fold, Section
from model.planar import Planar, around, at_least

#: Share of the channel's half width that rounding may take.
_ROUNDING = 1e-9


class FourPole(Planar):
    """Poles at 45°, 135°, 225° and 315°, neighbours opposite or each a quarter period on.

    With neighbours opposite φ is odd about both axes, so that a quarter is solved, one pole at
    +½ and the axes at 0. In quadrature the phasors of the poles are ½·exp(jnπ/2) with n = 0 … 3
    anticlockwise. Then φ·√2·exp(−jπ/4) is A − jB: A even about x = 0 and odd about y = 0, B the
    other way round, both ½ on the first pole. Again a quarter is solved, for A/√2 and −B/√2;
    the common phase changes no force, heat or flow. The field at the centre turns clockwise.
    """

    layout: Literal["four-pole"] = "four-pole"
    tip_gap: Annotated[
        float,
        Quantity(
            "Tip gap",
            "Between the tips of opposite poles, across the centre.",
            unit="um",
            low="2 um",
            high="5 mm",
        ),
    ] = 100e-6
    pole_shape: Annotated[
        Literal["square", "hyperbolic"],
        Choice(
            "Pole shape",
            "Square: squares with a corner towards the centre. Hyperbolic: a face that follows an "
            "equipotential of the ideal four-pole, cut off where the square would end.",
            options={"square": "square", "hyperbolic": "hyperbolic"},
        ),
    ] = "square"
    pole_width: Annotated[
        float,
        Quantity(
            "Pole width",
            "Of each pole, along the flow and across it.",
            unit="um",
            low="1 um",
            high="5 mm",
        ),
    ] = 100e-6
    drive: Annotated[
        Literal["opposite", "quadrature"],
        Choice(
            "Drive",
            "Opposite: neighbours at opposite voltages, the voltage between neighbours. "
            "Quadrature: 0, 90, 180 and 270 degrees round the centre, for rotation, the voltage "
            "between opposite poles.",
            options={"opposite": "neighbours opposite", "quadrature": "in quadrature"},
        ),
    ] = "opposite"
    channel_width: Annotated[
        float,
        Quantity(
            "Channel width",
            "Across the flow, between insulating side walls; the poles stand within it.",
            unit="mm",
            low="10 um",
            high="50 mm",
        ),
    ] = 0.5e-3

    @model_validator(mode="after")
    def _poles_fit(self) -> "FourPole":
        needed = 2.0 * self._pole.back
        if self.channel_width < needed * (1.0 - _ROUNDING):
            raise misfit(("channel_width", at_least(needed, "so that the poles fit in")))
        return self

    @property
    def _pole(self) -> Pole:
        """The pole of the quarter x ≥ 0, y ≥ 0."""
        tip = self.tip_gap / math.sqrt(8.0)
        back = tip + self.pole_width
        wall = 0.5 * self.channel_width
        return Pole(
            tip,
            self.pole_width,
            self.pole_shape == "hyperbolic",
            back if wall <= back * (1.0 + _ROUNDING) else wall,
            self._reach(back),
        )

    def section(self, refinement: int = 0) -> Section:
        """A quarter, from the centre to far along the channel."""
        level = math.sqrt(0.125)
        potentials: tuple[Mapping[str, float], ...]
        if self.drive == "opposite":
            potentials = ({"pole": 0.5, "left": 0.0, "bottom": 0.0},)
            fold = Fold(mirrored=True, parities=(-1,), upright=(-1,))
        else:
            potentials = ({"pole": level, "bottom": 0.0}, {"pole": -level, "left": 0.0})
            fold = Fold(mirrored=True, parities=(1, -1), upright=(-1, 1))
        return Section(
            mesh=pole_quarter(self._pole, refinement),
            potentials=potentials,
            electrodes=("pole",),
            length=self.tip_gap,
            height=self.depth,
            cells_per_gap=4.0,
            fold=fold,
            mirrors={"left": 0, "bottom": 1},
            plan=self._plan,
        )

    @property
    def terminals(self) -> int:
        """Two, or four in quadrature."""
        return 2 if self.drive == "opposite" else 4

    @property
    def narrowest(self) -> float:
        """The gap between neighbouring poles or the depth, whichever is less, m."""
        return min(2.0 * self._pole.waist, self.depth)

    @property
    def force_line(self) -> float:
        """Through the centre, m."""
        return 0.0

    def contact_path(self, radius: float) -> tuple[Real, Real]:
        """Around one pole, as far as half-way to the wall."""
        pole = self._pole
        x, y = around(np.array(self._outline()), min(radius, pole.waist))
        kept = y <= 0.5 * (pole.back + pole.half_width)
        return np.maximum(x[kept], 0.0), np.maximum(y[kept], 0.0)

    def _outline(self) -> tuple[tuple[float, float], ...]:
        """Outline of the first pole, anticlockwise."""
        tip, back = self._pole.tip, self._pole.back
        if self.pole_shape == "square":
            return box((tip, tip), (back, back))
        face = np.geomspace(self._pole.waist, back, 41)
        return (*((float(x), tip**2 / float(x)) for x in face), (back, back))

    def drawing(self) -> Drawing:
        """The poles and as much of the channel as surrounds them."""
        pole, wall = self._pole, 0.5 * self.channel_width
        steps = (0.0, 180.0, 0.0, 180.0) if self.drive == "opposite" else (0.0, 90.0, 180.0, 270.0)
        sides = ((1, 1), (-1, 1), (-1, -1), (1, -1))
        poles = tuple(
            Shape("electrode", tuple((i * x, j * y) for x, y in self._outline()), phase)
            for (i, j), phase in zip(sides, steps, strict=True)
        )
        wide, rim = 1.6 * pole.back, 0.1 * pole.back
        tall = min(wide, wall + rim)
        walls = tuple(
            Shape("wall", box((-wide, low), (wide, low + rim))) for low in (wall, -wall - rim)
        )
        dimensions = [
            Dimension("tip_gap", (-pole.tip, -pole.tip), (pole.tip, pole.tip)),
            Dimension("pole_width", (pole.tip, pole.back), (pole.back, pole.back)),
        ]
        if tall > wall:
            dimensions.append(Dimension("channel_width", (-wide, -wall), (-wide, wall)))
        return Drawing((-wide, wide, -tall, tall), (*poles, *walls), tuple(dimensions))
