"""The recipe of a liquid as a person enters it."""

from typing import Annotated, Any

from pydantic import BeforeValidator, ValidationInfo, field_validator

from model.declare import Choice, Part, Quantity, counted
from model.liquid.solutes import SOLUTES, of_kind
from model.quantity import QuantityError, parse_quantity

#: Most fixed ingredients in one recipe.
MOST_INGREDIENTS = 12
#: What a new one starts with, as in a profile; it conducts nothing, so that it always fits.
NEW_INGREDIENT = {"solute": "dextrose", "concentration": "10 mmol/L"}


class Ingredient(Part):
    """A fixed amount of one solute."""

    solute: Annotated[
        str,
        Choice(
            "Ingredient",
            "What is dissolved. Buffers are brought to the pH, salts stay as they are.",
            options=of_kind("buffer", "sugar", "salt"),
        ),
    ]
    concentration: Annotated[
        float,
        Quantity(
            "Concentration",
            "In the finished liquid at 25 °C; g/L of what is weighed is understood too.",
            unit="mmol/L",
            low="0 mmol/L",
            high="3000 mmol/L",
        ),
    ]

    @field_validator("concentration", mode="before")
    @classmethod
    def _moles(cls, value: Any, info: ValidationInfo) -> Any:
        """Turn g/L into mol/m³, which takes the solute to know."""
        solute = info.data.get("solute")
        if not isinstance(value, str) or solute is None or _read(value, "mmol/L") is not None:
            return value
        mass = _read(value, "g/L")
        return value if mass is None else f"{mass / SOLUTES[solute].molar_mass!r} mol/m^3"


def _read(text: str, unit: str) -> float | None:
    """The quantity in SI; None if it is of another kind."""
    try:
        return parse_quantity(text, unit)
    except QuantityError:
        return None


class Recipe(Part):
    """What is in a liquid: a salt that makes its conductivity, a sugar that makes its osmolality.

    The conductivity of the liquid stays the one truth. How much of the salt it takes follows from
    it, and how much sugar from the osmolality.
    """

    salt: Annotated[
        str,
        Choice(
            "Salt",
            "Makes up the conductivity that the fixed ingredients leave to it.",
            options=of_kind("salt", "saline"),
        ),
    ] = "KCl"
    amount: Annotated[
        float | None,
        Quantity(
            "Amount of the salt",
            "Typed instead of the liquid's conductivity, which follows from it. Of saline 1 x is "
            "one strength.",
            unit="mmol/L",
            low="0 mmol/L",
            high="5000 mmol/L",
            optional=True,
            empty="from the conductivity",
        ),
    ] = None
    sugar: Annotated[
        str,
        Choice(
            "Sugar",
            "Fills up to the osmolality.",
            options=of_kind("sugar"),
        ),
    ] = "sucrose"
    osmolality: Annotated[
        float | None,
        Quantity(
            "Osmolality",
            "At 25 °C. Without it no sugar is filled up.",
            unit="mOsm/kg",
            low="1 mOsm/kg",
            high="3000 mOsm/kg",
            optional=True,
            empty="no sugar added",
            source="cells of mammals: about 290 mOsm/kg, common practice, no source",
        ),
    ] = None
    ph: Annotated[
        float,
        Quantity(
            "Acidity, pH",
            "To which the buffers are brought at 25 °C, with sodium hydroxide or hydrochloric "
            "acid; without a buffer it does not count.",
            unit="",
            low="4",
            high="10",
        ),
    ] = 7.4
    ingredients: Annotated[
        tuple[Ingredient, ...],
        BeforeValidator(counted("ingredient", MOST_INGREDIENTS, "tables, one for each", least=0)),
    ] = ()
