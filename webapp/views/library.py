"""The library of particles as a dialog: laid out empty, filled by the page when first opened."""

from collections.abc import Iterable
from itertools import groupby
from typing import Any

from dash import html
from dash.development.base_component import Component

from model.declare import Choice, declarations
from model.library import Entry, Origin, Row

#: Ends of the labels of those numbers that stand beside a title, in their order there.
_TELLING = ("radius", "semi-axes", "membrane capacitance", "surface conductance", "zeta potential")


def library_dialog() -> Component:
    """The dialog, empty."""
    named: dict[str, Any] = {"aria-labelledby": "library-heading"}
    close: dict[str, Any] = {"aria-label": "Close the library"}
    return html.Dialog(
        [
            html.Div(
                [
                    html.H2("Published particles", id="library-heading"),
                    html.Div(id="library-search"),
                    html.Span(id="library-count", role="status"),
                    html.Button(className="edit edit-remove", id="library-close", **close),
                ],
                className="library-head",
            ),
            html.P(
                "Values as published, of one culture and one method each. Sources that disagree "
                "stand side by side; choose the one that is nearest to your sample.",
                className="lead",
            ),
            html.Div(id="library-list"),
        ],
        id="library",
        **named,
    )


def library_list(entries: Iterable[Entry]) -> list[dict[str, Any]]:
    """Every entry by group, as plain data for the browser."""
    by_group = sorted(entries, key=lambda entry: entry.group)
    return [
        {"group": group.capitalize(), "entries": [_entry(entry) for entry in found]}
        for group, found in groupby(by_group, key=lambda entry: entry.group)
    ]


def _entry(entry: Entry) -> dict[str, Any]:
    rows = entry.rows()
    told = [row for end in _TELLING for row in rows if row.label.lower().endswith(end)]
    return {
        "id": entry.id,
        "title": entry.title,
        "source": entry.source,
        "method": entry.method,
        "measured": entry.measured_in,
        "note": entry.note,
        "numbers": [_number(row) for row in told],
        "rows": [_row(row) for row in rows],
    }


def _number(row: Row) -> str:
    """A number beside a title, e.g. ``radius 3.29 µm``."""
    return f"{row.label[:1].lower()}{row.label[1:]} {row.value}"


def _row(row: Row) -> dict[str, str]:
    return {
        "label": row.label,
        "value": row.value,
        "status": row.status,
        "word": _STATUS[row.status],
        "remark": "; ".join(filter(None, (row.spread, row.basis))),
    }


def _statuses() -> dict[str, str]:
    """Each status in words."""
    declared = dict(declarations(Origin))["status"]
    return dict(declared.options) if isinstance(declared, Choice) else {}


_STATUS = _statuses()
