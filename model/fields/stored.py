"""Results that are kept: read-only arrays, and nothing pickled that can be made again."""

from dataclasses import Field
from typing import Any, ClassVar

import numpy as np

from model.arrays import read_only


class Stored:
    """Base of frozen dataclasses whose arrays stay read-only, also after unpickling.

    Cached properties are left out of the pickle.
    """

    __dataclass_fields__: ClassVar[dict[str, Field[Any]]]

    def __post_init__(self) -> None:
        for value in vars(self).values():
            if isinstance(value, np.ndarray):
                read_only(value)

    def __reduce__(self) -> tuple[Any, ...]:
        return type(self), tuple(getattr(self, name) for name in self.__dataclass_fields__)
