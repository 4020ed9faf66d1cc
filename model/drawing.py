"""What a layout looks like: outlines of its solid parts and the lengths that make them."""

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

#: A place (x, y), m, in the coordinates of the chip's patterns.
Place = tuple[float, float]


@dataclass(frozen=True)
class Shape:
    """A solid part as a closed polygon; `phase` of an electrode in degrees."""

    kind: Literal["electrode", "wall", "obstacle"]
    outline: tuple[Place, ...]
    phase: float = 0.0


@dataclass(frozen=True)
class Dimension:
    """A length to be written beside the drawing, the declared field `field` of the layout."""

    field: str
    start: Place
    end: Place


@dataclass(frozen=True)
class Drawing:
    """A part of the chip to scale: the `window` (x from, to, y from, to), m, and what is in it.

    Everything in the window that no shape covers is liquid.
    """

    window: tuple[float, float, float, float]
    shapes: tuple[Shape, ...]
    dimensions: tuple[Dimension, ...]


def box(low: Place, high: Place) -> tuple[Place, ...]:
    """Outline of a rectangle between two corners."""
    return (low, (high[0], low[1]), high, (low[0], high[1]))


@dataclass(frozen=True)
class Strip:
    """An electrode on floor or lid of a flat channel, from `start` to `end` along the flow, m."""

    start: float
    end: float
    phase: float = 0.0
    on_lid: bool = False


#: How deep a drawing shows floor and lid, and how thick metal that in truth is thin: over the
#: lesser of the channel's height and the drawn length, but at least so much of the length.
_WALL, _METAL = (0.18, 0.06), (0.05, 0.014)


def channel_drawing(
    ends: tuple[float, float],
    height: float,
    strips: Sequence[Strip],
    dimensions: Sequence[Dimension],
) -> Drawing:
    """Draw a flat channel between `ends`; strips are cut there and sunk into floor and lid.

    Outlines of the liquid are true; what is beyond them is as deep as the eye needs.
    """
    low, high = ends
    length = high - low
    wall, metal = (max(a * min(height, length), b * length) for a, b in (_WALL, _METAL))
    shapes = [
        Shape("wall", box((low, -wall), (high, 0.0))),
        Shape("wall", box((low, height), (high, height + wall))),
    ]
    for strip in strips:
        start, end = max(strip.start, low), min(strip.end, high)
        if start < end:
            face, outer = (height, height + metal) if strip.on_lid else (0.0, -metal)
            outline = box((start, min(face, outer)), (end, max(face, outer)))
            shapes.append(Shape("electrode", outline, strip.phase))
    return Drawing((low, high, -wall, height + wall), tuple(shapes), tuple(dimensions))
