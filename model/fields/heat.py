"""Temperature rise from ohmic heat in the liquid, conducted through floor and lid."""

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from model.arrays import Real
from model.fields.assembly import Space, load, mass, stiffness
from model.fields.cells import Index
from model.fields.condensed import CellSystem, Factor, factorise
from model.fields.sides import side_masses


@dataclass(frozen=True)
class Cooling:
    """Where heat leaves.

    Parameters
    ----------
    transfer
        Heat-transfer coefficient of named sides, W/(m² K); None holds the side at Θ = 0. Sides
        that are not named are insulated.
    """

    transfer: Mapping[str, float | None]

    @property
    def held(self) -> tuple[str, ...]:
        """Sides at Θ = 0."""
        return tuple(name for name, value in self.transfer.items() if value is None)

    @property
    def cooled(self) -> dict[str, float]:
        """Sides that lose heat in proportion to Θ."""
        return {name: value for name, value in self.transfer.items() if value}


@dataclass(frozen=True, eq=False)
class Conduction:
    """Heat conduction in a section, factorised once for any source of heat."""

    functions: Space
    factor: Factor

    def solve(self, density: Real) -> Real:
        """Coefficients of Θ (n_unknown,) for q at the quadrature points, (n_cell, n_point)."""
        return self.factor.solve(load(self.functions, density), np.zeros(self.functions.size))


def conduction(
    functions: Space, conductivity: Real, cooling: Cooling, sink: float = 0.0
) -> Conduction:
    """Prepare −∇·(k∇Θ) + gΘ = q with k ∂Θ/∂n = −hΘ on cooled sides.

    Parameters
    ----------
    functions
        On floor, liquid and lid, lengths in m.
    conductivity
        k of each cell, (n_cell,), W/(m K).
    cooling
        Of the sides.
    sink
        g, heat that leaves across the plane of the mesh, W/(m³ K).

    Raises
    ------
    ValueError
        If no heat can leave, so that no steady state exists.
    """
    if not (cooling.held or cooling.cooled or sink):
        raise ValueError("no side lets heat leave, so there is no steady temperature")
    blocks = stiffness(functions, conductivity)
    if sink:
        blocks += mass(functions, sink)
    for name, transfer in cooling.cooled.items():
        cells, masses = side_masses(functions, name)
        np.add.at(blocks, cells, transfer * masses)
    system = CellSystem(blocks, functions.dofs, functions.inner, functions.size)
    return Conduction(functions, factorise(system, functions.on(*cooling.held)))


@dataclass(frozen=True, eq=False)
class LiquidHeat:
    """Heat that is made in the cells `liquid` of a section alone; k of the liquid in W/(m K)."""

    conduction: Conduction
    liquid: Index
    thermal_conductivity: float

    @property
    def functions(self) -> Space:
        """What Θ is made of, in the whole section."""
        return self.conduction.functions

    def solve(self, square: Real) -> Real:
        """Θ for q/k at the liquid's quadrature points, (n_cell of the liquid, n_point), 1/m²."""
        density = np.zeros((self.functions.mesh.nelements, square.shape[1]))
        density[self.liquid] = self.thermal_conductivity * square
        return self.conduction.solve(density)

    def warmth(self, solution: Real) -> Real:
        """Θ at the liquid's quadrature points, (n_cell of the liquid, n_point)."""
        return self.functions.at_points(solution)[self.liquid]

    def slopes(self, solution: Real) -> Real:
        """∇Θ at the liquid's quadrature points, (2, n_cell of the liquid, n_point), 1/m."""
        return self.functions.gradients(solution)[:, self.liquid]

    def mean(self, solution: Real) -> float:
        """Mean of Θ over the liquid."""
        weights = self.functions.weights[self.liquid]
        return float((weights * self.warmth(solution)).sum() / weights.sum())
