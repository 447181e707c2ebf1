"""Any car comes back from its measure sheet exactly, and any text is read or told about."""

from __future__ import annotations

from hypothesis import given, settings
from hypothesis import strategies as st

from geometry.layout import Layout, Point, Rack, RelayRod, Side, Tire
from geometry.measure_sheet import (
    MeasureSheetError,
    measure_sheet_from_text,
    measure_sheet_to_text,
    starting_sheet,
)

# Remainders below a nanometer's millionth are shown as 0; no measure is as small.
LENGTH = st.floats(-1e5, 1e5).filter(lambda mm: mm == 0.0 or abs(mm) > 1e-9)
SIZE = st.floats(1e-3, 1e5)
ANGLE = st.floats(-0.78, 0.78).filter(lambda a: a == 0.0 or abs(a) > 1e-12)
POINT = st.builds(Point, LENGTH, LENGTH, LENGTH)
NAMES = (
    "lower inner pivot front", "lower inner pivot rear", "lower ball joint", "upper inner pivot",
    "upper ball joint", "tie rod inner", "tie rod outer", "wheel center",
)
SIDE = st.builds(
    Side,
    st.fixed_dictionaries(dict.fromkeys(NAMES, POINT)),
    st.builds(Tire, SIZE, SIZE, SIZE, SIZE),
    ANGLE,
    ANGLE,
)
WORDS = st.text(st.characters(categories=["L", "N", "P", "S"]), min_size=1, max_size=10)
LAYOUT = st.builds(
    Layout,
    left=SIDE,
    right=st.none() | SIDE,
    steering=st.builds(Rack)
    | st.builds(RelayRod, POINT, POINT, POINT, POINT, st.sampled_from(["left", "right"])),
    title=st.lists(WORDS, min_size=1, max_size=4).map(" ".join),
    units=st.sampled_from(["in", "mm"]),
    # A layout file takes no wheelbase below a millimeter, so a sheet gives none.
    wheelbase=st.none() | SIZE.filter(lambda size: size >= 1.0),
    cg_height=st.none() | SIZE,
)


@settings(deadline=None, max_examples=40)
@given(LAYOUT)
def test_any_car_comes_back_from_its_sheet(car: Layout) -> None:
    assert measure_sheet_from_text(measure_sheet_to_text(car)).planned == car


def told(text: str) -> tuple[str, ...]:
    """The faults of a sheet; none if it was read."""
    try:
        measure_sheet_from_text(text)
    except MeasureSheetError as error:
        return error.faults
    return ()


@settings(deadline=None)
@given(st.text(max_size=300))
def test_any_text_is_told_about(text: str) -> None:
    assert told(text)


@settings(deadline=None)
@given(st.data())
def test_a_damaged_sheet_is_read_or_told_about(data: st.DataObject) -> None:
    text = starting_sheet(data.draw(st.sampled_from(["A-arm", "strut", "relay rod"])))
    start = data.draw(st.integers(0, len(text)))
    end = data.draw(st.integers(start, min(len(text), start + 40)))
    damaged = text[:start] + data.draw(st.text(max_size=12)) + text[end:]
    assert all(fault.endswith((".", "?")) for fault in told(damaged))
