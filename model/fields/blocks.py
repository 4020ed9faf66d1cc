"""Meshes of plane regions put together from blocks of straight-sided quadrilaterals."""

from collections.abc import Callable, Mapping, Sequence

import numpy as np
from scipy.sparse import coo_matrix
from scipy.sparse.csgraph import connected_components
from scipy.spatial import cKDTree
from skfem import Mesh, MeshQuad

from model.arrays import Real
from model.fields.cells import Index

#: Corners of two blocks nearer than this, over the size of the whole, are one.
SAME = 1e-12
#: Ends of the sides of a quadrilateral, parallel ones in one sense.
_SIDES = np.array([[0, 1], [3, 2], [0, 3], [1, 2]])


def ruled(low: Real, high: Real, shares: Real) -> Real:
    """Corners (n, m, 2) of a block between two rows of points (n, 2), m.

    Point i of the one row is joined to point i of the other by a straight line, divided at
    `shares` (m,) from 0 to 1.
    """
    return np.asarray(low[:, None] + shares[:, None] * (high - low)[:, None])


def rectangle(columns: Real, rows: Real) -> Real:
    """Corners (n, m, 2) of a block with grid lines at x = `columns` (n,) and y = `rows` (m,)."""
    return np.stack(np.meshgrid(columns, rows, indexing="ij"), axis=-1)


def joined(
    blocks: Sequence[Real],
    sides: Mapping[str, Callable[[Real], np.ndarray]],
    refinement: int = 0,
) -> Mesh:
    """Mesh of blocks that meet corner by corner, all of it liquid.

    Parameters
    ----------
    blocks
        Corners (n, m, 2) of each, m.
    sides
        Of each named boundary, which middles (2, n) of outer sides belong to it.
    refinement
        How often every cell is divided in four.

    Raises
    ------
    ValueError
        If blocks overlap on one side of a cell, so that three cells share it.
    """
    corners = np.concatenate([block.reshape(-1, 2) for block in blocks])
    starts = np.cumsum([0, *(block[..., 0].size for block in blocks)])
    cells = np.concatenate(
        [start + _cells(block) for start, block in zip(starts, blocks, strict=False)], axis=1
    )
    number, kept = _merged(corners)
    mesh = MeshQuad(np.ascontiguousarray(corners[kept].T), number[cells])
    if refinement:
        mesh = mesh.refined(refinement)
    mesh = MeshQuad(mesh.p, _righted(mesh.p, oriented(mesh.t)))
    if np.bincount(mesh.t2f.ravel()).max() > 2:
        raise ValueError("three cells share a side")
    return mesh.with_boundaries(sides).with_subdomains({"liquid": np.arange(mesh.nelements)})


def oriented(cells: Index) -> Index:
    """Renumber the corners of quadrilaterals (4, n) so that shared sides have one sense.

    Opposite sides of a cell have one sense, which goes on from cell to cell; that of each such
    strip of cells is free. In a plane mesh no strip can come back turned round.
    """
    count = int(cells.max()) + 1
    ends = cells[_SIDES]  # (side, end, cell)
    keys = np.stack([ends[:, 0] * count + ends[:, 1], ends[:, 1] * count + ends[:, 0]])
    known, directed = np.unique(keys, return_inverse=True)
    directed = directed.reshape(keys.shape)  # (sense, side, cell)
    first, second = directed[:, ::2].ravel(), directed[:, 1::2].ravel()
    links = coo_matrix((np.ones(first.size), (first, second)), shape=(known.size,) * 2)
    strip = connected_components(links, directed=False)[1]
    forward = strip[directed[0]] < strip[directed[1]]
    turned: Index = np.where(forward[0], cells, cells[[1, 0, 3, 2]])
    return np.where(forward[2], turned, turned[[3, 2, 1, 0]])


def _righted(corners: Real, cells: Index) -> Index:
    """Number the corners (2, n) of cells (4, n) anticlockwise, from the same one."""
    across, along = (corners[:, cells[i]] - corners[:, cells[i - 2]] for i in (2, 3))
    return np.where(across[0] * along[1] > across[1] * along[0], cells, cells[[0, 3, 2, 1]])


def _cells(block: Real) -> Index:
    """Corners of each cell of a block, (4, n), numbered within it."""
    wide, tall = block.shape[:2]
    number = np.arange(wide * tall).reshape(wide, tall)
    around = (number[:-1, :-1], number[1:, :-1], number[1:, 1:], number[:-1, 1:])
    return np.stack([corner.ravel() for corner in around])


def _merged(corners: Real) -> tuple[Index, Index]:
    """New number of each corner (n, 2) once coinciding ones are one, and those that are kept."""
    pairs = cKDTree(corners).query_pairs(SAME * float(np.ptp(corners)), output_type="ndarray")
    links = coo_matrix((np.ones(len(pairs)), pairs.T), shape=(len(corners),) * 2)
    _, number = connected_components(links, directed=False)
    kept = np.unique(number, return_index=True)[1]
    return number, kept
