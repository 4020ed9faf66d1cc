"""Whole periods of every layout for the independent solves, from the layouts' own lengths."""

import cmath
import math
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
#: Pieces of a hyperbolic face, each of which misses the hyperbola by the fourth power of its share.
FACES = 32
#: Arcs of a post, and the cosine of half of one.
ARCS = 16
WIDEN = math.cos(math.pi / ARCS)
#: Phasors of four poles in quadrature.
QUADRATURE = tuple(0.5 * cmath.exp((0.5 * number - 0.25) * 1j * math.pi) for number in range(4))


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


def _plan(
    chip: Layout,
    outlines: Sequence[Sequence[Side]],
    potentials: Mapping[str, complex],
    length: float,
    sizes: Mapping[Place, float],
    conductivity: float,
    near: Mapping[Place, float] | None = None,
) -> Problem:
    """All of a plan: liquid on the left of all `outlines`, the same over the depth.

    Heat leaves through half the depth, a wall and its film, straight outward; `length` scales the
    flow, `sizes` are the shortest lengths beside corners.
    """
    depth, leaving = chip.depth / UNIT, 0.0
    for wall in (chip.floor, chip.lid):
        film = _film(wall, conductivity)
        slab = wall.thickness / UNIT * conductivity / wall.heat_conductivity
        outside = 0.0 if film is None else 1.0 / film if film else math.inf
        leaving += 1.0 / (0.5 * depth + slab + outside)
    return Problem(
        sides=tuple(side for outline in outlines for side in outline),
        singular=sizes,
        longest={"liquid": 0.15 * chip.channel_width / UNIT},
        potentials=potentials,
        conductors={"liquid": 1.0},
        outsides={},
        length=length,
        shares=1,
        sink=leaving / depth,
        friction=12.0 / depth**2,
        depth=depth,
        near=near or {},
    )


def _outline(places: Sequence[Place], names: Sequence[str]) -> list[Side]:
    """Closed polygon with the liquid on its left, a name for each side."""
    ends = [*places[1:], places[0]]
    return [
        Side((start, end), name, left="liquid")
        for start, end, name in zip(places, ends, names, strict=True)
    ]


def _on(radius: float, turn: float) -> Place:
    """A place on a circle, the same again after a whole turn."""
    return round(radius * math.cos(turn), DIGITS), round(radius * math.sin(turn), DIGITS)


def insulating_constriction(chip: Layout, conductivity: float) -> Problem:
    """The channel from electrode to electrode."""
    end, wall = 0.5 * chip.electrode_spacing / UNIT, 0.5 * chip.channel_width / UNIT
    opening = chip.opening / UNIT
    levels = {"inlet": 0.5, "outlet": -0.5}
    if chip.obstacle == "post":
        radius = wall - opening
        channel = _outline(
            [(-end, -wall), (end, -wall), (end, wall), (-end, wall)],
            ["side", "outlet", "side", "inlet"],
        )
        turns = [-2 * math.pi * step / ARCS for step in range(ARCS + 1)]
        arcs = [
            (_on(radius, start), _on(radius / WIDEN, 0.5 * (start + end)), _on(radius, end))
            for start, end in pairwise(turns)
        ]
        post = [Side(arc, "post", left="liquid") for arc in arcs]
        near = dict.fromkeys([arc[0] for arc in arcs], 0.15 * opening)
        return _plan(chip, [channel, post], levels, opening, {}, conductivity, near)
    half, low = 0.5 * chip.obstacle_length / UNIT, 0.5 * opening
    tooth = [(half, wall), (half, low), (-half, low), (-half, wall)]
    below = [(-x, -y) for x, y in tooth]
    places = [(-end, -wall), *below, (end, -wall), (end, wall), *tooth, (-end, wall)]
    names = [*["side"] * 5, "outlet", *["side"] * 5, "inlet"]
    size = min(2 * half, opening, wall - low)
    sizes = dict.fromkeys([*tooth[1:3], *below[1:3]], size)
    return _plan(chip, [_outline(places, names)], levels, opening, sizes, conductivity)


def four_pole(chip: Layout, conductivity: float) -> Problem:
    """Four poles and the channel as far as their field and heat reach.

    In quadrature all phases are an eighth of a turn behind those of the poles, as the patterns
    have them.
    """
    tip, width = chip.tip_gap / math.sqrt(8) / UNIT, chip.pole_width / UNIT
    back, wall = tip + width, 0.5 * chip.channel_width / UNIT
    touching = wall < back * (1 + 1e-6)
    wall = back if touching else wall
    reach = back + 6 * wall
    hyperbolic = chip.pole_shape == "hyperbolic"
    waist = tip**2 / back if hyperbolic else tip
    if hyperbolic:
        steps = [tip * (back / tip) ** (1 - 2 * share / FACES) for share in range(FACES + 1)]
        face = [(x, tip**2 / x) for x in steps]  # from the floor's end to the wall's
        paths = [
            ((x1, y1), (2 * x1 * x2 / (x1 + x2), 2 * tip**2 / (x1 + x2)), (x2, y2))
            for (x1, y1), (x2, y2) in pairwise(face)
        ]
    else:
        paths = [((back, tip), (tip, tip)), ((tip, tip), (tip, back))]
    behind = [((back, back), (back, waist))]
    above = [] if touching else [((waist, back), (back, back))]
    phasors = (0.5, -0.5) * 2 if chip.drive == "opposite" else QUADRATURE
    levels = {f"pole-{number}": phasor for number, phasor in enumerate(phasors)}
    outlines: list[list[Side]] = []
    for number, (i, j) in enumerate(((1, 1), (-1, 1), (-1, -1), (1, -1))):
        turned = []
        for path in (*behind, *paths, *above):
            places = tuple((i * x, j * y) for x, y in path)
            turned.append(
                Side(places if i * j > 0 else places[::-1], f"pole-{number}", left="liquid")
            )
        outlines.append(turned)
    stops = [-reach, -back, -waist, waist, back, reach] if touching else [-reach, reach]
    for (start, stop), solid in zip(pairwise(stops), (0, 1, 0, 1, 0), strict=False):
        if not solid:
            outlines.append(
                [
                    Side(((start, -wall), (stop, -wall)), "side", left="liquid"),
                    Side(((stop, wall), (start, wall)), "side", left="liquid"),
                ]
            )
    outlines.append(
        [
            Side(((reach, -wall), (reach, wall)), "outlet", left="liquid"),
            Side(((-reach, wall), (-reach, -wall)), "inlet", left="liquid"),
        ]
    )
    corners = [(back, waist), (waist, back), *([] if hyperbolic else [(tip, tip)])]
    corners += [] if touching else [(back, back)]
    size = min(waist, width) if touching else min(waist, width, max(wall - back, 0.1 * width))
    sizes = {(i * x, j * y): size for x, y in corners for i in (1, -1) for j in (1, -1)}
    return _plan(chip, outlines, levels, chip.tip_gap / UNIT, sizes, conductivity)


#: The whole period of a chip of each layout, in a liquid of a thermal conductivity in W/(m K).
PROBLEMS: dict[str, Callable[[Layout, float], Problem]] = {
    "bars-under-plate": bars_under_plate,
    "coplanar-bars": coplanar_bars,
    "facing-bars": facing_bars,
    "four-phase-bars": four_phase_bars,
    "four-pole": four_pole,
    "insulating-constriction": insulating_constriction,
}
