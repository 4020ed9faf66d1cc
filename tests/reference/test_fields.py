"""Electric field of interdigitated bars against conformal maps.

Sources: the interdigitated capacitor's conformal map (formula from memory; it agrees with the
classical results for an unbounded half-space, and an independent finite-element code gave the
same to six digits), and the exact field of an unbounded array, derived here.
"""

import mpmath
import numpy as np
import pytest
from scipy.special import ellipk

from model.fields.assembly import space
from model.fields.electric import solve_potential
from model.fields.solve import solve_chip
from model.layouts.coplanar_bars import CoplanarBars

UM = 1e-6


def bars(width, gap, height):
    return CoplanarBars(
        bar_width=width, gap=gap, channel_height=height, channel_width=2e-3, bar_count=20
    )


@pytest.fixture(scope="module")
def equal():
    """Equal bars and gaps, the lid far away: five pitches."""
    return solve_chip(bars(40 * UM, 40 * UM, 400 * UM))


def cell_factor(chip):
    """C/ε per gap and metre from the field alone, without heat and flow."""
    section = chip.section()
    functions = space(section.liquid(), 8, 16)
    return section.cells_per_gap * solve_potential(functions, section.potentials[0]).energy


def exact_field(x, y, width, gap):
    """|E|² and its gradient over an unbounded array, 1 V between neighbours.

    E = A/√(sin²a − sin²(πz/p)), a = πw/(2p), A = π/(2p K(cos a)): square-root singular at the
    edges, real on the bars, imaginary in the gaps, and ∫E dx over a gap is 1.
    """
    pitch = width + gap
    a = 0.5 * np.pi * width / pitch
    scale = np.pi / (2 * pitch * ellipk(np.cos(a) ** 2))
    z = (x + 1j * y) * np.pi / pitch
    f = np.sin(a) ** 2 - np.sin(z) ** 2
    slope = -np.sin(2 * z) * np.pi / pitch
    size = np.abs(f)
    along = (np.conj(f) * slope).real / size
    up = (np.conj(f) * 1j * slope).real / size
    return scale**2 / size, -(scale**2) * along / size**2, -(scale**2) * up / size**2


def layer_capacitance(width, gap, height):
    """C/ε per gap and metre of a layer with an insulating lid (Igreja & Dias 2004).

    Interdigitated capacitor conformal map; formula from memory, verified as exact.
    """
    with mpmath.workdps(40):  # k comes close to 1 under a low lid
        q = mpmath.exp(-2 * mpmath.pi * mpmath.mpf(height) / (width + gap))
        k = (mpmath.jtheta(2, 0, q) / mpmath.jtheta(3, 0, q)) ** 2
        share = mpmath.mpf(width) / (width + gap)
        t2 = mpmath.ellipfun("sn", mpmath.ellipk(k**2) * share, m=k**2)
        t4 = 1 / k
        inner = t2**2 * (t4**2 - 1) / (t4**2 - t2**2)
        return float(mpmath.ellipk(inner) / (2 * mpmath.ellipk(1 - inner)))


@pytest.mark.parametrize(
    ("width", "gap", "expected"),
    [(40, 40, 0.5), (80, 40, 0.639630785586), (40, 80, 0.390850480674)],
)
def test_capacitance_of_an_unbounded_array(width, gap, expected):
    """K(k′)/(2K(k)), k = cos(πw/2p): Wei 1977, Olthuis 1995, Igreja & Dias 2004, from memory."""
    a = 0.5 * np.pi * width / (width + gap)
    assert ellipk(np.sin(a) ** 2) / (2 * ellipk(np.cos(a) ** 2)) == pytest.approx(expected, 1e-10)
    found = cell_factor(bars(width * UM, gap * UM, 3 * (width + gap) * UM))
    assert found == pytest.approx(expected, rel=2e-5)
    assert found > expected  # the energy of a finite-element field is never too low


@pytest.mark.parametrize(
    ("share", "expected"),
    [
        (0.025, 0.0918903),
        (0.05, 0.1699802403),
        (0.1, 0.2934433745),
        (0.125, 0.340317),
        (0.25, 0.4620075116),
        (0.5, 0.4982962645),
    ],
)
def test_capacitance_under_a_lid(share, expected):
    """Height over λ = 2(w + g), twice the pitch, equal bars and gaps."""
    assert layer_capacitance(200, 200, 800 * share) == pytest.approx(expected, rel=1e-6)
    found = cell_factor(bars(200 * UM, 200 * UM, 800 * share * UM))
    assert found == pytest.approx(expected, rel=1e-5)


@pytest.mark.parametrize(("width", "gap", "height"), [(80, 40, 30), (40, 80, 30), (5, 95, 60)])
def test_capacitance_under_a_lid_of_unequal_bars(width, gap, height):
    expected = layer_capacitance(width, gap, height)
    found = cell_factor(bars(width * UM, gap * UM, height * UM))
    assert found == pytest.approx(expected, rel=1e-5)


def test_exact_field_is_the_published_form_for_equal_bars():
    """E² = (πV/(pW))²/√(cos²(2πx/p) + sinh²(2πy/p)), W = √2·K(k² = 1/2)."""
    x, y = np.array([0, 0.5, 0.5, 1.0, 1.0, 1.0]), np.array([0.25, 0.25, 0.5, 0.5, 1.0, 2.0])
    known = [0.27093654, 0.41314263, 0.15594889, 0.14302889, 0.03095984, 0.001340390]
    np.testing.assert_allclose(exact_field(x, y, 1.0, 1.0)[0], known, rtol=1e-6)
    slopes = exact_field(np.ones(4), np.array([0.5, 1.0, 1.5, 2.0]), 1.0, 1.0)[2]
    np.testing.assert_allclose(slopes, [-0.41211186, -0.09690061, -0.02025189, -0.00421093], 1e-6)


def test_cell_factor_of_a_solved_chip(equal):
    """κ = 2/((N − 1)L): 20 bars 2 mm long at 0.1 S/m have 526.3 Ω (Olthuis 1995, from memory)."""
    assert equal.cell_factor == pytest.approx(cell_factor(equal.chip), rel=1e-9)
    resistance = 1 / (0.1 * equal.cell_factor * equal.chip.parallel_length)
    assert resistance == pytest.approx(526.3, rel=1e-4)


def test_field_of_equal_bars(equal):
    d = 40 * UM
    x, y = np.meshgrid(np.linspace(-d, d, 41), np.array([0.25, 0.5, 1.0, 1.5, 2.0, 3.0]) * d)
    square, along, up = exact_field(x, y, d, d)
    ex, ey = equal.electric_field(x, y)
    np.testing.assert_allclose(ex**2 + ey**2, square, rtol=1e-4)
    gx, gy = equal.gradient_e2(x, y)
    assert np.max(np.hypot(gx - along, gy - up) / np.hypot(along, up)) < 1e-3


def test_field_close_to_equal_bars(equal):
    """A particle's radius above the electrodes, an eightieth of the pitch."""
    x, y = np.linspace(0, 40 * UM, 41), 1 * UM
    square, along, up = exact_field(x, y, 40 * UM, 40 * UM)
    ex, ey = equal.electric_field(x, y)
    np.testing.assert_allclose(ex**2 + ey**2, square, rtol=1e-3)
    gx, gy = equal.gradient_e2(x, y)
    assert np.max(np.hypot(gx - along, gy - up)) < 1e-3 * np.max(np.hypot(along, up))


def test_field_on_the_gap_centre(equal):
    """πV/(pW) = 0.599070117 V/d on the floor, along the flow."""
    ex, ey = equal.electric_field(40 * UM, 0.0)
    assert float(ex) * 40 * UM == pytest.approx(0.599070117, rel=1e-4)  # from + to − bar
    assert abs(float(ey)) < 1e-9 * float(ex)


@pytest.mark.parametrize(("width", "gap"), [(80, 40), (40, 80), (90, 10), (10, 90)])
def test_field_of_unequal_bars(width, gap):
    chip = solve_chip(bars(width * UM, gap * UM, 4 * (width + gap) * UM))
    pitch = (width + gap) * UM
    x, y = np.meshgrid(np.linspace(0, pitch, 31), np.array([0.1, 0.25, 0.5, 1.0]) * pitch)
    square, along, up = exact_field(x, y, width * UM, gap * UM)
    ex, ey = chip.electric_field(x, y)
    np.testing.assert_allclose(ex**2 + ey**2, square, rtol=1e-4)
    gx, gy = chip.gradient_e2(x, y)
    assert np.max(np.hypot(gx - along, gy - up) / np.hypot(along, up)) < 1e-3


def test_decay_is_by_the_pitch_not_the_bar(equal):
    """E² falls as exp(−2πy/p), that is exp(−πy/d) with d = bar = gap, half the pitch.

    Morgan et al. 2001 (from memory); the local rates at the gap centre follow from the exact
    field.
    """
    d = 40 * UM
    y = np.array([0.5, 1.0, 1.5, 2.5]) * d
    ex, ey = equal.electric_field(d, y)
    rate = -equal.gradient_e2(d, y)[1] * d / (ex**2 + ey**2)
    np.testing.assert_allclose(rate, [2.88132, 3.12988, 3.14109, np.pi], rtol=2e-4)


def linear_gap_field(x, y):
    """E² if the potential fell linearly across the gaps, d = 1, 1 V between neighbours.

    Fourier series of the trapezoidal surface potential, period 4d: the usual textbook solution.
    """
    n = np.arange(1, 4001, 2)[:, None]
    wave = 0.5 * np.pi * n
    size = 2 * np.sin(wave) * np.sin(wave / 2) / wave**2
    decay = np.exp(-wave * y)
    ex = np.sum(size * wave * np.sin(wave * x) * decay, axis=0)
    ey = np.sum(size * wave * np.cos(wave * x) * decay, axis=0)
    return ex**2 + ey**2


def test_linear_gap_potential_overstates_the_far_field(equal):
    """By 12.93 % in E² far away; near the electrodes it is wrong either way."""
    d = 40 * UM
    ex, ey = equal.electric_field(d, 4 * d)
    far = float(ex**2 + ey**2) * d**2 * np.exp(4 * np.pi)
    assert far == pytest.approx(0.717770011, rel=1e-4)
    assert (8 * np.sqrt(2) / np.pi**2 * np.pi / 4) ** 2 == pytest.approx(0.810569469, rel=1e-8)
    assert 0.810569469 / far == pytest.approx(1.1293, rel=1e-4)
    x, y = np.array([0, 1, 0, 1, 0, 1.0]), np.array([0.25, 0.25, 0.5, 0.5, 1, 1])
    ex, ey = equal.electric_field(x * d, y * d)
    ratio = linear_gap_field(x, y) / ((ex**2 + ey**2) * d**2)
    np.testing.assert_allclose(ratio, [0.923, 1.658, 1.005, 1.323, 1.098, 1.163], rtol=1e-3)


def test_two_wide_electrodes_and_a_narrow_gap():
    """Semi-infinite coplanar electrodes: V/(π√(g²/4 − x²)) in the gap, V/(πr) far from it.

    Ramos et al. 1998 for the second form, read second-hand; the first is potential theory.
    """
    chip = solve_chip(bars(2000 * UM, 2 * UM, 2000 * UM))
    centre = 1001 * UM
    ex, _ = chip.electric_field(centre + np.array([0, 0.5]) * UM, 0.0)
    np.testing.assert_allclose(ex * UM, [1 / np.pi, 1 / (np.pi * np.sqrt(0.75))], rtol=2e-4)
    angle = np.radians([30, 90, 150])
    r = 30 * UM
    ex, ey = chip.electric_field(centre + r * np.cos(angle), r * np.sin(angle))
    np.testing.assert_allclose(np.hypot(ex, ey) * r, 1 / np.pi, rtol=3e-3)


def test_two_half_planes():
    """Bars so wide that each gap stands alone: E = V/(π·√(z² − g²/4)), z from its middle.

    Near the gap 2V/(πg) = 0.63662 V/g in its middle, and V/(πr) at a distance r that is far from
    the gap and near against the bars (exact; the second as in Ramos et al. 1998 J. Phys. D
    31:2338). A hundredth of the pitch away the neighbouring gaps change it by (πr/p)²/6.
    """
    gap, width = 1 * UM, 1000 * UM
    patterns = solve_chip(bars(width, gap, 2000 * UM))
    middle = 0.5 * (width + gap)
    along, up = patterns.electric_field(middle, 0.0)
    assert np.hypot(along, up) * gap == pytest.approx(2 / np.pi, rel=1e-3)
    turns = np.radians([20.0, 45.0, 90.0, 130.0])
    for distance in np.array([0.9, 3.0, 12.0]) * UM:
        z = distance * np.exp(1j * turns)
        field = np.hypot(*patterns.electric_field(middle + z.real, z.imag))
        exact = 1 / (np.pi * np.abs(np.sqrt(z**2 - 0.25 * gap**2)))
        np.testing.assert_allclose(field, exact, rtol=1e-3)
    np.testing.assert_allclose(field, 1 / (np.pi * distance), rtol=2e-3)
