"""Labels: no two overlap, none leaves its area, and each stays near what it names."""

from __future__ import annotations

from itertools import combinations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from geometry.labels import GAP, Box, Label, place_labels

AREA = Box(10.0, 20.0, 600.0, 400.0)


@st.composite
def label_sets(draw):
    count = draw(st.integers(1, 14))
    return [
        Label(
            str(k),
            (draw(st.floats(-300, 1000)), draw(st.floats(-300, 800))),
            draw(st.floats(20, 320)),
            draw(st.floats(12, 40)),
            draw(st.floats(2, 20)),
            draw(st.booleans()),
        )
        for k in range(count)
    ]


@settings(max_examples=150, deadline=None)
@given(labels=label_sets(), offset=st.tuples(st.floats(-80, 80), st.floats(-80, 80)))
def test_no_two_overlap_and_none_leaves(labels, offset):
    hard = [Box(200.0, 100.0, 90.0, 60.0)]
    soft = [Box(400.0, 250.0, 30.0, 30.0)]
    placed = place_labels(labels, AREA, soft, hard, {"0": offset})
    for box in placed.values():
        assert AREA.holds(box)
        assert not box.overlaps(hard[0])
    for (one, a), (two, b) in combinations(placed.items(), 2):
        assert not a.grown(GAP - 1e-6).overlaps(b), (one, two)


def test_a_lone_label_stands_beside_its_mark():
    (box,) = place_labels([Label("a", (300.0, 200.0), 80.0, 20.0, 8.0)], AREA).values()
    assert not box.overlaps(Box(300.0, 200.0, 0.0, 0.0).grown(5.0))
    assert abs(box.left - 300.0) < 20.0 and abs(box.bottom - 200.0) < 20.0


def test_labels_of_one_anchor_go_to_different_places():
    labels = [Label(str(k), (300.0, 200.0), 120.0, 20.0) for k in range(8)]
    placed = place_labels(labels, AREA)
    assert len(placed) == 8
    assert len({(box.left, box.top) for box in placed.values()}) == 8


def test_soft_boxes_are_avoided_where_there_is_a_choice():
    label = Label("a", (300.0, 200.0), 80.0, 20.0, 8.0)
    (first,) = place_labels([label], AREA).values()
    (second,) = place_labels([label], AREA, soft=[first]).values()
    assert not second.overlaps(first)


def test_a_label_stays_where_it_was_while_that_is_nearly_as_good():
    label = Label("a", (300.0, 200.0), 80.0, 20.0, 8.0)
    left = (-92.0, -24.0)
    (box,) = place_labels([label], AREA, before={"a": left}).values()
    assert (box.left, box.top) == pytest.approx((208.0, 176.0))


@pytest.mark.parametrize(
    ("anchor", "touches"),
    [
        ((-500.0, 200.0), "left"),
        ((2000.0, 200.0), "right"),
        ((300.0, -900.0), "top"),
        ((300.0, 1900.0), "bottom"),
    ],
)
def test_an_edge_label_stands_against_its_edge(anchor, touches):
    (box,) = place_labels([Label("a", anchor, 80.0, 20.0, 6.0, True)], AREA).values()
    assert getattr(box, touches) == pytest.approx(getattr(AREA, touches))


def test_edge_labels_of_one_place_slide_along_the_edge():
    labels = [Label(str(k), (-500.0, 200.0), 80.0, 20.0, 6.0, True) for k in range(5)]
    placed = place_labels(labels, AREA)
    assert {box.left for box in placed.values()} == {AREA.left}
    assert len(placed) == 5


def test_a_label_too_large_for_the_area_is_left_out():
    assert place_labels([Label("a", (300.0, 200.0), 800.0, 20.0)], AREA) == {}


def test_a_full_area_leaves_later_labels_out():
    labels = [Label(str(k), (300.0, 200.0), 590.0, 90.0) for k in range(12)]
    placed = place_labels(labels, AREA)
    assert list(placed) == [str(k) for k in range(len(placed))]
    assert 2 <= len(placed) <= 4
