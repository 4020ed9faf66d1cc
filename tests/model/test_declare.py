"""Declared fields: what they take, what they refuse, and in which words."""

import math
from typing import Annotated

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from pydantic import Field, ValidationError

from model.declare import (
    FROM_PERSON,
    Choice,
    Count,
    Declared,
    Flag,
    Part,
    Quantity,
    Text,
    declarations,
)
from model.quantity import QuantityError, parse_quantity

WIDTH = Quantity("Bar width", "Of each bar.", unit="um", low="1 um", high="1 mm")


class Sample(Part):
    """A part with a field of every kind."""

    width: Annotated[float, WIDTH] = 40e-6
    ratio: Annotated[float, Quantity("Ratio", "Pure.", unit="", low="0", high="1")] = 0.5
    warm: Annotated[
        float, Quantity("Stage", "Warmth.", unit="degC", low="0 degC", high="95 degC")
    ] = 295.15
    lid: Annotated[
        float | None,
        Quantity("Lid", "Or the usual.", unit="mm", low="0 mm", high="9 mm", optional=True),
    ] = None
    bars: Annotated[int, Count("Bars", "Across the flow.", low=2, high=1000)] = 60
    shape: Annotated[
        str, Choice("Shape", "Of the end.", options={"round": "round", "flat": "cut flat"})
    ] = "round"
    alive: Annotated[bool, Flag("Alive", "Or not.")] = False
    title: Annotated[str, Text("Title", "Shown.", longest=10, needed=True)] = "one"
    note: Annotated[str, Text("Note", "Shown."), Field(alias="remark")] = ""


def typed(**values):
    return Sample.model_validate(values, context=FROM_PERSON)


def refusal(**values):
    with pytest.raises(ValidationError) as caught:
        typed(**values)
    (error,) = caught.value.errors()
    assert error["type"] in ("declared", "extra_forbidden")
    assert ".".join(map(str, error["loc"])) == next(iter(values))
    return error["msg"]


def test_bare_numbers_are_si_in_code_and_shown_units_from_a_person():
    assert Sample(width=40e-6).width == 40e-6
    assert typed(width=40).width == 40e-6
    assert typed(width="40").width == Sample(width="40").width == 40e-6
    assert typed(width="0.04 mm").width == 40e-6
    assert typed(warm=22).warm == Sample(warm=295.15).warm == 295.15
    assert typed(ratio="50 %").ratio == typed(ratio=0.5).ratio == 0.5


def test_code_and_text_compare_equal():
    assert Sample(width=1 / 3 * 1e-4) == typed(width="33.33333333 um")
    assert hash(Sample(width=40e-6)) == hash(typed(width="40 um"))
    assert Sample(width=np.float64(40e-6)) == typed(width=40)
    # −0 and 0 are one value, so they must be one text as well
    assert WIDTH.read("1 um", True) == WIDTH.read(1.0, True)
    assert math.copysign(1.0, typed(ratio=-0.0).ratio) == 1.0


@pytest.mark.parametrize("edge", ["1 um", "1 mm", "0.001 mm", "1000", "1000 um", "1e6 nm"])
def test_range_is_inclusive_in_every_unit(edge):
    assert 1e-6 <= typed(width=edge).width <= 1e-3


@pytest.mark.parametrize(
    ("value", "words"),
    [
        ("0.999 um", "must be from 1 to 1000 µm"),
        ("1.001 mm", "must be from 1 to 1000 µm"),
        (-40, "must be from 1 to 1000 µm"),
        (40e-6, "must be from 1 to 1000 µm"),  # SI typed by a person
        ("40 kg", "is in “kg”, a unit of another kind; use µm"),
        ("40 parrots", "has the unit “parrots”, which is not known; use µm"),
        ("{problem}", "needs a number with a unit, e.g. in µm"),
        ("", "needs a number with a unit, e.g. in µm"),
        (math.nan, "needs a finite number"),
        (-math.inf, "needs a finite number"),
        (10**400, "needs a finite number"),
        (None, "needs a number, from 1 to 1000 µm"),
        ([40], "needs a number, from 1 to 1000 µm"),
        ({"um": 40}, "needs a number, from 1 to 1000 µm"),
        (True, "needs a number with a unit, e.g. in µm"),
        (4j, "needs a number, from 1 to 1000 µm"),
        (b"40 um", "needs a number, from 1 to 1000 µm"),
    ],
)
def test_refused_quantities(value, words):
    assert refusal(width=value) == words


@pytest.mark.parametrize("value", [True, math.nan, math.inf, 10**400, 1.0, "40 kg", None])
def test_code_gets_the_same_refusals(value):
    with pytest.raises(ValidationError):
        Sample(width=value)


def test_ranges_in_words():
    told = {name: one.allowed() for name, one in declarations(Sample)}
    assert told["width"] == "from 1 to 1000 µm"
    assert told["ratio"] == "from 0 to 1"
    assert told["warm"] == "from 0 to 95 °C"
    assert told["bars"] == "from 2 to 1000"
    assert told["shape"] == "one of round, flat"


def test_optional_means_the_usual_one():
    assert typed(lid=None).lid is typed(lid="").lid is Sample().lid is None
    assert typed(lid=0).lid == 0.0
    assert refusal(lid="10 mm") == "must be from 0 to 9 mm"


@pytest.mark.parametrize("value", [60, "60", " 60 ", 60.0])
def test_counts(value):
    assert typed(bars=value).bars == 60
    assert type(typed(bars=value).bars) is int


@pytest.mark.parametrize(
    "value", [60.5, "60.5", "6e1", "", "sixty", "²", None, True, [60], math.nan, math.inf, "-60"]
)
def test_refused_counts(value):
    assert refusal(bars=value) == "needs a whole number, from 2 to 1000"


@pytest.mark.parametrize("value", [1, 1001, "1001", 1e300, 10**400])
def test_counts_out_of_range(value):
    assert refusal(bars=value) == "must be from 2 to 1000"


@pytest.mark.parametrize("value", ["Round", "cut flat", "", None, 1, ["round"], {"round": 1}])
def test_choices_are_words(value):
    assert refusal(shape=value) == "must be one of round, flat"
    assert typed(shape="flat").shape == "flat"


@pytest.mark.parametrize("value", [1, 0, "true", "yes", None, []])
def test_flags_are_true_or_false(value):
    assert refusal(alive=value) == "must be true or false"
    assert typed(alive=True).alive is True


@pytest.mark.parametrize(
    ("value", "words"),
    [
        ("", "must not be empty"),
        (" \t ", "must not be empty"),
        ("x" * 11, "must not be longer than 10 characters"),
        ("a\nb", "must be one line of printable characters"),
        ("a\x00b", "must be one line of printable characters"),
        ("a\u202eb", "must be one line of printable characters"),  # turns the text round
        ("a\ud800b", "must be one line of printable characters"),  # half a character
        (7, "must be text"),
        (None, "must be text"),
    ],
)
def test_refused_text(value, words):
    assert refusal(title=value) == words


def test_text_is_trimmed_and_kept():
    assert typed(title="  Zelle β  ").title == "Zelle β"
    assert typed(remark="").note == ""


def test_unknown_keys_are_errors():
    assert "not permitted" in refusal(widht=40)


def test_every_error_at_once():
    with pytest.raises(ValidationError) as caught:
        typed(width="wide", bars=0, shape="square", alive="no", title="")
    assert len(caught.value.errors()) == 5


def test_parts_are_frozen():
    with pytest.raises(ValidationError):
        Sample().width = 1e-6


def test_declarations_come_in_order_with_profile_keys():
    assert [name for name, _ in declarations(Sample)] == [
        "width", "ratio", "warm", "lid", "bars", "shape", "alive", "title", "remark",
    ]  # fmt: skip
    assert all(isinstance(one, Declared) and hash(one) for _, one in declarations(Sample))


@given(
    st.floats(1.0, 1000.0), st.floats(0.0, 1.0), st.floats(0.0, 95.0), st.none() | st.floats(0, 9)
)
def test_profile_text_and_back(width, ratio, warm, lid):
    part = typed(width=width, ratio=ratio, warm=warm, lid=lid)
    known = dict(declarations(Sample))
    names = {"width": part.width, "ratio": part.ratio, "warm": part.warm, "lid": part.lid}
    again = typed(**{name: known[name].text(value) for name, value in names.items()})
    assert again == part
    assert hash(again) == hash(part)
    assert {name: known[name].text(getattr(again, name)) for name in names} == {
        name: known[name].text(value) for name, value in names.items()
    }


anything = st.recursive(
    st.none() | st.booleans() | st.integers() | st.floats() | st.text(max_size=50) | st.binary(),
    lambda inner: st.lists(inner, max_size=3) | st.dictionaries(st.text(), inner, max_size=3),
    max_leaves=5,
)


@given(st.dictionaries(st.sampled_from([*dict(declarations(Sample))]), anything))
def test_anything_is_a_part_or_a_list_of_refusals(values):
    try:
        part = typed(**values)
    except ValidationError as caught:
        # the words are sentences of the declarations, never of the validator
        kinds = {error["type"] for error in caught.errors()}
    else:
        assert hash(part) == hash(part.model_copy())
        kinds = {"declared"}
    assert kinds == {"declared"}


def test_reading_without_a_validator():
    assert WIDTH.read("40 um", from_person=False) == WIDTH.read(40, from_person=True) == 40e-6
    with pytest.raises(QuantityError, match="from 1 to 1000 µm"):
        WIDTH.read(40.0, from_person=False)
    assert WIDTH.text(40e-6) == "40 um"
    assert parse_quantity(WIDTH.text(40e-6), "um") == 40e-6
