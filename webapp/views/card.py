"""A card that holds one figure: heading, export buttons, the figure, and one sentence."""

from typing import Any

from dash import html
from dash.development.base_component import Component


def card(
    name: str, heading: str, *more: Component, sets: tuple[str, str] | None = None
) -> Component:
    """Place for the figure `name`; the browser draws into it. `more` stands beside the heading.

    `sets` are the knobs that a click into the figure moves, along and up.
    """
    place: dict[str, Any] = {
        **({"data-sets-x": sets[0], "data-sets-y": sets[1]} if sets else {}),
        "role": "img",
        "aria-label": heading,
        "aria-describedby": f"sentence-{name}",
    }
    exports = [_export(name, heading, kind) for kind in ("png", "svg")]
    return html.Section(
        [
            html.Div(
                [html.H2(heading), *more, html.Div(exports, className="exports")],
                className="card-head",
            ),
            html.Div(id=f"figure-{name}", className="figure", **place),
            html.P(id=f"sentence-{name}", className="sentence"),
        ],
        className=f"card card-{name}",
    )


def _export(name: str, heading: str, kind: str) -> Component:
    """Button that saves the figure as a picture."""
    data: dict[str, Any] = {
        "data-figure": name,
        "data-format": kind,
        "aria-label": f"{heading} as {kind.upper()}",
    }
    title = f"Save as {kind.upper()} with a caption line"
    return html.Button(kind.upper(), className="export", title=title, **data)
