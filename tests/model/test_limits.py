"""Limits: values against outside laws, all of them as arrays, switched off, and what mends them."""

import json
import re
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from model.conditions import Conditions
from model.errors import DesignError
from model.evaluate import TIGHT, evaluate
from model.limits import LIMITS
from model.profile import document, parse_design, profile_text, read_profile
from model.quantity import parse_quantity
from model.remedies import remedies
from model.summary import check_object, check_text
from model.tasks import TASKS
from model.voltage import PEAK_TO_PEAK

BOLTZMANN = 1.380649e-23  # exact, SI 2019
VACUUM = 8.8541878128e-12  # CODATA 2018
W = 2.622057554292  # √2·K(k² = ½), exact mathematics


def row_of(result, limit, subject=""):
    (row,) = (
        row
        for row in result.ledger
        if row.rule.id == limit and subject in ("", row.rule.law.subject)
    )
    return row


def task_of(kind, **more):
    """A task as a profile has it; all but lifting know a sign."""
    sign = {} if kind == "lift" else {"dielectrophoresis": "positive"}
    return {"kind": kind, **sign, "working_height": "13 um", **more}


def with_task(design, kind, **more):
    data = document(design)
    data["task"] = task_of(kind, **more)
    return parse_design(data)


def test_power_is_what_the_resistance_turns_to_heat(yeast, patterns, vary, ideal):
    # P = V²/R, Joule's law
    for duty in (1.0, 0.25):
        result = evaluate(vary(yeast, {"drive.duty": duty}), ideal(patterns))
        expected = duty * result.rms_voltage**2 / result.load.resistance
        assert row_of(result, "power").value == pytest.approx(expected)
        assert row_of(result, "power").value == pytest.approx(result.load.power)


def test_depth_of_a_trap_in_the_exact_field(yeast, vary, solved, ideal):
    # Over bars and gaps of one width E² = (πV/(pW))²/√(cos²(2πx/p) + sinh²(2πy/p)), exact by a
    # conformal map: from 1/cosh above the middle of a bar to 1/sinh above an edge. kT by SI 2019.
    design = vary(yeast, {"chip.channel_height": "400 um", "task.working_height": "40 um"})
    result = evaluate(design, ideal(solved(design)))
    cell, pitch = design.particles[0], 120e-6
    k = 2 * np.pi * 40e-6 / pitch
    swing = (np.pi / (pitch * W)) ** 2 * (1 / np.sinh(k) - 1 / np.cosh(k))
    real = complex(result.particles[0].polarisation).real
    energy = 2 * np.pi * design.liquid.state.permittivity * cell.radius**3 * real * swing
    expected = energy * result.rms_voltage**2 / (BOLTZMANN * design.liquid.temperature)
    assert row_of(result, "thermal_noise").value == pytest.approx(expected, rel=1e-3)


def test_depth_of_a_trap_that_lifts(yeast, vary, solved, ideal):
    # What the field gives on the way down, from its exact value at the floor (1/cosh, least) to
    # that at the height (1/sinh, largest), less what the weight gives back.
    data = document(yeast)
    data["chip"] |= {"channel_height": "400 um"}
    data["task"] = {"kind": "lift", "working_height": "40 um"}
    data["particle"] = [data["particle"][1] | {"role": "collect", "density": "1100 kg/m^3"}]
    design = parse_design(data)
    result = evaluate(design, ideal(solved(design)))
    cell, pitch, liquid = design.particles[0], 120e-6, design.liquid.state
    real = complex(result.particles[0].polarisation).real
    assert real < 0.0
    fall = (np.pi / (pitch * W)) ** 2 * (
        1 / np.cosh(2 * np.pi * cell.radius / pitch) - 1 / np.sinh(2 * np.pi * 40e-6 / pitch)
    )
    gain = 2 * np.pi * liquid.permittivity * cell.radius**3 * -real * fall * result.rms_voltage**2
    weight = 4 / 3 * np.pi * cell.radius**3 * (cell.density - liquid.density) * 9.80665
    spent = weight * (40e-6 - cell.radius)
    expected = (gain - spent) / (BOLTZMANN * design.liquid.temperature)
    assert row_of(result, "thermal_noise").value == pytest.approx(expected, rel=2e-3)


def test_a_steady_push_is_no_trap(yeast, vary, solved):
    design = vary(yeast, {"chip.layout": "four-phase-bars"})
    result = evaluate(design, solved(design))
    assert not any(row.rule.id == "thermal_noise" for row in result.ledger)


def test_double_layer_against_the_smallest_radius(yeast, patterns, vary):
    # One salt of valence 1, D = 2e-9 m²/s: λ_D = √(εD/σ), 26.35 nm at ε_r = 78.4 and 2 mS/m.
    changes = {"liquid.conductivity": "2 mS/m", "liquid.relative_permittivity": 78.4}
    row = row_of(evaluate(vary(yeast, changes), patterns), "thin_double_layer")
    assert row.rule.law.subject == "dead yeast"
    expected = np.sqrt(78.4 * VACUUM * 2e-9 / 2e-3) / 3.26e-6
    assert row.value == pytest.approx(expected, rel=1e-4)
    watched = evaluate(vary(yeast, {**changes, "particle.1.role": "watch"}), patterns)
    assert row_of(watched, "thin_double_layer").rule.law.subject == "viable yeast"


def test_a_period_against_diffusion_and_flow(yeast, patterns, vary):
    # Stokes and Einstein: a sphere of 0.5 µm radius in water at 25 °C (0.890 mPa s) has
    # D = 4.90746e-13 m²/s, exact from kT; it wanders by its radius in a²/(2D).
    bead = {
        "name": "bead", "role": "collect", "kind": "solid-sphere", "radius": "0.5 um",
        "relative_permittivity": 2.55, "conductivity": "0 S/m",
    }  # fmt: skip
    changes = {
        "particle": [bead], "liquid.temperature": "25 degC", "liquid.viscosity": "0.89 mPa s",
        "flow.rate": "0 uL/min", "drive.frequency": "1 kHz",
    }  # fmt: skip
    design = vary(yeast, changes)
    row = row_of(evaluate(design, patterns), "field_frequency")
    assert row.value == pytest.approx(2 * 4.90746e-13 / (0.5e-6) ** 2 / 1e3, rel=1e-5)
    flowing = evaluate(vary(design, {"flow.rate": "3 uL/min"}), patterns)
    speed = flowing.point.flow_speed(13e-6)
    row = row_of(flowing, "field_frequency")
    assert row.value == pytest.approx(speed / 0.5e-6 / 1e3)
    assert not row.kept


def test_walls_that_displace_as_much_as_their_permittivity(yeast, vary, solved):
    # Half-spaces of floor and liquid above and below flat electrodes share the field: at high
    # frequency their currents are as their permittivities, exact.
    design = vary(yeast, {
        "chip.channel_height": "600 um", "chip.floor.relative_permittivity": 8,
        "chip.floor.thickness": "2 mm", "drive.frequency": "1 GHz",
    })  # fmt: skip
    result = evaluate(design, solved(design))
    permittivity = design.liquid.state.permittivity / VACUUM
    row = row_of(result, "wall_admittance")
    assert row.value == pytest.approx(8 / permittivity, rel=1e-2)
    assert row.kept


def test_walls_that_conduct_are_told(yeast, vary, solved):
    # a floor of half the liquid's conductivity carries half its current, as above
    changes = {"chip.floor.material": "silicon", "chip.floor.conductivity": "10 mS/m"}
    design = vary(yeast, changes)
    assert not row_of(evaluate(design, solved(design)), "wall_admittance").kept


@pytest.mark.parametrize(("radius", "kept"), [("29 um", True), ("31 um", False)])
def test_particles_wider_than_the_gap(yeast, patterns, vary, radius, kept):
    result = evaluate(vary(yeast, {"particle.1.radius": radius}), patterns)
    assert row_of(result, "particle_size", "dead yeast").kept == kept  # the gap is 60 µm
    watched = evaluate(
        vary(yeast, {"particle.1.radius": radius, "particle.1.role": "watch"}), patterns
    )
    assert len([row for row in watched.ledger if row.rule.id == "particle_size"]) == 1


def test_electro_osmosis_against_the_force(yeast, patterns, vary):
    for voltage in ("2 V", "10 V"):
        result = evaluate(vary(yeast, {"drive.voltage": voltage}), patterns)
        ratio = result.electro_osmotic_speed / result.dielectrophoretic_speed
        assert row_of(result, "electro_osmotic_ratio").value == pytest.approx(ratio)


def test_electro_osmosis_is_not_known_in_plan(results):
    ids = {row.rule.id for row in results["beads-at-an-opening"].ledger}
    assert not {"electro_osmotic_ratio", "wall_admittance"} & ids
    assert {"power", "thermal_noise", "particle_size", "field_frequency"} <= ids


@pytest.mark.parametrize("rate", ["0.1 uL/min", "30 uL/min"])
def test_contrast_is_the_ratio_of_two_voltages(yeast, patterns, vary, rate):
    assert not any(row.rule.id == "contrast" for row in evaluate(yeast, patterns).ledger)
    result = evaluate(vary(with_task(yeast, "separate"), {"flow.rate": rate}), patterns)
    held, caught = (row_of(result, "separate", one.name) for one in yeast.particles)
    row = row_of(result, "contrast")
    assert row.rule.law.subject == "dead yeast"
    assert row.value == pytest.approx(caught.bound_pp / held.bound_pp)
    assert row.kept == (row.value >= 1.2)


def test_contrast_of_particles_that_are_alike(yeast, patterns, vary):
    twin = {**document(yeast)["particle"][0], "name": "twin", "role": "pass"}
    both = [document(yeast)["particle"][0], twin]
    design = vary(with_task(yeast, "separate"), {"particle": both})
    result = evaluate(design, patterns)
    assert row_of(result, "contrast").value == pytest.approx(1.0)
    assert not result.inside


# --- every law as an array ---------------------------------------------------------------------


@pytest.fixture(scope="module")
def chips(yeast, vary, solved):
    """Designs with patterns of one phase and of four."""
    wave = vary(yeast, {"chip.layout": "four-phase-bars"})
    return {"still": (yeast, solved(yeast)), "wave": (wave, solved(wave))}


@settings(max_examples=16, deadline=None)
@given(
    chip=st.sampled_from(["still", "wave"]),
    kind=st.sampled_from(sorted(TASKS)),
    powers=st.lists(st.floats(2.0, 9.0), min_size=1, max_size=4, unique=True),
    amounts=st.lists(st.floats(-5.0, 1.0), min_size=1, max_size=3, unique=True),
)
def test_laws_of_many_conditions_are_those_of_each(chips, chip, kind, powers, amounts):
    design, patterns = chips[chip]
    design = with_task(design, kind)
    frequency, conductivity = 10.0 ** np.array(powers), 10.0 ** np.array(amounts)
    together = Conditions(design, patterns, frequency, conductivity[:, None])
    shape = (conductivity.size, frequency.size)
    for rule in (design.task, *LIMITS.values()):
        many = rule.laws(together)
        for i, amount in enumerate(conductivity):
            for j, one in enumerate(frequency):
                alone = rule.laws(Conditions(design, patterns, np.array([one]), np.array(amount)))
                for law, single in zip(many, alone, strict=True):
                    bound = np.broadcast_to(law.bound(), shape)[i, j]
                    assert bound == pytest.approx(float(single.bound().reshape(-1)[0]), rel=1e-9)
                    assert law.subject == single.subject


@pytest.mark.parametrize("kind", TASKS)
def test_conditions_are_what_no_voltage_changes(yeast, patterns, kind):
    at = evaluate(with_task(yeast, kind), patterns).point
    for limit in LIMITS.values():
        for law in limit.laws(at):
            assert (law.power == 0) == limit.condition


# --- corridor and ledger -----------------------------------------------------------------------

POINT = st.fixed_dictionaries(
    {
        "kind": st.sampled_from(sorted(TASKS)),
        "frequency": st.floats(3.0, 8.5),
        "conductivity": st.floats(-4.0, 0.5),
        "rate": st.floats(-2.0, 3.0),
        "sign": st.sampled_from(["positive", "negative"]),
    }
)


def design_at(yeast, point):
    sign = {} if point["kind"] == "lift" else {"dielectrophoresis": point["sign"]}
    data = document(yeast)
    data["task"] = {"kind": point["kind"], "working_height": "13 um", **sign}
    data["drive"]["frequency"] = f"{10 ** point['frequency']:.9g} Hz"
    data["liquid"]["conductivity"] = f"{10 ** point['conductivity']:.9g} S/m"
    data["flow"]["rate"] = f"{10 ** point['rate']:.9g} uL/min"
    return parse_design(data)


def at_voltage(design, patterns, voltage):
    drive = design.drive.model_copy(update={"voltage": voltage})
    return evaluate(design.model_copy(update={"drive": drive}), patterns)


def kept_by_value(result):
    """Whether every value is on the right side of what is allowed, told by the values alone."""
    return all(
        row.value <= row.allowed if row.rule.law.sense == "most" else row.value >= row.allowed
        for row in result.ledger
    )


@settings(max_examples=10, deadline=None)
@given(point=POINT)
def test_floor_and_ceiling_are_where_a_sweep_of_the_voltage_finds_them(yeast, patterns, point):
    design = design_at(yeast, point)
    here = evaluate(design, patterns)
    floor, ceiling = here.floor_pp, here.ceiling_pp
    for voltage in np.geomspace(0.003, 900.0, 16):
        result = at_voltage(design, patterns, float(voltage))
        near = any(abs(voltage / end - 1) < 1e-9 for end in (floor, ceiling) if 0 < end < np.inf)
        assert near or kept_by_value(result) == (floor <= voltage <= ceiling) == result.inside


@settings(max_examples=14, deadline=None)
@given(point=POINT)
def test_a_corridor_is_empty_where_some_rule_is_always_broken(yeast, patterns, point):
    design = design_at(yeast, point)
    here = evaluate(design, patterns)
    floor, ceiling = here.floor_pp, here.ceiling_pp
    # between and at the ends of all bounds there is every case of rules kept and broken
    bounds = sorted({row.bound_pp for row in here.ledger if 0.0 < row.bound_pp < np.inf})
    between = [np.sqrt(one * other) for one, other in pairwise(bounds)]
    tried = [bounds[0] / 2, *bounds, *between, bounds[-1] * 2]
    kept = [at_voltage(design, patterns, float(volts)).inside for volts in tried]
    assert any(kept) == (floor <= ceiling and np.isfinite(floor) and ceiling > 0.0)


@settings(max_examples=15, deadline=None)
@given(
    amounts=st.tuples(st.floats(-5.0, 1.0), st.floats(-5.0, 1.0)).map(sorted),
    frequency=st.floats(3.0, 8.5),
)
def test_more_conductivity_never_lowers_heating(yeast, patterns, ideal, amounts, frequency):
    conductivity = 10.0 ** np.array(amounts)[:, None]
    at = Conditions(yeast, ideal(patterns), np.array([10.0**frequency]), conductivity)
    for limit in ("temperature_rise", "highest_temperature", "power"):
        (law,) = LIMITS[limit].laws(at)
        low, high = np.broadcast_to(law.value(1.0), (2, 1))[:, 0]
        assert low <= high * (1 + 1e-12)


# --- switched off ------------------------------------------------------------------------------

OFF = {"limits.off": [{"limit": "generator_voltage", "reason": "a stronger amplifier is ordered"}]}


def test_a_limit_that_is_off_counts_nowhere(yeast, patterns, vary):
    before = evaluate(yeast, patterns)
    result = evaluate(vary(yeast, OFF), patterns)
    assert before.ceiling_pp == pytest.approx(row_of(before, "generator_voltage").bound_pp)
    assert result.ceiling_pp == pytest.approx(row_of(before, "membrane_voltage").bound_pp)
    assert all(row.rule.id != "generator_voltage" for row in result.ledger)
    assert all(bound.id != "generator_voltage" for bound in result.corridor.bounds)
    assert np.all(result.corridor.ceiling >= before.corridor.ceiling)
    (off,) = result.switched_off
    assert off.reason == "a stronger amplifier is ordered"
    assert off.rows[0].value == pytest.approx(row_of(before, "generator_voltage").value)


def test_a_limit_that_is_off_is_told_everywhere(yeast, patterns, vary):
    result = evaluate(vary(yeast, OFF), patterns)
    text = check_text(result)
    assert "off: generator voltage (11.8 V, ≤ 20 V if it counted)" in text
    assert "a stronger amplifier is ordered" in text
    data = check_object(result)
    assert json.loads(json.dumps(data)) == data
    (off,) = data["limits_off"]
    assert off["id"] == "generator_voltage"
    assert off["reason"] == "a stronger amplifier is ordered"
    assert off["limits"][0]["allowed"] == pytest.approx(20.0)
    assert check_object(evaluate(yeast, patterns))["limits_off"] == []


def test_a_limit_that_is_off_stays_with_the_design(yeast, vary):
    design = vary(yeast, OFF)
    assert design != yeast
    assert read_profile(profile_text(design).encode()) == design
    assert "off" not in document(yeast)["limits"]


def test_everything_off_leaves_the_task(yeast, patterns, vary):
    off = [{"limit": name, "reason": "tried"} for name in LIMITS]
    result = evaluate(vary(yeast, {"limits.off": off}), patterns)
    assert {row.rule.id for row in result.ledger} == {"hold"}
    assert result.ceiling_pp == np.inf
    assert np.all(np.isinf(result.corridor.ceiling))
    assert result.inside
    assert check_object(result)["ceiling_Vpp"] is None
    assert "beyond any voltage" in check_text(result)
    wrong = {"limits.off": off, "task.dielectrophoresis": "negative"}
    never = evaluate(vary(yeast, wrong), patterns)
    assert not never.has_corridor
    assert not never.inside
    assert "no corridor here" in check_text(never)


WRONG = {
    "unknown": ([{"limit": "tides", "reason": "x"}], "limits.off.0.limit", "one of contrast"),
    "twice": (
        [{"limit": "power", "reason": "x"}, {"limit": "power", "reason": "y"}],
        "limits.off.1.limit",
        "switched off twice",
    ),
    "no reason": ([{"limit": "power"}], "limits.off.0.reason", "missing"),
    "blank reason": ([{"limit": "power", "reason": " "}], "limits.off.0.reason", "empty"),
    "a word": ("power", "limits.off", "tables with limit and reason"),
    "a list of words": (["power"], "limits.off.0", "table"),
    "too many": ([{"limit": "power", "reason": "x"}] * 99, "limits.off", "at most"),
    "another key": ([{"limit": "power", "reason": "x", "by": "me"}], "limits.off.0.by", "no key"),
}


@pytest.mark.parametrize("name", WRONG)
def test_what_is_no_switch_is_told(yeast, name):
    value, path, words = WRONG[name]
    data = document(yeast)
    data["limits"]["off"] = value
    with pytest.raises(DesignError) as caught:
        parse_design(data)
    (error,) = caught.value.errors
    assert error.path == path
    assert words in error.problem


# --- remedies ----------------------------------------------------------------------------------

NUMBER = r"([\d.]+ (?:[µmkMG]?)(?:V|Hz|S/m))"
KNOBS = {
    "voltage": ("drive.voltage", "V"),
    "frequency": ("drive.frequency", "Hz"),
    "conductivity": ("liquid.conductivity", "S/m"),
}
TROUBLES = {
    "too weak": {"drive.voltage": "8 V"},
    "tight": {},
    "too strong": {"drive.voltage": "24 V"},
    "wrong sign": {"drive.frequency": "20 kHz"},
    "slow drive": {"drive.frequency": "1.5 kHz", "flow.rate": "40 uL/min"},
    "salty": {"liquid.conductivity": "0.3 S/m"},
    "clean": {"liquid.conductivity": "0.02 mS/m", "particle.1.radius": "0.6 um"},
}


@pytest.mark.parametrize("kind", ["hold", "separate"])
@pytest.mark.parametrize("name", TROUBLES)
def test_what_is_told_to_change_keeps_the_rule(yeast, patterns, vary, name, kind):
    design = vary(with_task(yeast, kind), TROUBLES[name])
    result = evaluate(design, patterns)
    troubled = [row for row in result.ledger if row.state != "kept"]
    assert troubled
    for row in troubled:
        wanted = TIGHT if row.kept else 1.0
        *told, rest = remedies(result, row)
        assert rest == row.rule.words.remedy
        assert [next(knob for knob in KNOBS if knob in line) for line in told] == list(KNOBS)
        for line, (path, unit) in zip(told, KNOBS.values(), strict=True):
            if line.startswith("No "):
                continue
            assert (f"{TIGHT}× headroom" in line) == row.kept
            for text in re.findall(NUMBER, line):
                assert parse_quantity(text, unit) > 0.0
                moved = evaluate(vary(design, {path: text}), patterns)
                again = row_of(moved, row.rule.id, row.rule.law.subject)
                assert again.headroom >= wanted * (1 - 1e-9), (line, text)


def test_the_nearest_is_told(yeast, patterns, vary):
    # a little nearer than what is told the rule is still broken
    result = evaluate(vary(yeast, {"drive.frequency": "20 kHz"}), patterns)
    row = row_of(result, "force_sign")
    _, frequency, _, _ = remedies(result, row)
    (first, last) = re.findall(NUMBER, frequency)
    crossovers = [one.frequency for one in result.crossovers(yeast.particles[0])]
    assert parse_quantity(first, "Hz") == pytest.approx(crossovers[0], rel=5e-3)
    assert parse_quantity(last, "Hz") == pytest.approx(crossovers[1], rel=0.04)


def test_where_no_change_helps_it_is_said(yeast, patterns, vary):
    result = evaluate(vary(yeast, {"particle.0.radius": "31 um", "task.working_height": "40 um"}),
                      patterns)  # fmt: skip
    told = remedies(result, row_of(result, "particle_size", "viable yeast"))
    assert told[:3] == (
        "No voltage helps.",
        "No frequency from 1 kHz to 100 MHz helps.",
        "No conductivity from 0.01 mS/m to 10 S/m helps.",
    )
    assert told[3] == "Widen the gap between the electrodes."


def test_a_rule_with_room_needs_no_remedy(yeast, patterns):
    result = evaluate(yeast, patterns)
    for row in result.ledger:
        assert bool(remedies(result, row)) == (row.headroom < TIGHT)


def test_remedies_are_printed_beside_the_ledger(yeast, patterns, vary):
    result = evaluate(vary(yeast, {"drive.voltage": "24 V"}), patterns)
    row = row_of(result, "generator_voltage")
    text = check_text(result)
    assert "to change, one at a time" in text
    for words in remedies(result, row):
        assert words in text
    limits = {limit["id"]: limit for limit in check_object(result)["limits"]}
    assert limits["generator_voltage"]["remedies"] == list(remedies(result, row))
    assert "remedies" not in limits["generator_current"]


def test_volts_of_a_remedy_are_peak_to_peak(yeast, patterns, vary):
    result = evaluate(vary(yeast, {"drive.voltage": "24 V"}), patterns)
    row = row_of(result, "generator_voltage")
    (volts,) = re.findall(NUMBER, remedies(result, row)[0])
    told = parse_quantity(volts, "V")
    bound = float(row.rule.law.bound()[0]) * PEAK_TO_PEAK
    assert bound * 0.99 <= told <= bound
