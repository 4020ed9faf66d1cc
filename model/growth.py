"""A quantity that drives itself on, or holds itself back: closed forms and their inverses.

The first-order value x leaves out that the quantity changes its own cause; the second order is
x + growth·x². Where that is positive the value is taken as x/(1 − growth·x), which has the
same second order, is exact for x = value/(1 + growth·value) (a cause that grows in proportion, as
the heat of a uniform warm conductor at a held voltage), and has no steady value from growth·x = 1
on. Where it is negative x = value·(1 − growth·value), exact for a cause that shrinks as
1/(1 + |growth|·value), as the heat of such a conductor at a held current.
"""

import numpy as np
from numpy.typing import ArrayLike

from model.arrays import Real


def self_consistent(first_order: ArrayLike, growth: ArrayLike) -> Real:
    """Value from its first order, not negative; infinite where there is no steady one.

    `growth` is in one over the value's unit; both broadcast.

    >>> [round(float(self_consistent(2.0, growth)), 6) for growth in (0.0, 0.25, 0.5, -0.5)]
    [2.0, 4.0, inf, 1.236068]
    """
    x, rate = np.asarray(first_order, dtype=float), np.asarray(growth, dtype=float)
    with np.errstate(divide="ignore", invalid="ignore"):
        driven = rate * x
        rising = x / (1.0 - driven)
        held = 2.0 * x / (1.0 + np.sqrt(1.0 + 4.0 * np.maximum(-driven, 0.0)))
    return np.select([np.isinf(x) | (driven >= 1.0), driven > 0.0], [np.inf, rising], held)


def first_order(value: ArrayLike, growth: ArrayLike) -> Real:
    """First order that leads to a value: the inverse of :func:`self_consistent`.

    >>> [float(first_order(4.0, growth)) for growth in (0.0, 0.25, -0.25)]
    [4.0, 2.0, 8.0]
    """
    final = np.asarray(value, dtype=float)
    fed = np.asarray(growth, dtype=float) * final
    return np.asarray(final * (1.0 + np.maximum(-fed, 0.0)) / (1.0 + np.maximum(fed, 0.0)))
