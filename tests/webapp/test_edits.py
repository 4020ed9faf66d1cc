"""Edits of the design on the page: each does what it says, and none can break a design."""

import re

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from model.design import MOST_PARTICLES
from model.errors import DesignError
from model.layers import MOST_LAYERS, NEW_LAYERS
from model.particles import PARTICLES
from model.profile import document, parse_design
from tests.wishes import request_of, wished
from webapp.edits import LISTS, edited, open_edit
from webapp.state import BadRequestError

BEAD = {
    "name": "latex 216 nm",
    "kind": "solid-sphere",
    "radius": "108 nm",
    "relative_permittivity": 2.55,
    "conductivity": "0 S/m",
    "surface_conductance": "2 nS",
    "source": "Somebody 1999",
}
LIBRARY = {"bead-216": BEAD}


def names(opened):
    return [particle.name for particle in opened.design.particles]


@pytest.mark.parametrize("kind", PARTICLES)
def test_a_usual_particle_of_each_kind_is_added_to_watch(yeast, kind):
    opened, found = wished(yeast, "add", "particle", kind)
    assert opened.problems == ()
    assert opened.design.particles[:2] == yeast.particles
    assert opened.design.particles[2].kind == kind
    assert opened.design.particles[2].role == "watch"
    assert (found.place, found.items, found.order) == ("particle.2", "particle", (0, 1, None))


def test_a_particle_of_the_library_comes_with_its_source(yeast):
    opened, _ = wished(yeast, "add", "particle", "bead-216", LIBRARY)
    bead = opened.design.particles[2]
    assert (bead.name, bead.source, bead.role) == ("latex 216 nm", "Somebody 1999", "watch")
    again, _ = wished(opened.design, "add", "particle", "bead-216", LIBRARY)
    assert names(again)[2:] == ["latex 216 nm", "latex 216 nm 2"]
    assert "role" not in BEAD


def test_what_is_added_collects_where_nothing_does(yeast):
    opened, _ = wished(yeast, "add", "particle", "ellipsoid", **{"particle.0.role": "watch"})
    assert [particle.role for particle in opened.design.particles] == ["watch", "pass", "collect"]


def test_a_copy_stands_behind_its_original_under_a_name_of_its_own(yeast):
    opened, found = wished(yeast, "copy", "particle.0")
    assert names(opened) == ["viable yeast", "viable yeast 2", "dead yeast"]
    assert (found.place, found.order) == ("particle.1", (0, 0, 1))
    one, two, _ = opened.design.particles
    assert two.model_copy(update={"name": one.name}) == one
    once_more, _ = wished(opened.design, "copy", "particle.1")
    assert names(once_more)[2] == "viable yeast 3"


@pytest.mark.parametrize("name", ["x" * 40, "x" * 37 + " 99", "yeast 9", "7", "a b 12 2"])
def test_names_of_copies_can_always_be_used(yeast, vary, name):
    design = vary(yeast, {"particle.0.name": name})
    for _ in range(3):
        opened, _ = wished(design, "copy", "particle.0")
        assert opened.problems == ()
        design = opened.design
    assert len(set(names(opened))) == 5


def test_what_was_typed_goes_into_the_copy(yeast):
    opened, _ = wished(yeast, "copy", "particle.1", **{"particle.1.radius": "2.5 um"})
    assert [particle.radius for particle in opened.design.particles[1:]] == [2.5e-6, 2.5e-6]


def test_a_particle_is_removed_and_another_collects_in_its_place(yeast):
    opened, found = wished(yeast, "remove", "particle.0")
    assert names(opened) == ["dead yeast"]
    assert opened.design.particles[0].role == "collect"
    assert (found.place, found.order) == ("particle.0", (1,))
    opened, found = wished(yeast, "remove", "particle.1")
    assert opened.design.particles == yeast.particles[:1]
    assert found.place == "particle.0"


def test_particles_are_moved(yeast):
    opened, found = wished(yeast, "later", "particle.0")
    assert opened.design.particles == yeast.particles[::-1]
    assert (found.place, found.order) == ("particle.1", (1, 0))
    back, found = wished(opened.design, "earlier", "particle.1")
    assert back.design == yeast
    assert found.place == "particle.0"


def test_layers_are_added_outermost_moved_and_removed(yeast):
    for word in NEW_LAYERS:
        opened, found = wished(yeast, "add", "particle.0.layers", word)
        assert opened.problems == ()
        layers = opened.design.particles[0].layers
        assert layers[:2] == yeast.particles[0].layers
        assert layers[2].is_membrane == (word == "membrane")
        assert found.place == "particle.0.layers.2"
    opened, _ = wished(yeast, "earlier", "particle.0.layers.1")
    assert [layer.name for layer in opened.design.particles[0].layers] == ["wall", "membrane"]
    opened, _ = wished(opened.design, "remove", "particle.0.layers.0")
    assert [layer.name for layer in opened.design.particles[0].layers] == ["membrane"]


def test_another_kind_keeps_what_both_have(yeast):
    opened, _ = wished(yeast, "turn", "particle.0", "ellipsoid")
    before, after = yeast.particles[0], opened.design.particles[0]
    assert after.semi_axes == (before.radius,) * 3
    for key in ("name", "role", "must_live", "density", "radius_cv", "core", "layers"):
        assert getattr(after, key) == getattr(before, key)
    back, _ = wished(opened.design, "turn", "particle.0", "shelled-sphere")
    assert back.design == yeast


def test_another_kind_has_the_same_volume(yeast):
    axes = {"particle.0.semi_axes": "8 × 1 × 1 um"}
    rod, _ = wished(yeast, "turn", "particle.0", "ellipsoid")
    for kind in ("solid-sphere", "shelled-sphere"):
        ball, _ = wished(rod.design, "turn", "particle.0", kind, **axes)
        assert ball.problems == ()
        assert ball.design.particles[0].radius == pytest.approx(2e-6, rel=1e-3)


def test_a_kind_is_turned_even_with_a_wrong_entry(yeast):
    """Its size cannot be read then, so that the usual one stands there."""
    opened, _ = wished(yeast, "turn", "particle.0", "solid-sphere", **{"particle.0.density": "x"})
    assert opened.design.particles[0].kind == "solid-sphere"
    assert len(opened.problems) == 1
    assert opened.problems[0].startswith("particle.0.density")


def test_a_wrong_entry_becomes_what_it_was_in_the_same_particle(yeast):
    """Not what stands at its new place in the list as it was before."""
    opened, _ = wished(yeast, "remove", "particle.0", **{"particle.1.radius": "none"})
    assert opened.design.particles[0].radius == yeast.particles[1].radius
    assert opened.problems[0].startswith("particle.0.radius")


def test_an_impossible_particle_can_be_removed_again(yeast):
    """Nothing that was typed elsewhere is lost by it."""
    typed = {"particle.1.role": "collect", "particle.1.radius": "60 um", "chip.gap": "70 um"}
    with pytest.raises(DesignError):
        parse_design({**document(yeast), "particle": [{**BEAD, "radius": "60 um"}]})
    opened, _ = wished(yeast, "remove", "particle.1", **typed)
    assert opened.problems == ()
    assert opened.design.chip.gap == 70e-6


def test_a_recipe_comes_and_goes_with_its_ingredients(yeast):
    opened, found = wished(yeast, "add", "liquid.recipe")
    assert opened.problems == ()
    assert opened.design.liquid.conductivity == yeast.liquid.conductivity
    assert opened.design.liquid.recipe.ingredients == ()
    assert found.place == "liquid.recipe"
    for count in (1, 2):
        opened, found = wished(opened.design, "add", "liquid.recipe.ingredients", "ingredient")
        assert opened.problems == ()
        assert found.place == f"liquid.recipe.ingredients.{count - 1}"
    salty = {"liquid.recipe.ingredients.0.concentration": "2 mM"}
    opened, _ = wished(opened.design, "later", "liquid.recipe.ingredients.0", **salty)
    amounts = [item.concentration for item in opened.design.liquid.recipe.ingredients]
    assert amounts == [10.0, 2.0]
    for _ in range(2):
        opened, found = wished(opened.design, "remove", "liquid.recipe.ingredients.0")
    assert found.place == "liquid.recipe.ingredients"
    opened, _ = wished(opened.design, "remove", "liquid.recipe")
    assert opened.design == yeast


def test_a_recipe_that_cannot_be_had_is_told(yeast):
    """All that is in it conducts more than the liquid is to."""
    opened, _ = wished(yeast, "add", "liquid.recipe")
    opened, _ = wished(opened.design, "add", "liquid.recipe.ingredients", "ingredient")
    much = {"liquid.recipe.ingredients.0.solute": "NaCl"}
    opened, _ = wished(opened.design, "copy", "particle.1", **much)
    assert opened.problems[0].startswith("liquid.conductivity: must be at least")


def full(items, most):
    return [{**items[0], "name": f"{index}"} for index in range(most)]


def test_lists_take_no_more_than_they_may(yeast):
    data = document(yeast)
    data["particle"] = full(data["particle"], MOST_PARTICLES)
    data["particle"][0]["layers"] = full([NEW_LAYERS["membrane"]], MOST_LAYERS)
    crowd = parse_design(data)
    for do, at, word in [
        ("add", "particle", "ellipsoid"),
        ("copy", "particle.3", ""),
        ("add", "particle.0.layers", "layer"),
        ("copy", "particle.0.layers.7", ""),
    ]:
        with pytest.raises(BadRequestError):
            wished(crowd, do, at, word)
    fewer, _ = wished(crowd, "remove", "particle.11")
    again, _ = wished(fewer.design, "copy", "particle.10")
    assert len(again.design.particles) == MOST_PARTICLES


def test_the_last_of_a_list_stays(yeast):
    alone, _ = wished(yeast, "remove", "particle.1")
    thin, _ = wished(alone.design, "remove", "particle.0.layers.1")
    for at in ("particle.0", "particle.0.layers.0"):
        with pytest.raises(BadRequestError):
            wished(thin.design, "remove", at)


WRONG = [
    None,
    3,
    "copy",
    [],
    {},
    {"do": "copy"},
    {"do": "copy", "at": "particle.0"},
    {"do": "copy", "at": 0, "word": ""},
    {"do": ["copy"], "at": "particle.0", "word": ""},
    {"do": "burn", "at": "particle.0", "word": ""},
    {"do": "copy", "at": "particle.2", "word": ""},
    {"do": "copy", "at": "particle.-1", "word": ""},
    {"do": "copy", "at": "particle.99999", "word": ""},
    {"do": "copy", "at": "particle.first", "word": ""},
    {"do": "copy", "at": "particle", "word": ""},
    {"do": "copy", "at": "chip.floor", "word": ""},
    {"do": "copy", "at": "", "word": ""},
    {"do": "earlier", "at": "particle.0", "word": ""},
    {"do": "later", "at": "particle.1", "word": ""},
    {"do": "add", "at": "particle", "word": "cube"},
    {"do": "add", "at": "particle.0.layers", "word": "ellipsoid"},
    {"do": "add", "at": "particle.0.layers", "word": "bead-216"},
    {"do": "add", "at": "particle.7.layers", "word": "membrane"},
    {"do": "add", "at": "limits", "word": "membrane"},
    {"do": "remove", "at": "liquid.recipe", "word": ""},
    {"do": "add", "at": "liquid.recipe.ingredients", "word": "ingredient"},
    {"do": "copy", "at": "liquid.recipe", "word": ""},
    {"do": "turn", "at": "particle.0", "word": "coplanar-bars"},
    {"do": "turn", "at": "particle.5", "word": "ellipsoid"},
    {"do": "turn", "at": "chip", "word": "cube"},
    {"do": "turn", "at": "drive", "word": "ellipsoid"},
]


@pytest.mark.parametrize("wish", WRONG, ids=str)
def test_wishes_that_no_page_has_are_refused(yeast, wish):
    with pytest.raises(BadRequestError):
        open_edit(request_of(yeast, wish=wish), yeast, LIBRARY)


@pytest.mark.parametrize(
    "particles", [None, 3, "x", {}, [], [3], [None, "x"], [[]], [{"layers": 3}]]
)
def test_documents_that_hold_no_particles_are_refused_or_told(yeast, particles):
    broken = {**document(yeast), "particle": particles}
    for do, at, word in WISHES:
        try:
            edited(broken, {"do": do, "at": at, "word": word}, LIBRARY)
        except BadRequestError:
            continue


WISHES = [
    *(("add", "particle", word) for word in [*LISTS["particle"].starts, *LIBRARY]),
    *(("add", f"particle.{index}.layers", word) for index in range(3) for word in NEW_LAYERS),
    *((do, f"particle.{index}", "")
      for do in ("copy", "remove", "earlier", "later") for index in range(4)),
    *((do, f"particle.{index}.layers.{layer}", "")
      for do in ("copy", "remove", "earlier", "later") for index in range(2) for layer in range(2)),
    *(("turn", f"particle.{index}", kind) for index in range(3) for kind in PARTICLES),
    ("add", "liquid.recipe", ""),
    ("remove", "liquid.recipe", ""),
    ("add", "liquid.recipe.ingredients", "ingredient"),
    ("copy", "liquid.recipe.ingredients.0", ""),
    ("remove", "liquid.recipe.ingredients.0", ""),
    ("turn", "chip", "facing-bars"),
    ("turn", "chip", "four-pole"),
    ("turn", "chip", "coplanar-bars"),
]  # fmt: skip

PLACES = r"chip|particle\.\d+(\.layers\.\d+)?|liquid\.recipe(\.ingredients(\.\d+)?)?"


@settings(max_examples=60, deadline=None)
@given(st.lists(st.sampled_from(WISHES), min_size=1, max_size=8))
def test_any_sequence_of_edits_leaves_a_design_or_a_told_error(yeast, wishes):
    design = yeast
    for do, at, word in wishes:
        try:
            opened, found = wished(design, do, at, word, LIBRARY)
        except BadRequestError:
            continue
        if not opened.problems:
            assert parse_design(found.document) == opened.design
        assert re.fullmatch(PLACES, found.place)
        assert any(particle.role == "collect" for particle in opened.design.particles)
        design = opened.design
    assert parse_design(document(design)) == design


def test_another_task_keeps_its_height_and_tells_what_it_lacks(yeast):
    opened, _ = wished(yeast, "turn", "task", "separate")
    assert opened.problems == ()
    assert opened.design.task.kind == "separate"
    assert opened.design.task.force_height == yeast.task.force_height
    alone, _ = wished(yeast, "turn", "task", "separate", **{"particle.1.role": "watch"})
    assert len(alone.problems) > 0  # nothing is there that could pass
    with pytest.raises(BadRequestError):
        wished(yeast, "turn", "task", "dance")


def test_limits_are_switched_off_one_after_the_other(yeast):
    opened, _ = wished(yeast, "add", "limits.off", "limit that is off")
    again, _ = wished(opened.design, "add", "limits.off", "limit that is off")
    copied, _ = wished(again.design, "copy", "limits.off.0")
    off = [one.limit for one in copied.design.limits.off]
    assert len(set(off)) == 3
    assert copied.problems == ()
    assert all(one.reason for one in copied.design.limits.off)
    back, _ = wished(opened.design, "remove", "limits.off.0")
    assert back.design == yeast
