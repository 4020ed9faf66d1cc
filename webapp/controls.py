"""The inputs at the left, generated from the fields that the design's parts declare."""

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

import dash_mantine_components as dmc
from dash import dcc, html
from dash.development.base_component import Component
from pydantic import BaseModel

from model.declare import (
    Choice,
    Count,
    Declared,
    FileName,
    Flag,
    Quantities,
    Quantity,
    declarations,
)
from model.design import Design
from model.layout import FlatChannel, Layout
from model.particle import Particle
from model.quantity import format_quantity
from webapp.edit_buttons import add_buttons, item_buttons, kind_choice, part_button
from webapp.edits import OPTIONAL, listed
from webapp.figures.theme import DASHES
from webapp.recipe_card import recipe_place

#: Fields that live in the operating strip and the header instead.
ELSEWHERE = {"drive.frequency", "drive.voltage", "liquid.conductivity", "title"}

#: Longest option, in letters, that a control of half the width shows whole.
_FITS = 12
#: Attributes of what only decorates.
HIDDEN: dict[str, Any] = {"aria-hidden": "true"}


@dataclass(frozen=True)
class Field:
    """One declared field of a design, with its place in the profile."""

    path: str
    declared: Declared
    value: Any

    @property
    def text(self) -> str | bool:
        """What the control shows: text as people write it, or yes and no."""
        return self.declared.shown(self.value)


def fields(part: BaseModel, path: str) -> Iterator[Field]:
    """Declared fields of one part, not of the parts within it; its name before all others.

    A layout's own fields stand before those that it shares, a particle's behind them.
    """
    found = sorted(declarations(type(part)), key=lambda item: item[0] != "name")
    if isinstance(part, Layout):
        found.sort(key=lambda item: item[0] in FlatChannel.model_fields)
    if isinstance(part, Particle):
        found.sort(key=lambda item: item[0] not in Particle.model_fields)
    for key, declared in found:
        place = _join(path, key)
        if place not in ELSEWHERE:
            yield Field(place, declared, getattr(part, key))


def inner_parts(part: BaseModel, path: str) -> Iterator[tuple[str, str, BaseModel]]:
    """Path, heading and part of everything within a part, e.g. a cell's layers."""
    lists = dict(_lists(part))
    for name, info in type(part).model_fields.items():
        value, key = getattr(part, name), info.alias or name
        if isinstance(value, BaseModel):
            yield _join(path, key), key.replace("_", " ").capitalize(), value
        for index, item in enumerate(lists.get(key, ())):
            place = _join(path, key)
            yield f"{place}.{index}", f"{listed(place).one.capitalize()} {index + 1}", item


def _join(path: str, key: str) -> str:
    return f"{path}.{key}" if path else key


def all_fields(part: BaseModel, path: str = "") -> Iterator[Field]:
    """Every declared field of a part and of everything within it."""
    yield from fields(part, path)
    for inner_path, _, inner in inner_parts(part, path):
        yield from all_fields(inner, inner_path)


def inputs_panel(design: Design) -> list[Component]:
    """Every section of the inputs, folded by part."""
    sections = [
        (
            "task",
            "Task",
            [*_question(design), _task(design), *part_controls(design.task, "task")],
        ),
        (
            "chip",
            "Chip",
            [_layout(design), html.Div(id="chip-drawing"), *part_controls(design.chip, "chip")],
        ),
        ("liquid", "Liquid", [*part_controls(design.liquid, "liquid"), recipe_place()]),
        ("particles", "Particles", _particles(design)),
        ("drive", "Drive", part_controls(design.drive, "drive")),
        ("electrode", "Electrodes", part_controls(design.electrode, "electrode")),
        ("flow", "Flow", part_controls(design.flow, "flow")),
        ("limits", "Limits", part_controls(design.limits, "limits")),
    ]
    return [
        _section(key, heading, content, key in ("chip", "particles"))
        for key, heading, content in sections
    ]


def summaries(design: Design) -> dict[str, str]:
    """The quiet words at the right of each section's heading."""
    defaults = type(design).model_fields["limits"].default
    changed = sum(
        getattr(design.limits, key) != getattr(defaults, key)
        for key in type(design.limits).model_fields
    )
    liquid, drive, electrode = design.liquid, design.drive, design.electrode
    recipe = "" if liquid.recipe is None else f", with {liquid.recipe.salt}"
    film = "" if electrode.film_thickness is None else ", film"
    return {
        "task": design.task.label,
        "chip": design.chip.layout.replace("-", " "),
        "liquid": format_quantity(liquid.temperature, "degC") + recipe,
        "particles": str(len(design.particles)),
        "drive": f"{format_quantity(drive.source_resistance, 'ohm')} source",
        "electrode": electrode.interface.replace("-", " ") + film,
        "flow": format_quantity(design.flow.rate, "uL/min", 4),
        "limits": f"{changed} changed" if changed else "defaults",
    }


def part_controls(part: BaseModel, path: str) -> list[Component]:
    """Controls of a part and of everything within it; details folded away."""
    found = list(fields(part, path))
    content: list[Component] = []
    if any(not field.declared.detail for field in found):
        plain = [control(field) for field in found if not field.declared.detail]
        content.append(html.Div(plain, className="fields"))
    details = [control(field) for field in found if field.declared.detail]
    if details:
        folded = html.Div(details, className="fields")
        more = [html.Summary("More"), folded]
        content.append(html.Details(more, className="more", **_fold(f"{path}.more")))
    counts = {_join(path, key): len(items) for key, items in _lists(part)}
    for inner_path, heading, inner in inner_parts(part, path):
        head: list[Component] = [html.H4(heading, className="inner-heading")]
        count = counts.get(inner_path.rpartition(".")[0])
        if count is not None:
            head.append(item_buttons(inner_path, count))
        if inner_path in OPTIONAL:
            head.append(part_button(inner_path, there=True))
        inside = [html.Div(head, className="inner-head"), *part_controls(inner, inner_path)]
        content.append(html.Div(inside, className="inner", **_part(inner_path)))
    content += [add_buttons(items, count) for items, count in counts.items()]
    content += [part_button(missing, there=False) for missing in _missing(part, path)]
    return content


def _missing(part: BaseModel, path: str) -> Iterator[str]:
    """Paths of those parts that a part may have and has not."""
    for inner in OPTIONAL:
        parent, _, key = inner.rpartition(".")
        if parent == path and getattr(part, key) is None:
            yield inner


def _lists(part: BaseModel) -> Iterator[tuple[str, tuple[Any, ...]]]:
    """Key and items of every list of parts within a part."""
    known = dict(declarations(type(part)))
    for name, info in type(part).model_fields.items():
        value, key = getattr(part, name), info.alias or name
        if isinstance(value, tuple) and key not in known:
            yield key, value


def _fold(name: str) -> dict[str, Any]:
    """Name of a fold, so that it stays open where the inputs are made anew."""
    return {"data-fold": name}


def _part(path: str) -> dict[str, Any]:
    """Path of a part, so that the page finds it."""
    return {"data-part": path}


def control(field: Field) -> Component:
    """The control of one field; one that may not matter is hidden by the page where it does not."""
    found = _input(field)
    if field.declared.only_with is None:
        return found
    other, word = field.declared.only_with
    place: dict[str, Any] = {"data-only": _beside(field.path, other), "data-word": word}
    return html.Div(found, className="only", **place)


def _input(field: Field) -> Component:
    """Switch, select or text input with label, help and range, by the kind of declaration."""
    declared = field.declared
    base: dict[str, Any] = {
        "id": control_id(field.path, flag=isinstance(declared, Flag)),
        "label": declared.label,
        "description": help_text(declared),
        "size": "sm",
    }
    if isinstance(declared, Flag):
        return dmc.Switch(**base, checked=bool(field.text), className="wide")
    if isinstance(declared, Choice):
        options = [{"value": key, "label": label} for key, label in declared.options.items()]
        longest = max(len(label) for label in declared.options.values())
        return dmc.Select(
            **base,
            data=options,
            value=field.text,
            allowDeselect=False,
            checkIconPosition="right",
            className="wide" if longest > _FITS else "",
        )
    if isinstance(declared, FileName):
        return _file(base, field, declared)
    narrow = isinstance(declared, Quantity | Count) and not isinstance(declared, Quantities)
    wide = "" if narrow else "wide"
    placeholder = declared.empty if declared.optional else ""
    return dmc.TextInput(
        **base, value=field.text, debounce=True, className=wide, placeholder=placeholder
    )


def _beside(path: str, key: str) -> str:
    """Path of another field of the same part.

    >>> _beside("chip.floor.thickness", "outside")
    'chip.floor.outside'
    """
    return _join(path.rpartition(".")[0], key)


def _file(base: dict[str, Any], field: Field, declared: FileName) -> Component:
    """Name of a file that is chosen, not typed: what counts is its contents."""
    name = dmc.TextInput(**base, value=field.text, readOnly=True, placeholder="none chosen")
    choose = dmc.Button("Choose file", variant="default", size="sm")
    upload = dcc.Upload(choose, id="map-upload", accept=declared.accept)
    return html.Div([name, upload], className="wide file-field")


def control_id(path: str, *, flag: bool = False) -> dict[str, str]:
    """Id of the control of a field; slashes, as the framework keeps dots for itself.

    >>> control_id("chip.gap")
    {'field': 'chip/gap'}
    """
    return {"flag" if flag else "field": path.replace(".", "/")}


def help_text(declared: Declared) -> str:
    """One sentence of help, with what is allowed and where a default comes from."""
    pieces = [declared.help]
    if isinstance(declared, Quantity | Count):
        pieces.append(f"Allowed: {declared.allowed()}.")
    if declared.source:
        pieces.append(f"Source: {declared.source}.")
    return " ".join(pieces)


def _question(design: Design) -> list[Component]:
    questions = [field for field in fields(design, "") if field.path == "question"]
    return [html.Div([control(field) for field in questions], className="fields")]


def _task(design: Design) -> Component:
    """Choice of the task."""
    words = "What the chip is to do; fields that both tasks have keep their values."
    return html.Div(kind_choice("task", "Task", words, design.task.kind), className="fields")


def _layout(design: Design) -> Component:
    """Choice of the electrode layout."""
    words = "How the electrodes lie. Fields that both layouts have keep their values."
    return html.Div(kind_choice("chip", "Layout", words, design.chip.layout), className="fields")


def _particles(design: Design) -> list[Component]:
    count = len(design.particles)
    found = [_particle(particle, index, count) for index, particle in enumerate(design.particles)]
    return [*found, add_buttons("particle", count)]


def _particle(particle: Particle, index: int, count: int) -> Component:
    """One particle, folded; its buttons stand in its head, and before its content for the tab key.

    They are beside the fold and not in its summary, which is a button itself.
    """
    path = f"particle.{index}"
    swatch = html.Span(className=f"swatch dash-{DASHES[index % len(DASHES)]}", **HIDDEN)
    name = html.Span(particle.name, id=f"particle-name-{index}")
    kind = html.Span(particle.kind.replace("-", " "), className="section-note")
    words = "How it is built. Fields that both kinds have keep their values."
    choice = kind_choice(path, "Kind", words, particle.kind)
    content = [html.Div(choice, className="fields"), *part_controls(particle, path)]
    fold = html.Details([html.Summary([swatch, name, kind]), *content], **_fold(path))
    return html.Div([item_buttons(path, count), fold], className="particle", **_part(path))


def _section(key: str, heading: str, content: list[Component], opened: bool) -> Component:
    summary = html.Summary(
        [html.H3(heading), html.Span(id=f"summary-{key}", className="section-note")]
    )
    return html.Details(
        [summary, *content], className="section", open=opened, id=f"section-{key}", **_fold(key)
    )
