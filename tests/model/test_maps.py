"""Maps of a section: the patterns scaled, and lines that follow the flow."""

import numpy as np
import pytest

from model.evaluate import evaluate
from model.maps import in_chip, pattern_maps, probe, section_maps
from model.profile import document, parse_design
from model.streamlines import contours, streamlines

LAYOUTS = {
    "coplanar bars": {},
    "facing bars": {"chip.layout": "facing-bars", "chip.offset": "25 um"},
    "bars under a plate": {"chip.layout": "bars-under-plate"},
    "four phases": {"chip.layout": "four-phase-bars"},
}


@pytest.fixture(scope="module", params=LAYOUTS)
def result(request, yeast, solved, vary):
    design = vary(yeast, {**LAYOUTS[request.param], "drive.duty": 0.5})
    return evaluate(design, solved(design), points=20)


@pytest.fixture(scope="module")
def maps(result):
    return section_maps(result, result.design.particles[0])


def liquid_volts(result):
    """What of the rms voltage reaches the liquid behind leads and double layers, V."""
    return result.design.drive.voltage / (2.0 * np.sqrt(2.0)) * abs(result.point.share[0])


def at_nodes(grid, step=7):
    """A few places of a grid, and their rows and columns."""
    rows, columns = np.arange(1, grid.y.size - 1, step), np.arange(1, grid.x.size - 1, step)
    x, y = np.meshgrid(grid.x[columns], grid.y[rows])
    return x, y, np.ix_(rows, columns)


def test_the_field_is_the_pattern_times_the_voltage_in_the_liquid(result, maps):
    x, y, places = at_nodes(maps.patterns.liquid)
    along, up = result.patterns.electric_field(x, y)
    expected = liquid_volts(result) * np.sqrt(np.abs(along) ** 2 + np.abs(up) ** 2)
    np.testing.assert_allclose(maps.field[places], expected, rtol=1e-6)


def test_the_rise_is_that_of_ohmic_heat_over_the_duty(result, maps):
    x, y, places = at_nodes(maps.patterns.whole)
    design, patterns = result.design, result.patterns
    power = result.point.circuit.heat_share[0] * result.rms_voltage**2
    scale = 0.5 * design.liquid.conductivity * power / patterns.thermal_conductivity
    np.testing.assert_allclose(maps.rise[places], scale * patterns.temperature(x, y), rtol=1e-6)


def test_the_force_is_that_on_a_small_sphere(result, maps):
    """F = 2πεa³V²(Re K·∇|Ê|² + Im K·S) over the duty, T. B. Jones 1995 with rms fields."""
    x, y, places = at_nodes(maps.patterns.places, 2)
    particle, at = result.design.particles[0], result.point
    factor = complex(at.polarisation(particle)[0])
    size = 2.0 * np.pi * at.liquid.permittivity * particle.equivalent_radius**3
    gradient, moving = result.patterns.gradient_e2(x, y), result.patterns.travelling(x, y)
    scale = 0.5 * size * liquid_volts(result) ** 2
    for axis in (0, 1):
        expected = scale * (factor.real * gradient[axis] + factor.imag * moving[axis])
        np.testing.assert_allclose(
            maps.force[axis][places], expected, rtol=1e-6, atol=1e-9 * np.abs(expected).max()
        )


def test_a_particle_of_the_other_sign_is_led_the_other_way(yeast, patterns, vary):
    """Positive dielectrophoresis leads to where the field is strong, negative away from there."""
    result = evaluate(yeast, patterns, points=20)
    for particle in yeast.particles:
        force = section_maps(result, particle).force
        grid = pattern_maps(patterns).places
        x, y = np.meshgrid(grid.x, grid.y)
        size = np.hypot(*force)
        step = 1e-7 * force / size
        grows = np.hypot(*patterns.electric_field(x + step[0], y + step[1])) - np.hypot(
            *patterns.electric_field(x, y)
        )
        clear = size > 1e-3 * size.max()
        sign = np.sign(result.point.polarisation(particle)[0].real)
        assert np.all(np.sign(grows[clear]) == sign), particle.name


def test_the_stream_function_counts_what_passes_upwards_too(result, maps):
    """ψ(x₂) − ψ(x₁) = −∫ u_y dx along any level, as no liquid is lost: the map sums u_x upwards."""
    nodes, at = maps.patterns.nodes, result.point
    factors = [float(factor[0]) for factor in at.electrothermal_weights()]
    scale = float(at.electrothermal_scale[0]) * result.rms_voltage**4
    x = np.linspace(nodes.x[0], nodes.x[-1], 16 * (nodes.x.size - 1) + 1)
    for row in (3, 8, 20, 35):
        y = np.full_like(x, nodes.y[row])
        patterns = [*result.patterns.electrothermal(x, y)]
        patterns.append(result.patterns.electrothermal_travelling(x, y))
        up = scale * sum(f * pattern[1] for f, pattern in zip(factors, patterns, strict=False))
        passed = np.concatenate([[0.0], np.cumsum(0.5 * (up[1:] + up[:-1]) * np.diff(x))])[::16]
        found = maps.stream[row] - maps.stream[row, 0]
        np.testing.assert_allclose(found, -passed, atol=0.01 * np.ptp(maps.stream))


def test_no_liquid_passes_floor_or_lid(maps):
    largest = np.abs(maps.stream).max()
    assert np.ptp(maps.stream[0]) == 0.0
    assert np.ptp(maps.stream[-1]) < 1e-9 * largest


def test_the_flow_is_the_largest_electrothermal_speed_at_the_working_height(result, maps):
    nodes, height = maps.patterns.nodes, result.design.task.force_height
    speed = np.hypot(*maps.velocity)
    row = [np.interp(height, nodes.y, column) for column in speed.T]
    assert max(row) == pytest.approx(result.electrothermal_speed, rel=0.02)


def test_streamlines_follow_the_flow(result, maps):
    lines = streamlines(maps)
    assert lines
    for line in lines:
        middle, step = 0.5 * (line[:, 1:] + line[:, :-1]), np.diff(line, axis=1)
        inside = (middle[1] > 0) & (middle[1] < result.design.chip.height)
        weights = result.point
        first, second = result.patterns.electrothermal(middle[0][inside], middle[1][inside])
        third = result.patterns.electrothermal_travelling(middle[0][inside], middle[1][inside])
        factors = [float(factor[0]) for factor in weights.electrothermal_weights()]
        flow = sum(
            factor * np.stack(pattern)
            for factor, pattern in zip(factors, (first, second, third), strict=False)
        )
        along = (flow * step[:, inside]).sum(axis=0)
        whole = np.hypot(*flow) * np.hypot(*step[:, inside])
        assert along.sum() > 0.97 * whole.sum()


PLANS = {
    "four-pole": {"layout": "four-pole", "tip_gap": "80 um", "pole_width": "80 um"},
    "post": {"layout": "insulating-constriction", "obstacle": "post", "channel_width": "0.4 mm"},
}


@pytest.mark.parametrize("plan", PLANS)
def test_streamlines_of_a_plan_follow_the_flow_around_what_is_solid(yeast, solved, plan):
    walls = {key: document(yeast)["chip"][key] for key in ("floor", "lid")}
    design = parse_design({**document(yeast), "chip": {"channel_width": "6 mm", **walls,
                           **PLANS[plan]}})  # fmt: skip
    result = evaluate(design, solved(design), points=20)
    lines = streamlines(section_maps(result, design.particles[0]))
    assert lines
    factors = [float(factor[0]) for factor in result.point.electrothermal_weights()]
    along, whole = 0.0, 0.0
    for line in lines:
        middle, step = 0.5 * (line[:, 1:] + line[:, :-1]), np.diff(line, axis=1)
        known = result.patterns.inside(*middle)
        assert known.mean() > 0.9
        patterns = result.patterns.electrothermal(*middle[:, known])
        flow = sum(f * np.stack(p) for f, p in zip(factors, patterns, strict=False))
        along += (flow * step[:, known]).sum()
        whole += (np.hypot(*flow) * np.hypot(*step[:, known])).sum()
    assert along > 0.95 * whole


def test_the_probe_reads_what_the_maps_show(result, maps):
    particle = result.design.particles[0]
    grid, row, column = maps.patterns.places, 1, 3
    x, y = float(grid.x[column]), float(grid.y[row])
    found = probe(result, particle, x, y)
    assert found.force == pytest.approx(tuple(maps.force[:, row, column]), rel=1e-6)
    liquid = maps.patterns.liquid
    found = probe(result, particle, float(liquid.x[5]), float(liquid.y[9]))
    assert found.field == pytest.approx(maps.field[9, 5], rel=1e-6)


def test_the_probe_in_a_wall_knows_warmth_alone(result):
    particle = result.design.particles[0]
    found = probe(result, particle, 0.0, -5e-6)
    assert (found.field, found.force, found.velocity) == (None, None, None)
    assert found.rise > 0.0
    assert probe(result, particle, 0.0, -1.0).rise is None


def test_maps_stop_at_the_outside_of_thin_walls(yeast, solved, vary):
    design = vary(yeast, {"chip.floor.thickness": "5 um"})
    result = evaluate(design, solved(design), points=20)
    maps = section_maps(result, design.particles[0])
    below = maps.patterns.whole.y < -5e-6
    assert below.any()
    assert np.isnan(maps.rise[below]).all()
    assert np.isfinite(maps.rise[~below]).all()
    assert not in_chip(result.patterns, 0.0, -6e-6).all()


def test_contours_of_a_circle_and_of_a_saddle():
    x, y = np.linspace(-1.2, 1.2, 121), np.linspace(-1.1, 1.1, 111)
    wide, tall = np.meshgrid(x, y)
    (circle,) = contours(x, y, np.hypot(wide, tall), 0.7)
    np.testing.assert_allclose(np.hypot(*circle), 0.7, rtol=1e-3)
    assert np.all(circle[:, 0] == circle[:, -1])
    length = np.hypot(*np.diff(circle, axis=1)).sum()
    assert length == pytest.approx(2.0 * np.pi * 0.7, rel=1e-3)
    branches = contours(x, y, wide * tall, 0.3)
    assert len(branches) == 2
    for branch in branches:
        np.testing.assert_allclose(branch[0] * branch[1], 0.3, rtol=1e-3)
    hole = np.where(np.hypot(wide, tall) < 0.5, np.nan, wide)
    assert all(np.hypot(*line).min() > 0.45 for line in contours(x, y, hole, 0.01))


def test_a_flow_at_rest_has_no_streamlines(yeast, patterns, vary):
    result = evaluate(vary(yeast, {"drive.duty": 0.001}), patterns, points=20)
    maps = section_maps(result, yeast.particles[0])
    still = type(maps)(**{**vars(maps), "stream": 0.0 * maps.stream})
    assert streamlines(still) == []
