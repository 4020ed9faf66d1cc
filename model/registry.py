"""Finds the particle kinds, layouts, tasks and limits: one file each, no list to keep."""

import importlib
import pkgutil
from collections.abc import Callable, Mapping
from typing import Any, TypeVar

from pydantic import GetCoreSchemaHandler
from pydantic_core import CoreSchema, core_schema

from model.declare import Part

T = TypeVar("T")


class RegistryError(ImportError):
    """A file of a registry package that declares no id, or an id that is taken."""


def scan(package: str, base: type[T], id_of: Callable[[type[T]], str]) -> dict[str, type[T]]:
    """Import every module of `package` in sorted order and collect its subclass of `base`.

    Parameters
    ----------
    package
        Dotted name of the package whose modules are the entries.
    base
        Each module must define exactly one public subclass of it.
    id_of
        Reads the id from the class.

    Raises
    ------
    RegistryError
        If a module defines none or several, or two modules claim one id.
    """
    folder = importlib.import_module(package).__path__
    found: dict[str, type[T]] = {}
    for name in sorted(info.name for info in pkgutil.iter_modules(folder)):
        module = importlib.import_module(f"{package}.{name}")
        entries = [
            value
            for value in vars(module).values()
            if isinstance(value, type)
            and issubclass(value, base)
            and value.__module__ == module.__name__
            and not value.__name__.startswith("_")
        ]
        if len(entries) != 1:
            raise RegistryError(f"{package}.{name} must define one {base.__name__}")
        key = id_of(entries[0])
        if not key or key in found:
            raise RegistryError(f"{package}.{name}: the id {key!r} is missing or taken")
        found[key] = entries[0]
    return found


def tag(key: str) -> Callable[[type[Part]], str]:
    """Read an entry's id from the default of its field `key` (``kind`` or ``layout``)."""

    def read(entry: type[Part]) -> str:
        info = entry.model_fields.get(key)
        return info.default if info is not None and isinstance(info.default, str) else ""

    return read


class OneOf:
    """Annotation for a field that holds one of the registered parts, told apart by `key`."""

    def __init__(self, entries: Mapping[str, type[Any]], key: str) -> None:
        self.entries, self.key = entries, key

    def __get_pydantic_core_schema__(
        self, source: Any, handler: GetCoreSchemaHandler
    ) -> CoreSchema:
        """Validate as a tagged union over the entries."""
        return core_schema.tagged_union_schema(
            {name: handler.generate_schema(entry) for name, entry in self.entries.items()},
            discriminator=self.key,
        )
