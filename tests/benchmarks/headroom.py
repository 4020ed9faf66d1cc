"""The headroom map of every limit at once against a plain loop over ``evaluate``."""

import time

import numpy as np

from model import evaluate, load_profile, solve_chip
from model.headroom import headroom_map
from model.profile import document, parse_design
from tests.benchmarks.model_speed import milliseconds
from webapp.services import DEMO_PROFILES, FIRST_PROFILE

COLUMNS, ROWS = 120, 80
#: Points of the loop; its time is told for all of the map.
LOOPED = 150


def main() -> None:
    """Print both times and their ratio, with four particles to be collected that must live."""
    data = document(load_profile(DEMO_PROFILES / f"{FIRST_PROFILE}.toml"))
    first = data["particle"][0]
    data["particle"] = [
        {**first, "name": f"yeast {k}", "radius": f"{3.5 + 0.3 * k} um"} for k in range(4)
    ]
    design = parse_design(data)
    patterns = solve_chip(design.chip)
    frequency, conductivity = np.geomspace(1e3, 1e8, COLUMNS), np.geomspace(1e-3, 2.0, ROWS)
    whole = milliseconds(lambda: headroom_map(design, patterns, frequency, conductivity), 20)
    draw = np.random.default_rng(1)
    start = time.perf_counter()
    for one, sigma in zip(
        draw.choice(frequency, LOOPED), draw.choice(conductivity, LOOPED), strict=True
    ):
        drive = design.drive.model_copy(update={"frequency": one})
        liquid = design.liquid.model_copy(update={"conductivity": sigma})
        there = design.model_copy(update={"drive": drive, "liquid": liquid})
        assert evaluate(there, patterns).binding.headroom >= 0.0
    loop = 1e3 * (time.perf_counter() - start) / LOOPED * COLUMNS * ROWS
    rules = len(evaluate(design, patterns).ledger)
    print(f"headroom map {COLUMNS} × {ROWS}, {rules} rules, 4 particles: {whole:.1f} ms")
    print(f"loop over evaluate: {loop:.0f} ms, {loop / whole:.0f} times as long")


if __name__ == "__main__":
    main()
