"""Evaluate a design on its chip's patterns: operating point, ledger, verdict, corridor."""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import Literal

import numpy as np

from model.arrays import Real
from model.conditions import Conditions
from model.corridor import Corridor, Rule, corridor, limit_rules, rules
from model.crossovers import Crossover, particle_crossovers
from model.design import Design
from model.errors import DesignError, FieldError
from model.fields.patterns import ChipPatterns
from model.generator import displayed
from model.growth import self_consistent
from model.law import headroom
from model.limit import Limit
from model.limits import LIMITS
from model.particle import Particle
from model.quantity import format_quantity
from model.voltage import PEAK, PEAK_TO_PEAK
from model.warming import chip_warm_up

#: Frequencies of a corridor unless others are asked for, Hz; widened to hold the design's own.
LOWEST, HIGHEST, POINTS = 1e3, 1e8, 400
#: Headroom below which a rule that is kept counts as tight; common practice, no source.
TIGHT = 1.2


@dataclass(frozen=True)
class LedgerRow:
    """One rule at the operating point; values in SI, `unit` is the one to show them in.

    `headroom` is the most allowed voltage over the present one, for a floor the present voltage
    over the least; infinite if no voltage breaks the rule. `bound_pp` is that voltage, peak to
    peak.
    """

    rule: Rule
    value: float
    allowed: float
    bound_pp: float
    headroom: float

    @property
    def kept(self) -> bool:
        """Whether the rule is kept at the operating point."""
        return self.headroom >= 1.0

    @property
    def state(self) -> Literal["broken", "tight", "kept"]:
        """How well the rule is kept."""
        if not self.kept:
            return "broken"
        return "tight" if self.headroom < TIGHT else "kept"


@dataclass(frozen=True)
class SwitchedOffLimit:
    """A limit that does not count, the reason, and what it would say here, the worst first."""

    limit: Limit
    reason: str
    rows: tuple[LedgerRow, ...]


@dataclass(frozen=True)
class ParticleResult:
    """One population at the operating point.

    `force` is the one that the task is about (:meth:`model.task.Task.force`), N, with its sign;
    `membrane_voltage` the peak at the strongest field it has to endure,
    None without a membrane.
    """

    particle: Particle
    polarisation: complex
    force: float
    membrane_voltage: float | None


@dataclass(frozen=True)
class ChipLoad:
    """The chip as the generator sees it, SI; the current is that into one terminal."""

    resistance: float
    capacitance: float
    rms_current: float
    power: float


@dataclass(frozen=True)
class FlowCooling:
    """Heat that the flow carries along against heat that the walls conduct away.

    Parameters
    ----------
    peclet
        Pe = ρ c_p Q/G with the flow rate Q, and G = P/(mean rise) the conductance from the liquid
        through floor and lid along the whole array: the Péclet number in Graetz's form, with the
        walls in place of conduction across the liquid alone. Where heat is made evenly along the
        array, the mean rise at its end is 1 − exp(−1/Pe) of the one without flow.
    outlet_rise
        P/(ρ c_p Q), K: what the flow would warm by if no heat left through the walls. As long as
        nothing but the array warms it, its mean rise is nowhere above that.
    """

    peclet: float
    outlet_rise: float


@dataclass(frozen=True)
class Evaluation:
    """All results of one design; what is not asked for is not computed.

    Made by :func:`evaluate`.
    """

    design: Design
    patterns: ChipPatterns
    given_frequency: Real | None
    points: int

    @cached_property
    def frequency(self) -> Real:
        """Frequencies of corridor and spectra, Hz."""
        if self.given_frequency is not None:
            return self.given_frequency
        own = self.design.drive.frequency
        return np.geomspace(min(LOWEST, own), max(HIGHEST, own), self.points)

    @cached_property
    def point(self) -> Conditions:
        """Conditions at the operating frequency alone."""
        frequency = np.array([self.design.drive.frequency])
        return Conditions(self.design, self.patterns, frequency, self._conductivity)

    @cached_property
    def spectrum(self) -> Conditions:
        """Conditions over all frequencies."""
        return Conditions(self.design, self.patterns, self.frequency, self._conductivity)

    @property
    def _conductivity(self) -> Real:
        return np.array(self.design.liquid.conductivity)

    @property
    def rms_voltage(self) -> float:
        """Voltage between electrodes of opposite phase, rms."""
        return self.design.drive.voltage / PEAK_TO_PEAK

    @cached_property
    def ledger(self) -> tuple[LedgerRow, ...]:
        """Every rule at the operating point, the one with least headroom first.

        Of equal ones a condition that no voltage changes comes first, a decisive one before the
        rest: it is the reason why the others cannot be kept.
        """
        return self._rows(rules(self.point))

    @cached_property
    def switched_off(self) -> tuple[SwitchedOffLimit, ...]:
        """Limits that the design switches off; they count nowhere."""
        found = []
        for name, reason in self.design.limits.reasons.items():
            rows = self._rows(limit_rules(LIMITS[name], self.point))
            found.append(SwitchedOffLimit(LIMITS[name], reason, rows))
        return tuple(found)

    def _rows(self, found: Iterable[Rule]) -> tuple[LedgerRow, ...]:
        rows = map(self._row, found)
        return tuple(
            sorted(rows, key=lambda row: (row.headroom, row.rule.law.power, not row.rule.decisive))
        )

    def _row(self, rule: Rule) -> LedgerRow:
        voltage, law = self.rms_voltage, rule.law
        bound = law.bound().reshape(-1)[0]
        room = float(headroom(bound, voltage, law.sense))
        value = float(law.value(voltage).reshape(-1)[0])
        return LedgerRow(rule, value, law.allowed, float(bound) * PEAK_TO_PEAK, room)

    @property
    def inside(self) -> bool:
        """Whether the task is done and no limit is broken."""
        return all(row.kept for row in self.ledger)

    @property
    def binding(self) -> LedgerRow:
        """The rule with least headroom."""
        return self.ledger[0]

    def _bounds(self, sense: str) -> list[float]:
        return [row.bound_pp for row in self.ledger if row.rule.law.sense == sense]

    @property
    def floor_pp(self) -> float:
        """Least voltage that does the task at this frequency, peak to peak; may be infinite."""
        return max(self._bounds("least"), default=0.0)

    @property
    def ceiling_pp(self) -> float:
        """Most voltage that breaks no limit at this frequency, peak to peak."""
        return min(self._bounds("most"), default=np.inf)

    @property
    def has_corridor(self) -> bool:
        """Whether some voltage does the task and breaks no limit at this frequency."""
        return self.floor_pp <= self.ceiling_pp and self.floor_pp < np.inf

    @cached_property
    def corridor(self) -> Corridor:
        """Floor and ceilings over all frequencies."""
        return corridor(self.spectrum)

    @cached_property
    def particles(self) -> tuple[ParticleResult, ...]:
        """Every population at the operating point, in the design's order."""
        return tuple(self._particle(particle) for particle in self.design.particles)

    def _particle(self, particle: Particle) -> ParticleResult:
        at, voltage = self.point, self.rms_voltage
        gain = at.membrane_gain(particle)
        membrane = None
        if gain is not None:
            membrane = float((gain * at.exposure(particle))[0]) * PEAK * voltage
        force = float(self.design.task.force(at, particle)[0]) * voltage**2
        return ParticleResult(particle, complex(at.polarisation(particle)[0]), force, membrane)

    def crossovers(self, particle: Particle) -> tuple[Crossover, ...]:
        """Every crossover of a particle in this liquid, in order of frequency."""
        return particle_crossovers(particle, self.design.liquid)

    @property
    def temperature_rise(self) -> float | None:
        """Rise of the hottest liquid over the stage if its conductivity stayed as it is, K.

        None if heat is not known.
        """
        if not self.patterns.has_heat:
            return None
        return float(self.point.heating[0]) * self.rms_voltage**2

    @property
    def self_consistent_rise(self) -> float | None:
        """The same with the conductivity that grows as it warms, K; None if nothing is steady.

        Exact to second order; beyond, warmer than true where warmth drives the heat on. See
        :mod:`model.growth`.
        """
        if self.temperature_rise is None:
            return None
        rise = float(self_consistent(self.temperature_rise, self.point.heat_growth[0]))
        return rise if np.isfinite(rise) else None

    @cached_property
    def warm_up_time(self) -> tuple[float, float]:
        """Times in s until the liquid's mean comes to 63 % (1 − 1/e) and 95 % of its final rise.

        Layer by layer, see :mod:`model.warming`; neither voltage nor conductivity matters.
        """
        chip, liquid = self.design.chip, self.design.liquid
        parts = liquid.heat_conductivity, liquid.state.heat_storage

        def times() -> tuple[float, float]:
            found = chip_warm_up(chip, *parts)
            return found.time(-np.expm1(-1.0)), found.time(0.95)

        return self.patterns.remembered(("warm-up", *parts), times)

    @cached_property
    def flow_cooling(self) -> FlowCooling | None:
        """What the flow carries off; None for liquid at rest, or if heat is not known."""
        liquid, rate = self.design.liquid.state, self.design.flow.rate
        if rate == 0.0 or self.temperature_rise is None:
            return None
        outlet = self.load.power / (liquid.heat_storage * rate)
        mean = self.temperature_rise * (
            self.patterns.mean_temperature / self.patterns.peak_temperature
        )
        return FlowCooling(mean / outlet, outlet)

    @property
    def electrothermal_speed(self) -> float | None:
        """Largest electrothermal speed at the force height, m/s; None if heat is not known."""
        if not self.patterns.has_heat:
            return None
        return float(self.point.electrothermal_speed[0]) * self.rms_voltage**4

    @property
    def electro_osmotic_speed(self) -> float | None:
        """Largest electro-osmotic speed at the force height, m/s; None where not modelled."""
        speed = self.point.electro_osmotic_speed
        return None if speed is None else float(speed[0]) * self.rms_voltage**2

    @property
    def dielectrophoretic_speed(self) -> float:
        """Largest dielectrophoretic speed there of the slowest particle to be collected, m/s."""
        speeds = [self.point.dielectrophoretic_speed(p)[0] for p in self.design.collected]
        return float(min(speeds)) * self.rms_voltage**2

    @cached_property
    def load(self) -> ChipLoad:
        """Resistance, capacitance, current and power (mean over the duty) of the chip."""
        point, liquid = self.point, self.design.liquid
        length = self.patterns.cell_factor * self.design.chip.parallel_length
        return ChipLoad(
            1.0 / (liquid.conductivity * length),
            liquid.state.permittivity * length,
            abs(point.terminal_admittance[0]) * self.rms_voltage,
            float(point.admittance[0].real) * self.rms_voltage**2 * self.design.drive.duty,
        )

    @property
    def share(self) -> complex:
        """Share of the voltage between the terminals that reaches the liquid."""
        return complex(self.point.share[0])

    @property
    def generator_display(self) -> float:
        """What the generator's display has to show for this voltage at the chip, peak to peak."""
        admittance = complex(self.point.terminal_admittance[0])
        return self.design.drive.voltage * displayed(self.design.drive, admittance)


def evaluate(
    design: Design,
    patterns: ChipPatterns,
    frequency: Sequence[float] | Real | None = None,
    points: int = POINTS,
) -> Evaluation:
    """Evaluate a design on the patterns of its chip.

    Parameters
    ----------
    design
        The whole design.
    patterns
        From :func:`model.fields.solve.solve_chip` of the same chip.
    frequency
        Hz, for corridor and spectra; by default 1 kHz to 100 MHz, widened to hold the design's
        own frequency.
    points
        How many frequencies the default has.

    Raises
    ------
    ValueError
        If the patterns are those of another chip.
    DesignError
        If the patterns do not reach the height at which forces are taken.
    """
    if patterns.chip != design.chip:
        raise ValueError("the patterns belong to another chip than the design's")
    level = design.chip.force_level(design.task.force_height)
    low, high = patterns.reach
    slack = 1e-9 * patterns.height
    if not low - slack <= level <= high + slack:
        ends = " to ".join(format_quantity(end, "um", 4) for end in (low, high))
        problem = f"must be within the heights that the field is known at, {ends}"
        shown = format_quantity(design.task.force_height, "um")
        raise DesignError([FieldError("task.working_height", shown, problem)])
    given = None if frequency is None else np.asarray(frequency, dtype=float)
    return Evaluation(design, patterns, given, points)
