"""Hazards and the edges of the model, each told when it is there and not otherwise."""

import pytest

from model.cautions import GENERAL, cautions, notes, rms_and_peak
from model.evaluate import evaluate


def told(tell, design, patterns, vary, changes):
    return " ".join(tell(evaluate(vary(design, changes), patterns)))


def test_the_general_caution_is_always_there_and_last(results):
    for result in results.values():
        assert cautions(result)[-1] == GENERAL
    assert "Local laboratory safety rules" in GENERAL


def test_every_caution_defers(yeast, patterns, vary):
    changes = {"drive.voltage": "1000 V", "liquid.temperature": "90 degC"}
    found = cautions(evaluate(vary(yeast, changes), patterns))
    assert len(found) == 3
    assert all("Local laboratory safety rules" in line for line in found)


@pytest.mark.parametrize("field", ["drive.voltage", "drive.voltage_limit"])
@pytest.mark.parametrize(("volts", "hazardous"), [("84 V", False), ("86 V", True)])
def test_voltages_that_are_hazardous_to_touch(yeast, patterns, vary, field, volts, hazardous):
    # 30 V rms, 42.4 V peak: 84.8 V peak to peak; common practice, from memory
    found = told(cautions, yeast, patterns, vary, {field: volts})
    assert ("hazardous to touch" in found) == hazardous


@pytest.mark.parametrize(("stage", "hot"), [("58 degC", False), ("61 degC", True)])
def test_hot_liquid(yeast, patterns, vary, stage, hot):
    found = told(cautions, yeast, patterns, vary, {"liquid.temperature": stage})
    assert ("can boil" in found) == hot


@pytest.mark.parametrize(("frequency", "polarised"), [("3 kHz", True), ("300 kHz", False)])
def test_electrodes_that_polarise(yeast, patterns, vary, frequency, polarised):
    changes = {"drive.frequency": frequency}
    found = told(notes, yeast, patterns, vary, changes)
    assert ("electrodes polarise" in found) == polarised
    share = abs(evaluate(vary(yeast, changes), patterns).share)
    assert (share < 0.95) == polarised
    assert (f"{share:.0%} of the voltage reaches" in found) == polarised


@pytest.mark.parametrize(("limit", "people"), [
    ("temperature_rise", True), ("highest_temperature", True), ("power", True),
    ("generator_voltage", True), ("electrothermal_ratio", False), ("contrast", False),
])  # fmt: skip
def test_a_limit_that_protects_people_is_not_switched_off_in_silence(
    yeast, patterns, vary, limit, people
):
    off = {"limits.off": [{"limit": limit, "reason": "tried with water alone"}]}
    found = cautions(evaluate(vary(yeast, off), patterns))
    told_of = [line for line in found if "is switched off (tried with water alone)" in line]
    assert bool(told_of) == people
    assert all("Local laboratory safety rules" in line for line in found)


@pytest.mark.parametrize(
    ("voltage", "words"),
    [
        ("20 V", ""),
        ("40 V", "Warm liquid conducts better: the rise is"),
        ("90 V", "No steady temperature: warm liquid conducts better"),
    ],
)
def test_a_rise_that_drives_itself_on(yeast, patterns, vary, voltage, words):
    result = evaluate(vary(yeast, {"drive.voltage": voltage}), patterns)
    found = " ".join(notes(result))
    assert words in found
    assert bool(words) == ("arm liquid conducts better" in found)
    assert ("can boil" in " ".join(cautions(result))) == (voltage == "90 V")


@pytest.mark.parametrize(("rate", "carried"), [("3 uL/min", False), ("10 mL/min", True)])
def test_flow_that_carries_the_heat_off(yeast, patterns, vary, rate, carried):
    result = evaluate(vary(yeast, {"flow.rate": rate}), patterns)
    assert (result.flow_cooling.peclet > 1.0) == carried
    assert ("The flow carries off more heat" in " ".join(notes(result))) == carried


def test_particles_too_large_for_the_point_dipole(yeast, patterns, vary):
    assert "its radius is" not in " ".join(notes(evaluate(yeast, patterns)))
    found = told(notes, yeast, patterns, vary, {"particle.1.radius": "20 um"})
    assert "dead yeast: its radius is" in found


def test_a_particle_that_must_live_without_a_membrane(yeast, patterns, vary):
    wall = {"thickness": "220 nm", "relative_permittivity": 60, "conductivity": "14 mS/m"}
    found = told(notes, yeast, patterns, vary, {"particle.0.layers": [wall]})
    assert "viable yeast must live but has no membrane" in found


@pytest.mark.parametrize(("volts", "words"), [("10 V", "passes here"), ("16 V", "is caught from")])
def test_particles_that_are_to_pass(yeast, patterns, vary, volts, words):
    """Dead yeast is caught from the voltage at which its force reaches its drag."""
    result = evaluate(vary(yeast, {"drive.voltage": volts}), patterns)
    dead = yeast.particles[1]
    assert words in " ".join(notes(result))
    caught = yeast.task.catch(result.point, dead)
    rms = float(caught.bound()[0])
    force = abs(float(result.point.force_along_flow(dead)[0])) * rms**2
    assert force == pytest.approx(caught.allowed, rel=1e-9)


def test_voltages_for_other_meters():
    # a sine: V rms = V peak to peak/(2√2)
    assert rms_and_peak(20.0) == "7.07 V rms, 10 V peak"
