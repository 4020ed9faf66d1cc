"""Profiles: what goes in comes out the same, and what cannot be used is named, all of it."""

import math

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from model.errors import DesignError, FieldError
from model.profile import (
    MAX_BYTES,
    MOST_ERRORS,
    document,
    fingerprint,
    load_profile,
    parse_design,
    profile_text,
    read_profile,
)

PATIENT = settings(max_examples=15, deadline=None, suppress_health_check=[HealthCheck.too_slow])


def errors_of(data):
    with pytest.raises(DesignError) as caught:
        parse_design(data)
    return {error.path: error for error in caught.value.errors}


def place_of(data, path):
    """The table or list that holds a place, and its key there."""
    *parents, last = (int(key) if key.isdecimal() else key for key in path.split("."))
    for key in parents:
        data = data[key]
    return data, last


def changed(design, path, value):
    data = document(design)
    place, key = place_of(data, path)
    place[key] = value
    return data


@PATIENT
@given(st.data())
def test_any_design_survives_document_and_file(designs, data):
    design = data.draw(designs)
    again = parse_design(document(design))
    assert again == design
    assert hash(again) == hash(design)
    read = read_profile(profile_text(design).encode())
    assert read == design
    assert fingerprint(read) == fingerprint(again) == fingerprint(design)
    assert document(read) == document(design)


def test_fingerprint_tells_what_is_computed_and_nothing_else(yeast, vary):
    words = {"title": "Other", "question": "Why?", "particle.0.source": "Smith 1999"}
    assert fingerprint(vary(yeast, words)) == fingerprint(yeast)
    changes = {
        "drive.voltage": "10.000001 V",
        "liquid.temperature": "22.1 degC",
        "particle.1.name": "other",
        "particle.0.role": "collect",
        "limits.temperature_rise": "4.1 K",
        "chip.lid.outside": "held",
    }
    prints = {fingerprint(vary(yeast, {path: value})) for path, value in changes.items()}
    assert len(prints) == len(changes)  # the role is what it was before
    assert fingerprint(yeast) in prints


def test_spelling_of_a_value_does_not_matter(yeast, vary):
    for value in ("0.02 S/m", "20 mS/m", "20", 20, "200 uS/cm", "200 µS/cm", 20.0):
        assert vary(yeast, {"liquid.conductivity": value}) == yeast


BAD_VALUES = {
    "text for a number": ("chip.bar_width", "wide", "needs a number"),
    "a list for a number": ("chip.bar_width", [40], "needs a number"),
    "a table for a number": ("chip.bar_width", {"um": 40}, "needs a number"),
    "yes for a number": ("chip.bar_width", True, "needs a number"),
    "yes for a pure number": ("drive.duty", True, "needs a number"),
    "an empty text": ("chip.bar_width", "", "needs a number"),
    "a unit of another kind": ("chip.bar_width", "40 V", "another kind"),
    "an unknown unit": ("chip.bar_width", "40 furlongwidths", "not known"),
    "a decimal comma": ("chip.bar_width", "40,5 um", "point"),
    "a negative length": ("chip.bar_width", "-40 um", "from 0.5 to 2000 µm"),
    "a gap of zero": ("chip.gap", "0 um", "from 0.5 to 2000 µm"),
    "a frequency of zero": ("drive.frequency", 0, "from"),
    "not a number": ("drive.voltage", math.nan, "finite"),
    "not a number, as text": ("drive.voltage", "nan", "needs a number"),
    "endless": ("drive.voltage", math.inf, "finite"),
    "endless, as text": ("drive.voltage", "1e999 V", "finite"),
    "more digits than a float": ("drive.voltage", 10**400, "finite"),
    "half a bar": ("chip.bar_count", 2.5, "whole number"),
    "yes for a count": ("chip.bar_count", True, "whole number"),
    "one bar": ("chip.bar_count", 1, "from 2 to 1000"),
    "text for a flag": ("particle.0.must_live", "true", "true or false"),
    "a number for a flag": ("particle.0.must_live", 1, "true or false"),
    "an unknown word": ("particle.0.role", "keep", "collect, pass, watch"),
    "a number for a word": ("particle.0.role", 3, "collect, pass, watch"),
    "a number for a text": ("title", 3, "text"),
    "a long text": ("title", "x" * 81, "80"),
    "two lines of text": ("title", "one\ntwo", "one line"),
    "no name": ("particle.0.name", " ", "empty"),
    "an unknown key": ("chip.gapp", "40 um", "is gap meant?"),
    "an unknown key of a layer": ("particle.0.layers.0.thicknes", "8 nm", "is thickness meant?"),
    "an unknown key of a membrane": ("particle.0.layers.0.capacitanc", 1, "capacitance meant?"),
    "an unknown kind": ("task.kind", "juggle", "one of deflect, hold"),
    "an unknown particle": ("particle.0.kind", "cube", "one of"),
    "an unknown layout": ("chip.layout", ["x"], "one of"),
    "no table": ("drive", 3, "table"),
    "no list": ("particle", {"name": "one"}, "list"),
    "no layers": ("particle.0.layers", [], "at least one layer"),
    "a number for a layer": ("particle.0.layers.1", 3, "table"),
    "500 layers": ("particle.0.layers", [{}] * 500, "at most 32"),
    "no particles": ("particle", [], "at least one particle"),
    "13 particles": ("particle", [{}] * 13, "at most 12"),
    "schema 2": ("schema", 2, "must be 1"),
    "schema yes": ("schema", True, "must be 1"),
    "a name from within the program": ("particles", [], "is particle meant?"),
    "a nest of lists": ("title", [[[[[[[[]]]]]]]], "text"),
}


@pytest.mark.parametrize("name", BAD_VALUES)
def test_bad_values_are_named(name, yeast):
    path, value, words = BAD_VALUES[name]
    errors = errors_of(changed(yeast, path, value))
    near = [error for place, error in errors.items() if path.startswith(place) or place == path]
    near = near or [error for place, error in errors.items() if place.startswith(path)]
    assert near, errors
    assert any(words in str(error) for error in near), [str(error) for error in near]


def test_thirteen_good_particles_are_too_many(yeast):
    one = document(yeast)["particle"][0]
    many = [{**one, "name": str(index)} for index in range(13)]
    assert "at most 12" in str(errors_of({**document(yeast), "particle": many})["particle"])
    assert len(parse_design({**document(yeast), "particle": many[:12]}).particles) == 12


@pytest.mark.parametrize(
    "path",
    ["task", "chip", "liquid", "drive", "particle", "chip.gap", "drive.voltage", "task.kind",
     "particle.0.kind", "particle.0.name", "particle.1.core", "particle.0.layers",
     "particle.0.core.conductivity", "particle.0.layers.0.thickness"],
)  # fmt: skip
def test_missing_keys_are_named(path, yeast):
    data = document(yeast)
    place, key = place_of(data, path)
    del place[key]
    errors = errors_of(data)
    assert set(errors) == {path.removesuffix(".kind")}
    assert all(
        "missing" in str(error) or "needs the key" in str(error) for error in errors.values()
    )


def test_every_error_is_told_at_once(yeast):
    data = document(yeast)
    data["chip"]["gap"] = "0 um"
    data["chip"]["bar_width"] = "40 V"
    del data["drive"]["frequency"]
    data["drive"]["duty"] = math.nan
    data["liquid"]["colour"] = "red"
    data["particle"][1]["radius"] = "big"
    data["particle"][0]["layers"][1]["thickness"] = -3
    data["limits"]["temperature_rise"] = "4 m"
    assert set(errors_of(data)) == {
        "chip.gap",
        "chip.bar_width",
        "drive.frequency",
        "drive.duty",
        "liquid.colour",
        "particle.1.radius",
        "particle.0.layers.1.thickness",
        "limits.temperature_rise",
    }


def test_a_bad_field_in_every_particle_is_no_missing_particle(yeast):
    data = document(yeast)
    data["particle"] = [{**particle, "radius": "big"} for particle in data["particle"]]
    assert set(errors_of(data)) == {"particle.0.radius", "particle.1.radius"}


def test_fields_that_do_not_fit_together_are_told_at_once(yeast):
    data = document(yeast)
    data["particle"][1]["name"] = data["particle"][0]["name"]
    data["task"]["working_height"] = "1 um"
    data["chip"]["floor"]["outside"] = data["chip"]["lid"]["outside"] = "insulated"
    errors = errors_of(data)
    names = {"particle.0.name", "particle.1.name"}
    assert set(errors) == {*names, "task.working_height", "chip.lid.outside"}
    assert "4.04 to 95.96 µm" in str(errors["task.working_height"]).replace(" µm to", " to")
    assert "viable yeast" in str(errors["task.working_height"])


@pytest.mark.parametrize("height", ["4.04 um", "95.96 um"])
def test_the_bounds_that_are_told_can_be_used(height, yeast):
    parse_design(changed(yeast, "task.working_height", height))


@pytest.mark.parametrize("height", ["4 um", "96 um", "1 mm"])
def test_a_particle_clears_floor_and_lid(height, yeast):
    assert set(errors_of(changed(yeast, "task.working_height", height))) == {"task.working_height"}


def test_nobody_to_collect(yeast):
    assert "particle.0.role" in errors_of(changed(yeast, "particle.0.role", "pass"))


def test_layers_that_leave_no_core(yeast):
    errors = errors_of(changed(yeast, "particle.0.radius", "0.2 um"))
    assert "no core" in str(next(iter(errors.values())))


FILES = {
    "too large": (b"#" * (5 * 1024 * 1024), "256 kB"),
    "not UTF-8": (b'title = "\xff\xfe"', "UTF-8"),
    "not TOML": (b"title = ", "TOML"),
    "binary": (bytes(range(128)), "TOML"),
    "empty": (b"", "missing"),
    "two of one key": (b"schema = 1\nschema = 1", "TOML"),
    "endless digits": (b"schema = " + b"9" * 5000, "TOML"),
    "schema 2": (b"schema = 2", "must be 1"),
    "nested arrays": (b"title = " + b"[" * 50_000, "TOML"),
    "nested tables": (b"a = " + b"{a=" * 5000 + b"1" + b"}" * 5000, "TOML"),
    "deep dotted keys": (b"a" + b".a" * 50_000 + b" = 1", "400 points"),
    "deep table": (b"[a" + b".a" * 50_000 + b"]", "400 points"),
    "deep but short": (b"a" + b".a" * 300 + b" = 1", "nested deeper"),
}


@pytest.mark.parametrize("name", FILES)
def test_bad_files_are_told(name, tmp_path):
    content, words = FILES[name]
    path = tmp_path / "bad.toml"
    path.write_bytes(content)
    with pytest.raises(DesignError, match=words) as caught:
        load_profile(path)
    assert len(str(caught.value)) < 10_000


def test_a_flood_of_errors_is_cut():
    with pytest.raises(DesignError) as caught:
        read_profile(b"\n".join(b"key%d = 1" % index for index in range(20_000)))
    assert len(caught.value.errors) == MOST_ERRORS + 1
    assert "more errors" in str(caught.value.errors[-1])


def test_files_that_are_no_files(tmp_path):
    for path in (tmp_path, tmp_path / "none.toml"):
        with pytest.raises(DesignError, match="cannot be opened"):
            load_profile(path)


def test_a_mark_before_the_first_letter_is_no_error(yeast):
    content = profile_text(yeast).encode()
    assert len(content) < MAX_BYTES
    assert read_profile(b"\xef\xbb\xbf" + content) == yeast
    assert read_profile(content.replace(b"\n", b"\r\n")) == yeast


def test_what_is_told_of_a_value_is_short_and_harmless(yeast):
    for value in ("x" * 100_000, "\x1b[2Jgone", "one\ntwo", "\ud800"):
        (error,) = errors_of(changed(yeast, "title", value)).values()
        assert len(error.value) <= 60
        assert error.value.isprintable()
    for key in ("k" * 100_000, "\x1b[2Jgone", "one\ntwo"):
        (path,) = errors_of({**document(yeast), key: 1})
        assert len(path) <= 60
        assert path.isprintable()
    errors_of({**document(yeast), "\ud800": 1})


PLAIN = st.recursive(
    st.none() | st.booleans() | st.integers() | st.floats() | st.text(max_size=8),
    lambda inner: (
        st.lists(inner, max_size=3)
        | st.dictionaries(
            st.sampled_from(["kind", "layout", "name", "radius", "x"]), inner, max_size=3
        )
    ),
    max_leaves=8,
)
PLACES = ["task", "chip", "chip.gap", "chip.floor", "chip.floor.material", "liquid", "drive",
          "drive.voltage", "flow", "particle", "particle.0", "particle.0.kind", "particle.0.core",
          "particle.0.layers", "particle.0.layers.0", "limits", "title", "schema",
          "particle.1.must_live", "chip.bar_count"]  # fmt: skip


@settings(max_examples=150, deadline=None)
@given(place=st.sampled_from(PLACES), value=PLAIN)
def test_anything_anywhere_is_a_design_or_an_error_of_fields(yeast, place, value):
    found = ()
    try:
        parse_design(changed(yeast, place, value))
    except DesignError as problem:
        found = problem.errors or (FieldError("", "", ""),)
    assert all(error.problem and len(str(error)) < 400 for error in found)
