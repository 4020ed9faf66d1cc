"""Grid lines that crowd toward electrode edges, their count growing with the log of ratios."""

from collections.abc import Callable

import numpy as np

from model.arrays import Real

#: Length of a cell over its distance from the edge, so that distances grow 2.5-fold.
GROWTH = 1.5


def march(length: float, first: float, limit: Callable[[float], float]) -> Real:
    """Lines from 0 to `length`: the first cell, then cells that grow with the distance from 0.

    Parameters
    ----------
    first
        Length of the first cell.
    limit
        Longest cell allowed at a distance.

    Returns
    -------
    Real
        Increasing distances (n,), both ends included.

    Examples
    --------
    >>> march(20.0, 1.0, lambda distance: 5.0).tolist()
    [0.0, 1.0, 2.5, 6.25, 11.25, 16.25, 20.0]
    """
    lines = [0.0]
    step = min(first, length)
    while lines[-1] + step < length * (1 - 1e-9):
        lines.append(lines[-1] + step)
        step = min(lines[-1] * GROWTH, limit(lines[-1]))
    last = length - lines[-1]
    if len(lines) > 2 and last < 0.5 * (lines[-1] - lines[-2]):
        lines[-1] = 0.5 * (lines[-2] + length)  # share a sliver with its neighbour
    return np.array([*lines, length])


def between(
    start: float,
    end: float,
    first: tuple[float, float],
    limit: Callable[[float], float],
) -> Real:
    """Lines from `start` to `end`, crowding toward both ends.

    `first` are the lengths of the first cells at the two ends; `limit` gives the longest cell at
    a distance from the nearer end.
    """
    half = 0.5 * (end - start)
    left = start + march(half, first[0], limit)
    right = end - march(half, first[1], limit)[::-1]
    return np.concatenate([left[:-1], right])


def split(lines: Real, refinement: int) -> Real:
    """Halve every interval `refinement` times."""
    for _ in range(refinement):
        middles = 0.5 * (lines[1:] + lines[:-1])
        lines = np.sort(np.concatenate([lines, middles]))
    return lines
