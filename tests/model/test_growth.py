"""What drives itself on, against conductors whose own heat changes their resistance."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.optimize import brentq

from model.growth import first_order, self_consistent


@pytest.mark.parametrize("first", [0.01, 0.3, 0.9, 0.999])
def test_uniform_conductor_at_a_held_voltage_runs_away(first):
    """σ(T) = σ₀(1 + cΔT): heat ΔT₀(1 + cΔT) = ΔT, so ΔT = ΔT₀/(1 − cΔT₀), none from cΔT₀ = 1."""
    c = 0.02
    steady = brentq(lambda rise: first / c * (1 + c * rise) - rise, 0.0, 1e6)
    assert self_consistent(first / c, c) == pytest.approx(steady, rel=1e-9)
    assert self_consistent(1.001 / c, c) == np.inf


@pytest.mark.parametrize("first", [0.01, 1.0, 30.0])
def test_uniform_conductor_at_a_held_current_holds_itself_back(first):
    """The same at a held current: heat ΔT₀/(1 + cΔT) = ΔT."""
    c = 0.02
    steady = brentq(lambda rise: first / c / (1 + c * rise) - rise, 0.0, 1e6)
    assert self_consistent(first / c, -c) == pytest.approx(steady, rel=1e-9)


def test_between_isothermal_electrodes_it_lies_above_the_exact_rise():
    """Kohlrausch 1900: ΔT = (exp(cΔT₀) − 1)/c, so that growth is c/2; equal to second order."""
    c = 0.02
    linear = np.array([0.01, 0.02, 0.5, 1.0, 1.9]) / c
    exact = np.expm1(c * linear) / c
    found = self_consistent(linear, 0.5 * c)
    assert np.all(found > exact)
    miss = (found - exact)[:2] / linear[:2]
    assert np.log2(miss[1] / miss[0]) == pytest.approx(2.0, abs=0.05)  # third order is what is left
    assert found[0] == pytest.approx(exact[0], rel=1e-5)


@given(st.floats(0.0, 1e6), st.floats(-10.0, 10.0))
def test_inverse(value, growth):
    assert self_consistent(first_order(value, growth), growth) == pytest.approx(value, rel=1e-6)


def test_edges():
    assert self_consistent(np.inf, 0.0) == np.inf
    assert self_consistent(np.inf, -0.1) == np.inf
    assert self_consistent(0.0, 5.0) == 0.0
    assert first_order(0.0, -3.0) == 0.0
    assert self_consistent(np.ones((2, 1)), np.zeros(3)).shape == (2, 3)
