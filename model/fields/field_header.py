"""What the head of a field table says: its columns, their units, and the drive it belongs to."""

import math
import re
from collections.abc import Sequence
from dataclasses import dataclass

from model.quantity import QuantityError, parse_quantity


class FieldTableError(ValueError):
    """A file that is no usable field map; the message goes on where the file's name ends."""


@dataclass(frozen=True)
class Column:
    """What a column holds: ``x``, ``y``, ``z``, or a part of ``ex``, ``ey``, ``ez``."""

    name: str
    part: str = ""

    def __str__(self) -> str:
        told = self.name.capitalize() if self.name.startswith("e") else self.name
        return f"{told} imaginary" if self.part == "imaginary" else told


@dataclass(frozen=True)
class Header:
    """Columns of a table in order, and what turns their numbers into SI and per volt.

    Parameters
    ----------
    line
        Of the file, where the columns are named.
    separator
        Between values.
    columns, scales
        One for each column; lengths come out in m, fields in 1/m.
    """

    line: int
    separator: str
    columns: tuple[Column, ...]
    scales: tuple[float, ...]

    @property
    def names(self) -> tuple[str, ...]:
        """Columns in words."""
        return tuple(map(str, self.columns))

    @property
    def axes(self) -> str:
        """Coordinates, ``xy`` or ``xyz``."""
        return "xyz" if Column("z") in self.columns else "xy"

    @property
    def moving(self) -> bool:
        """Whether the field has imaginary parts."""
        return any(column.part == "imaginary" for column in self.columns)


def read_header(rows: Sequence[tuple[int, str]]) -> Header:
    """Find the row that names the columns, and the comments that state the drive.

    Parameters
    ----------
    rows
        Number and text of each line that is not blank.

    Raises
    ------
    FieldTableError
        If a column or unit is unknown, one is missing, or the drive is not stated.
    """
    line, text = next(((k, row) for k, row in rows if row[0] not in "#%"), (0, ""))
    if not text:
        raise FieldTableError("is empty")
    separator = next((mark for mark in "\t;" if mark in text), ",")
    cells = [cell.strip().strip('"').strip() for cell in text.split(separator)]
    if not cells[-1]:
        cells.pop()
    if all(re.fullmatch(r"[-+0-9.,eE]+", cell) for cell in cells):
        raise FieldTableError(f"line {line}: {_NAMED}")
    found = [_column(line, cell) for cell in cells]
    columns = tuple(column for column, _ in found)
    _complete(line, columns)
    comments = [(k, row.lstrip("#% \t")) for k, row in rows if row[0] in "#%"]
    drive = _drive(comments)
    scales = [_scale(line, column, unit, drive) for column, unit in found]
    return Header(line, separator, columns, tuple(scales))


_NAMED = (
    "the first row must name the columns and their units, as in "
    "“x (um), y (um), Ex (V/m), Ey (V/m)”"
)
_CELL = re.compile(r"(.+?)\s*[(\[]\s*(.+?)\s*[)\]]")
_NAME = re.compile(
    r"(?P<before>re|real|im|imag|imaginary)?[\s_.]*(?P<name>[xyz]|e[xyz])[\s_.,]*"
    r"(?P<after>re|real|im|imag|imaginary)?"
)


def _column(line: int, cell: str) -> tuple[Column, str]:
    """What a cell of the header names, and its unit."""
    match = _CELL.fullmatch(cell)
    words, unit = match.groups() if match else (cell, "")
    name = _NAME.fullmatch(words.lower())
    shown = cell[:30] if cell.isprintable() else "…"
    if name is None or (name["before"] and name["after"]):
        raise FieldTableError(
            f"line {line}: unknown column “{shown}”; the columns are x, y, perhaps z, and Ex, Ey, "
            "Ez, each with its unit, fields out of phase also with “Ex imaginary” and so on"
        )
    if match is None:
        raise FieldTableError(f"line {line}: the column “{shown}” needs its unit in brackets")
    part = name["before"] or name["after"] or "re"
    if not name["name"].startswith("e"):
        if name["before"] or name["after"]:
            raise FieldTableError(f"line {line}: a place has no real or imaginary part: “{shown}”")
        return Column(name["name"]), unit
    return Column(name["name"], "imaginary" if part.startswith("im") else "real"), unit


def _complete(line: int, columns: tuple[Column, ...]) -> None:
    """Every column once, each coordinate with its component."""
    for column in columns:
        if columns.count(column) > 1:
            raise FieldTableError(f"line {line}: the column {column} stands there twice")
    axes = "xyz" if Column("z") in columns or Column("ez", "real") in columns else "xy"
    needed = [Column(axis) for axis in axes] + [Column(f"e{axis}", "real") for axis in axes]
    if any(column.part == "imaginary" for column in columns):
        needed += [Column(f"e{axis}", "imaginary") for axis in axes]
    missing = [str(column) for column in needed if column not in columns]
    if missing:
        raise FieldTableError(f"line {line}: the column {missing[0]} is missing")


@dataclass(frozen=True)
class _Drive:
    """Root-mean-square over stated voltage, times it; and what the field's numbers are."""

    rms: float
    field: float


#: Words for what a voltage or field states, and rms over it for a sine. A static one is as good
#: as rms for both: the field is proportional to the voltage.
_MEASURES = {
    "peak to peak": 1 / (2 * math.sqrt(2)), "peak-to-peak": 1 / (2 * math.sqrt(2)),
    "pp": 1 / (2 * math.sqrt(2)), "peak": 1 / math.sqrt(2), "amplitude": 1 / math.sqrt(2),
    "rms": 1.0, "static": 1.0,
}  # fmt: skip
_STATED = re.compile(r"(voltage|field)\s*[:=]\s*(.*?)\s*[.;,]*", re.IGNORECASE)
_VOLTAGE = re.compile(rf"(.*?)\s*({'|'.join(_MEASURES)})?", re.IGNORECASE)
_EXAMPLE = "such as “# voltage: 2 V peak to peak” (or peak, rms, static)"


def _drive(comments: Sequence[tuple[int, str]]) -> _Drive | None:
    """The drive that comment lines state; None if none does."""
    stated: dict[str, tuple[int, str]] = {}
    for k, text in comments:
        match = _STATED.fullmatch(text.strip())
        if match is None:
            continue
        key, value = match[1].lower(), match[2]
        if stated.setdefault(key, (k, value))[1] != value:
            raise FieldTableError(f"line {k}: states another {key} than line {stated[key][0]}")
    if "voltage" not in stated:
        return None
    k, text = stated["voltage"]
    match = _VOLTAGE.fullmatch(text)
    measure = match[2].lower() if match and match[2] else ""
    if match is None or not measure:
        raise FieldTableError(f"line {k}: the voltage needs number, unit and measure, {_EXAMPLE}")
    try:
        voltage = parse_quantity(match[1], "V")
    except QuantityError as problem:
        raise FieldTableError(f"line {k}: the voltage {problem}") from None
    if not voltage > 0:
        raise FieldTableError(f"line {k}: the voltage must be above zero, {_EXAMPLE}")
    return _Drive(voltage * _MEASURES[measure], _field_measure(stated, measure))


def _field_measure(stated: dict[str, tuple[int, str]], measure: str) -> float:
    """Root-mean-square over the field's numbers: as the voltage's, amplitudes if peak to peak."""
    if "field" in stated:
        k, text = stated["field"]
        if text.lower() not in ("peak", "amplitude", "rms") or measure == "static":
            raise FieldTableError(
                f"line {k}: the field can be stated as peak or rms, and only of a sine"
            )
        return _MEASURES[text.lower()]
    of_voltage = _MEASURES[measure]
    return of_voltage if of_voltage > 0.5 else _MEASURES["peak"]


def _scale(line: int, column: Column, unit: str, drive: _Drive | None) -> float:
    """From numbers in the file to m, or to 1/m per volt."""
    if not column.part:
        scale = _in(unit, "m")
        if scale is None:
            raise FieldTableError(
                f"line {line}: “{unit[:20]}” is no unit of length for {column}, such as um or m"
            )
        return scale
    per_volt, absolute = _in(unit, "1/m"), _in(unit, "V/m")
    if per_volt is not None:
        if drive is not None:
            raise FieldTableError(
                f"line {line}: {column} in {unit} is per volt already; leave out the voltage or "
                "give the field in V/m"
            )
        return per_volt
    if absolute is None:
        raise FieldTableError(
            f"line {line}: “{unit[:20]}” is no unit of field for {column}, such as V/m, or 1/m "
            "for a field per volt"
        )
    if drive is None:
        raise FieldTableError(
            "does not say which voltage between opposite electrodes the field belongs to; add a "
            f"line {_EXAMPLE}"
        )
    return absolute * drive.field / drive.rms


def _in(unit: str, wanted: str) -> float | None:
    """SI value of one `unit`; None if it is none of that kind."""
    try:
        return parse_quantity(f"1 {unit}", wanted)
    except QuantityError:
        return None
