"""What every electrode layout provides; the layouts themselves stand in ``model/layouts/``."""

from abc import ABC, abstractmethod
from typing import TYPE_CHECKING, Annotated, ClassVar, Literal

from model.declare import Part, Quantity
from model.drawing import Drawing
from model.fields.lines import Line
from model.fields.section import Section
from model.files import Files
from model.walls import Wall

if TYPE_CHECKING:
    from model.fields.patterns import ChipPatterns

#: A face of the channel.
Face = Literal["floor", "lid"]


class Layout(Part, ABC):
    """A chip: electrodes, channel and walls. Only what is solved for once stands here.

    A layout adds its own fields, a ``layout`` literal, and the methods below; it knows nothing
    of liquids, particles or voltages.
    """

    layout: str
    #: Whether x and y span the cross-section, y up from the floor, or the plan, y across the
    #: channel and everything uniform over its depth.
    view: ClassVar[Literal["section", "plan"]] = "section"
    channel_width: Annotated[
        float,
        Quantity(
            "Channel width",
            "Across the flow; also the wetted length of each bar.",
            unit="mm",
            low="10 um",
            high="50 mm",
        ),
    ]
    floor: Wall = Wall(material="glass", thickness=700e-6, outside="held")
    lid: Wall = Wall(material="pdms", thickness=4e-3, outside="still-air")

    @abstractmethod
    def section(self, refinement: int = 0) -> Section:
        """Mesh and named parts of the smallest piece that symmetry leaves, for the solves.

        `refinement` adds levels of uniform refinement, for convergence tests.
        """

    @abstractmethod
    def drawing(self) -> Drawing:
        """What the chip looks like, over whole repeats, in the coordinates of its patterns."""

    def section_from(self, files: Files, refinement: int = 0) -> Section:
        """The same for layouts that need the contents of a file; others need none.

        Raises
        ------
        DesignError
            If a file cannot be used.
        """
        return self.section(refinement)

    @property
    def needed_file(self) -> tuple[str, str] | None:
        """Name and digest of the file that the layout needs; the digest may be empty."""
        return None

    def settled(self, files: Files) -> "Layout":
        """The layout with the digest of the file that it needs, so that it tells its contents."""
        return self

    @property
    @abstractmethod
    def height(self) -> float:
        """Depth of the liquid between floor and lid, m."""

    @property
    def terminals(self) -> int:
        """Number of phases, each fed by a terminal of its own."""
        return 2

    @property
    @abstractmethod
    def parallel_length(self) -> float:
        """Total length of what carries current in parallel, m.

        Of the gaps if neighbours are opposite, of the pitches if floor and lid are.
        """

    @property
    @abstractmethod
    def narrowest(self) -> float:
        """Smallest opening that a particle meets between electrodes, m."""

    @abstractmethod
    def force_level(self, height: float) -> float:
        """Place y of the line where forces are taken, for centres at a height above the floor."""

    @abstractmethod
    def contact_lines(self, patterns: "ChipPatterns", radius: float) -> tuple[Line, ...]:
        """Patterns of this chip where the centre of a touching sphere meets the strongest field."""


class FlatChannel(Layout):
    """Electrodes on floor or lid of a flat channel, seen in cross-section."""

    #: Faces of the channel that carry electrodes.
    electrode_faces: ClassVar[tuple[Face, ...]]
    channel_height: Annotated[
        float,
        Quantity(
            "Channel height",
            "Liquid depth between floor and lid.",
            unit="um",
            low="5 um",
            high="2 mm",
        ),
    ]

    @property
    def height(self) -> float:
        """The channel height, m."""
        return self.channel_height

    def force_level(self, height: float) -> float:
        """The height itself, m."""
        return height

    def contact_lines(self, patterns: "ChipPatterns", radius: float) -> tuple[Line, ...]:
        """Lines along the faces with electrodes, a radius away."""
        return tuple(patterns.line(height) for height in self.contact_heights(radius))

    def contact_heights(self, radius: float) -> tuple[float, ...]:
        """Heights of the centre of a sphere that touches a face with electrodes, m.

        A sphere that does not fit between floor and lid counts as half-way.
        """
        low = min(radius, 0.5 * self.channel_height)
        heights: dict[Face, float] = {"floor": low, "lid": self.channel_height - low}
        return tuple(heights[face] for face in self.electrode_faces)
