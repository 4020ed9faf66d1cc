"""One particle of the library: its numbers, and where each of them comes from."""

import re
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from functools import cached_property
from types import MappingProxyType
from typing import Annotated, Any, Literal

from pydantic import AfterValidator, BaseModel, Field, model_validator

from model.declare import Choice, Part, Quantity, Text, declarations, matters, misfit
from model.particle import Particle
from model.particles import PARTICLES
from model.profile import part_document
from model.quantity import QuantityError, format_quantity, parse_quantity
from model.registry import OneOf

_ID = re.compile(r"[a-z0-9]+(-[a-z0-9]+)*")
#: Fields of a particle that say how much single ones differ: each from the spread of which number.
_VARIATION = {"radius_cv": re.compile(r"radius"), "membrane_cv": re.compile(r".*\.capacitance")}
#: What a design decides and no source does.
_OF_THE_DESIGN = ("role", "must_live")


class Origin(Part):
    """Where one number of a particle comes from."""

    status: Annotated[
        Literal["read", "memory", "assumed"],
        Choice(
            "Status",
            "Read: stated in the source or its abstract, as checked. Memory: recalled from the "
            "source, unchecked. Assumed: not in the source.",
            options={"read": "read", "memory": "from memory", "assumed": "assumed"},
        ),
    ]
    basis: Annotated[
        str, Text("Basis", "What an assumed number rests on; else a remark.", longest=240)
    ] = ""
    spread: Annotated[
        str, Text("Spread", "Published standard deviation among single particles.", longest=40)
    ] = ""
    uncertainty: Annotated[
        str,
        Text(
            "Uncertainty", "Published ± of a mean, or of what the source does not say.", longest=40
        ),
    ] = ""


@dataclass(frozen=True)
class Number:
    """One number of a particle.

    Parameters
    ----------
    path
        Its place in the particle's table, e.g. ``layers.0.capacitance``.
    label
        Its name for people, e.g. ``Nuclear envelope: membrane capacitance``.
    declared, value
        Declaration, and value in SI.
    """

    path: str
    label: str
    declared: Quantity
    value: Any


@dataclass(frozen=True)
class Row:
    """One number of an entry, as people read it; `spread` and `basis` may be empty."""

    label: str
    value: str
    status: str
    spread: str
    basis: str


class Entry(Part):
    """A published particle."""

    id: Annotated[str, Text("Id", "Lower-case letters, digits and hyphens.", longest=60)]
    title: Annotated[str, Text("Title", "What it is.", longest=80, needed=True)]
    group: Annotated[str, Text("Group", "Under which it is listed.", longest=40, needed=True)]
    source: Annotated[
        str,
        Text("Source", "Authors, year, journal, volume and page.", longest=240, needed=True),
    ]
    method: Annotated[
        str, Text("Method", "How the numbers were measured.", longest=160, needed=True)
    ]
    measured_in: Annotated[
        str, Text("Measured in", "Conductivity of the medium, where the source says.", longest=160)
    ] = ""
    note: Annotated[str, Text("Note", "What to know before using it.", longest=600)] = ""
    given: Annotated[Particle, OneOf(PARTICLES, "kind"), Field(alias="particle")]
    values: Annotated[Mapping[str, Origin], AfterValidator(lambda values: MappingProxyType(values))]

    @cached_property
    def particle(self) -> Particle:
        """The particle, with its source and the variation of single ones from the spreads."""
        told = {"source": self.source, **dict(_variation(self.given, self.values))}
        return self.given.model_copy(update=told)

    def particle_document(self) -> dict[str, Any]:
        """What goes into a profile's ``[[particle]]``, without role and whether it must live."""
        table = part_document(self.particle)
        return {key: value for key, value in table.items() if key not in _OF_THE_DESIGN}

    def rows(self) -> tuple[Row, ...]:
        """Every number with its status, in the order of the particle's fields."""
        return tuple(_row(number, self.values[number.path]) for number in numbers(self.given))

    @model_validator(mode="after")
    def _is_told(self) -> "Entry":
        misfits = tuple(_misfits(self))
        if misfits:
            raise misfit(*misfits)
        return self


def numbers(part: BaseModel, path: str = "", place: str = "") -> Iterator[Number]:
    """Every number of a particle that matters, through its core and layers.

    Parameters
    ----------
    part
        The particle, or a part of it.
    path, place
        Where the part stands in the particle, and its name for people.
    """
    known = dict(declarations(type(part)))
    for key, value in part:
        declared = known.get(key)
        if isinstance(declared, Quantity):
            varies = key not in _VARIATION or value > 0.0
            if varies and value is not None and matters(part, declared):
                yield Number(path + key, _label(place, declared.label), declared, value)
        elif isinstance(value, BaseModel):
            yield from numbers(value, f"{path}{key}.", key)
        elif isinstance(value, tuple):
            for index, item in enumerate(value):
                yield from numbers(item, f"{path}{key}.{index}.", getattr(item, "name", key))


def _label(place: str, label: str) -> str:
    """Name of a field with that of the part it belongs to, unless it begins so itself."""
    if not place or label.lower().startswith(place.lower()):
        return label
    return f"{place[:1].upper()}{place[1:]}: {label[:1].lower()}{label[1:]}"


def _row(number: Number, origin: Origin) -> Row:
    unit, spread = number.declared.unit, ""
    if origin.spread:
        spread = f"± {_shown(origin.spread, unit)} among particles"
    elif origin.uncertainty:
        spread = f"± {_shown(origin.uncertainty, unit)} of the mean, or not said of what"
    value = str(number.declared.shown(number.value))
    return Row(number.label, value, origin.status, spread, origin.basis)


def _shown(text: str, unit: str) -> str:
    return format_quantity(parse_quantity(text, unit), unit)


def _variation(given: Particle, values: Mapping[str, Origin]) -> Iterator[tuple[str, float]]:
    """Coefficients of variation from published spreads; of several membranes the outermost's.

    Three digits are kept, as no published spread has more.
    """
    told = [number for number in numbers(given) if values[number.path].spread]
    for key, path in _VARIATION.items():
        last = [number for number in told if path.fullmatch(number.path)][-1:]
        for number in last:
            spread = parse_quantity(values[number.path].spread, number.declared.unit)
            yield key, float(f"{spread / number.value:.3g}")


def _misfits(entry: Entry) -> Iterator[tuple[str, str]]:
    """Find what is told wrongly of the numbers: path and problem."""
    if not _ID.fullmatch(entry.id):
        yield "id", "must be of lower-case letters, digits and single hyphens between them"
    known = {number.path: number for number in numbers(entry.given)}
    for path in known.keys() - entry.values.keys():
        yield f"values.{path}", "is missing: every number needs a row with its status"
    sound = known.keys() == entry.values.keys()
    for path, origin in entry.values.items():
        if path not in known:
            yield f"values.{path}", "is a row for no number of the particle"
            continue
        for place, problem in _faults(origin, known[path].declared):
            sound = False
            yield f"values.{path}.{place}", problem
    if sound:
        yield from _variation_misfits(entry)


def _faults(origin: Origin, declared: Quantity) -> Iterator[tuple[str, str]]:
    """Find what is wrong with one row."""
    if origin.status == "assumed" and not origin.basis:
        yield "basis", "must say what an assumed number rests on"
    if origin.spread and origin.uncertainty:
        yield "uncertainty", "cannot be told beside a spread"
    for place in ("spread", "uncertainty"):
        text = getattr(origin, place)
        try:
            if text and parse_quantity(text, declared.unit) <= 0.0:
                yield place, "must be more than zero"
        except QuantityError as problem:
            yield place, str(problem)


def _variation_misfits(entry: Entry) -> Iterator[tuple[str, str]]:
    """Find variations told twice, or wider than a particle can have."""
    known = dict(declarations(type(entry.given)))
    for key, value in _variation(entry.given, entry.values):
        if getattr(entry.given, key) > 0.0:
            yield f"particle.{key}", "follows from a spread; tell only one of them"
        try:
            known[key].read(value, False)
        except QuantityError as problem:
            yield f"particle.{key}", f"follows from a spread as {value:g}, but {problem}"
