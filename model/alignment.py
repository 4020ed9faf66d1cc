"""How particles that can turn lie in the field: which axis, at which frequencies, how firmly."""

from dataclasses import dataclass

import numpy as np

from model.evaluate import Evaluation
from model.liquid.liquid import Liquid
from model.motion import thermal_energy
from model.particle import Particle
from model.quantity import format_quantity, format_si

#: Frequencies that are looked at, per factor of ten.
POINTS_PER_DECADE = 60


@dataclass(frozen=True)
class AlignmentRange:
    """Frequencies `low` to `high` in Hz at which one semi-axis stands along the field.

    `axis` counts from 0 in the order of the profile, `length` is its own in m.
    """

    axis: int
    length: float
    low: float
    high: float


def alignment_ranges(
    particle: Particle, liquid: Liquid, low: float, high: float
) -> tuple[AlignmentRange, ...]:
    """Which axis aligns from which frequency to which, within a band in Hz; () if none does."""
    count = round(np.log10(high / low) * POINTS_PER_DECADE) + 2
    frequency = np.geomspace(low, high, count)
    found = particle.alignment(liquid.medium(2.0 * np.pi * frequency))
    if found is None:
        return ()
    lengths = found.lengths[found.axis]
    turns = np.flatnonzero(lengths[1:] != lengths[:-1])
    edges = [low, *np.sqrt(frequency[turns] * frequency[turns + 1]), high]
    starts = [0, *(turns + 1)]
    return tuple(
        AlignmentRange(int(found.axis[start]), float(lengths[start]), float(one), float(two))
        for start, one, two in zip(starts, edges[:-1], edges[1:], strict=True)
    )


def alignment_energy(result: Evaluation, particle: Particle) -> float | None:
    """Energy by which the field holds the particle's orientation, in kT; None if it does not.

    2πabc·ε_m·ΔRe K·E_rms², ΔRe K over the axis of next best length, at the strongest field along
    the line of forces: T. B. Jones, *Electromechanics of Particles* (1995), chapter 5.
    """
    at = result.point
    found = particle.alignment(at.medium)
    if found is None:
        return None
    square = float(at.line.square.max()) * result.rms_voltage**2
    energy = float(at.force_scale(particle)[0]) * float(found.advantage[0]) * square
    return energy / float(thermal_energy(result.design.liquid.temperature))


def alignment_words(result: Evaluation, particle: Particle) -> str | None:
    """Say which semi-axis lies along the field and how firmly; None if the particle does not turn.

    Over the frequencies of the result's spectra.
    """
    energy = alignment_energy(result, particle)
    if energy is None:
        return None
    ends = float(result.frequency[0]), float(result.frequency[-1])
    pieces = [
        f"{format_quantity(one.length, 'um', 3)} from {format_si(one.low, 'Hz')} to "
        f"{format_si(one.high, 'Hz')}"
        for one in alignment_ranges(particle, result.design.liquid, *ends)
    ]
    held = format_quantity(energy, "", 2)
    return f"semi-axis along the field: {', '.join(pieces)}; held by {held} kT here"
