r"""Modes of electrodes with an interface between metal and liquid.

Between the metal at V and the liquid beside it at φ lies an interface of admittance Y per area
(double layer, film). With the liquid's complex conductivity σ̃ = σ + jωε the current through both
is one, σ̃ ∂φ/∂n = Y(V − φ). In the unknowns on the electrodes, with the matrix S of the current
that the liquid draws (everything else eliminated) and the mass M of the electrodes,

    (S + M/ℓ) φ = (M/ℓ) V,   ℓ = σ̃/Y, a length.

The modes S v = λ M v, vᵀMv = 1, make this a sum for every frequency, liquid and interface at once:
φ = V − Σ c λℓ/(1 + λℓ)·v with c = vᵀMV.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from scipy.linalg import eigh

from model.arrays import Complex, Real
from model.fields.assembly import Space
from model.fields.cells import Index
from model.fields.electric import Potential
from model.fields.sides import side_masses
from model.fields.stored import Stored
from model.fields.trace import Trace, side_table, trace

#: Lengths ℓ for which few combined modes are made to agree with all, and how far they reach
#: beyond the lengths 1/λ of the modes: the sums then agree to some 1e-10 for every ℓ.
SAMPLES, REACH = 32, 30.0
#: Directions of snapshots weaker than this, to the strongest, are rounding.
_NOISE = 1e-13
#: Points on each facet of an electrode at which voltages are told.
_STEPS = np.linspace(0.0, 1.0, 5)


@dataclass(frozen=True, eq=False, repr=False)
class Modes(Stored):
    """Modes of one component of the drive; everything per volt between opposite phases.

    Parameters
    ----------
    rates
        λ of each mode, (m,), 1/m, positive.
    parts
        c of each mode, (m,), √m.
    shapes
        Modes at the places, (n, m), 1/√m.
    places
        On the electrodes, (2, n), m, each electrode's in order.
    electrodes
        Name of the electrode of each place.
    trace
        Modes along the electrodes at other places, for integrals and slopes.
    """

    rates: Real
    parts: Real
    shapes: Real
    places: Real
    electrodes: tuple[str, ...]
    trace: Trace

    @property
    def conductance(self) -> float:
        """Admittance over σ̃ per metre without interface: Σ c²λ, the energy ∫|∇φ|²."""
        return float(self.parts**2 @ self.rates)

    @property
    def capacity(self) -> float:
        """Admittance over Y per metre, m, where the interface blocks: Σ c²."""
        return float(self.parts @ self.parts)

    def answers(self, length: Complex, shapes: Real) -> Complex:
        """Share of the current that the interface leaves, and the voltages across it.

        Parameters
        ----------
        length
            ℓ = σ̃/Y, m, any shape (…), with a real part that is not negative.
        shapes
            Modes where voltages are wanted, (n, m), or their slopes where those are.

        Returns
        -------
        Complex
            Of shape (1 + n, …): current with over current without interface, then V − φ, or its
            slopes.
        """
        carried = self.parts * self.rates
        weights = np.vstack([self.parts * carried / self.conductance, shapes * carried])
        flat = np.asarray(length, dtype=complex).ravel()
        # 1/(1 + λℓ) in real arithmetic, which is faster: real and imaginary parts side by side
        real, imaginary = self.rates[:, None] * flat.real + 1.0, self.rates[:, None] * flat.imag
        size = real * real + imaginary * imaginary
        sums = weights @ np.hstack([real / size, -imaginary / size])
        found = np.asarray(sums[:, : flat.size] + 1j * sums[:, flat.size :])
        found[1:] *= flat
        return found.reshape(-1, *np.shape(length))

    def share(self, length: Complex) -> Complex:
        """Current with the interface over current without; see :meth:`answers`."""
        return np.asarray(self.answers(length, self.shapes[:0])[0])

    def energy(self, length: Complex) -> Real:
        """∫|∇φ|² over that without interface, Σ c²λ/|1 + λℓ|²: the share of the heat."""
        weights = self.parts**2 * self.rates / self.conductance
        rates = self.rates.reshape(-1, *[1] * np.ndim(length))
        return np.asarray(np.tensordot(weights, 1.0 / np.abs(1.0 + rates * length) ** 2, 1))

    def drop(self, length: Complex) -> Complex:
        """Voltage across the interface at all places; see :meth:`answers`."""
        return self.answers(length, self.shapes)[1:]


def even_mode(width: float, conductance: float) -> Modes:
    """The one mode of two electrodes in series that carry the same current everywhere.

    For electrodes whose places are not known: the current is that of the liquid, of the given
    admittance over σ̃ per metre, in series with their interfaces. It has no places.

    Parameters
    ----------
    width
        Of both interfaces in series, m: half that of one electrode.
    conductance
        Without interface, as :attr:`Modes.conductance`.
    """
    part = np.sqrt(width)
    rate, none = conductance / width, np.zeros((0, 1))
    nowhere = np.zeros((2, 0))
    bare = Trace(nowhere, np.zeros(0), none, none)
    return Modes(np.array([rate]), np.array([part]), none, nowhere, (), bare)


def electrode_modes(
    potential: Potential, potentials: Mapping[str, float], electrodes: Sequence[str]
) -> Modes:
    """All modes of the electrodes, as many as they have unknowns.

    Parameters
    ----------
    potential
        φ without interface, with its equations.
    potentials
        V per volt of each held side. Those that are no electrodes (mirror planes) stay at 0.
    electrodes
        Names of the sides that are metal.
    """
    functions = potential.space
    others = [name for name in potentials if name not in electrodes]
    kept = np.setdiff1d(functions.on(*electrodes), functions.on(*others))
    number = np.full(functions.size, -1)
    number[kept] = np.arange(kept.size)
    mass, level = np.zeros((kept.size, kept.size)), np.zeros(kept.size)
    constant = functions.constant()
    for name in electrodes:
        cells, blocks = side_masses(functions, name)
        for cell, block in zip(cells, blocks, strict=True):
            own = number[functions.dofs[:, cell]]
            at = own >= 0
            mass[np.ix_(own[at], own[at])] += block[np.ix_(at, at)]
        own = functions.on(name)
        own = own[number[own] >= 0]
        level[number[own]] = potentials[name] * constant[own]
    rates, vectors = _pairs(potential.factor.schur(kept), mass)
    if not others:  # all electrodes together may float: that mode carries no current
        rates, vectors = rates[1:], vectors[:, 1:]
    places, names, values = _ends_and_between(functions, electrodes, number, kept.size)
    parts = vectors.T @ (mass @ level)
    along = trace(functions, electrodes, number, kept.size).of(vectors)
    return Modes(rates, parts, values @ vectors, places, names, along)


def combined(modes: Modes, samples: int = SAMPLES) -> Modes:
    """Fewer modes, combined from all, that give the same sums for every ℓ.

    The answers at `samples` lengths, spread over all that matter, and V itself span a space in
    which the problem is solved anew, so that both ends, ℓ → 0 and ∞, stay exact. The sums are
    least energies, whose error is the square of that of the answers and falls exponentially with
    the number of lengths (a rational Krylov space).
    """
    if modes.rates.size <= samples + 1:
        return modes
    weights = modes.parts**2 * modes.rates
    alive = modes.rates[weights > _NOISE * weights.sum()]
    lengths = np.geomspace(1.0 / (REACH * alive.max()), REACH / alive.min(), samples)
    answers = modes.parts[:, None] / (1.0 + modes.rates[:, None] * lengths)
    # in the norm of the energy, so that short modes do not drown
    scale = np.sqrt(modes.rates)[:, None]
    basis = scale * np.column_stack([modes.parts, answers])
    left, sizes, _ = np.linalg.svd(basis / np.linalg.norm(basis, axis=0), full_matrices=False)
    left = left[:, sizes > _NOISE * sizes[0]] / scale
    mass, turn = np.linalg.eigh(left.T @ left)
    left = left @ (turn / np.sqrt(mass))
    return Modes(
        1.0 / mass,
        left.T @ modes.parts,
        modes.shapes @ left,
        modes.places,
        modes.electrodes,
        modes.trace.of(left),
    )


def _pairs(schur: Real, mass: Real) -> tuple[Real, Real]:
    """Eigenvalues and vectors of S v = λ M v, rows and columns scaled to a mass of 1 each."""
    scale = 1.0 / np.sqrt(np.diag(mass))
    rates, vectors = eigh(schur * np.outer(scale, scale), mass * np.outer(scale, scale))
    return rates, vectors * scale[:, None]


def _ends_and_between(
    functions: Space, electrodes: Sequence[str], number: Index, size: int
) -> tuple[Real, tuple[str, ...], Real]:
    """Places, electrode of each, and values there (n, size) of the functions of the unknowns."""
    places, names, tables = [], [], []
    for name in electrodes:
        spots, table = side_table(functions, name, (number, size), _STEPS)
        _, first = np.unique(spots.reshape(2, -1).round(15), axis=1, return_index=True)
        places.append(spots.reshape(2, -1)[:, first])
        tables.append(table.reshape(-1, size)[first])
        names += [name] * first.size
    return np.concatenate(places, axis=1), tuple(names), np.concatenate(tables)
