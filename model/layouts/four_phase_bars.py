"""Bars on the floor that a wave of voltage runs along."""

from typing import Annotated, ClassVar, Literal

import numpy as np

from model.bars import Bars
from model.declare import Choice
from model.fields.layered import Channel, Span, layered
from model.fields.section import Fold, Section
from model.layout import Face


class FourPhaseBars(Bars):
    """Bars across the flow on the floor, each a quarter (or a third) of a period behind the last.

    The phasor of bar n is ½·exp(∓j·2πn/N) with N phases, so that opposite phases differ by 1 V;
    with three phases the voltage is twice the amplitude of one.
    """

    layout: Literal["four-phase-bars"] = "four-phase-bars"
    electrode_faces: ClassVar[tuple[Face, ...]] = ("floor",)
    phases: Annotated[
        Literal["four", "three"],
        Choice(
            "Phases",
            "Four: each bar a quarter of a period behind the one before, the voltage between a "
            "bar and the next but one. Three: a third behind, the voltage twice one amplitude.",
            options={"four": "four, 90° apart", "three": "three, 120° apart"},
        ),
    ] = "four"
    wave: Annotated[
        Literal["with-flow", "against-flow"],
        Choice(
            "Wave runs",
            "Direction in which the voltage wave runs along the bars. Particles with Im K below "
            "zero go with the wave, others against it.",
            options={"with-flow": "with the flow", "against-flow": "against the flow"},
        ),
    ] = "against-flow"

    def section(self, refinement: int = 0) -> Section:
        """From a bar's centre to the nearest plane about which both components are mirrored.

        That is the centre of the next bar with four phases, and the middle between the two other
        bars with three. One component is even about the first bar, the other odd.
        """
        pitch, half_bar = self.pitch, 0.5 * self.bar_width
        four = self.phases == "four"
        end = pitch if four else 1.5 * pitch
        piece = layered(
            Channel(
                ends=(0.0, end),
                height=self.channel_height,
                pitch=pitch,
                spans=(
                    Span("first", 0.0, half_bar),
                    Span("second", pitch - half_bar, min(pitch + half_bar, end)),
                ),
                floor=self.floor,
                lid=self.lid,
            ),
            refinement,
        )
        second = 0.5 * np.exp(-2j * np.pi / self.terminals)
        behind = 1.0 if self.wave == "with-flow" else -1.0
        even = {"first": 0.5, "second": float(second.real)}
        odd = {"first": 0.0, "second": behind * float(second.imag), "left": 0.0}
        if four:
            even["right"] = 0.0
        else:
            odd["right"] = 0.0
        return Section(
            mesh=piece.mesh,
            potentials=(even, odd),
            electrodes=("first", "second"),
            length=pitch,
            height=self.channel_height,
            cells_per_gap=pitch / end,
            fold=Fold(
                period=2.0 * end, mirrored=True, alternation=-1 if four else 1, parities=(1, -1)
            ),
            mirrors={"left": 0, "right": 0},
            wall_conductivities=piece.wall_conductivities,
            outsides=piece.outsides,
            rests=piece.rests,
        )

    @property
    def floor_phases(self) -> tuple[float, ...]:
        """Each bar behind the one before, or ahead if the wave runs against the flow."""
        step = (-360.0 if self.wave == "with-flow" else 360.0) / self.terminals
        return tuple(index * step % 360.0 for index in range(self.terminals))

    @property
    def terminals(self) -> int:
        """Four or three."""
        return 4 if self.phases == "four" else 3

    @property
    def parallel_length(self) -> float:
        """Length of all gaps together, one less than bars, m."""
        return (self.bar_count - 1) * self.channel_width

    @property
    def narrowest(self) -> float:
        """The gap, m."""
        return self.gap
