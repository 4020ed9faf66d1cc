"""Temperature rise and electrothermal-flow risk against voltage and against conductivity."""

from typing import Any

import numpy as np

from model.arrays import Real
from model.cautions import NO_HEAT
from model.evaluate import Evaluation
from model.limits import LIMITS
from model.quantity import format_quantity, format_si
from model.sweeps import Sweep, sweep
from model.verdict import format_value
from webapp.figures.theme import (
    Figure,
    Theme,
    axis,
    layout,
    limit_colour,
    log_axis,
    mark,
    nice_ceiling,
    numbers,
    unknown_figure,
)

#: Conductivities shown, S/m: from clean water to beyond body fluids.
_LEAST, _MOST = 1e-4, 3.0


def sweep_of(result: Evaluation, limit: str) -> Sweep | None:
    """Sweep a limit over the axes that the figures show; None where heat is not known."""
    drive, present = result.design.drive, result.design.liquid.conductivity
    most = max(1.25 * drive.voltage_limit, 1.25 * drive.voltage)
    ends = min(_LEAST, present / 2.0), max(_MOST, present * 2.0)
    return sweep(result, limit, np.linspace(most / 80.0, most, 80), np.geomspace(*ends, 80))


def heating_figure(found: Sweep | None, result: Evaluation, theme: Theme) -> Figure:
    """Draw the temperature rise of the hottest liquid."""
    if found is None:
        return unknown_figure(theme)
    reached = found.value if np.isfinite(found.value) else found.allowed
    top = nice_ceiling(1.6 * max(reached, found.allowed))
    y_axis = axis(theme, "Temperature rise (K)", range=[0.0, top], tickformat="~g")
    return _figure(found, result, theme, y_axis)


def electrothermal_figure(found: Sweep | None, result: Evaluation, theme: Theme) -> Figure:
    """Draw electrothermal speed over dielectrophoretic speed."""
    if found is None:
        return unknown_figure(theme)
    low = min(1e-4, 10.0 ** np.floor(np.log10(max(found.value, 1e-6))))
    most = max(found.allowed, min(found.value, 1e6))
    high = max(10.0, 10.0 ** np.ceil(np.log10(most) + 0.2))
    title = "Electrothermal / DEP speed"
    return _figure(found, result, theme, log_axis(theme, title, low, high, ""))


def heating_sentence(found: Sweep | None, result: Evaluation) -> str:
    """Say how warm it gets and what that allows."""
    if found is None:
        return NO_HEAT
    allowed = f"a rise of {format_value(found.allowed, 'K')} is allowed"
    if not np.isfinite(found.value):
        return f"The liquid warms without end, as it conducts better when warm; {allowed}."
    rise = result.design.liquid.temperature + found.value
    return (
        f"The hottest liquid is {format_value(found.value, 'K')} above the stage, at "
        f"{format_value(rise, 'degC')}; {allowed}."
    )


def electrothermal_sentence(found: Sweep | None, result: Evaluation) -> str:
    """Say whether the liquid or the force wins at the working height."""
    speed = result.electrothermal_speed
    if found is None or speed is None:
        return NO_HEAT
    liquid = format_si(speed, "m/s")
    force = format_si(result.dielectrophoretic_speed, "m/s")
    height = format_quantity(result.design.task.force_height, "um", 3)
    return (
        f"At {height} the liquid stirs at up to {liquid}, while the force moves the slowest "
        f"particle to be collected at up to {force}."
    )


def _figure(found: Sweep, result: Evaluation, theme: Theme, y_axis: dict[str, Any]) -> Figure:
    """Two panels on one value axis: voltage at the left, conductivity at the right."""
    limit = LIMITS[found.limit]
    colour = limit_colour(theme, found.limit)
    ends = y_axis["range"]
    low, high = (10.0**end for end in ends) if y_axis.get("type") == "log" else ends
    drive, present = result.design.drive, result.design.liquid.conductivity
    data: list[dict[str, Any]] = []
    conductivity = found.conductivity * 1e3  # mS/m, as the axis shows it
    panels = (
        ("x", found.voltage, found.by_voltage, drive.voltage, "V"),
        ("x2", conductivity, found.by_conductivity, present * 1e3, "mS/m"),
    )
    for name, at, values, here, unit in panels:
        shown = f"{{y:.3~g}} {limit.unit}" if limit.unit else "{y:.3~g} of the DEP speed"
        hover = f"%{shown} at %{{x:.3~g}} {unit}<extra></extra>"
        curve = {"type": "scatter", "mode": "lines", "xaxis": name, "hovertemplate": hover}
        line = {"color": colour, "width": 2.5, "simplify": False}
        visible = np.clip(values, low / 30.0, high * 30.0)
        data.append({**curve, "x": numbers(at), "y": numbers(visible), "line": line})
        data.append({**curve, **_threshold(at, found.allowed, limit.unit, colour)})
        data.append(mark(theme, here, float(np.clip(found.value, low, high)), xaxis=name))
    x_axis = axis(
        theme,
        "Voltage, peak to peak (V)",
        range=[0.0, float(found.voltage[-1])],
        domain=[0.0, 0.47],
    )
    x2_axis = {
        **log_axis(
            theme, "Conductivity (mS/m)", float(conductivity[0]), float(conductivity[-1]), ""
        ),
        "domain": [0.53, 1.0],
        "anchor": "y",
        "tickangle": 0,
    }
    return {"data": data, "layout": layout(theme, xaxis=x_axis, xaxis2=x2_axis, yaxis=y_axis)}


def _threshold(at: Real, allowed: float, unit: str, colour: str) -> dict[str, Any]:
    """Dashed line at what is allowed, across one panel."""
    return {
        "x": [float(at[0]), float(at[-1])],
        "y": [allowed, allowed],
        "line": {"color": colour, "width": 1.2, "dash": "dash"},
        "hovertemplate": f"allowed: {format_value(allowed, unit)}<extra></extra>",
    }
