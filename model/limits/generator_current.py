"""Limit: the current that the generator can give."""

from typing import TYPE_CHECKING

import numpy as np

from model.law import Law
from model.limit import Limit

if TYPE_CHECKING:
    from model.conditions import Conditions


class GeneratorCurrent(Limit):
    """I_rms = V_rms |Y| into each terminal, Y the admittance that one terminal sees."""

    id = "generator_current"
    label = "generator current"
    why = "An overloaded generator distorts, folds back or shuts down."
    source = "Ohm's law; the limit stands in Drive"
    remedy = "Use fewer or shorter bars, or an amplifier."
    hazard = "an overloaded generator and its leads can overheat"
    unit = "mA"

    def laws(self, at: "Conditions") -> tuple[Law, ...]:
        """One law, power 1."""
        return (Law(np.abs(at.terminal_admittance), 1, at.design.drive.current_limit),)
