"""Upward force over a period of the electrodes, and whether it keeps a particle at a height."""

from typing import TYPE_CHECKING

import numpy as np

from model.arrays import Real
from model.fields.lines import Line
from model.particle import Particle

if TYPE_CHECKING:
    from model.conditions import Conditions

#: Step up and down for the slope of the force, of the distance to the nearer of floor and lid.
_STEP = 0.01


def least_lift(at: "Conditions", particle: Particle, line: Line) -> Real:
    """Least upward force along a line, N/V², (…, n_frequency); negative if it draws down.

    2πεa³·min(Re K·∂|Ê|²/∂y + Im K·S_y), the second part of travelling fields alone.
    """
    weights = at.force_weights(particle)
    upward = line.gradient[1]
    if line.travelling is None:
        real = weights[0]
        least = np.minimum(real * upward.min(), real * upward.max())
    else:
        both = np.stack([upward, line.travelling[1]])
        least = (np.stack(weights, axis=-1) @ both).min(axis=-1)
    return np.asarray(at.force_scale(particle) * least)


def steady_lift(at: "Conditions", particle: Particle) -> Real:
    """The same at the force height, 0 where it draws down or does not fall with height."""
    height, reach = at.design.task.force_height, at.patterns.reach
    step = _STEP * at.wall_distance
    below, above = (
        least_lift(at, particle, at.patterns.line(float(np.clip(height + way, *reach))))
        for way in (-step, step)
    )
    lift = least_lift(at, particle, at.line)
    return np.where(above < below, np.maximum(lift, 0.0), 0.0)


def climb(at: "Conditions", particle: Particle) -> tuple[float, Real]:
    """Height at which a particle touches the floor, m, and the field's energy from there, J/V².

    2πεa³·Re K·(|Ê|² at the force height − |Ê|² at the floor), each taken at the place over a
    period that gives least, and at least 0; of a travelling field the part that has a potential.
    """
    floor = float(np.clip(particle.hydrodynamic_radius, *at.patterns.reach))
    here, there = at.line.square, at.patterns.line(floor).square
    real = at.polarisation(particle).real
    least = np.minimum(real * (here.max() - there.min()), real * (here.min() - there.max()))
    return floor, np.asarray(at.force_scale(particle) * np.maximum(least, 0.0))
