"""Maps over what a chip's drawing shows: field, temperature rise, force and electrothermal flow.

The patterns are laid on grids once per chip; an operating point then only scales them.
"""

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from model.arrays import Real
from model.conditions import Conditions
from model.evaluate import Evaluation
from model.fields.patterns import ChipPatterns
from model.fields.stored import Stored
from model.layout import Layout
from model.particle import Particle

#: Columns of the maps over the drawn length, of the places of arrows, and of the flow's nodes.
COLUMNS, ARROWS, NODES = 240, 22, 96


@dataclass(frozen=True, eq=False)
class Grid:
    """A rectangular grid of places: `x` (n,) along the flow, `y` (m,) across, m."""

    x: Real
    y: Real


@dataclass(frozen=True, eq=False, repr=False)
class PatternMaps(Stored):
    """Patterns of a chip on grids, per 1 V rms; see :class:`ChipPatterns` for their units.

    Parameters
    ----------
    liquid, field
        Grid of cell centres over the liquid and |Ê|, (m, n).
    whole, warmth
        Grid of cell centres over the whole drawing and Θ there, (m, n).
    places, forces
        Coarse grid and ∇|Ê|² and the travelling pattern there, (2, 2, m, n).
    nodes, flows, streams
        Nodes from wall to wall, U₁, U₂ and U₃ there, (3, 2, m, n), and their stream functions
        ψ in m, (3, m, n), with u = (∂ψ/∂y, −∂ψ/∂x) and ψ = 0 on the floor or in the middle.

    What lies outside the liquid, or for Θ outside the chip, is NaN; all of Θ and flows is where
    heat is not known.
    """

    liquid: Grid
    field: Real
    whole: Grid
    warmth: Real
    places: Grid
    forces: Real
    nodes: Grid
    flows: Real
    streams: Real


@dataclass(frozen=True, eq=False, repr=False)
class SectionMaps:
    """Maps at one operating point.

    Parameters
    ----------
    patterns
        The grids and patterns that were scaled.
    period
        Repeat of all maps along x, m; None if there is none.
    liquid_voltage
        What of the rms voltage reaches the liquid, V.
    field
        |E| while the drive is on, V/m rms, (m, n) on `patterns.liquid`.
    rise
        Temperature rise, K, (m, n) on `patterns.whole`.
    force
        On one particle, N, (2, m, n) on `patterns.places`.
    velocity, stream
        Electrothermal flow, m/s, (2, m, n), and its stream function, m²/s, (m, n), both on
        `patterns.nodes`.

    Notes
    -----
    Rise, force and flow are means over the drive's duty.
    """

    patterns: PatternMaps
    period: float | None
    liquid_voltage: float
    field: Real
    rise: Real
    force: Real
    velocity: Real
    stream: Real


@dataclass(frozen=True)
class Probe:
    """What holds at one place (x, y): as in :class:`SectionMaps`; None where there is none."""

    x: float
    y: float
    field: float | None
    force: tuple[float, float] | None
    rise: float | None
    velocity: tuple[float, float] | None


def pattern_maps(patterns: ChipPatterns) -> PatternMaps:
    """Patterns of a chip on the grids of its maps; kept with the chip."""
    return patterns.remembered("maps", lambda: _lay_out(patterns))


def _lay_out(patterns: ChipPatterns) -> PatternMaps:
    chip = patterns.chip
    window = chip.drawing().window
    left, right, low, high = liquid_window(chip)
    step = _step(patterns.period, right - left)
    liquid = Grid(_centres(left, right, step), _centres(low, high, _tall(step, high - low)))
    whole = Grid(liquid.x, _centres(window[2], window[3], _tall(step, window[3] - window[2])))
    wide = step * COLUMNS / ARROWS
    places = Grid(_centres(left, right, wide), _centres(low, high, _tall(wide, high - low)))
    nodes = Grid(
        np.linspace(left, right, NODES + 1),
        np.linspace(low, high, 2 * min(max(round((high - low) / (4 * step)), 20), 45) + 1),
    )

    flow = _laid(patterns, nodes, _flows) if patterns.has_heat else _nothing(nodes, 3, 2)
    warmth = _nothing(whole)
    if patterns.has_heat:
        warmth = _laid(patterns, whole, ChipPatterns.temperature, in_chip)
    return PatternMaps(
        liquid=liquid,
        field=_laid(patterns, liquid, _size),
        whole=whole,
        warmth=warmth,
        places=places,
        forces=_laid(patterns, places, _forces),
        nodes=nodes,
        flows=flow,
        streams=_streams(nodes, flow, closed=chip.view == "section"),
    )


def section_maps(result: Evaluation, particle: Particle) -> SectionMaps:
    """Scale the maps of a result's chip to its operating point, for the force on one particle."""
    maps, at, volts = pattern_maps(result.patterns), result.point, result.rms_voltage
    force = _weigh(_force_weights(at, particle), maps.forces)
    weights = _flow_weights(at)
    return SectionMaps(
        patterns=maps,
        period=result.patterns.period,
        liquid_voltage=_in_liquid(at) * volts,
        field=_in_liquid(at) * volts * maps.field,
        rise=float(at.heat_scale[0]) * volts**2 * maps.warmth,
        force=volts**2 * force,
        velocity=volts**4 * _weigh(weights, maps.flows),
        stream=volts**4 * _weigh(weights, maps.streams),
    )


def probe(result: Evaluation, particle: Particle, x: float, y: float) -> Probe:
    """Read all maps at one place, from the patterns themselves."""
    here, at, volts = _place_patterns(result.patterns, x, y), result.point, result.rms_voltage
    rise = None
    if here.warmth is not None:
        rise = float(at.heat_scale[0]) * volts**2 * here.warmth
    if here.field is None:
        return Probe(x, y, None, None, rise, None)
    force = volts**2 * _weigh(_force_weights(at, particle), here.forces)
    velocity = None
    if here.flows is not None:
        u = volts**4 * _weigh(_flow_weights(at), here.flows)
        velocity = (float(u[0]), float(u[1]))
    return Probe(
        x,
        y,
        _in_liquid(at) * volts * here.field,
        (float(force[0]), float(force[1])),
        rise,
        velocity,
    )


@dataclass(frozen=True, eq=False, repr=False)
class _PlacePatterns(Stored):
    """Patterns at one place; None and no numbers where there are none."""

    field: float | None
    warmth: float | None
    forces: Real
    flows: Real | None


def _place_patterns(patterns: ChipPatterns, x: float, y: float) -> _PlacePatterns:
    """Patterns at one place; a knob asks for the same one again and again."""
    return patterns.remembered(("place", x, y), lambda: _at_place(patterns, x, y))


def _at_place(patterns: ChipPatterns, x: float, y: float) -> _PlacePatterns:
    known = patterns.has_heat
    warm = float(patterns.temperature(x, y)) if known and in_chip(patterns, x, y).all() else None
    if not patterns.inside(x, y).all():
        return _PlacePatterns(None, warm, np.zeros((2, 2)), None)
    size, flows = float(_size(patterns, x, y)), _flows(patterns, x, y) if known else None
    return _PlacePatterns(size, warm, _forces(patterns, x, y), flows)


def liquid_window(chip: Layout) -> tuple[float, float, float, float]:
    """The part of a drawing that liquid may fill: x from, x to, y from, y to, m."""
    left, right, low, high = chip.drawing().window
    if chip.view == "section":
        return left, right, max(low, 0.0), min(high, chip.height)
    return left, right, low, high


def in_chip(patterns: ChipPatterns, x: Real | float, y: Real | float) -> np.ndarray:
    """Whether places are in liquid or walls, where a temperature is known."""
    chip = patterns.chip
    if chip.view == "plan":
        return patterns.inside(x, y)
    low, high = -chip.floor.thickness, chip.height + chip.lid.thickness
    left, right = patterns.span if patterns.period is None else (-np.inf, np.inf)
    along, up = np.asarray(x), np.asarray(y)
    beside = np.isfinite(along) & (along >= left) & (along <= right)
    return np.asarray(beside & (up >= low) & (up <= high))


def _in_liquid(at: Conditions) -> float:
    """Share of the voltage that reaches the liquid at the one frequency of `at`."""
    return float(np.abs(at.share[0]))


def _force_weights(at: Conditions, particle: Particle) -> Real:
    """Factors of the force patterns at the one frequency of `at`, N per V² and pattern."""
    return float(at.force_scale(particle)[0]) * _at_one_frequency(at.force_weights(particle), 2)


def _flow_weights(at: Conditions) -> Real:
    """Factors of the flow patterns at the one frequency of `at`, m/s per V⁴."""
    return float(at.electrothermal_scale[0]) * _at_one_frequency(at.electrothermal_weights(), 3)


def _at_one_frequency(weights: Sequence[Real], count: int) -> Real:
    """Factors at the one frequency there is; 0 for patterns that a drive in one phase lacks."""
    found = [float(weight[0]) for weight in weights]
    return np.array(found + [0.0] * (count - len(found)))


def _weigh(weights: Real, patterns: Real) -> Real:
    """Sum of the patterns, each times its factor."""
    return np.tensordot(weights, patterns, axes=1)


def _size(patterns: ChipPatterns, x: Real | float, y: Real | float) -> Real:
    """|Ê|, whatever its components do in time."""
    along, across = patterns.electric_field(x, y)
    return np.asarray(np.hypot(np.abs(along), np.abs(across)))


def _forces(patterns: ChipPatterns, x: Real | float, y: Real | float) -> Real:
    """∇|Ê|² and the travelling pattern, (2, 2, …)."""
    return np.stack([patterns.gradient_e2(x, y), patterns.travelling(x, y)])


def _flows(patterns: ChipPatterns, x: Real | float, y: Real | float) -> Real:
    """U₁, U₂ and U₃, (3, 2, …)."""
    moving = patterns.electrothermal_travelling(x, y)
    return np.stack([*patterns.electrothermal(x, y), moving])


def _step(period: float | None, length: float) -> float:
    """Width of a column, a whole part of the period."""
    if period is None:
        return length / COLUMNS
    return period / max(round(COLUMNS * period / length), 12)


def _tall(step: float, height: float) -> float:
    """Height of a row: as a column is wide, but neither few nor very many of them."""
    return min(max(step, height / 180.0), height / 6.0)


def _centres(start: float, end: float, step: float) -> Real:
    count = max(round((end - start) / step), 1)
    return start + (end - start) * (np.arange(count) + 0.5) / count


def _laid(
    patterns: ChipPatterns,
    grid: Grid,
    function: Callable[[ChipPatterns, Real, Real], Real],
    inside: Callable[[ChipPatterns, Real, Real], np.ndarray] = ChipPatterns.inside,
) -> Real:
    """Values of a function of places on a grid, each repeat computed once, NaN outside."""
    x, index = _one_period(grid.x, patterns.period)
    wide, tall = np.meshgrid(x, grid.y)
    known = inside(patterns, wide, tall)
    found = function(patterns, wide[known], tall[known])
    values = np.full((*found.shape[:-1], *wide.shape), np.nan)
    values[..., known] = found
    return values[..., index]


def _nothing(grid: Grid, *count: int) -> Real:
    """Values that are known nowhere on a grid, (*count, m, n)."""
    return np.full((*count, grid.y.size, grid.x.size), np.nan)


def _one_period(x: Real, period: float | None) -> tuple[Real, np.ndarray]:
    """Places that differ by no whole period, and which of them stands for each of `x`."""
    if period is None:
        return x, np.arange(x.size)
    turns = np.round((x - x[0]) / period % 1.0, 9) % 1.0
    _, first, index = np.unique(turns, return_index=True, return_inverse=True)
    return x[first], index


def _streams(nodes: Grid, flows: Real, *, closed: bool) -> Real:
    """Stream functions ψ = ∫ u_x dy − ∫ u_y dx of flows (k, 2, m, n), along the lowest row and up.

    In a channel between a flat floor and lid (`closed`) as much liquid passes every x, and what
    the sums miss of that is spread over the height; ψ is 0 on the floor. Else ψ is 0 in the middle,
    about which a plan is symmetric.
    """
    speed = np.nan_to_num(flows)
    along, up = speed[:, 0], speed[:, 1]
    base = np.zeros_like(up[:, 0]) if closed else -_summed(up[:, 0], nodes.x)
    sums = base[:, None] + _summed(along.swapaxes(1, 2), nodes.y).swapaxes(1, 2)
    if closed:
        missed = sums[:, -1:] - sums[:, -1:].mean(axis=2, keepdims=True)
        share = (nodes.y - nodes.y[0]) / (nodes.y[-1] - nodes.y[0])
        sums = sums - missed * share[:, None]
    else:
        sums = sums - sums[:, nodes.y.size // 2, nodes.x.size // 2, None, None]
    return np.where(np.isnan(flows[:, 0]), np.nan, sums)


def _summed(values: Real, places: Real) -> Real:
    """Integral of values from the first place to each, over the last axis."""
    slices = 0.5 * (values[..., 1:] + values[..., :-1]) * np.diff(places)
    return np.concatenate([np.zeros_like(values[..., :1]), slices.cumsum(axis=-1)], axis=-1)
