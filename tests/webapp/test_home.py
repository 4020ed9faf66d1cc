"""The home view's map of headroom, its best point, and what is told when the hand rests."""

import base64
import struct
import zlib

import numpy as np
import plotly.graph_objects as go
import pytest

from model import evaluate
from webapp.figures.headroom import COLUMNS, ROWS, headroom_figure, headroom_sentence, map_of
from webapp.figures.picture import colour_parts, picture
from webapp.figures.theme import THEMES
from webapp.state import Options
from webapp.views.corridor import corridor_part

LIGHT = THEMES["light"]


def decoded(address):
    """Colours (rows, columns, 3) of a PNG as its standard says: chunks, palette, rows."""
    data = base64.b64decode(address.removeprefix("data:image/png;base64,"))
    assert data[:8] == b"\x89PNG\r\n\x1a\n"
    chunks, place = {}, 8
    while place < len(data):
        (length,) = struct.unpack(">I", data[place : place + 4])
        kind, content = data[place + 4 : place + 8], data[place + 8 : place + 8 + length]
        (check,) = struct.unpack(">I", data[place + 8 + length : place + 12 + length])
        assert check == zlib.crc32(kind + content)
        chunks[kind] = content
        place += 12 + length
    columns, rows = struct.unpack(">II", chunks[b"IHDR"][:8])
    palette = np.frombuffer(chunks[b"PLTE"], dtype=np.uint8).reshape(-1, 3) / 255.0
    indices = np.frombuffer(zlib.decompress(chunks[b"IDAT"]), dtype=np.uint8)
    return palette[indices.reshape(rows, columns + 1)[:, 1:]]


def test_a_picture_holds_its_colours():
    indices = np.array([[0, 1, 2], [2, 1, 0]], dtype=np.uint8)
    palette = np.array([colour_parts(colour) for colour in ("#000000", "#ff8000", "#0f766e")])
    np.testing.assert_allclose(decoded(picture(indices, palette)), palette[indices], atol=0.002)


@pytest.fixture(scope="module")
def result(yeast, patterns):
    return evaluate(yeast, patterns, points=200)


def test_the_map_shows_what_each_point_is(result):
    found = map_of(result)
    figure = headroom_figure(found, result, LIGHT)
    go.Figure(figure)
    colours = decoded(figure["layout"]["images"][0]["source"])[::-1]  # the lowest row first
    assert colours.shape == (ROWS, COLUMNS, 3)
    inside = found.headroom(result.rms_voltage) >= 1.0
    paper, accent = colour_parts(LIGHT.paper), colour_parts(LIGHT.accent)
    along = (colours - paper) @ (accent - paper) / ((accent - paper) @ (accent - paper))
    off = np.abs(colours - paper - along[..., None] * (accent - paper)).max(axis=-1)
    assert np.all(off[inside] < 0.01)  # paper to accent, and nothing else
    best = np.unravel_index(found.headroom(result.rms_voltage).argmax(), inside.shape)
    assert along[best] == pytest.approx(along[inside].max(), abs=0.01)
    assert 0.05 < inside.mean() < 0.95


def test_the_map_is_kept_while_a_knob_moves(yeast, patterns, vary, result):
    assert map_of(result) is map_of(
        evaluate(vary(yeast, {"drive.voltage": "7 V"}), patterns, points=200)
    )
    other = vary(yeast, {"flow.rate": "1 uL/min"})
    assert map_of(result) is not map_of(evaluate(other, patterns, points=200))


def test_the_map_tells_where_nothing_works(yeast, patterns, vary):
    result = evaluate(vary(yeast, {"flow.rate": "90 mL/min"}), patterns, points=200)
    assert "no frequency and conductivity" in headroom_sentence(map_of(result), result)
    assert corridor_part(result, LIGHT)["best"] is None


def test_what_is_slow_waits_until_the_hand_rests(result):
    moving, resting = (corridor_part(result, LIGHT, Options(resting=one)) for one in (False, True))
    assert "sensitivity" not in moving
    rows = resting["sensitivity"]["rows"]
    assert rows[0]["share"] == 1.0
    assert {row["label"] for row in rows} >= {"Voltage", "Flow rate"}
    binding = resting["ledger"][0]
    assert "Raise the voltage above" in binding["remedy"]
    assert binding["remedy"] != moving["ledger"][0]["remedy"]


def test_the_best_point_is_inside(yeast, patterns, vary, result):
    best = corridor_part(result, LIGHT)["best"]
    there = vary(
        yeast,
        {
            "drive.frequency": f"{best['frequency']:.9g} Hz",
            "drive.voltage": f"{best['voltage']:.9g} V",
        },
    )
    assert evaluate(there, patterns).inside
    assert "headroom" in best["words"]
