"""Answers to the page: state, figures and words, as plain data for the browser."""

import math
from collections.abc import Callable, Mapping
from typing import Any

import numpy as np

from model.cautions import cautions, notes, rms_and_peak
from model.design import Design
from model.errors import DesignError
from model.evaluate import POINTS, Evaluation
from model.profile import fingerprint
from model.quantity import DIGITS, format_quantity, format_si
from model.summary import spectrum_rows
from model.verdict import verdict
from model.version import VERSION
from webapp.controls import all_fields, summaries
from webapp.figures.chip import chip_drawing
from webapp.figures.theme import THEMES, Theme, particle_line
from webapp.link import encode
from webapp.recipe_card import recipe_card
from webapp.services import Services
from webapp.state import Options, design_of, read_request

#: A view's own part of an answer: figures, sentences and whatever else it shows.
ViewPart = Callable[[Evaluation, Theme, Options], dict[str, Any]]


def answer(data: Any, services: Services, view: ViewPart) -> dict[str, Any]:
    """Answer one request: the state of the page and the visible view, in one go.

    Raises
    ------
    BadRequestError
        If no page of ours could have sent `data`.
    """
    request = read_request(data)
    try:
        result = services.evaluate(design_of(request))
    except DesignError as problem:
        return error_answer(request.number, problem)
    design, theme = result.design, THEMES[request.theme]
    return {
        **state_answer(request.number, result),
        "texts": tidied(design, request.values),
        "colours": [particle_line(theme, index)["color"] for index in range(len(design.particles))],
        **view(result, theme, request.options),
    }


def spectra(data: Any, services: Services) -> dict[str, Any]:
    """Polarisation spectra as the command line writes them, or which controls cannot be used.

    Raises
    ------
    BadRequestError
        If no page of ours could have sent `data`.
    """
    request = read_request(data)
    try:
        result = services.evaluate(design_of(request))
    except DesignError as problem:
        return error_answer(request.number, problem)
    frequency = np.geomspace(result.frequency[0], result.frequency[-1], POINTS)
    return {"csv": "\n".join([*spectrum_rows(result.design, frequency), ""])}


def state_answer(number: int, result: Evaluation) -> dict[str, Any]:
    """Fingerprint, link, verdict and the knobs' positions of a good design."""
    design = result.design
    found = verdict(result)
    return {
        "number": number,
        "errors": {},
        "link": encode(design),
        "fingerprint": fingerprint(design),
        "title": design.title,
        "verdict": {"inside": found.inside, "headline": found.headline, "sentence": found.sentence},
        "knobs": knobs(design),
        "summaries": summaries(design),
        "drawing": chip_drawing(design.chip),
        "liquid": recipe_card(design.liquid),
        "names": [particle.name for particle in design.particles],
        "cautions": list(cautions(result)),
        "notes": list(notes(result)),
        "caption": caption(design),
    }


def error_answer(number: int, problem: DesignError) -> dict[str, Any]:
    """Which controls cannot be used, and why; the page keeps its last good result."""
    return {
        "number": number,
        "errors": {error.path: _sentence(error.problem) for error in problem.errors},
    }


def knobs(design: Design) -> dict[str, dict[str, Any]]:
    """Value, text and side note of each knob of the operating strip, by field."""
    drive, conductivity = design.drive, design.liquid.conductivity
    relaxation = conductivity / (2.0 * math.pi * design.liquid.state.permittivity)
    return {
        "drive.frequency": {
            "value": drive.frequency,
            "text": format_si(drive.frequency, "Hz", DIGITS),
            "note": f"liquid relaxes at {format_si(relaxation, 'Hz')}",
        },
        "drive.voltage": {
            "value": drive.voltage,
            "most": round(max(1.5 * drive.voltage_limit, drive.voltage), 2),
            "text": format_si(drive.voltage, "V", DIGITS),
            "note": rms_and_peak(drive.voltage),
        },
        "liquid.conductivity": {
            "value": conductivity,
            "text": format_si(conductivity, "S/m", DIGITS),
            "note": format_quantity(conductivity, "uS/cm", 4),
        },
    }


def tidied(design: Design, values: Mapping[str, str | bool]) -> dict[str, str]:
    """How controls would write what was typed differently: ``50`` becomes ``50 µm``."""
    knob_texts = {path: found["text"] for path, found in knobs(design).items()}
    texts = {field.path: field.text for field in all_fields(design)} | knob_texts
    return {
        path: text
        for path, typed in values.items()
        if isinstance(text := texts.get(path, typed), str) and text != typed
    }


def caption(design: Design) -> str:
    """One line that traces a figure to its inputs: title, operating point, fingerprint, version."""
    drive, liquid = design.drive, design.liquid
    point = (
        f"{format_si(drive.frequency, 'Hz')}, {format_si(drive.voltage, 'V')} peak to peak, "
        f"{format_si(liquid.conductivity, 'S/m')}, {format_quantity(liquid.temperature, 'degC', 3)}"
    )
    return f"{design.title} · {point} · {fingerprint(design)} · Slackwater {VERSION}"


def _sentence(text: str) -> str:
    return text[:1].upper() + text[1:]
