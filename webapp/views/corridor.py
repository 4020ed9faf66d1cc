"""The corridor view, home of the dashboard: its cards and what fills them."""

from typing import Any

from dash import html
from dash.development.base_component import Component

from model.evaluate import Evaluation
from webapp.figures.corridor import corridor_figure, corridor_sentence
from webapp.figures.force import force_figure, force_sentence
from webapp.figures.ledger import ledger_rows
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
            card("corridor", "Voltage corridor", sets=("drive.frequency", "drive.voltage")),
            ledger,
            card("force", "Force on each particle"),
            card("heating", "Temperature rise"),
            card("electrothermal", "Electrothermal-flow risk"),
        ],
        className="corridor-grid",
    )


def corridor_part(
    result: Evaluation, theme: Theme, options: Options = NO_OPTIONS
) -> dict[str, Any]:
    """Every figure of the view with its sentence, and the ledger's rows; all are always shown."""
    heating = sweep_of(result, "temperature_rise")
    electrothermal = sweep_of(result, "electrothermal_ratio")
    return {
        "figures": {
            "corridor": corridor_figure(result, theme),
            "force": force_figure(result, theme),
            "heating": heating_figure(heating, result, theme),
            "electrothermal": electrothermal_figure(electrothermal, result, theme),
        },
        "sentences": {
            "corridor": corridor_sentence(result),
            "force": force_sentence(result),
            "heating": heating_sentence(heating, result),
            "electrothermal": electrothermal_sentence(electrothermal, result),
        },
        "ledger": ledger_rows(result, theme),
    }
