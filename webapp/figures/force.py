"""Force on every particle against frequency, with the drag that the task has to beat."""

from typing import Any

import numpy as np

from model.evaluate import Evaluation
from model.quantity import format_quantity, format_si
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


def force_figure(result: Evaluation, theme: Theme) -> Figure:
    """Draw the largest force along the flow, positive towards strong field."""
    at, scale = result.spectrum, result.rms_voltage**2 * 1e12
    x = numbers(at.frequency)
    curves = [scale * at.force_along_flow(particle) for particle in result.design.particles]
    top = nice_ceiling(max(float(np.abs(curve).max()) for curve in curves))
    data: list[dict[str, Any]] = [
        {
            "type": "scatter",
            "mode": "lines",
            "x": x,
            "y": numbers(curve),
            "name": plain(particle.name),
            "line": particle_line(theme, index),
            "hovertemplate": f"{plain(particle.name)}<br>"
            "%{y:.3~g} pN at %{x:.3~s}Hz<extra></extra>",
        }
        for index, (particle, curve) in enumerate(zip(result.design.particles, curves, strict=True))
    ]
    frequency = result.design.drive.frequency
    data.append(
        {
            "type": "scatter",
            "mode": "lines",
            "x": [frequency, frequency],
            "y": [-top, top],
            "line": {"color": theme.text, "width": 1.2, "dash": "dot"},
            "hoverinfo": "skip",
            "name": "operating frequency",
            "showlegend": False,
        }
    )
    height = format_quantity(result.design.task.force_height, "um", 3)
    x_axis = log_axis(theme, "Frequency", float(at.frequency[0]), float(at.frequency[-1]), "Hz")
    y_axis = axis(
        theme,
        f"Force at {height} (pN)",
        range=[-1.05 * top, 1.05 * top],
        zeroline=True,
        zerolinecolor=theme.quiet,
    )
    legend = {"orientation": "h", "x": 0, "y": 1.0, "yanchor": "bottom", "font": {"size": 12}}
    return {
        "data": data,
        "layout": layout(
            theme,
            xaxis=x_axis,
            yaxis=y_axis,
            showlegend=True,
            legend=legend,
            margin={"l": 64, "r": 30, "t": 30, "b": 48},
        ),
    }


def force_sentence(result: Evaluation) -> str:
    """Say which way each particle goes at the operating point."""
    pieces = []
    for found in result.particles:
        way = "towards strong field" if found.force > 0 else "towards weak field"
        size = format_si(abs(found.force), "N")
        pieces.append(f"{found.particle.name} {size} {way}")
    return "Now: " + "; ".join(pieces) + "."


def nice_ceiling(value: float) -> float:
    """Round up to 1, 2 or 5 times a power of ten, so that an axis rests while knobs move.

    >>> nice_ceiling(3.2), nice_ceiling(0.0)
    (5.0, 1.0)
    """
    if value <= 0 or not np.isfinite(value):
        return 1.0
    power = 10.0 ** np.floor(np.log10(value))
    return float(next(step * power for step in (1.0, 2.0, 5.0, 10.0) if value <= step * power))
