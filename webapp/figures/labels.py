"""Places names on curves so that they cover neither one another nor, where it can be, a line."""

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from model.arrays import Real
from webapp.figures.theme import Theme

#: Heights above the curve, in lines, at which a name may stand, and what it costs to stand there:
#: far from its curve a name seems to belong to another.
_STEPS = (0.75, 1.6, -0.75, -1.6, 2.6, -2.6)
_COSTS = (0.0, 0.12, 0.01, 0.13, 0.9, 0.91)
#: Plot area on a narrow page in pixels and size of a letter; only proportions matter.
WIDTH, HEIGHT = 500.0, 370.0
LETTER, LINE = 7.4, 17.0
#: Text of an empty slot: a word joiner, which is drawn as nothing.
_NOTHING = "\u2060"


@dataclass(frozen=True)
class Wish:
    """A name that wants to stand on a stretch of a curve.

    `x`, `y` are the stretch in fractions of the plot area, 0 to 1 each; `above` says on which
    side it stands if both are free.
    """

    text: str
    key: str
    x: Real
    y: Real
    above: bool = True


@dataclass(frozen=True)
class Label:
    """A placed name: centre in fractions of the plot area."""

    text: str
    key: str
    x: float
    y: float


def label_trace(
    labels: Sequence[Label],
    slots: int,
    x_ends: tuple[float, float],
    y_ends: tuple[float, float],
    colour: Callable[[str], str],
    theme: Theme,
) -> dict[str, Any]:
    """Names as one trace of so many slots, the spare ones empty, so that they can move.

    Parameters
    ----------
    labels, slots
        What is named now, and how many names there may ever be.
    x_ends, y_ends
        Ends of the logarithmic axes.
    colour
        Colour of a name by its key.
    theme
        Whose paper keeps lines off the letters.
    """
    full = [*labels, *[Label(_NOTHING, "", 0.0, 0.0)] * (slots - len(labels))]
    (left, right), (low, high) = x_ends, y_ends
    return {
        "type": "scatter",
        "mode": "text",
        "x": [left * (right / left) ** label.x for label in full],
        "y": [low * (high / low) ** label.y for label in full],
        "text": [label.text for label in full],
        "textposition": "middle center",
        "textfont": {
            "size": 13,
            "color": [colour(label.key) for label in full],
            "shadow": ", ".join([f"0 0 3px {theme.paper}"] * 4),
        },
        "hoverinfo": "skip",
        "cliponaxis": False,
        "name": "labels",
    }


def place_labels(wishes: Sequence[Wish], lines: Sequence[tuple[Real, Real]]) -> list[Label]:
    """Place every name, in the order of the wishes, where it covers least.

    Parameters
    ----------
    wishes
        Names with the stretches they belong to.
    lines
        All drawn curves as (x, y) in fractions of the plot area.
    """
    drawn = np.concatenate([_dense(x, y) for x, y in lines] or [np.empty((2, 0))], axis=1)
    boxes: list[Real] = []
    placed = []
    for wish in wishes:
        spots = _spots(wish)
        rank = 0.002 * np.arange(len(spots))
        rank = rank + np.tile(_COSTS, len(spots) // len(_COSTS))
        box = spots[
            int(np.argmin(_covered_points(spots, drawn) + _covered_names(spots, boxes) + rank))
        ]
        boxes.append(box)
        x, y = float(box[0] + box[2]) / 2.0, float(box[1] + box[3]) / 2.0
        placed.append(Label(wish.text, wish.key, x / WIDTH, y / HEIGHT))
    return placed


def _dense(x: Real, y: Real) -> Real:
    """Points of a curve in pixels, with one more in each step so that steep ones count too."""
    steps = np.arange(2 * (x.size - 1) + 1) / 2.0
    index = np.arange(x.size)
    points = np.stack([np.interp(steps, index, x) * WIDTH, np.interp(steps, index, y) * HEIGHT])
    return points[:, (points[1] > -LINE) & (points[1] < HEIGHT + LINE)]


def _spots(wish: Wish) -> Real:
    """Boxes (left, low, right, high) where a name may stand, the most wanted first, ``(n, 4)``."""
    half = LETTER * len(wish.text) / 2.0
    shares = np.round(np.array([0.5, 0.3, 0.7, 0.12, 0.88]) * (wish.x.size - 1)).astype(int)
    x = np.clip(wish.x[shares] * WIDTH, half + 4.0, WIDTH - half - 4.0)
    near = np.abs(wish.x[:, np.newaxis] * WIDTH - x).argmin(axis=0)
    side = 1.0 if wish.above else -1.0
    steps = np.array(_STEPS) * side * LINE
    y = np.clip(
        (wish.y[near] * HEIGHT)[:, np.newaxis] + steps, LINE / 2.0, HEIGHT - LINE / 2.0
    ).reshape(-1)
    x = np.repeat(x, steps.size)
    return np.stack([x - half, y - LINE / 2.0, x + half, y + LINE / 2.0], axis=1)


def _covered_points(spots: Real, drawn: Real) -> Real:
    """Weight of the curve points under each box."""
    left, low, right, high = spots.T[:, :, np.newaxis]
    x, y = drawn
    return 0.05 * ((x > left) & (x < right) & (y > low) & (y < high)).sum(axis=1)


def _covered_names(spots: Real, boxes: Sequence[Real]) -> Real:
    """Weight of the names that each box would cover: more than any number of points."""
    if not boxes:
        return np.zeros(len(spots))
    left, low, right, high = np.array(boxes).T
    mine = spots[:, :, np.newaxis]
    covers = (mine[:, 0] < right) & (left < mine[:, 2]) & (mine[:, 1] < high) & (low < mine[:, 3])
    return 100.0 * covers.sum(axis=1)
