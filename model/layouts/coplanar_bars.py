"""Interdigitated bars on the floor."""

from typing import Annotated, Literal

from model.declare import Count, Quantity
from model.fields.layered import Channel, Span, layered
from model.fields.section import Fold, Section
from model.layout import Layout


class CoplanarBars(Layout):
    """Bars across the flow on the floor, neighbours at opposite voltages."""

    layout: Literal["coplanar-bars"] = "coplanar-bars"
    bar_width: Annotated[
        float,
        Quantity(
            "Bar width",
            "Of each electrode, along the flow.",
            unit="um",
            low="0.5 um",
            high="2 mm",
        ),
    ]
    gap: Annotated[
        float,
        Quantity(
            "Gap",
            "Between neighbouring bars, edge to edge.",
            unit="um",
            low="0.5 um",
            high="2 mm",
        ),
    ]
    bar_count: Annotated[
        int,
        Count("Bars", "Across the flow; there is one gap less than bars.", low=2, high=1000),
    ]

    def section(self, refinement: int = 0) -> Section:
        """Half a pitch, from a bar's centre to the middle of the gap, where φ is 0."""
        pitch = self.bar_width + self.gap
        piece = layered(
            Channel(
                ends=(0.0, 0.5 * pitch),
                height=self.channel_height,
                pitch=pitch,
                spans=(Span("bar", 0.0, 0.5 * self.bar_width),),
                floor=self.floor,
                lid=self.lid,
            ),
            refinement,
        )
        return Section(
            mesh=piece.mesh,
            potentials={"bar": 0.5, "right": 0.0},
            electrodes=("bar",),
            length=pitch,
            height=self.channel_height,
            cells_per_gap=2.0,
            fold=Fold(period=pitch, mirrored=True, alternation=-1, parity=1),
            mirrors={"left": 0, "right": 0},
            wall_conductivities=piece.wall_conductivities,
            outsides=piece.outsides,
            rests=piece.rests,
        )

    @property
    def parallel_length(self) -> float:
        """Length of all gaps together, m."""
        return (self.bar_count - 1) * self.channel_width

    @property
    def narrowest(self) -> float:
        """The gap, m."""
        return self.gap
