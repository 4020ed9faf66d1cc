"""Tabs and the section view as a person uses them, in a real Chromium."""

import pytest
from axe_playwright_python.sync_playwright import Axe

from tests.browser.conftest import EDGES, settled, until
from tests.browser.test_dashboard import drag, shown_fingerprint, slider, type_into

pytestmark = pytest.mark.browser
PANELS = ("field-map", "force-map", "temperature-map", "flow-map")


@pytest.fixture
def section(page):
    """The dashboard with the section view opened."""
    page.get_by_role("tab", name="Section").click()
    settled(page)
    return page


def reading(page, label: str) -> str:
    """What the probe reads."""
    return page.locator(".reading", has_text=label).locator("b").inner_text()


def trace(page, figure: str, name: str) -> dict:
    """Numbers of a trace, as the drawing library holds them."""
    return page.evaluate(
        """([figure, name]) => {
          const found = document.getElementById("figure-" + figure)._fullData
            .find((trace) => trace.name === name);
          return {x: Array.from(found.x), y: Array.from(found.y)};
        }""",
        [figure, name],
    )


def test_tabs_move_with_the_arrow_keys(page):
    corridor, section = (page.get_by_role("tab", name=name) for name in ("Corridor", "Section"))
    assert corridor.get_attribute("aria-selected") == "true"
    corridor.focus()
    page.keyboard.press("ArrowRight")
    assert page.locator("#view-polarisation").is_visible()
    page.keyboard.press("ArrowRight")
    settled(page)
    assert section.get_attribute("aria-selected") == "true"
    assert section.evaluate("e => e === document.activeElement")
    assert page.locator("#view-section").is_visible()
    assert not page.locator("#view-corridor").is_visible()
    for name in PANELS:
        assert page.locator(f"#figure-{name} .main-svg").count() > 0
        assert len(page.locator(f"#sentence-{name}").inner_text()) > 20
    page.keyboard.press("ArrowRight")
    settled(page)
    assert page.locator("#view-corridor").is_visible()


def test_the_view_is_kept_in_the_browser_and_not_in_the_link(section, new_page):
    section.reload()
    settled(section)
    assert section.locator("#view-section").is_visible()
    other = new_page()
    other.goto(section.url)
    settled(other)
    assert other.locator("#view-corridor").is_visible()
    assert shown_fingerprint(other) == shown_fingerprint(section)


def test_figures_follow_what_changed_while_their_tab_was_hidden(page):
    drag(page, "drive.voltage", 40)
    page.get_by_role("tab", name="Section").click()
    settled(page)
    before = reading(page, "Field")
    page.get_by_role("tab", name="Corridor").click()
    settled(page)
    drag(page, "drive.voltage", 60)
    page.get_by_role("tab", name="Section").click()
    settled(page)
    assert reading(page, "Field") != before


def test_a_click_probes_in_every_panel(section):
    box = section.locator("#figure-field-map .nsewdrag").first.bounding_box()
    section.mouse.click(box["x"] + 0.25 * box["width"], box["y"] + 0.5 * box["height"])
    settled(section)
    # A quarter of the way from −60 to 180 µm lies over the middle of the first bar, at 0.
    assert float(section.locator("#probe-x").input_value()) == pytest.approx(0.0, abs=1.0)
    places = [trace(section, name, "probe") for name in PANELS]
    assert places[0]["x"][0] == pytest.approx(0.0, abs=1.0)
    assert all(place == places[0] for place in places)
    assert reading(section, "Force on viable yeast").endswith("N")


def test_the_probe_works_from_the_keyboard(section):
    field = section.locator("#probe-y")
    field.focus()
    before = (field.input_value(), reading(section, "Field"))
    for _ in range(5):
        section.keyboard.press("ArrowUp")
    settled(section)
    assert float(field.input_value()) == float(before[0]) + 5
    assert reading(section, "Field") != before[1]
    field.fill("-5")
    settled(section)
    assert reading(section, "Place") == "in a wall"


def test_one_panel_alone_is_larger(section):
    before = section.locator("#figure-flow-map").bounding_box()["width"]
    section.get_by_role("radio", name="Flow").check(force=True)
    settled(section)
    assert section.locator("#figure-flow-map").bounding_box()["width"] > 1.3 * before
    drawn = section.locator("#figure-flow-map .main-svg").first.bounding_box()["width"]
    assert drawn > 1.3 * before
    assert not section.locator("#figure-field-map").is_visible()
    section.get_by_role("radio", name="All four").check(force=True)
    settled(section)
    assert section.locator("#figure-field-map .heatmaplayer image").count() == 2


def test_another_particle_is_drawn(section):
    section.get_by_label("Force on", exact=True).select_option(label="dead yeast")
    settled(section)
    assert "dead yeast" in section.locator("#sentence-force-map").inner_text()
    assert reading(section, "Force on dead yeast")


def test_panels_are_drawn_to_scale(section):
    scales = section.evaluate(
        """(names) => names.map((name) => {
          const full = document.getElementById("figure-" + name)._fullLayout;
          const scale = (axis) => axis._length / (axis.range[1] - axis.range[0]);
          return scale(full.xaxis) / scale(full.yaxis);
        })""",
        list(PANELS),
    )
    assert scales == pytest.approx([1.0] * 4, rel=0.005)


def test_sketched_panels_are_the_picture_that_the_full_drawing_gives(section):
    slider(section, "drive.frequency").focus()
    for _ in range(6):
        section.keyboard.press("ArrowRight")
    until(section, "() => Object.values(window.slackwater.figures).some((f) => f.sketched)")
    until(section, "() => window.slackwater.shown === window.slackwater.gate.number")
    sketched = {name: section.evaluate(EDGES, name) for name in PANELS}
    settled(section)
    for name in PANELS:
        full = section.evaluate(EDGES, name)
        for here, there in zip(full, sketched[name], strict=True):
            assert here == pytest.approx(there, abs=1.5), name


def test_panels_save_as_pictures(section):
    for name in (*PANELS, "impedance", "share"):
        with section.expect_download() as download:
            section.locator(f'button.export[data-figure="{name}"][data-format="svg"]').click()
        with open(download.value.path(), encoding="utf-8") as file:
            text = file.read()
        assert shown_fingerprint(section) in text
        assert ("<image" in text) == (name in ("field-map", "temperature-map"))


def test_the_drawing_follows_the_typed_lengths(page):
    drawing = page.locator("#chip-drawing")
    assert "60 µm" in drawing.inner_text().replace("\u00a0", " ")
    type_into(page, "Gap", "45 um")
    settled(page)
    assert "45 µm" in drawing.inner_text().replace("\u00a0", " ")
    name = drawing.get_by_role("img").get_attribute("aria-label")
    assert name.startswith("Coplanar bars")
    assert "gap 45 µm" in name


def test_labels_of_the_drawing_keep_apart(page):
    for layout in ("facing bars", "bars under plate", "four phase bars"):
        page.get_by_label("Layout", exact=True).first.click()
        page.get_by_role("option", name=layout).click()
        until(page, f"() => document.getElementById('summary-chip').textContent === '{layout}'")
        settled(page)
        boxes = page.evaluate(
            """() => [...document.querySelectorAll("#chip-drawing text")]
                 .map((text) => text.getBBox()).map((b) => [b.x, b.y, b.width, b.height])"""
        )
        for index, (x, y, wide, tall) in enumerate(boxes):
            for other_x, other_y, other_wide, other_tall in boxes[:index]:
                apart_x = x >= other_x + other_wide or other_x >= x + wide
                apart_y = y >= other_y + 0.7 * other_tall or other_y >= y + 0.7 * tall
                assert apart_x or apart_y, layout


@pytest.mark.parametrize("appearance", ["light", "dark"])
def test_the_section_is_accessible(new_page, address, appearance):
    """axe-core's rules for WCAG 2.2 A and AA."""
    page = new_page(color_scheme=appearance, bypass_csp=True)
    page.goto(address)
    settled(page)
    page.get_by_role("tab", name="Section").click()
    settled(page)
    options = {"runOnly": ["wcag2a", "wcag2aa", "wcag21a", "wcag21aa", "wcag22aa"]}
    results = Axe().run(page, options=options)
    assert results.violations_count == 0, results.generate_report()
