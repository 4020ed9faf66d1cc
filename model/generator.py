"""A generator behind its source resistance, and what its display means."""

from typing import TYPE_CHECKING

import numpy as np

from model.arrays import Complex, Real

if TYPE_CHECKING:
    from model.design import Drive


def open_circuit(resistance: float, admittance: Complex) -> Real:
    """Open-circuit voltage over that at the load, |1 + RY|: a Thévenin source.

    >>> float(1.0 / open_circuit(50.0, np.array(1.0 / 50.0)))  # a matched load gets half
    0.5
    """
    return np.asarray(np.abs(1.0 + resistance * admittance))


def displayed(drive: "Drive", admittance: complex) -> float:
    """Number on the generator's display over the voltage at the chip.

    Set to "open circuit" the display shows the open-circuit voltage. Set "into 50 Ω" it shows
    what a load of 50 Ω would get, half the open-circuit voltage, so that a chip of high impedance
    gets twice the display.
    """
    ratio = float(open_circuit(drive.source_resistance, np.array(admittance)))
    return ratio if drive.generator_setting == "open-circuit" else 0.5 * ratio
