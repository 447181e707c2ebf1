"""The string check, the arm for a wanted Ackermann, and knuckles put on the other side."""

from dataclasses import replace

import numpy as np
import pytest

from geometry.corner import Corner
from geometry.layout import (
    LOWER_BALL,
    LOWER_INNER,
    TIE_INNER,
    TIE_OUTER,
    UPPER_BALL,
    UPPER_INNER,
    WHEEL_CENTER,
    Layout,
    LayoutError,
    Point,
    RelayRod,
    Side,
    Tire,
)
from geometry.plan_view import plan_of
from geometry.solution import PIVOT_KINDS, solve
from geometry.steering_arm import (
    arm_for_percent,
    arm_on_string,
    percent_by_inner_pivot,
    string_check,
    swapped_knuckles,
)

BASE = 2800.0
ARMS = Side(
    {
        LOWER_INNER: (230, 200),
        LOWER_BALL: (620, 190, 5),
        UPPER_INNER: (330, 410),
        UPPER_BALL: (580, 440, -10),
        TIE_OUTER: (600, 350, -127),
        TIE_INNER: (300, 330.3, -127),
        WHEEL_CENTER: (700, 310),
    },
    Tire(310),
)
REAR = Layout(ARMS, wheelbase=BASE)
UNEVEN = replace(REAR, right=ARMS.moved(TIE_OUTER, Point(590, 352, -120)))
RELAY = RelayRod((260, 300, -220), (250, 330, -100), (260, 300, -220), (250, 330, -100))
PARALLEL = replace(
    ARMS,
    points={
        **ARMS.points,
        LOWER_INNER: Point(230, 190),
        UPPER_INNER: Point(330, 440),
        TIE_INNER: Point(300, 350, -127),
    },
)


@pytest.mark.parametrize("side", ["left", "right"])
def test_the_string_runs_from_the_kingpin_to_the_rear_axle_s_middle(side: str) -> None:
    check = string_check(UNEVEN, side)
    assert check is not None
    end, axis = np.array(check.needed.end), np.array(check.arm.kingpin)
    middle = np.array([0.0, end[1], -BASE])
    # In one line, at one height.
    assert np.linalg.norm(np.cross(middle - axis, end - axis)) < 1e-6
    assert check.needed.end.fore == check.arm.end.fore
    assert check.off == pytest.approx(check.arm.end.over - check.needed.end.over)


def test_an_end_outboard_of_the_string_is_off_by_a_positive_amount() -> None:
    outboard = string_check(REAR, "left")
    inboard = string_check(replace(REAR, left=ARMS.moved(TIE_OUTER, Point(500, 350, -127))), "left")
    assert outboard is not None and inboard is not None
    assert outboard.off > 0.0 > inboard.off
    assert not outboard.arm.leans_right and inboard.arm.leans_right
    assert outboard.needed.lean < 0.0


def test_arm_length_and_lean_are_measured_level_from_the_kingpin_axis() -> None:
    check = string_check(REAR, "left")
    assert check is not None
    # The axis at 350 mm: 160/250 of the way from the lower to the upper ball joint.
    assert check.arm.kingpin == pytest.approx(Point(594.4, 350.0, -4.6))
    assert check.arm.length == pytest.approx(np.hypot(5.6, 122.4))
    assert check.arm.lean == pytest.approx(np.arctan2(5.6, 122.4))


@pytest.mark.parametrize("layout", [REAR, UNEVEN], ids=["linked", "uneven"])
def test_the_ends_moved_to_the_string_are_on_it(layout: Layout) -> None:
    solution = solve(layout)
    moved = arm_on_string(solution, plan_of(layout))
    for side in ("left", "right"):
        check = string_check(moved.layout, side)
        assert check is not None and abs(check.off) < 1e-9
    assert moved.percent_before is not None and moved.percent_after is not None
    assert moved.percent_before < 5.0 and moved.percent_after > 50.0


@pytest.mark.parametrize("layout", [REAR, UNEVEN], ids=["linked", "uneven"])
@pytest.mark.parametrize("percent", [0.0, 60.0, 100.0])
def test_the_arm_for_a_percentage_gives_it_on_a_fresh_solve(layout: Layout, percent: float) -> None:
    angle = float(np.radians(15.0))
    moved = arm_for_percent(solve(layout), plan_of(layout), percent, angle)
    assert plan_of(moved.layout).percent_at(angle) == pytest.approx(percent, abs=1e-3)
    assert moved.percent_after == pytest.approx(percent, abs=1e-3)
    for side in ("left", "right"):
        old, new = layout.side(side)[TIE_OUTER], moved.layout.side(side)[TIE_OUTER]
        assert (new.up, new.fore) == (old.up, old.fore)
        assert new.over - old.over == pytest.approx(moved.move[side])


def toe_slope(layout: Layout) -> float:
    toe = Corner.of(layout.left).poses(np.array([-1.0, 1.0])).toe
    return float(toe[1] - toe[0]) / 2.0


def test_the_followed_inner_pivot_keeps_a_tie_rod_aimed_at_the_instant_center() -> None:
    """Toe rate zero before, and again after the arm has moved and the inner pivot followed."""
    found = solve(REAR).left.pivots.place("curvature center")
    assert found is not None
    aimed = REAR.with_point("left", TIE_INNER, Point(found[0], found[1], -127))
    assert abs(toe_slope(aimed)) < 1e-7
    moved = arm_for_percent(solve(aimed), plan_of(aimed), 70.0)
    assert moved.followed is not None and moved.inner is not None
    assert abs(toe_slope(moved.layout)) > 1e-6
    assert abs(toe_slope(moved.followed)) < 0.05 * abs(toe_slope(moved.layout))
    toe = {name: getattr(moved, name)["left"] for name in ("toe_alone", "toe_followed")}
    assert toe["toe_followed"] < toe["toe_alone"]


def test_with_parallel_arms_the_tie_rod_keeps_its_direction() -> None:
    layout = replace(REAR, left=PARALLEL)
    moved = arm_for_percent(solve(layout), plan_of(layout), 60.0)
    assert moved.inner is not None
    assert moved.inner["left"].up == pytest.approx(350.0)


def test_toe_ranges_are_those_of_a_fresh_solve() -> None:
    solution = solve(REAR, span=60.0)
    moved = arm_on_string(solution, plan_of(REAR))
    for layout, ranges in ((REAR, moved.toe_before), (moved.layout, moved.toe_alone)):
        toe = solve(layout, span=60.0).left.sweep.toe
        assert ranges["left"] == pytest.approx(np.ptp(toe))


def test_inner_pivot_moves_change_ackermann_as_a_fresh_solve_says() -> None:
    solution, plan = solve(REAR), plan_of(REAR)
    angle = float(np.radians(20.0))
    percents = percent_by_inner_pivot(solution, plan, angle)
    assert set(percents) == set(PIVOT_KINDS)
    assert percents["as is"] == pytest.approx(plan.percent_at(angle))
    place = solution.left.pivots.place("string rule")
    assert place is not None
    there = REAR.with_point("left", TIE_INNER, Point(place[0], place[1], -127))
    assert percents["string rule"] == pytest.approx(plan_of(there).percent_at(angle))


def test_what_cannot_be_had_is_refused_in_a_sentence() -> None:
    solution, plan = solve(REAR), plan_of(REAR)
    with pytest.raises(LayoutError, match="No place of the steering arm's end within 100 mm"):
        arm_for_percent(solution, plan, 5000.0)
    with pytest.raises(LayoutError, match="does not reach 80 degrees"):
        arm_for_percent(solution, plan, 50.0, float(np.radians(80.0)))
    bare = replace(REAR, wheelbase=None)
    assert string_check(bare, "left") is None
    with pytest.raises(LayoutError, match="wheelbase"):
        arm_on_string(solve(bare), plan_of(bare))
    with pytest.raises(LayoutError, match="wheelbase is not given"):
        arm_for_percent(solve(bare), plan_of(bare), 50.0)


def test_knuckles_on_the_other_side_turn_good_ackermann_into_reverse() -> None:
    good = replace(REAR, left=ARMS.moved(TIE_OUTER, Point(565, 350, -127)))
    swapped = swapped_knuckles(good)
    before, after = plan_of(good), plan_of(swapped)
    assert before.straight_ahead_percent is not None and after.straight_ahead_percent is not None
    assert before.straight_ahead_percent > 40.0 and after.straight_ahead_percent < -40.0
    assert after.is_reverse
    assert swapped.left[TIE_OUTER].fore > 0.0 and swapped.left[TIE_INNER].fore > 0.0
    assert swapped.linked
    # The rack must go the other way for the same turn.
    assert np.sign(before.turn[-1]) == -np.sign(after.turn[-1])
    assert any("not measured" in line for line in swapped.assumed)


@pytest.mark.parametrize(
    "layout",
    [REAR, UNEVEN, replace(REAR, steering=RELAY)],
    ids=["linked", "uneven", "relay rod"],
)
def test_swapping_twice_brings_the_car_back(layout: Layout) -> None:
    again = swapped_knuckles(swapped_knuckles(layout))
    for side in ("left", "right"):
        for name in (TIE_OUTER, TIE_INNER):
            assert again.side(side)[name] == pytest.approx(layout.side(side)[name], abs=1e-9)
    assert (again.steering == layout.steering) or np.allclose(
        [again.steering[n] for n in ("pitman arm end", "idler arm pivot")],
        [layout.steering[n] for n in ("pitman arm end", "idler arm pivot")],
    )


def test_unlike_knuckles_change_places() -> None:
    swapped = swapped_knuckles(UNEVEN)
    right_arm, left_now = string_check(UNEVEN, "right"), string_check(swapped, "left")
    assert right_arm is not None and left_now is not None
    assert left_now.arm.length == pytest.approx(right_arm.arm.length)
    assert left_now.arm.lean == pytest.approx(right_arm.arm.lean)
