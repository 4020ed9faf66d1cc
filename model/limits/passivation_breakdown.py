"""Limit: the field in an insulating film on the electrodes."""

from typing import TYPE_CHECKING

from model.law import Law
from model.limit import Limit
from model.voltage import PEAK

if TYPE_CHECKING:
    from model.conditions import Conditions


class PassivationBreakdown(Limit):
    """Peak field across the film where it is largest: √2 · V_film/thickness."""

    id = "passivation_breakdown"
    label = "film breakdown"
    why = "A film that breaks down is pierced for good, and bare metal meets the liquid."
    source = "field across a thin film; its strength stands with the electrodes"
    remedy = "Use a thicker or stronger film."
    unit = "V/um"

    def laws(self, at: "Conditions") -> tuple[Law, ...]:
        """One law of power 1 if there is a film, and it is known where the electrodes are."""
        electrode = at.design.electrode
        if electrode.film_thickness is None or not at.patterns.response.has_places:
            return ()
        field = PEAK * at.circuit.film_voltage / electrode.film_thickness
        return (Law(field, 1, electrode.film_strength),)
