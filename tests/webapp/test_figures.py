"""Figures: valid, complete, readable in both appearances, and true to the result."""

import base64
import math

import numpy as np
import plotly.graph_objects as go
import pytest

from model.evaluate import evaluate
from model.limits import LIMITS
from model.tasks import TASKS
from model.voltage import PEAK_TO_PEAK
from webapp.figures.corridor import corridor_figure, corridor_sentence, voltage_range
from webapp.figures.force import force_figure, force_sentence, nice_ceiling
from webapp.figures.labels import HEIGHT, LETTER, LINE, WIDTH, Wish, place_labels
from webapp.figures.ledger import ledger_rows
from webapp.figures.sweeps import electrothermal_figure, heating_figure, sweep_of
from webapp.figures.theme import DASHES, THEMES, limit_colour, log_axis, numbers, particle_line
from webapp.views import VIEWS

NAMES = ["latex-bead-rinse", "rinse-water-yeast", "tap-water-bacteria",
         "tumour-cells-sugar-buffer"]  # fmt: skip


@pytest.fixture(params=THEMES)
def theme(request):
    return THEMES[request.param]


@pytest.fixture(params=NAMES)
def result(request, results):
    return results[request.param]


def unpacked(values):
    if isinstance(values, dict):
        assert values["dtype"] in ("f4", "u1")
        return np.frombuffer(base64.b64decode(values["bdata"]), dtype="<" + values["dtype"])
    return np.asarray(values)


def figures_of(result, theme):
    return {
        name: figure
        for view in VIEWS.values()
        for name, figure in view(result, theme)["figures"].items()
    }


EXTREMES = {
    "wrong sign": {"task.dielectrophoresis": "negative"},
    "no flow": {"flow.rate": "0 uL/min"},
    "loud": {"drive.voltage": "1000 V", "drive.voltage_limit": "0.01 V"},
    "runaway": {"drive.voltage": "100 V", "drive.voltage_limit": "200 V"},
    "faint": {"drive.voltage": "1 mV", "drive.voltage_limit": "2000 V"},
    "fast": {"drive.frequency": "1 GHz", "liquid.conductivity": "10 S/m"},
    "slow": {"drive.frequency": "100 Hz", "liquid.conductivity": "0.01 mS/m"},
    "lax": {"limits.electrothermal_ratio": 100, "limits.temperature_rise": "80 K"},
    "two to collect": {"particle.1.role": "collect", "particle.1.must_live": True},
    "no force": {
        "liquid.relative_permittivity": 79,
        "particle.0.core": {"relative_permittivity": 79, "conductivity": "20 mS/m"},
        "particle.0.layers": [
            {"relative_permittivity": 79, "conductivity": "20 mS/m", "thickness": "1 nm"}
        ],
    },
}


@pytest.fixture(params=EXTREMES)
def extreme(request, yeast, patterns, vary):
    return evaluate(vary(yeast, EXTREMES[request.param]), patterns, points=60)


def check_figures(result, theme):
    for name, figure in figures_of(result, theme).items():
        assert go.Figure(figure).data, name  # raises on anything that is no property
        for trace in figure["data"]:
            check_numbers(name, trace)
        for key, axis in figure["layout"].items():
            if key.startswith(("xaxis", "yaxis")) and axis.get("visible", True):
                assert axis["title"]["text"], (name, key)
                assert np.isfinite(axis["range"]).all(), (name, key)
                assert axis["range"][0] < axis["range"][1]


def check_numbers(name, trace):
    """Every number is finite, but for the gaps between lines and in what binds."""
    if trace["type"] == "heatmap":
        shape = [int(size) for size in trace["z"]["shape"].split(",")]
        assert unpacked(trace["z"]).size == shape[0] * shape[1]
        assert all(np.isfinite(trace[key]) for key in ("x0", "dx", "y0", "dy"))
        return
    lines = ("force", "streamlines", "sense", "force key", "particle", "spread", "branch")
    broken = trace.get("meta", trace.get("name")) in lines
    for key in ("x", "y"):
        values = unpacked(trace[key])
        gaps = broken or (key == "y" and trace.get("name", "").startswith("binding "))
        assert np.isfinite(values).all() or (gaps and not np.isinf(values).any()), (name, trace)
    assert unpacked(trace["x"]).size == unpacked(trace["y"]).size


def test_figures_of_all_demos_are_valid(result, theme):
    check_figures(result, theme)


def test_figures_of_extreme_designs_are_valid(extreme, theme):
    check_figures(extreme, theme)


def test_no_text_shows_what_is_no_number(extreme, theme):
    for view in VIEWS.values():
        part = view(extreme, theme)
        words = [*part["sentences"].values()]
        words += [str(value) for row in part.get("ledger", []) for value in row.values()]
        probed = part.get("probe", {"readings": []})["readings"]
        words += [value for reading in probed for value in reading.values()]
        rows = part.get("table", {"rows": []})["rows"]
        words += [text for row in rows for text in (row["note"], *row["cells"])]
        for text in words:
            assert not {"nan", "inf", "None"} & set(text.replace("°", " ").split()), text


def test_axes_carry_units(result, theme):
    for figure in figures_of(result, theme).values():
        for key, axis in figure["layout"].items():
            if not key.startswith(("xaxis", "yaxis")) or not axis.get("visible", True):
                continue
            unit_in_ticks = any(
                text.endswith(("Hz", "S/m", "Ω")) for text in map(str, axis.get("ticktext", []))
            )
            pure = axis["title"]["text"] in ("Electrothermal / DEP speed", "Re K", "Im K")
            assert unit_in_ticks or pure or axis["title"]["text"].endswith(")"), axis["title"]


def test_the_corridor_figure_shows_floor_and_ceilings(result):
    theme = THEMES["light"]
    traces = {trace.get("name"): trace for trace in corridor_figure(result, theme)["data"]}
    low, high = voltage_range(result)
    floor = unpacked(traces[f"floor: {result.design.task.label}"]["y"])
    inside = (floor > low) & (floor < high)
    expected = result.corridor.floor * PEAK_TO_PEAK
    np.testing.assert_allclose(floor[inside], expected[inside], rtol=1e-6)
    mark = traces["operating point"]
    assert mark["x"] == [result.design.drive.frequency]
    assert mark["y"] == [result.design.drive.voltage]
    assert low < result.design.drive.voltage < high
    bindings = [trace for name, trace in traces.items() if str(name).startswith("binding ")]
    ceiling = result.corridor.ceiling * PEAK_TO_PEAK
    lowest = np.fmin.reduce([unpacked(trace["y"])[-ceiling.size :] for trace in bindings])
    inside = (ceiling > low) & (ceiling < high)
    np.testing.assert_allclose(lowest[inside], ceiling[inside], rtol=1e-6)


def boxes(trace):
    """Boxes of the placed names in pixels of the typical plot area."""
    x, y = np.log10(trace["x"]), np.log10(trace["y"])
    return [
        (place_x, place_y, LETTER * len(text), LINE)
        for place_x, place_y, text in zip(x, y, trace["text"], strict=True)
        if text.strip("\u2060")
    ]


def label_boxes(figure):
    (trace,) = [trace for trace in figure["data"] if trace.get("name") == "labels"]
    (left, right), (low, high) = (figure["layout"][key]["range"] for key in ("xaxis", "yaxis"))
    return [
        ((x - left) / (right - left) * WIDTH, (y - low) / (high - low) * HEIGHT, wide, tall)
        for x, y, wide, tall in boxes(trace)
    ]


def overlaps(found):
    return [
        (one, other)
        for index, one in enumerate(found)
        for other in found[:index]
        if abs(one[0] - other[0]) < 0.49 * (one[2] + other[2])
        and abs(one[1] - other[1]) < 0.49 * (one[3] + other[3])
    ]


def test_names_do_not_cover_one_another_nor_leave_the_figure(result):
    found = label_boxes(corridor_figure(result, THEMES["light"]))
    assert found
    assert overlaps(found) == []
    for x, y, wide, tall in found:
        assert 0.49 * wide < x < WIDTH - 0.49 * wide
        assert 0.49 * tall < y < HEIGHT - 0.49 * tall


@pytest.mark.parametrize("name", NAMES)
def test_names_keep_apart_while_knobs_move(name, results, vary):
    result = results[name]
    for conductivity in ("1 mS/m", "10 mS/m", "60 mS/m", "0.3 S/m", "1.5 S/m"):
        # of any conductivity, which no recipe has
        design = vary(result.design, {"liquid": {"conductivity": conductivity}})
        moved = evaluate(design, result.patterns, points=120)
        assert overlaps(label_boxes(corridor_figure(moved, THEMES["dark"]))) == [], conductivity


def test_crowded_names_keep_apart():
    x = np.linspace(0.0, 1.0, 50)
    wishes = [Wish(f"limit number {index}", "", x, 0.5 + 0.0 * x) for index in range(6)]
    placed = place_labels(wishes, [(x, 0.5 + 0.0 * x)])
    found = [(p.x * WIDTH, p.y * HEIGHT, LETTER * len(p.text), LINE) for p in placed]
    assert overlaps(found) == []
    assert [label.text for label in placed] == [wish.text for wish in wishes]


def test_a_particle_has_its_own_colour_and_dash(theme):
    lines = [particle_line(theme, index) for index in range(12)]
    looks = {(line["color"], line["dash"]) for line in lines}
    assert len(looks) == 12
    assert len({line["dash"] for line in lines[: len(DASHES)]}) == len(DASHES)


def test_names_cannot_carry_markup(yeast, patterns, vary):
    name = '<a href="x">5 < d</a> %{x}'
    result = evaluate(vary(yeast, {"particle.0.name": name}), patterns, points=20)
    for figure in figures_of(result, THEMES["light"]).values():
        for trace in figure["data"]:
            for key in ("name", "hovertemplate"):
                text = trace.get(key, "")
                assert "<a" not in text
                assert "d</a" not in text
                assert text.count("%{x}") == 0


def test_every_limit_keeps_a_colour_of_its_own(theme):
    drawn = [name for name, limit in LIMITS.items() if not limit.condition]
    colours = [limit_colour(theme, limit) for limit in drawn]
    assert len({*colours, theme.accent, theme.quiet}) == len(drawn) + 2
    assert limit_colour(theme, "hold") == theme.accent
    assert [limit_colour(theme, limit) for limit in drawn] == colours
    conditions = set(LIMITS) - set(drawn)
    assert {limit_colour(theme, limit) for limit in conditions} == {theme.quiet}


def test_a_limit_has_one_colour_in_all_figures(result, theme):
    corridor = {
        trace["name"]: trace["line"]["color"]
        for trace in corridor_figure(result, theme)["data"]
        if trace.get("name", "").startswith("temperature rise")
    }
    heating = heating_figure(sweep_of(result, "temperature_rise"), result, theme)
    rows = {row["label"]: row["colour"] for row in ledger_rows(result, theme)}
    colour = limit_colour(theme, "temperature_rise")
    assert set(corridor.values()) == {colour}
    assert heating["data"][0]["line"]["color"] == colour
    assert rows["temperature rise"] == colour


def luminance(colour):
    """Relative luminance, W3C, Web Content Accessibility Guidelines 2.2, from memory."""
    parts = [int(colour[index : index + 2], 16) / 255.0 for index in (1, 3, 5)]
    linear = [c / 12.92 if c <= 0.04045 else ((c + 0.055) / 1.055) ** 2.4 for c in parts]
    return 0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2]


def contrast(one, other):
    """Contrast ratio (L1 + 0.05)/(L2 + 0.05), lighter over darker; same source."""
    light, dark = sorted((luminance(one), luminance(other)), reverse=True)
    return (light + 0.05) / (dark + 0.05)


def test_the_contrast_formula_itself():
    # black on white is 21:1 by the same guidelines
    assert contrast("#000000", "#ffffff") == pytest.approx(21.0)


def test_text_stands_out_from_the_paper(theme):
    # 4.5:1 for text and 3:1 for graphics, success criteria 1.4.3 and 1.4.11, from memory
    for colour in (theme.text, theme.quiet, theme.accent, *theme.limits):
        assert contrast(colour, theme.paper) >= 4.5, colour


def test_dark_lines_stand_out_from_the_paper():
    theme = THEMES["dark"]
    for colour in theme.particles:
        assert contrast(colour, theme.paper) >= 3.0, colour


def test_numbers_are_packed_in_order():
    values = np.array([[1.0, 2.0], [3.0, math.nan]])
    found = unpacked(numbers(values))
    np.testing.assert_array_equal(found, values.reshape(-1).astype("f4"))


@pytest.mark.parametrize(("low", "high"), [(1e3, 1e8), (0.6, 50.0), (100.0, 1e9), (1e-5, 20.0)])
def test_logarithmic_ticks_lie_on_the_axis(low, high):
    axis = log_axis(THEMES["light"], "x", low, high, "Hz")
    assert len(axis["tickvals"]) == len(axis["ticktext"]) >= 3
    assert min(axis["tickvals"]) >= 0.99 * low
    assert max(axis["tickvals"]) <= 1.01 * high
    assert len(set(axis["ticktext"])) == len(axis["ticktext"])


@pytest.mark.parametrize("value", [1e-9, 0.3, 1.0, 1.01, 4.9, 7.0, 1e12])
def test_a_nice_ceiling_holds_and_is_near(value):
    assert value <= nice_ceiling(value) <= 2.51 * value


def test_force_curves_are_the_forces(result):
    at = result.spectrum
    traces = {trace["name"]: trace for trace in force_figure(result, THEMES["light"])["data"]}
    for particle in result.design.particles:
        expected = at.force_along_flow(particle) * result.rms_voltage**2 * 1e12
        np.testing.assert_allclose(unpacked(traces[particle.name]["y"]), expected, rtol=1e-5)
        assert particle.name in force_sentence(result)


def test_sweeps_pass_through_the_operating_point(result):
    for limit in ("temperature_rise", "electrothermal_ratio"):
        found = sweep_of(result, limit)
        voltage = np.interp(result.design.drive.voltage, found.voltage, found.by_voltage)
        assert voltage == pytest.approx(found.value, rel=0.02)
        rows = [row for row in result.ledger if row.rule.id == limit]
        assert found.value == pytest.approx(max(row.value for row in rows))
        assert np.all(np.diff(found.by_voltage) > 0.0)


@pytest.mark.parametrize("allowed", [0.001, 0.3, 100.0])
def test_the_allowed_ratio_is_on_the_axis(yeast, patterns, vary, allowed):
    result = evaluate(vary(yeast, {"limits.electrothermal_ratio": allowed}), patterns)
    figure = electrothermal_figure(
        sweep_of(result, "electrothermal_ratio"), result, THEMES["light"]
    )
    low, high = figure["layout"]["yaxis"]["range"]
    assert 10.0**low <= allowed <= 10.0**high


def test_the_corridor_in_words(yeast, patterns, vary, results):
    assert corridor_sentence(results["rinse-water-yeast"]).startswith("A corridor exists from ")
    flooded = evaluate(vary(yeast, {"flow.rate": "100 mL/min"}), patterns)
    assert corridor_sentence(flooded).startswith("No frequency has a corridor")


def test_ledger_rows_follow_the_ledger(result, theme):
    rows = ledger_rows(result, theme)
    assert [row["label"] for row in rows] == [row.rule.label for row in result.ledger]
    assert len({row["key"] for row in rows}) == len(rows)
    for row, found in zip(rows, result.ledger, strict=True):
        assert (row["state"] == "broken") == (not found.kept)
        assert 0.0 <= row["fill"] <= 1.0
        assert (row["fill"] >= 0.5) == found.kept
        assert row["why"]
        assert row["remedy"]
        assert row["source"]
        if found.rule.law.power and found.headroom < 1.0:
            assert not row["headroom"].startswith("1.00")


def test_limits_that_are_off_stand_at_the_end_of_the_ledger(yeast, patterns, vary, theme):
    off = [
        {"limit": "electrothermal_ratio", "reason": "stirring is wanted here"},
        {"limit": "contrast", "reason": "of no use for holding"},
    ]
    result = evaluate(vary(yeast, {"limits.off": off}), patterns)
    rows = ledger_rows(result, theme)
    assert [row["state"] for row in rows[-2:]] == ["off", "off"]
    assert all(row["state"] != "off" for row in rows[:-2])
    first, second = rows[-2:]
    assert first["why"] == "Switched off: stirring is wanted here"
    assert first["allowed"] == "at most 0.3 if it counted"
    assert second["value"] == "nothing to check here"
    assert len({row["key"] for row in rows}) == len(rows)
    assert set(first) == set(second) == set(rows[0])


@pytest.mark.parametrize("kind", TASKS)
def test_every_task_can_be_drawn(yeast, patterns, theme, kind):
    task = TASKS[kind](working_height=yeast.task.working_height)
    result = evaluate(yeast.model_copy(update={"task": task}), patterns, points=60)
    check_figures(result, theme)
    sentence = force_sentence(result)
    assert sentence.lower().startswith(task.force_name)
    for found in result.particles:
        assert any(way in sentence for way in task.directions)
        assert found.particle.name in sentence


def test_the_floor_is_named_after_what_sets_it(yeast, patterns, vary):
    for rate, label in (("0 uL/min", "trap against thermal motion"), ("3 uL/min", "hold against")):
        design = vary(yeast, {"flow.rate": rate, "limits.thermal_noise": 1e4})
        result = evaluate(design, patterns)
        (names,) = [
            trace["text"]
            for trace in corridor_figure(result, THEMES["light"])["data"]
            if trace.get("name") == "labels"
        ]
        (floor,) = [name for name in names if name.startswith("floor: ")]
        assert floor.startswith(f"floor: {label}")


def test_with_every_limit_off_all_is_still_drawn(yeast, patterns, vary, theme):
    off = [{"limit": name, "reason": "tried"} for name in LIMITS]
    check_figures(evaluate(vary(yeast, {"limits.off": off}), patterns, points=60), theme)
