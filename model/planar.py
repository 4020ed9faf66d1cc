"""What the layouts share that are seen in plan: electrodes or obstacles over the whole depth."""

import math
from abc import abstractmethod
from typing import TYPE_CHECKING, Annotated, ClassVar, Literal

import numpy as np

from model.arrays import Real
from model.declare import Quantity
from model.fields.lines import Line
from model.fields.section import Plan
from model.layout import Layout
from model.quantity import format_quantity
from model.walls import Wall

if TYPE_CHECKING:
    from model.fields.patterns import ChipPatterns

#: Channel widths beyond the poles in which their field dies out, and so many lengths over which
#: heat leaves.
FIELD_REACH, HEAT_REACH = 3.0, 6.0
#: Water, W/(m K): near enough to tell how far heat spreads.
_WATER = 0.6


class Planar(Layout):
    """A channel whose electrodes and obstacles stand from floor to lid.

    Everything is taken to be uniform over the depth: walls of PDMS or SU-8, electrodes that are
    plated or doped side walls, or thin ones under a channel that is shallow against their gaps.
    """

    view: ClassVar[Literal["section", "plan"]] = "plan"
    depth: Annotated[
        float,
        Quantity(
            "Depth",
            "Of the liquid between floor and lid; electrodes and obstacles reach over all of it.",
            unit="um",
            low="5 um",
            high="2 mm",
        ),
    ] = 50e-6

    @property
    def height(self) -> float:
        """The depth, m."""
        return self.depth

    @property
    def parallel_length(self) -> float:
        """The depth, m: current flows in the plan alone."""
        return self.depth

    @property
    @abstractmethod
    def force_line(self) -> float:
        """Place y of the line along the flow on which forces are taken, m."""

    @abstractmethod
    def contact_path(self, radius: float) -> tuple[Real, Real]:
        """Places x and y, (n,) each, of the centre of a sphere that touches what is solid, m.

        Of one pole or obstacle, for the others are its mirror images. A sphere too large for
        the narrowest place counts as one that just fits.
        """

    def force_level(self, height: float) -> float:
        """The force line, whatever the height above the floor."""
        return self.force_line

    def contact_lines(self, patterns: "ChipPatterns", radius: float) -> tuple[Line, ...]:
        """Patterns along the contact path."""
        return (patterns.path(*self.contact_path(radius)),)

    @property
    def _plan(self) -> Plan:
        """Walls and open ends of the quarter x ≥ 0, y ≥ 0."""
        return Plan((_resistance(self.floor), _resistance(self.lid)), {"left": 0, "end": 0})

    def _reach(self, solid: float) -> float:
        """Where a mesh may end that has all solid parts within `solid`, m.

        Heat that spreads along the channel falls over √(kh/G), G the conductance of floor and
        lid per area.
        """
        leaving = sum(1.0 / resistance for resistance in self._plan.walls)
        heat = math.sqrt(_WATER * self.depth / leaving) if leaving else 0.0
        return solid + max(FIELD_REACH * self.channel_width, HEAT_REACH * heat)


def _resistance(wall: Wall) -> float:
    """Of a wall and its outside, per area, m² K/W; infinite if its outside is insulated."""
    slab = wall.thickness / wall.heat_conductivity
    if wall.heat_transfer is None:
        return slab
    return slab + 1.0 / wall.heat_transfer if wall.heat_transfer else math.inf


def at_least(length: float, why: str) -> str:
    """Words for a bound that other fields set."""
    return f"must be at least {format_quantity(length, 'um')}, {why}"


def around(outline: Real, distance: float) -> tuple[Real, Real]:
    """Places x, y at a distance from a convex outline (n, 2) that runs anticlockwise, m."""
    steps = np.roll(outline, -1, axis=0) - outline
    normals = np.arctan2(-steps[:, 0], steps[:, 1])
    before = np.roll(normals, 1)
    turns = (normals - before + np.pi) % (2 * np.pi) - np.pi
    shares = np.linspace(0.0, 1.0, 9)
    angles = before[:, None] + turns[:, None] * shares
    arcs = outline[:, None] + distance * np.stack([np.cos(angles), np.sin(angles)], axis=-1)
    ends = np.roll(arcs[:, 0], -1, axis=0)
    sides = arcs[:, -1:] + shares[1:-1, None] * (ends - arcs[:, -1])[:, None]
    path = np.concatenate([arcs, sides], axis=1).reshape(-1, 2)
    return path[:, 0], path[:, 1]
