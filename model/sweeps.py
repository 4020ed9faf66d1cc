"""How heating and electrothermal flow go with voltage and with conductivity, all else kept."""

from dataclasses import dataclass

import numpy as np

from model.arrays import Real
from model.conditions import Conditions
from model.evaluate import Evaluation
from model.limits import LIMITS
from model.voltage import PEAK_TO_PEAK


@dataclass(frozen=True)
class Sweep:
    """The worst value of one limit against voltage and against conductivity, SI.

    Parameters
    ----------
    limit
        Id of the limit.
    voltage, by_voltage
        Peak-to-peak voltages and the values there, at the design's conductivity; ``(n,)``.
    conductivity, by_conductivity
        Conductivities and the values there, at the design's voltage; ``(m,)``.
    value, allowed
        At the operating point, and the threshold.
    """

    limit: str
    voltage: Real
    by_voltage: Real
    conductivity: Real
    by_conductivity: Real
    value: float
    allowed: float


def sweep(result: Evaluation, limit: str, voltage: Real, conductivity: Real) -> Sweep | None:
    """Follow the worst law of a limit along both axes; values may be infinite.

    None if the limit has no law here.

    Parameters
    ----------
    result
        The design's evaluation.
    limit
        Id of a limit whose laws grow with a power of the voltage.
    voltage, conductivity
        Peak-to-peak voltages in V and conductivities in S/m.
    """
    design, rms = result.design, result.rms_voltage
    here = LIMITS[limit].laws(result.point)
    if not here:
        return None
    frequency = result.point.frequency
    elsewhere = Conditions(design, result.patterns, frequency, conductivity[:, np.newaxis])
    by_voltage = [law.value(voltage[:, np.newaxis] / PEAK_TO_PEAK)[:, 0] for law in here]
    by_conductivity = [law.value(rms)[:, 0] for law in LIMITS[limit].laws(elsewhere)]
    return Sweep(
        limit,
        voltage,
        np.max(by_voltage, axis=0),
        conductivity,
        np.max(by_conductivity, axis=0),
        float(max(law.value(rms).reshape(-1)[0] for law in here)),
        here[0].allowed,
    )
