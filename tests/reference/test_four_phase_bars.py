"""Travelling-wave bars against exact series and symmetry results for equal bars and gaps."""

import mpmath
import numpy as np
import pytest

from model.fields.solve import solve_chip
from model.layouts.four_phase_bars import FourPhaseBars
from model.walls import Wall

UM = 1e-6
#: Width of bars and gaps.
D = 10 * UM
#: Phases and the share of a period between neighbours.
PHASES = {"four": 1 / 4, "three": 1 / 3}
KEPT = {}


def solved(phases, wave="with-flow", height=40 * D, lid="still-air"):
    """Chip with bars as wide as gaps, the lid so far away that nothing of the field reaches it."""
    key = (phases, wave, height)
    if key not in KEPT:
        chip = FourPhaseBars(
            bar_width=D,
            gap=D,
            bar_count=20,
            channel_height=height,
            channel_width=1e-3,
            phases=phases,
            wave=wave,
            lid=Wall(material="pdms", thickness=4e-3, outside=lid),
        )
        KEPT[key] = solve_chip(chip)
    return KEPT[key]


def wave_number(phases):
    """2π over the length after which the phases repeat."""
    return 2 * np.pi * PHASES[phases] / (2 * D)


def fundamental(phases):
    """Amplitude of the fundamental over that of one phase.

    sin(πs)/(πs)/P₋ₛ(0), s the share of a period between neighbours, for bars as wide as gaps:
    the mixed problem of the half space, solved by Legendre functions. It gives 0.793989 for four
    phases; two phases (s = ½) are the elliptic-function result of coplanar bars.
    """
    s = mpmath.mpf(PHASES[phases])
    return float(mpmath.sin(mpmath.pi * s) / (mpmath.pi * s) / mpmath.legenp(-s, 0, 0))


def test_the_series_is_that_of_coplanar_bars_for_two_phases():
    """√2/W, half of the standing wave's 2√2/W; W = √2·K(½) is the lemniscate constant."""
    s = mpmath.mpf(1) / 2
    found = mpmath.sin(mpmath.pi * s) / (mpmath.pi * s) / mpmath.legenp(-s, 0, 0)
    lemniscate = mpmath.sqrt(2) * mpmath.ellipk(0.5)
    assert float(found) == pytest.approx(float(mpmath.sqrt(2) / lemniscate), rel=1e-9)


@pytest.mark.parametrize("phases", PHASES)
def test_one_wave_is_left_far_from_the_bars(phases):
    """φ = ½·a₁·exp(−ky − jkx) per volt between opposite phases, so that Eₓ = jkφ, E_y = kφ."""
    k, patterns = wave_number(phases), solved(phases)
    x, y = np.linspace(-70, 130, 23) * UM, 13 * D
    potential = 0.5 * fundamental(phases) * np.exp(-k * y - 1j * k * x)
    along, up = patterns.electric_field(x, y)
    np.testing.assert_allclose(along, 1j * k * potential, rtol=1e-4)
    np.testing.assert_allclose(up, k * potential, rtol=1e-4)
    push, lift = patterns.travelling(x, y)
    square = 2 * k**2 * np.abs(potential) ** 2
    np.testing.assert_allclose(push, -2 * k * square, rtol=1e-4)
    assert np.abs(lift).max() < 1e-4 * 2 * k * square[0]
    decay = patterns.gradient_e2(x, y)[1]
    np.testing.assert_allclose(decay, -2 * k * square, rtol=1e-4)


def test_the_fundamental_of_four_phases():
    """0.793988854 of one phase's amplitude; a linear potential in the gaps gives 0.877354."""
    assert fundamental("four") == pytest.approx(0.793988854, rel=1e-8)
    k, y = wave_number("four"), 6 * D
    along, up = solved("four").electric_field(0.0, y)
    amplitude = np.hypot(abs(along), abs(up)) / np.sqrt(2) / k * np.exp(k * y) / 0.5
    assert amplitude == pytest.approx(0.793988854, rel=1e-4)


def test_force_along_a_travelling_wave():
    """1.5544531 pN along the wave on a sphere of 3 µm with Im K = −½, from ½Re[(p·∇)E*].

    For 1 V peak on each phase, 20 µm above the bars, of the fundamental alone: |Eₓ|² + |E_y|² is
    3.3609513·10⁸ V²/m² (amplitudes). Measured where the higher harmonics have died out and
    brought down by the fundamental's own decay.
    """
    k, y = wave_number("four"), 8 * D
    rms = 2 / np.sqrt(2)  # between opposite phases
    decay = np.exp(2 * k * (y - 20 * UM))
    along, up = solved("four").electric_field(3 * UM, y)
    square = 2 * rms**2 * (abs(along) ** 2 + abs(up) ** 2) * decay
    assert square == pytest.approx(3.3609513e8, rel=1e-4)
    push = solved("four").travelling(3 * UM, y)[0] * decay * rms**2
    force = 2 * np.pi * 78.4085 * 8.8541878128e-12 * (3 * UM) ** 3 * -0.5 * push
    assert force == pytest.approx(1.5544531e-12, rel=1e-4)


@pytest.mark.parametrize("phases", PHASES)
def test_self_complementary_bars_have_a_known_admittance(phases):
    """½·sin(πs) per gap and metre of one half space.

    Bars as wide as gaps are their own complement, which fixes the admittance of every set of
    phases (Deschamps 1959 IRE Trans. Antennas Propag. 7:S371, from memory); s = ½ is the known
    ½ of coplanar bars.
    """
    expected = 0.5 * np.sin(np.pi * PHASES[phases])
    assert solved(phases).cell_factor == pytest.approx(expected, rel=3e-5)


@pytest.mark.parametrize("phases", ["four", pytest.param("three", marks=pytest.mark.long)])
def test_a_wave_against_the_flow_is_the_mirror_image(phases):
    x, y = np.linspace(-51, 60, 12) * UM, 5 * UM
    there, back = solved(phases), solved(phases, "against-flow")
    np.testing.assert_allclose(back.travelling(-x, y)[0], -there.travelling(x, y)[0], rtol=1e-9)
    np.testing.assert_allclose(back.gradient_e2(-x, y)[0], -there.gradient_e2(x, y)[0], rtol=1e-9)
    pumped = [patterns.electrothermal_travelling(x, y)[0] for patterns in (there, back)]
    np.testing.assert_allclose(pumped[1][::-1], -pumped[0][::-1], rtol=1e-9)


@pytest.mark.parametrize("phases", PHASES)
def test_a_travelling_wave_pumps_the_liquid(phases):
    """A net flow, the same through every cross-section (incompressible), of one sign."""
    patterns = solved(phases, height=6 * D, lid="held")
    y = np.linspace(0, patterns.height, 600)
    net = [
        np.trapezoid(patterns.electrothermal_travelling(x, y)[0], y)
        for x in np.array([0.0, 3, 7, 11, 16, 26]) * UM
    ]
    assert np.ptp(net) < 1e-3 * abs(net[0])
    assert abs(net[0]) > 0
