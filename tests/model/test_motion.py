"""Laws of drag and weight that hold whatever the numbers."""

import numpy as np
import pytest

from model import motion

FACTORS = [motion.drag_parallel, motion.drag_held, motion.drag_perpendicular]


@pytest.mark.parametrize("factor", FACTORS)
def test_wall_factors_fall_to_one_with_height(factor):
    height = 1.0 + np.geomspace(1e-9, 1e9, 4001)
    values = factor(height)
    assert np.all(np.diff(values) <= 1e-12 * values[1:])
    assert np.all(values >= 1.0)
    assert values[-1] == pytest.approx(1.0, abs=2e-6)
    assert factor(np.inf) == pytest.approx(1.0, abs=2e-6)


@pytest.mark.parametrize("factor", FACTORS)
def test_wall_factors_keep_shapes(factor):
    assert factor(2.0).shape == ()
    assert factor(np.full((3, 1, 2), 2.0)).shape == (3, 1, 2)
    np.testing.assert_allclose(factor(np.array([1.2, 3.0])), [factor(1.2), factor(3.0)])


@pytest.mark.parametrize("factor", FACTORS)
@pytest.mark.parametrize("height", [0.99, 0.0, -2.0, np.nan, [2.0, 0.5]])
def test_a_sphere_inside_the_wall_is_refused(factor, height):
    with pytest.raises(ValueError, match="at least one radius"):
        factor(height)


def test_contact():
    assert motion.drag_parallel(1.0) == np.inf
    assert motion.drag_perpendicular(1.0) == np.inf
    assert motion.drag_held(1.0 - 1e-12) == motion.drag_held(1.0)  # rounding is no error


def test_the_two_forms_of_perpendicular_drag_meet():
    below, above = motion.drag_perpendicular([1.01 - 1e-9, 1.01 + 1e-9])
    # steep there: 1/ε² times the step
    assert below - above == pytest.approx(2e-9 / 1e-4, abs=2e-6)


def test_weight_carries_the_sign_of_the_excess():
    assert motion.net_weight(5e-6, -20.0) == -motion.net_weight(5e-6, 20.0) < 0.0
    assert motion.sedimentation_speed(5e-6, -20.0, 1e-3) < 0.0
    assert motion.net_weight(5e-6, 0.0) == 0.0


def test_motion_broadcasts():
    radius, speed = np.array([1e-6, 2e-6]), np.array([[1e-4], [2e-4], [3e-4]])
    assert motion.stokes_drag(radius, 1e-3, speed).shape == (3, 2)
    factor = np.linspace(-0.5, 1.0, 4)[:, None, None]
    assert motion.dielectrophoretic_force(7e-10, radius, factor, speed * 1e17).shape == (4, 3, 2)
