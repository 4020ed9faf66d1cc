"""What particles with a core in layers share, whatever their outline."""

from abc import abstractmethod
from typing import Annotated

import numpy as np
from pydantic import model_validator
from pydantic_core import PydanticCustomError

from model.arrays import Complex, Real
from model.declare import Quantity
from model.layers import Core, Layers, Membrane
from model.medium import Medium
from model.outlines import Outline
from model.particle import MEDIAN, Particle, Sample
from model.polarisation import (
    Shell,
    Stack,
    ThinShell,
    effective_permittivities,
    polarisation_factor,
    pole_voltages,
)
from model.quantity import format_quantity


class LayeredParticle(Particle):
    """A core in layers, listed outward: cytoplasm, membrane, wall and so on."""

    membrane_cv: Annotated[
        float,
        Quantity(
            "Variation of membranes",
            "Coefficient of variation of the membrane capacitance, lognormal about the median; 0 "
            "for equal ones.",
            unit="",
            low="0",
            high="1",
        ),
    ] = 0.0
    core: Core
    layers: Layers

    @model_validator(mode="after")
    def _core_is_left(self) -> "LayeredParticle":
        """Layers must leave a core."""
        if self.smallest_size > 1.0:
            total, radius = (
                format_quantity(length, "um", 4) for length in (self._thickness, self.half_width)
            )
            problem = f"are {total} thick together, which leaves no core in a radius of {radius}"
            raise PydanticCustomError(
                "declared", "{problem}", {"problem": problem, "path": "layers"}
            )
        return self

    @property
    def membrane_spread(self) -> float:
        """Coefficient of variation of the membrane capacitance; 0 without a membrane."""
        return self.membrane_cv if any(layer.is_membrane for layer in self.layers) else 0.0

    @property
    def _thickness(self) -> float:
        """Of all layers together, m."""
        return sum(layer.thickness for layer in self.layers)

    @property
    @abstractmethod
    def half_width(self) -> float:
        """Least distance of the surface from the centre, m."""

    @abstractmethod
    def outline(self, sample: Sample, dimensions: int) -> Outline:
        """Outer surface, with arrays of at least so many dimensions behind the axes."""

    def factors(self, medium: Medium, sample: Sample = MEDIAN) -> Complex:
        """Polarisation factor along each axis of the outline."""
        core, stack, outline = self._resolved(medium, sample)
        whole = effective_permittivities(core, stack)[-1]
        return polarisation_factor(whole, medium.complex_permittivity, outline.depolarisation)

    def gains(self, medium: Medium, sample: Sample = MEDIAN) -> Real | None:
        """Largest |ΔV|/E of all membranes at the pole of each axis, m; None without a membrane.

        Membranes are the layers given by capacitance and conductance, and those at most 25 nm
        thick (bilayers and envelopes).
        """
        if not any(layer.is_membrane for layer in self.layers):
            return None
        core, stack, outline = self._resolved(medium, sample)
        voltages = pole_voltages(
            core, stack, medium.complex_permittivity, outline.poles, outline.depolarisation
        )
        gains = [
            np.abs(voltage)
            for layer, voltage in zip(self.layers, voltages, strict=True)
            if layer.is_membrane
        ]
        return np.asarray(np.maximum.reduce(gains))

    def _resolved(self, medium: Medium, sample: Sample) -> tuple[Complex, Stack, Outline]:
        """ε̃ of the core, the layers outward, and the outer surface."""
        omega = medium.omega
        dimensions = max(map(np.ndim, (medium.complex_permittivity, sample.size, sample.membrane)))
        whole = outline = self.outline(sample, dimensions)
        stack: list[Shell | ThinShell] = []
        for layer in reversed(self.layers):
            more = np.asarray(sample.membrane) - 1.0  # of the capacitance
            if isinstance(layer, Membrane):
                capacitance = layer.complex_capacitance(omega) + more * layer.capacitance
                stack.append(ThinShell(capacitance, outline.thin_length))
            else:
                permittivity = layer.complex_permittivity(omega)
                if layer.is_membrane:
                    permittivity = permittivity + more * layer.permittivity
                shell, outline = outline.shell(layer.thickness, permittivity)
                stack.append(shell)
        return self.core.complex_permittivity(omega), stack[::-1], whole
