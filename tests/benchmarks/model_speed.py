"""How much cheaper an operating point is than a solve, and how long a corridor takes."""

import statistics
import time
from collections.abc import Callable

from model import Evaluation, evaluate, load_profile, solve_chip
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
    """Print all figures for the first demo profile."""
    design = load_profile(DEMO_PROFILES / f"{FIRST_PROFILE}.toml")
    patterns = solve_chip(design.chip)
    solve = milliseconds(lambda: solve_chip(design.chip), 5)
    scaled = milliseconds(lambda: _scaled(evaluate(design, patterns)), 200)
    point = milliseconds(lambda: evaluate(design, patterns).ledger, 200)
    full = milliseconds(lambda: evaluate(design, patterns, points=400).corridor, 100)
    rows = (
        ("solving the three fields anew", solve),
        ("force, heat and flow of one operating point", scaled),
        ("one operating point with every limit, alone", point),
        ("one operating point with every limit, of 400 at once", full / 400),
    )
    for name, time_taken in rows:
        print(f"{name:54} {time_taken:9.4f} ms   1/{solve / time_taken:.0f}")
    print(f"{'corridor, 400 frequencies, every limit':54} {full:9.4f} ms")


def _scaled(result: Evaluation) -> tuple[float, ...]:
    """What the three fields give at the operating point, from their patterns."""
    return (
        result.temperature_rise,
        result.electrothermal_speed,
        result.dielectrophoretic_speed,
        float(result.point.force_along_flow(result.design.particles[0])[0]),
    )


if __name__ == "__main__":
    main()
