"""The corridor view, home of the dashboard: its cards and what fills them."""

from typing import Any

from dash import html
from dash.development.base_component import Component

from model.evaluate import Evaluation
from model.headroom import best_point
from model.quantity import format_si
from model.verdict import format_headroom
from webapp.figures.corridor import corridor_figure, corridor_sentence
from webapp.figures.force import force_figure, force_sentence
from webapp.figures.headroom import headroom_figure, headroom_sentence, map_of
from webapp.figures.ledger import ledger_rows
from webapp.figures.sensitivity import sensitivity_rows, sensitivity_sentence
from webapp.figures.sweeps import (
    electrothermal_figure,
    electrothermal_sentence,
    heating_figure,
    heating_sentence,
    sweep_of,
)
from webapp.figures.theme import Theme
from webapp.state import NO_OPTIONS, Options
from webapp.views.card import card


def corridor_view() -> Component:
    """Cards of the view; their figures are drawn by the browser."""
    ledger = html.Section(
        [
            html.H2("Limits ledger"),
            html.P(
                "Worst first. Headroom is how many times the voltage may grow before the limit "
                "is met; for the task, how far it lies above the least.",
                className="lead",
            ),
            html.Ol(id="ledger"),
        ],
        className="card ledger-card",
    )
    return html.Div(
        [
            card(
                "corridor",
                "Voltage corridor",
                html.Button("Best point here", id="best-point"),
                sets=("drive.frequency", "drive.voltage"),
            ),
            ledger,
            card(
                "headroom",
                "Headroom over frequency and conductivity",
                sets=("drive.frequency", "liquid.conductivity"),
            ),
            card("force", "Force on each particle"),
            _sensitivity(),
            card("heating", "Temperature rise"),
            card("electrothermal", "Electrothermal-flow risk"),
        ],
        className="corridor-grid",
    )


def _sensitivity() -> Component:
    return html.Section(
        [
            html.H2("What moves the headroom"),
            html.P(id="sentence-sensitivity", className="lead"),
            html.Ol(id="sensitivity"),
        ],
        className="card card-sensitivity",
    )


def corridor_part(
    result: Evaluation, theme: Theme, options: Options = NO_OPTIONS
) -> dict[str, Any]:
    """Every figure of the view with its sentence, and the ledger's rows; all are always shown."""
    heating = sweep_of(result, "temperature_rise")
    electrothermal = sweep_of(result, "electrothermal_ratio")
    found = map_of(result)
    rows = sensitivity_rows(result) if options.resting else None
    return {
        "figures": {
            "corridor": corridor_figure(result, theme),
            "headroom": headroom_figure(found, result, theme),
            "force": force_figure(result, theme),
            "heating": heating_figure(heating, result, theme),
            "electrothermal": electrothermal_figure(electrothermal, result, theme),
        },
        "sentences": {
            "corridor": corridor_sentence(result),
            "headroom": headroom_sentence(found, result),
            "force": force_sentence(result),
            "heating": heating_sentence(heating, result),
            "electrothermal": electrothermal_sentence(electrothermal, result),
        },
        "ledger": ledger_rows(result, theme, advised=options.resting),
        "best": _best(result),
        **({} if rows is None else {"sensitivity": _ranked(result, rows)}),
    }


def _best(result: Evaluation) -> dict[str, Any] | None:
    """Where the corridor is widest, for the button that goes there."""
    found = best_point(result)
    if found is None:
        return None
    return {
        "frequency": found.frequency,
        "voltage": found.voltage,
        "words": f"{format_si(found.frequency, 'Hz')} and {format_si(found.voltage, 'V')} peak to "
        f"peak: {format_headroom(found.headroom)} headroom, the most in this liquid",
    }


def _ranked(result: Evaluation, rows: list[dict[str, Any]]) -> dict[str, Any]:
    return {"rows": rows, "sentence": sensitivity_sentence(result, rows)}
