"""Spinning in rotating fields and drifting along travelling ones.

F = 2πε_m a³ Im K·S and Γ = −4πε_m a³ Im K·E², both from ½Re[(p·∇)E*] and ½Re[p × E*] with the
induced dipole p = 4πε_m a³ K E: T. B. Jones, *Electromechanics of Particles* (1995); W. M. Arnold
and U. Zimmermann 1988 J. Electrostatics 21:151 for the rate of spinning.
"""

from typing import TYPE_CHECKING

import numpy as np

from model.arrays import Real
from model.medium import Medium
from model.motion import drag_parallel, stokes_drag
from model.particle import Particle

if TYPE_CHECKING:
    from model.conditions import Conditions

#: Amplitude of the rotating field in which spectra are told where the chip has none, V/m.
REFERENCE_AMPLITUDE = 1e4


def rotation_rate(particle: Particle, medium: Medium, amplitude: float) -> Real:
    """Rate of spinning in a rotating field, rad/s, positive with the field; (…, n_frequency).

    −c·(ε_m/η)·Im K·E², c = ½ for a sphere, far from walls and far slower than the field turns.

    Parameters
    ----------
    particle, medium
        Who spins, and in what.
    amplitude
        Of the field, V/m: the length of the rotating vector.
    """
    scale = particle.spinning_ease * medium.permittivity / medium.viscosity * amplitude**2
    return np.asarray(-scale * particle.spinning_factor(medium).imag)


def rotating_amplitude(at: "Conditions") -> float | None:
    """Amplitude of the circular field that turns particles as the chip's does, 1/m per V rms.

    A field with phasors E_x, E_y in rms turns them as a circular one of amplitude
    √(2|Im E_x E_y*|). In plan at the centre, else the mean over a period at the force height.
    None where the field does not rotate.
    """
    line = at.line
    if line.travelling is None:
        return None
    turning = 2.0 * np.abs((line.field[0] * np.conj(line.field[1])).imag)
    if line.through is not None:
        return float(np.sqrt(turning[np.argmin(np.abs(line.x))]))
    return float(np.sqrt(np.trapezoid(turning, line.x) / np.ptp(line.x)))


def chip_rotation_rate(at: "Conditions", particle: Particle) -> Real | None:
    """Rate of spinning in the chip's own rotating field, rad/s per V², mean over the duty.

    None where the field does not rotate; see :func:`rotating_amplitude` for the place.
    """
    amplitude = rotating_amplitude(at)
    if amplitude is None:
        return None
    drive = at.design.drive.duty * np.abs(at.share) ** 2
    return np.asarray(rotation_rate(particle, at.medium, amplitude) * drive)


def travelling_speed(at: "Conditions", particle: Particle) -> Real | None:
    """Mean speed along the wave at the force height, m/s per V², positive along the flow.

    None where nothing travels. Wall correction as for a sphere that moves along the wall.
    """
    line = at.line
    if line.travelling is None or line.through is not None:
        return None
    mean = float(np.trapezoid(line.travelling[0], line.x) / np.ptp(line.x))
    radius = particle.hydrodynamic_radius
    slowed = drag_parallel(max(at.wall_distance / radius, 1.0))  # one that touches stands still
    drag = slowed * stokes_drag(radius, at.liquid.viscosity, 1.0)
    return np.asarray(at.force_scale(particle) * at.polarisation(particle).imag * mean / drag)
