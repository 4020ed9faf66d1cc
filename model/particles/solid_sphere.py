"""Particle kind: a homogeneous sphere with a conducting surface, e.g. a latex bead."""

from typing import Annotated, Any, ClassVar, Literal

import numpy as np
from numpy.typing import ArrayLike

from model.arrays import Complex, Real
from model.declare import Choice, Quantity
from model.layers import Material
from model.medium import Medium
from model.particle import MEDIAN, Particle, Radius, Sample, radius_field
from model.polarisation import clausius_mossotti
from model.surface_conduction import diffuse_conductance


class SolidSphere(Particle, Material):
    """A solid sphere whose surface adds 2K_s/a to the conductivity of its bulk.

    Source: C. T. O'Konski 1960 J. Phys. Chem. 64:605, for the surface conductance. It takes the
    surface as thin: the diffuse layer a small part of the radius.
    """

    usual: ClassVar[dict[str, Any]] = {
        "name": "bead",
        "radius": "3 um",
        "relative_permittivity": 2.55,
        "conductivity": "0 S/m",
        "surface_conductance": "1 nS",
    }

    kind: Literal["solid-sphere"] = "solid-sphere"
    radius: Radius
    surface: Annotated[
        Literal["conductance", "zeta-potential"],
        Choice(
            "Surface from",
            "Conductance: one number whatever the liquid. Zeta potential: the diffuse layer "
            "follows the ions of the liquid, and the Stern layer adds its own.",
            options={"conductance": "conductance", "zeta-potential": "zeta potential"},
        ),
    ] = "conductance"
    surface_conductance: Annotated[
        float,
        Quantity(
            "Surface conductance",
            "Along the surface; adds twice itself over the radius to the bulk's conductivity. "
            "Carboxylated latex has about 0.5 to 3 nS.",
            unit="nS",
            low="0 nS",
            high="1000 nS",
            source="latex: Arnold et al. 1987, Hughes et al. 1999, from memory",
            only_with=("surface", "conductance"),
        ),
    ] = 0.0
    zeta_potential: Annotated[
        float,
        Quantity(
            "Zeta potential",
            "At the plane of shear, in the liquid of this design.",
            unit="mV",
            low="-200 mV",
            high="200 mV",
            source="diffuse layer after Bikerman, with electro-osmosis",
            only_with=("surface", "zeta-potential"),
        ),
    ] = -0.05
    stern_conductance: Annotated[
        float,
        Quantity(
            "Stern conductance",
            "Along the layer beneath the plane of shear; hardly changes with the liquid.",
            unit="nS",
            low="0 nS",
            high="1000 nS",
            only_with=("surface", "zeta-potential"),
        ),
    ] = 0.0

    @classmethod
    def sized(cls, radius: float) -> dict[str, Any]:
        """Its radius."""
        return radius_field(radius)

    @property
    def equivalent_radius(self) -> float:
        """The radius, m."""
        return self.radius

    def conductance(self, medium: Medium) -> Real:
        """K_s, S, of the shape of the medium's conductivity, or a number if it does not matter."""
        if self.surface == "conductance":
            return np.asarray(self.surface_conductance)
        diffuse = diffuse_conductance(
            self.zeta_potential, medium.electrolyte, medium.permittivity, medium.viscosity
        )
        return np.asarray(diffuse + self.stern_conductance)

    def surface_share(self, medium: Medium, size: ArrayLike = 1.0) -> Real:
        """2K_s/a, what the surface adds to the conductivity of the bulk, S/m.

        >>> bead = SolidSphere(name="bead", radius=108e-9, relative_permittivity=2.55,
        ...                    conductivity=0.0, surface_conductance=1e-9)
        >>> water = Medium(np.array(1e6), 6.94e-10, np.array(1e-3))
        >>> round(float(bead.surface_share(water)), 7)
        0.0185185
        """
        return np.asarray(2.0 * self.conductance(medium) / (self.radius * np.asarray(size)))

    def polarisation(self, medium: Medium, sample: Sample = MEDIAN) -> Complex:
        """Polarisation factor K = (ε̃p − ε̃m)/(ε̃p + 2ε̃m)."""
        surface = self.surface_share(medium, sample.size) / medium.omega
        whole = self.complex_permittivity(medium.omega) - 1j * surface
        return clausius_mossotti(whole, medium.complex_permittivity)

    def membrane_gain(self, medium: Medium, sample: Sample = MEDIAN) -> None:
        """Give none: a solid sphere has no membrane."""
