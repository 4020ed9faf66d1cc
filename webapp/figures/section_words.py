"""Sentences beneath the panels of the section, which change with the state."""

import numpy as np

from model.cautions import NO_HEAT
from model.evaluate import Evaluation
from model.maps import SectionMaps
from model.particle import Particle
from model.quantity import format_quantity, format_si
from webapp.figures.section import longest_force

#: A field that is so weak beside the strongest is none.
_NOTHING = 1e-6
#: From this factor on the growth of the rise by its own warmth is told.
_NOTABLE = 1.02


def field_sentence(result: Evaluation, maps: SectionMaps) -> str:
    """Say how strong the field is where the task takes its force."""
    field = maps.liquid_voltage * np.sqrt((np.abs(result.point.line.field) ** 2).sum(axis=0))
    low, high = float(field.min()), float(field.max())
    words = f"from {_volts(low if low > _NOTHING * high else 0.0)} to {_volts(high)} rms"
    if result.design.chip.view == "plan":
        return f"Along the dotted line, where forces are taken, the field runs {words}."
    height = format_quantity(result.design.task.force_height, "um", 3)
    return (
        f"Along the dotted line, {height} up, the field runs {words}; at the edge of an electrode "
        "it has no greatest value."
    )


def _volts(field: float) -> str:
    return format_si(field, "V/m")


def force_sentence(result: Evaluation, maps: SectionMaps, particle: Particle) -> str:
    """Say where the force leads and what the arrows mean."""
    most = longest_force(maps, particle, result)
    if most == 0.0:
        return f"No force acts on {particle.name} where its centre can be."
    factor = complex(result.point.polarisation(particle)[0]).real
    where = "towards strong field" if factor > 0 else "towards weak field"
    return (
        f"{particle.name}, drawn to scale, is led {where} (Re K {_signed(factor)}). The longest "
        f"arrow is {format_si(most, 'N')}; each quarter less is a tenth of it."
    )


def _signed(value: float) -> str:
    return f"{value:.2f}".replace("-", "−")


def temperature_sentence(result: Evaluation, maps: SectionMaps) -> str:
    """Say where it is hottest."""
    if result.temperature_rise is None:
        return NO_HEAT
    grid = maps.patterns.whole
    row, _ = np.unravel_index(int(np.nanargmax(maps.rise)), maps.rise.shape)
    stage = format_quantity(result.design.liquid.temperature, "degC", 3)
    rise = format_si(result.temperature_rise, "K")
    if result.design.chip.view == "plan":
        return f"The hottest liquid is {rise} above the stage at {stage}; {_with_time(result)}."
    height = format_quantity(float(grid.y[row]), "um", 2)
    floor = np.interp(0.0, grid.y, np.nanmax(maps.rise, axis=1))
    words = (
        f"The hottest liquid, {height} up, is {rise} above the stage at {stage}, "
        f"the floor beneath it {format_si(float(floor), 'K')}"
    )
    return f"{words}; {_with_growth(result, result.temperature_rise)}, and {_with_time(result)}."


def _with_time(result: Evaluation) -> str:
    """How long it takes to warm up."""
    return f"63 % of it is there after {format_si(result.warm_up_time[0], 's')}"


def _with_growth(result: Evaluation, linear: float) -> str:
    """What the map leaves out: warm liquid conducts better."""
    grown = result.self_consistent_rise
    if grown is None:
        return "as warm liquid conducts better, no temperature would be steady"
    if grown < _NOTABLE * linear:
        return "that warm liquid conducts better adds next to nothing"
    return f"as warm liquid conducts better, the hottest grows to {format_si(grown, 'K')}"


def flow_sentence(result: Evaluation, maps: SectionMaps) -> str:
    """Say how fast heat stirs the liquid, beside the flow that is pumped."""
    if not result.patterns.has_heat:
        return NO_HEAT
    speed = format_si(float(np.nanmax(np.hypot(*maps.velocity))), "m/s")
    words = f"Heat stirs the liquid at up to {speed}; lines close together mean fast flow."
    if result.design.chip.view == "plan":
        return words
    height = result.design.task.force_height
    others = [f"the pumped flow runs at {format_si(result.point.flow_speed(height), 'm/s')}"]
    if (slip := result.electro_osmotic_speed) is not None:
        others.append(f"electro-osmosis at up to {format_si(slip, 'm/s')}")
    carried = ""
    if (flow := result.flow_cooling) is not None:
        carried = f" Péclet number of the heat {format_quantity(flow.peclet, '', 2)}."
    where = format_quantity(height, "um", 3)
    return f"{words} Not drawn, {where} up {' and '.join(others)}.{carried}"
