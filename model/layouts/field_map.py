"""Any chip whose field a field solver has exported as a table."""

from dataclasses import replace
from typing import Annotated, ClassVar, Literal

import numpy as np

from model.declare import Count, Digest, FileName, Flag, Quantity
from model.drawing import Dimension, Drawing, Shape, box
from model.errors import DesignError, FieldError
from model.fields.field_header import FieldTableError
from model.fields.field_points import arranged
from model.fields.field_table import read_field_table
from model.fields.layered import Channel
from model.fields.lines import Line
from model.fields.map_section import map_section
from model.fields.patterns import ChipPatterns
from model.fields.section import Section
from model.files import FileError, Files, digest_of, no_files
from model.layout import Face, FlatChannel

INTERFACE = (
    "A field map does not tell where metal is: what double layers take is reckoned for electrodes "
    "of the width given that carry the same current everywhere; electro-osmosis and the highest "
    "voltage across double layers and films are not known, and no limit of theirs is checked."
)
ENERGY = (
    "Resistance and current follow from the energy of the field map, as if it held all liquid "
    "that carries current."
)


class FieldMap(FlatChannel):
    """The field of a section as a file has it; heat and flow are solved where it holds all liquid.

    Coordinates are those of the file, x along the flow, y from the floor and, if it has three, z
    across the channel.
    """

    layout: Literal["field-map"] = "field-map"
    #: A map does not tell where metal is, so that either face may be the worst to touch.
    electrode_faces: ClassVar[tuple[Face, ...]] = ("floor", "lid")
    file: Annotated[
        str,
        FileName(
            "Field map",
            "CSV file with places and field, in the profile's folder or chosen here; the README "
            "tells its format.",
            longest=120,
            accept=".csv,.txt,.tsv,.dat",
        ),
    ] = ""
    digest: Annotated[
        str,
        Digest(
            "Digest of the map",
            "Tells the contents of the file, so that a design never meets another map; filled in "
            "when the file is chosen. Clear it to take the file as it is.",
            detail=True,
        ),
    ] = ""
    window_start: Annotated[
        float,
        Quantity(
            "Window from",
            "Least x of the part of the map that is used.",
            unit="um",
            low="-50 mm",
            high="50 mm",
        ),
    ] = 0.0
    window_length: Annotated[
        float,
        Quantity(
            "Window length",
            "Along the flow: whole repeats of the electrodes, or all that has a field.",
            unit="um",
            low="1 um",
            high="50 mm",
        ),
    ] = 80e-6
    periodic: Annotated[
        bool,
        Flag(
            "Window repeats",
            "Yes: the window is whole repeats along the flow. No: its ends are taken as mirror "
            "planes for heat and flow, and there is no field beyond.",
        ),
    ] = True
    repeats: Annotated[
        int,
        Count("Windows along the flow", "They carry current in parallel.", low=1, high=10_000),
    ] = 1
    terminal_count: Annotated[
        int,
        Count(
            "Terminals",
            "Phases of the drive, each fed on its own; the voltage is between opposite ones.",
            low=2,
            high=8,
        ),
    ] = 2
    narrowest_gap: Annotated[
        float,
        Quantity(
            "Narrowest gap",
            "Smallest opening between electrodes; only the caution on large particles uses it.",
            unit="um",
            low="0.5 um",
            high="10 mm",
            detail=True,
        ),
    ] = 40e-6
    electrode_width: Annotated[
        float,
        Quantity(
            "Electrode width",
            "Metal of one phase in each window, along the flow, which the double layers stand on.",
            unit="um",
            low="0.5 um",
            high="10 mm",
        ),
    ] = 40e-6
    cell_constant: Annotated[
        float | None,
        Quantity(
            "Cell constant",
            "Resistance between the terminals times the liquid's conductivity. Usually it follows "
            "from the energy of the field in the map.",
            unit="1/m",
            low="0.001 1/m",
            high="1e6 1/m",
            optional=True,
            detail=True,
        ),
    ] = None
    plane: Annotated[
        float | None,
        Quantity(
            "Plane across the channel",
            "z of the section in a map of three dimensions, a plane of symmetry; usually its "
            "middle.",
            unit="um",
            low="-50 mm",
            high="50 mm",
            optional=True,
            detail=True,
        ),
    ] = None

    def section(self, refinement: int = 0) -> Section:
        """Without its file there is none: raises :class:`DesignError`."""
        return self.section_from(no_files, refinement)

    def section_from(self, files: Files, refinement: int = 0) -> Section:
        """The window with the field nearest to the map's that has a potential."""
        try:
            if not self.file:
                raise FileError("choose a field map: a CSV file that a field solver exported")
            table = read_field_table(files(self.file, self.digest))
            section = map_section(arranged(table, self.plane), self._channel, refinement)
        except (FileError, FieldTableError) as problem:
            raise DesignError([FieldError("chip.file", self.file, str(problem))]) from None
        remarks = (*section.remarks, INTERFACE)
        factor = None
        if self.cell_constant is None:
            remarks = (*remarks, ENERGY)
        else:
            factor = 1.0 / (self.cell_constant * self.parallel_length)
        width = 0.5 * self.electrode_width
        return replace(section, cell_factor=factor, double_layer_width=width, remarks=remarks)

    @property
    def needed_file(self) -> tuple[str, str] | None:
        """The map."""
        return (self.file, self.digest) if self.file else None

    def settled(self, files: Files) -> "FieldMap":
        """The layout with the digest of its file."""
        if self.digest or not self.file:
            return self
        try:
            return self.model_copy(update={"digest": digest_of(files(self.file, ""))})
        except FileError:
            return self  # what is wrong with it is told when the field is wanted

    def drawing(self) -> Drawing:
        """The window between floor and lid; a map does not tell where metal is."""
        left, right = self.window_start, self.window_start + self.window_length
        top, wall = self.channel_height, 0.2 * self.channel_height
        return Drawing(
            (left, right, -wall, top + wall),
            (
                Shape("wall", box((left, -wall), (right, 0.0))),
                Shape("wall", box((left, top), (right, top + wall))),
            ),
            (
                Dimension("window_length", (left, 0.0), (right, 0.0)),
                Dimension("channel_height", (left, 0.0), (left, top)),
            ),
        )

    @property
    def terminals(self) -> int:
        """As declared."""
        return self.terminal_count

    @property
    def parallel_length(self) -> float:
        """Of all windows together, each as long as the channel is wide, m."""
        return self.repeats * self.channel_width

    @property
    def narrowest(self) -> float:
        """As declared, m."""
        return self.narrowest_gap

    def contact_lines(self, patterns: ChipPatterns, radius: float) -> tuple[Line, ...]:
        """Lines a radius from floor and lid, or as near to that as the map reaches."""
        low, high = patterns.reach
        heights = np.clip(self.contact_heights(radius), low, high)
        return tuple(patterns.line(float(height)) for height in heights)

    @property
    def _channel(self) -> Channel:
        """The window of the map between floor and lid."""
        ends = (self.window_start, self.window_start + self.window_length)
        height, length = self.channel_height, self.window_length
        return Channel(ends, height, length, (), self.floor, self.lid, self.periodic)
