"""Tape text to millimeters and back: what is read, what is refused, what is written."""

from __future__ import annotations

import math
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from geometry.lengths import (
    AngleTextError,
    LengthTextError,
    format_angle,
    format_angle_exact,
    format_exact,
    format_length,
    inch_steps,
    parse_angle,
    parse_length,
)


@pytest.mark.parametrize(
    ("text", "mm"),
    [
        ("9 1/16", 230.1875),
        ("9-1/16", 230.1875),
        ("9 - 1/16", 230.1875),
        ("9.0625", 230.1875),
        ("9,0625", 230.1875),
        ("9,5", 241.3),
        ("12,125", 307.975),
        ("230 mm", 230.0),
        ("230mm", 230.0),
        ("23 cm", 230.0),
        ('9"', 228.6),
        ("9 in", 228.6),
        ("9 in.", 228.6),
        ("9 inches", 228.6),
        ("9 IN", 228.6),
        ("9″", 228.6),
        ("9”", 228.6),
        ("1' 2 1/2\"", 368.3),
        ("1'-2 1/2\"", 368.3),
        ("1′ 2 1/2″", 368.3),
        ("1’ 2 1/2”", 368.3),
        ("1' 2 1/2", 368.3),
        ("1 ft 2.5 in", 368.3),
        ("1 1/2 ft", 457.2),
        ("-1' 2 1/2\"", -368.3),
        ("3/8", 9.525),
        ("-3/8", -9.525),
        ("−3/8", -9.525),
        ("- 3/8", -9.525),
        ("+3/8", 9.525),
        ("-1 1/2", -38.1),
        ("9½", 241.3),
        ("½", 12.7),
        ("9\u00a01/16", 230.1875),
        (".5", 12.7),
        ("5.", 127.0),
        ("  9  ", 228.6),
        ("0", 0.0),
    ],
)
def test_a_tape_text_reads_as_its_length(text: str, mm: float) -> None:
    assert parse_length(text, "in") == mm


@pytest.mark.parametrize(
    ("text", "mm"), [("230", 230.0), ("230,5", 230.5), ('9"', 228.6), ("9 1/2", 9.5), ("-4", -4.0)]
)
def test_a_text_without_a_mark_is_in_the_unit_that_was_set(text: str, mm: float) -> None:
    assert parse_length(text, "mm") == mm


@pytest.mark.parametrize(
    ("text", "reason"),
    [
        ("", "Nothing was typed"),
        ("   ", "Nothing was typed"),
        ("9 1/0", "a fraction can't be over zero"),
        ("0/0", "a fraction can't be over zero"),
        ("9.5 1/2", "a decimal and a fraction don't go together"),
        ("5 furlongs", "“furlongs” is no unit"),
        ("5 m", "“m” is no unit"),
        ("9 in 5 mm", "should look like"),
        ("1' 2'", "should look like"),
        ("1' 2 mm", "should look like"),
        ("1 2", "should look like"),
        ("1/2/3", "should look like"),
        ("9--1/2", "should look like"),
        ("--9", "should look like"),
        ("-", "should look like"),
        ("+", "should look like"),
        (".", "should look like"),
        ('"', "should look like"),
        ("nan", "should look like"),
        ("inf", "should look like"),
        ("-Infinity", "should look like"),
        ("1e3", "should look like"),
        ("1e999", "should look like"),
        ("1_000", "should look like"),
        ("1,234.5", "should look like"),
        ("1,234,567", "should look like"),
        ("1/-2", "should look like"),
        ("abc", "should look like"),
        ("1000001 mm", "longer than any car"),
        ("-40000", "longer than any car"),
        ("9" * 60, "longer than any car"),
        ("9" * 61, "too long"),
        ("2,743 mm", "means 2.743 or 2743"),
    ],
)
def test_what_is_no_length_is_refused_with_a_reason(text: str, reason: str) -> None:
    with pytest.raises(LengthTextError, match=reason):
        parse_length(text, "in")


def test_a_comma_before_three_digits_is_a_decimal_comma_where_that_is_known() -> None:
    assert parse_length("9,525", "mm", decimal_comma=True) == 9.525
    assert parse_length("0,525", "mm") == 0.525


@pytest.mark.parametrize(
    ("mm", "text"),
    [
        (230.1875, "9 1/16"),
        (228.6, "9"),
        (241.3, "9 1/2"),
        (-9.525, "-3/8"),
        (-241.3, "-9 1/2"),
        (0.0, "0"),
        (-0.0, "0"),
        (0.5, "0"),
        (-0.5, "0"),
        (25.0, "1"),  # 0.984 in is nearer to 1 than to 15/16.
        (24.5, "15/16"),
        (253.9, "10"),
    ],
)
def test_inches_are_shown_as_a_tape_reads(mm: float, text: str) -> None:
    assert format_length(mm, "in") == text


_HALVES = st.builds(
    lambda halves, denominator, way: math.nextafter(25.4 * halves / (2 * denominator), way),
    st.integers(-9000, 9000), st.sampled_from([8, 16, 64]), st.sampled_from([-1e9, 0.0, 1e9]),
)
"""Lengths at, or a float beside, the middle between two marks."""


@given(st.one_of(st.floats(-1e300, 1e300), _HALVES), st.sampled_from([1, 8, 16, 32, 64, 100]))
def test_a_length_goes_to_the_mark_that_exact_fractions_say(mm: float, denominator: int) -> None:
    assert inch_steps(mm, denominator) == round(Fraction(mm) * 10 / 254 * denominator)


def test_the_tape_can_be_finer_or_coarser() -> None:
    assert format_length(25.4 * 33 / 32, "in", 32) == "1 1/32"
    assert format_length(25.4 * 33 / 32, "in", 8) == "1"
    assert format_length(25.4 * 5 / 64, "in", 64) == "5/64"


@pytest.mark.parametrize(
    ("mm", "decimals", "text"),
    [(230.0, 1, "230"), (230.46, 1, "230.5"), (230.46, 2, "230.46"), (229.96, 0, "230"),
     (-0.01, 1, "0"), (100.0, 0, "100")],
)
def test_millimeters_are_shown_with_as_many_decimals_as_asked(
    mm: float, decimals: int, text: str
) -> None:
    assert format_length(mm, "mm", decimals=decimals) == text


def test_the_unit_is_shown_when_asked() -> None:
    assert format_length(230.1875, "in", mark=True) == "9 1/16 in"
    assert format_length(230.5, "mm", mark=True) == "230.5 mm"


@pytest.mark.parametrize("value", [math.nan, math.inf, -math.inf])
def test_what_is_no_number_is_shown_as_a_dash(value: float) -> None:
    assert format_length(value, "in") == format_length(value, "mm") == "–"
    assert format_exact(value, "in") == format_exact(value, "mm") == "–"
    assert format_angle(value) == format_angle_exact(value) == "–"


@pytest.mark.parametrize(
    ("mm", "unit", "text"),
    [
        (230.1875, "in", "9 1/16"),
        (25.4 * 5 / 64, "in", "5/64"),
        (254.254, "in", "10.01"),
        (230.1875, "mm", "230.1875"),
        (0.1 + 0.2, "mm", "0.30000000000000004"),
    ],
)
def test_exact_text_is_the_shortest_that_reads_back(mm: float, unit: str, text: str) -> None:
    chosen = "in" if unit == "in" else "mm"
    assert format_exact(mm, chosen) == text
    assert parse_length(text, chosen) == mm


def test_the_longest_length_reads_back_in_inches_too() -> None:
    # The nearest sixteenth lies beyond the limit; the text must not.
    assert parse_length(format_exact(1e6, "in"), "in") == 1e6


@pytest.mark.parametrize(
    ("text", "degrees"),
    [
        ("0.5", 0.5),
        ("0,5", 0.5),
        ("0.5°", 0.5),
        ("0.5 deg", 0.5),
        ("-1/2", -0.5),
        ("−1/2°", -0.5),
        ("1 1/2", 1.5),
        ("1½°", 1.5),
        ("0°30'", 0.5),
        ("-0°30′", -0.5),
        ("0° 30’", 0.5),
        ("30'", 0.5),
        ("1°30'36\"", 1.51),
        ("0", 0.0),
        ("-0", 0.0),
    ],
)
def test_an_angle_text_reads_as_degrees(text: str, degrees: float) -> None:
    assert parse_angle(text) == pytest.approx(math.radians(degrees), abs=1e-16, rel=1e-15)


@pytest.mark.parametrize(
    ("text", "reason"),
    [
        ("", "should look like"),
        ("nan", "should look like"),
        ("-inf", "should look like"),
        ("1e3", "should look like"),
        ("0.5 in", "should look like"),
        ("1.5°30'", "should look like"),
        ("9" * 61, "should look like"),
        ("1/0", "over zero"),
        ("361", "more than a whole turn"),
    ],
)
def test_what_is_no_angle_is_refused_with_a_reason(text: str, reason: str) -> None:
    with pytest.raises(AngleTextError, match=reason):
        parse_angle(text)


def test_angles_are_shown_in_degrees() -> None:
    assert format_angle(math.radians(-0.5)) == "-0.5°"
    assert format_angle(math.radians(0.126)) == "0.13°"
    assert format_angle(math.radians(-0.001)) == "0°"
    assert format_angle_exact(parse_angle("-0.5")) == "-0.5"
    assert format_angle_exact(parse_angle("7")) == "7"
