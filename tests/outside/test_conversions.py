"""Units against their definition, and against what shops say of toe."""

from __future__ import annotations

import math
from fractions import Fraction

import pytest

from geometry.layout import MM_PER_INCH
from geometry.lengths import format_length, parse_angle, parse_length
from tests.outside.witness import witness

pytestmark = pytest.mark.outside


def test_an_inch_is_25_4_millimeters_exactly() -> None:
    # The international inch of 1959.
    assert Fraction(str(MM_PER_INCH)) == Fraction(254, 10)
    witness("International inch, 1959, exact", "1 in, mm", 25.4, parse_length("1 in", "mm"), 0.0)
    assert parse_length("1 in", "mm") == 25.4
    assert parse_length("1 ft", "mm") == 304.8
    assert parse_length("10000 in", "mm") == 254000.0
    assert format_length(254000.0, "in") == "10000"


def test_a_degree_of_toe_is_about_half_an_inch_at_the_tire() -> None:
    # Trade article: one degree of toe is 0.454 in on a 26 in tire, "about half an inch".
    toe_inches = 26.0 * math.tan(parse_angle("1"))
    source = "Trade article on toe (seen)"
    witness(source, "1° of toe on a 26 in tire, in", 0.454, toe_inches, 0.0005)
    assert format_length(toe_inches * MM_PER_INCH, "in", 2) == "1/2"
