"""What stands on the floor from above: places, parts, lines, and the steering as it stands."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest

from geometry.ackermann import SteeredCars, kingpin_on_floor
from geometry.faces import ABOVE, FRONT
from geometry.layout import SIDES, TIE_INNER, TIE_OUTER, Point
from geometry.plan_parts import PLAN_ROLES, arm_root, plan_parts
from geometry.plan_strings import plan_marks, plan_strings
from geometry.plan_view import plan_of
from geometry.solution import solve
from geometry.standing import nail_places, standing
from geometry.steered_now import steered_now
from geometry.steering_arm import arm_for_percent, string_check
from tests.sample_cars import CARS, DEGENERATE, RELAY_CAR, ROADSTER, SKEWED_ARMS


def both_of(solution):
    return {side: standing(solution, side, ABOVE) for side in SIDES}


@pytest.mark.parametrize("car", CARS)
def test_nails_keep_their_column_and_run_forward_down_the_screen(car):
    layout = CARS[car]
    solution = solve(layout)
    front, above = nail_places(solution), nail_places(solution, ABOVE)
    assert list(front) == list(above)
    for key, (x, y) in above.items():
        assert x == pytest.approx(front[key][0], abs=1e-9)
        assert y == pytest.approx(-layout.point(*key).fore, abs=1e-6)


def test_a_face_changes_only_the_two_measures_it_shows():
    point = Point(1.0, 2.0, 3.0)
    assert FRONT.moved(point, 10.0, 20.0) == Point(10.0, 20.0, 3.0)
    assert ABOVE.moved(point, 10.0, 20.0) == Point(10.0, 2.0, 20.0)
    assert ABOVE.place(-1.0, point) == (-1.0, -3.0)


@pytest.mark.parametrize("car", {**CARS, **DEGENERATE})
@pytest.mark.parametrize("rack", [0.0, 40.0, -75.0])
def test_every_part_and_line_of_any_car_is_drawn_with_real_numbers(car, rack):
    layout = {**CARS, **DEGENERATE}[car]
    solution = solve(layout, {"left": 20.0, "right": -15.0}, rack)
    parts = plan_parts(solution)
    assert {part.role for part in parts} <= set(PLAN_ROLES)
    for part in parts:
        assert np.isfinite(part.outline).all()
    both = both_of(solution)
    marks = plan_marks(solution, both)
    for line in plan_strings(solution, both, marks):
        assert np.isfinite([line.start, line.end]).all()


@pytest.mark.parametrize("car", CARS)
@pytest.mark.parametrize("rack", [-70.0, -25.0, 4.0, 55.0])
def test_the_steering_as_it_stands_is_the_plan_views(car, rack):
    layout = CARS[car]
    plan = plan_of(layout)
    now = steered_now(solve(layout, 0.0, rack))
    assert now is not None and plan.percent is not None
    # The plan has no rack of its own at this place: interpolate its fine table.
    order = np.argsort(plan.rack)
    for side in SIDES:
        turned = np.interp(rack, plan.rack[order], plan.sides[side].turned[order])
        assert now.turned[side] == pytest.approx(float(turned), abs=2e-4)
    one = plan_of(replace(layout, tolerances={**layout.tolerances, "rack travel": abs(rack)}))
    at = int(np.argmin(np.abs(one.rack - rack)))
    assert one.rack[at] == pytest.approx(rack, abs=0.051)
    assert one.percent is not None and one.slip is not None
    exact = steered_now(solve(layout, 0.0, float(one.rack[at])))
    assert exact is not None and exact.scrub is not None
    assert exact.percent == pytest.approx(float(one.percent[at]), abs=1e-6)
    assert exact.inner == pytest.approx(float(one.inner[at]), abs=1e-12)
    for side in SIDES:
        assert exact.scrub[side] == pytest.approx(float(one.slip[side][at]), abs=1e-9)


def test_straight_ahead_has_no_turn_and_no_percent():
    now = steered_now(solve(ROADSTER))
    assert now is not None and now.turn is None and now.percent is None and now.scrub is None


def test_bump_alone_is_no_steering():
    now = steered_now(solve(CARS["knuckle-swap"], 60.0))
    assert now is not None and now.turned == {"left": 0.0, "right": 0.0}


def test_without_a_wheelbase_the_angles_are_still_known():
    now = steered_now(solve(replace(ROADSTER, wheelbase=None), 0.0, 40.0))
    assert now is not None and now.turn == "right" and now.percent is None
    assert now.inner > now.outer > 0.0


def test_lines_square_to_the_wheels_meet_on_the_rear_axle_where_ackermann_is_met():
    """Where an arm gives 100 percent, both axle lines cross the rear axle's in one place."""
    angle = math.radians(20.0)
    car = arm_for_percent(solve(ROADSTER), plan_of(ROADSTER), 100.0, angle).layout
    steered = SteeredCars([car], plan_of(car).lock)
    rack = float(steered.rack_where("inner", angle)[0, 0])
    now = steered_now(solve(car, 0.0, rack))
    before = steered_now(solve(ROADSTER, 0.0, rack))
    assert now is not None and now.crossing is not None
    assert before is not None and before.crossing is not None
    assert now.percent == pytest.approx(100.0, abs=1e-6)
    # Percent Ackermann is taken at the kingpins and these lines at the tires: a foot ahead of
    # the contact by the trail and a steered contact's own way keep them a little apart.
    feet = {side: kingpin_on_floor(solve(car).sides[side].ride)[1, 0] for side in SIDES}
    turned = {side: now.turned[side] for side in SIDES}
    at_feet = [
        sign * feet[side] + ROADSTER.wheelbase / math.tan(turned[side])
        for side, sign in (("left", 1.0), ("right", -1.0))
    ]
    assert at_feet[0] == pytest.approx(at_feet[1], abs=1e-3)
    apart, was = (abs(n.crossing["left"] - n.crossing["right"]) for n in (now, before))
    assert apart < 0.2 * was


def test_the_string_runs_from_the_kingpin_to_the_rear_axle_and_through_the_wanted_end():
    solution = solve(ROADSTER)
    both = both_of(solution)
    marks = plan_marks(solution, both)
    lines = {line.side: line for line in plan_strings(solution, both, marks)
             if line.kind == "check"}
    assert set(lines) == set(SIDES)
    for side, line in lines.items():
        assert line.end == (0.0, ROADSTER.wheelbase)
        assert line.start == pytest.approx(arm_root(both[side]), abs=1e-6)
        (x1, y1), (x2, y2), (x, y) = line.start, line.end, marks.wanted[side]
        area = (x2 - x1) * (y - y1) - (y2 - y1) * (x - x1)
        assert abs(area) / math.dist(line.start, line.end) < 1e-6
        check = string_check(ROADSTER, side)
        assert check is not None
        end = both[side].points[TIE_OUTER]
        assert both[side].sign * (end[0] - x) == pytest.approx(check.off, abs=1e-9)
    assert not plan_marks(solve(ROADSTER, 0.0, 30.0), both).checks


def test_skewed_arms_show_their_axes_and_single_pivots_none():
    for layout, wanted in ((SKEWED_ARMS, 4), (ROADSTER, 0)):
        solution = solve(layout)
        both = both_of(solution)
        lines = plan_strings(solution, both, plan_marks(solution, both))
        assert sum(line.kind == "axis" for line in lines) == wanted


def test_a_relay_rod_swings_rearward_or_forward_with_its_arms():
    straight, steered = (nail_places(solve(RELAY_CAR, 0.0, rack), ABOVE) for rack in (0.0, 60.0))
    moved = {key for key in straight if straight[key] != steered[key]}
    assert {name for _, name in moved} >= {TIE_INNER, TIE_OUTER, "pitman arm end", "idler arm end"}
    pitman = ("left", "pitman arm end")
    assert steered[pitman][0] - straight[pitman][0] == pytest.approx(60.0)
    # Behind its pivot, an arm's end swings forward as it turns: y falls.
    assert steered[pitman][1] < straight[pitman][1]
