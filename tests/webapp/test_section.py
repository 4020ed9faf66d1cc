"""The section view: panels to scale, maps that are sent once, the probe, and the chip's drawing."""

import base64
import re

import numpy as np
import plotly.graph_objects as go
import pytest

from model.bars import Bars
from model.evaluate import evaluate
from model.layouts import LAYOUTS
from model.maps import section_maps
from model.quantity import parse_quantity
from tests.field_maps import SOLVED
from tests.webapp.test_figures import luminance
from tests.wishes import wished
from webapp.figures.chip import chip_drawing
from webapp.figures.panel import frame
from webapp.figures.section import longest_force
from webapp.figures.share import share_band
from webapp.figures.theme import THEMES
from webapp.state import BadRequestError, Options, read_options
from webapp.views.section import PANELS, section_part

LIGHT = THEMES["light"]
BARS = sorted(name for name, layout in LAYOUTS.items() if issubclass(layout, Bars))


def turned(design, layout):
    """The design on another layout, as the page turns it."""
    return wished(design, "turn", "chip", layout)[0].design


@pytest.fixture(params=BARS)
def result(request, yeast, solved):
    design = turned(yeast, request.param)
    return evaluate(design, solved(design), points=20)


@pytest.fixture(params=sorted(set(SOLVED) - set(BARS)))
def plan(request, yeast, solved):
    design = turned(yeast, request.param)
    assert design.chip.layout == request.param
    return evaluate(design, solved(design), points=20)


@pytest.fixture
def plain_result(yeast, patterns):
    return evaluate(yeast, patterns, points=20)


def trace_of(part, figure, name):
    return next(trace for trace in part["figures"][figure]["data"] if trace["name"] == name)


def numbers_of(packed):
    return np.frombuffer(base64.b64decode(packed["bdata"]), dtype="<" + packed["dtype"])


def shown_value(text):
    """Number and unit that a tick reads, in SI."""
    number, unit = text.replace("\u00a0", " ").split()
    sizes = {"k": 1e3, "M": 1e6, "m": 1e-3, "µ": 1e-6, "p": 1e-12, "f": 1e-15, "n": 1e-9}
    size = sizes[unit[0]] if len(unit.split("/")[0]) > 1 else 1.0
    return float(number) * size


def ticks_of(part, figure, name):
    trace = trace_of(part, figure, name)
    pairs = zip(trace["y"], trace["text"], strict=True)
    return [(y, shown_value(text)) for y, text in pairs if "\u2060" not in text]


@pytest.mark.parametrize("theme", THEMES)
def test_figures_are_valid_for_every_layout(result, theme):
    part = section_part(result, THEMES[theme])
    assert set(part["figures"]) == {*(f"{name}-map" for name in PANELS), "impedance", "share"}
    assert part["figures"].keys() == part["sentences"].keys()
    for figure in part["figures"].values():
        assert go.Figure(figure).data


def test_plans_are_drawn_like_sections(plan):
    part = section_part(plan, LIGHT)
    for figure in part["figures"].values():
        assert go.Figure(figure).data
    for words in part["sentences"].values():
        assert not re.search(r"\bnan\b|\binf\b|None", words)
    assert part["figures"]["field-map"]["layout"]["yaxis"]["title"]["text"].startswith("Across")
    readings = {reading["label"] for reading in part["probe"]["readings"]}
    assert "Field" in readings
    gaps = numbers_of(trace_of(part, "field-map", "field")["z"]) == 255
    assert 0.01 < gaps.mean() < 0.9, "poles and obstacles are no liquid"


def test_panels_are_to_scale(result):
    part = section_part(result, LIGHT)
    for name in PANELS:
        layout = part["figures"][f"{name}-map"]["layout"]
        assert layout["yaxis"]["scaleanchor"] == "x"
        left, right = layout["xaxis"]["range"]
        low, high = layout["yaxis"]["range"]
        assert part["aspect"] == pytest.approx((high - low) / (right - left), rel=1e-3)


def test_a_chip_too_flat_to_draw_says_how_it_is_stretched(yeast, vary):
    chip = vary(yeast, {"chip.gap": "1 mm", "chip.channel_height": "60 um"}).chip
    at = frame(chip)
    left, right, low, high = at.window
    assert at.stretch == pytest.approx(at.aspect * (right - left) / (high - low))
    assert at.stretch > 1.0


def test_shades_and_ticks_tell_the_field(plain_result):
    part = section_part(plain_result, LIGHT)
    (first, low), *_, (last, high) = ticks_of(part, "field-map", "field ticks")
    shades = trace_of(part, "field-map", "field")["z"]
    place = numbers_of(shades) / 254.0
    field = section_maps(plain_result, plain_result.design.particles[0]).field.reshape(-1)
    told = low * (high / low) ** ((place - first) / (last - first))
    inside = (place > 0.0) & (place < 1.0)
    assert inside.mean() > 0.9
    np.testing.assert_allclose(told[inside], field[inside], rtol=0.03)


def test_shades_and_ticks_tell_the_warmth(plain_result):
    part = section_part(plain_result, LIGHT)
    (first, low), *_, (last, high) = ticks_of(part, "temperature-map", "temperature ticks")
    place = numbers_of(trace_of(part, "temperature-map", "temperature rise")["z"]) / 254.0
    told = low + (high - low) * (place - first) / (last - first)
    rise = section_maps(plain_result, plain_result.design.particles[0]).rise.reshape(-1)
    np.testing.assert_allclose(told, rise, rtol=0.01)


def test_arrows_and_their_key_tell_the_force(plain_result):
    """A quarter of the full length less is a tenth of the force, in the panel and in the key."""
    part = section_part(plain_result, LIGHT)
    particle = plain_result.design.particles[0]
    maps = section_maps(plain_result, particle)
    keyed = [size for _, size in ticks_of(part, "force-map", "force ticks")]
    most = longest_force(maps, particle, plain_result)
    np.testing.assert_allclose(keyed, [most, most / 10, most / 100, most / 1000], rtol=0.06)
    arrows = trace_of(part, "force-map", "force")
    x, y = numbers_of(arrows["x"]).reshape(-1, 6), numbers_of(arrows["y"]).reshape(-1, 6)
    lengths = np.hypot(x[:, 1] - x[:, 0], y[:, 1] - y[:, 0])
    middles = 0.5e-6 * np.stack([x[:, 0] + x[:, 1], y[:, 0] + y[:, 1]])
    along, up = plain_result.patterns.gradient_e2(*middles)
    sizes = np.hypot(along, up)
    expected = 1.0 + np.log10(sizes / sizes.max()) / 4.0
    np.testing.assert_allclose(lengths / lengths.max(), expected, atol=0.01)
    across = (x[:, 1] - x[:, 0]) * along + (y[:, 1] - y[:, 0]) * up
    assert np.all(across > 0.0), "viable yeast is drawn towards strong field at 1 MHz"


def test_arrows_stay_where_the_particle_can_be(yeast, patterns, vary):
    design = vary(yeast, {"particle.0.radius": "20 um", "task.working_height": "30 um"})
    part = section_part(evaluate(design, patterns, points=20), LIGHT)
    arrows = trace_of(part, "force-map", "force")
    y = numbers_of(arrows["y"]).reshape(-1, 6)
    middle = 0.5 * (y[:, 0] + y[:, 1])
    assert middle.min() >= 20.0
    assert middle.max() <= 80.0


def test_only_what_is_wanted_is_sent(plain_result):
    part = section_part(plain_result, LIGHT, Options(show="flow"))
    assert set(part["figures"]) == {"flow-map", "impedance", "share"}
    unknown = section_part(plain_result, LIGHT, Options(show="nothing of the kind"))
    assert len(unknown["figures"]) == 6


def test_maps_are_sent_once_for_a_chip(yeast, patterns, solved, vary):
    def zs(design, held):
        part = section_part(evaluate(design, solved(design), points=20), LIGHT, Options(held=held))
        names = (("field-map", "field"), ("temperature-map", "temperature rise"))
        return part["held"], [trace_of(part, *name)["z"] for name in names]

    held, first = zs(yeast, "")
    assert all("bdata" in z for z in first)
    for change in ({"drive.voltage": "3 V"}, {"drive.frequency": "40 kHz"}):
        same, kept = zs(vary(yeast, change), held)
        assert same == held
        assert kept == [{"kept": True}, {"kept": True}]
        # what the page keeps is what would have been sent
        assert zs(vary(yeast, change), "")[1] == first
    other, fresh = zs(vary(yeast, {"chip.gap": "45 um"}), held)
    assert other != held
    assert all("bdata" in z for z in fresh)


def test_the_probe_reads_words_and_numbers(plain_result):
    readings = section_part(plain_result, LIGHT, Options(probe=(10e-6, 20e-6)))["probe"]
    assert (readings["x"], readings["y"]) == ("10", "20")
    words = {reading["label"]: reading["value"] for reading in readings["readings"]}
    volts = plain_result.rms_voltage * abs(plain_result.point.share[0])
    field = volts * np.hypot(*plain_result.patterns.electric_field(10e-6, 20e-6))
    assert parse_quantity(words["Field"].removesuffix(" rms"), "V/m") == pytest.approx(
        float(field), rel=6e-3
    )
    assert "Force on viable yeast" in words
    wall = section_part(plain_result, LIGHT, Options(probe=(0.0, -5e-6)))["probe"]["readings"]
    assert {reading["label"] for reading in wall} == {"Temperature rise", "Place"}
    outside = section_part(plain_result, LIGHT, Options(probe=(0.0, 0.9)))["probe"]["readings"]
    assert outside == [{"label": "Place", "value": "outside the chip"}]


def test_the_force_of_another_particle(plain_result):
    told = section_part(plain_result, LIGHT, Options(particle=1))["sentences"]["force-map"]
    assert told.startswith("dead yeast")
    assert "weak field" in told
    beyond = section_part(plain_result, LIGHT, Options(particle=40))["sentences"]["force-map"]
    assert beyond.startswith("viable yeast")


@pytest.mark.parametrize(
    "data",
    [None, [], 3, {"show": 4}, {"show": "x" * 200}, {"particle": -1}, {"particle": True},
     {"particle": 1.0}, {"particle": 10**9}, {"held": None}, {"probe": 3}, {"probe": {}},
     {"probe": {"x": 1.0}}, {"probe": {"x": "1", "y": 0}}, {"probe": {"x": 1e300, "y": 0}},
     {"probe": {"x": float("nan"), "y": 0}}, {"probe": {"x": float("inf"), "y": 0}},
     {"probe": {"x": 10**400, "y": 0}}, {"probe": {"x": True, "y": 0}}],
)  # fmt: skip
def test_options_that_no_page_sends_are_refused(data):
    with pytest.raises(BadRequestError):
        read_options(data)


def test_options_are_read():
    found = read_options({"show": "flow", "particle": 2, "probe": {"x": 1e-5, "y": 0}})
    assert found == Options("flow", 2, (1e-5, 0.0))
    assert read_options({}) == Options()


def test_what_the_generator_and_the_liquid_get(plain_result):
    part = section_part(plain_result, LIGHT)
    at = plain_result.spectrum
    share = numbers_of(trace_of(part, "share", "share")["y"])
    np.testing.assert_allclose(share, 100.0 * np.abs(at.share), rtol=1e-5)
    impedance = numbers_of(trace_of(part, "impedance", "impedance")["y"])
    phase = numbers_of(trace_of(part, "impedance", "phase")["y"])
    whole = impedance * np.exp(1j * np.radians(phase))
    np.testing.assert_allclose(whole * at.terminal_admittance, 1.0, rtol=1e-4)
    low, high = part["figures"]["impedance"]["layout"]["yaxis2"]["range"]
    assert low < phase.min()
    assert phase.max() < high


@pytest.mark.parametrize(
    ("share", "words"),
    [([0.5, 0.95, 0.95], "from 2 Hz it"), ([0.95, 0.95, 0.5], "up to 2 Hz"),
     ([0.5, 0.95, 0.5], "from 2 Hz to 2 Hz"), ([0.95] * 3, "everywhere"), ([0.1] * 3, "nowhere")],
)  # fmt: skip
def test_where_nearly_all_of_the_voltage_arrives(share, words):
    assert share_band(np.array([1.0, 2.0, 3.0]), np.array(share)).startswith(words)


@pytest.mark.parametrize("theme", THEMES)
def test_maps_read_in_grey(theme):
    """Lightness runs one way, so that prints without colour and weak eyes lose nothing."""
    for colours in (THEMES[theme].field, THEMES[theme].warmth):
        steps = np.diff([luminance(colour) for colour in colours])
        assert np.all(steps < 0) if theme == "light" else np.all(steps > 0)
        assert abs(luminance(colours[0]) - luminance(colours[-1])) > 0.6


@pytest.mark.parametrize("layout", BARS)
def test_the_drawing_writes_the_typed_lengths(yeast, vary, layout):
    """Each length is drawn as long as it is."""
    design = vary(yeast, {"chip.layout": layout, "chip.gap": "42 um"})
    drawing = chip_drawing(design.chip)
    texts = {found["field"]: found for found in drawing["dimensions"]}
    assert texts["chip.gap"]["text"] == "42 µm"
    for found in drawing["dimensions"]:
        (x, y), (to_x, to_y) = found["start"], found["end"]
        drawn = abs(to_x - x) + abs(to_y - y)
        assert drawn == pytest.approx(parse_quantity(found["text"], "um"))
        assert found["text"] in drawing["label"]
    left, right, low, high = drawing["window"]
    for shape in drawing["shapes"]:
        for x, y in shape["outline"]:
            assert left <= x <= right
            assert low <= y <= high


def test_opposite_electrodes_are_told_apart(yeast, vary):
    for layout, signs in (
        ("coplanar-bars", {"+", "−"}),
        ("bars-under-plate", {"+", "−"}),
        ("four-phase-bars", {"0°", "90°", "180°", "270°"}),
    ):
        drawing = chip_drawing(vary(yeast, {"chip.layout": layout}).chip)
        metal = [shape for shape in drawing["shapes"] if shape["kind"] == "electrode"]
        assert {shape["sign"] for shape in metal} == signs
        assert {shape["sign"] for shape in metal if shape["solid"]} == {min(signs)}


def test_electrodes_are_drawn_where_the_field_meets_them(result):
    """On metal the field stands upright; the drawing's bars must be where it does."""
    chip = result.design.chip
    for shape in chip.drawing().shapes:
        if shape.kind != "electrode":
            continue
        x = np.array([corner[0] for corner in shape.outline])
        level = chip.height if min(y for _, y in shape.outline) > 0.5 * chip.height else 0.0
        places = np.linspace(x.min(), x.max(), 9)[1:-1]
        along, up = result.patterns.electric_field(places, np.full(7, level))
        assert np.all(np.abs(along) < 1e-3 * np.abs(up))


def test_the_sentences_have_no_empty_number(result):
    for words in section_part(result, LIGHT)["sentences"].values():
        assert not re.search(r"\bnan\b|\binf\b|None", words)
        assert words.endswith(".")
