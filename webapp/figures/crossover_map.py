"""Crossover frequency of every particle against the conductivity of the liquid."""

from collections.abc import Sequence
from typing import Any

import numpy as np

from model.arrays import Real
from model.crossover_curves import CrossoverCurve
from model.crossovers import Crossover
from model.evaluate import Evaluation
from model.liquid.liquid import Liquid
from model.particle import Particle
from model.quantity import format_si
from webapp.figures.behaviour import CrossoverMap, behaviour, crossover_map
from webapp.figures.curves import named_on_pictures
from webapp.figures.polarisation import listed
from webapp.figures.theme import (
    Figure,
    Theme,
    faded,
    layout,
    log_axis,
    mark,
    numbers,
    particle_line,
    plain,
)

#: How dense the shade of one standard deviation is.
_SHADE = 0.3
#: A gap in a line.
_GAP = np.full((2, 1), np.nan)


def crossover_figure(result: Evaluation, theme: Theme) -> Figure:
    """Draw both branches of each particle, a band of one standard deviation, the point in use.

    Of a liquid without a recipe nothing but the ring depends on the drive and the conductivity.
    """
    design = result.design
    maps = [crossover_map(particle, design.liquid) for particle in design.particles]
    data = [
        _band(found, particle, theme, index)
        for index, (found, particle) in enumerate(zip(maps, design.particles, strict=True))
    ]
    for index, (found, particle) in enumerate(zip(maps, design.particles, strict=True)):
        data += _branches(found, particle, theme, index)
    data.append(mark(theme, design.liquid.conductivity, design.drive.frequency, showlegend=False))
    conductivity = maps[0].conductivity
    ends = _frequencies(result, maps)
    names = named_on_pictures(len(design.particles))
    x_axis = log_axis(
        theme, "Medium conductivity", float(conductivity[0]), float(conductivity[-1]), "S/m"
    )
    y_axis = log_axis(theme, "Crossover frequency", *ends, "Hz")
    margin = {"l": 84, "r": 36, "t": 10, "b": 48}
    return {
        "data": data,
        "layout": layout(theme, xaxis=x_axis, yaxis=y_axis, margin=margin, **names),
    }


def _frequencies(result: Evaluation, maps: list[CrossoverMap]) -> tuple[float, float]:
    """Ends of the frequency axis: those of the spectra, or higher if particles fall there."""
    falling = np.concatenate([found.curves[1].frequency for found in maps])
    low, high = float(result.frequency[0]), float(result.frequency[-1])
    return low, max([high, *10.0 ** np.ceil(np.log10(falling[falling > high]))])


def _branches(
    found: CrossoverMap, particle: Particle, theme: Theme, index: int
) -> list[dict[str, Any]]:
    """The rising and the falling branch."""
    name = plain(particle.name)
    return [
        {
            "type": "scatter",
            "mode": "lines",
            "x": numbers(line[0]),
            "y": numbers(line[1]),
            "name": name if curve.rising else f"{name} falls",
            "meta": "branch",
            "line": {**particle_line(theme, index), "width": 2, "simplify": False},
            "showlegend": curve.rising,
            "hovertemplate": f"{name}<br>{'rises' if curve.rising else 'falls'} at "
            "%{y:.3~s}Hz in %{x:.3~g} S/m<extra></extra>",
        }
        for line, curve in zip(found.branches, found.curves, strict=True)
    ]


def _band(found: CrossoverMap, particle: Particle, theme: Theme, index: int) -> dict[str, Any]:
    """Shade of one standard deviation about both branches, a closed outline for each stretch."""
    pieces = [
        piece for curve in found.curves for piece in _outlines(found.conductivity, curve)
    ] or [_GAP]
    x, y = np.concatenate(pieces, axis=1)
    return {
        "type": "scatter",
        "mode": "lines",
        "x": numbers(x),
        "y": numbers(y),
        "name": f"spread of {plain(particle.name)}",
        "meta": "spread",
        "line": {"width": 0, "simplify": False},
        "fill": "toself",
        "fillcolor": faded(particle_line(theme, index)["color"], _SHADE),
        "hoverinfo": "skip",
        "showlegend": False,
    }


def _outlines(conductivity: Real, curve: CrossoverCurve) -> list[Real]:
    """Closed outlines between low and high, (2, n) each with a gap behind; none without spread."""
    known = np.isfinite(curve.low + curve.high)
    if not (curve.high[known] > curve.low[known]).any():
        return []
    edges = np.flatnonzero(np.diff(np.concatenate([[False], known, [False]]).astype(int)))
    found = []
    for start, stop in edges.reshape(-1, 2):
        run = slice(start, stop)
        lower = np.stack([conductivity[run], curve.low[run]])
        upper = np.stack([conductivity[run], curve.high[run]])[:, ::-1]
        found.append(np.concatenate([lower, upper, lower[:, :1], _GAP], axis=1))
    return found


def crossover_sentence(result: Evaluation) -> str:
    """Say where the particles cross in this liquid, and how far that spreads."""
    design = result.design
    pieces = []
    for particle in design.particles:
        crossings = behaviour(particle, design.liquid).crossovers
        words = " and ".join(
            f"{one.direction} at {format_si(one.frequency, 'Hz')}"
            f"{_spread_words(crossover_map(particle, design.liquid), one, design.liquid)}"
            for one in _outermost(crossings)
        )
        pieces.append(f"{particle.name} {words or 'does not cross'}")
    varied = any(one.radius_cv or one.membrane_spread for one in design.particles)
    band = (
        "Shaded is one standard deviation of size and membranes"
        if varied
        else "No particle has a spread of size or membranes, so that no band is shaded"
    )
    return (
        f"Zeros of Re K in {format_si(design.liquid.conductivity, 'S/m')}: {listed(pieces)}. "
        f"{band}. Click to move both knobs to a place."
    )


def _outermost(crossings: Sequence[Crossover]) -> list[Crossover]:
    """The lowest rising and the highest falling crossover, as the map draws them."""
    rising = [one for one in crossings if one.rising][:1]
    falling = [one for one in crossings if not one.rising][-1:]
    return sorted([*rising, *falling], key=lambda one: one.frequency)


def _spread_words(found: CrossoverMap, crossing: Crossover, liquid: Liquid) -> str:
    """Band of one standard deviation about a crossover, in brackets; nothing without spread."""
    curve = next(one for one in found.curves if one.rising == crossing.rising)
    steps, here = np.log(found.conductivity), np.log(liquid.conductivity)
    low, high = (
        float(np.exp(np.interp(here, steps, np.log(edge / curve.frequency))))
        for edge in (curve.low, curve.high)
    )
    if not high > low:  # no spread, or not known beside the turn of a curve
        return ""
    ends = [format_si(crossing.frequency * share, "Hz") for share in (low, high)]
    return f" ({' to '.join(ends)})" if ends[0] != ends[1] else ""
