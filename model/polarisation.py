"""Polarisation of layered spheres: the factor K and the voltage across every layer.

Phasors are exp(+jωt) and every permittivity is complex and absolute, ε̃ = ε − jσ/ω in F/m. All
arguments broadcast against one another; by convention frequency is the last axis, with medium
conductivity and particle samples before it. The solutions are exact in the electrostatic limit
(particle far smaller than the wavelength), for any contrast and any thickness.

Source: T. B. Jones, *Electromechanics of Particles* (1995), for K and the shell; the voltages
are read off the same solution of Laplace's equation.
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from model.arrays import Complex, Real

#: Real numbers, and any numbers, alone or in arrays.
Scalar = Real | float
Value = Complex | Real | complex


@dataclass(frozen=True)
class Shell:
    """A concentric layer of finite thickness: outer and inner radius in m, ε̃ in F/m."""

    outer: Scalar
    inner: Scalar
    permittivity: Value


@dataclass(frozen=True)
class ThinShell:
    """A layer without thickness: radius in m and c̃ = C + G/(jω) in F/m²."""

    radius: Scalar
    capacitance: Value


Stack = Sequence[Shell | ThinShell]


def complex_permittivity(permittivity: Scalar, conductivity: Scalar, omega: Real) -> Complex:
    """ε̃ = ε − jσ/ω in F/m, of ε in F/m, σ in S/m and ω > 0 in rad/s.

    With F/m² and S/m² it is c̃ = C − jG/ω of a membrane, in F/m².
    """
    loss: Real = np.asarray(conductivity) / omega
    return np.asarray(permittivity - 1j * loss)


def clausius_mossotti(particle: Value, medium: Value) -> Complex:
    """Polarisation factor K = (ε̃p − ε̃m)/(ε̃p + 2ε̃m) of a sphere, dimensionless.

    −½ ≤ Re K ≤ 1 and |Im K| ≤ ¾.
    """
    contrast = np.asarray(particle) / medium
    return np.asarray((contrast - 1.0) / (contrast + 2.0))


def coat(inner: Value, shell: Value, ratio: Scalar) -> Complex:
    """ε̃ of the homogeneous sphere that equals a sphere `inner` in one coat `shell`.

    ε̃s(γ³ + 2β)/(γ³ − β) with β = (ε̃in − ε̃s)/(ε̃in + 2ε̃s) and γ = `ratio` ≥ 1, outer over inner
    radius; written without β, so that nothing cancels when the coat is thin.
    """
    ratio = np.asarray(ratio)
    excess = (ratio - 1.0) * (ratio * (ratio + 1.0) + 1.0)  # γ³ − 1
    contrast = np.asarray(inner) / shell
    above = (excess + 3.0) * contrast + 2.0 * excess
    return np.asarray(shell * (above / (excess * contrast + (2.0 * excess + 3.0))))


def seal(inner: Value, capacitance: Value, radius: Scalar) -> Complex:
    """ε̃ of the homogeneous sphere that equals a sphere `inner` behind a thin membrane.

    In series: 1/ε̃ = 1/ε̃in + 1/(c̃r), with c̃ = C + G/(jω) in F/m² and the radius in m. It is the
    limit of :func:`coat` for a thickness that vanishes at constant C and G.
    """
    return np.asarray(inner / (1.0 + inner / (np.asarray(capacitance) * radius)))


def effective_permittivities(core: Value, stack: Stack) -> list[Complex]:
    """ε̃ of the homogeneous spheres that equal what lies inside: the core, then after each layer.

    Parameters
    ----------
    core
        ε̃ of the core.
    stack
        Layers from the core outward; each inner radius is the outer radius of the one before.
    """
    inside = [np.asarray(core, dtype=complex)]
    for layer in stack:
        if isinstance(layer, ThinShell):
            inside.append(seal(inside[-1], layer.capacitance, layer.radius))
        else:
            ratio = np.asarray(layer.outer) / np.asarray(layer.inner)
            inside.append(coat(inside[-1], layer.permittivity, ratio))
    return inside


def pole_voltages(core: Value, stack: Stack, medium: Value, radius: Scalar) -> list[Complex]:
    """Voltage across each layer at the pole per applied field, outer minus inner side, in m.

    Found from the medium inward. With E0 = 1 along +z the potential at the outer pole is
    −R(1 − K); within a shell it follows r − βr_i³/r², β being the polarisation factor of what
    lies inside it; across a membrane φ_in = φ_out·c̃r/(c̃r + ε̃in). The field is homogeneous, the
    phase relative to it.

    Parameters
    ----------
    core, stack
        As for :func:`effective_permittivities`.
    medium
        ε̃ of the medium.
    radius
        Outer radius R of the particle, m.

    Returns
    -------
    list of arrays
        One for each layer of the stack, in its order; the broadcast shape of all that is given.
    """
    inside = effective_permittivities(core, stack)
    outer = -np.asarray(radius) * (1.0 - clausius_mossotti(inside[-1], medium))
    found = []
    for layer, within in zip(reversed(stack), reversed(inside[:-1]), strict=True):
        if isinstance(layer, ThinShell):
            drop = outer / (1.0 + layer.capacitance * np.asarray(layer.radius) / within)
        else:
            beta = clausius_mossotti(within, layer.permittivity)
            ratio = np.asarray(layer.inner) / np.asarray(layer.outer)
            drop = outer * _fall(beta, ratio)
        found.append(drop)
        outer = outer - drop
    return found[::-1]


def _fall(beta: Complex, ratio: Real) -> Complex:
    """Share of the potential that is lost between ρ = 1 and ρ = ratio for φ ∝ ρ − β·ratio³/ρ².

    1 − ratio(1 − β)/(1 − β·ratio³), with the difference taken before it can cancel.
    """
    thin = 1.0 - ratio
    return thin * (1.0 + beta * ratio * (1.0 + ratio)) / (1.0 - beta * ratio**3)
