"""Limit: the size of particles against the gap between electrodes."""

from typing import TYPE_CHECKING

import numpy as np

from model.declare import Quantity
from model.law import Law
from model.limit import Limit

if TYPE_CHECKING:
    from model.conditions import Conditions


class ParticleSize(Limit):
    """Diameter of the sphere of equal volume over the narrowest gap between electrodes."""

    id = "particle_size"
    label = "particle size against gap"
    why = (
        "A particle wider than the gap bridges it: it can block the opening, and no law for small "
        "particles holds."
    )
    source = "geometry; threshold: common practice, no source"
    remedy = "Widen the gap between the electrodes."
    unit = ""
    threshold = Quantity(
        "Diameter over gap",
        "Most of each particle's diameter over the narrowest gap between electrodes; particles "
        "that are only watched do not count.",
        unit="",
        low="0.001",
        high="100",
        source="common practice, no source",
    )
    default = 1.0
    condition = True
    decisive = True

    def laws(self, at: "Conditions") -> tuple[Law, ...]:
        """One condition for each particle that is not only watched."""
        allowed, gap = at.design.threshold(self.id), at.design.chip.narrowest
        return tuple(
            Law(np.array(2.0 * one.equivalent_radius / gap), 0, allowed, subject=one.name)
            for one in at.design.involved
        )
