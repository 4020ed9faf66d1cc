"""Weak acids that hold the pH: how much of each is there as its base."""

from collections.abc import Mapping
from dataclasses import dataclass
from types import MappingProxyType

import numpy as np
from numpy.typing import ArrayLike

from model.arrays import Real
from model.liquid.species import SPECIES


@dataclass(frozen=True)
class Buffer:
    """Acid and conjugate base, as species, and pK at 25 °C and no ionic strength."""

    acid: str
    base: str
    pk: float

    def base_share(self, ph: float, ionic_strength: ArrayLike) -> Real:
        """Share that is there as the base, of the shape of the ionic strength in mol/m³.

        [base]/[acid] = 10^(pH − pK)·γ_acid/γ_base with log γ = −0.509 z²(√I/(1 + √I) − 0.3 I), I in
        mol/L: C. W. Davies, *Ion Association* (1962), good to some 0.5 mol/L.

        >>> float(BUFFERS["HEPES"].base_share(7.564, 0.0))
        0.5
        """
        strength = 1e-3 * np.asarray(ionic_strength)
        root = np.sqrt(strength)
        weakened = 0.509 * (root / (1.0 + root) - 0.3 * strength)
        charges = SPECIES[self.base].charge ** 2 - SPECIES[self.acid].charge ** 2
        return np.asarray(1.0 / (1.0 + 10.0 ** (self.pk - ph - weakened * charges)))


#: R. N. Goldberg, N. Kishore and R. M. Lennen 2002 J. Phys. Chem. Ref. Data 31:231, from memory.
BUFFERS: Mapping[str, Buffer] = MappingProxyType(
    {
        "HEPES": Buffer("HEPES", "HEPES-", 7.564),
        "Tris": Buffer("TrisH+", "Tris", 8.072),
        "phosphate": Buffer("H2PO4-", "HPO4 2-", 7.198),
    }
)
