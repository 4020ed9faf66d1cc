"""The inverse of mixing: the salt that brings a recipe to a conductivity, and what is in reach."""

from functools import lru_cache

import numpy as np
from scipy.interpolate import CubicSpline

from model.arrays import Real
from model.liquid.mixing import Blend, mixing
from model.liquid.recipe import Recipe

#: Salt contents at which a recipe is worked out beforehand; in between it is good to 1e-4.
_NODES = 40
#: Newton steps from there, at most, and the share of the conductivity that may be left: mostly one
#: does, more are needed where the sugar runs out.
_STEPS, _NEAR = 12, 1e-7


class Reach:
    """The conductivities that a recipe reaches at one temperature with more or less of its salt."""

    def __init__(self, recipe: Recipe, temperature: float) -> None:
        self.mixing = mixing(recipe)
        self.temperature = temperature
        # even in √c, as the conductivity bends in it; the first so low that no salt is told from it
        salt = max(self.mixing.most_salt, 1.0) * np.linspace(0.0, 1.0, _NODES) ** 2
        salt[0] = 1e-6 * salt[1]
        #: Conductivity without and with most of the salt, S/m.
        self.least = float(self.mixing.blend(0.0).solution.conductivity(temperature))
        conductivity = self.mixing.blend(salt).solution.conductivity(temperature)
        self.most = float(conductivity[-1])
        gained = conductivity - self.least
        self._per_gain = CubicSpline(np.sqrt(gained), salt / gained)

    def salt(self, conductivity: Real) -> Real:
        """Salt for conductivities in S/m, mol/m³, good to 1e-4.

        None where the rest conducts more; above what is in reach in proportion.
        """
        gain = np.maximum(conductivity - self.least, 0.0)
        root = np.sqrt(np.minimum(gain, self.most - self.least))
        return np.asarray(gain * self._per_gain(root))

    def blend(self, conductivity: float) -> Blend:
        """The recipe with a conductivity in S/m, to 1e-7; without its salt where it is less."""
        salt = float(self.salt(np.asarray(conductivity)))
        blend = self.mixing.blend(salt)
        if salt == 0.0:
            return blend
        root = np.sqrt(min(conductivity, self.most) - self.least)
        slope = float(self._per_gain(root) + 0.5 * root * self._per_gain(root, 1))
        for _ in range(_STEPS):
            error = float(blend.solution.conductivity(self.temperature)) - conductivity
            if abs(error) < _NEAR * conductivity:
                break
            salt = max(salt - slope * error, 0.0)
            blend = self.mixing.blend(salt)
        return blend


@lru_cache(maxsize=16)  # a design has one recipe, its pinned ones a few more; pure
def reach(recipe: Recipe, temperature: float) -> Reach:
    """What `recipe` reaches at a temperature in K; kept for the few that are in use."""
    return Reach(recipe, temperature)


@lru_cache(maxsize=64)  # the same design is checked, shown and judged; pure
def blended(recipe: Recipe, temperature: float, conductivity: float) -> Blend:
    """The recipe that has a conductivity in S/m at a temperature in K."""
    return reach(recipe, temperature).blend(conductivity)
