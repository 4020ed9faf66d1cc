"""Declarations of what a person may enter: label, unit, range and help stand here once.

A field of a design part is written ``bar_width: Annotated[float, Quantity(...)] = 40e-6``. From
the annotation come the validation (this module), the profile keys, the control on the screen,
its help and the wording of the report. A new part therefore declares fields and nothing else.
"""

import re
from abc import ABC, abstractmethod
from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from functools import lru_cache
from typing import Any

from pydantic import BaseModel, ConfigDict, GetCoreSchemaHandler, ValidationInfo
from pydantic_core import CoreSchema, PydanticCustomError, core_schema

from model.files import FEWEST_DIGITS, is_digest
from model.quantity import (
    QuantityError,
    canonical,
    format_quantity,
    parse_quantity,
    plain_text,
    pretty_unit,
)

#: Validation context of values that a person gave: a bare number is in the shown unit, not SI.
FROM_PERSON = {"from_person": True}


def misfit(*misfits: tuple[str, str]) -> PydanticCustomError:
    """Error to raise from a part's check for fields that are fine alone and impossible together.

    Each misfit is the path of a field within the part, and what is wrong with it.
    """
    problem = "; ".join(f"{path} {problem}" for path, problem in misfits)
    return PydanticCustomError("misfits", "{problem}", {"problem": problem, "misfits": misfits})


class Part(BaseModel):
    """A frozen piece of a design; compares and hashes by value, knows no unknown keys."""

    model_config = ConfigDict(frozen=True, extra="forbid", allow_inf_nan=False)


@dataclass(frozen=True)
class Declared(ABC):
    """What every declaration tells: how a field is named and explained to a person."""

    label: str
    help: str
    source: str = field(default="", kw_only=True)
    #: Folded away on the screen unless asked for.
    detail: bool = field(default=False, kw_only=True)
    #: None is a value: "take the usual one", explained by the help.
    optional: bool = field(default=False, kw_only=True)
    #: What an empty control of an optional field stands for.
    empty: str = field(default="usual value", kw_only=True)
    #: Key of another field of the part and the word it must hold for this one to matter; with an
    #: empty word anything will do. Otherwise the control is not shown.
    only_with: tuple[str, str] | None = field(default=None, kw_only=True)

    @abstractmethod
    def read(self, value: Any, from_person: bool) -> Any:
        """Turn what was given into the field's value or raise :class:`QuantityError`."""

    def text(self, value: Any) -> Any:
        """Write a value as it stands in a profile."""
        return value

    def shown(self, value: Any) -> str | bool:
        """What a control shows: text as people write it, or yes and no."""
        return "" if value is None else str(value)

    def allowed(self) -> str:
        """Say what may be entered."""
        return ""

    def __get_pydantic_core_schema__(
        self, source: Any, handler: GetCoreSchemaHandler
    ) -> CoreSchema:
        """Let pydantic validate through :meth:`read`."""

        def validate(value: Any, info: ValidationInfo) -> Any:
            if self.optional and (value is None or value == ""):
                return None
            try:
                return self.read(value, bool(info.context and info.context.get("from_person")))
            except QuantityError as problem:
                raise PydanticCustomError(
                    "declared", "{problem}", {"problem": str(problem)}
                ) from None

        return core_schema.with_info_plain_validator_function(validate)


@dataclass(frozen=True)
class Quantity(Declared):
    """A number with a unit, held in SI.

    `low` and `high` are inclusive and written with units. In Python code a bare number is SI;
    from a person (profile, control, link) it is in `unit`.
    """

    unit: str = field(kw_only=True)
    low: str = field(kw_only=True)
    high: str = field(kw_only=True)
    #: A voltage taken peak to peak: ``8 Vpp`` is understood, ``8 Vrms`` refused with the factor.
    peak_to_peak: bool = field(default=False, kw_only=True)

    def read(self, value: Any, from_person: bool) -> float:
        """Parse, round as typed, and check the range."""
        if self.peak_to_peak and isinstance(value, str):
            value = _without_measure(value)
        if isinstance(value, str) or (from_person and isinstance(value, int | float)):
            number = parse_quantity(value, self.unit)
        elif isinstance(value, int | float) and not isinstance(value, bool):
            number = canonical(value, self.unit)
        else:
            raise QuantityError(f"needs a number, {self.allowed()}")
        low, high = self.range()
        if not low <= number <= high:
            raise QuantityError(f"must be {self.allowed()}")
        return number

    def range(self) -> tuple[float, float]:
        """Least and most, SI."""
        return _range(self.low, self.high, self.unit)

    def text(self, value: Any) -> Any:
        """Write as number and unit, e.g. ``"40 um"``; a pure number stays one."""
        if value is None:
            return None
        return plain_text(value, self.unit) if self.unit else value

    def shown(self, value: Any) -> str | bool:
        """Write as a person would type it."""
        if value is None:
            return ""
        return format_quantity(value, self.unit).replace("−", "-")

    def allowed(self) -> str:
        """Range in the shown unit."""
        low, high = (format_quantity(bound, self.unit) for bound in self.range())
        if self.unit and low.endswith(pretty_unit(self.unit)):
            low = low.removesuffix(pretty_unit(self.unit)).strip()
        return f"from {low} to {high}"


@dataclass(frozen=True)
class Quantities(Quantity):
    """Several numbers of one kind, e.g. the semi-axes of an ellipsoid; held as a tuple.

    In a profile they are a list; a person may also type them in one line, ``4 × 0.5 × 0.5 um``,
    where the last unit serves those without one.
    """

    count: int = field(kw_only=True)

    def read(self, value: Any, from_person: bool) -> Any:
        """Parse each and check it."""
        items = _split(value) if isinstance(value, str) else value
        if not isinstance(items, list | tuple) or len(items) != self.count:
            raise QuantityError(f"needs {self.count} numbers, each {self.allowed()}")
        one = super().read
        return tuple(one(item, from_person) for item in items)

    def text(self, value: Any) -> Any:
        """Write as a list."""
        one = super().text
        return [one(item) for item in value]

    def shown(self, value: Any) -> str | bool:
        """Write in one line, the unit once.

        >>> axes = Quantities("Semi-axes", "", unit="um", low="1 nm", high="1 mm", count=3)
        >>> axes.shown((4e-6, 5e-7, 5e-7))
        '4 × 0.5 × 0.5 µm'
        """
        *others, last = (str(super(Quantities, self).shown(item)) for item in value)
        unit = f" {pretty_unit(self.unit)}"
        return " × ".join([*(text.removesuffix(unit) for text in others), last])


#: What may stand between numbers in one line; a comma or semicolon with a blank behind it.
_BETWEEN = re.compile(r"\s*(?:×|\bx\b|[,;](?=\s))\s*")


def _split(text: str) -> list[str]:
    """Take a line of numbers apart and give every one a unit if the last has one.

    >>> _split("4 × 0.5 × 0.5 um")
    ['4 um', '0.5 um', '0.5 um']
    """
    items = _BETWEEN.split(text.strip()[:200])
    unit = items[-1].lstrip("+-.0123456789eE ")
    return [item if item[-1:].isalpha() or not unit else f"{item} {unit}" for item in items]


_MEASURE = re.compile(r"(.*[0-9 ][kmu]?V)\s*(pp|p-p|rms|pk|peak)", re.IGNORECASE)
_FACTORS = {"rms": "2.83", "pk": "2", "peak": "2"}


def _without_measure(text: str) -> str:
    """Take ``pp`` off a voltage; refuse the other measures and say how to turn them."""
    match = _MEASURE.fullmatch(text.strip())
    if match is None:
        return text
    voltage, measure = match.groups()
    factor = _FACTORS.get(measure.lower())
    if factor is not None:
        raise QuantityError(f"is wanted peak to peak: type {factor} times as much, in V")
    return voltage


@lru_cache(maxsize=512)  # declarations are few and never change
def _range(low: str, high: str, unit: str) -> tuple[float, float]:
    return parse_quantity(low, unit), parse_quantity(high, unit)


@dataclass(frozen=True)
class Count(Declared):
    """A whole number within `low` to `high`, inclusive."""

    low: int = field(kw_only=True)
    high: int = field(kw_only=True)

    def read(self, value: Any, from_person: bool) -> int:
        """Take whole numbers, also as text."""
        if isinstance(value, str) and value.strip().isdecimal() and len(value) < 10:
            value = int(value)
        if isinstance(value, float) and value.is_integer():
            value = int(value)
        if not isinstance(value, int) or isinstance(value, bool):
            raise QuantityError(f"needs a whole number, {self.allowed()}")
        if not self.low <= value <= self.high:
            raise QuantityError(f"must be {self.allowed()}")
        return value

    def allowed(self) -> str:
        """Range in words."""
        return f"from {self.low} to {self.high}"


@dataclass(frozen=True)
class Choice(Declared):
    """One of a few words; `options` maps each word of the profile to its label on the screen."""

    options: Mapping[str, str] = field(kw_only=True, hash=False)

    def read(self, value: Any, from_person: bool) -> str:
        """Take one of the words."""
        if not isinstance(value, str) or value not in self.options:
            raise QuantityError(f"must be {self.allowed()}")
        return value

    def allowed(self) -> str:
        """List the words."""
        return "one of " + ", ".join(self.options)


@dataclass(frozen=True)
class Flag(Declared):
    """Yes or no."""

    def shown(self, value: Any) -> str | bool:
        """The value itself."""
        return bool(value)

    def read(self, value: Any, from_person: bool) -> bool:
        """Take true and false alone."""
        if not isinstance(value, bool):
            raise QuantityError("must be true or false")
        return value

    def allowed(self) -> str:
        """List both."""
        return "true or false"


@dataclass(frozen=True)
class Text(Declared):
    """A line of text."""

    longest: int = field(default=80, kw_only=True)
    needed: bool = field(default=False, kw_only=True)

    def read(self, value: Any, from_person: bool) -> str:
        """Take printable text, outer blanks removed."""
        if not isinstance(value, str):
            raise QuantityError("must be text")
        line = value.strip()
        if self.needed and not line:
            raise QuantityError("must not be empty")
        if len(line) > self.longest:
            raise QuantityError(f"must not be longer than {self.longest} characters")
        if not all(letter.isprintable() for letter in line):
            raise QuantityError("must be one line of printable characters")
        return line

    def allowed(self) -> str:
        """State the length."""
        return f"text of at most {self.longest} characters"


@dataclass(frozen=True)
class Digest(Text):
    """Hexadecimal digits that tell the contents of a file, or nothing."""

    longest: int = field(default=64, kw_only=True)

    def read(self, value: Any, from_person: bool) -> str:
        """Take the digits of a digest alone."""
        line = super().read(value, from_person)
        if line and not is_digest(line):
            raise QuantityError(f"must be {self.allowed()}")
        return line

    def allowed(self) -> str:
        """State the digits."""
        return f"{FEWEST_DIGITS} to {self.longest} of the digits 0 to 9 and a to f, or empty"


@dataclass(frozen=True)
class FileName(Text):
    """The name of a file that goes with the profile; `accept` the endings that are offered."""

    accept: str = field(kw_only=True)


@lru_cache(maxsize=256)  # a class never changes its declarations
def declarations(part: type[BaseModel]) -> tuple[tuple[str, Declared], ...]:
    """Profile key and declaration of each declared field of `part`, in order."""
    return tuple(
        (info.alias or name, extra)
        for name, info in part.model_fields.items()
        for extra in info.metadata
        if isinstance(extra, Declared)
    )


def matters(part: BaseModel, declared: Declared) -> bool:
    """Whether a field of `part` matters with what the field it depends on holds."""
    if declared.only_with is None:
        return True
    other, word = declared.only_with
    held = getattr(part, other)
    return held == word if word else held not in (None, "")


def counted(one: str, most: int, form: str, *, least: int = 1) -> Callable[[Any], Any]:
    """Make a check that refuses what is no list, or of a wrong length, before its items are read.

    Parameters
    ----------
    one
        Word for one item.
    most
        Most items.
    form
        How the list is to be written.
    least
        1, or 0 where the list may be empty.
    """

    def check(value: Any) -> Any:
        if not isinstance(value, list | tuple):
            problem = f"must be a list of {form}"
        elif len(value) < least:
            problem = f"needs at least one {one}"
        elif len(value) > most:
            problem = f"has {len(value)} {one}s; at most {most} {one}s can be used"
        else:
            return value
        raise PydanticCustomError("declared", "{problem}", {"problem": problem})

    return check
