"""Meshes from blocks: they fit, keep their outline, and run one way; heat and flow across them."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from model.fields.assembly import space
from model.fields.blocks import joined, oriented, rectangle, ruled
from model.fields.cells import Cells
from model.fields.flow import FlowSpace, solve_flow
from model.fields.heat import Cooling, conduction
from model.fields.obstacles import post_quarter, ridge_quarter
from model.fields.piecewise import Piecewise
from model.fields.poles import Pole, pole_quarter
from model.fields.section import Section

UNIT = np.linspace(0, 1, 4)


def area(mesh):
    """Of all cells together, each counted with the sense of its corners."""
    x, y = mesh.p[:, mesh.t]
    return 0.5 * np.sum((x[2] - x[0]) * (y[3] - y[1]) - (x[3] - x[1]) * (y[2] - y[0]))


def outline(mesh):
    """Length of all outer sides."""
    ends = mesh.p[:, mesh.facets[:, mesh.boundary_facets()]]
    return np.hypot(*(ends[:, 1] - ends[:, 0])).sum()


def checked(mesh):
    """The mesh, once a section has taken it: every shared side in one sense."""
    return Section(mesh, ({},), (), length=1.0, height=1.0).mesh


def test_blocks_of_any_sense_become_one_mesh():
    row = np.stack([UNIT, 0 * UNIT], axis=-1)
    slanted = ruled(row, row * 2 + [0, 1], UNIT)
    blocks = [slanted, rectangle(UNIT - 1, -UNIT)[::-1], rectangle(UNIT, -UNIT)[:, ::-1]]
    mesh = checked(joined(blocks, {"top": lambda at: at[1] == 1}, refinement=1))
    assert mesh.nelements == 3 * 9 * 4
    assert area(mesh) == pytest.approx(3.5)
    assert outline(mesh) == pytest.approx(1 + 2 + 3 + 2 + np.sqrt(2))
    ends = mesh.p[:, mesh.facets[:, mesh.boundaries["top"]]]
    assert np.abs(np.diff(ends[0], axis=0)).sum() == pytest.approx(2)


def test_three_cells_cannot_share_a_side():
    blocks = [rectangle(UNIT, UNIT), rectangle(1 + UNIT, UNIT), rectangle(1 + UNIT, UNIT)]
    blocks[2][1:, :, 1] += 0.1
    with pytest.raises(ValueError, match="three cells"):
        joined(blocks, {})


@given(st.permutations(range(7)), st.lists(st.integers(0, 3), min_size=3, max_size=3))
def test_senses_do_not_depend_on_the_numbering(names, turns):
    """Three quadrilaterals around one corner, each begun anywhere."""
    cells = np.array([[0, 1, 2, 3], [0, 3, 4, 5], [0, 5, 6, 1]])
    turned = [np.roll(cell, turn) for cell, turn in zip(cells, turns, strict=True)]
    found = oriented(np.array(names)[np.transpose(turned)])
    directed = {tuple(pair) for cell in found.T for pair in cell[[[0, 1], [3, 2], [0, 3], [1, 2]]]}
    assert len(directed) == 9  # each of the nine sides in one sense alone


@pytest.mark.parametrize("hyperbolic", [False, True])
@pytest.mark.parametrize("beside", [0.0, 1e-3, 5.0])
@pytest.mark.parametrize(("tip", "width"), [(1.0, 2.0), (1.0, 20.0), (3.0, 1.0)])
def test_area_and_outline_around_a_pole(tip, width, beside, hyperbolic):
    back = tip + width
    pole = Pole(tip, width, hyperbolic, back + beside, back + 40.0)
    mesh = checked(pole_quarter(pole))
    solid = back**2 - tip**2 * (1 + 2 * np.log(back / tip)) if hyperbolic else width**2
    assert area(mesh) == pytest.approx((back + beside) * (back + 40) - solid, rel=1e-4)
    named = np.concatenate(list(mesh.boundaries.values()))
    assert np.array_equal(np.sort(named), mesh.boundary_facets())
    ends = mesh.p[:, mesh.facets[:, mesh.boundaries["pole"]]]
    x = np.linspace(tip, back, 20001)
    face = np.hypot(np.diff(x), np.diff(tip**2 / x)).sum() if hyperbolic else width
    free = 1 if beside else 0
    sides = back - pole.waist
    expected = 2 * face + (1 + free) * sides if hyperbolic else (3 + free) * width
    assert np.hypot(*(ends[:, 1] - ends[:, 0])).sum() == pytest.approx(expected, rel=1e-3)


@pytest.mark.parametrize(("radius", "opening"), [(1.0, 0.01), (1.0, 1.0), (1.0, 50.0)])
def test_area_around_a_post(radius, opening):
    """The polygon is as large as the circle."""
    reach = 3 * (radius + opening)
    mesh = checked(post_quarter(radius, opening, reach))
    missing = reach * (radius + opening) - area(mesh)
    assert missing == pytest.approx(0.25 * np.pi * radius**2, rel=1e-4)


def test_area_past_a_ridge():
    mesh = checked(ridge_quarter(0.5, 0.2, 3.0, 10.0))
    assert area(mesh) == pytest.approx(30 - 0.5 * 2.8)


def strip():
    """A strip 2 long and ½ wide, skewed cells in it, and its named sides."""
    x, y = np.linspace(0, 2, 5), np.linspace(0, 0.5, 5)
    corners = rectangle(x, y)
    corners[1:-1, 1:-1] += 0.03 * np.sin(9 * corners[1:-1, 1:-1, ::-1])
    every = {
        "left": lambda at: at[0] == 0,
        "right": lambda at: at[0] == 2,
        "middle": lambda at: at[1] == 0,
        "wall": lambda at: at[1] == 0.5,
    }
    return joined([corners], every)


def test_heat_that_leaves_across_the_plane():
    """Θ = (q/g)(1 − cosh(x√(g/k))/cosh(2√(g/k))), held at one end, insulated at the other."""
    k, g, q = 0.6, 5.0, 2.0
    functions = space(strip(), 4, 12)
    conductivity = np.full(functions.mesh.nelements, k)
    density = np.full(functions.weights.shape, q)
    cooling = Cooling({"right": None})
    solution = conduction(functions, conductivity, cooling, g).solve(density)
    cells = Cells.of(functions.mesh)
    x = np.linspace(0, 2, 9)
    at = cells.locate(np.stack([x, np.full_like(x, 0.21)]))
    rate = np.sqrt(g / k)
    expected = q / g * (1 - np.cosh(rate * x) / np.cosh(2 * rate))
    found = Piecewise.of(functions, solution[None], cells).values(*at)[0]
    np.testing.assert_allclose(found, expected, atol=1e-4 * q / g)
    alone = conduction(functions, conductivity, Cooling({}), g).solve(density)
    assert float(alone @ functions.constant()) / functions.constant().sum() == pytest.approx(q / g)


def test_pressure_drives_liquid_straight_through():
    """Between walls at y = ±½ u = (1 − cosh(y√g)/cosh(√g/2))/g per pressure gradient.

    Brinkman's equation with the friction g of floor and lid, solved by hand.
    """
    g = 12 / 0.3**2
    pair = FlowSpace.on(strip(), 4, 12)
    force = np.zeros((2, *pair.velocity.weights.shape))
    force[0] = 1.0
    ends = {"left": 0, "right": 0}
    (flow,) = solve_flow(pair, [force], {"middle": 1}, friction=g, crossed=ends)
    cells = Cells.of(pair.velocity.mesh)
    y = np.linspace(0, 0.5, 7)
    at = cells.locate(np.stack([np.full_like(y, 0.77), y]))
    along, across = Piecewise.of(pair.velocity, flow, cells).values(*at)
    expected = (1 - np.cosh(np.sqrt(g) * y) / np.cosh(np.sqrt(g) / 2)) / g
    np.testing.assert_allclose(along, expected, atol=1e-3 / g)
    assert np.abs(across).max() < 1e-3 / g
