"""How much cheaper an operating point is than a solve, and how long a corridor takes."""

import statistics
import time
from collections.abc import Callable

from model import evaluate, load_profile, solve_chip
from webapp.services import DEMO_PROFILES, FIRST_PROFILE


def milliseconds(work: Callable[[], object], runs: int) -> float:
    """Median time of one call."""
    work()
    times = []
    for _ in range(runs):
        start = time.perf_counter()
        work()
        times.append(time.perf_counter() - start)
    return 1e3 * statistics.median(times)


def main() -> None:
    """Print both figures for the first demo profile."""
    design = load_profile(DEMO_PROFILES / f"{FIRST_PROFILE}.toml")
    patterns = solve_chip(design.chip)
    solve = milliseconds(lambda: solve_chip(design.chip), 5)
    point = milliseconds(lambda: evaluate(design, patterns).ledger, 200)
    full = milliseconds(lambda: evaluate(design, patterns, points=400).corridor, 100)
    print(f"solving the three fields anew        {solve:9.1f} ms")
    print(
        f"one operating point, every limit     {point:9.3f} ms   {solve / point:.0f} times cheaper"
    )
    print(f"corridor, 400 frequencies, all limits {full:8.3f} ms")


if __name__ == "__main__":
    main()
