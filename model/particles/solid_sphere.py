"""Particle kind: a homogeneous sphere with a conducting surface, e.g. a latex bead."""

from typing import Annotated, Literal

import numpy as np
from numpy.typing import ArrayLike
from scipy.constants import epsilon_0

from model.arrays import Complex, Real
from model.declare import Quantity
from model.layers import Conductivity, RelativePermittivity
from model.particle import Particle, Radius
from model.polarisation import clausius_mossotti, complex_permittivity


class SolidSphere(Particle):
    """A solid sphere whose surface adds 2K_s/a to the conductivity of its bulk.

    Source: C. T. O'Konski 1960 J. Phys. Chem. 64:605, for the surface conductance.
    """

    kind: Literal["solid-sphere"] = "solid-sphere"
    radius: Radius
    relative_permittivity: RelativePermittivity
    conductivity: Conductivity
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
        ),
    ] = 0.0

    @property
    def equivalent_radius(self) -> float:
        """The radius, m."""
        return self.radius

    def total_conductivity(self, size: ArrayLike = 1.0) -> Real:
        """σ_p = σ_bulk + 2K_s/a, S/m, the shape of `size`.

        >>> bead = SolidSphere(name="bead", radius=108e-9, relative_permittivity=2.55,
        ...                    conductivity=0.0, surface_conductance=1e-9)
        >>> round(float(bead.total_conductivity()), 7)
        0.0185185
        """
        radius = self.radius * np.asarray(size)
        return np.asarray(self.conductivity + 2.0 * self.surface_conductance / radius)

    def polarisation(self, omega: Real, medium: Complex, size: ArrayLike = 1.0) -> Complex:
        """Polarisation factor K = (ε̃p − ε̃m)/(ε̃p + 2ε̃m)."""
        permittivity = epsilon_0 * self.relative_permittivity
        sphere = complex_permittivity(permittivity, self.total_conductivity(size), omega)
        return clausius_mossotti(sphere, medium)

    def membrane_gain(self, omega: Real, medium: Complex, size: ArrayLike = 1.0) -> None:
        """Give none: a solid sphere has no membrane."""
