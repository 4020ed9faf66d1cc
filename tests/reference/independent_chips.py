"""Whole periods of every layout for the independent solves, from the layouts' own lengths."""

import cmath
from collections.abc import Callable, Mapping, Sequence
from itertools import pairwise

from model.layout import Layout
from model.walls import Wall
from tests.reference.independent import UNIT, Place, Problem, Side

#: A named stretch of metal, x from … to, µm.
Span = tuple[str, float, float]
#: Longest cell in the liquid over the pitch, and over the height.
LONGEST = (0.1, 0.2)
#: Decimals of a µm to which places are told apart.
DIGITS = 9


def _stretches(
    spans: Sequence[Span], start: float, period: float, bare: str
) -> list[tuple[float, float, str]]:
    """One period of a face, left to right, in named stretches; spans repeat with the period."""
    ends = {round((x - start) % period, DIGITS) for span in spans for x in span[1:]}
    places = sorted({0.0, *ends} - {round(period, DIGITS)})
    found = []
    for low, high in pairwise([*(start + place for place in places), start + period]):
        middle = 0.5 * (low + high)
        names = [name for name, a, b in spans if (middle - a) % period < b - a]
        found.append((low, high, *(names or [bare])))
    return found


def _flat(
    chip: Layout,
    period: float,
    faces: tuple[Sequence[Span], Sequence[Span]],
    potentials: Mapping[str, complex],
    conductivity: float,
) -> Problem:
    """Floor, liquid and lid over one period, with metal on both faces."""
    height = chip.channel_height / UNIT
    pitch = (chip.bar_width + chip.gap) / UNIT
    below, above = chip.floor.thickness / UNIT, chip.lid.thickness / UNIT
    start = -0.5 * pitch
    end = start + period
    floor = _stretches(faces[0], start, period, "floor-face")
    lid = _stretches(faces[1], start, period, "lid-face")
    sides = [
        Side(((start, -below), (end, -below)), "floor-outside", left="floor"),
        Side(((start, height + above), (end, height + above)), "lid-outside", right="lid"),
    ]
    for level, stretches, over, under in (
        (0.0, floor, "liquid", "floor"),
        (height, lid, "lid", "liquid"),
    ):
        sides += [Side(((a, level), (b, level)), name, over, under) for a, b, name in stretches]
    levels = {"floor": (-below, 0.0), "liquid": (0.0, height), "lid": (height, height + above)}
    for name, (low, high) in levels.items():
        twin = len(sides)
        sides.append(Side(((start, low), (start, high)), f"{name}-start", right=name))
        sides.append(Side(((end, low), (end, high)), f"{name}-end", left=name, twin=twin))
    singular: dict[Place, float] = {}
    for level, stretches in ((0.0, floor), (height, lid)):
        size = min(height, *(b - a for a, b, _ in stretches))
        for (_, _, one), (x, _, other) in pairwise([stretches[-1], *stretches]):
            if one != other:
                singular[x, level] = size
                if x == start:
                    singular[end, level] = size
    return Problem(
        sides=tuple(sides),
        singular=singular,
        longest={
            "liquid": min(LONGEST[0] * pitch, LONGEST[1] * height),
            "floor": 0.5 * pitch,
            "lid": 0.5 * pitch,
        },
        potentials=potentials,
        conductors={
            "liquid": 1.0,
            "floor": chip.floor.heat_conductivity / conductivity,
            "lid": chip.lid.heat_conductivity / conductivity,
        },
        outsides={
            "floor-outside": _film(chip.floor, conductivity),
            "lid-outside": _film(chip.lid, conductivity),
        },
        start=start,
        period=period,
        length=pitch,
        shares=round(period / pitch),
    )


def _film(wall: Wall, conductivity: float) -> float | None:
    """Heat-transfer coefficient over the liquid's thermal conductivity, 1/µm."""
    return None if wall.heat_transfer is None else wall.heat_transfer * UNIT / conductivity


def _bar(name: str, centre: float, chip: Layout) -> Span:
    half = 0.5 * chip.bar_width / UNIT
    return name, centre - half, centre + half


def coplanar_bars(chip: Layout, conductivity: float) -> Problem:
    """Two bars and two gaps."""
    pitch = (chip.bar_width + chip.gap) / UNIT
    bars = (_bar("plus", 0.0, chip), _bar("minus", pitch, chip))
    return _flat(chip, 2 * pitch, (bars, ()), {"plus": 0.5, "minus": -0.5}, conductivity)


def facing_bars(chip: Layout, conductivity: float) -> Problem:
    """One bar on the floor and one on the lid."""
    pitch = (chip.bar_width + chip.gap) / UNIT
    faces = ((_bar("plus", 0.0, chip),), (_bar("minus", chip.offset / UNIT, chip),))
    return _flat(chip, pitch, faces, {"plus": 0.5, "minus": -0.5}, conductivity)


def bars_under_plate(chip: Layout, conductivity: float) -> Problem:
    """One bar under a pitch of plate."""
    pitch = (chip.bar_width + chip.gap) / UNIT
    faces = ((_bar("plus", 0.0, chip),), (("minus", -0.5 * pitch, 0.5 * pitch),))
    return _flat(chip, pitch, faces, {"plus": 0.5, "minus": -0.5}, conductivity)


def four_phase_bars(chip: Layout, conductivity: float) -> Problem:
    """Four or three bars; voltages that lag along the wave, phasors exp(+jωt)."""
    pitch, phases = (chip.bar_width + chip.gap) / UNIT, {"four": 4, "three": 3}[chip.phases]
    lag = {"with-flow": -2j, "against-flow": 2j}[chip.wave] * cmath.pi / phases
    names = [f"phase-{number}" for number in range(phases)]
    bars = [_bar(name, number * pitch, chip) for number, name in enumerate(names)]
    levels = {name: 0.5 * cmath.exp(lag * number) for number, name in enumerate(names)}
    return _flat(chip, phases * pitch, (bars, ()), levels, conductivity)


#: The whole period of a chip of each layout, in a liquid of a thermal conductivity in W/(m K).
PROBLEMS: dict[str, Callable[[Layout, float], Problem]] = {
    "bars-under-plate": bars_under_plate,
    "coplanar-bars": coplanar_bars,
    "facing-bars": facing_bars,
    "four-phase-bars": four_phase_bars,
}
