"""The voltage corridor: floor and ceilings against frequency, and which of them binds."""

from dataclasses import dataclass

import numpy as np

from model.arrays import Real
from model.conditions import Conditions
from model.law import Law, Sense
from model.limits import LIMITS


@dataclass(frozen=True)
class Rule:
    """A law with the words that belong to it: the task's floor, or a limit.

    `id` is the limit's id or the task's kind; `unit` that in which value and threshold are shown.
    """

    id: str
    label: str
    why: str
    source: str
    remedy: str
    unit: str
    law: Law
    symbol: str = ""

    @property
    def name(self) -> str:
        """Label with the particle that it is about."""
        return f"{self.label}: {self.law.subject}" if self.law.subject else self.label


@dataclass(frozen=True)
class Bound:
    """One floor or ceiling: V_rms against frequency, shape ``(..., n_frequency)``."""

    id: str
    subject: str
    name: str
    label: str
    sense: Sense
    rms_voltage: Real


@dataclass(frozen=True)
class Corridor:
    """Floor and ceiling over frequency, as V_rms, with every bound they are made of.

    The task is done and no limit is broken where floor ≤ V ≤ ceiling.
    """

    frequency: Real
    bounds: tuple[Bound, ...]
    floor: Real
    ceiling: Real

    def binding_ceiling(self) -> "np.ndarray[tuple[int, ...], np.dtype[np.intp]]":
        """Index into the ceilings (in order of `bounds`) of the lowest one at each frequency."""
        stack = np.stack([bound.rms_voltage for bound in self.ceilings])
        return np.asarray(stack.argmin(axis=0))

    @property
    def ceilings(self) -> tuple[Bound, ...]:
        """Bounds that a voltage must stay below."""
        return tuple(bound for bound in self.bounds if bound.sense == "most")

    @property
    def floors(self) -> tuple[Bound, ...]:
        """Bounds that a voltage must reach."""
        return tuple(bound for bound in self.bounds if bound.sense == "least")


def rules(at: Conditions, only: str = "") -> tuple[Rule, ...]:
    """Every law that the design has to keep: the task's first, then each limit's.

    `only` those of one id, if it is given.
    """
    task = at.design.task
    found = []
    if only in ("", task.kind):
        words = (task.kind, task.label, task.why, task.source, task.remedy, task.unit)
        found += [Rule(*words, law) for law in task.laws(at)]
    for limit in LIMITS.values():
        if only not in ("", limit.id):
            continue
        words = (limit.id, limit.label, limit.why, limit.source, limit.remedy, limit.unit)
        found += [Rule(*words, law, limit.symbol) for law in limit.laws(at)]
    return tuple(found)


def corridor(at: Conditions) -> Corridor:
    """Find floor and ceilings in closed form, for all frequencies (and conductivities) at once."""
    shape = np.broadcast_shapes(at.omega.shape, at.conductivity.shape)
    bounds = tuple(
        Bound(
            rule.id,
            rule.law.subject,
            rule.name,
            rule.label,
            rule.law.sense,
            np.broadcast_to(rule.law.bound(), shape),
        )
        for rule in rules(at)
    )
    floors = [bound.rms_voltage for bound in bounds if bound.sense == "least"]
    ceilings = [bound.rms_voltage for bound in bounds if bound.sense == "most"]
    return Corridor(at.frequency, bounds, np.max(floors, axis=0), np.min(ceilings, axis=0))
