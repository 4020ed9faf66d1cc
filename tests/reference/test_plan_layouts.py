"""Four poles and insulating constrictions against conformal maps and other exact solutions.

Derived here unless a source is named.

- Poles that are large squares leave channels of half width c that meet in a bend. The map
  z/c = (2/π)·(arctan u + artanh u) takes its outer corner to u = 0, the tip of the pole to u = ∞
  and the arms to u = 1 and j; the field is V|u|/c with V between pole and axis. A bend counts
  1 − (2/π)·ln 2 = 0.5587 squares, the known value of a corner.
- A step of a channel from width a to b = κa is
  z = (a/π)·[ln((s + 1)/(s − 1)) − κ·ln((κ + s)/(κ − s))] and counts
  (1/π)·[(κ + 1/κ)·ln((κ + 1)/(κ − 1)) − 2·ln(4κ/(κ² − 1))] squares more than both arms.
- A post in a channel is one of a row with its images in the walls, Lord Rayleigh 1892 Phil. Mag.
  34:481: z + (πb²/W)·coth(πz/W), b² = a²/(1 − π²a²/(3W²)) for a post of radius a in the width W,
  up to the eighth power of πa/W.
"""

import numpy as np
import pytest

from model.fields import poles
from model.fields.assembly import space
from model.fields.blocks import joined
from model.fields.cells import Cells
from model.fields.electric import solve_potential
from model.fields.piecewise import Piecewise
from model.fields.solve import solve_chip
from model.layouts.four_pole import FourPole
from model.layouts.insulating_constriction import InsulatingConstriction
from model.walls import Wall

UM = 1e-6
CORNER = 1 - 2 * np.log(2) / np.pi


def solved(chip, refinement=0):
    """φ of each component of a chip, without heat and flow, and the energy of the whole plan."""
    section = chip.section(refinement)
    functions = space(section.liquid(), 8, 16)
    found = [solve_potential(functions, held) for held in section.potentials]
    solutions = np.stack([one.solution for one in found])
    pattern = Piecewise.of(functions, solutions, Cells.of(functions.mesh))
    return pattern, section.cells_per_gap * sum(one.energy for one in found)


def field_and_gradient(pattern, x, y):
    """Each component's E (component, 2, n), and ∇ of the sum of squares (2, n)."""
    located = pattern.cells.locate(np.stack([x, y]))
    assert located[0].min() >= 0
    return -pattern.slopes(*located), pattern.force_patterns(*located)[0]


def bend(z):
    """Complex field and its slope at places z in a bend of width 1, for 1 V between its sides."""
    z = np.asarray(z, dtype=complex)
    u = 0.25 * np.pi * 0.01 * z  # from the corner outward, by Newton's steps
    for share in np.linspace(0.01, 1, 100):
        for _ in range(6):
            reached = 2 / np.pi * (np.arctan(u) + np.arctanh(u))
            u = u - 0.25 * np.pi * (reached - share * z) * (1 - u**4)
    return np.stack([u, 0.25 * np.pi * (1 - u**4)])


@pytest.mark.parametrize("along", [0.3, 1.5])
def test_exact_field_of_a_bend(along):
    """1 V from the axis to the pole, and uniform in the arms."""
    y = 0.5 + 0.5 * np.polynomial.legendre.leggauss(30)[0]
    weights = 0.5 * np.polynomial.legendre.leggauss(30)[1]
    if along > 1:
        assert np.abs(bend(along + 1j * y)[0]) @ weights == pytest.approx(1, rel=2e-2)
        assert abs(bend([4 + 0.5j])[0, 0]) == pytest.approx(1, rel=1e-3)
    else:
        slope = (bend([along + 1e-5 + 0.4j])[0] - bend([along - 1e-5 + 0.4j])[0]) / 2e-5
        assert slope[0] == pytest.approx(bend([along + 0.4j])[1, 0], rel=1e-6)


def wide_poles(**more):
    """Poles eight times as wide as the half gap between them, which is 50 µm."""
    return FourPole(tip_gap=np.sqrt(8) * 50 * UM, pole_width=400 * UM, channel_width=2e-3, **more)


def test_field_between_square_poles():
    """E and ∇|E|² in the bend between a pole and both axes, half the voltage."""
    pattern, _ = solved(wide_poles())
    z = np.array([0.05 + 0.02j, 0.3 + 0.3j, 0.8 + 0.7j, 0.5 + 0.95j, 1.4 + 0.6j, 0.2 + 2.1j])
    exact, slope = bend(z)
    field, gradient = field_and_gradient(pattern, *(50 * UM * np.array([z.real, z.imag])))
    size = 0.5 / (50 * UM)
    np.testing.assert_allclose(np.hypot(*field[0]), size * np.abs(exact), rtol=2e-5)
    turned = 2 * exact.conj() * slope * size**2 / (50 * UM)
    expected = np.array([turned.real, -turned.imag])
    miss = np.hypot(*(gradient - expected))
    assert np.all(miss < 1e-3 * np.hypot(*expected).max())


def test_corner_of_square_poles():
    """Charge along an axis from the centre: 0.5587/2 squares more than beside the pole alone."""
    pattern, _ = solved(wide_poles())
    nodes, weights = np.polynomial.legendre.leggauss(200)
    c, end = 50 * UM, 250 * UM
    x = 0.5 * end * (nodes + 1)
    field, _ = field_and_gradient(pattern, x, np.zeros_like(x))
    charge = 0.5 * end * np.abs(field[0, 1]) @ weights / 0.5
    assert charge == pytest.approx((end - c) / c + 0.5 * CORNER, rel=1e-6)


def test_square_poles_converge(monkeypatch):
    """Halving the cells at the tips takes the energy down by 2^(4/3), as corners of 270° do."""
    monkeypatch.setattr(poles, "TIP_CELL", 0.1)
    monkeypatch.setattr(poles, "BACK_CELL", 0.1)
    energies = []
    for level in (0, 1, 2):
        mesh = poles.pole_quarter(poles.Pole(1.0, 2.0, False, 4.0, 9.0), level)
        held = {"pole": 0.5, "left": 0.0, "bottom": 0.0}
        energies.append(solve_potential(space(mesh, 5, 10), held).energy)
    first, second = -np.diff(energies)
    assert 2.3 < first / second < 2.7


@pytest.mark.parametrize("share", [1.0, 3.0])
def test_ideal_four_pole_near_the_centre(share):
    """φ = V·xy/r₀² with r₀ half the tip gap; the cut-off poles change it by e^(−πw/r₀) or so."""
    gap = 90 * UM
    chip = FourPole(
        pole_shape="hyperbolic", tip_gap=gap, pole_width=share * gap, channel_width=1e-3
    )
    pattern, _ = solved(chip)
    x, y = np.array([[1, 5, 9, 2, 14], [2, 5, 1, 12, 14]]) * UM
    field, gradient = field_and_gradient(pattern, x, y)
    strength = (2 / gap) ** 2
    np.testing.assert_allclose(np.abs(field[0]), strength * np.array([y, x]), rtol=2e-4)
    np.testing.assert_allclose(gradient, 2 * strength**2 * np.array([x, y]), rtol=2e-3)


def whole_plan(quarter):
    """Mesh of all four quarters, its poles named by their numbers, anticlockwise."""
    corners = quarter.p[:, quarter.t].transpose(2, 1, 0)  # (cell, corner, 2)
    blocks = [
        side * cell[[0, 1, 3, 2]].reshape(2, 2, 2)
        for side in np.array([[1, 1], [-1, 1], [-1, -1], [1, -1]])
        for cell in corners
    ]
    middles = quarter.p[:, quarter.facets[:, quarter.boundaries["pole"]]].mean(axis=1)
    known = np.round(middles / quarter.p.max() * 1e9)

    def on_pole(number):
        signs = np.array([[1, 1], [-1, 1], [-1, -1], [1, -1]])[number][:, None]

        def test(at):
            there = np.round(at * signs / quarter.p.max() * 1e9)
            return (there.T[:, None] == known.T).all(axis=2).any(axis=1)

        return test

    return joined(blocks, {f"pole {number}": on_pole(number) for number in range(4)})


def test_quadrature_is_four_phasors():
    """Poles at ½·jⁿ on the whole plan give the squares and S that the quarter's two parts do."""
    pole = poles.Pole(20 * UM, 30 * UM, False, 80 * UM, 500 * UM)
    chip = FourPole(
        tip_gap=np.sqrt(8) * 20 * UM, pole_width=30 * UM, channel_width=160 * UM, drive="quadrature"
    )
    mesh = whole_plan(poles.pole_quarter(pole))
    functions = space(mesh, 6, 12)
    phasors = 0.5 * 1j ** np.arange(4)
    parts = [
        solve_potential(functions, {f"pole {n}": float(value) for n, value in enumerate(part)})
        for part in (phasors.real, phasors.imag)
    ]
    solutions = np.stack([part.solution for part in parts])
    pattern = Piecewise.of(functions, solutions, Cells.of(mesh))
    x, y = np.array([[3, -9, 14, -2, 40, -70], [5, 12, -14, -31, 2, 66]]) * UM
    located = pattern.cells.locate(np.stack([x, y]))
    square = (pattern.slopes(*located) ** 2).sum(axis=(0, 1))
    rise, turning = pattern.force_patterns(*located)
    patterns = solve_chip(chip)
    assert patterns.cell_factor == pytest.approx(sum(part.energy for part in parts), rel=1e-4)
    line = patterns.path(x, y)
    np.testing.assert_allclose(line.square, square, rtol=1e-3)
    np.testing.assert_allclose(line.gradient, rise, atol=1e-3 * np.abs(rise).max())
    np.testing.assert_allclose(line.travelling, turning, atol=1e-3 * np.abs(turning).max())
    assert line.field * np.exp(0.25j * np.pi) == pytest.approx(
        -pattern.slopes(*located)[0] - 1j * pattern.slopes(*located)[1], rel=1e-3, abs=10
    )


def test_field_turns_in_a_circle_at_the_centre():
    """Both parts at right angles and of one size, 1/(√2·gap) each for large square poles.

    Of the insulated bend dW/dt = V/(π√(t(t − 1))), so that the field is V/(√2c) at its corner.
    The first pole leads the last, hence the field turns clockwise: E₀×E₁ > 0 with exp(jωt).
    """
    pattern, _ = solved(wide_poles(drive="quadrature"))
    field, _ = field_and_gradient(pattern, np.zeros(1), np.zeros(1))
    first, second = field[:, :, 0]
    size = 1 / (np.sqrt(2) * np.sqrt(8) * 50 * UM)
    assert np.hypot(*first) == pytest.approx(size, rel=1e-5)
    assert np.hypot(*second) == pytest.approx(size, rel=1e-5)
    assert abs(first @ second) < 1e-9 * size**2
    assert first[0] * second[1] - first[1] * second[0] == pytest.approx(size**2, rel=1e-5)


def constriction(**more):
    """A channel of 0.4 mm between electrodes 4 mm apart."""
    return InsulatingConstriction(electrode_spacing=4e-3, channel_width=0.4e-3, **more)


@pytest.mark.parametrize("opening", [20, 100, 300])
def test_resistance_of_a_long_ridge(opening):
    """Two arms and two steps in series; steps three openings apart do not feel one another."""
    length = 3 * opening
    chip = constriction(obstacle="ridge", opening=opening * UM, obstacle_length=length * UM)
    ratio = 400 / opening
    step = (ratio + 1 / ratio) * np.log((ratio + 1) / (ratio - 1))
    step = (step - 2 * np.log(4 * ratio / (ratio**2 - 1))) / np.pi
    squares = length / opening + (4000 - length) / 400 + step
    assert solved(chip)[1] == pytest.approx(1 / squares, rel=1e-5)


def test_next_to_no_ridge_leaves_the_field_uniform():
    """E = V/L and no gradient between the electrodes."""
    chip = constriction(obstacle="ridge", opening=399.8 * UM, obstacle_length=50 * UM)
    pattern, energy = solved(chip)
    assert energy == pytest.approx(400 / 4000, rel=1e-4)
    x, y = np.array([[0, 30, 500, 1900], [10, 100, 150, 5]]) * UM
    field, gradient = field_and_gradient(pattern, x, y)
    np.testing.assert_allclose(np.hypot(*field[0]), 250, rtol=1e-3)
    assert np.abs(gradient).max() < 250**2 / (400 * UM) * 1e-2


@pytest.mark.parametrize("radius", [8, 20, 40])
def test_post_in_a_wide_channel(radius):
    """Conductance and field of a slender post, and of its images in the side walls."""
    width, length, a = 400 * UM, 4e-3, radius * UM
    pattern, energy = solved(constriction(obstacle="post", opening=0.5 * width - a))
    square = a**2 / (1 - (np.pi * a / width) ** 2 / 3)
    longer = length + 2 * np.pi * square / width
    assert energy == pytest.approx(width / longer, rel=1e-5)
    z = a * np.array([1.3, 0.4 + 1.2j, 1.2j, 1 + 1j, 3 + 2j])
    slope = 1 - square * (np.pi / width) ** 2 / np.sinh(np.pi * z / width) ** 2
    twice = 2 * square * (np.pi / width) ** 3 * np.cosh(np.pi * z / width)
    twice = twice / np.sinh(np.pi * z / width) ** 3
    field, gradient = field_and_gradient(pattern, z.real, z.imag)
    np.testing.assert_allclose(np.hypot(*field[0]) * longer, np.abs(slope), rtol=1e-3)
    rise = 2 * slope.conj() * twice / longer**2
    expected = np.array([rise.real, -rise.imag])
    assert np.hypot(*(gradient - expected)).max() < 1e-2 * np.hypot(*expected).max()


def test_heat_leaves_straight_through_floor_and_lid():
    """Far from the obstacle Θ = E²h/G per V, both walls and half the liquid each in series."""
    chip = constriction(
        obstacle="ridge",
        opening=100 * UM,
        obstacle_length=100 * UM,
        depth=40 * UM,
        floor=Wall(material="glass", thickness=50 * UM, outside="held"),
        lid=Wall(material="pdms", thickness=200 * UM, outside="still-air"),
    )
    k = 0.6
    patterns = solve_chip(chip, k)
    floor = 1 / (20 * UM / k + 50 * UM / 1.1)
    lid = 1 / (20 * UM / k + 200 * UM / 0.16 + 1 / 10)
    strength = np.hypot(*patterns.electric_field(1e-3, 0.0))
    expected = k * strength**2 * 40 * UM / (floor + lid)
    found = patterns.temperature(np.array([1e-3, -1e-3]), np.array([0.0, 0.1e-3]))
    np.testing.assert_allclose(found, expected, rtol=1e-4)


@pytest.mark.parametrize(
    ("ratio", "fastest"),
    [(1, 2.096256), (2, 1.991796), (5, 1.714970), (10, 1.600896)],
)
def test_flow_through_an_open_channel(ratio, fastest):
    """Greatest over mean speed of a rectangular channel, Bruus 2008 section 3.4.6, within 3 %.

    Half-way up it is 1.5 times the mean over the depth. Exactly, the plan gives Brinkman's
    profile.
    """
    depth = 400 * UM / ratio
    chip = constriction(obstacle="ridge", opening=300 * UM, obstacle_length=50 * UM, depth=depth)
    patterns = solve_chip(chip)
    y = np.linspace(-190, 190, 9) * UM
    along, across = patterns.flow_through(1.2e-3, y) * np.array(depth * 400 * UM)
    rate = np.sqrt(12) / depth
    half = rate * 200 * UM
    profile = (1 - np.cosh(rate * y) / np.cosh(half)) / (1 - np.tanh(half) / half)
    np.testing.assert_allclose(along, profile, rtol=1e-3)
    assert np.abs(across).max() < 1e-3
    assert 1.5 * along[4] == pytest.approx(fastest, rel=0.03)
