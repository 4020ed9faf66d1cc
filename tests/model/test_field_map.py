"""The layout of a field map: the answers of the chip that it came from, and faults in words."""

import os
import pickle

import numpy as np
import pytest

from model.cautions import NO_HEAT, notes
from model.errors import DesignError
from model.evaluate import evaluate
from model.fields.solve import solve_chip
from model.files import FileError, Folder, digest_of, either
from model.layouts.field_map import FieldMap
from model.profile import document, fingerprint, load_profile, parse_design, profile_text, settled
from model.summary import check_object, check_text
from tests import field_maps

UM = 1e-6


def chip_of(design, **more):
    """Field map in the place of a chip of coplanar bars."""
    chip = design.chip
    return FieldMap(
        **{
            "file": "map.csv",
            "channel_height": chip.channel_height,
            "channel_width": chip.channel_width,
            "window_start": -0.5 * chip.pitch,
            "window_length": chip.pitch,
            "repeats": chip.bar_count - 1,
            "floor": chip.floor,
            "lid": chip.lid,
        }
        | more
    )


def exported(patterns, lowest=0.0, columns=121, rows=121, turn=1.0):
    """Table of a chip's own field over one pitch about a bar, per 3 V peak to peak."""
    pitch = patterns.chip.pitch
    step = pitch / (columns - 1)
    x = np.linspace(-0.5 * pitch - 0.5 * step, 0.5 * pitch + 0.5 * step, columns + 1)
    places = field_maps.grid(x, np.linspace(lowest, patterns.height, rows))
    field = np.array(patterns.electric_field(*places)) * 1.5 * turn  # amplitudes of 3 V pp
    return field_maps.table(places, field, "3 V peak to peak")


def always(content):
    return lambda name, digest: content


def result_of(design, content, **more):
    chip = chip_of(design, **more)
    patterns = solve_chip(chip, design.liquid.heat_conductivity, files=always(content))
    return evaluate(design.model_copy(update={"chip": chip}), patterns)


@pytest.fixture(scope="module")
def own(yeast, patterns):
    return evaluate(yeast, patterns)


@pytest.fixture(scope="module")
def whole(yeast, patterns):
    return result_of(yeast, exported(patterns))


@pytest.fixture(scope="module")
def part(yeast, patterns):
    """From 8 µm up, over what the particles touch."""
    return result_of(yeast, exported(patterns, 8 * UM))


def test_a_map_of_a_chip_gives_the_corridor_of_the_chip(own, whole):
    """To 2 %; the ceiling, set by the field at an edge, to 5 %, what goes with V⁴ to 20 %.

    Where the electrodes are is not told by a map, so that it says nothing of double layers and of
    what flows there, and of gaps only what the profile states.
    """
    assert whole.floor_pp == pytest.approx(own.floor_pp, rel=0.02)
    assert whole.ceiling_pp == pytest.approx(own.ceiling_pp, rel=0.05)
    assert whole.binding.rule.id == own.binding.rule.id
    values = {row.rule.name: row.value for row in whole.ledger}
    untold = ("double_layer_voltage", "electro_osmotic_ratio")
    told = [row for row in own.ledger if row.rule.id not in untold]
    assert set(values) == {row.rule.name for row in told}
    # what walls carry goes with the field right on their faces, which no map's points resolve
    known = [row for row in told if row.rule.id not in ("particle_size", "wall_admittance")]
    assert any("double layers and films are not known" in note for note in notes(whole))
    for row in known:
        loose = row.rule.id in ("electrothermal_ratio", "membrane_voltage")
        assert values[row.rule.name] == pytest.approx(row.value, rel=0.2 if loose else 0.02)
    assert whole.load.resistance == pytest.approx(own.load.resistance, rel=0.03)


def test_a_map_without_its_lowest_part_says_nothing_of_heat(own, part):
    assert part.floor_pp == pytest.approx(own.floor_pp, rel=0.01)
    assert part.temperature_rise is None
    assert part.electrothermal_speed is None
    known = {row.rule.id for row in part.ledger}
    assert not known & {"temperature_rise", "highest_temperature", "electrothermal_ratio"}
    assert {"membrane_voltage", "generator_voltage"} <= known
    assert NO_HEAT in notes(part)
    assert any("heights from 8 µm to 100 µm" in note for note in notes(part))
    assert NO_HEAT in check_text(part)
    told = check_object(part)
    assert told["temperature_rise_K"] is None
    assert "not known" in told["temperature_rise_K_reason"]
    with pytest.raises(ValueError, match="not known"):
        part.patterns.temperature(0.0, 50 * UM)
    with pytest.raises(ValueError, match="not known"):
        part.patterns.electrothermal(0.0, 50 * UM)


def test_patterns_without_heat_can_be_kept(part):
    again = pickle.loads(pickle.dumps(part.patterns))
    assert again.remarks == part.patterns.remarks
    np.testing.assert_array_equal(
        again.line(20 * UM).gradient, part.patterns.line(20 * UM).gradient
    )


@pytest.mark.parametrize(("height", "good"), [("8 um", True), ("7 um", False), ("90 um", True)])
def test_forces_are_taken_where_the_map_reaches(yeast, vary, part, height, good):
    design = part.design.model_copy(
        update={"task": vary(yeast, {"task.working_height": height}).task}
    )
    if good:
        assert np.isfinite(evaluate(design, part.patterns).floor_pp)
        return
    with pytest.raises(DesignError) as told:
        evaluate(design, part.patterns)
    (error,) = told.value.errors
    assert error.path == "task.working_height"
    assert "8 µm to 100 µm" in error.problem


def test_a_window_that_does_not_repeat(yeast, patterns, whole):
    """Its ends are mirror planes, as they are for bars; beyond there is nothing."""
    alone = result_of(yeast, exported(patterns), periodic=False)
    assert alone.patterns.period is None
    assert alone.floor_pp == pytest.approx(whole.floor_pp, rel=1e-3)
    assert alone.temperature_rise == pytest.approx(whole.temperature_rise, rel=1e-3)
    assert not alone.patterns.inside(80 * UM, 50 * UM)
    assert whole.patterns.inside(80 * UM, 50 * UM)


def test_a_common_phase_changes_nothing(yeast, patterns, whole):
    turned = result_of(yeast, exported(patterns, turn=np.exp(0.4j)))
    assert turned.floor_pp == pytest.approx(whole.floor_pp, rel=1e-6)
    assert turned.patterns.line(10 * UM).travelling is None


def test_a_cell_constant_overrides_the_energy(yeast, patterns):
    given = result_of(yeast, exported(patterns, 8 * UM), cell_constant=12.5)
    assert given.load.resistance == pytest.approx(12.5 / yeast.liquid.conductivity)
    assert not any("energy of the field map" in note for note in notes(given))


def fault(yeast, content, **more):
    with pytest.raises(DesignError) as told:
        solve_chip(chip_of(yeast, **more), files=always(content))
    (error,) = told.value.errors
    assert error.path == "chip.file"
    return error.problem


def changed(content, change):
    """A table with each row of numbers changed."""
    head, names, *rows = content.decode().splitlines()
    values = change(np.array([[float(cell) for cell in row.split(",")] for row in rows]))
    lines = [",".join(f"{value:.9g}" for value in row) for row in values]
    return "\n".join([head, names, *lines]).encode()


def swapped(values):
    return values[:, [0, 1, 3, 2]]


def turned_over(values):
    return values * [1, 1, 1, -1]


@pytest.mark.parametrize("wrong", [swapped, turned_over])
def test_fields_with_wrong_components_are_refused(yeast, patterns, wrong):
    problem = fault(yeast, changed(exported(patterns, 8 * UM), wrong))
    assert "differs from every field with a potential" in problem
    assert "a component or unit is wrong" in problem


@pytest.mark.parametrize(
    ("more", "words"),
    [
        ({"window_length": 200 * UM}, "covers x from"),
        ({"window_start": -90 * UM}, "not the whole window from −90 µm"),
        (
            {"channel_height": 90 * UM},
            "outside the liquid, which reaches from the floor at 0 to 90",
        ),
        ({"window_length": 70 * UM}, "does not repeat"),
        ({"file": ""}, "choose a field map"),
    ],
)
def test_maps_that_do_not_fit_are_told(yeast, patterns, more, words):
    assert words in fault(yeast, exported(patterns), **more)


def test_a_plane_outside_three_dimensions_is_told(yeast):
    places = field_maps.grid(*(np.linspace(0, 100 * UM, 6) for _ in range(3)))
    content = field_maps.table(places, np.ones_like(places))
    more = {"window_start": 0.0, "window_length": 100 * UM}
    assert "the plane z = 200 µm is not" in fault(yeast, content, plane=200 * UM, **more)


def cloud(hole):
    """Scattered points of a smooth field without those that `hole` (x, y in shares) names."""
    places = np.random.default_rng(5).uniform(0, 100 * UM, (2, 2000))
    places = places[:, ~hole(*places / (100 * UM))]
    field = np.exp(-places[1] / (30 * UM)) * np.array(
        [-np.cos(places[0] / (30 * UM)), np.sin(places[0] / (30 * UM))]
    )
    return field_maps.table(places, field)


@pytest.mark.parametrize(
    ("hole", "words"),
    [
        (lambda x, y: np.hypot(x - 0.5, y - 0.5) < 0.2, "has a gap: no point within"),
        (lambda x, y: (x > 0.8) & (y > 0.8), "does not fill its rectangle"),
    ],
)
def test_scattered_points_have_no_holes(yeast, hole, words):
    more = {"window_start": 1 * UM, "window_length": 98 * UM, "periodic": False}
    assert words in fault(yeast, cloud(hole), **more)
    solve_chip(chip_of(yeast, **more), files=always(cloud(lambda x, y: x < 0)))


def test_a_finer_cloud_near_an_edge_is_no_hole(yeast):
    """As dense as one likes in one place: it is the distance of the neighbours that counts."""
    chance = np.random.default_rng(2)
    fine = chance.uniform(40 * UM, 44 * UM, (2, 3000))
    places = np.concatenate([chance.uniform(0, 100 * UM, (2, 1500)), fine], axis=1)
    field = np.exp(-places[1] / (30 * UM)) * np.array(
        [-np.cos(places[0] / (30 * UM)), np.sin(places[0] / (30 * UM))]
    )
    chip = chip_of(yeast, window_start=1 * UM, window_length=98 * UM, periodic=False)
    patterns = solve_chip(chip, files=always(field_maps.table(places, field)))
    found = np.array(patterns.electric_field(50 * UM, 70 * UM))
    exact = np.exp(-7 / 3) * np.array([-np.cos(5 / 3), np.sin(5 / 3)])
    np.testing.assert_allclose(found, exact, atol=2e-3)


@pytest.fixture
def folder(tmp_path, yeast, patterns):
    """A profile beside its map, and a file outside."""
    place = tmp_path / "profiles"
    (place / "deeper").mkdir(parents=True)
    (tmp_path / "secret.csv").write_text("nobody's")
    (place / "map.csv").write_bytes(exported(patterns, columns=41, rows=41))
    design = yeast.model_copy(update={"chip": chip_of(yeast)})
    (place / "profile.toml").write_text(profile_text(design))
    return place


def test_a_profile_finds_the_map_beside_it(folder, own):
    design = load_profile(folder / "profile.toml")
    content = (folder / "map.csv").read_bytes()
    assert design.chip.digest == digest_of(content)
    assert design.chip.needed_file == ("map.csv", digest_of(content))
    patterns = solve_chip(design.chip, files=Folder(folder))
    assert evaluate(design, patterns).floor_pp == pytest.approx(own.floor_pp, rel=0.05)
    assert parse_design(document(design)) == design


def test_the_fingerprint_follows_the_contents_of_the_map(folder):
    before = fingerprint(load_profile(folder / "profile.toml"))
    path = folder / "map.csv"
    path.write_bytes(path.read_bytes() + b"# changed\n")
    assert fingerprint(load_profile(folder / "profile.toml")) != before


def test_another_map_than_the_designs_is_refused(folder):
    design = load_profile(folder / "profile.toml")
    (folder / "map.csv").write_bytes(b"another")
    with pytest.raises(DesignError, match="has changed: its digest is") as told:
        solve_chip(design.chip, files=Folder(folder))
    assert told.value.errors[0].path == "chip.file"
    assert settled(design, Folder(folder)) is design


def test_a_missing_map_is_told_when_it_is_wanted(folder):
    (folder / "map.csv").unlink()
    design = load_profile(folder / "profile.toml")
    with pytest.raises(DesignError, match="not in the folder of the profile"):
        solve_chip(design.chip, files=Folder(folder))
    with pytest.raises(DesignError, match="not at hand"):
        solve_chip(design.chip)
    with pytest.raises(DesignError, match="not at hand"):
        design.chip.section()


@pytest.mark.parametrize(
    "name",
    [
        "../secret.csv", "deeper/../../secret.csv", "/etc/hostname", "..", "", ".", "a\\..\\b",
        "C:map.csv", "map.csv\0", "link.csv", "~/secret.csv", "deeper", "x" * 5000, "loop.csv",
        "//etc/hostname",
    ],
)  # fmt: skip
def test_no_name_leads_out_of_the_folder(folder, name):
    os.symlink(folder.parent / "secret.csv", folder / "link.csv")
    os.symlink(folder / "loop.csv", folder / "loop.csv")
    with pytest.raises(FileError):
        Folder(folder)(name, "")


def test_a_map_deeper_in_the_folder_is_found(folder):
    (folder / "deeper" / "b.csv").write_bytes(b"inside")
    assert Folder(folder)("deeper/b.csv", "") == b"inside"
    assert either(Folder(folder.parent), Folder(folder))("deeper/b.csv", "") == b"inside"


@pytest.mark.parametrize("digest", ["12", "xyzxyzxy", "ABCDEF0123", "a" * 65])
def test_a_digest_is_hexadecimal(yeast, digest):
    data = document(yeast.model_copy(update={"chip": chip_of(yeast)}))
    with pytest.raises(DesignError) as told:
        parse_design({**data, "chip": {**data["chip"], "digest": digest}})
    assert told.value.errors[0].path == "chip.digest"


def test_the_drawing_holds_the_window(yeast):
    drawing = chip_of(yeast).drawing()
    left, right, low, high = drawing.window
    assert (left, right) == pytest.approx((-60 * UM, 60 * UM))
    assert low < 0 < 100 * UM < high
    assert {dimension.field for dimension in drawing.dimensions} <= set(FieldMap.model_fields)
