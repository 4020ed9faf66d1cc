"""Headroom over frequency and conductivity at the present voltage, by what binds."""

import numpy as np
from numpy.typing import NDArray
from scipy.ndimage import distance_transform_edt

from model.arrays import Real
from model.evaluate import Evaluation
from model.headroom import HeadroomMap, remembered_map
from model.limits import LIMITS
from model.quantity import format_si
from model.verdict import format_headroom
from webapp.figures.labels import Label, label_trace
from webapp.figures.picture import colour_parts, picture
from webapp.figures.theme import Figure, Theme, layout, limit_colour, log_axis, mark

#: Columns and rows of the map, and the conductivities that it spans, S/m: those of the knob.
COLUMNS, ROWS = 120, 72
LOWEST, HIGHEST = 1e-4, 3.16
#: Shades of the inside from a headroom of 1 to this one and more.
_FULL = 3.0
#: Strength of the colour of what binds outside, and of the accent inside at 1 and in full.
_OUTSIDE, _INSIDE = 0.26, (0.3, 0.95)
#: Shades of the inside.
_STEPS = 24
#: Names are placed on every so many cells.
_COARSE = 3
#: A region that has no room for a circle of this radius, in cells, gets no name.
_ROOM = 3.0
#: Half the width of a letter as a share of the axis, on a narrow page.
_LETTER = 0.0085


def map_of(result: Evaluation) -> HeadroomMap:
    """The map of a result, over its frequencies and the conductivities of the knob."""
    ends = float(result.frequency[0]), float(result.frequency[-1])
    return remembered_map(result, _centres(*ends, COLUMNS), _centres(LOWEST, HIGHEST, ROWS))


def _centres(low: float, high: float, count: int) -> Real:
    """Middles of so many equal stretches of a logarithmic axis."""
    return np.asarray(low * (high / low) ** ((np.arange(count) + 0.5) / count))


def headroom_figure(found: HeadroomMap, result: Evaluation, theme: Theme) -> Figure:
    """Shade the inside by headroom, the outside by the limit that binds there."""
    rms = result.rms_voltage
    headroom, binding = found.headroom(rms), found.binding(rms)
    low, high = float(result.frequency[0]), float(result.frequency[-1])
    design = result.design
    x_axis = log_axis(theme, "Frequency", low, high, "Hz")
    y_axis = log_axis(theme, "Medium conductivity", LOWEST, HIGHEST, "S/m")
    image = {
        "source": _picture(found, headroom, binding, theme),
        "xref": "paper",
        "yref": "paper",
        "x": 0,
        "y": 0,
        "xanchor": "left",
        "yanchor": "bottom",
        "sizex": 1,
        "sizey": 1,
        "sizing": "stretch",
        "layer": "below",
    }
    names = _names(found, headroom, binding)
    slots = 2 + len({bound.id for bound in found.bounds})
    return {
        "data": [
            label_trace(
                names,
                slots,
                (low, high),
                (LOWEST, HIGHEST),
                lambda key: _colour(key, theme) if key else theme.text,
                theme,
            ),
            mark(theme, design.drive.frequency, design.liquid.conductivity),
        ],
        "layout": layout(
            theme,
            xaxis={**x_axis, "showgrid": False},
            yaxis={**y_axis, "showgrid": False},
            images=[image],
            margin={"l": 96, "r": 24, "t": 10, "b": 48},
        ),
    }


def headroom_sentence(found: HeadroomMap, result: Evaluation) -> str:
    """Say where there is room at this voltage."""
    headroom = found.headroom(result.rms_voltage)
    volts = format_si(result.design.drive.voltage, "V")
    if not (headroom >= 1.0).any():
        return f"At {volts} peak to peak no frequency and conductivity lies inside the corridor."
    row, column = np.unravel_index(int(headroom.argmax()), headroom.shape)
    share = float((headroom >= 1.0).mean())
    place = (
        f"{format_si(float(found.frequency[column]), 'Hz')} and "
        f"{format_si(float(found.conductivity[row]), 'S/m')}"
    )
    return (
        f"Inside the corridor at {volts} peak to peak lies {share:.0%} of the map, the stronger "
        "the colour the more headroom; most "
        f"({format_headroom(float(headroom.max()))}) near {place}. Elsewhere the "
        "colour tells what binds. A click moves frequency and conductivity there."
    )


def _picture(found: HeadroomMap, headroom: Real, binding: NDArray[np.intp], theme: Theme) -> str:
    """Picture of all cells: inside in steps of headroom, outside in the colour of what binds."""
    paper, accent = colour_parts(theme.paper), colour_parts(theme.accent)
    limits = np.array([colour_parts(_colour(one.id, theme)) for one in found.bounds])
    strength = np.linspace(*_INSIDE, _STEPS)[:, None]
    palette = np.concatenate(
        [paper + strength * (accent - paper), paper + _OUTSIDE * (limits - paper)]
    )
    with np.errstate(divide="ignore"):
        step = np.log(headroom) * ((_STEPS - 1) / np.log(_FULL))
    inside = np.minimum(step, _STEPS - 1)
    indices = np.where(headroom >= 1.0, inside, binding + _STEPS).astype(np.uint8)
    return picture(indices[::-1], palette)


def _colour(key: str, theme: Theme) -> str:
    """Colour of a limit; grey for the task, as the accent is the inside's."""
    return limit_colour(theme, key) if key in LIMITS else theme.quiet


def _names(found: HeadroomMap, headroom: Real, binding: NDArray[np.intp]) -> list[Label]:
    """A name for the inside and for each limit, where its region has most room."""
    kinds = {bound.id: bound.label for bound in found.bounds}
    order = list(kinds)
    kind = np.array([order.index(bound.id) for bound in found.bounds])[binding]
    kind = np.where(headroom >= 1.0, -1, kind)[::_COARSE, ::_COARSE]
    names = []
    for index in np.unique(kind):
        room = distance_transform_edt(np.pad(kind == index, 1))[1:-1, 1:-1]
        if room.max() * _COARSE < _ROOM:
            continue
        row, column = np.unravel_index(int(room.argmax()), room.shape)
        key = order[index] if index >= 0 else ""
        text = kinds.get(key, "corridor")
        half = _LETTER * len(text)
        x = min(max((column + 0.5) * _COARSE / COLUMNS, half), 1.0 - half)  # within the axes
        names.append(Label(text, key, x, (row + 0.5) * _COARSE / ROWS))
    return names
