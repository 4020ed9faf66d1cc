"""A field map chosen on the page, in a real Chromium."""

import pytest

from tests.browser.conftest import settled, until
from tests.webapp.test_uploads import smooth

pytestmark = pytest.mark.browser


def choose(page, name: str, content: bytes) -> None:
    """Pick a file in the chip's controls."""
    found = {"name": name, "mimeType": "text/csv", "buffer": content}
    page.locator("#map-upload input[type=file]").set_input_files(found)


def test_a_field_map_is_chosen_and_used(page):
    page.get_by_label("Layout", exact=True).first.click()
    page.get_by_role("option", name="field map").click()
    until(page, "() => document.body.textContent.includes('Choose a field map: a CSV file')")
    assert page.locator("#stale-label").is_visible()

    choose(page, "pictures.csv", b"\x00\x01")
    until(page, "() => document.body.textContent.includes('is no text file')")
    assert page.locator("#stale-label").is_visible()

    choose(page, "solver.csv", smooth())
    until(page, "() => document.getElementById('stale-label').hidden")
    settled(page)
    field = page.get_by_label("Field map", exact=True).first
    assert field.input_value() == "solver.csv"
    assert page.get_by_label("Window length", exact=True).first.input_value() == "120 µm"
    assert "field map" in page.locator("#notes").inner_text()
    assert not page.get_by_text("is no text file").count()
