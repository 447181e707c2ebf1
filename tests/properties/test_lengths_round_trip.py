"""Whatever length or angle is shown exactly is read back as the very same float."""

from __future__ import annotations

import math
from fractions import Fraction

from hypothesis import given
from hypothesis import strategies as st

from geometry.layout import UnitName
from geometry.lengths import (
    LengthTextError,
    format_angle_exact,
    format_exact,
    format_length,
    parse_angle,
    parse_length,
)

UNITS: st.SearchStrategy[UnitName] = st.sampled_from(["in", "mm"])
# Below a millionth of a nanometer a length is a rounding remainder, and shown as 0.
LENGTHS = st.floats(-1e6, 1e6).filter(lambda mm: mm == 0.0 or abs(mm) > 1e-9)


@given(LENGTHS, UNITS)
def test_exact_text_reads_back_the_same_length(mm: float, unit: UnitName) -> None:
    assert parse_length(format_exact(mm, unit), unit) == mm


@given(st.floats(-6.0, 6.0).filter(lambda a: a == 0.0 or abs(a) > 1e-12))
def test_exact_text_reads_back_the_same_angle(radians: float) -> None:
    assert parse_angle(format_angle_exact(radians)) == radians


@given(st.integers(-64000, 64000), st.sampled_from([2, 4, 8, 16, 32, 64]))
def test_every_mark_of_the_tape_reads_back(marks: int, denominator: int) -> None:
    mm = float(Fraction(marks, denominator) * Fraction(254, 10))
    text = format_length(mm, "in", denominator)
    assert parse_length(text, "in") == mm
    assert parse_length(f"{text} in", "mm") == mm


@given(st.floats(-30000, 30000), st.sampled_from([8, 16, 32]))
def test_tape_text_is_within_half_a_mark(mm: float, denominator: int) -> None:
    shown = parse_length(format_length(mm, "in", denominator), "in")
    assert abs(shown - mm) <= 25.4 / denominator / 2 + 1e-9


@given(st.floats(-1e5, 1e5), st.integers(0, 6))
def test_millimeter_text_is_within_half_a_last_digit(mm: float, decimals: int) -> None:
    shown = parse_length(format_length(mm, "mm", decimals=decimals), "mm")
    assert abs(shown - mm) <= 0.5 * 10.0**-decimals + 1e-9


@given(st.text("0123456789.,-−+/'\"′″½ °inftmcae\n", max_size=40), UNITS)
def test_any_typing_gives_a_length_or_a_plain_reason(text: str, unit: UnitName) -> None:
    reason = ""
    mm = math.nan
    try:
        mm = parse_length(text, unit)
    except LengthTextError as error:
        reason = str(error)
    assert reason.endswith((".", "?")) or abs(mm) <= 1e6


def test_a_length_is_rounded_once() -> None:
    # In floats, 3/8 times 25.4 misses the nearest float to 9.525 mm.
    assert 0.375 * 25.4 != 9.525
    assert parse_length("3/8", "in") == 9.525
