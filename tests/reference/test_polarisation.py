"""Polarisation factor against closed forms, an independent linear solve, and Mie scattering."""

import json

import mpmath
import numpy as np
import pytest
from scipy.integrate import quad

from model.crossovers import find_crossovers
from model.layers import Core, Layer
from model.medium import Medium
from model.outlines import Sphere
from model.particles.shelled_sphere import ShelledSphere
from model.particles.solid_sphere import SolidSphere
from model.polarisation import ThinShell, clausius_mossotti, complex_permittivity
from model.polarisation import coat as coat_along
from model.polarisation import seal as seal_along
from tests.reference.layered_spheres import FILE, MEDIUM


def sphere_of(row):
    """Name of a row of the file."""
    return f"{len(row['radii']) - 1} layers {row['frequency']:g} Hz"


VACUUM = 8.8541878128e-12  # CODATA 2018, with which the printed values below were made


def material(relative, conductivity, frequency):
    return complex_permittivity(
        VACUUM * relative, conductivity, 2 * np.pi * np.asarray(frequency, dtype=float)
    )


def coat(inner, shell, ratio):
    """A sphere `inner` in a concentric shell, `ratio` the outer over the inner radius."""
    return coat_along(inner, Sphere(ratio).shell(ratio - 1, shell)[0])


def seal(inner, capacitance, radius):
    return seal_along(inner, ThinShell(capacitance, radius))


def bead(frequency):
    """Factor of a latex bead, 2.55 and 10 mS/m, in 78.5 and 1 mS/m."""
    return clausius_mossotti(material(2.55, 0.01, frequency), material(78.5, 1e-3, frequency))


def cell(frequency, membrane_conductivity=0.0, core_conductivity=0.5):
    """Factor of a cell of 6 µm radius, 7 nm membrane, in 78.5 and 30 mS/m."""
    inside = coat(
        material(60.0, core_conductivity, frequency),
        material(9.04, membrane_conductivity, frequency),
        6e-6 / (6e-6 - 7e-9),
    )
    return clausius_mossotti(inside, material(78.5, 0.03, frequency))


def crossovers(factor):
    return [one.frequency for one in find_crossovers(lambda frequency: factor(frequency).real)]


def test_limits_of_contrast():
    assert clausius_mossotti(1e30, 1.0) == pytest.approx(1.0, abs=1e-15)
    assert clausius_mossotti(0.0, 1.0) == -0.5


def test_bead_plateaus_and_spectrum():
    # Exact arithmetic in many digits.
    assert bead(1e-3).real == pytest.approx(0.75, rel=1e-9)
    assert bead(1e16).real == pytest.approx(-0.476026324036, rel=1e-11)
    expected = [
        0.749932924433 - 0.00906818131j,
        0.743328577431 - 0.0901933024634j,
        0.316427139735 - 0.586162362246j,
        -0.454020105690 - 0.162775702546j,
        -0.475802280663 - 0.0165720511206j,
    ]
    np.testing.assert_allclose(bead([1e4, 1e5, 1e6, 1e7, 1e8]), expected, rtol=1e-10)


def test_bead_crossover_and_relaxation():
    # f = sqrt((σp − σm)(σp + 2σm)/((εm − εp)(εp + 2εm)))/2π: Jones 1995, Hughes 2002.
    particle, medium = 2.55 * VACUUM, 78.5 * VACUUM
    closed = np.sqrt(0.009 * 0.012 / ((medium - particle) * (particle + 2 * medium))) / (2 * np.pi)
    assert closed == pytest.approx(1.69695758e6, rel=5e-9)
    (found,) = find_crossovers(lambda frequency: bead(frequency).real)
    assert found.frequency == pytest.approx(closed, rel=1e-10)
    assert found.direction == "falls"
    # The relaxation time (εp + 2εm)/(σp + 2σm): there Im K is half the drop of Re K.
    time = (particle + 2 * medium) / 0.012
    assert time == pytest.approx(1.177238055e-7, rel=1e-9)
    relaxation = 1.0 / (2 * np.pi * time)
    assert relaxation == pytest.approx(1.351935086e6, rel=1e-9)
    assert bead(relaxation).imag == pytest.approx(-0.613013162018, rel=1e-11)


def test_sum_rule_of_kramers_and_kronig():
    # ∫ Im K d ln ω = (π/2)(K∞ − K0) for any sum of Debye terms.
    def area(factor):
        value, _ = quad(
            lambda log: float(factor(np.exp(log)).imag), -20, 45, limit=400, epsabs=1e-12
        )
        return value

    assert area(bead) == pytest.approx(-1.92583764635, rel=1e-9)
    assert area(bead) == pytest.approx(np.pi / 2 * (bead(1e25).real - bead(1e-9).real), rel=1e-9)
    assert area(lambda f: cell(f, 1e-7)) == pytest.approx(0.64411319494, rel=1e-9)


def test_single_shell_cell():
    # Shell formula in 40 digits, equal to an independent solve of the radial Laplace problem.
    expected = [
        -0.499911912571 + 0.010763527768j,
        -0.49124906969 + 0.106927588542j,
        0.0283384424885 + 0.644810613643j,
        0.800131762684 + 0.13982869221j,
        0.780263515859 - 0.169205889848j,
        0.0755423774853 - 0.34711599842j,
    ]
    np.testing.assert_allclose(cell([1e3, 1e4, 1e5, 1e6, 1e7, 1e8]), expected, rtol=1e-9)


def test_crossovers_of_the_cell_and_their_shorthand():
    low, high = find_crossovers(lambda frequency: cell(frequency).real)
    assert (low.rising, high.rising) == (True, False)
    assert low.frequency == pytest.approx(95585.468, rel=1e-7)
    assert high.frequency == pytest.approx(143.1461901e6, rel=1e-7)
    # √2σm/(2πRC) of a thin insulating membrane (from memory) is 3 % high at σm/σi = 0.06; with
    # the factor 1/√((1 − s)(1 + 2s)), derived from the thin-membrane sphere, 0.35 %.
    capacitance = 9.04 * VACUUM / 7e-9
    quick = np.sqrt(2) * 0.03 / (2 * np.pi * 6e-6 * capacitance)
    share = 0.03 / 0.5
    better = quick / np.sqrt((1 - share) * (1 + 2 * share))
    assert quick == pytest.approx(98420.6, rel=1e-5)
    assert better == pytest.approx(95920.9, rel=1e-5)
    assert quick / low.frequency - 1 == pytest.approx(0.0297, abs=1e-4)
    assert better / low.frequency - 1 == pytest.approx(0.0035, abs=1e-4)
    # With a cytoplasm that conducts without resistance most of the difference is gone.
    assert crossovers(lambda f: cell(f, 0.0, 1e3))[0] == pytest.approx(98048, rel=1e-5)


def test_membrane_conductance_lowers_the_crossover_and_ends_it():
    expected = {10: 95549.10, 100: 95212.05, 500: 93498.44, 1000: 90837.01}
    for conductance, frequency in expected.items():
        found = crossovers(lambda f, G=conductance: cell(f, G * 7e-9))
        assert found[0] == pytest.approx(frequency, rel=1e-6)
    # Formula of Huang et al. 1996 (from memory), a thin membrane on a perfect conductor.
    R, C = 6e-6, 9.04 * VACUUM / 7e-9
    formula = {10: 98371.3, 100: 97917.4, 500: 95675.8, 1000: 92326.7}
    for G, frequency in formula.items():
        root = np.sqrt((4 * 0.03 - R * G) ** 2 - 9 * (R * G) ** 2)
        assert np.sqrt(2) / (8 * np.pi * R * C) * root == pytest.approx(frequency, rel=1e-5)
    # Once RG exceeds the medium's conductivity no lower crossover is left.
    assert len(crossovers(lambda f: cell(f, 6000 * 7e-9))) == 1


def test_coated_spheres_against_mie_codes():
    # Printed values: two electromagnetic scattering codes, extrapolated to no size.
    frequency = [1e5, 1e6, 1e7, 1e8]
    inside = coat(material(60, 0.3, frequency), material(10, 0.01, frequency), 1 / 0.8)
    expected = [
        0.0621722636784 - 0.00336523014225j,
        0.0586379379419 - 0.0332632825208j,
        -0.101389526152 - 0.157420294119j,
        -0.279890893422 - 0.0565031533548j,
    ]
    found = clausius_mossotti(inside, material(78.5, 0.03, frequency))
    np.testing.assert_allclose(found, expected, rtol=1e-9)
    # A 7 nm membrane, where double-precision scattering codes fail: 50-digit coated Mie series.
    expected = [
        -0.4705889439 + 0.1035811062j,
        0.7998331958 + 0.1397160520j,
        0.0755422674 - 0.3471160489j,
    ]
    np.testing.assert_allclose(cell([1e4, 1e6, 1e8], 1e-6), expected, rtol=1e-9)


def mie_factor(core, shell, medium, share):
    """K from the first electric coefficient of a coated sphere, Bohren and Huffman 1983 ch. 8.

    exp(−iωt) there, so permittivities and the result are conjugated; size parameter 1e-9.
    """

    def psi(z):
        return mpmath.sin(z) / z - mpmath.cos(z)

    def psi_slope(z):
        return mpmath.cos(z) / z - mpmath.sin(z) / z**2 + mpmath.sin(z)

    def chi(z):
        return mpmath.cos(z) / z + mpmath.sin(z)

    def chi_slope(z):
        return -mpmath.sin(z) / z - mpmath.cos(z) / z**2 + mpmath.cos(z)

    with mpmath.workdps(80):
        one, two = (
            mpmath.sqrt(mpmath.conj(mpmath.mpc(complex(part)) / mpmath.mpc(complex(medium))))
            for part in (core, shell)
        )
        y = mpmath.mpf("1e-9")
        x = y * share
        A = (two * psi(two * x) * psi_slope(one * x) - one * psi_slope(two * x) * psi(one * x)) / (
            two * chi(two * x) * psi_slope(one * x) - one * chi_slope(two * x) * psi(one * x)
        )
        wave = psi(two * y) - A * chi(two * y)
        slope = psi_slope(two * y) - A * chi_slope(two * y)
        xi, xi_slope = psi(y) - 1j * chi(y), psi_slope(y) - 1j * chi_slope(y)
        a1 = (psi(y) * slope - two * psi_slope(y) * wave) / (xi * slope - two * xi_slope * wave)
        return complex(mpmath.conj(1.5j * a1 / y**3))


@pytest.mark.parametrize("frequency", [1e3, 1e5, 1e6, 1e7, 1e9])
@pytest.mark.parametrize("thickness", [7e-9, 0.3e-6])
def test_mie_series_in_many_digits(frequency, thickness):
    core, shell = material(60, 0.5, frequency), material(9.04, 1e-6, frequency)
    medium = material(78.5, 0.03, frequency)
    ratio = 6e-6 / (6e-6 - thickness)
    expected = mie_factor(core, shell, medium, 1 / mpmath.mpf(ratio))
    found = clausius_mossotti(coat(core, shell, ratio), medium)
    assert found == pytest.approx(expected, rel=1e-11)
    plain = mie_factor(core, core, medium, mpmath.mpf("0.5"))
    assert clausius_mossotti(core, medium) == pytest.approx(plain, rel=1e-12)


@pytest.mark.parametrize("row", json.loads(FILE.read_text()), ids=sphere_of)
def test_any_number_of_layers_against_a_scattering_library(row):
    # An electromagnetic solution, extrapolated to no size; see tests/reference/layered_spheres.py.
    core, *layers = [
        {"relative_permittivity": one, "conductivity": other}
        for one, other in zip(row["relative_permittivity"], row["conductivity"], strict=True)
    ]
    for layer, thickness in zip(layers, np.diff(row["radii"]), strict=True):
        layer["thickness"] = thickness
    particle = ShelledSphere.model_construct(
        radius=row["radii"][-1],
        core=Core(**core),
        layers=tuple(Layer(**layer) for layer in layers),
    )
    expected = complex(*row["factor"])
    found = particle.polarisation(water(MEDIUM[1], row["frequency"]))
    assert found == pytest.approx(expected, abs=2e-8)


def test_thin_membrane_is_the_limit_of_a_thin_shell():
    frequency = np.geomspace(1e3, 1e9, 25)
    core, C, G, R = material(60, 0.5, frequency), 0.01, 100.0, 6e-6
    omega = 2 * np.pi * frequency
    sealed = seal(core, complex_permittivity(C, G, omega), R)
    errors = []
    for thickness in (4e-9, 2e-9, 1e-9):
        shell = complex_permittivity(C * thickness, G * thickness, omega)
        coated = coat(core, shell, R / (R - thickness))
        errors.append(np.max(np.abs(coated / sealed - 1)))
    assert errors[0] < 2e-3
    np.testing.assert_allclose(np.divide(errors[:-1], errors[1:]), 2.0, rtol=5e-3)  # first order


def test_slope_of_the_imaginary_part_of_an_insulated_cell():
    # dIm K/dω = 3RC/(4σm) at low frequency, an insulating membrane: Schwan 1957.
    omega, R, C, conductivity = 2 * np.pi * 10.0, 5e-6, 0.01, 0.1
    core = complex_permittivity(60 * VACUUM, 0.5, np.array(omega))
    medium = complex_permittivity(78.5 * VACUUM, conductivity, np.array(omega))
    factor = clausius_mossotti(seal(core, C, R), medium)
    assert factor.imag / omega == pytest.approx(3 * R * C / (4 * conductivity), rel=3e-3)


def water(conductivity, frequency):
    omega = 2 * np.pi * np.asarray(frequency, dtype=float)
    return Medium(omega, 78.5 * VACUUM, np.asarray(conductivity))


def latex(surface_conductance=1e-9):
    return SolidSphere(
        name="latex",
        radius=108e-9,
        relative_permittivity=2.55,
        conductivity=0.0,
        surface_conductance=surface_conductance,
    )


def test_surface_conductance():
    # σp = σbulk + 2K/a: O'Konski 1960. A conducting skin around a tends to it as it gets thin.
    assert latex().surface_share(water(1e-3, 1e6)) == pytest.approx(18.5185e-3, rel=5e-6)
    omega = np.array(1e-3)  # so low that conduction alone decides
    core = complex_permittivity(2.55 * VACUUM, 0.0, omega)
    found = []
    for thickness in (1e-10, 1e-11, 1e-12):
        skin = complex_permittivity(2.55 * VACUUM, 1e-9 / thickness, omega)
        whole = coat(core, skin, (108e-9 + thickness) / 108e-9)
        found.append(float(-whole.imag * omega))
    np.testing.assert_allclose(found, [18.50138e-3, 18.51680e-3, 18.51835e-3], rtol=1e-6)


def test_crossover_of_a_bead_with_surface_conductance():
    # The closed form of the lossy sphere; note the greatest value between 1 and 10 mS/m.
    expected = {0.1e-3: 3.03195e6, 1e-3: 3.09586e6, 5e-3: 3.20617e6, 10e-3: 2.95785e6}
    for conductivity, frequency in expected.items():
        found = crossovers(lambda f, s=conductivity: latex().polarisation(water(s, f)))
        assert found == [pytest.approx(frequency, rel=1e-5)]
    # At low frequency it is drawn in only below 18.52 mS/m.
    for conductivity, sign in ((18.51e-3, 1.0), (18.53e-3, -1.0)):
        low = latex().polarisation(water(conductivity, 1 / (2 * np.pi)))
        assert np.sign(low.real) == sign
