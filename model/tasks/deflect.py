"""Task: lead particles sideways along bars that stand at an angle to the flow."""

import math
from collections.abc import Iterable
from typing import TYPE_CHECKING, Annotated, Literal

from model.declare import Quantity
from model.holding import Holding
from model.motion import drag_held, drag_parallel
from model.quantity import canonical, format_quantity, format_si

if TYPE_CHECKING:
    from model.conditions import Conditions
    from model.design import Design
    from model.particle import Particle


class Deflect(Holding):
    """Hold particles against the flow across the bars, u·sin(angle), so that they slide along.

    The section is the one across the bars; the balance that of :class:`model.holding.Holding`.
    """

    label = "deflect along the bars"
    why = (
        "At the working height the strongest pull across the bars, anywhere over one period, must "
        "be at least the drag of that part of the flow which runs across them."
    )
    remedy = "Slow the flow, or lower the angle, the working height or the bar pitch."
    success = "deflected"

    kind: Literal["deflect"] = "deflect"
    angle: Annotated[
        float,
        Quantity(
            "Angle",
            "Between the bars and the flow; 90 deg stands across it. Resistance and current stay "
            "those of bars as long as the channel is wide.",
            unit="deg",
            low="0 deg",
            high="90 deg",
        ),
    ] = canonical(math.radians(45.0), "deg")

    def flow_to_withstand(self, at: "Conditions") -> float:
        """The part of the flow that runs across the bars, m/s."""
        return super().flow_to_withstand(at) * math.sin(self.angle)

    def sideways_speed(self, at: "Conditions", particle: "Particle") -> float:
        """Speed across the channel of a particle that slides along a bar, m/s.

        The flow along the bar, u·cos(angle), moves it by the ratio of the wall factors of a sphere
        at rest and of one that moves; of that, sin(angle) leads sideways.
        """
        relative = max(at.wall_distance / particle.hydrodynamic_radius, 1.0)
        along = at.flow_speed(self.working_height) * math.cos(self.angle)
        lag = float(drag_held(relative) / drag_parallel(relative))
        return along * lag * math.sin(self.angle)

    def statements(self, at: "Conditions") -> tuple[str, ...]:
        """What it takes, and how fast the particles go sideways."""
        angle = format_quantity(self.angle, "deg", 3)
        speeds = (
            f"{particle.name} slides along bars at {angle} to the flow and goes sideways at "
            f"{format_si(self.sideways_speed(at, particle), 'm/s')}."
            for particle in at.design.collected
        )
        return (*super().statements(at), *speeds)

    def misfits(self, design: "Design") -> Iterable[tuple[str, str]]:
        """A chip in plan has no bars to slide along."""
        if design.chip.view == "plan":
            yield (
                "task.kind",
                "deflects along bars, which this layout does not have; it needs a chip in "
                "cross-section",
            )
