"""From what the browser holds to a design, and back.

The browser keeps the last document it opened and the text of every control. Both arrive with
each request; here they become one :class:`Design` or the list of fields that cannot be used.
"""

import copy
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from model.design import Design
from model.errors import DesignError, FieldError
from model.profile import document, parse_design, read_document, too_deep
from webapp.link import LinkError, decode

#: Most controls in a request and most characters in one; more is no browser of ours.
MOST_VALUES, LONGEST_VALUE = 4000, 400
THEMES = ("light", "dark")
#: Controls that are typed instead of another one, which then follows from them.
INSTEAD = {"liquid.recipe.amount": "liquid.conductivity"}
#: No place of a chip is further from its middle, m.
FARTHEST = 1.0


class BadRequestError(ValueError):
    """A request that no page of ours sends; answered with status 400."""


@dataclass(frozen=True)
class Options:
    """What a visitor looks at, which is no part of the design.

    Parameters
    ----------
    show
        Panel of the section that is wanted alone; all of them if it is none.
    particle
        Place in the design of the particle whose force is drawn.
    probe
        Place (x, y) to be read out, m.
    held
        Key of the maps that the page holds already, so that they need not be sent again.
    resting
        Whether the hand rests, so that there is time for what is slow.
    """

    show: str = "four"
    particle: int = 0
    probe: tuple[float, float] | None = None
    held: str = ""
    resting: bool = False


#: Of a visitor who has chosen nothing.
NO_OPTIONS = Options()


@dataclass(frozen=True)
class Request:
    """One request: the document, the controls' values by path, the theme, what is looked at."""

    number: int
    document: Mapping[str, Any]
    values: Mapping[str, str | bool]
    theme: str
    options: Options = NO_OPTIONS


def read_request(data: Any) -> Request:
    """Check the shape of what a browser sent; its contents are checked as a design."""
    if not isinstance(data, dict):
        raise BadRequestError("no request")
    number, base, values, theme = (
        data.get(key) for key in ("number", "document", "values", "theme")
    )
    if type(number) is not int or not isinstance(base, dict) or not isinstance(values, dict):
        raise BadRequestError("a request needs number, document and values")
    if theme not in THEMES or len(values) > MOST_VALUES:
        raise BadRequestError("unknown theme or too many values")
    if too_deep(base):
        raise BadRequestError("the document is nested deeper than any profile")
    for path, value in values.items():
        if not isinstance(value, str | bool) or len(str(path)) > 120:
            raise BadRequestError("a value is neither text nor yes or no")
        if isinstance(value, str) and len(value) > LONGEST_VALUE:
            raise BadRequestError("a value is too long")
    return Request(number, base, values, theme, read_options(data.get("options", {})))


def read_options(data: Any) -> Options:
    """Check what a browser says it looks at.

    Raises
    ------
    BadRequestError
        If no page of ours could have sent `data`.
    """
    if not isinstance(data, dict):
        raise BadRequestError("the options are no table")
    show, particle, held = data.get("show", "four"), data.get("particle", 0), data.get("held", "")
    if not (isinstance(show, str) and isinstance(held, str) and len(show + held) < 120):
        raise BadRequestError("an option is no short text")
    if type(particle) is not int or not 0 <= particle <= MOST_VALUES:
        raise BadRequestError("an option is no place in a list")
    resting = data.get("resting", False)
    if not isinstance(resting, bool):
        raise BadRequestError("an option is neither yes nor no")
    return Options(show, particle, _place(data.get("probe")), held, resting)


def _place(data: Any) -> tuple[float, float] | None:
    """A place (x, y) in m; None if there is none."""
    if data is None:
        return None
    pair: list[Any] = [data.get("x"), data.get("y")] if isinstance(data, dict) else []
    if not pair or any(type(value) not in (int, float) for value in pair):
        raise BadRequestError("a place needs x and y")
    if not all(abs(value) <= FARTHEST for value in pair):  # what is no number fails too
        raise BadRequestError("a place is beyond any chip")
    return float(pair[0]), float(pair[1])


def design_of(request: Request) -> Design:
    """Put the controls' values into the document and read it; raises :class:`DesignError`."""
    return parse_design(filled(request))


def filled(request: Request) -> dict[str, Any]:
    """The document with the controls' values in it."""
    data = copy.deepcopy(dict(request.document))
    for path, value in request.values.items():
        put(data, path, value)
    for path, follows in INSTEAD.items():
        if request.values.get(path):
            put(data, follows, "")
    return data


def put(data: Any, path: str, value: str | bool) -> None:
    """Set one value at a dotted path; an emptied control takes its key out.

    Raises
    ------
    BadRequestError
        If the document has no such place.
    """
    *parents, last = path.split(".")
    for key in parents:
        try:
            data = data[int(key)] if isinstance(data, list) else data[key]
        except (KeyError, ValueError, IndexError, TypeError):
            raise BadRequestError("the document has no such place") from None
    if not isinstance(data, dict):
        raise BadRequestError("the document has no such place")
    if value == "":
        data.pop(last, None)
    else:
        data[last] = value


@dataclass(frozen=True)
class Opened:
    """A design that was opened, and what could not be used of its source."""

    design: Design
    problems: tuple[str, ...] = ()


def open_link(address: str, fallback: Design) -> Opened:
    """Open a link; what it lacks is taken from `fallback` and named."""
    try:
        data, whole = decode(address)
    except LinkError as problem:
        return Opened(fallback, (f"The link could not be opened: {problem}.",))
    opened = open_document(data, fallback)
    if whole:
        return opened
    warning = (
        "The link was cut or changed on its way: its check does not fit its contents. Compare the "
        "inputs before you trust the result."
    )
    return Opened(opened.design, (warning, *opened.problems))


def open_file(content: bytes, fallback: Design) -> Opened:
    """Open an uploaded profile; what cannot be used is named."""
    try:
        data = read_document(content)
    except DesignError as problem:
        return Opened(fallback, tuple(str(error) for error in problem.errors))
    return open_document(data, fallback)


def open_document(data: Mapping[str, Any], fallback: Design) -> Opened:
    """Make a design of plain data; fields that cannot be used are taken from `fallback`."""
    try:
        return Opened(parse_design(data))
    except DesignError as problem:
        errors = problem.errors
    spare = document(fallback)
    mended: Any = copy.deepcopy(dict(data))
    for error in errors:
        _replace(mended, spare, error.path.split(".") if error.path else [])
    told = tuple(_told(error, mended) for error in errors)
    try:
        return Opened(parse_design(mended), told)
    except DesignError:
        return Opened(fallback, (*told, "Too much of it is unusable; the last good design stays."))


def _told(error: FieldError, mended: Any) -> str:
    """Say what was wrong and what stands there now."""
    place = mended
    for key in error.path.split("."):
        place = _step(place, key)
    if isinstance(place, dict | list):
        return f"{error}; the usual ones stand in its place."
    return f"{error}; " + ("it is left out." if place is None else f"{place} stands in its place.")


def _replace(data: Any, spare: Any, keys: list[str]) -> None:
    """Put the spare's value at a path, or take the key out where the spare has none."""
    for key in keys[:-1]:
        data, spare = _step(data, key), _step(spare, key)
    if not keys:
        return
    last, value = keys[-1], _step(spare, keys[-1])
    if isinstance(data, dict):
        if value is None:
            data.pop(last, None)
        else:
            data[last] = copy.deepcopy(value)


def _step(data: Any, key: str) -> Any:
    if isinstance(data, dict):
        return data.get(key)
    if isinstance(data, list) and key.isdecimal() and int(key) < len(data):
        return data[int(key)]
    return None
