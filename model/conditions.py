"""What tasks and limits ask about: forces, speeds, heat and load per volt, at given frequencies.

Everything here is a coefficient of a power of the voltage; nothing depends on the voltage itself.
"""

from dataclasses import dataclass, field
from functools import cached_property

import numpy as np

from model.arrays import Complex, Real
from model.channel import local_speed
from model.design import Design
from model.fields.lines import Line
from model.fields.patterns import ChipPatterns
from model.liquid.liquid import LiquidState
from model.motion import drag_parallel, drag_perpendicular
from model.particle import Particle


@dataclass(frozen=True)
class Conditions:
    """A design with its chip patterns, at many frequencies and conductivities at once.

    Parameters
    ----------
    design, patterns
        The patterns must be those of the design's chip.
    frequency
        Hz, shape ``(n_frequency,)``.
    conductivity
        S/m, a scalar array or shape ``(n_conductivity, 1)``; instead of the design's own.

    Notes
    -----
    All results broadcast to ``(..., n_frequency)``. The drive's duty scales mean forces and heat
    by duty and the electrothermal flow by duty², as force follows the heat of the same drive.
    """

    design: Design
    patterns: ChipPatterns
    frequency: Real
    conductivity: Real
    _kept: dict[Particle, Complex] = field(default_factory=dict, repr=False, compare=False)

    @cached_property
    def omega(self) -> Real:
        """Angular frequency, rad/s."""
        return 2.0 * np.pi * self.frequency

    @cached_property
    def liquid(self) -> LiquidState:
        """Liquid properties at the stage temperature."""
        return self.design.liquid.state

    @cached_property
    def medium(self) -> Complex:
        """Complex permittivity of the liquid, ε − jσ/ω, F/m."""
        return np.asarray(self.liquid.permittivity - 1j * self.conductivity / self.omega)

    @property
    def wall_distance(self) -> float:
        """From particle centres at the force height to the nearer of floor and lid, m."""
        height = self.design.task.force_height
        return min(height, self.design.chip.channel_height - height)

    @cached_property
    def line(self) -> Line:
        """Patterns along one period of the electrodes at the height where forces are taken."""
        return self.patterns.line(self.design.task.force_height)

    def polarisation(self, particle: Particle) -> Complex:
        """Polarisation factor K of a particle, computed once."""
        if particle not in self._kept:
            self._kept[particle] = particle.polarisation(self.omega, self.medium)
        return self._kept[particle]

    def membrane_gain(self, particle: Particle) -> Real | None:
        """Induced membrane voltage at the pole per outside field, m."""
        return particle.membrane_gain(self.omega, self.medium)

    def exposure(self, particle: Particle) -> float:
        """Strongest field that a particle has to endure, 1/m per V rms.

        The field at its centre and the share of the gradient across it: at its pole an insulated
        sphere of radius a adds 5/18·a|∇E²|/E² to the voltage of the uniform field (dipole 3/2·aE,
        quadrupole 5/3·a²E′/2 with E′ = |∇E²|/(2E), from the multipoles of an insulating sphere).
        """
        radius = particle.equivalent_radius
        heights = self.design.task.exposure_heights(particle, self.design.chip)
        return max(_with_gradient(self.patterns.line(height), radius) for height in heights)

    def _force_scale(self, particle: Particle) -> Real:
        """Signed factor from a pattern of ∇|Ê|² to force: 2π ε a³ Re K · duty, F m²."""
        size = 2.0 * np.pi * self.liquid.permittivity * particle.equivalent_radius**3
        return np.asarray(size * self.design.drive.duty * self.polarisation(particle).real)

    def force_along_flow(self, particle: Particle) -> Real:
        """Largest force along the flow over one period, N/V², with the sign of Re K."""
        return np.asarray(self._force_scale(particle) * np.abs(self.line.gradient[0]).max())

    def dielectrophoretic_speed(self, particle: Particle) -> Real:
        """Largest speed that the force gives at the force height, m/s per V².

        Each direction with its own wall correction of the drag.
        """
        radius = particle.equivalent_radius
        along, away = self.line.gradient
        relative = self.wall_distance / radius
        eased = np.hypot(along / drag_parallel(relative), away / drag_perpendicular(relative))
        drag = 6.0 * np.pi * self.liquid.viscosity * radius
        return np.abs(self._force_scale(particle)) * float(eased.max()) / drag

    @cached_property
    def electrothermal_speed(self) -> Real:
        """Largest electrothermal speed at the force height, m/s per V⁴.

        u = (εσV⁴/(kηL))·[(α − β)/(1 + (ωε/σ)²)·U₁ − (α/2)·U₂], Ramos et al. 1998
        J. Phys. D 31:2338, rms fields.
        """
        liquid, line = self.liquid, self.line
        relaxation = self.omega * liquid.permittivity / self.conductivity
        first = (liquid.permittivity_slope - liquid.conductivity_slope) / (1.0 + relaxation**2)
        second = -0.5 * liquid.permittivity_slope
        # |a U₁ + b U₂|² at every x, as one product over the three sums that the lines give.
        sums = np.stack(
            [
                (line.flow_1**2).sum(axis=0),
                2.0 * (line.flow_1 * line.flow_2).sum(axis=0),
                (line.flow_2**2).sum(axis=0),
            ]
        )
        weights = np.stack([first**2, first * second, np.full_like(first, second**2)], axis=-1)
        fastest = np.sqrt(np.maximum((weights @ sums).max(axis=-1), 0.0))
        scale = liquid.permittivity * self.conductivity * self.design.drive.duty**2
        scale = scale / (self.patterns.thermal_conductivity * liquid.viscosity)
        return np.asarray(scale * fastest / self.patterns.length)

    @cached_property
    def heating(self) -> Real:
        """Rise of the hottest liquid, K/V²: duty · Θ_max σ/k; the same at every frequency."""
        rise = self.patterns.peak_temperature / self.patterns.thermal_conductivity
        return np.asarray(self.design.drive.duty * rise * self.conductivity) + 0.0 * self.omega

    @cached_property
    def admittance(self) -> Complex:
        """Admittance of all that conducts in parallel, S: (σ + jωε) · cell factor · length."""
        length = self.patterns.cell_factor * self.design.chip.parallel_length
        return np.asarray((self.conductivity + 1j * self.omega * self.liquid.permittivity) * length)

    def flow_speed(self, height: float) -> float:
        """Speed of the undisturbed flow at a height, mid-width, m/s."""
        chip = self.design.chip
        return float(
            local_speed(self.design.flow.rate, chip.channel_height, chip.channel_width, height)
        )


def _with_gradient(line: Line, radius: float) -> float:
    """Largest |E| + 5/18·a|∇E²|/|E| along a line."""
    field = np.hypot(*line.field)
    return float((field + 5.0 / 18.0 * radius * np.hypot(*line.gradient) / field).max())
