"""The chip as a circuit: what each element does, and the limits it goes to."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.constants import epsilon_0

from model.circuit import Circuit
from model.evaluate import evaluate
from model.fields.solve import solve_chip
from model.interface import capacitive, in_series


def circuit(design, patterns, frequency):
    omega = 2 * np.pi * np.atleast_1d(np.asarray(frequency, dtype=float))
    return Circuit(design, patterns, omega, np.array(design.liquid.conductivity))


def test_blocked_electrodes_are_a_capacitance(yeast, patterns):
    """Slowest of all: jωC of two half bars in series for each of the 59 gaps of 6 mm."""
    at = circuit(yeast, patterns, 1e-4)
    debye = at.interface.debye_length
    permittivity = yeast.liquid.state.permittivity
    per_area = 1 / (1 / 0.2 + debye / permittivity)
    expected = 1j * at.omega * per_area * 60e-6 / 4 * 59 * 6e-3
    assert at.liquid_admittance == pytest.approx(expected, rel=1e-5)
    assert at.double_layer_voltage == pytest.approx(0.5, rel=1e-6)


def test_fast_enough_only_the_liquid_is_left(yeast, patterns):
    at = circuit(yeast, patterns, 1e7)
    bare = at.liquid * patterns.cell_factor * yeast.chip.parallel_length
    # what remains, the two layers in series with the liquid, is of the order of λ_D/(bar width)
    assert abs(at.liquid_admittance / bare - 1)[0] < 5e-3
    assert at.double_layer_voltage < 0.02


def test_share_at_the_ends(yeast, patterns):
    found = np.abs(circuit(yeast, patterns, np.geomspace(1, 1e9, 60)).share)
    assert np.all(np.diff(found) > 0)
    assert found[0] < 1e-3
    assert found[-1] > 0.99


def test_leads_are_in_series(yeast, patterns, vary):
    frequency = np.geomspace(1e3, 1e8, 12)
    bare = circuit(yeast, patterns, frequency)
    led = circuit(vary(yeast, {"electrode.lead_resistance": "120 ohm"}), patterns, frequency)
    np.testing.assert_allclose(1 / led.admittance, 1 / bare.admittance + 120, rtol=1e-12)
    divided = 1 / (1 + 120 * bare.admittance)
    np.testing.assert_allclose(led.share, divided * bare.share, rtol=1e-12)
    ratio = np.abs(divided) * bare.double_layer_voltage
    np.testing.assert_allclose(led.double_layer_voltage, ratio, rtol=1e-12)


def test_leads_of_several_phases(demos, solved, vary):
    """Each terminal's lead is half of both; N terminals feed the whole power together."""
    base = demos["rinse-water-yeast"]
    phased = vary(base, {"chip.layout": "four-phase-bars"})
    patterns = solved(phased)
    one = circuit(phased, patterns, 1e6)
    led = circuit(vary(phased, {"electrode.lead_resistance": "80 ohm"}), patterns, 1e6)
    # phasors of one terminal against the middle: V/2 drives its share of the current
    current = 0.5 * led.admittance
    left = 0.5 - 40 * current
    np.testing.assert_allclose(led.share / one.share, left / 0.5, rtol=1e-12)
    assert np.all(one.double_layer_voltage > 0)
    blocked = circuit(phased, patterns, 1e-3)
    assert blocked.double_layer_voltage == pytest.approx(0.5, rel=1e-5)


FILM = {
    "electrode.film_thickness": "300 nm",
    "electrode.film_permittivity": 7.0,
    "electrode.film_conductivity": "0 S/m",
}


def test_a_film_takes_the_slow_voltage(yeast, patterns, vary):
    """Series capacitances: the smaller one takes the greater part."""
    design = vary(yeast, FILM)
    at = circuit(design, patterns, 1e-2)
    film = 7.0 * epsilon_0 / 300e-9
    layer = 1 / (1 / 0.2 + at.interface.debye_length / yeast.liquid.state.permittivity)
    assert at.film_voltage == pytest.approx(0.5 * layer / (layer + film), rel=1e-4)
    assert at.double_layer_voltage == pytest.approx(0.5 * film / (layer + film), rel=1e-4)
    frequency = np.geomspace(1e3, 1e8, 20)
    covered, bare = (circuit(found, patterns, frequency) for found in (design, yeast))
    assert np.all(np.abs(covered.share) < np.abs(bare.share))
    assert np.all(covered.double_layer_voltage < bare.double_layer_voltage)
    assert np.all(bare.film_voltage == 0)


def test_film_breakdown_is_a_limit_only_with_a_film(yeast, patterns, vary):
    assert "passivation_breakdown" not in {row.rule.id for row in evaluate(yeast, patterns).ledger}
    result = evaluate(vary(yeast, {**FILM, "drive.frequency": "100 Hz"}), patterns)
    row = next(row for row in result.ledger if row.rule.id == "passivation_breakdown")
    # nearly half of 5 V peak stands over each of both films of 300 nm at such a frequency
    assert row.value == pytest.approx(5.0 / 2 / 300e-9, rel=0.03)
    assert row.allowed == 500e6


def test_a_constant_phase_element(yeast, patterns, vary):
    """With n = 1 it is the capacitance Q; slow enough its phase is that of the whole chip."""
    frequency = np.geomspace(1, 1e7, 15)
    same = vary(
        yeast,
        {
            "electrode.interface": "constant-phase",
            "electrode.constant_phase_magnitude": 0.05,
            "electrode.constant_phase_exponent": 1.0,
        },
    )
    at = circuit(same, patterns, frequency)
    np.testing.assert_allclose(at.interface.admittance, 1j * at.omega * 0.05, rtol=1e-12)
    slanted = vary(same, {"electrode.constant_phase_exponent": 0.8})
    phase = np.angle(circuit(slanted, patterns, 1e-3).liquid_admittance)
    assert phase == pytest.approx(0.8 * np.pi / 2, rel=1e-3)


def test_given_ionic_strength(yeast, patterns, vary):
    """10 mmol/L at 25 °C in water: λ_D = 3.0403 nm (ε = 78.41), by definition."""
    changes = {"electrode.ionic_strength": "10 mmol/L", "liquid.temperature": "25 degC"}
    design = vary(yeast, changes)
    assert circuit(design, patterns, 1e3).interface.debye_length == pytest.approx(
        3.0403e-9, rel=5e-4
    )


@given(st.floats(0, 9), st.floats(1e-3, 1))
def test_series_of_capacitances(exponent, capacitance):
    omega = np.array([10.0**exponent])
    both = in_series(capacitive(omega, capacitance), capacitive(omega, 2 * capacitance))
    assert both == pytest.approx(1j * omega * capacitance * 2 / 3)


def test_everything_broadcasts_over_conductivity(yeast, patterns):
    omega = 2 * np.pi * np.geomspace(1e3, 1e7, 5)
    several = np.array([[0.002], [0.02], [0.2]])
    at = Circuit(yeast, patterns, omega, several)
    for row, conductivity in enumerate(several[:, 0]):
        one = Circuit(yeast, patterns, omega, np.array(conductivity))
        for name in ("share", "admittance", "double_layer_voltage", "wall_ratio"):
            assert getattr(at, name).shape == (3, 5)
            np.testing.assert_allclose(getattr(at, name)[row], getattr(one, name), rtol=1e-12)


def test_walls_by_symmetry(yeast, vary):
    """A floor as thick as the liquid, insulated like it, holds as much of the field.

    The potential on the electrode plane is even, so that both halves are the same problem.
    """
    design = vary(yeast, {"chip.floor.thickness": "100 um"})
    patterns = solve_chip(design.chip)
    assert patterns.wall_factors["floor"] == pytest.approx(patterns.cell_factor, rel=1e-2)
    # first order overstates: finite elements and a trial potential both do
    assert patterns.wall_factors["floor"] > patterns.cell_factor
    # what is left on the lid, 0.83 pitches up, falls as exp(−πy/p) in φ
    assert patterns.wall_factors["lid"] < 2 * np.exp(-2 * np.pi * 100 / 120)
    at = circuit(design, patterns, 1e6)
    glass, pdms = 1e-12 + 2j * np.pi * 1e6 * 4.6 * epsilon_0, 2j * np.pi * 1e6 * 2.7 * epsilon_0
    expected = glass * patterns.wall_factors["floor"] + pdms * patterns.wall_factors["lid"]
    assert at.wall_admittance == pytest.approx(expected * 59 * 6e-3, rel=1e-6)


def test_forces_go_with_the_share(yeast, patterns, vary):
    """Force and heat with its square, flow with its fourth power, membranes with itself."""
    slow, fast = (
        evaluate(vary(yeast, {"electrode.lead_resistance": ohms}), patterns).point
        for ohms in ("2 kohm", "0 ohm")
    )
    ratio = np.abs(slow.share / fast.share)
    assert 0.05 < ratio < 0.9
    particle = yeast.particles[0]
    for power, found in (
        (1, [at.exposure(particle) for at in (slow, fast)]),
        (2, [at.force_along_flow(particle) for at in (slow, fast)]),
        (2, [at.dielectrophoretic_speed(particle) for at in (slow, fast)]),
        (2, [at.heating for at in (slow, fast)]),
        (4, [at.electrothermal_speed for at in (slow, fast)]),
    ):
        np.testing.assert_allclose(found[0] / found[1], ratio**power, rtol=1e-9)


def test_the_double_layer_is_a_limit(yeast, patterns, vary):
    """Slow enough half the peak voltage stands over each electrode, whatever the liquid."""
    result = evaluate(vary(yeast, {"drive.frequency": "100 Hz", "drive.voltage": "3 V"}), patterns)
    row = next(row for row in result.ledger if row.rule.id == "double_layer_voltage")
    assert row.value == pytest.approx(0.75, rel=5e-3)
    assert row.headroom == pytest.approx(1 / row.value)


def test_what_the_generator_gives_warms_the_liquid(yeast, patterns, vary):
    """Where neither layers, walls nor leads dissipate, all power is the liquid's heat."""
    still = {f"chip.{wall}.conductivity": "0 S/m" for wall in ("floor", "lid")}
    design = vary(yeast, still)
    at = circuit(design, patterns, np.geomspace(1, 1e8, 30))
    conductance = design.liquid.conductivity * patterns.cell_factor * design.chip.parallel_length
    np.testing.assert_allclose(at.admittance.real, conductance * at.heat_share, rtol=1e-6)
    assert np.all(at.heat_share >= np.abs(at.share) ** 2 * (1 - 1e-12))


def test_leads_take_their_share_of_the_heat(yeast, patterns, vary):
    """I²R of the leads and the liquid's heat are the whole power."""
    changes = {f"chip.{wall}.conductivity": "0 S/m" for wall in ("floor", "lid")}
    design = vary(yeast, {**changes, "electrode.lead_resistance": "120 ohm"})
    at = circuit(design, patterns, np.geomspace(1e3, 1e7, 9))
    conductance = design.liquid.conductivity * patterns.cell_factor * design.chip.parallel_length
    heat = conductance * at.heat_share + 120 * np.abs(at.admittance) ** 2
    np.testing.assert_allclose(at.admittance.real, heat, rtol=1e-6)
