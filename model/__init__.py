"""The physics of dielectrophoresis chips: from a profile to the voltage corridor."""

from model.design import Design
from model.errors import DesignError, FieldError
from model.evaluate import Evaluation, evaluate
from model.fields.solve import solve_chip
from model.files import Folder
from model.profile import load_profile

__all__ = [
    "Design",
    "DesignError",
    "Evaluation",
    "FieldError",
    "Folder",
    "evaluate",
    "load_profile",
    "solve_chip",
]
