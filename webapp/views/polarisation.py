"""The polarisation view: spectra, crossovers against conductivity, spinning, and the table."""

from typing import Any

from dash import html
from dash.development.base_component import Component

from model.evaluate import Evaluation
from webapp.figures.crossover_map import crossover_figure, crossover_sentence
from webapp.figures.polarisation import (
    imaginary_figure,
    imaginary_sentence,
    real_figure,
    real_sentence,
)
from webapp.figures.polarisation_table import HEADINGS, table_csv, table_rows
from webapp.figures.rotation import (
    rotation_figure,
    rotation_of,
    rotation_sentence,
    travel_figure,
    travel_of,
    travel_sentence,
)
from webapp.figures.theme import Theme
from webapp.state import NO_OPTIONS, Options
from webapp.views.card import card


def polarisation_view() -> Component:
    """Cards of the view; the page's script fills the key, the figures and the table."""
    return html.Div(
        [
            _key(),
            card("real-part", "Real part of the polarisation"),
            card("imaginary-part", "Imaginary part of the polarisation"),
            card(
                "crossover-map",
                "Crossovers against conductivity",
                sets=("liquid.conductivity", "drive.frequency"),
            ),
            card("rotation", "Spinning in a rotating field"),
            card("travel", "Drift along the travelling field"),
            _table(),
        ],
        className="polarisation-grid",
    )


def _key() -> Component:
    """Place for the particles' names beside their lines, and what the marks mean."""
    named: dict[str, Any] = {"aria-label": "Key to all figures"}
    marks = [("▲", "rises through zero"), ("▼", "falls"), ("┊", "operating frequency")]
    words = [html.Span([html.B(sign), f" {word}"]) for sign, word in marks]
    return html.Section(
        [html.Ul(id="polarisation-key"), html.Div(words, className="marks")],
        className="card key-card",
        **named,
    )


def _table() -> Component:
    """The table's head, with buttons that save it and the spectra."""
    named: dict[str, Any] = {"aria-labelledby": "polarisation-heading"}
    heads = [html.Th(word, scope="col") for word in HEADINGS]
    buttons = [
        html.Button("Table as CSV", id="save-polarisation", className="export"),
        html.Button("Spectra as CSV", id="save-spectra", className="export"),
    ]
    return html.Section(
        [
            html.Div(
                [
                    html.H2("Polarisation by particle", id="polarisation-heading"),
                    html.Div(buttons, className="exports"),
                ],
                className="card-head",
            ),
            html.Table(
                [html.Thead(html.Tr(heads)), html.Tbody(id="polarisation-rows")],
                **named,
            ),
        ],
        className="card table-card",
    )


def polarisation_part(
    result: Evaluation, theme: Theme, options: Options = NO_OPTIONS
) -> dict[str, Any]:
    """Every figure with its sentence, that of travelling only where the field does, the table."""
    rotation, travel = rotation_of(result), travel_of(result)
    figures = {
        "real-part": real_figure(result, theme),
        "imaginary-part": imaginary_figure(result, theme),
        "crossover-map": crossover_figure(result, theme),
        "rotation": rotation_figure(rotation, result, theme),
    }
    sentences = {
        "real-part": real_sentence(result),
        "imaginary-part": imaginary_sentence(result),
        "crossover-map": crossover_sentence(result),
        "rotation": rotation_sentence(rotation, result),
    }
    if travel is not None:
        figures["travel"] = travel_figure(travel, result, theme)
        sentences["travel"] = travel_sentence(result)
    return {
        "figures": figures,
        "sentences": sentences,
        "table": {"rows": table_rows(result, theme), "csv": table_csv(result)},
    }
