"""Every layout against NGSolve, a general finite-element library, at places drawn at random.

How the chips are solved there, and from what, stands in ``independent.py``. ``pytest -s`` shows
by how much the two differ and, beside it, how much the other solver's own result still changes
with its mesh. A row is a line along x at one y; differences are shares of the largest value in it.
"""

from dataclasses import dataclass

import numpy as np
import pytest

from model.fields.solve import WATER, solve_chip
from model.layouts import LAYOUTS
from model.walls import Wall
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
CHIPS = [
    pytest.param(name, arguments, id=f"{name} {number}")
    for name in LAYOUTS
    for number, arguments in enumerate(EXAMPLES[name])
]
CHIPS.append(pytest.param("facing-bars", EXAMPLES["facing-bars"][-1] | THICK, id="thick walls"))


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


@pytest.mark.parametrize("name", LAYOUTS)
def test_every_layout_is_solved_independently(name):
    assert name in PROBLEMS, f"add a whole period of the layout {name} to PROBLEMS"


@pytest.mark.parametrize(("name", "arguments"), CHIPS)
def test_independent_solver(name, arguments, request, record_property):
    chip = LAYOUTS[name](**arguments)
    patterns = solve_chip(chip)
    problem = PROBLEMS[name](chip, WATER)
    coarse, fine = Solution(problem, COARSE), Solution(problem, FINE)
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
