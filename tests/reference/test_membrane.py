"""Induced membrane voltage against a boundary-value solve of its own and Schwan's equation."""

import numpy as np
import pytest

from model.medium import Medium
from model.outlines import Sphere
from model.particles.shelled_sphere import ShelledSphere
from model.polarisation import ThinShell, complex_permittivity
from model.polarisation import pole_voltages as pole_voltages_along

VACUUM = 8.8541878128e-12  # CODATA 2018
FREQUENCIES = np.array([1e4, 1e5, 1e6, 1e7])


def material(relative, conductivity, frequency):
    return complex_permittivity(VACUUM * relative, conductivity, 2 * np.pi * np.asarray(frequency))


def shell(outer, inner, permittivity):
    return Sphere(outer).shell(outer - inner, permittivity)[0]


def pole_voltages(core, stack, medium, radius):
    return pole_voltages_along(core, stack, medium, radius, 1 / 3)


def solved(radii, permittivities):
    """Voltages at the pole from the whole linear system of the layered sphere, E0 = 1.

    `radii` of the interfaces outward; `permittivities` core, layers, medium. φ = (A r + B/r²)cos θ
    in each region, continuous with ε̃∂φ/∂r, −r cos θ far away. Unknowns are scaled with the outer
    radius.
    """
    count, size = len(radii), radii[-1]
    matrix = np.zeros((2 * count, 2 * count), dtype=complex)
    right = np.zeros(2 * count, dtype=complex)

    def columns(region):
        return (None if region == count else 2 * region, None if region == 0 else 2 * region - 1)

    for index, radius in enumerate(np.asarray(radii) / size):
        for region, sign in ((index, 1.0), (index + 1, -1.0)):
            straight, dipole = columns(region)
            ratio = permittivities[region] / permittivities[-1]
            if straight is None:
                right[2 * index] += sign * radius
                right[2 * index + 1] += sign * ratio
            else:
                matrix[2 * index, straight] += sign * radius
                matrix[2 * index + 1, straight] += sign * ratio
            if dipole is not None:
                matrix[2 * index, dipole] += sign / radius**2
                matrix[2 * index + 1, dipole] -= 2 * sign * ratio / radius**3
    amplitudes = np.linalg.solve(matrix, right)

    def potential(region, radius):
        straight, dipole = columns(region)
        value = -radius if straight is None else amplitudes[straight] * radius
        return value if dipole is None else value + amplitudes[dipole] / radius**2

    scaled = np.asarray(radii) / size
    return [
        size * (potential(index + 1, scaled[index + 1]) - potential(index + 1, scaled[index]))
        for index in range(count - 1)
    ]


@pytest.mark.parametrize(
    ("conductivity", "expected"),
    [
        (1.2, [14.99826, 14.82849, 8.224190, 0.983954]),
        (0.05, [14.95675, 11.93664, 1.961153, 0.256880]),
    ],
)
def test_voltage_at_the_pole_of_a_single_shell(conductivity, expected):
    # Printed: a four-by-four boundary solve, cell of 10 µm, 5 nm membrane of 10 mF/m² rounded to
    # a relative permittivity of 5.647, cytoplasm 70 and 0.5 S/m, medium 78.5.
    inner = 10e-6 - 5e-9
    membrane = complex_permittivity(5.647 * VACUUM, 0.0, 2 * np.pi * FREQUENCIES)
    core, medium = material(70, 0.5, FREQUENCIES), material(78.5, conductivity, FREQUENCIES)
    (found,) = pole_voltages(core, [shell(10e-6, inner, membrane)], medium, 10e-6)
    np.testing.assert_allclose(np.abs(found) * 1e6, expected, rtol=1e-6)
    for index in range(4):
        (again,) = solved([inner, 10e-6], [core[index], membrane[index], medium[index]])
        assert found[index] == pytest.approx(again, rel=1e-9)


def test_every_layer_of_a_deep_stack():
    radii = [2e-6, 2.05e-6, 4e-6, 4.009e-6, 4.3e-6]
    relative = [52, 28, 60, 6, 60, 78.5]
    conductivity = [1.35, 3e-3, 0.4, 1e-7, 0.014, 0.03]
    for frequency in np.geomspace(1e3, 1e9, 13):
        parts = [
            material(one, other, frequency)
            for one, other in zip(relative, conductivity, strict=True)
        ]
        stack = [shell(radii[index + 1], radii[index], parts[index + 1]) for index in range(4)]
        found = pole_voltages(parts[0], stack, parts[-1], radii[-1])
        np.testing.assert_allclose(found, solved(radii, parts), rtol=1e-7)


def test_thin_membranes_are_the_limit_of_thin_shells():
    frequency = np.geomspace(1e3, 1e9, 13)
    omega = 2 * np.pi * frequency
    core, plasma = material(52, 1.35, frequency), material(60, 0.4, frequency)
    medium = material(78.5, 0.1, frequency)
    envelope = complex_permittivity(6.2e-3, 1.5e5, omega)
    membrane = complex_permittivity(8.6e-3, 50.0, omega)
    thin = [ThinShell(envelope, 3e-6), shell(4e-6, 3e-6, plasma), ThinShell(membrane, 4e-6)]
    expected = pole_voltages(core, thin, medium, 4e-6)
    thickness = 1e-12
    thick = [
        shell(3e-6, 3e-6 - thickness, envelope * thickness),
        shell(4e-6 - thickness, 3e-6, plasma),
        shell(4e-6, 4e-6 - thickness, membrane * thickness),
    ]
    for found, wanted in zip(pole_voltages(core, thick, medium, 4e-6), expected, strict=True):
        np.testing.assert_allclose(found, wanted, rtol=2e-6)


def cell(conductance=0.0, *outside):
    return ShelledSphere(
        name="cell",
        radius=10e-6,
        core={"relative_permittivity": 70, "conductivity": 0.5},
        layers=[{"capacitance": 0.01, "conductance": conductance}, *outside],
    )


def gain(particle, frequency, conductivity):
    frequency = np.asarray(frequency, dtype=float)
    outside = Medium(2 * np.pi * frequency, 78.5 * VACUUM, np.asarray(conductivity))
    return particle.membrane_gain(outside)


def test_steady_field():
    # 1.5·E·R at zero frequency: 1.5 V in 1 kV/cm on a cell of 10 µm.
    assert 1e5 * gain(cell(), 1.0, 1.2) == pytest.approx(1.5, rel=1e-6)


@pytest.mark.parametrize(
    ("conductivity", "time", "corner"),
    [(1.2, 0.241667e-6, 658.57e3), (0.05, 1.2e-6, 132.63e3)],
)
def test_schwan_equation(conductivity, time, corner):
    # 1.5·R/√(1 + (ωτ)²), τ = RC(1/σi + 1/(2σe)): Schwan 1957 (from memory), an insulating
    # membrane and media without permittivity.
    tau = 10e-6 * 0.01 * (1 / 0.5 + 1 / (2 * conductivity))
    assert tau == pytest.approx(time, rel=2e-6)
    assert 1 / (2 * np.pi * tau) == pytest.approx(corner, rel=1e-5)
    frequency = np.array([1e4, 1e5])
    schwan = 1.5 * 10e-6 / np.sqrt(1 + (2 * np.pi * frequency * tau) ** 2)
    np.testing.assert_allclose(gain(cell(), frequency, conductivity), schwan, rtol=4e-3)
    # at the corner the voltage is down to 1/√2 of 1.5·R
    assert gain(cell(), corner, conductivity) == pytest.approx(15e-6 / np.sqrt(2), rel=6e-3)


def test_schwan_equation_fails_at_high_frequency_in_a_dilute_medium():
    # There the permittivity of the medium carries current; printed as −22.6 %.
    tau = 1.2e-6
    schwan = 1.5 * 10e-6 / np.hypot(1, 2 * np.pi * 1e7 * tau)
    assert schwan / gain(cell(), 1e7, 0.05) - 1 == pytest.approx(-0.226, abs=0.002)


def test_conducting_membrane_at_steady_field():
    # 1.5·R/(1 + RG(1/σi + 1/(2σe))): Schwan's equation with membrane conductance.
    G, external = 1e4, 1.2
    leak = 1 + 10e-6 * G * (1 / 0.5 + 1 / (2 * external))
    assert gain(cell(G), 1.0, external) == pytest.approx(15e-6 / leak, rel=1e-6)


def test_a_wall_leaves_the_steady_voltage_to_the_membrane():
    # At rest a membrane that insulates takes 1.5·E·r of what conducts around it; a wall that
    # conducts half as well as the medium changes that to the field of a sphere in a sphere.
    wall = {"thickness": 220e-9, "relative_permittivity": 60, "conductivity": 0.015}
    inner, outer = 10e-6 - 220e-9, 10e-6
    # a membrane of 1 pm with next to no conductivity stands for the thin one
    again, _ = solved([inner - 1e-12, inner, outer], [0.5, 1e-15, 0.015, 0.03])
    assert gain(cell(0.0, wall), 1e-3, 0.03) == pytest.approx(abs(again), rel=1e-5)
