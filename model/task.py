"""What every task provides; the tasks themselves stand in ``model/tasks/``."""

from abc import ABC, abstractmethod
from collections.abc import Iterable
from typing import TYPE_CHECKING, ClassVar

from model.arrays import Real
from model.declare import Part
from model.law import Law, Words

if TYPE_CHECKING:
    from model.conditions import Conditions
    from model.design import Design
    from model.particle import Particle


class Task(Part, ABC):
    """What the chip is to do; turned into a least force, hence a least voltage."""

    kind: str
    #: Words for the ledger, e.g. "hold against the flow", and where and why the force is taken.
    label: ClassVar[str]
    why: ClassVar[str]
    source: ClassVar[str]
    #: What to change when the floor is too high, beside frequency, conductivity and voltage.
    remedy: ClassVar[str]
    #: Unit in which the ledger shows the law's value.
    unit: ClassVar[str] = "pN"
    #: Whether the laws hold too that particles pass which are to pass.
    separates: ClassVar[bool] = False
    #: What happens to a particle for which the force is enough.
    success: ClassVar[str] = "caught"
    #: What the force is of which the task makes its law, and what its two signs mean.
    force_name: ClassVar[str] = "largest along the flow"
    directions: ClassVar[tuple[str, str]] = ("towards strong field", "towards weak field")

    @abstractmethod
    def laws(self, at: "Conditions") -> tuple[Law, ...]:
        """Floors, of sense ``least``, one for each particle that must succeed.

        A task that separates also has ceilings, of sense ``most``, for those that must not.
        """

    @abstractmethod
    def catch(self, at: "Conditions", particle: "Particle") -> Law:
        """Law of sense ``least``: the voltage from which this particle would be caught too."""

    @abstractmethod
    def force(self, at: "Conditions", particle: "Particle") -> Real:
        """The force that the task is about, N/V², with its sign, (…, n_frequency)."""

    @abstractmethod
    def trap(self, at: "Conditions", particle: "Particle") -> tuple[Real, float] | None:
        """Energy that a particle lacks to leave where the task keeps it.

        J per V², (…, n_frequency), and what is added to it at any voltage, J. None where
        nothing of the kind keeps it.
        """

    @abstractmethod
    def statements(self, at: "Conditions") -> tuple[str, ...]:
        """Sentences: the least force of each particle, where it is taken and why."""

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

    def words(self, law: Law) -> Words:
        """What is told of one of its laws."""
        return Words(self.label, self.why, self.source, self.remedy)

    def misfits(self, design: "Design") -> Iterable[tuple[str, str]]:
        """Fields of the whole design that the task cannot do with: path and problem."""
        return ()
