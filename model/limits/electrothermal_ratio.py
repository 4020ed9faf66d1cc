"""Limit: electrothermal flow against the dielectrophoretic speed."""

from typing import TYPE_CHECKING

import numpy as np

from model.declare import Quantity
from model.law import Law
from model.limit import Limit

if TYPE_CHECKING:
    from model.conditions import Conditions


class ElectrothermalRatio(Limit):
    """Largest electrothermal speed over largest dielectrophoretic speed, both at the force height.

    u_ET grows with V⁴ and u_DEP with V², so that the ratio grows with V².
    """

    id = "electrothermal_ratio"
    label = "electrothermal flow"
    why = (
        "Liquid stirred by its own heating carries particles away from where the field wants them."
    )
    source = (
        "Ramos et al. 1998 J. Phys. D 31:2338; Castellanos et al. 2003 J. Phys. D 36:2584; "
        "threshold: common practice, no source"
    )
    remedy = "Work nearer to the electrodes, or with larger particles."
    unit = ""
    threshold = Quantity(
        "Electrothermal ratio",
        "Most of electrothermal over dielectrophoretic speed at the working height, each at its "
        "largest in any direction.",
        unit="",
        low="0.001",
        high="100",
        source="common practice, no source",
    )
    default = 0.3

    def laws(self, at: "Conditions") -> tuple[Law, ...]:
        """One law of power 2 for each particle to be collected; none where heat is not known."""
        if not at.patterns.has_heat:
            return ()
        allowed = at.design.threshold(self.id)
        laws = []
        for particle in at.design.collected:
            with np.errstate(divide="ignore"):  # no force at all: the ratio is infinite
                ratio = at.electrothermal_speed / at.dielectrophoretic_speed(particle)
            laws.append(Law(ratio, 2, allowed, subject=particle.name))
        return tuple(laws)
