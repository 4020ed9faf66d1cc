"""Laws that hold for every particle, and what a person may type for them."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pydantic import ValidationError
from scipy.constants import epsilon_0

from model.crossovers import NOISE, POINTS_PER_DECADE, Crossover, find_crossovers
from model.declare import FROM_PERSON
from model.layers import MOST_LAYERS, Layer, Membrane
from model.medium import Medium
from model.outlines import Ellipsoid as Outline
from model.particle import Sample
from model.particles.ellipsoid import Ellipsoid
from model.particles.shelled_sphere import ShelledSphere
from model.particles.solid_sphere import SolidSphere
from model.polarisation import polarisation_factor

FREQUENCY = np.geomspace(1.0, 1e10, 201)
OMEGA = 2 * np.pi * FREQUENCY


def logarithmic(low, high):
    return st.floats(np.log10(low), np.log10(high)).map(lambda power: float(10.0**power))


relative = st.floats(1.0, 200.0)
conductivity = st.just(0.0) | logarithmic(1e-8, 10.0)
dispersion = {
    "dispersion_frequency": logarithmic(1e4, 1e9),
    "dispersion_spread": st.floats(0.0, 0.5),
}
thick = st.builds(
    Layer,
    thickness=logarithmic(1e-9, 1e-7),
    relative_permittivity=relative,
    conductivity=conductivity,
    dispersion_strength=st.none() | st.floats(0.0, 1e3),
    **dispersion,
)
thin = st.builds(
    Membrane,
    capacitance=logarithmic(1e-3, 1e-1),
    conductance=st.just(0.0) | logarithmic(1e-1, 1e6),
    dispersion_strength=st.none() | logarithmic(1e-4, 1e-2),
    **dispersion,
)
material = st.fixed_dictionaries(
    {"relative_permittivity": relative, "conductivity": conductivity},
    optional={"dispersion_strength": st.floats(0.0, 1e3), **dispersion},
)
shelled = st.builds(
    ShelledSphere,
    name=st.just("shelled"),
    radius=logarithmic(1e-6, 2e-5),
    core=material,
    layers=st.lists(thick | thin, min_size=1, max_size=5),
)
solid = st.builds(
    SolidSphere,
    name=st.just("solid"),
    radius=logarithmic(1e-8, 1e-4),
    relative_permittivity=relative,
    conductivity=conductivity,
    surface_conductance=st.just(0.0) | logarithmic(1e-11, 1e-8),
)
#: Tumbling, as what turns with frequency is no answer of one linear body.
tumbling = st.builds(
    Ellipsoid,
    name=st.just("ellipsoid"),
    semi_axes=st.tuples(*[logarithmic(1e-6, 2e-5)] * 3),
    orientation=st.just("random"),
    core=material,
    layers=st.lists(thick | thin, min_size=1, max_size=4),
)
medium = st.tuples(st.floats(2.0, 100.0), logarithmic(1e-4, 5.0))


def around(liquid, omega=OMEGA):
    return Medium(omega, epsilon_0 * liquid[0], np.asarray(liquid[1]))


@given(solid | shelled, medium)
@settings(max_examples=150, deadline=None)
def test_factor_stays_within_its_bounds(particle, liquid):
    factor = particle.polarisation(around(liquid))
    assert np.all((factor.real >= -0.5 - 1e-12) & (factor.real <= 1.0 + 1e-12))
    assert np.all(np.abs(factor.imag) <= 0.75 + 1e-12)


@given(tumbling, medium)
@settings(max_examples=100, deadline=None)
def test_factors_of_ellipsoids_stay_within_their_bounds(particle, liquid):
    # As an insulator −⅓/(1 − A), as a perfect conductor ⅓/A along an axis.
    outline = Outline(np.array(particle.semi_axes)).depolarisation[:, None]
    factors = particle.factors(around(liquid)).real
    assert np.all(factors >= -1.0 / (3.0 * (1.0 - outline)) - 1e-9)
    assert np.all(factors <= 1.0 / (3.0 * outline) + 1e-9)
    aligned = particle.model_copy(update={"orientation": "aligned"})
    np.testing.assert_array_equal(aligned.polarisation(around(liquid)).real, factors.max(axis=0))


@given(shelled, medium)
@settings(max_examples=100, deadline=None)
def test_voltages_of_all_layers_are_bounded_by_an_empty_sphere(particle, liquid):
    gain = particle.membrane_gain(around(liquid))
    if gain is None:
        assert not any(layer.is_membrane for layer in particle.layers)
        return
    assert np.all(np.isfinite(gain))
    assert np.all(gain >= 0.0)


@given(material, st.lists(logarithmic(1e-9, 1e-8), min_size=1, max_size=6), medium)
@settings(max_examples=60, deadline=None)
def test_layers_without_contrast_vanish(same, thicknesses, liquid):
    plain = SolidSphere(name="plain", radius=1e-6, **same)
    outside = around(liquid)
    layers = [{"thickness": thickness, **same} for thickness in thicknesses]
    layered = ShelledSphere(name="layered", radius=1e-6, core=same, layers=layers)
    np.testing.assert_allclose(
        layered.polarisation(outside), plain.polarisation(outside), rtol=1e-9, atol=1e-12
    )
    axes = (2e-6, 1e-6, 0.7e-6)
    rod = Ellipsoid(name="rod", semi_axes=axes, core=same, layers=layers)
    bare = polarisation_factor(
        plain.complex_permittivity(OMEGA),
        outside.complex_permittivity,
        Outline(np.array(axes)).depolarisation[:, None],
    )
    np.testing.assert_allclose(rod.factors(outside), bare, rtol=1e-9, atol=1e-12)


@given(st.floats(2.0, 11.0), conductivity, medium)
@settings(max_examples=60, deadline=None)
def test_a_thin_layer_is_a_membrane(permittivity, conducts, liquid):
    core, radius, thickness = {"relative_permittivity": 60, "conductivity": 0.5}, 5e-6, 1e-10
    thin_layer = {
        "thickness": thickness,
        "relative_permittivity": permittivity,
        "conductivity": min(conducts, 1e-3),
    }
    membrane = {
        "capacitance": epsilon_0 * permittivity / thickness,
        "conductance": min(conducts, 1e-3) / thickness,
    }
    one, other = (
        ShelledSphere(name="cell", radius=radius, core=core, layers=[layer])
        for layer in (thin_layer, membrane)
    )
    for result in ("polarisation", "membrane_gain"):
        found, expected = (getattr(particle, result)(around(liquid)) for particle in (one, other))
        # relative to the largest: the layer itself also has a radius and a tangential current
        np.testing.assert_allclose(found, expected, atol=1e-3 * np.max(np.abs(expected)))


@given(solid | shelled | tumbling, medium)
@settings(max_examples=90, deadline=None)
def test_kramers_kronig_sum(particle, liquid):
    # ∫ Im K d ln ω = (π/2)(K∞ − K0); every relaxation of these particles lies well inside.
    log = np.linspace(np.log(1e-14), np.log(1e24), 20001)
    omega = np.exp(log)
    factor = particle.polarisation(around(liquid, omega))
    area = np.trapezoid(factor.imag, log)
    expected = np.pi / 2 * (factor.real[-1] - factor.real[0])
    assert area == pytest.approx(expected, abs=2e-6)


@given(solid | shelled, medium)
@settings(max_examples=150, deadline=None)
def test_no_crossover_is_missed(particle, liquid):
    def real_part(frequency):
        omega = 2 * np.pi * frequency
        return particle.polarisation(around(liquid, omega)).real

    found = find_crossovers(real_part)
    fine = np.geomspace(1.0, 1e10, 100 * POINTS_PER_DECADE + 1)
    values = real_part(fine)
    told = np.abs(values) > NOISE  # a plateau at nothing but rounding is no crossover
    fine, values = fine[told], values[told]
    change = np.flatnonzero(np.signbit(values[1:]) != np.signbit(values[:-1]))
    assert len(found) == len(change)
    for one, index in zip(found, change, strict=True):
        assert fine[index] * (1 - 1e-9) <= one.frequency <= fine[index + 1] * (1 + 1e-9)
        assert one.rising == (values[index] < 0)
        near = one.frequency * np.array([1 - 1e-9, 1 + 1e-9])
        low, high = real_part(near)
        assert low * high <= 0.0 or max(abs(low), abs(high)) < 1e-14


@given(logarithmic(1e-6, 2e-5), st.floats(1.05, 3.0), logarithmic(1e-3, 0.1))
@settings(max_examples=40, deadline=None)
def test_larger_cells_cross_over_lower(radius, growth, conducts):
    # f = √2σ/(2πrC) of a thin insulating membrane: monotone in the radius.
    def lower(size):
        cell = ShelledSphere(
            name="cell",
            radius=radius * size,
            core={"relative_permittivity": 60, "conductivity": 0.6},
            layers=[{"capacitance": 0.012, "conductance": 0.0}],
        )
        found = find_crossovers(
            lambda f: cell.polarisation(around((78.5, conducts), 2 * np.pi * f)).real
        )
        return found[0].frequency

    assert lower(growth) < lower(1.0)
    assert lower(growth) == pytest.approx(lower(1.0) / growth, rel=0.03)


def test_crossovers_come_in_order_with_their_direction():
    found = find_crossovers(lambda f: np.sin(2 * np.pi * np.log10(f)), 2.0, 2e3)
    assert [one.direction for one in found] == ["falls", "rises"] * 3
    np.testing.assert_allclose(
        [one.frequency for one in found], 10 ** np.arange(0.5, 3.5, 0.5), rtol=1e-10
    )


def test_no_crossover_of_a_particle_that_equals_its_medium():
    assert find_crossovers(np.zeros_like) == ()
    noise = np.random.default_rng(1)
    assert find_crossovers(lambda f: 1e-16 * noise.standard_normal(f.size)) == ()


def test_crossover_at_a_very_shallow_slope():
    def shallow(frequency):
        return 1e-9 * (np.log(frequency) - np.log(12345.678))

    (found,) = find_crossovers(shallow)
    assert found.frequency == pytest.approx(12345.678, rel=1e-10)
    assert found == Crossover(found.frequency, rising=True)


def yeast(**change):
    table = {
        "name": "viable yeast",
        "radius": "4.0 um",
        "radius_cv": 0.08,
        "density": "1100 kg/m^3",
        "core": {"relative_permittivity": 50, "conductivity": "0.2 S/m"},
        "layers": [
            {
                "name": "membrane",
                "thickness": "8 nm",
                "relative_permittivity": 6,
                "conductivity": "0.25 uS/m",
            },
            {
                "name": "wall",
                "thickness": "220 nm",
                "relative_permittivity": 60,
                "conductivity": "14 mS/m",
            },
        ],
        **change,
    }
    return ShelledSphere.model_validate(table, context=FROM_PERSON)


CELL = ShelledSphere(
    name="cell",
    radius=5e-6,
    core={"relative_permittivity": 60, "conductivity": 0.5},
    layers=[
        {"capacitance": 0.01, "conductance": 0.0},
        {"thickness": 100e-9, "relative_permittivity": 60, "conductivity": 0.01},
    ],
)
BEAD = SolidSphere(
    name="bead", radius=1e-6, relative_permittivity=2.55, conductivity=0, surface_conductance=1e-9
)


@pytest.mark.parametrize("particle", [CELL, BEAD])
def test_shapes_broadcast(particle):
    conductivity = np.geomspace(1e-3, 1.0, 7)[:, None, None]
    size = np.linspace(0.7, 1.4, 5)[:, None]
    whole = particle.polarisation(around((78.5, conductivity)), Sample(size))
    assert whole.shape == (7, 5, OMEGA.size)
    one = particle.model_copy(update={"radius": particle.radius * 1.4})
    alone = one.polarisation(around((78.5, conductivity[3, 0, 0])))
    np.testing.assert_allclose(whole[3, 4], alone, rtol=1e-12)
    gain = particle.membrane_gain(around((78.5, conductivity)), Sample(size))
    if particle is BEAD:
        assert gain is None
    else:
        assert gain.shape == whole.shape
        expected = one.membrane_gain(around((78.5, conductivity[3, 0, 0])))
        np.testing.assert_allclose(gain[3, 4], expected, rtol=1e-12)


def test_sizes_that_leave_no_core_are_refused():
    assert CELL.smallest_size == pytest.approx(0.02, rel=1e-5)
    assert BEAD.smallest_size == 0.0
    with pytest.raises(ValueError, match="leave no core"):
        CELL.polarisation(around((78.5, 0.1)), Sample(np.array([[1.0], [0.0199]])))


def test_largest_voltage_of_several_membranes_and_no_walls():
    one = {"capacitance": 0.01, "conductance": 0.0}
    cytoplasm = {"thickness": "1 um", "relative_permittivity": 60, "conductivity": "0.4 S/m"}
    nucleus = yeast(layers=[one, cytoplasm, one])
    alone = yeast(layers=[cytoplasm, one])
    gain = nucleus.membrane_gain(around((78.5, 1.0)))
    # at low frequency the outer membrane takes it all, at high frequency the inner one joins in
    assert gain[0] == pytest.approx(alone.membrane_gain(around((78.5, 1.0)))[0], rel=1e-3)
    wall = {"thickness": "26 nm", "relative_permittivity": 60, "conductivity": "14 mS/m"}
    assert yeast(layers=[wall]).membrane_gain(around((78.5, 1.0))) is None
    envelope = {**wall, "thickness": "25 nm"}
    assert yeast(layers=[envelope]).membrane_gain(around((78.5, 1.0))) is not None


def test_profile_keys_read_into_si():
    particle = yeast()
    assert particle.equivalent_radius == particle.radius == 4e-6
    assert [layer.name for layer in particle.layers] == ["membrane", "wall"]
    assert particle.layers[1].thickness == 220e-9
    assert particle.layers[0].conductivity == 0.25e-6
    membrane = yeast(layers=[{"capacitance": "10 mF/m^2", "conductance": "100 S/m^2"}]).layers[0]
    assert (membrane.capacitance, membrane.conductance, membrane.thickness) == (0.01, 100.0, 0.0)
    assert hash(yeast()) == hash(yeast())
    assert yeast() == yeast()
    assert yeast() != yeast(radius="4.1 um")


def problems(**change):
    with pytest.raises(ValidationError) as caught:
        yeast(**change)
    return [
        (".".join(map(str, error["loc"])), error["msg"], error.get("ctx", {}))
        for error in caught.value.errors()
    ]


@pytest.mark.parametrize(
    ("layers", "place", "words"),
    [
        ([], "layers", "at least one layer"),
        ("wall", "layers", "must be a list of layers"),
        ([{}] * 500, "layers", "has 500 layers; at most 32 layers"),
        (["wall"], "layers.0", "thickness, or with capacitance and conductance"),
        (
            [{"capacitance": "0 mF/m^2", "conductance": 0}],
            "layers.0.membrane.capacitance",
            "must be from 0.01 to 1000 mF/m²",
        ),
    ],
)
def test_bad_layers_are_named(layers, place, words):
    ((found, message, _),) = problems(layers=layers)
    assert found == place
    assert words in message


def test_half_a_membrane_or_a_mixture_is_refused():
    (missing,) = problems(layers=[{"capacitance": "10 mF/m^2"}])
    assert missing[0] == "layers.0.membrane.conductance"
    (extra,) = problems(
        layers=[{"capacitance": "10 mF/m^2", "conductance": 0, "thickness": "8 nm"}]
    )
    assert extra[0] == "layers.0.membrane.thickness"


def test_layers_must_leave_a_core():
    wall = {"thickness": "2 um", "relative_permittivity": 60, "conductivity": "14 mS/m"}
    ((place, message, context),) = problems(layers=[wall, wall])
    assert (place, context["path"]) == ("", "layers")
    assert "4 µm thick together" in message
    assert "radius of 4 µm" in message


@pytest.mark.parametrize("radius", ["0.3 um", "0.7 um", "0.9 um", "1.1 um"])
def test_layers_that_leave_only_rounding_are_refused(radius):
    part = {"relative_permittivity": 60, "conductivity": "14 mS/m"}
    total = float(radius.split()[0])
    for share in (0.1, 0.3, 0.7):
        pair = [{"thickness": f"{total * one:.9g} um", **part} for one in (share, 1 - share)]
        ((_, message, _),) = problems(radius=radius, layers=pair)
        assert "leaves no core" in message


def test_as_many_layers_as_allowed():
    layer = {"thickness": "8 nm", "relative_permittivity": 6, "conductivity": "1 uS/m"}
    particle = yeast(layers=[layer] * MOST_LAYERS)
    assert np.all(np.isfinite(particle.polarisation(around((78.5, 0.1)))))


def test_every_error_at_once():
    found = problems(radius="4 kg", core={"relative_permittivity": 0.5, "conductivity": "1 S"})
    assert {place for place, _, _ in found} == {
        "radius",
        "core.relative_permittivity",
        "core.conductivity",
    }
