"""Polarisation of many samples at once against a plain NumPy loop over them."""

import numpy as np

from model.layers import Core, Layer
from model.medium import Medium
from model.particle import Sample
from model.particles.shelled_sphere import ShelledSphere
from model.polarisation import complex_permittivity
from tests.benchmarks.model_speed import milliseconds

SAMPLES, FREQUENCIES, BLOCK = 10_000, 200, 40
#: Samples of the loop; its time is told for all of them.
LOOPED = 500
CELL = ShelledSphere(
    name="walled cell",
    radius=4e-6,
    core=Core(relative_permittivity=50, conductivity=0.2),
    layers=(
        Layer(thickness=8e-9, relative_permittivity=6, conductivity=2.5e-7),
        Layer(thickness=220e-9, relative_permittivity=60, conductivity=0.014),
        Layer(thickness=50e-9, relative_permittivity=70, conductivity=0.1),
    ),
)


def main() -> None:
    """Print times and layer-points a second."""
    omega = 2.0 * np.pi * np.geomspace(1e3, 1e8, FREQUENCIES)
    medium = Medium(omega, 6.94e-10, np.array(0.02))
    draw = np.random.default_rng(1)
    size = np.exp(0.1 * draw.standard_normal((SAMPLES, 1)))
    few = size[:LOOPED, 0]

    def blocks() -> None:
        for start in range(0, SAMPLES, BLOCK):
            CELL.polarisation(medium, Sample(size[start : start + BLOCK]))

    def one_by_one() -> None:
        for one in few:
            CELL.polarisation(medium, Sample(one))

    many = SAMPLES / LOOPED
    rows = (
        ("all at once", milliseconds(lambda: CELL.polarisation(medium, Sample(size)), 5)),
        (f"in blocks of {BLOCK}", milliseconds(blocks, 5)),
        (
            "plain loop over samples, written out",
            milliseconds(lambda: _loop(medium, few), 3) * many,
        ),
        ("the model's own call for each sample", milliseconds(one_by_one, 3) * many),
    )
    points = SAMPLES * FREQUENCIES * len(CELL.layers)
    print(f"{SAMPLES} samples, {FREQUENCIES} frequencies, {len(CELL.layers)} layers:")
    for name, time in rows:
        speed = points / time * 1e-3
        print(f"{name:54} {time:9.1f} ms  {speed:6.1f} million layer-points a second")
    ratios = [rows[k][1] / rows[1][1] for k in (2, 3)]
    print("over blocks: plain loop {:.1f}, the model's own call {:.1f}".format(*ratios))


def _loop(medium: Medium, sizes: np.ndarray) -> None:
    """The textbook recursion β, γ for one sample after the other, each over all frequencies."""
    outside = medium.complex_permittivity
    for size in sizes:
        outer = CELL.radius * size
        radii = [outer]
        for layer in reversed(CELL.layers):
            radii.append(radii[-1] - layer.thickness)
        radii.reverse()
        inside = complex_permittivity(CELL.core.permittivity, CELL.core.conductivity, medium.omega)
        for index, layer in enumerate(CELL.layers):
            shell = complex_permittivity(layer.permittivity, layer.conductivity, medium.omega)
            cube = (radii[index + 1] / radii[index]) ** 3
            beta = (inside - shell) / (inside + 2.0 * shell)
            inside = shell * (cube + 2.0 * beta) / (cube - beta)
        (inside - outside) / (inside + 2.0 * outside)


if __name__ == "__main__":
    main()
