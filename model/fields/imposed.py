"""A field that is given instead of solved for: the nearest curl-free field on a mesh."""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from skfem import Mesh

from model.arrays import Phasor, Real, components
from model.fields.assembly import Space, flux_load, space, stiffness
from model.fields.condensed import CellSystem, factorise
from model.fields.electric import Potential
from model.fields.field_points import Sampled

#: Polynomial degree of φ and quadrature order of the projection.
DEGREE, ORDER = 5, 12
#: Points of the map along each side of a cell: with the degree, as many unknowns as half the
#: numbers given, so that noise is smoothed and no detail invented.
POINTS_PER_CELL = 4
#: Most cells; of denser maps each then averages more points.
MOST_CELLS = 1200
#: Fewest cells along each axis.
FEWEST_CELLS = 3


@dataclass(frozen=True, eq=False)
class Imposed:
    """A field as the gradient of potentials, one for each component of the drive.

    Parameters
    ----------
    functions
        On the mesh of the liquid.
    potentials
        φ per volt and ∫|∇φ|² of each component.
    harmonic
        Whether the field is the same all along the third axis, so that ∇²φ = 0 in the section.
    mismatch
        ∫|Ê + ∇φ|²/∫|Ê|² of the field that was given: what no potential has.
    """

    functions: Space
    potentials: tuple[Potential, ...]
    harmonic: bool
    mismatch: float


def impose(mesh: Mesh, field: Callable[[Real, Real], Phasor], *, harmonic: bool) -> Imposed:
    """Find φ with ∫∇φ·∇v = −∫Ê·∇v for all v: of all gradients the one nearest to the field.

    Parameters
    ----------
    mesh
        Of the liquid in the window of the map.
    field
        Ê (2, n), 1/m, real or complex, at places x and y (n,).
    """
    functions = space(mesh, DEGREE, ORDER)
    x, y = functions.points.reshape(2, -1)
    fields = components(field(x, y)).reshape(-1, *functions.points.shape)
    system = CellSystem(stiffness(functions), functions.dofs, functions.inner, functions.size)
    factor = factorise(system, functions.dofs[:1, 0])  # φ has no level of its own
    potentials, missed = [], 0.0
    for part in fields:
        found = factor.solve(flux_load(functions, -part), np.zeros(functions.size))
        energy = float(found @ system.apply(found))
        potentials.append(Potential(functions, found, energy, factor, held=False))
        missed += _energy(functions, part + functions.gradients(found))
    total = sum(_energy(functions, part) for part in fields)
    return Imposed(functions, tuple(potentials), harmonic, missed / total if total else 0.0)


def _energy(functions: Space, field: Real) -> float:
    return float((field**2).sum(axis=0).ravel() @ functions.weights.ravel())


def cell_lines(source: Sampled, window: tuple[float, float, float, float]) -> tuple[Real, Real]:
    """Columns and rows of cells over a window, as dense as the points of a map are there."""
    wanted = np.array(source.counts(window)) / POINTS_PER_CELL
    wanted = wanted * min(1.0, np.sqrt(MOST_CELLS / wanted.prod()))
    cells = np.maximum(np.round(wanted).astype(int), FEWEST_CELLS)
    columns, rows = (
        _spread(source.quantiles(k), window[2 * k], window[2 * k + 1], int(cells[k]))
        for k in (0, 1)
    )
    return columns, rows


def _spread(values: Real, low: float, high: float, cells: int) -> Real:
    """Lines from `low` to `high`, half even and half with equal shares of the values between."""
    inside = values[(values > low) & (values < high)]
    places = np.concatenate([[low], inside, [high]])
    even = (places - low) / (high - low)
    share = 0.5 * even + 0.5 * np.linspace(0.0, 1.0, places.size)
    lines = np.interp(np.linspace(0.0, 1.0, cells + 1), share, places)
    lines[[0, -1]] = low, high
    return np.asarray(lines)
