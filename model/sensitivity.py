"""Which input moves the headroom most: elasticities of what binds, by central differences."""

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

import numpy as np
from pydantic import BaseModel

from model.conditions import Conditions
from model.corridor import rules
from model.declare import Quantities, Quantity, declarations, matters
from model.design import Design
from model.evaluate import Evaluation
from model.quantity import to_unit

#: Relative step of an input, and that of a temperature in K.
_STEP, _KELVIN = 0.01, 1.0
#: Parts of a design that are no chip: they need no new solve.
_PARTS = ("task", "liquid", "drive", "electrode", "flow", "limits")


@dataclass(frozen=True)
class Sensitivity:
    """How the headroom answers to one input.

    Parameters
    ----------
    path, label
        Of the field in the profile, and its words, with the particle's name where it is one's.
    elasticity
        Relative change of the headroom over that of the input; of a temperature per 1 % of
        headroom and K.
    """

    path: str
    label: str
    elasticity: float


def sensitivities(result: Evaluation) -> tuple[Sensitivity, ...]:
    """Elasticities d ln headroom/d ln input of the binding rule, the largest first.

    The chip's own lengths are left out, as each would need a new solve; what has no number, is 0
    or does not matter too. Inputs that do not move the rule are left out.
    """
    binding = result.binding.rule
    if not 0.0 < result.binding.headroom < np.inf:
        return ()

    def headroom(design: Design) -> float | None:
        frequency = np.array([design.drive.frequency])
        conductivity = np.array(design.liquid.conductivity)
        at = Conditions(design, result.patterns, frequency, conductivity)
        voltage = design.drive.voltage
        for rule in rules(at, binding.id):
            if rule.law.subject == binding.law.subject:
                bound = float(rule.law.bound().reshape(-1)[0])
                return bound / voltage if rule.law.sense == "most" else voltage / bound
        return None

    found = []
    for path, label, declared, value in _inputs(result.design):
        offset = to_unit(0.0, declared.unit) != 0.0
        step = _KELVIN if offset else _STEP * value
        ends = [_with(result.design, path, value + sign * step) for sign in (1.0, -1.0)]
        up, down = (headroom(end) for end in ends)
        if not (up and down and np.isfinite(up) and np.isfinite(down)):
            continue
        slope = float(np.log(up / down)) / (2.0 * (0.01 if offset else _STEP))
        if abs(slope) > 1e-6:
            found.append(Sensitivity(path, label, slope))
    return tuple(sorted(found, key=lambda one: -abs(one.elasticity)))


def _inputs(design: Design) -> Iterator[tuple[str, str, Quantity, float]]:
    """Path, words, declaration and value of every number that may be moved."""
    for key in _PARTS:
        yield from _numbers(getattr(design, key), key, "")
    for index, particle in enumerate(design.particles):
        yield from _numbers(particle, f"particles.{index}", particle.name)


def _numbers(part: BaseModel, path: str, owner: str) -> Iterator[tuple[str, str, Quantity, float]]:
    known = dict(declarations(type(part)))
    for name, info in type(part).model_fields.items():
        declared, value = known.get(info.alias or name), getattr(part, name)
        place = f"{path}.{name}"
        if isinstance(declared, Quantity) and not isinstance(declared, Quantities):
            if value and matters(part, declared):
                words = declared.label
                yield place, f"{words}, {owner}" if owner else words, declared, value
        elif isinstance(value, BaseModel):
            yield from _numbers(value, place, f"{owner}, {name}" if owner else name)
        elif isinstance(value, tuple):
            for index, item in enumerate(value):
                if isinstance(item, BaseModel):
                    part_name = getattr(item, "name", name)
                    yield from _numbers(item, f"{place}.{index}", f"{owner}, {part_name}")


def _with(part: Any, path: str, value: float) -> Any:
    """Copy of a design with one value changed, nothing checked: the step is small."""
    key, _, rest = path.partition(".")
    if isinstance(part, tuple):
        index = int(key)
        inner = _with(part[index], rest, value)
        return (*part[:index], inner, *part[index + 1 :])
    inner = _with(getattr(part, key), rest, value) if rest else value
    return part.model_copy(update={key: inner})
