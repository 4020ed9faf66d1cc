"""Limit: the highest temperature anywhere in the liquid."""

from typing import TYPE_CHECKING

from model.declare import Quantity
from model.law import Law
from model.limit import Limit

if TYPE_CHECKING:
    from model.conditions import Conditions


class HighestTemperature(Limit):
    """T = T_stage + ΔT of the hottest liquid, self-consistent as the limit of the rise has it."""

    id = "highest_temperature"
    label = "highest temperature"
    why = "Above body temperature mammalian cells are stressed; other samples have their own bound."
    source = "37 °C: common practice for mammalian cells, no source; set your organism's own"
    remedy = "Cool the stage, or the floor better."
    hazard = "hot liquid burns, boils and bursts bonds"
    unit = "degC"
    threshold = Quantity(
        "Highest temperature",
        "Most that the liquid may reach anywhere.",
        unit="degC",
        low="1 degC",
        high="99 degC",
        source="common practice, no source",
    )
    default = 310.15

    def laws(self, at: "Conditions") -> tuple[Law, ...]:
        """One law, power 2, that drives itself on, starting from the stage temperature.

        None where heat is not known.
        """
        if not at.patterns.has_heat:
            return ()
        stage, allowed = at.design.liquid.temperature, at.design.threshold(self.id)
        return (Law(at.heating, 2, allowed, offset=stage, growth=at.heat_growth),)
