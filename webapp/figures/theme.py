"""Colours, dashes, axes and number arrays that all figures share.

Particles take the palette of Okabe and Ito (2008), each with a dash of its own, so that a figure
survives grey print and colour blindness. Every limit keeps one colour in every figure.
"""

import base64
import html
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import ArrayLike

from model.arrays import Real
from model.limits import LIMITS
from model.quantity import format_si

Figure = dict[str, Any]

#: Stands for the ceiling that a task sets itself, where colours are asked for.
TASK_CEILING = "task ceiling"
#: The highest shade of a packed map, and what stands for no value.
MOST_SHADE, GAP = 254, 255


@dataclass(frozen=True)
class Theme:
    """Colours of one appearance."""

    text: str
    quiet: str
    grid: str
    accent: str
    shade: str
    paper: str
    particles: tuple[str, ...]
    limits: tuple[str, ...]
    #: Floor, lid and obstacles; maps of field and of warmth run evenly from the paper's lightness
    #: to its opposite, so that they read in grey and by weak eyes.
    wall: str
    field: tuple[str, ...]
    warmth: tuple[str, ...]


_OKABE_ITO = ("#0072B2", "#D55E00", "#009E73", "#CC79A7", "#E69F00", "#56B4E9", "#8C8C8C")
THEMES = {
    "light": Theme(
        text="#1b2733",
        quiet="#5b6875",
        grid="#e6eaee",
        accent="#0f766e",
        shade="rgba(15,118,110,0.16)",
        paper="#ffffff",
        particles=_OKABE_ITO,
        limits=(
            "#b45309",
            "#7c3aed",
            "#475569",
            "#1d4ed8",
            "#be185d",
            "#b91c1c",
            "#4d7c0f",
            "#0e7490",
            "#854d0e",
            "#a21caf",
        ),
        wall="#e9edf1",
        field=("#f4f8fb", "#cfe3ef", "#93c1dc", "#4b93c3", "#1f659e", "#0f3a66"),
        warmth=("#fdf6ec", "#fbdcb4", "#f4ac6c", "#de6f35", "#ad3a17", "#6b1a0c"),
    ),
    "dark": Theme(
        text="#e8edf2",
        quiet="#a3b0bd",
        grid="#2c3742",
        accent="#2dd4bf",
        shade="rgba(45,212,191,0.20)",
        paper="#161d25",
        particles=("#4FA8DE", "#FF8A4C", "#2CC99A", "#E6A2C8", "#F2B632", "#8ED0F5", "#B5B5B5"),
        limits=(
            "#f0a04b",
            "#b794f6",
            "#a8b6c6",
            "#7ea6ff",
            "#f58abb",
            "#f87171",
            "#a3d65c",
            "#67d4e8",
            "#d9b36c",
            "#e879f9",
        ),
        wall="#222c36",
        field=("#121a24", "#15324d", "#1d5a86", "#3a8fbf", "#86c5e2", "#ecf7fc"),
        warmth=("#17191f", "#43201a", "#85351a", "#cc6527", "#f2a75c", "#fdebcb"),
    ),
}
#: Limits that draw a curve, in the order of their colours.
_DRAWN = [name for name, limit in LIMITS.items() if not limit.condition]
DASHES = ("solid", "dash", "dot", "dashdot", "longdash", "longdashdot")


def colour_key(rule: str, sense: str) -> str:
    """What a floor or ceiling is called when its colour is asked for."""
    return rule if rule in LIMITS or sense == "least" else TASK_CEILING


def limit_colour(theme: Theme, limit: str) -> str:
    """Colour of a limit, the same everywhere; the accent for the task's own floor.

    Conditions that no voltage changes draw no curve and share the quiet colour with the ceiling
    of a task that has one.
    """
    if limit not in {*LIMITS, TASK_CEILING}:
        return theme.accent
    if limit not in _DRAWN:
        return theme.quiet
    return theme.limits[_DRAWN.index(limit) % len(theme.limits)]


def particle_line(theme: Theme, index: int) -> dict[str, Any]:
    """Line of the particle at `index` in the design."""
    colour = theme.particles[index % len(theme.particles)]
    return {"color": colour, "dash": DASHES[index % len(DASHES)], "width": 2.5}


def faded(colour: str, share: float) -> str:
    """Write a colour so that it covers only a share of what lies below.

    >>> faded("#0072B2", 0.16)
    'rgba(0,114,178,0.16)'
    """
    parts = ",".join(str(int(colour[index : index + 2], 16)) for index in (1, 3, 5))
    return f"rgba({parts},{share:g})"


def plain(text: str) -> str:
    """Write text that a person typed so that no figure reads markup or a template in it.

    >>> plain("5 < d < 9 µm, %{x}")
    '5 &lt; d &lt; 9 µm, %&#123;x}'
    """
    return html.escape(text, quote=False).replace("{", "&#123;")


def numbers(values: ArrayLike) -> dict[str, str]:
    """Pack numbers as single-precision binary, which serialises thirty times faster than text."""
    data = np.ascontiguousarray(values, dtype="<f4")
    return {"dtype": "f4", "bdata": base64.b64encode(data.tobytes()).decode()}


def shades(values: Real) -> dict[str, str]:
    """Pack a map of values 0 to 1, (m, n), as one byte each, 0 to 254; 255 stands for a gap."""
    levels = np.where(np.isfinite(values), np.clip(values, 0.0, 1.0) * MOST_SHADE, GAP)
    data = np.ascontiguousarray(np.rint(levels), dtype="u1")
    return {
        "dtype": "u1",
        "bdata": base64.b64encode(data.tobytes()).decode(),
        "shape": ", ".join(map(str, values.shape)),
    }


def axis(theme: Theme, title: str, **more: Any) -> dict[str, Any]:
    """One axis: title with unit, quiet lines, ticks outside."""
    return {
        "title": {"text": title, "standoff": 8, "font": {"size": 13}},
        "gridcolor": theme.grid,
        "linecolor": theme.grid,
        "zeroline": False,
        "tickfont": {"size": 12},
        "ticks": "outside",
        "tickcolor": theme.grid,
        "fixedrange": True,
        **more,
    }


def log_axis(theme: Theme, title: str, low: float, high: float, unit: str) -> dict[str, Any]:
    """Logarithmic axis whose ticks read 10 kHz, 1 MHz and so on; plain numbers without a unit."""
    span = np.log10(high / low)
    steps = (1.0, 2.0, 5.0) if span < 3.0 else (1.0,)
    powers = np.arange(np.floor(np.log10(low)), np.ceil(np.log10(high)) + 1)
    powers = powers[powers % (1 if span < 7.0 else 2) == 0]
    ticks = [step * 10.0**power for power in powers for step in steps]
    ticks = [tick for tick in ticks if low * 0.999 <= tick <= high * 1.001]
    return axis(
        theme,
        title,
        type="log",
        range=[float(np.log10(low)), float(np.log10(high))],
        tickvals=ticks,
        ticktext=[format_si(tick, unit) if unit else _plain_tick(tick) for tick in ticks],
    )


_RAISED = str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹")


def _plain_tick(value: float) -> str:
    """Tick of a pure number, a power of ten where zeros would have to be counted.

    >>> _plain_tick(0.01), _plain_tick(1e-5), _plain_tick(2000.0)
    ('0.01', '10⁻⁵', '2000')
    """
    power = round(np.log10(value))
    if 1e-3 <= value < 1e5 or not np.isclose(value, 10.0**power):
        return f"{value:g}"
    return "10" + str(power).translate(_RAISED)


def layout(theme: Theme, **more: Any) -> dict[str, Any]:
    """Layout that all figures share."""
    return {
        "paper_bgcolor": theme.paper,
        "plot_bgcolor": theme.paper,
        "font": {"color": theme.text, "family": "system-ui, 'Segoe UI', 'DejaVu Sans', sans-serif"},
        "margin": {"l": 64, "r": 36, "t": 10, "b": 48},
        "showlegend": False,
        "hovermode": "closest",
        "dragmode": False,
        "hoverlabel": {
            "bgcolor": theme.paper,
            "bordercolor": theme.quiet,
            "font": {"color": theme.text},
        },
        "uirevision": "kept",
        **more,
    }


def unknown_figure(theme: Theme) -> Figure:
    """A figure that says that there is nothing to draw."""
    words = {
        "text": "not known for this chip",
        "xref": "paper",
        "yref": "paper",
        "x": 0.5,
        "y": 0.5,
        "showarrow": False,
        "font": {"color": theme.quiet, "size": 15},
    }
    bare = {"visible": False}
    return {"data": [], "layout": layout(theme, annotations=[words], xaxis=bare, yaxis=bare)}


def mark(theme: Theme, x: float, y: float, **more: Any) -> dict[str, Any]:
    """Operating point, the same ring in every figure; the verdict tells its numbers."""
    return {
        "type": "scatter",
        "mode": "markers",
        "x": [x],
        "y": [y],
        "marker": {
            "symbol": "circle-open",
            "size": 14,
            "color": theme.text,
            "line": {"width": 3, "color": theme.text},
        },
        "hoverinfo": "skip",
        "cliponaxis": False,
        "name": "operating point",
        **more,
    }


def nice_ceiling(value: float, steps: Sequence[float] = (1.0, 2.0, 5.0)) -> float:
    """Round up to one of `steps` times a power of ten, so that an axis rests while knobs move.

    >>> nice_ceiling(3.2), nice_ceiling(0.0)
    (5.0, 1.0)
    """
    if value <= 0 or not np.isfinite(value):
        return 1.0
    power = 10.0 ** np.floor(np.log10(value))
    return float(next(step * power for step in (*steps, 10.0) if value <= step * power))
