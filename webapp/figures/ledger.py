"""The limits ledger as plain rows of text, worst first."""

from typing import Any

from model.evaluate import Evaluation, LedgerRow
from model.verdict import MOST_VOLTAGE, format_value, format_volts, row_headroom, row_value
from webapp.figures.theme import Theme, limit_colour


def ledger_rows(result: Evaluation, theme: Theme) -> list[dict[str, Any]]:
    """Every rule with value, allowed, headroom, why and source, as text to show."""
    return [_row(row, theme) for row in result.ledger]


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
        "state": "broken" if not row.kept else ("tight" if row.headroom < 1.2 else "kept"),
        "colour": limit_colour(theme, row.rule.id),
        "why": row.rule.why,
        "remedy": row.rule.remedy,
        "source": row.rule.source,
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
