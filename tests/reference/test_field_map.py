"""Field maps against exact fields, on grids and at scattered points, in two and three dimensions.

Coplanar bars as wide as their gaps: closed form by conformal mapping, check values F4, F5 and F9
worked out apart from this project. Harmonic products and travelling waves: mathematics.
"""

import numpy as np
import pytest

from model.fields.solve import solve_chip
from model.layouts.field_map import FieldMap
from tests import field_maps

PITCH = 40e-6
HEIGHT = 40e-6


def solved(content, height=HEIGHT, **more):
    chip = FieldMap(
        file="map.csv",
        channel_height=height,
        channel_width=1e-3,
        **{"window_start": -0.5 * PITCH, "window_length": PITCH} | more,
    )
    return solve_chip(chip, files=lambda name, digest: content)


def bars(steps, lowest=0.0, scattered=False):
    """Map of exact coplanar bars with `steps` points a pitch, from a height up."""
    x = np.linspace(-0.5, 0.5, steps + 1) * PITCH
    y = np.linspace(lowest, HEIGHT, round(steps * (HEIGHT - lowest) / PITCH) + 1)
    places = field_maps.grid(x, y)
    if scattered:
        chance = np.random.default_rng(7)
        free = chance.uniform([-0.5 * PITCH, lowest], [0.5 * PITCH, HEIGHT], (len(places[0]), 2)).T
        edge = (np.abs(places[0]) == 0.5 * PITCH) | (places[1] == lowest) | (places[1] == HEIGHT)
        places = np.concatenate([free, places[:, edge]], axis=1)
    return field_maps.table(places, field_maps.coplanar(*places, PITCH))


def spots(low, high, count=300):
    chance = np.random.default_rng(3)
    return chance.uniform(-0.5, 0.5, count) * PITCH, chance.uniform(low, high, count) * PITCH


def errors(patterns, low, high):
    """Largest errors of |Ê|², over its value, and of its gradient, over the largest."""
    x, y = spots(low, high)
    e2 = np.square(patterns.electric_field(x, y)).sum(axis=0)
    slopes = field_maps.gradient(x, y, PITCH)
    missed = np.hypot(*(np.array(patterns.gradient_e2(x, y)) - slopes))
    return (
        np.abs(e2 / field_maps.square(x, y, PITCH) - 1).max(),
        missed.max() / np.hypot(*slopes).max(),
    )


def test_the_exact_field_has_the_check_values():
    """F5 and F9: bars and gaps of 1 m, so that the pitch is 2 m, for 1 V."""
    x, y = np.array([[0, 0.25], [0.5, 0.25], [0.5, 0.5], [1, 0.5], [1, 1], [1, 2]]).T
    expected = [0.27093654, 0.41314263, 0.15594889, 0.14302889, 0.03095984, 0.001340390]
    np.testing.assert_allclose(field_maps.square(x, y, 2.0), expected, rtol=1e-6)
    field = field_maps.coplanar(x, y, 2.0)
    np.testing.assert_allclose(np.square(field).sum(axis=0), expected, rtol=1e-6)
    slopes = field_maps.gradient(np.ones(4), np.array([0.5, 1, 1.5, 2]), 2.0)[1]
    np.testing.assert_allclose(
        slopes, [-0.41211186, -0.09690061, -0.02025189, -0.00421093], rtol=1e-6
    )


@pytest.mark.parametrize(
    ("steps", "low", "square", "slope"),
    [
        (40, 0.125, 2e-3, 2e-2),
        (40, 0.25, 1e-4, 1e-3),
        (80, 0.125, 1e-4, 2e-3),
        (80, 0.25, 1e-5, 1e-4),
    ],
)
def test_a_grid_above_the_edges(steps, low, square, slope):
    """From a twentieth of a pitch up, where nothing is singular: high order in the spacing."""
    patterns = solved(bars(steps, 0.05 * PITCH))
    assert not patterns.has_heat
    found = errors(patterns, low, 0.95)
    assert found[0] < square
    assert found[1] < slope


@pytest.mark.parametrize(("low", "square", "slope"), [(0.125, 0.02, 0.06), (0.25, 0.01, 0.03)])
@pytest.mark.parametrize("steps", [80, 83])
def test_a_grid_down_to_the_edges(steps, low, square, slope):
    """With the singular edges in it, on points of the grid or between them."""
    patterns = solved(bars(steps))
    assert patterns.has_heat
    found = errors(patterns, low, 0.95)
    assert found[0] < square
    assert found[1] < slope


@pytest.mark.parametrize(("low", "square", "slope"), [(0.125, 0.01, 0.1), (0.25, 4e-3, 0.04)])
def test_scattered_points(low, square, slope):
    patterns = solved(bars(60, 0.05 * PITCH, scattered=True))
    found = errors(patterns, low, 0.95)
    assert found[0] < square
    assert found[1] < slope


def test_the_field_comes_back_reversed_one_pitch_on():
    patterns = solved(bars(40, 0.05 * PITCH))
    x, y = spots(0.3, 0.9, 40)
    here = np.array(patterns.electric_field(x, y))
    np.testing.assert_allclose(patterns.electric_field(x + PITCH, y), -here, rtol=1e-9)
    np.testing.assert_allclose(patterns.electric_field(x - 2 * PITCH, y), here, rtol=1e-9)


def test_capacitance_of_the_window():
    """F1: C/ε = ½ a gap in the half space, less what lies above the map, exp(−4πh/p) of it."""
    patterns = solved(bars(160, 0.0))
    assert patterns.cell_factor == pytest.approx(0.5, rel=0.02)


def test_a_plane_of_three_dimensions():
    """φ = sin(ax)·exp(−by)·cos(cz) with b² = a² + c²: at z = 0 not harmonic in x and y alone."""
    a, c = 2 * np.pi / PITCH, 0.7 * 2 * np.pi / PITCH
    b = np.hypot(a, c)
    z = np.linspace(-10e-6, 12e-6, 12)
    places = field_maps.grid(np.linspace(-0.5, 0.5, 41) * PITCH, np.linspace(2e-6, 20e-6, 25), z)
    along, fall, across = a * places[0], np.exp(-b * places[1]), c * places[2]
    field = fall * np.array(
        [
            -a * np.cos(along) * np.cos(across),
            b * np.sin(along) * np.cos(across),
            c * np.sin(along) * np.sin(across),
        ]
    )
    patterns = solved(field_maps.table(places, field), plane=0.0)
    x, y = spots(0.1, 0.45)
    fall, along = np.exp(-2 * b * y), 2 * a * x
    e2 = fall * (a**2 * np.cos(a * x) ** 2 + b**2 * np.sin(a * x) ** 2)
    slopes = np.array([fall * a * (b**2 - a**2) * np.sin(along), -2 * b * e2])
    found = np.square(patterns.electric_field(x, y)).sum(axis=0)
    np.testing.assert_allclose(found, e2, rtol=2e-4)
    gradient = np.array(patterns.gradient_e2(x, y))
    np.testing.assert_allclose(gradient, slopes, atol=2e-3 * np.abs(slopes).max())
    assert not patterns.has_heat
    assert not any("no plane of symmetry" in remark for remark in patterns.remarks)
    aside = solved(field_maps.table(places, field), plane=8e-6)
    assert any("no plane of symmetry" in remark for remark in aside.remarks)


def test_a_travelling_wave():
    """φ = exp(−ky − jkx) runs along +x: |Ê|² = 2k²·exp(−2ky), and S = −2k|Ê|² along x."""
    k = 2 * np.pi / PITCH
    places = field_maps.grid(np.linspace(-0.5, 0.5, 49) * PITCH, np.linspace(0, HEIGHT, 49))
    phasor = k * np.exp(-k * places[1] - 1j * k * places[0])
    patterns = solved(field_maps.table(places, np.array([1j * phasor, phasor])))
    x, y = spots(0.05, 0.6)
    e2 = 2 * k**2 * np.exp(-2 * k * y)
    found = (np.abs(np.array(patterns.electric_field(x, y))) ** 2).sum(axis=0)
    np.testing.assert_allclose(found, e2, rtol=2e-3)
    along, up = patterns.travelling(x, y)
    size = 2 * k * e2.max()
    np.testing.assert_allclose(along, -2 * k * e2, atol=2e-3 * size)
    np.testing.assert_allclose(up, 0.0, atol=2e-3 * size)
    np.testing.assert_allclose(patterns.gradient_e2(x, y)[1], -2 * k * e2, atol=2e-3 * size)
