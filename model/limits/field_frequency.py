"""Validity: a field that turns faster than particles move."""

from typing import TYPE_CHECKING

from model.declare import Quantity
from model.law import Law
from model.limit import Limit
from model.motion import diffusion_coefficient

if TYPE_CHECKING:
    from model.conditions import Conditions


class FieldFrequency(Limit):
    """Period of the drive over the time in which the smallest particle moves by its radius a.

    That time is the shorter of a/u, u the speed of the flow at the force height, and of a²/(2D) by
    diffusion.
    """

    id = "field_frequency"
    label = "period against motion"
    why = (
        "A particle follows the mean of the force only if it hardly moves while the field turns; "
        "else it shakes, and no mean tells where it goes."
    )
    source = (
        "mean over a period as in Jones 1995, Electromechanics of Particles; diffusion: Einstein "
        "1905; threshold: common practice, no source"
    )
    remedy = "Slow the flow."
    unit = ""
    threshold = Quantity(
        "Period over motion",
        "Most of the drive's period over the time in which flow or diffusion move the smallest "
        "particle by its radius; particles that are only watched do not count.",
        unit="",
        low="1e-6",
        high="10",
        source="common practice, no source",
    )
    default = 0.1
    condition = True

    def laws(self, at: "Conditions") -> tuple[Law, ...]:
        """One condition, about the smallest particle that is not only watched."""
        smallest = min(at.design.involved, key=lambda particle: particle.equivalent_radius)
        radius, warmth = smallest.equivalent_radius, at.design.liquid.temperature
        carried = at.flow_speed(at.design.task.force_height) / radius
        wandering = diffusion_coefficient(smallest.hydrodynamic_radius, at.liquid.viscosity, warmth)
        rate = max(carried, 2.0 * float(wandering) / radius**2)
        return (Law(rate / at.frequency, 0, at.design.threshold(self.id), subject=smallest.name),)
