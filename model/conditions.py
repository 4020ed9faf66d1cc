"""What tasks and limits ask about: forces, speeds, heat and load per volt, at given frequencies.

Everything here is a coefficient of a power of the voltage; nothing depends on the voltage itself.
"""

from collections.abc import Sequence
from dataclasses import dataclass, field
from functools import cached_property

import numpy as np

from model import electro_osmosis
from model.arrays import Complex, Real
from model.channel import local_speed
from model.circuit import Circuit
from model.design import Design
from model.fields.lines import Line
from model.fields.patterns import UNKNOWN_HEAT, ChipPatterns
from model.liquid.liquid import LiquidState
from model.medium import Medium
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
    Voltages are those between the chip's terminals; of them the share of :attr:`share` reaches
    the liquid, so that forces and heat go with its square, electrothermal flow with its fourth
    power and the voltage of membranes with itself. The pattern of the field keeps its shape in
    this; see :attr:`Circuit.share` for how far that holds.
    """

    design: Design
    patterns: ChipPatterns
    frequency: Real
    conductivity: Real
    _kept: dict[Particle, Complex] = field(default_factory=dict, repr=False, compare=False)
    _speeds: dict[Particle, Real] = field(default_factory=dict, repr=False, compare=False)
    _flows: dict[float, float] = field(default_factory=dict, repr=False, compare=False)

    @cached_property
    def omega(self) -> Real:
        """Angular frequency, rad/s."""
        return 2.0 * np.pi * self.frequency

    @cached_property
    def liquid(self) -> LiquidState:
        """Liquid properties at the stage temperature."""
        return self.design.liquid.state

    @cached_property
    def medium(self) -> Medium:
        """The liquid as particles meet it."""
        return self.design.liquid.medium(self.omega, self.conductivity)

    @cached_property
    def circuit(self) -> Circuit:
        """Interface, liquid, walls and leads."""
        return Circuit(self.design, self.patterns, self.omega, self.conductivity)

    @property
    def share(self) -> Complex:
        """Share of the voltage between the terminals that reaches the liquid, complex."""
        return self.circuit.share

    @cached_property
    def _square_share(self) -> Real:
        """Its squared magnitude, for all that goes with E²."""
        return np.asarray(np.abs(self.share) ** 2)

    @property
    def wall_distance(self) -> float:
        """From particle centres at the force height to the nearer of floor and lid, m."""
        height = self.design.task.force_height
        return min(height, self.design.chip.height - height)

    @cached_property
    def line(self) -> Line:
        """Patterns along one period of the electrodes at the height where forces are taken."""
        level = self.design.chip.force_level(self.design.task.force_height)
        return self.patterns.line(level)

    def polarisation(self, particle: Particle) -> Complex:
        """Polarisation factor K of a particle, computed once."""
        if particle not in self._kept:
            self._kept[particle] = particle.polarisation(self.medium)
        return self._kept[particle]

    def membrane_gain(self, particle: Particle) -> Real | None:
        """Induced membrane voltage at the pole per outside field, m."""
        return particle.membrane_gain(self.medium)

    def exposure(self, particle: Particle) -> Real:
        """Strongest field that a particle has to endure, 1/m per V rms.

        The field at its centre and the share of the gradient across it: at its pole an insulated
        sphere of radius a adds 5/18·a|∇E²|/E² to the voltage of the uniform field (dipole 3/2·aE,
        quadrupole 5/3·a²E′/2 with E′ = |∇E²|/(2E), from the multipoles of an insulating sphere).
        """
        radius = particle.equivalent_radius
        lines = [self.line]
        if self.design.task.may_touch(particle):
            lines += self.design.chip.contact_lines(self.patterns, radius)
        field = max(_with_gradient(line, radius) for line in lines)
        return np.asarray(field * np.abs(self.share))

    def force_scale(self, particle: Particle) -> Real:
        """From Re K times a force pattern to force: 2π ε a³ |share|² · duty, F m²."""
        size = 2.0 * np.pi * self.liquid.permittivity * particle.equivalent_radius**3
        return np.asarray(size * self.design.drive.duty * self._square_share)

    def force_weights(self, particle: Particle) -> tuple[Real, ...]:
        """Factors of the force patterns: Re K of ∇|Ê|² and Im K of a travelling field."""
        factor = self.polarisation(particle)
        return (factor.real, factor.imag)[: 1 if self.line.travelling is None else 2]

    @cached_property
    def _force_patterns(self) -> tuple[Real, ...]:
        """∇|Ê|² and, of a travelling field, its own pattern along the line, (2, n) each."""
        moving = self.line.travelling
        return (self.line.gradient,) if moving is None else (self.line.gradient, moving)

    @cached_property
    def _best_place(self) -> int | None:
        """Where on the line of a plan the force along the flow is largest over the local speed."""
        if self.line.through is None:
            return None
        return int(np.argmax(np.abs(self.line.gradient[0]) / self.line.through[0]))

    @cached_property
    def _slower(self) -> Real:
        """Speed of the flow at the best place over that along the line; 1 if it is the same."""
        if self.line.through is None or self._best_place is None:
            return np.array(1.0)
        return np.asarray(self.line.through[0, self._best_place] / self.line.through[0])

    def force_along_flow(self, particle: Particle) -> Real:
        """Largest force against the flow over one period, N/V², with the sign of Re K.

        Where the field does not travel it is the largest along the flow as well. Where the flow
        changes along the line (in plan) it is the force where it withstands most of the flow.
        """
        weights = self.force_weights(particle)
        if len(weights) == 1:
            pull = weights[0] * np.abs(self.line.gradient[0] * self._slower).max()
        else:
            along = np.stack([pattern[0] * self._slower for pattern in self._force_patterns])
            most = (-np.stack(weights, axis=-1) @ along).max(axis=-1)
            pull = np.copysign(np.maximum(most, 0.0), weights[0])
        return np.asarray(self.force_scale(particle) * pull)

    def dielectrophoretic_speed(self, particle: Particle) -> Real:
        """Largest speed that the force gives at the force height, m/s per V², computed once.

        Each direction with its own wall correction of the drag.
        """
        if particle not in self._speeds:
            self._speeds[particle] = self._fastest(particle)
        return self._speeds[particle]

    def _fastest(self, particle: Particle) -> Real:
        radius = particle.hydrodynamic_radius
        relative = self.wall_distance / radius
        slowed = self.patterns.remembered(("walls", relative), lambda: _slowed(relative))
        patterns = [pattern / slowed for pattern in self._force_patterns]
        drag = 6.0 * np.pi * self.liquid.viscosity * radius
        return self.force_scale(particle) / drag * _largest(self.force_weights(particle), patterns)

    def electrothermal_weights(self) -> tuple[Real, ...]:
        """Factors of U₁, U₂ and, of a travelling field, U₃ in the electrothermal velocity.

        With s = ωε/σ: (α − β)/(1 + s²), −α/2 and s(α − β)/(1 + s²), 1/K, from
        <f> = Re[ε(α − β)(∇T·E)E*/(1 + js)] − ½εα|E|²∇T in rms fields, Ramos et al. 1998
        J. Phys. D 31:2338. They broadcast over frequency and conductivity.
        """
        liquid = self.liquid
        relaxation = self.omega * liquid.permittivity / self.conductivity
        first = (liquid.permittivity_slope - liquid.conductivity_slope) / (1.0 + relaxation**2)
        weights = (first, np.full_like(first, -0.5 * liquid.permittivity_slope))
        return weights if self.line.flow_3 is None else (*weights, relaxation * first)

    @property
    def electrothermal_scale(self) -> Real:
        """Flow patterns to speed: εσ·|share|²·heat share·duty²/(kηL), K m/s per V⁴."""
        liquid = self.liquid
        scale = liquid.permittivity * self.conductivity * self.design.drive.duty**2
        scale = scale / (self.patterns.thermal_conductivity * liquid.viscosity)
        return np.asarray(
            scale * self._square_share * self.circuit.heat_share / self.patterns.length
        )

    @cached_property
    def electrothermal_speed(self) -> Real:
        """Largest electrothermal speed at the force height, m/s per V⁴.

        Raises
        ------
        ValueError
            If heat is not known.
        """
        line = self.line
        if not self.patterns.has_heat:
            raise ValueError(UNKNOWN_HEAT)
        flows = [flow for flow in (line.flow_1, line.flow_2, line.flow_3) if flow is not None]
        return np.asarray(
            self.electrothermal_scale * _largest(self.electrothermal_weights(), flows)
        )

    @property
    def heat_scale(self) -> Real:
        """From Θ to temperature rise at the stage's conductivity: duty · σ/k · heat share, K/V²."""
        scale = self.design.drive.duty / self.patterns.thermal_conductivity
        return np.asarray(scale * self.conductivity * self.circuit.heat_share)

    @cached_property
    def electro_osmotic_speed(self) -> Real | None:
        """Largest electro-osmotic speed at the force height, m/s per V²; None in plan."""
        return electro_osmosis.largest_speed(self)

    @cached_property
    def largest_slip(self) -> Real | None:
        """Largest electro-osmotic slip on the electrodes, m/s per V²; None in plan."""
        return electro_osmosis.largest_slip(self)

    @cached_property
    def heating(self) -> Real:
        """Rise of the hottest liquid at the conductivity of the stage temperature, K/V².

        The same at every frequency, but for what the electrodes keep from the liquid.

        Raises
        ------
        ValueError
            If heat is not known.
        """
        return self.heat_scale * self.patterns.peak_temperature

    @cached_property
    def heat_growth(self) -> Real:
        """How much the hottest rise drives itself on, in the sense of a law's growth, 1/K.

        Warm liquid conducts better, so that it makes more heat, and the field gives way by
        κ = d ln ε̃/dT, of which the real part (β + αs²)/(1 + s²), s = ωε/σ, acts on the heat.
        """
        liquid = self.liquid
        square = (self.omega * liquid.permittivity / self.conductivity) ** 2
        ohmic, displaced = liquid.conductivity_slope, liquid.permittivity_slope
        yielding = (ohmic + displaced * square) / (1.0 + square)
        return self.patterns.feedback.growth(ohmic, yielding)

    @property
    def admittance(self) -> Complex:
        """Admittance between the terminals of all that conducts, S.

        Its real part times V_rms² is the power of all phases together.
        """
        return self.circuit.admittance

    @property
    def terminal_admittance(self) -> Complex:
        """Current into one terminal over the voltage between opposite phases, S.

        2/N of the whole of N phases, each fed at half that voltage: the power of all is the same.
        """
        return np.asarray(2.0 / self.design.chip.terminals * self.admittance)

    def flow_speed(self, height: float) -> float:
        """Speed of the undisturbed flow at a height, m/s, where the force is taken; kept.

        In a flat channel at mid-width; in plan at the best place of the line, the parabola
        6s(1 − s) of its mean over the depth.
        """
        if height not in self._flows:
            self._flows[height] = self._undisturbed(height)
        return self._flows[height]

    def _undisturbed(self, height: float) -> float:
        chip, rate = self.design.chip, self.design.flow.rate
        if self.line.through is None:
            sizes = chip.height, chip.channel_width, height
            return rate * self.patterns.remembered(
                ("flow", height), lambda: float(local_speed(1.0, *sizes))
            )
        share = height / chip.height
        mean = self.line.through[0, self._best_place]
        return float(6.0 * share * (1.0 - share) * rate * mean)


def _largest(weights: Sequence[Real], patterns: Sequence[Real]) -> Real:
    """Largest |Σ wᵢ pᵢ| along a line, of patterns (2, n) and factors (…, n_frequency).

    The square at every place is one product over the sums pᵢ·pⱼ that the patterns give; of a
    single pattern the place does not change.
    """
    if len(patterns) == 1:
        return np.asarray(np.abs(weights[0]) * np.hypot(*patterns[0]).max())
    pairs = [(i, j) for i in range(len(patterns)) for j in range(i, len(patterns))]
    sums = np.stack(
        [(1 if i == j else 2) * (patterns[i] * patterns[j]).sum(axis=0) for i, j in pairs]
    )
    products = np.stack([weights[i] * weights[j] for i, j in pairs], axis=-1)
    return np.asarray(np.sqrt(np.maximum((products @ sums).max(axis=-1), 0.0)))


def _slowed(relative: float) -> Real:
    """Wall factors of the drag along the walls and straight to them, (2, 1)."""
    return np.array([drag_parallel(relative), drag_perpendicular(relative)])[:, None]


def _with_gradient(line: Line, radius: float) -> float:
    """Largest |E| + 5/18·a|∇E²|/|E| along a line, |E| the longest that the field gets in a period.

    The tip of a field of two components runs along an ellipse; its longer half axis is
    √(½(|E₀|² + |E₁|² + |(E₀ + jE₁)²|)).
    """
    square = line.square
    longest = np.sqrt(0.5 * (square + np.abs((line.field**2).sum(axis=0))))
    spread = 5.0 / 18.0 * radius * np.hypot(*line.gradient) / np.sqrt(square)
    return float((longest + spread).max())
