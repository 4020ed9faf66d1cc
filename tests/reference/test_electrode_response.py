"""Electrodes behind an interface against series circuits and a plain mesh solve."""

from itertools import pairwise

import numpy as np
import pytest
from scipy.interpolate import PchipInterpolator
from skfem import Basis, BilinearForm, ElementTriP2, FacetBasis, LinearForm, MeshTri, solve
from skfem.helpers import dot, grad

from model.cautions import rms_and_peak
from model.design import Drive
from model.fields.assembly import space
from model.fields.electric import solve_potential
from model.fields.layered import Channel, Span, layered
from model.fields.modes import combined, electrode_modes
from model.generator import displayed
from model.layouts.bars_under_plate import BarsUnderPlate
from model.layouts.coplanar_bars import CoplanarBars
from model.walls import Wall

UM = 1e-6
GLASS = Wall(material="glass", thickness=700e-6, outside="held")


def modes_of(mesh, potentials, electrodes):
    """Few modes of a mesh of liquid."""
    potential = solve_potential(space(mesh, 8, 16), potentials)
    return combined(electrode_modes(potential, potentials, electrodes))


def test_parallel_plates_are_a_series_circuit():
    """Whole faces as electrodes: 1/Y = h/(σ + jωε) + 2/Y_interface per area, exactly."""
    height, width = 30 * UM, 20 * UM
    spans = (Span("low", 0.0, width), Span("high", 0.0, width, on_lid=True))
    piece = layered(Channel((0.0, width), height, 40 * UM, spans, GLASS, GLASS))
    mesh = piece.mesh.restrict("liquid")
    found = modes_of(mesh, {"low": 0.5, "high": -0.5}, ("low", "high"))
    frequency = np.geomspace(1.0, 1e9, 40)
    omega = 2 * np.pi * frequency
    liquid = 0.02 + 1j * omega * 78.4 * 8.854e-12
    for interface in (1j * omega * 0.07, 0.5 * (1j * omega) ** 0.8, 3.0 + 1j * omega * 1e-3):
        exact = width / (height / liquid + 2 / interface)
        length = liquid / interface
        admittance = liquid * found.conductance * found.share(length)
        np.testing.assert_allclose(admittance, exact, rtol=1e-9)
        drop = exact / width / interface
        names = np.array(found.electrodes)
        for name, sign in (("low", 1), ("high", -1)):
            level = found.drop(length)[names == name]
            np.testing.assert_allclose(level, sign * np.broadcast_to(drop, level.shape), rtol=1e-8)


def lines(stops, edges, first, most):
    """Grid lines that crowd toward edges, of a make of its own: cells double."""
    found = []
    for start, end in pairwise(stops):
        size = end - start
        steps = [0.0]
        step = first
        while steps[-1] + step < 0.5 * size:
            steps.append(steps[-1] + step)
            step = min(2 * step, most)
        half = np.array(steps)
        near, far = start in edges, end in edges
        both = np.concatenate([start + half, end - half[::-1]])
        if not near:
            both = np.concatenate([np.linspace(start, start + half[-1], 12), end - half[::-1]])
        if not far:
            both = np.concatenate([start + half, np.linspace(end - half[-1], end, 12)])
        found.append(both)
    return np.unique(np.concatenate(found).round(12))


def plain_solve(width, gap, height, plate, length):
    """Current over σ̃ for 1 V and the voltages V − φ on the bar, by scikit-fem as it comes.

    Quadratic elements on a tensor grid of half a pitch in µm, Robin sides on the electrodes.
    """
    half = 0.5 * (width + gap)
    x = lines([0, 0.5 * width, half], {0.5 * width}, 1e-4, 1.0)
    y = lines([0, height], {0}, 1e-4, 3.0)
    mesh = MeshTri.init_tensor(x, y)
    mesh = mesh.with_boundaries(
        {
            "bar": lambda p: (p[1] == 0) & (p[0] < 0.5 * width),
            "plate": lambda p: p[1] == height,
            "middle": lambda p: p[0] == half,
        }
    )
    inside = Basis(mesh, ElementTriP2())
    system = BilinearForm(lambda u, v, w: dot(grad(u), grad(v))).assemble(inside).astype(complex)
    right = np.zeros(inside.N, dtype=complex)
    sides = {"bar": 0.5, "plate": -0.5} if plate else {"bar": 0.5}
    bases = {name: FacetBasis(mesh, ElementTriP2(), facets=name) for name in sides}
    loads = {}
    for name, level in sides.items():
        mass = BilinearForm(lambda u, v, w: u * v).assemble(bases[name])
        loads[name] = LinearForm(lambda v, w: 1.0 * v).assemble(bases[name])
        system = system + mass / length
        right = right + level * loads[name] / length
    if plate:
        potential = solve(system, right)
    else:
        fixed = inside.get_dofs("middle").all()
        kept = np.setdiff1d(np.arange(inside.N), fixed)
        potential = np.zeros(inside.N, dtype=complex)
        potential[kept] = solve(system[kept][:, kept], right[kept])
    bar = inside.get_dofs("bar").all("u")
    return inside, potential, sides, loads, bar


@pytest.mark.parametrize("plate", [False, True])
@pytest.mark.parametrize("length", [0.3, 8.0, -2j, 10 - 10j])
def test_bars_against_a_direct_solve(plate, length):
    """Admittance and voltages along the bar at a few lengths ℓ = σ̃/Y, in µm."""
    width, gap, height = 30.0, 50.0, 40.0
    inside, potential, sides, loads, bar = plain_solve(width, gap, height, plate, length)
    current = sum(
        level * (level * loads[name].sum() - loads[name] @ potential) / length
        for name, level in sides.items()
    )
    kind = BarsUnderPlate if plate else CoplanarBars
    chip = kind(
        bar_width=width * UM,
        gap=gap * UM,
        bar_count=20,
        channel_height=height * UM,
        channel_width=2e-3,
    )
    section = chip.section()
    found = modes_of(section.liquid(), section.potentials[0], section.electrodes)
    share = found.share(np.array(length * UM))
    assert abs(found.conductance * share / current - 1) < 3e-5
    on_bar = np.array(found.electrodes) == "bar"
    place = found.places[0, on_bar] / UM
    drop = found.drop(np.array([length * UM]))[on_bar, 0]
    spots = inside.doflocs[0, bar]
    order = np.argsort(spots)
    level = 0.5 - potential[bar][order]
    expected = PchipInterpolator(spots[order], level.real)(place)
    expected = expected + 1j * PchipInterpolator(spots[order], level.imag)(place)
    assert np.max(np.abs(drop - expected)) < 2e-3 * np.abs(expected).max()


#: Load behind 50 Ω: its share of the open-circuit voltage, and its voltage over a display that
#: means 50 Ω; voltage dividers, exact.
LOADS = [
    (1 / 50.0, 0.5, 1.0),
    (1 / 100.0, 0.666667, 1.33333),
    (1 / 1e3, 0.952381, 1.90476),
    (1 / 1e4, 0.995025, 1.99005),
    (2j * np.pi * 10e6 * 100e-12, 0.954028, 2 * 0.954028),
    (2j * np.pi * 10e6 * 300e-12, 0.727727, 2 * 0.727727),
]


@pytest.mark.parametrize(("admittance", "of_open", "of_matched"), LOADS)
def test_what_a_display_means(admittance, of_open, of_matched):
    drive = {"voltage": 1.0, "frequency": 1e6, "source_resistance": 50.0}
    for setting, expected in (("open-circuit", of_open), ("into-50-ohm", of_matched)):
        found = displayed(Drive(**drive, generator_setting=setting), admittance)
        assert 1 / found == pytest.approx(expected, rel=5e-6)


def test_a_sine_of_20_volts_peak_to_peak():
    """10 V peak, 7.0710678 V rms, exact."""
    assert rms_and_peak(20.0) == "7.07 V rms, 10 V peak"
