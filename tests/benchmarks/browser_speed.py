"""From a moved knob to drawn figures in Chromium, while a hand drags for three seconds."""

import math
import shutil
import statistics
import tempfile
import threading
import time
from pathlib import Path

from playwright.sync_api import Page, sync_playwright
from waitress.server import create_server

from webapp.app import Settings, make_app

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


def main() -> None:
    """Print p50 and p95 for each knob."""
    path = next(filter(None, map(shutil.which, ("chromium", "chromium-browser", "google-chrome"))))
    with tempfile.TemporaryDirectory() as folder:
        app = make_app(Settings(cache_folder=Path(folder)))
        server = create_server(app.server, host="127.0.0.1", port=0, threads=8)
        threading.Thread(target=server.run, daemon=True).start()
        with sync_playwright() as playwright:
            flags = ["--no-sandbox", "--disable-gpu", "--disable-background-networking"]
            browser = playwright.chromium.launch(executable_path=path, args=flags)
            page = browser.new_page(viewport={"width": 1440, "height": 900})
            page.goto(f"http://127.0.0.1:{server.effective_port}/")
            while not page.evaluate("() => Boolean(window.slackwater?.shown)"):
                page.wait_for_timeout(50)
            page.wait_for_timeout(1500)
            page.evaluate(_LISTEN)
            for knob in ("drive.frequency", "drive.voltage", "liquid.conductivity"):
                times = drag(page, knob)
                late = times[min(len(times) - 1, math.ceil(0.95 * len(times)) - 1)]
                print(
                    f"{knob:22} p50 {statistics.median(times):6.1f} ms   p95 {late:6.1f} ms   "
                    f"{len(times)} updates in {DRAG_SECONDS:.0f} s"
                )
            browser.close()
        server.close()


if __name__ == "__main__":
    main()
