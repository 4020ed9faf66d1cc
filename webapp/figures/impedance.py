"""Impedance of the chip against frequency: magnitude above phase."""

from typing import Any

import numpy as np

from model.evaluate import Evaluation
from model.quantity import format_si
from model.summary import generator_words
from webapp.figures.theme import Figure, Theme, axis, layout, log_axis, mark, numbers

#: Where magnitude and phase stand in the figure.
_UPPER, _LOWER = [0.4, 1.0], [0.0, 0.3]


def impedance_figure(result: Evaluation, theme: Theme) -> Figure:
    """Draw |Z| and its phase, with the source's resistance and the operating point."""
    frequency, impedance = result.frequency, 1.0 / result.spectrum.terminal_admittance
    size, phase = np.abs(impedance), np.degrees(np.angle(impedance))
    here = complex(1.0 / result.point.terminal_admittance[0])
    at = result.design.drive.frequency
    source = result.design.drive.source_resistance
    ends = float(frequency[0]), float(frequency[-1])
    low, high = _decades(float(size.min()), float(size.max()), source)
    line = {"color": theme.accent, "width": 2.5, "simplify": False}
    curve: dict[str, Any] = {"type": "scatter", "mode": "lines", "x": numbers(frequency)}
    thin = {"color": theme.quiet, "width": 1.2, "dash": "dash"}
    data = [
        {
            **curve,
            "y": numbers(size),
            "name": "impedance",
            "line": line,
            "hovertemplate": "%{y:.3~s}Ω at %{x:.3~s}Hz<extra></extra>",
        },
        {
            **curve,
            "x": list(ends),
            "y": [max(source, low / 30.0)] * 2,
            "name": "source resistance",
            "line": thin,
            "hovertemplate": "source resistance %{y:.3~s}Ω<extra></extra>",
        },
        mark(theme, at, abs(here)),
        {
            **curve,
            "y": numbers(phase),
            "name": "phase",
            "line": line,
            "yaxis": "y2",
            "hovertemplate": "%{y:.3~g}° at %{x:.3~s}Hz<extra></extra>",
        },
        mark(theme, at, float(np.degrees(np.angle(here))), yaxis="y2"),
    ]
    x_axis = {**log_axis(theme, "Frequency", *ends, "Hz"), "anchor": "y2"}
    y_axis = {**log_axis(theme, "Impedance", low, high, "Ω"), "domain": _UPPER}
    leads = bool(phase.max() > 5.0)  # long leads are inductive
    ticks = [-90, -45, 0, 45, 90] if leads else [-90, -60, -30, 0]
    phase_axis = axis(theme, "Phase (°)", range=[-97.0, 97.0 if leads else 7.0], tickvals=ticks)
    return {
        "data": data,
        "layout": layout(
            theme,
            margin={"l": 78, "r": 36, "t": 10, "b": 48},
            xaxis=x_axis,
            yaxis=y_axis,
            yaxis2={**phase_axis, "domain": _LOWER},
        ),
    }


def impedance_sentence(result: Evaluation) -> str:
    """Say what the generator has to drive."""
    here = complex(1.0 / result.point.terminal_admittance[0])
    phase = f"{np.degrees(np.angle(here)):.0f}".replace("-", "−")
    return (
        f"At {format_si(result.design.drive.frequency, 'Hz')} the chip is "
        f"{format_si(abs(here), 'Ω')} at {phase}° and draws "
        f"{format_si(result.load.rms_current, 'A')} rms; dashed, the source's "
        f"{format_si(result.design.drive.source_resistance, 'Ω')}. "
        f"On the generator {generator_words(result)}."
    )


def _decades(low: float, high: float, source: float) -> tuple[float, float]:
    """Whole decades around the curve and, if it is not far, the source's resistance."""
    low = min(low, max(source, low / 100.0))
    return 10.0 ** np.floor(np.log10(low)), 10.0 ** np.ceil(np.log10(high * 1.0001))
