"""Tables of a field that any field solver exported: bytes of a CSV file in, numbers out.

The file has a row that names columns and units, such as ``x (um), y (um), Ex (V/m), Ey (V/m)``,
rows of numbers, and comment lines that begin with ``#`` or ``%``. One of them states the drive
that the field belongs to, ``# voltage: 2 V peak to peak``. Whatever is wrong is told in words, with
its line.
"""

import re
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from model.arrays import Phasor, Real
from model.fields.cells import Index
from model.fields.field_header import (
    Column,
    FieldTableError,
    Header,
    read_header,
)

#: Most bytes and most rows of numbers that are read.
MAX_BYTES, MOST_ROWS = 20 * 1024 * 1024, 200_000
#: Fewest points that make a map.
FEWEST = 25
#: Two rows of one place may differ by this much of the largest field: rounding of an export.
SAME_FIELD = 1e-4
#: Places nearer than this, over the extent of the map, are one.
SAME_PLACE = 1e-7
#: Imaginary parts below this share of the field are rounding once all is turned into phase.
IN_PHASE = 1e-6


@dataclass(frozen=True, eq=False, repr=False)
class FieldTable:
    """A field at points, per volt between electrodes of opposite phase.

    Parameters
    ----------
    points
        (n, 2) or (n, 3), m; no place stands there twice.
    field
        Ê at the points, (n, 2) or (n, 3), 1/m; complex, with phasors exp(+jωt), if the field
        does not have one phase everywhere.
    lines
        Line of the file that each point stands in, (n,).
    """

    points: Real
    field: Phasor
    lines: Index


def read_field_table(content: bytes) -> FieldTable:
    """Read the bytes of a CSV file.

    Separated by commas, semicolons or tabs; with the latter two, numbers may have decimal commas.

    Raises
    ------
    FieldTableError
        With one plain sentence, and the line where there is one.
    """
    rows = _rows(_text(content))
    header = read_header(rows)
    values, lines = _numbers(rows, header)
    if len(values) < FEWEST:
        raise FieldTableError(
            f"has {len(values)} points; a map needs at least {FEWEST}, and far more to be of use"
        )
    points = np.stack([_column(values, header, Column(name)) for name in header.axes], axis=1)
    parts = [
        np.stack([_column(values, header, Column(f"e{name}", part)) for name in header.axes], 1)
        for part in (("real", "imaginary") if header.moving else ("real",))
    ]
    field = parts[0] if len(parts) == 1 else _in_phase(parts[0] + 1j * parts[1])
    return _single(FieldTable(points, field, lines))


def _text(content: bytes) -> str:
    if len(content) > MAX_BYTES:
        raise FieldTableError(f"is larger than {MAX_BYTES // 1024**2} MB, the most a map may be")
    for encoding in ("utf-16", "utf-8-sig") if content[:2] in _WIDE else ("utf-8-sig", "cp1252"):
        try:
            text = content.decode(encoding)
        except UnicodeDecodeError:
            continue
        if "\0" not in text:
            return text
    raise FieldTableError("is no text file; export the field as CSV")


#: Marks that begin a file of two bytes a letter.
_WIDE = (b"\xff\xfe", b"\xfe\xff")


def _rows(text: str) -> list[tuple[int, str]]:
    """Lines that are not blank, with their numbers."""
    return [
        (k, line.strip()) for k, line in enumerate(re.split("\r\n|\r|\n", text), 1) if line.strip()
    ]


def _numbers(rows: Sequence[tuple[int, str]], header: Header) -> tuple[Real, Index]:
    """Values (n, n_column) as they stand in the file, and the line of each."""
    data = [(k, line) for k, line in rows if k > header.line and line[0] not in "#%"]
    if len(data) > MOST_ROWS:
        raise FieldTableError(
            f"has {len(data)} rows of numbers; at most {MOST_ROWS} can be used. Export a coarser "
            "grid, or only the liquid around one repeat of the electrodes"
        )
    values = np.empty((len(data), len(header.columns)))
    for row, (k, line) in enumerate(data):
        values[row] = _cells(k, line, header)
    lines = np.array([k for k, _ in data], dtype=np.intp)
    bad = ~np.isfinite(values)
    if bad.any():
        row, column = (int(found[0]) for found in np.nonzero(bad))
        raise FieldTableError(
            f"line {lines[row]}: {header.names[column]} is not finite; leave out points inside "
            "metal, and let the window hold liquid alone"
        )
    return values, lines


def _cells(k: int, line: str, header: Header) -> list[float]:
    cells = line.replace('"', "").split(header.separator)
    if len(cells) == len(header.columns) + 1 and not cells[-1].strip():
        cells.pop()  # a separator at the end of each line
    if len(cells) != len(header.columns):
        raise FieldTableError(
            f"line {k}: has {len(cells)} values where the header names {len(header.columns)} "
            "columns"
        )
    if header.separator != ",":
        cells = [cell.replace(",", ".") for cell in cells]
    try:
        return [_number(cell) for cell in cells]
    except ValueError:
        wrong = next(index for index, cell in enumerate(cells) if not _reads(cell))
        shown = cells[wrong].strip()[:20]
        said = f"“{shown}” is no number" if shown.isprintable() and shown else "a value is missing"
        raise FieldTableError(f"line {k}: {said} (column {header.names[wrong]})") from None


def _number(cell: str) -> float:
    if "_" in cell:
        raise ValueError
    return float(cell)


def _reads(cell: str) -> bool:
    try:
        _number(cell)
    except ValueError:
        return False
    return True


def _column(values: Real, header: Header, column: Column) -> Real:
    index = header.columns.index(column)
    return np.asarray(values[:, index] * header.scales[index])


def _in_phase(field: Phasor) -> Phasor:
    """The field turned so that its mean square is real; real itself if it has one phase.

    Nothing that is computed depends on a phase that all have in common.
    """
    turned = field * np.exp(-0.5j * np.angle((field**2).sum()))
    alone = np.linalg.norm(turned.imag) <= IN_PHASE * np.linalg.norm(turned)
    return np.asarray(turned.real if alone else turned)


def _single(table: FieldTable) -> FieldTable:
    """Each place once; rows of one place that differ are told."""
    points, field = table.points, table.field
    extent = np.ptp(points, axis=0)
    if np.any(extent == 0):
        axis = "xyz"[int(np.argmin(extent))]
        raise FieldTableError(f"all points have the same {axis}; a map needs an area of them")
    keys = np.round((points - points.min(axis=0)) / (SAME_PLACE * extent)).astype(np.int64)
    _, first, turn = np.unique(keys, axis=0, return_index=True, return_inverse=True)
    again = np.setdiff1d(np.arange(len(points)), first)
    if again.size == 0:
        return table
    source = first[turn.ravel()[again]]
    apart = np.linalg.norm(field[again] - field[source], axis=1)
    worst = int(apart.argmax())
    if apart[worst] > SAME_FIELD * np.linalg.norm(field, axis=1).max():
        one, other = sorted((table.lines[again[worst]], table.lines[source[worst]]))
        raise FieldTableError(f"lines {one} and {other}: one place with two different fields")
    kept = np.sort(first)
    return FieldTable(points[kept], field[kept], table.lines[kept])
