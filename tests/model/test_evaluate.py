"""The operating point and the corridor: against brute force, laws of power and outside values."""

from types import SimpleNamespace

import numpy as np
import pytest

from model.conditions import Conditions
from model.corridor import corridor
from model.evaluate import evaluate
from model.limits import LIMITS
from model.voltage import PEAK, PEAK_TO_PEAK

FREQUENCIES = ["20 kHz", "180 kHz", "1 MHz", "7 MHz", "40 MHz"]
#: Room for the ten digits that a typed voltage keeps.
NEAR = 1e-7


def at_voltage(design, patterns, vary, voltage):
    return evaluate(vary(design, {"drive.voltage": f"{voltage:.10g} V"}), patterns)


def kept_by_value(result):
    """Whether every value is on the right side of its threshold, told by the values alone."""
    return all(
        row.value <= row.allowed if row.rule.law.sense == "most" else row.value >= row.allowed
        for row in result.ledger
    )


@pytest.mark.parametrize("frequency", FREQUENCIES)
@pytest.mark.parametrize("rate", ["0.05 uL/min", "3 uL/min"])
def test_closed_form_agrees_with_a_sweep_of_the_voltage(yeast, patterns, vary, frequency, rate):
    design = vary(yeast, {"drive.frequency": frequency, "flow.rate": rate})
    here = evaluate(design, patterns)
    floor, ceiling = here.floor_pp, here.ceiling_pp
    steps = [floor * (1 - NEAR), floor * (1 + NEAR), ceiling * (1 - NEAR), ceiling * (1 + NEAR)]
    for voltage in [*np.geomspace(0.02, 200.0, 41), *steps]:
        if not 0.001 <= voltage <= 1000.0:
            continue
        result = at_voltage(design, patterns, vary, voltage)
        assert kept_by_value(result) == result.inside == (floor <= voltage <= ceiling)


@pytest.mark.parametrize("name", ["rinse-water-yeast", "tap-water-bacteria", "latex-bead-rinse",
                                  "tumour-cells-sugar-buffer"])  # fmt: skip
def test_the_corridor_over_frequency_is_made_of_its_points(results, solved, vary, name):
    result = results[name]
    found = result.corridor
    for index in range(0, found.frequency.size, 57):
        text = f"{found.frequency[index]:.10g} Hz"
        point = evaluate(vary(result.design, {"drive.frequency": text}), result.patterns)
        assert found.floor[index] * PEAK_TO_PEAK == pytest.approx(point.floor_pp, rel=1e-7)
        assert found.ceiling[index] * PEAK_TO_PEAK == pytest.approx(point.ceiling_pp, rel=1e-7)


def test_a_corridor_has_the_shape_of_its_frequencies(yeast, patterns):
    for frequency in (np.array([1e6]), np.geomspace(1e3, 1e8, 7)):
        found = evaluate(yeast, patterns, frequency).corridor
        assert found.floor.shape == found.ceiling.shape == frequency.shape
        for bound in found.bounds:
            assert bound.rms_voltage.shape == frequency.shape
        lowest = np.min([bound.rms_voltage for bound in found.ceilings], axis=0)
        assert np.array_equal(found.ceiling, lowest)
        highest = np.max([bound.rms_voltage for bound in found.floors], axis=0)
        assert np.array_equal(found.floor, highest)
        binding = found.binding_ceiling()
        for index, number in enumerate(binding):
            assert found.ceilings[number].rms_voltage[index] == found.ceiling[index]


def test_frequencies_hold_the_operating_point(yeast, patterns, vary):
    for frequency in ("200 Hz", "1 GHz"):
        result = evaluate(vary(yeast, {"drive.frequency": frequency}), patterns)
        own = result.design.drive.frequency
        assert result.frequency[0] <= own * (1 + 1e-12)
        assert own <= result.frequency[-1] * (1 + 1e-12)


def test_many_conductivities_at_once_are_a_loop(yeast, patterns, vary):
    frequency = np.geomspace(1e3, 1e8, 31)
    conductivity = [1e-4, 3e-3, 0.02, 0.4, 9.0]
    together = corridor(Conditions(yeast, patterns, frequency, np.array(conductivity)[:, None]))
    assert together.floor.shape == (5, 31)
    for row, value in enumerate(conductivity):
        alone = evaluate(vary(yeast, {"liquid.conductivity": f"{value} S/m"}), patterns, frequency)
        np.testing.assert_allclose(together.floor[row], alone.corridor.floor, rtol=1e-9)
        np.testing.assert_allclose(together.ceiling[row], alone.corridor.ceiling, rtol=1e-9)
        for one, other in zip(together.bounds, alone.corridor.bounds, strict=True):
            np.testing.assert_allclose(one.rms_voltage[row], other.rms_voltage, rtol=1e-9)


def test_more_flow_never_lowers_the_floor(yeast, patterns, vary):
    floors = [
        evaluate(vary(yeast, {"flow.rate": f"{rate} uL/min"}), patterns).floor_pp
        for rate in (0, 0.001, 0.1, 1, 3, 10, 1000, 100_000)
    ]
    assert np.all(np.diff(floors) >= 0.0)
    at_rest = evaluate(vary(yeast, {"flow.rate": "0 uL/min"}), patterns)
    (hold,) = (row for row in at_rest.ledger if row.rule.id == "hold")
    assert hold.bound_pp == 0.0  # heat motion alone still asks for something
    assert 0.0 < floors[0] < 0.05 * floors[4]
    assert floors[4] / floors[3] == pytest.approx(3**0.5)  # force grows with V², drag with flow


def test_more_conductivity_never_lowers_heating(yeast, patterns, vary, ideal):
    bare = ideal(patterns)
    rises = [
        evaluate(vary(yeast, {"liquid.conductivity": f"{value} S/m"}), bare).temperature_rise
        for value in (1e-5, 1e-3, 0.02, 0.04, 1.0, 10.0)
    ]
    assert np.all(np.diff(rises) > 0.0)
    assert rises[3] == pytest.approx(2.0 * rises[2])


def test_powers_of_the_voltage(yeast, patterns, vary):
    one, two = (at_voltage(yeast, patterns, vary, voltage) for voltage in (5.0, 10.0))
    for first, second in zip(one.particles, two.particles, strict=True):
        assert second.force == pytest.approx(4.0 * first.force)
        assert second.membrane_voltage == pytest.approx(2.0 * first.membrane_voltage)
        assert second.polarisation == first.polarisation
    assert two.temperature_rise == pytest.approx(4.0 * one.temperature_rise)
    assert two.electrothermal_speed == pytest.approx(16.0 * one.electrothermal_speed)
    assert two.dielectrophoretic_speed == pytest.approx(4.0 * one.dielectrophoretic_speed)
    assert two.load.rms_current == pytest.approx(2.0 * one.load.rms_current)
    assert two.load.power == pytest.approx(4.0 * one.load.power)
    values = {row.rule.id: row.value for row in two.ledger}
    before = {row.rule.id: row.value for row in one.ledger}
    assert values["electrothermal_ratio"] == pytest.approx(4.0 * before["electrothermal_ratio"])
    assert values["generator_voltage"] == pytest.approx(2.0 * before["generator_voltage"])
    stage = yeast.liquid.temperature  # what drives the rise on only adds to it
    assert values["highest_temperature"] - stage > 4.0 * (before["highest_temperature"] - stage)


def test_duty_scales_means_and_spares_peaks(yeast, patterns, vary):
    full, half = (evaluate(vary(yeast, {"drive.duty": duty}), patterns) for duty in (1.0, 0.5))
    assert half.particles[0].force == pytest.approx(0.5 * full.particles[0].force)
    assert half.temperature_rise == pytest.approx(0.5 * full.temperature_rise)
    assert half.load.power == pytest.approx(0.5 * full.load.power)
    assert half.electrothermal_speed == pytest.approx(0.25 * full.electrothermal_speed)
    assert half.particles[0].membrane_voltage == full.particles[0].membrane_voltage
    assert half.load.rms_current == full.load.rms_current


def test_peak_to_peak_peak_and_rms():
    # A sine of 20 V peak to peak has a peak of 10 V and 10/√2 = 7.0710678 V rms.
    assert pytest.approx(7.0710678, abs=5e-8) == 20.0 / PEAK_TO_PEAK
    assert pytest.approx(10.0, rel=1e-15) == 20.0 / PEAK_TO_PEAK * PEAK


def test_current_and_power_follow_ohm(results, ideal):
    for real in results.values():
        result = evaluate(real.design, ideal(real.patterns))
        # an interface only takes away, walls only add, both little at such frequencies
        assert real.load.rms_current == pytest.approx(result.load.rms_current, rel=0.15)
        load, omega = result.load, 2.0 * np.pi * result.design.drive.frequency
        admittance = 1.0 / load.resistance + 1j * omega * load.capacitance
        assert load.rms_current == pytest.approx(abs(admittance) * result.rms_voltage)
        power = result.rms_voltage**2 / load.resistance * result.design.drive.duty
        assert load.power == pytest.approx(power)
        # R C = ε/σ of the liquid, whatever the electrodes
        liquid = result.design.liquid
        relaxation = liquid.state.permittivity / liquid.conductivity
        assert load.resistance * load.capacitance == pytest.approx(relaxation)


# Share of the generator's voltage that reaches the load, R_load/(R_load + 50 Ω), exact.
DIVIDERS = [(50.0, 0.5), (100.0, 0.666667), (1e3, 0.952381), (1e4, 0.995025)]


def stub(admittance):
    drive = SimpleNamespace(source_resistance=50.0, voltage_limit=20.0, current_limit=0.1)
    return SimpleNamespace(
        design=SimpleNamespace(drive=drive), terminal_admittance=np.array([admittance])
    )


@pytest.mark.parametrize(("load", "share"), DIVIDERS)
def test_the_generator_divides_its_voltage_with_a_resistance(load, share):
    (law,) = LIMITS["generator_voltage"].laws(stub(1.0 / load + 0j))
    assert law.bound()[0] * PEAK_TO_PEAK == pytest.approx(20.0 * share, abs=2e-5)
    (law,) = LIMITS["generator_current"].laws(stub(1.0 / load + 0j))
    assert law.bound()[0] == pytest.approx(0.1 * load)


def test_the_generator_divides_its_voltage_with_a_capacitance():
    # 100 pF at 10 MHz behind 50 Ω: 1/√(1 + (2π·10 MHz·50 Ω·100 pF)²) = 0.954028, exact.
    (law,) = LIMITS["generator_voltage"].laws(stub(2j * np.pi * 10e6 * 100e-12))
    assert law.bound()[0] * PEAK_TO_PEAK / 20.0 == pytest.approx(0.954028, abs=5e-7)


@pytest.mark.parametrize(("load", "share"), DIVIDERS)
def test_a_chip_of_that_resistance_gets_that_share(yeast, patterns, vary, ideal, load, share):
    length = patterns.cell_factor * yeast.chip.parallel_length
    # slow enough that the capacitance, whose current is 90° ahead, adds nothing that shows
    changes = {"liquid.conductivity": f"{1 / (load * length):.9g} S/m", "drive.frequency": "100 Hz"}
    result = evaluate(vary(yeast, changes), ideal(patterns))
    assert result.load.resistance == pytest.approx(load, rel=1e-8)
    row = next(row for row in result.ledger if row.rule.id == "generator_voltage")
    assert yeast.drive.voltage / row.value == pytest.approx(share, abs=1e-6)


def test_a_stiff_source_and_a_weak_one(yeast, patterns, vary):
    stiff = evaluate(vary(yeast, {"drive.source_resistance": "0 ohm"}), patterns)
    row = next(row for row in stiff.ledger if row.rule.id == "generator_voltage")
    assert row.value == pytest.approx(yeast.drive.voltage)
    assert row.bound_pp == pytest.approx(yeast.drive.voltage_limit)
    values = []
    for resistance in ("0 ohm", "50 ohm", "1 kohm"):
        found = evaluate(vary(yeast, {"drive.source_resistance": resistance}), patterns)
        values.append(next(r.value for r in found.ledger if r.rule.id == "generator_voltage"))
    assert values == sorted(values)


def test_the_hottest_liquid_is_the_stage_and_the_rise(results):
    for result in results.values():
        row = next(row for row in result.ledger if row.rule.id == "highest_temperature")
        stage = result.design.liquid.temperature
        assert row.value == pytest.approx(stage + result.self_consistent_rise)


def test_a_slow_field_charges_a_tight_membrane_to_schwans_value(results, vary):
    # 1.5·E·a at the pole of a sphere whose membrane does not conduct, far below its relaxation:
    # H. P. Schwan 1957, Adv. Biol. Med. Phys. 5:147, from memory.
    result = results["tumour-cells-sugar-buffer"]
    slow = evaluate(vary(result.design, {"drive.frequency": "100 Hz"}), result.patterns)
    for found in slow.particles:
        field = slow.point.exposure(found.particle) * slow.rms_voltage * PEAK
        expected = 1.5 * field * found.particle.radius
        assert found.membrane_voltage == pytest.approx(expected, rel=2e-3)


def test_the_wrong_sign_leaves_no_corridor(yeast, patterns, vary):
    wrong = evaluate(vary(yeast, {"task.dielectrophoresis": "negative"}), patterns)
    assert not wrong.inside
    assert wrong.floor_pp == np.inf
    assert wrong.binding.rule.id == "force_sign"
    still = evaluate(
        vary(yeast, {"task.dielectrophoresis": "negative", "flow.rate": "0 uL/min"}), patterns
    )
    assert not still.inside
    assert still.binding.rule.id == "force_sign"


def test_the_ledger_is_in_order_and_whole(results):
    for result in results.values():
        headrooms = [row.headroom for row in result.ledger]
        assert headrooms == sorted(headrooms)
        assert not np.isnan(headrooms).any()
        assert {row.rule.id for row in result.ledger} >= {"hold", "force_sign", "generator_voltage"}
        assert result.binding is result.ledger[0]
        assert result.inside == (
            result.floor_pp <= result.design.drive.voltage <= result.ceiling_pp
        )


def test_a_second_collected_particle_adds_its_own_rules(yeast, patterns, vary):
    both = evaluate(vary(yeast, {"particle.1.role": "collect"}), patterns)
    subjects = {(row.rule.id, row.rule.law.subject) for row in both.ledger}
    for name in ("viable yeast", "dead yeast"):
        assert {("hold", name), ("force_sign", name), ("electrothermal_ratio", name)} <= subjects
    assert ("membrane_voltage", "dead yeast") not in subjects  # it need not live


def test_results_cannot_be_written_to(patterns):
    with pytest.raises(ValueError, match="read-only"):
        patterns.table.x[0] = 0.0
