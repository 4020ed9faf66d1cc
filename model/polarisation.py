"""Polarisation of layered particles: the factor K and the voltage across every layer.

Phasors are exp(+jωt) and every permittivity is complex and absolute, ε̃ = ε − jσ/ω in F/m. All
arguments broadcast against one another; by convention frequency is the last axis, with medium
conductivity and particle samples before it. The solutions are exact in the electrostatic limit
(particle far smaller than the wavelength), for any contrast and any thickness, along one axis of
confocal ellipsoids; spheres are those of depolarising factor ⅓.

Source: T. B. Jones, *Electromechanics of Particles* (1995), for K and the spherical shell; C. F.
Bohren and D. R. Huffman, *Absorption and Scattering of Light by Small Particles* (1983), section
5.4, for the confocal one; the voltages are read off the same solutions of Laplace's equation.
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
    """A layer of finite thickness, along one axis or along several in a leading dimension.

    Parameters
    ----------
    permittivity
        ε̃ of the layer, F/m.
    missing
        Its share 1 − v of the volume within its outer surface.
    spread
        A_in − v·A_out, with the depolarising factors of both surfaces.
    depolarisation
        A_in, that of its inner surface.
    thinning
        Its thickness at the pole over the outer semi-axis.
    """

    permittivity: Value
    missing: Scalar
    spread: Scalar
    depolarisation: Scalar
    thinning: Scalar


@dataclass(frozen=True)
class ThinShell:
    """A layer without thickness: c̃ = C + G/(jω) in F/m², and its length ℓ in m (see `seal`)."""

    capacitance: Value
    length: Scalar


Stack = Sequence[Shell | ThinShell]


def complex_permittivity(permittivity: Scalar, conductivity: Scalar, omega: Real) -> Complex:
    """ε̃ = ε − jσ/ω in F/m, of ε in F/m, σ in S/m and ω > 0 in rad/s.

    With F/m² and S/m² it is c̃ = C − jG/ω of a membrane, in F/m².
    """
    loss: Real = np.asarray(conductivity) / omega
    return np.asarray(permittivity - 1j * loss)


def polarisation_factor(particle: Value, medium: Value, depolarisation: Scalar) -> Complex:
    """Polarisation factor K = (ε̃p − ε̃m)/(3[ε̃m + A(ε̃p − ε̃m)]) along an axis, dimensionless.

    A third of (ε̃p − ε̃m)/ε̃m where the depolarising factor A is 0, and for a sphere, A = ⅓, the
    Clausius–Mossotti factor.
    """
    excess = np.asarray(particle) - medium
    return np.asarray(excess / (3.0 * (medium + np.asarray(depolarisation) * excess)))


def clausius_mossotti(particle: Value, medium: Value) -> Complex:
    """Polarisation factor K = (ε̃p − ε̃m)/(ε̃p + 2ε̃m) of a sphere, dimensionless.

    −½ ≤ Re K ≤ 1 and |Im K| ≤ ¾.
    """
    contrast = np.asarray(particle) / medium
    return np.asarray((contrast - 1.0) / (contrast + 2.0))


def coat(inner: Value, shell: Shell) -> Complex:
    """ε̃ of the homogeneous particle that equals a particle `inner` in one coat `shell`.

    ε̃s[ε̃s + (ε̃in − ε̃s)(A_in + v(1 − A_out))]/[ε̃s + (ε̃in − ε̃s)(A_in − vA_out)], written so that
    nothing cancels when the coat is thin, and a coat of what it encloses changes nothing.
    """
    missing, spread = np.asarray(shell.missing), np.asarray(shell.spread)
    excess = np.asarray(inner) - shell.permittivity
    above, below = inner - (missing - spread) * excess, shell.permittivity + spread * excess
    return np.asarray(above / below * shell.permittivity)


def seal(inner: Value, membrane: ThinShell) -> Complex:
    """ε̃ of the homogeneous particle that equals a particle `inner` behind a thin membrane.

    In series: 1/ε̃ = 1/ε̃in + 1/(c̃ℓ), with c̃ = C + G/(jω) in F/m² and ℓ in m, the radius of a
    sphere. It is the limit of :func:`coat` for a thickness that vanishes at constant C and G.
    """
    return np.asarray(inner / (1.0 + inner / (membrane.capacitance * np.asarray(membrane.length))))


def effective_permittivities(core: Value, stack: Stack) -> list[Complex]:
    """ε̃ of the homogeneous particles that equal what lies inside: core, then after each layer.

    Parameters
    ----------
    core
        ε̃ of the core.
    stack
        Layers from the core outward.
    """
    inside = [np.asarray(core, dtype=complex)]
    for layer in stack:
        wrap = seal(inside[-1], layer) if isinstance(layer, ThinShell) else coat(inside[-1], layer)
        inside.append(wrap)
    return inside


def pole_voltages(
    core: Value, stack: Stack, medium: Value, pole: Scalar, depolarisation: Scalar
) -> list[Complex]:
    """Voltage across each layer at the pole per applied field, outer minus inner side, in m.

    Found from the medium inward. With E0 = 1 along the axis the potential at the outer pole is
    −a(1 − 3AK). Within a shell, of which what lies inside has the factor K_in, it is −x(1 −
    3K_in·A_in) on the inner surface and −x(1 − 3K_in·vA_out) on the outer one; across a membrane
    φ_in = φ_out·c̃ℓ/(c̃ℓ + ε̃in). The field is homogeneous, the phase relative to it.

    Parameters
    ----------
    core, stack
        As for :func:`effective_permittivities`.
    medium
        ε̃ of the medium.
    pole, depolarisation
        Outer semi-axis a of the particle, m, and its depolarising factor A.

    Returns
    -------
    list of arrays
        One for each layer of the stack, in its order; the broadcast shape of all that is given.
    """
    inside = effective_permittivities(core, stack)
    factor = polarisation_factor(inside[-1], medium, depolarisation)
    outer = -np.asarray(pole) * (1.0 - 3.0 * np.asarray(depolarisation) * factor)
    found = []
    for layer, within in zip(reversed(stack), reversed(inside[:-1]), strict=True):
        if isinstance(layer, ThinShell):
            drop = outer / (1.0 + layer.capacitance * np.asarray(layer.length) / within)
        else:
            drop = outer * _fall(within, layer)
        found.append(drop)
        outer = outer - drop
    return found[::-1]


def _fall(within: Complex, shell: Shell) -> Complex:
    """Share of the potential at a shell's outer pole that is lost across the shell."""
    factor = 3.0 * polarisation_factor(within, shell.permittivity, shell.depolarisation)
    spread, inner = np.asarray(shell.spread), np.asarray(shell.depolarisation)
    lost = shell.thinning * (1.0 - factor * inner) + factor * spread
    return np.asarray(lost / (1.0 - factor * (inner - spread)))
