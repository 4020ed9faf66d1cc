"""Meshes, grid lines, and finding the cell of a point."""

import numpy as np
import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st
from skfem import MeshQuad, MeshTri

from model.fields.assembly import space
from model.fields.cells import Cells
from model.fields.grading import between, march, split
from model.fields.section import Fold, Section
from model.layouts.coplanar_bars import CoplanarBars
from model.walls import Wall

sizes = st.floats(-6.3, -2.7).map(lambda power: 10.0**power)


@given(st.floats(1e-6, 1.0), st.floats(1e-9, 1e-2), st.floats(1e-3, 1.0))
def test_marched_lines_crowd_toward_their_start(length, share, longest):
    lines = march(length, share * length, lambda _: longest * length)
    steps = np.diff(lines)
    assert lines[0] == 0.0
    assert lines[-1] == length
    assert np.all(steps > 0)
    assert steps.max() <= max(longest, share) * length * 1.5000001
    assert np.all(steps[1:] < 4 * steps[:-1])
    assert lines.size < 40 + 2 / longest


def test_lines_between_two_edges_are_a_mirror_image():
    lines = between(1.0, 3.0, (1e-3, 1e-3), lambda _: 0.2)
    np.testing.assert_allclose(lines, 4.0 - lines[::-1], rtol=1e-12)
    assert lines[1] - lines[0] == pytest.approx(1e-3)


def test_split_lines():
    assert split(np.array([0.0, 1.0, 3.0]), 2).tolist() == [0, 0.25, 0.5, 0.75, 1, 1.5, 2, 2.5, 3]


@settings(max_examples=40, deadline=None)
@given(
    st.floats(0.5e-6, 2e-3),
    st.floats(0.5e-6, 2e-3),
    st.floats(5e-6, 2e-3),
    st.floats(1e-6, 20e-3),
    st.floats(1e-6, 20e-3),
)
def test_mesh_of_any_bars_is_small_and_fills_the_chip(width, gap, height, floor, lid):
    chip = CoplanarBars(
        bar_width=width,
        gap=gap,
        bar_count=2,
        channel_height=height,
        channel_width=1e-3,
        floor=Wall(material="glass", thickness=floor, outside="held"),
        lid=Wall(material="pdms", thickness=lid, outside="still-air"),
    )
    section = chip.section()
    mesh = section.mesh
    assert mesh.nelements < 2500
    named = section.mesh.subdomains
    assert sum(named[name].size for name in ("floor", "liquid", "lid")) == mesh.nelements
    bar = mesh.p[:, mesh.facets[:, mesh.boundaries["bar"]]]
    assert np.all(bar[1] == 0)
    assert bar[0].max() == pytest.approx(chip.bar_width / 2, rel=1e-12)
    liquid = section.liquid()
    corners = Cells.of(liquid).corners
    area = (np.ptp(corners[:, :, 0], axis=1) * np.ptp(corners[:, :, 1], axis=1)).sum()
    assert area == pytest.approx(section.length / 2 * chip.channel_height, rel=1e-9)
    ends = [rest.outside for rest in section.rests]
    assert ends == pytest.approx([-chip.floor.thickness, chip.channel_height + chip.lid.thickness])


def test_layout():
    chip = CoplanarBars(
        bar_width="40 um", gap="30 um", bar_count=20, channel_height="100 um", channel_width="2 mm"
    )
    assert chip.parallel_length == pytest.approx(19 * 2e-3)
    assert chip.narrowest == pytest.approx(30e-6)
    assert chip.section(1).mesh.nelements == 4 * chip.section().mesh.nelements


@pytest.mark.parametrize("kind", [MeshQuad, MeshTri])
def test_points_are_found_in_skewed_cells(kind):
    lines = np.geomspace(1, 50, 12) - 1
    mesh = kind.init_tensor(lines, lines)
    x, y = mesh.p
    mesh.p[:] = np.stack([x + 0.2 * y, y - 0.1 * x + 0.002 * x * y])
    cells = Cells.of(mesh)
    rng = np.random.default_rng(1)
    inside = rng.integers(0, mesh.nelements, 3000)
    place = rng.uniform(0, 1, (2, 3000))
    if kind is MeshTri:
        place[1] *= 1 - place[0]
    corners = cells.corners[inside]
    points = Cells._map(corners, place)
    found, local = cells.locate(points)
    assert np.all(found >= 0)
    np.testing.assert_allclose(Cells._map(cells.corners[found], local), points, atol=1e-9)
    assert np.mean(found == inside) > 0.999
    outside = np.array([[-1.0, 200.0, np.nan], [5.0, 3.0, 1.0]])
    assert cells.locate(outside)[0].tolist() == [-1, -1, -1]


@example(-5e-324, False, -1, -1)
@given(st.floats(-1e3, 1e3), st.booleans(), st.sampled_from([-1, 1]), st.sampled_from([-1, 1]))
def test_fold(x, mirrored, alternation, parity):
    """A function with the symmetry of the fold is rebuilt from its piece."""
    fold = Fold(2.0, mirrored, alternation, (parity, -parity))
    wave = np.pi if alternation == 1 else 0.5 * np.pi

    def pattern(x):
        if not mirrored:
            return np.stack([np.sin(wave * x), np.cos(wave * x)])
        return np.stack([np.cos(wave * x), np.sin(wave * x)][::parity])

    place, _, signs = fold.fold(np.array([x]))
    assert 0 <= place[0] <= (1.0 if mirrored else 2.0)
    np.testing.assert_allclose(signs * pattern(place), pattern(np.array([x])), atol=1e-9)


def test_piece_without_period_stays_where_it_is():
    place, side, signs = Fold().fold(np.array([-3.0, 5.0]))
    assert place.tolist() == [-3.0, 5.0]
    assert side.tolist() == signs[0].tolist() == [1.0, 1.0]


def square():
    mesh = MeshQuad.init_tensor(np.linspace(0, 1, 3), np.linspace(0, 1, 3))
    mesh = mesh.with_boundaries({"left": lambda x: x[0] == 0, "floor": lambda x: x[1] == 0})
    return mesh.with_subdomains({"liquid": lambda x: x[1] >= 0})


def test_section_names_must_exist():
    with pytest.raises(ValueError, match="no boundary"):
        Section(square(), ({"bar": 1.0},), ("bar",), length=1.0, height=1.0)
    with pytest.raises(ValueError, match="no subdomain"):
        Section(square(), ({},), (), length=1.0, height=1.0, wall_conductivities={"roof": 1.0})


def test_sides_must_run_one_way():
    """Cubic side functions of two cells agree only then."""
    mesh = square()
    Section(mesh, ({"left": 1.0},), ("left",), length=1.0, height=1.0)
    turned = mesh.t.copy()
    turned[:, 3] = np.roll(turned[:, 3], 2)
    turned = MeshQuad(mesh.p, turned).with_subdomains({"liquid": lambda x: x[1] >= 0})
    with pytest.raises(ValueError, match="opposite sense"):
        Section(turned, ({},), (), length=1.0, height=1.0)


def test_joined_sides_must_match():
    mesh = MeshTri.init_tensor(np.linspace(0, 1, 3), np.linspace(0, 1, 3))
    mesh = mesh.with_boundaries({"left": lambda x: x[0] == 0, "floor": lambda x: x[1] == 0})
    with pytest.raises(ValueError, match="do not match"):
        space(mesh, 2, 4, ("left", "floor"))
