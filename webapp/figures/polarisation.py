"""Real and imaginary part of the polarisation factor of every particle against frequency."""

from collections.abc import Callable, Sequence
from typing import Any

import numpy as np

from model.crossovers import Crossover
from model.evaluate import Evaluation
from model.particle import Particle
from model.quantity import format_quantity, format_si
from webapp.figures.behaviour import behaviour
from webapp.figures.curves import named_on_pictures, operating_line, particle_curves, span
from webapp.figures.theme import (
    Figure,
    Theme,
    axis,
    layout,
    log_axis,
    numbers,
    particle_line,
    plain,
)

#: Re K of a sphere lies within −½ and 1, Im K within ±¾; Im K of cells is a few tenths.
_REAL, _IMAGINARY = (0.5, 1.0), (0.1, 0.1)
#: Marks of one direction that a particle has room for; more make more room.
_MARKS = 2
#: What has no place on the axis is drawn this many times beyond its end.
_BEYOND = 30.0
#: Of so many particles a sentence tells all, of more only so many.
_ALL_TOLD, _FIRST_TOLD = 4, 2


def real_figure(result: Evaluation, theme: Theme) -> Figure:
    """Draw Re K with every crossover, a triangle up where it rises and down where it falls."""
    curves = [result.spectrum.polarisation(one).real for one in result.design.particles]
    ends = span(curves, _REAL)
    data = particle_curves(
        result.design, theme, result.frequency, curves, "Re K %{y:.3~g} at %{x:.3~s}Hz"
    )
    data.append(operating_line(result.design, theme, ends))
    data += [_crossings(result, theme, rising) for rising in (True, False)]
    return spectrum_figure(result, theme, data, "Re K", ends)


def imaginary_figure(result: Evaluation, theme: Theme) -> Figure:
    """Draw Im K."""
    curves = [result.spectrum.polarisation(one).imag for one in result.design.particles]
    ends = span(curves, _IMAGINARY)
    data = particle_curves(
        result.design, theme, result.frequency, curves, "Im K %{y:.3~g} at %{x:.3~s}Hz"
    )
    data.append(operating_line(result.design, theme, ends))
    return spectrum_figure(result, theme, data, "Im K", ends)


def spectrum_figure(
    result: Evaluation,
    theme: Theme,
    data: list[dict[str, Any]],
    title: str,
    ends: tuple[float, float],
) -> Figure:
    """Figure over all frequencies with a clear zero; the names of particles stand on the page."""
    frequency = result.frequency
    x_axis = log_axis(theme, "Frequency", float(frequency[0]), float(frequency[-1]), "Hz")
    zero = {"zeroline": True, "zerolinecolor": theme.quiet, "zerolinewidth": 1.5}
    y_axis = axis(theme, title, range=list(ends), tickformat="~g", nticks=10, **zero)
    names = named_on_pictures(len(result.design.particles))
    return {"data": data, "layout": layout(theme, xaxis=x_axis, yaxis=y_axis, **names)}


def _crossings(result: Evaluation, theme: Theme, rising: bool) -> dict[str, Any]:
    """Marks of one direction, with the same room for every particle, so that they can move."""
    low, high = float(result.frequency[0]), float(result.frequency[-1])
    found = [
        [one for one in _crossovers(result, particle) if one.rising == rising]
        for particle in result.design.particles
    ]
    room = max(_MARKS, *map(len, found))
    x, text, colours = [], [], []
    for index, (particle, crossings) in enumerate(zip(result.design.particles, found, strict=True)):
        told = [f"{plain(particle.name)}: {crossing_words(one)}" for one in crossings]
        places = [one.frequency for one in crossings if low <= one.frequency <= high]
        spare = room - len(places)
        x += [*places, *[high * _BEYOND] * spare]
        text += [*told[: len(places)], *[""] * spare]
        colours += [particle_line(theme, index)["color"]] * room
    return {
        "type": "scatter",
        "mode": "markers",
        "x": numbers(x),
        "y": numbers(np.zeros(len(x))),
        "text": text,
        "marker": {
            "symbol": "triangle-up" if rising else "triangle-down",
            "size": 13,
            "color": colours,
            "line": {"width": 1.5, "color": theme.paper},
        },
        "hovertemplate": "%{text}<extra></extra>",
        "name": "rises" if rising else "falls",
        "showlegend": False,
    }


def _crossovers(result: Evaluation, particle: Particle) -> tuple[Crossover, ...]:
    """Every crossover of a particle in the design's liquid."""
    return behaviour(particle, result.design.liquid).crossovers


def crossing_words(crossing: Crossover) -> str:
    """Say where a crossover lies and which way it goes, e.g. ``312 kHz, rises``."""
    return f"{format_si(crossing.frequency, 'Hz')}, {crossing.direction}"


def factor_words(value: float) -> str:
    """Write a part of K; what is far below its size of about 1 reads 0.

    >>> factor_words(-0.48127), factor_words(-1.3e-5)
    ('−0.481', '0')
    """
    return format_quantity(round(value, 4) + 0.0, "", 3)


def real_sentence(result: Evaluation) -> str:
    """Say how each particle is pulled at the operating frequency."""

    def words(particle: Particle, here: complex) -> str:
        way = "towards strong field" if here.real > 0.0 else "towards weak field"
        return f"{factor_words(here.real)} for {particle.name} ({way})"

    low, high = float(result.frequency[0]), float(result.frequency[-1])
    crosses = any(
        low <= one.frequency <= high
        for particle in result.design.particles
        for one in _crossovers(result, particle)
    )
    marks = "Triangles mark the crossovers" if crosses else "Nothing crosses zero on this axis"
    return f"Re K at {_here(result)} is {_each(result, words)}. {marks}."


def imaginary_sentence(result: Evaluation) -> str:
    """Say how lossy each particle is, and where most."""

    def words(particle: Particle, here: complex) -> str:
        features = behaviour(particle, result.design.liquid).features
        number, peak = factor_words(here.imag), factor_words(features.peak)
        where = format_si(features.peak_frequency, "Hz")
        return f"{number} for {particle.name} (largest, {peak}, at {where})"

    return f"Im K at {_here(result)} is {_each(result, words)}."


def _here(result: Evaluation) -> str:
    return format_si(result.design.drive.frequency, "Hz")


def _each(result: Evaluation, words: Callable[[Particle, complex], str]) -> str:
    return listed([words(found.particle, found.polarisation) for found in result.particles])


def listed(pieces: Sequence[str]) -> str:
    """Pieces of a sentence about each particle; of many only the first, and how many more.

    >>> listed(["one 1", "two 2"]), listed(["a", "b", "c", "d", "e", "f"])
    ('one 1; two 2', 'a; b; and 4 more')
    """
    if len(pieces) <= _ALL_TOLD:
        return "; ".join(pieces)
    return f"{'; '.join(pieces[:_FIRST_TOLD])}; and {len(pieces) - _FIRST_TOLD} more"
