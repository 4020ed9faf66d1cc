"""Array types of the model layer, named once."""

import numpy as np
from numpy.typing import NDArray

Real = NDArray[np.float64]
Complex = NDArray[np.complex128]
#: Real where all is in phase, else complex.
Phasor = Real | Complex


def components(phasor: Phasor) -> Real:
    """Real part and, of complex arrays, imaginary part along a new first axis."""
    return np.stack([phasor.real, phasor.imag] if np.iscomplexobj(phasor) else [phasor.real])


def phasor(components: Real) -> Phasor:
    """Undo :func:`components`.

    >>> phasor(np.array([[1.0], [2.0]])), phasor(np.array([[1.0]]))
    (array([1.+2.j]), array([1.]))
    """
    if len(components) == 1:
        return np.asarray(components[0])
    return np.asarray(components[0] + 1j * components[1])


def read_only(array: Real) -> Real:
    """Return `array` with writing switched off, as every stored result is."""
    array.setflags(write=False)
    return array
