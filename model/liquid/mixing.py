"""A recipe as arithmetic: the solution that some amount of its salt gives, with pH and sugar."""

from dataclasses import dataclass
from functools import cached_property, lru_cache

import numpy as np
from numpy.typing import ArrayLike

from model.arrays import Real
from model.liquid import osmotic
from model.liquid.buffers import BUFFERS
from model.liquid.recipe import Ingredient, Recipe
from model.liquid.solutes import SOLUTES
from model.liquid.solution import REFERENCE_DENSITY, Solution
from model.liquid.species import SPECIES, columns

#: Most that the ions of a recipe may make up, mol/m³ of ionic strength; beyond, conductivity and
#: osmolality are off by more than some 3 %.
MOST_IONS = 1000.0
#: Rounds after which pH and sugar have settled to 1e-6 or better.
_ROUNDS = 4


@dataclass(frozen=True)
class Blend:
    """A recipe with some amount of its salt; all in mol/m³ at 25 °C, () or (n,).

    Parameters
    ----------
    solution
        What it gives.
    salt
        Of the moving salt.
    sugar
        That is filled up; 0 without an osmolality, negative where the rest makes more than that.
    titrant
        Sodium hydroxide to the pH; negative for hydrochloric acid.
    """

    solution: Solution
    salt: Real
    sugar: Real
    titrant: Real


class Mixing:
    """Makes blends of one recipe."""

    def __init__(self, recipe: Recipe) -> None:
        self.recipe = recipe
        self.names = _names(recipe)
        self._salt = self._array(dict(SOLUTES[recipe.salt].species))
        self._fixed = np.zeros(len(self.names))
        for item in recipe.ingredients:
            counts = dict(SOLUTES[item.solute].species)
            self._fixed += item.concentration * self._array(counts)

    def blend(self, salt: ArrayLike) -> Blend:
        """The recipe with so much of its salt, mol/m³, () or (n,)."""
        amount = np.asarray(salt, dtype=float)
        mixed, titrant = self._at_ph(self._dissolved(amount))
        sugar = np.zeros_like(amount)
        if self.recipe.osmolality is not None:
            index = self.names.index(self.recipe.sugar)
            sugar = self._filled_up(mixed, index, self.recipe.osmolality)
            mixed[index] += np.maximum(sugar, 0.0)
        return Blend(Solution(self.names, mixed), amount, sugar, titrant)

    def without_sugar(self, salt: ArrayLike) -> Solution:
        """Its ions with so much of its salt, mol/m³, () or (n,): no sugar is filled up."""
        return Solution(self.names, self._at_ph(self._dissolved(np.asarray(salt, dtype=float)))[0])

    @cached_property
    def most_salt(self) -> float:
        """Salt with which the ions come to :data:`MOST_IONS`, mol/m³; not positive if without."""
        without = float(self.without_sugar(0.0).ionic_strength)
        return (MOST_IONS - without) / (0.5 * float(columns(self.names).charges ** 2 @ self._salt))

    def _dissolved(self, salt: Real) -> Real:
        """Salt and fixed ingredients, buffers as they are weighed."""
        return np.add.outer(self._fixed, np.zeros_like(salt)) + np.multiply.outer(self._salt, salt)

    def _at_ph(self, mixed: Real) -> tuple[Real, Real]:
        """Part buffers into acid and base, add H⁺ and OH⁻, and what makes it neutral again."""
        buffers = [
            (BUFFERS[item.solute], item) for item in self.recipe.ingredients if _is_buffer(item)
        ]
        if not buffers:
            return mixed, np.zeros(mixed.shape[1:])
        ph, charges, found = self.recipe.ph, columns(self.names).charges, mixed
        for _ in range(_ROUNDS):
            strength = 0.5 * charges**2 @ found
            found = mixed.copy()
            found[self.names.index("H+")] = 10.0 ** (3.0 - ph)
            found[self.names.index("OH-")] = 10.0 ** (ph - 11.0)
            for buffer, item in buffers:
                weighed = dict(SOLUTES[item.solute].species)
                share = buffer.base_share(ph, strength) - (buffer.base in weighed)
                found[self.names.index(buffer.base)] += item.concentration * share
                found[self.names.index(buffer.acid)] -= item.concentration * share
            titrant = -(charges @ found)
            found[self.names.index("Na+")] += np.maximum(titrant, 0.0)
            found[self.names.index("Cl-")] += np.maximum(-titrant, 0.0)
        return found, np.asarray(titrant)

    def _filled_up(self, mixed: Real, index: int, osmolality: float) -> Real:
        """Sugar that makes up the osmolality, mol/m³; it also takes the place of water."""
        sugar = SPECIES[self.recipe.sugar]
        others = mixed.copy()
        others[index] = 0.0
        without = Solution(self.names, others).water
        volume = REFERENCE_DENSITY * 1e-6 * sugar.volume  # of the water that a molality displaces
        molality = np.zeros_like(without)
        for _ in range(_ROUNDS):
            # Newton: what the others make grows as the sugar takes water from them. Where they make
            # more than is wanted the sugar is negative, and told as if it took none.
            there = np.maximum(molality, 0.0)
            swollen = 1.0 + volume * there
            rest = osmotic.osmolality(self.names, others * (swollen / without))
            excess = rest + molality + sugar.osmotic * molality * there - osmolality
            slope = rest * volume / swollen + 1.0 + 2.0 * sugar.osmotic * there
            molality = molality - excess / slope
        water = without / (1.0 + volume * np.maximum(molality, 0.0))
        return np.asarray(molality * water - mixed[index])

    def _array(self, counts: dict[str, float]) -> Real:
        return np.array([float(counts.get(name, 0.0)) for name in self.names])


@lru_cache(maxsize=16)  # a design has one recipe, its pinned ones a few more; pure
def mixing(recipe: Recipe) -> Mixing:
    """The arithmetic of a recipe; kept for the few that are in use."""
    return Mixing(recipe)


def _names(recipe: Recipe) -> tuple[str, ...]:
    """Every species that can be in it."""
    found = [name for name, _ in SOLUTES[recipe.salt].species]
    for item in recipe.ingredients:
        found += [name for name, _ in SOLUTES[item.solute].species]
        if _is_buffer(item):
            buffer = BUFFERS[item.solute]
            found += [buffer.acid, buffer.base, "Na+", "Cl-", "H+", "OH-"]
    if recipe.osmolality is not None:
        found.append(recipe.sugar)
    return tuple(dict.fromkeys(found))


def _is_buffer(item: Ingredient) -> bool:
    return item.solute in BUFFERS
