"""Warming of layers against exact transients; Carslaw and Jaeger 1959, from memory, unless said.

All their solutions are sums over modes cos or sin(βy/l)·exp(−αβ²t/l²), α = k/(ρc).
"""

import numpy as np
import pytest
from scipy.optimize import brentq
from scipy.special import erf

from model.liquid import water
from model.warming import Slab, warm_up

K, STORAGE, THICKNESS = 0.6, 4.2e6, 100e-6
LIQUID = Slab(THICKNESS, K, STORAGE)
DIFFUSION = STORAGE * THICKNESS**2 / K  # l²/α, s
#: From far before to far after the liquid is warm.
TIMES = DIFFUSION * np.geomspace(1e-4, 3.0, 15)


def compare(found, exact, rel=1e-7):
    for time in TIMES:
        assert found.mean(time) == pytest.approx(exact(time), rel=rel)


def test_slab_between_held_faces():
    """Mean = l²/(12k)·[1 − 96/π⁴·Σ exp(−n²π²αt/l²)/n⁴], n odd; Carslaw and Jaeger 3.14."""
    order = np.arange(1, 2001, 2)
    found = warm_up((), LIQUID, (), (None, None))

    def exact(time):
        falls = -np.expm1(-((order * np.pi) ** 2) * time / DIFFUSION) / order**4
        return 8 / np.pi**4 * THICKNESS**2 / K * falls.sum()

    assert found.final == pytest.approx(THICKNESS**2 / (12 * K), rel=1e-12)
    compare(found, exact, rel=1e-6)


def test_slab_held_on_one_face_is_half_of_one_twice_as_thick():
    found = warm_up((), LIQUID, (), (None, 0.0))
    whole = warm_up((), Slab(2 * THICKNESS, K, STORAGE), (), (None, None))
    assert found.final == pytest.approx(THICKNESS**2 / (3 * K), rel=1e-12)
    compare(found, whole.mean)


@pytest.mark.parametrize("biot", [1e-3, 0.3, 10.0])
def test_slab_cooled_through_a_coefficient(biot):
    """β tan β = hl/k; Carslaw and Jaeger 3.11, the far face insulated."""

    def root(n):
        low, high = n * np.pi, (n + 0.5) * np.pi - 1e-12
        return brentq(lambda b: b * np.sin(b) - biot * np.cos(b), low + 1e-12, high, xtol=1e-15)

    beta = np.array([root(n) for n in range(400)])
    # mean of the mode squared over its norm: 2 sin²β/(β² + β sin β cos β)
    weight = 2 * np.sin(beta) ** 2 / (beta**2 + beta * np.sin(beta) * np.cos(beta)) / beta**2
    found = warm_up((), LIQUID, (), (0.0, biot * K / THICKNESS))

    def exact(time):
        return THICKNESS**2 / K * float(-np.expm1(-(beta**2) * time / DIFFUSION) @ weight)

    assert found.final == pytest.approx(THICKNESS**2 / K * (1 / biot + 1 / 3), rel=1e-9)
    compare(found, exact, rel=1e-6)


def test_a_well_mixed_liquid_warms_as_one_exponential():
    """Behind a poor coefficient ρcl dT/dt = ql − hT: 63 % after ρcl/h, 95 % after thrice that."""
    transfer = 1e-4 * K / THICKNESS
    found = warm_up((), LIQUID, (), (0.0, transfer))
    delay = STORAGE * THICKNESS / transfer
    assert found.time(1 - np.exp(-1)) == pytest.approx(delay, rel=1e-4)
    assert found.time(0.95) == pytest.approx(np.log(20) * delay, rel=1e-4)


def test_layers_of_one_material_are_one_layer():
    """Heat in a part of a uniform slab: modes sin(nπy/L) of the whole, by Fourier series."""
    floor, lid = Slab(250e-6, K, STORAGE), Slab(400e-6, K, STORAGE)
    found = warm_up((floor,), LIQUID, (lid,), (None, None))
    whole = 750e-6
    wave = np.arange(1, 4000) * np.pi / whole
    part = (np.cos(wave * 250e-6) - np.cos(wave * 350e-6)) / wave
    shares = 2 / (whole * THICKNESS) * part**2 / (K * wave**2)

    def exact(time):
        return float(-np.expm1(-(wave**2) * K / STORAGE * time) @ shares)

    assert found.final == pytest.approx(shares.sum(), rel=1e-6)
    compare(found, exact, rel=1e-5)


def test_walls_that_are_thicker_than_heat_reaches():
    """A slab heated in an endless medium; at first ∂T/∂t = q/ρc, then it spreads.

    Mean = q/ρc ∫₀ᵗ [erf(1/s) − s/√π·(1 − exp(−1/s²))] dt, s = √(4αt)/l, from the source of a plane
    (Carslaw and Jaeger 10.3) averaged over the slab twice.
    """
    wall = Slab(20e-3, K, STORAGE)
    found = warm_up((wall,), LIQUID, (wall,), (None, None))
    nodes, weights = np.polynomial.legendre.leggauss(40)
    for time in TIMES:
        root = 0.5 * np.sqrt(time) * (nodes + 1)  # t = root²: smooth where it begins
        s = np.sqrt(4 * root**2 / DIFFUSION)
        kept = erf(1 / s) - s / np.sqrt(np.pi) * -np.expm1(-1 / s**2)
        exact = 0.5 * np.sqrt(time) * float(weights @ (2 * root * kept)) / STORAGE
        assert found.mean(time) == pytest.approx(exact, rel=1e-6)


def test_final_rise_through_unlike_walls():
    """Two ways out in parallel: the liquid's parabola, and each wall with its film in series."""
    floor, lid = Slab(700e-6, 1.1, 1.85e6), Slab(4e-3, 0.16, 1.42e6)
    found = warm_up((floor,), LIQUID, (lid,), (None, 10.0))
    down, up = 1.1 / 700e-6, 1 / (4e-3 / 0.16 + 1 / 10.0)  # W/(m² K)
    # −kT″ = 1, kT′(0) = down·T(0), −kT′(l) = up·T(l)
    matrix = np.array([[-down, K], [up, K + up * THICKNESS]])
    foot, slope = np.linalg.solve(matrix, [0.0, THICKNESS + up * THICKNESS**2 / (2 * K)])
    mean = foot + slope * THICKNESS / 2 - THICKNESS**2 / (6 * K)
    assert found.final == pytest.approx(mean, rel=1e-10)


def test_order_of_the_diffusion_time():
    """ρcl²/k = 2.7495 ms for 20 µm of water at 25 °C; held on one face, 63 % of it take 0.4 of it.

    The slowest mode of such a slab has the time constant 4/π² of ρcl²/k.
    """
    storage = float(water.density(298.15) * water.heat_capacity(298.15))
    k = float(water.thermal_conductivity(298.15))
    diffusion = storage * (20e-6) ** 2 / k
    assert diffusion == pytest.approx(2.7495e-3, rel=1e-3)
    found = warm_up((), Slab(20e-6, k, storage), (), (None, 0.0))
    assert found.delays.max() == pytest.approx(4 / np.pi**2 * diffusion, rel=1e-9)
    assert found.time(1 - np.exp(-1)) == pytest.approx(0.4 * diffusion, rel=0.05)


@pytest.mark.parametrize("size", [1e-3, 1.0, 1e2])
def test_times_grow_with_the_square_of_the_size(size):
    def time(scale, fraction):
        floor, lid = Slab(7e-4 * scale, 1.1, 1.85e6), Slab(4e-3 * scale, 0.16, 1.42e6)
        stack = (floor,), Slab(1e-4 * scale, K, STORAGE), (lid,)
        return warm_up(*stack, (None, 10.0 / scale)).time(fraction)

    for fraction in (0.01, 0.63, 0.95, 0.999):
        assert time(size, fraction) == pytest.approx(size**2 * time(1.0, fraction), rel=1e-6)


def test_rise_is_steady_and_early_heat_stays_where_it_is_made():
    found = warm_up((Slab(7e-4, 1.1, 1.85e6),), LIQUID, (Slab(4e-3, 0.16, 1.42e6),), (None, 10.0))
    times = np.geomspace(1e-7, 1e5, 200)
    means = np.array([found.mean(time) for time in times])
    assert np.all(np.diff(means) >= 0)
    assert means[-1] == pytest.approx(found.final)
    assert found.mean(1e-5) == pytest.approx(1e-5 / STORAGE, rel=0.05)
    for fraction in (1e-3, 0.632, 0.95, 0.9999):
        assert found.mean(found.time(fraction)) == pytest.approx(fraction * found.final, rel=1e-9)


def test_no_final_rise_without_a_way_out():
    with pytest.raises(ValueError, match="no side lets heat leave"):
        warm_up((), LIQUID, (), (0.0, 0.0))
