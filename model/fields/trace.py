"""Functions of the electrode unknowns along the electrodes."""

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.polynomial import legendre

from model.arrays import Real
from model.fields.assembly import Space
from model.fields.cells import Index
from model.fields.sides import GAUSS, side_values
from model.fields.stored import Stored


@dataclass(frozen=True, eq=False, repr=False)
class Trace(Stored):
    """Functions and their slopes at the Gauss points of all facets of all electrodes.

    Parameters
    ----------
    places
        (2, q), m; facet by facet, electrode by electrode.
    weights
        Length that each place stands for, (q,), m.
    values, slopes
        Of each function, (q, m); slopes are ∂/∂x along the electrode.
    """

    places: Real
    weights: Real
    values: Real
    slopes: Real

    def of(self, combinations: Real) -> "Trace":
        """The same of combinations (m, n) of the functions."""
        return replace(self, values=self.values @ combinations, slopes=self.slopes @ combinations)


def trace(functions: Space, electrodes: Sequence[str], number: Index, size: int) -> Trace:
    """Trace of the functions of numbered unknowns; no place at all unless all lie along x.

    `number` (n_unknown,) gives the number of each unknown among `size`, or −1.
    """
    steps, weights = GAUSS
    degree = steps.size - 1
    basis = legendre.legvander(2.0 * steps - 1.0, degree)
    steep = 2.0 * legendre.legval(2.0 * steps - 1.0, legendre.legder(np.eye(degree + 1))).T
    differences = steep @ np.linalg.inv(basis)  # exact for the polynomials of a facet
    places, lengths, values, slopes = [], [], [], []
    for name in electrodes:
        spots, table = side_table(functions, name, (number, size), steps)
        run = (spots[:, :, -1] - spots[:, :, 0]) / (steps[-1] - steps[0])  # (2, facet), signed
        if np.any(np.abs(run[1]) > 1e-9 * np.abs(run[0])):
            return Trace(np.zeros((2, 0)), np.zeros(0), np.zeros((0, size)), np.zeros((0, size)))
        places.append(spots.reshape(2, -1))
        lengths.append((np.abs(run[0])[:, None] * weights).ravel())
        values.append(table.reshape(-1, size))
        slopes.append((differences @ table / run[0][:, None, None]).reshape(-1, size))
    return Trace(
        np.concatenate(places, axis=1),
        np.concatenate(lengths),
        np.concatenate(values),
        np.concatenate(slopes),
    )


def side_table(
    functions: Space, name: str, unknowns: tuple[Index, int], steps: Real
) -> tuple[Real, Real]:
    """Places (2, n, n_step) on the facets of a side, and values there, (n, n_step, size)."""
    number, size = unknowns
    spots, dofs, values = side_values(functions, name, steps)
    table = np.zeros((*spots.shape[1:], size))
    for facet, (own, local) in enumerate(zip(number[dofs.T], values, strict=True)):
        at = own >= 0
        table[facet][:, own[at]] = local[at].T
    return spots, table
