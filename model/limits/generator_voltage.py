"""Limit: the voltage that the generator can give behind its source resistance."""

from typing import TYPE_CHECKING

from model.generator import open_circuit
from model.law import Law
from model.limit import Limit
from model.voltage import PEAK_TO_PEAK

if TYPE_CHECKING:
    from model.conditions import Conditions


class GeneratorVoltage(Limit):
    """Open-circuit voltage, peak to peak, that brings the wanted voltage to the electrodes.

    V_open = V |1 + R_source Y|, Y the admittance that one terminal sees.
    """

    id = "generator_voltage"
    label = "generator voltage"
    why = "The generator cannot give more; the chip also divides its voltage with the source."
    source = "Thévenin source; the limit stands in Drive"
    remedy = "Use fewer or shorter bars, or an amplifier."
    hazard = "an overdriven or stronger generator can bring voltages that are hazardous to touch"
    unit = "V"

    def laws(self, at: "Conditions") -> tuple[Law, ...]:
        """One law, power 1."""
        drive = at.design.drive
        gain = PEAK_TO_PEAK * open_circuit(drive.source_resistance, at.terminal_admittance)
        return (Law(gain, 1, drive.voltage_limit),)
