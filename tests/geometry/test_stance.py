"""Ride-height changes: what stays rigid, what stands on the floor, and what can't be had."""

from __future__ import annotations

import math
from dataclasses import replace
from itertools import combinations

import numpy as np
import pytest

from geometry import layout as names
from geometry.corner import Corner, contact_point
from geometry.inner_pivot import held_travel
from geometry.layout import KNUCKLE_POINTS, SIDES, Layout, LayoutError, NoGo, RelayRod, Side
from geometry.solution import solve
from geometry.stance import Stance, aligned, by_spindle, by_spring, by_tire, lowered, raked
from tests.sample_cars import CARS, RELAY_CAR, ROADSTER, STRUT_CAR

SPRUNG = [name for name in CARS if name != "cut-springs"]
DROPS = [50.0, -30.0]


def span(side: Side, a: str, b: str) -> float:
    return math.dist(side[a], side[b])


def contact_height(side: Side) -> float:
    corner = Corner.of(side)
    return float(contact_point(corner.wheel_center, corner.spin_axis, corner.tire_radius)[2, 0])


@pytest.mark.parametrize("drop", DROPS)
@pytest.mark.parametrize("name", SPRUNG)
def test_a_drop_by_spring_bends_no_part(name: str, drop: float) -> None:
    before = CARS[name]
    after = by_spring(before, drop)
    for side_name in SIDES:
        old, new = before.side(side_name), after.side(side_name)
        knuckle = [p for p in KNUCKLE_POINTS if p in old.points]
        for a, b in combinations(knuckle, 2):
            assert span(new, a, b) == pytest.approx(span(old, a, b), abs=1e-6)
        for arm in ("lower",) if old.is_strut else ("lower", "upper"):
            for pivot in filter(None, (f"{arm} inner pivot", f"{arm} inner pivot front",
                                       f"{arm} inner pivot rear")):  # fmt: skip
                if pivot in old.points:
                    ball = f"{arm} ball joint"
                    assert span(new, pivot, ball) == pytest.approx(span(old, pivot, ball), abs=1e-6)


@pytest.mark.parametrize("drop", DROPS)
@pytest.mark.parametrize("name", SPRUNG)
def test_a_drop_by_spring_is_that_much_travel_with_the_toe_set_again(
    name: str, drop: float
) -> None:
    before = CARS[name]
    after = by_spring(before, drop)
    for side_name in SIDES:
        old, new = before.side(side_name), after.side(side_name)
        assert contact_height(new) == pytest.approx(contact_height(old), abs=1e-6)
        assert new.static_toe == old.static_toe
        ride = Corner.of(new).poses(0.0)
        assert ride.assembles.all()
        assert ride.toe[0] == pytest.approx(old.static_toe, abs=1e-9)
        assert ride.camber[0] == pytest.approx(new.static_camber, abs=1e-9)
        # A second way: the wheel's own travel with its toe held, from the inner pivots' motion.
        motion = held_travel(Corner.of(old), np.array([drop]))
        spin = (motion.spin_along + motion.spin_arm)[:, 0]
        assert new.static_camber == pytest.approx(-math.asin(spin[2]), abs=1e-7)
        fell = old.arm_pivots("lower")[0].up - new.arm_pivots("lower")[0].up
        rose = new[names.WHEEL_CENTER].up + fell - old[names.WHEEL_CENTER].up
        assert rose == pytest.approx(drop, abs=1e-6)


def test_a_drop_by_spring_agrees_with_the_poses_of_a_car_without_bump_steer() -> None:
    best = solve(ROADSTER, span=60.0).left.pivots.place("best fit")
    assert best is not None
    inner = ROADSTER.left[names.TIE_INNER]._replace(over=best[0], up=best[1])
    car = ROADSTER.with_point("left", names.TIE_INNER, inner)
    pose = solve(car, travel=40.0).left.now
    after = by_spring(car, 40.0).left
    assert after.static_camber == pytest.approx(float(pose.camber[0]), abs=2e-5)
    assert after[names.LOWER_BALL].over == pytest.approx(float(pose.lower_ball[1, 0]), abs=0.01)


@pytest.mark.parametrize("carrier", ["lower arm", "upper arm", "knuckle"])
def test_the_spring_s_lower_mount_rides_on_what_carries_it(carrier: str) -> None:
    spring = replace(ROADSTER.left.spring, lower_mount_on=carrier)
    before = replace(ROADSTER.left, spring=spring)
    after = by_spring(replace(ROADSTER, left=before), 50.0).left
    rigid = {
        "lower arm": (names.LOWER_INNER, names.LOWER_BALL),
        "upper arm": (names.UPPER_INNER, names.UPPER_BALL),
        "knuckle": (names.LOWER_BALL, names.UPPER_BALL, names.TIE_OUTER, names.WHEEL_CENTER),
    }[carrier]
    for point in rigid:
        now, was = (span(side, names.SPRING_LOWER, point) for side in (after, before))
        assert now == pytest.approx(was, abs=1e-6)


def test_raising_what_was_lowered_gives_the_car_back() -> None:
    for car in (ROADSTER, STRUT_CAR):
        back = by_spring(by_spring(car, 35.0), -35.0)
        for point, place in car.left.points.items():
            assert back.left[point] == pytest.approx(place, abs=0.02), point


def test_linked_sides_stay_linked_and_equal() -> None:
    for way in (by_spring, by_spindle, by_tire):
        assert way(ROADSTER, 25.0).linked
        both = way(ROADSTER.unlinked(), 25.0)
        assert both.left == both.right == way(ROADSTER, 25.0).left


def test_the_same_drop_by_three_ways_brings_the_body_down_alike() -> None:
    cars = [by_spring(ROADSTER, 25.0), by_spindle(ROADSTER, 25.0), by_tire(ROADSTER, 25.0)]
    for car in cars:
        for pivot in (names.LOWER_INNER, names.UPPER_INNER, names.TIE_INNER):
            fell = ROADSTER.left[pivot].up - car.left[pivot].up
            assert fell == pytest.approx(25.0, abs=0.2)
        assert car.cg_height == pytest.approx((ROADSTER.cg_height or 0.0) - 25.0, abs=0.2)
        assert contact_height(car.left) == pytest.approx(contact_height(ROADSTER.left), abs=0.01)
    spring, spindle, tire = (solve(car).left for car in cars)
    ride = solve(ROADSTER).left
    # Only the spring moves the arms: knuckle and tire leave every angle and slope as it was.
    for state in (spindle, tire):
        assert state.ride_view.camber_rate == pytest.approx(ride.ride_view.camber_rate, rel=0.08)
        assert state.ride_view.lower_line[:2] == pytest.approx(ride.ride_view.lower_line[:2])
    assert abs(float(spring.ride_view.lower_line[0, 0] - ride.ride_view.lower_line[0, 0])) > 0.03


def test_what_hangs_on_the_body_comes_down_with_it() -> None:
    shape = NoGo("rail", ((200.0, 300.0), (300.0, 300.0), (300.0, 400.0)))
    plan = replace(shape, view="above")
    car = replace(RELAY_CAR, no_go=(shape, plan))
    after = by_spindle(car, 40.0)
    assert isinstance(after.steering, RelayRod) and isinstance(car.steering, RelayRod)
    for name in names.RELAY_POINTS:
        assert after.steering[name].up == car.steering[name].up - 40.0
    assert after.no_go[0].outline[0] == (200.0, 260.0)
    assert after.no_go[1] == plan
    assert by_spindle(replace(car, cg_height=None), 40.0).cg_height is None


def test_a_dropped_knuckle_leaves_the_wheel_where_it_is() -> None:
    after = by_spindle(ROADSTER, 40.0)
    assert after.left[names.WHEEL_CENTER] == ROADSTER.left[names.WHEEL_CENTER]
    assert after.left[names.LOWER_BALL].up == ROADSTER.left[names.LOWER_BALL].up - 40.0


def test_a_smaller_tire_brings_the_wheel_down_with_everything() -> None:
    after = by_tire(ROADSTER, 20.0)
    assert after.left.tire.radius == ROADSTER.left.tire.radius - 20.0
    assert after.left[names.WHEEL_CENTER].up == ROADSTER.left[names.WHEEL_CENTER].up - 20.0
    with pytest.raises(LayoutError, match="no radius"):
        by_tire(ROADSTER, 400.0)


def test_a_drop_out_of_reach_is_said_with_the_stop() -> None:
    with pytest.raises(LayoutError, match=r"stop meeting \d+ mm from here\.$"):
        by_spring(ROADSTER, 400.0)
    with pytest.raises(LayoutError, match=r"stop meeting \d+ mm from here\.$"):
        by_spring(ROADSTER, -400.0)
    _, bump = Corner.of(ROADSTER.left).travel_stops()
    assert by_spring(ROADSTER, float(bump) - 10.0).left.points


def test_a_rake_pitches_the_nose_about_the_front_wheels() -> None:
    after = raked(ROADSTER, 50.0)
    angle = math.atan2(50.0, ROADSTER.wheelbase or 0.0)
    before = solve(ROADSTER).left.ride
    now = solve(after).left.ride
    assert after.left[names.WHEEL_CENTER] == ROADSTER.left[names.WHEEL_CENTER]
    assert now.caster[0] == pytest.approx(before.caster[0] - angle, abs=1e-9)
    for a, b in combinations(ROADSTER.left.points, 2):
        assert span(after.left, a, b) == pytest.approx(span(ROADSTER.left, a, b), abs=1e-9)
    relay = raked(RELAY_CAR, 50.0).steering
    assert isinstance(relay, RelayRod) and isinstance(RELAY_CAR.steering, RelayRod)
    # Behind the axle goes up.
    assert relay.pitman_end.up > RELAY_CAR.steering.pitman_end.up
    with pytest.raises(LayoutError, match="wheelbase"):
        raked(replace(ROADSTER, wheelbase=None), 50.0)


def test_a_stance_adds_its_drops_up_and_rakes_if_the_rear_differs() -> None:
    stance = Stance(spring=20.0, spindle=30.0, tire=10.0)
    assert stance.front == 60.0
    after = lowered(ROADSTER, stance)
    one_by_one = by_tire(by_spindle(by_spring(ROADSTER, 20.0), 30.0), 10.0)
    assert after == one_by_one
    assert lowered(ROADSTER, Stance()) == ROADSTER
    assert lowered(ROADSTER, replace(stance, rear=60.0)) == one_by_one
    assert lowered(ROADSTER, replace(stance, rear=40.0)) == raked(one_by_one, 20.0)


@pytest.mark.parametrize("degrees", [0.0, -2.0, 1.0])
@pytest.mark.parametrize("name", CARS)
def test_shims_set_the_camber_and_keep_the_upper_arm(name: str, degrees: float) -> None:
    before, wanted = CARS[name], math.radians(degrees)
    after = aligned(before, wanted)
    for side_name in SIDES:
        old, new = before.side(side_name), after.side(side_name)
        pose = Corner.of(new).poses(0.0)
        assert pose.assembles.all()
        assert pose.camber[0] == pytest.approx(wanted, abs=1e-9)
        assert contact_height(new) == pytest.approx(contact_height(old), abs=1e-9)
        for a, b in combinations((p for p in KNUCKLE_POINTS if p in old.points), 2):
            assert span(new, a, b) == pytest.approx(span(old, a, b), abs=1e-9)
        if not old.is_strut:
            single = names.UPPER_INNER in old.points
            pivot = names.UPPER_INNER if single else names.UPPER_INNER_FRONT
            ball = names.UPPER_BALL
            assert span(new, pivot, ball) == pytest.approx(span(old, pivot, ball), abs=1e-9)
            assert new[pivot].fore == old[pivot].fore


def test_a_camber_beyond_the_arm_is_refused() -> None:
    ball = ROADSTER.left[names.UPPER_BALL]
    short = ROADSTER.left.moved(names.UPPER_INNER, ball._replace(over=ball.over - 20.0))
    with pytest.raises(LayoutError, match="too short"):
        aligned(Layout(short), math.radians(40.0))
    assert isinstance(aligned(Layout(short), 0.0), Layout)
