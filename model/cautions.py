"""What a person must know beside the numbers: hazards, and where the model does not hold."""

import numpy as np

from model.evaluate import Evaluation
from model.quantity import format_quantity, format_si
from model.voltage import PEAK, PEAK_TO_PEAK

#: Above this a sine is commonly treated as hazardous to touch, V peak (30 V rms).
HAZARDOUS_PEAK = 42.4
#: The point-dipole force is taken as good while radius/(E²/|∇E²|) stays below this; common
#: practice, no source.
DIPOLE_RATIO = 0.3
#: Below this electrode polarisation usually takes a good part of the voltage; common practice,
#: no source. It is not modelled.
POLARISED_BELOW = 20e3

DEFER = "Local laboratory safety rules and licensed practice come first."
GENERAL = (
    "Electric drive, heat and biological samples can hurt people and samples. These are design "
    f"estimates; none of the numbers is a promise of safety. {DEFER}"
)


def cautions(result: Evaluation) -> tuple[str, ...]:
    """Hazards of this design, the general one last."""
    found = []
    peak = max(result.design.drive.voltage, result.design.drive.voltage_limit) / 2.0
    if peak > HAZARDOUS_PEAK:
        found.append(
            f"The drive can reach {format_si(peak, 'V')} peak; above 42.4 V peak (30 V rms) a "
            f"voltage is commonly treated as hazardous to touch. {DEFER}"
        )
    hottest = result.design.liquid.temperature + result.temperature_rise
    if hottest > 60.0 + 273.15:
        found.append(
            f"The liquid reaches {format_quantity(hottest, 'degC', 3)} by the linear law, which is "
            f"low when it is warm: it can boil and burst a bond. {DEFER}"
        )
    return (*found, GENERAL)


def notes(result: Evaluation) -> tuple[str, ...]:
    """Places where the design leaves what the model describes well."""
    found = []
    line, design = result.point.line, result.design
    steepest = int(np.abs(line.gradient[0]).argmax())  # where the force along the flow is taken
    square = float((line.field[:, steepest] ** 2).sum())
    length = square / float(np.hypot(*line.gradient[:, steepest]))
    for particle in design.particles:
        radius = particle.equivalent_radius
        if radius / length > DIPOLE_RATIO:
            found.append(
                f"{particle.name}: its radius is {radius / length:.2f} of the length over which "
                f"E² changes; above {DIPOLE_RATIO} the point-dipole force is only a guide."
            )
        if 2.0 * radius > design.chip.narrowest:
            found.append(f"{particle.name} is wider than the gap between electrodes.")
        if particle.must_live and result.point.membrane_gain(particle) is None:
            found.append(
                f"{particle.name} must live but has no membrane; no membrane voltage is checked."
            )
    if design.drive.frequency < POLARISED_BELOW:
        found.append(
            "Below about 20 kHz the electrodes polarise and take part of the voltage; this is "
            "not modelled, so that forces and flows are overstated there."
        )
    if result.temperature_rise > 5.0:
        found.append(
            "Above a few kelvin the rise is understated: the conductivity grows as it warms, "
            "which the linear law leaves out."
        )
    return tuple(found)


def rms_and_peak(voltage: float) -> str:
    """Write a peak-to-peak voltage as rms and peak, for those who read other meters.

    >>> rms_and_peak(8.0)
    '2.83 V rms, 4 V peak'
    """
    rms = voltage / PEAK_TO_PEAK
    return f"{format_si(rms, 'V')} rms, {format_si(rms * PEAK, 'V')} peak"
