"""Flow through rectangular channels of any aspect ratio."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from model import channel

lengths = st.floats(1e-6, 1e-2)
fractions = st.floats(0.0, 1.0)


def panels(edges, points=24):
    """Gauss–Legendre nodes and weights on each piece between the edges."""
    nodes, weights = np.polynomial.legendre.leggauss(points)
    spans = np.diff(edges)[:, None]
    return (edges[:-1, None] + spans * (nodes + 1) / 2).ravel(), (spans * weights / 2).ravel()


@pytest.mark.parametrize("aspect", [1.0, 1.3, 4.0, 30.0, 1000.0])
def test_profile_carries_the_flow(aspect):
    # a quarter of the section; on the long side the profile bends within a few heights of its end
    y, share_y = panels(np.array([0.0, 0.02, 0.1, 0.5]))
    bends = 0.5 * aspect - np.array([3.0, 1.0, 0.3, 0.1, 0.02, 0.003, 0.0])
    z, share_z = panels(np.concatenate([[0.0], bends[bends > 0.0]]))
    speed = channel.relative_speed(y[:, None], z, 1.0, aspect)
    assert 4.0 * share_y @ speed @ share_z / aspect == pytest.approx(1.0, rel=1e-7)
    # the same turned by a right angle
    turned = channel.relative_speed(z[:, None] + 0.5 * aspect, y - 0.5, aspect, 1.0)
    np.testing.assert_allclose(turned, speed.T, rtol=1e-9, atol=1e-5)


def test_stokes_equation_holds():
    # ∇²u is the same constant everywhere: −R·h·w with unit viscosity and length
    height, width, step = 1.0, 1.7, 1e-3
    y, z = np.array([[0.2], [0.5], [0.83]]), np.array([-0.7, -0.1, 0.4])

    def speed(up, aside):
        return channel.relative_speed(y + up * step, z + aside * step, height, width)

    around = speed(1, 0) + speed(-1, 0) + speed(0, 1) + speed(0, -1) - 4 * speed(0, 0)
    expected = -channel.hydraulic_resistance(height, width, 1.0, 1.0) * height * width
    np.testing.assert_allclose(around / step**2, expected, rtol=1e-4)


@given(lengths, lengths, fractions, fractions)
def test_speed_is_bounded_symmetric_and_at_rest_on_the_walls(height, width, up, aside):
    y, z = up * height, (aside - 0.5) * width
    speed = channel.relative_speed(y, z, height, width)
    assert 0.0 <= speed <= channel.peak_ratio(height, width) * (1 + 1e-9)
    mirrored = channel.relative_speed(height - y, -z, height, width)
    assert mirrored == pytest.approx(float(speed), rel=1e-6, abs=1e-9)
    for wall in ((0.0, z), (height, z), (y, width / 2), (y, -width / 2)):
        assert channel.relative_speed(*wall, height, width) == pytest.approx(0.0, abs=2e-5)


@given(lengths, lengths)
def test_resistance_and_peak_do_not_mind_which_side_is_called_height(height, width):
    one = channel.hydraulic_resistance(height, width, 0.01, 1e-3)
    assert one == channel.hydraulic_resistance(width, height, 0.01, 1e-3)
    assert channel.peak_ratio(height, width) == pytest.approx(
        channel.peak_ratio(width, height), rel=1e-9
    )
    assert 1.5 - 1e-9 <= channel.peak_ratio(height, width) <= 2.0963


def test_wide_channel_is_a_slit():
    y = np.linspace(0.0, 1.0, 11)
    np.testing.assert_allclose(channel.relative_speed(y, 0.0, 1.0, 1e6), 6 * y * (1 - y), rtol=1e-6)
    assert channel.hydraulic_resistance(1.0, 1e6, 1.0, 1.0) == pytest.approx(12e-6, rel=1e-6)


def test_local_speed_scales_with_the_rate():
    # 1 µL/min through 100 µm × 2 mm: a mean of 83.3 µm/s
    rate = 1e-9 / 60
    mean = rate / (100e-6 * 2e-3)
    found = channel.local_speed(rate, 100e-6, 2e-3, np.array([10e-6, 50e-6]))
    expected = mean * channel.relative_speed(np.array([10e-6, 50e-6]), 0.0, 100e-6, 2e-3)
    np.testing.assert_allclose(found, expected, rtol=1e-12)
    assert channel.local_speed(0.0, 100e-6, 2e-3, 10e-6) == 0.0


@pytest.mark.parametrize(
    ("y", "z"), [(-0.01, 0.0), (1.01, 0.0), (0.5, 1.01), (0.5, -1.01), (np.nan, 0.0)]
)
def test_points_outside_are_refused(y, z):
    with pytest.raises(ValueError, match="outside the channel"):
        channel.relative_speed(y, z, 1.0, 2.0)
