"""Buttons and choices beside the inputs that change what a design is made of.

What they ask for is an edit of :mod:`webapp.edits`; the page's script sends it. What cannot be
done has its button greyed, not taken away, and says why.
"""

from typing import Any

import dash_mantine_components as dmc
from dash import html
from dash.development.base_component import Component

from webapp.edits import Listed, kinds_of, listed


def item_buttons(path: str, count: int) -> Component:
    """Copy, move and remove the item at a path, of a list of `count`."""
    items, _, number = path.rpartition(".")
    known, index = listed(items), int(number)
    name = f"{known.one} {index + 1}"
    buttons = [
        _button("copy", path, f"Copy {name}", full(known, count)),
        _button("earlier", path, f"{known.earlier}: {name}", "It is the first." * (index == 0)),
        _button("later", path, f"{known.later}: {name}", "It is the last." * (index + 1 == count)),
        _button("remove", path, f"Remove {name}", _bare(known, count)),
    ]
    return html.Div(buttons, className="item-buttons")


def add_buttons(path: str, count: int) -> Component:
    """Add an item to the list at a path; particles also from the library."""
    known = listed(path)
    shelf = [_library_button(full(known, count))] if path == "particle" else []
    buttons = [
        _button("add", path, f"Add {_article(word)}", full(known, count), word)
        for word in known.starts
    ]
    return _adders(path, [*shelf, *buttons])


def _adders(path: str, buttons: list[Component]) -> Component:
    """Buttons that add something at a path, which the page finds by it."""
    place: dict[str, Any] = {"data-part": path}
    return html.Div(buttons, className="add-buttons", **place)


def part_button(path: str, *, there: bool) -> Component:
    """Take out the part at a path, that a design may have or not, or add it."""
    name = path.rpartition(".")[2]
    if there:
        return html.Div(_button("remove", path, f"Remove the {name}", ""), className="item-buttons")
    button = _button("add", path, f"Add {_article(name)}", "", name)
    return _adders(path, [button])


def _library_button(reason: str) -> Component:
    """Open the dialog of published particles."""
    data: dict[str, Any] = {
        "data-library": "open",
        "aria-disabled": "true" if reason else "false",
        "aria-haspopup": "dialog",
    }
    words = reason or "Published particles, each with its source"
    return html.Button("From the library…", className="edit edit-library", title=words, **data)


def kind_choice(path: str, label: str, words: str, value: str) -> Component:
    """Choice of the kind of a part; another one has other fields, so that it opens anew."""
    return dmc.Select(
        id={"turn": path.replace(".", "/")},
        label=label,
        description=words,
        data=[{"value": name, "label": name.replace("-", " ")} for name in kinds_of(path)],
        value=value,
        allowDeselect=False,
        checkIconPosition="right",
        size="sm",
        className="wide",
    )


def full(known: Listed, count: int) -> str:
    """Why a list takes no more; empty if it does."""
    return f"There can be no more than {known.most} {known.one}s." * (count >= known.most)


def _bare(known: Listed, count: int) -> str:
    """Why nothing can be taken out of a list; empty if it can."""
    return f"A design needs at least one {known.one}." * (count <= known.least)


def _article(word: str) -> str:
    """A start's word in a sentence.

    >>> _article("ellipsoid"), _article("solid-sphere")
    ('an ellipsoid', 'a solid sphere')
    """
    plain = word.replace("-", " ")
    return f"{'an' if plain[0] in 'aeiou' else 'a'} {plain}"


def _button(do: str, at: str, label: str, reason: str, word: str = "") -> Component:
    """One button; those with a word show it, the others an icon."""
    data: dict[str, Any] = {
        "data-do": do,
        "data-at": at,
        "data-word": word,
        "aria-label": f"{label}. {reason}" if reason else label,
        "aria-disabled": "true" if reason else "false",
    }
    shown = word.replace("-", " ") or None
    return html.Button(shown, className=f"edit edit-{do}", title=reason or label, **data)
