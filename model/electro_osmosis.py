"""AC electro-osmosis: the field along an electrode drags the charge that it has gathered there.

u = −(ε/η)·Λ·½ ∂|Δ_rms|²/∂x along an electrode with the voltage Δ over its double layer and Λ the
diffuse share of it, Green et al. 2002 Phys. Rev. E 66:026305, from memory. Linear in the sense that
both layers answer as at rest: good to some 25 mV over the diffuse layer, a guide to a few times
that, and overstated beyond.
"""

from typing import TYPE_CHECKING

import numpy as np

from model.arrays import Real

if TYPE_CHECKING:
    from model.conditions import Conditions


def largest_speed(at: "Conditions") -> Real | None:
    """Largest speed of the flow at the force height, m/s per V².

    None in plan, where it is not modelled.
    """
    circuit, patterns = at.circuit, at.patterns
    if not patterns.slips:
        return None
    total: Real | float = 0.0
    for slip in patterns.slips:
        amounts = slip.amounts(patterns.response, circuit.length)
        total = total + np.tensordot(slip.line(at.design.task.force_height), amounts, axes=(0, 0))
    fastest = np.sqrt((np.asarray(total) ** 2).sum(axis=0).max(axis=0))
    return np.asarray(_scale(at) * fastest)


def largest_slip(at: "Conditions") -> Real | None:
    """Largest slip on the electrodes, m/s per V²; None in plan.

    It grows without end toward an edge, as the logarithm of the distance; told is the value at the
    places of the trace, the nearest some 10⁻⁵ of the bar off.
    """
    if not at.patterns.slips:
        return None
    slips = np.stack(at.patterns.response.slips(at.circuit.length))
    return np.asarray(_scale(at) * np.abs(slips.sum(axis=0)).max(axis=0))


def _scale(at: "Conditions") -> Real:
    """From slip patterns to speed: Λ·(ε/η)·duty·|share of the leads|².

    Δ is the voltage over film and double layer; the film's part is taken off, exactly unless the
    film conducts as much as it displaces.
    """
    interface = at.circuit.interface
    part = interface.diffuse_share * interface.layer_share.real
    scale = at.liquid.permittivity / at.liquid.viscosity * at.design.drive.duty
    return np.asarray(scale * part * np.abs(at.circuit.lead_share) ** 2)
