"""What an interface on the electrodes does to a solved chip, for any frequency at once."""

from dataclasses import dataclass

import numpy as np

from model.arrays import Complex, Real
from model.fields.cells import Index
from model.fields.modes import Modes
from model.fields.stored import Stored

#: Lengths over which the places of the largest voltage are looked for, over those of the modes.
_REACH = 1e3


@dataclass(frozen=True, eq=False, repr=False)
class ElectrodeResponse(Stored):
    """Current and interface voltages of all components of the drive together.

    Everything depends on ℓ = σ̃/Y alone, the liquid's complex conductivity σ + jωε over the
    interface's admittance per area, in m, of any shape; see :mod:`model.fields.modes`.

    Parameters
    ----------
    components
        Modes of each component of the drive, all at the same places.
    peaks
        Rows of the places at which the largest interface voltage stands for one ℓ or another;
        none if the places of the electrodes are not known.
    """

    components: tuple[Modes, ...]
    peaks: Index

    @classmethod
    def of(cls, components: tuple[Modes, ...]) -> "ElectrodeResponse":
        """Find the peaks: electrode edges, and what else leads where a wide plate stands by."""
        if not components[0].electrodes:
            return cls(components, np.zeros(0, dtype=np.intp))
        rates = np.concatenate([modes.rates for modes in components])
        sizes = np.geomspace(1.0 / (_REACH * rates.max()), _REACH / rates.min(), 120)
        lengths = sizes[:, None] * np.exp(0.5j * np.pi * np.linspace(-1.0, 1.0, 9))
        whole = cls(components, np.arange(components[0].places.shape[1]))
        return cls(components, np.unique(np.abs(whole.drop(lengths.ravel())).argmax(axis=0)))

    @property
    def has_places(self) -> bool:
        """Whether it is known where the electrodes are, and so the largest voltage on them."""
        return self.peaks.size > 0

    @property
    def places(self) -> Real:
        """Places on the electrodes, (2, n), m."""
        return self.components[0].places

    @property
    def electrodes(self) -> tuple[str, ...]:
        """Name of the electrode of each place."""
        return self.components[0].electrodes

    @property
    def conductance(self) -> float:
        """Admittance over σ̃ per metre without interface, of all components."""
        return sum(modes.conductance for modes in self.components)

    def share(self, length: Complex) -> Complex:
        """Admittance with the interface over that without, complex."""
        return self._answers(length, slice(0))[0]

    def energy(self, length: Complex) -> Real:
        """Heat in the liquid with the interface over that without; at least |share|²."""
        parts = [modes.conductance * modes.energy(length) for modes in self.components]
        return np.asarray(sum(parts) / self.conductance)

    def drop(self, length: Complex) -> Complex:
        """Voltage across the interface at every place, (n, …), per volt between opposite phases."""
        return self._answers(length, slice(None))[1]

    def share_and_largest(self, length: Complex) -> tuple[Complex, Real]:
        """The share, and the largest amplitude of that voltage on any electrode."""
        share, drop = self._answers(length, self.peaks)
        return share, np.asarray(np.abs(drop).max(axis=0))

    def slips(self, length: Complex, rows: Index | slice = slice(None)) -> tuple[Real, ...]:
        """−½ ∂|Δ|²/∂x of the interface voltage Δ along electrodes, at `rows` of the trace.

        Returns
        -------
        tuple of Real
            In 1/m, (q, …) each. Of two components Δ = Δ₀ + jΔ₁ the first is of |Δ₀|² + |Δ₁|² and
            the second of what both add together, which has the parity of Δ₀Δ₁ about mirror planes.
        """
        drops, slopes = [], []
        for modes in self.components:
            trace = modes.trace
            values = trace.values[rows]
            found = modes.answers(length, np.vstack([values, trace.slopes[rows]]))[1:]
            drops.append(found[: len(values)])
            slopes.append(found[len(values) :])
        own = -sum((d.conj() * s).real for d, s in zip(drops, slopes, strict=True))
        if len(drops) == 1:
            return (np.asarray(own),)
        both = (slopes[0].conj() * drops[1] + drops[0].conj() * slopes[1]).imag
        return np.asarray(own), np.asarray(both)

    def _answers(self, length: Complex, rows: Index | slice) -> tuple[Complex, Complex]:
        first, *second = (modes.answers(length, modes.shapes[rows]) for modes in self.components)
        if not second:
            return np.asarray(first[0]), first[1:]
        parts = [modes.conductance for modes in self.components]
        share = (parts[0] * first[0] + parts[1] * second[0][0]) / sum(parts)
        return np.asarray(share), np.asarray(first[1:] + 1j * second[0][1:])
