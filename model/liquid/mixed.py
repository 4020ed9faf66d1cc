"""A recipe for the bench: what goes into a litre, and what liquid it gives."""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import Literal

from scipy.constants import epsilon_0

from model.liquid.buffers import BUFFERS
from model.liquid.liquid import Liquid
from model.liquid.mixing import Blend
from model.liquid.recipe import Ingredient, Recipe
from model.liquid.solutes import SOLUTES, Solute, of_kind
from model.liquid.species import REFERENCE

Role = Literal["salt", "sugar", "fixed", "ph"]
#: Of whatever sets the pH.
CAUTION = (
    "Sodium hydroxide and hydrochloric acid burn skin and eyes. Local laboratory safety rules come "
    "first; add them in drops with a pH meter, the amounts here are estimates."
)
#: Carbon dioxide of the air in water, S/m: 1.10 µS/cm at 25 °C, CRC "Standard KCl solutions".
OF_AIR = 1.1e-4
#: A conductivity of so many times that of the air's carbon dioxide hardly feels it.
_WELL_ABOVE = 20.0
#: Shares of acid and base between which a buffer holds its pH: within one of its pK.
_HOLDS = (0.09, 0.91)
#: Concentration from which ions that fall out together are worth a word, mol/m³; common practice,
#: no source.
_FALLS_OUT = 0.5


@dataclass(frozen=True)
class Portion:
    """One thing that goes into the liquid.

    Parameters
    ----------
    solute
        Key of :data:`model.liquid.solutes.SOLUTES`.
    role
        Why it is in: it makes the conductivity (salt), the osmolality (sugar), the pH, or is fixed.
    concentration
        mol/m³ at 25 °C; of saline, a thousand times its strength.
    """

    solute: str
    role: Role
    concentration: float

    @property
    def made_of(self) -> Solute:
        """What it is."""
        return SOLUTES[self.solute]

    @property
    def mass(self) -> float:
        """Mass to weigh per volume, kg/m³ (g/L)."""
        return self.concentration * self.made_of.molar_mass

    @property
    def stock_share(self) -> float | None:
        """Volume of the usual stock solution per volume; None without one that is strong enough."""
        stock = self.made_of.stock
        if stock is None or self.concentration > stock.strength:
            return None
        return self.concentration / stock.strength


@dataclass(frozen=True)
class Mixed:
    """A liquid that was mixed, SI; of the stage temperature unless a name says otherwise.

    `conductivity_25` is at 25 °C, as are `osmolality` (mol/kg) and `ph`, which is None without a
    buffer. `ionic_strength` is in mol/m³; `notes` tell what may go wrong in plain sentences.
    """

    portions: tuple[Portion, ...]
    temperature: float
    conductivity: float
    conductivity_25: float
    osmolality: float
    density: float
    viscosity: float
    relative_permittivity: float
    ionic_strength: float
    debye_length: float
    ph: float | None
    notes: tuple[str, ...]

    @property
    def caution(self) -> str:
        """What can hurt whoever mixes it; empty if nothing does."""
        return CAUTION if any(portion.role == "ph" for portion in self.portions) else ""


def mixed(liquid: Liquid) -> Mixed | None:
    """What to mix for a liquid with a recipe, and what it gives; None without a recipe.

    Density, viscosity and permittivity are those that the design reckons with, also where they were
    given by hand.
    """
    blend, recipe = liquid.blend, liquid.recipe
    if blend is None or recipe is None:
        return None
    state, ions = liquid.state, liquid.ions
    buffered = any(item.solute in BUFFERS for item in recipe.ingredients)
    return Mixed(
        portions=tuple(_portions(recipe, blend)),
        temperature=liquid.temperature,
        conductivity=liquid.conductivity,
        conductivity_25=float(blend.solution.conductivity(REFERENCE)),
        osmolality=float(blend.solution.osmolality),
        density=state.density,
        viscosity=state.viscosity,
        relative_permittivity=state.permittivity / epsilon_0,
        ionic_strength=float(ions.ionic_strength),
        debye_length=float(ions.debye_length(state.permittivity)),
        ph=recipe.ph if buffered else None,
        notes=tuple(_notes(recipe, blend, liquid.conductivity)),
    )


def recipe_for(
    conductivity: float,
    osmolality: float | None = None,
    salt: str = "KCl",
    sugar: str = "sucrose",
    ph: float = 7.4,
    ingredients: Mapping[str, float] | None = None,
    temperature: float = REFERENCE,
) -> Mixed:
    """What to mix for a conductivity, S/m at `temperature` in K, and an osmolality, mol/kg.

    Parameters
    ----------
    salt, sugar
        Solutes that make up the two.
    ph
        Of the buffers among the ingredients.
    ingredients
        Fixed solutes and their concentrations, mol/m³.

    Raises
    ------
    pydantic.ValidationError
        If no such liquid can be had, with the field and the bound.

    Examples
    --------
    >>> found = recipe_for(0.03, 0.3, ingredients={"HEPES": 5.0})
    >>> [(portion.solute, portion.role) for portion in found.portions]
    [('KCl', 'salt'), ('sucrose', 'sugar'), ('HEPES', 'fixed'), ('NaOH', 'ph')]
    """
    recipe = Recipe(
        salt=salt, sugar=sugar, osmolality=osmolality, ph=ph, ingredients=_fixed(ingredients or {})
    )
    return _certain(Liquid(conductivity=conductivity, temperature=temperature, recipe=recipe))


def made_of(amounts: Mapping[str, float], ph: float = 7.4, temperature: float = REFERENCE) -> Mixed:
    """What liquid some solutes give, in mol/m³ at 25 °C; the inverse of :func:`recipe_for`.

    Buffers are brought to `ph`, the rest follows from the amounts. The first salt is told as the
    one that makes the conductivity. Errors as there.
    """
    salts = [name for name in amounts if name in of_kind("salt", "saline")]
    salt = salts[0] if salts else "KCl"
    others = {name: amount for name, amount in amounts.items() if name != salt}
    recipe = Recipe(salt=salt, amount=amounts.get(salt, 0.0), ph=ph, ingredients=_fixed(others))
    return _certain(Liquid.model_validate({"temperature": temperature, "recipe": recipe}))


def _certain(liquid: Liquid) -> Mixed:
    found = mixed(liquid)
    assert found is not None  # it has a recipe
    return found


def _fixed(amounts: Mapping[str, float]) -> tuple[Ingredient, ...]:
    return tuple(Ingredient(solute=name, concentration=each) for name, each in amounts.items())


def _portions(recipe: Recipe, blend: Blend) -> Iterator[Portion]:
    """Salt, sugar, fixed ingredients, and what sets the pH."""
    yield Portion(recipe.salt, "salt", float(blend.salt))
    if recipe.osmolality is not None:
        yield Portion(recipe.sugar, "sugar", max(float(blend.sugar), 0.0))
    for item in recipe.ingredients:
        yield Portion(item.solute, "fixed", item.concentration)
    base = float(blend.titrant)
    if base != 0.0:
        yield Portion("NaOH" if base > 0.0 else "HCl", "ph", abs(base))


def _notes(recipe: Recipe, blend: Blend, conductivity: float) -> Iterator[str]:
    """What may go wrong with it."""
    there = dict(zip(blend.solution.names, blend.solution.concentrations, strict=True))

    def held(names: Sequence[str]) -> bool:
        return sum(float(there.get(name, 0.0)) for name in names) > _FALLS_OUT

    if held(("Ca2+", "Mg2+")) and held(("HPO4 2-", "H2PO4-", "HCO3-")):
        yield "Calcium or magnesium may fall out with phosphate or carbonate."
    for name in dict.fromkeys(item.solute for item in recipe.ingredients if item.solute in BUFFERS):
        share = float(BUFFERS[name].base_share(recipe.ph, blend.solution.ionic_strength))
        if not _HOLDS[0] <= share <= _HOLDS[1]:
            yield f"{SOLUTES[name].name} hardly holds pH {recipe.ph:g}: it is far from its pK."
    if conductivity < _WELL_ABOVE * OF_AIR:
        yield "Carbon dioxide from the air adds some 0.1 mS/m, which is not counted."
