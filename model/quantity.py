"""Text with a unit ⇄ SI floats, and the one formatter for numbers that people read.

Inside the model every number is a plain SI float. Text such as ``"40 um"`` is parsed here and
nowhere else, and numbers leave through :func:`format_quantity` (a field's own unit) or
:func:`format_si` (significant digits with an SI prefix).
"""

import math
import re
from functools import lru_cache
from typing import Any

import pint

_UNITS: Any = pint.UnitRegistry(cache_folder=None)
# Moles of dissolved particles, and the strength of a solution that is made up as a whole: of one
# that is "1 x" a litre holds one formula unit.
_UNITS.define("osmole = mole = Osm = osmol")
_UNITS.define("strength = mole / liter = x")

#: Longest text that is read at all; nothing longer is handed to the unit library.
MAX_LENGTH = 40
_NUMBER = re.compile(r"\s*([+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d{1,3})?)\s*(.*?)\s*", re.DOTALL)
_POWER = r"(?:[A-Za-z%]+(?:(?:\^|\*\*)-?[1-4])?)"
_UNIT = re.compile(rf"(?:(?:1 ?/ ?)?{_POWER}(?:(?: ?[*/] ?| ){_POWER})*)?")
_SPELLINGS = {
    "µ": "u", "μ": "u", "Ω": "ohm", "\N{OHM SIGN}": "ohm", "°C": "degC", "℃": "degC", "°F": "degF",
    "·": "*", "⋅": "*", "⁻¹": "^-1", "⁻²": "^-2", "⁻³": "^-3", "²": "^2", "³": "^3", "−": "-",
}  # fmt: skip
_PRETTY = {"uM": "µM", "um": "µm", "uL": "µL", "uS": "µS", "us": "µs", "ohm": "Ω", "degC": "°C"}
#: Significant digits that a typed value keeps; finer than any laboratory number, and coarse
#: enough that value → text → value is exact, so that a link gives the same fingerprint.
DIGITS = 10


class QuantityError(ValueError):
    """Text that is no quantity of the wanted kind; the message is a plain sentence."""


def parse_quantity(text: str | float, unit: str) -> float:
    """Read a quantity into SI; a bare number is taken in `unit`.

    Parameters
    ----------
    text
        A number, or text of a number and a unit, e.g. ``"30 mS/m"``.
    unit
        The unit the field shows; the text's own unit must be of the same kind. In a field shown
        in ``K`` (a difference) degrees Celsius count as kelvin.

    Raises
    ------
    QuantityError
        If there is no number, it is not finite, or the unit is unknown or of another kind.

    Examples
    --------
    >>> parse_quantity("0.3 mS/cm", "mS/m"), parse_quantity(30, "mS/m")
    (0.03, 0.03)
    >>> parse_quantity("22 °C", "degC")
    295.15
    """
    if isinstance(text, bool):
        raise QuantityError(_example(unit))
    if isinstance(text, int | float):
        number, given = _finite(text), unit
    else:
        number, given = _split(text, unit)
    value = number if given == unit else _convert(number, given, unit)
    return canonical_from_unit(value, unit)


def canonical(value: float, unit: str) -> float:
    """Round an SI value as a typed one would be, so that both compare equal.

    >>> canonical(5e-9 / 60, "uL/min") == parse_quantity("5 uL/min", "uL/min")
    True
    """
    return canonical_from_unit(to_unit(_finite(value), unit), unit)


def canonical_from_unit(value: float, unit: str) -> float:
    """SI value of a number in `unit`, with rounding noise removed."""
    scale, offset = _scale(unit)
    rounded = float(f"{_finite(value):.{DIGITS}g}")
    # adding zero turns −0 into 0, which compares equal but would be written differently
    return _finite(float(f"{rounded * scale + offset:.15g}")) + 0.0


def to_unit(value: float, unit: str) -> float:
    """Turn an SI value into `unit`."""
    scale, offset = _scale(unit)
    return (value - offset) / scale


def plain_text(value: float, unit: str) -> str:
    """Write an SI value as ASCII text that :func:`parse_quantity` reads back exactly.

    >>> plain_text(4e-05, "um"), plain_text(295.15, "degC")
    ('40 um', '22 degC')
    """
    number = f"{to_unit(value, unit):.{DIGITS}g}"
    return f"{number} {unit}" if unit else number


def format_quantity(value: float, unit: str, digits: int = DIGITS) -> str:
    """Write an SI value in `unit` for people to read.

    >>> format_quantity(5e-9 / 60, "uL/min", 3)
    '5 µL/min'
    """
    text = _round(to_unit(value, unit), digits)
    return f"{text} {pretty_unit(unit)}" if unit else text


def format_si(value: float, unit: str, digits: int = 3) -> str:
    """Write an SI value with an SI prefix, e.g. for results.

    What is below a thousandth of the smallest prefix reads 0. Conductivities stop at mS/m: µS/m
    would be taken for the µS/cm of bench meters.

    >>> format_si(2.2387e6, "Hz"), format_si(0.03, "S/m"), format_si(0.0, "V")
    ('2.24 MHz', '30 mS/m', '0 V')
    >>> format_si(-4e-12, "N"), format_si(2e-5, "S/m"), format_si(1e-20, "N")
    ('−4 pN', '0.02 mS/m', '0 N')
    """
    if not math.isfinite(value):
        return "none" if math.isnan(value) else ("no limit" if value > 0 else "−∞")
    least = _SMALLEST.get(unit, -15)
    if abs(value) < 10.0 ** (least - 3):
        return f"0 {unit}"
    size = float(f"{abs(value):.{digits}g}")
    power = max(least, min(12, 3 * math.floor(math.log10(size) / 3)))
    return f"{_round(value / 10.0**power, digits)} {_PREFIXES[power]}{unit}"


#: Smallest prefix of units that are never written smaller, as a power of ten.
_SMALLEST = {"S/m": -3}
_PREFIXES = {
    -15: "f", -12: "p", -9: "n", -6: "µ", -3: "m", 0: "", 3: "k", 6: "M", 9: "G", 12: "T",
}  # fmt: skip


def pretty_unit(unit: str) -> str:
    """Spell a unit the way it is printed.

    >>> pretty_unit("kg/m^3"), pretty_unit("uL/min"), pretty_unit("degC")
    ('kg/m³', 'µL/min', '°C')
    """
    parts = re.split(r"([/*^ ])", unit)
    text = "".join(_PRETTY.get(part, part) for part in parts)
    return text.replace("^2", "²").replace("^3", "³").replace("*", "·")


def _round(value: float, digits: int) -> str:
    """Significant digits without an exponent in the everyday range, with a true minus sign."""
    text = f"{value:.{digits}g}"
    if "e" in text and 1e-4 <= abs(value) < 1e7:
        text = (
            f"{float(text):f}".rstrip("0").rstrip(".") if abs(value) < 1 else f"{float(text):.0f}"
        )
    return text.replace("-", "−", 1) if text.startswith("-") else text


def _finite(value: float) -> float:
    try:
        number = float(value)
    except OverflowError:  # a whole number beyond all floats
        number = math.inf
    if not math.isfinite(number):
        raise QuantityError("needs a finite number")
    return number


def _split(text: str, unit: str) -> tuple[float, str]:
    """Split a text into number and unit, which is the field's if none is given."""
    example = _example(unit)
    if len(text) > MAX_LENGTH:
        raise QuantityError(f"is longer than {MAX_LENGTH} characters; {example}")
    for odd, plain in _SPELLINGS.items():
        text = text.replace(odd, plain)
    match = _NUMBER.fullmatch(text)
    if match is None:
        raise QuantityError(example)
    number, given = match.groups()
    if given.startswith(",") or given.startswith("."):
        raise QuantityError(f"{example}; write decimals with a point")
    if not _UNIT.fullmatch(given):
        raise QuantityError(f"has something after the number that is no unit; {example}")
    return _finite(float(number)), given or unit


def _example(unit: str) -> str:
    return f"needs a number with a unit, e.g. in {pretty_unit(unit)}" if unit else "needs a number"


def _convert(number: float, given: str, unit: str) -> float:
    """Turn a number in the unit `given` into one in `unit`."""
    if given == "C" and unit in ("degC", "K"):
        given = "degC"
    scale, offset = _scale(unit)
    found = _known(given)
    if found is None:
        raise QuantityError(
            f"has the unit “{given}”, which is not known; use {pretty_unit(unit) or 'no unit'}"
        )
    if found[2] != _kind(unit):
        raise QuantityError(
            f"is in “{given}”, a unit of another kind; use {pretty_unit(unit) or 'no unit'}"
        )
    if unit == "K":
        return number * found[0]  # a field in kelvin is a difference
    return (number * found[0] + found[1] - offset) / scale


def _scale(unit: str) -> tuple[float, float]:
    """Scale and offset of a declared unit: SI = number × scale + offset."""
    found = _known(unit)
    if found is None:
        raise LookupError(f"the unit {unit!r} of a declaration is not known")
    return found[0], found[1]


def _kind(unit: str) -> str:
    found = _known(unit)
    return found[2] if found else ""


@lru_cache(maxsize=512)  # pure: a unit never changes its meaning
def _known(unit: str) -> tuple[float, float, str] | None:
    """Scale, offset and kind of a unit, or None if it is unknown.

    The kind is the dimension and, as radians and counts have none, their names: an angular
    frequency is no frequency, and an angle no pure number.
    """
    if unit == "":
        return 1.0, 0.0, "dimensionless"
    try:
        zero, one, two = (
            _UNITS.Quantity(number, unit.replace("%", "percent")).to_base_units()
            for number in (0.0, 1.0, 2.0)
        )
    except (pint.PintError, ValueError, ArithmeticError):  # unknown, “nan”, or beyond all floats
        return None
    scale, offset = float(one.magnitude - zero.magnitude), float(zero.magnitude)
    if not math.isclose(float(two.magnitude - one.magnitude), scale, rel_tol=1e-9):
        return None  # a logarithmic unit
    counted = sorted({"radian", "bit", "count"} & {str(name) for name, _ in one.unit_items()})
    return scale, offset, " ".join([str(one.dimensionality), *counted])
