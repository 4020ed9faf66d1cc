"""Panels of the section: field, force, temperature rise and flow."""

from typing import Any

import numpy as np

from model.arrays import Real
from model.evaluate import Evaluation
from model.maps import SectionMaps
from model.particle import Particle
from model.quantity import format_si
from model.streamlines import streamlines
from webapp.figures.panel import (
    BAR,
    MICRO,
    PANEL,
    bar_texts,
    broken_line,
    colour_bar,
    frame,
    heat_map,
    level,
    panel,
    probe_mark,
    tick_count,
)
from webapp.figures.theme import Figure, Theme, particle_line, unknown_figure

#: Decades that the shades of the field span at most, and the share of the map that they leave
#: out at either end: at the edges of electrodes the field has no greatest value.
_DECADES, _LEFT_OUT = 3.0, 0.4
#: Decades of force between a full arrow and none.
_ARROW_DECADES = 4.0
#: Full length of an arrow over the spacing of its grid, and its head over that.
_FULL, _HEAD = 0.92, 0.3


def field_figure(
    result: Evaluation, maps: SectionMaps, place: tuple[float, float], theme: Theme, held: bool
) -> Figure:
    """Draw |E| in shades of its logarithm; voltage only moves the numbers beside them."""
    grid, pattern = maps.patterns.liquid, maps.patterns.field
    low, high = (maps.liquid_voltage * value for value in _field_range(pattern))
    decades = float(np.log10(high / low))
    shown = None if held else np.log10(maps.field / low) / decades
    ticks = [
        (float(np.log10(tick / low) / decades), format_si(tick, "V/m"))
        for tick in _log_ticks(low, high, tick_count(result.design.chip))
    ]
    data = [
        heat_map(grid.x, grid.y, shown, theme.field, "field"),
        *colour_bar(ticks, theme.field, "field ticks", theme),
        *level(result.design.chip, result.design.task.force_height, theme),
        *probe_mark(theme, place),
    ]
    return panel(result.design.chip, theme, data)


def _field_range(pattern: Real) -> tuple[float, float]:
    """Ends of the shades, 1/m."""
    low, high = np.nanpercentile(pattern, [_LEFT_OUT, 100.0 - _LEFT_OUT])
    return float(max(low, high / 10.0**_DECADES)), float(max(high, 1.2 * low))


def _log_ticks(low: float, high: float, most: int) -> list[float]:
    """Ticks at 1, 2 and 5, at 1 and 3, or at 1 times powers of ten, whichever are not too many."""
    powers = 10.0 ** np.arange(np.floor(np.log10(low)), np.ceil(np.log10(high)) + 1)
    found: list[float] = []
    for steps in ((1.0, 2.0, 5.0), (1.0, 3.0), (1.0,)):
        found = [float(step * power) for power in powers for step in steps]
        found = [tick for tick in found if low <= tick <= high]
        if len(found) <= most:
            break
    return found


def temperature_figure(
    result: Evaluation, maps: SectionMaps, place: tuple[float, float], theme: Theme, held: bool
) -> Figure:
    """Draw the temperature rise in liquid and walls."""
    if not result.patterns.has_heat:
        return unknown_figure(theme)
    grid, pattern = maps.patterns.whole, maps.patterns.warmth
    low, high = float(np.nanmin(pattern)), float(np.nanmax(pattern))
    shown = None if held else (pattern - low) / (high - low)
    scale = float(result.point.heat_scale[0]) * result.rms_voltage**2
    low_rise, high_rise, count = scale * low, scale * high, tick_count(result.design.chip)
    ticks = [
        (place, format_si(tick, "K")) for place, tick in _even_ticks(low_rise, high_rise, count)
    ]
    data = [
        heat_map(grid.x, grid.y, shown, theme.warmth, "temperature rise"),
        *colour_bar(ticks, theme.warmth, "temperature ticks", theme),
        *level(result.design.chip, result.design.task.force_height, theme),
        *probe_mark(theme, place),
    ]
    outline = {"color": theme.quiet, "width": 1}
    edges = [
        {"type": "line", "xref": "x", "yref": "y", "x0": left, "x1": right, "y0": y, "y1": y,
         "line": outline}
        for left, right, y in _faces(result)
    ]  # fmt: skip
    return panel(result.design.chip, theme, data, shapes=edges)


def _faces(result: Evaluation) -> list[tuple[float, float, float]]:
    """Floor and lid as lines, µm; a plan has none."""
    chip = result.design.chip
    if chip.view == "plan":
        return []
    left, right = frame(chip).window[:2]
    return [(left, right, 0.0), (left, right, MICRO * chip.height)]


def _even_ticks(low: float, high: float, most: int) -> list[tuple[float, float]]:
    """Place and value of ticks in steps of 1, 2 or 5 times a power of ten, not many more."""
    span = high - low
    power = 10.0 ** np.floor(np.log10(span / most))
    step = next(step * power for step in (1.0, 2.0, 5.0, 10.0) if span / (step * power) < most)
    ticks = step * np.arange(np.ceil(low / step), np.floor(high / step) + 1)
    return [(float((tick - low) / span), float(tick)) for tick in ticks]


def force_figure(
    result: Evaluation,
    maps: SectionMaps,
    particle: Particle,
    place: tuple[float, float],
    theme: Theme,
) -> Figure:
    """Draw the force on one particle as arrows, as long as the logarithm of the force."""
    chip = result.design.chip
    colour = particle_line(theme, result.design.particles.index(particle))["color"]
    line = {"color": colour, "width": 1.6, "simplify": False}
    full = _spacing(maps) * _FULL
    force, most = _reachable(maps, particle, result), longest_force(maps, particle, result)
    stretch = frame(chip).stretch
    sizes = [most * 10.0**-power for power in range(4)] if most else []
    ticks = [(0.86 - 0.17 * row, format_si(size, "N", 2)) for row, size in enumerate(sizes)]
    radius = MICRO * particle.equivalent_radius
    data = [
        broken_line(_arrows(maps, force, most, full, stretch), name="force", line=line),
        _key(chip, full, [place for place, _ in ticks], line),
        bar_texts(ticks, "force ticks", theme, 1.0),
        *level(chip, result.design.task.force_height, theme),
        _particle(result, particle, line),
        *probe_mark(theme, place),
    ]
    return panel(chip, theme, data, shapes=_out_of_reach(result, radius, theme))


def longest_force(maps: SectionMaps, particle: Particle, result: Evaluation) -> float:
    """The force of the longest arrow, N."""
    force = _reachable(maps, particle, result)
    sizes = np.hypot(*force)
    return float(np.nanmax(sizes)) if np.isfinite(sizes).any() else 0.0


def _reachable(maps: SectionMaps, particle: Particle, result: Evaluation) -> Real:
    """The force where the centre of the particle can be; NaN elsewhere."""
    chip, radius = result.design.chip, particle.equivalent_radius
    if chip.view == "plan":
        return maps.force
    y = maps.patterns.places.y
    free = (y >= radius) & (y <= chip.height - radius)
    return np.where(free[:, None], maps.force, np.nan)


def _spacing(maps: SectionMaps) -> float:
    """Distance of neighbouring arrows, m."""
    grid = maps.patterns.places
    return float(grid.x[1] - grid.x[0])


def _arrows(maps: SectionMaps, force: Real, most: float, full: float, stretch: float) -> list[Real]:
    """Arrows centred on their places, in m; a force 10⁴ times below the greatest has none."""
    if most == 0.0:
        return []
    size = np.hypot(*force)
    drawn = np.isfinite(size) & (size > most * 10.0**-_ARROW_DECADES)
    row, column = np.nonzero(drawn)
    size = size[drawn]
    length = full * (1.0 + np.log10(size / most) / _ARROW_DECADES)
    along = force[:, drawn] / size
    middle = np.stack([maps.patterns.places.x[column], maps.patterns.places.y[row]])
    return list(_glyphs(middle, along, length, full, stretch))


def _glyphs(middle: Real, along: Real, length: Real, full: float, stretch: float) -> Real:
    """Shaft, head and back to the other side of the head: (n, 2, 5); directions as on screen."""
    aside = np.stack([-along[1], along[0]])
    head = np.minimum(_HEAD * full, 0.6 * length)
    tip, tail = 0.5 * length * along, -0.5 * length * along
    left, right = (tip - head * (along + side * 0.45 * aside) for side in (1.0, -1.0))
    corners = np.stack([tail, tip, left, tip, right])  # (5, 2, n)
    corners[:, 1] /= stretch
    return np.asarray((corners + middle).transpose(2, 1, 0))


def _key(chip: Any, full: float, rows: list[float], line: dict[str, Any]) -> dict[str, Any]:
    """Arrows of known force beside the panel, as long as those within."""
    left, right = frame(chip).window[:2]
    across = (PANEL[1] - PANEL[0]) / (BAR[1] - BAR[0])  # widths of the panel in widths of the bar
    wide = MICRO * full / (right - left) * across
    tall = across * frame(chip).aspect
    pieces = []
    for index, row in enumerate(rows):
        length = wide * (1.0 - index / _ARROW_DECADES)
        head = min(_HEAD * wide, 0.6 * length)
        rise = 0.45 * head / tall
        tip = 1.0
        pieces.append(
            np.array(
                [
                    [tip - length, tip, tip - head, tip, tip - head],
                    [row, row, row + rise, row, row - rise],
                ]
            )
        )
    found = broken_line([piece / MICRO for piece in pieces], name="force key", line=line)
    return {**found, "xaxis": "x2", "yaxis": "y2", "cliponaxis": False}


def _particle(result: Evaluation, particle: Particle, line: dict[str, Any]) -> dict[str, Any]:
    """The particle itself, to scale, at the working height."""
    turn = np.linspace(0.0, 2.0 * np.pi, 49)
    x, y = _beside(result), default_place(result)[1]
    radius = particle.equivalent_radius
    ring = np.stack([x + radius * np.cos(turn), y + radius * np.sin(turn)])
    return broken_line([ring], name="particle", line={**line, "width": 2})


def _out_of_reach(result: Evaluation, radius: float, theme: Theme) -> list[dict[str, Any]]:
    """Pale bands along floor and lid where the centre of the particle cannot be."""
    chip = result.design.chip
    if chip.view == "plan":
        return []
    left, right = frame(chip).window[:2]
    top = MICRO * chip.height
    return [
        {"type": "rect", "x0": left, "x1": right, "y0": low, "y1": high, "layer": "below",
         "fillcolor": theme.grid, "opacity": 0.5, "line": {"width": 0}}
        for low, high in ((0.0, min(radius, top)), (max(top - radius, 0.0), top))
    ]  # fmt: skip


def flow_figure(
    result: Evaluation, maps: SectionMaps, place: tuple[float, float], theme: Theme
) -> Figure:
    """Draw the electrothermal flow as streamlines with heads."""
    if not result.patterns.has_heat:
        return unknown_figure(theme)
    lines = streamlines(maps)
    line = {"color": theme.accent, "width": 1.5, "simplify": False}
    data = [
        broken_line(lines, name="streamlines", line=line),
        broken_line(_heads(lines, result), name="sense", line={**line, "width": 1.8}),
        *level(result.design.chip, result.design.task.force_height, theme),
        *probe_mark(theme, place),
    ]
    return panel(result.design.chip, theme, data)


def _heads(lines: list[Real], result: Evaluation) -> list[Real]:
    """An arrow head on every line, at its top and at its bottom."""
    at = frame(result.design.chip)
    spots = [
        turned[:, index - 1 : index + 2]
        for line in lines
        for turned in (_closed(line),)
        for index in {int(line[1].argmax()) + 1, int(line[1].argmin()) + 1}
        if np.isfinite(turned[:, index - 1 : index + 2]).all()
    ]
    if not spots:
        return []
    before, middle, after = np.array(spots).transpose(2, 1, 0)
    steps = after - before
    steps[1] *= at.stretch
    size = np.full(len(spots), 0.016 * (at.window[1] - at.window[0]) / MICRO)
    steps /= np.maximum(np.hypot(*steps), 1e-12 * size)
    return list(_glyphs(middle, steps, size, size[0] / _HEAD, at.stretch)[:, :, 2:])


def _closed(line: Real) -> Real:
    """A line with one point more at either end: of a closed one its own, else none."""
    closed = bool(np.all(line[:, 0] == line[:, -1]))
    spare = np.full((2, 1), np.nan)
    ends = (line[:, -2:-1], line[:, 1:2]) if closed else (spare, spare)
    return np.concatenate([ends[0], line, ends[1]], axis=1)


def default_place(result: Evaluation) -> tuple[float, float]:
    """The place that is probed before another is chosen, on the line where forces are taken.

    At the first edge of an electrode, a quarter of the way along if no metal is drawn, or in a plan
    where the force along the flow is largest.
    """
    chip = result.design.chip
    y = chip.force_level(result.design.task.force_height)
    if chip.view == "plan":
        line = result.point.line
        return abs(float(line.x[int(np.abs(line.gradient[0]).argmax())])), y
    metal = [shape for shape in chip.drawing().shapes if shape.kind == "electrode"]
    left, right = chip.drawing().window[:2]
    return max(metal[0].outline)[0] if metal else 0.75 * left + 0.25 * right, y


def _beside(result: Evaluation) -> float:
    """Where the particle is drawn, x: on the other side of an electrode or of the window, m."""
    drawing, x = result.design.chip.drawing(), default_place(result)[0]
    metal = any(shape.kind == "electrode" for shape in drawing.shapes)
    return -x if metal else drawing.window[0] + drawing.window[1] - x
