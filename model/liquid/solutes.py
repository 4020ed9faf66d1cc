"""What is weighed or poured into a liquid, and the species that it gives."""

from collections.abc import Mapping
from dataclasses import dataclass, field
from types import MappingProxyType

from model.liquid.species import SPECIES


@dataclass(frozen=True)
class Stock:
    """A stock solution as laboratories keep it: common practice, no source.

    `strength` is its concentration in mol/m³.
    """

    label: str
    strength: float


@dataclass(frozen=True)
class Solute:
    """One substance, or a mixture of salts that is made up as a whole.

    Parameters
    ----------
    name
        For people.
    species
        Species and how many of each a formula unit gives. Of a buffer those that it is weighed as.
    weighed
        What stands on the balance, with its water of crystallisation.
    water
        Molecules of that water per formula unit.
    kind
        salt, saline (salts in fixed shares), buffer, sugar, or titrant: what sets the pH.
    most
        Most that dissolves at 25 °C or that the models reach, mol/m³; salts are bounded by their
        ionic strength.
    stock
        The usual stock solution, if there is one.
    """

    name: str
    species: tuple[tuple[str, float], ...]
    weighed: str
    kind: str
    water: float = 0.0
    most: float = field(default=5000.0, kw_only=True)
    stock: Stock | None = field(default=None, kw_only=True)

    @property
    def molar_mass(self) -> float:
        """Of what is weighed, kg/mol."""
        parts = sum(count * SPECIES[name].mass for name, count in self.species)
        return 1e-3 * (parts + self.water * 18.015)


_MOLAR = Stock("1 M", 1000.0)
#: Most of a buffer, mol/m³: its own ions then come near to where activities hold.
_BUFFERED = 200.0

#: Phosphate-buffered saline: the common recipe of 137, 2.7, 10 and 1.8 mmol/L. One formula unit is
#: what a litre of it holds, so that its concentration in mol/L is its strength.
_SALINE = (("Na+", 0.157), ("K+", 0.0045), ("Cl-", 0.1397), ("HPO4 2-", 0.01), ("H2PO4-", 0.0018))

#: Solubilities of the sugars: handbook values, from memory, or about 40 % by weight, up to where
#: the viscosities hold.
SOLUTES: Mapping[str, Solute] = MappingProxyType(
    {
        "KCl": Solute("potassium chloride", (("K+", 1), ("Cl-", 1)), "KCl", "salt", stock=_MOLAR),
        "NaCl": Solute(
            "sodium chloride",
            (("Na+", 1), ("Cl-", 1)),
            "NaCl",
            "salt",
            stock=Stock("5 M", 5000.0),
        ),
        "MgCl2": Solute(
            "magnesium chloride",
            (("Mg2+", 1), ("Cl-", 2)),
            "MgCl2·6H2O",
            "salt",
            6.0,
            stock=_MOLAR,
        ),
        "CaCl2": Solute(
            "calcium chloride",
            (("Ca2+", 1), ("Cl-", 2)),
            "CaCl2·2H2O",
            "salt",
            2.0,
            stock=_MOLAR,
        ),
        "PBS": Solute(
            "phosphate-buffered saline",
            _SALINE,
            "its salts, anhydrous",
            "saline",
            stock=Stock("10×", 10_000.0),
        ),
        "NH4Cl": Solute("ammonium chloride", (("NH4+", 1), ("Cl-", 1)), "NH4Cl", "salt"),
        "Na2SO4": Solute("sodium sulfate", (("Na+", 2), ("SO4 2-", 1)), "Na2SO4", "salt"),
        "NaHCO3": Solute("sodium hydrogen carbonate", (("Na+", 1), ("HCO3-", 1)), "NaHCO3", "salt"),
        "Na2HPO4": Solute(
            "disodium hydrogen phosphate", (("Na+", 2), ("HPO4 2-", 1)), "Na2HPO4", "salt"
        ),
        "K2HPO4": Solute(
            "dipotassium hydrogen phosphate", (("K+", 2), ("HPO4 2-", 1)), "K2HPO4", "salt"
        ),
        "NaH2PO4": Solute(
            "sodium dihydrogen phosphate", (("Na+", 1), ("H2PO4-", 1)), "NaH2PO4", "salt"
        ),
        "KH2PO4": Solute(
            "potassium dihydrogen phosphate", (("K+", 1), ("H2PO4-", 1)), "KH2PO4", "salt"
        ),
        "HEPES": Solute(
            "HEPES", (("HEPES", 1),), "free acid", "buffer", most=_BUFFERED, stock=_MOLAR
        ),
        "Tris": Solute("Tris", (("Tris", 1),), "free base", "buffer", most=_BUFFERED, stock=_MOLAR),
        "phosphate": Solute(
            "sodium phosphate buffer",
            (("Na+", 1), ("H2PO4-", 1)),
            "NaH2PO4",
            "buffer",
            most=_BUFFERED,
        ),
        "sucrose": Solute("sucrose", (("sucrose", 1),), "C12H22O11", "sugar", most=1400.0),
        "dextrose": Solute(
            "dextrose (D-glucose)", (("dextrose", 1),), "C6H12O6", "sugar", most=2600.0
        ),
        "mannitol": Solute("mannitol", (("mannitol", 1),), "C6H14O6", "sugar", most=1000.0),
        "trehalose": Solute(
            "trehalose", (("trehalose", 1),), "C12H22O11·2H2O", "sugar", 2.0, most=1300.0
        ),
        "NaOH": Solute(
            "sodium hydroxide", (("Na+", 1), ("OH-", 1)), "NaOH", "titrant", stock=_MOLAR
        ),
        "HCl": Solute("hydrochloric acid", (("H+", 1), ("Cl-", 1)), "HCl", "titrant", stock=_MOLAR),
    }
)


def of_kind(*kinds: str) -> dict[str, str]:
    """Key and name of every solute of some kinds, e.g. for a choice.

    >>> list(of_kind("sugar"))
    ['sucrose', 'dextrose', 'mannitol', 'trehalose']
    """
    return {key: solute.name for key, solute in SOLUTES.items() if solute.kind in kinds}
