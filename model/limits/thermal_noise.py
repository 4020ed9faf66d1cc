"""Limit: the depth of the trap against thermal motion."""

from typing import TYPE_CHECKING

from model.declare import Quantity
from model.law import Law
from model.limit import Limit
from model.motion import thermal_energy

if TYPE_CHECKING:
    from model.conditions import Conditions


class ThermalNoise(Limit):
    """Energy that a particle lacks to leave where the task keeps it, over kT of the stage.

    See the task's :meth:`model.task.Task.trap` for that energy: held particles have to cross a
    period of the electrodes, lifted ones to come down to the floor.
    """

    id = "thermal_noise"
    label = "trap against thermal motion"
    symbol = "depth/kT"
    why = "Out of a trap of a few kT a particle wanders by itself."
    source = (
        "energy of the induced dipole, Jones 1995, Electromechanics of Particles; threshold: "
        "common practice, no source"
    )
    remedy = "Use larger particles, or work where the field changes more over a period."
    unit = ""
    threshold = Quantity(
        "Trap depth over kT",
        "Least depth of the trap of each particle to be collected.",
        unit="",
        low="0.001",
        high="1e6",
        source="common practice, no source",
    )
    default = 10.0

    def laws(self, at: "Conditions") -> tuple[Law, ...]:
        """One law of power 2 and sense ``least`` for each collected particle that is trapped."""
        allowed = at.design.threshold(self.id)
        energy = float(thermal_energy(at.design.liquid.temperature))
        laws = []
        for particle in at.design.collected:
            trap = at.design.task.trap(at, particle)
            if trap is not None:
                depth, offset = trap[0] / energy, trap[1] / energy
                laws.append(Law(depth, 2, allowed, "least", offset, particle.name))
        return tuple(laws)
