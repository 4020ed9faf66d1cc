"""Recipes: what is mixed gives what is wanted, and what cannot be had is told with its bound."""

import re
from math import isclose

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from pydantic import ValidationError
from scipy.constants import epsilon_0

from model.declare import FROM_PERSON
from model.errors import DesignError
from model.liquid import water
from model.liquid.liquid import Liquid
from model.liquid.mixed import made_of, mixed, recipe_for
from model.liquid.recipe import Ingredient, Recipe
from model.liquid.solutes import SOLUTES, of_kind
from model.liquid.species import SPECIES
from model.profile import document, fingerprint, parse_design, profile_text, read_profile

PATIENT = settings(max_examples=40, deadline=None)
SALTS = sorted(of_kind("salt", "saline"))
SUGARS = sorted(of_kind("sugar"))
BUFFER = {"solute": "HEPES", "concentration": "10 mM"}


@pytest.fixture
def with_recipe(yeast, vary):
    """The demo with a recipe, and further changes of the liquid."""

    def make(recipe, **liquid):
        data = document(yeast)
        data["liquid"] = {"conductivity": "30 mS/m", "temperature": "25 degC", **liquid}
        data["liquid"] = {key: value for key, value in data["liquid"].items() if value is not None}
        data["liquid"]["recipe"] = recipe
        return parse_design(data)

    return make


def errors_of(make, recipe, **liquid):
    with pytest.raises(DesignError) as caught:
        make(recipe, **liquid)
    return {error.path: error.problem for error in caught.value.errors}


def amounts(found):
    return {portion.solute: portion.concentration for portion in found.portions}


@PATIENT
@given(
    salt=st.sampled_from(SALTS),
    sugar=st.sampled_from(SUGARS),
    share=st.floats(0.01, 0.9),
    sweet=st.floats(0.0, 500.0),
    ph=st.floats(6.0, 9.0),
    hepes=st.floats(0.0, 30.0),
    tris=st.floats(0.0, 30.0),
    kelvin=st.floats(273.15, 333.15),
)
def test_a_recipe_for_what_a_mixture_is_gives_the_mixture(
    salt, sugar, share, sweet, ph, hepes, tris, kelvin
):
    ions = sum(n * SPECIES[name].charge ** 2 for name, n in SOLUTES[salt].species)
    amount = share * 400.0 / ions
    fixed = {"HEPES": hepes, "Tris": tris}
    there = made_of({salt: amount, sugar: sweet, **fixed}, ph, kelvin)
    again = recipe_for(
        there.conductivity, there.osmolality, salt, sugar, ph, fixed, temperature=kelvin
    )
    found = amounts(again)
    assert found[salt] == pytest.approx(amount, rel=1e-5)
    # what the osmolality of the salt leaves over
    assert found[sugar] == pytest.approx(sweet, abs=2e-2)
    assert again.osmolality == pytest.approx(there.osmolality, rel=1e-5)
    assert again.viscosity == pytest.approx(there.viscosity, rel=1e-5)
    assert again.conductivity_25 == pytest.approx(there.conductivity_25, rel=1e-6)


@PATIENT
@given(
    salt=st.sampled_from(SALTS),
    conductivity=st.floats(0.05, 1.0),
    ph=st.floats(4.0, 10.0),
    buffers=st.dictionaries(
        st.sampled_from(["HEPES", "Tris", "phosphate"]), st.floats(0.1, 5.0), max_size=3
    ),
)
def test_a_blend_is_neutral_and_what_was_asked_for(salt, conductivity, ph, buffers):
    ingredients = tuple(Ingredient(solute=key, concentration=each) for key, each in buffers.items())
    recipe = Recipe(salt=salt, osmolality=0.4, ph=ph, ingredients=ingredients)
    try:
        liquid = Liquid(conductivity=conductivity, recipe=recipe)
    except ValidationError:  # the buffers alone conduct more, or salts make more than 400 mOsm/kg
        assume(False)
    solution = liquid.blend.solution
    charges = np.array([SPECIES[name].charge for name in solution.names])
    assert (solution.concentrations >= 0.0).all()
    assert abs(charges @ solution.concentrations) < 1e-9 * solution.concentrations.sum()
    assert float(solution.conductivity(298.15)) == pytest.approx(conductivity, rel=1e-6)
    assert float(solution.osmolality) == pytest.approx(0.4, rel=1e-5)
    for key, each in buffers.items():
        if key == "HEPES":  # nothing of it is lost as it is parted
            there = dict(zip(solution.names, solution.concentrations, strict=True))
            assert there["HEPES"] + there["HEPES-"] == pytest.approx(each)


INGREDIENTS = st.fixed_dictionaries(
    {
        "solute": st.sampled_from(sorted(of_kind("salt", "buffer", "sugar"))),
        "concentration": st.floats(0.0, 3000.0) | st.floats(0.0, 20.0),
    }
)
RECIPES = st.fixed_dictionaries(
    {
        "salt": st.sampled_from(SALTS),
        "sugar": st.sampled_from(SUGARS),
        "ph": st.floats(4.0, 10.0),
        "ingredients": st.lists(INGREDIENTS, max_size=4),
    },
    optional={"osmolality": st.floats(1.0, 3000.0), "amount": st.floats(0.0, 5000.0)},
)


@PATIENT
@given(
    RECIPES,
    st.floats(-2.0, 4.0).map(lambda power: 10.0**power),
    st.floats(0.0, 95.0),
    st.booleans(),
)
def test_any_recipe_is_either_had_or_told(recipe, conductivity, celsius, stated):
    data = {"temperature": celsius, "recipe": recipe}
    if stated or "amount" not in recipe:
        data["conductivity"] = conductivity
    try:
        liquid = Liquid.model_validate(data, context=FROM_PERSON)
    except ValidationError:  # told at its field; any other fault fails
        return
    found = mixed(liquid)
    assert all(portion.concentration >= 0.0 for portion in found.portions)
    for value in (found.osmolality, found.density, found.viscosity, found.relative_permittivity):
        assert 0.0 < value < np.inf
    assert 0.005 < liquid.state.conductivity_slope < 0.05
    if "osmolality" in recipe:
        assert found.osmolality == pytest.approx(liquid.recipe.osmolality, rel=1e-5, abs=2e-5)


def test_more_salt_conducts_more_and_leaves_less_room_for_sugar():
    conductivities = np.geomspace(0.02, 0.8, 12)
    found = [amounts(recipe_for(float(each), 0.3, "NaCl", "dextrose")) for each in conductivities]
    assert (np.diff([each["NaCl"] for each in found]) > 0.0).all()
    assert (np.diff([each["dextrose"] for each in found]) < 0.0).all()


def test_sugar_slows_ions():
    plain = made_of({"KCl": 5.0}).conductivity
    sweet = made_of({"KCl": 5.0, "sucrose": 270.0})
    thicker = sweet.viscosity / float(water.viscosity(298.15))
    # less than in proportion to the viscosity, as ions slip between molecules of their own size
    assert 1.0 < plain / sweet.conductivity < thicker


def test_titrants():
    # half of a buffer is base at its pK, but for the ionic strength; far from it none or all. The
    # free acid takes sodium hydroxide, the free base hydrochloric acid.
    acid, half, base = (made_of({"KCl": 1.0, "HEPES": 20.0}, ph) for ph in (4.0, 7.5, 10.0))
    assert amounts(acid).get("NaOH", 0.0) < 0.5
    assert amounts(half)["NaOH"] == pytest.approx(10.0, abs=1.0)
    assert amounts(base)["NaOH"] == pytest.approx(20.0, abs=0.5)
    assert amounts(made_of({"KCl": 1.0, "Tris": 20.0}, 8.1))["HCl"] == pytest.approx(10.0, abs=1.0)
    assert made_of({"KCl": 1.0}, 5.0).ph is None


def test_grams_and_stock_solutions():
    found = {
        p.solute: p for p in made_of({"MgCl2": 2.0, "trehalose": 100.0, "HEPES": 10.0}).portions
    }
    # MgCl2·6H2O 203.3 and trehalose dihydrate 378.3 g/mol stand on the balance
    assert found["MgCl2"].mass == pytest.approx(2e-3 * 203.3, rel=1e-3)
    assert found["trehalose"].mass == pytest.approx(0.1 * 378.3, rel=1e-3)
    assert found["HEPES"].stock_share == pytest.approx(0.01)
    assert found["trehalose"].stock_share is None
    assert found["HEPES"].mass == pytest.approx(2.383, rel=1e-3)


UNITS = [
    ("10 mM", 10.0),
    ("10", 10.0),
    (10, 10.0),
    ("0.01 mol/L", 10.0),
    ("2.383 g/L", 10.0),
    ("2383 mg/L", 10.0),
]


@pytest.mark.parametrize(("text", "value"), UNITS)
def test_concentrations_in_the_units_of_the_bench(text, value, with_recipe):
    design = with_recipe({"ingredients": [{"solute": "HEPES", "concentration": text}]})
    assert design.liquid.recipe.ingredients[0].concentration == pytest.approx(value, rel=1e-4)


@pytest.mark.parametrize(
    "text", ["300 mOsm/kg", "0.3 Osm/kg", "300", "300 mosmol/kg", "0.3 mol/kg"]
)
def test_osmolality_in_the_units_of_the_bench(text, with_recipe):
    design = with_recipe({"osmolality": text})
    assert design.liquid.recipe.osmolality == pytest.approx(0.3)
    assert mixed(design.liquid).osmolality == pytest.approx(0.3, rel=1e-6)


def test_an_amount_stands_for_the_conductivity(with_recipe):
    saline = with_recipe({"salt": "PBS", "amount": "0.1 x", "osmolality": "300 mOsm/kg"},
                         conductivity=None)  # fmt: skip
    assert saline.liquid.recipe.amount is None
    assert amounts(mixed(saline.liquid))["PBS"] == pytest.approx(100.0, rel=1e-5)
    # both given is fine while they agree, and the conductivity stays as it is given
    stated = f"{1.005 * saline.liquid.conductivity:.6g} S/m"
    both = with_recipe({"salt": "PBS", "amount": "0.1 x", "osmolality": "300 mOsm/kg"},
                       conductivity=stated)  # fmt: skip
    assert both.liquid.conductivity == pytest.approx(1.005 * saline.liquid.conductivity, rel=1e-5)
    assert "amount" not in document(both)["liquid"]["recipe"]
    made = Liquid.model_validate({"recipe": {"salt": "KCl", "amount": 10.0}})
    assert made.conductivity == pytest.approx(0.1412, rel=3e-3)  # CRC Handbook, from memory


IMPOSSIBLE = {
    "the rest conducts more": (
        {"ingredients": [BUFFER]}, {"conductivity": "10 mS/m"},
        "liquid.conductivity", "must be at least"),
    "more ions than are modelled": (
        {"salt": "CaCl2"}, {"conductivity": "8 S/m"}, "liquid.conductivity", "must be at most"),
    "salts make more": (
        {"osmolality": "20 mOsm/kg"}, {"conductivity": "0.5 S/m"},
        "liquid.recipe.osmolality", "must be at least"),
    "more than dissolves": (
        {"osmolality": "1.5 Osm/kg", "sugar": "mannitol"}, {},
        "liquid.recipe.osmolality", "at most 1000"),
    "fixed sugar beyond what dissolves": (
        {"ingredients": [{"solute": "mannitol", "concentration": "2 M"}]}, {},
        "liquid.recipe.ingredients.0.concentration", "must be at most 1000"),
    "sugars that fill the water": (
        {"ingredients": [{"solute": name, "concentration": "1.2 M"}
                         for name in ("sucrose", "trehalose")]}, {},
        "liquid.recipe.ingredients", "more sugar than is modelled"),
    "sugar and filled up sugar": (
        {"osmolality": "2.9 Osm/kg", "ingredients": [
            {"solute": "trehalose", "concentration": "1 M"}]}, {},
        "liquid.recipe.osmolality", "more sugar than is modelled"),
    "fixed salts beyond the model": (
        {"ingredients": [{"solute": "NaCl", "concentration": "1.5 M"}]}, {},
        "liquid.recipe.ingredients", "ionic strength"),
    "an amount beyond the model": (
        {"amount": "2 M"}, {"conductivity": None}, "liquid.recipe.amount", "must be at most"),
    "an amount that conducts too little": (
        {"amount": "1 nM"}, {"conductivity": None}, "liquid.recipe.amount", "from 0.01"),
    "two that disagree": ({"amount": "10 mM"}, {}, "liquid.recipe.amount", "leave out one"),
    "an unknown salt": ({"salt": "honey"}, {}, "liquid.recipe.salt", "one of KCl"),
    "saline as an ingredient": (
        {"ingredients": [{"solute": "PBS", "concentration": "1 x"}]}, {},
        "liquid.recipe.ingredients.0.solute", "one of"),
    "a volume of an ingredient": (
        {"ingredients": [{"solute": "HEPES", "concentration": "1 mL"}]}, {},
        "liquid.recipe.ingredients.0.concentration", "another kind"),
    "a misspelt key": ({"sgar": "sucrose"}, {}, "liquid.recipe.sgar", "is sugar meant?"),
    "no table": (3, {}, "liquid.recipe", "table"),
    "no list": ({"ingredients": 3}, {}, "liquid.recipe.ingredients", "list"),
    "13 ingredients": (
        {"ingredients": [BUFFER] * 13}, {}, "liquid.recipe.ingredients", "at most 12"),
    "neither conductivity nor amount": (
        {"salt": "KCl"}, {"conductivity": None}, "liquid.conductivity", "missing"),
}  # fmt: skip


@pytest.mark.parametrize("name", IMPOSSIBLE)
def test_what_cannot_be_had_is_told_at_its_field(name, with_recipe):
    recipe, liquid, path, words = IMPOSSIBLE[name]
    errors = errors_of(with_recipe, recipe, **liquid)
    assert set(errors) == {path}
    assert words in errors[path]


@pytest.mark.parametrize("name", ["the rest conducts more", "more ions than are modelled"])
def test_told_bounds_of_conductivity_can_be_typed(name, with_recipe):
    recipe, liquid, path, _ = IMPOSSIBLE[name]
    told = re.search(
        r"at (?:least|most) ([\d.]+ mS/m)", errors_of(with_recipe, recipe, **liquid)[path]
    )
    with_recipe(recipe, **{**liquid, "conductivity": told[1]})


def test_the_told_bound_of_the_osmolality_can_be_typed(with_recipe):
    recipe, liquid, path, _ = IMPOSSIBLE["salts make more"]
    told = re.search(r"at least ([\d.]+ mOsm/kg)", errors_of(with_recipe, recipe, **liquid)[path])
    design = with_recipe({**recipe, "osmolality": told[1]}, **liquid)
    assert amounts(mixed(design.liquid))["sucrose"] < 1.0


def test_wrong_fields_of_recipe_and_liquid_are_told_together(with_recipe):
    errors = errors_of(
        with_recipe, {"sugar": "honey", "ph": 15, "amount": "much"}, temperature="300 degC"
    )
    assert set(errors) == {
        "liquid.recipe.sugar", "liquid.recipe.ph", "liquid.recipe.amount", "liquid.temperature"
    }  # fmt: skip


def test_a_recipe_survives_file_and_link(with_recipe, vary):
    design = with_recipe({"salt": "MgCl2", "osmolality": "310 mOsm/kg", "ingredients": [BUFFER]})
    assert parse_design(document(design)) == design
    assert read_profile(profile_text(design).encode()) == design
    other = vary(design, {"liquid.recipe.sugar": "trehalose"})
    assert fingerprint(other) != fingerprint(design)
    bare = with_recipe({"ingredients": []})
    assert parse_design(document(bare)) == bare


def test_properties_are_the_recipes_unless_given(with_recipe):
    recipe = {"osmolality": "300 mOsm/kg"}
    own = with_recipe(recipe).liquid.state
    assert own.viscosity > 1.2 * float(water.viscosity(298.15))
    assert own.density > 1.02 * float(water.density(298.15))
    assert own.permittivity < 0.98 * epsilon_0 * float(water.relative_permittivity(298.15))
    assert 0.019 < own.conductivity_slope < 0.022
    given_ = with_recipe(
        recipe,
        viscosity="2 mPa s",
        density="1100 kg/m^3",
        relative_permittivity=70,
        conductivity_per_kelvin="1 %/K",
    ).liquid.state
    assert given_.viscosity == pytest.approx(2e-3)
    assert given_.density == pytest.approx(1100.0)
    assert given_.permittivity == pytest.approx(70.0 * epsilon_0)
    assert given_.conductivity_slope == pytest.approx(0.01)


def test_without_a_recipe_all_is_water(yeast):
    liquid = Liquid(conductivity=0.03, temperature=310.15)
    assert mixed(liquid) is None
    assert liquid.state.viscosity == pytest.approx(float(water.viscosity(310.15)))
    assert liquid.state.density == pytest.approx(float(water.density(310.15)))
    assert liquid.state.conductivity_slope == pytest.approx(0.02)
    assert liquid.electrolyte(np.array([0.03])).valences.tolist() == [1.0, -1.0]


def test_the_slope_is_how_the_same_mixture_warms():
    warm, cold = (made_of({"KCl": 20.0, "HEPES": 5.0}, temperature=298.15 + k) for k in (1.0, -1.0))
    liquid = Liquid(
        conductivity=made_of({"KCl": 20.0, "HEPES": 5.0}).conductivity,
        recipe=Recipe(ingredients=(Ingredient(solute="HEPES", concentration=5.0),)),
    )
    expected = np.log(warm.conductivity / cold.conductivity) / 2.0
    assert liquid.state.conductivity_slope == pytest.approx(expected, rel=1e-3)


def test_ions_at_other_conductivities():
    recipe = Recipe(
        salt="MgCl2",
        osmolality=0.3,
        ingredients=(Ingredient(solute="HEPES", concentration=10.0),),
    )
    liquid = Liquid(conductivity=0.1, recipe=recipe)
    conductivity = np.geomspace(1e-4, 10.0, 41)[:, None]
    ions = liquid.electrolyte(conductivity)
    assert ions.concentrations.shape == (len(ions.valences), 41, 1)
    net = np.tensordot(ions.valences, ions.concentrations, 1)
    assert (np.abs(net) < 1e-9 * ions.concentrations.sum(axis=0)).all()
    assert (np.diff(ions.ionic_strength[:, 0]) > 0.0).all()
    # where the rest alone conducts more, all is diluted in proportion
    low = ions.concentrations[:, conductivity[:, 0] < 0.01, 0] / conductivity[conductivity < 0.01]
    np.testing.assert_allclose(low, low[:, :1] * np.ones_like(low), rtol=1e-9)
    # at its own conductivity they are its own
    here = dict(zip(liquid.blend.solution.names, liquid.blend.solution.concentrations, strict=True))
    own = liquid.ions
    assert own.concentrations.shape == own.valences.shape
    assert sorted(own.concentrations) == pytest.approx(
        sorted(float(here[name]) for name in here if SPECIES[name].charge), rel=1e-4
    )
    # free ions conduct somewhat more than those that hold one another back
    free = own.valences**2 * own.concentrations * own.diffusivities
    sum_of_free = float(free.sum()) * 96485.33**2 / (8.314463 * 298.15)
    assert 1.0 < sum_of_free / liquid.conductivity < 1.3
    assert isclose(float(own.ionic_strength), mixed(liquid).ionic_strength)


@pytest.mark.parametrize(
    ("amounts_", "ph", "words"),
    [
        ({"CaCl2": 2.0, "phosphate": 5.0}, 7.4, ["fall out"]),
        ({"KCl": 5.0, "HEPES": 5.0}, 5.0, ["HEPES hardly holds pH 5"]),
        ({"KCl": 0.05}, 7.4, ["Carbon dioxide"]),
        ({"KCl": 5.0, "HEPES": 5.0}, 7.4, []),
    ],
)
def test_notes(amounts_, ph, words):
    found = made_of(amounts_, ph)
    assert len(found.notes) == len(words)
    for note, piece in zip(found.notes, words, strict=True):
        assert piece in note
    assert ("burn" in found.caution) == any(portion.role == "ph" for portion in found.portions)


def test_a_warm_stage_thins_what_was_mixed_cold():
    cold, warm = (made_of({"KCl": 10.0}, temperature=kelvin) for kelvin in (298.15, 310.15))
    assert warm.ionic_strength / cold.ionic_strength == pytest.approx(993.33 / 997.05, rel=1e-5)
    assert warm.osmolality == pytest.approx(cold.osmolality, rel=1e-6)
    assert warm.conductivity_25 == pytest.approx(cold.conductivity)
