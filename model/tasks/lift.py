"""Task: lift particles to a height against their weight."""

from collections.abc import Iterable
from typing import TYPE_CHECKING, Annotated, Literal

import numpy as np

from model import levitation
from model.arrays import Real
from model.declare import Quantity
from model.law import Law
from model.motion import net_weight
from model.quantity import format_quantity, format_si
from model.task import Task

if TYPE_CHECKING:
    from model.conditions import Conditions
    from model.design import Design
    from model.particle import Particle


class Lift(Task):
    """Least upward force over a period ≥ net weight at the wanted height, and stable there.

    Stable where that force falls with height: a particle that rises is lifted less. Where it
    does not, no voltage lifts to that height. Particles no heavier than the liquid need no force.
    """

    label = "lift against the weight"
    why = (
        "At the wanted height the upward force must carry the net weight even where it is least "
        "over one period of the electrodes, and fall with height, so that the particle stays."
    )
    source = "balance of force and weight: Jones 1995, Electromechanics of Particles, chapter 3"
    remedy = "Lower the wanted height, widen the pitch, or make the liquid denser."
    success = "lifted"
    force_name = "least upward force over a period"
    directions = ("up", "down")

    kind: Literal["lift"] = "lift"
    working_height: Annotated[
        float,
        Quantity(
            "Wanted height",
            "Of particle centres above the floor, to be kept against their weight.",
            unit="um",
            low="0.2 um",
            high="2 mm",
        ),
    ] = 20e-6

    def laws(self, at: "Conditions") -> tuple[Law, ...]:
        """One law of power 2 for each particle to be collected; force in N."""
        return tuple(self.catch(at, particle) for particle in at.design.collected)

    def catch(self, at: "Conditions", particle: "Particle") -> Law:
        """The same balance for any particle."""
        lift = levitation.steady_lift(at, particle)
        weight = max(_weight(at, particle), 0.0)
        return Law(lift, 2, weight, sense="least", subject=particle.name)

    def force(self, at: "Conditions", particle: "Particle") -> Real:
        """Least upward force over a period, whether steady or not."""
        return levitation.least_lift(at, particle, at.line)

    def trap(self, at: "Conditions", particle: "Particle") -> tuple[Real, float] | None:
        """What it takes to push the particle down to the floor, where that is easiest.

        Upwards its weight holds it. None for a particle that needs no lift.
        """
        weight = _weight(at, particle)
        if weight <= 0.0:
            return None
        floor, energy = levitation.climb(at, particle)
        return energy, -weight * max(self.working_height - floor, 0.0)

    def statements(self, at: "Conditions") -> tuple[str, ...]:
        """One for each particle to be collected."""
        return tuple(self._statement(at, particle) for particle in at.design.collected)

    def _statement(self, at: "Conditions", particle: "Particle") -> str:
        weight = _weight(at, particle)
        if weight <= 0.0:
            return f"{particle.name} is no heavier than the liquid and needs no lift."
        height = format_quantity(self.working_height, "um", 3)
        words = (
            f"{particle.name} needs at least {format_si(weight, 'N')} upwards, its net weight, "
            f"taken {height} up where the force is least over one period of the electrodes"
        )
        if not levitation.steady_lift(at, particle).any():
            return f"{words}; there no force lifts it and falls with height."
        return f"{words}; the force falls with height there, so that it stays."

    def wanted_sign(self, particle: "Particle") -> int:
        """Either: whether the force lifts and is steady decides."""
        return 0

    @property
    def force_height(self) -> float:
        """The wanted height."""
        return self.working_height

    def may_touch(self, particle: "Particle") -> bool:
        """No: what is lifted is kept from the electrodes."""
        return False

    def misfits(self, design: "Design") -> Iterable[tuple[str, str]]:
        """A field that is uniform over the depth lifts nothing."""
        if design.chip.view == "plan":
            yield (
                "task.kind",
                "lifts particles, but in this layout the field is the same over the depth and has "
                "no upward force; it needs a chip in cross-section",
            )


def _weight(at: "Conditions", particle: "Particle") -> float:
    """Net weight in the liquid, N."""
    excess = particle.density - at.liquid.density
    return float(np.asarray(net_weight(particle.equivalent_radius, excess)))
