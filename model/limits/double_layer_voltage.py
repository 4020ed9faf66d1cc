"""Limit: the voltage across the double layers, beyond which water is electrolysed."""

from typing import TYPE_CHECKING

from model.declare import Quantity
from model.law import Law
from model.limit import Limit
from model.voltage import PEAK

if TYPE_CHECKING:
    from model.conditions import Conditions


class DoubleLayerVoltage(Limit):
    """Peak voltage across the double layer where it is largest, at an electrode edge.

    √2 · V_rms · |V − φ| per volt from the modes of the electrodes, without the part that stands
    over a film.
    """

    id = "double_layer_voltage"
    label = "double-layer voltage"
    why = (
        "Beyond it electrons cross between metal and water: gas forms, pH shifts, metal dissolves."
    )
    source = (
        "electrolysis of water needs 1.23 V between two electrodes at rest, thermodynamics; a fast "
        "drive reverses before products leave and allows more: common practice, no source"
    )
    remedy = "Cover the electrodes with a film, or use rough, porous metal."
    hazard = "electrolysis makes gas that can burn, burst a bond and change what the liquid is"
    unit = "V"
    threshold = Quantity(
        "Double-layer voltage, peak",
        "Most peak voltage across the double layer of any electrode.",
        unit="V",
        low="0.001 V",
        high="100 V",
        source="near the electrolysis of water, common practice, no source",
    )
    default = 1.0

    def laws(self, at: "Conditions") -> tuple[Law, ...]:
        """One law, power 1; none if it is not known where the electrodes are."""
        if not at.patterns.response.has_places:
            return ()
        peak = PEAK * at.circuit.double_layer_voltage
        return (Law(peak, 1, at.design.threshold(self.id)),)
