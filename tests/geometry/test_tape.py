"""The tape: its marks, and the exact floats that hands and keys stop at."""

from __future__ import annotations

from itertools import pairwise

import pytest
from hypothesis import given
from hypothesis import strategies as st

from geometry.lengths import parse_length
from geometry.tape import marks, nudged, snapped, tape_text

LENGTHS = st.floats(-3000, 3000)


@given(LENGTHS)
def test_snapping_gives_the_float_that_typing_gives(mm):
    inch = snapped(mm, "in")
    assert abs(inch - mm) <= 25.4 / 32 + 1e-9
    assert parse_length(tape_text(inch, "in"), "in") == inch
    metric = snapped(mm, "mm")
    assert abs(metric - mm) <= 0.5 and metric == round(metric)


@given(st.integers(-4000, 4000), st.integers(-50, 50), st.sampled_from(["plain", "large", "fine"]))
def test_nudges_on_the_tape_come_back_exactly(sixteenths, steps, size):
    start = parse_length(f"{sixteenths}/16", "in")
    there = nudged(start, steps, size, "in")
    assert nudged(there, -steps, size, "in") == start
    step = {"plain": 25.4 / 16, "large": 12.7, "fine": 25.4 / 64}[size]
    assert there - start == pytest.approx(steps * step, abs=1e-9)


@pytest.mark.parametrize(("size", "step"), [("plain", 1.0), ("large", 10.0), ("fine", 0.1)])
def test_metric_nudges(size, step):
    assert nudged(123.4, 1, size, "mm") == pytest.approx(123.4 + step, abs=1e-12)
    assert nudged(nudged(123.4, 3, size, "mm"), -3, size, "mm") == 123.4
    assert nudged(0.123456, 1, size, "mm") == pytest.approx(0.123456 + step, abs=1e-12)


def test_tape_text_is_as_fine_as_the_place_needs():
    assert tape_text(25.4 * 9.0625, "in") == "9 1/16"
    assert tape_text(25.4 * (9 + 1 / 64), "in") == "9 1/64"
    assert tape_text(25.4 * (9 + 1 / 32), "in") == "9 1/32"
    assert tape_text(25.4 * 9.07, "in") == "9 1/16"
    assert tape_text(230.2, "mm") == "230.2"


@given(
    st.floats(-3000, 2000), st.floats(100, 3000), st.sampled_from(["in", "mm"]), st.floats(0.03, 60)
)
def test_marks_are_where_they_say_and_keep_their_distance(low, span, unit, dots):
    if span * dots > 4000:
        span = 4000 / dots
    found = marks(low, low + span, unit, dots, 30.0, 4.0)
    scale = 25.4 if unit == "in" else 1.0
    for mark in found:
        assert low - 1e-6 <= mark.at <= low + span + 1e-6
        if mark.numeral:
            assert abs(mark.at) == pytest.approx(int(mark.numeral) * scale, abs=1e-6)
    for one, two in pairwise(found):
        assert (two.at - one.at) * dots >= 4.0 - 1e-6 or dots < 0.07
    numbered = [mark for mark in found if mark.numeral]
    for one, two in pairwise(numbered):
        assert (two.at - one.at) * dots >= 30.0 - 1e-6 or dots < 0.07


def test_feet_are_marked_and_finer_fractions_come_with_zoom():
    feet = [m.numeral for m in marks(-1000, 1000, "in", 0.5) if m.round]
    assert feet == ["36", "24", "12", "0", "12", "24", "36"]
    coarse = marks(0.0, 100.0, "in", 1.0)
    fine = marks(0.0, 100.0, "in", 8.0)
    assert len(fine) > 3 * len(coarse)
    assert {m.size for m in coarse} <= {m.size for m in fine}
