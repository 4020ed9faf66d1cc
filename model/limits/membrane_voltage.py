"""Limit: the voltage that the field induces across the membranes of cells that must live."""

from typing import TYPE_CHECKING

from model.declare import Quantity
from model.law import Law
from model.limit import Limit
from model.voltage import PEAK

if TYPE_CHECKING:
    from model.conditions import Conditions


class MembraneVoltage(Limit):
    """Peak induced voltage at the pole, at the strongest field that the cell has to endure.

    The field counts with its growth across the cell (see ``Conditions.exposure``).

    That is the worst place that the task brings it to, e.g. an electrode edge that it touches.
    """

    id = "membrane_voltage"
    label = "membrane voltage"
    why = "A membrane driven too far opens pores; the cell leaks, swells or dies."
    source = (
        "pores from 0.2 V (long exposure) to 1 V (microseconds): Teissié and Rols 1993 "
        "Biophys. J. 65:409, Weaver and Chizmadzhev 1996, from memory"
    )
    remedy = "Keep the cells farther from the edges."
    unit = "V"
    threshold = Quantity(
        "Membrane voltage, peak",
        "Most peak voltage that the field may add across a membrane.",
        unit="V",
        low="0.001 V",
        high="5 V",
        source="between published pore thresholds and rest, common practice, no source",
    )
    default = 0.3

    def laws(self, at: "Conditions") -> tuple[Law, ...]:
        """One law of power 1 for each particle that must live and has a membrane."""
        allowed = at.design.threshold(self.id)
        laws = []
        for particle in at.design.particles:
            gain = at.membrane_gain(particle) if particle.must_live else None
            if gain is not None:
                peak = PEAK * at.exposure(particle) * gain
                laws.append(Law(peak, 1, allowed, subject=particle.name))
        return tuple(laws)
