"""How a quantity grows with voltage, and the voltage at which it meets what is allowed."""

from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import ArrayLike

from model.arrays import Real

Sense = Literal["most", "least"]


@dataclass(frozen=True)
class Law:
    """value = offset + coefficient · V_rms^power, to be at most or at least `allowed`.

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
    """

    coefficient: ArrayLike
    power: int
    allowed: float
    sense: Sense = "most"
    offset: float = 0.0
    subject: str = ""

    def value(self, rms_voltage: float) -> Real:
        """Value at a voltage, shape of the coefficient."""
        return np.asarray(self.offset + np.asarray(self.coefficient) * rms_voltage**self.power)

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
        with np.errstate(divide="ignore", invalid="ignore"):
            voltage = (np.maximum(room, 0.0) / slope) ** (1.0 / self.power)
        # 0/0: no slope and no room. Nothing is asked of a floor, nothing is left of a ceiling.
        return np.where(np.isnan(voltage), 0.0, voltage)
