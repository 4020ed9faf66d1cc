"""Limit: particles to be collected must be drawn the way the task needs."""

from typing import TYPE_CHECKING

from model.law import Law, Sense
from model.limit import Limit

if TYPE_CHECKING:
    from model.conditions import Conditions


class ForceSign(Limit):
    """Re K must lie on the side of zero that the task wants, at any voltage."""

    id = "force_sign"
    label = "sign of the force"
    symbol = "Re K"
    why = "With the wrong sign the particle is pushed away from where it should be collected."
    source = "sign of the Clausius–Mossotti factor, Jones 1995, Electromechanics of Particles"
    remedy = "Give the task the other sign of dielectrophoresis."
    unit = ""
    condition = True
    decisive = True

    def laws(self, at: "Conditions") -> tuple[Law, ...]:
        """One condition for each collected particle that the task needs a sign of."""
        laws = []
        for particle in at.design.collected:
            sign = at.design.task.wanted_sign(particle)
            if sign:
                value = at.polarisation(particle).real
                sense: Sense = "least" if sign > 0 else "most"
                laws.append(Law(value, 0, 0.0, sense=sense, subject=particle.name))
        return tuple(laws)
