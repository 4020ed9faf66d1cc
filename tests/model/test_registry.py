"""Registries: faults are told at the start, and every entry keeps the rules of its kind."""

import numpy as np
import pytest

from model.conditions import Conditions
from model.declare import (
    Choice,
    Count,
    Declared,
    Flag,
    Quantities,
    Quantity,
    Text,
    declarations,
)
from model.layout import Layout
from model.layouts import LAYOUTS
from model.limit import Limit
from model.limits import LIMITS
from model.particle import Particle
from model.particles import PARTICLES
from model.quantity import format_quantity, parse_quantity, to_unit
from model.registry import RegistryError, scan, tag
from model.task import Task
from model.tasks import TASKS

ENTRY = """
from model.limit import Limit

class {name}(Limit):
    id = {id!r}
"""


@pytest.fixture
def package(tmp_path, monkeypatch, request):
    """Make an importable package of the given files and return its name."""
    name = f"entries_{abs(hash(request.node.name))}"
    monkeypatch.syspath_prepend(str(tmp_path))

    def make(**files):
        folder = tmp_path / name
        folder.mkdir()
        (folder / "__init__.py").write_text("")
        for stem, text in files.items():
            (folder / f"{stem}.py").write_text(text)
        return name

    return make


def limit_id(entry):
    return getattr(entry, "id", "")


def test_entries_are_found_in_order(package):
    name = package(
        zeta=ENTRY.format(name="First", id="one"),
        alpha=ENTRY.format(name="Second", id="two") + "\nclass _Private(Limit):\n    id = 'no'\n",
    )
    assert list(scan(name, Limit, limit_id)) == ["two", "one"]


@pytest.mark.parametrize(
    ("files", "words"),
    [
        ({"empty": ""}, "must define one Limit"),
        ({"borrowed": "from model.limits.force_sign import ForceSign"}, "must define one Limit"),
        (
            {"two": ENTRY.format(name="A", id="a") + ENTRY.format(name="B", id="b")},
            "must define one Limit",
        ),
        ({"none": ENTRY.format(name="A", id="")}, "missing or taken"),
        ({"lost": "from model.limit import Limit\nclass A(Limit): pass"}, "missing or taken"),
        (
            {"a": ENTRY.format(name="A", id="same"), "b": ENTRY.format(name="B", id="same")},
            "missing or taken",
        ),
    ],
)
def test_faulty_packages_fail_at_the_start(package, files, words):
    with pytest.raises(RegistryError, match=words):
        scan(package(**files), Limit, limit_id)


def test_a_part_without_its_tag_has_no_id():
    assert tag("kind")(Particle) == ""
    assert tag("layout")(Layout) == ""
    assert tag("nothing")(Particle) == ""


PARTS = {
    f"{registry}: {name}": entry
    for registry, entries in (("particle", PARTICLES), ("layout", LAYOUTS), ("task", TASKS))
    for name, entry in entries.items()
}


@pytest.mark.parametrize("part", PARTS.values(), ids=PARTS)
def test_every_field_of_a_part_is_declared(part):
    declared = dict(declarations(part))
    for name, info in part.model_fields.items():
        if name in ("kind", "layout") or (info.alias or name) in declared:
            continue
        assert info.annotation is not None, name
        assert not isinstance(info.annotation, type) or hasattr(info.annotation, "model_fields")


@pytest.mark.parametrize("part", PARTS.values(), ids=PARTS)
def test_a_part_says_what_it_is(part):
    assert part.__doc__
    assert len(part.__doc__.strip()) > 20
    keys = [key for key, _ in declarations(part)]
    assert len(keys) == len(set(keys))
    for key in keys:
        assert key.isidentifier()
        assert key == key.lower()


def all_declared():
    from model.design import Design, Drive, Flow
    from model.liquid.liquid import Liquid
    from model.liquid.recipe import Ingredient, Recipe
    from model.thresholds import SwitchedOff
    from model.walls import Wall

    limits = Design.model_fields["limits"].annotation
    parts = (*PARTS.values(), Design, Drive, Flow, Ingredient, Liquid, Recipe, SwitchedOff, Wall)
    for part in (*parts, limits):
        for key, found in declarations(part):
            info = next(
                item for name, item in part.model_fields.items() if (item.alias or name) == key
            )
            yield pytest.param(found, info, id=f"{part.__name__}.{key}")


@pytest.mark.parametrize(("found", "info"), list(all_declared()))
def test_a_declared_field_can_be_shown_and_its_default_used(found, info):
    assert isinstance(found, Declared)
    assert found.label[:1].isupper()
    assert found.help.endswith(".")
    match found:
        case Quantities():
            low, high = found.range()
            assert low < high
            assert found.read([found.low] * found.count, True) == (low,) * found.count
            assert found.read((high,) * found.count, False) == (high,) * found.count
        case Quantity():
            low, high = found.range()
            assert low < high
            assert to_unit(parse_quantity(found.low, found.unit), found.unit) < float("inf")
            assert found.read(found.low, True) == found.read(low, False) == low
            assert found.read(found.high, True) == found.read(high, False) == high
        case Count():
            assert found.low < found.high
        case Choice():
            assert len(found.options) > 1
        case Flag() | Text():
            pass
    default = info.default
    if default is None:
        assert found.optional
    elif not info.is_required():
        assert found.read(default, False) == default
        assert found.read(found.text(default), True) == default


@pytest.mark.parametrize("entry", [*LIMITS.values(), *TASKS.values()], ids=[*LIMITS, *TASKS])
def test_a_rule_explains_itself(entry):
    for words in (entry.label, entry.why, entry.source, entry.remedy):
        assert isinstance(words, str)
        assert len(words) > 5
    assert entry.label == entry.label.lower()
    assert entry.why.endswith(".")
    assert entry.remedy.endswith(".")
    assert format_quantity(1.0, entry.unit)


@pytest.mark.parametrize("name", LIMITS)
def test_a_limit_and_its_threshold_agree(name):
    limit = LIMITS[name]
    assert limit.id == name
    if limit.threshold is not None:
        low, high = limit.threshold.range()
        assert low < limit.default < high
        assert limit.threshold.unit == limit.unit
        assert limit.threshold.source
        assert to_unit(limit.default, limit.unit) < float("inf")


CASES = {
    "as it is": {},
    "no flow": {"flow.rate": "0 uL/min"},
    "negative": {"task.dielectrophoresis": "negative"},
    "hot stage": {"liquid.temperature": "90 degC"},
    "salty": {"liquid.conductivity": "10 S/m"},
    "clean": {"liquid.conductivity": "0.01 mS/m", "liquid.temperature": "0 degC"},
    "short duty": {"drive.duty": 0.001},
    "two to collect": {"particle.1.role": "collect", "particle.1.must_live": True},
}


@pytest.mark.parametrize("case", CASES)
@pytest.mark.parametrize("name", [*LIMITS, *TASKS])
def test_laws_have_bounds_that_are_numbers(name, case, yeast, vary, patterns):
    design = vary(yeast, CASES[case])
    if name in TASKS:
        task = TASKS[name](working_height=design.task.working_height)
        design = design.model_copy(update={"task": task})
    at = Conditions(
        design, patterns, np.geomspace(1e2, 1e9, 60), np.array([[1e-5], [1e-2], [10.0]])
    )
    rule = LIMITS.get(name, design.task)
    names = {particle.name for particle in design.particles}
    laws = rule.laws(at)
    if name in TASKS:
        least = [law.subject for law in laws if law.sense == "least"]
        assert least == [particle.name for particle in design.collected]
    for law in laws:
        bound = np.broadcast_to(law.bound(), (3, 60))
        assert not np.isnan(bound).any()
        assert (bound >= 0.0).all()
        assert not np.isnan(law.value(5.0)).any()
        assert np.isfinite(law.allowed)
        assert law.subject in names | {""}
        assert law.power in (0, 1, 2, 4)


def test_bases_are_bases():
    assert all(issubclass(entry, Particle) for entry in PARTICLES.values())
    assert all(issubclass(entry, Layout) for entry in LAYOUTS.values())
    assert all(issubclass(entry, Task) for entry in TASKS.values())
    assert all(isinstance(entry, Limit) for entry in LIMITS.values())
