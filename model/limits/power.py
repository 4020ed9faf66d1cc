"""Limit: the power that the whole chip turns into heat."""

from typing import TYPE_CHECKING

from model.declare import Quantity
from model.law import Law
from model.limit import Limit

if TYPE_CHECKING:
    from model.conditions import Conditions


class Power(Limit):
    """P = duty · V_rms² · Re Y, Y the admittance of all phases together."""

    id = "power"
    label = "electrical power"
    why = "All of it becomes heat that the holder of the chip has to take away."
    source = "Joule's law; threshold: common practice, no source"
    remedy = "Use fewer or shorter bars, or a shorter duty."
    unit = "mW"
    threshold = Quantity(
        "Power",
        "Most that the whole chip may take, mean over the duty.",
        unit="mW",
        low="0.001 mW",
        high="1 kW",
        source="common practice, no source",
    )
    default = 1.0
    hazard = "a chip or holder that takes up more heat than it sheds becomes hot to touch"

    def laws(self, at: "Conditions") -> tuple[Law, ...]:
        """One law, power 2."""
        taken = at.admittance.real * at.design.drive.duty
        return (Law(taken, 2, at.design.threshold(self.id)),)
