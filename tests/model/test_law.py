"""One law and the voltage at which it meets its threshold."""

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from model.law import Law

COEFFICIENT = st.floats(1e-20, 1e20)
ROOM = st.floats(1e-9, 1e9)


@given(COEFFICIENT, ROOM, st.sampled_from([1, 2, 4]), st.floats(-500.0, 500.0))
def test_at_the_bound_the_value_is_what_is_allowed(coefficient, room, power, offset):
    law = Law(coefficient, power, offset + room, offset=offset)
    bound = float(law.bound())
    # the room itself is a difference of two numbers, so that is all that can be asked of it
    assert float(law.value(bound)) == pytest.approx(offset + room, rel=1e-9, abs=1e-9)


@pytest.mark.parametrize("power", [1, 2, 4])
def test_value_grows_with_its_power(power):
    law = Law(3.0, power, 1.0)
    assert law.value(4.0) / law.value(2.0) == 2.0**power


@pytest.mark.parametrize("power", [1, 2, 4])
def test_edges_of_a_ceiling(power):
    assert Law(0.0, power, 1.0).bound() == math.inf  # never grows: any voltage
    assert Law(math.inf, power, 1.0).bound() == 0.0  # out of all bounds
    assert Law(2.0, power, 1.0, offset=1.0).bound() == 0.0  # no room
    assert Law(2.0, power, 1.0, offset=3.0).bound() == 0.0  # broken before any voltage
    assert Law(0.0, power, 1.0, offset=1.0).bound() == 0.0


@pytest.mark.parametrize("power", [1, 2, 4])
def test_edges_of_a_floor(power):
    assert Law(0.0, power, 1.0, sense="least").bound() == math.inf  # no voltage is enough
    assert Law(2.0, power, 0.0, sense="least").bound() == 0.0  # nothing is asked
    assert Law(0.0, power, 0.0, sense="least").bound() == 0.0


@pytest.mark.parametrize(
    ("value", "allowed", "sense", "bound"),
    [
        (1.0, 2.0, "most", math.inf),
        (3.0, 2.0, "most", 0.0),
        (3.0, 2.0, "least", 0.0),
        (1.0, 2.0, "least", math.inf),
        (2.0, 2.0, "most", math.inf),
        (2.0, 2.0, "least", 0.0),
        (-1.0, 0.0, "least", math.inf),
    ],
)
def test_a_condition_holds_at_every_voltage_or_at_none(value, allowed, sense, bound):
    law = Law(value, 0, allowed, sense=sense)
    assert law.bound() == bound
    assert law.value(1.0) == law.value(100.0) == value


def test_shapes_are_kept():
    law = Law(np.ones((3, 1, 5)), 2, 4.0)
    assert law.bound().shape == (3, 1, 5)
    assert law.value(2.0).shape == (3, 1, 5)
    assert np.all(law.bound() == 2.0)


def test_value_over_many_voltages():
    law = Law(np.array([1.0, 2.0, 3.0]), 2, 4.0, offset=1.0)
    found = law.value(np.array([[1.0], [2.0]]))
    np.testing.assert_allclose(found, [[2.0, 3.0, 4.0], [5.0, 9.0, 13.0]])


GROWTH = st.floats(-0.5, 0.5)


@given(COEFFICIENT, st.floats(1e-3, 1e3), st.sampled_from([1, 2, 4]), GROWTH)
def test_bound_of_what_drives_itself_on(coefficient, room, power, growth):
    law = Law(coefficient, power, 20.0 + room, offset=20.0, growth=growth)
    assert float(law.value(law.bound())) == pytest.approx(20.0 + room, rel=1e-6)


def test_growth_of_either_sign_moves_the_bound_the_right_way():
    bounds = [float(Law(1.0, 2, 4.0, growth=growth).bound()) for growth in (-0.1, 0.0, 0.1)]
    assert bounds == sorted(bounds, reverse=True)
    values = [float(Law(1.0, 2, 4.0, growth=growth).value(2.0)) for growth in (-0.1, 0.0, 0.1)]
    assert values == sorted(values)


def test_no_steady_value_beyond_the_point_of_runaway():
    law = Law(1.0, 2, 1e6, growth=0.02)
    assert np.isfinite(law.value(7.0))
    assert law.value(math.sqrt(50.0) * (1 + 1e-12)) == math.inf
    assert law.value(100.0) == math.inf
    assert law.bound() == pytest.approx(
        math.sqrt(50.0), rel=1e-3
    )  # no rise, however large, lies on
    assert Law(math.inf, 2, 1.0, growth=0.02).bound() == 0.0
    assert Law(math.inf, 2, 1.0, growth=0.02).value(1.0) == math.inf
