"""What a person must know beside the numbers: hazards, and where the model does not hold."""

from collections.abc import Iterator

import numpy as np

from model.evaluate import Evaluation
from model.quantity import format_quantity, format_si
from model.voltage import PEAK, PEAK_TO_PEAK

#: Above this a sine is commonly treated as hazardous to touch, V peak (30 V rms).
HAZARDOUS_PEAK = 42.4
#: The point-dipole force is taken as good while radius/(E²/|∇E²|) stays below this; common
#: practice, no source.
DIPOLE_RATIO = 0.3
#: Growth of the temperature rise by the liquid's own warmth that is worth a note.
NOTABLE_GROWTH = 0.1
#: A share of the voltage lost to the double layers that is worth a note.
NOTABLE_LOSS = 0.05
#: Electro-osmotic over dielectrophoretic speed that is worth a note.
NOTABLE_SLIP = 0.1
#: Peak voltage over the diffuse layer up to which its linear theory is a guide: some kT/e.
LINEAR_LAYER = 0.1

NO_HEAT = (
    "Temperature rise, highest temperature and electrothermal flow are not known for this chip: "
    "no limit of theirs is checked, and nothing is said of what heat does."
)
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
    found += [
        f"The limit {off.limit.label} is switched off ({off.reason}). What it keeps away can hurt "
        f"people: {off.limit.hazard}. {DEFER}"
        for off in result.switched_off
        if off.limit.hazard
    ]
    if not result.patterns.has_heat:
        return (*found, GENERAL)
    rise = result.self_consistent_rise
    hottest = np.inf if rise is None else result.design.liquid.temperature + rise
    if hottest > 60.0 + 273.15:
        boils = hottest > 100.0 + 273.15
        heat = "boils" if boils else f"reaches {format_quantity(hottest, 'degC', 3)}"
        found.append(
            f"As calculated the liquid {heat}. It can boil and burst a bond, and nothing here "
            f"holds then. {DEFER}"
        )
    return (*found, GENERAL)


def notes(result: Evaluation) -> tuple[str, ...]:
    """Places where the design leaves what the model describes well."""
    found = [*result.patterns.remarks]
    line, design = result.point.line, result.design
    steepest = int(np.abs(line.gradient[0]).argmax())  # where the force along the flow is taken
    square = float(line.square[steepest])
    length = square / float(np.hypot(*line.gradient[:, steepest]))
    for particle in design.particles:
        radius = particle.equivalent_radius
        if radius / length > DIPOLE_RATIO:
            found.append(
                f"{particle.name}: its radius is {radius / length:.2f} of the length over which "
                f"E² changes; above {DIPOLE_RATIO} the point-dipole force is only a guide."
            )
        if particle.must_live and result.point.membrane_gain(particle) is None:
            found.append(
                f"{particle.name} must live but has no membrane; no membrane voltage is checked."
            )
    passing = () if design.task.separates else _passing(result)
    return (*found, *_electrical(result), *_heat(result), *passing)


def _heat(result: Evaluation) -> Iterator[str]:
    """What a conductivity that grows with warmth does, and flow that carries heat off."""
    linear, rise = result.temperature_rise, result.self_consistent_rise
    if linear is None:
        yield NO_HEAT
        return
    at_first = f"{format_quantity(linear, 'K', 3)} that the stage's conductivity gives"
    if rise is None:
        yield (
            f"No steady temperature: warm liquid conducts better, and beyond the {at_first} it "
            "makes more heat than leaves."
        )
    elif rise > (1.0 + NOTABLE_GROWTH) * linear:
        yield (
            f"Warm liquid conducts better: the rise is {format_quantity(rise, 'K', 3)}, not the "
            f"{at_first}. Forces, flow and load are those of the stage temperature."
        )
    flow = result.flow_cooling
    if flow is not None and flow.peclet > 1.0:
        yield (
            f"The flow carries off more heat than floor and lid (Péclet number "
            f"{format_quantity(flow.peclet, '', 2)}), which the rise leaves out: it is overstated, "
            f"and the liquid's mean rise stays below {format_quantity(flow.outlet_rise, 'K', 3)}."
        )


def _electrical(result: Evaluation) -> Iterator[str]:
    """Where electrodes or walls take their part of the drive."""
    reaching = abs(result.share)
    if reaching < 1.0 - NOTABLE_LOSS:
        yield (
            f"The electrodes polarise here: {reaching:.0%} of the voltage reaches the liquid. The "
            "numbers count that, with the field's pattern as it is without; it really flattens, "
            "so that forces near the edges are overstated and those far from them understated, "
            "either by up to a factor of two."
        )
    speed, wanted = result.electro_osmotic_speed, result.dielectrophoretic_speed
    if speed is not None and speed > NOTABLE_SLIP * wanted:
        diffuse = float(result.point.circuit.diffuse_voltage.reshape(-1)[0])
        over = PEAK * result.rms_voltage * diffuse
        if over > LINEAR_LAYER:
            yield (
                f"The electro-osmotic flow is overstated: {format_si(over, 'V')} peak over the "
                f"diffuse layers is past {format_si(LINEAR_LAYER, 'V')}, up to where its linear "
                "theory is a guide."
            )


def _passing(result: Evaluation) -> Iterator[str]:
    """Whether particles that are to pass would be caught as well."""
    for particle in result.design.particles:
        if particle.role == "pass":
            held = result.design.task.catch(result.point, particle)
            volts = float(held.bound().reshape(-1)[0]) * PEAK_TO_PEAK
            word = result.design.task.success
            if volts <= result.design.drive.voltage:
                yield f"{particle.name} is to pass, but is {word} from {format_si(volts, 'V')} on."
            elif np.isfinite(volts):
                yield (
                    f"{particle.name} passes here; it would be {word} from "
                    f"{format_si(volts, 'V')} on. That it passes is no limit of this task."
                )


def rms_and_peak(voltage: float) -> str:
    """Write a peak-to-peak voltage as rms and peak, for those who read other meters.

    >>> rms_and_peak(8.0)
    '2.83 V rms, 4 V peak'
    """
    rms = voltage / PEAK_TO_PEAK
    return f"{format_si(rms, 'V')} rms, {format_si(rms * PEAK, 'V')} peak"
