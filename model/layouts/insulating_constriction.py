"""An insulating obstacle in the middle of a channel between two remote electrodes."""

from typing import Annotated, Literal

import numpy as np
from pydantic import model_validator

from model.arrays import Real
from model.declare import Choice, Quantity, misfit
from model.drawing import Dimension, Drawing, Shape, box
from model.fields.obstacles import post_quarter, ridge_quarter
from model.fields.section import Fold, Section
from model.planar import Planar, around, at_least
from model.quantity import format_quantity

#: A drawing shows so many openings, or lengths of the obstacle, on either side of the middle.
_NEAR = 3.0


class InsulatingConstriction(Planar):
    """A tooth on either side wall, or a round post, that squeezes the field between electrodes.

    The electrodes stand across the whole channel. φ is odd about x = 0 and even about y = 0, so
    that a quarter is solved, one electrode at ½ and the middle at 0.
    """

    layout: Literal["insulating-constriction"] = "insulating-constriction"
    electrode_spacing: Annotated[
        float,
        Quantity(
            "Electrode spacing",
            "Between the two electrodes, along the channel, with the obstacle half-way.",
            unit="mm",
            low="50 um",
            high="200 mm",
        ),
    ] = 10e-3
    obstacle: Annotated[
        Literal["ridge", "post"],
        Choice(
            "Obstacle",
            "Ridge: a block on either side wall that leaves an opening in the middle. Post: one "
            "round post in the middle that leaves an opening on either side.",
            options={"ridge": "ridge from both walls", "post": "round post"},
        ),
    ] = "ridge"
    opening: Annotated[
        float,
        Quantity(
            "Opening",
            "Width of the liquid where it is narrowest: between the ridges, or between the post "
            "and either wall.",
            unit="um",
            low="1 um",
            high="20 mm",
        ),
    ] = 50e-6
    obstacle_length: Annotated[
        float,
        Quantity(
            "Ridge length",
            "Of the narrow part, along the flow. A post is as long as it is wide.",
            unit="um",
            low="1 um",
            high="20 mm",
            only_with=("obstacle", "ridge"),
        ),
    ] = 100e-6
    channel_width: Annotated[
        float,
        Quantity(
            "Channel width",
            "Across the flow, between insulating side walls.",
            unit="mm",
            low="10 um",
            high="50 mm",
        ),
    ] = 0.5e-3

    @model_validator(mode="after")
    def _obstacle_fits(self) -> "InsulatingConstriction":
        if self._protrusion <= 0.0:
            share = 1.0 if self.obstacle == "ridge" else 0.5
            width = format_quantity(share * self.channel_width, "um")
            whole = "the channel width" if self.obstacle == "ridge" else "half the channel width"
            raise misfit(("opening", f"must be below {whole}, {width}"))
        needed = 2.0 * self._half_length + self.channel_width
        if self.electrode_spacing < needed:
            why = "the obstacle and a channel width, so that the electrodes are remote"
            raise misfit(("electrode_spacing", at_least(needed, why)))
        return self

    @property
    def _protrusion(self) -> float:
        """How far a tooth stands out, or the radius of the post, m."""
        share = 0.5 if self.obstacle == "ridge" else 1.0
        return 0.5 * self.channel_width - share * self.opening

    @property
    def _half_length(self) -> float:
        """Half the length of the obstacle along the flow, m."""
        return 0.5 * self.obstacle_length if self.obstacle == "ridge" else self._protrusion

    def section(self, refinement: int = 0) -> Section:
        """A quarter, from the middle to one electrode."""
        reach = 0.5 * self.electrode_spacing
        if self.obstacle == "ridge":
            mesh = ridge_quarter(
                self._half_length,
                0.5 * self.opening,
                0.5 * self.channel_width,
                reach,
                refinement,
            )
        else:
            mesh = post_quarter(self._protrusion, self.opening, reach, refinement)
        return Section(
            mesh=mesh,
            potentials=({"left": 0.0, "end": -0.5},),
            electrodes=("end",),
            length=self.opening,
            height=self.depth,
            cells_per_gap=4.0,
            fold=Fold(mirrored=True, parities=(-1,), upright=(1,)),
            mirrors={"left": 0, "bottom": 1},
            plan=self._plan,
        )

    @property
    def narrowest(self) -> float:
        """The opening or the depth, whichever is less, m."""
        return min(self.opening, self.depth)

    @property
    def force_line(self) -> float:
        """Along the middle of an opening, m."""
        return 0.0 if self.obstacle == "ridge" else 0.5 * (self.channel_width - self.opening)

    def contact_path(self, radius: float) -> tuple[Real, Real]:
        """Around a quarter of the obstacles, in the liquid."""
        near = min(radius, 0.5 * self.opening)
        x, y = around(np.array(self._outlines()[0]), near)
        highest = 0.5 * self.channel_width - min(near, 0.5 * self._protrusion)
        kept = (x >= 0.0) & (y >= 0.0) & (y <= highest + 1e-9 * near)
        return x[kept], y[kept]

    def _outlines(self) -> tuple[tuple[tuple[float, float], ...], ...]:
        """Outline of each obstacle, anticlockwise."""
        wall, half = 0.5 * self.channel_width, self._half_length
        if self.obstacle == "ridge":
            low = 0.5 * self.opening
            return (box((-half, low), (half, wall)), box((-half, -wall), (half, -low)))
        turns = np.linspace(0.0, 2.0 * np.pi, 97)[:-1]
        return (tuple((float(half * np.cos(t)), float(half * np.sin(t))) for t in turns),)

    def drawing(self) -> Drawing:
        """The obstacle and as much of the channel as lets the field spread again."""
        wall, half, end = 0.5 * self.channel_width, self._half_length, 0.5 * self.electrode_spacing
        rim = 0.1 * wall
        near = _NEAR * max(self.opening, 2.0 * half)  # beyond, nothing changes much
        wide = min(end + rim, half + 2.0 * wall, 1.5 * near)
        tall = min(wall + rim, near)
        solid = tuple(Shape("obstacle", outline) for outline in self._outlines())
        walls = tuple(
            Shape("wall", box((-end - rim, low), (end + rim, low + rim)))
            for low in (wall, -wall - rim)
        )
        electrodes = (
            Shape("electrode", box((-end - rim, -wall), (-end, wall)), 0.0),
            Shape("electrode", box((end, -wall), (end + rim, wall)), 180.0),
        )
        narrow = self.force_line - 0.5 * self.opening
        dimensions = [Dimension("opening", (0.0, narrow), (0.0, narrow + self.opening))]
        if tall > wall:
            dimensions.insert(0, Dimension("channel_width", (-wide, -wall), (-wide, wall)))
        if self.obstacle == "ridge":
            low = 0.5 * self.opening
            dimensions.append(Dimension("obstacle_length", (-half, low), (half, low)))
        if wide > end:
            dimensions.append(Dimension("electrode_spacing", (-end, 0.0), (end, 0.0)))
        window = (-wide, wide, -tall, tall)
        return Drawing(window, (*solid, *walls, *electrodes), tuple(dimensions))
