"""How long a chip takes to warm up: heat through floor, liquid and lid, layer by layer.

The layers are taken as endless planes with even heat in the liquid, so that the temperature
depends on the height alone: ρc ∂T/∂t = ∂/∂y(k ∂T/∂y) + q. That holds for an array that is wider
than its walls are thick; a smaller one spreads its heat sideways and is sooner steady. The liquid
is taken to be at rest and its conductivity to stay as it is: growing with temperature, it would
raise the final temperature and delay it, both about in proportion.

The rise is a sum of modes that each settle on their own (Carslaw and Jaeger, *Conduction of Heat
in Solids*, 2nd ed. 1959), here those of polynomials on cells that grow with the distance from the
liquid.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.polynomial import legendre
from scipy.linalg import eigh
from scipy.optimize import brentq

from model.arrays import Real
from model.fields.grading import march

if TYPE_CHECKING:
    from model.layout import Layout

#: Polynomial degree in each cell.
DEGREE = 6
#: Cells of the heated layer; the first of every other layer is as thick.
CELLS = 4


@dataclass(frozen=True)
class Slab:
    """A plane layer: thickness in m, k in W/(m K), heat capacity per volume in J/(m³ K)."""

    thickness: float
    heat_conductivity: float
    heat_storage: float


@dataclass(frozen=True, eq=False)
class WarmUp:
    """Mean temperature of the heated layer after even heat of 1 W/m³ is switched on.

    m(t) = Σ share·(1 − exp(−t/delay)), in K m³/W.

    Parameters
    ----------
    delays
        Time constant of each mode, s, (n,).
    shares
        What it adds to the final rise, K m³/W, (n,); none is negative.
    """

    delays: Real
    shares: Real

    @property
    def final(self) -> float:
        """Final mean rise, K m³/W."""
        return float(self.shares.sum())

    def mean(self, time: float) -> float:
        """Mean rise after `time` s, K m³/W."""
        return float(-np.expm1(-time / self.delays) @ self.shares)

    def time(self, fraction: float) -> float:
        """Time in s until the mean has come to a fraction, below 1, of its final rise."""
        latest = -np.log1p(-fraction) * float(self.delays.max())  # as if all were the slowest mode

        def lead(time: float) -> float:
            return self.mean(time) / self.final - fraction

        return float(brentq(lead, 0.0, 1.001 * latest, xtol=np.finfo(float).tiny))


def chip_warm_up(chip: "Layout", heat_conductivity: float, heat_storage: float) -> WarmUp:
    """Warm-up of a chip's liquid, given k in W/(m K) and heat capacity in J/(m³ K) of that."""
    below, above = (
        Slab(wall.thickness, wall.heat_conductivity, wall.heat_storage)
        for wall in (chip.floor, chip.lid)
    )
    liquid = Slab(chip.height, heat_conductivity, heat_storage)
    outsides = chip.floor.heat_transfer, chip.lid.heat_transfer
    return warm_up((below,), liquid, (above,), outsides)


def warm_up(
    below: Sequence[Slab],
    heated: Slab,
    above: Sequence[Slab],
    outsides: tuple[float | None, float | None],
) -> WarmUp:
    """Find the modes of a stack of layers of which one is heated.

    Parameters
    ----------
    below, above
        Layers under and over the heated one, each from it outward.
    heated
        The layer with the heat.
    outsides
        Heat-transfer coefficients under and over the stack, W/(m² K); None holds the outside at
        no rise, 0 insulates it.

    Raises
    ------
    ValueError
        If no heat can leave, so that there is no final rise.
    """
    if outsides == (0.0, 0.0):
        raise ValueError("no side lets heat leave, so there is no steady temperature")
    first = heated.thickness / CELLS
    lower = [cell for slab in below for cell in _cells(slab, first)][::-1]
    upper = [cell for slab in above for cell in _cells(slab, first)]
    middle = [Slab(first, heated.heat_conductivity, heated.heat_storage)] * CELLS
    sources = np.repeat([0.0, 1.0, 0.0], [len(lower), CELLS, len(upper)])
    conduction, storage, heat = _assemble([*lower, *middle, *upper], sources)
    free = np.ones(len(heat), dtype=bool)
    for end, transfer in zip((0, -1), outsides, strict=True):
        if transfer is None:
            free[end] = False
        else:
            conduction[end, end] += transfer
    both = np.ix_(free, free)
    # storage over conduction, not the other way round: rounding then spares the slow modes
    delays, modes = eigh(storage[both], conduction[both])
    shares = (modes.T @ heat[free]) ** 2 / heated.thickness
    return WarmUp(np.maximum(delays, np.finfo(float).tiny), shares)


def _cells(slab: Slab, first: float) -> list[Slab]:
    """Cut a layer into cells, from the heated layer outward."""
    lines = march(slab.thickness, min(first, slab.thickness), lambda _: np.inf)
    return [Slab(size, slab.heat_conductivity, slab.heat_storage) for size in np.diff(lines)]


def _assemble(cells: Sequence[Slab], sources: Real) -> tuple[Real, Real, Real]:
    """Matrices of ∫ k u′v′ and ∫ ρc u v and vector of ∫ q v for cells from the bottom up."""
    points, weights = legendre.leggauss(DEGREE + 1)
    nodes = -np.cos(np.pi * np.arange(DEGREE + 1) / DEGREE)
    basis = np.linalg.inv(legendre.legvander(nodes, DEGREE))  # Legendre sums that are 1 at one node
    values = legendre.legvander(points, DEGREE) @ basis
    slopes = legendre.legval(points, legendre.legder(basis)).T
    size = DEGREE * len(cells) + 1
    conduction, storage, heat = np.zeros((size, size)), np.zeros((size, size)), np.zeros(size)
    for index, (cell, source) in enumerate(zip(cells, sources, strict=True)):
        own = slice(DEGREE * index, DEGREE * (index + 1) + 1)
        half = 0.5 * cell.thickness
        conduction[own, own] += cell.heat_conductivity / half * (slopes.T * weights) @ slopes
        storage[own, own] += cell.heat_storage * half * (values.T * weights) @ values
        heat[own] += source * half * weights @ values
    return conduction, storage, heat
