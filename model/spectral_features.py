"""What stands out in the spectrum of a polarisation factor: its two ends and its largest loss."""

from dataclasses import dataclass

import numpy as np

from model.liquid.liquid import Liquid
from model.particle import Particle

#: Band that is looked at, Hz: that of generators. Search points per factor of ten.
LOWEST, HIGHEST, POINTS_PER_DECADE = 100.0, 1e9, 60
#: A parabola adds far less than this share to a peak, unless Im K jumps as the particle turns.
_SMOOTH = 0.01


@dataclass(frozen=True)
class SpectralFeatures:
    """Ends and peak of K between :data:`LOWEST` and :data:`HIGHEST`.

    Parameters
    ----------
    low, high
        Re K at the lowest and at the highest frequency.
    peak_frequency
        Where |Im K| is largest, Hz; an end of the band where it grows up to there.
    peak
        Im K there, with its sign.
    """

    low: float
    high: float
    peak_frequency: float
    peak: float


def spectral_features(particle: Particle, liquid: Liquid) -> SpectralFeatures:
    """Find the ends and the peak of a particle's spectrum.

    The peak is that of the parabola through the largest of |Im K| and its neighbours on a
    logarithmic axis of frequency, good to 10⁻³ for a single relaxation.
    """
    decades = np.log10(HIGHEST / LOWEST)
    log = np.linspace(np.log(LOWEST), np.log(HIGHEST), round(decades * POINTS_PER_DECADE) + 1)
    factor = particle.polarisation(liquid.medium(2.0 * np.pi * np.exp(log)))
    lossy = factor.imag
    top = int(np.argmax(np.abs(lossy)))
    place, peak = float(log[top]), float(lossy[top])
    if 0 < top < log.size - 1:
        before, after = float(lossy[top - 1]), float(lossy[top + 1])
        bend = 2.0 * peak - before - after
        step = 0.5 * (after - before) / bend if bend else 0.0
        more = 0.25 * (after - before) * step
        if abs(more) < _SMOOTH * abs(peak):
            place, peak = place + step * float(log[1] - log[0]), peak + more
    return SpectralFeatures(
        float(factor.real[0]), float(factor.real[-1]), float(np.exp(place)), peak
    )
