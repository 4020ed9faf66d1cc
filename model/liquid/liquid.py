"""The liquid of a design: what a person enters, and its properties at the stage temperature."""

from collections.abc import Mapping
from dataclasses import dataclass, replace
from functools import cached_property
from typing import Annotated, Any, Self

import numpy as np
from pydantic import ModelWrapValidatorHandler, model_validator
from scipy.constants import epsilon_0

from model.arrays import Real
from model.declare import Part, Quantity, misfit
from model.liquid import water
from model.liquid.electrolyte import Electrolyte, simple_salt
from model.liquid.feasible import amount_misfits, fixed_misfits, made_by, misfits
from model.liquid.mixing import Blend
from model.liquid.reaching import blended, reach
from model.liquid.recipe import Recipe
from model.liquid.solution import PURE
from model.medium import Medium
from model.quantity import plain_text

#: Step in which the rise is taken, K.
_WARMER = 0.1
#: Relative rise of conductivity with temperature where nothing tells it, 1/K.
USUAL_SLOPE = 0.02
_CONDUCTIVITY = Quantity(
    "Conductivity",
    "Of the liquid at the stage temperature, as a bench meter shows it without temperature "
    "correction.",
    unit="mS/m",
    low="0.01 mS/m",
    high="10 S/m",
)


class Liquid(Part):
    """Conductivity and temperature; everything else is the recipe's or water's unless given."""

    conductivity: Annotated[float, _CONDUCTIVITY]
    temperature: Annotated[
        float,
        Quantity(
            "Stage temperature", "Of stage and inflow.", unit="degC", low="0 degC", high="95 degC"
        ),
    ] = 298.15
    conductivity_per_kelvin: Annotated[
        float | None,
        Quantity(
            "Conductivity rise per kelvin",
            "Relative rise of conductivity with temperature. Without it that of the recipe, or "
            "2 %/K.",
            unit="%/K",
            low="0 %/K",
            high="10 %/K",
            optional=True,
            source="1.9 to 2.0 %/K for KCl and NaCl, handbook tables; 2 is their round value",
            detail=True,
        ),
    ] = None
    relative_permittivity: Annotated[
        float | None,
        Quantity(
            "Relative permittivity",
            "Instead of water's or the recipe's at this temperature.",
            unit="",
            low="2",
            high="200",
            optional=True,
            detail=True,
        ),
    ] = None
    viscosity: Annotated[
        float | None,
        Quantity(
            "Viscosity",
            "Instead of water's or the recipe's at this temperature.",
            unit="mPa s",
            low="0.1 mPa s",
            high="1000 mPa s",
            optional=True,
            detail=True,
        ),
    ] = None
    density: Annotated[
        float | None,
        Quantity(
            "Density",
            "Instead of water's or the recipe's at this temperature.",
            unit="kg/m^3",
            low="500 kg/m^3",
            high="3000 kg/m^3",
            optional=True,
            detail=True,
        ),
    ] = None
    thermal_conductivity: Annotated[
        float | None,
        Quantity(
            "Thermal conductivity",
            "Instead of water's at 25 °C.",
            unit="W/m/K",
            low="0.05 W/m/K",
            high="10 W/m/K",
            optional=True,
            detail=True,
        ),
    ] = None

    recipe: Recipe | None = None

    @model_validator(mode="wrap")
    @classmethod
    def _mixed(cls, data: Any, handler: ModelWrapValidatorHandler[Self]) -> Self:
        """Turn an amount of salt into the conductivity, and check that the recipe can be had."""
        alone = isinstance(data, Mapping) and "conductivity" not in data
        if alone and _has_amount(data.get("recipe")):
            # in place of what follows from the amount as soon as the rest is known
            liquid = handler({**data, "conductivity": "1 S/m"})
        else:
            alone, liquid = False, handler(data)
        recipe = liquid.recipe
        if recipe is None:
            return liquid
        found = list(fixed_misfits(recipe))
        if not found and recipe.amount is not None:
            stated = None if alone else liquid.conductivity
            found = list(amount_misfits(recipe, liquid.temperature, stated, _CONDUCTIVITY))
            if not found:
                made = made_by(recipe, liquid.temperature) if stated is None else stated
                recipe = recipe.model_copy(update={"amount": None})
                liquid = handler(
                    {**data, "conductivity": plain_text(made, "mS/m"), "recipe": recipe}
                )
        if not found:
            found = list(misfits(recipe, liquid.conductivity, liquid.temperature))
        if found:
            raise misfit(*found)
        return liquid

    @property
    def heat_conductivity(self) -> float:
        """Thermal conductivity for the chip solve, W/(m K).

        Water's is taken at 25 °C whatever the stage, so that one chip has one solve; from 10 to
        60 °C the true value lies within −5 and +7 %.
        """
        if self.thermal_conductivity is not None:
            return self.thermal_conductivity
        return float(water.thermal_conductivity(298.15))

    @cached_property
    def blend(self) -> Blend | None:
        """Amounts and solution of its recipe at its own conductivity; None without a recipe."""
        if self.recipe is None:
            return None
        return blended(self.recipe, self.temperature, self.conductivity)

    @cached_property
    def state(self) -> "LiquidState":
        """Properties at the stage temperature, SI."""
        warm = self.temperature
        solution = PURE if self.blend is None else self.blend.solution

        def given(value: float | None, usual: float) -> float:
            return usual if value is None else value

        return LiquidState(
            permittivity=float(solution.permittivity(warm))
            if self.relative_permittivity is None
            else epsilon_0 * self.relative_permittivity,
            viscosity=given(self.viscosity, float(solution.viscosity(warm))),
            density=given(self.density, float(solution.density(warm))),
            heat_capacity=float(water.heat_capacity(warm)),
            permittivity_slope=float(water.permittivity_slope(warm)),
            conductivity_slope=given(self.conductivity_per_kelvin, self._own_slope),
        )

    @property
    def _own_slope(self) -> float:
        """Relative slope d ln σ/dT of the recipe as mixed, 1/K; without one the round value."""
        if self.blend is None:
            return USUAL_SLOPE
        warmer = float(self.blend.solution.conductivity(self.temperature + _WARMER))
        return float(np.log(warmer / self.conductivity)) / _WARMER

    @property
    def ions(self) -> Electrolyte:
        """Its ions at its own conductivity."""
        return self.electrolyte(np.asarray(self.conductivity))

    def electrolyte(self, conductivity: Real) -> Electrolyte:
        """Its ions at other conductivities, S/m, of any shape.

        With a recipe it is the moving salt that makes them; below what the rest conducts all is
        diluted in proportion, above what is modelled the salt goes on in proportion. The ions move
        as in the liquid's own amount of sugar, each as if alone: what they do to one another shows
        in the conductivity. Without a recipe they are those of a simple salt.
        """
        if self.recipe is None or self.blend is None:
            return simple_salt(conductivity, self.temperature)
        within = reach(self.recipe, self.temperature)
        ions = within.mixing.without_sugar(within.salt(np.ravel(conductivity))).electrolyte(
            self.temperature, float(self.blend.solution.thickness)
        )
        least = within.least
        diluted = np.minimum(np.ravel(conductivity), least) / least if least > 0.0 else 1.0
        shape = (len(ions.valences), *np.shape(conductivity))
        return replace(ions, concentrations=(ions.concentrations * diluted).reshape(shape))

    def medium(self, omega: Real, conductivity: Real | None = None) -> Medium:
        """The liquid as particles meet it, at its own conductivity unless others are given."""
        state = self.state
        return Medium(
            omega,
            state.permittivity,
            np.asarray(self.conductivity) if conductivity is None else conductivity,
            state.viscosity,
            self.temperature,
            self.electrolyte,
        )


@dataclass(frozen=True)
class LiquidState:
    """Liquid properties at one temperature, SI.

    `permittivity` in F/m; `heat_capacity` in J/(kg K), that of water; `permittivity_slope` =
    d ln ε/dT and `conductivity_slope` = d ln σ/dT in 1/K.
    """

    permittivity: float
    viscosity: float
    density: float
    heat_capacity: float
    permittivity_slope: float
    conductivity_slope: float

    @property
    def heat_storage(self) -> float:
        """Heat capacity per volume, J/(m³ K)."""
        return self.density * self.heat_capacity


def _has_amount(recipe: Any) -> bool:
    """Whether a recipe, as a table or read already, tells the amount of its salt."""
    amount = (
        recipe.get("amount") if isinstance(recipe, Mapping) else getattr(recipe, "amount", None)
    )
    return amount not in (None, "")
