"""Edits of what a design is made of: particles, layers, ingredients, kinds and layouts.

The page posts its design and a wish; :func:`edited` answers with the design's document after it,
and :func:`open_edit` opens that anew. A wish is three words: what to `do`, the path `at` which,
and a `word` more where there is a choice.
"""

import copy
import re
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from pydantic import ValidationError

from model.declare import FROM_PERSON
from model.design import MOST_PARTICLES, Design
from model.layers import MOST_LAYERS, NEW_LAYERS
from model.layouts import LAYOUTS
from model.limits import LIMITS
from model.liquid.recipe import MOST_INGREDIENTS, NEW_INGREDIENT
from model.particles import PARTICLES
from model.tasks import TASKS
from webapp.state import BadRequestError, Opened, filled, open_document, read_request

Tables = Mapping[str, Mapping[str, Any]]

#: Longest name that a copy gets; names of particles and layers may have so many letters.
LONGEST_NAME = 40


@dataclass(frozen=True)
class Listed:
    """A list in a design whose items come and go.

    Parameters
    ----------
    one
        Word for one item.
    least, most
        How many items there may be.
    starts
        What can be added, as in a profile, by its word.
    earlier, later
        Words for moving an item towards the front and the end.
    once
        A key that no two items may share, and the values that it may have; an added or copied
        item takes the first that is free.
    """

    one: str
    least: int
    most: int
    starts: Tables
    earlier: str = "Move up"
    later: str = "Move down"
    once: tuple[str, tuple[str, ...]] | None = None


#: Every list that can be edited, by its path with * for each number.
LISTS = {
    "particle": Listed(
        "particle",
        1,
        MOST_PARTICLES,
        {kind: {**entry.usual, "kind": kind} for kind, entry in PARTICLES.items()},
    ),
    "particle.*.layers": Listed("layer", 1, MOST_LAYERS, NEW_LAYERS, "Move inward", "Move outward"),
    "liquid.recipe.ingredients": Listed(
        "ingredient", 0, MOST_INGREDIENTS, {"ingredient": NEW_INGREDIENT}
    ),
    "limits.off": Listed(
        "limit that is off",
        0,
        len(LIMITS),
        {"limit that is off": {"reason": "say here why it does not apply"}},
        once=("limit", tuple(LIMITS)),
    ),
}
#: Parts that a design may have or not, and what a new one starts with.
OPTIONAL: Tables = {"liquid.recipe": {"salt": "KCl"}}
#: Parts of which there are several kinds: the key that tells them apart, and the kinds.
KINDS: dict[str, tuple[str, Mapping[str, Any]]] = {
    "task": ("kind", TASKS),
    "chip": ("layout", LAYOUTS),
    "particle.*": ("kind", PARTICLES),
}


@dataclass(frozen=True)
class Edited:
    """A document after an edit, and what the page needs to find its way in it.

    Parameters
    ----------
    document
        The design as plain data; it may lack or exceed something, which opening it tells.
    place
        Path of what is new, or of what now stands where something was.
    items
        Path of the list whose items moved, or empty.
    order
        Where each item of that list stood before, or None for a new one.
    """

    document: dict[str, Any]
    place: str
    items: str = ""
    order: tuple[int | None, ...] = ()


def open_edit(data: Any, first: Design, library: Tables) -> tuple[Opened, Edited]:
    """Edit the page's design as it wishes; what cannot be used is as it was when it was opened.

    Raises
    ------
    BadRequestError
        If no page of ours could have sent `data`.
    """
    request = read_request(data)
    wish = data.get("wish")
    before = edited(request.document, wish, library)
    after = edited(filled(request), wish, library)
    spare = open_document(before.document, first).design
    return open_document(after.document, spare), after


def edited(document: Mapping[str, Any], wish: Any, library: Tables) -> Edited:
    """Give the document after a wish; `library` holds particles that can be added by their id.

    Raises
    ------
    BadRequestError
        If no page of ours has such a wish for such a document.
    """
    given = [wish.get(key) for key in ("do", "at", "word")] if isinstance(wish, Mapping) else []
    words = [word for word in given if isinstance(word, str)]
    if len(words) != 3:
        raise BadRequestError("a wish needs three words")
    do, at, word = words
    data = copy.deepcopy(dict(document))
    if do == "turn":
        return _turned(data, at, word)
    if at in OPTIONAL:
        return _optional(data, do, at)
    if do == "add":
        return _added(data, at, word, library)
    return _arranged(data, do, at)


def listed(path: str) -> Listed:
    """What is known of the list at a path.

    Raises
    ------
    BadRequestError
        If there is no such list.

    Examples
    --------
    >>> listed("particle.3.layers").one
    'layer'
    """
    found = LISTS.get(_pattern(path))
    if found is None:
        raise BadRequestError("no such list")
    return found


def kinds_of(path: str) -> Mapping[str, Any]:
    """Kinds of the part at a path; none if it has but one."""
    return KINDS.get(_pattern(path), ("", {}))[1]


def _pattern(path: str) -> str:
    return re.sub(r"\.\d+(?=\.|$)", ".*", path)


def _turned(data: dict[str, Any], at: str, word: str) -> Edited:
    """Another kind of a part, with every key that both kinds have."""
    key, kinds = KINDS.get(_pattern(at), ("", {}))
    part = _at(data, at)
    if word not in kinds or not isinstance(part, dict):
        raise BadRequestError("no such kind")
    kind = kinds[word]
    kept = {name: value for name, value in part.items() if name in kind.model_fields}
    part_after = {**_start_of(part, kind), **kept, key: word}
    part.clear()
    part.update(part_after)
    return Edited(data, at)


def _start_of(part: Mapping[str, Any], kind: Any) -> dict[str, Any]:
    """What a part of another kind starts with: a layout nothing, a particle its size."""
    if kind not in PARTICLES.values():
        return {}
    try:
        before = PARTICLES[part["kind"]].model_validate(part, context=FROM_PERSON)
    except (KeyError, TypeError, ValidationError):  # what it is cannot be told now
        return dict(kind.usual)
    radius = float(f"{before.equivalent_radius:.4g}")  # as it would be typed
    return {**kind.usual, **kind.sized(radius)}


def _optional(data: dict[str, Any], do: str, at: str) -> Edited:
    """With or without a part that may be there."""
    parent, _, key = at.rpartition(".")
    place = _at(data, parent)
    if not isinstance(place, dict) or (do, key in place) not in (("add", False), ("remove", True)):
        raise BadRequestError("no such edit")
    if do == "add":
        place[key] = dict(OPTIONAL[at])
        return Edited(data, at)
    del place[key]
    return Edited(data, at)


def _added(data: dict[str, Any], at: str, word: str, library: Tables) -> Edited:
    """A new item at the end of a list."""
    found, items = _list(data, at)
    starts = {**found.starts, **library} if at == "particle" else found.starts
    if word not in starts:
        raise BadRequestError("no such start")
    item = copy.deepcopy(dict(starts[word]))
    if at == "particle":
        item["role"] = "watch" if any(map(_collects, items)) else "collect"
    order = (*range(len(items)), None)
    new = _distinct(found, _named(item, items), items)
    return _placed(data, at, [*items, new], order, len(items))


def _arranged(data: dict[str, Any], do: str, at: str) -> Edited:
    """A list with one of its items copied, taken out or moved."""
    path, _, number = at.rpartition(".")
    found, items = _list(data, path)
    if not (number.isdecimal() and len(number) < 4 and int(number) < len(items)):
        raise BadRequestError("no such item")
    index = int(number)
    order = list(range(len(items)))
    match do:
        case "copy":
            order.insert(index + 1, index)
            place = index + 1
        case "remove":
            del order[index]
            place = min(index, len(order) - 1)
        case "earlier" if index > 0:
            place = index - 1
        case "later" if index + 1 < len(items):
            place = index + 1
        case _:
            raise BadRequestError("no such edit")
    if do in ("earlier", "later"):
        order[index], order[place] = order[place], order[index]
    arranged = [copy.deepcopy(items[source]) for source in order]
    if do == "copy":
        arranged[place] = _distinct(found, _named(arranged[place], items), items)
    return _placed(data, path, arranged, tuple(order), place)


def _placed(
    data: dict[str, Any], path: str, items: list[Any], order: tuple[int | None, ...], place: int
) -> Edited:
    """Put a list of another order where it stood."""
    known = listed(path)
    if not known.least <= len(items) <= known.most:
        raise BadRequestError(f"there must be {known.least} to {known.most}")
    if path == "particle" and not any(map(_collects, items)) and isinstance(items[0], dict):
        items[0]["role"] = "collect"  # a task needs one
    parent, _, key = path.rpartition(".")
    _at(data, parent)[key] = items
    return Edited(data, f"{path}.{place}" if items else path, path, order)


def _collects(particle: Any) -> bool:
    return isinstance(particle, dict) and particle.get("role", "collect") == "collect"


def _named(item: Any, others: list[Any]) -> Any:
    """The item with a name that no other one has: “yeast 2” where there is “yeast”."""
    if not isinstance(item, dict) or not isinstance(item.get("name"), str):
        return item
    taken = {other.get("name") for other in others if isinstance(other, dict)}
    name = item["name"].strip()
    stem, number = re.sub(r" \d{1,3}$", "", name), 1
    while name in taken:
        number += 1
        name = f"{stem[: LONGEST_NAME - 1 - len(str(number))]} {number}".strip()
    return {**item, "name": name}


def _distinct(known: Listed, item: Any, others: list[Any]) -> Any:
    """The item with a value of its own where no two items may share one."""
    if known.once is None or not isinstance(item, dict):
        return item
    key, values = known.once
    taken = {other.get(key) for other in others if isinstance(other, dict)}
    free = [value for value in values if value not in taken]
    return {**item, key: free[0]} if free else item


def _list(data: dict[str, Any], path: str) -> tuple[Listed, list[Any]]:
    """What is known of the list at a path, and its items."""
    parent, _, key = path.rpartition(".")
    found, place = listed(path), _at(data, parent)
    items = place.get(key, []) if isinstance(place, dict) else None
    if not isinstance(items, list):
        raise BadRequestError("no such list")
    return found, items


def _at(data: Any, path: str) -> Any:
    """What stands at a path; None if nothing does."""
    for key in path.split(".") if path else []:
        if isinstance(data, dict):
            data = data.get(key)
        elif isinstance(data, list) and key.isdecimal() and len(key) < 4 and int(key) < len(data):
            data = data[int(key)]
        else:
            return None
    return data
