"""What a layout hands to the solves: mesh, named parts, and how the piece repeats."""

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import NamedTuple

import numpy as np
from skfem import Mesh, MeshQuad

from model.arrays import Real
from model.fields.imposed import Imposed


class Folded(NamedTuple):
    """Places `x`, `y` in the piece, and what turns patterns there into those that are asked for.

    Components along x and y of a force or velocity are multiplied by `along` and `up` (±1), φ of
    each component of the drive by its row of `signs` (±1), (n_component, n).
    """

    x: Real
    y: Real
    along: Real
    up: Real
    signs: Real


@dataclass(frozen=True)
class Fold:
    """How the solved piece stands for every x and, of a plan, for every y.

    Quadratic patterns (|Ê|², heat, flow) repeat with `period`; the field itself comes back
    multiplied by `alternation`. A drive of several phases has two components, in phase and a
    quarter of a period behind, each with a parity of its own.

    Parameters
    ----------
    period
        Length of one repeat along x, m; None if the piece stands alone.
    mirrored
        The piece is one half, 0 ≤ x ≤ period/2, with mirror planes at both ends; the other half
        is its mirror image about x = 0. A piece without a period is mirrored about x = 0 alone.
    alternation
        φ(x + period)/φ(x): −1 if neighbours are opposite, else 1.
    start
        Where a piece with a period that is not mirrored begins, m.
    parities
        φ(−x)/φ(x) of a mirrored piece, 1 or −1, for each component.
    upright
        φ(−y)/φ(y) likewise, if the piece is the half y ≥ 0 of the chip; else None.
    """

    period: float | None = None
    mirrored: bool = False
    alternation: int = 1
    parities: tuple[int, ...] = (1,)
    upright: tuple[int, ...] | None = None
    start: float = 0.0

    def place(self, x: Real, y: Real) -> Folded:
        """Place any x and y, (n,) each, into the piece."""
        within, along, signs = self.fold(x)
        if self.upright is None:
            return Folded(within, y, along, np.ones_like(y), signs)
        up = np.where(y < 0, -1.0, 1.0)
        signs = signs * np.where(y < 0, np.array(self.upright, dtype=float)[:, None], 1.0)
        return Folded(within, np.abs(y), along, up, signs)

    def fold(self, x: Real) -> tuple[Real, Real, Real]:
        """Place any x into the piece.

        Returns
        -------
        place, side, signs
            `place` lies in the piece. An x component of a force or velocity is multiplied by
            `side` (±1), φ of each component by its row of `signs` (±1); `place` and `side` have
            the shape of `x`, `signs` is (n_component, …).
        """
        side, turned = np.ones_like(x), np.ones_like(x)
        place = x
        if self.period is not None:
            ahead = (x - self.start) / self.period
            turns = np.round(ahead) if self.mirrored else np.floor(ahead)
            place = x - turns * self.period
            if not self.mirrored:  # rounding must not lead outside
                place = np.clip(place, self.start, self.start + self.period)
            if self.alternation < 0:
                turned = np.where(turns % 2 == 0, 1.0, -1.0)
        signs = np.stack([turned for _ in self.parities])
        if self.mirrored:
            side = np.where(place < 0, -1.0, 1.0)
            parities = np.array(self.parities, dtype=float).reshape(-1, *[1] * x.ndim)
            signs = signs * np.where(place < 0, parities, 1.0)
            place = np.abs(place)
            if self.period is not None:
                place = np.minimum(place, 0.5 * self.period)  # rounding must not lead outside
        return place, side, signs


@dataclass(frozen=True)
class Rest:
    """A wall that goes on beyond the mesh, where Θ no longer varies along x.

    There Θ(y) = Θ(level)·(1 − falloff·|y − level|), from `level`, where the mesh ends (m), to
    `outside`, where the wall ends (m); `falloff` in 1/m.
    """

    level: float
    outside: float
    falloff: float


@dataclass(frozen=True)
class Plan:
    """What a piece that is seen in plan has besides its mesh; all is uniform over the depth.

    Parameters
    ----------
    walls
        Thermal resistance of floor and lid with their outsides, straight outward, m² K/W;
        infinite if no heat leaves there.
    ends
        Sides that the flow through the channel crosses straight, and the axis they stand across.
    """

    walls: tuple[float, float]
    ends: Mapping[str, int]


@dataclass(frozen=True, eq=False)
class Section:
    """Smallest piece of a chip that symmetry leaves, ready for the solves.

    Lengths in m, x along the flow from a bar's centre, y upward from the floor. In plan, x and y
    from the middle of the chip, y across the flow.

    Parameters
    ----------
    mesh
        Triangles, or quadrilaterals that traverse every shared side in the same sense. The
        subdomain ``liquid`` must be named; every other subdomain is a wall. Sides are named as
        boundaries.
    potentials
        For each component of the drive, the potential of each named side that is held, in V per
        volt between opposite phases: electrodes, and mirror planes about which φ is odd. All
        other sides of the liquid are insulating. One component, or two: in phase, and a quarter
        of a period behind or, if negative, ahead, so that the phasor is φ₀ + jφ₁.
    electrodes
        Which of `potentials` are metal.
    length
        Length L that scales the flow patterns: the pitch.
    height
        Of the liquid.
    cells_per_gap
        How many of these pieces carry the energy of one gap, or of one pitch if floor and lid
        are opposite (2 if the piece is half of it).
    fold
        How the piece repeats.
    mirrors
        Symmetry planes of the liquid and the axis (0 for x, 1 for y) they stand across: flow
        slips freely along them. No slip holds on every other side.
    wall_conductivities
        Thermal conductivity of each wall subdomain, W/(m K).
    outsides
        Heat-transfer coefficient of each side through which heat leaves, W/(m² K); None holds
        it at Θ = 0. Sides that are not named are insulated.
    rests
        What lies beyond a mesh that stands for thicker walls.
    joined
        The two sides that are one and the same, of a piece that repeats without mirror planes.
    plan
        Of a piece that is seen in plan: it has no walls in its mesh.
    imposed
        The field, if it is given and not to be solved for; `potentials` then hold no side.
    whole
        Whether the piece holds all liquid between floor and lid, so that heat and flow can be
        solved.
    cell_factor
        C/ε that is known, instead of the energy of the field.
    double_layer_width
        Width of the electrodes' interfaces in series, m, if the places of the electrodes are not
        known: they then carry the same current everywhere.
    remarks
        What is to be told beside results, as sentences.
    """

    mesh: Mesh
    potentials: tuple[Mapping[str, float], ...]
    electrodes: tuple[str, ...]
    length: float
    height: float
    cells_per_gap: float = 1.0
    fold: Fold = field(default_factory=Fold)
    mirrors: Mapping[str, int] = field(default_factory=dict)
    wall_conductivities: Mapping[str, float] = field(default_factory=dict)
    outsides: Mapping[str, float | None] = field(default_factory=dict)
    rests: tuple[Rest, ...] = ()
    joined: tuple[str, str] | None = None
    plan: Plan | None = None
    imposed: Imposed | None = None
    whole: bool = True
    cell_factor: float | None = None
    double_layer_width: float | None = None
    remarks: tuple[str, ...] = ()

    def __post_init__(self) -> None:
        subdomains = self.mesh.subdomains or {}
        boundaries = self.mesh.boundaries or {}
        named = {*self.electrodes, *self.mirrors, *self.outsides}.union(*self.potentials)
        named |= set(self.joined or ()) | set(self.plan.ends if self.plan else ())
        if missing := named - set(boundaries):
            raise ValueError(f"the mesh names no boundary {sorted(missing)}")
        if missing := {"liquid", *self.wall_conductivities} - set(subdomains):
            raise ValueError(f"the mesh names no subdomain {sorted(missing)}")
        if isinstance(self.mesh, MeshQuad) and not _sides_agree(self.mesh):
            raise ValueError("two quadrilaterals traverse a shared side in opposite sense")
        if len(self.potentials) != len(self.fold.parities):
            raise ValueError("each component of the drive needs its parity")

    def sink(self, thermal_conductivity: float) -> float:
        """Heat that leaves across the plane of the mesh, W/(m³ K) of the liquid's volume.

        In plan, from mid-depth straight outward through half the liquid, h/(2k), the wall and
        its outside. That heat spreads along the walls is left out, and mid-depth is the warmest
        place only between two like walls: the rise is never lower than the true one.
        """
        if self.plan is None:
            return 0.0
        half = 0.5 * self.height / thermal_conductivity
        return sum(1.0 / (half + wall) for wall in self.plan.walls) / self.height

    @property
    def friction(self) -> float:
        """12/h² of floor and lid on the mean of the flow over the depth h, 1/m²; 0 but in plan."""
        return 0.0 if self.plan is None else 12.0 / self.height**2

    def liquid(self) -> Mesh:
        """Mesh of the liquid alone, with the same names."""
        return self.mesh.restrict("liquid")


def _sides_agree(mesh: Mesh) -> bool:
    """Whether every side has one sense, as elements of third and higher order need."""
    sides = np.array([[0, 1], [1, 2], [3, 2], [0, 3]])
    ends = mesh.t[sides]  # (4, 2, n_cell)
    forward = ends[:, 0] < ends[:, 1]
    first = np.full(mesh.nfacets, -1)
    first[mesh.t2f.ravel()] = forward.ravel()
    return bool(np.all(first[mesh.t2f] == forward))
