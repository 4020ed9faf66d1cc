"""Particle kind: a sphere in any number of concentric layers, e.g. a cell with its wall."""

from typing import Literal

import numpy as np
from numpy.typing import ArrayLike
from pydantic import model_validator
from pydantic_core import PydanticCustomError

from model.arrays import Complex, Real
from model.layers import Core, Layers, Membrane
from model.particle import Particle, Radius
from model.polarisation import (
    Shell,
    Stack,
    ThinShell,
    clausius_mossotti,
    effective_permittivities,
    pole_voltages,
)
from model.quantity import format_quantity

#: Least radius of the core over that of the particle; below it rounding would decide.
LEAST_CORE = 1e-6


class ShelledSphere(Particle):
    """A core in concentric layers, listed outward: cytoplasm, membrane, wall and so on."""

    kind: Literal["shelled-sphere"] = "shelled-sphere"
    radius: Radius
    core: Core
    layers: Layers

    @model_validator(mode="after")
    def _core_is_left(self) -> "ShelledSphere":
        """Layers must leave a core."""
        thickness = self._thickness
        if thickness > (1.0 - LEAST_CORE) * self.radius:
            total, radius = (
                format_quantity(length, "um", 4) for length in (thickness, self.radius)
            )
            problem = f"are {total} thick together, which leaves no core in a radius of {radius}"
            raise PydanticCustomError(
                "declared", "{problem}", {"problem": problem, "path": "layers"}
            )
        return self

    @property
    def _thickness(self) -> float:
        """Of all layers together, m."""
        return sum(layer.thickness for layer in self.layers)

    @property
    def equivalent_radius(self) -> float:
        """The outer radius, m."""
        return self.radius

    @property
    def smallest_size(self) -> float:
        """Layers keep their thickness in a smaller particle, so they must leave a core."""
        return self._thickness / ((1.0 - LEAST_CORE) * self.radius)

    def polarisation(self, omega: Real, medium: Complex, size: ArrayLike = 1.0) -> Complex:
        """Polarisation factor K of the equal homogeneous sphere, layer by layer outward."""
        core, stack = self._resolved(omega, size)
        return clausius_mossotti(effective_permittivities(core, stack)[-1], medium)

    def membrane_gain(self, omega: Real, medium: Complex, size: ArrayLike = 1.0) -> Real | None:
        """Largest |ΔV|/E at the pole of all membranes, m.

        Membranes are the layers given by capacitance and conductance, and those at most 25 nm
        thick (bilayers and envelopes).
        """
        if not any(layer.is_membrane for layer in self.layers):
            return None
        core, stack = self._resolved(omega, size)
        voltages = pole_voltages(core, stack, medium, self.radius * np.asarray(size))
        gains = [
            np.abs(voltage)
            for layer, voltage in zip(self.layers, voltages, strict=True)
            if layer.is_membrane
        ]
        return np.asarray(np.maximum.reduce(gains))

    def _resolved(self, omega: Real, size: ArrayLike) -> tuple[Complex, Stack]:
        """ε̃ of the core, and the layers outward with radii and ε̃ or c̃."""
        if not np.all(np.asarray(size) >= self.smallest_size):  # NaN fails too
            raise ValueError(f"sizes must be at least {self.smallest_size:.6g} to leave a core")
        outer = self.radius * np.asarray(size)
        stack: list[Shell | ThinShell] = []
        for layer in reversed(self.layers):
            if isinstance(layer, Membrane):
                stack.append(ThinShell(outer, layer.complex_capacitance(omega)))
            else:
                inner = outer - layer.thickness
                stack.append(Shell(outer, inner, layer.complex_permittivity(omega)))
                outer = inner
        return self.core.complex_permittivity(omega), stack[::-1]
