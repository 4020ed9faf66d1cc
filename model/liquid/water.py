"""Pure water at atmospheric pressure as a function of temperature.

Source: IAPWS SR6-08(2011), *Revised Supplementary Release on Properties of Liquid Water at
0.1 MPa*, explicit formulas, valid from 253.15 K to 383.15 K (supercooled below 273.15 K,
superheated above 372.76 K). Stated uncertainty near room temperature: density 1 ppm, heat
capacity 0.1 %, viscosity 1 %, thermal conductivity 2 %, static permittivity 0.02.

Every function takes a temperature in K, a number or an array of any shape, and returns an array
of that shape. A temperature outside the range is a :class:`ValueError`.
"""

import numpy as np
from numpy.typing import ArrayLike

from model.arrays import Real

LOWEST_TEMPERATURE = 253.15
HIGHEST_TEMPERATURE = 383.15

# R·T_R of the release: specific gas constant 461.51805 J/(kg K) times the reducing 10 K.
_GAS = 461.51805
_REDUCING = 10.0
_PRESSURE = 1e5

# Density: coefficients and powers of α = 10 K/(593 K − T) and β = 10 K/(T − 232 K).
_VOLUME_CONSTANT = 1.93763157e-2
_VOLUME_ALPHA = (
    (6.74458446e3, 4),
    (-2.22521604e5, 5),
    (1.00231247e8, 7),
    (-1.63552118e9, 8),
    (8.32299658e9, 9),
)
_VOLUME_BETA = (
    (5.78545292e-3, 1),
    (-1.53195665e-2, 2),
    (3.11337859e-2, 3),
    (-4.23546241e-2, 4),
    (3.38713507e-2, 5),
    (-1.19946761e-2, 6),
)
# Heat capacity: the same variables.
_HEAT_CONSTANT = -8.983025854
_HEAT_ALPHA = ((-1.661470539e5, 4), (2.708781640e6, 5), (-1.557191544e8, 7))
_HEAT_BETA = ((-8.237426256e-1, 2), (1.908956353, 3), (-2.017597384, 4), (8.546361348e-1, 5))
# The rest: coefficients and powers of T/300 K.
_VISCOSITY = ((280.68e-6, -1.9), (511.45e-6, -7.7), (61.131e-6, -19.6), (0.45903e-6, -40.0))
_CONDUCTIVITY = ((1.6630, -1.15), (-1.7781, -3.4), (1.1567, -6.0), (-0.432115, -7.6))
_PERMITTIVITY = ((-43.7527, -0.05), (299.504, -1.47), (-399.364, -2.11), (221.327, -2.31))


def density(temperature: ArrayLike) -> Real:
    """Density, kg/m³.

    >>> round(float(density(298.15)), 4)
    997.047
    """
    kelvin = _checked(temperature)
    alpha, beta = _REDUCING / (593.0 - kelvin), _REDUCING / (kelvin - 232.0)
    reduced = _VOLUME_CONSTANT + _powers(_VOLUME_ALPHA, alpha) + _powers(_VOLUME_BETA, beta)
    return _PRESSURE / (_GAS * _REDUCING * reduced)


def heat_capacity(temperature: ArrayLike) -> Real:
    """Heat capacity at constant pressure, J/(kg K).

    >>> round(float(heat_capacity(298.15)), 2)
    4181.45
    """
    kelvin = _checked(temperature)
    alpha, beta = _REDUCING / (593.0 - kelvin), _REDUCING / (kelvin - 232.0)
    curved = [
        sum(n * (n + 1) * factor * base ** (n + 2) for factor, n in terms)
        for terms, base in ((_HEAT_ALPHA, alpha), (_HEAT_BETA, beta))
    ]
    return -_GAS * (_HEAT_CONSTANT + kelvin / _REDUCING * (curved[0] + curved[1]))


def viscosity(temperature: ArrayLike) -> Real:
    """Dynamic viscosity η, Pa s.

    >>> round(float(viscosity(298.15)) * 1e6, 3)
    889.997
    """
    return _powers(_VISCOSITY, _checked(temperature) / 300.0)


def thermal_conductivity(temperature: ArrayLike) -> Real:
    """Thermal conductivity, W/(m K).

    >>> round(float(thermal_conductivity(298.15)), 4)
    0.6065
    """
    return _powers(_CONDUCTIVITY, _checked(temperature) / 300.0)


def relative_permittivity(temperature: ArrayLike) -> Real:
    """Relative permittivity ε at zero frequency.

    >>> round(float(relative_permittivity(298.15)), 4)
    78.3752
    """
    return _powers(_PERMITTIVITY, _checked(temperature) / 300.0)


def permittivity_slope(temperature: ArrayLike) -> Real:
    """Relative slope d ln ε/dT of the static permittivity at constant pressure, 1/K.

    >>> round(float(permittivity_slope(298.15)) * 1e3, 2)
    -4.58
    """
    return _log_slope(_PERMITTIVITY, temperature)


def viscosity_slope(temperature: ArrayLike) -> Real:
    """Relative slope d ln η/dT of the dynamic viscosity at constant pressure, 1/K.

    >>> round(float(viscosity_slope(298.15)) * 1e2, 2)
    -2.28
    """
    return _log_slope(_VISCOSITY, temperature)


def _checked(temperature: ArrayLike) -> Real:
    """Temperature as an array, inside the range of the release."""
    kelvin = np.asarray(temperature, dtype=float)
    # written so that NaN fails too
    if not np.all((kelvin >= LOWEST_TEMPERATURE) & (kelvin <= HIGHEST_TEMPERATURE)):
        raise ValueError(
            f"water properties hold from {LOWEST_TEMPERATURE} K to {HIGHEST_TEMPERATURE} K"
        )
    return kelvin


def _powers(terms: tuple[tuple[float, float], ...], base: Real) -> Real:
    """Sum of factor·base^power."""
    return np.asarray(sum(factor * base**power for factor, power in terms))


def _log_slope(terms: tuple[tuple[float, float], ...], temperature: ArrayLike) -> Real:
    """Relative slope of a sum of powers of T/300 K, term by term."""
    kelvin = _checked(temperature)
    reduced = kelvin / 300.0
    rising = tuple((factor * power, power) for factor, power in terms)
    return _powers(rising, reduced) / (_powers(terms, reduced) * kelvin)
