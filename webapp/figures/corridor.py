"""The voltage corridor: floor, ceilings and operating point against frequency."""

from collections.abc import Sequence
from itertools import pairwise
from typing import Any

import numpy as np

from model.arrays import Real
from model.corridor import Bound
from model.evaluate import Evaluation
from model.quantity import format_si
from model.verdict import format_volts
from model.voltage import PEAK_TO_PEAK
from webapp.figures.labels import HEIGHT, WIDTH, Label, Wish, label_trace, place_labels
from webapp.figures.theme import (
    Figure,
    Theme,
    colour_key,
    layout,
    limit_colour,
    log_axis,
    mark,
    nice_ceiling,
    numbers,
    plain,
)

#: A stretch gets a name of its own if it spans this share of the axis; a shorter one only where
#: the limit would have no name at all.
_WORTH_A_NAME = 0.15
#: Points on the operating mark's ring in pixels, many enough that no name covers it.
_RING = 8.0 * np.array([np.cos(np.arange(40) * np.pi / 20), np.sin(np.arange(40) * np.pi / 20)])
#: Values far off the axis are drawn this many times beyond its end, never as gaps.
_BEYOND = 30.0


def corridor_figure(result: Evaluation, theme: Theme) -> Figure:
    """Draw floor, every ceiling with its name, the corridor between, and the operating point."""
    frequency = result.corridor.frequency
    low, high = voltage_range(result)
    shown = _shown(low, high)
    floor, ceiling = shown(result.corridor.floor), shown(result.corridor.ceiling)
    x = numbers(frequency)
    data: list[dict[str, Any]] = [
        _edge(x, numbers(floor)),
        _edge(x, numbers(np.maximum(ceiling, floor)), fill="tonexty", fillcolor=theme.shade),
    ]
    binding = result.corridor.binding_ceiling()
    ceilings = result.corridor.ceilings
    # a condition has no curve: where it is broken nothing is shaded
    drawn = [(index, bound) for index, bound in enumerate(ceilings) if not bound.condition]
    data += [_ceiling(x, shown(bound.rms_voltage), bound, theme) for _, bound in drawn]
    for index, bound in drawn:
        binds = np.where(binding == index, shown(bound.rms_voltage), np.nan)
        data.append(_binding(frequency, binds, low / _BEYOND, bound, theme))
    data.append(_floor(x, floor, result, theme))
    labels = _labels(result, floor, [shown(bound.rms_voltage) for bound in ceilings], (low, high))
    data.append(_label_trace(labels, result, theme))
    drive = result.design.drive
    data.append(mark(theme, drive.frequency, drive.voltage))
    x_axis = log_axis(theme, "Frequency", float(frequency[0]), float(frequency[-1]), "Hz")
    y_axis = log_axis(theme, "Voltage, peak to peak (V)", low, high, "")
    return {"data": data, "layout": layout(theme, xaxis=x_axis, yaxis=y_axis)}


def corridor_sentence(result: Evaluation) -> str:
    """Say what the corridor shows now, in one sentence."""
    corridor = result.corridor
    open_at = (corridor.floor <= corridor.ceiling) & np.isfinite(corridor.floor)
    last = corridor.frequency.size
    if not open_at.any():
        return "No frequency has a corridor: everywhere the floor lies above the lowest ceiling."
    spans = [
        f"{format_si(float(corridor.frequency[start]), 'Hz')}"
        f"{'' if start else ' (lowest shown)'} to "
        f"{format_si(float(corridor.frequency[stop - 1]), 'Hz')}"
        f"{'' if stop < last else ' (highest shown)'}"
        for start, stop in _runs(open_at)
    ]
    least = np.where(open_at, np.maximum(corridor.floor, 1e-9), np.inf)
    room = np.where(open_at, corridor.ceiling, 0.0) / least
    best = int(np.argmax(room))
    widest = format_si(float(corridor.frequency[best]), "Hz")
    more = f" and in {len(spans) - 3} more bands" if len(spans) > 3 else ""
    return (
        f"A corridor exists from {' and from '.join(spans[:3])}{more}, widest near {widest}; "
        f"{_here(result)}."
    )


def _here(result: Evaluation) -> str:
    """Say how far the corridor reaches at the present frequency."""
    frequency = format_si(result.design.drive.frequency, "Hz")
    if not result.has_corridor:
        return f"at {frequency} there is none"
    low, high = format_volts(result.floor_pp), format_volts(result.ceiling_pp)
    return f"at {frequency} it reaches from {low} to {high} peak to peak"


def voltage_range(result: Evaluation) -> tuple[float, float]:
    """Ends of the voltage axis; they follow the generator, so that they rest while knobs move."""
    drive = result.design.drive
    low, high = drive.voltage_limit / 30.0, drive.voltage_limit * 2.5
    ceiling = result.ceiling_pp
    if 0.0 < ceiling < 1.5 * low:  # in steps, so that it rests here too
        low = nice_ceiling(ceiling) / 5.0
    return min(low, drive.voltage / 2.0), max(high, drive.voltage * 1.5)


def _shown(low: float, high: float) -> Any:
    """Turn V_rms into peak to peak, with values off the axis kept a little beyond its ends."""

    def convert(rms_voltage: Real) -> Real:
        return np.clip(rms_voltage * PEAK_TO_PEAK, low / _BEYOND, high * _BEYOND)

    return convert


def _edge(x: dict[str, str], y: dict[str, str], **more: Any) -> dict[str, Any]:
    return {
        "type": "scatter",
        "mode": "lines",
        "x": x,
        "y": y,
        "line": {"width": 0},
        "hoverinfo": "skip",
        **more,
    }


def _line(colour: str, width: float, **more: Any) -> dict[str, Any]:
    """Line through every point; the library's thinning would show corners in a smooth curve."""
    return {"color": colour, "width": width, "simplify": False, **more}


def _ceiling(x: dict[str, str], volts: Real, bound: Bound, theme: Theme) -> dict[str, Any]:
    return {
        **_edge(x, numbers(volts)),
        "name": plain(bound.name),
        "line": _line(limit_colour(theme, colour_key(bound.id, bound.sense)), 1.2, dash="dash"),
        "hoverinfo": "all",
        "hovertemplate": f"{plain(bound.name)}<br>"
        "at most %{y:.3~g} V at %{x:.3~s}Hz<extra></extra>",
    }


def _binding(
    frequency: Real, volts: Real, beyond: float, bound: Bound, theme: Theme
) -> dict[str, Any]:
    """Strong line where a ceiling is the lowest; a stub off the axis keeps it when it never is."""
    stub_x, stub_y = frequency[:2], np.array([beyond, beyond, np.nan])
    return {
        **_edge(
            numbers(np.concatenate([stub_x, stub_x[1:], frequency])),
            numbers(np.concatenate([stub_y, volts])),
        ),
        "name": f"binding {plain(bound.name)}",
        "line": _line(limit_colour(theme, colour_key(bound.id, bound.sense)), 3.5),
    }


def _floor(x: dict[str, str], floor: Real, result: Evaluation, theme: Theme) -> dict[str, Any]:
    label = result.design.task.label
    return {
        **_edge(x, numbers(floor)),
        "name": f"floor: {label}",
        "line": _line(theme.accent, 3.5),
        "hoverinfo": "all",
        "hovertemplate": f"floor: {label}<br>"
        "at least %{y:.3~g} V at %{x:.3~s}Hz<extra></extra>",
    }


def _labels(
    result: Evaluation, floor: Real, ceilings: Sequence[Real], ends: tuple[float, float]
) -> list[Label]:
    """Name the floor, and every ceiling where it binds or else where it is longest in sight."""
    corridor, (low, high) = result.corridor, ends
    span = float(corridor.frequency[0]), float(corridor.frequency[-1])
    x = _fraction(corridor.frequency, *span)
    heights = [_fraction(volts, low, high) for volts in (floor, *ceilings)]
    binding, task = corridor.binding_ceiling(), result.design.task
    wishes = [
        Wish(f"floor: {_floor_label(result, run)}", task.kind, x[run], heights[0][run], above=False)
        for run in _longest((heights[0] > 0.0) & (heights[0] < 1.0))
    ]
    binds, idle = [], []
    for index, bound in enumerate(corridor.ceilings):
        height, key = heights[index + 1], colour_key(bound.id, bound.sense)
        seen = (height > 0.0) & (height < 1.0)
        lowest = _slices(seen & (binding == index))
        binds += [Wish(bound.label, key, x[run], height[run]) for run in lowest]
        if not lowest:
            idle += [Wish(bound.label, key, x[run], height[run]) for run in _longest(seen)]
    # What binds is named first; a limit of many particles is not named again for each.
    for wish in sorted(binds, key=_span, reverse=True):
        if _span(wish) > _WORTH_A_NAME or wish.key not in {other.key for other in wishes}:
            wishes.append(wish)
    for wish in sorted(idle, key=_span, reverse=True):
        if _span(wish) > _WORTH_A_NAME and wish.key not in {other.key for other in wishes}:
            wishes.append(wish)
    wishes.sort(key=lambda wish: -wish.x.size)
    drive = result.design.drive
    ring = _fraction(np.array([drive.frequency]), *span) + _RING[0] / WIDTH
    level = _fraction(np.array([drive.voltage]), low, high) + _RING[1] / HEIGHT
    return place_labels(wishes, [(ring, level), *((x, height) for height in heights)])


def _floor_label(result: Evaluation, run: slice) -> str:
    """What sets the floor over most of a stretch."""
    corridor = result.corridor
    counts = np.bincount(corridor.binding_floor()[run])
    return corridor.floors[int(counts.argmax())].label


def _span(wish: Wish) -> float:
    """Share of the axis that a stretch covers."""
    return float(wish.x[-1] - wish.x[0])


def _label_trace(labels: list[Label], result: Evaluation, theme: Theme) -> dict[str, Any]:
    """Names with a slot for each that may ever stand there."""
    frequency = result.corridor.frequency
    return label_trace(
        labels,
        2 * len(result.corridor.bounds),
        (float(frequency[0]), float(frequency[-1])),
        voltage_range(result),
        lambda key: limit_colour(theme, key),
        theme,
    )


def _fraction(values: Real, low: float, high: float) -> Real:
    """Place on a logarithmic axis, 0 at `low` and 1 at `high`."""
    return np.asarray(np.log(values / low) / np.log(high / low))


def _slices(mask: Any) -> list[slice]:
    """Every stretch where `mask` holds."""
    return [slice(start, stop) for start, stop in _runs(mask)]


def _longest(mask: Any) -> list[slice]:
    """The longest stretch where `mask` holds, if there is one."""
    return sorted(_slices(mask), key=lambda run: run.start - run.stop)[:1]


def _runs(mask: Any) -> list[tuple[int, int]]:
    """Start and stop of every stretch where `mask` holds."""
    edges = np.flatnonzero(np.diff(np.concatenate([[False], mask, [False]]).astype(int)))
    return [(int(start), int(stop)) for start, stop in list(pairwise(edges))[::2]]
