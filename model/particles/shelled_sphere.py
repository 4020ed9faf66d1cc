"""Particle kind: a sphere in any number of concentric layers, e.g. a cell with its wall."""

from typing import Any, ClassVar, Literal

from model.arrays import Complex, Real
from model.layered import LayeredParticle
from model.layers import NEW_LAYERS
from model.medium import Medium
from model.outlines import LEAST_CORE, Outline, sphere
from model.particle import MEDIAN, Radius, Sample, radius_field


class ShelledSphere(LayeredParticle):
    """A spherical core in concentric layers."""

    usual: ClassVar[dict[str, Any]] = {
        "name": "cell",
        "radius": "5 um",
        "core": {"relative_permittivity": 60.0, "conductivity": "0.5 S/m"},
        "layers": [NEW_LAYERS["membrane"]],
    }

    kind: Literal["shelled-sphere"] = "shelled-sphere"
    radius: Radius

    @classmethod
    def sized(cls, radius: float) -> dict[str, Any]:
        """Its radius."""
        return radius_field(radius)

    @property
    def equivalent_radius(self) -> float:
        """The outer radius, m."""
        return self.radius

    @property
    def half_width(self) -> float:
        """The outer radius, m."""
        return self.radius

    @property
    def smallest_size(self) -> float:
        """Layers keep their thickness in a smaller particle, so they must leave a core."""
        return self._thickness / ((1.0 - LEAST_CORE) * self.radius)

    def outline(self, sample: Sample, dimensions: int) -> Outline:
        """A sphere."""
        return sphere(self.radius, sample.size)

    def polarisation(self, medium: Medium, sample: Sample = MEDIAN) -> Complex:
        """Polarisation factor K of the equal homogeneous sphere, layer by layer outward."""
        return self.factors(medium, sample)

    def membrane_gain(self, medium: Medium, sample: Sample = MEDIAN) -> Real | None:
        """Largest |ΔV|/E at the pole of all membranes, m."""
        return self.gains(medium, sample)
