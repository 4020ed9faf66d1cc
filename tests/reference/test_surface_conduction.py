"""Surface conductance of charged beads against Bikerman's formula and published measurements."""

import numpy as np
import pytest
from scipy.constants import N_A, Boltzmann, R, elementary_charge
from scipy.constants import physical_constants as codata

from model.crossovers import find_crossovers
from model.liquid.electrolyte import Electrolyte, simple_salt
from model.medium import Medium
from model.particles.solid_sphere import SolidSphere
from model.surface_conduction import diffuse_conductance

FARADAY = codata["Faraday constant"][0]
PERMITTIVITY, VISCOSITY, WARM = 78.4085 * 8.8541878128e-12, 0.890022e-3, 298.15


def salt(concentration, valence=1, diffusivity=1.957e-9):
    """Two ions of one charge number and diffusivity, mol/m³."""
    return Electrolyte(
        np.array([valence, -valence], dtype=float),
        np.full(2, diffusivity),
        np.array([concentration, concentration], dtype=float),
        WARM,
    )


def bikerman(zeta, concentration, valence=1, diffusivity=1.957e-9):
    """Closed form, Hughes and Green 2002 J. Colloid Interface Sci. 250:266, equations 4 and 5."""
    carried = (R * WARM / FARADAY) ** 2 * 2 * PERMITTIVITY / (3 * VISCOSITY * diffusivity)
    strength = valence**2 * concentration
    kappa = np.sqrt(2 * FARADAY**2 * strength / (PERMITTIVITY * R * WARM))
    each = 4 * FARADAY**2 * strength * diffusivity * (1 + 3 * carried / valence**2)
    return each / (R * WARM * kappa) * (np.cosh(valence * FARADAY * zeta / (2 * R * WARM)) - 1)


@pytest.mark.parametrize(
    ("millimolar", "zeta", "nanosiemens"),
    # Printed: the closed form, and quadrature of the Gouy–Chapman profile with electro-osmosis.
    [(1.0, -0.08, 0.6372720654), (0.1, -0.1, 0.350842), (10.0, -0.05, 0.698344)],
)
def test_diffuse_layer_of_a_simple_salt(millimolar, zeta, nanosiemens):
    assert bikerman(zeta, millimolar) * 1e9 == pytest.approx(nanosiemens, rel=2e-6)
    found = diffuse_conductance(zeta, salt(millimolar), PERMITTIVITY, VISCOSITY)
    assert float(found) * 1e9 == pytest.approx(nanosiemens, rel=2e-6)


@pytest.mark.parametrize("valence", [1, 2])
@pytest.mark.parametrize("zeta", [-0.2, -0.02, 1e-4, 0.12])
def test_any_zeta_potential_of_a_symmetric_salt(zeta, valence):
    found = diffuse_conductance(zeta, salt(2.0, valence), PERMITTIVITY, VISCOSITY)
    assert float(found) == pytest.approx(bikerman(zeta, 2.0, valence), rel=1e-6)


def test_mixtures():
    # Two salts of equal ions are one of them; a surface without charge carries nothing; ions of
    # no charge do not count; and only what is drawn to the surface matters when it is strongly so.
    one, split = salt(2.0), salt(1.0)
    twice = Electrolyte(
        np.tile(split.valences, 2),
        np.tile(split.diffusivities, 2),
        np.tile(split.concentrations, 2),
        WARM,
    )
    liquid = PERMITTIVITY, VISCOSITY
    whole = diffuse_conductance(-0.07, one, *liquid)
    assert diffuse_conductance(-0.07, twice, *liquid) == pytest.approx(whole, rel=1e-12)
    assert diffuse_conductance(0.0, one, *liquid) == 0.0
    calcium = Electrolyte(
        np.array([2.0, -1.0]), np.array([0.792e-9, 2.03e-9]), np.array([1.0, 2.0]), WARM
    )
    drawn = [float(diffuse_conductance(zeta, calcium, *liquid)) for zeta in (-0.1, 0.1)]
    assert drawn[0] > 2.0 * drawn[1]  # two charges are drawn far more than one


def test_ionic_strength_and_debye_length_of_the_liquid_that_is_known_by_conductivity():
    # c = σkT/(2De²): 10 mS/m of ions of 2·10⁻⁹ m²/s.
    found = simple_salt(np.array([10e-3]), WARM)
    each = 10e-3 * Boltzmann * WARM / (2 * 2e-9 * elementary_charge**2 * N_A)
    np.testing.assert_allclose(found.ionic_strength, each, rtol=1e-12)
    length = np.sqrt(PERMITTIVITY * 2e-9 / 10e-3)
    np.testing.assert_allclose(found.debye_length(PERMITTIVITY), length, rtol=1e-12)


def bead(**change):
    given = {"radius": 100e-9, "relative_permittivity": 2.55, "conductivity": 0.0, **change}
    return SolidSphere(name="latex", **given)


def water(conductivity, frequency):
    omega = 2 * np.pi * np.asarray(frequency, dtype=float)
    return Medium(omega, 78.5 * 8.8541878128e-12, np.asarray(conductivity))


def test_published_latex_of_200_nm():
    # σp = 26 mS/m in 0.2 mS/m KCl, within 8 %: Bakewell and Holmes 2013 Electrophoresis 34:987.
    particle = bead(surface_conductance=1.3e-9)
    outside = water(0.2e-3, 1e6)
    assert particle.surface_share(outside) == pytest.approx(26e-3, rel=1e-9)
    (crossover,) = find_crossovers(lambda f: particle.polarisation(water(0.2e-3, f)).real)
    assert crossover.frequency == pytest.approx(4.2616e6, rel=1e-4)


def test_bead_with_a_zeta_potential_follows_the_liquid():
    # Diffuse part by Bikerman's formula at the concentration of the liquid, Stern part as given.
    particle = bead(surface="zeta-potential", zeta_potential=-0.06, stern_conductance=0.4e-9)
    conductivity = np.array([[0.3e-3], [3e-3], [30e-3]])
    outside = water(conductivity, [1e5, 1e6])
    found = particle.conductance(outside)
    assert found.shape == (3, 1)
    for value, sigma in zip(found[:, 0], conductivity[:, 0], strict=True):
        energy = Boltzmann * 298.15
        millimolar = sigma * energy / (2 * 2e-9 * elementary_charge**2 * N_A)
        ions = salt(millimolar, diffusivity=2e-9)
        diffuse = diffuse_conductance(-0.06, ions, outside.permittivity, outside.viscosity)
        assert value == pytest.approx(float(diffuse) + 0.4e-9, rel=1e-9)
    assert np.all(np.diff(found[:, 0]) > 0.0)
    assert particle.polarisation(outside).shape == (3, 2)
