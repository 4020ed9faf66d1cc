"""Direct solve of cell matrices, each cell's inner unknowns eliminated on the spot."""

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from scipy.sparse import csc_matrix, csr_matrix
from scipy.sparse.linalg import SuperLU, splu

from model.arrays import Real
from model.fields.cells import Index

#: Right-hand sides solved at once; more do not fit the processor's cache.
_SIDES = 32


@dataclass(frozen=True, eq=False)
class CellSystem:
    """A symmetric system as the sum of cell matrices.

    Parameters
    ----------
    blocks
        Cell matrices (n_cell, n_local, n_local).
    dofs
        Unknown of each row, (n_local, n_cell).
    inner
        How many of the last local rows have unknowns that belong to one cell alone.
    size
        Number of unknowns.
    """

    blocks: Real
    dofs: Index
    inner: int
    size: int

    def apply(self, vectors: Real) -> Real:
        """Product with a vector (size,) or some side by side (size, n)."""
        local = _times(self.blocks, vectors[self.dofs])
        return np.asarray(self._sums[0] @ local.reshape(self.dofs.size, *vectors.shape[1:]))

    def sum_outer(self, parts: Real) -> Real:
        """Sum what the cells have on their shared rows (n_outer, n_cell, …) by unknowns."""
        rows = parts.shape[0] * parts.shape[1]
        return np.asarray(self._sums[1] @ parts.reshape(rows, *parts.shape[2:]))

    @cached_property
    def _sums(self) -> tuple[csr_matrix, csr_matrix]:
        """Matrices that sum parts of cells by unknowns: all local rows, and the shared ones."""
        every = self.dofs.ravel()
        shared = self.dofs[: len(self.dofs) - self.inner].ravel()
        first, second = (
            csr_matrix((np.ones(own.size), (own, np.arange(own.size))), (self.size, own.size))
            for own in (every, shared)
        )
        return first, second


@dataclass(frozen=True, eq=False)
class Factor:
    """A factorised :class:`CellSystem` with some unknowns held."""

    system: CellSystem
    free: Index
    inverse: Real
    extension: Real
    condensed: Real
    factor: SuperLU

    def solve(self, vectors: Real, held: Real) -> Real:
        """Solution whose held unknowns are those of `held`, the others 0 there.

        `vectors` is the right-hand side; both are (size,), or some side by side (size, n). One
        step of iterative refinement follows.
        """
        solution = held.copy()
        for _ in range(2):
            solution = solution + self._correct(vectors - self.system.apply(solution))
        return solution

    def schur(self, kept: Index) -> Real:
        """Matrix S (n, n) left on some of the held unknowns once every free one is eliminated.

        uᵀSu is the least energy with values u on `kept` and 0 on the other held unknowns. It is
        taken as the energy of the solution, whose error it then has squared only.
        """
        among_kept, across = self._part(kept, kept), self._part(self.free, kept)
        inside = self._part(self.free, self.free)
        answer = np.empty(across.shape)
        for start in range(0, kept.size, _SIDES):
            some = slice(start, start + _SIDES)
            answer[:, some] = -self.factor.solve(across[:, some].toarray())
        left = across + inside @ answer  # what rounding leaves of the equations
        schur = among_kept + across.T @ answer + answer.T @ left
        return np.asarray(0.5 * (schur + schur.T))

    def _part(self, rows: Index, columns: Index) -> csc_matrix:
        """Block of the condensed matrix."""
        dofs = self.system.dofs[: self.condensed.shape[1]]
        return _assemble(self.condensed, dofs, (rows, columns), self.system.size)

    def _correct(self, residual: Real) -> Real:
        dofs, outer = self.system.dofs, len(self.system.dofs) - self.system.inner
        inner = residual[dofs[outer:]]  # (i, cell, …)
        passed = _times(self.extension.transpose(0, 2, 1), inner)
        rest = residual - self.system.sum_outer(passed)
        change = np.zeros(residual.shape)
        change[self.free] = self.factor.solve(rest[self.free])
        along = _times(self.extension, change[dofs[:outer]])
        change[dofs[outer:]] = _times(self.inverse, inner) - along
        return change


def _times(blocks: Real, parts: Real) -> Real:
    """Cell matrices (n_cell, i, j) times parts of cells (j, n_cell) or (j, n_cell, n)."""
    wide = parts if parts.ndim == 3 else parts[:, :, None]
    found = (blocks @ wide.transpose(1, 0, 2)).transpose(1, 0, 2)
    return np.asarray(found.reshape(blocks.shape[1], *parts.shape[1:]))


def factorise(system: CellSystem, held: Index) -> Factor:
    """Eliminate the inner unknowns of each cell and factorise what is left.

    The ordering is symmetric, without pivoting: the systems are positive definite, or
    quasi-definite if they hold a pressure.
    """
    outer = len(system.dofs) - system.inner
    inverse = np.asarray(np.linalg.inv(system.blocks[:, outer:, outer:]), dtype=float)
    coupling = system.blocks[:, outer:, :outer]
    extension = inverse @ coupling
    condensed = system.blocks[:, :outer, :outer] - coupling.transpose(0, 2, 1) @ extension
    free = np.setdiff1d(system.dofs[:outer], held)
    factor = splu(
        _assemble(condensed, system.dofs[:outer], (free, free), system.size),
        permc_spec="MMD_AT_PLUS_A",
        diag_pivot_thresh=0.0,
        options={"SymmetricMode": True},
    )
    return Factor(system, free, inverse, extension, condensed, factor)


def _assemble(blocks: Real, dofs: Index, parts: tuple[Index, Index], size: int) -> csc_matrix:
    """Sparse matrix of cell matrices, between the unknowns of two parts."""
    places = []
    for part in parts:
        number = np.full(size, -1, dtype=np.int32)
        number[part] = np.arange(part.size)
        places.append(number[dofs].T)
    i = np.broadcast_to(places[0][:, :, None], blocks.shape).ravel()
    j = np.broadcast_to(places[1][:, None, :], blocks.shape).ravel()
    kept = (i >= 0) & (j >= 0)
    shape = (parts[0].size, parts[1].size)
    return csc_matrix((blocks.ravel()[kept], (i[kept], j[kept])), shape=shape)
