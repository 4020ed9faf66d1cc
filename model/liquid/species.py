"""What liquids hold apart from water, as dissolved species: ions, and molecules without charge.

Sources of the numbers, unless one stands beside them:

- limiting conductivities, per equivalent: P. Vanysek, "Ionic conductivity and diffusion at
  infinite dilution", *CRC Handbook of Chemistry and Physics*;
- their slopes: fitted to R. A. Robinson and R. H. Stokes, *Electrolyte Solutions* (2nd ed. 1959),
  appendix 6.2, 0 to 55 °C, from memory; 0.9 where it has no values;
- sizes: fitted to the handbook's equivalent conductivities of chlorides up to 0.1 eq/L;
- volumes: F. J. Millero 1971 *Chem. Rev.* 71:147, conventional (0 for H⁺), from memory;
- viscosities of ions: H. D. B. Jenkins and Y. Marcus 1995 *Chem. Rev.* 95:2695, from memory;
- decrements of ions: J. B. Hasted, D. M. Ritson and C. H. Collie 1948 *J. Chem. Phys.* 16:1, from
  memory; ions that they did not measure have those of a like one;
- molecules: see beside each.
"""

from collections.abc import Mapping
from dataclasses import dataclass
from functools import lru_cache
from types import MappingProxyType

import numpy as np
from numpy.typing import NDArray
from scipy.constants import Avogadro, elementary_charge, gas_constant

from model.arrays import Real, read_only
from model.liquid import water

FARADAY = Avogadro * elementary_charge
#: Temperature of the handbook values and of mixing, K.
REFERENCE = 298.15


@dataclass(frozen=True)
class Species:
    """An ion or a molecule in water.

    Parameters
    ----------
    charge
        Charge number with sign.
    mass
        Molar mass, g/mol.
    volume
        Partial molar volume at infinite dilution, cm³/mol.
    viscosity
        Coefficient B of G. Jones and M. Dole 1929, L/mol: η/η_w = 1 + Bc at small c.
    decrement
        By how much the relative permittivity falls for each mol/L.
    conductivity
        Limiting equivalent conductivity at 25 °C, S cm²/eq; 0 for molecules.
    slopes
        p, q of λ = λ₂₅·exp(pL + qL²), L = ln(η_w(25 °C)/η_w(T)).
    size
        Distance of closest approach among ions of its kind, nm.
    osmotic
        b of the osmotic coefficient φ = 1 + bm of its own solution, kg/mol; for molecules.
    """

    charge: int
    mass: float
    volume: float
    viscosity: float
    decrement: float
    conductivity: float = 0.0
    slopes: tuple[float, float] = (0.9, 0.0)
    size: float = 0.4
    osmotic: float = 0.0


#: H. D. B. Jenkins and Y. Marcus give no B for large ions; taken as A. Einstein's 2.5·volume.
_EINSTEIN = 2.5e-3
#: Fall of the permittivity per g/L of sugar; see sucrose.
_SUGAR = 0.0227

SPECIES: Mapping[str, Species] = MappingProxyType(
    {
        "H+": Species(1, 1.008, 0.0, 0.068, 17.0, 349.65, (0.608, 0.0)),
        "Na+": Species(1, 22.990, -1.21, 0.085, 8.0, 50.08, (0.947, 0.040)),
        "K+": Species(1, 39.098, 9.02, -0.009, 8.0, 73.48, (0.849, 0.005)),
        "NH4+": Species(1, 18.039, 17.86, -0.008, 8.0, 73.5, (0.863, 0.0)),
        "Mg2+": Species(2, 24.305, -21.17, 0.385, 24.0, 53.0, (0.962, 0.054), size=0.61),
        "Ca2+": Species(2, 40.078, -17.85, 0.284, 24.0, 59.47, (0.962, 0.054), size=0.61),
        "OH-": Species(-1, 17.007, -4.04, 0.122, 13.0, 198.0, (0.813, 0.0)),
        "Cl-": Species(-1, 35.453, 17.83, -0.005, 3.0, 76.31, (0.886, -0.003)),
        "HCO3-": Species(-1, 61.017, 23.4, 0.130, 3.0, 44.5),
        "SO4 2-": Species(-2, 96.06, 13.98, 0.206, 7.0, 80.0, (0.926, -0.041)),
        "H2PO4-": Species(-1, 96.987, 29.1, 0.340, 3.0, 36.0),
        "HPO4 2-": Species(-2, 95.979, 7.7, 0.382, 7.0, 57.0),
        # Mobilities 21.8 and 29.5·10⁻⁹ m²/(V s): T. Hirokawa et al. 1983 J. Chromatogr. 252:49,
        # from memory, and good to some 10 % for the first. Volumes rounded, from memory.
        "HEPES": Species(0, 238.30, 176.0, _EINSTEIN * 176.0, 0.0),
        "HEPES-": Species(-1, 237.29, 170.0, _EINSTEIN * 170.0, 3.0, 21.0),
        "Tris": Species(0, 121.14, 92.0, _EINSTEIN * 92.0, 121.14 * _SUGAR),
        "TrisH+": Species(1, 122.14, 92.0, _EINSTEIN * 92.0, 8.0, 28.5),
        # Sucrose: volume R&S; B from ICUMSA's viscosities at 20 °C; permittivity 78.54, 76.19,
        # 73.65, 70.86 at 0, 10, 20, 30 % by weight and 25 °C, C. G. Malmberg and A. A. Maryott 1950
        # J. Res. Natl. Bur. Stand. 45:299, which is 0.0227 per g/L; φ R&S. All from memory.
        # The others: volumes and B rounded, from memory; the fall per mass taken as sucrose's.
        "sucrose": Species(0, 342.30, 211.6, 0.873, 342.30 * _SUGAR, osmotic=0.085),
        "trehalose": Species(0, 342.30, 209.0, 0.88, 342.30 * _SUGAR, osmotic=0.09),
        "dextrose": Species(0, 180.16, 112.0, 0.43, 180.16 * _SUGAR, osmotic=0.02),
        "mannitol": Species(0, 182.17, 119.0, 0.49, 182.17 * _SUGAR, osmotic=0.01),
    }
)


@lru_cache(maxsize=64)  # liquids of few kinds at few temperatures; pure
def diffusivity(names: tuple[str, ...], temperature: float) -> Real:
    """D = RTλ/(|z|F²), m²/s, at infinite dilution in water; (n_species,), 0 for molecules.

    The limiting conductivity λ per equivalent follows the viscosity of water. Within 1 % of the
    handbook's conductivities of potassium chloride from 0 to 50 °C.

    >>> float(diffusivity(("K+",), 298.15)[0].round(13))
    1.9567e-09
    """
    ratio = water.viscosity(REFERENCE) / water.viscosity(temperature)
    log = np.log(float(ratio))
    found = []
    for name in names:
        ion = SPECIES[name]
        limiting = 1e-4 * ion.conductivity * np.exp((ion.slopes[0] + ion.slopes[1] * log) * log)
        found.append(gas_constant * temperature * limiting / (max(abs(ion.charge), 1) * FARADAY**2))
    return read_only(np.array(found))


@dataclass(frozen=True)
class Columns:
    """Numbers of several species side by side in SI, each (n_species,); see :class:`Species`.

    `ions` tells which are ions; B and decrements are in m³/mol.
    """

    ions: NDArray[np.bool_]
    charges: Real
    masses: Real
    volumes: Real
    thickening: Real
    decrements: Real
    sizes: Real


@lru_cache(maxsize=32)  # liquids of few kinds; pure
def columns(names: tuple[str, ...]) -> Columns:
    """The numbers of `names`, keys of :data:`SPECIES`."""
    found = [SPECIES[name] for name in names]
    charges = np.array([float(one.charge) for one in found])
    return Columns(
        charges != 0.0,
        charges,
        1e-3 * np.array([one.mass for one in found]),
        1e-6 * np.array([one.volume for one in found]),
        1e-3 * np.array([one.viscosity for one in found]),
        1e-3 * np.array([one.decrement for one in found]),
        1e-9 * np.array([one.size for one in found]),
    )
