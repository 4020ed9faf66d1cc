"""Heat and electrothermal flow between electrodes against exact solutions.

Two coplanar electrodes that meet in a line: Ramos et al. 1998 (heat, read second-hand; body
force from memory and derived again), Castellanos et al. 2003 (the published 5·10⁻⁴, from
memory); the flow itself derived here. Isothermal electrodes of any shape: the relation of
Kohlrausch 1900. V is rms unless it says peak.
"""

import numpy as np
import pytest
from skfem import MeshQuad, MeshTri

from model.fields.assembly import space
from model.fields.cells import Cells
from model.fields.electric import solve_potential
from model.fields.flow import FlowSpace, solve_flow
from model.fields.heat import Cooling, conduction
from model.fields.piecewise import Piecewise
from model.layouts.coplanar_bars import CoplanarBars

OUTER = 3.0  # of the half ring; the inner radius is 1


def half_ring(kind, layers):
    """Half ring about the line where the electrodes meet, electrodes at θ = 0 and π.

    Radial lines are exact; the arcs are polygons, so errors fall with the square of the angle.
    """
    radii = np.geomspace(1.0, OUTER, layers + 1)
    angles = np.linspace(0.0, np.pi, 3 * layers + 1)
    mesh = MeshQuad.init_tensor(radii, angles)
    if kind == "triangles":
        mesh = MeshTri.init_tensor(radii, angles)
    r, theta = mesh.p
    middle = mesh.p[:, mesh.facets].mean(axis=1)
    flat = {
        "right": np.flatnonzero(middle[1] == 0.0),
        "left": np.flatnonzero(middle[1] == np.pi),
        "inner": np.flatnonzero(middle[0] == 1.0),
        "outer": np.flatnonzero(middle[0] == OUTER),
    }
    ring = type(mesh)(np.stack([r * np.cos(theta), r * np.sin(theta)]), mesh.t)
    assert np.array_equal(ring.facets, mesh.facets)
    return ring.with_boundaries(flat)


def polar(place):
    return np.hypot(*place), np.arctan2(place[1], place[0])


def flow_profile(theta):
    """Angular part of the exact flow: h = θ/2 − θ²/(2π) − (π/12)(1 − cos 2θ)."""
    return theta / 2 - theta**2 / (2 * np.pi) - np.pi / 12 * (1 - np.cos(2 * theta))


def exact_flow(place):
    """Flow of the unit forces: u_r = −h(θ)/(2π³r), in units of εσV⁴/(kη)."""
    r, theta = polar(place)
    speed = -flow_profile(theta) / (2 * np.pi**3 * r)
    return speed * np.stack([np.cos(theta), np.sin(theta)])


def solve_half_ring(kind, layers):
    """φ, Θ and the flow of both unit forces as functions, all three solves of the model."""
    mesh = half_ring(kind, layers)
    cells = Cells.of(mesh)
    potential = solve_potential(space(mesh, 4, 8), {"right": 0.5, "left": -0.5})
    field = potential.gradients()
    warm = space(mesh, 4, 8)
    heat = conduction(warm, np.ones(mesh.nelements), Cooling({"right": None, "left": None})).solve(
        np.einsum("ckq,ckq->kq", field, field)
    )
    slopes = warm.gradients(heat)
    forces = [
        np.einsum("ckq,ckq->kq", slopes, field) * field,
        np.einsum("ckq,ckq->kq", field, field) * slopes,
    ]
    pair = FlowSpace.on(mesh, 4, 8)
    flows = solve_flow(pair, forces, {}, {"inner": exact_flow, "outer": exact_flow})
    return (
        Piecewise.of(potential.space, potential.solution[None], cells),
        Piecewise.of(warm, heat[None], cells),
        Piecewise.of(pair.velocity, np.concatenate(flows), cells),
    )


def places(count=25):
    theta = np.linspace(0.05, np.pi - 0.05, count)
    r = np.linspace(1.2, 2.6, count)[:, None] * np.ones(count)
    return np.stack([r * np.cos(theta), r * np.sin(theta)]).reshape(2, -1)


@pytest.fixture(scope="module", params=["quadrilaterals", "triangles"])
def ring(request):
    return solve_half_ring(request.param, 8)


def test_potential_and_temperature_between_two_wedges(ring):
    """φ = V(1/2 − θ/π) and ΔT = (σV²/2k)(θ/π − θ²/π²), so Θ is 1/8 at most."""
    potential, heat, _ = ring
    spots = places()
    located = heat.cells.locate(spots)
    theta = polar(spots)[1] / np.pi
    np.testing.assert_allclose(potential.values(*located)[0], 0.5 - theta, atol=2e-4)
    np.testing.assert_allclose(heat.values(*located)[0], 0.5 * (theta - theta**2), atol=2e-4)
    every = np.arange(len(heat.cells.corners))
    assert float(heat.highest(every)[0]) == pytest.approx(1 / 8, rel=2e-3)


def test_flow_between_two_wedges(ring):
    """Both forces are one here, as ∇T is along E; the flow is radial."""
    flows = ring[2]
    spots = places()
    found = flows.values(*flows.cells.locate(spots))
    exact = exact_flow(spots)
    scale = np.abs(exact).max()
    np.testing.assert_allclose(found[:2], exact, atol=2e-5 * scale)
    np.testing.assert_allclose(found[2:], exact, atol=2e-5 * scale)


def test_half_ring_errors_fall_with_the_angle():
    spots = places()
    theta = polar(spots)[1] / np.pi
    errors = []
    for layers in (4, 8):
        _, heat, flows = solve_half_ring("quadrilaterals", layers)
        located = heat.cells.locate(spots)
        errors.append(
            (
                np.abs(heat.values(*located)[0] - 0.5 * (theta - theta**2)).max(),
                np.abs(flows.values(*located)[:2] - exact_flow(spots)).max(),
            )
        )
    order = np.log2(np.divide(errors[0], errors[1]))
    assert order[0] > 1.7
    assert order[1] > 4  # chords spoil the flow less: its speed is given along them


def test_speed_above_the_gap_per_rms_and_per_peak_voltage():
    """At 90° 1/(48π²) per V_rms⁴; the published 5·10⁻⁴ is 1/(192π²) per V_peak⁴."""
    above = -exact_flow(np.array([0.0, 1.0]))[1]  # downward for M > 0, which is −[…] below 0
    assert -above == pytest.approx(1 / (48 * np.pi**2), rel=1e-12)
    assert -above == pytest.approx(2.11086e-3, rel=1e-5)
    assert -above / np.sqrt(2) ** 4 == pytest.approx(5.2771e-4, rel=1e-4)
    theta = np.linspace(0, np.pi, 200001)
    assert flow_profile(theta).max() / (2 * np.pi**3) == pytest.approx(1.53416e-3, rel=1e-5)
    angle = np.degrees(theta[flow_profile(theta).argmax()])
    assert min(angle, 180 - angle) == pytest.approx(22.76, abs=0.01)


def factor(alpha, beta, along):
    """The bracket of the scaling, where U₁ = U₂, at ωε/σ = `along`."""
    return (alpha - beta) / (1 + along**2) - alpha / 2


@pytest.mark.parametrize(
    ("along", "expected"), [(0.0, 6.600), (1.0, 3.000), (np.inf, -0.600), (3.31662, 0.0)]
)
def test_factor_of_frequency(along, expected):
    """M = T(β − α)/(1 + (ωτ)²) + Tα/2, T = 300 K, β = 2 %/K, α = −0.4 %/K; from memory.

    The scaling of the patterns holds −M/T, so that a positive M turns the flow round.
    """
    assert -300 * factor(-0.004, 0.02, along) == pytest.approx(expected, abs=1e-5)


@pytest.mark.parametrize(
    ("conductivity", "nanoseconds"),
    [(1e-3, 694.24), (0.01, 69.424), (0.1, 6.9424), (1.0, 0.69424), (1.6, 0.43390)],
)
def test_charge_relaxation_time(conductivity, nanoseconds):
    """ε/σ of water at 25 °C (relative permittivity 78.4085), where the flow turns round."""
    found = 78.4085 * 8.8541878128e-12 / conductivity
    assert found * 1e9 == pytest.approx(nanoseconds, rel=1e-4)


def test_speed_of_an_example():
    """20 V peak to peak, 10 mS/m, 20 µm from the gap: 75.114 µm/s down, 54.593 µm/s outward."""
    volts = 20 / (2 * np.sqrt(2))
    permittivity = 78.4 * 8.8541878128e-12
    scale = permittivity * 0.01 * volts**4 / (0.6065 * 0.89e-3) * (-6.6 / 298.15)
    down = scale * exact_flow(np.array([0.0, 20e-6]))[1]
    assert down * 1e6 == pytest.approx(-75.114, rel=1e-4)
    angle = np.radians(22.76)
    outward = scale * np.hypot(*exact_flow(20e-6 * np.array([np.cos(angle), np.sin(angle)])))
    assert abs(outward) * 1e6 == pytest.approx(54.593, rel=1e-4)


@pytest.mark.parametrize(
    ("peak_to_peak", "conductivity", "kelvin"),
    [(20, 0.01, 0.104167), (10, 0.1, 0.260417), (20, 1.0, 10.4167), (10, 1.6, 4.16667)],
)
def test_rise_between_isothermal_electrodes(peak_to_peak, conductivity, kelvin):
    """σV_rms²/(8k), k = 0.6 W/(m K): 20 V peak to peak at 10 mS/m give 0.1 K."""
    rms = peak_to_peak / (2 * np.sqrt(2))
    assert conductivity * rms**2 / 0.6 / 8 == pytest.approx(kelvin, rel=1e-5)


@pytest.mark.parametrize("kind", ["quadrilaterals", "triangles"])
def test_isothermal_bars_heat_the_liquid_by_an_eighth(kind):
    """Θ = (1/4 − φ²)/2 with ideal heat sinks as electrodes and insulating walls, any shape."""
    chip = CoplanarBars(
        bar_width=30e-6, gap=50e-6, channel_height=60e-6, channel_width=2e-3, bar_count=20
    )
    section = chip.section()
    mesh = section.liquid()
    if kind == "triangles":
        mesh = mesh.to_meshtri()
    functions = space(mesh, 7, 14)
    potential = solve_potential(functions, section.potentials[0])
    field = potential.gradients()
    heat = conduction(functions, np.full(mesh.nelements, 0.6), Cooling({"bar": None})).solve(
        0.6 * np.einsum("ckq,ckq->kq", field, field)
    )
    cells = Cells.of(mesh)
    both = Piecewise.of(functions, np.stack([potential.solution, heat]), cells)
    assert float(both.highest(np.arange(mesh.nelements))[1]) == pytest.approx(1 / 8, rel=2e-4)
    x, y = np.meshgrid(np.linspace(0, 40e-6, 17), np.linspace(0, 60e-6, 17))
    level, warm = both.values(*cells.locate(np.stack([x.ravel(), y.ravel()])))
    np.testing.assert_allclose(warm, 0.5 * (0.25 - level**2), atol=3e-5)
