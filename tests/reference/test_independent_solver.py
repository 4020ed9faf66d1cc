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
    "heat": 1e-4,
    "heat in walls": 5e-5,
    "flow 1": 4e-3,
    "flow 2": 4e-3,
    "travelling force": 1e-3,
    "flow 3": 4e-3,
    "flow through": 1e-3,
    "cell factor": 2e-5,
}
#: The same where a solid side bends, which the cells follow in straight steps.
BENT = BOUNDS | {"field": 3e-3, "gradient of E²": 1e-2, "travelling force": 1e-2}
THICK = {
    "floor": Wall(material="glass", thickness=700e-6, outside="held"),
    "lid": Wall(material="pdms", thickness=4e-3, outside="still-air"),
}
#: Four poles are large: one of them is solved in every run.
LONG = [("four-pole", 0), ("four-pole", 1)]
EACH = [
    pytest.param(
        LAYOUTS[name](**arguments),
        id=f"{name} {number}",
        marks=[pytest.mark.long] if (name, number) in LONG else [],
    )
    for name in SOLVED
    for number, arguments in enumerate(EXAMPLES[name])
]
THICK_WALLS = pytest.param(
    LAYOUTS["facing-bars"](**EXAMPLES["facing-bars"][-1] | THICK), id="thick walls"
)


def is_bent(chip):
    shapes = {getattr(chip, key, "") for key in ("pole_shape", "obstacle")}
    return bool(shapes & {"hyperbolic", "post"})


#: Chips whose shape does not depend on the mesh.
STRAIGHT = [item for item in EACH if not is_bent(*item.values)]
#: Those of them whose pieces have at most 500 cells: the finer mesh of a larger one takes too long.
SMALL = [item for item in STRAIGHT if item.values[0].section().mesh.nelements <= 500]


@dataclass(frozen=True)
class Places:
    """Places in the liquid, and in the walls unless the chip is seen in plan, m, (row, place)."""

    x: np.ndarray
    y: np.ndarray
    wall_x: np.ndarray | None = None
    wall_y: np.ndarray | None = None


def places(chip, patterns):
    """Draw rows from a fiftieth of the height up, over several periods, and in both walls.

    In plan, all places in what is drawn of the liquid make one row.
    """
    rng = np.random.default_rng(2)
    if chip.view == "plan":
        west, east, south, north = chip.drawing().window
        x, y = rng.uniform(west, east, 4000), rng.uniform(south, north, 4000)
        inside = clear(chip, patterns, x, y)
        x, y = (part[inside][None, : ROWS * PLACES] for part in (x, y))
        return Places(x, y)
    span, height = 3 * patterns.period, patterns.height
    depths = rng.uniform(-chip.floor.thickness, 0, 3)
    heights = height + rng.uniform(0, chip.lid.thickness, 3)
    return Places(
        rng.uniform(-span, span, (ROWS, PLACES)),
        np.repeat(rng.uniform(0.02, 0.98, (ROWS, 1)) * height, PLACES, axis=1),
        rng.uniform(-span, span, (6, PLACES)),
        np.repeat([*depths, *heights], PLACES).reshape(6, PLACES),
    )


def clear(chip, patterns, x, y, share=0.05):
    """Whether places are in the liquid, a share of the opening from anything solid."""
    near = share * chip.narrowest
    shifts = near * np.exp(0.25j * np.pi * np.arange(8))
    return np.all([patterns.inside(x + one.real, y + one.imag) for one in shifts], axis=0)


def patterns_of(solved, spots, components):
    """Each pattern as (component, row, place), from either solver."""
    first, second = solved.electrothermal(spots.x, spots.y)
    found = {
        "field": solved.electric_field(spots.x, spots.y),
        "gradient of E²": solved.gradient_e2(spots.x, spots.y),
        "heat": [solved.temperature(spots.x, spots.y)],
        "flow 1": first,
        "flow 2": second,
    }
    if components == 2:
        found["travelling force"] = solved.travelling(spots.x, spots.y)
        found["flow 3"] = solved.electrothermal_travelling(spots.x, spots.y)
    if spots.wall_x is None:
        found["flow through"] = solved.flow_through(spots.x, spots.y)
    else:
        found["heat in walls"] = [solved.temperature(spots.wall_x, spots.wall_y)]
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


@cache
def model_solution(chip):
    return solve_chip(chip)


@pytest.mark.parametrize("chip", [*EACH, THICK_WALLS])
def test_independent_solver(chip, request, record_property):
    patterns, fine = model_solution(chip), converged_solution(chip)
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
        assert miss < (BENT if is_bent(chip) else BOUNDS)[pattern], pattern
        assert converged[pattern] < 2 * BOUNDS[pattern], pattern
    x, y = everywhere(chip, patterns)
    highest = fine.temperature(x, y).max()  # or a little more, between those
    slack = 1e-2 if chip.view == "plan" else 1e-3
    assert highest * (1 - 1e-4) < patterns.peak_temperature < highest * (1 + slack)


def everywhere(chip, patterns):
    """Places all over the liquid, (n,), as near as may be to what is solid."""
    window = chip.drawing().window if chip.view == "plan" else (0, patterns.period, 0, chip.height)
    west, east, south, north = window
    rise = 1e-3 * (north - south)
    x, y = np.meshgrid(np.linspace(west, east, 161), np.linspace(south + rise, north - rise, 80))
    inside = clear(chip, patterns, x, y, 5e-3) if chip.view == "plan" else np.full(x.shape, True)
    return x[inside], y[inside]


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


@pytest.mark.parametrize("chip", STRAIGHT)
def test_refining_lowers_the_errors_of_cell_factor_and_field(chip, request):
    """Both are ruled by the cell at an edge: refining halves it.

    At the edge of a bar φ grows as √r, at the corner of a square as r^(2/3); the energy that a cell
    of size h misses goes as h and as h^(4/3).
    """
    fine, spots = converged_solution(chip), places(chip, model_solution(chip))
    x, y = spots.x.ravel(), spots.y.ravel()
    if chip.view == "plan":
        x, y = np.abs(x), np.abs(y)
    else:
        corners = chip.section().liquid().p[0]
        x = corners.min() + x % np.ptp(corners)
    errors = []
    for refinement in (0, 1):
        factor, found = solved_potentials(chip, refinement, x, y)
        miss = np.linalg.norm(found - fine.electric_field(x, y))
        errors.append([factor / fine.cell_factor - 1, miss])
    ratio = np.divide(errors[0], errors[1])
    print(f"\n{request.node.callspec.id:28} errors fall by {ratio[0]:.3f} and {ratio[1]:.3f}")
    expected = 2 ** (4 / 3) if chip.view == "plan" else 2.0
    assert ratio[0] == pytest.approx(expected, rel=0.05)
    assert ratio[1] > 1.7


@pytest.mark.parametrize("chip", SMALL)
def test_refining_lowers_the_errors_of_heat_and_flow(chip, request):
    """By the order of their elements, where the source is smooth; by less at the edges.

    Flow that turns round a corner of 270° in plan has infinite slopes there, as r^(−0.46)
    (Moffatt 1964 J. Fluid Mech. 18:1, from memory), and its error falls as slowly as those say.
    """
    flow_falls = 1.5 if chip.view == "plan" else 6.0
    fine, coarse = converged_solution(chip), model_solution(chip)
    refined = solve_chip(chip, refinement=1)
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
            assert factor > (flow_falls if pattern.startswith("flow") else 3.0), pattern
