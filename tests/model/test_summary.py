"""A result for other programs and for people: whole, finite, and as the format says."""

import csv
import json
import math

import numpy as np
import pytest

from model.evaluate import evaluate
from model.profile import fingerprint
from model.quantity import parse_quantity
from model.summary import check_object, check_text, spectrum_rows

# The keys of the profile format, version 1, and those added since.
KEYS = {
    "version",
    "fingerprint",
    "inside",
    "binding",
    "headroom",
    "floor_Vpp",
    "ceiling_Vpp",
    "temperature_rise_K",
    "self_consistent_rise_K",
    "warm_up_63_s",
    "warm_up_95_s",
    "flow_peclet",
    "flow_outlet_rise_K",
    "electrothermal_speed_um_s",
    "dep_speed_um_s",
    "liquid",
    "chip",
    "particles",
    "limits",
}
CHIP = {
    "liquid_resistance_ohm",
    "liquid_capacitance_pF",
    "current_mA_rms",
    "power_mW",
    "share_of_voltage",
}
PARTICLE = {"name", "re_k", "im_k", "crossovers_Hz", "force_pN", "membrane_voltage_V_peak"}
LIMIT = {"id", "value", "allowed", "unit", "headroom"}

CASES = {
    "as it is": {},
    "wrong sign": {"task.dielectrophoresis": "negative"},
    "no flow": {"flow.rate": "0 uL/min"},
    "hot": {"liquid.temperature": "95 degC", "drive.voltage": "1000 V"},
    "slow": {"drive.frequency": "100 Hz"},
    "fast": {"drive.frequency": "1 GHz", "liquid.conductivity": "10 S/m"},
    "weak": {"drive.voltage": "1 mV", "liquid.conductivity": "0.01 mS/m"},
    "no force": {
        "liquid.relative_permittivity": 79,
        "particle.0.core": {"relative_permittivity": 79, "conductivity": "20 mS/m"},
        "particle.0.layers": [
            {"relative_permittivity": 79, "conductivity": "20 mS/m", "thickness": "1 nm"}
        ],
    },
}


@pytest.fixture(params=CASES)
def result(request, yeast, patterns, vary):
    return evaluate(vary(yeast, CASES[request.param]), patterns)


def finite_or_told(data):
    """Whether every number is finite, and every null has its reason beside it."""
    if isinstance(data, dict):
        for key, value in data.items():
            if value is None and key != "particle":
                assert data[f"{key}_reason"], key
            finite_or_told(value)
    elif isinstance(data, list):
        for item in data:
            finite_or_told(item)
    elif isinstance(data, float):
        assert math.isfinite(data)


def test_the_object_has_the_keys_of_the_format(result):
    data = check_object(result)
    assert data.keys() >= KEYS
    assert data["chip"].keys() == CHIP
    for particle in data["particles"]:
        assert particle.keys() >= PARTICLE
    for limit in data["limits"]:
        assert limit.keys() >= LIMIT
    assert data["fingerprint"] == fingerprint(result.design)
    assert data["binding"] == data["limits"][0]["id"]


def test_every_number_is_finite_or_null_with_a_reason(result):
    data = check_object(result)
    finite_or_told(data)
    assert json.loads(json.dumps(data, allow_nan=False)) == data


def test_units_of_the_object(yeast, patterns):
    result = evaluate(yeast, patterns)
    data = check_object(result)
    assert data["floor_Vpp"] < yeast.drive.voltage < data["ceiling_Vpp"]
    assert data["chip"]["power_mW"] == pytest.approx(1e3 * result.load.power)
    # P = V²/R, 10 V peak to peak, of which a share reaches the liquid: the least that the
    # current dissipates, as the interface also bends its paths
    rms = 10.0 / (2.0 * 2.0**0.5) * data["chip"]["share_of_voltage"]
    watts = rms**2 / data["chip"]["liquid_resistance_ohm"]
    assert data["chip"]["power_mW"] == pytest.approx(1e3 * watts, rel=1e-3)
    assert data["chip"]["power_mW"] >= 1e3 * watts
    limits = {limit["id"]: limit for limit in data["limits"]}
    assert limits["highest_temperature"]["allowed"] == pytest.approx(30.0)
    assert limits["highest_temperature"]["unit"] == "degC"
    assert limits["generator_current"]["allowed"] == pytest.approx(100.0)
    assert limits["generator_current"]["unit"] == "mA"
    assert limits["generator_current"]["value"] == pytest.approx(data["chip"]["current_mA_rms"])
    assert limits["temperature_rise"]["value"] == pytest.approx(data["self_consistent_rise_K"])
    assert data["temperature_rise_K"] == pytest.approx(result.temperature_rise)
    assert limits["hold"]["value"] == pytest.approx(data["particles"][0]["force_pN"])
    assert limits["force_sign"]["value"] == pytest.approx(data["particles"][0]["re_k"])


def test_the_text_tells_every_rule_and_particle(result):
    text = check_text(result)
    for row in result.ledger:
        assert row.rule.name in text
    for particle in result.design.particles:
        assert particle.name in text
    assert fingerprint(result.design) in text
    assert ("no steady temperature" in text) == (result.self_consistent_rise is None)
    assert ("Péclet" in text) == (result.design.flow.rate > 0.0)
    assert "local laboratory safety rules" in text.lower()
    for word in ("nan", "inf ", "e+", "None"):
        assert word not in text, word


def test_a_broken_rule_reads_broken(yeast, patterns, vary):
    least = evaluate(yeast, patterns).floor_pp
    voltage = f"{least * (1 - 1e-6):.10g} V"
    result = evaluate(vary(yeast, {"drive.voltage": voltage}), patterns)
    assert not result.inside
    assert "1.00×" not in check_text(result)


def test_spectra_are_a_table(yeast, patterns):
    frequency = np.geomspace(1e3, 1e8, 11)
    rows = list(csv.reader(spectrum_rows(yeast, frequency)))
    names = [f"{particle.name} {part}" for particle in yeast.particles for part in ("re_k", "im_k")]
    assert rows[0] == ["frequency_Hz", *names]
    values = np.array(rows[1:], dtype=float)
    np.testing.assert_allclose(values[:, 0], frequency, rtol=1e-8)
    at = evaluate(yeast, patterns, frequency).spectrum
    for index, particle in enumerate(yeast.particles):
        found = values[:, 1 + 2 * index] + 1j * values[:, 2 + 2 * index]
        np.testing.assert_allclose(found, at.polarisation(particle), rtol=1e-8, atol=1e-12)


def test_names_with_commas_and_quotes_stay_one_cell(yeast, vary):
    design = vary(yeast, {"particle.0.name": 'bead, "12 µm"'})
    head, *rest = csv.reader(spectrum_rows(design, np.array([1e3, 1e4])))
    assert head[1] == 'bead, "12 µm" re_k'
    assert all(len(row) == len(head) for row in rest)


def test_crossovers_are_where_the_force_changes_its_sign(yeast, patterns, vary):
    result = evaluate(yeast, patterns)
    data = check_object(result)["particles"][0]
    assert len(data["crossovers_Hz"]) == len(data["crossovers_direction"])
    for value, direction in zip(data["crossovers_Hz"], data["crossovers_direction"], strict=True):
        below, above = (
            evaluate(vary(yeast, {"drive.frequency": f"{value * factor:.10g} Hz"}), patterns)
            for factor in (0.999, 1.001)
        )
        change = above.particles[0].force - below.particles[0].force
        assert below.particles[0].force * above.particles[0].force < 0.0
        assert (change > 0) == (direction == "rises")


def test_numbers_in_the_text_can_be_read_back(yeast, patterns):
    text = check_text(evaluate(yeast, patterns))
    line = next(line for line in text.splitlines() if "corridor here" in line)
    low, high = line.split(":")[1].replace("peak to peak", "").split(" to ")
    result = evaluate(yeast, patterns)
    assert parse_quantity(low.strip(), "V") == pytest.approx(result.floor_pp, rel=1e-2)
    assert parse_quantity(high.strip(), "V") == pytest.approx(result.ceiling_pp, rel=1e-2)


def test_what_to_mix_is_told(results, yeast, patterns):
    result = results["tumour-cells-sugar-buffer"]
    told = check_object(result)["liquid"]
    finite_or_told(told)
    assert told["conductivity_mS_m"] == pytest.approx(30.0)
    assert told["recipe"]["osmolality_mOsm_kg"] == pytest.approx(300.0, rel=1e-4)
    assert told["viscosity_mPa_s"] == pytest.approx(1e3 * result.design.liquid.state.viscosity)
    portions = {item["solute"]: item for item in told["recipe"]["per_litre"]}
    assert portions["dextrose"]["g"] == pytest.approx(3.0)
    assert portions["HEPES"]["stock_mL"] == pytest.approx(2.0)
    text = check_text(result)
    for words in ("potassium chloride", "sucrose", "300 mOsm/kg", "2 mL of 1 M", "pH 7.4"):
        assert words in text
    assert check_object(evaluate(yeast, patterns))["liquid"]["recipe"] is None
    assert "mOsm/kg" not in check_text(evaluate(yeast, patterns))
