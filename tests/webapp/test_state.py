"""From what a browser holds to a design: nothing a page sends ends in anything but an answer."""

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from model.errors import DesignError
from model.profile import document, fingerprint, profile_text
from tests.wishes import request_of
from webapp.controls import all_fields
from webapp.state import (
    BadRequestError,
    design_of,
    open_document,
    open_file,
    put,
    read_request,
)


def design_with(design, **values):
    return design_of(read_request(request_of(design, values)))


def test_a_document_alone_is_its_design(yeast):
    assert design_of(read_request(request_of(yeast))) == yeast


def test_values_stand_over_the_document(yeast):
    found = design_with(yeast, **{"drive.voltage": "12", "particle.1.radius": "3 µm"})
    assert found.drive.voltage == 12.0
    assert found.particles[1].radius == pytest.approx(3e-6)
    assert yeast.drive.voltage == 10.0


def test_an_emptied_control_takes_the_usual_value(yeast):
    assert design_with(yeast, **{"liquid.viscosity": ""}).liquid.viscosity is None
    found = design_with(yeast, **{"limits.temperature_rise": ""})
    assert found.limits.temperature_rise == 4.0


def test_an_emptied_control_that_is_needed_is_missing(yeast):
    with pytest.raises(DesignError) as caught:
        design_with(yeast, **{"drive.voltage": "", "chip.gap": "", "liquid.temperature": "x"})
    assert {error.path for error in caught.value.errors} == {
        "drive.voltage",
        "chip.gap",
        "liquid.temperature",
    }


def test_an_amount_of_salt_sets_the_conductivity(yeast):
    """KCl of 0.01 mol/L conducts 0.1413 S/m at 25 °C: CRC Handbook, from memory."""
    base = {"liquid.conductivity": "20 mS/m", "liquid.temperature": "25 °C"}
    data = document(design_with(yeast, **base))
    data["liquid"]["recipe"] = {"salt": "KCl"}
    values = {**base, "liquid.recipe.amount": "10 mM"}
    made = design_of(read_request(request_of(yeast, values, document=data)))
    assert made.liquid.conductivity == pytest.approx(0.1413, rel=0.01)
    assert made.liquid.recipe.amount is None
    without = {**base, "liquid.recipe.amount": ""}
    assert (
        design_of(read_request(request_of(yeast, without, document=data))).liquid.conductivity
        == 0.02
    )
    with pytest.raises(DesignError) as caught:
        design_of(
            read_request(
                request_of(yeast, {**values, "liquid.recipe.amount": "9 M"}, document=data)
            )
        )
    assert {error.path for error in caught.value.errors} == {"liquid.recipe.amount"}


@settings(max_examples=15, deadline=None, suppress_health_check=[HealthCheck.too_slow])
@given(st.data())
def test_every_control_shows_its_value_exactly(designs, data):
    design = data.draw(designs)
    values = {
        field.path: field.text
        for field in all_fields(design)
        if not (field.text == "" and field.value is None)
    }
    found = design_of(read_request(request_of(design, values)))
    assert fingerprint(found) == fingerprint(design)
    assert found == design


BAD_REQUESTS = {
    "nothing": None,
    "a number": 3,
    "a text": "x",
    "a list": [],
    "an empty table": {},
    "no number": {"number": None},
    "a number as text": {"number": "1"},
    "a number that is none": {"number": float("nan")},
    "yes for a number": {"number": True},
    "no document": {"document": None},
    "a list for a document": {"document": []},
    "no values": {"values": None},
    "a list of values": {"values": []},
    "a number for a value": {"values": {"drive.voltage": 3}},
    "nothing for a value": {"values": {"drive.voltage": None}},
    "a list for a value": {"values": {"drive.voltage": ["3"]}},
    "a table for a value": {"values": {"drive.voltage": {"a": 1}}},
    "a long value": {"values": {"drive.voltage": "3" * 401}},
    "a long path": {"values": {"a" * 121: "3"}},
    "many values": {"values": {f"a{index}": "" for index in range(4001)}},
    "no theme": {"theme": None},
    "another theme": {"theme": "pink"},
    "a list for a theme": {"theme": ["light"]},
    "no such part": {"values": {"motor.speed": "3"}},
    "no such particle": {"values": {"particle.7.name": "x"}},
    "within a text": {"values": {"title.0": "x"}},
    "a particle itself": {"values": {"particle.0": "x"}},
    "a word for a number of a list": {"values": {"particle.first.name": "x"}},
}


@pytest.mark.parametrize("name", BAD_REQUESTS)
def test_requests_that_no_page_sends_are_refused(name, yeast):
    bad = BAD_REQUESTS[name]
    data = {**request_of(yeast), **bad} if isinstance(bad, dict) and bad else bad
    with pytest.raises(BadRequestError):
        design_of(read_request(data))


def test_deep_documents_are_refused(yeast):
    deep = {}
    for _ in range(900):
        deep = {"a": [deep]}
    with pytest.raises(BadRequestError, match="deeper"):
        read_request(request_of(yeast, document=deep))


PLAIN = st.recursive(
    st.none() | st.booleans() | st.integers() | st.floats() | st.text(max_size=6),
    lambda inner: st.lists(inner, max_size=3) | st.dictionaries(st.text(max_size=4), inner),
    max_leaves=8,
)
PATHS = st.sampled_from(
    [
        "drive.voltage",
        "particle.0.kind",
        "task",
        "chip.floor",
        "schema",
        "",
        "particle.0.layers",
        "particle.-1.name",
        ".",
        "particle.0.layers.0.name",
    ]
)


@settings(max_examples=150, deadline=None)
@given(data=PLAIN | st.fixed_dictionaries({"number": PLAIN, "document": PLAIN, "values": PLAIN}))
def test_any_data_is_a_request_or_refused(data):
    try:
        design_of(read_request(data))
    except (BadRequestError, DesignError):
        pass
    else:
        pytest.fail("no design stands in that")


@settings(max_examples=60, deadline=None)
@given(path=PATHS, value=st.text(max_size=30) | st.booleans())
def test_any_value_at_any_path_is_a_design_an_error_or_refused(yeast, path, value):
    try:
        found = design_with(yeast, **{path: value})
    except (BadRequestError, DesignError):
        return
    assert found.particles


def test_put_reaches_lists_and_takes_keys_out():
    data = {"a": [{"b": 1}, {"b": 2, "c": 3}]}
    put(data, "a.1.b", "x")
    put(data, "a.1.c", "")
    put(data, "d", True)
    assert data == {"a": [{"b": 1}, {"b": "x"}], "d": True}


def test_a_good_document_opens_as_it_is(demos, yeast):
    for design in demos.values():
        opened = open_document(document(design), yeast)
        assert opened.problems == ()
        assert opened.design == design


def test_bad_fields_are_mended_and_named(demos, yeast):
    beads = demos["latex-bead-rinse"]
    data = document(beads)
    data["drive"]["voltage"] = "lots"
    data["chip"]["gap"] = "0 um"
    data["limits"]["colour"] = "red"
    opened = open_document(data, yeast)
    assert len(opened.problems) == 3
    for path in ("drive.voltage", "chip.gap", "limits.colour"):
        assert any(problem.startswith(path) for problem in opened.problems)
    assert opened.design.drive.voltage == yeast.drive.voltage
    assert opened.design.chip.gap == yeast.chip.gap
    assert opened.design.chip.bar_width == beads.chip.bar_width
    assert opened.design.particles == beads.particles


def test_a_missing_part_is_taken_whole(demos, yeast):
    beads = demos["latex-bead-rinse"]
    data = document(beads)
    del data["liquid"]
    opened = open_document(data, yeast)
    assert opened.design.liquid == yeast.liquid
    assert opened.design.chip == beads.chip
    assert opened.problems[0].startswith("liquid")


def test_one_bad_field_in_every_particle_does_not_lose_the_particles(demos, yeast):
    beads = demos["latex-bead-rinse"]
    data = document(beads)
    for particle in data["particle"]:
        particle["density"] = "heavy"
    opened = open_document(data, yeast)
    assert [p.name for p in opened.design.particles] == [p.name for p in beads.particles]
    assert len(opened.problems) == 2


@pytest.mark.parametrize("data", [{}, {"schema": 2}, {"x": 1}, {"particle": 3}, {"particle": [3]}])
def test_what_cannot_be_mended_leaves_the_last_design(data, yeast):
    opened = open_document(data, yeast)
    assert opened.problems
    assert opened.design.particles == yeast.particles


def test_an_uploaded_file(demos, yeast):
    beads = demos["latex-bead-rinse"]
    assert open_file(profile_text(beads).encode(), yeast).design == beads
    for content in (b"\xff", b"title = ", b"#" * 1_000_000, b"a" + b".a" * 50_000 + b"=1"):
        opened = open_file(content, yeast)
        assert opened.problems
        assert opened.design == yeast
    empty = open_file(b"", yeast)
    assert empty.design.particles == yeast.particles
    assert empty.problems


@settings(max_examples=60, deadline=None)
@given(
    place=st.sampled_from(["task", "chip", "chip.gap", "particle", "drive.voltage", "limits"]),
    value=PLAIN,
)
def test_any_document_opens_as_something(yeast, place, value):
    data = document(yeast)
    part, _, key = place.partition(".")
    if key:
        data[part][key] = value
    else:
        data[part] = value
    opened = open_document(data, yeast)
    assert opened.problems or opened.design.particles
