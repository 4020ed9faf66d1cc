"""Spheres in layers by a library for electromagnetic scattering, kept in ``layered_spheres.json``.

The library treams solves Maxwell's equations for the layered sphere: D. Beutel et al. 2024 Comput.
Phys. Commun. 297:109076. It needs an older SciPy than this program runs with, so that it is no part
of the tests' environment. ``python -m tests.reference.layered_spheres``, with treams 0.4.7
installed, makes the file again.
"""

import json
from pathlib import Path

import numpy as np

FILE = Path(__file__).with_suffix(".json")
VACUUM = 8.8541878128e-12  # CODATA 2018
FREQUENCIES, LAYERS = (1e4, 1e6, 3e7, 1e9), (0, 1, 2, 4, 7)
#: Relative permittivity and conductivity of the medium.
MEDIUM = (78.5, 0.03)


def drawn(layers):
    """A sphere drawn at random: radii outward, permittivities and conductivities from the core."""
    draw = np.random.default_rng(layers)
    radii = np.cumsum(1.0 + 2.0 * draw.random(layers + 1)) * 1e-6
    relative = draw.uniform(2.0, 90.0, layers + 1)
    return radii, relative, 10.0 ** draw.uniform(-3.0, 0.0, layers + 1)


def scattered(radii, permittivities, medium):
    """K from the first electric coefficient, exp(−iωt) there.

    Taken at small sizes and extrapolated to none, as it differs from the electrostatic limit by
    the second and all higher powers of the size.
    """
    from treams.coeffs import mie

    index = np.conj(np.array([*permittivities, medium]) / medium)
    ones = np.ones(index.size)
    sizes = np.array([0.06, 0.04, 0.03, 0.02, 0.01])
    found = []
    for x in sizes:
        both = mie(1, np.asarray(radii) / radii[-1] * x, index, ones, 0 * ones)
        found.append(np.conj(-1.5j * (both[0, 0] + both[0, 1]) / x**3))
    return np.linalg.solve((sizes[:, None] / sizes[0]) ** [0, 2, 3, 4, 5], found)[0]


def main():
    """Write the file."""
    rows = []
    for layers in LAYERS:
        radii, relative, conductivity = drawn(layers)
        for frequency in FREQUENCIES:
            omega = 2 * np.pi * frequency
            parts = VACUUM * relative - 1j * conductivity / omega
            medium = VACUUM * MEDIUM[0] - 1j * MEDIUM[1] / omega
            factor = scattered(radii, parts, medium)
            rows.append(
                {
                    "frequency": frequency,
                    "radii": list(radii),
                    "relative_permittivity": list(relative),
                    "conductivity": list(conductivity),
                    "factor": [factor.real, factor.imag],
                }
            )
    FILE.write_text(json.dumps(rows, indent=1) + "\n")


if __name__ == "__main__":
    main()
