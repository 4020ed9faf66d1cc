"""What the panels of the section share: axes to scale, solid parts, colour bars and marks."""

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from model.arrays import Real
from model.layout import Layout
from webapp.figures.chip import electrode_sign
from webapp.figures.theme import MOST_SHADE, Figure, Theme, axis, layout, numbers, shades

#: Micrometres per metre: the unit of all axes.
MICRO = 1e6
#: Least and greatest height over length of a panel; a chip beyond them is not drawn to scale.
FLATTEST, TALLEST = 0.2, 1.0
#: Below this the upright axis and the bars have room for few numbers.
_FLAT = 0.32
#: An electrode that is so large over the height of the panel has room for its sign.
_LARGE = 0.12
#: Shares of the figure that the panel and the bar beside it take.
PANEL, BAR = (0.0, 0.95), (0.96, 1.0)
#: Ticks beside a bar: so many slots, the spare ones empty, so that they can move.
_TICKS = 9
_EMPTY = "\u2060"


@dataclass(frozen=True)
class Frame:
    """Where the panels of a chip lie.

    Parameters
    ----------
    window
        x from, x to, y from, y to, µm.
    aspect
        Height over length as drawn.
    stretch
        How many times taller than true it is drawn; 1 if to scale.
    """

    window: tuple[float, float, float, float]
    aspect: float
    stretch: float


def frame(chip: Layout) -> Frame:
    """Frame of a chip, to scale unless it is far too flat or too tall."""
    left, right, low, high = (MICRO * value for value in chip.drawing().window)
    true = (high - low) / (right - left)
    aspect = min(max(true, FLATTEST), TALLEST)
    return Frame((left, right, low, high), aspect, aspect / true)


def tick_count(chip: Layout) -> int:
    """Most numbers that a bar beside the panel has room for."""
    return 4 if frame(chip).aspect < _FLAT else 8


def panel(chip: Layout, theme: Theme, data: list[dict[str, Any]], **more: Any) -> Figure:
    """Lay out one panel: walls and electrodes over the given traces, axes in µm."""
    at = frame(chip)
    left, right, low, high = at.window
    plan = chip.view == "plan"
    across = "Across the channel" if plan else "Height"
    if at.stretch != 1.0:
        across = f"{across}, drawn {_factor(at.stretch)}"
    few = 4 if at.aspect < _FLAT else 7
    y_axis: dict[str, Any] = {"range": [low, high], "showgrid": False, "nticks": few}
    if at.stretch == 1.0:
        y_axis |= {"scaleanchor": "x", "constrain": "domain"}
    shapes, signs = _solids(chip, theme)
    return {
        "data": data,
        "layout": layout(
            theme,
            margin={"l": 60, "r": 62, "t": 8, "b": 44},
            xaxis=axis(
                theme,
                "Along the flow (µm)",
                range=[left, right],
                domain=list(PANEL),
                constrain="domain",
                showgrid=False,
                nticks=9,
            ),
            yaxis=axis(theme, f"{across} (µm)", **y_axis),
            xaxis2={"domain": list(BAR), "range": [0.0, 1.0], "visible": False, "anchor": "y2"},
            yaxis2={"range": [0.0, 1.0], "visible": False, "anchor": "x2"},
            shapes=[*more.pop("shapes", []), *shapes],
            annotations=signs,
            **more,
        ),
    }


def _factor(stretch: float) -> str:
    return f"{stretch:.2g}× taller" if stretch > 1.0 else f"{1.0 / stretch:.2g}× lower"


def _solids(chip: Layout, theme: Theme) -> tuple[list[dict[str, Any]], list[dict[str, Any]]]:
    """Walls tinted, electrodes solid, and the sign of each electrode's phase beside it."""
    shapes, signs = [], []
    drawing = chip.drawing()
    for shape in drawing.shapes:
        corners = [(MICRO * x, MICRO * y) for x, y in shape.outline]
        path = "M" + "L".join(f"{x:.5g},{y:.5g}" for x, y in corners) + "Z"
        metal = shape.kind == "electrode"
        shapes.append(
            {
                "type": "path",
                "path": path,
                "layer": "above" if metal else "below",
                "fillcolor": theme.text if metal else theme.wall,
                "line": {"width": 1 if metal else 0, "color": theme.paper},
            }
        )
        if metal:
            signs.append(_sign(corners, electrode_sign(shape, drawing), drawing.window, theme))
    return shapes, signs


def _sign(
    corners: Sequence[tuple[float, float]],
    text: str,
    window: tuple[float, float, float, float],
    theme: Theme,
) -> dict[str, Any]:
    """Sign of an electrode: within a large one, else on its side away from the liquid."""
    (left, right), (low, high) = ((min(v), max(v)) for v in zip(*corners, strict=True))
    tall = MICRO * (window[3] - window[2])
    large = min(high - low, right - left) > _LARGE * tall
    below = 0.5 * (low + high) < 0.5 * MICRO * (window[2] + window[3])
    edge, anchor = (low, "top") if below else (high, "bottom")
    shown = {} if large else {"bgcolor": theme.wall}
    return {
        "x": 0.5 * (left + right),
        "y": 0.5 * (low + high) if large else edge,
        "text": text,
        "showarrow": False,
        "yanchor": "middle" if large else anchor,
        "font": {"size": 15 if large else 13, "color": theme.paper if large else theme.text},
        "borderpad": 0,
        **shown,
    }


def heat_map(
    x: Real, y: Real, shown: Real | None, colours: Sequence[str], name: str
) -> dict[str, Any]:
    """A map of values 0 to 1 at cell centres in m; `shown` is None if the page still holds it."""
    return {
        "type": "heatmap",
        "name": name,
        "x0": MICRO * float(x[0]),
        "dx": MICRO * float(x[1] - x[0]),
        "y0": MICRO * float(y[0]),
        "dy": MICRO * float(y[1] - y[0]),
        "z": {"kept": True} if shown is None else shades(shown),
        "zmin": 0,
        "zmax": MOST_SHADE,
        "zsmooth": "fast",
        "colorscale": _scale(colours),
        "showscale": False,
        "hoverinfo": "skip",
    }


def colour_bar(
    ticks: Sequence[tuple[float, str]], colours: Sequence[str], name: str, theme: Theme
) -> list[dict[str, Any]]:
    """A bar from 0 to 1 with ticks (place, text), which move while its ends rest."""
    steps = np.arange(128)
    bar = {
        "type": "heatmap",
        "name": "bar",
        "x0": 0.35,
        "dx": 0.5,
        "y0": 0.5 / steps.size,
        "dy": 1.0 / steps.size,
        "z": shades((steps / (steps.size - 1.0))[:, None]),
        "zmin": 0,
        "zmax": MOST_SHADE,
        "colorscale": _scale(colours),
        "showscale": False,
        "hoverinfo": "skip",
        "xaxis": "x2",
        "yaxis": "y2",
    }
    return [bar, bar_texts(ticks, name, theme, 0.6)]


def bar_texts(
    ticks: Sequence[tuple[float, str]], name: str, theme: Theme, x: float
) -> dict[str, Any]:
    """Texts beside a bar or key that ends at `x`, in slots of which the spare ones are empty."""
    slots = [*ticks[:_TICKS], *[(0.5, _EMPTY)] * (_TICKS - len(ticks))]
    return {
        "type": "scatter",
        "mode": "text",
        "name": name,
        "x": [x] * _TICKS,
        "y": [place for place, _ in slots],
        "text": [f"\u00a0{text}" for _, text in slots],
        "textposition": "middle right",
        "textfont": {"size": 12, "color": [theme.text] * _TICKS},
        "hoverinfo": "skip",
        "cliponaxis": False,
        "xaxis": "x2",
        "yaxis": "y2",
    }


def _scale(colours: Sequence[str]) -> list[list[Any]]:
    return [[index / (len(colours) - 1), colour] for index, colour in enumerate(colours)]


def broken_line(pieces: Sequence[Real], **more: Any) -> dict[str, Any]:
    """Polylines (2, k), m, as one trace with gaps between them."""
    gap = np.full((2, 1), np.nan)
    joined = [part for piece in pieces for part in (MICRO * piece, gap)] or [gap]
    x, y = np.concatenate(joined, axis=1)
    return {
        "type": "scatter",
        "mode": "lines",
        "x": numbers(x),
        "y": numbers(y),
        "hoverinfo": "skip",
        **more,
    }


def level(chip: Layout, height: float, theme: Theme) -> list[dict[str, Any]]:
    """Thin line at the level where the task takes its force at a height."""
    left, right = frame(chip).window[:2]
    place = MICRO * chip.force_level(height)
    line = {"color": theme.text, "width": 1, "dash": "dot"}
    return [
        {
            "type": "scatter",
            "mode": "lines",
            "name": "working height",
            "x": [left, right],
            "y": [place, place],
            "line": line,
            "opacity": 0.7,
            "hoverinfo": "skip",
        }
    ]


def probe_mark(theme: Theme, place: tuple[float, float]) -> list[dict[str, Any]]:
    """The probed place: a ring on a paler one, seen on every shade."""
    shared = {
        "type": "scatter",
        "mode": "markers",
        "x": [MICRO * place[0]],
        "y": [MICRO * place[1]],
        "hoverinfo": "skip",
        "cliponaxis": False,
    }
    return [
        {
            **shared,
            "name": name,
            "marker": {
                "symbol": "circle-open",
                "size": 13,
                "color": colour,
                "line": {"width": width, "color": colour},
            },
        }
        for name, colour, width in (("halo", theme.paper, 5), ("probe", theme.text, 2))
    ]
