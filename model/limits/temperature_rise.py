"""Limit: how much warmer than the stage the liquid may become."""

from typing import TYPE_CHECKING

from model.declare import Quantity
from model.law import Law
from model.limit import Limit

if TYPE_CHECKING:
    from model.conditions import Conditions


class TemperatureRise(Limit):
    """ΔT = ΔT₀/(1 − gΔT₀) at the hottest point of the liquid, ΔT₀ = duty · Θ_max σ V_rms²/k.

    σ is that at the stage temperature; g holds what its rise with temperature does to the heat,
    exact to second order (`model.fields.feedback`). Beyond, it errs to the warm side where g > 0
    (`model.growth`): from gΔT₀ = 1 on it finds no steady temperature.
    """

    id = "temperature_rise"
    label = "temperature rise"
    why = "Warm liquid flows, changes conductivity and harms cells."
    source = (
        "Joule heating, Ramos et al. 1998 J. Phys. D 31:2338; threshold: common practice, no source"
    )
    remedy = "Cool the floor better: held, thinner, or of a material that conducts heat better."
    hazard = "hot liquid burns, boils and bursts bonds"
    unit = "K"
    threshold = Quantity(
        "Temperature rise",
        "Most that the hottest liquid may be warmer than the stage.",
        unit="K",
        low="0.01 K",
        high="80 K",
        source="common practice, no source",
    )
    default = 4.0

    def laws(self, at: "Conditions") -> tuple[Law, ...]:
        """One law, power 2, that drives itself on; none where heat is not known."""
        if not at.patterns.has_heat:
            return ()
        allowed = at.design.threshold(self.id)
        return (Law(at.heating, 2, allowed, growth=at.heat_growth),)
