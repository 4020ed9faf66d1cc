"""From a field map to a section: its window, what it holds, and what is to be told of it."""

from collections.abc import Iterator

import numpy as np
from skfem import Mesh, MeshQuad

from model.arrays import Real
from model.fields.field_header import FieldTableError
from model.fields.field_points import Sampled
from model.fields.grading import split
from model.fields.imposed import Imposed, cell_lines, impose
from model.fields.layered import Channel, Layered, on_lines
from model.fields.section import Fold, Section
from model.quantity import format_quantity

#: Share of a map's mean E² that no potential has: told from the first on, refused from the other.
NOTABLE_MISMATCH, MOST_MISMATCH = 0.01, 0.1
#: Share of the mean E² across the section from which on it is told.
NOTABLE_NORMAL = 0.01
#: How much the field at both ends of a window that repeats may differ, over its own size.
MOST_APART = 0.1
#: How far points may leave the liquid, over its height: rounding of an export.
SLACK = 1e-3


def map_section(source: Sampled, channel: Channel, refinement: int = 0) -> Section:
    """Section of a window with the field nearest to the map's that has a potential.

    Where the map holds all liquid between floor and lid, walls are meshed with it. The ends of a
    window that does not repeat are taken as mirror planes.

    Parameters
    ----------
    source
        The map, in the coordinates of the channel.
    channel
        The window without spans; `pitch` is its length.

    Raises
    ------
    FieldTableError
        If the map misses a part of the window, leaves the liquid, is far from any field with a
        potential, or does not repeat where the window should.
    """
    low, high = _heights(source, channel)
    left, right = channel.ends
    columns, rows = cell_lines(source, (left, right, low, high))
    flat = source.normal_share is None
    piece = None
    if flat and (low, high) == (0.0, channel.height):
        piece = on_lines(channel, columns, rows, refinement)
        mesh = piece.mesh
    else:
        mesh = _liquid(split(columns, refinement), split(rows, refinement))
    given = impose(mesh.restrict("liquid"), source, harmonic=flat)
    if given.mismatch > MOST_MISMATCH:
        raise FieldTableError(f"{_mismatch(given)}, so that no force can be taken from it")
    joined = channel.periodic and piece is not None
    return Section(
        mesh=mesh,
        potentials=({},) * len(given.potentials),
        electrodes=(),
        length=channel.pitch,
        height=channel.height,
        fold=Fold(
            period=channel.pitch if channel.periodic else None,
            alternation=_alternation(source, channel, (low, high)) if channel.periodic else 1,
            parities=(1,) * len(given.potentials),
            start=left,
        ),
        mirrors={} if joined else {"left": 0, "right": 0},
        wall_conductivities=piece.wall_conductivities if piece else {},
        outsides=piece.outsides if piece else {},
        rests=piece.rests if piece else (),
        whole=piece is not None,
        joined=("left", "right") if joined else None,
        imposed=given,
        remarks=(*_doubts(source, given), *_gaps(source, (low, high), piece)),
    )


def _heights(source: Sampled, channel: Channel) -> tuple[float, float]:
    """Heights that the map covers, 0 and the channel's where it comes within half a spacing."""
    left, right, low, high = source.window
    wide, tall = source.spacing
    start, end = channel.ends
    if left > start + 0.5 * wide or right < end - 0.5 * wide:
        raise FieldTableError(
            f"covers x from {_um(left)} to {_um(right)}, not the whole window from {_um(start)} "
            f"to {_um(end)}"
        )
    slack = SLACK * channel.height
    if low < -slack or high > channel.height + slack:
        raise FieldTableError(
            f"has points from y = {_um(low)} to {_um(high)}, outside the liquid, which reaches "
            f"from the floor at 0 to {_um(channel.height)}; leave out walls and metal, or mend "
            "the channel height"
        )
    bottom = 0.0 if low <= 0.5 * tall else low
    top = channel.height if high >= channel.height - 0.5 * tall else high
    return bottom, top


def _alternation(source: Sampled, channel: Channel, heights: tuple[float, float]) -> int:
    """Whether the field comes back as it is, 1, or reversed, −1, after a window."""
    y = np.linspace(*heights, 101)
    first, last = (source(np.full_like(y, x), y) for x in channel.ends)
    size = max(np.linalg.norm(first), np.linalg.norm(last))
    apart = {sign: float(np.linalg.norm(last - sign * first) / size) for sign in (1, -1)}
    sign = min(apart, key=lambda key: apart[key])
    if apart[sign] > MOST_APART:
        raise FieldTableError(
            f"does not repeat: the field at one end of the window and at the other differ by "
            f"{apart[sign]:.0%}. Let the window be whole repeats, or say that it does not repeat"
        )
    return sign


def _liquid(columns: Real, rows: Real) -> Mesh:
    """Mesh of a window without walls, with the names that a section has."""
    mesh = MeshQuad.init_tensor(columns, rows)
    x = mesh.p[0, mesh.facets]
    return mesh.with_boundaries(
        {
            "left": np.flatnonzero((x == columns[0]).all(axis=0)),
            "right": np.flatnonzero((x == columns[-1]).all(axis=0)),
        }
    ).with_subdomains({"liquid": np.arange(mesh.nelements)})


def _doubts(source: Sampled, given: Imposed) -> Iterator[str]:
    """What may be wrong with the field of a map."""
    if given.mismatch > NOTABLE_MISMATCH:
        yield f"The field map {_mismatch(given)}; forces are uncertain."
    if source.spikes:
        yield (
            f"{source.spikes} points of the field map stand on edges of metal, where the field is "
            "infinite; the mean of what surrounds them is taken there."
        )
    if source.normal_share is not None and source.normal_share > NOTABLE_NORMAL:
        yield (
            f"In the plane of the field map {source.normal_share:.1%} of E² goes across it: it is "
            "no plane of symmetry, and that part is left out."
        )


def _gaps(source: Sampled, heights: tuple[float, float], piece: Layered | None) -> Iterator[str]:
    """What a map does not hold."""
    if source.normal_share is not None:
        yield (
            "The field map is a plane of a field in three dimensions: heat and flow are not "
            "solved for, and the load is as if the field were the same all across the channel."
        )
    elif piece is None:
        yield (
            f"The field map covers heights from {_um(heights[0])} to {_um(heights[1])}, not all "
            "of the liquid: heat and flow are not solved for, and what touches floor or lid is "
            "taken to meet the field at the nearest of these heights."
        )


def _mismatch(given: Imposed) -> str:
    return (
        f"differs from every field with a potential by {given.mismatch:.1%} of its mean square: "
        "its points are too coarse, a component or unit is wrong, or it holds an electrode's edge"
    )


def _um(value: float) -> str:
    return format_quantity(value, "um", 4)
