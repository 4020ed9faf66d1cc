"""Ellipsoids against closed forms, quadrature and an independent finite-element solve."""

import numpy as np
import pytest
from scipy.integrate import quad

from model.layers import Material
from model.medium import Medium
from model.outlines import Ellipsoid as Outline
from model.outlines import Sphere
from model.particle import Sample
from model.particles.ellipsoid import Ellipsoid
from model.particles.shelled_sphere import ShelledSphere
from model.polarisation import (
    Shell,
    ThinShell,
    coat,
    complex_permittivity,
    polarisation_factor,
    pole_voltages,
    seal,
)
from tests.reference.spheroids import Spheroid

VACUUM = 8.8541878128e-12  # CODATA 2018
CORE, COAT, MEDIUM = 60 - 30j, 9 - 0.02j, 78.5 - 1j


def factors(*axes):
    return Outline(np.array(axes, dtype=float)).depolarisation


@pytest.mark.parametrize(
    ("axes", "axis", "expected"),
    [
        # Closed forms of spheroids: Osborn 1945 Phys. Rev. 67:351, Stoner 1945 Phil. Mag. 36:803.
        ((1.5, 1, 1), 0, 0.232981458314),
        ((2, 1, 1), 0, 0.173563997534),
        ((3, 1, 1), 0, 0.108709465053),
        ((5, 1, 1), 0, 0.0558209698025),
        ((10, 1, 1), 0, 0.0202858803016),
        ((1.5, 1.5, 1), 2, 0.445905560783),
        ((2, 2, 1), 2, 0.527200282563),
        ((3, 3, 1), 2, 0.635388889856),
        ((3.5, 3.5, 1), 2, 0.673005510041),
        ((5, 5, 1), 2, 0.750483912423),
        ((10, 10, 1), 2, 0.860804276528),
        # Red cells: 3.3 µm and half as thick (geometry of Gimsa et al. 1996), and 4:1.
        ((3.3, 3.3, 1.65), 0, 0.236400),
        ((4, 4, 1), 2, 0.703641),
        ((4, 4, 1), 0, 0.148179),
    ],
)
def test_depolarising_factors_of_spheroids(axes, axis, expected):
    rounding = 1e-11 if len(str(expected)) > 9 else 6e-7
    assert factors(*axes)[axis] == pytest.approx(expected, abs=rounding)
    assert factors(*axes).sum() == pytest.approx(1.0, rel=1e-14)


def test_depolarising_factors_of_three_unequal_axes():
    # Closed form and quadrature of ½abc∫ds/((s + a²)√((s + a²)(s + b²)(s + c²))).
    expected = [0.156300698829, 0.267154040262, 0.576545260909]
    np.testing.assert_allclose(factors(3, 2, 1), expected, rtol=1e-11)
    axes = np.array([7.0, 1.3, 0.4])
    for axis, found in enumerate(factors(*axes)):
        value, _ = quad(
            lambda s, k=axis: 1 / ((s + axes[k] ** 2) * np.sqrt(np.prod(s + axes**2))),
            0,
            np.inf,
            epsabs=0,
            epsrel=1e-11,
            limit=400,
        )
        assert found == pytest.approx(0.5 * axes.prod() * value, rel=1e-9)


def test_mean_length():
    # Three times volume over surface: sphere; prolate 2:1 by the textbook formula of its surface.
    assert Outline(np.full(3, 4.0)).mean_length == pytest.approx(4.0, rel=1e-14)
    eccentricity = np.sqrt(0.75)
    surface = 2 * np.pi * (1 + 2 / eccentricity * np.arcsin(eccentricity))
    expected = 3 * (4 / 3 * np.pi * 2) / surface
    assert Outline(np.array([2.0, 1.0, 1.0])).mean_length == pytest.approx(expected, rel=1e-13)


def test_homogeneous_spheroid_against_its_closed_form():
    # Bohren and Huffman 1983, 5.32, with the third; 5:1, 60 and 0.4 S/m in 78.5 and 0.05 S/m.
    omega = np.array(2 * np.pi * 1e6)
    inside = complex_permittivity(60 * VACUUM, 0.4, omega)
    outside = complex_permittivity(78.5 * VACUUM, 0.05, omega)
    found = polarisation_factor(inside, outside, factors(5, 1, 1))
    assert found[0] == pytest.approx(1.6710312861 - 0.1084987067j, rel=1e-9)
    assert found[1] == pytest.approx(0.5418474875 - 0.0113651062j, rel=1e-9)
    # 2:1 against a finite-element solve of its own.
    along = polarisation_factor(CORE, MEDIUM, factors(2, 1, 1))[0]
    assert along == pytest.approx(-0.0711605913913 - 0.134096547784j, rel=1e-9)


def confocal(outer, removed):
    """Shell of COAT and inner outline, semi-axes √(a² − removed) as given from outside."""
    outline = Outline(np.array(outer, dtype=float))
    inner = Outline(np.sqrt(outline.poles**2 - removed))
    share = inner.poles.prod() / outline.poles.prod()
    spread = inner.depolarisation - share * outline.depolarisation
    return (
        Shell(COAT, 1 - share, spread, inner.depolarisation, 1 - inner.poles / outline.poles),
        outline,
        inner,
    )


def test_coated_spheroid_against_a_finite_element_solve():
    # Printed: outer 2:1:1, inner 1.951922:0.9:0.9, Bohren and Huffman 1983 5.35 and NGSolve.
    shell, outline, inner = confocal((2, 1, 1), 0.19)
    np.testing.assert_allclose(inner.poles, [1.951922, 0.9, 0.9], rtol=1e-6)
    found = polarisation_factor(coat(CORE, shell), MEDIUM, outline.depolarisation)[0]
    assert found == pytest.approx(-0.143154073279 - 0.0892426174058j, rel=1e-9)


def test_sphere_is_the_limit_of_the_coated_spheroid():
    # Printed: depolarising factor ⅓ and share 0.9³ of the volume.
    expected = -0.220717356991 - 0.0556932811122j
    for outline in (Outline(np.ones(3)), Sphere(np.array(1.0))):
        shell, _ = outline.shell(0.1, COAT)
        whole = polarisation_factor(coat(CORE, shell), MEDIUM, outline.depolarisation)
        np.testing.assert_allclose(whole, expected, rtol=1e-11)


@pytest.mark.parametrize("axes", [(2.0, 1.0), (1.0, 2.0)])
@pytest.mark.parametrize("across", [False, True])
def test_factor_and_voltage_of_a_coat_solved_anew(axes, across):
    along, wide = axes
    outline = Outline(np.array([along, wide, wide]))
    shell, inner = outline.shell(0.0975, COAT)
    factor, voltage = Spheroid(axes, tuple(inner.poles[:2])).solved((CORE, COAT, MEDIUM), across)
    axis = 1 if across else 0
    found = polarisation_factor(coat(CORE, shell), MEDIUM, outline.depolarisation)[axis]
    assert found == pytest.approx(factor, rel=1e-7)
    poles, factors_ = outline.poles, outline.depolarisation
    (drop,) = pole_voltages(CORE, [shell], MEDIUM, poles, factors_)
    assert drop[axis] == pytest.approx(voltage, rel=1e-7)


@pytest.mark.parametrize("axes", [(3.3e-6, 3.3e-6, 1.65e-6), (2e-6, 0.5e-6, 0.4e-6)])
def test_thin_membrane_is_the_limit_of_a_thin_shell(axes):
    # At constant capacitance and conductance per area, first order in the thickness.
    omega = 2 * np.pi * np.geomspace(1e3, 1e9, 13)
    core = Material(relative_permittivity=60, conductivity=0.5).complex_permittivity(omega)
    medium = complex_permittivity(78.5 * VACUUM, 0.1, omega)
    outline = Outline(np.reshape(axes, (3, 1)))
    thin = ThinShell(complex_permittivity(0.01, 100.0, omega), outline.thin_length)
    wanted = seal(core, thin)
    drops = pole_voltages(core, [thin], medium, outline.poles, outline.depolarisation)[0]
    errors = []
    for thickness in (2e-9, 1e-9, 0.5e-9):
        part = complex_permittivity(0.01 * thickness, 100.0 * thickness, omega)
        shell, _ = outline.shell(thickness, part)
        errors.append(np.max(np.abs(coat(core, shell) / wanted - 1)))
        (drop,) = pole_voltages(core, [shell], medium, outline.poles, outline.depolarisation)
        np.testing.assert_allclose(drop, drops, rtol=4 * thickness / min(axes) + 1e-4)
    np.testing.assert_allclose(np.divide(errors[:-1], errors[1:]), 2.0, rtol=2e-2)


def red_cell(**change):
    """Human red cell, Gimsa et al. 1996 Biophys. J. 71:495: oblate, with a dispersing cytoplasm."""
    return Ellipsoid(
        name="red cell",
        **{
            "semi_axes": (3.3e-6, 3.3e-6, 1.65e-6),
            "core": {
                "relative_permittivity": 50,
                "conductivity": 0.4,
                "dispersion_strength": 162,
                "dispersion_frequency": 15e6,
            },
            "layers": [{"capacitance": 9.97e-3, "conductance": 480.0}],
            **change,
        },
    )


def test_cytoplasm_of_the_red_cell_disperses_as_published():
    # 0.4 to 0.535 S/m and 212 to 50 around 15 MHz.
    core = red_cell().core
    for frequency, permittivity, conductivity in ((1e3, 212, 0.4), (15e9, 50, 0.535)):
        omega = np.array(2 * np.pi * frequency)
        value = core.complex_permittivity(omega)
        assert value.real / VACUUM == pytest.approx(permittivity, rel=1e-3)
        assert -value.imag * omega == pytest.approx(conductivity, rel=2e-3)


def test_sphere_limit_of_the_particle():
    cell = {
        "core": {"relative_permittivity": 60, "conductivity": 0.5},
        "layers": [
            {"capacitance": 9e-3, "conductance": 50.0},
            {"thickness": 0.2e-6, "relative_permittivity": 60, "conductivity": 0.02},
        ],
    }
    sphere = ShelledSphere(name="one", radius=4e-6, **cell)
    medium = Medium(2 * np.pi * np.geomspace(1e3, 1e9, 25), 78.5 * VACUUM, np.array(0.05))
    sample = Sample(np.array([[0.8], [1.0], [1.3]]), np.array([[1.2], [1.0], [0.7]]))
    for kept in ("aligned", "random"):
        other = Ellipsoid(name="two", semi_axes=(4e-6,) * 3, orientation=kept, **cell)
        for result in ("polarisation", "membrane_gain", "spinning_factor"):
            found, wanted = (getattr(one, result)(medium, sample) for one in (other, sphere))
            np.testing.assert_allclose(found, wanted, rtol=1e-10, atol=1e-16)
        assert other.alignment(medium) is None
        assert other.spinning_ease == pytest.approx(0.5, rel=1e-12)


def test_a_red_cell_turns_as_an_insulator_and_as_a_conductor_would():
    # At low frequency it insulates and at some MHz it conducts: either way the long axes lie along
    # the field, as least energy wants of any body that keeps its contrast (Jones 1995, chapter 5).
    medium = Medium(2 * np.pi * np.array([1e3, 5e6]), 78.5 * VACUUM, np.array(0.05))
    found = red_cell().alignment(medium)
    assert np.all(found.lengths[found.axis] == 3.3e-6)
    assert np.all(found.advantage > 0.0)
    across = red_cell().factors(medium)[2]
    assert found.advantage == pytest.approx(red_cell().polarisation(medium).real - across.real)


def test_drag_on_a_spinning_spheroid():
    # Rods that spin about a short axis: 8πμa³/3/(ln(2a/b) − ½) for a ≫ b, slender-body theory
    # (Batchelor 1970 J. Fluid Mech. 44:419, from memory). Against it with the torque of one axis.
    rod = Ellipsoid(
        name="rod",
        semi_axes=(10e-6, 0.01e-6, 0.0099e-6),
        core={"relative_permittivity": 60, "conductivity": 0.5},
        layers=[{"capacitance": 9e-3, "conductance": 50.0}],
    )
    a, b, c = rod.semi_axes
    # rate c·(ε/η)·E² of a torque 4πabc·ε·E²: drag per η is 4πabc/c
    drag = 4 * np.pi * a * b * c / rod.spinning_ease
    expected = 8 * np.pi * a**3 / 3 / (np.log(4 * a / (b + c)) - 0.5)
    assert drag == pytest.approx(expected, rel=0.01)
    # A thin disc about its axis: 32μa³/3 (Lamb, Hydrodynamics, article 339, from memory).
    disc = rod.model_copy(update={"semi_axes": (1e-6, 1e-6, 1e-10)})
    drag = 4 * np.pi * 1e-6 * 1e-6 * 1e-10 / disc.spinning_ease
    assert drag == pytest.approx(32e-18 / 3, rel=1e-3)


@pytest.mark.parametrize(
    ("axes", "expected"),
    [
        # √(a² − b²)/ln[(a + √(a² − b²))/b], prolate, and √(a² − c²)/arctan(√(a² − c²)/c), oblate:
        # Perrin 1936 J. Phys. Radium 7:1, from memory.
        ((2e-6, 0.5e-6, 0.5e-6), np.sqrt(3.75) / np.log((2 + np.sqrt(3.75)) / 0.5) * 1e-6),
        ((1.65e-6, 3.3e-6, 3.3e-6), 1.65e-6 * np.sqrt(3) / np.arctan(np.sqrt(3))),
        ((1e-6, 1e-6, 1e-6), 1e-6),
    ],
)
def test_hydrodynamic_radius(axes, expected):
    found = red_cell(semi_axes=axes)
    assert found.hydrodynamic_radius == pytest.approx(expected, rel=1e-9)
    assert found.hydrodynamic_radius >= found.equivalent_radius * (1 - 1e-12)
