"""AC electro-osmosis between two wide electrodes with next to no gap.

Tube model: Ramos et al. 1999 JCIS 217:420, Green et al. 2002, from memory and derived anew: the
current at x runs along a half circle, so that the double layers at ±x stand in series with a
resistance πx/σ per area. Full linear theory: the potential problem with charging electrodes, as in
González et al. 2000 PRE 61:4019 (not seen), its numbers from a boundary-integral and a log-polar
finite-element solve made apart from this project.
"""

import numpy as np
import pytest
from scipy.interpolate import CubicSpline

from model.conditions import Conditions
from model.fields.assembly import space
from model.fields.electric import solve_potential
from model.fields.layered import Channel, Span, layered
from model.fields.modes import combined, electrode_modes
from model.fields.response import ElectrodeResponse
from model.liquid.electrolyte import simple_salt
from model.walls import Wall

GLASS = Wall(material="glass", thickness=0.02, outside="held")
#: Half gap, and bar and height above all lengths of interest, in any unit.
HALF_GAP, WIDE = 1e-6, 1.0


@pytest.fixture(scope="module")
def response():
    channel = Channel(
        ends=(0.0, WIDE),
        height=WIDE,
        pitch=2 * WIDE,
        spans=(Span("bar", HALF_GAP, WIDE),),
        floor=GLASS,
        lid=GLASS,
    )
    mesh = layered(channel).mesh.restrict("liquid")
    held = {"bar": 0.5, "left": 0.0}
    modes = electrode_modes(solve_potential(space(mesh, 8, 16), held), held, ("bar",))
    return ElectrodeResponse.of((combined(modes, 48),))


def slip(response, x, nondimensional):
    """Speed times ηx/(ε V_peak²) at x, Ω = ωCπx/(2σ), so that ℓ = σ/(jωC) = πx/(2jΩ)."""
    trace = response.components[0].trace
    length = np.pi * x / (2j * np.asarray(nondimensional))
    found = response.slips(length)[0]
    order = np.argsort(trace.places[0])
    here = CubicSpline(np.log(trace.places[0, order]), found[order])(np.log(x))
    return 0.5 * x * here  # V_rms² = V_peak²/2


def tube(nondimensional):
    square = np.asarray(nondimensional) ** 2
    return square / (8 * (1 + square) ** 2)


@pytest.mark.parametrize("x", [1e-4, 1e-3])
def test_peak_of_the_full_linear_theory(response, x):
    nondimensional = np.geomspace(0.5, 3, 181)
    found = slip(response, x, nondimensional)
    assert found.max() == pytest.approx(0.019078, rel=3e-3)
    assert nondimensional[found.argmax()] == pytest.approx(1.19, abs=0.02)


def test_spectrum_of_the_full_linear_theory(response):
    found = slip(response, 1e-3, [0.1, 0.3, 1, 3, 10])  # expected to the digits shown
    np.testing.assert_allclose(
        found, [0.00558, 0.01194, 0.01888, 0.0132, 0.00161], rtol=3e-3, atol=5e-6
    )


def test_tube_model_overstates_the_peak_by_64_percent(response):
    """ε V²/(32 ηx) at Ω = 1; both agree within a factor of two from Ω = 0.3 to 10."""
    nondimensional = np.geomspace(0.05, 20, 400)
    model = tube(nondimensional)
    assert model.max() == pytest.approx(1 / 32, rel=1e-4)
    exact = slip(response, 1e-3, nondimensional)
    assert model.max() / exact.max() == pytest.approx(1.64, abs=0.01)


def test_numbers_of_the_tube_model():
    """1 V peak, x = 20 µm, 2 mS/m, D = 2·10⁻⁹ m²/s, no Stern layer: exact within the model."""
    permittivity, viscosity, x, conductivity = 78.4 * 8.8541878e-12, 0.89e-3, 20e-6, 2e-3
    length = simple_salt(conductivity).debye_length(permittivity)
    assert length == pytest.approx(26.35e-9, rel=1e-3)
    peak = 2 * conductivity / (np.pi * x * permittivity / length) / (2 * np.pi)
    assert peak == pytest.approx(384.6, rel=1e-3)
    assert permittivity / (32 * viscosity * x) == pytest.approx(1.2187e-3, rel=1e-3)


def wave(k, height, y):
    """Profile g′ and −kg of a flow g′ sin kx, −kg cos kx that slips by sin kx on the floor.

    Stokes: g is (a + by) times exp(∓ky); at rest on the lid.
    """

    def parts(at):
        down, up = np.exp(-k * at), np.exp(-k * (height - at))
        value = np.array([down, at * down, up, (height - at) * up])
        slope = np.array([-k * down, (1 - k * at) * down, k * up, (k * (height - at) - 1) * up])
        return value, slope

    (low, low_slope), (high, high_slope) = parts(0.0), parts(height)
    factors = np.linalg.solve(np.array([low, high, low_slope, high_slope]), [0, 0, 1, 0])
    value, slope = parts(y)
    return factors @ slope, -k * (factors @ value)


@pytest.mark.parametrize("length", [-1e-7j, -2e-6j, (3 - 5j) * 1e-6, -1e-4j])
@pytest.mark.parametrize("height", [5e-6, 13e-6, 50e-6])
def test_flow_over_bars_against_a_fourier_series(yeast, patterns, length, height):
    """Slip on bars, rest between them and on the lid: the sum of exact Stokes waves."""
    response, pitch, top = patterns.response, yeast.chip.pitch, yeast.chip.height
    trace = response.components[0].trace
    slip = response.slips(np.array([length]))[0][:, 0]
    table = patterns.table
    (found,) = patterns.slips
    amounts = found.amounts(response, np.array([length]))[:, 0]
    flow = np.tensordot(amounts, found.line(height), axes=1)
    expected = np.zeros((2, table.x.size))
    for n in range(1, 160):
        k = 2 * np.pi * n / pitch
        part = 4 / pitch * (trace.weights * slip) @ np.sin(k * trace.places[0])
        along, up = wave(k, top, height)
        expected += part * np.stack([along * np.sin(k * table.x), up * np.cos(k * table.x)])
    size = np.abs(expected).max()
    assert np.abs(flow - expected).max() < 1e-2 * size


def test_a_few_places_tell_as_much_as_all(patterns):
    """The forms fitted at all places, as they are orthonormal there, give the same speeds."""
    response, forms = patterns.response, patterns.slips[0].forms
    rates = response.components[0].rates
    sizes = np.geomspace(1e-2 / rates.max(), 1e2 / rates.min(), 90)
    length = (sizes[:, None] * np.exp(-0.5j * np.pi * np.array([0.0, 0.5, 1.0]))).ravel()
    line = patterns.slips[0].line(13e-6)
    everywhere = (forms.slips * forms.weights) @ response.slips(length)[0]
    few = patterns.slips[0].amounts(response, length)
    fastest = [
        np.linalg.norm(np.tensordot(line, amounts, axes=(0, 0)), axis=0).max(axis=0)
        for amounts in (everywhere, few)
    ]
    assert np.abs(fastest[0] - fastest[1]).max() < 5e-4 * fastest[0].max()


def test_speed_of_a_design_peaks_where_the_layers_charge(yeast, patterns):
    """Slowly the layers screen the field, fast they have no time to charge."""
    frequency = np.geomspace(1, 1e8, 161)
    at = Conditions(yeast, patterns, frequency, np.array(yeast.liquid.conductivity))
    speed = at.electro_osmotic_speed
    best = int(speed.argmax())
    assert speed[0] < 1e-3 * speed[best]
    assert speed[-1] < 1e-2 * speed[best]
    assert np.all(np.diff(speed[: best - 1]) > 0)
    assert np.all(np.diff(speed[best + 1 :]) < 0)
    share = abs(at.share[best])
    assert 0.3 < share < 0.95
    assert np.all(at.largest_slip > speed)
