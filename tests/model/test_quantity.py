"""Text with units, in and out."""

import contextlib
import math
import re
import string

import numpy as np
import pytest
from hypothesis import example, given
from hypothesis import strategies as st

from model.quantity import (
    MAX_LENGTH,
    QuantityError,
    canonical,
    format_quantity,
    format_si,
    parse_quantity,
    plain_text,
    pretty_unit,
    to_unit,
)

UNITS = [
    "", "um", "nm", "mm", "mS/m", "S/m", "uS/m", "mF/m^2", "S/m^2", "nS", "V", "kHz", "ohm", "mA",
    "uL/min", "kg/m^3", "degC", "K", "%/K", "mPa s", "W/m/K", "pN", "um/s",
]  # fmt: skip


@pytest.mark.parametrize(
    ("text", "unit", "value"),
    [
        ("40 um", "um", 40e-6),
        ("40um", "um", 40e-6),
        ("  40   µm ", "um", 40e-6),  # micro sign
        ("40 μm", "um", 40e-6),  # Greek mu
        ("40", "um", 40e-6),
        (40, "um", 40e-6),
        ("0.04 mm", "um", 40e-6),
        ("4e-5 m", "um", 40e-6),
        ("+.5 um", "um", 0.5e-6),
        ("5. um", "um", 5e-6),
        ("−5 degC", "degC", 268.15),  # true minus sign
        ("22 degC", "degC", 295.15),
        ("22 °C", "degC", 295.15),
        ("22 ℃", "degC", 295.15),
        ("22 C", "degC", 295.15),
        ("71.6 °F", "degC", 295.15),
        ("295.15 K", "degC", 295.15),
        ("4 K", "K", 4.0),
        ("4 °C", "K", 4.0),
        ("4 C", "K", 4.0),
        ("9 degF", "K", 5.0),  # a field in kelvin is a difference
        ("30 mS/m", "mS/m", 0.03),
        ("300 uS/cm", "mS/m", 0.03),
        ("0.3 mS cm^-1", "mS/m", 0.03),
        ("0.3 mS·cm⁻¹", "mS/m", 0.03),
        ("0.3 mS/cm", "S/m", 0.03),
        ("10 mF/m²", "mF/m^2", 0.01),
        ("1 uF/cm^2", "mF/m^2", 0.01),
        ("1 µF/cm**2", "mF/m^2", 0.01),
        ("5 uL/min", "uL/min", 5e-9 / 60),
        ("0.3 mL/hour", "uL/min", 5e-9 / 60),
        ("50 Ω", "ohm", 50.0),
        ("50 \N{OHM SIGN}", "ohm", 50.0),
        ("1 kΩ", "ohm", 1000.0),
        ("2 %/K", "%/K", 0.02),
        ("2 %/°C", "%/K", 0.02),
        ("8 %", "", 0.08),
        ("1e3", "", 1000.0),
        ("0.89 mPa s", "mPa s", 0.89e-3),
        ("0.89 mPa*s", "mPa s", 0.89e-3),
        ("0.89 cP", "mPa s", 0.89e-3),
        ("1.1 g/mL", "kg/m^3", 1100.0),
        ("-0 V", "V", 0.0),
    ],
)
def test_reads(text, unit, value):
    found = parse_quantity(text, unit)
    assert found == pytest.approx(value, rel=1e-14, abs=0.0)
    # however it was typed, it is the same number as in the field's own unit
    assert found == canonical(value, unit)


@pytest.mark.parametrize(
    ("text", "unit", "words"),
    [
        ("", "um", "needs a number with a unit, e.g. in µm"),
        ("wide", "um", "needs a number with a unit"),
        ("um", "um", "needs a number with a unit"),
        ("", "", "needs a number"),
        ("0,5 um", "um", "decimals with a point"),
        ("1.000.000 um", "um", "decimals with a point"),
        ("1 000 um", "um", "no unit"),
        ("1_000 um", "um", "no unit"),
        ("0x10 um", "um", "no unit"),
        ("40 um; drop", "um", "no unit"),
        ("40 um\n50 um", "um", "no unit"),
        ("40 __import__", "um", "no unit"),
        ("40 um^99", "um", "no unit"),
        ("40 (um)", "um", "no unit"),
        ("40 parrots", "um", "“parrots”, which is not known; use µm"),
        ("40 kg", "um", "“kg”, a unit of another kind; use µm"),
        ("40 um^2", "um", "another kind"),
        ("3 um", "", "another kind; use no unit"),
        ("500 rad/s", "kHz", "another kind"),  # an angular frequency would be wrong by 2π
        ("60 rpm", "Hz", "another kind"),
        ("3 deg", "", "another kind"),
        ("3 bit", "", "another kind"),
        ("20 dBm", "V", "not known"),
        ("3 dB", "", "not known"),
        ("3 nan", "", "not known"),
        ("3 inf", "", "not known"),
        ("3 Ym^4 Ym^4 Ym^4 Ym^4", "um", "not known"),
        ("nan", "um", "needs a number"),
        ("inf um", "um", "needs a number"),
        ("1e999 um", "um", "finite"),
        ("1e308 Ym", "um", "finite"),
        ("1e9999 um", "um", "no unit"),
        (math.inf, "um", "finite"),
        (math.nan, "um", "finite"),
        (10**400, "um", "finite"),
        (True, "um", "needs a number"),
        ("4" * (MAX_LENGTH + 1), "um", "longer than 40 characters"),
        ("4 " + "u" * 10000, "um", "longer than 40 characters"),
    ],
)
def test_refuses(text, unit, words):
    with pytest.raises(QuantityError, match=re.escape(words)):
        parse_quantity(text, unit)


@given(st.text(max_size=MAX_LENGTH + 2), st.sampled_from(UNITS))
@example("1e5\x00um", "um")
@example("٣ um", "um")
def test_any_text_is_a_number_or_a_plain_refusal(text, unit):
    with contextlib.suppress(QuantityError):  # anything else fails the test
        assert math.isfinite(parse_quantity(text, unit))


WORDS = st.sampled_from([
    "m", "um", "Ym", "s", "V", "C", "K", "degC", "degF", "dB", "percent", "%", "rad", "count", "e",
    "nan", "inf", "pi", "in", "is", "not", "and", "None", "lambda", "delta", "pH", "M", "L", "h",
]) | st.text(string.ascii_letters, min_size=1, max_size=3)  # fmt: skip
POWERS = st.sampled_from(["", "^2", "^-4", "**3", "^4", "²", "⁻¹"])


@given(
    st.lists(st.tuples(WORDS, POWERS).map("".join), min_size=1, max_size=4),
    st.sampled_from([" ", "*", "/", " / ", "·"]),
    st.sampled_from(UNITS),
)
def test_any_unit_is_known_or_refused(words, between, unit):
    with contextlib.suppress(QuantityError):
        assert math.isfinite(parse_quantity(f"3 {between.join(words)}", unit))


numbers = st.floats(1e-12, 1e12) | st.floats(-1e12, -1e-12) | st.just(0.0) | st.just(-0.0)


@given(numbers, st.sampled_from(UNITS))
def test_text_and_value_go_round_without_change(number, unit):
    value = parse_quantity(number, unit)
    text = plain_text(value, unit)
    assert text.isascii()
    assert parse_quantity(text, unit) == value
    assert plain_text(parse_quantity(text, unit), unit) == text
    assert canonical(value, unit) == value
    assert not text.startswith("-0 ")


@given(numbers, st.sampled_from(UNITS))
def test_value_is_what_was_typed(number, unit):
    value = parse_quantity(repr(number), unit)
    assert to_unit(value, unit) == pytest.approx(number, rel=1e-9, abs=1e-10)
    assert value == parse_quantity(number, unit)


@given(numbers, st.sampled_from(UNITS))
def test_printed_numbers_are_read_back(number, unit):
    value = parse_quantity(number, unit)
    printed = format_quantity(value, unit)
    assert parse_quantity(printed, unit) == pytest.approx(value, rel=1e-9, abs=1e-30)


@pytest.mark.parametrize(
    ("value", "unit", "digits", "text"),
    [
        (40e-6, "um", 3, "40 µm"),
        (295.15, "degC", 4, "22 °C"),
        (268.15, "degC", 4, "−5 °C"),
        (0.123456, "V", 3, "0.123 V"),
        (123456.0, "V", 3, "123000 V"),
        (1.5e-4, "V", 2, "0.00015 V"),
        (78.3752, "", 4, "78.38"),
        (0.02, "%/K", 3, "2 %/K"),
    ],
)
def test_prints_in_the_field_s_unit(value, unit, digits, text):
    assert format_quantity(value, unit, digits) == text


@pytest.mark.parametrize(
    ("value", "unit", "text"),
    [
        (0.0, "N", "0 N"),
        (-0.0, "N", "0 N"),
        (999.4, "Hz", "999 Hz"),
        (999.6, "Hz", "1 kHz"),
        (999.95e3, "Hz", "1 MHz"),
        (1e-15, "N", "1 fN"),
        (-2.5e-12, "N", "−2.5 pN"),
        (1e12, "Hz", "1 THz"),
        (math.inf, "V", "no limit"),
        (-math.inf, "V", "−∞"),
        (math.nan, "V", "none"),
    ],
)
def test_prints_with_prefix(value, unit, text):
    assert format_si(value, unit) == text


@given(st.floats(1e-15, 1e14), st.sampled_from([-1.0, 1.0]))
def test_prefix_leaves_one_to_three_digits_before_the_point(size, sign):
    text = format_si(sign * size, "Hz")
    number, unit = text.split(" ")
    magnitude = float(number.replace("−", "-"))
    assert np.sign(magnitude) == sign
    assert abs(magnitude) >= 1.0
    assert abs(magnitude) < 1000.0 or unit == "THz"
    assert parse_quantity(text, "Hz") == pytest.approx(sign * size, rel=5.1e-3)


def test_pretty_units():
    assert [pretty_unit(unit) for unit in ("um/s", "W/m/K", "mF/m^2", "ohm", "mPa s")] == [
        "µm/s",
        "W/m/K",
        "mF/m²",
        "Ω",
        "mPa s",
    ]


def test_a_declared_unit_that_is_not_known_is_an_error_of_the_program():
    with pytest.raises(LookupError, match="furlongs"):
        parse_quantity("3", "furlongs per parrot")
