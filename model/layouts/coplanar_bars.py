"""Interdigitated bars on the floor."""

from typing import ClassVar, Literal

from model.bars import Bars
from model.fields.layered import Channel, Span, layered
from model.fields.section import Fold, Section
from model.layout import Face


class CoplanarBars(Bars):
    """Bars across the flow on the floor, neighbours at opposite voltages."""

    layout: Literal["coplanar-bars"] = "coplanar-bars"
    electrode_faces: ClassVar[tuple[Face, ...]] = ("floor",)

    def section(self, refinement: int = 0) -> Section:
        """Half a pitch, from a bar's centre to the middle of the gap, where φ is 0."""
        piece = layered(
            Channel(
                ends=(0.0, 0.5 * self.pitch),
                height=self.channel_height,
                pitch=self.pitch,
                spans=(Span("bar", 0.0, 0.5 * self.bar_width),),
                floor=self.floor,
                lid=self.lid,
            ),
            refinement,
        )
        return Section(
            mesh=piece.mesh,
            potentials=({"bar": 0.5, "right": 0.0},),
            electrodes=("bar",),
            length=self.pitch,
            height=self.channel_height,
            cells_per_gap=2.0,
            fold=Fold(period=self.pitch, mirrored=True, alternation=-1),
            mirrors={"left": 0, "right": 0},
            wall_conductivities=piece.wall_conductivities,
            outsides=piece.outsides,
            rests=piece.rests,
        )

    @property
    def parallel_length(self) -> float:
        """Length of all gaps together, one less than bars, m."""
        return (self.bar_count - 1) * self.channel_width

    @property
    def narrowest(self) -> float:
        """The gap, m."""
        return self.gap
