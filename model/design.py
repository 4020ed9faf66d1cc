"""The design: the only state there is. Frozen, compared and hashed by value, SI throughout."""

from collections import Counter
from collections.abc import Iterable
from typing import Annotated, Literal

from pydantic import BeforeValidator, ConfigDict, Field, model_validator

from model.declare import Choice, Part, Quantity, Text, counted, misfit
from model.electrode import Electrode
from model.layout import Layout
from model.layouts import LAYOUTS
from model.liquid.liquid import Liquid
from model.particle import Particle
from model.particles import PARTICLES
from model.quantity import format_quantity
from model.registry import OneOf
from model.task import Task
from model.tasks import TASKS
from model.thresholds import Limits

#: Most populations in one design.
MOST_PARTICLES = 12
#: Least height of a centre over the radius at which a particle counts as clear of the wall: at
#: contact itself the drag is infinite, and nothing that is compared with a speed means anything.
CLEARANCE = 1.01


class Drive(Part):
    """The generator and how it is set."""

    voltage: Annotated[
        float,
        Quantity(
            "Voltage",
            "Peak to peak between the chip's terminals of opposite phase.",
            unit="V",
            low="0.001 V",
            high="1000 V",
            peak_to_peak=True,
        ),
    ]
    frequency: Annotated[
        float,
        Quantity("Frequency", "Of the sine wave.", unit="kHz", low="100 Hz", high="1 GHz"),
    ]
    source_resistance: Annotated[
        float,
        Quantity(
            "Source resistance",
            "Of generator and leads in series with the chip.",
            unit="ohm",
            low="0 ohm",
            high="100 kohm",
        ),
    ] = 50.0
    generator_setting: Annotated[
        Literal["open-circuit", "into-50-ohm"],
        Choice(
            "Display shows",
            "What the generator's display means: its voltage with nothing connected, or that into "
            "a load of 50 Ω, of which a chip of high impedance gets twice.",
            options={"open-circuit": "open circuit", "into-50-ohm": "into 50 Ω"},
        ),
    ] = "open-circuit"
    voltage_limit: Annotated[
        float,
        Quantity(
            "Voltage limit",
            "Most that the generator gives with nothing connected, peak to peak.",
            unit="V",
            low="0.01 V",
            high="2000 V",
            peak_to_peak=True,
        ),
    ] = 20.0
    current_limit: Annotated[
        float,
        Quantity(
            "Current limit",
            "Most current that the generator gives, rms.",
            unit="mA",
            low="0.01 mA",
            high="20 A",
        ),
    ] = 0.2
    duty: Annotated[
        float,
        Quantity(
            "Duty",
            "Fraction of time the drive is on, switched faster than particles and heat follow.",
            unit="",
            low="0.001",
            high="1",
            detail=True,
        ),
    ] = 1.0


class Flow(Part):
    """The liquid's flow through the channel."""

    rate: Annotated[
        float,
        Quantity(
            "Flow rate",
            "Through the whole channel; 0 for liquid at rest.",
            unit="uL/min",
            low="0 uL/min",
            high="100 mL/min",
        ),
    ] = 0.0


class Design(Part):
    """A whole design: task, chip, liquid, drive, flow, particles and limits."""

    model_config = ConfigDict(validate_by_name=True, validate_by_alias=True)

    title: Annotated[str, Text("Title", "Names the design on screen and sheet.", longest=80)] = (
        "Untitled"
    )
    question: Annotated[str, Text("Question", "What the design is to answer.", longest=240)] = ""
    task: Annotated[Task, OneOf(TASKS, "kind")]
    chip: Annotated[Layout, OneOf(LAYOUTS, "layout")]
    liquid: Liquid
    drive: Drive
    electrode: Electrode = Electrode()
    flow: Flow = Flow()
    particles: Annotated[
        tuple[Annotated[Particle, OneOf(PARTICLES, "kind")], ...],
        BeforeValidator(counted("particle", MOST_PARTICLES, "tables, one for each particle")),
        Field(alias="particle"),
    ]
    limits: Limits = Limits()

    @property
    def collected(self) -> tuple[Particle, ...]:
        """Particles that the task must succeed for."""
        return tuple(particle for particle in self.particles if particle.role == "collect")

    @property
    def involved(self) -> tuple[Particle, ...]:
        """Particles that the task is about: collected, or to pass; not those only watched."""
        return tuple(particle for particle in self.particles if particle.role != "watch")

    def threshold(self, limit: str) -> float:
        """Threshold of a limit in SI."""
        return float(getattr(self.limits, limit))

    @model_validator(mode="after")
    def _parts_fit(self) -> "Design":
        misfits = tuple(_misfits(self))
        if misfits:
            raise misfit(*misfits)
        return self


def _misfits(design: Design) -> Iterable[tuple[str, str]]:
    """Find fields that are fine alone and impossible together: path and problem."""
    names = Counter(particle.name for particle in design.particles)
    for index, particle in enumerate(design.particles):
        if names[particle.name] > 1:
            yield f"particle.{index}.name", f"“{particle.name}” is the name of two particles"
    if not design.collected:
        yield "particle.0.role", "at least one particle must have the role collect"
    yield from design.task.misfits(design)
    if design.chip.floor.outside == design.chip.lid.outside == "insulated":
        yield "chip.lid.outside", "must let heat out when the floor is insulated"
    height, channel = design.task.force_height, design.chip.height
    for particle in design.collected:
        clear = CLEARANCE * particle.hydrodynamic_radius
        slack = 1e-9 * height  # so that the told bounds themselves can be typed
        if not clear - slack <= height <= channel - clear + slack:
            low, high = (format_quantity(bound, "um") for bound in (clear, channel - clear))
            yield (
                "task.working_height",
                f"must be from {low} to {high}, so that {particle.name} clears floor and lid",
            )
            break
