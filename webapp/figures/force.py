"""Force on every particle against frequency, with the drag that the task has to beat."""

from typing import Any

import numpy as np

from model.evaluate import Evaluation
from model.quantity import format_quantity, format_si
from model.verdict import format_value
from webapp.figures.curves import legend, operating_line, particle_curves, prefixed
from webapp.figures.theme import (
    Figure,
    Theme,
    axis,
    layout,
    log_axis,
    nice_ceiling,
    particle_line,
    plain,
)


def force_figure(result: Evaluation, theme: Theme) -> Figure:
    """Draw the force that the task is about, with its sign."""
    at, scale = result.spectrum, result.rms_voltage**2
    task = result.design.task
    forces = [scale * task.force(at, particle) for particle in result.design.particles]
    most = nice_ceiling(max(float(np.abs(force).max()) for force in forces) * 1e12) * 1e-12
    size, unit = prefixed(most, "N")
    curves, top = [force / size for force in forces], most / size
    reads = f"%{{y:.3~g}} {unit} at %{{x:.3~s}}Hz"
    data = particle_curves(result.design, theme, at.frequency, curves, reads)
    data += _needs(result, theme, size)
    data.append(operating_line(result.design, theme, (-top, top)))
    height = format_quantity(result.design.task.force_height, "um", 3)
    x_axis = log_axis(theme, "Frequency", float(at.frequency[0]), float(at.frequency[-1]), "Hz")
    y_axis = axis(
        theme,
        f"Force at {height} ({unit})",
        range=[-1.05 * top, 1.05 * top],
        zeroline=True,
        zerolinecolor=theme.quiet,
        tickformat="~g",
    )
    names = legend(len(curves))
    return {"data": data, "layout": layout(theme, xaxis=x_axis, yaxis=y_axis, **names)}


def _needs(result: Evaluation, theme: Theme, size: float) -> list[dict[str, Any]]:
    """Thin dotted level, for each particle that the task is about, of the force that it needs."""
    ends = [float(result.frequency[0]), float(result.frequency[-1])]
    needed = {
        row.rule.law.subject: row
        for row in result.ledger
        if row.rule.id == result.design.task.kind and row.rule.law.sense == "least"
    }
    found = []
    for index, particle in enumerate(result.design.particles):
        if (row := needed.get(particle.name)) is None:
            continue
        level = (result.design.task.wanted_sign(particle) or 1) * row.allowed / size
        found.append(
            {
                "type": "scatter",
                "mode": "lines",
                "x": ends,
                "y": [level, level],
                "line": {
                    "color": particle_line(theme, index)["color"],
                    "width": 1.5,
                    "dash": "dot",
                },
                "name": f"needed: {plain(particle.name)}",
                "hovertemplate": f"{plain(particle.name)}<br>needs "
                f"{format_value(row.allowed, row.rule.unit)}<extra></extra>",
                "showlegend": False,
            }
        )
    return found


def force_sentence(result: Evaluation) -> str:
    """Say which way each particle goes at the operating point."""
    pieces, task = [], result.design.task
    for found in result.particles:
        way = task.directions[0 if found.force > 0 else 1]
        size = f"{format_si(abs(found.force), 'N')} {way}" if found.force else "no force"
        pieces.append(f"{found.particle.name}: {size}")
    name = task.force_name[:1].upper() + task.force_name[1:]
    return f"{name} now, dotted what is needed. " + "; ".join(pieces) + "."
