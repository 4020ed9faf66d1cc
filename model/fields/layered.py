"""Mesh of a flat channel between a floor and a lid that carry bars."""

from collections.abc import Mapping
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from skfem import Mesh, MeshQuad

from model.arrays import Real
from model.fields.grading import between, march, split
from model.fields.section import Rest
from model.walls import Wall

#: Meshed wall thickness over the pitch. Ripples of Θ fall as exp(−2πy/p) in a wall: to 4·10⁻⁶
#: here; what lies beyond conducts as a plane slab.
WALL_REACH = 2.0
#: First cell at an electrode edge over the narrower half width; the error of the capacitance,
#: and of |E|² far from the edge, is about a hundredth of it.
EDGE_CELL = 6e-4
#: The same where no mirror plane halves the piece, with four edges on a grid of lines from all:
#: with the finer cells a solve would take many seconds.
WHOLE_EDGE_CELL = 1.5e-3
#: Longest cell over the pitch, near the electrodes.
LONGEST = 0.15
#: Edges of floor and lid nearer than this, over the first cell, share a grid line; moving an edge
#: so little changes less than the cells there do.
SAME = 0.02


@dataclass(frozen=True)
class Span:
    """A named stretch of electrode on the floor or the lid, x from `start` to `end`."""

    name: str
    start: float
    end: float
    on_lid: bool = False


@dataclass(frozen=True)
class Channel:
    """A stretch of channel, `ends` its two x, with electrode `spans` on its faces.

    Spans may reach beyond the ends: of a periodic channel, what leaves at one end comes in at
    the other.
    """

    ends: tuple[float, float]
    height: float
    pitch: float
    spans: tuple[Span, ...]
    floor: Wall
    lid: Wall
    periodic: bool = False


@dataclass(frozen=True)
class Layered:
    """Mesh of a :class:`Channel`, and how heat leaves it, as :class:`Section` takes them."""

    mesh: Mesh
    wall_conductivities: Mapping[str, float]
    outsides: Mapping[str, float | None]
    rests: tuple[Rest, ...]


def layered(channel: Channel, refinement: int = 0) -> Layered:
    """Mesh a channel with its walls.

    The boundaries are the names of the spans and ``left``, ``right``, ``floor-outside``,
    ``lid-outside``; the subdomains ``floor``, ``liquid``, ``lid``. Walls thicker than a few
    pitches are cut off, the rest entering the heat-transfer coefficient, which is exact once the
    ripple along x has died out.
    """
    return on_lines(channel, _columns(channel), _liquid_rows(channel), refinement)


def on_lines(channel: Channel, columns: Real, liquid: Real, refinement: int = 0) -> Layered:
    """The same on columns and rows of the liquid that are given, m."""
    columns = split(columns, refinement)
    floor, lid = (_wall_rows(wall, channel) for wall in (channel.floor, channel.lid))
    rows = split(
        np.concatenate([-floor[:0:-1], liquid, channel.height + lid[1:]]),
        refinement,
    )
    return Layered(
        _named(MeshQuad.init_tensor(columns, rows), channel),
        {"floor": channel.floor.heat_conductivity, "lid": channel.lid.heat_conductivity},
        {
            "floor-outside": _transfer(channel.floor, floor[-1]),
            "lid-outside": _transfer(channel.lid, lid[-1]),
        },
        (
            _rest(channel.floor, 0.0, -1, floor[-1]),
            _rest(channel.lid, channel.height, 1, lid[-1]),
        ),
    )


def _narrowest(channel: Channel) -> float:
    """Half the shortest stretch between neighbouring edges on one face."""
    low, high = channel.ends
    shortest = channel.height
    for on_lid in (False, True):
        edges = np.unique(_edges(channel, on_lid))
        if edges.size and channel.periodic:
            lengths = 0.5 * np.diff([*edges, edges[0] + high - low])
            shortest = min(shortest, float(lengths.min()))
        elif edges.size:
            # a stretch that ends on a mirror plane is itself half of one
            shortest = min(shortest, float(np.diff([low, *edges, high]).min()))
    return shortest


def _edges(channel: Channel, on_lid: bool) -> list[float]:
    """Where metal ends on one face; at a mirror plane it goes on."""
    low, high = channel.ends
    every = [x for span in channel.spans if span.on_lid == on_lid for x in (span.start, span.end)]
    if channel.periodic:
        return [low + (x - low) % (high - low) for x in every]
    return [x for x in every if low < x < high]


def _stops(channel: Channel, apart: float) -> tuple[Real, set[float]]:
    """Ends and edges from left to right, no two nearer than `apart`, and which are edges."""
    found = np.array([*_edges(channel, False), *_edges(channel, True)])
    low, high = channel.ends
    stops = [low]
    for x in np.sort(found):
        if x - stops[-1] > apart and high - x > apart:
            stops.append(float(x))
    stops.append(high)
    turns = (0.0, high - low, low - high) if channel.periodic else (0.0,)
    met = {x for x in stops if any(np.any(np.abs(found + turn - x) <= apart) for turn in turns)}
    return np.array(stops), met


def _first(channel: Channel) -> float:
    """Cell at an electrode edge."""
    return (WHOLE_EDGE_CELL if channel.periodic else EDGE_CELL) * _narrowest(channel)


def _columns(channel: Channel) -> Real:
    first = _first(channel)
    stops, edges = _stops(channel, SAME * first)
    longest = LONGEST * channel.pitch
    pieces = []
    for start, end in pairwise(stops):
        if start in edges and end in edges:
            piece = between(start, end, (first, first), lambda _: longest)
        elif start in edges:
            piece = start + march(end - start, first, lambda _: longest)
        elif end in edges:
            piece = end - march(end - start, first, lambda _: longest)[::-1]
        else:
            piece = np.linspace(start, end, 9)
        pieces.append(piece)
    return np.concatenate([pieces[0], *(piece[1:] for piece in pieces[1:])])


def _liquid_rows(channel: Channel) -> Real:
    first = _first(channel)
    pitch = channel.pitch

    def limit(distance: float) -> float:
        """Grow again where the field has decayed."""
        return LONGEST * max(pitch, min(distance, 2 * pitch), 4 * (distance - 2.5 * pitch))

    # a face that is metal throughout, or bare, has no edge to crowd toward
    if not _edges(channel, True):
        return march(channel.height, first, limit)
    if not _edges(channel, False):
        return channel.height - march(channel.height, first, limit)[::-1]
    return between(0.0, channel.height, (first, first), limit)


def _wall_rows(wall: Wall, channel: Channel) -> Real:
    """Distances into a wall, from 0 to where the mesh ends."""
    reach = min(wall.thickness, WALL_REACH * channel.pitch)
    first = 0.1 * min(_narrowest(channel), reach)
    return march(reach, first, lambda _: 0.5 * channel.pitch)


def _transfer(wall: Wall, reach: float) -> float | None:
    """Heat-transfer coefficient that stands for the rest of the wall and its outside."""
    rest = wall.thickness - reach
    if rest <= 1e-9 * wall.thickness:
        return wall.heat_transfer
    if wall.heat_transfer is None:
        return wall.heat_conductivity / rest
    if wall.heat_transfer == 0:
        return 0.0
    return 1 / (rest / wall.heat_conductivity + 1 / wall.heat_transfer)


def _rest(wall: Wall, face: float, sense: int, reach: float) -> Rest:
    """Describe the wall beyond its meshed part; `sense` is −1 downward."""
    transfer = _transfer(wall, reach)
    falloff = 0.0 if transfer is None else transfer / wall.heat_conductivity
    return Rest(face + sense * reach, face + sense * wall.thickness, falloff)


def _named(mesh: Mesh, channel: Channel) -> Mesh:
    middles = mesh.p[:, mesh.facets].mean(axis=1)  # (2, n_facet)
    upright = mesh.p[0, mesh.facets[0]] == mesh.p[0, mesh.facets[1]]
    low, high = channel.ends
    boundaries = {
        "left": np.flatnonzero(upright & (middles[0] == low)),
        "right": np.flatnonzero(upright & (middles[0] == high)),
        "floor-outside": np.flatnonzero(~upright & (middles[1] == mesh.p[1].min())),
        "lid-outside": np.flatnonzero(~upright & (middles[1] == mesh.p[1].max())),
    }
    for span in channel.spans:
        level = channel.height if span.on_lid else 0.0
        ahead = middles[0] - span.start
        ahead = ahead % (high - low) if channel.periodic else ahead
        within = (ahead > 0) & (ahead < span.end - span.start)
        found = np.flatnonzero(~upright & (middles[1] == level) & within)
        boundaries[span.name] = np.union1d(boundaries.get(span.name, found), found)
    centre = mesh.p[1, mesh.t].mean(axis=0)
    subdomains = {
        "floor": np.flatnonzero(centre < 0),
        "liquid": np.flatnonzero((centre > 0) & (centre < channel.height)),
        "lid": np.flatnonzero(centre > channel.height),
    }
    return mesh.with_boundaries(boundaries).with_subdomains(subdomains)
