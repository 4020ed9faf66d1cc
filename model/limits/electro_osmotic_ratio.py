"""Limit: electro-osmotic flow against the dielectrophoretic speed."""

from typing import TYPE_CHECKING

import numpy as np

from model.declare import Quantity
from model.law import Law
from model.limit import Limit

if TYPE_CHECKING:
    from model.conditions import Conditions


class ElectroOsmoticRatio(Limit):
    """Largest electro-osmotic over largest dielectrophoretic speed, both at the force height.

    Both grow with V², so that no voltage changes the ratio. The flow is that of the linear theory,
    which overstates it from some tens of millivolts over the diffuse layer on.
    """

    id = "electro_osmotic_ratio"
    label = "electro-osmotic flow"
    why = (
        "Liquid that slips along the electrodes carries particles past where the field wants them."
    )
    source = (
        "Green et al. 2002 Phys. Rev. E 66:026305, from memory; threshold: common practice, no "
        "source"
    )
    remedy = "Work farther from the electrodes, with larger particles, or cover the electrodes."
    unit = ""
    threshold = Quantity(
        "Electro-osmotic ratio",
        "Most of electro-osmotic over dielectrophoretic speed at the working height, each at its "
        "largest in any direction.",
        unit="",
        low="0.001",
        high="1000",
        source="common practice, no source",
    )
    default = 1.0
    condition = True

    def laws(self, at: "Conditions") -> tuple[Law, ...]:
        """One condition for each particle to be collected; none where the flow is not known."""
        speed = at.electro_osmotic_speed
        if speed is None:
            return ()
        allowed = at.design.threshold(self.id)
        laws = []
        for particle in at.design.collected:
            wanted = at.dielectrophoretic_speed(particle)
            with np.errstate(divide="ignore", invalid="ignore"):
                ratio = np.where(wanted > 0.0, speed / wanted, np.inf)  # no force at all
            laws.append(Law(ratio, 0, allowed, subject=particle.name))
        return tuple(laws)
