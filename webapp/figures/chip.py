"""The chip's drawing as plain outlines and labelled lengths, for the page to draw to scale."""

from typing import Any

from model.declare import Quantity, declarations
from model.drawing import Dimension, Drawing, Shape
from model.layout import Layout
from model.quantity import format_quantity

#: Signs of opposite phases, degrees; of more phases than two the angles are written.
_SIGNS = {0.0: "+", 180.0: "−"}


def chip_drawing(chip: Layout) -> dict[str, Any]:
    """Window, shapes and dimensions with their present values, m and text."""
    drawing = chip.drawing()
    return {
        "window": drawing.window,
        "shapes": [_shape(shape, drawing) for shape in drawing.shapes],
        "dimensions": [_dimension(dimension, chip) for dimension in drawing.dimensions],
        "label": f"{chip.layout.replace('-', ' ').capitalize()} to scale, "
        + ", ".join(_words(dimension, chip) for dimension in drawing.dimensions),
    }


def electrode_sign(shape: Shape, drawing: Drawing) -> str:
    """How the phase of an electrode is written beside it: + and −, or its angle."""
    phases = {other.phase for other in drawing.shapes if other.kind == "electrode"}
    return _SIGNS[shape.phase] if phases <= set(_SIGNS) else f"{shape.phase:g}°"


def _shape(shape: Shape, drawing: Drawing) -> dict[str, Any]:
    found: dict[str, Any] = {"kind": shape.kind, "outline": shape.outline}
    if shape.kind == "electrode":
        found |= {"sign": electrode_sign(shape, drawing), "solid": shape.phase == 0.0}
    return found


def _dimension(dimension: Dimension, chip: Layout) -> dict[str, Any]:
    return {
        "start": dimension.start,
        "end": dimension.end,
        "text": _value(dimension, chip),
        "field": f"chip.{dimension.field}",
    }


def _value(dimension: Dimension, chip: Layout) -> str:
    declared = dict(declarations(type(chip)))[dimension.field]
    unit = declared.unit if isinstance(declared, Quantity) else ""
    return format_quantity(getattr(chip, dimension.field), unit, 4)


def _words(dimension: Dimension, chip: Layout) -> str:
    label = dict(declarations(type(chip)))[dimension.field].label
    return f"{label.lower()} {_value(dimension, chip)}"
