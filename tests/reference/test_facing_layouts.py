"""Bars under a plate, facing bars, and bars under an insulating lid against conformal maps.

All of it derived here. Half a pitch a = p/2 by the height h is a rectangle that z ↦ t = sn²(Kz/a)
with K′/K = h/a opens to the upper half plane: the bar to 0 ≤ t ≤ s, s = sn²(Kw/p), the middle of
the gap on the floor to t = 1, the lid above it to t = 1/k², the lid above the bar to ±∞. The other
electrode is then a stretch b ≤ t ≤ c of the real axis and the rest insulates, so that a second
elliptic integral, of modulus κ with κ² = s(c − b)/(b(c − s)), makes the field uniform:
conductance K(κ)/K′(κ) per half pitch, and Ey + iEx = f′(z) with
f′² = (K/(aK′(κ)))²·b(c − s)(1 − t)(1 − k²t)/((s − t)(b − t)(c − t)).

- plate: b = 1/k², c = ∞;
- bars on the lid over the gaps: b = 1/k², c = 1/(k² sn²(K(1 − w/p)));
- insulating lid, the next bar opposite: the mirror plane in the gap holds half the voltage, b = 1,
  c = 1/k², which gives the capacitance that Igreja and Dias published in 2004 (from memory);
- bars on the lid over those on the floor: the plane half-way is at 0 V, hence a plate at half the
  height with half the voltage.
"""

from dataclasses import dataclass
from functools import partial

import mpmath
import numpy as np
import pytest
from scipy.special import jv

from model.fields.assembly import space
from model.fields.cells import Cells
from model.fields.electric import solve_potential
from model.fields.heat import Cooling, conduction
from model.fields.piecewise import Piecewise
from model.layouts.bars_under_plate import BarsUnderPlate
from model.layouts.coplanar_bars import CoplanarBars
from model.layouts.facing_bars import FacingBars

UM = 1e-6
DIGITS = 30  # k comes close to 1 under a low lid
GEOMETRIES = [(40, 40, 100), (40, 40, 20), (80, 40, 30), (20, 60, 50), (10, 90, 200), (95, 5, 60)]


@dataclass(frozen=True)
class Map:
    """Exact field of half a pitch; lengths in any one unit, `voltage` between bar and the other."""

    width: float
    pitch: float
    height: float
    other: str
    voltage: float = 1.0

    @property
    def modulus(self):
        """Elliptic parameter k² of the first map, from its nome q = exp(−πK′/K)."""
        q = mpmath.exp(-2 * mpmath.pi * mpmath.mpf(self.height) / self.pitch)
        return (mpmath.jtheta(2, 0, q) / mpmath.jtheta(3, 0, q)) ** 4

    def square(self, share):
        """sn²(K·share)."""
        m = self.modulus
        return mpmath.ellipfun("sn", mpmath.ellipk(m) * share, m=m) ** 2

    @property
    def ends(self):
        """Ends s, b and 1/c of the bar and of the other electrode on the real axis."""
        m, share = self.modulus, mpmath.mpf(self.width) / self.pitch
        s = self.square(share)
        if self.other == "plate":
            return s, 1 / m, mpmath.mpf(0)
        if self.other == "over the gap":
            return s, 1 / m, m * self.square(1 - share)
        return s, mpmath.mpf(1), m

    @property
    def ratio(self):
        """K(κ)/K′(κ) and K′(κ)."""
        s, b, c = self.ends
        inner = s * (1 - b * c) / (b * (1 - s * c))
        return mpmath.ellipk(inner) / mpmath.ellipk(1 - inner), mpmath.ellipk(1 - inner)

    def capacitance(self):
        """C/ε per metre and pitch for 1 V between bar and the other electrode."""
        with mpmath.workdps(DIGITS):
            return float(2 * self.ratio[0])

    def field(self, x, y):
        """|E|², its gradient's two components, and E, for arrays of places within half a pitch."""
        with mpmath.workdps(DIGITS):
            m, (s, b, c) = self.modulus, self.ends
            k = mpmath.ellipk(m)
            scale = 2 * k / self.pitch
            factor = (self.voltage * scale / self.ratio[1]) ** 2 * b * (1 - s * c)

            def place(x, y):
                u = scale * mpmath.mpc(x, y)
                sn, cn, dn = (mpmath.ellipfun(name, u, m=m) for name in ("sn", "cn", "dn"))
                t, speed = sn**2, 2 * sn * cn * dn * scale
                square = factor * (1 - t) * (1 - m * t) / ((s - t) * (b - t) * (1 - c * t))
                # logarithmic slope; a factor that stands above and below cancels
                slope = 1 / (s - t) + c / (1 - c * t) - 1 / (1 - t)
                slope += 1 / (b - t) - m / (1 - m * t)
                rise = square * slope * speed
                size = abs(square)
                along = mpmath.re(mpmath.conj(square) * rise) / size
                up = mpmath.re(mpmath.conj(square) * 1j * rise) / size
                root = mpmath.sqrt(square)
                return [float(part) for part in (size, along, up, root.imag, root.real)]

            found = [place(*pair) for pair in zip(np.ravel(x), np.ravel(y), strict=True)]
        return np.array(found).T.reshape(5, *np.shape(x))


def plate_map(width, gap, height):
    return Map(width, width + gap, height, "plate")


def facing_map(width, gap, height):
    """Lower half of aligned facing bars."""
    return Map(width, width + gap, height / 2, "plate", voltage=0.5)


def staggered_map(width, gap, height):
    return Map(width, width + gap, height, "over the gap")


def lid_map(width, gap, height):
    """Coplanar bars under an insulating lid: half the voltage to the plane in the gap."""
    return Map(width, width + gap, height, "middle", voltage=0.5)


def bars(kind, width, gap, height, **more):
    return kind(
        bar_width=width * UM,
        gap=gap * UM,
        channel_height=height * UM,
        channel_width=2e-3,
        bar_count=20,
        **more,
    )


def staggered(width, gap, height):
    return bars(FacingBars, width, gap, height, offset=(width + gap) / 2 * UM)


def solved_potential(chip, refinement=0):
    """φ in the liquid, without heat and flow."""
    section = chip.section(refinement)
    return solve_potential(space(section.liquid(), 8, 16, section.joined), section.potentials[0])


def field_and_gradient(potential, x, y):
    """E and ∇|E|², (2, …), at places in µm, per µm and µm³."""
    found = Piecewise.of(potential.space, potential.solution[None], Cells.of(potential.space.mesh))
    located = found.cells.locate(np.stack([x.ravel(), y.ravel()]) * UM)
    field = -found.slopes(*located)[0].reshape(2, *x.shape) * UM
    return field, found.force_patterns(*located)[0].reshape(2, *x.shape) * UM**3


def charges_on_the_bar(width, pitch, height, terms=20_000, shapes=10):
    """C/ε per pitch of bars under a plate from charges on the bar, without any map.

    The charge is a Chebyshev series over the square root of the distance from the edges; its
    field in the strip below the plate, by cosine modes, is made constant on the bar (Galerkin).
    """
    n = np.arange(1, terms + 1)
    wave = 2 * np.pi * n / pitch
    j = np.arange(shapes)[:, None]
    modes = jv(2 * j, 0.5 * wave * width) * (-1.0) ** j
    weights = np.tanh(wave * height) / (0.5 * wave * pitch)
    # rest of the sum: products of Bessel functions of large z are 1/(πz) on average
    matrix = (modes * weights) @ modes.T + pitch / (np.pi**3 * width * terms)
    matrix[0, 0] += height / pitch
    return float(np.linalg.inv(matrix)[0, 0])


@pytest.mark.parametrize(("width", "gap", "height"), GEOMETRIES)
def test_map_of_a_plate_agrees_with_charges_on_the_bar(width, gap, height):
    expected = charges_on_the_bar(width, width + gap, height)
    assert plate_map(width, gap, height).capacitance() == pytest.approx(expected, rel=1e-6)


@pytest.mark.parametrize(("share", "expected"), [(0.05, 0.1699802403), (0.25, 0.4620075116)])
def test_map_of_an_insulating_lid_is_the_published_capacitance(share, expected):
    """Height over twice the pitch, equal bars and gaps; Igreja and Dias 2004, from memory.

    1 V between neighbours is 1/2 V over each half pitch; two of those, with a quarter of the
    energy each, make a gap.
    """
    assert lid_map(40, 40, 160 * share).capacitance() / 4 == pytest.approx(expected, rel=1e-9)


@pytest.mark.parametrize("mapped", [plate_map, staggered_map, lid_map])
def test_exact_field_keeps_its_boundary_values(mapped):
    """Normal to metal, along walls, and the right voltage between the electrodes."""
    exact = mapped(30, 50, 45)
    ex, ey = exact.field(np.array([1.0, 8, 14]), np.zeros(3))[3:]
    assert np.abs(ex).max() < 1e-12 * np.abs(ey).min()
    ex, ey = exact.field(np.array([16.0, 25, 39]), np.zeros(3))[3:]
    assert np.abs(ey).max() < 1e-12 * np.abs(ex).min()
    nodes, weights = np.polynomial.legendre.leggauss(24)
    along, half = 0.5 * (nodes + 1), 0.5 * weights
    zero = np.zeros(24)
    voltage = 12 * exact.field(zero, 12 * along)[4] @ half  # up from the bar's centre
    voltage += 40 * exact.field(40 * along, zero + 12)[3] @ half  # to the middle of the gap
    if mapped is not lid_map:
        voltage += 33 * exact.field(zero + 40, 12 + 33 * along)[4] @ half  # up to the lid
    assert voltage == pytest.approx(exact.voltage, rel=1e-8)


#: Exact map, chip, and energy of a gap or pitch over the map's conductance at 1 V.
CASES = {
    "plate": (plate_map, partial(bars, BarsUnderPlate), 1.0),
    "aligned": (facing_map, partial(bars, FacingBars), 0.5),  # two halves in series
    "staggered": (staggered_map, staggered, 1.0),
    "insulating lid": (lid_map, partial(bars, CoplanarBars), 0.25),  # a quarter of the energy
}


@pytest.mark.parametrize(
    ("name", "size"),
    [
        *(("plate", size) for size in GEOMETRIES),
        *(("insulating lid", size) for size in GEOMETRIES[1:]),
        *((name, size) for size in GEOMETRIES[1:4] for name in ("aligned", "staggered")),
    ],
)
def test_cell_factor_and_field(name, size):
    """C, E and ∇|E|² at points from a fiftieth of the height up."""
    mapped, make, share = CASES[name]
    exact = mapped(*size)
    potential = solved_potential(make(*size))
    expected = share * exact.capacitance()
    assert 2 * potential.energy == pytest.approx(expected, rel=1e-5)
    assert 2 * potential.energy > expected  # the energy of a finite-element field is never too low
    x, y = np.meshgrid(
        np.array([0.03, 0.2, 0.3, 0.49]) * exact.pitch,
        np.array([0.02, 0.1, 0.4, 0.97]) * exact.height,
    )
    square, along, up, ex, ey = exact.field(x, y)
    field, gradient = field_and_gradient(potential, x, y)
    assert np.max(np.hypot(field[0] - ex, field[1] - ey) / np.sqrt(square)) < 3e-5
    miss = np.hypot(gradient[0] - along, gradient[1] - up)
    assert np.all(miss < 5e-4 * np.hypot(along, up).max(axis=1, keepdims=True))


@pytest.mark.parametrize("name", ["plate", "aligned"])
def test_order_of_convergence(name):
    """Refining halves the cell at the edge, hence the error of conductance and field."""
    mapped, make, share = CASES[name]
    exact, chip = mapped(20, 60, 50), make(20, 60, 50)
    x, y = np.meshgrid(np.array([4.0, 14, 20, 36]), np.array([0.1, 0.4, 0.9]) * exact.height)
    true = exact.field(x, y)[3:]
    errors = []
    for refinement in (0, 1):
        potential = solved_potential(chip, refinement)
        field, _ = field_and_gradient(potential, x, y)
        miss = 2 * potential.energy / (share * exact.capacitance()) - 1
        errors.append([miss, np.sqrt(np.mean((field - true) ** 2))])
    ratio = np.divide(errors[0], errors[1])
    assert np.all((ratio > 1.8) & (ratio < 2.2))


def test_offset_piece_against_both_exact_ends():
    """Next to no offset, or next to half a pitch: the whole pitch, joined to itself.

    C changes with the square of the shift, by less than 1e-8 here.
    """
    size, pitch = (30, 50, 25), 80 * UM
    for offset, exact in ((1e-4 * pitch, 0.5), (0.5001 * pitch, 1.0)):
        mapped = facing_map if exact == 0.5 else staggered_map
        chip = bars(FacingBars, *size, offset=offset)
        assert chip.section().joined
        expected = exact * mapped(*size).capacitance()
        assert solved_potential(chip).energy == pytest.approx(expected, rel=1e-4)


def test_field_of_offset_bars_turns_into_itself():
    """Half a turn about the middle between a floor bar and its lid bar changes the sign of φ."""
    chip = bars(FacingBars, 30, 50, 25, offset=17 * UM)
    potential = solved_potential(chip)
    x, y = np.meshgrid(np.array([2.0, 6, 11, 16]), np.array([0.5, 3, 11, 20]))
    here, steep = field_and_gradient(potential, x, y)
    there, steeper = field_and_gradient(potential, 17 - x, 25 - y)
    np.testing.assert_allclose(there, here, atol=1e-4 * np.abs(here).max())
    np.testing.assert_allclose(steeper, -steep, atol=1e-3 * np.abs(steep).max())


@pytest.mark.parametrize("name", ["plate", "aligned"])
def test_narrow_gaps_make_parallel_plates(name):
    """E = V/h, C = εp/h and no gradient as the gap closes: what is missing falls with its square.

    A slit of width g in a plate lets the field sink in as a dipole of strength g².
    """
    _, make, _ = CASES[name]
    height, pitch = 20.0, 50.0
    missing, strayed = [], []
    for gap in (2.0, 1.0):
        potential = solved_potential(make(pitch - gap, gap, height))
        missing.append(1 - 2 * potential.energy * height / pitch)
        x, y = np.meshgrid(np.linspace(1, 24, 6), [6.0, 10, 14])
        field, gradient = field_and_gradient(potential, x, y)
        stray = np.hypot(field[0], field[1] - 1 / height) * height
        strayed.append([stray.max(), np.hypot(*gradient).max() * height**3])
    assert 0 < missing[1] < 1e-3
    assert 3.8 < missing[0] / missing[1] < 4.2
    ratio = np.divide(strayed[0], strayed[1])
    assert np.all((ratio > 3.8) & (ratio < 4.2))


@pytest.mark.parametrize("name", ["plate", "aligned", "staggered", "offset"])
def test_isothermal_electrodes_heat_the_liquid_by_an_eighth(name):
    """Θ = (1/4 − φ²)/2 with ideal heat sinks as electrodes and insulating walls, any shape.

    The relation of Kohlrausch 1900 between potential and temperature; max ΔT = σV_rms²/(8k).
    """
    make = CASES[name][1] if name in CASES else partial(bars, FacingBars, offset=17 * UM)
    chip = make(30, 50, 25)
    section = chip.section()
    functions = space(section.liquid(), 7, 14, section.joined)
    potential = solve_potential(functions, section.potentials[0])
    field = potential.gradients()
    heat = conduction(
        functions,
        np.full(functions.mesh.nelements, 0.6),
        Cooling(dict.fromkeys(section.electrodes)),
    ).solve(0.6 * np.einsum("ckq,ckq->kq", field, field))
    cells = Cells.of(functions.mesh)
    both = Piecewise.of(functions, np.stack([potential.solution, heat]), cells)
    highest = float(both.highest(np.arange(functions.mesh.nelements))[1])
    assert highest == pytest.approx(1 / 8, rel=2e-4)
    x, y = np.meshgrid(np.linspace(0, 40, 17), np.linspace(0, 25, 17))
    level, warm = both.values(*cells.locate(np.stack([x.ravel(), y.ravel()]) * UM))
    np.testing.assert_allclose(warm, 0.5 * (0.25 - level**2), atol=1e-5)
