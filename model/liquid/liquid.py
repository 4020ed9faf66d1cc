"""The liquid of a design: what a person enters, and its properties at the stage temperature."""

from dataclasses import dataclass
from functools import cached_property
from typing import Annotated

import numpy as np
from scipy.constants import epsilon_0

from model.arrays import Real
from model.declare import Part, Quantity
from model.liquid import water
from model.liquid.electrolyte import Electrolyte, simple_salt
from model.liquid.recipe import Recipe
from model.medium import Medium


class Liquid(Part):
    """Conductivity and temperature; everything else is water's unless given."""

    conductivity: Annotated[
        float,
        Quantity(
            "Conductivity",
            "Of the liquid at the stage temperature, as a bench meter shows it without "
            "temperature correction.",
            unit="mS/m",
            low="0.01 mS/m",
            high="10 S/m",
        ),
    ]
    temperature: Annotated[
        float,
        Quantity(
            "Stage temperature", "Of stage and inflow.", unit="degC", low="0 degC", high="95 degC"
        ),
    ] = 298.15
    conductivity_per_kelvin: Annotated[
        float,
        Quantity(
            "Conductivity rise per kelvin",
            "Relative rise of conductivity with temperature.",
            unit="%/K",
            low="0 %/K",
            high="10 %/K",
            source="1.9 to 2.0 %/K for KCl and NaCl, handbook tables; 2 is their round value",
            detail=True,
        ),
    ] = 0.02
    relative_permittivity: Annotated[
        float | None,
        Quantity(
            "Relative permittivity",
            "Instead of water's at this temperature.",
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
            "Instead of water's at this temperature.",
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
            "Instead of water's at this temperature.",
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
    def state(self) -> "LiquidState":
        """Properties at the stage temperature, SI."""
        warm = self.temperature

        def given(value: float | None, of_water: float) -> float:
            return of_water if value is None else value

        return LiquidState(
            permittivity=epsilon_0
            * given(self.relative_permittivity, float(water.relative_permittivity(warm))),
            viscosity=given(self.viscosity, float(water.viscosity(warm))),
            density=given(self.density, float(water.density(warm))),
            heat_capacity=float(water.heat_capacity(warm)),
            permittivity_slope=float(water.permittivity_slope(warm)),
            conductivity_slope=self.conductivity_per_kelvin,
        )

    def electrolyte(self, conductivity: Real) -> Electrolyte:
        """Its ions at other conductivities, S/m, of any shape."""
        return simple_salt(conductivity, self.temperature)

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
