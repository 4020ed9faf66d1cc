"""Spinning and travelling-wave drift against exact values and Maxwell's stress."""

import numpy as np
import pytest

from model import evaluate, load_profile, solve_chip
from model.medium import Medium
from model.motion import drag_parallel, stokes_drag
from model.particles.solid_sphere import SolidSphere
from model.profile import document, parse_design
from model.rotation import rotating_amplitude, rotation_rate, travelling_speed

VACUUM = 8.8541878128e-12


class Half(SolidSphere):
    """A sphere with Re K = 0 and Im K = −½ at every frequency."""

    def polarisation(self, medium, sample=None):
        """−½j."""
        return np.full(np.shape(medium.omega), -0.5j)


BEAD = Half(name="half", radius=3e-6, relative_permittivity=2.5, conductivity=0.0)


def test_rate_of_spinning():
    # −ε_m Im K E²/(2η) from ½Re(p × E*): Arnold and Zimmermann 1988; Jones 1995. With the field.
    medium = Medium(np.array([1e6]), 78.4085 * VACUUM, np.array(0.01), viscosity=0.890e-3)
    rate = rotation_rate(BEAD, medium, 1e4)
    assert rate[0] == pytest.approx(19.501224, rel=1e-7)
    torque = 8 * np.pi * 0.890e-3 * (5e-6) ** 3 * rate[0]
    assert torque == pytest.approx(5.4525764e-17, rel=1e-7)


def design_of(chip, **drive):
    data = document(load_profile("demo_profiles/rinse-water-yeast.toml"))
    data["chip"] = {**data["chip"], **chip}
    data["drive"].update(drive)
    for key in chip.get("drop", ()):
        data["chip"].pop(key, None)
    data["chip"].pop("drop", None)
    return parse_design(data)


@pytest.fixture(scope="module")
def wave():
    """Four-phase bars of 10 µm in a channel so high that only the wave itself is felt."""
    design = design_of(
        {"layout": "four-phase-bars", "bar_width": "10 um", "gap": "10 um", "bar_count": 100},
        voltage="4 V",
    )
    task = design.task.model_copy(update={"working_height": 20e-6})
    return evaluate(design.model_copy(update={"task": task}), solve_chip(design.chip))


def test_drift_along_a_travelling_wave(wave):
    # F = −2πε a³ Im K·k|E|² along the wave, of which the potential is 0.793988854·V₀·e^(−ky), exact
    # mixed problem, V₀ = 1 V peak of each phase, 4 V
    # between the peaks of opposite ones; 2 % for its third harmonic and the lid.
    at = wave.point
    speed = float(travelling_speed(at, BEAD)[0]) * wave.rms_voltage**2
    k = np.pi / 40e-6
    square = (0.793988854 * k * np.exp(-k * 20e-6)) ** 2 * 2
    force = 2 * np.pi * at.liquid.permittivity * (3e-6) ** 3 * 0.5 * k * square
    drag = float(stokes_drag(3e-6, at.liquid.viscosity, 1.0)) * float(drag_parallel(20 / 3))
    share = abs(wave.share) ** 2
    assert abs(speed) == pytest.approx(force / drag * share, rel=0.02)
    amplitude = rotating_amplitude(at) * wave.rms_voltage
    assert amplitude == pytest.approx(np.sqrt(square / 2), rel=0.02)


def test_rotating_field_in_the_middle_of_four_poles():
    # Both components are equal by symmetry and a quarter of a turn apart: circular, as long as the
    # peak of either.
    design = design_of(
        {
            "layout": "four-pole",
            "tip_gap": "200 um",
            "pole_shape": "hyperbolic",
            "depth": "60 um",
            "drive": "quadrature",
            "channel_width": "2 mm",
            "drop": ("bar_width", "gap", "bar_count", "channel_height"),
        }
    )
    result = evaluate(design, solve_chip(design.chip))
    field = result.patterns.electric_field(0.0, 0.0)
    assert abs(field[0]) == pytest.approx(abs(field[1]), rel=1e-4)
    expected = np.sqrt(2.0) * abs(field[0])  # amplitude of one V rms
    assert rotating_amplitude(result.point) == pytest.approx(float(expected), rel=1e-3)
    assert travelling_speed(result.point, BEAD) is None


def test_where_nothing_turns():
    design = load_profile("demo_profiles/rinse-water-yeast.toml")
    result = evaluate(design, solve_chip(design.chip))
    assert rotating_amplitude(result.point) is None
    assert travelling_speed(result.point, design.particles[0]) is None
