"""Makes the web application: page, callbacks, cache, headers, compression."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import partial
from pathlib import Path
from typing import Any, cast

from dash import Dash
from flask import Flask, Response, jsonify, request
from flask_caching import Cache
from flask_compress import Compress
from werkzeug.exceptions import MethodNotAllowed

from model.files import either
from model.library import load_library
from webapp import callbacks
from webapp.answer import answer, spectra
from webapp.cache import ChipCache, Solver, default_folder, settings, solve
from webapp.services import DEMO_PROFILES, Services, files_of, load_profiles
from webapp.state import BadRequestError
from webapp.uploads import Uploads, take_uploads
from webapp.views import VIEWS
from webapp.views.library import library_list
from webapp.views.page import page

#: Largest request that is read; a profile is far smaller.
MAX_REQUEST = 1024 * 1024


@dataclass(frozen=True)
class Settings:
    """What a deployment may choose.

    Parameters
    ----------
    profiles
        Folder of profiles offered under "Open a demo".
    first
        Profile shown to a visitor without a link, instead of the folder's first.
    library
        File of particles that are offered beside the published ones.
    cache_folder
        Private folder for solved chips; by default one of this user's.
    solver
        Solves a design's chip instead of the model, in tests.
    """

    profiles: Path = DEMO_PROFILES
    first: Path | None = None
    library: Path | None = None
    cache_folder: Path | None = None
    solver: Solver | None = None


def make_app(chosen: Settings | None = None) -> Dash:
    """Make the application, ready to serve.

    Raises
    ------
    DesignError, FileNotFoundError
        If a profile of the folder is bad, or there is none, or the file of particles is bad.
    """
    chosen = chosen or Settings()
    folder = chosen.cache_folder or default_folder()
    server = Flask("slackwater")
    server.config.update(MAX_CONTENT_LENGTH=MAX_REQUEST, COMPRESS_MIMETYPES=_COMPRESSED)
    Compress(server)
    uploads = Uploads(folder / "maps")
    profiles = load_profiles(chosen.profiles, chosen.first)
    folders = [chosen.profiles, *([chosen.first.parent] if chosen.first else [])]
    files = either(files_of(profiles, folders), uploads)
    solver = chosen.solver or partial(solve, files=files)
    chips = ChipCache(Cache(server, config=settings(folder)), folder, solver)
    services = Services(chips, profiles, load_library(chosen.library))

    app = Dash(
        "slackwater",
        server=cast(Any, server),  # the parameter's type forgets the servers that it takes
        title="Slackwater",
        suppress_callback_exceptions=True,  # controls come and go with the design
        update_title="",
        assets_folder=str(Path(__file__).parent / "assets"),
        serve_locally=True,
        meta_tags=[{"name": "viewport", "content": "width=device-width, initial-scale=1"}],
    )
    app.index_string = _INDEX
    app.layout = page(services.profiles)
    callbacks.register(app, services)
    _answers(server, services)
    take_uploads(server, uploads)
    _guard(server, app)
    # Bundles can answer 500 while several threads make the first page together, so one
    # visitor goes through the door before it opens.
    with server.test_client() as client:
        client.get("/")
        client.get("/_dash-layout")
        client.get("/_dash-dependencies")
    return app


#: Where the framework takes calls of its callbacks.
_CALLBACK = "/_dash-update-component"
_COMPRESSED = [
    "text/html", "text/css", "text/javascript", "application/javascript", "application/json",
]  # fmt: skip
_INDEX = """<!DOCTYPE html>
<html lang="en">
<head>
{%metas%}
<title>{%title%}</title>
{%favicon%}
{%css%}
</head>
<body>
{%app_entry%}
<footer id="dash-scripts">
{%config%}
{%scripts%}
{%renderer%}
</footer>
</body>
</html>"""


def _answers(server: Flask, services: Services) -> None:
    """Answer the page's requests for the visible view, and for the library of particles.

    A plain route and no framework callback: the page asks many times a second while a knob moves,
    and the framework's bookkeeping in the browser costs more than the answer (see DEVELOPERS.md).
    """

    # GET is taken and refused here: the framework would answer it with the page itself.
    @server.route("/answer/<view>", methods=["GET", "POST"])
    def answer_view(view: str) -> Any:
        if request.method != "POST":
            raise MethodNotAllowed(["POST"])
        if view not in VIEWS:
            raise BadRequestError("no such view")
        return jsonify(answer(_sent(), services, VIEWS[view]))

    @server.route("/spectra", methods=["GET", "POST"])
    def answer_spectra() -> Any:
        if request.method != "POST":
            raise MethodNotAllowed(["POST"])
        return jsonify(spectra(_sent(), services))

    listed = library_list(services.library.values())

    @server.get("/library")
    def library() -> Any:
        return jsonify(listed)


def _sent() -> Any:
    """Read the request's plain data; None if it is none."""
    try:
        return request.get_json(silent=True)
    except RecursionError:
        raise BadRequestError("nested too deep") from None


def _calls(sent: Any, callbacks: Mapping[str, Mapping[str, Any]]) -> bool:
    """Whether a request of the framework names a callback of this page and what it takes.

    The framework checks nothing of it and fails on anything else.
    """
    if not isinstance(sent, dict) or not isinstance(sent.get("output"), str):
        return False
    known = callbacks.get(sent["output"], {})
    if "callback" not in known:
        return False
    changed, outputs = sent.get("changedPropIds", []), sent.get("outputs")
    outputs = outputs if isinstance(outputs, list) else [outputs]
    names = sent["output"].strip(".").split("...")
    return (
        isinstance(changed, list)
        and all(isinstance(item, str) for item in changed)
        and all(_fits(sent.get(key, []), known[key]) for key in ("inputs", "state"))
        and len(outputs) == len(names)
        and all(map(_goes_to, outputs, names))
    )


def _goes_to(place: Any, name: str) -> bool:
    """Whether a place that a request wants filled can be the named one; a pattern has a list."""
    if not name.startswith("{"):
        return isinstance(place, dict) and isinstance(place.get("id"), str)
    return isinstance(place, list) or (
        isinstance(place, dict) and isinstance(place.get("id"), dict)
    )


def _fits(places: Any, known: Sequence[Mapping[str, Any]]) -> bool:
    """Whether the places of a request are those of the callback; a pattern has a list of them."""
    if not isinstance(places, list) or len(places) != len(known):
        return False
    return all(
        isinstance(place, list)
        if str(expected["id"]).startswith("{")
        else isinstance(place, dict)
        and (place.get("id"), place.get("property")) == (expected["id"], expected["property"])
        for place, expected in zip(places, known, strict=True)
    )


def _guard(server: Flask, app: Dash) -> None:
    """Security headers on every answer, and plain answers to what no page of ours sends."""
    script = " ".join(["'self'", *app.csp_hashes()])
    policy = (
        f"default-src 'self'; script-src {script}; style-src 'self' 'unsafe-inline'; "
        "img-src 'self' data: blob:; connect-src 'self'; object-src 'none'; "
        "base-uri 'self'; frame-ancestors 'self'"
    )

    @server.before_request
    def check() -> None:
        called = request.method == "POST" and request.path == _CALLBACK
        if called and not _calls(_sent(), app.callback_map):
            raise BadRequestError("no callback of this page")

    @server.after_request
    def protect(response: Response) -> Response:
        response.headers["Content-Security-Policy"] = policy
        response.headers["X-Content-Type-Options"] = "nosniff"
        response.headers["Referrer-Policy"] = "same-origin"
        return response

    @server.errorhandler(BadRequestError)
    def refuse(problem: BadRequestError) -> tuple[dict[str, Any], int]:
        return {"error": str(problem)}, 400

    @server.get("/health")
    def health() -> dict[str, str]:
        return {"status": "up"}
