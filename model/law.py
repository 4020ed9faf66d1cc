"""How a quantity grows with voltage, and the voltage at which it meets what is allowed."""

from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import ArrayLike

from model.arrays import Real
from model.growth import first_order, self_consistent

Sense = Literal["most", "least"]


@dataclass(frozen=True)
class Words:
    """What is told of a law: its name, why it matters, where it is from, and what else to change.

    `remedy` is about what is neither frequency, conductivity nor voltage.
    """

    label: str
    why: str
    source: str
    remedy: str


@dataclass(frozen=True)
class Law:
    """value = offset + coefficient · V_rms^power, to be at most or at least `allowed`.

    What is added to the offset may drive itself on, see `growth`.

    Parameters
    ----------
    coefficient
        Not negative, shape ``(..., n_frequency)`` or anything that broadcasts to it; infinity
        where the value is out of all bounds.
    power
        0, 1, 2 or 4; 0 is a condition that no voltage changes.
    allowed
        The threshold, in the value's own SI unit.
    sense
        ``most`` makes a ceiling of voltage, ``least`` a floor.
    offset
        Value at no voltage.
    subject
        Name of the particle that the law is about, or empty.
    growth
        How much the added part drives itself on, in one over the value's unit, for powers above
        0; coefficient · V_rms^power is then its first order, and
        :func:`model.growth.self_consistent` gives it. None if it does not.
    """

    coefficient: ArrayLike
    power: int
    allowed: float
    sense: Sense = "most"
    offset: float = 0.0
    subject: str = ""
    growth: ArrayLike | None = None

    def value(self, rms_voltage: ArrayLike) -> Real:
        """Value at voltages that broadcast with the coefficient; infinite where none is steady."""
        added = np.asarray(self.coefficient) * np.asarray(rms_voltage, dtype=float) ** self.power
        if self.growth is not None:
            added = self_consistent(added, self.growth)
        return np.asarray(self.offset + added)

    def bound(self) -> Real:
        """V_rms at which the value is `allowed`, shape of the coefficient.

        For ``most`` the largest voltage that is still allowed, 0 if none is, infinity if all
        are. For ``least`` the smallest that is enough, infinity if none is, 0 if all are.
        """
        room = np.asarray(self.allowed - self.offset, dtype=float)
        slope = np.asarray(self.coefficient, dtype=float)
        if self.power == 0:
            met = slope <= room if self.sense == "most" else slope >= room
            return np.where(met == (self.sense == "most"), np.inf, 0.0)
        room = np.maximum(room, 0.0)
        if self.growth is not None:
            room = first_order(room, self.growth)
        with np.errstate(divide="ignore", invalid="ignore"):
            voltage = (room / slope) ** (1.0 / self.power)
        # 0/0: no slope and no room. Nothing is asked of a floor, nothing is left of a ceiling.
        return np.where(np.isnan(voltage), 0.0, voltage)


def headroom(bound: Real, rms_voltage: float, sense: Sense) -> Real:
    """Factor between a voltage and a bound, at least 1 where the law is kept.

    Bound over voltage for ``most``, voltage over bound for ``least``; infinite where no voltage
    breaks the law.

    >>> bound = np.array([0.0, 2.0, np.inf])
    >>> headroom(bound, 4.0, "most"), headroom(bound, 4.0, "least")
    (array([0. , 0.5, inf]), array([inf,  2.,  0.]))
    """
    if sense == "most":
        return np.asarray(bound / rms_voltage)
    with np.errstate(divide="ignore"):
        return np.asarray(rms_voltage / bound)
