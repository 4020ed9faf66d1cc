"""Every layout against NGSolve, a general finite-element library, at places drawn at random.

How the chips are solved there, and from what, stands in ``independent.py``. ``pytest -s`` shows
by how much the two differ and, beside it, how much the other solver's own result still changes
with its mesh. A row is a line along x at one y; differences are shares of the largest value in it.
"""

from dataclasses import dataclass
from functools import cache

import numpy as np
import pytest

from model.fields.assembly import space
from model.fields.cells import Cells
from model.fields.electric import solve_potential
from model.fields.piecewise import Piecewise
from model.fields.solve import FIELD_DEGREE, WATER, solve_chip
from model.layouts import LAYOUTS
from model.walls import Wall
from tests.field_maps import SOLVED
from tests.model.test_layouts import EXAMPLES
from tests.reference.independent import COARSE, FINE, Solution
from tests.reference.independent_chips import PROBLEMS

#: Rows, and places in each.
ROWS, PLACES = 12, 12
#: Greatest difference of each pattern, as a share of the largest in its row.
BOUNDS = {
    "field": 1e-4,
    "gradient of E²": 1e-3,
    "heat": 5e-5,
    "heat in walls": 5e-5,
    "flow 1": 4e-3,
    "flow 2": 4e-3,
    "travelling force": 1e-3,
    "flow 3": 4e-3,
    "cell factor": 2e-5,
}
THICK = {
    "floor": Wall(material="glass", thickness=700e-6, outside="held"),
    "lid": Wall(material="pdms", thickness=4e-3, outside="still-air"),
}
EACH = [
    pytest.param(name, arguments, id=f"{name} {number}")
    for name in SOLVED
    for number, arguments in enumerate(EXAMPLES[name])
]
CHIPS = [*EACH, pytest.param("facing-bars", EXAMPLES["facing-bars"][-1] | THICK, id="thick walls")]
#: Chips whose pieces have at most 900 cells: the finer mesh of a larger one takes longer.
SMALL = [
    item
    for item in EACH
    if LAYOUTS[item.values[0]](**item.values[1]).section().mesh.nelements <= 900
]


@dataclass(frozen=True)
class Places:
    """Rows of places in the liquid, and in the walls, m, each (row, place)."""

    x: np.ndarray
    y: np.ndarray
    wall_x: np.ndarray
    wall_y: np.ndarray


def places(chip, patterns):
    """Draw rows from a fiftieth of the height up, over several periods, and in both walls."""
    rng = np.random.default_rng(2)
    span, height = 3 * patterns.period, patterns.height
    depths = rng.uniform(-chip.floor.thickness, 0, 3)
    heights = height + rng.uniform(0, chip.lid.thickness, 3)
    return Places(
        rng.uniform(-span, span, (ROWS, PLACES)),
        np.repeat(rng.uniform(0.02, 0.98, (ROWS, 1)) * height, PLACES, axis=1),
        rng.uniform(-span, span, (6, PLACES)),
        np.repeat([*depths, *heights], PLACES).reshape(6, PLACES),
    )


def patterns_of(solved, spots, components):
    """Each pattern as (component, row, place), from either solver."""
    first, second = solved.electrothermal(spots.x, spots.y)
    found = {
        "field": solved.electric_field(spots.x, spots.y),
        "gradient of E²": solved.gradient_e2(spots.x, spots.y),
        "heat": [solved.temperature(spots.x, spots.y)],
        "heat in walls": [solved.temperature(spots.wall_x, spots.wall_y)],
        "flow 1": first,
        "flow 2": second,
    }
    if components == 2:
        found["travelling force"] = solved.travelling(spots.x, spots.y)
        found["flow 3"] = solved.electrothermal_travelling(spots.x, spots.y)
    return {name: np.array(part) for name, part in found.items()}


def differences(one, other):
    """Greatest difference of each pattern as a share of the largest value in its row."""
    found = {}
    for name, part in one.items():
        sizes = np.linalg.norm(other[name], axis=0).max(axis=1, keepdims=True)
        found[name] = float((np.linalg.norm(part - other[name], axis=0) / sizes).max())
    return found


@pytest.mark.parametrize("name", SOLVED)
def test_every_layout_is_solved_independently(name):
    assert name in PROBLEMS, f"add a whole period of the layout {name} to PROBLEMS"


@cache
def converged_solution(chip):
    return Solution(PROBLEMS[chip.layout](chip, WATER), FINE)


@pytest.mark.parametrize(("name", "arguments"), CHIPS)
def test_independent_solver(name, arguments, request, record_property):
    chip = LAYOUTS[name](**arguments)
    patterns, fine = solve_chip(chip), converged_solution(chip)
    coarse = Solution(fine.problem, COARSE)
    spots = places(chip, patterns)
    one, other, reference = (
        patterns_of(solved, spots, fine.components) for solved in (patterns, coarse, fine)
    )
    misses, converged = differences(one, reference), differences(other, reference)
    misses["cell factor"] = abs(patterns.cell_factor / fine.cell_factor - 1)
    converged["cell factor"] = abs(coarse.cell_factor / fine.cell_factor - 1)
    print(f"\n{request.node.callspec.id:28} difference   of its own two meshes")
    for pattern, miss in misses.items():
        record_property(pattern, f"{miss:.1e}")
        print(f"  {pattern:26} {miss:8.1e}     {converged[pattern]:8.1e}")
    for pattern, miss in misses.items():
        assert miss < BOUNDS[pattern], pattern
        assert converged[pattern] < 2 * BOUNDS[pattern], pattern
    x, y = np.meshgrid(
        np.linspace(0, patterns.period, 120), np.linspace(1e-3, 0.999, 60) * patterns.height
    )
    highest = fine.temperature(x.ravel(), y.ravel()).max()  # or a little more, between those
    assert highest * (1 - 1e-4) < patterns.peak_temperature < highest * (1 + 1e-3)


def solved_potentials(chip, refinement, x, y):
    """Cell factor, and Ê at places (n,) within the piece that is solved, of all components."""
    section = chip.section(refinement)
    functions = space(section.liquid(), FIELD_DEGREE, 2 * FIELD_DEGREE, section.joined)
    found = [solve_potential(functions, levels) for levels in section.potentials]
    solutions = np.stack([potential.solution for potential in found])
    piece = Piecewise.of(functions, solutions, Cells.of(functions.mesh))
    field = -piece.slopes(*piece.cells.locate(np.stack([x, y])))
    energy = sum(potential.energy for potential in found)
    return section.cells_per_gap * energy, field[0] if len(found) == 1 else field[0] + 1j * field[1]


@pytest.mark.parametrize(("name", "arguments"), EACH)
def test_refining_halves_the_errors_of_cell_factor_and_field(name, arguments, request):
    """Both are ruled by the cell at an edge, about which |E| is infinite as 1/√r."""
    chip = LAYOUTS[name](**arguments)
    fine = converged_solution(chip)
    corners = chip.section().liquid().p
    low, high = corners.min(axis=1), corners.max(axis=1)
    rng = np.random.default_rng(4)
    x, y = low[:, None] + (high - low)[:, None] * rng.uniform(0.1, 0.9, (2, 60))
    errors = []
    for refinement in (0, 1):
        factor, field = solved_potentials(chip, refinement, x, y)
        miss = np.linalg.norm(field - fine.electric_field(x, y))
        errors.append([factor / fine.cell_factor - 1, miss])
    ratio = np.divide(errors[0], errors[1])
    print(f"\n{request.node.callspec.id:28} errors fall by {ratio[0]:.3f} and {ratio[1]:.3f}")
    assert np.all((ratio > 1.8) & (ratio < 2.3))


@pytest.mark.parametrize(("name", "arguments"), SMALL)
def test_refining_lowers_the_errors_of_heat_and_flow(name, arguments, request):
    """By the order of their elements, where the source is smooth; by less at the edges."""
    chip = LAYOUTS[name](**arguments)
    fine = converged_solution(chip)
    coarse, refined = (solve_chip(chip, refinement=level) for level in (0, 1))
    spots = places(chip, coarse)
    reference = patterns_of(fine, spots, fine.components)
    before, after = (
        differences(patterns_of(solved, spots, fine.components), reference)
        for solved in (coarse, refined)
    )
    ratio = {pattern: before[pattern] / after[pattern] for pattern in before}
    print(f"\n{request.node.callspec.id:28} errors fall by")
    for pattern, factor in ratio.items():
        if pattern.startswith(("heat", "flow")):
            print(f"  {pattern:26} {factor:5.1f}")
            assert factor > (6.0 if pattern.startswith("flow") else 3.0), pattern
