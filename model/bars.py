"""What the layouts of parallel bars share: the bars themselves."""

from typing import Annotated, ClassVar

from model.declare import Count, Quantity
from model.layout import Face, FlatChannel


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


class OpposedBars(Bars):
    """Bars whose opposite electrodes lie on the other face of the channel."""

    electrode_faces: ClassVar[tuple[Face, ...]] = ("floor", "lid")

    @property
    def parallel_length(self) -> float:
        """Length of all pitches together, m."""
        return self.bar_count * self.channel_width

    @property
    def narrowest(self) -> float:
        """The gap between bars or the height between faces, whichever is less, m."""
        return min(self.gap, self.channel_height)
