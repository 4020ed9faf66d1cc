"""From a moved knob to drawn figures in Chromium, while a hand drags for three seconds.

Beside it, in the same run, a page of ordinary callbacks with the same figures.
"""

import math
import shutil
import statistics
import tempfile
import threading
import time
from pathlib import Path

from dash import Dash
from flask import Flask
from flask_caching import Cache
from playwright.sync_api import Browser, Page, sync_playwright
from waitress.server import create_server

from model.profile import load_profile
from tests.benchmarks.plain_page import FIGURES, MOVE, plain_page
from webapp.app import Settings, make_app
from webapp.cache import ChipCache, settings
from webapp.services import DEMO_PROFILES, FIRST_PROFILE

DRAG_SECONDS = 3.0
_LISTEN = """() => {
  window.times = [];
  document.addEventListener("slackwater-drawn", (event) =>
    window.times.push(performance.now() - event.detail.since));
}"""


def drag(page: Page, path: str) -> list[float]:
    """Drag one knob to and fro; milliseconds from each change to its drawn figures."""
    knob = page.locator(f'[data-knob="{path}"] input')
    box = knob.bounding_box()
    if box is None:
        raise LookupError(f"the knob of {path} is not on the page")
    value, low, high = (float(knob.evaluate(f"e => e.{key}")) for key in ("value", "min", "max"))
    x = box["x"] + 9 + (box["width"] - 18) * (value - low) / (high - low)
    y = box["y"] + box["height"] / 2
    page.evaluate("() => { window.times = []; }")
    page.mouse.move(x, y)
    page.mouse.down()
    start, step = time.monotonic(), 0
    while time.monotonic() - start < DRAG_SECONDS:
        step += 1
        page.mouse.move(x + 25 * math.sin(step / 12), y)
        page.wait_for_timeout(16)
    page.mouse.up()
    page.wait_for_timeout(1000)
    return sorted(page.evaluate("() => window.times"))


def told(times: list[float]) -> tuple[float, float]:
    """Median and 95th percentile."""
    return statistics.median(times), times[min(len(times) - 1, math.ceil(0.95 * len(times)) - 1)]


def served(app: Dash) -> str:
    """Serve an app for as long as this process lives, and give its address."""
    server = create_server(app.server, host="127.0.0.1", port=0, threads=8)
    threading.Thread(target=server.run, daemon=True).start()
    return f"http://127.0.0.1:{server.effective_port}/"


def main() -> None:
    """Print p50 and p95 for each knob, and those of the plain page."""
    path = next(filter(None, map(shutil.which, ("chromium", "chromium-browser", "google-chrome"))))
    with tempfile.TemporaryDirectory() as folder, sync_playwright() as playwright:
        flags = ["--no-sandbox", "--disable-gpu", "--disable-background-networking"]
        browser = playwright.chromium.launch(executable_path=path, args=flags)
        page = browser.new_page(viewport={"width": 1440, "height": 900})
        page.goto(served(make_app(Settings(cache_folder=Path(folder)))))
        while not page.evaluate("() => Boolean(window.slackwater?.shown)"):
            page.wait_for_timeout(50)
        page.wait_for_timeout(1500)
        page.evaluate(_LISTEN)
        ours = {}
        for knob in ("drive.frequency", "drive.voltage", "liquid.conductivity"):
            times = drag(page, knob)
            ours[knob] = told(times)
            _print(knob, times)
        page.close()
        single, dragged = _plain(browser, Path(folder))
        _print("plain page, one move", single)
        _print("plain page, dragged", dragged)
        ratios = [
            one / other for one, other in zip(told(single), ours["drive.voltage"], strict=True)
        ]
        print(
            "plain page's single moves over ours in a drag: p50 {:.1f}, p95 {:.1f}".format(*ratios)
        )
        browser.close()


def _plain(browser: Browser, folder: Path) -> tuple[list[float], list[float]]:
    """Times of the plain page: moved now and then, and as fast as a hand drags."""
    design = load_profile(DEMO_PROFILES / f"{FIRST_PROFILE}.toml")
    flask = Flask("plain")
    chips = ChipCache(Cache(flask, config=settings(folder)), folder)
    chips.patterns(design)
    page = browser.new_page(viewport={"width": 1440, "height": 900})
    page.goto(served(plain_page(design, chips)))
    there = f"() => document.querySelectorAll('.js-plotly-plot').length === {len(FIGURES)}"
    page.wait_for_function(there)
    page.wait_for_timeout(2500)
    names = list(FIGURES)
    single = page.evaluate(MOVE, [names, 12, 1500, 5.0, 9.0])
    dragged = page.evaluate(MOVE, [names, round(DRAG_SECONDS / 0.016), 16, 9.1, 15.0])
    page.close()
    return sorted(single), sorted(dragged)


def _print(name: str, times: list[float]) -> None:
    half, late = told(times)
    print(f"{name:22} p50 {half:7.1f} ms   p95 {late:7.1f} ms   {len(times)} updates")


if __name__ == "__main__":
    main()
