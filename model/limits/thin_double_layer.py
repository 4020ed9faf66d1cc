"""Validity: double layers that are thin against every particle."""

from typing import TYPE_CHECKING

from model.declare import Quantity
from model.law import Law
from model.limit import Limit

if TYPE_CHECKING:
    from model.conditions import Conditions


class ThinDoubleLayer(Limit):
    """Debye length over the radius of the smallest particle, λ_D/a."""

    id = "thin_double_layer"
    label = "double layer against radius"
    why = (
        "The model puts a particle's charge layer on its surface; a thick one polarises by itself "
        "and makes the force another."
    )
    source = (
        "λ_D ≪ a in the theory of polarised particles, e.g. Jones 1995, Electromechanics of "
        "Particles; threshold: common practice, no source"
    )
    remedy = "Take the force on the smallest particles from measurements, or use larger ones."
    unit = ""
    threshold = Quantity(
        "Debye length over radius",
        "Most of the Debye length over the smallest radius; particles that are only watched do "
        "not count.",
        unit="",
        low="0.001",
        high="100",
        source="common practice, no source",
    )
    default = 0.1
    condition = True

    def laws(self, at: "Conditions") -> tuple[Law, ...]:
        """One condition, about the smallest particle that is not only watched."""
        smallest = min(at.design.involved, key=lambda particle: particle.equivalent_radius)
        length = at.medium.electrolyte.debye_length(at.liquid.permittivity)
        ratio = length / smallest.equivalent_radius
        return (Law(ratio, 0, at.design.threshold(self.id), subject=smallest.name),)
