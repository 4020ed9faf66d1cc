"""Validity: walls that carry little of the current."""

from typing import TYPE_CHECKING

from model.declare import Quantity
from model.law import Law
from model.limit import Limit

if TYPE_CHECKING:
    from model.conditions import Conditions


class WallAdmittance(Limit):
    """Current through floor and lid over that through the liquid, |Y_walls|/|Y_liquid|."""

    id = "wall_admittance"
    label = "current in the walls"
    why = (
        "Walls that conduct or displace as the liquid does draw the field aside, and its pattern "
        "is solved without them."
    )
    source = "first order in the walls' admittance; threshold: common practice, no source"
    remedy = "Use a floor and lid of lower permittivity that do not conduct, e.g. fused silica."
    unit = ""
    threshold = Quantity(
        "Current in the walls",
        "Most of the current through floor and lid over that through the liquid.",
        unit="",
        low="0.001",
        high="100",
        source="common practice, no source",
    )
    default = 0.2
    condition = True

    def laws(self, at: "Conditions") -> tuple[Law, ...]:
        """One condition; none in plan and of field maps, where no walls are in the section."""
        if not at.patterns.wall_factors:
            return ()
        return (Law(at.circuit.wall_ratio, 0, at.design.threshold(self.id)),)
