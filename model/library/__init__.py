"""Published particles, and a team's own beside them.

Each TOML file of this folder holds a group of entries in the form that README.md describes under
"Your own particles". Every number tells whether it was read in its source, recalled or assumed;
sources that disagree stand side by side, as none is right for every culture and method.
"""

from pathlib import Path
from typing import Annotated

from pydantic import BeforeValidator, Field, model_validator

from model.declare import Part, counted, misfit
from model.errors import DesignError, FieldError
from model.library.entry import Entry, Origin, Row
from model.profile import read_document, read_file, too_deep, validated

__all__ = ["Entry", "Origin", "Row", "load_library"]

#: Most entries in one file.
MOST_ENTRIES = 200


class LibraryFile(Part):
    """All entries of one file."""

    entries: Annotated[
        tuple[Entry, ...],
        BeforeValidator(counted("particle", MOST_ENTRIES, "tables, one for each particle")),
        Field(alias="entry"),
    ]

    @model_validator(mode="after")
    def _ids_differ(self) -> "LibraryFile":
        ids = [entry.id for entry in self.entries]
        again = [index for index, found in enumerate(ids) if found in ids[:index]]
        if again:
            raise misfit(*((f"entry.{index}.id", "is the id of two entries") for index in again))
        return self


def load_library(extra: Path | None = None) -> dict[str, Entry]:
    """Load the published particles by id, and behind them those of a file of one's own.

    Raises
    ------
    DesignError
        With every fault of the first file that has any, which a note names.
    """
    found: dict[str, Entry] = {}
    for path in [*sorted(Path(__file__).parent.glob("*.toml")), *([extra] if extra else [])]:
        try:
            entries = _entries(path)
            taken = [index for index, entry in enumerate(entries) if entry.id in found]
            if taken:
                raise DesignError(
                    FieldError(f"entry.{index}.id", entries[index].id, "is taken in the library")
                    for index in taken
                )
        except DesignError as problem:
            problem.add_note(f"in {path}")
            raise
        found |= {entry.id: entry for entry in entries}
    return found


def _entries(path: Path) -> tuple[Entry, ...]:
    data = read_document(read_file(path))
    if too_deep(data):
        raise DesignError([FieldError("", "", "is nested deeper than any library")])
    return validated(LibraryFile, data).entries
