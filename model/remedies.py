"""What to change so that a rule is kept, computed from its own law."""

import math
from collections.abc import Callable
from dataclasses import dataclass
from typing import cast

import numpy as np
from numpy.typing import NDArray

from model.arrays import Real
from model.conditions import Conditions
from model.corridor import Rule, rules
from model.declare import Quantity, declarations
from model.design import Drive
from model.evaluate import TIGHT, Evaluation, LedgerRow
from model.law import headroom
from model.liquid.liquid import Liquid
from model.quantity import DIGITS, format_si

#: Conductivities that are tried, and how many values are between two neighbours of what is tried.
_CONDUCTIVITIES, _BETWEEN = 96, 65

#: Headroom of the rule at values of one knob, all else kept.
Room = Callable[[Real], Real]


def remedies(result: Evaluation, row: LedgerRow) -> tuple[str, ...]:
    """Sentences on what would keep a rule: voltage, frequency, conductivity, and the rest.

    Each changes one thing and keeps all else; what is told keeps this rule, others may break. For
    a rule that is tight the changes give it a headroom of :data:`model.evaluate.TIGHT`. None for
    a rule that has more.

    Parameters
    ----------
    result
        The design's evaluation; its frequencies are those that are tried.
    row
        A row of its ledger.
    """
    if row.state == "kept":
        return ()
    wanted = TIGHT if row.kept else 1.0
    aim = f"gives {TIGHT}× headroom" if row.kept else "helps"
    end = f" for {TIGHT}× headroom." if row.kept else "."
    spectrum, liquids = result.frequency, _conductivities()
    found = (
        ("voltage", _voltage(row, wanted)),
        (f"frequency {_ends(spectrum, 'Hz')}", _frequency(result, row, wanted)),
        (f"conductivity {_ends(liquids, 'S/m')}", _conductivity(result, row, wanted)),
    )
    told = (f"{words}{end}" if words else f"No {knob} {aim}." for knob, words in found)
    return (*told, row.rule.words.remedy)


@dataclass(frozen=True)
class _Band:
    """Values of a knob that keep the rule, from the one nearest to the present to the far end.

    `open` if the rule is kept as far as was tried.
    """

    near: float
    far: float
    open: bool


def _voltage(row: LedgerRow, wanted: float) -> str:
    """The voltage that the law itself gives."""
    low, high = _range(Drive, "voltage")
    most = row.rule.law.sense == "most"
    needed = row.bound_pp / wanted if most else row.bound_pp * wanted
    if row.rule.law.power == 0 or not low <= needed <= high:
        return ""
    value = _outward(needed, up=not most, within=low if most else high)
    return f"{'Lower' if most else 'Raise'} the voltage {_beyond(value, not most, 'V')}"


def _frequency(result: Evaluation, row: LedgerRow, wanted: float) -> str:
    """The nearest frequencies of the corridor that keep the rule."""
    conductivity = np.array(result.design.liquid.conductivity)

    def room(frequency: Real) -> Real:
        at = Conditions(result.design, result.patterns, frequency, conductivity)
        return _headroom(at, row.rule, result.rms_voltage)

    # the corridor has the bounds of every rule already
    (bound,) = (
        one.rms_voltage
        for one in result.corridor.bounds
        if (one.id, one.subject, one.sense) == _key(row.rule)
    )
    kept = headroom(bound, result.rms_voltage, row.rule.law.sense) >= wanted
    own = result.design.drive.frequency
    return _knob("frequency", "Hz", own, result.frequency, kept, room, wanted)


def _conductivity(result: Evaluation, row: LedgerRow, wanted: float) -> str:
    """The nearest conductivities that keep the rule."""
    frequency = result.point.frequency

    def room(conductivity: Real) -> Real:
        at = Conditions(result.design, result.patterns, frequency, conductivity[:, np.newaxis])
        return _headroom(at, row.rule, result.rms_voltage)

    tried = _conductivities()
    own = result.design.liquid.conductivity
    return _knob("conductivity", "S/m", own, tried, room(tried) >= wanted, room, wanted)


def _conductivities() -> Real:
    return np.geomspace(*_range(Liquid, "conductivity"), _CONDUCTIVITIES)


def _headroom(at: Conditions, rule: Rule, rms_voltage: float) -> Real:
    """Headroom of one rule at other conditions, (n,)."""
    size = max(at.frequency.size, at.conductivity.size)
    (found,) = (one for one in rules(at, rule.id) if _key(one) == _key(rule))
    room = headroom(found.law.bound(), rms_voltage, found.law.sense)
    return np.broadcast_to(room.reshape(-1), size)


def _key(rule: Rule) -> tuple[str, str, str]:
    return rule.id, rule.law.subject, rule.law.sense


def _knob(
    name: str,
    unit: str,
    own: float,
    tried: Real,
    kept: NDArray[np.bool_],
    room: Room,
    wanted: float,
) -> str:
    """Word the nearest values of a knob below and above its own that keep the rule."""
    ways = []
    for up in (True, False):
        chosen = np.flatnonzero(tried > own if up else tried < own)
        away = chosen if up else chosen[::-1]
        band = _band(own, tried[away], kept[away], room, wanted)
        if band is not None:
            ways.append(("Raise" if up else "Lower", _words(band, up, unit)))
    if not ways:
        return ""
    verb, words = ways[0]
    also = "".join(f", or {other.lower()} it {more}" for other, more in ways[1:])
    return f"{verb} the {name} {words}{also}"


def _band(
    own: float, tried: Real, kept: NDArray[np.bool_], room: Room, wanted: float
) -> _Band | None:
    """The nearest band on one side of the present value; `tried` leads away from it."""
    if not kept.any():
        return None
    first = int(kept.argmax())
    ends = np.append(~kept[first:], True)
    last = first + int(ends.argmax()) - 1
    before = own if first == 0 else float(tried[first - 1])
    fine = np.geomspace(before, float(tried[first]), _BETWEEN)
    fine[-1] = tried[first]
    near = fine[1:][int((room(fine[1:]) >= wanted).argmax())]
    return _Band(float(near), float(tried[last]), last == kept.size - 1)


def _words(band: _Band, up: bool, unit: str) -> str:
    """Values of a band, e.g. ``above 3.1 MHz``."""
    near = _outward(band.near, up, band.far)
    if band.open:
        return _beyond(near, up, unit)
    far = _outward(band.far, not up, near)
    return f"to between {_shown(near, unit)} and {_shown(far, unit)}"


def _ends(tried: Real, unit: str) -> str:
    low, high = (format_si(float(end), unit) for end in (tried[0], tried[-1]))
    return f"from {low} to {high}"


def _beyond(value: float, up: bool, unit: str) -> str:
    return f"{'above' if up else 'below'} {_shown(value, unit)}"


def _outward(value: float, up: bool, within: float) -> float:
    """Round away from what breaks the rule, to as few digits as stay before `within`.

    >>> _outward(3.1041, True, 5.0), _outward(3.1041, False, 1.0), _outward(3.1041, True, 3.1042)
    (3.11, 3.1, 3.1041)
    """
    for digits in range(3, DIGITS):
        step = 10.0 ** (math.floor(math.log10(value)) - digits + 1)
        steps = value / step
        rounded = (math.ceil(steps - 1e-9) if up else math.floor(steps + 1e-9)) * step
        if (rounded <= within) if up else (rounded >= within):
            return float(f"{rounded:.{digits}g}")
    return value


def _shown(value: float, unit: str) -> str:
    return format_si(value, unit, DIGITS)


def _range(part: type[Drive | Liquid], key: str) -> tuple[float, float]:
    """Least and most that may be entered."""
    return cast(Quantity, dict(declarations(part))[key]).range()
