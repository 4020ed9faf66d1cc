"""Limit: how much more voltage it takes to hold what must pass than what is collected."""

from typing import TYPE_CHECKING

import numpy as np

from model.declare import Quantity
from model.law import Law
from model.limit import Limit

if TYPE_CHECKING:
    from model.conditions import Conditions


class Contrast(Limit):
    """Least voltage that holds a particle that must pass, over the task's own least voltage.

    Both grow with the root of the flow, so that neither flow nor voltage changes the ratio. In
    liquid at rest, where anything holds, it is 0.
    """

    id = "contrast"
    label = "contrast"
    why = (
        "Where both are held from nearly the same voltage on, a little spread of size or of the "
        "drive mixes them."
    )
    source = (
        "ratio of the voltages of the balance of force and drag; threshold: common practice, "
        "no source"
    )
    remedy = "Choose a liquid in which the two differ more, or particles that differ in size."
    unit = ""
    threshold = Quantity(
        "Contrast",
        "Least ratio of the voltage that holds those that must pass to the one that holds those "
        "to be collected; only where the task separates.",
        unit="",
        low="0.01",
        high="100",
        source="common practice, no source",
    )
    default = 1.2
    condition = True

    def laws(self, at: "Conditions") -> tuple[Law, ...]:
        """One condition for each particle that must pass; none where the task separates none."""
        task, allowed = at.design.task, at.design.threshold(self.id)
        if not task.separates:
            return ()
        floors = [law.bound() for law in task.laws(at) if law.sense == "least"]
        needed = np.maximum.reduce(np.broadcast_arrays(*floors))
        laws = []
        for particle in at.design.particles:
            if particle.role == "pass":
                with np.errstate(divide="ignore", invalid="ignore"):
                    ratio = task.catch(at, particle).bound() / needed
                # nothing holds those to be collected, or anything holds both
                ratio = np.where(np.isnan(ratio), 0.0, ratio)
                laws.append(Law(ratio, 0, allowed, sense="least", subject=particle.name))
        return tuple(laws)
