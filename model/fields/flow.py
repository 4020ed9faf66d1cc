"""Slow flow driven by body forces in the liquid."""

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from skfem import Mesh

from model.arrays import Real
from model.fields.assembly import Space, gather, load, mass, space, stiffness
from model.fields.cells import Index
from model.fields.condensed import CellSystem, factorise
from model.fields.sides import project_on_side

#: Share of the scaled pressure that the liquid yields, against pressures without meaning: the
#: constant, and those of triangles with two sides on a wall. Speeds change by about as much.
COMPRESSIBILITY = 1e-9


@dataclass(frozen=True, eq=False)
class FlowSpace:
    """Taylor–Hood pair: each velocity component in `velocity`, the pressure one degree lower."""

    velocity: Space
    pressure: Space

    @classmethod
    def on(
        cls,
        mesh: Mesh,
        degree: int,
        order: int,
        joined: tuple[str, str] | None = None,
    ) -> "FlowSpace":
        """Pair on `mesh`, of velocity `degree` 2 or more, with quadrature of `order`."""
        velocity = space(mesh, degree, order, joined)
        return cls(velocity, space(mesh, velocity.degree - 1, order, joined))


def solve_flow(
    pair: FlowSpace,
    forces: Sequence[Real],
    mirrors: Mapping[str, int],
    moving: Mapping[str, Callable[[Real], Real]] | None = None,
    *,
    slips: Sequence[Real] = (),
    friction: float = 0.0,
    crossed: Mapping[str, int] | None = None,
) -> list[Real]:
    """Solve −∇²u + gu + ∇p = f, ∇·u = 0 for several forces with one factorisation.

    No slip holds on every side of the mesh but the mirror planes, which the flow does not cross
    and along which it slips freely, and planes that it crosses straight. Joined sides are no
    sides.

    Parameters
    ----------
    forces
        Each f at the quadrature points, (2, n_cell, n_point).
    mirrors
        Named straight mirror planes and the axis (0 for x, 1 for y) they stand across.
    moving
        Velocity of named sides, x (2, n…) ↦ (2, n…), instead of rest.
    slips
        Velocities of sides as coefficients (2, n_unknown); each drives a flow of its own, without
        force, that follows those of the forces.
    friction
        g, 1/m²: 12/h² in the plan of a channel of depth h, where u is the mean over the depth.
    crossed
        Named straight planes, and the axis they stand across, that the flow crosses at right
        angles and p = 0: those about which the whole flow is the negative of a mirror image.

    Returns
    -------
    list of Real
        Coefficients of the velocity (2, n_unknown) of each force and slip. Gradients in f change
        the pressure alone.
    """
    velocity = pair.velocity
    size = velocity.size
    system, scale = _system(pair, friction)
    # along a plane that is crossed, the velocity vanishes, and it is free across
    held = _held(velocity, [*mirrors.items(), *((n, 1 - a) for n, a in (crossed or {}).items())])
    factor = factorise(system, np.concatenate([held[0], size + held[1]]))
    sides = [_side_velocity(velocity, moving or {}, axis) for axis in (0, 1)]
    still = np.zeros(scale.size)
    rest = np.concatenate([*sides, still])
    jobs = [
        (np.concatenate([*(load(velocity, force[axis]) for axis in (0, 1)), still]), rest)
        for force in forces
    ]
    jobs += [(np.zeros(rest.size), np.concatenate([*slip, still])) for slip in slips]
    if not jobs:
        return []
    pushes, moved = (np.stack(parts, axis=1) for parts in zip(*jobs, strict=True))
    solved = factor.solve(pushes, moved)[: 2 * size]
    return [flow.reshape(2, size) for flow in solved.T]


def _system(pair: FlowSpace, friction: float) -> tuple[CellSystem, Real]:
    """Cell matrices of viscosity and continuity for (u_x, u_y, p), and the scales of p.

    Pressure unknowns are scaled so that cells of every size weigh alike.
    """
    velocity, pressure = pair.velocity, pair.pressure
    viscous = stiffness(velocity)
    if friction:
        viscous += mass(velocity, friction)
    tests = pressure.values * pressure.weights[:, None, :]  # (cell, i, point)
    masses = (tests * pressure.values).sum(axis=2).T
    sizes = gather(pressure.dofs, masses, pressure.size)
    scale = 1 / np.sqrt(np.where(sizes > 0, sizes, 1.0))  # 0 of joined unknowns
    weighted = tests * scale[pressure.dofs].T[:, :, None]
    groups = (velocity, velocity, pressure)
    numbers = np.concatenate(
        [velocity.dofs, velocity.size + velocity.dofs, 2 * velocity.size + pressure.dofs]
    )
    starts = np.cumsum([0, *(len(group.dofs) for group in groups)])
    blocks = np.zeros((len(viscous), starts[3], starts[3]))
    last = slice(starts[2], starts[3])
    for axis in (0, 1):
        part = slice(starts[axis], starts[axis + 1])
        divergence = -weighted @ velocity.slopes[:, :, axis].transpose(0, 2, 1)
        blocks[:, part, part] = viscous
        blocks[:, last, part] = divergence
        blocks[:, part, last] = divergence.transpose(0, 2, 1)
    scaled = pressure.values * scale[pressure.dofs].T[:, :, None]
    blocks[:, last, last] = -COMPRESSIBILITY * (weighted @ scaled.transpose(0, 2, 1))
    inner = [
        np.arange(end - group.inner, end) for group, end in zip(groups, starts[1:], strict=True)
    ]
    order = np.concatenate([np.setdiff1d(np.arange(starts[3]), np.concatenate(inner)), *inner])
    blocks = blocks[:, order[:, None], order]
    count = sum(group.inner for group in groups)
    return CellSystem(blocks, numbers[order], count, 2 * velocity.size + pressure.size), scale


def _held(velocity: Space, planes: Sequence[tuple[str, int]]) -> list[Index]:
    """Unknowns of each component that stand still (or move with a side).

    `planes` are the sides on which only one component does, and that component.
    """
    mesh = velocity.mesh
    free_sides = [mesh.boundaries[name] for name, _ in planes]
    if velocity.joined is not None:
        free_sides += [mesh.boundaries[name] for name in velocity.joined]
    walls = np.setdiff1d(mesh.boundary_facets(), np.concatenate([*free_sides, []]))
    still = velocity.on_facets(walls.astype(int))
    across = [
        velocity.on(*(name for name, still_axis in planes if still_axis == axis)) for axis in (0, 1)
    ]
    return [np.union1d(still, part) for part in across]


def _side_velocity(
    velocity: Space,
    moving: Mapping[str, Callable[[Real], Real]],
    axis: int,
) -> Real:
    """Coefficients of one component on the sides that move, 0 elsewhere."""
    rest = np.zeros(velocity.size)
    for name, law in moving.items():
        own = velocity.on(name)
        rest[own] = project_on_side(velocity, name, law, axis)[own]
    return rest
