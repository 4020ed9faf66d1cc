"""Bars on the floor that face bars on the lid."""

from typing import Annotated, Literal

from pydantic import model_validator

from model.bars import OpposedBars
from model.declare import Quantity, misfit
from model.drawing import Dimension, Strip
from model.fields.layered import Channel, Span, layered
from model.fields.section import Fold, Section
from model.quantity import format_quantity

#: Share of half a pitch by which rounding may move an offset.
_ROUNDING = 1e-9


class FacingBars(OpposedBars):
    """All bars of the floor at one voltage, all bars of the lid at the opposite one."""

    layout: Literal["facing-bars"] = "facing-bars"
    offset: Annotated[
        float,
        Quantity(
            "Offset",
            "Of the lid's bars against the floor's, along the flow. Shifting by a whole pitch "
            "changes nothing, so that it stays below the pitch; half a pitch sets bars over gaps.",
            unit="um",
            low="0 um",
            high="1 mm",
        ),
    ] = 0.0

    @model_validator(mode="after")
    def _offset_below_the_pitch(self) -> "FacingBars":
        if self.offset >= self.pitch:
            pitch = format_quantity(self.pitch, "um")
            raise misfit(("offset", f"must be below the pitch, {pitch}, after which it repeats"))
        return self

    def section(self, refinement: int = 0) -> Section:
        """Half a pitch where mirror planes stand, else a whole one that is joined to itself."""
        pitch, half_bar = self.pitch, 0.5 * self.bar_width
        steps = 2 * self.offset / pitch
        mirrored = abs(steps - round(steps)) < _ROUNDING
        centre = 0.5 * pitch * (round(steps) % 2) if mirrored else self.offset
        channel = Channel(
            ends=(0.0, 0.5 * pitch if mirrored else pitch),
            height=self.channel_height,
            pitch=pitch,
            spans=(
                Span("floor-bar", -half_bar, half_bar),
                Span("lid-bar", centre - half_bar, centre + half_bar, on_lid=True),
            ),
            floor=self.floor,
            lid=self.lid,
            periodic=not mirrored,
        )
        piece = layered(channel, refinement)
        return Section(
            mesh=piece.mesh,
            potentials=({"floor-bar": 0.5, "lid-bar": -0.5},),
            electrodes=("floor-bar", "lid-bar"),
            length=pitch,
            height=self.channel_height,
            cells_per_gap=2.0 if mirrored else 1.0,
            fold=Fold(period=pitch, mirrored=mirrored),
            mirrors={"left": 0, "right": 0} if mirrored else {},
            wall_conductivities=piece.wall_conductivities,
            outsides=piece.outsides,
            rests=piece.rests,
            joined=None if mirrored else ("left", "right"),
        )

    def _lid_strips(self, ends: tuple[float, float]) -> list[Strip]:
        """Bars of the lid, shifted against the floor's."""
        half, count = 0.5 * self.bar_width, round((ends[1] - ends[0]) / self.pitch)
        centres = [self.offset + index * self.pitch for index in range(-1, count + 1)]
        return [Strip(x - half, x + half, phase=180.0, on_lid=True) for x in centres]

    def _lid_dimensions(self) -> list[Dimension]:
        """The offset, where there is one, between the centres of two bars."""
        if self.offset == 0.0:
            return []
        return [Dimension("offset", (0.0, self.channel_height), (self.offset, self.channel_height))]
