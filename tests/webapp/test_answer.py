"""Answers: one request, one plain object with all that the page shows."""

import json

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from model.evaluate import evaluate
from model.library import load_library
from model.profile import document, fingerprint, parse_design
from model.quantity import parse_quantity
from model.version import VERSION
from webapp.answer import answer, caption, knobs, state_answer
from webapp.callbacks import file_stem, hydrated, opened_from
from webapp.link import encode
from webapp.services import Services
from webapp.state import Opened, put
from webapp.views import VIEWS


class Chips:
    """Stands for the cache: chips that the session has solved already."""

    def __init__(self, solved):
        self.patterns = solved


@pytest.fixture
def services(demos, solved):
    return Services(Chips(solved), demos, load_library())


def request_of(design, values=None, theme="light"):
    return {"number": 7, "document": document(design), "values": values or {}, "theme": theme}


def ask(services, design, values=None, theme="light"):
    return answer(request_of(design, values, theme), services, VIEWS["corridor"])


@pytest.mark.parametrize("theme", ["light", "dark"])
def test_an_answer_is_plain_data_with_all_parts(services, yeast, theme):
    found = ask(services, yeast, theme=theme)
    assert json.loads(json.dumps(found, allow_nan=False))
    assert found["number"] == 7
    assert found["errors"] == {}
    assert found["fingerprint"] == fingerprint(yeast)
    assert found["link"] == encode(yeast)
    assert found["title"] == yeast.title
    assert found["verdict"]["inside"]
    assert found["figures"].keys() == found["sentences"].keys()
    assert found["names"] == ["viable yeast", "dead yeast"]
    assert found["cautions"]


def test_an_answer_is_small(services, yeast):
    assert len(json.dumps(ask(services, yeast))) < 100_000


def test_wrong_entries_are_told_by_their_place(services, yeast):
    found = ask(services, yeast, {"drive.voltage": "lots", "chip.gap": "0", "drive.duty": "2"})
    assert found.keys() == {"number", "errors"}
    assert found["errors"].keys() == {"drive.voltage", "chip.gap", "drive.duty"}
    for words in found["errors"].values():
        assert words[:1].isupper()
    assert "0.5 to 2000 µm" in found["errors"]["chip.gap"]


def test_a_knob_moves_the_verdict(services, yeast):
    headlines = [
        ask(services, yeast, {"drive.voltage": volts})["verdict"]["headline"]
        for volts in ("5", "10", "19")
    ]
    assert headlines == ["Below the corridor", "Inside the corridor", "Above the corridor"]


def test_the_caption_traces_a_figure_to_its_inputs(demos):
    for design in demos.values():
        line = caption(design)
        assert design.title in line
        assert fingerprint(design) in line
        assert VERSION in line
        assert "peak to peak" in line
        assert len(line.splitlines()) == 1
    assert "1 MHz, 10 V peak to peak, 20 mS/m, 22 °C" in caption(demos["rinse-water-yeast"])


def test_knobs_show_the_units_of_the_bench(yeast):
    found = knobs(yeast)
    assert found["liquid.conductivity"]["note"] == "200 µS/cm"  # 20 mS/m, 1 mS/m = 10 µS/cm
    assert found["drive.voltage"]["note"] == "3.54 V rms, 5 V peak"
    # σ/(2πε) of 20 mS/m and ε = 79.5 ε0 at 22 °C: 4.52 MHz
    assert found["drive.frequency"]["note"] == "liquid relaxes at 4.52 MHz"


@settings(max_examples=15, deadline=None, suppress_health_check=[HealthCheck.too_slow])
@given(st.data())
def test_opening_a_design_changes_nothing_in_it(designs, data):
    design = data.draw(designs)
    _, kept, title, frequency, voltage, conductivity = hydrated(Opened(design))
    texts = {
        "title": title,
        "drive.frequency": frequency,
        "drive.voltage": voltage,
        "liquid.conductivity": conductivity,
    }
    shown = kept["profile"]
    for path, text in texts.items():
        put(shown, path, text)
    found = parse_design(shown)
    assert fingerprint(found) == fingerprint(design)


def test_knob_texts_read_back(yeast, vary):
    design = vary(
        yeast, {"drive.frequency": "1.2345678 MHz", "liquid.conductivity": "12.3456 mS/m"}
    )
    found = knobs(design)
    assert parse_quantity(found["drive.frequency"]["text"], "kHz") == design.drive.frequency
    text = found["liquid.conductivity"]["text"]
    assert parse_quantity(text, "mS/m") == design.liquid.conductivity


def test_what_is_opened(services, yeast, demos):
    beads = demos["latex-bead-rinse"]
    first = services.first

    def opened(source, address=None, upload=None, profile=None):
        return opened_from(services, source, address, upload, profile)

    assert opened("address").design == first
    assert opened("address", {"link": "#" + encode(beads), "visit": 0}).design == beads
    assert opened("profile", profile="latex-bead-rinse").design == beads
    for strange in (None, 3, "x", [], {}, {"link": 3}, {"link": []}):
        assert opened("address", strange).design == first
        assert opened("profile", profile=strange).design == first
    for broken in ("data:;base64,%%%", "data:;base64,é", "data:;base64,A"):
        assert opened("upload", upload=broken).problems
    for strange in (None, 3, [], {}):
        assert opened("upload", upload=strange).design == first


def test_state_is_the_same_for_one_design(yeast, patterns):
    result = evaluate(yeast, patterns)
    assert state_answer(1, result) == state_answer(1, evaluate(yeast, patterns))


def test_file_names_are_safe():
    for title in ("../../etc/passwd", "a\\b:c*", "", "水", "-" * 80, 'x"\n'):
        stem = file_stem(title)
        assert stem
        assert all(letter in "abcdefghijklmnopqrstuvwxyz0123456789-" for letter in stem)
