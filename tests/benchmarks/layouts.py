"""What a finer mesh costs and gains for each layout, as a table in markdown.

Errors are told against an independent solver, at places away from walls and electrodes.
"""

import time
from collections.abc import Callable, Iterable

import numpy as np
from threadpoolctl import threadpool_limits

from model.fields.patterns import ChipPatterns
from model.fields.solve import WATER, solve_chip
from model.layouts import LAYOUTS
from tests.field_maps import SOLVED
from tests.model.test_layouts import EXAMPLES, Case, places
from tests.reference.independent import FINE, Solution
from tests.reference.independent_chips import PROBLEMS

LEVELS = (0, 1)
#: Places of which errors are told.
PLACES = 10

Solved = ChipPatterns | Solution
#: What is compared, each as a number or an array, at places (2, n).
QUANTITIES: dict[str, Callable[[Solved, np.ndarray], object]] = {
    "cell factor": lambda solved, at: solved.cell_factor,
    "E²": lambda solved, at: np.sum(np.abs(solved.electric_field(*at)) ** 2, axis=0),
    "∇E²": lambda solved, at: solved.gradient_e2(*at),
    "heat": lambda solved, at: solved.temperature(*at),
    "flow": lambda solved, at: solved.electrothermal(*at),
}


def rows(name: str) -> Iterable[str]:
    """One row for each mesh of the last example of a layout."""
    case = Case(LAYOUTS[name], EXAMPLES[name][-1])
    exact = Solution(PROBLEMS[name](case.chip, WATER), FINE)
    at = np.array(places(case, PLACES))
    first = None
    for level in LEVELS:
        start = time.process_time()
        patterns = solve_chip(case.chip, refinement=level)
        seconds = time.process_time() - start
        first = first or seconds
        shown = [name, str(level), str(case.chip.section(level).mesh.nelements)]
        shown += [f"{seconds / first:.1f}", *_errors(patterns, exact, at)]
        yield f"| {' | '.join(shown)} |"


def _errors(patterns: ChipPatterns, exact: Solution, at: np.ndarray) -> Iterable[str]:
    """Greatest error of each quantity as a share of its largest value."""
    for quantity in QUANTITIES.values():
        found, true = (np.asarray(quantity(solved, at)) for solved in (patterns, exact))
        yield f"{np.abs(found - true).max() / np.abs(true).max():.0e}"


def main() -> None:
    """Print the table."""
    print(f"| layout | level | cells | time | {' | '.join(QUANTITIES)} |")
    print("|---" * (4 + len(QUANTITIES)) + "|")
    with threadpool_limits(1, "blas"):
        for name in SOLVED:
            for row in rows(name):
                print(row, flush=True)


if __name__ == "__main__":
    main()
