"""Floor and ceiling over frequency and conductivity, and the place with most room between them."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from model.arrays import Real
from model.conditions import Conditions
from model.corridor import corridor
from model.design import Design
from model.evaluate import Evaluation
from model.fields.patterns import ChipPatterns
from model.voltage import PEAK_TO_PEAK

#: Where nothing is asked of the voltage, the best point leaves this factor to the ceiling.
_AMPLE = 4.0


@dataclass(frozen=True)
class Binder:
    """A floor or ceiling by the id of its task or limit, its words, and its particle's name."""

    id: str
    label: str
    subject: str


@dataclass(frozen=True)
class HeadroomMap:
    """What binds at every frequency and conductivity, at any voltage.

    Parameters
    ----------
    frequency, conductivity
        Hz, (n_frequency,), and S/m, (n_conductivity,).
    floor, ceiling
        V_rms, (n_conductivity, n_frequency); may be 0 or infinite.
    floor_rule, ceiling_rule
        Which of `bounds` sets them, of the same shape.
    bounds
        All floors and ceilings, as in :class:`model.corridor.Corridor`, without their values.
    """

    frequency: Real
    conductivity: Real
    floor: Real
    ceiling: Real
    floor_rule: NDArray[np.intp]
    ceiling_rule: NDArray[np.intp]
    bounds: tuple[Binder, ...]

    def headroom(self, rms_voltage: float) -> Real:
        """min(ceiling/V, V/floor): the least headroom of all rules; at least 1 inside."""
        with np.errstate(divide="ignore"):
            return np.minimum(self.ceiling / rms_voltage, rms_voltage / self.floor)

    def binding(self, rms_voltage: float) -> NDArray[np.intp]:
        """Which of `bounds` has least headroom."""
        with np.errstate(divide="ignore"):
            low = rms_voltage / self.floor < self.ceiling / rms_voltage
        return np.where(low, self.floor_rule, self.ceiling_rule)


def headroom_map(
    design: Design, patterns: ChipPatterns, frequency: Real, conductivity: Real
) -> HeadroomMap:
    """Map floor and ceiling in closed form, all rules and particles at once.

    Parameters
    ----------
    design, patterns
        The patterns must be those of the design's chip. What the liquid is made of stays as at its
        own conductivity, but for the salt.
    frequency, conductivity
        Hz, (n_frequency,), and S/m, (n_conductivity,).
    """
    found = corridor(Conditions(design, patterns, frequency, conductivity[:, None]))
    senses = [bound.sense for bound in found.bounds]
    # with all limits off there is no ceiling, and any rule stands for the one that never binds
    least, most = (
        np.array([k for k, one in enumerate(senses) if one == sense] or [0])
        for sense in ("least", "most")
    )
    return HeadroomMap(
        frequency,
        conductivity,
        found.floor,
        found.ceiling,
        least[found.binding_floor()],
        most[found.binding_ceiling()],
        tuple(Binder(bound.id, bound.label, bound.subject) for bound in found.bounds),
    )


def remembered_map(result: Evaluation, frequency: Real, conductivity: Real) -> HeadroomMap:
    """:func:`headroom_map` of a result, kept with its chip while only the operating point moves."""
    design = result.design
    drive = design.drive.model_copy(update={"voltage": 1.0, "frequency": 1e6})
    liquid = design.liquid
    if liquid.recipe is None:  # else the salt that makes the conductivity changes the liquid too
        liquid = liquid.model_copy(update={"conductivity": 1.0})
    resting = design.model_copy(
        update={"title": "", "question": "", "drive": drive, "liquid": liquid}
    )
    ends = float(frequency[0]), float(frequency[-1]), frequency.size
    rows = float(conductivity[0]), float(conductivity[-1]), conductivity.size
    return result.patterns.remembered(
        ("headroom", resting, ends, rows),
        lambda: headroom_map(design, result.patterns, frequency, conductivity),
    )


@dataclass(frozen=True)
class BestPoint:
    """Frequency in Hz and peak-to-peak voltage of most headroom, and that headroom."""

    frequency: float
    voltage: float
    headroom: float


def best_point(result: Evaluation) -> BestPoint | None:
    """Where the corridor of this liquid is widest, at its middle; None where it is empty.

    The middle is the geometric mean of floor and ceiling, as headroom is a factor either way.
    """
    floor, ceiling = result.corridor.floor, result.corridor.ceiling
    least = np.maximum(floor, ceiling / _AMPLE**2)  # where the floor asks for next to nothing
    with np.errstate(divide="ignore", invalid="ignore"):
        ratio = np.where(np.isfinite(ceiling) & (least > 0.0), ceiling / least, 0.0)
    place = int(ratio.argmax())
    if ratio[place] < 1.0:
        return None
    voltage = float(np.sqrt(least[place] * ceiling[place])) * PEAK_TO_PEAK
    return BestPoint(float(result.frequency[place]), voltage, float(np.sqrt(ratio[place])))
