"""What holds for any chip: every layout's checks on chips drawn at random, and more of them.

The lengths of the examples in ``test_layouts.py`` are each made up to three times longer or
shorter, which keeps the chips within what is built; extremes have tests of their own.
"""

from functools import partial
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import Phase, given, settings
from hypothesis import strategies as st
from pydantic import ValidationError

from model.bars import Bars, OpposedBars
from model.declare import Choice, Quantity, declarations
from model.fields.assembly import space, stiffness
from model.fields.condensed import CellSystem, factorise
from model.layouts import LAYOUTS
from model.layouts.facing_bars import FacingBars
from model.layouts.four_phase_bars import FourPhaseBars
from model.walls import MATERIALS, Wall
from tests.field_maps import SOLVED
from tests.model.plan_checks import check_mirrors, check_through_flow
from tests.model.test_layouts import (
    EXAMPLES,
    LENGTHS,
    Case,
    all_patterns,
    check_current,
    check_flow,
    check_heat,
    check_net_flow,
    check_scaling,
    check_symmetry,
    places,
)

#: Times as long or short as in the example at most.
STRETCH = 3.0
FACTORS = st.floats(-1, 1).map(lambda power: STRETCH**power)
#: Shares that flows may be off by. In low channels with wide bars, and far from poles, the mesh is
#: coarse along the flow: a level of refinement lowers UNEVEN tenfold. Around corners of 270° the
#: slopes are infinite, and so are sources beside them.
SOURCES, UNEVEN = 3e-2, 1e-2
EVERY = pytest.mark.parametrize("name", SOLVED)


def few(examples):
    """Settings for chips that take half a second or more each: a failing one is told as it is."""
    return settings(max_examples=examples, deadline=None, phases=[Phase.explicit, Phase.generate])


@st.composite
def walls(draw):
    return Wall(
        material=draw(st.sampled_from(sorted(MATERIALS))),
        thickness=100e-6 * draw(FACTORS),
        outside=draw(st.sampled_from(["held", "still-air"])),
    )


@st.composite
def arguments_of(draw, name):
    """Arguments of a chip of a layout."""
    arguments = dict(draw(st.sampled_from(EXAMPLES[name])))
    for key, declared in declarations(LAYOUTS[name]):
        if isinstance(declared, Choice):
            arguments[key] = draw(st.sampled_from(sorted(declared.options)))
        elif key in arguments and isinstance(declared, Quantity) and declared.unit in LENGTHS:
            arguments[key] *= draw(FACTORS)
    return arguments | {"floor": draw(walls()), "lid": draw(walls())}


def cases(name):
    """Strategy of chips of a layout to be checked; lengths that do not fit are drawn again."""

    def fits(arguments):
        try:
            LAYOUTS[name](**arguments)
        except ValidationError:
            return False
        return True

    return arguments_of(name).filter(fits).map(lambda found: Case(LAYOUTS[name], found))


@EVERY
def test_balances_and_symmetry_of_any_chip(name):
    """Current and heat in are current and heat out, flow has no sources, ports are reciprocal."""
    checks = [check_current, check_heat, partial(check_flow, sources_allowed=SOURCES), check_ports]
    if LAYOUTS[name].view == "plan":
        checks += [check_mirrors, partial(check_through_flow, uneven=UNEVEN)]
    else:
        checks += [check_symmetry, partial(check_net_flow, uneven=UNEVEN)]
    if issubclass(LAYOUTS[name], Bars):
        checks.append(check_current_of_a_bar)

    @few(2)
    @given(cases(name))
    def checked(case):
        for check in checks:
            check(case)

    checked()


def check_current_of_a_bar(case):
    """It is the same at any height below the lid, and with the voltages gives the power.

    Per pitch Σ U*·I = `cell_factor`; one bar has |U| = 1/2, with opposed electrodes there are two.
    """
    patterns, half = case.patterns, 0.5 * case.chip.pitch
    nodes, weights = np.polynomial.legendre.leggauss(60)
    share, weights = 0.5 * (nodes + 1), 0.5 * weights
    power = 1.0 if isinstance(case.chip, OpposedBars) else 0.5
    for top in np.array([0.2, 0.5]) * patterns.height:
        right, left = (patterns.electric_field(x, top * share)[0] for x in (half, -half))
        # a wide bar under a low lid has its field near the edges
        edge = 0.5 * case.chip.bar_width
        above = 0.0
        for low, high in pairwise([-half, -edge, 0.0, edge, half]):
            x = low + (high - low) * share
            above += (high - low) * patterns.electric_field(x, top)[1] @ weights
        current = above + top * (right - left) @ weights
        assert current == pytest.approx(patterns.cell_factor / power, rel=1e-4)


def check_ports(case):
    """Current into b for 1 V on a is that into a for 1 V on b; all together they add up to 0.

    The admittances of ports driven one by one give the power of all driven as they are. Planes
    that symmetry holds at 0 V are ports too.
    """
    section = case.section
    functions = space(section.liquid(), 8, 16, section.joined)
    system = CellSystem(stiffness(functions), functions.dofs, functions.inner, functions.size)
    power = 0.0
    for levels in section.potentials:
        admittance = admittances(functions, system, list(levels))
        largest = np.abs(admittance).max()
        np.testing.assert_allclose(admittance, admittance.T, atol=1e-9 * largest)
        assert np.abs(admittance.sum(axis=1)).max() < 1e-9 * largest
        voltages = np.array(list(levels.values()))
        power += voltages @ admittance @ voltages
    assert section.cells_per_gap * power == pytest.approx(case.patterns.cell_factor, rel=1e-9)


def admittances(functions, system, ports):
    """Currents [a, b] into each port b for 1 V on port a alone, over the conductivity."""
    factor = factorise(system, functions.on(*ports))
    own, taken = {}, np.arange(0)
    for port in ports:  # where two meet in a corner the first one holds it
        own[port] = np.setdiff1d(functions.on(port), taken)
        taken = np.union1d(taken, own[port])
    ones, currents = functions.constant(), []
    for driven in ports:
        held = np.zeros(functions.size)
        held[own[driven]] = ones[own[driven]]
        flows = ones * system.apply(factor.solve(np.zeros(functions.size), held))
        currents.append([flows[own[port]].sum() for port in ports])
    return np.array(currents)


@pytest.mark.parametrize(
    "name",
    [pytest.param(one, marks=pytest.mark.long) if one == "four-pole" else one for one in SOLVED],
)
def test_no_pattern_of_any_chip_depends_on_its_size(name):
    @few(1)
    @given(cases(name), st.floats(0.3, 3.0))
    def checked(case, factor):
        check_scaling(case, factor)

    checked()


def check_turned(one, other, place, signs):
    """All patterns of one chip are those of another at the turned `place`.

    `signs` are the factors of x and y components of the field, and those of all other vectors.
    """
    x, y = places(one, 60)
    here, there = all_patterns(one.patterns, x, y), all_patterns(other.patterns, *place(x, y))
    assert other.patterns.cell_factor == pytest.approx(one.patterns.cell_factor, rel=1e-6)
    assert other.patterns.peak_temperature == pytest.approx(one.patterns.peak_temperature, rel=1e-5)
    for number, (found, expected) in enumerate(zip(there, here, strict=True)):
        if found.ndim == 2:
            found = found * np.reshape(signs[0] if number == 0 else signs[1], (2, 1))
        np.testing.assert_allclose(found, expected, atol=3e-3 * np.abs(expected).max())


@few(1)
@given(cases("facing-bars"))
def test_facing_bars_upside_down(case):
    """Floor and lid change places, and the voltage its sign."""
    arguments, chip = case.arguments, case.chip
    turned = arguments | {
        "offset": (chip.pitch - chip.offset) % chip.pitch,
        "floor": chip.lid,
        "lid": chip.floor,
    }

    def place(x, y):
        return x - chip.offset, chip.height - y

    check_turned(case, Case(FacingBars, turned), place, ((-1, 1), (1, -1)))


@few(1)
@given(cases("four-phase-bars"))
def test_a_wave_that_runs_the_other_way_is_the_mirror_image(case):
    other = {"with-flow": "against-flow", "against-flow": "with-flow"}[case.chip.wave]
    mirrored = Case(FourPhaseBars, case.arguments | {"wave": other})
    check_turned(case, mirrored, lambda x, y: (-x, y), ((-1, 1), (-1, 1)))
