"""Reading field tables: every form that exports come in, and every fault in words."""

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from model.fields.field_header import FieldTableError
from model.fields.field_points import arranged
from model.fields.field_table import MAX_BYTES, MOST_ROWS, read_field_table

HEAD = "# voltage: 1 V rms\nx (um),y (um),Ex (V/m),Ey (V/m)\n"


def linear(x, y):
    """Ê of φ = x² − y² in µm², in V/m."""
    return -2.0 * x, 2.0 * y


def rows(places, separator=",", field=linear):
    return [
        separator.join(f"{value:.12g}" for value in (*place, *field(*place))) for place in places
    ]


def square(count=6):
    return [(float(x), float(y)) for x in range(count) for y in range(count)]


def table(text):
    return read_field_table(text.encode())


def plain(lines):
    return "\n".join(lines) + "\n"


GOOD = HEAD + plain(rows(square()))


def test_a_plain_table_is_read():
    found = table(GOOD)
    assert found.points.shape == (36, 2)
    assert found.lines[0] == 3
    np.testing.assert_allclose(found.points[7], [1e-6, 1e-6])
    np.testing.assert_allclose(found.field[7], [-2.0, 2.0])


@pytest.mark.parametrize(
    "text",
    [
        GOOD.replace(",", ";"),
        GOOD.replace(",", "\t"),
        GOOD.replace("\n", "\r\n"),
        "\ufeff" + GOOD,
        GOOD.replace("#", "%"),
        GOOD.replace("# voltage: 1 V rms", "% solver: any\n\n#  Voltage = 1 V RMS."),
        GOOD.replace("x (um),y (um),Ex (V/m),Ey (V/m)", '"X [um]", "Y [µm]", "EX [V/m]", ey (V/m)'),
        GOOD.replace("Ex (V/m)", "Ex real (V/m)").replace("Ey (V/m)", "Re(Ey) (V/m)")
        .replace("Re(Ey)", "Re Ey"),
        HEAD + plain(line + "," for line in rows(square())),
        GOOD + "# the end\n",
        "x (um),y (um),Ex (1/m),Ey (1/m)\n" + plain(rows(square())),
        HEAD.replace("V/m", "V/m") + plain(reversed(rows(square()))),
        HEAD + plain([*rows(square()), rows(square())[3]]),  # one place twice, the same
    ],
)  # fmt: skip
def test_other_forms_say_the_same(text):
    expected, found = table(GOOD), table(text)
    order = np.lexsort(found.points.T[::-1])
    np.testing.assert_allclose(found.points[order], expected.points, atol=1e-15)
    np.testing.assert_allclose(found.field[order], expected.field)


def test_wide_letters_are_read():
    found = read_field_table(GOOD.encode("utf-16"))
    np.testing.assert_allclose(found.field, table(GOOD).field)


def test_decimal_commas_are_read():
    text = HEAD.replace(",", ";") + plain(
        row.replace(",", ";").replace(".", ",") for row in rows([(x + 0.5, y) for x, y in square()])
    )
    np.testing.assert_allclose(table(text).points[0], [0.5e-6, 0.0])


@pytest.mark.parametrize(
    ("stated", "unit", "expected"),
    [
        # a sine: rms is amplitude/√2, and peak to peak twice the amplitude
        ("voltage: 4 V peak to peak", "V/m", 1.0 / 2.0),
        ("voltage: 4 Vpp", "V/m", 1.0 / 2.0),
        ("voltage: 2 V peak", "V/m", 1.0 / 2.0),
        ("voltage: 2 V amplitude", "V/m", 1.0 / 2.0),
        ("voltage: 2 V rms", "V/m", 1.0 / 2.0),
        ("voltage: 2 V static", "V/m", 1.0 / 2.0),
        ("voltage: 500 mV static", "V/m", 2.0),
        ("voltage: 4 V peak to peak\n# field: rms", "V/m", math.sqrt(2) / 2.0),
        ("voltage: 2 V rms\n# field: peak", "V/m", 1.0 / math.sqrt(2) / 2.0),
        ("voltage: 1 V rms", "kV/cm", 1e5),
        ("voltage: 1 V rms", "V/um", 1e6),
        ("nothing", "1/mm", 1e3),
    ],
)
def test_the_drive_scales_the_field(stated, unit, expected):
    text = GOOD.replace("voltage: 1 V rms", stated).replace("V/m", unit)
    np.testing.assert_allclose(table(text).field, table(GOOD).field * expected)


@pytest.mark.parametrize(("unit", "size"), [("mm", 1e-3), ("m", 1.0), ("nm", 1e-9), ("cm", 1e-2)])
def test_units_of_length(unit, size):
    text = GOOD.replace("um", unit)
    np.testing.assert_allclose(table(text).points, table(GOOD).points * size / 1e-6)


def test_imaginary_parts_make_a_phasor():
    head = HEAD.replace("Ey (V/m)", "Ey (V/m),Ex imaginary (V/m),Im Ey (V/m)")
    turning = [f"{x},{y},1,0,0,{1 + 0.1 * x}" for x, y in square()]
    found = table(head + plain(turning))
    assert np.iscomplexobj(found.field)
    ratio = found.field[:, 1] / found.field[:, 0]
    np.testing.assert_allclose(ratio, 1j * (1 + 0.1 * found.points[:, 0] * 1e6), atol=1e-12)


def test_one_phase_everywhere_is_no_phase():
    """A common factor exp(j·0.7) changes nothing, and leaves a real field."""
    head = HEAD.replace("Ey (V/m)", "Ey (V/m),Ex imag (V/m),Ey imag (V/m)")
    turn = np.exp(0.7j)
    lines = []
    for x, y in square():
        e = np.array(linear(x + 1.0, y)) * turn
        lines.append(",".join(f"{v:.15g}" for v in (x, y, *e.real, *e.imag)))
    found = table(head + plain(lines))
    assert not np.iscomplexobj(found.field)
    expected = np.array([linear(x + 1.0, y) for x, y in square()])
    np.testing.assert_allclose(np.abs(found.field), np.abs(expected), atol=1e-9)


def with_row(line):
    return HEAD + plain([*rows(square()), line])


def without(count, keep):
    return HEAD + plain(rows([place for place in square(count) if keep(*place)]))


FAULTS = {
    "": "is empty",
    "# voltage: 1 V rms\n": "is empty",
    "\0\1\2": "no text file",
    plain(rows(square())): "line 1: the first row must name the columns",
    GOOD.replace("Ex (V/m)", "Bx (T)"): "line 2: unknown column “Bx (T)”",
    GOOD.replace("Ex (V/m)", "Re Ex real (V/m)"): "line 2: unknown column",
    GOOD.replace("Ex (V/m)", "Ex"): "line 2: the column “Ex” needs its unit",
    GOOD.replace("x (um),", "x (S),"): "line 2: “S” is no unit of length for x",
    GOOD.replace("Ex (V/m)", "Ex (T)"): "line 2: “T” is no unit of field for Ex",
    GOOD.replace("x (um),", "Im x (um),"): "a place has no real or imaginary part",
    GOOD.replace("Ey", "Ex"): "line 2: the column Ex stands there twice",
    "# voltage: 1 V rms\nx (um),y (um),Ex (V/m)\n0,0,1\n": "line 2: the column Ey is missing",
    GOOD.replace("y (um),Ex", "Ez (V/m),Ex"): "line 2: the column y is missing",
    GOOD.replace("Ey (V/m)", "Ey (V/m),Ex imaginary (V/m)"): "the column Ey imaginary is missing",
    GOOD.replace("# voltage: 1 V rms\n", ""): "does not say which voltage",
    GOOD.replace("1 V rms", "1 V"): "line 1: the voltage needs number, unit and measure",
    GOOD.replace("1 V rms", "1 A rms"): "line 1: the voltage",
    GOOD.replace("1 V rms", "0 V rms"): "line 1: the voltage must be above zero",
    GOOD.replace("1 V rms", "-1 V rms"): "line 1: the voltage must be above zero",
    GOOD.replace("1 V rms", "1 V rms\n# voltage: 2 V rms"): "line 2: states another voltage",
    GOOD.replace("1 V rms", "1 V rms\n# field: loud"): "line 2: the field can be stated",
    GOOD.replace("1 V rms", "1 V static\n# field: rms"): "line 2: the field can be stated",
    GOOD.replace("V/m", "1/m"): "per volt already",
    with_row("9,9,nan,1"): "line 39: Ex is not finite",
    with_row("9,9,1,inf"): "line 39: Ey is not finite",
    with_row("9,9,1e999,1"): "line 39: Ex is not finite",
    with_row("9,9,1"): "line 39: has 3 values where the header names 4",
    with_row("9,9,1,2,3"): "line 39: has 5 values",
    with_row("9,9,one,1"): "line 39: “one” is no number (column Ex)",
    with_row("9,9,1_0,1"): "line 39: “1_0” is no number",
    with_row("9,9,,1"): "line 39: a value is missing (column Ex)",
    with_row("1,1,5,5"): "lines 10 and 39: one place with two different fields",
    HEAD + plain(rows(square(4))): "has 16 points; a map needs at least 25",
    HEAD + plain(rows([(float(x), 1.0) for x in range(30)])): "all points have the same y",
    HEAD + plain(rows([(float(x), y) for x in range(20) for y in (0.0, 1.0)])): "has 2 values of y",
    without(8, lambda x, y: not (3 <= x <= 4 and y == 4)): (
        "has gaps: 2 of 64 points of its grid are missing, such as x = 3 µm, y = 4 µm"
    ),
    HEAD.replace("y (um)", "y (um),z (um)").replace("Ey", "Ey (V/m),Ez")
    + plain(f"{i},{i * i % 31},{i * 7 % 29},1,1,1" for i in range(60)): "three dimensions",
}


@pytest.mark.parametrize(("text", "words"), FAULTS.items(), ids=range(len(FAULTS)))
def test_faults_are_told_in_words(text, words):
    with pytest.raises(FieldTableError) as told:
        arranged(table(text))
    assert words in str(told.value)
    assert "\n" not in str(told.value)
    assert not str(told.value).endswith(".")


def test_too_large_a_file_is_refused():
    with pytest.raises(FieldTableError, match="larger than 20 MB"):
        read_field_table(b"0" * (MAX_BYTES + 1))
    many = HEAD + "1,2,3,4\n" * (MOST_ROWS + 1)
    with pytest.raises(FieldTableError, match="200001 rows of numbers; at most 200000"):
        table(many)


@pytest.mark.parametrize("length", [0, 1, 3, 17, 40, 60])
def test_a_file_that_was_cut_is_told_or_read(length):
    """Whatever is left of it, nothing but the one error is raised."""
    with pytest.raises(FieldTableError):
        table(GOOD[:length])


@given(st.binary(max_size=300) | st.text(max_size=300).map(str.encode))
def test_nonsense_is_told_in_words(content):
    with pytest.raises(FieldTableError):
        read_field_table(content)


@given(st.text("xyzE()[]umV/ ,;\t#%1.e-\n", max_size=120))
def test_near_nonsense_is_told_in_words(text):
    with pytest.raises(FieldTableError):
        table(text + "\n" + plain(rows(square(3))))


NUMBERS = st.floats(-1e6, 1e6).map(lambda value: float(f"{value:.9g}"))


@given(
    st.lists(st.tuples(NUMBERS, NUMBERS), min_size=30, max_size=40),
    st.sampled_from([",", ";", "\t", ", "]),
    st.sampled_from([("um", 1e-6), ("mm", 1e-3)]),
    st.randoms(use_true_random=False),
)
def test_what_is_written_is_read(field, separator, unit, chance):
    """In any order of rows, with any separator."""
    places = [(float(k), float(k * k % 7)) for k in range(len(field))]
    lines = [
        separator.join(f"{value:.9g}" for value in (*place, *e))
        for place, e in zip(places, field, strict=True)
    ]
    chance.shuffle(lines)
    head = separator.join([f"x ({unit[0]})", f"y ({unit[0]})", "Ex (1/m)", "Ey (1/m)"])
    found = table(head + "\n" + plain(lines))
    order = np.argsort(found.points[:, 0])
    np.testing.assert_allclose(found.points[order], np.array(places) * unit[1], atol=1e-20)
    np.testing.assert_allclose(found.field[order], np.array(field), atol=1e-12)
