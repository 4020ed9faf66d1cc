"""Floor and lid of a channel: what they are made of and what holds their outside."""

from dataclasses import dataclass
from typing import Annotated, Literal

from model.declare import Choice, Part, Quantity


@dataclass(frozen=True)
class Material:
    """Bulk properties of a wall material near 25 °C, SI."""

    label: str
    thermal_conductivity: float
    relative_permittivity: float
    conductivity: float


#: Rounded handbook values, from memory; grades differ by some ten per cent, so a measured value
#: typed beside the material is better.
MATERIALS = {
    "glass": Material("borosilicate glass", 1.1, 4.6, 1e-12),
    "fused-silica": Material("fused silica", 1.38, 3.8, 1e-15),
    "silicon": Material("silicon, oxidised", 148.0, 11.7, 1e-3),
    "pmma": Material("PMMA", 0.19, 3.0, 1e-13),
    "pdms": Material("PDMS", 0.16, 2.7, 1e-13),
    "coc": Material("cyclic olefin copolymer", 0.14, 2.35, 1e-14),
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
        Literal["held", "still-air", "insulated"],
        Choice(
            "Outside",
            "Held: kept at the stage temperature. Still air: cooled by the room, taken to be at "
            "the stage temperature. Insulated: no heat leaves.",
            options={
                "held": "held at stage temperature",
                "still-air": "still air",
                "insulated": "insulated",
            },
            source="still air: 10 W/(m² K), common practice, no source",
        ),
    ]
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

    @property
    def heat_conductivity(self) -> float:
        """Thermal conductivity that holds, W/(m K)."""
        if self.thermal_conductivity is not None:
            return self.thermal_conductivity
        return MATERIALS[self.material].thermal_conductivity

    @property
    def heat_transfer(self) -> float | None:
        """Heat-transfer coefficient of the outside, W/(m² K); None if held at the stage."""
        return {"held": None, "still-air": STILL_AIR, "insulated": 0.0}[self.outside]
