"""Laminar flow through a channel of rectangular cross-section, any aspect ratio.

The fully developed profile is the parabola between the two near walls plus a Fourier series that
brings it to rest on the far walls; its terms fall exponentially with the distance from those.
Coordinates are y from the floor and z from mid-width. Lengths in m, speeds in m/s.

Source: the series as in H. Bruus, *Theoretical Microfluidics* (2008), section 3.4.6.
"""

import numpy as np
from numpy.typing import ArrayLike

from model.arrays import Real

#: Odd terms at most; what is left out directly on the far walls is below 1e-5 of the mean speed.
_MOST_TERMS = 200
#: exp(−36) is the rounding error of a float.
_NEGLIGIBLE = 36.0
_SUM_OF_FIFTHS = 1.0045237627951382  # Σ 1/n⁵ over odd n = (31/32)·ζ(5)


def hydraulic_resistance(height: float, width: float, length: float, viscosity: float) -> float:
    """Pressure drop per flow rate, Pa s/m³.

    12ηL/(h³w·[1 − (192h/(π⁵w))·Σ tanh(nπw/2h)/n⁵]), n odd, h the shorter side.

    >>> round(hydraulic_resistance(1.0, 2.0, 1.0, 1.0), 6)
    8.745782
    """
    near, far = min(height, width), max(height, width)
    return 12.0 * viscosity * length / (near**3 * far * _filling(far / near))


def relative_speed(y: ArrayLike, z: ArrayLike, height: float, width: float) -> Real:
    """Speed over mean speed; `y` and `z` broadcast.

    Raises
    ------
    ValueError
        If a point is outside the channel (beyond rounding).
    """
    y, z = np.asarray(y, dtype=float) / height, np.asarray(z, dtype=float) / width
    if not np.all((np.abs(y - 0.5) < 0.5 + 1e-9) & (np.abs(z) < 0.5 + 1e-9)):  # NaN fails too
        raise ValueError("the point is outside the channel")
    y, z = np.clip(y, 0.0, 1.0), np.clip(z, -0.5, 0.5)
    if height <= width:
        return _profile(y, z, width / height)
    return _profile(z + 0.5, y - 0.5, height / width)


def local_speed(rate: float, height: float, width: float, y: ArrayLike, z: ArrayLike = 0.0) -> Real:
    """Speed at points of the cross-section for a flow rate in m³/s, m/s.

    >>> round(float(local_speed(1e-9, 100e-6, 1e-2, 50e-6)) * 1e3, 4)
    1.5095
    """
    return rate / (height * width) * relative_speed(y, z, height, width)


def peak_ratio(height: float, width: float) -> float:
    """Greatest speed over mean speed: 1.5 between wide plates, 2.096 in a square.

    >>> round(peak_ratio(1.0, 1.0), 6)
    2.096256
    """
    return float(relative_speed(0.5 * height, 0.0, height, width))


def _filling(aspect: float) -> float:
    """Flow relative to that of the same width between endless plates; `aspect` ≥ 1."""
    order = np.arange(1, 24, 2)
    # 1 − tanh(x) = 2/(exp(2x) + 1): the sum over tanh is the closed sum less one that falls fast
    short = 2.0 / (np.exp(np.minimum(np.pi * aspect * order, 700.0)) + 1.0)
    total = _SUM_OF_FIFTHS - float(np.sum(short / order**5))
    return 1.0 - 192.0 / (np.pi**5 * aspect) * total


def _profile(near: Real, far: Real, aspect: float) -> Real:
    """Speed over mean speed at `near` in 0..1 across the short side and `far` in ±½ of the long.

    12/filling·[s(1 − s)/2 − (4/π³)·Σ cosh(nπ·aspect·t)/cosh(nπ·aspect/2)·sin(nπs)/n³], n odd,
    s = `near`, t = `far`.
    """
    gap = aspect * (0.5 - float(np.max(np.abs(far), initial=0.0)))  # least distance from far walls
    terms = int(min(_MOST_TERMS, np.ceil(_NEGLIGIBLE / (2.0 * np.pi * max(gap, 1e-9))) + 1))
    order = np.arange(1, 2 * terms, 2)
    wave = np.pi * order
    distance = np.abs(far[..., None]) * aspect
    edge = 0.5 * aspect
    # cosh(a)/cosh(b) without overflow: exp(a − b)·(1 + exp(−2a))/(1 + exp(−2b))
    fall = np.exp(wave * (distance - edge)) * (1.0 + np.exp(-2.0 * wave * distance))
    fall = fall / (1.0 + np.exp(-2.0 * wave * edge)) / order**3
    correction = 4.0 / np.pi**3 * np.sum(fall * np.sin(wave * near[..., None]), axis=-1)
    parabola = 0.5 * near * (1.0 - near)
    # what is left out must not turn the flow round
    return np.asarray(12.0 / _filling(aspect) * np.maximum(parabola - correction, 0.0))
