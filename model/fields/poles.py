"""Mesh of the liquid around one of four poles, a quarter of the plan."""

from dataclasses import dataclass

import numpy as np
from skfem import Mesh

from model.arrays import Real
from model.fields.blocks import joined, rectangle, ruled
from model.fields.grading import march

#: First cell over the size of the corner. φ grows as r^(2/3) from a corner of 270°, so that the
#: capacitance is off by some thousandth of it.
TIP_CELL, BACK_CELL = 1e-2, 1e-2
#: Step along a smooth pole over the distance from the axis, and at least so many steps.
SMOOTH_STEP = 0.1


@dataclass(frozen=True)
class Pole:
    """A pole on the diagonal of the quarter x ≥ 0, y ≥ 0, in a channel with straight walls.

    Parameters
    ----------
    tip
        x and y of the tip, m.
    width
        Of the pole along x and along y, m.
    hyperbolic
        Whether its face is xy = tip², cut off where the square would end, or the two sides of
        the square.
    half_width
        y of the channel's side wall, m.
    reach
        x where the mesh ends, m.
    """

    tip: float
    width: float
    hyperbolic: bool
    half_width: float
    reach: float

    @property
    def back(self) -> float:
        """Where the pole ends along x and y, m."""
        return self.tip + self.width

    @property
    def waist(self) -> float:
        """Height y of the pole's face where it ends along x, m."""
        return self.tip**2 / self.back if self.hyperbolic else self.tip


def pole_quarter(pole: Pole, refinement: int = 0) -> Mesh:
    """Mesh the liquid of a quarter.

    The boundaries are ``left`` (x = 0), ``bottom`` (y = 0), ``end``, ``wall`` and ``pole``.
    """
    slack = 1e-9 * pole.tip
    return joined(
        _blocks(pole),
        {
            "left": lambda at: at[0] < slack,
            "bottom": lambda at: at[1] < slack,
            "end": lambda at: at[0] > pole.reach - slack,
            "wall": lambda at: at[1] > pole.half_width - slack,
            "pole": lambda at: (
                (at.min(axis=0) > slack)
                & (at.max(axis=0) < pole.back + slack)
                & (at[1] < pole.half_width - slack)
            ),
        },
        refinement,
    )


def _blocks(pole: Pole) -> list[Real]:
    """Blocks between the pole, the axes, the end and the wall."""
    tip, back, waist = pole.tip, pole.back, pole.waist
    rear = BACK_CELL * min(waist, pole.width)
    shares = _toward_one(rear / waist if pole.hyperbolic else TIP_CELL)
    face = _face(pole)
    corner = face[0]
    beyond = back + march(pole.reach - back, rear, lambda far: max(0.3 * tip, far))
    inner = shares * corner[0]
    blocks = [
        ruled(_row(inner, 0.0), _row(inner, corner[1]), shares),
        ruled(_row(face[:, 0], 0.0), face, shares),
        ruled(_column(0.0, face[:, 0]), face[:, ::-1], shares),
        rectangle(beyond, shares * waist),
    ]
    beside = pole.half_width - back
    if beside > 0:
        above = back + march(beside, min(rear, 0.2 * beside), lambda far: max(0.3 * tip, far))
        across = _flank(pole, rear)
        blocks += [
            ruled(_column(0.0, above), _column(waist, above), shares),
            rectangle(across, above),
            rectangle(beyond, above),
        ]
        blocks.append(rectangle(beyond, across))
    else:
        blocks.append(rectangle(beyond, _flank(pole, rear)))
    return blocks


def _toward_one(first: float) -> Real:
    """Shares from 0 to 1 that crowd toward 1."""
    return 1.0 - march(1.0, first, lambda _: 0.5)[::-1]


def _row(x: Real, y: float) -> Real:
    return np.stack([x, np.full_like(x, y)], axis=-1)


def _column(x: float, y: Real) -> Real:
    return np.stack([np.full_like(y, x), y], axis=-1)


def _flank(pole: Pole, rear: float) -> Real:
    """Grid lines along a back side of the pole."""
    middle = 0.5 * (pole.waist + pole.back)
    half = march(middle - pole.waist, rear, lambda _: 0.5 * pole.width)
    return np.concatenate([pole.waist + half, pole.back - half[-2::-1]])


def _face(pole: Pole) -> Real:
    """Corners (n, 2) of the lower face of the pole, from the tip on.

    The corners of a curved face lie as far outside it as the middles of its chords lie inside,
    a twelfth of h²y″, so that its mean place is right.
    """
    tip, back = pole.tip, pole.back
    rear = BACK_CELL * min(pole.waist, pole.width)
    middle = tip + 0.5 * pole.width
    end = back - march(back - middle, rear, lambda far: SMOOTH_STEP * middle)[::-1]
    if not pole.hyperbolic:
        start = tip + march(middle - tip, TIP_CELL * min(tip, pole.width), lambda _: pole.width)
        return _row(np.concatenate([start[:-1], end]), tip)
    count = int(np.ceil(np.log(middle / tip) / SMOOTH_STEP))
    x = np.concatenate([np.geomspace(tip, middle, count + 1)[:-1], end])
    squares = np.diff(x, prepend=tip - (x[1] - tip)) ** 2
    squares = 0.5 * (squares + np.append(squares[1:], squares[-1]))
    outside = squares * (2 * tip**2 / x**3) / 12
    face = np.stack([x, tip**2 / x - outside], axis=-1)
    face[0] = tip - 0.5 * outside[0]  # along the diagonal
    face[-1, 1] = pole.waist
    return face
