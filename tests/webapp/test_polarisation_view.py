"""The polarisation view: spectra, marks, crossover map, spinning, drift, table and its files."""

import csv
import io
import json

import numpy as np
import plotly.graph_objects as go
import pytest
from scipy.constants import epsilon_0

from model.crossover_curves import HIGHEST, LOWEST, crossover_curves
from model.evaluate import evaluate
from model.profile import document
from model.rotation import chip_rotation_rate, rotating_amplitude
from model.voltage import PEAK_TO_PEAK
from tests.webapp.test_figures import unpacked
from tests.webapp.test_section import turned
from webapp.figures.behaviour import crossover_map
from webapp.figures.branches import closed_branches
from webapp.figures.curves import span
from webapp.figures.theme import THEMES
from webapp.views.polarisation import polarisation_part

LIGHT = THEMES["light"]
#: A bead whose surface is told by a conductance, so that K has a closed form.
BEAD = {
    "name": "bead", "kind": "solid-sphere", "role": "collect", "radius": "1 um",
    "relative_permittivity": 2.55, "conductivity": "0 S/m", "surface_conductance": "2 nS",
}  # fmt: skip
ROD = {
    "name": "rod", "kind": "ellipsoid", "role": "watch", "semi_axes": ["2 um", "0.5 um", "0.5 um"],
    "radius_cv": 0.1, "membrane_cv": 0.2,
    "core": {"relative_permittivity": 60, "conductivity": "0.3 S/m"},
    "layers": [{"capacitance": "10 mF/m^2", "conductance": "0 S/m^2"}],
}  # fmt: skip


def part_of(design, solved, theme=LIGHT):
    return polarisation_part(evaluate(design, solved(design), points=60), theme)


def trace_of(part, figure, name):
    return next(trace for trace in part["figures"][figure]["data"] if trace["name"] == name)


@pytest.fixture
def part(yeast, solved):
    return part_of(yeast, solved)


@pytest.fixture
def bead(yeast, vary):
    """A design with one bead in 2 mS/m, of which K and its crossover have closed forms."""
    return vary(yeast, {"particle": [BEAD], "liquid.conductivity": "2 mS/m"})


@pytest.fixture
def with_rod(yeast, vary):
    """Viable yeast and a rod that turns into the field."""
    return vary(yeast, {"particle": [document(yeast)["particle"][0], ROD]})


@pytest.fixture
def crossover(bead):
    """Crossover of a homogeneous sphere, in Hz, at the conductivity of its medium.

    f = √[(σp − σm)(σp + 2σm)/((εm − εp)(εp + 2εm))]/2π with σp = 2K_s/a:
    T. B. Jones, Electromechanics of Particles (1995), chapter 3; O'Konski 1960 J. Phys. Chem.
    64:605 for the conductivity of the sphere.
    """
    own, inside, outside = 2.0 * 2e-9 / 1e-6, 2.55 * epsilon_0, bead.liquid.state.permittivity

    def frequency(medium):
        square = (own - medium) * (own + 2.0 * medium)
        return np.sqrt(square / ((outside - inside) * (inside + 2.0 * outside))) / (2.0 * np.pi)

    return frequency


@pytest.mark.parametrize("theme", THEMES)
@pytest.mark.parametrize("layout", ["coplanar-bars", "four-phase-bars", "four-pole"])
def test_figures_are_valid_for_all_kinds_of_fields(with_rod, solved, theme, layout):
    design = turned(with_rod, layout)
    part = part_of(design, solved, THEMES[theme])
    assert part["figures"].keys() == part["sentences"].keys()
    assert ("travel" in part["figures"]) == (layout == "four-phase-bars")
    assert json.dumps(part, allow_nan=False)
    for figure in part["figures"].values():
        assert go.Figure(figure).data
    for words in part["sentences"].values():
        assert words.endswith(".")
        assert not {"nan", "inf", "None"} & set(words.split())


def test_marks_stand_at_the_crossovers(bead, crossover, solved):
    part = part_of(bead, solved)
    falls, rises = (trace_of(part, "real-part", name) for name in ("falls", "rises"))
    first = unpacked(falls["x"])[0]
    assert first == pytest.approx(crossover(0.002), rel=1e-5)
    assert falls["text"][0].startswith("bead: ")
    assert falls["text"][0].endswith("Hz, falls")
    assert not any(rises["text"])
    right = 10.0 ** part["figures"]["real-part"]["layout"]["xaxis"]["range"][1]
    assert (unpacked(rises["x"]) > right).all()  # unused ones wait beyond the axis


def test_the_curves_are_those_of_a_sphere(bead, solved):
    """K = (ε̃p − ε̃m)/(ε̃p + 2ε̃m): Jones 1995, chapter 2."""
    part = part_of(bead, solved)
    real, imaginary = (trace_of(part, name, "bead") for name in ("real-part", "imaginary-part"))
    omega = 2.0 * np.pi * unpacked(real["x"]).astype(float)
    inside = 2.55 * epsilon_0 - 4e-3j / omega
    outside = bead.liquid.state.permittivity - 2e-3j / omega
    expected = (inside - outside) / (inside + 2.0 * outside)
    np.testing.assert_allclose(unpacked(real["y"]), expected.real, atol=1e-5)
    np.testing.assert_allclose(unpacked(imaginary["y"]), expected.imag, atol=1e-5)


def test_knobs_change_only_numbers_so_that_figures_can_be_sketched(yeast, solved, vary):
    def shape(part):
        return {
            name: (
                figure["layout"],
                [
                    (trace["name"], trace.get("marker"), unpacked(trace["x"]).size)
                    for trace in figure["data"]
                ],
            )
            for name, figure in part["figures"].items()
        }

    before = shape(part_of(yeast, solved))
    moves = {
        "drive.frequency": "1.1 MHz",
        "drive.voltage": "11 V",
        "liquid.conductivity": "21 mS/m",
    }
    for path, value in moves.items():
        assert shape(part_of(vary(yeast, {path: value}), solved)) == before, path


def test_the_map_moves_nothing_but_its_ring(yeast, solved, vary, part):
    changes = {
        "liquid.conductivity": "50 mS/m",
        "drive.frequency": "300 kHz",
        "drive.voltage": "2 V",
    }
    moved = part_of(vary(yeast, changes), solved)
    before, after = (found["figures"]["crossover-map"] for found in (part, moved))
    assert before["layout"] == after["layout"]
    assert before["data"][:-1] == after["data"][:-1]
    ring = after["data"][-1]
    assert (ring["x"], ring["y"]) == ([0.05], [300e3])


def test_the_map_of_a_mixed_liquid_has_its_own_permittivity(demos, vary):
    """A buffer kept at one osmolality holds the less sugar the more salt makes it conduct."""
    design = demos["tumour-cells-sugar-buffer"]
    particle = design.particles[0]
    for text in ("10 mS/m", "0.1 S/m"):
        liquid = vary(design, {"liquid.conductivity": text}).liquid
        falling = crossover_map(particle, liquid).curves[1].frequency[0]
        weak = liquid.medium(2.0 * np.pi * np.array([0.99, 1.01]) * falling, np.array(1e-4))
        factor = particle.polarisation(weak).real
        assert factor[0] > 0.0 > factor[1], text


def test_the_map_follows_the_crossover_of_a_sphere(bead, crossover, solved):
    line = trace_of(part_of(bead, solved), "crossover-map", "bead falls")
    x, y = (unpacked(line[key]).astype(float) for key in ("x", "y"))
    inner = (x < 3.5e-3) & np.isfinite(y)  # a step before it is 4 mS/m and leaves the band
    assert inner.sum() > 20
    np.testing.assert_allclose(y[inner], crossover(x[inner]), rtol=5e-3)


def test_branches_close_where_re_k_is_zero(yeast):
    """Between two conductivities the bend goes on along zeros of Re K, and so do ends."""
    particle, liquid = yeast.particles[0], yeast.liquid
    coarse = np.geomspace(1e-4, 3.0, 60)
    curves = crossover_curves(particle, liquid, coarse)
    rising, falling = closed_branches(coarse, *(curve.frequency for curve in curves))
    new = rising[:, coarse.size :]
    new = new[:, np.isfinite(new[0]) & (new[1] > LOWEST * 1.01) & (new[1] < HIGHEST * 0.99)]
    assert new.shape[1] >= 9
    omega = 2.0 * np.pi * new[1][:, np.newaxis]
    factor = particle.polarisation(liquid.medium(omega, new[0][:, np.newaxis]))
    assert np.abs(factor.real).max() < 0.02  # of a step of Re K of one
    assert falling[1, : coarse.size] == pytest.approx(curves[1].frequency, rel=1e-9, nan_ok=True)


def test_the_shade_lies_around_the_branch(yeast, solved, vary):
    part = part_of(vary(yeast, {"particle.0.radius_cv": 0.2}), solved)
    x, y = (
        unpacked(trace_of(part, "crossover-map", "spread of viable yeast")[key]) for key in "xy"
    )
    line = trace_of(part, "crossover-map", "viable yeast")
    at, middle = (unpacked(line[key])[:70].astype(float) for key in "xy")
    place = int(np.argmin(np.abs(at - 0.02)))
    beside = y[np.isclose(x, at[place])]
    assert beside.min() < middle[place] < beside.max()
    # Membranes charge at a rate that goes with 1/a, so that ±20 % of size are some ∓20 % of it.
    assert np.sort(beside)[:2].max() / beside.min() == pytest.approx(1.5, rel=0.1)


def test_without_spread_there_is_no_shade(yeast, solved, vary):
    bare = vary(yeast, {"particle.0.radius_cv": 0, "particle.1.radius_cv": 0})
    part = part_of(bare, solved)
    assert not np.isfinite(
        unpacked(trace_of(part, "crossover-map", "spread of dead yeast")["x"])
    ).any()
    assert "No particle has a spread" in part["sentences"]["crossover-map"]


def test_the_range_of_conductivities_rests_and_holds_the_design(yeast, vary):
    particle = yeast.particles[0]
    usual, higher, lower = (
        crossover_map(particle, vary(yeast, {"liquid.conductivity": text}).liquid).conductivity
        for text in ("0.2 S/m", "9 S/m", "0.05 mS/m")
    )
    assert (usual[0], usual[-1]) == pytest.approx((1e-4, 3.0))
    assert higher[-1] >= 9.0
    assert lower[0] <= 5e-5


def test_spinning_where_the_field_does_not_rotate_is_told_at_a_reference(bead, solved):
    """Ω = −½(ε/η)·Im K·E²: Arnold and Zimmermann 1988 J. Electrostatics 21:151."""
    part = part_of(bead, solved)
    figure = part["figures"]["rotation"]
    assert figure["layout"]["yaxis"]["title"]["text"] == "Spinning, at 10 kV/m (rad/s)"
    curve, loss = (trace_of(part, name, "bead") for name in ("rotation", "imaginary-part"))
    state = bead.liquid.state
    scale = 0.5 * state.permittivity / state.viscosity * 1e4**2
    expected = -scale * unpacked(loss["y"])
    np.testing.assert_allclose(unpacked(curve["y"]), expected, rtol=1e-4, atol=1e-3)
    assert "does not rotate" in part["sentences"]["rotation"]


@pytest.mark.parametrize("layout", ["four-phase-bars", "four-pole"])
def test_spinning_in_the_chips_own_field(yeast, solved, vary, layout):
    design = turned(yeast, layout)
    if layout == "four-pole":
        design = vary(design, {"chip.drive": "quadrature"})
    result = evaluate(design, solved(design), points=30)
    part = polarisation_part(result, LIGHT)
    assert "chip's field" in part["figures"]["rotation"]["layout"]["yaxis"]["title"]["text"]
    assert part["sentences"]["rotation"].startswith("The chip's rotating field")
    half = vary(design, {"drive.duty": 0.5})
    rates = [
        chip_rotation_rate(evaluate(one, solved(one), points=30).point, one.particles[0])
        for one in (design, half)
    ]
    assert rates[0] == pytest.approx(2.0 * rates[1])
    field = rotating_amplitude(result.point) * abs(result.share)
    state, factor = design.liquid.state, result.point.polarisation(design.particles[0])
    expected = -0.5 * state.permittivity / state.viscosity * factor.imag * field**2
    assert rates[0] == pytest.approx(expected, rel=1e-9)


def test_drift_follows_im_k_and_the_square_of_the_voltage(yeast, solved, vary):
    design = turned(yeast, "four-phase-bars")
    doubled = vary(design, {"drive.voltage": "20 V"})
    speeds = []
    for one in (design, doubled):
        part = part_of(one, solved)
        title = part["figures"]["travel"]["layout"]["yaxis"]["title"]["text"]
        size = {"nm/s": 1e-9, "µm/s": 1e-6, "mm/s": 1e-3}[title.split("(")[1].rstrip(")")]
        speeds.append(size * unpacked(trace_of(part, "travel", "viable yeast")["y"]))
    largest = int(np.abs(speeds[0]).argmax())
    assert speeds[1][largest] == pytest.approx(4.0 * speeds[0][largest], rel=1e-5)
    loss = unpacked(trace_of(part, "imaginary-part", "viable yeast")["y"])
    steady = np.abs(loss) > 0.02
    assert len(set(np.sign(speeds[0] * loss)[steady])) == 1


def rows_of(text):
    return list(csv.DictReader(io.StringIO(text)))


def test_the_table_holds_what_the_figures_show(bead, crossover, solved):
    part = part_of(bead, solved)
    (row,) = part["table"]["rows"]
    assert row["name"] == "bead"
    assert row["cells"][2].endswith("Hz, falls")
    assert row["note"] == "Surface conductance 2 nS."
    (found,) = rows_of(part["table"]["csv"])
    assert found["rising crossovers (Hz)"] == ""
    assert float(found["falling crossovers (Hz)"]) == pytest.approx(crossover(0.002), rel=1e-6)
    assert float(found["surface conductance (nS)"]) == pytest.approx(2.0)
    assert float(found["frequency (Hz)"]) == bead.drive.frequency
    assert float(found["medium conductivity (S/m)"]) == 0.002


def test_the_table_tells_how_an_ellipsoid_lies(with_rod, solved):
    part = part_of(with_rod, solved)
    note = part["table"]["rows"][1]["note"]
    assert note.startswith("Semi-axis along the field: 2 µm from 1 kHz")
    assert note.endswith("kT here.")
    cell = rows_of(part["table"]["csv"])[1]["semi-axes along the field (um from Hz to Hz)"]
    assert cell.startswith("2 from 1000 to ")


def test_names_do_no_harm_in_tables(yeast, solved, vary):
    name = 'a "bead", 5 < d'
    part = part_of(vary(yeast, {"particle.0.name": name}), solved)
    assert rows_of(part["table"]["csv"])[0]["particle"] == name
    assert all("5 < d" not in text for text in trace_of(part, "real-part", "rises")["text"])


def test_long_lists_are_cut_in_sentences(yeast, solved, vary):
    many = [{**BEAD, "name": f"bead {index}"} for index in range(12)]
    part = part_of(vary(yeast, {"particle": many}), solved)
    for name, words in part["sentences"].items():
        assert "and 10 more" in words, name
    assert len(part["table"]["rows"]) == 12


def test_axes_hold_their_curves(results):
    for result in results.values():
        part = polarisation_part(result, LIGHT)
        for name in ("real-part", "imaginary-part", "rotation"):
            low, high = part["figures"][name]["layout"]["yaxis"]["range"]
            for particle in result.design.particles:
                values = unpacked(trace_of(part, name, particle.name)["y"])
                assert low < values.min() <= values.max() < high


def test_an_axis_reaches_around_zero():
    low, high = span([np.array([-0.02, 3.2]), np.array([0.5])])
    assert low < -0.02 < 0.0 < 3.2 < high < 6.0
    low, high = span([np.zeros(3)])
    assert low < 0.0 < high


def test_the_amplitude_told_is_that_of_the_drive(yeast, solved):
    design = turned(yeast, "four-phase-bars")
    result = evaluate(design, solved(design), points=20)
    rms = design.drive.voltage / PEAK_TO_PEAK
    field = rotating_amplitude(result.point) * abs(result.share) * rms
    words = polarisation_part(result, LIGHT)["sentences"]["rotation"]
    assert f"{field / 1e3:.3g} kV/m" in words
