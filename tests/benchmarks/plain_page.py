"""The home figures on a page of ordinary callbacks: no gate, figures of the drawing library.

What the dashboard's own page is measured against. Each move of the knob starts a callback that
evaluates the design and returns every figure as a ``go.Figure``.
"""

import plotly.graph_objects as go
from dash import Dash, Input, Output, dcc, html

from model.design import Design
from model.evaluate import evaluate
from webapp.cache import ChipCache
from webapp.figures.theme import THEMES
from webapp.services import SCREEN_POINTS
from webapp.views.corridor import corridor_part

#: Figures of the home view.
FIGURES = ("corridor", "headroom", "force", "heating", "electrothermal")
#: Moves the knob `count` times, every `pause` ms, and gives the ms from each move that was drawn to
#: its figures; each figure carries the knob's value, by which its age is told. With the moves of a
#: drag the page shows nothing until most of the answers have come.
MOVE = """([names, count, pause, low, high]) => new Promise((done) => {
  const asked = new Map(), seen = new Map(), times = [];
  const plot = (name) => document.querySelector("#" + name + " .js-plotly-plot");
  const drawn = (name) => {
    const value = plot(name).layout.meta;
    seen.set(name, value);
    if (asked.has(value) && names.every((other) => seen.get(other) === value)) {
      times.push(performance.now() - asked.get(value));
      if (value === last) done(times);
    }
  };
  for (const name of names) plot(name).on("plotly_afterplot", () => drawn(name));
  let last = NaN, step = 0;
  const move = () => {
    step += 1;
    const value = Number((low + (high - low) * step / count).toFixed(6));
    if (step === count) last = value;
    asked.set(value, performance.now());
    window.dash_clientside.set_props("knob", { value });
    if (step < count) setTimeout(move, pause);
  };
  move();
})"""


def plain_page(design: Design, chips: ChipCache) -> Dash:
    """A page with one knob, the voltage, and the home figures."""
    app = Dash("plain")
    graphs = [dcc.Graph(id=name, style={"height": 300}) for name in FIGURES]
    app.layout = html.Div([dcc.Input(id="knob", type="number", value=10.0), *graphs])

    @app.callback([Output(name, "figure") for name in FIGURES], Input("knob", "value"))
    def draw(value: float) -> list[go.Figure]:
        drive = design.drive.model_copy(update={"voltage": value})
        there = design.model_copy(update={"drive": drive})
        result = evaluate(there, chips.patterns(there), points=SCREEN_POINTS)
        found = corridor_part(result, THEMES["light"])["figures"]
        figures = [go.Figure(found[name]) for name in FIGURES]
        for figure in figures:
            figure.update_layout(meta=value)
        return figures

    return app
