"""The dashboard as a person uses it, in a real Chromium."""

import json
import re
from pathlib import Path
from xml.etree import ElementTree

import pytest
from axe_playwright_python.sync_playwright import Axe

from model.profile import fingerprint, load_profile
from tests.browser.conftest import settled, until
from webapp.services import DEMO_PROFILES

pytestmark = pytest.mark.browser
FIGURES = ("corridor", "force", "heating", "electrothermal")


def verdict(page) -> str:
    return page.locator("#verdict").inner_text()


def shown_fingerprint(page) -> str:
    return page.locator("#fingerprint").inner_text()


def until_fingerprint(page, wanted: str) -> None:
    until(page, f"() => document.getElementById('fingerprint').textContent === '{wanted}'")


def slider(page, path: str):
    return page.locator(f'[data-knob="{path}"] input')


def drag(page, path: str, pixels: float, steps: int = 12) -> None:
    """Take a knob by its thumb, move it, let go."""
    knob = slider(page, path)
    box = knob.bounding_box()
    value, low, high = (float(knob.evaluate(f"e => e.{key}")) for key in ("value", "min", "max"))
    x = box["x"] + 9 + (box["width"] - 18) * (value - low) / (high - low)
    y = box["y"] + box["height"] / 2
    page.mouse.move(x, y)
    page.mouse.down()
    page.mouse.move(x + pixels, y, steps=steps)
    page.mouse.up()
    settled(page)


def type_into(page, label: str, text: str) -> None:
    """Type and press Enter, and wait until the page has taken it (or written it its own way)."""
    field = page.get_by_label(label, exact=True).first
    field.fill(text)
    field.press("Enter")
    found = f"Object.values(window.slackwater.gate.values).includes({json.dumps(text)})"
    until(page, f"() => {found} || document.activeElement.value !== {json.dumps(text)}")


def curve(page, figure: str, trace: str) -> list[float]:
    """Heights of a trace, as the drawing library holds them."""
    return page.evaluate(
        """([figure, trace]) => Array.from(document.getElementById("figure-" + figure)
             ._fullData.find((item) => item.name.includes(trace)).y)""",
        [figure, trace],
    )


def test_opens_with_every_figure_a_verdict_and_the_ledger(page):
    for name in FIGURES:
        assert page.locator(f"#figure-{name} .main-svg").count() > 0
        assert len(page.locator(f"#sentence-{name}").inner_text()) > 20
    assert "corridor" in verdict(page)
    assert page.locator("#ledger li").count() >= 8
    assert "Local laboratory safety rules" in page.locator("#cautions").inner_text()
    assert page.title().endswith("Slackwater")


def test_dragged_conductivity_moves_figures_ledger_and_verdict(page):
    before = (verdict(page), shown_fingerprint(page), curve(page, "corridor", "temperature rise"))
    drag(page, "liquid.conductivity", 60)
    after = (verdict(page), shown_fingerprint(page), curve(page, "corridor", "temperature rise"))
    assert before[0] != after[0]
    assert before[1] != after[1]
    # where the electrodes keep no voltage from the liquid, which is where the ceiling is lowest
    assert min(after[2]) < min(before[2]), "more conductivity must lower the heating ceiling"


def test_dragged_voltage_crosses_the_ceiling(page):
    assert "Inside the corridor" in verdict(page)
    drag(page, "drive.voltage", 130)
    assert "Above the corridor" in verdict(page)
    drag(page, "drive.voltage", -260)
    assert "Below the corridor" in verdict(page)


def test_after_a_fast_drag_the_last_value_is_the_one_shown(page):
    drag(page, "liquid.conductivity", 40, steps=60)
    typed = page.get_by_label("Medium conductivity, typed").input_value()
    # The figure's operating mark stands where the typed value says.
    mark = page.evaluate(
        """() => document.getElementById("figure-heating")._fullData
             .filter((trace) => trace.name === "operating point")[1].x[0]"""
    )
    number, unit = typed.split()
    assert mark == pytest.approx(float(number) * {"mS/m": 1, "S/m": 1000}[unit], rel=1e-6)


def test_knobs_work_from_the_keyboard(page):
    before = page.get_by_label("Frequency, typed").input_value()
    slider(page, "drive.frequency").focus()
    for _ in range(20):
        page.keyboard.press("ArrowRight")
    settled(page)
    assert page.get_by_label("Frequency, typed").input_value() != before


def test_typed_values_take_any_unit_and_are_written_the_usual_way(page):
    type_into(page, "Medium conductivity, typed", "300 uS/cm")
    type_into(page, "Gap", "0.05 mm")
    settled(page)
    assert page.get_by_label("Medium conductivity, typed").input_value() == "30 mS/m"
    assert page.get_by_label("Gap", exact=True).input_value() == "50 µm"


def test_link_gives_the_same_screen_in_a_second_clean_browser(page, new_page):
    drag(page, "liquid.conductivity", 15)
    type_into(page, "Gap", "45 um")
    settled(page)
    other = new_page()
    other.goto(page.url)
    settled(other)
    assert "#1." in page.url
    assert shown_fingerprint(other) == shown_fingerprint(page)
    assert verdict(other) == verdict(page)
    assert other.get_by_label("Gap", exact=True).input_value() == "45 µm"


def test_damaged_link_says_what_is_wrong_and_opens_what_it_can(page, new_page):
    type_into(page, "Gap", "45 um")
    settled(page)
    cut = new_page()
    cut.goto(page.url[:-40])
    settled(cut)
    assert cut.locator("#notice").is_visible()
    assert cut.get_by_label("Gap", exact=True).input_value() == "45 µm"
    nonsense = new_page()
    nonsense.goto(page.url.split("#")[0] + "#no-link-at-all")
    settled(nonsense)
    assert "could not be opened" in nonsense.locator("#notice").inner_text()
    assert "corridor" in verdict(nonsense)


def test_back_and_forward_after_share(page):
    first = shown_fingerprint(page)
    page.get_by_role("button", name="Share").click()
    type_into(page, "Gap", "45 um")
    settled(page)
    second = shown_fingerprint(page)
    page.get_by_role("button", name="Share").click()
    page.go_back()
    page.go_back()
    until_fingerprint(page, first)
    settled(page)
    page.go_forward()
    page.go_forward()
    until_fingerprint(page, second)
    settled(page)
    assert shown_fingerprint(page) == second


def test_wrong_entry_is_marked_and_nothing_is_lost(page):
    good = (verdict(page), shown_fingerprint(page), page.url)
    type_into(page, "Gap", "0 um")
    type_into(page, "Voltage, peak to peak, typed", "ten volts")
    until(page, "() => document.body.classList.contains('stale')")
    page.wait_for_timeout(600)
    gap = page.get_by_label("Gap", exact=True)
    assert gap.input_value() == "0 um"
    assert gap.get_attribute("aria-invalid") == "true"
    errors = page.locator(".mantine-InputWrapper-error").all_inner_texts()
    assert len(errors) == 2
    assert any("0.5 to 2000 µm" in error for error in errors)
    assert page.locator("#stale-label").is_visible()
    assert (verdict(page), shown_fingerprint(page), page.url) == good
    type_into(page, "Gap", "60")
    type_into(page, "Voltage, peak to peak, typed", "10")
    settled(page)
    assert page.locator(".mantine-InputWrapper-error").count() == 0
    assert not page.locator("#stale-label").is_visible()
    assert shown_fingerprint(page) == good[1]


def test_wrong_entry_in_a_folded_part_is_unfolded(page):
    page.locator("#section-limits > summary").click()
    type_into(page, "Temperature rise", "-3 K")
    until(page, "() => document.body.classList.contains('stale')")
    page.locator("#section-limits > summary").click()
    type_into(page, "Gap", "1 kg")
    until(page, "() => document.querySelector('#section-limits').open")
    assert page.locator(".mantine-InputWrapper-error").count() == 2


def test_every_demo_opens_from_the_list(page):
    for path in sorted(DEMO_PROFILES.glob("*.toml")):
        design = load_profile(path)
        page.locator("#profile").click()
        page.get_by_role("option", name=design.title).click()
        until_fingerprint(page, fingerprint(design))
        settled(page)


def test_another_layout_keeps_what_both_have(page):
    type_into(page, "Gap", "52 um")
    settled(page)
    before = shown_fingerprint(page)
    for layout in ("facing bars", "bars under plate", "coplanar bars"):
        page.get_by_label("Layout", exact=True).first.click()
        page.get_by_role("option", name=layout).click()
        until(page, f"() => document.getElementById('summary-chip').textContent === '{layout}'")
        settled(page)
        assert page.get_by_label("Gap", exact=True).input_value() == "52 µm"
        assert "orridor" in verdict(page) or "No voltage" in verdict(page)
    assert shown_fingerprint(page) == before


def test_saved_file_opens_again(page, tmp_path):
    drag(page, "drive.voltage", 20)
    with page.expect_download() as download:
        page.get_by_role("button", name="Save file").click()
    saved = tmp_path / "saved.toml"
    download.value.save_as(saved)
    assert fingerprint(load_profile(saved)) == shown_fingerprint(page)
    wanted = shown_fingerprint(page)
    drag(page, "drive.voltage", 30)
    page.locator("#upload input[type=file]").set_input_files(saved)
    until_fingerprint(page, wanted)


def test_bad_file_is_told_and_the_screen_stays(page, tmp_path):
    bad = tmp_path / "bad.toml"
    bad.write_text("this is no profile")
    before = shown_fingerprint(page)
    page.locator("#upload input[type=file]").set_input_files(bad)
    until(page, "() => !document.getElementById('notice').hidden")
    assert "TOML" in page.locator("#notice").inner_text()
    settled(page)
    assert shown_fingerprint(page) == before


@pytest.mark.parametrize("name", FIGURES)
def test_figures_save_as_pictures_with_a_caption(page, name):
    for kind in ("svg", "png"):
        with page.expect_download() as download:
            page.locator(f'button.export[data-figure="{name}"][data-format="{kind}"]').click()
        content = Path(download.value.path()).read_bytes()
        if kind == "svg":
            text = content.decode()
            assert shown_fingerprint(page) in text
            assert "Slackwater 0" in text
            width = float(re.search(r'width="([\d.]+)"', text)[1])
        else:
            assert content.startswith(b"\x89PNG")
            assert int.from_bytes(content[16:20], "big") == 2 * round(width)


def test_title_with_markup_stays_plain_text(page):
    type_into(page, "Title of the design", "<b>a</b> & <i>b</i>")
    settled(page)
    with page.expect_download() as download:
        page.locator('button.export[data-figure="corridor"][data-format="svg"]').click()
    picture = ElementTree.parse(Path(download.value.path()))
    assert "<b>a</b> & <i>b</i>" in "".join(picture.getroot().itertext())


def test_sketch_is_the_picture_that_the_full_drawing_gives(page):
    """What is moved while a knob moves must lie where a full redraw puts it, to a pixel."""
    boxes = """(name) => {
      const place = document.getElementById("figure-" + name);
      return place._fullData.map((trace) => {
        const group = place.querySelector(".trace" + trace.uid);
        const found = [...group.querySelectorAll("path.js-line, path.point, text")]
          .map((part) => part.getBoundingClientRect()).filter((box) => box.width + box.height > 0);
        const inside = (value) => Math.min(Math.max(value, 0), window.innerHeight);
        const edge = (pick, side) => pick(...found.map((box) => box[side]));
        return [edge(Math.min, "left"), edge(Math.max, "right"),
          inside(edge(Math.min, "top")), inside(edge(Math.max, "bottom"))]
          .map((value) => Number.isFinite(value) ? value : -1);
      });
    }"""
    slider(page, "liquid.conductivity").focus()
    for _ in range(6):
        page.keyboard.press("ArrowRight")
    until(page, "() => Object.values(window.slackwater.figures).some((f) => f.sketched)")
    until(page, "() => window.slackwater.shown === window.slackwater.gate.number")
    sketched = {name: page.evaluate(boxes, name) for name in FIGURES}
    settled(page)
    for name in FIGURES:
        full = page.evaluate(boxes, name)
        assert len(full) == len(sketched[name])
        for here, there in zip(full, sketched[name], strict=True):
            assert here == pytest.approx(there, abs=1.0)


def test_click_in_the_corridor_moves_the_operating_point(page):
    box = page.locator("#figure-corridor .nsewdrag").first.bounding_box()
    page.mouse.click(box["x"] + 0.7 * box["width"], box["y"] + 0.35 * box["height"])
    settled(page)
    frequency = page.get_by_label("Frequency, typed").input_value()
    # 70 % of the way from 1 kHz to 100 MHz on a logarithmic axis is 10^6.5 Hz.
    assert frequency.endswith("MHz")
    assert float(frequency.split()[0]) == pytest.approx(3.16, rel=0.03)


def test_best_point_and_the_map_move_the_knobs(page):
    before = verdict(page)
    page.get_by_role("button", name="Best point here").click()
    settled(page)
    assert "1.3" in verdict(page)
    assert verdict(page) != before
    box = page.locator("#figure-headroom").bounding_box()
    page.mouse.click(box["x"] + 0.5 * box["width"], box["y"] + 0.55 * box["height"])
    settled(page)
    assert float(slider(page, "liquid.conductivity").input_value()) < -2.0
    until(page, "() => document.querySelectorAll('#sensitivity li').length > 3")


def test_appearance_is_kept_and_figures_follow(page):
    page.get_by_label("Dark").click(force=True)
    settled(page)
    paper = "() => document.getElementById('figure-corridor')._fullLayout.paper_bgcolor"
    dark = page.evaluate(paper)
    page.reload()
    settled(page)
    assert page.evaluate(paper) == dark != "#ffffff"


@pytest.mark.parametrize("appearance", ["light", "dark"])
def test_accessible_to_screen_readers_and_weak_eyes(new_page, address, appearance):
    """axe-core's rules for WCAG 2.2 A and AA."""
    page = new_page(color_scheme=appearance, bypass_csp=True)
    page.goto(address)
    settled(page)
    options = {"runOnly": ["wcag2a", "wcag2aa", "wcag21a", "wcag21aa", "wcag22aa"]}
    results = Axe().run(page, options=options)
    assert results.violations_count == 0, results.generate_report()


def test_no_figure_offers_to_send_itself_anywhere(page):
    for name in FIGURES:
        context = page.evaluate(
            f"() => {{ const c = document.getElementById('figure-{name}')._context;"
            " return [c.showSendToCloud, c.displaylogo, c.displayModeBar]; }"
        )
        assert context == [False, False, False]


def test_lost_server_is_told_and_asked_again(page, watch):
    page.route("**/answer/**", lambda route: route.abort())
    drag_without_answer(page)
    until(page, "() => !document.getElementById('lost').hidden")
    page.unroute("**/answer/**")
    until(page, "() => document.getElementById('lost').hidden")
    settled(page)
    watch.faults = [fault for fault in watch.faults if "ERR_FAILED" not in fault]


def drag_without_answer(page) -> None:
    slider(page, "drive.voltage").focus()
    page.keyboard.press("ArrowRight")


def test_chip_change_shows_that_it_is_busy(page):
    network = page.context.new_cdp_session(page)
    slow = {"offline": False, "latency": 900, "downloadThroughput": -1, "uploadThroughput": -1}
    network.send("Network.enable")
    network.send("Network.emulateNetworkConditions", slow)
    type_into(page, "Gap", "47 um")
    until(page, "() => document.body.classList.contains('busy')")
    network.send("Network.emulateNetworkConditions", {**slow, "latency": 0})
    settled(page)
    assert not page.evaluate("() => document.body.classList.contains('busy')")


def test_a_control_shows_where_it_matters(page):
    """The coefficient of an outside that is told by it, and not of one that is held."""
    coefficient = page.get_by_label("Heat-transfer coefficient", exact=True).first
    assert coefficient.is_hidden()
    page.get_by_label("Outside", exact=True).first.click()
    page.locator("[role=option]:visible", has_text="coefficient").first.click()
    until(
        page, "() => document.querySelector('[data-only=\"chip.floor.outside\"]').hidden === false"
    )
    assert coefficient.is_visible()
