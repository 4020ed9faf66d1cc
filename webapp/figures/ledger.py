"""The limits ledger as plain rows of text, worst first."""

from typing import Any

from model.evaluate import Evaluation, LedgerRow, SwitchedOffLimit
from model.remedies import remedies
from model.verdict import MOST_VOLTAGE, format_value, format_volts, row_headroom, row_value
from webapp.figures.theme import Theme, colour_key, limit_colour


def ledger_rows(result: Evaluation, theme: Theme, *, advised: bool = False) -> list[dict[str, Any]]:
    """Every rule with value, allowed, headroom, why and source, as text to show.

    Limits that are switched off stand at the end. If `advised`, what is broken or tight has the
    changes that would mend it.
    """
    rows = [_row(row, theme) for row in result.ledger]
    if advised:
        for row, shown in zip(result.ledger, rows, strict=True):
            if words := remedies(result, row):
                shown["remedy"] = " ".join(words)
    return [*rows, *(_off(off, theme) for off in result.switched_off)]


def _row(row: LedgerRow, theme: Theme) -> dict[str, Any]:
    least = row.rule.law.sense == "least"
    return {
        "key": f"{row.rule.id}/{row.rule.law.subject}",
        "label": row.rule.label,
        "subject": row.rule.law.subject,
        "value": row_value(row),
        "allowed": ("at least " if least else "at most ")
        + format_value(row.allowed, row.rule.unit),
        "bound": _bound(row),
        "headroom": row_headroom(row),
        "fill": _fill(row.headroom),
        "state": row.state,
        "colour": limit_colour(theme, colour_key(row.rule.id, row.rule.law.sense)),
        "why": row.rule.words.why,
        "remedy": row.rule.words.remedy,
        "source": row.rule.words.source,
    }


def _off(off: SwitchedOffLimit, theme: Theme) -> dict[str, Any]:
    """A limit that does not count: what its worst law would say, and the reason."""
    limit = off.limit
    row = {
        "label": limit.label,
        "subject": "",
        "value": "nothing to check here",
        "allowed": "does not count",
        "bound": "bounds none",
        "colour": limit_colour(theme, limit.id),
        "remedy": limit.remedy,
        "source": limit.source,
    }
    if off.rows:
        row |= _row(off.rows[0], theme)
        row["allowed"] = f"{row['allowed']} if it counted"
    row["key"] = f"off/{limit.id}"
    return {
        **row,
        "headroom": "off",
        "fill": 0.0,
        "state": "off",
        "why": f"Switched off: {off.reason}",
    }


def _bound(row: LedgerRow) -> str:
    """The voltage at which the rule is just kept, in words."""
    sense = "at least" if row.rule.law.sense == "least" else "at most"
    if row.rule.law.power == 0:
        return "does not depend on voltage"
    if row.bound_pp > MOST_VOLTAGE:
        return "no voltage is enough" if sense == "at least" else "any voltage"
    return f"{sense} {format_volts(row.bound_pp)} peak to peak"


def _fill(headroom: float) -> float:
    """Length of the headroom bar, 0 to 1: half at exactly 1×, full at 4× and more.

    >>> _fill(0.0), _fill(1.0), _fill(9.0)
    (0.0, 0.5, 1.0)
    """
    if headroom <= 1.0:
        return 0.5 * max(headroom, 0.0)
    return min(1.0, 0.5 + (headroom - 1.0) / 6.0)
