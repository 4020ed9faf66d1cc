"""Callbacks of the page itself: open a design, read the controls, save a file."""

import base64
import binascii
import re
from typing import Any

from dash import ALL, ClientsideFunction, Dash, Input, Output, State, ctx, no_update
from dash.exceptions import PreventUpdate

from model.errors import DesignError
from model.profile import document, profile_text
from webapp.answer import knobs
from webapp.controls import control_id, inputs_panel
from webapp.edits import Edited, open_edit
from webapp.services import Services
from webapp.state import Opened, design_of, open_file, open_link, read_request


def register(app: Dash, services: Services) -> None:
    """Register the page's callbacks."""
    starts = {key: entry.particle_document() for key, entry in services.library.items()}

    @app.callback(
        Output("inputs", "children"),
        Output("document", "data"),
        Output(control_id("title"), "value"),
        Output(control_id("drive.frequency"), "value"),
        Output(control_id("drive.voltage"), "value"),
        Output(control_id("liquid.conductivity"), "value"),
        Output("upload", "contents"),
        Output("profile", "value"),
        Input("address", "data"),
        Input("upload", "contents"),
        Input("profile", "value"),
        Input("edit-request", "data"),
        prevent_initial_call=True,
    )
    def open_design(address: Any, upload: Any, profile: Any, edit: Any) -> tuple[Any, ...]:
        source = str(ctx.triggered_id)
        if (source == "upload" and not upload) or (source == "profile" and not profile):
            raise PreventUpdate  # only emptied, so that the same one can be picked again
        if source == "edit-request":
            return (*hydrated(*open_edit(edit, services.first, starts)), None, None)
        opened = opened_from(services, source, address, upload, profile)
        return (*hydrated(opened), None, None)

    @app.callback(
        Output("download", "data"),
        Input("save-request", "data"),
        prevent_initial_call=True,
    )
    def save(data: Any) -> Any:
        try:
            design = design_of(read_request(data))
        except DesignError:
            return no_update  # the marked controls already say why
        return {"content": profile_text(design), "filename": f"{file_stem(design.title)}.toml"}

    _browser_side(app)


def _browser_side(app: Dash) -> None:
    """Wire the page's own scripts: they gather, gate and draw, and know no physics."""

    def wire(name: str, *wires: Input | Output | State) -> None:
        app.clientside_callback(ClientsideFunction("slackwater", name), *wires)

    wire("start", Output("address", "data"), Input("theme", "id"))
    wire(
        "controls",
        Input({"field": ALL}, "value"),
        Input({"flag": ALL}, "checked"),
        Input("document", "data"),
        State({"field": ALL}, "id"),
        State({"flag": ALL}, "id"),
    )
    wire("save", Output("save-request", "data"), Input("save", "n_clicks"))
    turned = Input({"turn": ALL}, "value"), State({"turn": ALL}, "id")
    wire("turn", *turned, State("document", "data"))
    wire("map", Input("map-upload", "contents"), State("map-upload", "filename"))
    wire("share", Input("share", "n_clicks"))
    wire("dark", Input("dark", "checked"))


def opened_from(services: Services, source: str, address: Any, upload: Any, profile: Any) -> Opened:
    """Open what was asked for: a link, an uploaded file, or a profile by name."""
    first = services.first
    if source == "upload" and isinstance(upload, str):
        try:
            content = base64.b64decode(upload.partition(",")[2], validate=True)
        except (binascii.Error, ValueError):
            return Opened(first, ("The file did not arrive whole.",))
        return open_file(content, first)
    if source == "profile":
        return Opened(services.profiles.get(str(profile), first))
    link = address.get("link") if isinstance(address, dict) else None
    if isinstance(link, str) and link.strip("#"):
        return open_link(link, first)
    return Opened(first)


def hydrated(opened: Opened, edit: Edited | None = None) -> tuple[Any, ...]:
    """Controls and document of a design that was opened, by an edit if there is one."""
    found = knobs(opened.design)  # exact texts, so that opening a design changes nothing in it
    data: dict[str, Any] = {
        "profile": document(opened.design),
        "problems": list(opened.problems),
        "edit": edit and {"place": edit.place, "items": edit.items, "order": edit.order},
    }
    return (
        inputs_panel(opened.design),
        data,
        opened.design.title,
        found["drive.frequency"]["text"],
        found["drive.voltage"]["text"],
        found["liquid.conductivity"]["text"],
    )


def file_stem(title: str) -> str:
    """Turn a title into a file name.

    >>> file_stem("Rinse water, viable yeast"), file_stem("水")
    ('rinse-water-viable-yeast', 'design')
    """
    return re.sub("[^a-z0-9]+", "-", title.lower()).strip("-") or "design"
