"""The table of the polarisation view: text to read, and comma-separated values to keep."""

from typing import Any

from model.alignment import alignment_energy, alignment_ranges, alignment_words
from model.evaluate import Evaluation, ParticleResult
from model.particle import Particle
from model.quantity import format_si
from model.spectral_features import HIGHEST, LOWEST
from model.summary import csv_line
from webapp.figures.behaviour import Behaviour, behaviour
from webapp.figures.polarisation import crossing_words, factor_words
from webapp.figures.theme import DASHES, Theme, particle_line

#: Headings of the table, particle first.
HEADINGS = (
    "Particle",
    "Re K now",
    "Im K now",
    "Crossovers",
    f"Re K at {format_si(LOWEST, 'Hz')}",
    f"Re K at {format_si(HIGHEST, 'Hz')}",
    "Largest |Im K|",
)
_CSV_HEADINGS = (
    "particle",
    "kind",
    "frequency (Hz)",
    "medium conductivity (S/m)",
    "Re K",
    "Im K",
    "rising crossovers (Hz)",
    "falling crossovers (Hz)",
    f"Re K at {format_si(LOWEST, 'Hz')}",
    f"Re K at {format_si(HIGHEST, 'Hz')}",
    "largest Im K by size",
    "its frequency (Hz)",
    "surface conductance (nS)",
    "semi-axes along the field (um from Hz to Hz)",
    "alignment energy (kT)",
)


def table_rows(result: Evaluation, theme: Theme) -> list[dict[str, Any]]:
    """One row of text for each particle, with its line and a note on its surface or attitude."""
    return [_row(result, found, theme, index) for index, found in enumerate(result.particles)]


def _row(result: Evaluation, found: ParticleResult, theme: Theme, index: int) -> dict[str, Any]:
    kept = behaviour(found.particle, result.design.liquid)
    features = kept.features
    peak = f"{factor_words(features.peak)} at {format_si(features.peak_frequency, 'Hz')}"
    crossings = "\n".join(map(crossing_words, kept.crossovers))
    return {
        "name": found.particle.name,
        "colour": particle_line(theme, index)["color"],
        "dash": DASHES[index % len(DASHES)],
        "cells": [
            factor_words(found.polarisation.real),
            factor_words(found.polarisation.imag),
            crossings or "none",
            factor_words(features.low),
            factor_words(features.high),
            peak,
        ],
        "note": " ".join([*_surface(result, found.particle), *_attitude(result, found.particle)]),
    }


def _surface(result: Evaluation, particle: Particle) -> list[str]:
    """Surface conductance in this liquid, in words; none without such a surface."""
    conductance = particle.conductance(result.point.medium)
    if conductance is None:
        return []
    return [f"Surface conductance {format_si(float(conductance), 'S')}."]


def _attitude(result: Evaluation, particle: Particle) -> list[str]:
    """Which axis lies along the field, and how firmly; none if the particle does not turn."""
    words = alignment_words(result, particle)
    return [f"{words[:1].upper()}{words[1:]}."] if words else []


def table_csv(result: Evaluation) -> str:
    """Give the same as comma-separated values in the units of their headings."""
    rows = [_values(result, found) for found in result.particles]
    return "\n".join([csv_line(list(_CSV_HEADINGS)), *map(csv_line, rows), ""])


def _values(result: Evaluation, found: ParticleResult) -> list[str]:
    particle, design = found.particle, result.design
    kept = behaviour(particle, design.liquid)
    features, conductance = kept.features, particle.conductance(result.point.medium)
    energy = alignment_energy(result, particle)
    return [
        particle.name,
        particle.kind,
        *map(_plain, (design.drive.frequency, design.liquid.conductivity)),
        *map(_plain, (found.polarisation.real, found.polarisation.imag)),
        *(_frequencies(kept, rising) for rising in (True, False)),
        *map(_plain, (features.low, features.high, features.peak, features.peak_frequency)),
        "" if conductance is None else _plain(float(conductance) * 1e9),
        _axes(result, particle),
        "" if energy is None else _plain(energy),
    ]


def _axes(result: Evaluation, particle: Particle) -> str:
    """Every semi-axis that lies along the field with its frequencies, in one cell."""
    ends = float(result.frequency[0]), float(result.frequency[-1])
    return " ".join(
        f"{_plain(one.length * 1e6)} from {_plain(one.low)} to {_plain(one.high)}"
        for one in alignment_ranges(particle, result.design.liquid, *ends)
    )


def _plain(value: float) -> str:
    """Nine digits, as in the spectra of the command line."""
    return f"{value:.9g}"


def _frequencies(kept: Behaviour, rising: bool) -> str:
    """All crossovers of one direction in one cell."""
    found = [one.frequency for one in kept.crossovers if one.rising == rising]
    return " ".join(map(_plain, found))
