"""Finite-element spaces and cell matrices that the three solves share."""

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from skfem import (
    Element,
    ElementQuad1,
    ElementQuad2,
    ElementQuadP,
    ElementTriP1,
    ElementTriP2,
    ElementTriP3,
    ElementTriP4,
    Mesh,
)
from skfem.assembly import Dofs
from skfem.quadrature import get_quadrature

from model.arrays import Real
from model.fields.cells import Index

_TRIANGLES = {1: ElementTriP1, 2: ElementTriP2, 3: ElementTriP3, 4: ElementTriP4}
_QUADS = {1: ElementQuad1, 2: ElementQuad2}


def element(mesh: Mesh, degree: int) -> Element:
    """Continuous element of the cells of `mesh`."""
    if mesh.t.shape[0] == 3:
        return _TRIANGLES[degree]()
    return _QUADS[degree]() if degree in _QUADS else ElementQuadP(degree)


@dataclass(frozen=True, eq=False)
class Space:
    """Continuous functions on a mesh, with two sides joined if the mesh repeats.

    Parameters
    ----------
    mesh, element, table
        scikit-fem mesh, element and numbering of unknowns.
    degree
        Of the polynomials.
    dofs
        Unknown of each local function of each cell, (n_local, n_cell); joined ones coincide.
    points, weights
        Quadrature points (2, n_cell, n_point), m, and weights (n_cell, n_point), m².
    values
        Local functions at the points of any cell, (n_local, n_point).
    steep
        Their gradients by the reference coordinates, (n_local, 2, n_point).
    inverse
        ∂(reference)/∂(x, y) at the points, (2, 2, n_cell, n_point), 1/m.
    joined
        Names of the two sides that are one and the same.
    same
        Representative of each unknown (size,), itself unless joined to another.
    """

    mesh: Mesh
    element: Element
    table: Dofs
    degree: int
    dofs: Index
    points: Real
    weights: Real
    values: Real
    steep: Real
    inverse: Real
    joined: tuple[str, str] | None
    same: Index

    @property
    def size(self) -> int:
        """Number of unknowns, joined or not."""
        return int(self.table.N)

    @property
    def inner(self) -> int:
        """How many of the last local functions vanish on the sides of their cell."""
        return int(self.element.interior_dofs)

    def on(self, *names: str) -> Index:
        """Unknowns on named sides."""
        sides = [self.mesh.boundaries[name] for name in names]
        return self.on_facets(np.concatenate([*sides, np.array([], dtype=int)]))

    def on_facets(self, facets: Index) -> Index:
        """Unknowns on sides given by their numbers."""
        found = self.table.nodal_dofs[:, self.mesh.facets[:, facets].ravel()].ravel()
        if self.element.facet_dofs:
            found = np.concatenate([found, self.table.facet_dofs[:, facets].ravel()])
        return np.unique(self.same[found])

    def at_points(self, solution: Real) -> Real:
        """Values at the quadrature points, (n_cell, n_point)."""
        return np.asarray(solution[self.dofs].T @ self.values)

    def gradients(self, solution: Real) -> Real:
        """Gradient at the quadrature points, (2, n_cell, n_point)."""
        local = solution[self.dofs].T @ self.steep.reshape(len(self.steep), -1)
        steep = local.reshape(local.shape[0], 2, -1).transpose(1, 0, 2)  # (reference axis, …)
        return np.asarray((self.inverse * steep[:, None]).sum(axis=0))

    @cached_property
    def slopes(self) -> Real:
        """Gradients of the local functions in each cell, (n_cell, n_local, 2, n_point), 1/m."""
        return np.stack(
            [
                self.inverse[0, axis][:, None] * self.steep[:, 0]
                + self.inverse[1, axis][:, None] * self.steep[:, 1]
                for axis in (0, 1)
            ],
            axis=2,
        )

    @cached_property
    def straight(self) -> bool:
        """Whether every cell is a triangle or parallelogram, so that `inverse` is one per cell."""
        largest = np.abs(self.inverse).max(axis=(0, 1, 3), keepdims=True)
        return bool(np.all(np.abs(self.inverse - self.inverse[..., :1]) <= 1e-12 * largest))

    def constant(self) -> Real:
        """Coefficients of the function that is 1 everywhere."""
        if not isinstance(self.element, ElementQuadP):
            return np.ones(self.size)
        ones = np.zeros(self.size)
        ones[self.table.nodal_dofs.ravel()] = 1.0  # the higher functions are bubbles
        return ones


def space(
    mesh: Mesh,
    degree: int,
    order: int,
    joined: tuple[str, str] | None = None,
) -> Space:
    """Functions of `degree` on `mesh`, integrated exactly up to polynomials of `order`.

    Triangles go up to degree 4, whatever is asked for.

    Raises
    ------
    ValueError
        If the joined sides do not match node by node.
    """
    degree = min(degree, 4) if mesh.t.shape[0] == 3 else degree
    kind = element(mesh, degree)
    table = Dofs(mesh, kind)
    same = np.arange(table.N) if joined is None else _join(mesh, table, joined)
    dofs = same[table.element_dofs]
    places, weights = get_quadrature(mesh.refdom, order)
    mapping = mesh.mapping()
    inverse = mapping.invDF(places)
    local = [kind.lbasis(places, i) for i in range(len(dofs))]
    return Space(
        mesh,
        kind,
        table,
        degree,
        dofs,
        mapping.F(places),
        np.abs(mapping.detDF(places)) * weights,
        np.stack([np.broadcast_to(value, weights.shape) for value, _ in local]),
        np.stack([slope for _, slope in local]),
        inverse,
        joined,
        same,
    )


def _join(mesh: Mesh, table: Dofs, joined: tuple[str, str]) -> Index:
    """Give each unknown its representative, once the two sides are one."""
    facets = [_upward(mesh, mesh.boundaries[name]) for name in joined]
    ends = [mesh.facets[:, sides] for sides in facets]
    heights = [mesh.p[1, pair] for pair in ends]
    span = np.ptp(mesh.p[1])
    if heights[0].shape != heights[1].shape or np.any(
        np.abs(heights[0] - heights[1]) > 1e-9 * span
    ):
        raise ValueError("the two joined sides do not match")
    same = np.arange(table.N)
    same[table.nodal_dofs[:, ends[1]].ravel()] = table.nodal_dofs[:, ends[0]].ravel()
    if table.element.facet_dofs:
        same[table.facet_dofs[:, facets[1]].ravel()] = table.facet_dofs[:, facets[0]].ravel()
    return same


def _upward(mesh: Mesh, facets: Index) -> Index:
    return facets[np.argsort(mesh.p[1, mesh.facets[:, facets]].mean(axis=0))]


def stiffness(functions: Space, coefficient: Real | None = None) -> Real:
    """Cell matrices of ∫ c ∇u·∇v, (n_cell, n_local, n_local); c one per cell, 1 if None."""
    weights = functions.weights
    if coefficient is not None:
        weights = weights * coefficient[:, None]
    if functions.straight:
        return _straight_stiffness(functions, weights)
    slopes = functions.slopes
    flat = slopes.reshape(slopes.shape[0], slopes.shape[1], -1)
    weighted = (slopes * weights[:, None, None, :]).reshape(flat.shape)
    return flat @ weighted.transpose(0, 2, 1)


def _straight_stiffness(functions: Space, weights: Real) -> Real:
    """Cell matrices as sums of four of the reference cell, each times a number of the cell."""
    steep, inverse = functions.steep, functions.inverse[..., 0]
    share = functions.weights[0] / functions.weights[0].sum()  # of each point, in any cell
    first, second = (steep * share).transpose(1, 0, 2), steep.transpose(1, 2, 0)
    reference = first[:, None] @ second  # (reference axis, reference axis, i, j)
    metric = np.einsum("ack,bck,k->kab", inverse, inverse, weights.sum(axis=1))
    blocks = metric.reshape(-1, 4) @ reference.reshape(4, -1)
    return np.asarray(blocks.reshape(-1, len(steep), len(steep)))


def mass(functions: Space, coefficient: float) -> Real:
    """Cell matrices of ∫ c u v, (n_cell, n_local, n_local)."""
    weighted = functions.values * (coefficient * functions.weights)[:, None, :]
    return np.asarray(weighted @ functions.values.T)


def load(functions: Space, density: Real) -> Real:
    """Vector of ∫ f v, `density` f at the quadrature points, (n_cell, n_point)."""
    parts = functions.values @ (density * functions.weights).T  # (i, cell)
    return gather(functions.dofs, parts, functions.size)


def flux_load(functions: Space, flux: Real) -> Real:
    """Vector of ∫ g·∇v, `flux` g at the quadrature points, (2, n_cell, n_point)."""
    local = np.einsum("rckq,ckq->krq", functions.inverse, flux * functions.weights)
    parts = functions.steep.reshape(len(functions.steep), -1) @ local.reshape(len(local), -1).T
    return gather(functions.dofs, parts, functions.size)


def gather(dofs: Index, parts: Real, size: int) -> Real:
    """Sum parts of cells (n_local, n_cell) into a vector (size,)."""
    vector: Real = np.bincount(dofs.ravel(), weights=parts.ravel(), minlength=size).astype(float)
    return vector
