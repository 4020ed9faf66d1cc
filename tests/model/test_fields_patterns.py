"""The patterns of a solved chip: symmetry, tables, balances, scaling, storage."""

import pickle
from functools import cache

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from model.fields.layered import Channel, Span, layered
from model.fields.patterns import ChipPatterns
from model.fields.section import Fold, Section
from model.fields.solve import WATER, solve_chip
from model.layouts.coplanar_bars import CoplanarBars
from model.walls import Wall

UM = 1e-6
PITCH = 80 * UM
HEIGHT = 100 * UM


def bars(scale=1.0, **changes):
    """Bars of 50 µm with gaps of 30 µm under 100 µm of liquid, all lengths times `scale`."""
    given_ = {
        "bar_width": 50 * UM * scale,
        "gap": 30 * UM * scale,
        "bar_count": 20,
        "channel_height": HEIGHT * scale,
        "channel_width": 2e-3,
        "floor": Wall(material="glass", thickness=700 * UM * scale, outside="held"),
        "lid": Wall(material="pdms", thickness=4000 * UM, outside="still-air"),
    }
    return CoplanarBars(**{**given_, **changes})


@cache
def solved() -> ChipPatterns:
    """Solve once, also for property tests, whose reports would print an argument in full."""
    return solve_chip(bars())


@pytest.fixture
def patterns() -> ChipPatterns:
    return solved()


places = st.floats(-50, 50).map(lambda pitches: pitches * PITCH)
levels = st.floats(0.01, 1.0).map(lambda share: share * HEIGHT)


def all_patterns(patterns, x, y):
    """Nine numbers or rows: Ê, ∇|Ê|², Θ, U₁, U₂."""
    first, second = patterns.electrothermal(x, y)
    return np.stack(
        [
            *patterns.electric_field(x, y),
            *patterns.gradient_e2(x, y),
            patterns.temperature(x, y),
            *first,
            *second,
        ]
    )


ODD = np.array([-1, 1, -1, 1, 1, -1, 1, -1, 1.0])  # under x → −x
NEXT = np.array([-1, -1, 1, 1, 1, 1, 1, 1, 1.0])  # under x → x + pitch
WHOLE = np.array([0, 0, 1, 1, 2, 3, 3, 4, 4])  # which numbers make one pattern


def sizes(values):
    """Size of the pattern that each of the nine belongs to, over all places."""
    largest = np.abs(values).reshape(9, -1).max(axis=1)
    return np.array([largest[group == WHOLE].max() for group in WHOLE])


@settings(max_examples=30, deadline=None)
@given(places, levels)
def test_symmetry(x, y):
    """Neighbours are opposite: the field changes sign with each pitch, products do not."""
    patterns = solved()
    assume(1e-3 < abs(x) % (0.5 * PITCH) / PITCH < 0.499)  # on the planes odd numbers are noise
    here, mirrored, next_bar = (
        all_patterns(patterns, place, y) for place in (x, -x, x + patterns.period)
    )
    # near an edge a rounding error of x, fifty pitches away, shows
    tolerance = 1e-6 * sizes(here) + 1e-12
    assert np.all(np.abs(mirrored - ODD * here) <= tolerance)
    assert np.all(np.abs(next_bar - NEXT * here) <= tolerance)


def test_bars_are_equipotential_and_gap_planes_are_between(patterns):
    x = np.linspace(-24, 24, 9) * UM
    ex, ey = patterns.electric_field(x, 0.0)
    assert np.abs(ex).max() < 1e-6 * np.abs(ey).min()
    ex, ey = patterns.electric_field(40 * UM, np.linspace(0, 100, 9) * UM)
    assert np.abs(ey).max() < 1e-6 * np.abs(ex).max()
    ex, ey = patterns.electric_field(np.linspace(0, 80, 9) * UM, HEIGHT)
    assert np.abs(ey).max() < 1e-4 * np.abs(ex).max()  # the lid insulates


def test_voltage_across_the_gap(patterns):
    """From a bar up, across at any height, and down to the next bar it is 1 V."""
    x = np.linspace(0, PITCH, 4001)
    for y in (3 * UM, 30 * UM):
        across = np.trapezoid(patterns.electric_field(x, y)[0], x)
        heights = np.linspace(0, y, 401)
        up = np.trapezoid(patterns.electric_field(0.0, heights)[1], heights)
        assert across + 2 * up == pytest.approx(1.0, rel=1e-4)


def test_gradient_is_the_slope_of_the_square(patterns):
    x, y = np.meshgrid(np.linspace(-35, 71, 17) * UM, np.array([2, 8, 20, 50, 90]) * UM)
    step = 0.02 * UM

    def square(x, y):
        ex, ey = patterns.electric_field(x, y)
        return ex**2 + ey**2

    gx, gy = patterns.gradient_e2(x, y)
    slope_x = (square(x + step, y) - square(x - step, y)) / (2 * step)
    slope_y = (square(x, y + step) - square(x, y - step)) / (2 * step)
    largest = np.hypot(gx, gy).max(axis=1, keepdims=True)
    assert np.max(np.hypot(gx - slope_x, gy - slope_y) / largest) < 2e-3


@settings(max_examples=40, deadline=None)
@given(st.floats(0.01, 1.0).map(lambda share: min(share * PITCH * 1.25, HEIGHT)))
def test_line_agrees_with_direct_evaluation(y):
    patterns = solved()
    line = patterns.line(y)
    direct = all_patterns(patterns, line.x, y)
    tabled = np.stack([*line.field, *line.gradient, line.temperature, *line.flow_1, *line.flow_2])
    assert np.all(np.abs(tabled - direct) <= 1e-3 * sizes(direct)[:, None] + 1e-12)


def test_line_spans_one_period(patterns):
    line = patterns.line(10 * UM)
    assert line.x[0] == 0
    assert line.x[-1] == pytest.approx(patterns.period)
    assert np.all(np.diff(line.x) > 0)
    assert np.isclose(line.x, 25 * UM).any()  # the bar's edge
    np.testing.assert_allclose(line.field[:, -1], -line.field[:, 0], atol=1e-5)


def test_line_on_the_floor(patterns):
    """The field of the lowest row, the temperature of the floor, liquid at rest."""
    floor, low = patterns.line(0.0), patterns.line(patterns.table.lowest)
    np.testing.assert_array_equal(floor.field, low.field)
    np.testing.assert_allclose(floor.temperature, patterns.temperature(floor.x, 0.0), rtol=1e-9)
    assert np.all(floor.flow_1 == 0)
    assert patterns.table.lowest < 0.001 * PITCH


def test_results_are_read_only(patterns):
    line = patterns.line(10 * UM)
    for array in (line.x, line.field, line.flow_2, patterns.heat.coefficients):
        with pytest.raises(ValueError, match="read-only"):
            array[...] = 0.0


def test_patterns_can_be_stored(patterns):
    patterns.electric_field(0.0, 1 * UM)  # builds the finder
    stored = pickle.dumps(patterns)
    again = pickle.loads(stored)
    assert len(stored) < 3_000_000
    assert again.chip == patterns.chip
    x = np.linspace(-60, 60, 9) * UM
    np.testing.assert_array_equal(all_patterns(again, x, 7 * UM), all_patterns(patterns, x, 7 * UM))
    np.testing.assert_array_equal(again.line(7 * UM).field, patterns.line(7 * UM).field)
    assert not again.heat.coefficients.flags.writeable
    # evaluations leave nothing behind in what is stored
    assert len(pickle.dumps(again)) < 1.01 * len(stored)


def test_shapes_broadcast(patterns):
    ex, _ = patterns.electric_field(np.zeros((3, 1)), np.full(4, 5 * UM))
    assert ex.shape == (3, 4)
    assert patterns.temperature(0.0, 0.0).shape == ()


@pytest.mark.parametrize("y", [-1e-9, 101 * UM, np.nan])
def test_places_outside_the_liquid(patterns, y):
    for pattern in (patterns.electric_field, patterns.gradient_e2, patterns.electrothermal):
        with pytest.raises(ValueError, match="outside"):
            pattern(np.array([0.0, 1 * UM]), y)
    with pytest.raises(ValueError, match="outside"):
        patterns.line(y)


def test_places_outside_the_chip(patterns):
    for y in (-701 * UM, 4101 * UM):
        with pytest.raises(ValueError, match="outside"):
            patterns.temperature(0.0, y)


def test_temperature_in_the_walls(patterns):
    """Held at the floor's outside; a film at the lid's; continuous where the mesh ends."""
    x = np.linspace(0, PITCH, 9)
    np.testing.assert_allclose(patterns.temperature(x, -700 * UM), 0.0, atol=1e-12)
    top = HEIGHT + 4000 * UM
    outside, inside = patterns.temperature(0.0, top), patterns.temperature(0.0, top - 100 * UM)
    film = 10.0 * outside  # 10 W/(m² K), still air
    assert (inside - outside) / (100 * UM) * 0.16 == pytest.approx(film, rel=1e-6)
    for end in (*(rest.level for rest in patterns.rests), 0.0, HEIGHT):
        around = [patterns.temperature(x, end + step) for step in (-1e-12, 1e-12)]
        np.testing.assert_allclose(*around, rtol=1e-6)


def test_heat_in_is_heat_out(patterns):
    """Per pitch k·C/ε enters, and leaves through both walls."""
    floor = patterns.temperature(0.0, -600 * UM) / (100 * UM) * 1.1
    lid = patterns.temperature(0.0, HEIGHT + 4000 * UM) * 10.0
    assert (floor + lid) * PITCH == pytest.approx(WATER * patterns.cell_factor, rel=1e-5)


def test_peak_temperature(patterns):
    x, y = np.meshgrid(np.linspace(0, PITCH, 81), np.linspace(0, HEIGHT, 101))
    highest = patterns.temperature(x, y).max()
    assert patterns.peak_temperature == pytest.approx(highest, rel=1e-4)
    assert patterns.peak_temperature >= highest * (1 - 1e-6)


def test_better_conducting_liquid(patterns):
    """The pattern is per σV²/k of the liquid: walls that conduct less by comparison add to it."""
    better = solve_chip(bars(), thermal_conductivity=2 * WATER)
    assert better.thermal_conductivity == 2 * WATER
    assert better.cell_factor == patterns.cell_factor
    assert 1.5 < better.peak_temperature / patterns.peak_temperature < 2.0


def test_flow_is_free_of_sources_and_does_not_pump(patterns):
    step = 0.05 * UM
    x, y = np.meshgrid(np.linspace(3, 77, 20) * UM, np.linspace(3, 97, 20) * UM)
    for which in (0, 1):
        east, west, north, south = (
            patterns.electrothermal(x + dx, y + dy)[which]
            for dx, dy in ((step, 0), (-step, 0), (0, step), (0, -step))
        )
        along = (east[0] - west[0]) / (2 * step)
        up = (north[1] - south[1]) / (2 * step)
        assert np.std(along + up) < 1e-2 * np.std(along)
        heights = np.linspace(0, HEIGHT, 2001)
        for place in (7 * UM, 25 * UM, 36 * UM):
            speed = patterns.electrothermal(place, heights)[which][0]
            assert abs(np.trapezoid(speed, heights)) < 1e-4 * np.trapezoid(np.abs(speed), heights)


def test_no_slip(patterns):
    x = np.linspace(0, PITCH, 33)
    for y in (0.0, HEIGHT):
        for flow in patterns.electrothermal(x, y):
            assert np.abs(np.array(flow)).max() < 1e-12


@pytest.mark.parametrize("scale", [0.2, 7.0])
def test_patterns_do_not_depend_on_size(scale):
    """All lengths times s: Ê by 1/s, ∇|Ê|² by 1/s³; Θ and U do not change with held walls."""
    one, other = (
        solve_chip(
            bars(
                size,
                channel_height=30 * UM * size,
                lid=Wall(material="pdms", thickness=300 * UM * size, outside="held"),
            )
        )
        for size in (1.0, scale)
    )
    assert other.cell_factor == pytest.approx(one.cell_factor, rel=1e-7)
    assert other.peak_temperature == pytest.approx(one.peak_temperature, rel=1e-6)
    assert other.period == pytest.approx(scale * one.period)
    x, y = np.meshgrid(np.linspace(-30, 90, 9) * UM, np.array([1, 10, 28]) * UM)
    powers = np.array([1, 1, 3, 3, 0, 0, 0, 0, 0])[:, None, None]
    scaled = all_patterns(other, x * scale, y * scale) * scale**powers
    expected = all_patterns(one, x, y)
    assert np.all(np.abs(scaled - expected) <= 1e-5 * sizes(expected)[:, None, None])


@pytest.mark.parametrize(
    ("width", "gap", "height", "floor"),
    [
        (0.5, 0.5, 2000, 1),
        (0.5, 2000, 5, 20000),
        (2000, 0.5, 100, 1),
        (2000, 2000, 5, 1),
        (2000, 2000, 2000, 20000),
    ],
)
def test_extremes(width, gap, height, floor):
    chip = bars(
        bar_width=width * UM,
        gap=gap * UM,
        channel_height=height * UM,
        floor=Wall(material="silicon", thickness=floor * UM, outside="held"),
    )
    assert chip.section().mesh.nelements < 2000
    found = solve_chip(chip)
    assert 0 < found.peak_temperature < np.inf
    for y in np.array([0.0, 0.02, 0.5, 1.0]) * height * UM:
        line = found.line(y)
        values = np.stack([*line.field, *line.gradient, line.temperature, *line.flow_1])
        assert np.all(np.isfinite(values))
        miss = np.abs(found.temperature(line.x, y) - line.temperature).max()
        assert miss < 1e-3 * line.temperature.max() + 1e-6 * found.peak_temperature


class TwoPitches(CoplanarBars):
    """The same bars as a piece that repeats without mirror planes, for the joining of sides."""

    def section(self, refinement: int = 0) -> Section:
        """From a bar's centre to that of the next bar but one."""
        pitch = self.bar_width + self.gap
        half = 0.5 * self.bar_width
        spans = (
            Span("plus", -half, half),
            Span("minus", pitch - half, pitch + half),
        )
        channel = Channel(
            (0.0, 2 * pitch), self.channel_height, pitch, spans, self.floor, self.lid, periodic=True
        )
        piece = layered(channel, refinement)
        return Section(
            mesh=piece.mesh,
            potentials=({"plus": 0.5, "minus": -0.5},),
            electrodes=("plus", "minus"),
            length=pitch,
            height=self.channel_height,
            cells_per_gap=0.5,
            fold=Fold(period=2 * pitch),
            wall_conductivities=piece.wall_conductivities,
            outsides=piece.outsides,
            rests=piece.rests,
            joined=("left", "right"),
        )


def test_joined_sides_give_what_mirror_planes_give():
    low = {
        "channel_height": 20 * UM,
        "floor": Wall(material="glass", thickness=40 * UM, outside="held"),
        "lid": Wall(material="pdms", thickness=40 * UM, outside="still-air"),
    }
    half, whole = solve_chip(bars(**low)), solve_chip(TwoPitches(**bars(**low).model_dump()))
    assert whole.cell_factor == pytest.approx(half.cell_factor, rel=1e-5)
    assert whole.peak_temperature == pytest.approx(half.peak_temperature, rel=1e-5)
    x, y = np.meshgrid(np.linspace(-200, 200, 41) * UM, np.array([1, 5, 18]) * UM)
    expected = all_patterns(half, x, y)
    miss = np.abs(all_patterns(whole, x, y) - expected)
    assert np.all(miss.reshape(9, -1).max(axis=1) < 3e-3 * sizes(expected))
    line = whole.line(5 * UM)
    expected = all_patterns(half, line.x, 5 * UM)
    np.testing.assert_allclose(line.temperature, expected[4], rtol=1e-4)
    np.testing.assert_allclose(line.field, expected[:2], atol=1e-3 * sizes(expected)[0])


def test_walls_that_are_cut_short_conduct_alike(patterns, monkeypatch):
    monkeypatch.setattr("model.fields.layered.WALL_REACH", 100.0)
    whole = solve_chip(bars())
    assert whole.peak_temperature == pytest.approx(patterns.peak_temperature, rel=1e-5)
    for y in (-400 * UM, HEIGHT + 1000 * UM):
        assert whole.temperature(0.0, y) == pytest.approx(patterns.temperature(0.0, y), rel=1e-4)


def test_insulated_chip_has_no_steady_state():
    walls = {
        name: Wall(material="glass", thickness=100 * UM, outside="insulated")
        for name in ("floor", "lid")
    }
    with pytest.raises(ValueError, match="no steady temperature"):
        solve_chip(bars(**walls))
