"""Ends and largest loss of spectra against the single relaxation of a homogeneous sphere."""

import numpy as np
import pytest
from scipy.constants import epsilon_0

from model.liquid.liquid import Liquid
from model.particles.solid_sphere import SolidSphere
from model.spectral_features import HIGHEST, LOWEST, spectral_features


@pytest.mark.parametrize(
    ("conductivity", "medium"), [(0.02, 0.001), (1e-3, 0.05), (0.3, 0.3), (1e-4, 1e-4)]
)
def test_a_homogeneous_sphere_relaxes_once(conductivity, medium):
    """Limits of K, its relaxation and the half height of its loss peak.

    T. B. Jones, Electromechanics of Particles (1995), chapter 2: K goes from
    (σp − σm)/(σp + 2σm) to (εp − εm)/(εp + 2εm) at f = (σp + 2σm)/(2π(εp + 2εm)); of a single
    relaxation the largest loss is half the step (Debye).
    """
    sphere = SolidSphere(
        name="bead", radius=1e-6, relative_permittivity=2.55, conductivity=conductivity
    )
    liquid = Liquid(conductivity=medium, temperature=298.15, relative_permittivity=78.0)
    found = spectral_features(sphere, liquid)
    slow = (conductivity - medium) / (conductivity + 2.0 * medium)
    fast = (2.55 - 78.0) / (2.55 + 2.0 * 78.0)
    relaxation = (conductivity + 2.0 * medium) / (2.0 * np.pi * epsilon_0 * (2.55 + 2.0 * 78.0))
    assert LOWEST < relaxation < HIGHEST
    assert found.low == pytest.approx(slow, abs=1e-3)
    assert found.high == pytest.approx(fast, abs=5e-3)
    assert found.peak_frequency == pytest.approx(relaxation, rel=2e-3)
    # exp(+jωt): K falling with frequency has a negative imaginary part
    assert found.peak == pytest.approx(0.5 * (fast - slow), rel=1e-3)


def test_a_peak_beyond_the_band_is_told_at_its_end():
    sphere = SolidSphere(name="metal", radius=1e-6, relative_permittivity=2.0, conductivity=1e4)
    liquid = Liquid(conductivity=0.01, temperature=298.15)
    assert spectral_features(sphere, liquid).peak_frequency == pytest.approx(HIGHEST)
