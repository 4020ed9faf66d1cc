"""Chip solves, cached on disk (or wherever flask-caching is pointed) and computed once.

The caching library has no guard against many callers computing one missing entry together, so a
file lock stands in front: one solver at a time per chip, across threads and processes; the others
wait and then find the entry.
"""

import hashlib
import json
import logging
import os
import threading
from collections.abc import Callable
from pathlib import Path

from filelock import FileLock
from flask_caching import Cache
from threadpoolctl import threadpool_limits

import model
from model.design import Design
from model.fields.patterns import ChipPatterns
from model.fields.solve import solve_chip
from model.files import Files, no_files
from model.profile import part_document
from model.version import VERSION

#: Solved chips are kept this long, seconds.
KEPT = 30 * 24 * 3600
Solver = Callable[[Design], ChipPatterns]


def default_folder() -> Path:
    """Private cache folder of this user: entries are pickles, so nobody else may write there.

    ``SLACKWATER_CACHE`` names another folder.
    """
    named = os.environ.get("SLACKWATER_CACHE")
    folder = Path(named) if named else Path.home() / ".cache" / "slackwater"
    folder.mkdir(mode=0o700, parents=True, exist_ok=True)
    return folder


def settings(folder: Path, most: int = 500) -> dict[str, object]:
    """flask-caching settings for a folder on disk.

    Entries have a folder of their own, as the cache takes every file there for one of them.
    """
    entries = folder / "chips"
    return {"CACHE_TYPE": "FileSystemCache", "CACHE_DIR": str(entries), "CACHE_THRESHOLD": most}


def solve(design: Design, files: Files = no_files) -> ChipPatterns:
    """Solve the chip of a design, with the files that it names.

    On one thread: the linear algebra gains nothing from a second, and threads that wait for one
    another on a busy machine made a solve of half a second take five.
    """
    with threadpool_limits(1, "blas"):
        return solve_chip(design.chip, design.liquid.heat_conductivity, files=files)


class ChipCache:
    """Gives the patterns of a design's chip, solving each chip once however many ask."""

    def __init__(self, cache: Cache, folder: Path, solver: Solver = solve) -> None:
        self._cache, self._solver = cache, solver
        self._near: dict[str, ChipPatterns] = {}
        self._guard = threading.Lock()
        self._locks = folder / "locks"
        self._locks.mkdir(mode=0o700, parents=True, exist_ok=True)

    def patterns(self, design: Design) -> ChipPatterns:
        """Patterns from memory, from the cache, or from a solve."""
        key = chip_key(design)
        found = self._near.get(key)
        if found is None:
            found = self._far(key, design)
            with self._guard:
                if len(self._near) >= _NEAR:
                    self._near.pop(next(iter(self._near)))
                self._near[key] = found
        return found

    def _far(self, key: str, design: Design) -> ChipPatterns:
        found = self._kept(key)
        if found is None:
            with FileLock(self._locks / f"{key}.lock"):
                found = self._kept(key)
                if found is None:
                    found = self._solver(design)
                    self._cache.set(key, found, timeout=KEPT)
        return found

    def _kept(self, key: str) -> ChipPatterns | None:
        """Entry of the cache; None if there is none, or none that can be read."""
        try:
            found = self._cache.get(key)
        except Exception:  # a damaged entry can fail in any way while it is unpacked
            logging.getLogger(__name__).warning("a damaged entry is solved anew: %s", key)
            return None
        return found if isinstance(found, ChipPatterns) else None


#: Chips kept in memory per process, the one longest there going first.
_NEAR = 32


def _solver_digest() -> str:
    """Digest of the model's code, so that changed code never meets old entries."""
    digest = hashlib.sha256()
    for path in sorted(Path(model.__path__[0]).rglob("*.py")):
        digest.update(path.read_bytes())
    return digest.hexdigest()


_SOLVER = _solver_digest()


def chip_key(design: Design) -> str:
    """Key of a chip solve: everything that it depends on and the code that makes it, hashed."""
    parts = [VERSION, _SOLVER, part_document(design.chip), design.liquid.heat_conductivity]
    return hashlib.sha256(json.dumps(parts, sort_keys=True).encode()).hexdigest()
