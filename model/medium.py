"""The liquid as a particle in it meets it, at many frequencies and conductivities at once."""

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from model.arrays import Complex, Real
from model.liquid.electrolyte import Electrolyte, simple_salt


@dataclass(frozen=True)
class Medium:
    """What surrounds a particle, SI.

    Parameters
    ----------
    omega
        Angular frequency, rad/s, the last axis.
    permittivity
        F/m.
    conductivity
        S/m, of any shape that broadcasts with frequency as the last axis.
    viscosity
        Pa s; by default water's at 25 °C.
    temperature
        K.
    ions
        Gives the ions of a liquid of some conductivity, for particles with charged surfaces.
    """

    omega: Real
    permittivity: float
    conductivity: Real
    viscosity: float = 0.89e-3
    temperature: float = 298.15
    ions: Callable[[Real], Electrolyte] = simple_salt

    @cached_property
    def complex_permittivity(self) -> Complex:
        """ε̃ = ε − jσ/ω, F/m."""
        return np.asarray(self.permittivity - 1j * (self.conductivity / self.omega))

    @cached_property
    def electrolyte(self) -> Electrolyte:
        """Its ions, with concentrations of the shape (n_ion, *conductivity.shape)."""
        return self.ions(np.asarray(self.conductivity))
