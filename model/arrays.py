"""Array types of the model layer, named once."""

import numpy as np
from numpy.typing import NDArray

Real = NDArray[np.float64]
Complex = NDArray[np.complex128]
#: Real where all is in phase, else complex.
Phasor = Real | Complex


def read_only(array: Real) -> Real:
    """Return `array` with writing switched off, as every stored result is."""
    array.setflags(write=False)
    return array
