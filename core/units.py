"""Quantities as people write them: the only place that reads and writes them.

Inside the core a length is a float in metres, a frequency in hertz, a resistance in
ohms, an angle in radians, a conductivity in siemens per metre; decibels stay decibels.
Numbers are read as exact fractions and rounded once, so that "1.6 mm" is the float 0.0016.
"""

from __future__ import annotations

import math
import re
import unicodedata
from dataclasses import dataclass
from decimal import Decimal
from enum import Enum
from fractions import Fraction
from functools import lru_cache
from typing import Final

from core.errors import OutOfRangeError, UnitError

_LONGEST_TEXT: Final = 64  # characters; nobody types a longer quantity
_LONGEST_QUOTE: Final = 40


class Quantity(Enum):
    """What a number measures."""

    LENGTH = "length"  # m
    FREQUENCY = "frequency"  # Hz
    RESISTANCE = "resistance"  # ohm
    RATIO = "ratio"  # no unit: permittivity, loss tangent, VSWR
    DECIBEL = "level"  # dB
    ANGLE = "angle"  # rad, typed in degrees
    CONDUCTIVITY = "conductivity"  # S/m


@dataclass(frozen=True)
class _Unit:
    """One unit: its printed label, its exact size in SI and how people spell it."""

    label: str
    size: Fraction
    spellings: tuple[str, ...]  # case is ignored; the label itself is matched exactly
    shown_from: float | None = None  # SI magnitude from which values are shown in this unit


@dataclass(frozen=True)
class _Kind:
    """Absolute limits of one kind of quantity, in SI, and how it is shown."""

    minimum: float
    maximum: float
    smallest: float  # below this a value that is not zero is a mistake
    digits: int  # significant, for people
    example: str


_DEGREE: Final = Fraction(math.pi) / 180
_INCH: Final = Fraction(254, 10_000)  # exact since 1959

# The first unit of a kind is the one of a bare number.
_UNITS: Final[dict[Quantity, tuple[_Unit, ...]]] = {
    Quantity.LENGTH: (
        _Unit("mm", Fraction(1, 1000), ("mm",), shown_from=1e-4),
        _Unit("cm", Fraction(1, 100), ("cm",)),
        _Unit("m", Fraction(1), ("m",), shown_from=1.0),
        _Unit("µm", Fraction(1, 10**6), ("um", "μm", "micron", "microns"), shown_from=1e-7),
        _Unit("nm", Fraction(1, 10**9), ("nm",), shown_from=0.0),
        _Unit("in", _INCH, ("in", "inch", "inches", '"', "''")),
        _Unit("mil", _INCH / 1000, ("mil", "mils", "thou")),
        _Unit("ft", _INCH * 12, ("ft", "foot", "feet")),
    ),
    Quantity.FREQUENCY: (
        _Unit("GHz", Fraction(10**9), ("ghz",), shown_from=1e9),
        _Unit("MHz", Fraction(10**6), ("mhz",), shown_from=1e6),
        _Unit("kHz", Fraction(10**3), ("khz",), shown_from=1e3),
        _Unit("Hz", Fraction(1), ("hz",), shown_from=0.0),
    ),
    Quantity.RESISTANCE: (
        _Unit("Ω", Fraction(1), ("ohm", "ohms", "ω"), shown_from=0.0),
        _Unit("kΩ", Fraction(1000), ("kohm", "kohms", "kω"), shown_from=1e4),
    ),
    Quantity.RATIO: (
        _Unit("", Fraction(1), ("", ":1"), shown_from=0.0),
        _Unit("%", Fraction(1, 100), ("%",)),
    ),
    Quantity.DECIBEL: (_Unit("dB", Fraction(1), ("db",), shown_from=0.0),),
    Quantity.ANGLE: (
        _Unit("°", _DEGREE, ("°", "deg", "degree", "degrees"), shown_from=0.0),
        _Unit("rad", Fraction(1), ("rad", "radian", "radians")),
    ),
    Quantity.CONDUCTIVITY: (
        _Unit("S/m", Fraction(1), ("s/m",), shown_from=0.0),
        _Unit("MS/m", Fraction(10**6), (), shown_from=1e6),  # case tells mega from milli
    ),
}

# Units that values are shown in, the largest first.
_SHOWN: Final = {
    kind: sorted(
        (unit for unit in units if unit.shown_from is not None),
        key=lambda unit: unit.size,
        reverse=True,
    )
    for kind, units in _UNITS.items()
}

_KINDS: Final[dict[Quantity, _Kind]] = {
    Quantity.LENGTH: _Kind(-100.0, 100.0, smallest=1e-9, digits=5, example="43.5 mm"),
    Quantity.FREQUENCY: _Kind(1e6, 300e9, smallest=0.0, digits=5, example="2.45 GHz"),
    Quantity.RESISTANCE: _Kind(0.0, 1e6, smallest=1e-6, digits=4, example="50 ohm"),
    Quantity.RATIO: _Kind(0.0, 1e6, smallest=1e-9, digits=4, example="2.2"),
    Quantity.DECIBEL: _Kind(-300.0, 300.0, smallest=0.0, digits=3, example="1.5 dB"),
    Quantity.ANGLE: _Kind(
        -20.0 * math.pi, 20.0 * math.pi, smallest=0.0, digits=4, example="45 deg"
    ),
    Quantity.CONDUCTIVITY: _Kind(0.0, 1e9, smallest=1e-9, digits=4, example="5.8e7 S/m"),
}

_LOOKALIKES: Final = str.maketrans(
    {
        "\u2126": "Ω",  # ohm sign
        "\u00b5": "μ",  # micro sign
        "\u2212": "-",  # minus
        "\u2044": "/",  # fraction slash
        "\u2033": '"',  # double prime
        "\u201d": '"',  # closing quotation mark
        "\u00ba": "°",  # masculine ordinal, next to the degree sign on some keyboards
    }
)

_PATTERN: Final = re.compile(
    r"""
    (?P<sign>[+-]?)\s*
    (?:
        (?:(?P<whole>[0-9]+)(?:\s+|\s*-\s*))?(?P<top>[0-9]+)\s*/\s*(?P<bottom>[0-9]+)
      | (?P<decimal>[.,]?[0-9][0-9.,]*)(?:[eE](?P<exponent>[+-]?[0-9]{1,3}))?
    )
    \s*(?P<unit>.*)
    """,
    re.VERBOSE,
)
_GROUPED: Final = re.compile(r"[0-9]{1,3}([.,])[0-9]{3}(?:\1[0-9]{3})*")


class _UnreadableError(Exception):
    """Says in a few words why a text is no quantity."""


def parse_quantity(
    text: str,
    kind: Quantity,
    *,
    field: str = "",
    minimum: float | None = None,
    maximum: float | None = None,
    exclusive_minimum: bool = False,
) -> float:
    """Read a quantity as people type it.

    Decimal point or comma, fractions ("1 1/16 in", "½ in"), exponents and grouped
    thousands ("1,234.5 mm") are read. One separator alone is a decimal mark; where both
    occur the last one is. A bare number takes the first unit of its kind.

    Parameters
    ----------
    text : str
        What was typed, at most 64 characters.
    kind : Quantity
        What it has to measure.
    field : str, optional
        Dotted name of the parameter, for the message.
    minimum, maximum : float, optional
        Range in SI (dB for levels), within the limits of the kind.
    exclusive_minimum : bool, optional
        Whether `minimum` itself is refused.

    Returns
    -------
    float
        Value in SI: m, Hz, ohm, rad, S/m; dB for levels; finite.

    Raises
    ------
    UnitError
        If the text is no quantity of this kind.
    OutOfRangeError
        If it is one outside its range.
    """
    allowed = _accepted_text(kind)
    where = f"{field}: " if field else ""
    try:
        value = _read(text, kind)
    except _UnreadableError as problem:
        message = f"{where}{_quoted(text)} {problem}; accepted: {allowed}"
        raise UnitError(message, field=field, value=text, allowed=allowed) from None
    return _checked(value, kind, text, field, minimum, maximum, exclusive_minimum)


def check_quantity(
    value: float,
    kind: Quantity,
    *,
    field: str = "",
    minimum: float | None = None,
    maximum: float | None = None,
    exclusive_minimum: bool = False,
) -> float:
    """Refuse a number that is not finite or leaves its range.

    Parameters
    ----------
    value : float
        SI, dB for levels.
    kind : Quantity
        What it measures; its absolute limits apply as well.
    field : str, optional
        Dotted name of the parameter, for the message.
    minimum, maximum : float, optional
        Range in SI.
    exclusive_minimum : bool, optional
        Whether `minimum` itself is refused.

    Returns
    -------
    float
        The value, unchanged.

    Raises
    ------
    OutOfRangeError
        If it is not finite or outside the range.
    """
    return _checked(float(value), kind, None, field, minimum, maximum, exclusive_minimum)


def format_quantity(
    value: float, kind: Quantity, *, digits: int | None = None, unit: str | None = None
) -> str:
    """Write a quantity for people.

    Parameters
    ----------
    value : float
        SI, dB for levels.
    kind : Quantity
        What it measures.
    digits : int, optional
        Significant digits, >= 1; by default what the kind deserves (5 for lengths).
    unit : str, optional
        Unit to write it in, by any accepted spelling; by default one that fits the size.

    Returns
    -------
    str
        Such as "43.5 mm"; "unknown" where the value is not finite.

    Raises
    ------
    UnitError
        If `unit` does not measure this kind.
    """
    return _written(float(value), kind, digits, unit) if math.isfinite(value) else "unknown"


@lru_cache(1024)  # most numbers on the screen stay as they are from one look to the next
def _written(value: float, kind: Quantity, digits: int | None, unit: str | None) -> str:
    significant = digits or _KINDS[kind].digits
    rounded = 0.0 if abs(value) < _KINDS[kind].smallest / 2 else float(f"{value:.{significant}g}")
    chosen = _fitting_unit(rounded, kind) if unit is None else _named_unit(unit, kind)
    # Rounded once, in the unit shown; the rounding above only chooses the unit.
    shown = float(Fraction(value) / chosen.size) if rounded else 0.0
    return _joined(_plain(Decimal(f"{shown:.{significant}g}")), chosen)


def exact_text(value: float, kind: Quantity) -> str:
    """Write a quantity so that reading it gives back the very same float.

    Parameters
    ----------
    value : float
        SI, dB for levels, within the limits of the kind.
    kind : Quantity
        What it measures.

    Returns
    -------
    str
        Such as "43.5 mm".

    Raises
    ------
    OutOfRangeError
        If the value is not finite or outside the limits of the kind.
    """
    return _number_text(check_quantity(value, kind), kind)


def _read(text: str, kind: Quantity) -> float:
    if len(text) > _LONGEST_TEXT:
        raise _UnreadableError(f"is longer than {_LONGEST_TEXT} characters")
    if any(unicodedata.category(character).startswith("C") for character in text):
        raise _UnreadableError("holds characters that cannot be printed")
    match = _PATTERN.fullmatch(_spelled_out(text))
    if match is None:
        raise _UnreadableError(f"is not {_article(kind)}" if text.strip() else "is empty")
    number = _fraction(match) if match["bottom"] else _decimal(match)
    unit = _find_unit(match["unit"], kind) if match["unit"] else _UNITS[kind][0]
    if unit is None:
        raise _UnreadableError(_unit_complaint(match["unit"], kind))
    signed = -number if match["sign"] == "-" else number
    try:
        value = float(signed * unit.size)
    except OverflowError:
        return -math.inf if signed < 0 else math.inf
    # An underflow must not pass for the zero that nobody typed.
    return math.ulp(0.0) if number and not value else value


def _spelled_out(text: str) -> str:
    """Replace look-alike signs, and characters such as ½ by " 1/2"."""
    return "".join(map(_fraction_sign_text, text)).translate(_LOOKALIKES).strip()


def _fraction_sign_text(character: str) -> str:
    decomposition = unicodedata.decomposition(character)
    if not decomposition.startswith("<fraction>"):
        return character
    return " " + unicodedata.normalize("NFKC", character)


def _fraction(match: re.Match[str]) -> Fraction:
    bottom = int(match["bottom"])
    if bottom == 0:
        raise _UnreadableError("divides by zero")
    return int(match["whole"] or 0) + Fraction(int(match["top"]), bottom)


def _decimal(match: re.Match[str]) -> Fraction:
    whole, decimals = _split_decimals(match["decimal"])
    exponent = int(match["exponent"] or 0) - len(decimals)
    return int(whole + decimals) * Fraction(10) ** exponent


def _split_decimals(number: str) -> tuple[str, str]:
    """Digits before and after the decimal mark, thousands separators taken out."""
    marks = [character for character in number if character in ".,"]
    if len(marks) < 2:
        whole, _, decimals = number.replace(",", ".").partition(".")
        return whole, decimals
    if len(set(marks)) == 1:
        whole, decimals = number, ""
    else:
        whole, _, decimals = number.rpartition(marks[-1])
    if not _GROUPED.fullmatch(whole):
        raise _UnreadableError("has decimal marks or thousands separators in odd places")
    return re.sub("[.,]", "", whole), decimals


def _find_unit(spelling: str, kind: Quantity) -> _Unit | None:
    """The unit of this kind that is spelled so."""
    name = spelling.strip().translate(_LOOKALIKES)
    folded = name.rstrip(".").casefold()
    for unit in _UNITS[kind]:
        if name == unit.label or folded in unit.spellings:
            return unit
    return None


def _named_unit(spelling: str, kind: Quantity) -> _Unit:
    unit = _find_unit(spelling, kind)
    if unit is None:
        allowed = _accepted_text(kind)
        message = f"{_quoted(spelling)} {_unit_complaint(spelling, kind)}; accepted: {allowed}"
        raise UnitError(message, value=spelling, allowed=allowed)
    return unit


def _unit_complaint(spelling: str, kind: Quantity) -> str:
    for other in Quantity:
        if other is not kind and spelling.strip() and _find_unit(spelling, other):
            return f"has the unit of {_article(other)}, not of {_article(kind)}"
    return f"has no unit of {_article(kind)}"


def _article(kind: Quantity) -> str:
    return f"{'an' if kind is Quantity.ANGLE else 'a'} {kind.value}"


def _accepted_text(kind: Quantity) -> str:
    """What would be accepted, in words."""
    labels = [unit.label for unit in _UNITS[kind]]
    example = _KINDS[kind].example
    if not labels[0]:
        return f"a plain number such as {example}"
    named = " or ".join(filter(None, [", ".join(labels[:-1]), labels[-1]]))
    return f"a number in {named} ({labels[0]} if left out), such as {example}"


def _checked(
    value: float,
    kind: Quantity,
    typed: str | None,
    field: str,
    minimum: float | None,
    maximum: float | None,
    exclusive_minimum: bool,
) -> float:
    table = _KINDS[kind]
    low = table.minimum if minimum is None else max(float(minimum), table.minimum)
    high = table.maximum if maximum is None else min(float(maximum), table.maximum)
    exclusive = exclusive_minimum and minimum is not None and low == minimum
    fits = (low < value if exclusive else low <= value) and value <= high
    if fits and (value == 0.0 or abs(value) >= table.smallest):
        return value
    allowed = _range_text(kind, low, high, exclusive)
    where = f"{field}: " if field else ""
    given = _quoted(typed) if typed is not None else _number_text(value, kind)
    message = f"{where}{given} is out of range; accepted: {allowed}"
    raise OutOfRangeError(message, field=field, value=value, allowed=allowed)


def _range_text(kind: Quantity, low: float, high: float, exclusive: bool) -> str:
    smallest = _KINDS[kind].smallest
    start = "more than " if exclusive else ""
    text = f"{start}{_number_text(low, kind)} to {_number_text(high, kind)}"
    if smallest and low <= 0.0:
        text += f", not finer than {_number_text(smallest, kind)}"
    return text


def _number_text(value: float, kind: Quantity) -> str:
    """Shortest text that reads back to the same float."""
    if not math.isfinite(value):
        return str(value)
    if kind is Quantity.ANGLE:
        degrees = f"{_plain(Decimal(repr(math.degrees(value))))}°"
        return degrees if _read(degrees, kind) == value else f"{value!r} rad"
    unit = _fitting_unit(value, kind)
    # Such units are powers of ten, so that the shift keeps the shortest decimal exact.
    number = Decimal(repr(value)) * unit.size.denominator / unit.size.numerator
    return _joined(_plain(number), unit)


def _fitting_unit(value: float, kind: Quantity) -> _Unit:
    """The unit in which a value of this size is shown; the first one for zero."""
    if not value:
        return _UNITS[kind][0]
    return next(unit for unit in _SHOWN[kind] if abs(value) >= (unit.shown_from or 0.0))


def _plain(number: Decimal) -> str:
    """Digits without trailing zeros, with an exponent only where it saves many zeros."""
    if not number:
        return "0"
    normal = number.normalize()
    return f"{normal:f}" if -9 <= normal.adjusted() <= 12 else f"{normal:e}"


def _joined(number: str, unit: _Unit) -> str:
    space = "" if unit.label in {"", "°", "%"} else " "
    return f"{number}{space}{unit.label}"


def _quoted(text: str) -> str:
    cut = text if len(text) <= _LONGEST_QUOTE else text[: _LONGEST_QUOTE - 1] + "…"
    return repr(cut)
