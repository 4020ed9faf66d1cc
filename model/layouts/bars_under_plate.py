"""Bars on the floor under a lid that is one electrode."""

from typing import Literal

from model.bars import OpposedBars
from model.drawing import Strip
from model.fields.layered import Channel, Span, layered
from model.fields.section import Fold, Section


class BarsUnderPlate(OpposedBars):
    """All bars at one voltage, the whole ceiling at the opposite one."""

    layout: Literal["bars-under-plate"] = "bars-under-plate"

    def section(self, refinement: int = 0) -> Section:
        """Half a pitch, from a bar's centre to the middle of the gap."""
        half = 0.5 * self.pitch
        channel = Channel(
            ends=(0.0, half),
            height=self.channel_height,
            pitch=self.pitch,
            spans=(
                Span("bar", 0.0, 0.5 * self.bar_width),
                Span("plate", 0.0, half, on_lid=True),
            ),
            floor=self.floor,
            lid=self.lid,
        )
        piece = layered(channel, refinement)
        return Section(
            mesh=piece.mesh,
            potentials=({"bar": 0.5, "plate": -0.5},),
            electrodes=("bar", "plate"),
            length=self.pitch,
            height=self.channel_height,
            cells_per_gap=2.0,
            fold=Fold(period=self.pitch, mirrored=True),
            mirrors={"left": 0, "right": 0},
            wall_conductivities=piece.wall_conductivities,
            outsides=piece.outsides,
            rests=piece.rests,
        )

    def _lid_strips(self, ends: tuple[float, float]) -> list[Strip]:
        """The plate."""
        return [Strip(*ends, phase=180.0, on_lid=True)]
