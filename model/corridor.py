"""The voltage corridor: floor and ceilings against frequency, and which of them binds."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from model.arrays import Real
from model.conditions import Conditions
from model.law import Law, Sense, Words
from model.limit import Limit
from model.limits import LIMITS


@dataclass(frozen=True)
class Rule:
    """A law with the words that belong to it: the task's floor, or a limit.

    `id` is the limit's id or the task's kind; `unit` that in which value and threshold are shown;
    `decisive` whether other conditions that are broken too follow from it.
    """

    id: str
    words: Words
    unit: str
    law: Law
    symbol: str = ""
    decisive: bool = False

    @property
    def label(self) -> str:
        """What it is called."""
        return self.words.label

    @property
    def name(self) -> str:
        """Label with the particle that it is about."""
        return f"{self.label}: {self.law.subject}" if self.law.subject else self.label


@dataclass(frozen=True)
class Bound:
    """One floor or ceiling: V_rms against frequency, shape ``(..., n_frequency)``.

    That of a condition that no voltage changes is 0 or infinite everywhere.
    """

    id: str
    subject: str
    name: str
    label: str
    sense: Sense
    rms_voltage: Real
    condition: bool = False


@dataclass(frozen=True)
class Corridor:
    """Floor and ceiling over frequency, as V_rms, with every bound they are made of.

    The task is done and no limit is broken where floor ≤ V ≤ ceiling.
    """

    frequency: Real
    bounds: tuple[Bound, ...]
    floor: Real
    ceiling: Real

    def binding_ceiling(self) -> NDArray[np.intp]:
        """Index into the ceilings (in order of `bounds`) of the lowest one at each frequency."""
        found = [one.rms_voltage for one in self.ceilings]
        return np.asarray(np.argmin(found or [self.ceiling], axis=0))

    def binding_floor(self) -> NDArray[np.intp]:
        """Index into the floors of the highest one at each frequency."""
        found = [one.rms_voltage for one in self.floors]
        return np.asarray(np.argmax(found or [self.floor], axis=0))

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

    Those of one id if `only` is given. Limits that are switched off are left out.
    """
    task, off = at.design.task, at.design.limits.reasons
    found: list[Rule] = []
    if only in ("", task.kind):
        found += [Rule(task.kind, task.words(law), task.unit, law) for law in task.laws(at)]
    for limit in LIMITS.values():
        if only in ("", limit.id) and limit.id not in off:
            found += limit_rules(limit, at)
    return tuple(found)


def limit_rules(limit: Limit, at: Conditions) -> list[Rule]:
    """The laws of one limit, whether it is switched off or not."""
    return [
        Rule(limit.id, limit.words, limit.unit, law, limit.symbol, limit.decisive)
        for law in limit.laws(at)
    ]


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
            rule.law.power == 0,
        )
        for rule in rules(at)
    )
    floors = [bound.rms_voltage for bound in bounds if bound.sense == "least"]
    ceilings = [bound.rms_voltage for bound in bounds if bound.sense == "most"]
    floor = np.max([np.zeros(shape), *floors], axis=0)
    ceiling = np.min([np.full(shape, np.inf), *ceilings], axis=0)
    return Corridor(at.frequency, bounds, floor, ceiling)
