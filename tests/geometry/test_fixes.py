"""The fix list: what it claims holds when the moves are made and the car is solved again."""

from __future__ import annotations

import math
from dataclasses import replace
from functools import cache

import numpy as np
import pytest

from geometry.corner import lengths, space
from geometry.fixes import Allowances, Fix, FixList, ShopMove, fix_list, fixes
from geometry.layout import (
    LOWER_BALL,
    MM_PER_INCH,
    SIDES,
    TIE_INNER,
    TIE_OUTER,
    UPPER_BALL,
    UPPER_INNER,
    UPPER_INNER_FRONT,
    UPPER_INNER_REAR,
    Layout,
    NoGo,
    other_side,
)
from geometry.plan_view import plan_of
from geometry.shop_moves import KINDS, SPACERS, TALLER, allowed_kinds, amounts
from geometry.solution import solve
from geometry.tolerances import camber_gain
from tests.fuzz.strange_cars import car as strange_car
from tests.sample_cars import CARS, DEGENERATE, ROADSTER

INCH = MM_PER_INCH


def displaced(layout: Layout, name: str, over: float = 0.0, up: float = 0.0) -> Layout:
    """The car with a nail somewhere else on every side, mm."""
    for side in SIDES[:1] if layout.linked else SIDES:
        at = layout.side(side)[name]
        layout = layout.with_point(side, name, at._replace(over=at.over + over, up=at.up + up))
    return layout


FAULTY: dict[str, Layout] = {
    "rack-set-low": CARS["rack-set-low"],
    "cut-springs": CARS["cut-springs"],
    "knuckle-swap": CARS["knuckle-swap"],
    "strut, rack high": displaced(CARS["strut-hatch"], TIE_INNER, up=11.0),
    "skewed arms, outer end high": displaced(CARS["skewed-arms"], TIE_OUTER, up=8.0),
    "relay rod low": displaced(CARS["steering-box-sedan"], TIE_INNER, up=-7.0),
    "sides differ, rack low": displaced(CARS["unequal-sides"], TIE_INNER, up=-9.0),
}


@cache
def listed(name: str, side: str = "left") -> FixList:
    found = fix_list(FAULTY[name], "right" if side == "right" else "left")
    assert found is not None
    return found


def kinds(fix: Fix) -> tuple[str, ...]:
    return tuple(move.kind for move in fix.moves)


# --- claims hold -------------------------------------------------------------------------


@pytest.mark.parametrize("name", FAULTY)
def test_each_fix_leaves_just_what_it_claims_when_the_changed_car_is_solved(name: str):
    found = listed(name)
    assert found.fixes and not found.trouble and found.present is not None
    for fix in found.fixes:
        again = solve(fix.layout)
        # The full solve: what the readouts and `bobline figures` say of the changed car.
        left, right = (float(np.ptp(again.sides[side].sweep.toe)) for side in SIDES)
        assert abs(left - fix.toe_range) < 1e-9
        assert fix.other_range is not None
        assert abs(right - fix.other_range) < 1e-9
        assert float(np.ptp(fix.toe)) == pytest.approx(fix.toe_range, abs=1e-12)
        assert fix.toe_range < found.present
        right_was = float(np.ptp(solve(FAULTY[name]).right.sweep.toe))
        spoiled = right > max(right_was, found.tolerance)
        assert fix.cures == (left <= found.tolerance and not spoiled)


@pytest.mark.parametrize("name", FAULTY)
def test_making_the_moves_by_hand_gives_the_listed_car(name: str):
    for fix in listed(name).fixes:
        car: Layout | None = FAULTY[name]
        for move in fix.moves:
            assert car is not None
            car = move.applied(car, fix.side)
        assert car == fix.layout


@pytest.mark.parametrize("name", FAULTY)
def test_costs_are_the_differences_of_the_two_solved_cars(name: str):
    layout = FAULTY[name]
    was = solve(layout)
    for fix in listed(name).fixes[:6]:
        now = solve(fix.layout)
        assert was.ride_roll_center and now.ride_roll_center
        change = now.ride_roll_center[1] - was.ride_roll_center[1]
        assert fix.costs.roll_center == pytest.approx(change, abs=1e-9)
        gain = (camber_gain(now.left) or 0.0) - (camber_gain(was.left) or 0.0)
        assert fix.costs.camber_gain == pytest.approx(gain, abs=1e-12)
        rod = lengths(fix.layout.left)["tie rod"] - lengths(layout.left)["tie rod"]
        assert fix.costs.tie_rod == pytest.approx(rod, abs=1e-9)
        assert fix.costs.thread_lost == pytest.approx(max(rod, 0.0), abs=1e-9)
        turned = [plan_of(car).percent_at(math.radians(20.0)) for car in (layout, fix.layout)]
        if None not in turned:
            difference = (turned[1] or 0.0) - (turned[0] or 0.0)
            assert fix.costs.ackermann == pytest.approx(difference, abs=1e-6)


# --- what a shop expects ------------------------------------------------------------------


def test_a_rack_set_half_an_inch_low_is_raised_half_an_inch_first():
    first = listed("rack-set-low").fixes[0]
    assert first.text == "Raise the rack 1/2 in."
    assert first.cures and first.moves == (ShopMove("rack_height", 0.5 * INCH),)
    assert first.costs.roll_center == pytest.approx(0.0, abs=1e-9)
    assert first.layout.left.points == ROADSTER.left.points


def test_a_knuckle_with_the_tie_rod_two_inches_high_lowers_it_or_raises_the_rack():
    found = listed("knuckle-swap").fixes
    assert kinds(found[0]) == ("knuckle_height",)
    assert found[0].moves[0].amount == pytest.approx(-2.0 * INCH)
    assert "2 in lower" in found[0].text and found[0].cures
    assert "barred" in found[0].notes[0]
    rack = [fix for fix in found if kinds(fix) == ("rack_height",)]
    assert rack and rack[0].moves[0].amount > INCH and rack[0].text.startswith("Raise the rack 1 ")
    assert any(kinds(fix) == ("rack_height", "outer_spacer") for fix in found)


def test_fixes_come_by_what_they_leave_and_then_by_how_much_is_changed():
    for name in FAULTY:
        found = listed(name)
        ranks = []
        for fix in found.fixes:
            judged = max(fix.toe_range, fix.other_range or 0.0) if FAULTY[name].linked else None
            if judged is not None:
                quarter = math.ceil(judged / (0.25 * found.tolerance))
                ranks.append((bool(fix.costs.runs_into), quarter, len(fix.moves), fix.changed))
        assert ranks == sorted(ranks)


def test_a_pair_is_only_listed_where_it_beats_each_half():
    for name in FAULTY:
        alone = {kinds(fix)[0]: fix.toe_range for fix in listed(name).fixes if len(fix.moves) == 1}
        for fix in listed(name).fixes:
            for move in fix.moves if len(fix.moves) == 2 else ():
                assert fix.toe_range < alone.get(move.kind, math.inf)


def test_no_other_size_of_the_same_move_would_leave_clearly_less():
    found = listed("rack-set-low")
    for fix in found.fixes:
        if len(fix.moves) > 1:
            continue
        kind = fix.moves[0].kind
        for amount in amounts(kind, Allowances(), "in"):
            car = ShopMove(kind, float(amount)).applied(FAULTY["rack-set-low"], "left")
            left = None if car is None else solve(car).left.pivots.ranges["as is"]
            assert left is None or left > fix.toe_range - found.tolerance / 15.9


def test_only_what_may_be_moved_is_moved_and_no_farther():
    layout = CARS["rack-set-low"]
    allowed = replace(Allowances.none(), rack_height=0.25 * INCH, inner_width=0.5 * INCH)
    found = fix_list(layout, "left", allowed)
    assert found is not None and found.fixes
    for fix in found.fixes:
        assert set(kinds(fix)) <= {"rack_height", "inner_width"}
        for move in fix.moves:
            limit = allowed.rack_height if move.kind == "rack_height" else allowed.inner_width
            assert abs(move.amount) <= limit + 1e-6
    assert "Raise the rack 1/4 in" in found.fixes[0].text and not found.fixes[0].cures


def test_locked_nails_stay_where_they_are():
    layout = replace(CARS["rack-set-low"], locked=frozenset({TIE_INNER, UPPER_BALL}))
    found = fix_list(layout)
    assert found is not None and found.fixes
    for fix in found.fixes:
        for name in layout.locked:
            assert fix.layout.left[name] == layout.left[name]


def test_what_would_stand_in_a_no_go_shape_comes_last_and_says_so():
    layout = CARS["rack-set-low"]
    at = layout.left[TIE_INNER]
    box = tuple((at.over + x, at.up + 12.7 + y) for x, y in ((-9, -3), (9, -3), (9, 9), (-9, 9)))
    found = fix_list(replace(layout, no_go=(NoGo("oil pan", box, clearance=0.0),)))
    assert found is not None
    raised = [fix for fix in found.fixes if kinds(fix) == ("rack_height",)]
    assert raised and raised[0].costs.runs_into == ("oil pan",)
    assert "oil pan" in raised[0].costs.words("in")[0]
    flags = [bool(fix.costs.runs_into) for fix in found.fixes]
    assert flags == sorted(flags) and not flags[0]


def test_a_rack_is_not_raised_for_one_side_at_the_other_sides_cost():
    layout = CARS["unequal-sides"].unlinked()
    right = displaced(layout.linked_to("right"), TIE_INNER, up=-12.0).left
    layout = replace(layout, right=right)
    found = fix_list(layout, "right")
    assert found is not None and found.fixes
    was = solve(layout).left.pivots.ranges["as is"]
    assert was is not None and was <= found.tolerance
    for fix in found.fixes:
        left = solve(fix.layout).left.pivots.ranges["as is"]
        if fix.cures:
            assert left is not None and left <= found.tolerance
        if "rack_height" not in kinds(fix):
            assert fix.layout.left == layout.left


def test_metric_cars_are_moved_in_whole_millimeters():
    found = listed("strut, rack high")
    assert found.fixes[0].text.startswith("Lower the rack 11 mm.")
    for fix in found.fixes:
        for move in fix.moves:
            assert move.amount == pytest.approx(round(move.amount), abs=1e-6)


def test_a_relay_rod_moves_with_its_arms():
    found = listed("relay rod low")
    first = next(fix for fix in found.fixes if kinds(fix) == ("rack_height",))
    assert first.text.startswith("Raise the relay rod ")
    before, after = FAULTY["relay rod low"].steering, first.layout.steering
    assert before != after
    assert solve(first.layout, rack=20.0).right.shift == pytest.approx(
        solve(FAULTY["relay rod low"], rack=20.0).right.shift, abs=1e-9)


# --- the moves themselves -------------------------------------------------------------------


@pytest.mark.parametrize("name", ["healthy-roadster", "skewed-arms"])
@pytest.mark.parametrize("move", [ShopMove("ball_joint", 19.05), ShopMove("ball_joint", 25.4),
                                  ShopMove("upper_mount_height", 12.7),
                                  ShopMove("upper_mount_height", -25.4)])
def test_a_moved_mount_or_taller_joint_keeps_the_upper_arm(name: str, move: ShopMove):
    side = CARS[name].left
    car = move.applied(CARS[name], "left")
    assert car is not None

    def arm(points) -> float:
        pivot = space(points[UPPER_INNER if UPPER_INNER in points else UPPER_INNER_FRONT])
        rear = pivot - [1, 0, 0] if UPPER_INNER in points else space(points[UPPER_INNER_REAR])
        axis = (pivot - rear) / np.linalg.norm(pivot - rear)
        return float(np.linalg.norm(np.cross(space(points[UPPER_BALL]) - pivot, axis)))

    assert arm(car.left.points) == pytest.approx(arm(side.points), abs=1e-9)
    was, now = (space(points[UPPER_BALL]) - space(points[LOWER_BALL])
                for points in (side.points, car.left.points))
    grown = move.amount if move.kind == "ball_joint" else 0.0
    assert np.linalg.norm(now) - np.linalg.norm(was) == pytest.approx(grown, abs=1e-9)
    assert np.cross(now, was) == pytest.approx(0.0, abs=1e-6)


def test_the_outer_end_moves_along_the_steering_arm():
    layout = CARS["healthy-roadster"]
    car = ShopMove("arm_end", 10.0).applied(layout, "left")
    assert car is not None

    def lever(layout: Layout):
        lower, upper = (space(layout.left[name]) for name in (LOWER_BALL, UPPER_BALL))
        outer = space(layout.left[TIE_OUTER])
        axis = upper - lower
        return (outer - lower - (outer[2] - lower[2]) / axis[2] * axis)[:2]

    was, now = lever(layout), lever(car)
    assert np.hypot(*now) - np.hypot(*was) == pytest.approx(10.0, abs=1e-9)
    assert was[0] * now[1] - was[1] * now[0] == pytest.approx(0.0, abs=1e-6)
    assert car.left[TIE_OUTER].up == layout.left[TIE_OUTER].up


def test_sizes_are_those_a_shop_has():
    sixteenths = amounts("rack_height", Allowances(), "in") / (INCH / 16)
    assert sixteenths == pytest.approx(sixteenths.round(), abs=1e-9)
    assert np.abs(sixteenths).max() == 32
    stacks = np.abs(amounts("outer_spacer", Allowances(), "in")) / INCH
    assert sorted(set(stacks.round(6))) == pytest.approx([n / 16 for n in range(1, 16)])
    assert tuple(amounts("ball_joint", Allowances(), "mm")) == TALLER
    assert not amounts("ball_joint", Allowances(ball_joint=5.0), "in").size
    shims = np.abs(amounts("upper_mount_height", Allowances(), "in")) / INCH
    assert sorted(set(shims.round(6))) == pytest.approx(
        [n / 32 for n in range(1, 8)] + [0.25, 0.5, 0.75, 1.0])
    assert max(amounts("outer_spacer", Allowances(outer_spacer=99.0), "mm")) == sum(SPACERS["mm"])


def test_every_move_has_words_and_a_car():
    for layout in (CARS["rack-set-low"], CARS["unequal-sides"], CARS["steering-box-sedan"],
                   CARS["strut-hatch"]):
        own = layout.left
        for kind in KINDS:
            for amount in amounts(kind, Allowances(), layout.units)[-2:]:
                move = ShopMove(kind, float(amount))
                said = move.text(layout, "right")
                assert said and "  " not in said and not said.endswith(".")
                one_sided = kind != "rack_height" and not layout.linked
                assert ("right" in said) is one_sided
                if kind not in ("ball_joint", "upper_mount_height") or not own.is_strut:
                    car = move.applied(layout, "right")
                    assert car is not None
                    if one_sided:
                        assert car.left == layout.left and car.right != layout.right


# --- long work and no answer -----------------------------------------------------------------


def test_single_moves_come_first_and_pairs_follow():
    lists = list(fixes(CARS["rack-set-low"]))
    assert [found.done for found in lists] == [False, True]
    assert all(len(fix.moves) == 1 for fix in lists[0].fixes) and lists[0].fixes
    assert any(len(fix.moves) == 2 for fix in lists[1].fixes)


def test_the_work_can_be_stopped_and_tells_how_far_it_is():
    told: list[float] = []
    assert fix_list(CARS["cut-springs"], progress=told.append) is not None
    assert told == sorted(told) and told[-1] == 1.0 and len(told) > 10
    asked = []

    def stop() -> bool:
        asked.append(1)
        return len(asked) > 12

    lists = list(fixes(CARS["cut-springs"], stop=stop))
    assert len(asked) < 16 and not any(found.done for found in lists)
    assert fix_list(CARS["cut-springs"], stop=lambda: True) is None


def test_a_car_without_a_fault_has_nothing_to_fix():
    found = fix_list(CARS["healthy-roadster"])
    assert found is not None and not found.fixes and "nothing to fix" in found.trouble
    assert found.present is not None and found.present <= found.tolerance


def test_nothing_to_move_is_said():
    found = fix_list(CARS["rack-set-low"], "left", Allowances.none())
    assert found is not None and "Nothing may be moved" in found.trouble
    tiny = fix_list(CARS["rack-set-low"], "left", replace(Allowances.none(), rack_height=0.3))
    assert tiny is not None and not tiny.fixes and "allow more" in tiny.trouble
    odd = fix_list(CARS["rack-set-low"], "left", replace(Allowances(), rack_height=math.nan))
    assert odd is not None and all("rack_height" not in kinds(fix) for fix in odd.fixes)


def test_a_strut_car_has_no_upper_arm_to_move():
    assert not set(allowed_kinds(CARS["strut-hatch"], "left", Allowances())) & {
        "upper_mount_height", "upper_mount_width", "ball_joint"}


@pytest.mark.parametrize("name", DEGENERATE)
def test_degenerate_cars_get_a_sentence_or_fixes_that_hold(name: str):
    layout = DEGENERATE[name]
    for side in SIDES:
        found = fix_list(layout, side)
        assert found is not None
        assert found.trouble.endswith(".") or found.fixes
        assert other_side(side) != side and "nan" not in found.trouble.lower()


@pytest.mark.parametrize("limit", [0.0, -1.0])
def test_a_toe_limit_of_nothing_or_less_still_gives_fixes(limit):
    # Found by the strange cars: no size was within reach of a limit below nothing.
    car = replace(FAULTY["rack-set-low"], tolerances={"toe range": limit})
    found = fix_list(car)
    assert found is not None and found.fixes
    assert not any(fix.cures and fix.remains > 0.0 for fix in found.fixes)


@pytest.mark.filterwarnings("error")
def test_a_tie_rod_of_no_leverage_is_answered_in_words():
    # Found by the strange cars: its turning angle is nothing over nothing.
    car = FAULTY["rack-set-low"]
    side = car.left
    points = {**side.points, TIE_OUTER: side[LOWER_BALL], TIE_INNER: side[LOWER_BALL]}
    found = fix_list(replace(car, left=replace(side, points=points)))
    assert found is not None and found.trouble.endswith(".")


def test_a_move_whose_car_does_not_go_through_its_travel_is_no_fix():
    # Found by the strange cars: its toe change was no number, and was shown.
    car, _ = strange_car(np.random.default_rng([3, 82]))
    found = fix_list(car)
    assert found is not None
    for fix in found.fixes:
        assert math.isfinite(fix.toe_range) and np.isfinite(fix.toe).all()
        assert "nan" not in fix.remains_words("in")
