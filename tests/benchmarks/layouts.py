"""What a finer mesh costs and gains for each layout, as a table in markdown."""

import time
from collections.abc import Callable, Iterable

import numpy as np
from threadpoolctl import threadpool_limits

from model.fields.patterns import ChipPatterns
from model.fields.solve import solve_chip
from model.layouts import LAYOUTS
from tests.field_maps import SOLVED
from tests.model.test_layouts import EXAMPLES

#: Levels of refinement; the last one, which takes a minute, is what the others are compared with.
LEVELS = (0, 1, 2)
#: Places of which errors are told.
PLACES = 10


def places(patterns: ChipPatterns) -> tuple[np.ndarray, np.ndarray]:
    """Draw places over one period, from a tenth of the height up."""
    rng = np.random.default_rng(1)
    x = rng.uniform(0, patterns.period or patterns.length, PLACES)
    return x, rng.uniform(0.1, 0.9, PLACES) * patterns.height


def square(patterns: ChipPatterns) -> np.ndarray:
    """|Ê|² at the places."""
    return np.sum(np.abs(patterns.electric_field(*places(patterns))) ** 2, axis=0)


def flow(patterns: ChipPatterns) -> np.ndarray:
    """Both flows at the places."""
    return np.array(patterns.electrothermal(*places(patterns)))


#: What is compared, each as a number or an array.
QUANTITIES: dict[str, Callable[[ChipPatterns], object]] = {
    "cell factor": lambda patterns: patterns.cell_factor,
    "E²": square,
    "hottest place": lambda patterns: patterns.peak_temperature,
    "flow": flow,
}


def rows(name: str) -> Iterable[str]:
    """One row for each mesh of the last example of a layout."""
    chip = LAYOUTS[name](**EXAMPLES[name][-1])
    found, seconds = [], []
    for level in LEVELS:
        start = time.process_time()
        found.append(solve_chip(chip, refinement=level))
        seconds.append(time.process_time() - start)
    for level, patterns in zip(LEVELS[:-1], found, strict=False):
        cells = chip.section(level).mesh.nelements
        ratio = seconds[level] / seconds[0]
        yield f"| {name} | {level} | {cells} | {ratio:.1f} | {_errors(patterns, found[-1])} |"


def _errors(patterns: ChipPatterns, finest: ChipPatterns) -> str:
    """Greatest errors as shares of the largest value."""
    shown = []
    for quantity in QUANTITIES.values():
        value, exact = np.asarray(quantity(patterns)), np.asarray(quantity(finest))
        shown.append(f"{np.abs(value - exact).max() / np.abs(exact).max():.0e}")
    return " | ".join(shown)


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
