"""What a recipe comes to, beside its inputs: what goes into a litre, and the liquid it gives."""

from typing import Any

from dash import html
from dash.development.base_component import Component

from model.liquid.liquid import Liquid
from model.liquid.mixed import Mixed, mixed
from model.quantity import format_quantity, format_si
from model.recipe_words import portion_cells


def recipe_place() -> Component:
    """Place for the card; the browser writes into it."""
    return html.Div(id="recipe-card", hidden=True)


def recipe_card(liquid: Liquid) -> dict[str, Any] | None:
    """The card as plain data: rows of what to mix, properties, remarks, and all of it as text.

    None without a recipe. `amount` is that of the salt which makes the conductivity.
    """
    found = mixed(liquid)
    if found is None:
        return None
    rows = [portion_cells(portion) for portion in found.portions]
    return {
        "rows": [_row(*cells) for cells in rows],
        "amount": rows[0][1].replace("mol", "mol/L"),
        "properties": _properties(found),
        "notes": _notes(found),
        "text": _text(found, rows),
    }


def _row(name: str, amount: str, mass: str, stock: str, why: str) -> dict[str, str]:
    """One solute: what stands in its columns, and what beneath them."""
    remarks = [f"or {stock}"] * bool(stock) + [why] * (why != "fixed")
    return {"name": name, "mass": mass, "amount": amount, "remark": "; ".join(remarks)}


def _properties(found: Mixed) -> list[tuple[str, str]]:
    """Name and value of everything that the mixed liquid is known for."""
    warm = format_quantity(found.temperature, "degC", 3)
    by_temperature = {
        f"Conductivity at {warm}": found.conductivity,
        "Conductivity at 25 °C": found.conductivity_25,
    }
    ph = [] if found.ph is None else [("pH at 25 °C", format_quantity(found.ph, "", 4))]
    return [
        *((name, format_si(value, "S/m", 4)) for name, value in by_temperature.items()),
        ("Osmolality", format_quantity(found.osmolality, "mOsm/kg", 3)),
        *ph,
        ("Viscosity", format_quantity(found.viscosity, "mPa s", 3)),
        ("Density", format_quantity(found.density, "kg/m^3", 4)),
        ("Relative permittivity", format_quantity(found.relative_permittivity, "", 3)),
        ("Debye length", format_quantity(found.debye_length, "nm", 3)),
    ]


def _notes(found: Mixed) -> list[str]:
    """What may go wrong with it, and what can hurt whoever mixes it."""
    return [*found.notes, *filter(None, [found.caution])]


def _text(found: Mixed, rows: list[tuple[str, ...]]) -> str:
    """The card as text to be pasted into a laboratory book: columns parted by tabs."""
    lines = [("Solute", "per litre at 25 °C", "mass", "or stock", "why"), *rows, ("",)]
    lines += [*_properties(found), *((note,) for note in _notes(found))]
    return "\n".join("\t".join(line) for line in lines)
