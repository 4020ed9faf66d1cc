"""Profiles: a design as nested plain data, as a TOML file and as a short fingerprint."""

import difflib
import hashlib
import json
import tomllib
from collections.abc import Iterator, Mapping
from functools import lru_cache
from pathlib import Path
from typing import Any, TypeVar, get_args

import tomli_w
from pydantic import BaseModel, ValidationError

from model.declare import FROM_PERSON, declarations, matters
from model.design import Design
from model.errors import DesignError, FieldError
from model.files import Files, Folder
from model.layouts import LAYOUTS
from model.particles import PARTICLES
from model.tasks import TASKS

#: Version of the format; a change of meaning raises it and brings a migration.
SCHEMA = 1
#: Largest profile that is read.
MAX_BYTES = 256 * 1024
#: Deepest nesting and most points in a line of a profile; a real one has four and about a hundred.
#: More would only wear out whatever reads it.
MOST_LEVELS, MOST_POINTS = 20, 400
#: Most errors that are told one by one.
MOST_ERRORS = 100
_TAGS = {*LAYOUTS, *PARTICLES, *TASKS, "layer", "membrane"}
T = TypeVar("T", bound=BaseModel)


def load_profile(path: str | Path) -> Design:
    """Read a profile file; files that it names are looked for beside it.

    Raises
    ------
    DesignError
        With every field that is wrong, or the reason why the file cannot be read at all.
    """
    return settled(read_profile(read_file(path)), Folder(Path(path).parent))


def read_file(path: str | Path) -> bytes:
    """Read the bytes of a file, no more than tell that it is too large; errors in words."""
    try:
        with Path(path).open("rb") as file:
            return file.read(MAX_BYTES + 1)
    except OSError as problem:
        reason = problem.strerror or "unknown reason"
        raise DesignError([FieldError("", str(path), f"cannot be opened: {reason}")]) from None


def settled(design: Design, files: Files) -> Design:
    """The design with the digest of each file that it names, so that it tells their contents."""
    chip = design.chip.settled(files)
    return design if chip is design.chip else design.model_copy(update={"chip": chip})


def read_profile(content: bytes) -> Design:
    """Read a profile from the bytes of a TOML file; errors as :func:`load_profile`."""
    return parse_design(read_document(content))


def read_document(content: bytes) -> dict[str, Any]:
    """Read TOML into nested plain data without looking at the fields."""
    if len(content) > MAX_BYTES:
        size = f"{MAX_BYTES // 1024} kB"
        raise DesignError([FieldError("", "", f"is larger than {size}, the most that is read")])
    try:
        text = content.decode("utf-8-sig")  # some editors put a mark before the first letter
    except UnicodeDecodeError:
        raise DesignError([FieldError("", "", "is no UTF-8 text file")]) from None
    if any(line.count(".") > MOST_POINTS for line in text.splitlines()):
        problem = f"has a line with more than {MOST_POINTS} points, which none needs"
        raise DesignError([FieldError("", "", problem)])
    try:
        return tomllib.loads(text)
    except (ValueError, RecursionError) as problem:  # ValueError: also numbers of endless digits
        raise DesignError([FieldError("", "", f"is no TOML file: {problem}")]) from None


def parse_design(document: Mapping[str, Any]) -> Design:
    """Turn nested plain data, as people write it, into a design.

    A bare number is taken in the unit that the field shows.

    Raises
    ------
    DesignError
        With one entry for every field that is wrong.
    """
    if too_deep(document):
        raise DesignError([FieldError("", "", "is nested deeper than any profile")])
    data = dict(document)
    schema = data.pop("schema", SCHEMA)
    if schema != SCHEMA or isinstance(schema, bool):
        problem = f"must be {SCHEMA}; this program reads no other version"
        raise DesignError([FieldError("schema", _shown(schema), problem)])
    return validated(Design, data)


def validated(whole: type[T], data: Mapping[str, Any]) -> T:
    """Turn nested plain data, as people write it, into what it describes.

    Raises
    ------
    DesignError
        With one entry for every field that is wrong.
    """
    try:
        # by the file's own keys alone: names within the program are unknown keys here
        return whole.model_validate(data, context=FROM_PERSON, by_alias=True, by_name=False)
    except ValidationError as problem:
        raise DesignError(_field_errors(problem, data, whole)) from None


def too_deep(data: Any) -> bool:
    """Tell whether plain data nests deeper than any profile; a loop, as calls would run out."""
    level = [data]
    for _ in range(MOST_LEVELS):
        level = [
            inner
            for item in level
            if isinstance(item, Mapping | list | tuple)
            for inner in (item.values() if isinstance(item, Mapping) else item)
        ]
        if not level:
            return False
    return True


def document(design: Design) -> dict[str, Any]:
    """Write a design as nested plain data that :func:`parse_design` reads back exactly."""
    return {"schema": SCHEMA, **part_document(design)}


def profile_text(design: Design) -> str:
    """Write a design as the text of a TOML profile."""
    return tomli_w.dumps(document(design))


def fingerprint(design: Design) -> str:
    """Give eight hexadecimal digits that tell designs apart by what is computed from them.

    Title, question and sources do not count.
    """
    data = document(design)
    del data["title"], data["question"]
    for particle in data["particle"]:
        particle.pop("source", None)
    text = json.dumps(data, sort_keys=True, separators=(",", ":"), ensure_ascii=True)
    digest = hashlib.sha256(text.encode()).hexdigest()
    return f"{digest[:4]}-{digest[4:8]}"


def part_document(part: BaseModel) -> dict[str, Any]:
    """Write a part of a design as nested plain data."""
    known = dict(declarations(type(part)))
    data = {}
    for name, info in type(part).model_fields.items():
        key, value = info.alias or name, getattr(part, name)
        if key in known:
            if value == info.default and not matters(part, known[key]):
                continue
            value = known[key].text(value)
        elif isinstance(value, BaseModel):
            value = part_document(value)
        elif isinstance(value, tuple):
            value = [part_document(item) for item in value] or None
        if value is not None:
            data[key] = value
    return data


def _field_errors(
    problem: ValidationError, data: Mapping[str, Any], whole: type[BaseModel]
) -> list[FieldError]:
    """Reword the validator's findings, each with the path as the file has it."""
    errors: dict[FieldError, None] = {}
    told = problem.errors(include_url=False)
    for found in told[:MOST_ERRORS]:
        keys, value = _place(found["loc"], data)
        path, context = ".".join(map(_shown, keys)), found.get("ctx", {})
        for end, reason in context.get("misfits", ()):  # fine alone, impossible together
            place = f"{path}.{end}".lstrip(".")
            errors[FieldError(place, _shown(_at(data, place)), reason)] = None
        if "misfits" not in context:
            shown = "" if found["type"] == "missing" else _shown(value)
            problem_text = _problem(found["type"], found["msg"], context, keys, whole)
            errors[FieldError(path, shown, problem_text)] = None
    if len(told) > MOST_ERRORS:
        errors[FieldError("", "", f"has {len(told) - MOST_ERRORS} more errors")] = None
    return list(errors)


def _place(location: tuple[int | str, ...], data: Any) -> tuple[list[int | str], Any]:
    """Follow a validator's location through the data; its union tags are no part of the path."""
    keys: list[int | str] = []
    for key in location:
        if isinstance(data, Mapping) and key not in data and key in _TAGS:
            continue
        keys.append(key)
        data = _step(data, key)
    return keys, data


def _at(data: Any, path: str) -> Any:
    for key in path.split("."):
        data = _step(data, int(key) if key.isdecimal() else key)
    return data


def _step(data: Any, key: int | str) -> Any:
    if isinstance(data, Mapping):
        return data.get(key)
    if isinstance(data, list | tuple) and isinstance(key, int) and key < len(data):
        return data[key]
    return None


def _problem(
    kind: str,
    message: str,
    context: Mapping[str, Any],
    keys: list[int | str],
    whole: type[BaseModel],
) -> str:
    """Say what is wrong as one plain sentence."""
    match kind:
        case "declared":
            return message
        case "missing":
            return "is missing"
        case "extra_forbidden":
            near = difflib.get_close_matches(str(keys[-1]), _known_keys(whole), 1)
            return "is no key that is known" + (f"; is {near[0]} meant?" if near else "")
        case "union_tag_invalid":
            key, allowed = (
                str(context[name]).strip("'") for name in ("discriminator", "expected_tags")
            )
            return f"needs {key} to be one of {allowed.replace(chr(39), '')}"
        case "union_tag_not_found":
            return f"needs the key {str(context['discriminator']).strip(chr(39))}"
        case "model_type" | "model_attributes_type" | "dict_type":
            return "must be a table of keys"
        case _:
            return message


@lru_cache(maxsize=4)  # declarations never change
def _known_keys(whole: type[BaseModel]) -> frozenset[str]:
    """Every key that a file may have, for the suggestion beside a misspelt one."""
    chosen = [*LAYOUTS.values(), *PARTICLES.values(), *TASKS.values()]
    return frozenset({"schema"}.union(*map(_keys, [whole, *chosen])))


def _keys(annotation: Any) -> Iterator[str]:
    """Keys of all parts in a type, however deep."""
    if isinstance(annotation, type) and issubclass(annotation, BaseModel):
        for name, info in annotation.model_fields.items():
            yield info.alias or name
            yield from _keys(info.annotation)
    for inner in get_args(annotation):
        yield from _keys(inner)


def _shown(value: Any) -> str:
    """Shorten a value for a message, on one line and without what a terminal would obey."""
    if value is None:
        return ""
    plain = isinstance(value, str) and value.isprintable()
    text = value if plain else repr(value)
    return text if len(text) <= 60 else f"{text[:57]}…"
