"""Ranked rows of what moves the headroom most, as text and bar lengths."""

from typing import Any

from model.evaluate import Evaluation
from model.sensitivity import sensitivities

#: So many inputs are shown.
MOST_SHOWN = 8


def sensitivity_rows(result: Evaluation) -> list[dict[str, Any]]:
    """The strongest inputs, each with what 1 % more of it does to the headroom."""
    found = sensitivities(result)[:MOST_SHOWN]
    longest = max((abs(one.elasticity) for one in found), default=1.0)
    return [
        {
            "label": one.label,
            "value": f"{one.elasticity:+.2f} %".replace("-", "−"),
            "share": round(abs(one.elasticity) / longest, 3),
            "raises": one.elasticity > 0.0,
            "path": one.path,
        }
        for one in found
    ]


def sensitivity_sentence(result: Evaluation, rows: list[dict[str, Any]]) -> str:
    """Say what the bars mean and what leads."""
    name = result.binding.rule.name
    if not rows:
        return f"No input moves {name}, which binds here."
    return (
        f"What 1 % more of an input (1 K of a temperature) does to the headroom, which {name} sets "
        f"here. The chip's own lengths are left out."
    )
