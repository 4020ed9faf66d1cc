"""Order of convergence of the three solves, on manufactured and exact solutions."""

import numpy as np
import pytest
from skfem import MeshQuad, MeshTri

from model.fields.assembly import space, stiffness
from model.fields.cells import Cells
from model.fields.condensed import CellSystem, factorise
from model.fields.electric import solve_potential
from model.fields.flow import FlowSpace, solve_flow
from model.fields.heat import Cooling, conduction
from model.fields.piecewise import Piecewise
from model.fields.sides import project_on_side
from model.fields.solve import solve_chip
from model.layouts.coplanar_bars import CoplanarBars
from model.walls import Wall

SIDES = {
    "left": lambda x: x[0] == 0,
    "right": lambda x: x[0] == 1,
    "floor": lambda x: x[1] == 0,
    "lid": lambda x: x[1] == 1,
}


def square(kind, count, skewed=True):
    """Unit square of count² cells; inside, the corners are shifted so that no cell is a box."""
    lines = np.linspace(0, 1, count + 1)
    mesh = (MeshTri if kind == "triangles" else MeshQuad).init_tensor(lines, lines)
    mesh = mesh.with_boundaries(SIDES)
    if skewed:
        x, y = mesh.p
        bump = 0.04 * np.sin(2 * np.pi * x) * np.sin(2 * np.pi * y)
        mesh.p[:] = np.stack([x + bump, y - bump])
    return mesh


def grid():
    line = np.linspace(0.03, 0.97, 23)
    return np.stack([part.ravel() for part in np.meshgrid(line, line)])


def size(miss):
    return np.sqrt(np.mean(np.square(miss)))


def orders(errors):
    return np.log2(np.divide(errors[0], errors[1]))


CASES = [("quadrilaterals", 2), ("quadrilaterals", 4), ("triangles", 2), ("triangles", 4)]


def harmonic(x):
    return np.exp(x[0]) * np.cos(x[1])


@pytest.mark.parametrize(("kind", "degree"), CASES)
def test_harmonic_potential(kind, degree):
    """φ = eˣ cos y given on all sides: value, slope and curvature lose one order each."""
    errors = []
    spots = grid()
    for count in (4, 8):
        mesh = square(kind, count)
        functions = space(mesh, degree, 2 * degree + 2)
        held = np.zeros(functions.size)
        for name in SIDES:
            own = functions.on(name)
            law = project_on_side(functions, name, lambda x: np.stack([harmonic(x)]), 0)
            held[own] = law[own]
        system = CellSystem(stiffness(functions), functions.dofs, functions.inner, functions.size)
        solution = factorise(system, functions.on(*SIDES)).solve(np.zeros(functions.size), held)
        found = Piecewise.of(functions, solution[None], Cells.of(mesh))
        located = found.cells.locate(spots)
        exact = harmonic(spots)
        slope = np.stack([exact, -np.exp(spots[0]) * np.sin(spots[1])])
        curvature = np.stack([exact, slope[1]])
        errors.append(
            [
                size(found.values(*located)[0] - exact),
                size(found.slopes(*located)[0] - slope),
                size(found.curvatures(*located)[0, 0] - curvature),
            ]
        )
    assert np.all(orders(errors) > np.array([degree + 1, degree, degree - 1]) - 0.5)


@pytest.mark.parametrize("kind", ["quadrilaterals", "triangles"])
def test_cubic_potential_is_exact_on_skewed_cells(kind):
    """φ = x³ − 3xy² lies in the space: curvatures and ∇|∇φ|² are exact, cells skewed or not."""
    mesh = square(kind, 3)
    functions = space(mesh, 3, 8)
    held = np.zeros(functions.size)
    for name in SIDES:
        own = functions.on(name)
        cubic = project_on_side(functions, name, lambda x: x[:1] ** 3 - 3 * x[:1] * x[1] ** 2, 0)
        held[own] = cubic[own]
    system = CellSystem(stiffness(functions), functions.dofs, functions.inner, functions.size)
    solution = factorise(system, functions.on(*SIDES)).solve(np.zeros(functions.size), held)
    found = Piecewise.of(functions, solution[None], Cells.of(mesh))
    x, y = spots = grid()
    located = found.cells.locate(spots)
    exact = np.array([[6 * x, -6 * y], [-6 * y, -6 * x]])
    np.testing.assert_allclose(found.curvatures(*located)[0], exact, atol=1e-9)
    # |∇φ|² = 9(x² + y²)²
    rise = 36 * (x**2 + y**2) * spots
    np.testing.assert_allclose(found.force_patterns(*located)[0], rise, atol=1e-8)


@pytest.mark.parametrize("kind", ["triangles", "quadrilaterals"])
@pytest.mark.parametrize("top", [0.613, 0.75, 0.8731])
def test_place_of_the_highest_value(kind, top):
    """Even heat, held at x = 0, a film at x = 1: Θ = top·x − x²/2, the top in or between cells."""
    mesh = square(kind, 4)
    functions = space(mesh, 4, 10)
    cooling = Cooling({"left": None, "right": (1 - top) / (top - 0.5)})
    heat = conduction(functions, np.ones(mesh.nelements), cooling).solve(
        np.ones_like(functions.weights)
    )
    found = Piecewise.of(functions, heat[None], Cells.of(mesh))
    cell, place = found.place_of_highest(np.arange(mesh.nelements))
    r, s = place[:, 0]
    shares = [(1 - r) * (1 - s), r * (1 - s), r * s, (1 - r) * s]
    if kind == "triangles":
        shares = [1 - r - s, r, s]
    assert (shares @ found.cells.corners[cell[0]])[0] == pytest.approx(top, abs=1e-3)
    assert found.values(cell, place)[0, 0] == pytest.approx(top**2 / 2, rel=1e-6)


def test_held_potential_between_plates_is_linear():
    mesh = square("triangles", 3)
    potential = solve_potential(space(mesh, 3, 6), {"left": 0.5, "right": -0.5})
    assert potential.energy == pytest.approx(1.0, rel=1e-12)
    np.testing.assert_allclose(potential.gradients()[0], -1.0, rtol=1e-10)


@pytest.mark.parametrize(("kind", "degree"), CASES)
def test_temperature(kind, degree):
    """Θ = sin πx·sin πy with the source 2π²kΘ."""
    errors = []
    spots = grid()
    for count in (6, 12):
        mesh = square(kind, count)
        functions = space(mesh, degree, 2 * degree + 4)
        wave = np.sin(np.pi * functions.points[0]) * np.sin(np.pi * functions.points[1])
        heat = conduction(
            functions, np.full(mesh.nelements, 0.7), Cooling(dict.fromkeys(SIDES))
        ).solve(0.7 * 2 * np.pi**2 * wave)
        found = Piecewise.of(functions, heat[None], Cells.of(mesh))
        exact = np.sin(np.pi * spots[0]) * np.sin(np.pi * spots[1])
        errors.append(size(found.values(*found.cells.locate(spots))[0] - exact))
    assert orders(errors) > degree + 0.5


def whirl(x):
    """Velocity (2, n) of ψ = sin²πx·sin²πy, at rest on all sides."""
    s, c = np.sin(np.pi * x), np.cos(np.pi * x)
    return 2 * np.pi * np.stack([s[0] ** 2 * s[1] * c[1], -(s[1] ** 2) * s[0] * c[0]])


def whirl_force(x):
    """−∇²u + ∇p of :func:`whirl`, with p = cos πx·cos πy."""
    s, c = np.sin(np.pi * x), np.cos(np.pi * x)
    double, twice = np.sin(2 * np.pi * x), np.cos(2 * np.pi * x)
    along = np.pi * (2 * np.pi**2 * double[1]) * (2 * s[0] ** 2 - twice[0])
    up = -np.pi * (2 * np.pi**2 * double[0]) * (2 * s[1] ** 2 - twice[1])
    pressure = -np.pi * np.stack([s[0] * c[1], c[0] * s[1]])
    return np.stack([along, up]) + pressure


@pytest.mark.parametrize(("kind", "degree"), CASES)
def test_flow(kind, degree):
    errors = []
    spots = grid()
    for count in (6, 12):
        mesh = square(kind, count)
        pair = FlowSpace.on(mesh, degree, 2 * degree + 4)
        (flow,) = solve_flow(pair, [whirl_force(pair.velocity.points)], {})
        found = Piecewise.of(pair.velocity, flow, Cells.of(mesh))
        errors.append(size(found.values(*found.cells.locate(spots)) - whirl(spots)))
    assert orders(errors) > degree + 0.3


def test_flow_slips_along_mirror_planes_but_does_not_cross_them():
    """Half a square, cut at its mirror plane, gives the flow of the whole one."""
    found = []
    for width in (1.0, 0.5):
        mesh = MeshQuad.init_tensor(
            np.linspace(0, width, round(8 * width) + 1), np.linspace(0, 1, 9)
        )
        mirrors = {"cut": 0} if width < 1 else {}
        mesh = mesh.with_boundaries({"cut": lambda x: x[0] == 0.5})
        pair = FlowSpace.on(mesh, 4, 12)
        push = np.cos(2 * np.pi * pair.velocity.points[0])
        (flow,) = solve_flow(pair, [np.stack([np.zeros_like(push), push])], mirrors)
        function = Piecewise.of(pair.velocity, flow, Cells.of(mesh))
        spots = grid() * np.array([[0.5], [1.0]])
        found.append(function.values(*function.cells.locate(spots)))
        along = function.values(*function.cells.locate(np.array([[0.5, 0.5], [0.3, 0.7]])))[0]
        assert np.abs(along).max() < 1e-9
    np.testing.assert_allclose(found[1], found[0], atol=1e-7 * np.abs(found[0]).max())


def test_gradients_in_the_force_move_nothing():
    """∇(x³y) only sets up a pressure, here within the pressure space."""
    mesh = square("quadrilaterals", 4, skewed=False)
    pair = FlowSpace.on(mesh, 5, 12)
    x, y = pair.velocity.points
    flows = solve_flow(pair, [np.stack([3 * x**2 * y, x**3])], {})
    assert np.abs(flows[0]).max() < 1e-8


def test_no_steady_state_without_cooling():
    mesh = square("quadrilaterals", 2)
    functions = space(mesh, 2, 4)
    density = np.ones_like(functions.weights)
    with pytest.raises(ValueError, match="no side lets heat leave"):
        conduction(functions, np.ones(4), Cooling({"lid": 0.0})).solve(density)


def test_potential_needs_a_held_side():
    with pytest.raises(ValueError, match="needs a side that is held"):
        solve_potential(space(square("quadrilaterals", 2), 2, 4), {})


def test_heat_through_two_slabs():
    """Uniform heat q in a layer of k = 0.5, cooled through a slab of k = 2 and a film h = 3."""
    mesh = MeshQuad.init_tensor(np.linspace(0, 1, 3), np.linspace(0, 1, 5))
    mesh = mesh.with_boundaries(SIDES)
    centre = mesh.p[1, mesh.t].mean(axis=0)
    functions = space(mesh, 2, 6)
    density = np.where(centre < 0.5, 4.0, 0.0)[:, None] * np.ones_like(functions.weights)
    heat = conduction(functions, np.where(centre < 0.5, 0.5, 2.0), Cooling({"lid": 3.0})).solve(
        density
    )
    found = Piecewise.of(functions, heat[None], Cells.of(mesh))
    flux = 4.0 * 0.5
    outside = flux / 3.0
    interface = outside + flux * 0.5 / 2.0
    floor = interface + 4.0 * 0.5**2 / (2 * 0.5)
    spots = np.array([[0.3, 0.3, 0.3], [1.0, 0.5, 0.0]])
    values = found.values(*found.cells.locate(spots))[0]
    np.testing.assert_allclose(values, [outside, interface, floor], rtol=1e-12)


def test_chip_converges():
    """Refining once halves the cell at the edge, hence the error of the cell factor."""
    chip = CoplanarBars(
        bar_width=40e-6,
        gap=40e-6,
        channel_height=60e-6,
        channel_width=2e-3,
        bar_count=20,
        floor=Wall(material="glass", thickness=100e-6, outside="held"),
        lid=Wall(material="pdms", thickness=200e-6, outside="still-air"),
    )
    coarse, fine = (solve_chip(chip, refinement=level) for level in (0, 1))
    section = chip.section(2)
    finest = solve_potential(space(section.liquid(), 8, 16), section.potentials[0])
    factors = [coarse.cell_factor, fine.cell_factor, section.cells_per_gap * finest.energy]
    assert 1.8 < (factors[0] - factors[1]) / (factors[1] - factors[2]) < 2.2
    assert factors[0] == pytest.approx(factors[2], rel=1e-5)
    assert coarse.peak_temperature == pytest.approx(fine.peak_temperature, rel=1e-4)
    x, y = np.meshgrid(np.linspace(0, 40e-6, 21), np.array([1, 2, 5, 10, 20, 40, 59]) * 1e-6)
    for pattern, limit in (("gradient_e2", 2e-3), ("electric_field", 1e-4), ("temperature", 1e-4)):
        one, two = (np.array(getattr(chip, pattern)(x, y)) for chip in (coarse, fine))
        largest = np.abs(two).max(axis=-1, keepdims=True)
        assert np.max(np.abs(one - two) / largest) < limit
    for one, two in zip(coarse.electrothermal(x, y), fine.electrothermal(x, y), strict=True):
        assert np.max(np.abs(np.array(one) - np.array(two))) < 3e-3 * np.abs(two).max()
