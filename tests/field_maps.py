"""Field maps made for tests: an exact field, and tables of fields as a solver exports them."""

import numpy as np
from mpmath import ellipk

from model.declare import FileName, declarations
from model.layouts import LAYOUTS

#: Layouts whose field is solved for; the others have it from a file, which no random lengths fit.
SOLVED = {
    name: kind
    for name, kind in LAYOUTS.items()
    if not any(isinstance(found, FileName) for _, found in declarations(kind))
}
#: √2·K(k² = ½), 2.622057554292.
LEMNISCATE = float(np.sqrt(2.0) * ellipk(0.5))


def coplanar(x, y, pitch):
    """Exact field per volt of endless bars as wide as their gaps under endless liquid, (2, …).

    With u = 2π(x + jy)/p from a bar's centre the upper half plane is mapped onto the strip
    between two plates by w(u) with dw/du = ½/(W·√cos u), so that Ex − jEy = j·(π/(pW))/√cos u.
    The root is that of exp(−ju)·(1 + exp(2ju))/2, which has no cut above the bars.
    """
    half = 1j * np.pi * (np.asarray(x) + 1j * np.asarray(y)) / pitch
    slope = np.pi / (pitch * LEMNISCATE) * np.sqrt(2.0) * np.exp(half)
    slope = 1j * slope / np.sqrt(1.0 + np.exp(4.0 * half))
    return np.array([slope.real, -slope.imag])


def square(x, y, pitch):
    """|Ê|² of the same bars, (π/(pW))²/√(cos²(2πx/p) + sinh²(2πy/p))."""
    along, up = 2 * np.pi * np.asarray(x) / pitch, 2 * np.pi * np.asarray(y) / pitch
    return (np.pi / (pitch * LEMNISCATE)) ** 2 / np.sqrt(np.cos(along) ** 2 + np.sinh(up) ** 2)


def gradient(x, y, pitch):
    """∇|Ê|² of the same bars, by hand: with f = cos² + sinh², −½·∇f/f·|Ê|²."""
    along, up = 2 * np.pi * np.asarray(x) / pitch, 2 * np.pi * np.asarray(y) / pitch
    f = np.cos(along) ** 2 + np.sinh(up) ** 2
    slopes = np.array([-np.sin(2 * along), np.sinh(2 * up)]) * 2 * np.pi / pitch
    return -0.5 * slopes / f * square(x, y, pitch)


def grid(*axes):
    """Coordinates (dimension, n) of every place of a grid."""
    return np.stack([axis.ravel() for axis in np.meshgrid(*axes, indexing="ij")])


def table(places, field, volts="1 V rms"):
    """Bytes of a table of a field at places (dimension, n) in m, real or complex, in V/m."""
    names = "xyz"[: len(places)]
    columns = [f"{name} (um)" for name in names] + [f"E{name} (V/m)" for name in names]
    values = [*(place * 1e6 for place in places), *np.real(field)]
    if np.iscomplexobj(field):
        columns += [f"E{name} imaginary (V/m)" for name in names]
        values += list(np.imag(field))
    lines = [",".join(f"{value:.12g}" for value in row) for row in np.stack(values, axis=1)]
    return "\n".join([f"# voltage: {volts}", ", ".join(columns), *lines, ""]).encode()


def standing(name, digest):
    """File of a smooth field that stands between a floor and an insulating lid, named by its size.

    φ = ½·cos(kx)·cosh(k(h − y))/cosh(kh) with k = π/w, odd after a window w of 80 µm times the
    size, under h = 25 µm times the size.
    """
    size = float(name)
    width, height = 80e-6 * size, 25e-6 * size
    k = np.pi / width
    x, y = places = grid(np.linspace(-0.25, 1.25, 91) * width, np.linspace(0, height, 31))
    scale, up = 0.5 * k / np.cosh(k * height), k * (height - y)
    field = scale * np.array([np.sin(k * x) * np.cosh(up), np.cos(k * x) * np.sinh(up)])
    return table(places, field)
