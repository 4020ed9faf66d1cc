"""Osmolality of a solution of ions and molecules."""

from collections.abc import Mapping
from dataclasses import dataclass
from functools import lru_cache
from types import MappingProxyType

import numpy as np
from numpy.typing import NDArray

from model.arrays import Real
from model.liquid.species import SPECIES

#: Debye–Hückel slope A_φ for water at 25 °C, (kg/mol)^½: K. S. Pitzer and G. Mayorga 1973.
_SLOPE = 0.392
#: β⁽⁰⁾, β⁽¹⁾, C^φ of pairs of ions at 25 °C. K. S. Pitzer and G. Mayorga 1973 J. Phys. Chem.
#: 77:2300; hydrogen carbonates: C. E. Harvie, N. Møller and J. H. Weare 1984 Geochim. Cosmochim.
#: Acta 48:723. From memory. Pairs that do not stand here have the Debye–Hückel term alone.
_PAIRS: Mapping[tuple[str, str], tuple[float, float, float]] = MappingProxyType(
    {
        ("H+", "Cl-"): (0.1775, 0.2945, 0.0008),
        ("Na+", "Cl-"): (0.0765, 0.2664, 0.00127),
        ("K+", "Cl-"): (0.04835, 0.2122, -0.00084),
        ("NH4+", "Cl-"): (0.0522, 0.1918, -0.00301),
        ("Mg2+", "Cl-"): (0.35235, 1.6815, 0.00519),
        ("Ca2+", "Cl-"): (0.3159, 1.614, -0.00034),
        ("Na+", "OH-"): (0.0864, 0.253, 0.0044),
        ("Na+", "SO4 2-"): (0.01958, 1.113, 0.00497),
        ("K+", "SO4 2-"): (0.04995, 0.7793, 0.0),
        ("Na+", "H2PO4-"): (-0.0533, 0.0396, 0.00795),
        ("K+", "H2PO4-"): (-0.0678, -0.1042, 0.0),
        ("Na+", "HPO4 2-"): (-0.0583, 1.4655, 0.02938),
        ("K+", "HPO4 2-"): (0.0248, 1.2743, 0.0164),
        ("Na+", "HCO3-"): (0.0277, 0.0411, 0.0),
        ("K+", "HCO3-"): (0.0296, -0.013, -0.008),
    }
)


def osmolality(names: tuple[str, ...], molalities: Real) -> Real:
    """Osmolality φ Σm at 25 °C, mol/kg, () or (n,).

    φ Σm = Σm + 2[−A_φ I^(3/2)/(1 + 1.2 √I) + Σ m_c m_a (β⁽⁰⁾ + β⁽¹⁾ exp(−2√I) + Z C)] + Σ b m²,
    C = C^φ/(2√|z_c z_a|), Z = Σ|z|m; b belongs to molecules. Like ions and ions with molecules are
    taken not to act on one another.

    Parameters
    ----------
    names
        Keys of :data:`model.liquid.species.SPECIES`.
    molalities
        mol per kg of water, (n_species,) or (n_species, n).

    Notes
    -----
    Within 1 % of tables to an ionic strength of 1 mol/kg. Source: K. S. Pitzer and G. Mayorga 1973.

    >>> round(float(osmolality(("Na+", "Cl-"), np.array([0.1, 0.1]))) / 0.2, 3)
    0.932
    """
    found = _coefficients(names)
    strength = 0.5 * found.charges**2 @ molalities
    root = np.sqrt(strength)
    carried = np.abs(found.charges) @ molalities
    pairs = molalities[found.cations] * molalities[found.anions]
    acting = (
        -_SLOPE * strength * root / (1.0 + 1.2 * root)
        + found.first @ pairs
        + np.exp(-2.0 * root) * (found.second @ pairs)
        + carried * (found.third @ pairs)
    )
    return np.asarray(molalities.sum(axis=0) + 2.0 * acting + found.molecules @ molalities**2)


@dataclass(frozen=True)
class _Coefficients:
    """Charges and b of all species, (n_species,); of pairs their ions, β⁽⁰⁾, β⁽¹⁾, C, (n_pair,)."""

    charges: Real
    molecules: Real
    cations: NDArray[np.intp]
    anions: NDArray[np.intp]
    first: Real
    second: Real
    third: Real


@lru_cache(maxsize=32)  # liquids of few kinds; pure
def _coefficients(names: tuple[str, ...]) -> _Coefficients:
    charges = np.array([float(SPECIES[name].charge) for name in names])
    pairs = [pair for pair in _PAIRS if pair[0] in names and pair[1] in names]
    cations, anions = (
        np.array([names.index(pair[end]) for pair in pairs], dtype=np.intp) for end in (0, 1)
    )
    numbers = np.array([_PAIRS[pair] for pair in pairs]).reshape(-1, 3)
    return _Coefficients(
        charges,
        np.array([SPECIES[name].osmotic for name in names]),
        cations,
        anions,
        numbers[:, 0],
        numbers[:, 1],
        numbers[:, 2] / (2.0 * np.sqrt(np.abs(charges[cations] * charges[anions]))),
    )
