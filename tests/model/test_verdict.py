"""The verdict in words, in each of the places that a design can be in."""

import math
import re

import pytest
from hypothesis import given
from hypothesis import strategies as st

from model.evaluate import evaluate
from model.verdict import format_headroom, format_value, format_volts, verdict


def verdict_on(design, patterns, vary, changes):
    return verdict(evaluate(vary(design, changes), patterns))


def test_inside(yeast, patterns):
    result = evaluate(yeast, patterns)
    found = verdict(result)
    assert found.inside
    assert found.headline == "Inside the corridor"
    assert "hold against the flow: viable yeast" in found.sentence
    factor = float(re.match(r"([\d.]+)× headroom", found.sentence).group(1))
    assert factor <= yeast.drive.voltage / result.floor_pp < factor + 0.01


def test_below(yeast, patterns, vary):
    result = evaluate(vary(yeast, {"drive.voltage": "5 V"}), patterns)
    found = verdict(result)
    assert not found.inside
    assert found.headline == "Below the corridor"
    assert "hold against the flow: viable yeast needs at least" in found.sentence
    assert format_volts(result.floor_pp) in found.sentence


def test_above(yeast, patterns, vary):
    result = evaluate(vary(yeast, {"drive.voltage": "19 V"}), patterns)
    found = verdict(result)
    assert not found.inside
    assert found.headline == "Above the corridor"
    assert "generator voltage allows at most" in found.sentence
    assert format_volts(result.ceiling_pp) in found.sentence


@pytest.mark.parametrize("voltage", ["1 V", "12 V", "900 V"])
def test_no_corridor_names_both_sides_at_any_voltage(yeast, patterns, vary, voltage):
    changes = {"flow.rate": "50 uL/min", "drive.voltage": voltage}
    found = verdict_on(yeast, patterns, vary, changes)
    assert not found.inside
    assert found.headline == "No corridor at 1 MHz"
    assert "hold against the flow: viable yeast needs" in found.sentence
    assert "but generator voltage allows at most" in found.sentence


@pytest.mark.parametrize("rate", ["0 uL/min", "3 uL/min"])
def test_a_force_of_the_wrong_sign(yeast, patterns, vary, rate):
    changes = {"drive.frequency": "20 kHz", "flow.rate": rate}
    found = verdict_on(yeast, patterns, vary, changes)
    assert not found.inside
    assert found.headline == "No voltage does the task"
    assert "at 20 kHz" in found.sentence
    assert "sign of the force: viable yeast" in found.sentence


def test_a_force_too_small_for_any_voltage(yeast, patterns, vary):
    # equal to the liquid all through: no contrast, no force
    same = {"relative_permittivity": 79, "conductivity": "20 mS/m"}
    changes = {
        "liquid.relative_permittivity": 79,
        "particle.0.core": same,
        "particle.0.layers": [{**same, "thickness": "8 nm"}],
    }
    found = verdict_on(yeast, patterns, vary, changes)
    assert not found.inside
    assert found.headline == "No voltage does the task"
    assert found.sentence.startswith("at 1 MHz, because of")


def test_a_stage_above_the_limit(yeast, patterns, vary):
    changes = {"liquid.temperature": "31 degC", "flow.rate": "0 uL/min"}
    found = verdict_on(yeast, patterns, vary, changes)
    assert found.headline == "No corridor at 1 MHz"
    assert "but highest temperature allows at most 0 V" in found.sentence


def test_a_condition_that_no_voltage_changes(yeast, patterns, vary):
    found = verdict_on(yeast, patterns, vary, {"limits.wall_admittance": 0.001})
    assert not found.inside
    assert found.headline == "Outside at any voltage"
    assert found.sentence == "at 1 MHz, because of current in the walls"


def test_the_verdict_agrees_with_the_evaluation_everywhere(yeast, patterns, vary):
    headlines = {}
    for frequency in ("20 kHz", "200 kHz", "1 MHz", "30 MHz"):
        for voltage in ("1 V", "9 V", "12 V", "50 V"):
            changes = {"drive.frequency": frequency, "drive.voltage": voltage}
            result = evaluate(vary(yeast, changes), patterns)
            found = verdict(result)
            headlines.setdefault(found.headline, 0)
            assert found.inside == result.inside == (found.headline == "Inside the corridor")
            assert "nan" not in found.sentence
            assert "inf" not in found.sentence
    assert len(headlines) >= 4


@given(st.floats(0.0, 1e6))
def test_a_broken_limit_never_reads_as_kept(headroom):
    shown = format_headroom(headroom)
    if headroom > 100:
        assert shown == "> 100×"
        return
    number = float(shown.removesuffix("×"))
    assert number <= headroom
    assert (number >= 1.0) == (headroom >= 1.0)
    assert headroom - number <= (0.0101 if headroom < 10 else 0.101)


def test_headroom_at_the_edge():
    assert format_headroom(math.nextafter(1.0, 0.0)) == "0.99×"
    assert format_headroom(1.0) == "1.00×"
    assert format_headroom(math.inf) == "any voltage"


def test_large_values_have_words_without_letters():
    assert format_value(2.57e8, "") == "2.57·10⁸"
    assert format_value(1e-12, "") == "1·10⁻¹²"


def test_values_out_of_all_bounds_have_words():
    assert format_value(math.inf, "V") == "beyond measure"
    assert format_value(-math.inf, "V") == "beyond measure"
    assert format_value(295.15, "degC") == "22 °C"


@pytest.mark.parametrize("voltage", [0.0, 1e-30, 1e-6, 1e-3, 1.0, 999.9, 1e6, 1e40, math.inf])
def test_voltages_are_words_or_plain_numbers(voltage):
    shown = format_volts(voltage)
    assert "e" not in shown.replace("beyond any voltage", "")
    assert shown.endswith(("V", "voltage"))
