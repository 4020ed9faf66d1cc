"""A served dashboard and a real Chromium, watched: any console error or outside request fails."""

import shutil
import threading
from collections.abc import Callable, Iterator
from dataclasses import dataclass, field
from urllib.parse import urlsplit

import pytest
from playwright.sync_api import Browser, BrowserContext, Page, sync_playwright
from waitress.server import create_server

from webapp.app import Settings, make_app

_NAMES = ("chromium", "chromium-browser", "google-chrome", "google-chrome-stable")
_FLAGS = ["--no-sandbox", "--disable-gpu", "--disable-background-networking", "--disable-quic"]
SIZE = {"width": 1440, "height": 1400}

#: Edges of what each trace of a figure shows, in pixels; −1 where it shows nothing.
EDGES = """(name) => {
  const place = document.getElementById("figure-" + name);
  return place._fullData.map((trace) => {
    const group = place.querySelector(".trace" + trace.uid);
    const parts = "path.js-line, path.js-fill, path.point, text";
    const found = group ? [...group.querySelectorAll(parts)]
      .map((part) => part.getBoundingClientRect()).filter((box) => box.width + box.height > 0)
      : [];
    const edge = (pick, side) => pick(...found.map((box) => box[side]));
    return [edge(Math.min, "left"), edge(Math.max, "right"), edge(Math.min, "top"),
      edge(Math.max, "bottom")].map((value) => Number.isFinite(value) ? value : -1);
  });
}"""


@pytest.fixture(scope="session")
def address(tmp_path_factory) -> Iterator[str]:
    """Address of a dashboard served by the production server on a free port."""
    app = make_app(Settings(cache_folder=tmp_path_factory.mktemp("cache")))
    server = create_server(app.server, host="127.0.0.1", port=0, threads=8)
    thread = threading.Thread(target=server.run, daemon=True)
    thread.start()
    yield f"http://127.0.0.1:{server.effective_port}/"
    server.close()
    thread.join(timeout=10)


@pytest.fixture(scope="session")
def chromium() -> Iterator[Browser]:
    """The system's Chromium."""
    path = next(filter(None, map(shutil.which, _NAMES)), None)
    if path is None:
        pytest.fail("no Chromium found; install it, e.g. apt-get install chromium (see README.md)")
    with sync_playwright() as playwright:
        browser = playwright.chromium.launch(executable_path=path, args=_FLAGS)
        yield browser
        browser.close()


@dataclass
class Watch:
    """What a page did that it should not."""

    home: str
    faults: list[str] = field(default_factory=list)

    def over(self, page: Page) -> None:
        """Note console errors, page errors and requests to anywhere else."""
        page.on("console", self._console)
        page.on("pageerror", lambda error: self.faults.append(f"page error: {error}"))
        page.on("request", lambda request: self._request(request.url))

    def _console(self, message) -> None:
        if message.type in ("error", "warning"):
            self.faults.append(f"console {message.type}: {message.text}")

    def _request(self, url: str) -> None:
        parts = urlsplit(url)
        if parts.scheme not in ("data", "blob") and parts.netloc != urlsplit(self.home).netloc:
            self.faults.append(f"outside request: {url}")


@pytest.fixture
def watch(address) -> Iterator[Watch]:
    """Fails the test at its end if a page misbehaved."""
    found = Watch(address)
    yield found
    assert not found.faults


@pytest.fixture
def new_page(chromium, watch) -> Iterator[Callable[..., Page]]:
    """Makes pages, each in a clean browser profile of its own."""
    contexts: list[BrowserContext] = []

    def make(**options) -> Page:
        context = chromium.new_context(viewport=SIZE, **options)
        contexts.append(context)
        page = context.new_page()
        watch.over(page)
        return page

    yield make
    for context in contexts:
        context.close()


@pytest.fixture
def page(new_page, address) -> Page:
    """The dashboard, opened and drawn."""
    opened = new_page()
    opened.goto(address)
    settled(opened)
    return opened


def settled(page: Page) -> None:
    """Wait until the answer to the newest values is drawn in full."""
    until(
        page,
        """() => {
          const page = window.slackwater;
          if (!page || !page.gate || !page.shown || page.gate.moving()) return false;
          const stale = document.body.classList.contains("stale");
          return (stale || page.shown === page.gate.number)
            && !Object.values(page.figures).some((figure) => figure.sketched);
        }""",
    )
    page.wait_for_timeout(450)  # the address and typed texts follow when the hand has rested


def until(page: Page, condition: str, patience: float = 20.0) -> None:
    """Wait for a condition without evaluating text in the page, which its policy forbids."""
    for _ in range(int(patience / 0.05)):
        if page.evaluate(condition):
            return
        page.wait_for_timeout(50)
    pytest.fail(f"the page never came to: {condition}")
