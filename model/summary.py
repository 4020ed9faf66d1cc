"""A result as text and as plain data, for the command line and for other programs."""

import csv
import io
import math
from collections.abc import Iterator
from typing import Any

import numpy as np

from model.alignment import alignment_energy, alignment_ranges, alignment_words
from model.arrays import Real
from model.cautions import cautions, notes, rms_and_peak
from model.design import Design
from model.evaluate import Evaluation, LedgerRow, ParticleResult, SwitchedOffLimit
from model.fields.patterns import UNKNOWN_HEAT
from model.liquid.mixed import mixed
from model.profile import fingerprint
from model.quantity import format_quantity, format_si, to_unit
from model.recipe_words import liquid_object, mixed_words, portion_cells
from model.remedies import remedies
from model.verdict import format_volts, row_allowed, row_headroom, row_value, verdict
from model.version import VERSION

#: Péclet number below which the flow's share of the heat, about as large, is not worth a number.
LITTLE_CARRIED = 0.1


def check_object(result: Evaluation) -> dict[str, Any]:
    """Verdict, ledger and particles as plain data; numbers finite, or null with a reason."""
    load = result.load
    binding = result.binding
    return {
        "version": VERSION,
        "fingerprint": fingerprint(result.design),
        "title": result.design.title,
        "inside": result.inside,
        "binding": binding.rule.id,
        **_finite("headroom", binding.headroom, "no voltage breaks it"),
        **_finite("floor_Vpp", result.floor_pp, "no voltage does the task at this frequency"),
        **_finite("ceiling_Vpp", result.ceiling_pp, "no limit bounds the voltage"),
        **_heat_numbers(result),
        **_electro_osmosis(result.electro_osmotic_speed),
        "dep_speed_um_s": result.dielectrophoretic_speed * 1e6,
        "liquid": liquid_object(result.design.liquid),
        "chip": {
            "liquid_resistance_ohm": load.resistance,
            "liquid_capacitance_pF": load.capacitance * 1e12,
            "current_mA_rms": load.rms_current * 1e3,
            "power_mW": load.power * 1e3,
            "share_of_voltage": abs(result.share),
        },
        "generator_display_Vpp": result.generator_display,
        "task": {
            "kind": result.design.task.kind,
            "statements": list(result.design.task.statements(result.point)),
        },
        "particles": [_particle(result, found) for found in result.particles],
        "limits": [{**_limit(row), **_remedies(result, row)} for row in result.ledger],
        "limits_off": [_switched_off(off) for off in result.switched_off],
        "notes": list(notes(result)),
        "cautions": list(cautions(result)),
    }


def _electro_osmosis(speed: float | None) -> dict[str, Any]:
    shown = math.nan if speed is None else speed * 1e6
    return _finite(
        "electro_osmotic_speed_um_s", shown, "modelled neither in plan nor of a field map"
    )


def _particle(result: Evaluation, found: ParticleResult) -> dict[str, Any]:
    crossovers = result.crossovers(found.particle)
    data = {
        "name": found.particle.name,
        "re_k": found.polarisation.real,
        "im_k": found.polarisation.imag,
        "crossovers_Hz": [crossover.frequency for crossover in crossovers],
        "crossovers_direction": [crossover.direction for crossover in crossovers],
        "force_pN": found.force * 1e12,
    }
    voltage = found.membrane_voltage
    if (energy := alignment_energy(result, found.particle)) is not None:
        ends = float(result.frequency[0]), float(result.frequency[-1])
        ranges = alignment_ranges(found.particle, result.design.liquid, *ends)
        data["alignment_kT"] = energy
        data["aligned_semi_axes"] = [
            {"semi_axis_um": one.length * 1e6, "from_Hz": one.low, "to_Hz": one.high}
            for one in ranges
        ]
    return {**data, **_finite("membrane_voltage_V_peak", voltage, "the particle has no membrane")}


def _limit(row: LedgerRow) -> dict[str, Any]:
    unit = row.rule.unit
    return {
        "id": row.rule.id,
        "particle": row.rule.law.subject or None,
        **_finite("value", to_unit(row.value, unit), "out of all bounds"),
        "allowed": to_unit(row.allowed, unit),
        "sense": row.rule.law.sense,
        "unit": unit,
        **_finite("headroom", row.headroom, "no voltage breaks it"),
    }


def _remedies(result: Evaluation, row: LedgerRow) -> dict[str, Any]:
    """What would keep a rule that is broken or tight."""
    found = remedies(result, row)
    return {"remedies": list(found)} if found else {}


def _switched_off(off: SwitchedOffLimit) -> dict[str, Any]:
    """A limit that does not count, and what it would say."""
    return {
        "id": off.limit.id,
        "reason": off.reason,
        "limits": [_limit(row) for row in off.rows],
    }


def _heat_numbers(result: Evaluation) -> dict[str, Any]:
    """Rise, times to warm up, cooling by the flow and electrothermal speed; null if not known."""
    known, flow = result.patterns.has_heat, result.flow_cooling
    speed = result.electrothermal_speed
    soon, late = result.warm_up_time if known else (None, None)
    at_rest = "the liquid is at rest" if known else UNKNOWN_HEAT
    unsteady = "nothing is steady" if known else UNKNOWN_HEAT
    return {
        **_finite("temperature_rise_K", result.temperature_rise, UNKNOWN_HEAT),
        **_finite("self_consistent_rise_K", result.self_consistent_rise, unsteady),
        **_finite("warm_up_63_s", soon, UNKNOWN_HEAT),
        **_finite("warm_up_95_s", late, UNKNOWN_HEAT),
        **_finite("flow_peclet", None if flow is None else flow.peclet, at_rest),
        **_finite("flow_outlet_rise_K", None if flow is None else flow.outlet_rise, at_rest),
        **_finite(
            "electrothermal_speed_um_s", None if speed is None else speed * 1e6, UNKNOWN_HEAT
        ),
    }


def _finite(key: str, value: float | None, reason: str) -> dict[str, Any]:
    """The number, or null with the reason beside it."""
    if value is not None and math.isfinite(value):
        return {key: value}
    return {key: None, f"{key}_reason": reason}


def check_text(result: Evaluation) -> str:
    """Verdict and ledger for people to read."""
    design, drive, found = result.design, result.design.drive, verdict(result)
    load = result.load
    lines = [
        f"{design.title}  [{fingerprint(design)}]",
        *([design.question] if design.question else []),
        "",
        f"{found.headline}: {found.sentence}.",
        "",
        f"  at {format_si(drive.frequency, 'Hz')}, {format_si(drive.voltage, 'V')} peak to peak "
        f"({rms_and_peak(drive.voltage)}), {format_si(design.liquid.conductivity, 'S/m')}",
        f"  {_corridor(result)}",
        f"  liquid: {format_si(load.resistance, 'Ω')} and {format_si(load.capacitance, 'F')} in "
        f"parallel, {abs(result.share):.1%} of the voltage reaches it",
        f"  chip: {format_si(load.rms_current, 'A')} rms, {format_si(load.power, 'W')}",
        f"  generator: {generator_words(result)}",
        *_heat(result),
        *(f"  {design.task.kind}: {words}" for words in design.task.statements(result.point)),
        *_recipe(design),
        "",
        *_table(
            ("limit", "value", "allowed", "headroom"),
            [
                (row.rule.name, row_value(row), row_allowed(row), row_headroom(row))
                for row in result.ledger
            ],
        ),
        *_off(result),
        "",
        *_advice(result),
        *_table(
            ("particle", "Re K", "force", "membrane, peak", "crossovers"),
            [_particle_row(result, item) for item in result.particles],
        ),
    ]
    lines += [
        f"  {particle.name}: {words}"
        for particle in design.particles
        if (words := alignment_words(result, particle))
    ]
    lines += ["", *(f"Note: {note}" for note in notes(result))] if notes(result) else []
    return "\n".join([*lines, "", *cautions(result)])


def _recipe(design: Design) -> list[str]:
    """What to mix, and what it gives; nothing for a liquid without a recipe."""
    found = mixed(design.liquid)
    if found is None:
        return []
    head = ("in a litre at 25 °C", "amount", "mass", "or stock", "why")
    rows = [portion_cells(portion) for portion in found.portions]
    words = [mixed_words(found), *found.notes, *([found.caution] if found.caution else [])]
    return ["", *_table(head, rows), *(f"  {line}" for line in words)]


def _off(result: Evaluation) -> list[str]:
    """Limits that are switched off, with what they would say and why they do not count."""
    lines = []
    for off in result.switched_off:
        found = [f"{row_value(row)}, {row_allowed(row)} if it counted" for row in off.rows[:1]]
        lines.append(f"  off: {off.limit.label}{''.join(f' ({words})' for words in found)}")
        lines.append(f"    {off.reason}")
    return lines


def _advice(result: Evaluation) -> list[str]:
    """What would keep each rule that is broken or tight."""
    found = [(row.rule.name, remedies(result, row)) for row in result.ledger]
    lines = [f"  {name}: {' '.join(words)}" for name, words in found if words]
    return ["  to change, one at a time:", *lines, ""] if lines else []


def _heat(result: Evaluation) -> list[str]:
    """How warm the liquid gets, how soon, and what the flow has to do with it."""
    linear = result.temperature_rise
    if linear is None:
        return ["  heat: not known"]
    rise, flow = result.self_consistent_rise, result.flow_cooling
    most = "no steady temperature" if rise is None else f"{format_quantity(rise, 'K', 3)} at most"
    soon, late = (format_si(time, "s") for time in result.warm_up_time)
    lines = [
        f"  heat: {most} ({format_quantity(linear, 'K', 3)} at the stage's "
        f"conductivity), 63 % of it after {soon}, 95 % after {late}"
    ]
    if flow is not None:
        number = f"  flow: Péclet number {format_quantity(flow.peclet, '', 2)}"
        if flow.peclet < LITTLE_CARRIED:
            lines.append(f"{number}, so that it carries off little of the heat")
        else:
            outlet = format_quantity(flow.outlet_rise, "K", 3)
            lines.append(f"{number}; all the heat would warm it by {outlet}, the most of its mean")
    return lines


def generator_words(result: Evaluation) -> str:
    """What to set on the generator for the voltage at the chip."""
    setting = {
        "open-circuit": "shows the voltage with nothing connected",
        "into-50-ohm": "shows the voltage into 50 Ω, half of that with nothing connected",
    }[result.design.drive.generator_setting]
    volts = format_si(result.generator_display, "V")
    return f"set {volts} peak to peak, on a display that {setting}"


def _particle_row(result: Evaluation, found: ParticleResult) -> tuple[str, ...]:
    crossovers = result.crossovers(found.particle)
    membrane = found.membrane_voltage
    return (
        found.particle.name,
        format_quantity(found.polarisation.real, "", 3),
        format_si(found.force, "N"),
        "none" if membrane is None else format_si(membrane, "V"),
        ", ".join(f"{format_si(item.frequency, 'Hz')} {item.direction}" for item in crossovers)
        or "none",
    )


def _table(head: tuple[str, ...], rows: list[tuple[str, ...]]) -> list[str]:
    """Columns of text, each as wide as its widest entry."""
    widths = [max(len(row[index]) for row in (head, *rows)) for index in range(len(head))]
    return [
        "  "
        + "  ".join(cell.ljust(width) for cell, width in zip(row, widths, strict=True)).rstrip()
        for row in (head, *rows)
    ]


def _corridor(result: Evaluation) -> str:
    floor, ceiling = format_volts(result.floor_pp), format_volts(result.ceiling_pp)
    if not result.has_corridor:
        return f"no corridor here: the floor is {floor}, the lowest ceiling {ceiling} peak to peak"
    return f"corridor here: {floor} to {ceiling} peak to peak"


def spectrum_rows(design: Design, frequency: Real) -> Iterator[str]:
    """CSV lines: frequency_Hz, then Re K and Im K of every particle."""
    medium = design.liquid.medium(2.0 * np.pi * frequency)
    spectra = [particle.polarisation(medium) for particle in design.particles]
    names = [
        f"{particle.name} {part}" for particle in design.particles for part in ("re_k", "im_k")
    ]
    yield csv_line(["frequency_Hz", *names])
    for index, value in enumerate(frequency):
        cells = [f"{part:.9g}" for k in spectra for part in (k[index].real, k[index].imag)]
        yield csv_line([f"{value:.9g}", *cells])


def csv_line(cells: list[str]) -> str:
    """One line of a table of comma-separated values, quoted where needed."""
    line = io.StringIO()
    csv.writer(line, lineterminator="").writerow(cells)
    return line.getvalue()
