"""The chip cache: one solve for each chip, whoever asks, and no entry that can do harm."""

import logging
import pickle
import threading
import time
from concurrent.futures import ThreadPoolExecutor

import pytest
from flask import Flask
from flask_caching import Cache

from webapp.cache import ChipCache, chip_key, settings


class Solver:
    """Gives ready patterns after a while, and counts how often it was asked."""

    def __init__(self, patterns):
        self.patterns, self.count, self._guard = patterns, 0, threading.Lock()

    def __call__(self, design):
        """Take any design's chip for solved."""
        with self._guard:
            self.count += 1
        time.sleep(0.1)  # long enough for all callers to arrive meanwhile
        return self.patterns


@pytest.fixture
def solver(patterns):
    return Solver(patterns)


@pytest.fixture
def make(tmp_path, solver):
    """Make a cache as another process would have it, on one shared folder."""
    return lambda: ChipCache(Cache(Flask("t"), config=settings(tmp_path)), tmp_path, solver)


def entries(folder):
    return [path for path in (folder / "chips").iterdir() if path.stat().st_size > 1000]


def ask_together(caches, design):
    barrier = threading.Barrier(8)

    def ask(index):
        barrier.wait()
        return caches[index % len(caches)].patterns(design)

    with ThreadPoolExecutor(8) as pool:
        return list(pool.map(ask, range(8)))


def test_eight_callers_cause_one_solve(make, solver, yeast, patterns):
    found = ask_together([make()], yeast)
    assert solver.count == 1
    assert all(item.chip == patterns.chip for item in found)


def test_two_processes_cause_one_solve(make, solver, yeast):
    ask_together([make(), make()], yeast)
    assert solver.count == 1
    make().patterns(yeast)
    assert solver.count == 1


def test_what_is_kept_is_what_was_solved(make, yeast, patterns):
    make().patterns(yeast)
    again = make().patterns(yeast)
    assert again is not patterns
    assert again.chip == patterns.chip
    assert again.peak_temperature == patterns.peak_temperature
    line, kept = patterns.line(10e-6), again.line(10e-6)
    assert (line.field == kept.field).all()


SAME = {
    "drive.voltage": "3 V",
    "drive.frequency": "3 MHz",
    "liquid.conductivity": "3 mS/m",
    "liquid.temperature": "30 degC",
    "flow.rate": "1 uL/min",
    "particle.0.radius": "4.1 um",
    "limits.temperature_rise": "3 K",
    "title": "Other",
    "task.working_height": "12 um",
}
OTHER = {
    "chip.gap": "61 um",
    "chip.bar_count": 61,
    "chip.channel_height": "101 um",
    "chip.floor.material": "silicon",
    "chip.lid.outside": "held",
    "chip.lid.thermal_conductivity": "0.2 W/m/K",
    "liquid.thermal_conductivity": "0.5 W/m/K",
}


def test_only_the_chip_makes_a_new_solve(make, solver, yeast, vary):
    cache = make()
    cache.patterns(yeast)
    for path, value in SAME.items():
        cache.patterns(vary(yeast, {path: value}))
    assert solver.count == 1
    for count, (path, value) in enumerate(OTHER.items(), start=2):
        cache.patterns(vary(yeast, {path: value}))
        assert solver.count == count, path


def test_keys_differ_and_are_plain_file_names(yeast, vary):
    keys = {chip_key(vary(yeast, {path: value})) for path, value in OTHER.items()}
    assert len(keys | {chip_key(yeast)}) == len(OTHER) + 1
    assert all(key.isalnum() for key in keys)
    assert chip_key(vary(yeast, SAME)) == chip_key(yeast)


def truncated(content):
    return content[: len(content) // 2]


def foreign(content):
    return content[:4] + pickle.dumps({"no": "patterns"})


def gone(content):
    return content[:4] + b"cno_such_module\nThing\n."


def other_call(content):
    return content[:4] + b"\x80\x04}\x94\x8c\x01a\x94K\x01R."


@pytest.mark.parametrize(
    "damage",
    [truncated, foreign, gone, other_call, lambda content: b"", lambda content: content[:4],
     lambda content: b"\xff" * 400],
)  # fmt: skip
def test_a_damaged_entry_is_solved_anew(make, solver, yeast, patterns, tmp_path, caplog, damage):
    make().patterns(yeast)
    (entry,) = entries(tmp_path)
    entry.write_bytes(damage(entry.read_bytes()))
    with caplog.at_level(logging.CRITICAL):
        assert make().patterns(yeast).chip == patterns.chip
    assert solver.count == 2
    make().patterns(yeast)
    assert solver.count == 2  # and the new one is kept


def test_a_failing_solve_leaves_no_entry_and_no_lock(make, solver, yeast, tmp_path, patterns):
    cache = make()
    cache._solver = None
    with pytest.raises(TypeError):
        cache.patterns(yeast)
    assert entries(tmp_path) == []
    assert make().patterns(yeast) is patterns


def test_many_chips_do_not_fill_the_memory(make, yeast, vary):
    cache = make()
    cache._solver = lambda design: cache_filling
    cache_filling = make().patterns(yeast)
    for count in range(2, 60):
        cache.patterns(vary(yeast, {"chip.bar_count": count}))
    assert len(cache._near) <= 32


def test_locks_are_no_entries(make, yeast, tmp_path):
    make().patterns(yeast)
    assert len(entries(tmp_path)) == 1
    assert not list((tmp_path / "chips").glob("*.lock"))
