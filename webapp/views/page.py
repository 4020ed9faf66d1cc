"""The page: header, operating strip, inputs and the view. Laid out once, never rebuilt."""

from typing import Any

import dash_mantine_components as dmc
from dash import dcc, html
from dash.development.base_component import Component

from model.design import Design
from webapp.controls import HIDDEN, control_id
from webapp.views.corridor import corridor_view
from webapp.views.library import library_dialog
from webapp.views.polarisation import polarisation_view
from webapp.views.section import section_view

#: Views in the order of their tabs: name in a request, word on the tab, what lays it out.
TABS = (
    ("corridor", "Corridor", corridor_view),
    ("polarisation", "Polarisation", polarisation_view),
    ("section", "Section", section_view),
)

#: Accent of the controls, ten shades from light to dark.
_TEAL = [
    "#e7f6f4", "#cfeae6", "#a3d6cf", "#73c1b7", "#4aad9f", "#2c9a8c", "#0f766e", "#0c645d",
    "#09524c", "#06403b",
]  # fmt: skip

#: Greys of the dark appearance, light to dark.
_SLATE = [
    "#e8edf2", "#c3ced8", "#a3b0bd", "#7c8a98", "#4b5966", "#3a4753", "#202a34", "#1a222b",
    "#161d25", "#0f151b",
]  # fmt: skip


def page(profiles: dict[str, Design]) -> Component:
    """The whole page, empty of results; the browser then asks for what its address holds."""
    stores = [
        dcc.Store(id=name) for name in ("address", "document", "save-request", "edit-request")
    ]
    return dmc.MantineProvider(
        id="appearance",
        forceColorScheme="light",
        theme={
            "primaryColor": "teal",
            "primaryShade": 6,
            "colors": {"teal": _TEAL, "dark": _SLATE},
            "fontFamily": "system-ui, 'Segoe UI', 'DejaVu Sans', sans-serif",
            "defaultRadius": "sm",
        },
        children=html.Div(
            [
                *stores,
                dcc.Store(id="theme"),
                dcc.Download(id="download"),
                html.Div(
                    "The server does not answer. Nothing is lost; it is asked again at the "
                    "next change.",
                    id="lost",
                    role="alert",
                    hidden=True,
                ),
                html.Div(id="toast", role="status"),
                library_dialog(),
                _header(profiles),
                _strip(),
                _tabs(),
                _inputs(),
                html.Main(
                    [
                        html.Div(id="notice", role="status", hidden=True),
                        html.Div(
                            "Last good result. Correct the marked entries to go on.",
                            id="stale-label",
                            role="status",
                            hidden=True,
                        ),
                        *_panels(),
                        _footer(),
                    ],
                    id="view",
                ),
            ],
            id="page",
        ),
    )


def _header(profiles: dict[str, Design]) -> Component:
    logo = html.Div([html.Span(), html.Span()], className="logo", **HIDDEN)
    options = [{"value": key, "label": design.title} for key, design in profiles.items()]
    return html.Header(
        [
            logo,
            html.H1("Slackwater"),
            dmc.TextInput(
                id=control_id("title"),
                **{"aria-label": "Title of the design"},
                debounce=True,
                size="sm",
                className="title",
            ),
            html.Code(id="fingerprint", title="Fingerprint of the inputs"),
            html.Div(className="spring"),
            dmc.Select(
                id="profile",
                data=options,
                placeholder="Open a demo",
                **{"aria-label": "Open a demo profile"},
                size="sm",
                className="demo",
                allowDeselect=False,
                comboboxProps={"width": 320, "position": "bottom-end"},
            ),
            dcc.Upload(
                dmc.Button("Open file", variant="default", size="sm", id="open"),
                id="upload",
                accept=".toml",
                max_size=256 * 1024,
            ),
            dmc.Button("Save file", id="save", variant="default", size="sm"),
            dmc.Button("Share", id="share", variant="filled", size="sm"),
            dmc.Switch(id="dark", label="Dark", size="sm"),
        ]
    )


def _strip() -> Component:
    return html.Section(
        [
            _knob("Frequency", "drive.frequency", "Hz", (3.0, 8.0, 0.005), "log"),
            _knob("Voltage, peak to peak", "drive.voltage", "V", (0.0, 30.0, 0.05), "linear"),
            _knob("Medium conductivity", "liquid.conductivity", "S/m", (-4.0, 0.5, 0.005), "log"),
            html.Div(
                [
                    html.Div(
                        [html.Strong(id="verdict-headline"), html.Span(id="verdict-sentence")],
                        id="verdict",
                        role="status",
                    ),
                    html.Button(id="heed", hidden=True, title="Read them below the figures"),
                ],
                className="verdict-place",
            ),
        ],
        className="strip",
        **_named("Operating point"),
    )


def _knob(
    label: str, path: str, unit: str, reach: tuple[float, float, float], scale: str
) -> Component:
    """One live knob: typed value, a place for its slider, and a quiet note with other units."""
    low, high, step = reach
    data: dict[str, Any] = {
        "data-knob": path,
        "data-label": label,
        "data-unit": unit,
        "data-low": low,
        "data-high": high,
        "data-step": step,
        "data-scale": scale,
    }
    typed = dmc.TextInput(
        id=control_id(path),
        **{"aria-label": f"{label}, typed"},
        debounce=True,
        size="sm",
        className="typed",
    )
    return html.Div(
        [
            html.Div([html.Span(label, className="knob-label"), typed], className="knob-head"),
            html.Div(className="slider", **data),
            html.Span(className="knob-note"),
        ],
        className="knob",
    )


def _tabs() -> Component:
    """One tab for each view; the page's script moves between them."""
    tabs = []
    for index, (name, word, _) in enumerate(TABS):
        data: dict[str, Any] = {
            "data-view": name,
            "aria-controls": f"view-{name}",
            "aria-selected": "true" if index == 0 else "false",
        }
        tabs.append(
            html.Button(
                word, id=f"tab-{name}", role="tab", tabIndex=0 if index == 0 else -1, **data
            )
        )
    return html.Nav(html.Div(tabs, role="tablist", **_named("Views")), className="tabs")


def _panels() -> list[Component]:
    """What the tabs show; all but the first are hidden at first."""
    panels: list[Component] = []
    for index, (name, _, view) in enumerate(TABS):
        attributes: dict[str, Any] = {"role": "tabpanel", "aria-labelledby": f"tab-{name}"}
        content = view()
        panels.append(
            html.Div(content, id=f"view-{name}", className="panel", hidden=index > 0, **attributes)
        )
    return panels


def _inputs() -> Component:
    return html.Aside(
        [
            html.Div(id="inputs"),
            html.Div(id="help", **HIDDEN),
        ],
        id="inputs-side",
        **_named("Inputs"),
    )


def _footer() -> Component:
    return html.Footer([html.Ul(id="notes"), html.Ul(id="cautions")])


def _named(name: str) -> dict[str, Any]:
    """Attributes of a part that screen readers call by a name."""
    return {"aria-label": name}
