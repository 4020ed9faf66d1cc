"""Task: hold particles on the electrodes against the flow."""

from typing import TYPE_CHECKING, Annotated, Literal

import numpy as np

from model.arrays import Real
from model.declare import Choice, Quantity
from model.law import Law
from model.motion import drag_held, stokes_drag
from model.task import Task

if TYPE_CHECKING:
    from model.conditions import Conditions
    from model.particle import Particle


class Hold(Task):
    """Largest retaining force along the flow ≥ drag of the local flow on a sphere held still.

    Both are taken at the working height, the force over one period of the electrodes, the flow
    speed at mid-width of the channel, the drag with the correction of the nearer wall for a held
    sphere (Goldman, Cox and Brenner 1967).
    """

    label = "hold against the flow"
    why = (
        "At the working height the strongest pull against the flow, anywhere over one period of "
        "the electrodes, must be at least the drag of the flow there."
    )
    remedy = "Raise the voltage, slow the flow, or lower the working height or the bar pitch."
    source = "force: Pethig 2010 Biomicrofluidics 4:022811; drag: Goldman, Cox, Brenner 1967"

    kind: Literal["hold"] = "hold"
    dielectrophoresis: Annotated[
        Literal["positive", "negative"],
        Choice(
            "Dielectrophoresis",
            "Positive: drawn to the strong field at the electrode edges. Negative: pushed to the "
            "weak field between.",
            options={"positive": "positive", "negative": "negative"},
        ),
    ] = "positive"
    working_height: Annotated[
        float,
        Quantity(
            "Working height",
            "Of particle centres above the floor, where force and drag are compared.",
            unit="um",
            low="0.2 um",
            high="2 mm",
        ),
    ] = 10e-6

    def laws(self, at: "Conditions") -> tuple[Law, ...]:
        """One law of power 2 for each particle to be collected; force in N."""
        laws = []
        for particle in at.design.collected:
            pull = self.wanted_sign(particle) * at.force_along_flow(particle)
            laws.append(self._against_drag(at, particle, np.maximum(pull, 0.0)))
        return tuple(laws)

    def catch(self, at: "Conditions", particle: "Particle") -> Law:
        """The same balance for a force of either sign: weak field between bars holds too."""
        return self._against_drag(at, particle, np.abs(at.force_along_flow(particle)))

    def _against_drag(self, at: "Conditions", particle: "Particle", pull: Real) -> Law:
        """Pull per V² against the drag on the particle at rest in the flow."""
        radius = particle.hydrodynamic_radius
        speed = at.flow_speed(self.working_height)
        free = stokes_drag(radius, at.liquid.viscosity, speed)
        relative = max(at.wall_distance / radius, 1.0)  # one too large to pass there touches
        drag = float(free * drag_held(relative))
        return Law(pull, 2, drag, sense="least", subject=particle.name)

    def wanted_sign(self, particle: "Particle") -> int:
        """The same for every particle."""
        return 1 if self.dielectrophoresis == "positive" else -1

    @property
    def force_height(self) -> float:
        """The working height."""
        return self.working_height

    def may_touch(self, particle: "Particle") -> bool:
        """If the task draws to the electrodes.

        Touching is the worst place, also for a particle that is pushed away: it meets it only
        if it settles there.
        """
        return self.dielectrophoresis == "positive"
