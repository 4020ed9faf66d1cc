"""Curves of all particles against one axis, with what every such figure shares."""

from collections.abc import Sequence
from typing import Any

import numpy as np
from numpy.typing import ArrayLike

from model.arrays import Real
from model.design import Design
from webapp.figures.theme import Theme, nice_ceiling, numbers, particle_line, plain

#: Names of more particles than these stand beside the figure, shortened, instead of above it.
_MOST_IN_A_ROW = 4
_LONGEST_BESIDE = 18
#: Where a value axis may end, times a power of ten.
_ENDS = (1.0, 1.5, 2.0, 2.5, 3.0, 4.0, 5.0, 6.0, 8.0)
#: A side of the axis is at least this share of the other.
_LEAST_SIDE = 0.1
_PREFIXES = ((1.0, ""), (1e-3, "m"), (1e-6, "µ"), (1e-9, "n"), (1e-12, "p"), (1e-15, "f"))


def particle_curves(
    design: Design, theme: Theme, x: ArrayLike, curves: Sequence[ArrayLike], reads: str
) -> list[dict[str, Any]]:
    """One line for each particle; `reads` is the hover text behind its name."""
    few = len(curves) <= _MOST_IN_A_ROW
    packed = numbers(x)
    return [
        {
            "type": "scatter",
            "mode": "lines",
            "x": packed,
            "y": numbers(curve),
            "name": plain(particle.name if few else _short(particle.name)),
            "line": {**particle_line(theme, index), "simplify": False},
            "hovertemplate": f"{plain(particle.name)}<br>{reads}<extra></extra>",
        }
        for index, (particle, curve) in enumerate(zip(design.particles, curves, strict=True))
    ]


def operating_line(
    design: Design, theme: Theme, ends: tuple[float, float], **more: Any
) -> dict[str, Any]:
    """Dotted line at the operating frequency, from one end of the value axis to the other."""
    frequency = design.drive.frequency
    return {
        "type": "scatter",
        "mode": "lines",
        "x": [frequency, frequency],
        "y": list(ends),
        "line": {"color": theme.text, "width": 1.2, "dash": "dot"},
        "hoverinfo": "skip",
        "name": "operating frequency",
        "showlegend": False,
        **more,
    }


def legend(count: int) -> dict[str, Any]:
    """Parts of a layout that name the particles: above the figure, or of many beside it."""
    few = count <= _MOST_IN_A_ROW
    place: dict[str, Any] = {"x": 1.01, "y": 1.0, "yanchor": "top", "font": {"size": 11}}
    if few:
        place = {"orientation": "h", "x": 0, "y": 1.0, "yanchor": "bottom", "font": {"size": 12}}
    return {
        "showlegend": True,
        "legend": place,
        "margin": {"l": 64, "r": 36, "t": 30 if few else 10, "b": 48},
    }


def named_on_pictures(count: int) -> dict[str, Any]:
    """Legend of a figure whose names stand elsewhere on the page; saved pictures show it."""
    return {"legend": legend(count)["legend"]}


def _short(name: str) -> str:
    """Name for a legend beside the figure; hover text has it in full."""
    return name if len(name) <= _LONGEST_BESIDE else name[: _LONGEST_BESIDE - 1].rstrip() + "…"


def prefixed(most: float, unit: str) -> tuple[float, str]:
    """Size in SI and name of the unit in which `most` is at least 1.

    >>> prefixed(5e-12, "N"), prefixed(0.0, "N")
    ((1e-12, 'pN'), (1e-15, 'fN'))
    """
    size, prefix = next(
        item for item in _PREFIXES if most >= 0.999 * item[0] or item is _PREFIXES[-1]
    )
    return size, prefix + unit


def span(curves: Sequence[Real], least: tuple[float, float] = (0.0, 0.0)) -> tuple[float, float]:
    """Ends of a value axis around zero and all curves, in steps, so that it rests.

    `least` is how far it reaches at least, below and above.
    """
    values = np.concatenate([np.ravel(curve) for curve in curves])
    sides = [float(max(-values.min(), 0.0)), float(max(values.max(), 0.0))]
    most = nice_ceiling(max(sides), _ENDS)
    low, high = (
        max(nice_ceiling(side, _ENDS) if side > _LEAST_SIDE * most else _LEAST_SIDE * most, end)
        for side, end in zip(sides, least, strict=True)
    )
    return -1.05 * low, 1.05 * high
