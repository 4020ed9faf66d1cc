"""What tests share: the demo designs, each chip solved once, and designs made at random."""

import copy
import dataclasses
import os
from pathlib import Path

import pytest
from hypothesis import settings
from hypothesis import strategies as st
from pydantic import ValidationError
from threadpoolctl import threadpool_limits

from model.declare import FROM_PERSON, Choice, Count, Digest, Flag, Quantity, Text, declarations
from model.design import Design, Drive, Flow
from model.evaluate import evaluate
from model.fields.solve import solve_chip
from model.layouts import LAYOUTS
from model.limits import LIMITS
from model.liquid.liquid import Liquid
from model.particles import PARTICLES
from model.profile import document, load_profile, parse_design
from model.quantity import plain_text
from model.tasks import TASKS

# The same examples in every run, so that a change and not chance decides what passes. To search
# on with new ones: HYPOTHESIS_PROFILE=search python -m pytest -m "not browser"
settings.register_profile("steady", derandomize=True)
settings.register_profile("search", max_examples=300)
settings.load_profile(os.environ.get("HYPOTHESIS_PROFILE", "steady"))

PROFILES = Path(__file__).resolve().parent.parent / "demo_profiles"


@pytest.fixture(scope="session", autouse=True)
def _one_thread():
    """Solves run on one thread, as in the program: two hinder each other on a busy machine."""
    with threadpool_limits(1, "blas"):
        yield


@pytest.fixture(scope="session")
def demos():
    """Every demo design by the name of its file."""
    return {path.stem: load_profile(path) for path in sorted(PROFILES.glob("*.toml"))}


@pytest.fixture(scope="session")
def yeast(demos):
    return demos["rinse-water-yeast"]


@pytest.fixture(scope="session")
def solved():
    """Patterns of a design's chip, each chip solved once in a session."""
    kept = {}

    def patterns_of(design):
        key = (design.chip, design.liquid.heat_conductivity)
        if key not in kept:
            kept[key] = solve_chip(*key)
        return kept[key]

    return patterns_of


@pytest.fixture(scope="session")
def patterns(yeast, solved):
    return solved(yeast)


@pytest.fixture(scope="session")
def results(demos, solved):
    """Every demo evaluated."""
    return {name: evaluate(design, solved(design)) for name, design in demos.items()}


@pytest.fixture(scope="session")
def ideal():
    """Patterns as of electrodes without any interface and walls that carry nothing."""

    def without_interface(patterns):
        tiny = 1e-20  # λ → 0 with all c²λ as they are: λℓ never counts
        modes = tuple(
            dataclasses.replace(one, rates=one.rates * tiny, parts=one.parts / tiny**0.5)
            for one in patterns.response.components
        )
        response = dataclasses.replace(patterns.response, components=modes)
        return dataclasses.replace(patterns, response=response, wall_factors={})

    return without_interface


@pytest.fixture(scope="session")
def vary():
    """A design with a few fields changed, given by their places in the profile."""
    return varied


@pytest.fixture(scope="session")
def designs():
    """Strategy of designs whose every field is drawn at random."""
    return random_designs()


def varied(design, changes):
    data = copy.deepcopy(document(design))
    for path, value in changes.items():
        *parents, last = path.split(".")
        place = data
        for key in parents:
            place = place[int(key)] if key.isdecimal() else place.setdefault(key, {})
        place[last] = value
    return parse_design(data)


LINE = st.text(st.characters(codec="utf-8", exclude_categories=["C", "Z"]), max_size=20)


def value_of(declared):
    """Strategy of everything that a declared field takes, as a profile has it."""
    match declared:
        case Quantity():
            low, high = declared.range()
            shown = st.floats(low, high).map(lambda value: declared.text(declared.read(value, 0)))
            return st.sampled_from([declared.low, declared.high]) | shown
        case Count():
            return st.integers(declared.low, declared.high)
        case Choice():
            return st.sampled_from(sorted(declared.options))
        case Flag():
            return st.booleans()
        case Digest():
            return st.just("") | st.text("0123456789abcdef", min_size=8, max_size=64)
        case Text(needed=True):
            return LINE.filter(bool)
        case Text():
            return LINE
    raise TypeError(declared)


def table_of(part, **fixed):
    """Strategy of a table with every declared key of a part; `fixed` ones as given."""
    needed = {key: value_of(found) for key, found in declarations(part) if not found.optional}
    spare = {key: value_of(found) for key, found in declarations(part) if found.optional}
    needed = {key: value for key, value in needed.items() if key not in fixed}
    given = {key: st.just(value) for key, value in fixed.items()}
    return st.fixed_dictionaries({**needed, **given}, optional=spare)


def random_chips(name):
    """Strategy of tables of one layout; what does not fit together is drawn again."""
    layout = LAYOUTS[name]
    wall = layout.model_fields["floor"].annotation
    walls = st.fixed_dictionaries({"floor": table_of(wall, outside="held"), "lid": table_of(wall)})
    tables = st.builds(lambda own, both: {"layout": name, **own, **both}, table_of(layout), walls)
    return tables.filter(lambda table: chip_of(table) is not None)


def chip_of(table):
    """Chip of a table as a profile has it; None if its lengths do not fit together."""
    try:
        return LAYOUTS[table["layout"]].model_validate(table, context=FROM_PERSON)
    except ValidationError:
        return None


@st.composite
def random_designs(draw):
    chip = draw(st.sampled_from(sorted(LAYOUTS)).flatmap(random_chips))
    height = chip_of(chip).height
    count = draw(st.integers(1, 11))
    particles = [draw(random_particle(f"{index} ", 0.25 * height)) for index in range(count)]
    particles[0]["role"] = "collect"
    kind = draw(st.sampled_from(sorted(TASKS)))
    if LAYOUTS[chip["layout"]].view == "plan" and kind in ("lift", "deflect"):
        kind = "hold"  # a plan has no upward force and no bars
    if kind == "separate":
        particles += [draw(random_particle(f"{count} ", 0.25 * height)) | {"role": "pass"}]
    level = plain_text(height * draw(st.floats(0.3, 0.7)), "um")
    off = draw(st.lists(st.sampled_from(sorted(LIMITS)), max_size=3, unique=True))
    switches = [{"limit": name, "reason": draw(LINE.filter(bool))} for name in off]
    limits = draw(table_of(Design.model_fields["limits"].annotation))
    return parse_design(
        {
            "schema": 1,
            "title": draw(LINE),
            "question": draw(LINE),
            "task": draw(table_of(TASKS[kind], working_height=level)) | {"kind": kind},
            "chip": chip,
            "liquid": draw(table_of(Liquid)),
            "drive": draw(table_of(Drive)),
            "flow": draw(table_of(Flow)),
            "limits": {**limits, "off": switches},
            "particle": particles,
        }
    )


def material():
    return st.fixed_dictionaries(
        {
            "relative_permittivity": st.floats(1.0, 1000.0),
            "conductivity": st.floats(0.0, 1e3).map(lambda value: plain_text(value, "S/m")),
        }
    )


@st.composite
def random_particle(draw, prefix, largest):
    """A particle whose radius is at most `largest`, m, and its layers no thicker."""
    kind = draw(st.sampled_from(["solid-sphere", "shelled-sphere"]))
    radius = min(50e-6, largest) * draw(st.floats(0.2, 1.0))
    table = draw(table_of(PARTICLES[kind], radius=plain_text(radius, "um")))
    table |= {"kind": kind, "name": prefix + draw(LINE)}
    if kind == "shelled-sphere":
        layers = st.builds(lambda found, thick: {**found, "thickness": plain_text(thick, "nm")},
                           material(), st.floats(1e-3 * radius, 0.2 * radius))  # fmt: skip
        membranes = st.just({"capacitance": "10 mF/m^2", "conductance": "0 S/m^2"})
        table |= {
            "core": draw(material()),
            "layers": draw(st.lists(layers | membranes, min_size=1, max_size=4)),
        }
    return table
