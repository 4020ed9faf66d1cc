"""Tasks: lifted, deflected and separated particles against balances made by hand."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from model.conditions import Conditions
from model.errors import DesignError
from model.evaluate import evaluate
from model.levitation import least_lift, steady_lift
from model.profile import document, parse_design
from model.summary import check_object, check_text
from model.tasks import TASKS
from model.verdict import verdict
from model.voltage import PEAK_TO_PEAK

#: √2·K(k² = ½), exact mathematics.
W = 2.622057554292
GRAVITY = 9.80665  # standard acceleration of free fall, CGPM 1901
D = 20e-6

BEAD = {
    "name": "bead",
    "role": "collect",
    "kind": "solid-sphere",
    "radius": "3 um",
    "density": "1050 kg/m^3",
    "relative_permittivity": 2.55,
    "conductivity": "0 S/m",
    "surface_conductance": "1 nS",
}
LIFT = {"kind": "lift", "working_height": "30 um"}


def with_task(design, task, **changes):
    """The design with another task, of which only what is given stays."""
    data = document(design)
    data["task"] = task
    for key, value in changes.items():
        place, _, last = key.rpartition("__")
        (data[place] if place else data)[last] = value
    return parse_design(data)


@pytest.fixture(scope="module")
def lifted(yeast):
    """Beads above bars and gaps of 20 µm in a channel so high that its lid does not matter."""
    design = with_task(yeast, LIFT, particle=[BEAD], chip__bar_width="20 um", chip__gap="20 um")
    return with_task(design, LIFT, chip__channel_height="200 um", drive__frequency="10 MHz")


@pytest.fixture(scope="module")
def free(lifted, solved, ideal):
    """Its patterns, as of ideal electrodes."""
    return ideal(solved(lifted))


def at_height(design, height):
    return with_task(design, {"kind": "lift", "working_height": f"{height * 1e6:.10g} um"})


def floor_of(result, kind):
    """Least V rms of a task alone."""
    (row,) = (row for row in result.ledger if row.rule.id == kind)
    return row.bound_pp / PEAK_TO_PEAK


def exact_square(x, y, pitch=2 * D):
    """E² per V² over bars and gaps of equal width: conformal map, exact mathematics."""
    square = np.cos(2 * np.pi * x / pitch) ** 2 + np.sinh(2 * np.pi * y / pitch) ** 2
    return (np.pi / (pitch * W)) ** 2 / np.sqrt(square)


@pytest.mark.parametrize("height", [15e-6, 20e-6, 30e-6, 45e-6])
def test_lift_is_force_against_weight_in_the_exact_field(lifted, free, height):
    result = evaluate(at_height(lifted, height), free)
    liquid, bead = result.design.liquid.state, result.design.particles[0]
    x, step = np.linspace(0.0, 2 * D, 2001), 1e-9
    slope = (exact_square(x, height - step) - exact_square(x, height + step)) / (2 * step)
    real = complex(result.point.polarisation(bead)[0]).real
    assert real < 0.0
    force = 2 * np.pi * liquid.permittivity * bead.radius**3 * -real * slope.min()
    weight = 4 / 3 * np.pi * bead.radius**3 * (bead.density - liquid.density) * GRAVITY
    assert floor_of(result, "lift") == pytest.approx(np.sqrt(weight / force), rel=2e-3)


def test_height_at_which_beads_float_by_hand(lifted, free):
    # E² = 0.717770011 V²/d²·exp(−πy/d) far above bars and gaps of width d, exact; the balance
    # 2πεa³|Re K|·(π/d)·E² = weight gives y = (d/π)·ln(…).
    volts = 2.0
    point = evaluate(lifted, free)
    liquid, bead = lifted.liquid.state, lifted.particles[0]
    real = abs(complex(point.point.polarisation(bead)[0]).real)
    weight = 4 / 3 * np.pi * bead.radius**3 * (bead.density - liquid.density) * GRAVITY
    push = 2 * np.pi * liquid.permittivity * bead.radius**3 * real * np.pi / D
    height = D / np.pi * np.log(push * 0.717770011 * volts**2 / D**2 / weight)
    assert D < height < 5 * D
    result = evaluate(at_height(lifted, height), free)
    assert floor_of(result, "lift") == pytest.approx(volts, rel=1e-2)


def test_lift_tells_what_it_asks(lifted, free):
    result = evaluate(lifted, free)
    (words,) = result.design.task.statements(result.point)
    assert "net weight" in words
    assert "30 µm up" in words
    assert "least over one period" in words
    assert words in check_text(result)
    assert check_object(result)["task"] == {"kind": "lift", "statements": [words]}


def test_what_is_drawn_to_the_electrodes_is_not_lifted(yeast, patterns):
    result = evaluate(with_task(yeast, LIFT), patterns)
    assert complex(result.particles[0].polarisation).real > 0.0
    assert result.particles[0].force < 0.0
    assert floor_of(result, "lift") == np.inf
    assert verdict(result).headline == "No voltage does the task"
    (words,) = result.design.task.statements(result.point)
    assert "no force lifts it" in words


def test_what_floats_by_itself_needs_no_force(lifted, free):
    design = with_task(lifted, LIFT, particle=[{**BEAD, "density": "900 kg/m^3"}])
    result = evaluate(design, free)
    assert floor_of(result, "lift") == 0.0
    assert not any(row.rule.id == "thermal_noise" for row in result.ledger)
    (words,) = result.design.task.statements(result.point)
    assert "needs no lift" in words


def test_lift_and_its_stability_against_every_place(lifted, solved):
    """Least upward force and its fall with height against values at many places of a period."""
    data = document(lifted)
    data["chip"] |= {"layout": "four-phase-bars", "wave": "with-flow", "channel_height": "60 um"}
    design = parse_design(data)
    patterns = solved(design)
    bead, seen = design.particles[0], set()
    frequency, conductivity = np.array([2e3, 1e5, 1e6, 1e8]), np.array([[1e-4], [0.02]])
    x = np.linspace(0.0, patterns.period, 1501)
    for height in (5e-6, 12e-6, 22e-6, 46e-6):
        at = Conditions(at_height(design, height), patterns, frequency, conductivity)
        factor = at.polarisation(bead)[..., None]

        def least(y, factor=factor):
            up = patterns.gradient_e2(x, np.full_like(x, y))[1]
            moving = patterns.travelling(x, np.full_like(x, y))[1]
            return (factor.real * up + factor.imag * moving).min(axis=-1)

        expected = at.force_scale(bead) * least(height)
        found = least_lift(at, bead, at.line)
        # a line has few places where the force draws down most sharply, near the edges
        np.testing.assert_allclose(found, expected, rtol=3e-2)
        falls, lifts = least(height + 1e-7) < least(height - 1e-7), least(height) > 0.0
        np.testing.assert_array_equal(steady_lift(at, bead) > 0.0, falls & lifts)
        seen |= set(zip(lifts.ravel().tolist(), falls.ravel().tolist(), strict=True))
    assert {(True, True), (True, False), (False, False)} <= seen


PLAN = "beads-at-an-opening"


@pytest.mark.parametrize("task", [LIFT, {"kind": "deflect", "working_height": "25 um"}])
def test_in_plan_nothing_is_lifted_or_deflected(demos, task):
    with pytest.raises(DesignError) as caught:
        with_task(demos[PLAN], {**task, "working_height": "25 um"})
    (error,) = caught.value.errors
    assert error.path == "task.kind"
    assert "needs a chip in cross-section" in error.problem


@pytest.mark.parametrize("role", ["collect", "watch"])
def test_separating_needs_somebody_to_let_pass(yeast, role):
    data = document(yeast)
    data["task"]["kind"] = "separate"
    data["particle"][1]["role"] = role
    with pytest.raises(DesignError) as caught:
        parse_design(data)
    (error,) = caught.value.errors
    assert error.path == "task.kind"
    assert "collect and another pass" in error.problem


@pytest.mark.parametrize("kind", TASKS)
def test_no_task_is_about_nobody(yeast, kind):
    data = document(yeast)
    data["task"] = {"kind": kind}
    data["particle"][0]["role"] = "watch"
    with pytest.raises(DesignError, match=r"particle\.0\.role"):
        parse_design(data)


def test_fields_of_another_task_are_told(yeast):
    data = document(yeast)
    data["task"]["kind"] = "lift"
    with pytest.raises(DesignError, match=r"task\.dielectrophoresis"):
        parse_design(data)


DEFLECT = {"kind": "deflect", "dielectrophoresis": "positive", "working_height": "13 um"}


@pytest.mark.parametrize(("angle", "share"), [("90 deg", 1.0), ("30 deg", 0.5), ("0 deg", 0.0)])
def test_deflecting_withstands_the_flow_across_the_bars(yeast, patterns, angle, share):
    hold = floor_of(evaluate(yeast, patterns), "hold")
    result = evaluate(with_task(yeast, {**DEFLECT, "angle": angle}), patterns)
    # force goes with V², drag with the part of the flow u·sin(angle)
    assert floor_of(result, "deflect") == pytest.approx(hold * share**0.5, rel=1e-12)


def test_speed_sideways(yeast, patterns):
    # A sphere 3.7622 radii up: drag held in shear 1.1671, moving along the wall 1.1738 of Stokes's,
    # Goldman, Cox, Brenner 1967, parts II and I, from memory. Sideways u·cos·sin of the angle.
    radius = yeast.particles[0].radius
    task = {**DEFLECT, "angle": "30 deg", "working_height": f"{3.7622 * radius * 1e6:.8g} um"}
    result = evaluate(with_task(yeast, task), patterns)
    found = result.design.task.sideways_speed(result.point, result.design.particles[0])
    height = result.design.task.working_height
    flow = result.point.flow_speed(height)
    expected = flow * 3**0.5 / 4 * 1.1671 / 1.1738
    assert found == pytest.approx(expected, rel=1e-3)
    assert "goes sideways at" in " ".join(result.design.task.statements(result.point))


SEPARATE = {"kind": "separate", "dielectrophoresis": "positive", "working_height": "13 um"}


def test_separating_is_holding_with_a_ceiling(yeast, patterns, vary):
    hold = evaluate(yeast, patterns)
    design = with_task(yeast, SEPARATE)
    result = evaluate(design, patterns)
    rows = {row.rule.law.subject: row for row in result.ledger if row.rule.id == "separate"}
    assert set(rows) == {"viable yeast", "dead yeast"}
    held, passing = rows["viable yeast"], rows["dead yeast"]
    assert held.bound_pp == pytest.approx(floor_of(hold, "hold") * PEAK_TO_PEAK)
    caught = hold.design.task.catch(hold.point, yeast.particles[1])
    assert passing.rule.law.sense == "most"
    assert passing.rule.label == "let pass"
    assert passing.bound_pp == pytest.approx(float(caught.bound()[0]) * PEAK_TO_PEAK)
    assert result.ceiling_pp == pytest.approx(passing.bound_pp)
    for factor, inside in ((0.999, True), (1.001, False)):
        volts = f"{passing.bound_pp * factor:.10g} V"
        moved = evaluate(vary(design, {"drive.voltage": volts}), patterns)
        # force at that voltage against the drag that the law allows
        force = abs(moved.particles[1].force)
        assert (force <= passing.allowed) == moved.inside == inside


def test_a_task_that_separates_needs_no_note_on_those_that_pass(yeast, patterns):
    assert "passes here" in check_text(evaluate(yeast, patterns))
    assert "passes here" not in check_text(evaluate(with_task(yeast, SEPARATE), patterns))


def test_at_rest_nothing_passes(yeast, patterns, vary):
    result = evaluate(vary(with_task(yeast, SEPARATE), {"flow.rate": "0 uL/min"}), patterns)
    assert not result.inside
    assert result.ceiling_pp == 0.0


@settings(max_examples=12, deadline=None)
@given(
    kind=st.sampled_from(["hold", "deflect", "separate"]),
    sign=st.sampled_from(["positive", "negative"]),
    rates=st.tuples(st.floats(0.01, 1e4), st.floats(0.01, 1e4)).map(sorted),
    frequency=st.floats(4.0, 8.0).map(lambda power: 10.0**power),
)
def test_more_flow_never_lowers_the_floor(yeast, patterns, kind, sign, rates, frequency):
    task = {"kind": kind, "dielectrophoresis": sign, "working_height": "13 um"}
    floors = []
    for rate in rates:
        design = with_task(
            yeast, task, drive__frequency=f"{frequency:.9g} Hz", flow__rate=f"{rate:.9g} uL/min"
        )
        floors.append(evaluate(design, patterns).floor_pp)
    assert floors[0] <= floors[1] * (1 + 1e-12)
