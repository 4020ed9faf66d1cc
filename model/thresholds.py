"""What a person sets of the limits: their thresholds, and which are switched off and why."""

from typing import TYPE_CHECKING, Annotated, Any

from pydantic import BeforeValidator, create_model, model_validator

from model.declare import Choice, Part, Text, counted, misfit
from model.limits import LIMITS


class SwitchedOff(Part):
    """A limit that does not count in this design, and the reason, which is always printed."""

    limit: Annotated[
        str,
        Choice(
            "Limit",
            "It is shown at the end of the ledger and counts in neither corridor nor verdict.",
            options={name: limit.label for name, limit in LIMITS.items()},
        ),
    ]
    reason: Annotated[
        str,
        Text(
            "Reason",
            "Why it does not apply here; stands wherever the limit would.",
            longest=160,
            needed=True,
        ),
    ]


class Switches(Part):
    """Which limits are switched off."""

    off: Annotated[
        tuple[SwitchedOff, ...],
        BeforeValidator(counted("limit", len(LIMITS), "tables with limit and reason", least=0)),
    ] = ()

    @property
    def reasons(self) -> dict[str, str]:
        """Reason of each limit that is switched off, by its id."""
        return {one.limit: one.reason for one in self.off}

    @model_validator(mode="after")
    def _once_each(self) -> "Switches":
        names = [one.limit for one in self.off]
        twice = [
            (f"off.{index}.limit", f"“{name}” is switched off twice")
            for index, name in enumerate(names)
            if name in names[:index]
        ]
        if twice:
            raise misfit(*twice)
        return self


_thresholds: dict[str, Any] = {
    name: (Annotated[float, limit.threshold], limit.default)
    for name, limit in LIMITS.items()
    if limit.threshold is not None
}
if TYPE_CHECKING:

    class Limits(Switches):
        """Thresholds of all limits that have one of their own, keyed by the limit's id."""
else:
    Limits = create_model("Limits", __base__=Switches, **_thresholds)
