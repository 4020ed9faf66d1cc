"""The polarisation view as a person uses it, in a real Chromium."""

import csv

import pytest
from axe_playwright_python.sync_playwright import Axe

from tests.browser.conftest import EDGES, settled, until
from tests.browser.test_dashboard import shown_fingerprint, slider

pytestmark = pytest.mark.browser
FIGURES = ("real-part", "imaginary-part", "crossover-map", "rotation")


def opened(page):
    page.get_by_role("tab", name="Polarisation").click()
    settled(page)
    return page


def test_the_view_shows_every_figure_and_is_accessible(new_page, address):
    """axe-core's rules for WCAG 2.2 A and AA, in the dark appearance."""
    page = new_page(color_scheme="dark", bypass_csp=True)
    page.goto(address)
    settled(page)
    opened(page)
    for name in FIGURES:
        assert page.locator(f"#figure-{name} .main-svg").count() > 0
        assert len(page.locator(f"#sentence-{name}").inner_text()) > 20
    assert not page.locator(".card-travel").is_visible()
    for place in ("#polarisation-key li", "#polarisation-rows tr"):
        assert "viable yeast" in page.locator(place).first.inner_text()
    assert page.locator("#figure-crossover-map path.js-fill").count() == 2
    options = {"runOnly": ["wcag2a", "wcag2aa", "wcag21a", "wcag21aa", "wcag22aa"]}
    results = Axe().run(page, options=options)
    assert results.violations_count == 0, results.generate_report()


def test_the_map_moves_both_knobs_and_sketches_are_the_full_picture(page):
    opened(page)
    box = page.locator("#figure-crossover-map .nsewdrag").first.bounding_box()
    page.mouse.click(box["x"] + 0.5 * box["width"], box["y"] + 0.5 * box["height"])
    settled(page)
    typed = {
        name: page.get_by_label(f"{name}, typed").input_value().split()
        for name in ("Frequency", "Medium conductivity")
    }
    # Half the way from 0.1 mS/m to 3 S/m and from 1 kHz to 100 MHz on logarithmic axes.
    assert float(typed["Medium conductivity"][0]) == pytest.approx(17.3, rel=0.03)
    assert float(typed["Frequency"][0]) == pytest.approx(316.0, rel=0.03)
    assert (typed["Medium conductivity"][1], typed["Frequency"][1]) == ("mS/m", "kHz")
    slider(page, "drive.frequency").focus()
    for _ in range(6):
        page.keyboard.press("ArrowRight")
    until(page, "() => Object.values(window.slackwater.figures).some((f) => f.sketched)")
    until(page, "() => window.slackwater.shown === window.slackwater.gate.number")
    sketched = {name: page.evaluate(EDGES, name) for name in FIGURES}
    settled(page)
    for name in FIGURES:
        for here, there in zip(page.evaluate(EDGES, name), sketched[name], strict=True):
            assert here == pytest.approx(there, abs=1.5), name


def test_tables_are_saved_below_a_line_that_traces_them(page):
    opened(page)
    for button, name, columns in (
        ("Table as CSV", "slackwater-polarisation.csv", 15),
        ("Spectra as CSV", "slackwater-spectra.csv", 5),
    ):
        with page.expect_download() as download:
            page.get_by_role("button", name=button).click()
        assert download.value.suggested_filename == name
        with open(download.value.path(), encoding="utf-8") as file:
            first, *lines = list(file)
        assert first.startswith("# ")
        assert shown_fingerprint(page) in first
        rows = list(csv.reader(lines))
        assert {len(row) for row in rows} == {columns}
        assert len(rows) > 2
