"""Electric energy in floor and lid that the liquid's potential on them drives."""

from collections.abc import Sequence

import numpy as np

from model.arrays import Real
from model.fields.assembly import Space, space, stiffness
from model.fields.cells import Index
from model.fields.condensed import CellSystem, factorise
from model.fields.electric import Potential
from model.fields.section import Section

#: Degree in the walls: the part of the liquid's values on the face that this degree can carry.
DEGREE = 4


def wall_energy(section: Section, potentials: Sequence[Potential], name: str) -> float:
    """∫|∇φ|² in one wall over all components, φ that of the liquid where they meet.

    Where the wall's admittance is small against the liquid's it adds (σ + jωε) of the wall times
    this to the admittance per metre, to first order: the liquid's own field does not yet answer.
    That overstates it. The outside of the wall is taken as insulating, and so is the cut of a
    mesh that stands for a thicker wall, where the field has died out.
    """
    mesh = section.mesh.restrict(name)
    # a field that is given may come back reversed at the other end: then both ends are insulating
    joined = section.joined if section.imposed is None else None
    functions = space(mesh, DEGREE, 2 * DEGREE, joined)
    system = CellSystem(stiffness(functions), functions.dofs, functions.inner, functions.size)
    total = 0.0
    for potential, held in zip(potentials, section.potentials, strict=True):
        face, values = _on_the_face(functions, potential)
        planes = [side for side in held if side not in section.electrodes]
        zero = np.setdiff1d(functions.on(*planes), face)
        factor = factorise(system, np.union1d(face, zero))
        solution = factor.solve(np.zeros(functions.size), values)
        total += max(float(solution @ system.apply(solution)), 0.0)  # rounding of none at all
    return total


def _on_the_face(functions: Space, potential: Potential) -> tuple[Index, Real]:
    """Unknowns on the face to the liquid and, (n_unknown,), the liquid's values there.

    The functions on a side are in order of degree, so that the first ones carry what a lower
    degree can; both meshes are cut from one, so that they run along it in the same sense.
    """
    spaces = (functions, potential.space)
    sides = [some.mesh.boundary_facets() for some in spaces]
    own, theirs = _pairs(
        *(
            some.mesh.p[:, some.mesh.facets[:, facets]].mean(axis=1)
            for some, facets in zip(spaces, sides, strict=True)
        )
    )
    facets = (sides[0][own], sides[1][theirs])
    nodes = [
        np.unique(some.mesh.facets[:, part]) for some, part in zip(spaces, facets, strict=True)
    ]
    own, theirs = _pairs(*(some.mesh.p[:, part] for some, part in zip(spaces, nodes, strict=True)))
    values = np.zeros(functions.size)
    face = []
    for here, there in (
        (
            functions.table.nodal_dofs[0, nodes[0][own]],
            potential.space.table.nodal_dofs[0, nodes[1][theirs]],
        ),
        (
            functions.table.facet_dofs[:, facets[0]],
            potential.space.table.facet_dofs[: DEGREE - 1, facets[1]],
        ),
    ):
        values[functions.same[here]] = potential.solution[potential.space.same[there]]
        face.append(functions.same[here].ravel())
    return np.unique(np.concatenate(face)), values


def _pairs(first: Real, second: Real) -> tuple[Index, Index]:
    """Columns of two sets of places (2, n) that are one and the same place."""
    _, own, theirs = np.intersect1d(
        first[0] + 1j * first[1], second[0] + 1j * second[1], return_indices=True
    )
    return own, theirs
