"""The verdict in words: inside or outside, what binds, and by how much."""

import math
import re
from dataclasses import dataclass

from model.evaluate import Evaluation, LedgerRow
from model.quantity import format_quantity, format_si


@dataclass(frozen=True)
class Verdict:
    """What the corridor says of the operating point: a headline and one sentence."""

    inside: bool
    headline: str
    sentence: str


def verdict(result: Evaluation) -> Verdict:
    """Word the verdict on a design."""
    binding = result.binding
    if result.inside:
        margin = format_headroom(binding.headroom)
        return Verdict(
            True, "Inside the corridor", f"{margin} headroom, set by {binding.rule.name}"
        )
    frequency = format_si(result.design.drive.frequency, "Hz")
    floor, ceiling = _worst(result, "least"), _worst(result, "most")
    if floor is not None and floor.bound_pp > MOST_VOLTAGE:
        culprit = next(
            (row for row in result.ledger if row.rule.law.power == 0 and not row.kept), floor
        )
        return Verdict(
            False,
            "No voltage does the task",
            f"at {frequency}, because of {culprit.rule.name}",
        )
    if binding.rule.law.power == 0:
        return Verdict(
            False,
            "Outside at any voltage",
            f"at {frequency}, because of {binding.rule.name}",
        )
    if floor is not None and ceiling is not None and floor.bound_pp > ceiling.bound_pp:
        return Verdict(
            False,
            f"No corridor at {frequency}",
            f"{floor.rule.name} needs {_volts(floor)}, "
            f"but {ceiling.rule.name} allows at most {_volts(ceiling)}",
        )
    if binding.rule.law.sense == "least":
        return Verdict(
            False,
            "Below the corridor",
            f"{binding.rule.name} needs at least {_volts(binding)}",
        )
    return Verdict(
        False, "Above the corridor", f"{binding.rule.name} allows at most {_volts(binding)}"
    )


def format_headroom(headroom: float) -> str:
    """Write a headroom as a factor, e.g. ``1.15×``.

    >>> format_headroom(1.1499), format_headroom(float("inf")), format_headroom(250.0)
    ('1.14×', 'any voltage', '> 100×')
    """
    if headroom == float("inf"):
        return "any voltage"
    if headroom > 100:
        return "> 100×"
    # Rounded towards broken, so that 0.9996 never reads 1.00.
    places = 2 if headroom < 10 else 1
    return f"{math.floor(headroom * 10**places) / 10**places:.{places}f}×"


def format_value(value: float, unit: str) -> str:
    """Write a ledger value or threshold in its unit to three digits.

    >>> format_value(2.57e8, ""), format_value(0.3, "V")
    ('2.57·10⁸', '0.3 V')
    """
    if value in (float("inf"), float("-inf")):
        return "beyond measure"
    return _POWER_OF_TEN.sub(_raised, format_quantity(value, unit, 3))


_POWER_OF_TEN = re.compile(r"e([+-]\d+)")
_RAISED = str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹")


def _raised(found: re.Match[str]) -> str:
    """Spell an exponent as people write it."""
    return "·10" + str(int(found[1])).translate(_RAISED)


def row_value(row: LedgerRow) -> str:
    """Write a row's value, with what it is where its label does not say so."""
    return f"{row.rule.symbol} {format_value(row.value, row.rule.unit)}".strip()


def row_allowed(row: LedgerRow) -> str:
    """Write what a row allows, with a sign for at least or at most."""
    sign = "≥" if row.rule.law.sense == "least" else "≤"
    return f"{sign} {format_value(row.allowed, row.rule.unit)}"


def row_headroom(row: LedgerRow) -> str:
    """Write a row's headroom; of what no voltage changes only whether it is kept."""
    if row.rule.law.power == 0 or row.headroom == 0.0:
        return "kept" if row.kept else "broken"
    return format_headroom(row.headroom)


#: Peak-to-peak voltages beyond these are none that is ever made: any, or nothing.
LEAST_VOLTAGE, MOST_VOLTAGE = 1e-6, 1e6


def format_volts(voltage: float) -> str:
    """Write a peak-to-peak voltage; far beyond what can be made, only that.

    >>> format_volts(8.943), format_volts(float("inf")), format_volts(3e21), format_volts(1e-20)
    ('8.94 V', 'beyond any voltage', 'beyond any voltage', '0 V')
    """
    if voltage > MOST_VOLTAGE:
        return "beyond any voltage"
    return format_si(voltage if voltage > LEAST_VOLTAGE else 0.0, "V")


def _worst(result: Evaluation, sense: str) -> LedgerRow | None:
    """Find the row that sets the floor or the ceiling."""
    rows = [row for row in result.ledger if row.rule.law.sense == sense]
    if not rows:
        return None
    return (max if sense == "least" else min)(rows, key=lambda row: row.bound_pp)


def _volts(row: LedgerRow) -> str:
    return format_volts(row.bound_pp)
