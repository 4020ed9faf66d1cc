"""What every task provides; the tasks themselves stand in ``model/tasks/``."""

from abc import ABC, abstractmethod
from typing import TYPE_CHECKING, ClassVar

from model.declare import Part
from model.law import Law

if TYPE_CHECKING:
    from model.conditions import Conditions
    from model.particle import Particle


class Task(Part, ABC):
    """What the chip is to do; turned into a least force, hence a least voltage."""

    kind: str
    #: Words for the ledger, e.g. "hold against the flow", and where and why the force is taken.
    label: ClassVar[str]
    why: ClassVar[str]
    source: ClassVar[str]
    #: What to change when the floor is too high, one sentence.
    remedy: ClassVar[str]
    #: Unit in which the ledger shows the law's value.
    unit: ClassVar[str] = "pN"

    @abstractmethod
    def laws(self, at: "Conditions") -> tuple[Law, ...]:
        """Floors: one law of sense ``least`` for each particle that must succeed."""

    @abstractmethod
    def catch(self, at: "Conditions", particle: "Particle") -> Law:
        """Law of sense ``least``: the voltage from which this particle would be caught too."""

    @abstractmethod
    def wanted_sign(self, particle: "Particle") -> int:
        """+1 if the task needs Re K > 0 of this particle, −1 if Re K < 0, 0 if either will do."""

    @property
    @abstractmethod
    def force_height(self) -> float:
        """Height of particle centres above the floor at which forces are taken, m."""

    @abstractmethod
    def may_touch(self, particle: "Particle") -> bool:
        """Whether the particle has to endure the field where it touches what is solid."""
