"""The one error that bad input raises, with every field that is wrong."""

from collections.abc import Iterable
from dataclasses import dataclass


@dataclass(frozen=True)
class FieldError:
    """One field that cannot be used.

    Parameters
    ----------
    path
        Dotted place in the profile, e.g. ``chip.bar_width`` or ``particle.0.radius``.
    value
        What was given, as text, shortened.
    problem
        What is wrong with it and what is allowed, with units, as one plain sentence.
    """

    path: str
    value: str
    problem: str

    def __str__(self) -> str:
        shown = f" (given: {self.value})" if self.value else ""
        return f"{self.path or 'profile'}: {self.problem}{shown}"


class DesignError(ValueError):
    """Input that is no usable design; carries one :class:`FieldError` for each bad field."""

    def __init__(self, errors: Iterable[FieldError]) -> None:
        self.errors = tuple(errors)
        super().__init__("\n".join(str(error) for error in self.errors))
