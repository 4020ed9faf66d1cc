"""Integrals along named sides of a mesh."""

from collections.abc import Callable

import numpy as np

from model.arrays import Real
from model.fields.assembly import Space
from model.fields.cells import Index

#: Ends of each side of the reference triangle and square, as scikit-fem numbers them.
_ENDS = {
    3: (((0, 0), (1, 0)), ((1, 0), (0, 1)), ((0, 0), (0, 1))),
    4: (((0, 0), (1, 0)), ((1, 0), (1, 1)), ((0, 1), (1, 1)), ((0, 0), (0, 1))),
}

#: Number of the corner at each reference place (0 or 1, 0 or 1).
_CORNERS = {3: np.array([[0, 2], [1, 1]]), 4: np.array([[0, 3], [1, 2]])}


def _gauss() -> tuple[Real, Real]:
    points, weights = np.polynomial.legendre.leggauss(10)
    return 0.5 + 0.5 * points, 0.5 * weights


#: Points and weights on 0…1, exact for the square of any degree in use.
GAUSS = _gauss()


def side_masses(functions: Space, name: str) -> tuple[Index, Real]:
    """Cells (n,) at a named side, and their matrices (n, n_local, n_local) of ∫ u v along it."""
    cells, sides, lengths = _sides(functions, name)
    steps, weights = GAUSS
    traces = _traces(functions, steps)
    reference = traces @ (traces * weights).transpose(0, 2, 1)
    return cells, reference[sides] * lengths[:, None, None]


def project_on_side(functions: Space, name: str, law: Callable[[Real], Real], axis: int) -> Real:
    """Coefficients (n_unknown,) closest to one component of `law` on a named side, 0 elsewhere.

    `law` takes places (2, n) in m and gives vectors (2, n); `axis` picks the component.
    """
    cells, sides, _ = _sides(functions, name)
    places = _places(functions, cells, sides, GAUSS[0])
    values = np.stack([law(places[:, row])[axis] for row in range(cells.size)])
    return np.asarray(fit_on_side(functions, name, values[None])[0])


def fit_on_side(functions: Space, name: str, values: Real, still: Index | None = None) -> Real:
    """Coefficients (f, n_unknown) closest to functions on a named side, 0 elsewhere.

    `values` (f, n, n_step) stand at the :data:`GAUSS` points of each facet, in the order of
    `side_values`. Unknowns among `still` stay 0.
    """
    cells, sides, lengths = _sides(functions, name)
    own = functions.on(name)
    own = own if still is None else np.setdiff1d(own, still)
    place = np.full(functions.size, -1)
    place[own] = np.arange(own.size)
    system, right = np.zeros((own.size, own.size)), np.zeros((own.size, len(values)))
    _, masses = side_masses(functions, name)
    traces = _traces(functions, GAUSS[0])[sides] * (lengths[:, None] * GAUSS[1])[:, None]
    for row, cell in enumerate(cells):
        parts = traces[row] @ values[:, row].T
        local = place[functions.dofs[:, cell]]
        at = local >= 0
        system[np.ix_(local[at], local[at])] += masses[row][np.ix_(at, at)]
        right[local[at]] += parts[at]
    solution = np.zeros((len(values), functions.size))
    solution[:, own] = np.linalg.solve(system, right).T
    return solution


def side_values(functions: Space, name: str, steps: Real) -> tuple[Real, Index, Real]:
    """Local functions at `steps` (0…1) of each facet of a named side.

    Returns
    -------
    places, dofs, values
        Places (2, n, n_step), m; unknowns (n_local, n); values (n, n_local, n_step).
    """
    cells, sides, _ = _sides(functions, name)
    values = _traces(functions, steps)[sides]
    return _places(functions, cells, sides, steps), functions.dofs[:, cells], values


def _sides(functions: Space, name: str) -> tuple[Index, Index, Real]:
    """Cell, local number and length of each facet of a named side."""
    mesh = functions.mesh
    facets = mesh.boundaries[name]
    cells = mesh.f2t[0, facets]
    sides = (mesh.t2f[:, cells] == facets).argmax(axis=0)
    ends = mesh.p[:, mesh.facets[:, facets]]
    return cells, sides, np.hypot(*(ends[:, 1] - ends[:, 0]))


def _traces(functions: Space, steps: Real) -> Real:
    """Local functions at `steps` along each reference side, (n_side, n_local, n_step)."""
    ends = np.array(_ENDS[functions.mesh.t.shape[0]])  # (side, end, reference coordinate)
    places = ends[:, 0].T[:, :, None] * (1 - steps) + ends[:, 1].T[:, :, None] * steps
    flat = places.reshape(2, -1)  # all sides in one go: each call costs more than its points
    parts = [functions.element.lbasis(flat, i)[0] for i in range(len(functions.dofs))]
    tables = np.stack([np.broadcast_to(part, flat.shape[1:]) for part in parts])
    return tables.reshape(len(parts), *places.shape[1:]).transpose(1, 0, 2)


def _places(functions: Space, cells: Index, sides: Index, steps: Real) -> Real:
    """Places at `steps` along the given sides of the given cells, (2, n, n_step)."""
    corners = functions.mesh.p[:, functions.mesh.t[:, cells]]  # (2, corner, n)
    rows = np.arange(cells.size)
    ends = np.array(_ENDS[len(corners[0])])[sides]  # (n, end, reference coordinate)
    numbers = _CORNERS[len(corners[0])]
    start, end = (
        corners[:, numbers[ends[:, which, 0], ends[:, which, 1]], rows] for which in (0, 1)
    )
    return np.asarray(start[:, :, None] + (end - start)[:, :, None] * steps)
