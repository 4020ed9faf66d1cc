"""Particles, layers and ingredients come and go on the page, and Back undoes it."""

import re

import pytest
from axe_playwright_python.sync_playwright import Axe

from tests.browser.conftest import settled, until

pytestmark = pytest.mark.browser
RULES = ["wcag2a", "wcag2aa", "wcag21a", "wcag21aa", "wcag22aa"]


def names(page):
    return page.locator("[id^=particle-name]").all_inner_texts()


def part(page, path):
    return page.locator(f'[data-part="{path}"]')


def press(page, path, do):
    """Press one of the buttons of a part, and wait for the inputs that it makes."""
    part(page, path).locator(f'button[data-do="{do}"]').first.click()
    drawn(page)


def drawn(page):
    """Wait until an edit is opened and answered."""
    until(page, "() => !window.slackwater.edits.underway()")
    settled(page)


def unfold(page, name):
    page.locator(f'details[data-fold="{name}"] > summary').click()


def test_particles_are_copied_removed_and_brought_back(page):
    unfold(page, "chip")
    unfold(page, "particle.0")
    part(page, "particle.0").get_by_label("Density", exact=True).fill("1234")
    press(page, "particle.0", "copy")
    assert names(page) == ["viable yeast", "viable yeast 2", "dead yeast"]
    name = part(page, "particle.1").get_by_label("Name", exact=True).first
    assert name.evaluate("field => field === document.activeElement")
    typed = part(page, "particle.1").get_by_label("Density", exact=True).input_value()
    assert typed == "1234 kg/m³", "what was being typed goes into the copy"
    opened = page.locator("details[open][data-fold]").evaluate_all(
        "folds => folds.map((fold) => fold.dataset.fold)"
    )
    assert opened == ["particles", "particle.0", "particle.1"]

    scrolled = page.locator("#inputs").evaluate("place => place.scrollTop")
    assert scrolled > 0
    press(page, "particle.0", "remove")
    assert names(page) == ["viable yeast 2", "dead yeast"]
    assert page.locator('details[data-fold="particle.0"]').get_attribute("open") is not None
    assert page.locator('details[data-fold="particle.1"]').get_attribute("open") is None
    page.go_back()
    until(page, "() => document.querySelectorAll('.particle').length === 3")
    settled(page)
    page.go_back()
    until(page, "() => document.querySelectorAll('.particle').length === 2")
    settled(page)
    assert names(page) == ["viable yeast", "dead yeast"]
    assert "Inside the corridor" in page.locator("#verdict").inner_text()


def test_layers_and_kinds(page):
    unfold(page, "particle.1")
    particle = part(page, "particle.1")
    particle.get_by_role("button", name="Add a layer").click()
    drawn(page)
    layer = part(page, "particle.1.layers.2")
    thickness = layer.get_by_label("Thickness", exact=True)
    thickness.fill("9 um")
    thickness.press("Enter")
    until(page, "() => document.body.classList.contains('stale')")
    told = page.locator(".part-error")
    assert "leaves no core" in told.inner_text(), "what is wrong with all layers stands by them"
    thickness.fill("50 nm")
    thickness.press("Enter")
    settled(page)
    assert told.count() == 0
    press(page, "particle.1.layers.2", "earlier")
    assert part(page, "particle.1.layers.1").get_by_label("Thickness").input_value() == "50 nm"
    particle.get_by_label("Kind", exact=True).first.click()
    page.locator("[role=option]:visible", has_text="solid sphere").click()
    drawn(page)
    assert part(page, "particle.1.layers.0").count() == 0
    assert particle.get_by_label("Radius", exact=True).input_value() == "3.26 µm"


def test_a_particle_of_the_library(new_page, address):
    page = new_page(bypass_csp=True)
    page.goto(address)
    settled(page)
    page.get_by_role("button", name="From the library").click()
    search = page.get_by_role("searchbox", name="Search the library")
    assert search.evaluate("field => field === document.activeElement")
    until(page, "() => document.querySelectorAll('.library-item').length > 20")
    page.keyboard.type("yang lymphocyte")
    found = page.locator(".library-item:visible")
    assert 1 < found.count() < 6
    found.first.locator("summary").click()
    assert "read" in found.first.locator("table").inner_text()
    results = Axe().run(page, options={"runOnly": RULES})
    assert results.violations_count == 0, results.generate_report()
    page.get_by_role("button", name="Add T lymphocyte, human", exact=True).click()
    drawn(page)
    assert names(page) == ["viable yeast", "dead yeast", "T lymphocyte"]
    added = part(page, "particle.2")
    added.get_by_text("More", exact=True).first.click()
    assert "Biophys. J." in added.get_by_label("Source", exact=True).input_value()


def test_a_recipe_and_what_to_mix(page):
    unfold(page, "liquid")
    card = page.locator("#recipe-card")
    assert card.is_hidden()
    page.get_by_role("button", name="Add a recipe").click()
    drawn(page)
    page.get_by_role("button", name="Add an ingredient").click()
    drawn(page)
    assert re.search(r"dextrose.*\s1\.802\sg\s+10\smmol", card.inner_text())
    amount = page.get_by_label("Amount of the salt", exact=True)
    amount.fill("5 mM")
    amount.press("Enter")
    until(page, "() => document.querySelector('#recipe-card').innerText.includes('5\\u00a0mmol')")
    settled(page)
    assert amount.input_value() == ""
    assert amount.get_attribute("placeholder") == "5 mmol/L"
    conductivity = page.get_by_label("Medium conductivity, typed").input_value()
    assert 50 < float(conductivity.removesuffix(" mS/m")) < 70

    page.get_by_label("Ingredient", exact=True).first.click()
    page.locator("[role=option]:visible", has_text="sodium chloride").click()
    until(page, "() => document.body.classList.contains('stale')")
    told = page.locator(".typed .mantine-InputWrapper-error").inner_text()
    assert "what else is in the recipe" in told
    assert page.locator("#stale-label").is_visible()
    assert "5\u00a0mmol" in card.inner_text()
    press(page, "liquid.recipe", "remove")
    assert card.is_hidden()
    assert page.locator(".mantine-InputWrapper-error").count() == 0
