"""Small pictures as text that a figure can hold."""

import base64
import struct
import zlib

import numpy as np
from numpy.typing import NDArray

from model.arrays import Real


def picture(indices: NDArray[np.uint8], palette: Real) -> str:
    """Address of a PNG picture (W3C recommendation, 2003) that holds its own data.

    Parameters
    ----------
    indices
        Which colour each cell has, (rows, columns), the top row first.
    palette
        Red, green and blue from 0 to 1 of at most 256 colours, (n, 3).
    """
    rows, columns = indices.shape
    plain = np.zeros((rows, 1 + columns), dtype=np.uint8)  # each row led by its filter: none
    plain[:, 1:] = indices
    colours = np.rint(255.0 * np.clip(palette, 0.0, 1.0)).astype(np.uint8)
    parts = (
        (b"IHDR", struct.pack(">IIBBBBB", columns, rows, 8, 3, 0, 0, 0)),
        (b"PLTE", colours.tobytes()),
        (b"IDAT", zlib.compress(plain.tobytes(), 6)),
        (b"IEND", b""),
    )
    data = b"\x89PNG\r\n\x1a\n" + b"".join(_chunk(*part) for part in parts)
    return "data:image/png;base64," + base64.b64encode(data).decode()


def _chunk(kind: bytes, data: bytes) -> bytes:
    return struct.pack(">I", len(data)) + kind + data + struct.pack(">I", zlib.crc32(kind + data))


def colour_parts(colour: str) -> Real:
    """Red, green and blue from 0 to 1 of a colour written ``#rrggbb``.

    >>> colour_parts("#ff8000").round(2)
    array([1. , 0.5, 0. ])
    """
    return np.array([int(colour[k : k + 2], 16) for k in (1, 3, 5)]) / 255.0
