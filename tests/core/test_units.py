"""Quantities: read as people type them, refused in one line, written back exactly."""

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import constants

from core.errors import InputError, OutOfRangeError, UnitError
from core.units import Quantity, check_quantity, exact_text, format_quantity, parse_quantity

LENGTH, FREQUENCY, RATIO = Quantity.LENGTH, Quantity.FREQUENCY, Quantity.RATIO
RESISTANCE, DECIBEL = Quantity.RESISTANCE, Quantity.DECIBEL
ANGLE, CONDUCTIVITY = Quantity.ANGLE, Quantity.CONDUCTIVITY

LIMITS = {
    LENGTH: (-100.0, 100.0),
    FREQUENCY: (1e6, 300e9),
    RESISTANCE: (0.0, 1e6),
    RATIO: (0.0, 1e6),
    DECIBEL: (-300.0, 300.0),
    ANGLE: (-20 * math.pi, 20 * math.pi),
    CONDUCTIVITY: (0.0, 1e9),
}


def usable_values(kind):
    low, high = LIMITS[kind]
    floats = st.floats(low, high, allow_nan=False)
    return floats.filter(lambda value: value == 0.0 or abs(value) >= 1e-6)


kinds_with_values = st.sampled_from(list(Quantity)).flatmap(
    lambda kind: st.tuples(st.just(kind), usable_values(kind))
)


@pytest.mark.parametrize(
    ("text", "kind", "expected"),
    [
        ("2.45 GHz", FREQUENCY, 2.45e9),
        ("2450MHz", FREQUENCY, 2.45e9),
        ("2,45", FREQUENCY, 2.45e9),
        ("868 mhz", FREQUENCY, 868e6),
        ("2.3ghz", FREQUENCY, 2.3e9),
        ("1e9 Hz", FREQUENCY, 1e9),
        ("1E9Hz", FREQUENCY, 1e9),
        ("1,000,000 kHz", FREQUENCY, 1e9),
        ("1.6", LENGTH, 0.0016),
        ("44", LENGTH, 0.044),
        ("1.6mm", LENGTH, 0.0016),
        ("15 MM", LENGTH, 0.015),
        ("4.4cm", LENGTH, 0.044),
        ("0.5 m", LENGTH, 0.5),
        ("0.5 M", LENGTH, 0.5),
        (".5 mm", LENGTH, 0.0005),
        ("5. mm", LENGTH, 0.005),
        ("+3 mm", LENGTH, 0.003),
        ("-3 mm", LENGTH, -0.003),
        ("\u22123 mm", LENGTH, -0.003),
        ("  3\u00a0mm ", LENGTH, 0.003),
        ("3\u202fmm", LENGTH, 0.003),
        ("1/16 in", LENGTH, 0.0015875),
        ("3/8 in", LENGTH, 0.009525),
        ("1 1/16 in", LENGTH, 0.0269875),
        ('1 1/16"', LENGTH, 0.0269875),
        ('1-1/16"', LENGTH, 0.0269875),
        ("1 1/16\u2033", LENGTH, 0.0269875),
        ("1 1/16''", LENGTH, 0.0269875),
        ("-1 1/2 in", LENGTH, -0.0381),
        ("½ in", LENGTH, 0.0127),
        ("1½ in", LENGTH, 0.0381),
        ("1 ⅛ inches", LENGTH, 0.028575),
        ("1\u204416 in.", LENGTH, 0.0015875),
        ("62 mil", LENGTH, 0.0015748),
        ("62 thou", LENGTH, 0.0015748),
        ("1 ft", LENGTH, 0.3048),
        ("35um", LENGTH, 35e-6),
        ("35 \u00b5m", LENGTH, 35e-6),
        ("35 \u03bcm", LENGTH, 35e-6),
        ("100 nm", LENGTH, 1e-7),
        ("1,234.5 mm", LENGTH, 1.2345),
        ("1.234,5 mm", LENGTH, 1.2345),
        ("1,234 mm", LENGTH, 0.001234),
        ("12,345,678.9 nm", LENGTH, 0.0123456789),
        ("0", LENGTH, 0.0),
        ("50", RESISTANCE, 50.0),
        ("50 \u03a9", RESISTANCE, 50.0),
        ("50 \u2126", RESISTANCE, 50.0),
        ("50 ohm", RESISTANCE, 50.0),
        ("50 Ohms", RESISTANCE, 50.0),
        ("1.2 kΩ", RESISTANCE, 1200.0),
        ("2.33", RATIO, 2.33),
        ("0,001", RATIO, 0.001),
        ("1.5:1", RATIO, 1.5),
        ("3 %", RATIO, 0.03),
        ("1.5", DECIBEL, 1.5),
        ("-10 dB", DECIBEL, -10.0),
        ("180", ANGLE, math.pi),
        ("-90°", ANGLE, -math.pi / 2),
        ("45 deg", ANGLE, math.pi / 4),
        ("0.5 rad", ANGLE, 0.5),
        ("5.8e7", CONDUCTIVITY, 5.8e7),
        ("58 MS/m", CONDUCTIVITY, 5.8e7),
    ],
)
def test_reads_what_people_type(text, kind, expected):
    assert parse_quantity(text, kind) == pytest.approx(expected, rel=1e-15, abs=0.0)


@pytest.mark.parametrize(
    ("text", "factor"),
    [
        ("1 in", constants.inch),
        ("1 mil", constants.mil),
        ("1 ft", constants.foot),
        ("1 um", constants.micron),
        ("1 mm", constants.milli),
        ("1 cm", constants.centi),
        ("10 nm", 10 * constants.nano),
    ],
)
def test_length_factors_agree_with_scipy(text, factor):
    assert parse_quantity(text, LENGTH) == pytest.approx(factor, rel=1e-15)


def test_degree_agrees_with_scipy():
    assert parse_quantity("1 deg", ANGLE) == pytest.approx(constants.degree, rel=1e-15)


@pytest.mark.parametrize(
    ("text", "kind", "complaint"),
    [
        ("", LENGTH, "is empty"),
        ("   ", LENGTH, "is empty"),
        ("wide", LENGTH, "is not a length"),
        ("nan", LENGTH, "is not a length"),
        ("inf", LENGTH, "is not a length"),
        ("-infinity mm", LENGTH, "is not a length"),
        ("mm", LENGTH, "is not a length"),
        ("²", LENGTH, "is not a length"),
        ("٣ mm", LENGTH, "is not a length"),
        ("five", ANGLE, "is not an angle"),
        ("--3 mm", LENGTH, "is not a length"),
        ("5 GHz", LENGTH, "has the unit of a frequency, not of a length"),
        ("5 mm", FREQUENCY, "has the unit of a length, not of a frequency"),
        ("50 ohm", DECIBEL, "has the unit of a resistance, not of a level"),
        ("5 bananas", LENGTH, "has no unit of a length"),
        ("5 m", FREQUENCY, "has the unit of a length, not of a frequency"),
        ("2450M", FREQUENCY, "has the unit of a length"),
        ("58 mS/m", CONDUCTIVITY, "has no unit of a conductivity"),
        ("1/0 in", LENGTH, "divides by zero"),
        ("1 1/0 in", LENGTH, "divides by zero"),
        ("1/2/3", LENGTH, "has no unit of a length"),
        ("1.2.3", LENGTH, "in odd places"),
        ("1,23.4 mm", LENGTH, "in odd places"),
        ("1.234.5,6 mm", LENGTH, "in odd places"),
        ("1,234.567,8 mm", LENGTH, "in odd places"),
        ("3 mm\n", LENGTH, "characters that cannot be printed"),
        ("3\x00mm", LENGTH, "characters that cannot be printed"),
        ("3\ud800mm", LENGTH, "characters that cannot be printed"),
        ("1" * 65, LENGTH, "is longer than 64 characters"),
        ("(" * 10**6, LENGTH, "is longer than 64 characters"),
    ],
)
def test_refuses_what_is_no_quantity(text, kind, complaint):
    with pytest.raises(UnitError, match=complaint) as caught:
        parse_quantity(text, kind, field="some.field")
    assert str(caught.value).startswith("some.field: '")
    assert caught.value.field == "some.field"
    assert caught.value.allowed in str(caught.value)
    assert len(str(caught.value)) < 250


@pytest.mark.parametrize(
    ("text", "kind", "allowed"),
    [
        ("101 m", LENGTH, "-100 m to 100 m, not finer than 1 nm"),
        ("0.5 nm", LENGTH, "-100 m to 100 m, not finer than 1 nm"),
        ("1e-999", LENGTH, "-100 m to 100 m, not finer than 1 nm"),
        ("1e999", LENGTH, "-100 m to 100 m, not finer than 1 nm"),
        ("-1e999 ft", LENGTH, "-100 m to 100 m, not finer than 1 nm"),
        ("0", FREQUENCY, "1 MHz to 300 GHz"),
        ("900 kHz", FREQUENCY, "1 MHz to 300 GHz"),
        ("301", FREQUENCY, "1 MHz to 300 GHz"),
        ("-50", RESISTANCE, "0 Ω to 1000 kΩ, not finer than 0.000001 Ω"),
        ("-0.1", RATIO, "0 to 1000000, not finer than 0.000000001"),
    ],
)
def test_refuses_absurd_magnitudes(text, kind, allowed):
    with pytest.raises(OutOfRangeError, match="is out of range") as caught:
        parse_quantity(text, kind, field="x")
    assert caught.value.allowed == allowed
    assert str(caught.value) == f"x: {text!r} is out of range; accepted: {allowed}"


@pytest.mark.parametrize("text", ["-1 mm", "0", "10.1 mm"])
def test_the_callers_range_is_kept(text):
    with pytest.raises(OutOfRangeError, match="accepted: more than 0 mm to 10 mm"):
        parse_quantity(text, LENGTH, minimum=0.0, maximum=0.01, exclusive_minimum=True)


def test_the_ends_of_a_range_belong_to_it():
    assert parse_quantity("0", LENGTH, minimum=0.0, maximum=0.01) == 0.0
    assert parse_quantity("10", LENGTH, minimum=0.0, maximum=0.01) == 0.01


def test_long_nonsense_is_quoted_shortened():
    with pytest.raises(UnitError) as caught:
        parse_quantity("z" * 60, LENGTH)
    assert f"'{'z' * 39}…'" in str(caught.value)


@pytest.mark.parametrize("value", [math.nan, math.inf, -math.inf, 101.0, 1e-10])
def test_checks_numbers_as_well(value):
    with pytest.raises(OutOfRangeError, match=r"element\.length: .* is out of range; accepted"):
        check_quantity(value, LENGTH, field="element.length")


@pytest.mark.parametrize(
    ("value", "kind", "expected"),
    [
        (0.0435, LENGTH, "43.5 mm"),
        (0.0, LENGTH, "0 mm"),
        (-0.003, LENGTH, "-3 mm"),
        (1e-20, LENGTH, "0 mm"),
        (35e-6, LENGTH, "35 µm"),
        (0.0001, LENGTH, "0.1 mm"),
        (0.04351749, LENGTH, "43.517 mm"),
        (0.999999, LENGTH, "1 m"),
        (2.45e9, FREQUENCY, "2.45 GHz"),
        (868e6, FREQUENCY, "868 MHz"),
        (999.9999e6, FREQUENCY, "1 GHz"),
        (50.0, RESISTANCE, "50 Ω"),
        (12000.0, RESISTANCE, "12 kΩ"),
        (0.0012, RATIO, "0.0012"),
        (123456.0, RATIO, "123500"),
        (-12.345, DECIBEL, "-12.3 dB"),
        (math.pi / 4, ANGLE, "45°"),
        (5.8e7, CONDUCTIVITY, "58 MS/m"),
        (math.nan, DECIBEL, "unknown"),
        (math.inf, RATIO, "unknown"),
    ],
)
def test_writes_for_people(value, kind, expected):
    assert format_quantity(value, kind) == expected


def test_writes_in_the_unit_asked_for():
    assert format_quantity(0.0254, LENGTH, unit="inch") == "1 in"
    assert format_quantity(0.0015748, LENGTH, unit="mil", digits=2) == "62 mil"
    assert format_quantity(2.45e9, FREQUENCY, unit="MHz") == "2450 MHz"
    assert format_quantity(2.45e9, FREQUENCY, digits=1) == "2 GHz"


def test_refuses_to_write_in_a_foreign_unit():
    with pytest.raises(UnitError, match="'GHz' has the unit of a frequency, not of a length"):
        format_quantity(1.0, LENGTH, unit="GHz")


@pytest.mark.parametrize(
    ("value", "kind", "expected"),
    [
        (0.0435, LENGTH, "43.5 mm"),
        (35e-6, LENGTH, "35 µm"),
        (2.45e9, FREQUENCY, "2.45 GHz"),
        (math.radians(45.0), ANGLE, "45°"),
    ],
)
def test_exact_text_is_also_for_people(value, kind, expected):
    assert exact_text(value, kind) == expected


@pytest.mark.parametrize("value", [math.nan, math.inf, 1e9])
def test_exact_text_refuses_what_could_not_be_read_back(value):
    with pytest.raises(OutOfRangeError, match="is out of range"):
        exact_text(value, LENGTH)


@given(kinds_with_values)
def test_exact_text_reads_back_to_the_same_float(kind_and_value):
    kind, value = kind_and_value
    assert parse_quantity(exact_text(value, kind), kind) == value


@given(kinds_with_values)
def test_text_for_people_reads_back_to_three_digits(kind_and_value):
    kind, value = kind_and_value
    shown = format_quantity(value, kind)
    low, high = LIMITS[kind]
    tolerance = 0.006 * abs(value)
    read = parse_quantity(shown, kind, minimum=low, maximum=high) if value < high else value
    assert read == pytest.approx(value, abs=tolerance)


@given(st.sampled_from(list(Quantity)), st.text(max_size=80))
def test_any_text_gives_a_number_or_one_clear_line(kind, text):
    try:
        value = parse_quantity(text, kind, field="f")
    except InputError as error:
        assert "accepted:" in str(error)
        assert str(error).isprintable()
    else:
        assert math.isfinite(value)


NUMBERISH = st.text(alphabet="0123456789.,/-+ eE½\"'mMuµkGHznilΩohdBS:%", max_size=70)


@given(st.sampled_from(list(Quantity)), NUMBERISH)
def test_nearly_a_number_gives_a_number_or_one_clear_line(kind, text):
    try:
        value = parse_quantity(text, kind)
    except InputError as error:
        assert str(error).isprintable()
    else:
        assert math.isfinite(value)
