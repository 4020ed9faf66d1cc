"""Electric potential in the liquid, electrodes held, walls insulating."""

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from model.arrays import Real
from model.fields.assembly import Space, stiffness
from model.fields.condensed import CellSystem, Factor, factorise


@dataclass(frozen=True, eq=False)
class Potential:
    """φ per volt: coefficients (n_unknown,) in `space`, its energy ∫|∇φ|², and what solved it.

    `held` tells whether sides hold it; if not, it was given.
    """

    space: Space
    solution: Real
    energy: float
    factor: Factor
    held: bool = True

    def gradients(self) -> Real:
        """∇φ at the quadrature points, (2, n_cell, n_point), 1/m."""
        return self.space.gradients(self.solution)

    def respond(self, source: Real) -> Real:
        """Coefficients of ψ with ∫∇ψ·∇v = source (n_unknown,), and ψ = 0 where φ is held."""
        return self.factor.solve(source, np.zeros(self.space.size))


def solve_potential(functions: Space, potentials: Mapping[str, float]) -> Potential:
    """Solve ∇²φ = 0, with φ held on the named sides and ∂φ/∂n = 0 on all others.

    Parameters
    ----------
    functions
        On the mesh of the liquid, lengths in m.
    potentials
        V per volt of each named side; at least one.

    Raises
    ------
    ValueError
        If no side is held.
    """
    if not potentials:
        raise ValueError("a potential needs a side that is held")
    system = CellSystem(stiffness(functions), functions.dofs, functions.inner, functions.size)
    constant = functions.constant()
    held = np.zeros(functions.size)
    for name, level in potentials.items():
        sides = functions.on(name)
        held[sides] = level * constant[sides]
    factor = factorise(system, functions.on(*potentials))
    solution = factor.solve(np.zeros(functions.size), held)
    return Potential(functions, solution, float(solution @ system.apply(solution)), factor)
