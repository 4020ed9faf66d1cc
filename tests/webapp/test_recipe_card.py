"""The card beneath the liquid's inputs: what to mix, and what it gives."""

import pytest

from model.liquid.liquid import Liquid
from model.liquid.recipe import Ingredient, Recipe
from webapp.recipe_card import recipe_card

BUFFERED = Recipe(osmolality=0.3, ingredients=(Ingredient(solute="HEPES", concentration=10.0),))


def liquid(conductivity=0.05, recipe=BUFFERED, temperature=298.15):
    return Liquid(conductivity=conductivity, temperature=temperature, recipe=recipe)


def number(text):
    return float(text.split()[0])


def test_no_card_without_a_recipe():
    assert recipe_card(Liquid(conductivity=0.03)) is None


def test_what_is_weighed_is_the_amount_times_the_molar_mass():
    """Molar masses in g/mol: KCl 74.55, sucrose 342.30, HEPES 238.30, NaOH 40.00 (CRC)."""
    masses = {"potassium": 74.55, "sucrose": 342.30, "HEPES": 238.30, "sodium": 40.00}
    rows = recipe_card(liquid())["rows"]
    assert [row["name"].split()[0].rstrip(",") for row in rows] == list(masses)
    for row, molar_mass in zip(rows, masses.values(), strict=True):
        assert row["amount"].endswith("mmol")
        grams = number(row["amount"]) * 1e-3 * molar_mass
        assert number(row["mass"]) == pytest.approx(grams, rel=2e-3)


def test_stock_is_told_where_there_is_one():
    rows = recipe_card(liquid())["rows"]
    (buffer,) = (row for row in rows if row["name"].startswith("HEPES"))
    assert buffer["remark"] == "or 10 mL of 1 M"
    (sugar,) = (row for row in rows if row["name"].startswith("sucrose"))
    assert sugar["remark"] == "to the osmolality"


def test_the_salt_follows_the_conductivity():
    weak, strong = (recipe_card(liquid(value)) for value in (0.05, 0.1))
    assert number(weak["amount"]) < number(strong["amount"])
    assert weak["amount"].endswith("mmol/L")
    saline = recipe_card(liquid(1.0, Recipe(salt="PBS")))
    assert saline["amount"].endswith("×")


def test_properties_name_their_temperature():
    names = [name for name, _ in recipe_card(liquid(temperature=295.15))["properties"]]
    assert names[:2] == ["Conductivity at 22 °C", "Conductivity at 25 °C"]
    assert len(set(names)) == len(names)
    values = dict(recipe_card(liquid())["properties"])
    assert values["Conductivity at 25 °C"] == "50 mS/m"
    assert values["Osmolality"] == "300 mOsm/kg"
    assert values["pH at 25 °C"] == "7.4"
    assert "pH at 25 °C" not in dict(recipe_card(liquid(recipe=Recipe()))["properties"])


def test_lye_and_acid_come_with_a_caution():
    assert any("safety rules" in note for note in recipe_card(liquid())["notes"])
    assert not any("safety" in note for note in recipe_card(liquid(recipe=Recipe()))["notes"])


def test_text_holds_all_of_the_card():
    card = recipe_card(liquid())
    lines = card["text"].splitlines()
    assert set(card["notes"]) <= set(lines)
    for row in card["rows"]:
        assert any(row["name"] in line and row["mass"] in line for line in lines)
    for name, value in card["properties"]:
        assert f"{name}\t{value}" in lines
