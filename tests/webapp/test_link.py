"""Links: whole ones give the same design, broken ones a plain reason and nothing worse."""

import base64
import json
import zlib

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from model.design import MOST_PARTICLES
from model.layers import MOST_LAYERS
from model.library import load_library
from model.profile import document, fingerprint, parse_design
from webapp.link import _DICTIONARY, MAX_CHARACTERS, LinkError, decode, encode, flatten, unflatten
from webapp.state import open_link

PATIENT = settings(max_examples=15, deadline=None, suppress_health_check=[HealthCheck.too_slow])
#: What servers and chat programs take without a word.
LONGEST = 2000


def packed(text, version="1", stated="abcd-1234"):
    packer = zlib.compressobj(9, zlib.DEFLATED, -15, zdict=_DICTIONARY)
    data = packer.compress(text.encode()) + packer.flush()
    return f"{version}.{stated}.{base64.urlsafe_b64encode(data).decode().rstrip('=')}"


@PATIENT
@given(st.data())
def test_any_design_comes_back_with_its_fingerprint(designs, data):
    design = data.draw(designs)
    link = encode(design)
    found, whole = decode("#" + link)
    assert parse_design(found) == design
    assert fingerprint(parse_design(found)) == fingerprint(design)
    assert whole
    opened = open_link("#" + link, design)
    assert opened.problems == ()
    assert opened.design == design


def test_demos_fit_well_into_a_link(demos):
    for design in demos.values():
        link = encode(design)
        assert len(link) < LONGEST
        assert link.replace("-", "").replace("_", "").replace(".", "").isalnum()
        assert open_link(link, demos["rinse-water-yeast"]).design == design


def test_twelve_particles_fit_into_a_link(yeast, vary):
    cell = document(yeast)["particle"][0]
    many = [
        {**cell, "name": f"strain {index}", "radius": f"{3 + index / 7:.3f} um"}
        for index in range(12)
    ]
    design = vary(yeast, {"particle": many})
    assert len(encode(design)) < LONGEST
    assert open_link(encode(design), yeast).design == design


def test_the_largest_design_of_the_page_fits_into_a_link(yeast, vary):
    """Twelve particles of the library with all layers that a particle may have."""
    entries = sorted(load_library().values(), key=lambda entry: -len(entry.rows()))[:MOST_PARTICLES]
    many = [{**entry.particle_document(), "name": entry.id[:40]} for entry in entries]
    design = vary(yeast, {"particle": many, "task.working_height": "30 um"})
    assert open_link(encode(design), yeast).design == design
    for index, particle in enumerate(many):
        particle["layers"] = [
            {
                "name": f"{index} {layer} {particle['name']}"[:40],
                "capacitance": f"{10 + layer / 7:.9g} mF/m^2",
                "conductance": f"{100 / (layer + 1):.9g} S/m^2",
                "dispersion_strength": f"{1 + index / 9:.9g} mF/m^2",
            }
            for layer in range(MOST_LAYERS)
        ]
    layered = [particle for particle in many if "core" in particle]
    design = vary(yeast, {"particle": layered, "task.working_height": "30 um"})
    opened = open_link(encode(design), yeast)
    assert opened.problems == ()
    assert opened.design == design


@pytest.mark.parametrize("end", [".", ",", ")", ">", "?!", '"'])
def test_punctuation_behind_a_link_in_running_text_is_no_damage(yeast, end):
    assert open_link(encode(yeast) + end, yeast).problems == ()


def attempt(link):
    """What a link gives; only a LinkError may come instead."""
    try:
        return decode(link)
    except LinkError:
        return None


def test_cut_links_give_their_beginning_or_a_reason(yeast):
    link = encode(yeast)
    for length in range(0, len(link), 3):
        found = attempt(link[:length])
        if length > 0.9 * len(link):
            assert found is not None
            assert found[0]["title"] == yeast.title
        opened = open_link(link[:length], yeast)
        # the very last letters only say that nothing follows
        assert opened.problems or opened.design == yeast


def test_a_cut_link_says_what_it_lacks(demos):
    beads, yeast = demos["latex-bead-rinse"], demos["rinse-water-yeast"]
    link = encode(beads)
    opened = open_link(link[: len(link) // 2], yeast)
    assert opened.design.title == beads.title
    assert opened.problems
    assert any("in its place" in problem for problem in opened.problems)


@settings(max_examples=120, deadline=None)
@given(place=st.integers(0, 400), letter=st.characters())
def test_a_damaged_letter_raises_nothing_else(yeast, place, letter):
    link = encode(yeast)
    place %= len(link)
    damaged = link[:place] + letter + link[place + 1 :]
    attempt(damaged)
    opened = open_link(damaged, yeast)
    assert opened.problems or fingerprint(opened.design) == fingerprint(yeast)


@settings(max_examples=150, deadline=None)
@given(st.text() | st.text(alphabet="abcAB01-_.=", max_size=60).map("1.abcd-1234.".__add__))
def test_foreign_text_raises_nothing_else(yeast, text):
    attempt(text)
    assert open_link(text, yeast).problems


@pytest.mark.parametrize(
    "text",
    [
        "a=" + "[" * 20_000 + "\n",
        "a=" + "[" * 900 + "]" * 900 + "\n",
        "a=" + '{"a":' * 900 + "1" + "}" * 900 + "\n",
        "a=" + "9" * 5000 + "\n",
        "a." * 20_000 + "b=1\n",
        "particle." + "9" * 3000 + ".x=1\n",
        "particle=[1,2]\n",
        "particle=3\nparticle.0.name=4\n",
        "chip.gap=NaN\nchip.bar_width=Infinity\nchip.bar_count=1e999\n",
        "=1\n..=2\n.a=3\n",
        "schema=2\n",
        'schema="1"\n',
        "task.kind=null\n",
        "title=\u2028\n\x00\n",
        "no line at all",
        "\n\n\n",
    ],
)
def test_packed_nonsense_raises_nothing_else(yeast, text):
    link = packed(text)
    attempt(link)
    opened = open_link(link, yeast)
    assert opened.problems
    assert parse_design(document(opened.design)) == opened.design


def test_a_bomb_is_not_unpacked(yeast):
    bomb = packed("a=1\n" * 3_000_000)
    assert len(bomb) < 16_000
    data, _ = decode(bomb)
    assert data == {"a": 1}
    for lines in ("".join(f"a{index}=1\n" for index in range(100_000)), "x" * 10_000_000):
        found = attempt(packed(lines))
        assert found is None or len(str(found)) < 200_000
    with pytest.raises(LinkError, match="longer"):
        decode("1.a." + "A" * MAX_CHARACTERS)


def test_reasons_are_plain(yeast):
    for link, words in (
        ("", "cut short"),
        ("hello", "cut short"),
        ("2.abcd-1234.AAAA", "version 2"),
        ("1.abcd-1234.A", "nothing in it can be read"),
        ("1.abcd-1234.é", "nothing in it can be read"),
    ):
        with pytest.raises(LinkError, match=words):
            decode(link)
        (problem,) = open_link(link, yeast).problems
        assert problem.startswith("The link could not be opened")


@pytest.mark.parametrize(("change", "value"), [("drive.voltage", "11 V"), ("title", "Another")])
def test_a_link_with_changed_contents_is_not_trusted(yeast, vary, change, value):
    version, stated, _ = encode(yeast).split(".")
    other = vary(yeast, {change: value})
    tampered = ".".join([version, stated, encode(other).split(".")[2]])
    opened = open_link(tampered, yeast)
    assert opened.design == other
    (problem,) = opened.problems
    assert "check does not fit" in problem


SCALARS = st.booleans() | st.integers() | st.text(max_size=5)
KEYS = st.text(alphabet="abc_", min_size=1, max_size=4)
TREES = st.dictionaries(
    KEYS,
    st.recursive(
        SCALARS,
        lambda inner: (
            st.dictionaries(KEYS, inner, min_size=1, max_size=3)
            | st.lists(
                st.dictionaries(KEYS, inner, min_size=1, max_size=2), min_size=1, max_size=12
            )
        ),
        max_leaves=5,
    ),
    min_size=1,
)


@settings(max_examples=30, deadline=None)
@given(TREES)
def test_flattened_data_comes_back(tree):
    lines = dict(flatten(tree))
    assert unflatten(lines) == tree
    assert json.loads(json.dumps(lines)) == lines
