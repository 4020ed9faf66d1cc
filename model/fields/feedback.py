"""How warmth that changes the liquid's conductivity changes the heat itself, to second order.

With σ(1 + βΔT), ΔT = rise·Θ/Θ_max to first order, the liquid makes more heat where it is warm, and
the field gives way there, ∇·(ε̃(1 + κΔT)∇φ) = 0 with κ = d ln ε̃/dT at the drive's frequency. The
hottest place then warms by rise + g·rise² + …, g = β·`direct` + Re κ·`spread`: where ohmic
current decides the field κ is β, where the permittivity does it is d ln ε/dT.

That is exact to second order in a drive of one phase. Of several phases a part is left out that
is the reverse of its mirror image: it warms one side of each electrode as it cools the other.
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from model.arrays import Real
from model.fields.assembly import Space, flux_load
from model.fields.electric import Potential
from model.fields.heat import LiquidHeat
from model.fields.piecewise import Piecewise


@dataclass(frozen=True)
class Feedback:
    """Second-order rise of the hottest place over the square of the first, per β and per Re κ.

    Between isothermal electrodes and insulating walls, of whatever shape, 5/6 and −1/3 (from the
    relation of Kohlrausch 1900); in evenly warm liquid 1 and 0.
    """

    direct: float
    spread: float

    def growth(self, conductivity_slope: Real | float, field_slope: Real | float) -> Real:
        """Second-order coefficient g in 1/K for β and Re κ in 1/K."""
        return np.asarray(self.direct * conductivity_slope + self.spread * field_slope)


def solve_feedback(
    functions: Space,
    potentials: Sequence[Potential],
    fields: Real,
    heat: LiquidHeat,
    temperature: Piecewise,
    solution: Real,
) -> Feedback:
    """Solve for the second-order rise with the systems that gave the first.

    Parameters
    ----------
    functions
        Those of the potentials, with the quadrature points of `fields` and `heat`.
    potentials
        One for each component of the drive.
    fields
        Ê of each at the quadrature points, (n_component, 2, n_cell, n_point), 1/m.
    heat
        What solved Θ.
    temperature, solution
        Θ as a function, and its coefficients.
    """
    direct, spread = _second_heat(functions, potentials, fields, heat.warmth(solution))
    both = np.stack([heat.solve(direct), heat.solve(spread)])
    place = temperature.place_of_highest(heat.liquid)
    first = temperature.values(*place)[0, 0]
    second = Piecewise.of(heat.functions, both, temperature.cells).values(*place)[:, 0]
    return Feedback(*(second / first**2).tolist())


def _second_heat(
    functions: Space, potentials: Sequence[Potential], fields: Real, warmth: Real
) -> tuple[Real, Real]:
    """Heat that warmth Θ (n_cell, n_point) adds to |Ê|², per β and per κ, in the same shape.

    Θ|Ê|², and 2Ê·Ê₂ with Ê₂ = −∇φ₂, ∇·(∇φ₂ + Θ∇φ) = 0 and φ₂ = 0 where φ is held. Where it is
    not known what holds φ the field is taken to stay, which overstates the rise: what gives way
    spares the warm places.
    """
    direct = warmth * np.einsum("fckq,fckq->kq", fields, fields)
    spread = np.zeros_like(direct)
    for potential, field in zip(potentials, fields, strict=True):
        if not potential.held:
            continue
        change = potential.respond(flux_load(functions, warmth * field))
        spread -= 2.0 * np.einsum("ckq,ckq->kq", field, functions.gradients(change))
    return direct, spread
