"""Spinning in a rotating field, and drifting along a travelling one, against frequency."""

from dataclasses import dataclass

import numpy as np

from model.arrays import Real
from model.evaluate import Evaluation
from model.quantity import format_quantity, format_si
from model.rotation import (
    REFERENCE_AMPLITUDE,
    chip_rotation_rate,
    rotating_amplitude,
    rotation_rate,
    travelling_speed,
)
from webapp.figures.curves import operating_line, particle_curves, prefixed, span
from webapp.figures.polarisation import listed, spectrum_figure
from webapp.figures.theme import Figure, Theme


@dataclass(frozen=True)
class Rotation:
    """Rates of spinning of all particles, rad/s.

    Parameters
    ----------
    rates
        Over the result's frequencies, (n_frequency,) each.
    here
        At the operating frequency.
    amplitude
        Of the rotating field, V/m, at the operating frequency.
    own
        Whether it is the chip's own field.
    """

    rates: tuple[Real, ...]
    here: tuple[float, ...]
    amplitude: float
    own: bool


def rotation_of(result: Evaluation) -> Rotation:
    """Spin every particle in the chip's rotating field; if it has none, in one of 10 kV/m."""
    particles, square = result.design.particles, result.rms_voltage**2
    per_volt = rotating_amplitude(result.point)
    own = per_volt is not None
    found = []
    for at in (result.spectrum, result.point):
        rates = [
            rotation_rate(one, at.medium, REFERENCE_AMPLITUDE)
            if (rate := chip_rotation_rate(at, one)) is None
            else square * rate
            for one in particles
        ]
        found.append(tuple(rates))
    amplitude = REFERENCE_AMPLITUDE
    if per_volt is not None:
        amplitude = per_volt * abs(result.share) * result.rms_voltage
    here = tuple(float(rate[0]) for rate in found[1])
    return Rotation(found[0], here, amplitude, own)


def rotation_figure(found: Rotation, result: Evaluation, theme: Theme) -> Figure:
    """Draw the rate of spinning, positive with the field."""
    ends = span(found.rates)
    size, unit = prefixed(ends[1] - ends[0], "rad/s")
    reads = f"%{{y:.3~g}} {unit} at %{{x:.3~s}}Hz"
    curves = [rate / size for rate in found.rates]
    shown = ends[0] / size, ends[1] / size
    data = particle_curves(result.design, theme, result.frequency, curves, reads)
    data.append(operating_line(result.design, theme, shown))
    where = "chip's field" if found.own else f"at {format_si(found.amplitude, 'V/m')}"
    return spectrum_figure(result, theme, data, f"Spinning, {where} ({unit})", shown)


def rotation_sentence(found: Rotation, result: Evaluation) -> str:
    """Say how fast and which way each particle spins, and in which field."""
    field, frequency = (
        format_si(found.amplitude, "V/m"),
        format_si(result.design.drive.frequency, "Hz"),
    )
    where = "at the centre" if result.point.line.through is not None else "at the force height"
    start = (
        f"The chip's rotating field has an amplitude of {field} {where} at {frequency}: "
        if found.own
        else f"This chip's field does not rotate; in one that does, {field} in amplitude at "
        f"{frequency}: "
    )
    pieces = [
        _spin_words(rate, particle.name)
        for particle, rate in zip(result.design.particles, found.here, strict=True)
    ]
    return f"{start}{listed(pieces)}. Far from walls; positive is with the field."


def _spin_words(rate: float, name: str) -> str:
    """Rate with its sense, and the time of one turn.

    >>> _spin_words(-0.5, "bead"), _spin_words(0.0, "bead")
    ('500 mrad/s against it for bead (a turn in 12.6 s)', '0 rad/s for bead')
    """
    if rate == 0.0:
        return f"0 rad/s for {name}"
    sense = "with it" if rate > 0.0 else "against it"
    turn = 2.0 * np.pi / abs(rate)
    time = format_si(turn, "s") if turn < 100.0 else format_quantity(turn, "min", 3)
    return f"{format_si(abs(rate), 'rad/s')} {sense} for {name} (a turn in {time})"


def travel_of(result: Evaluation) -> tuple[Real, ...] | None:
    """Speed of every particle along the travelling field, m/s; None where nothing travels."""
    speeds = [travelling_speed(result.spectrum, one) for one in result.design.particles]
    found = [speed * result.rms_voltage**2 for speed in speeds if speed is not None]
    return tuple(found) or None


def travel_figure(speeds: tuple[Real, ...], result: Evaluation, theme: Theme) -> Figure:
    """Draw the mean speed along the wave, positive along the flow."""
    ends = span(speeds)
    size, unit = prefixed(ends[1] - ends[0], "m/s")
    shown = ends[0] / size, ends[1] / size
    reads = f"%{{y:.3~g}} {unit} at %{{x:.3~s}}Hz"
    curves = [speed / size for speed in speeds]
    data = particle_curves(result.design, theme, result.frequency, curves, reads)
    data.append(operating_line(result.design, theme, shown))
    return spectrum_figure(result, theme, data, f"Speed along the flow ({unit})", shown)


def travel_sentence(result: Evaluation) -> str:
    """Say how fast and which way the travelling field carries each particle."""
    pieces = []
    for particle in result.design.particles:
        found = travelling_speed(result.point, particle)
        speed = 0.0 if found is None else float(found[0]) * result.rms_voltage**2
        way = " along the flow" if speed > 0.0 else " against it" if speed else ""
        pieces.append(f"{format_si(abs(speed), 'm/s')}{way} for {particle.name}")
    height = format_quantity(result.design.task.force_height, "um", 3)
    return (
        f"The travelling field alone carries along at {height}, on the mean over a period of the "
        f"electrodes: {listed(pieces)}. The flow comes on top."
    )
