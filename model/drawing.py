"""What a layout looks like: outlines of its solid parts and the lengths that make them."""

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
