"""Floor and lid of a channel: what they are made of and what holds their outside."""

from dataclasses import dataclass
from typing import Annotated, Literal

from pydantic import model_validator

from model.declare import Choice, Part, Quantity, misfit


@dataclass(frozen=True)
class Material:
    """Bulk properties of a wall material near 25 °C, SI; `heat_capacity` is per volume."""

    label: str
    thermal_conductivity: float
    heat_capacity: float
    relative_permittivity: float
    conductivity: float


#: Rounded handbook values, from memory; grades differ by some ten per cent, so a measured value
#: typed beside the material is better.
MATERIALS = {
    "glass": Material("borosilicate glass", 1.1, 1.85e6, 4.6, 1e-12),
    "fused-silica": Material("fused silica", 1.38, 1.63e6, 3.8, 1e-15),
    "silicon": Material("silicon, oxidised", 148.0, 1.64e6, 11.7, 1e-3),
    "pmma": Material("PMMA", 0.19, 1.72e6, 3.0, 1e-13),
    "pdms": Material("PDMS", 0.16, 1.42e6, 2.7, 1e-13),
    "coc": Material("cyclic olefin copolymer", 0.14, 1.4e6, 2.35, 1e-14),
}
#: Natural convection and radiation from a small warm surface to a still room, W/(m² K);
#: common practice, no source.
STILL_AIR = 10.0


class Wall(Part):
    """A flat slab below or above the liquid."""

    material: Annotated[
        str,
        Choice(
            "Material",
            "Sets how well heat leaves through this wall.",
            options={key: material.label for key, material in MATERIALS.items()},
            source="rounded handbook values, from memory",
        ),
    ]
    thickness: Annotated[
        float,
        Quantity("Thickness", "Of the slab.", unit="um", low="1 um", high="20 mm"),
    ]
    outside: Annotated[
        Literal["held", "still-air", "transfer", "insulated"],
        Choice(
            "Outside",
            "Held: kept at the stage temperature. Still air: cooled by the room, taken to be at "
            "the stage temperature. Heat-transfer coefficient: cooled by something else at the "
            "stage temperature, such as a fan or a water-cooled block. Insulated: no heat leaves.",
            options={
                "held": "held at stage temperature",
                "still-air": "still air",
                "transfer": "heat-transfer coefficient",
                "insulated": "insulated",
            },
            source="still air: 10 W/(m² K), common practice, no source",
        ),
    ]
    heat_transfer_coefficient: Annotated[
        float | None,
        Quantity(
            "Heat-transfer coefficient",
            "Heat that leaves per area and kelvin, where the outside is given by it. Still air "
            "5 to 25, a fan 25 to 100, a water-cooled block 500 to 10 000 W/(m² K).",
            unit="W/m^2/K",
            low="1 W/m^2/K",
            high="1e5 W/m^2/K",
            source="typical values: common practice, no source",
            optional=True,
            empty="needed",
            only_with=("outside", "transfer"),
        ),
    ] = None
    thermal_conductivity: Annotated[
        float | None,
        Quantity(
            "Thermal conductivity",
            "Instead of the material's.",
            unit="W/m/K",
            low="0.01 W/m/K",
            high="3000 W/m/K",
            optional=True,
            detail=True,
        ),
    ] = None
    relative_permittivity: Annotated[
        float | None,
        Quantity(
            "Relative permittivity",
            "Instead of the material's.",
            unit="",
            low="1",
            high="1000",
            optional=True,
            detail=True,
        ),
    ] = None
    conductivity: Annotated[
        float | None,
        Quantity(
            "Conductivity",
            "Instead of the material's.",
            unit="S/m",
            low="0 S/m",
            high="1e8 S/m",
            optional=True,
            detail=True,
        ),
    ] = None

    heat_capacity: Annotated[
        float | None,
        Quantity(
            "Heat capacity",
            "Per volume, instead of the material's; only the time to warm up depends on it.",
            unit="MJ/m^3/K",
            low="0.01 MJ/m^3/K",
            high="10 MJ/m^3/K",
            optional=True,
            detail=True,
        ),
    ] = None

    @model_validator(mode="after")
    def _coefficient_given(self) -> "Wall":
        if self.outside == "transfer" and self.heat_transfer_coefficient is None:
            raise misfit(
                ("heat_transfer_coefficient", "must be given, as the outside is told by it")
            )
        return self

    @property
    def heat_conductivity(self) -> float:
        """Thermal conductivity that holds, W/(m K)."""
        if self.thermal_conductivity is not None:
            return self.thermal_conductivity
        return MATERIALS[self.material].thermal_conductivity

    @property
    def heat_storage(self) -> float:
        """Heat capacity per volume that holds, J/(m³ K)."""
        if self.heat_capacity is not None:
            return self.heat_capacity
        return MATERIALS[self.material].heat_capacity

    @property
    def electric_permittivity(self) -> float:
        """Relative permittivity that holds."""
        if self.relative_permittivity is not None:
            return self.relative_permittivity
        return MATERIALS[self.material].relative_permittivity

    @property
    def electric_conductivity(self) -> float:
        """Electric conductivity that holds, S/m."""
        if self.conductivity is not None:
            return self.conductivity
        return MATERIALS[self.material].conductivity

    @property
    def heat_transfer(self) -> float | None:
        """Heat-transfer coefficient of the outside, W/(m² K); None if held at the stage."""
        if self.outside == "transfer" and self.heat_transfer_coefficient is not None:
            return self.heat_transfer_coefficient
        return {"held": None, "still-air": STILL_AIR, "insulated": 0.0}[self.outside]
