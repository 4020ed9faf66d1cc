"""Task: hold some particles against the flow while others are let pass."""

from collections.abc import Iterable
from dataclasses import replace
from typing import TYPE_CHECKING, Literal

from model.holding import Holding
from model.law import Law, Words

if TYPE_CHECKING:
    from model.conditions import Conditions
    from model.design import Design


class Separate(Holding):
    """Hold those to be collected, and no force that holds those which must pass.

    A force of either sign holds; the balance of both is that of
    :class:`model.holding.Holding`.
    """

    label = "hold those to be collected"
    why = (
        "At the working height the strongest pull on them against the flow, anywhere over one "
        "period of the electrodes, must be at least the drag of the flow there."
    )
    remedy = "Change the flow, or choose a liquid in which the two differ more."
    separates = True

    kind: Literal["separate"] = "separate"

    def laws(self, at: "Conditions") -> tuple[Law, ...]:
        """Floors of those to be collected, then ceilings of those that must pass."""
        passing = (particle for particle in at.design.particles if particle.role == "pass")
        ceilings = [replace(self.catch(at, particle), sense="most") for particle in passing]
        return (*super().laws(at), *ceilings)

    def words(self, law: Law) -> Words:
        """Own ones for those that must pass."""
        if law.sense == "least":
            return super().words(law)
        return Words(
            "let pass",
            "Beyond it the field holds those too, anywhere over one period of the electrodes, "
            "which are to leave with the flow.",
            self.source,
            "Raise the flow, or choose a liquid in which the two differ more.",
        )

    def misfits(self, design: "Design") -> Iterable[tuple[str, str]]:
        """There must be somebody to let pass."""
        if all(particle.role != "pass" for particle in design.particles):
            yield (
                "task.kind",
                "separates particles, so that one must have the role collect and another pass",
            )
