"""What every layout that is seen in plan must keep; test_layouts.py runs it."""

from dataclasses import replace
from functools import partial

import numpy as np
import pytest

from model.declare import declarations
from model.planar import Planar
from model.walls import Wall

UM = 1e-6
WALLS = {
    "floor": Wall(material="glass", thickness=50 * UM, outside="held"),
    "lid": Wall(material="pdms", thickness=300 * UM, outside="still-air"),
}
POLES = WALLS | {
    "tip_gap": 80 * UM,
    "pole_width": 60 * UM,
    "channel_width": 0.3e-3,
    "depth": 50 * UM,
}
CONSTRICTION = WALLS | {
    "electrode_spacing": 3e-3,
    "channel_width": 0.4e-3,
    "depth": 60 * UM,
    "opening": 90 * UM,
    "obstacle_length": 50 * UM,
}
#: Keyword arguments that make one or more chips of each layout.
EXAMPLES = {
    "four-pole": (
        POLES,
        POLES | {"drive": "quadrature", "pole_shape": "hyperbolic"},
        # poles against the walls
        POLES | {"drive": "quadrature", "channel_width": 80 * UM / np.sqrt(2) + 120 * UM},
    ),
    "insulating-constriction": (
        CONSTRICTION | {"obstacle": "ridge"},
        CONSTRICTION | {"obstacle": "post"},
    ),
}


def window(case):
    """Size of what is drawn, m, and the middle of the force line."""
    west, east, south, north = case.chip.drawing().window
    return east - west, north - south, case.chip.force_line


def places(case, count):
    """Places in the liquid of the window, away from solid parts."""
    rng = np.random.default_rng(1)
    west, east, south, north = case.chip.drawing().window
    x, y = rng.uniform(west, east, 20 * count), rng.uniform(south, north, 20 * count)
    free = clear(case, x, y)
    x, y = x[free], y[free]
    assert x.size > count
    return x[:count], y[:count]


def clear(case, x, y):
    """Whether places are in the liquid and farther from solid parts than a side of a polygon."""
    margin = 0.15 * case.chip.narrowest
    free = np.full(x.size, True)
    for turn in np.linspace(0, 2 * np.pi, 9)[:-1]:
        free &= case.patterns.inside(x + margin * np.cos(turn), y + margin * np.sin(turn))
    return free


def boxes(case):
    """Boxes in the liquid that cross the axes: west, east, south, north."""
    size, level = 0.3 * case.chip.narrowest, case.chip.force_line
    for shift in (-0.4, 0.1, 0.7):
        yield shift * size - size, shift * size + size, level - 0.7 * size, level + size


def flux(case, x, flow):
    """Net and gross area rate of a flow pattern through the line at x, straight across."""
    y = np.linspace(-0.5, 0.5, 8001) * case.chip.channel_width
    inside = case.patterns.inside(x, y)
    speed = np.zeros_like(y)
    speed[inside] = flow(np.full(inside.sum(), x), y[inside])[0]
    return np.trapezoid(speed, y), np.trapezoid(np.abs(speed), y)


def flow_pattern(patterns, which, x, y):
    """U₁ or U₂."""
    return patterns.electrothermal(x, y)[which]


def columns(case):
    """Places along the flow, m, before, beside and behind the solid parts."""
    return np.array([-0.41, -0.17, 0.07, 0.29]) * window(case)[0]


def distances(x, y, outline):
    """From places to the nearest point of a closed polygon."""
    start = np.array(outline)[:, :, None]
    step = np.roll(start, -1, axis=0) - start
    ahead = np.stack([x, y]) - start
    share = (ahead * step).sum(axis=1) / (step**2).sum(axis=1)
    miss = ahead - np.clip(share, 0, 1)[:, None] * step
    return np.hypot(miss[:, 0], miss[:, 1]).min(axis=0)


def check_mirrors(case):
    """All patterns pass the axes without a jump, in every quarter."""
    patterns, (wide, tall, level) = case.patterns, window(case)
    assert patterns.period is None
    step = 1e-7 * case.section.length
    x, y = np.linspace(-0.47, 0.47, 31) * wide, np.linspace(-0.49, 0.49, 31) * tall
    x, y = x[clear(case, x, 0 * x)], y[clear(case, 0 * y, y)]
    size = [np.abs(one).max() for one in case.all_patterns(*places(case, 100))]
    if level == 0.0:
        pairs = [((x, step + 0 * x), (x, 0 * x - step)), ((step + 0 * y, y), (0 * y - step, y))]
    else:
        pairs = [((step + 0 * y, y), (0 * y - step, y))]
    for one, other in pairs:
        found = zip(case.all_patterns(*one), case.all_patterns(*other), size, strict=True)
        for before, after, scale in found:
            assert np.abs(before - after).max() < 1e-4 * scale


def check_through_flow(case, uneven=2e-3):
    """The flow rate passes every x, is slow at solid sides, and no heat pumps the liquid.

    `uneven` is what heat may seem to pump through any x, as a share of all that moves there.
    """
    chip, patterns = case.chip, case.patterns
    rates = np.array([flux(case, x, patterns.flow_through) for x in columns(case)])
    np.testing.assert_allclose(rates[:, 0] * chip.depth, 1.0, rtol=1e-3)
    np.testing.assert_allclose(rates[:, 1], rates[:, 0], rtol=1e-2)  # next to none runs backward
    for which in (0, 1):
        driven = partial(flow_pattern, patterns, which)
        net, gross = np.array([flux(case, x, driven) for x in columns(case)]).T
        assert np.abs(net).max() < uneven * gross.max()
    across = np.linspace(0, 0.499, 101) * chip.channel_width
    speeds = patterns.flow_through(-0.49 * window(case)[0], across)[0]
    assert speeds[-1] < 0.1 * speeds.max()
    line = patterns.line(chip.force_level(3 * UM))
    assert np.all(np.diff(line.x) > 0)
    assert np.all(line.through[0] > 0)
    assert line.x[0] == pytest.approx(-line.x[-1])
    np.testing.assert_allclose(line.square, line.square[::-1], rtol=1e-9)


def check_contact(case):
    """Spheres that touch are a radius from what is solid, in the liquid, and reach the worst."""
    chip, drawn = case.chip, case.chip.drawing()
    solid = [shape.outline for shape in drawn.shapes if shape.kind != "wall"]
    for radius in (2 * UM, 5 * UM):
        x, y = chip.contact_path(radius)
        assert np.all(case.patterns.inside(x, y))
        near = np.min([distances(x, y, outline) for outline in solid], axis=0)
        assert near.min() > 0.999 * radius
        assert np.mean(np.abs(near - radius) < 1e-3 * radius) > 0.3
        (line,) = chip.contact_lines(case.patterns, radius)
        assert line is chip.contact_lines(case.patterns, radius)[0]  # kept
        x, y = places(case, 400)
        away = np.min([distances(x, y, outline) for outline in solid], axis=0) >= radius
        found = np.abs(case.patterns.path(x[away], y[away]).square).max()
        assert found < 1.001 * line.square.max()
    x, y = chip.contact_path(1.0)  # it does not fit
    assert np.all(case.patterns.inside(x, y))


def check_drawing(case):
    """Every solid part is drawn, where no liquid is, and lengths are those of the fields."""
    chip, drawn = case.chip, case.chip.drawing()
    west, east, south, north = drawn.window
    x, y = np.meshgrid(np.linspace(west, east, 83)[1:-1], np.linspace(south, north, 79)[1:-1])
    covered = np.zeros(x.shape, dtype=bool)
    near = np.zeros(x.shape, dtype=bool)
    for shape in drawn.shapes:
        covered |= enclosed(x, y, shape.outline)
        near |= distances(x.ravel(), y.ravel(), shape.outline).reshape(x.shape) < 1e-2 * (
            case.section.length
        )
    assert np.array_equal(case.patterns.inside(x, y)[~near], ~covered[~near])
    declared = dict(declarations(type(chip)))
    for dimension in drawn.dimensions:
        assert dimension.field in declared
        length = np.hypot(*np.subtract(dimension.end, dimension.start))
        assert length == pytest.approx(getattr(chip, dimension.field))
    steps = [shape.phase for shape in drawn.shapes if shape.kind == "electrode"]
    assert len(set(steps)) == chip.terminals


def enclosed(x, y, outline):
    """Whether places lie in a polygon: a ray to the right meets it an odd number of times."""
    corners = np.array(outline)
    inside = np.zeros(x.shape, dtype=bool)
    for (x1, y1), (x2, y2) in zip(corners, np.roll(corners, -1, axis=0), strict=True):
        if y1 != y2:
            spans = (y1 > y) != (y2 > y)
            inside ^= spans & (x < x1 + (x2 - x1) * (y - y1) / (y2 - y1))
    return inside


def check_reach(case):
    """Where the mesh ends changes nothing, unless electrodes stand there."""

    class Farther(case.kind):
        """The same chip in twice the channel."""

        def _reach(self, solid):
            return 2 * Planar._reach(self, solid)

    other_case = replace(case, kind=Farther)
    near, far = case.patterns, other_case.patterns
    assert far.cell_factor == pytest.approx(near.cell_factor, rel=1e-6)
    assert far.peak_temperature == pytest.approx(near.peak_temperature, rel=1e-4)
    x, y = places(case, 100)
    for one, other in zip(case.all_patterns(x, y), other_case.all_patterns(x, y), strict=True):
        np.testing.assert_allclose(other, one, atol=1e-3 * np.abs(one).max())


OF_PLANS = [check_mirrors, check_through_flow, check_contact, check_drawing, check_reach]
