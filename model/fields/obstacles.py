"""Meshes of the liquid past an insulating obstacle, a quarter of the plan."""

from collections.abc import Callable

import numpy as np
from skfem import Mesh

from model.arrays import Real
from model.fields.blocks import joined, rectangle, ruled
from model.fields.grading import march

#: First cell at a corner of 270° over the size of the corner; the resistance is off by some
#: thousandth of it, as φ grows as r^(2/3) there.
CORNER_CELL = 4e-3
#: First cell at a smooth wall over the opening.
WALL_CELL = 0.06
#: Longest step along the post, rad, and over the opening there.
TURN, STEP = 0.06, 0.4


def ridge_quarter(
    half_length: float, half_opening: float, half_width: float, reach: float, refinement: int = 0
) -> Mesh:
    """Mesh a quarter of a channel with a tooth on its wall, x and y from the middle, m.

    The tooth covers 0 ≤ x ≤ `half_length`, `half_opening` ≤ y ≤ `half_width`. The boundaries are
    ``left`` (x = 0), ``bottom`` (y = 0) and ``end`` (x = `reach`).
    """
    depth = half_width - half_opening
    first = CORNER_CELL * min(half_length, half_opening, depth)
    below = half_opening - march(half_opening, first, lambda _: 0.5 * half_opening)[::-1]
    above = half_opening + march(depth, first, lambda _: 0.5 * depth)
    within = half_length - march(half_length, first, lambda _: 0.5 * half_length)[::-1]
    beyond = half_length + march(reach - half_length, first, _growing(0.3 * half_width))
    blocks = [rectangle(within, below), rectangle(beyond, below), rectangle(beyond, above)]
    return joined(blocks, _sides(half_opening, reach), refinement)


def post_quarter(radius: float, opening: float, reach: float, refinement: int = 0) -> Mesh:
    """Mesh a quarter of a channel with a round post in its middle, m.

    `opening` is left between the post and the wall; `reach` must be at least `radius` more than
    half the width. Boundaries as of :func:`ridge_quarter`.
    """
    half_width = radius + opening
    box = half_width + 0.4 * radius
    turns = _turns(radius, opening)
    low, high = turns[turns <= 0.25 * np.pi + 1e-9], turns[turns >= 0.25 * np.pi - 1e-9]
    shares = march(1.0, WALL_CELL * min(1.0, radius / opening), lambda _: 0.4)
    upright = _line((box, 0.0), (box, half_width), low)
    level = _line((box, half_width), (0.0, half_width), high)
    arc = _arc(radius, turns)
    beyond = box + march(reach - box, 0.4 * half_width, _growing(0.4 * half_width))
    blocks = [
        ruled(arc[: low.size], upright, shares),
        ruled(arc[low.size - 1 :], level, shares),
        rectangle(beyond, upright[:, 1]),
    ]
    return joined(blocks, _sides(radius, reach), refinement)


def _growing(least: float) -> Callable[[float], float]:
    """Cells as long as they are far away."""
    return lambda distance: max(least, distance)


def _sides(size: float, reach: float) -> dict[str, Callable[[Real], np.ndarray]]:
    slack = 1e-9 * size
    return {
        "left": lambda at: at[0] < slack,
        "bottom": lambda at: at[1] < slack,
        "end": lambda at: at[0] > reach - slack,
    }


def _turns(radius: float, opening: float) -> Real:
    """Angles of the corners on the post from 0 to 90°, one at 45°, closer in the opening."""

    def step(short: float) -> float:
        """Angle up to which a chord may reach at `short` of 90°."""
        gap = opening + radius * (1 - np.cos(short))
        return float(min(TURN, STEP * gap / radius))

    right, half = 0.5 * np.pi, 0.25 * np.pi
    late = right - march(half, step(0.0), step)[::-1]
    early = march(half, TURN, lambda _: TURN)
    return np.concatenate([early[:-1], late])


def _arc(radius: float, turns: Real) -> Real:
    """Corners (n, 2) of a polygon with as much outside the circle as inside.

    Chords of an angle t lie t²/12 of the radius inside in the mean; the corners move outward by
    as much.
    """
    steps = np.diff(turns)
    squares = 0.5 * (np.append(steps[0], steps) ** 2 + np.append(steps, steps[-1]) ** 2)
    sizes = radius * (1 + squares / 12)
    corners = sizes[:, None] * np.stack([np.cos(turns), np.sin(turns)], axis=-1)
    corners[0, 1] = corners[-1, 0] = 0.0  # on the axes, without rounding
    return np.asarray(corners)


def _line(start: tuple[float, float], end: tuple[float, float], places: Real) -> Real:
    """Points (n, 2) on a straight line, spread as `places` are."""
    shares = (places - places[0]) / (places[-1] - places[0])
    return np.asarray((1 - shares)[:, None] * start + shares[:, None] * end)
