"""What the layouts of parallel bars share: the bars themselves."""

import math
from typing import Annotated, ClassVar

from model.declare import Count, Quantity
from model.drawing import Dimension, Drawing, Strip, channel_drawing
from model.layout import Face, FlatChannel

#: A drawing is at least this long over its height, if so many bars suffice.
_LENGTH_TO_HEIGHT = 1.3
_MOST_DRAWN = 8


class Bars(FlatChannel):
    """Bars across the flow, one after another along it, all of one width and one gap."""

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
        Count("Bars", "Across the flow, on each face that carries bars.", low=2, high=1000),
    ]

    @property
    def pitch(self) -> float:
        """From the centre of a bar to that of the next, m."""
        return self.bar_width + self.gap

    @property
    def floor_phases(self) -> tuple[float, ...]:
        """Phases of the bars on the floor in turn, degrees."""
        return (0.0, 180.0)

    def drawing(self) -> Drawing:
        """Whole pitches with their bars, so many that the length is not below the height."""
        ends = self._drawn_ends()
        pitch, half, turn = self.pitch, 0.5 * self.bar_width, self.floor_phases
        floor = [
            Strip(index * pitch - half, index * pitch + half, turn[index % len(turn)])
            for index in range(round((ends[1] - ends[0]) / pitch))
        ]
        dimensions = [
            Dimension("bar_width", (-half, 0.0), (half, 0.0)),
            Dimension("gap", (half, 0.0), (pitch - half, 0.0)),
            Dimension("channel_height", (ends[1], 0.0), (ends[1], self.channel_height)),
            *self._lid_dimensions(),
        ]
        strips = [*floor, *self._lid_strips(ends)]
        return channel_drawing(ends, self.channel_height, strips, dimensions)

    def _drawn_ends(self) -> tuple[float, float]:
        """From mid-gap to mid-gap, over whole turns of the phases."""
        turn = max(2, len(self.floor_phases))
        wanted = math.ceil(_LENGTH_TO_HEIGHT * self.channel_height / (turn * self.pitch))
        count = turn * min(max(wanted, 1), max(_MOST_DRAWN // turn, 1))
        return -0.5 * self.pitch, (count - 0.5) * self.pitch

    def _lid_strips(self, ends: tuple[float, float]) -> list[Strip]:
        """Electrodes on the lid between `ends`; none, unless a layout says so."""
        return []

    def _lid_dimensions(self) -> list[Dimension]:
        """Lengths to be written at the lid; none, unless a layout says so."""
        return []


class OpposedBars(Bars):
    """Bars whose opposite electrodes lie on the other face of the channel."""

    electrode_faces: ClassVar[tuple[Face, ...]] = ("floor", "lid")

    @property
    def floor_phases(self) -> tuple[float, ...]:
        """All alike; the opposite electrodes lie on the lid."""
        return (0.0,)

    @property
    def parallel_length(self) -> float:
        """Length of all pitches together, m."""
        return self.bar_count * self.channel_width

    @property
    def narrowest(self) -> float:
        """The gap between bars or the height between faces, whichever is less, m."""
        return min(self.gap, self.channel_height)
