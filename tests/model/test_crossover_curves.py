"""Crossovers against conductivity, their spread, and how ellipsoids lie in the field."""

import numpy as np
import pytest

from model.alignment import alignment_energy, alignment_ranges
from model.crossover_curves import crossover_curves
from model.crossovers import find_crossovers
from model.evaluate import evaluate
from model.fields.solve import solve_chip
from model.liquid.liquid import Liquid
from model.particle import Sample
from model.particles.ellipsoid import Ellipsoid
from model.particles.shelled_sphere import ShelledSphere
from model.particles.solid_sphere import SolidSphere
from model.profile import load_profile

LIQUID = Liquid(conductivity=0.03)
CELL = ShelledSphere(
    name="cell",
    radius=6e-6,
    core={"relative_permittivity": 60, "conductivity": 0.5},
    layers=[{"capacitance": 0.012, "conductance": 5.0}],
)
ROD = Ellipsoid(
    name="rod",
    semi_axes=(0.5e-6, 2e-6, 0.5e-6),
    core={"relative_permittivity": 60, "conductivity": 0.3},
    layers=[{"capacitance": 0.01, "conductance": 0.0}],
)
SIGMA = np.geomspace(1e-3, 2.0, 23)


def exact(particle, conductivity, rising, sample=None):
    sample = sample or Sample()

    def real_part(frequency):
        medium = LIQUID.medium(2 * np.pi * frequency, np.array(conductivity))
        return particle.polarisation(medium, sample).real

    found = [one.frequency for one in find_crossovers(real_part, 100, 1e9) if one.rising == rising]
    return (found[0] if rising else found[-1]) if found else np.nan


@pytest.mark.parametrize("particle", [CELL, ROD])
def test_curves_follow_the_crossovers_found_one_by_one(particle):
    for curve in crossover_curves(particle, LIQUID, SIGMA):
        expected = [exact(particle, one, curve.rising) for one in SIGMA]
        np.testing.assert_allclose(curve.frequency, expected, rtol=5e-3, equal_nan=True)
        np.testing.assert_array_equal(curve.low, curve.frequency)
        np.testing.assert_array_equal(curve.high, curve.frequency)


def test_band_is_the_spread_of_a_population():
    # Against many cells drawn at random: lognormal radius and membrane capacitance.
    varied = CELL.model_copy(update={"radius_cv": 0.1, "membrane_cv": 0.15})
    rising, _ = crossover_curves(varied, LIQUID, np.array([0.03]))
    draw = np.random.default_rng(5)
    count = 4000
    sizes, membranes = (
        np.exp(np.sqrt(np.log1p(cv**2)) * draw.standard_normal(count)) for cv in (0.1, 0.15)
    )
    frequency = np.geomspace(1e4, 1e6, 2001)
    medium = LIQUID.medium(2 * np.pi * frequency)
    found = []
    for part in np.array_split(np.arange(count), 20):
        sample = Sample(sizes[part, None], membranes[part, None])
        factor = varied.polarisation(medium, sample).real
        found.extend(frequency[np.argmax(factor > 0.0, axis=1)])
    spread = np.std(np.log(found))
    # 4000 draws tell a standard deviation to 1.1 %; first order adds about as much
    assert np.log(rising.high[0] / rising.frequency[0]) == pytest.approx(spread, rel=0.04)
    assert np.log(rising.frequency[0] / rising.low[0]) == pytest.approx(spread, rel=0.04)


def test_a_bead_only_falls_and_has_no_membranes_to_vary():
    bead = SolidSphere(
        name="bead",
        radius=0.5e-6,
        relative_permittivity=2.55,
        conductivity=0.0,
        surface_conductance=1e-9,
        radius_cv=0.1,
    )
    rising, falling = crossover_curves(bead, LIQUID, np.array([1e-4, 1e-3, 0.03]))
    assert np.all(np.isnan(rising.frequency))
    assert np.isnan(falling.frequency[2])
    assert np.all(falling.low[:2] < falling.frequency[:2])


def test_which_axis_aligns_from_where_to_where():
    # The ranges join, and at their edges the factors of two axes are equal.
    found = alignment_ranges(ROD, LIQUID, 1e3, 1e9)
    assert found[0].low == 1e3
    assert found[-1].high == 1e9
    assert found[0].length == 2e-6
    assert [one.high for one in found[:-1]] == [one.low for one in found[1:]]
    assert len(found) > 1
    for one in found[:-1]:
        factors = ROD.factors(LIQUID.medium(np.array(2 * np.pi * one.high))).real
        assert abs(factors[1] - factors[0]) < 0.02
    assert alignment_ranges(CELL, LIQUID, 1e3, 1e9) == ()
    tumbling = ROD.model_copy(update={"orientation": "random"})
    assert alignment_ranges(tumbling, LIQUID, 1e3, 1e9) == ()


def test_energy_that_holds_a_rod():
    # 2πabc·ε·ΔRe K·E², by hand at the strongest field of the line.
    design = load_profile("demo_profiles/rinse-water-yeast.toml")
    design = design.model_copy(update={"particles": (*design.particles, ROD)})
    result = evaluate(design, solve_chip(design.chip))
    at = result.point
    factors = ROD.factors(at.medium).real[:, 0]
    volume = 2 * np.pi * np.prod(ROD.semi_axes) * at.liquid.permittivity
    square = at.line.square.max() * (10 / np.sqrt(8)) ** 2 * abs(at.share[0]) ** 2
    expected = volume * (factors[1] - factors[0]) * square / (1.380649e-23 * 295.15)
    assert alignment_energy(result, ROD) == pytest.approx(expected, rel=1e-9)
    assert alignment_energy(result, design.particles[0]) is None
