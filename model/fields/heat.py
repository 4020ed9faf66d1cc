"""Temperature rise from ohmic heat in the liquid, conducted through floor and lid."""

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from model.arrays import Real
from model.fields.assembly import Space, load, stiffness
from model.fields.condensed import CellSystem, factorise
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


def solve_temperature(
    functions: Space,
    conductivity: Real,
    density: Real,
    cooling: Cooling,
) -> Real:
    """Solve −∇·(k∇Θ) = q with k ∂Θ/∂n = −hΘ on cooled sides.

    Parameters
    ----------
    functions
        On floor, liquid and lid, lengths in m.
    conductivity
        k of each cell, (n_cell,), W/(m K).
    density
        q at the quadrature points, (n_cell, n_point).
    cooling
        Of the sides.

    Returns
    -------
    Real
        Coefficients of Θ (n_unknown,).

    Raises
    ------
    ValueError
        If no heat can leave, so that no steady state exists.
    """
    if not cooling.held and not cooling.cooled:
        raise ValueError("no side lets heat leave, so there is no steady temperature")
    blocks = stiffness(functions, conductivity)
    for name, transfer in cooling.cooled.items():
        cells, masses = side_masses(functions, name)
        np.add.at(blocks, cells, transfer * masses)
    system = CellSystem(blocks, functions.dofs, functions.inner, functions.size)
    factor = factorise(system, functions.on(*cooling.held))
    return factor.solve(load(functions, density), np.zeros(functions.size))
