"""Motion of spheres in slow flow: drag, walls, weight, dielectrophoretic force, heat motion.

All wall factors take the relative height h/a ≥ 1 of the sphere's centre above a plane wall, its
distance over the radius, as a number or an array of any shape. A lid that is as near as the floor
adds its own share, which is left out; inertia is neglected (Reynolds number ≪ 1).
"""

import numpy as np
from scipy.constants import Boltzmann, g

from model.arrays import Real

#: Real numbers, alone or in arrays.
Scalar = Real | float

# Translation along a wall. Far from it 1 + 9q/16 + 81q²/256 + …, q = a/h, the expansion of
# Faxén's fifth-order formula; near it −(8/15)·ln ε + 0.95429 − (64/375)·ε·ln ε, ε = h/a − 1
# (Goldman, Cox and Brenner 1967 with the constant of Chaoui and Feuillebois 2003, from memory).
# The logarithms are kept whole, and a polynomial carries the rest: its first four terms are
# Faxén's, its value at contact is the near-wall constant, and the two shares that this leaves
# free are fitted to exact values of a numerical solution.
_NEAR_LOG, _NEAR_SLOPE = 8.0 / 15.0, 64.0 / 375.0
_PARALLEL = np.polynomial.Polynomial(
    [1.0, -0.1415, 0.13507292, -0.09635482, 0.01615805, 0.11637, -0.13523, 0.05977]
)
# Held still in shear along a wall: 1 + 9q/16 + …, with the rest fitted to exact values.
_HELD = np.polynomial.Polynomial([1.0, 9.0 / 16.0, 0.3238, -0.3273, 0.1861, -0.0444])
# Below this gap over radius the near-wall form of Brenner's series takes over, 1e-8 from it there.
_NARROW_GAP = 1e-2
#: Heights below contact by no more than rounding count as contact.
_ROUNDING = 1e-9


def stokes_drag(radius: Scalar, viscosity: Scalar, speed: Scalar) -> Real:
    """Drag on a sphere far from walls, F = 6πηav, N.

    >>> round(float(stokes_drag(5e-6, 0.89e-3, 100e-6)) * 1e12, 4)
    8.3881
    """
    return np.asarray(6.0 * np.pi * np.asarray(viscosity) * np.asarray(radius) * speed)


def drag_parallel(relative_height: Scalar) -> Real:
    """Wall factor of the drag on a sphere that translates along a wall.

    Drag over 6πηav of a sphere kept from rotating. Within 0.01 % of the exact solution (Goldman,
    Cox and Brenner 1967 Chem. Eng. Sci. 22:637) at every height; infinite at contact.

    >>> round(float(drag_parallel(1.5431)), 3)
    1.567
    """
    q = 1.0 / _checked(relative_height)
    gap = 1.0 - q
    with np.errstate(divide="ignore"):
        growth = -np.log(gap)  # infinite at contact, as the drag is
    return np.asarray((_NEAR_LOG + _NEAR_SLOPE * gap) * growth + _PARALLEL(q))


def drag_held(relative_height: Scalar) -> Real:
    """Wall factor of the drag on a sphere that is held still in a shear flow along a wall.

    Drag over 6πηa·u, u the undisturbed speed at the height of the centre. Within 0.01 % of the
    exact solution (Goldman, Cox and Brenner 1967 Chem. Eng. Sci. 22:653); 1.701 at contact.
    Holds for Poiseuille flow as long as the shear changes little over the sphere.

    >>> round(float(drag_held(1.5431)), 3)
    1.439
    """
    return np.asarray(_HELD(1.0 / _checked(relative_height)))


def drag_perpendicular(relative_height: Scalar) -> Real:
    """Wall factor of the drag on a sphere that moves straight towards or away from a wall.

    Drag over 6πηav. H. Brenner 1961 Chem. Eng. Sci. 16:242, a series in bispherical coordinates;
    for gaps below a hundredth of the radius its near-wall form 1/ε − ln ε/5 + 0.97128 (Cox and
    Brenner 1967) with the next two terms. Infinite at contact.

    >>> round(float(drag_perpendicular(1.5431)), 4)
    3.036
    """
    height = _checked(relative_height)
    gap = height - 1.0
    with np.errstate(divide="ignore", invalid="ignore"):
        growth = -np.log(gap)
        near = 1.0 / gap + growth / 5.0 + 0.97128 + gap * (growth / 21.0 + 0.1665)
    near = np.where(gap == 0.0, np.inf, near)
    return np.where(gap < _NARROW_GAP, near, _brenner_series(np.maximum(height, 1.0 + _NARROW_GAP)))


def _brenner_series(height: Real) -> Real:
    """(4/3)·sinh α·Σ n(n+1)/((2n−1)(2n+3))·[…], cosh α = h/a.

    The bracket is multiplied through by exp(−(2n+1)α), so that nothing overflows far away.
    """
    # beyond 1e6 radii the factor is one to the last shown digit
    alpha = np.arccosh(np.minimum(height, 1e6))[..., None]
    n = np.arange(1, 161)
    k = 2 * n + 1
    small = np.exp(-k * alpha)
    square = (k * np.sinh(alpha)) ** 2
    above = small * (2.0 + k * np.sinh(2.0 * alpha) + square - 2.0 * small)
    below = (1.0 - small) ** 2 - square * small
    weight = n * (n + 1) / ((2 * n - 1) * (2 * n + 3))
    return np.asarray(4.0 / 3.0 * np.sinh(alpha[..., 0]) * np.sum(weight * above / below, axis=-1))


def net_weight(radius: Scalar, excess_density: Scalar) -> Real:
    """Weight less buoyancy of a sphere, (4/3)πa³·Δρ·g, N; negative if it floats."""
    return np.asarray(4.0 / 3.0 * np.pi * np.asarray(radius) ** 3 * excess_density * g)


def sedimentation_speed(radius: Scalar, excess_density: Scalar, viscosity: Scalar) -> Real:
    """Speed at which a sphere sinks far from walls, 2a²Δρg/(9η), m/s; negative if it rises."""
    return np.asarray(net_weight(radius, excess_density) / stokes_drag(radius, viscosity, 1.0))


def dielectrophoretic_force(
    permittivity: Scalar, radius: Scalar, real_part: Scalar, gradient: Scalar
) -> Real:
    """Force on a sphere, F = 2πε_m a³ Re K ∇|E_rms|², N.

    `permittivity` of the medium in F/m, the gradient (one component) in V²/m³ of the **rms**
    field. A point-dipole law: good for a ≪ |E|²/|∇|E|²|.

    Source: T. B. Jones, *Electromechanics of Particles* (1995).
    """
    size = np.asarray(radius) ** 3
    return np.asarray(2.0 * np.pi * np.asarray(permittivity) * size * real_part * gradient)


def thermal_energy(temperature: Scalar) -> Real:
    """kT, J, of a temperature in K."""
    return np.asarray(Boltzmann * np.asarray(temperature))


def diffusion_coefficient(radius: Scalar, viscosity: Scalar, temperature: Scalar) -> Real:
    """Diffusion coefficient D = kT/(6πηa) of a sphere far from walls, m²/s (Stokes–Einstein)."""
    return np.asarray(thermal_energy(temperature) / stokes_drag(radius, viscosity, 1.0))


def _checked(relative_height: Scalar) -> Real:
    """Heights over radius, from contact up."""
    height: Real = np.asarray(relative_height, dtype=float)
    if not np.all(height >= 1.0 - _ROUNDING):  # written so that NaN fails too
        raise ValueError("the centre of a sphere is at least one radius from the wall")
    return np.maximum(height, 1.0)
