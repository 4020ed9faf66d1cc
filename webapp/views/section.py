"""The section view: the chip's cross-section with field, force, warmth and flow, and its load."""

from typing import Any

from dash import html
from dash.development.base_component import Component

from model.evaluate import Evaluation
from model.maps import Probe, probe, section_maps
from model.quantity import format_si
from webapp.cache import chip_key
from webapp.figures.impedance import impedance_figure, impedance_sentence
from webapp.figures.panel import MICRO, frame
from webapp.figures.section import (
    default_place,
    field_figure,
    flow_figure,
    force_figure,
    temperature_figure,
)
from webapp.figures.section_words import (
    field_sentence,
    flow_sentence,
    force_sentence,
    temperature_sentence,
)
from webapp.figures.share import share_figure, share_sentence
from webapp.figures.theme import Theme
from webapp.state import NO_OPTIONS, Options
from webapp.views.card import card

#: Panels by name, with heading and the shorter word of the choice between them.
PANELS = {
    "field": ("Electric field", "Field"),
    "force": ("Force on a particle", "Force"),
    "temperature": ("Temperature rise", "Temperature"),
    "flow": ("Electrothermal flow", "Flow"),
}
#: What is shown when no panel is wanted alone.
ALL = "four"


def section_view() -> Component:
    """Cards of the view, with the place where the page's script makes its choices."""
    named: dict[str, Any] = {"aria-label": "What is shown"}
    return html.Div(
        [
            html.Section(
                [
                    html.Div(
                        [
                            html.Div(id="section-show", className="choices", **_choices()),
                            html.Div(id="section-particle"),
                            html.Div(id="section-place"),
                        ],
                        className="section-choices",
                    ),
                    html.Div(id="section-readout", role="status"),
                ],
                className="card section-bar",
                **named,
            ),
            *[card(f"{name}-map", heading) for name, (heading, _) in PANELS.items()],
            card("impedance", "What the generator sees"),
            card("share", "What the liquid gets"),
        ],
        className="section-grid",
        id="section-grid",
    )


def _choices() -> dict[str, Any]:
    """Names and words of the choices, for the page's script."""
    words = [("four", "All four"), *((name, word) for name, (_, word) in PANELS.items())]
    return {"data-choices": ";".join(f"{name}:{word}" for name, word in words)}


def section_part(result: Evaluation, theme: Theme, options: Options = NO_OPTIONS) -> dict[str, Any]:
    """Figures of the wanted panels with their sentences, and what the probe reads."""
    particles = result.design.particles
    particle = particles[options.particle if options.particle < len(particles) else 0]
    wanted = [name for name in PANELS if options.show in (name, ALL)] or list(PANELS)
    key = f"{chip_key(result.design)}/{'+'.join(wanted)}"
    held = options.held == key
    place = options.probe or default_place(result)
    maps = section_maps(result, particle)
    figures = {
        "field": lambda: field_figure(result, maps, place, theme, held),
        "force": lambda: force_figure(result, maps, particle, place, theme),
        "temperature": lambda: temperature_figure(result, maps, place, theme, held),
        "flow": lambda: flow_figure(result, maps, place, theme),
    }
    sentences = {
        "field": lambda: field_sentence(result, maps),
        "force": lambda: force_sentence(result, maps, particle),
        "temperature": lambda: temperature_sentence(result, maps),
        "flow": lambda: flow_sentence(result, maps),
    }
    return {
        "figures": {f"{name}-map": figures[name]() for name in wanted}
        | {"impedance": impedance_figure(result, theme), "share": share_figure(result, theme)},
        "sentences": {f"{name}-map": sentences[name]() for name in wanted}
        | {"impedance": impedance_sentence(result), "share": share_sentence(result)},
        "held": key,
        "aspect": round(frame(result.design.chip).aspect, 4),
        "probe": {
            "x": f"{place[0] * MICRO:.4g}",
            "y": f"{place[1] * MICRO:.4g}",
            "readings": _readings(probe(result, particle, *place), particle.name),
        },
    }


def _readings(found: Probe, name: str) -> list[dict[str, str]]:
    """What the probe reads, as words and numbers."""
    readings = []
    if found.field is not None:
        readings.append({"label": "Field", "value": f"{format_si(found.field, 'V/m')} rms"})
    if found.force is not None:
        size, parts = _vector(found.force, "N")
        readings.append({"label": f"Force on {name}", "value": size, "note": parts})
    if found.rise is not None:
        readings.append({"label": "Temperature rise", "value": format_si(found.rise, "K")})
    if found.velocity is not None:
        size, parts = _vector(found.velocity, "m/s")
        readings.append({"label": "Electrothermal flow", "value": size, "note": parts})
    if found.field is None:
        where = "in a wall" if found.rise is not None else "outside the chip"
        readings.append({"label": "Place", "value": where})
    return readings


def _vector(vector: tuple[float, float], unit: str) -> tuple[str, str]:
    """Size of a vector, and its parts in words."""
    x, y = vector
    size = (x**2 + y**2) ** 0.5
    along = "along the flow" if x >= 0 else "against it"
    across = "up" if y >= 0 else "down"
    parts = f"{format_si(abs(x), unit)} {along}, {format_si(abs(y), unit)} {across}"
    return format_si(size, unit), parts
