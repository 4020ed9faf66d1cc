"""What every limit provides; the limits themselves stand in ``model/limits/``."""

from abc import ABC, abstractmethod
from typing import TYPE_CHECKING, ClassVar

from model.declare import Quantity
from model.law import Law, Words

if TYPE_CHECKING:
    from model.conditions import Conditions


class Limit(ABC):
    """Something that must not happen; gives the most voltage at which it does not.

    The id is also the profile's key in ``[limits]`` when the limit has a threshold of its own.
    """

    id: ClassVar[str]
    label: ClassVar[str]
    #: What the value is called where the label does not say it.
    symbol: ClassVar[str] = ""
    #: Why it matters, one sentence.
    why: ClassVar[str]
    source: ClassVar[str]
    #: What to change beside frequency, conductivity and voltage, one sentence.
    remedy: ClassVar[str]
    #: Unit in which the ledger shows value and threshold.
    unit: ClassVar[str]
    #: Declaration of the editable threshold and its default in SI; None if it stands elsewhere.
    threshold: ClassVar[Quantity | None] = None
    default: ClassVar[float] = 0.0
    #: Whether no voltage changes it, so that it is kept or broken and draws no curve.
    condition: ClassVar[bool] = False
    #: Of conditions that are broken together, whether this one is why the others are.
    decisive: ClassVar[bool] = False
    #: What can hurt people where it is switched off, a clause; empty if nothing of that kind.
    hazard: ClassVar[str] = ""

    @property
    def words(self) -> Words:
        """What is told of each of its laws."""
        return Words(self.label, self.why, self.source, self.remedy)

    @abstractmethod
    def laws(self, at: "Conditions") -> tuple[Law, ...]:
        """One law, or one for each particle it protects; none where it does not apply."""
