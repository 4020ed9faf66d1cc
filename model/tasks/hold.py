"""Task: hold particles on the electrodes against the flow."""

from typing import TYPE_CHECKING, Annotated, Literal

import numpy as np

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
            "Of particle centres above the electrode plane, where force and drag are compared.",
            unit="um",
            low="0.2 um",
            high="2 mm",
        ),
    ] = 10e-6

    def laws(self, at: "Conditions") -> tuple[Law, ...]:
        """One law of power 2 for each particle to be collected; force in N."""
        height = self.working_height
        laws = []
        for particle in at.design.collected:
            radius = particle.equivalent_radius
            drag = stokes_drag(radius, at.liquid.viscosity, at.flow_speed(height)) * drag_held(
                at.wall_distance / radius
            )
            pull = np.maximum(self.wanted_sign(particle) * at.force_along_flow(particle), 0.0)
            laws.append(Law(pull, 2, float(drag), sense="least", subject=particle.name))
        return tuple(laws)

    def wanted_sign(self, particle: "Particle") -> int:
        """The same for every particle."""
        return 1 if self.dielectrophoresis == "positive" else -1

    @property
    def force_height(self) -> float:
        """The working height."""
        return self.working_height

    def exposure_height(self, particle: "Particle") -> float:
        """Touching the floor if the task draws to the electrodes, else the working height.

        The first is the worst place, also for a particle that is pushed away: it meets it only
        if it settles there.
        """
        if self.dielectrophoresis == "positive":
            return min(particle.equivalent_radius, self.working_height)
        return self.working_height
