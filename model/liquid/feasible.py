"""Whether a recipe can be had: what is told at the fields of a liquid when it cannot."""

import math
from collections.abc import Iterator

from model.declare import Quantity
from model.liquid.mixing import MOST_IONS, Blend, mixing
from model.liquid.reaching import blended, reach
from model.liquid.recipe import Ingredient, Recipe
from model.liquid.solutes import SOLUTES
from model.liquid.solution import CROWDING, MOST_CROWDED
from model.liquid.species import SPECIES
from model.quantity import format_quantity, format_si, pretty_unit, to_unit

#: Share by which an amount and a conductivity that are both given may differ.
AGREEMENT = 0.01
#: Slack of the bounds, so that values that were worked out from them can be used.
_SLACK = 1e-9
#: Sugar that is too little to be missed, mol/m³; conductivities are held to ten digits.
_TOO_LITTLE = 0.01
_MODELLED = f"{MOST_IONS:.0f} mmol/L of ionic strength, the most that is modelled"
_CROWDED = "more sugar than is modelled, some 40 % by weight"


def fixed_misfits(recipe: Recipe) -> Iterator[tuple[str, str]]:
    """Find fixed ingredients that are too much whatever else is in: field and problem.

    Fields of all problems are told as in :class:`model.liquid.liquid.Liquid`.
    """
    if mixing(recipe).most_salt <= 0.0:
        yield "recipe.ingredients", f"hold more than {_MODELLED}"
    if sum(_crowding(item) for item in recipe.ingredients) > MOST_CROWDED:
        yield "recipe.ingredients", f"hold {_CROWDED}"
    for index, item in enumerate(recipe.ingredients):
        solute = SOLUTES[item.solute]
        if item.concentration > solute.most:
            most = format_quantity(solute.most, "mmol/L")
            place = f"recipe.ingredients.{index}.concentration"
            yield place, f"must be at most {most}: no more {solute.name} dissolves or is modelled"


def made_by(recipe: Recipe, temperature: float) -> float:
    """Conductivity, S/m, that the recipe's own amount of its salt makes at a temperature, K."""
    blend = mixing(recipe).blend(recipe.amount or 0.0)
    return float(blend.solution.conductivity(temperature))


def amount_misfits(
    recipe: Recipe, temperature: float, stated: float | None, allowed: Quantity
) -> Iterator[tuple[str, str]]:
    """Find what is wrong with the amount of salt beside the conductivity that is stated, S/m."""
    most = mixing(recipe).most_salt
    made = made_by(recipe, temperature)
    low, high = allowed.range()
    place, shown = "recipe.amount", format_si(made, "S/m", 4)
    if recipe.amount is not None and recipe.amount > most:
        yield place, f"must be at most {_bound(most, 'mmol/L', up=False)}: more is not modelled"
    elif not low <= made <= high:
        yield place, f"makes {shown}; the conductivity of a liquid is {allowed.allowed()}"
    elif stated is not None and abs(made / stated - 1.0) > AGREEMENT:
        given = format_si(stated, "S/m", 4)
        yield place, f"makes {shown}, not the {given} that are given; leave out one of the two"


def misfits(recipe: Recipe, conductivity: float, temperature: float) -> Iterator[tuple[str, str]]:
    """Find what keeps a liquid from its conductivity, S/m at K, and its osmolality."""
    found = reach(recipe, temperature)
    if conductivity < found.least * (1.0 - _SLACK):
        least = _bound(found.least, "mS/m", up=True)
        problem = f"must be at least {least}: what else is in the recipe conducts so much"
        yield "conductivity", problem
    elif conductivity > found.most * (1.0 + _SLACK):
        most = _bound(found.most, "mS/m", up=False)
        yield "conductivity", f"must be at most {most}: the recipe then holds {_MODELLED}"
    elif recipe.osmolality is not None:
        yield from _osmotic_misfits(recipe, blended(recipe, temperature, conductivity))


def _osmotic_misfits(recipe: Recipe, blend: Blend) -> Iterator[tuple[str, str]]:
    """An osmolality that needs less than no sugar, or more than dissolves."""
    sugar, solution = SOLUTES[recipe.sugar], blend.solution
    there = float(solution.concentrations[solution.names.index(recipe.sugar)])
    if float(blend.sugar) < -_TOO_LITTLE:
        least = _bound(float(solution.osmolality), "mOsm/kg", up=True)
        yield "recipe.osmolality", f"must be at least {least}: salt and ingredients make so much"
    elif there > sugar.most * (1.0 + _SLACK):
        problem = f"takes {there:.0f} mmol/L of {sugar.name}; at most {sugar.most:.0f} can be used"
        yield "recipe.osmolality", problem
    elif float(solution.crowd) > MOST_CROWDED:
        yield "recipe.osmolality", f"takes {_CROWDED}"


def _crowding(item: Ingredient) -> float:
    """What an ingredient adds to the crowding."""
    species = dict(SOLUTES[item.solute].species)
    volume = sum(SPECIES[name].volume for name in species if SPECIES[name].charge == 0)
    return CROWDING * 1e-6 * volume * item.concentration


def _bound(value: float, unit: str, *, up: bool) -> str:
    """A bound to four digits, rounded to the side where it can be used."""
    scaled = to_unit(value, unit)
    digits = 3 - math.floor(math.log10(scaled))
    rounded = (math.ceil if up else math.floor)(scaled * 10.0**digits) / 10.0**digits
    return f"{rounded:.{max(digits, 0)}f} {pretty_unit(unit)}"
