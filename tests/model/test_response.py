"""Modes of electrodes behind an interface: signs, limits, and few of them for many."""

import pickle

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from model.fields.assembly import space
from model.fields.electric import solve_potential
from model.fields.modes import combined, electrode_modes
from model.layouts.bars_under_plate import BarsUnderPlate
from model.layouts.coplanar_bars import CoplanarBars
from model.layouts.facing_bars import FacingBars

UM = 1e-6
SIZES = {
    "bar_width": 30 * UM,
    "gap": 50 * UM,
    "bar_count": 20,
    "channel_height": 60 * UM,
    "channel_width": 2e-3,
}
LAYOUTS = {
    "coplanar": CoplanarBars(**SIZES),
    "plate": BarsUnderPlate(**SIZES),
    "facing": FacingBars(**SIZES),
    "staggered": FacingBars(**SIZES, offset=40 * UM),
}
#: Blocked width of the electrodes in series, over that of one bar, per half pitch: a half bar
#: with half the voltage; a half bar and half a pitch of plate; two half bars.
WIDTHS = {
    "coplanar": 0.25 * 15,
    "plate": 1 / (1 / 15 + 1 / 40),
    "facing": 15 / 2,
    "staggered": 15 / 2,
}

KEPT = {}


def solved(name):
    """Energy without interface and all modes, each layout solved once."""
    if name not in KEPT:
        section = LAYOUTS[name].section()
        functions = space(section.liquid(), 8, 16, section.joined)
        potential = solve_potential(functions, section.potentials[0])
        modes = electrode_modes(potential, section.potentials[0], section.electrodes)
        KEPT[name] = potential.energy, modes, combined(modes)
    return KEPT[name]


def spread(phase, low=-12, high=1, count=90):
    """Lengths ℓ from far below every cell to far above the chip, all of one phase."""
    return np.geomspace(10.0**low, 10.0**high, count) * np.exp(1j * phase)


@pytest.mark.parametrize("name", LAYOUTS)
def test_without_interface_the_modes_carry_the_whole_energy(name):
    energy, modes, few = solved(name)
    for found in (modes, few):
        assert found.conductance == pytest.approx(energy, rel=1e-8)
        assert abs(found.share(np.array(1e-16)) - 1) < 1e-5


@pytest.mark.parametrize("name", LAYOUTS)
def test_blocked_electrodes_carry_what_their_width_carries(name):
    """Y → Y_interface × widths in series: the liquid is one potential for each electrode."""
    _, modes, few = solved(name)
    for found in (modes, few):
        assert found.capacity == pytest.approx(WIDTHS[name] * UM, rel=1e-7)
        length = 1e3
        through = found.conductance * found.share(np.array(length)) * length
        assert through == pytest.approx(WIDTHS[name] * UM, rel=1e-6)


@pytest.mark.parametrize("name", ["coplanar", "facing"])
def test_blocked_electrodes_keep_the_whole_voltage_everywhere(name):
    """Half the voltage on each side, one sign on each electrode."""
    _, modes, few = solved(name)
    for found in (modes, few):
        drop = found.drop(np.array([1e3]))[:, 0]
        lid = np.array(found.electrodes) == "lid-bar"
        np.testing.assert_allclose(drop, np.where(lid, -0.5, 0.5), atol=1e-7)


def test_the_wide_plate_takes_the_smaller_share():
    """Blocked, two capacitances in series: voltages go as the inverse of the widths."""
    found = solved("plate")[2]
    drop, names = found.drop(np.array([1e3]))[:, 0], np.array(found.electrodes)
    np.testing.assert_allclose(drop[names == "bar"], 40 / 55, atol=1e-6)
    np.testing.assert_allclose(drop[names == "plate"], -15 / 55, atol=1e-6)


@pytest.mark.parametrize("name", LAYOUTS)
@pytest.mark.parametrize("phase", [-np.pi / 2, -0.7, 0.0, 1.1, np.pi / 2])
def test_few_modes_for_all(name, phase):
    _, modes, few = solved(name)
    assert few.rates.size < 0.4 * modes.rates.size
    length = spread(phase)
    exact = modes.share(length)
    assert np.max(np.abs(few.share(length) / exact - 1)) < 1e-9
    whole = modes.drop(length)
    assert np.max(np.abs(few.drop(length) - whole)) < 1e-5


@given(st.sampled_from(sorted(LAYOUTS)), st.floats(-10, 0), st.floats(0, 1), st.floats(0, 1))
def test_chip_and_interface_stay_passive(name, size, liquid_phase, interface_phase):
    """Re Y ≥ 0 for any lossy liquid and interface, and less current than without either."""
    found = solved(name)[2]
    liquid = np.exp(0.5j * np.pi * liquid_phase)  # σ + jωε, scaled
    interface = np.exp(0.5j * np.pi * interface_phase) * 10.0**-size
    share = found.share(np.array(liquid / interface))
    through = liquid * share
    assert through.real >= -1e-12 * abs(through)
    assert through.imag >= -1e-12 * abs(through)  # nor does it become inductive
    assert abs(share) <= 1 + 1e-9
    assert abs(found.conductance * through) <= found.capacity * abs(interface) * (1 + 1e-9)


@given(st.sampled_from(sorted(LAYOUTS)), st.floats(-10, 0), st.floats(0.01, 3))
def test_a_poorer_interface_passes_less(name, size, more):
    found = solved(name)[2]
    less = found.share(np.array(10.0 ** (size + more)))
    assert less.real < found.share(np.array(10.0**size)).real


def test_reciprocity():
    """The matrix of the liquid between electrode unknowns is symmetric and none too much."""
    section = LAYOUTS["plate"].section()
    functions = space(section.liquid(), 4, 8, section.joined)
    potential = solve_potential(functions, section.potentials[0])
    kept = functions.on(*section.electrodes)
    matrix = potential.factor.schur(kept)
    drive = potential.solution[kept]
    assert drive @ matrix @ drive == pytest.approx(potential.energy, rel=1e-10)
    constant = functions.constant()[kept]
    assert np.abs(matrix @ constant).max() < 1e-8 * np.abs(matrix).max()
    other = np.sin(1e5 * np.arange(kept.size))
    # by the definition: the answer in the liquid to any voltages on the electrodes
    held = np.zeros(functions.size)
    held[kept] = other
    answer = potential.factor.solve(np.zeros(functions.size), held)
    current = potential.factor.system.apply(answer)[kept]
    np.testing.assert_allclose(matrix @ other, current, atol=1e-9 * np.abs(current).max())


def test_modes_are_kept_small_and_read_only():
    few = solved("plate")[2]
    again = pickle.loads(pickle.dumps(few))
    assert len(pickle.dumps(few)) < 200_000  # with what slips along electrodes are made of
    np.testing.assert_array_equal(again.rates, few.rates)
    with pytest.raises(ValueError, match="read-only"):
        again.rates[0] = 0.0
