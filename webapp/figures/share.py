"""Share of the voltage that reaches the liquid, against frequency."""

from typing import Any

import numpy as np

from model.arrays import Real
from model.evaluate import Evaluation
from model.quantity import format_si
from webapp.figures.theme import Figure, Theme, axis, layout, log_axis, mark, numbers

#: The share from which nearly all of the voltage is in the liquid.
_NEARLY_ALL = 0.9


def share_figure(result: Evaluation, theme: Theme) -> Figure:
    """Draw |share| between the terminals and the liquid, with the operating point."""
    frequency, share = result.frequency, 100.0 * np.abs(result.spectrum.share)
    ends = float(frequency[0]), float(frequency[-1])
    here = 100.0 * float(np.abs(result.point.share[0]))
    top = max(105.0, 1.05 * float(share.max()))  # an inductive lead can raise it beyond all
    curve: dict[str, Any] = {"type": "scatter", "mode": "lines", "x": numbers(frequency)}
    data = [
        {
            **curve,
            "y": numbers(share),
            "name": "share",
            "line": {"color": theme.accent, "width": 2.5, "simplify": False},
            "hovertemplate": "%{y:.3~g} % at %{x:.3~s}Hz<extra></extra>",
        },
        {
            **curve,
            "x": list(ends),
            "y": [100.0 * _NEARLY_ALL] * 2,
            "name": "nearly all",
            "line": {"color": theme.quiet, "width": 1.2, "dash": "dash"},
            "hoverinfo": "skip",
        },
        mark(theme, result.design.drive.frequency, here),
    ]
    y_axis = axis(theme, "Voltage in the liquid (%)", range=[0.0, top], nticks=6)
    x_axis = log_axis(theme, "Frequency", *ends, "Hz")
    return {"data": data, "layout": layout(theme, xaxis=x_axis, yaxis=y_axis)}


def share_sentence(result: Evaluation) -> str:
    """Say how much arrives now, and where nearly all of it does."""
    here = 100.0 * float(np.abs(result.point.share[0]))
    return (
        f"At {format_si(result.design.drive.frequency, 'Hz')} {here:.3g} % of the voltage between "
        f"the terminals reaches the liquid; "
        f"{share_band(result.frequency, np.abs(result.spectrum.share))}."
    )


def share_band(frequency: Real, share: Real) -> str:
    """Say where more than nine tenths reach the liquid (dashed)."""
    enough = np.flatnonzero(share >= _NEARLY_ALL)
    if enough.size == 0:
        return "nowhere on this axis is it nine tenths (dashed)"
    first, last = enough[0], enough[-1]
    low, high = (format_si(float(frequency[index]), "Hz") for index in (first, last))
    if first == 0 and last == share.size - 1:
        return "everywhere on this axis it is over nine tenths (dashed)"
    if first == 0:
        return f"up to {high} it is over nine tenths (dashed)"
    if last == share.size - 1:
        return f"from {low} it is over nine tenths (dashed)"
    return f"from {low} to {high} it is over nine tenths (dashed)"
