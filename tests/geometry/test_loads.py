"""A car in a steady turn: balance of moments, limits, and what is still to be given."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest

from geometry.layout import Loads
from geometry.loads import (
    GRAVITY,
    Axle,
    Turn,
    car_in_turn,
    jacking,
    ride_frequency,
    roll_arm,
    roll_stiffness,
    turn,
    wheel_rate,
    wheel_rate_for,
)
from geometry.turn_words import turn_words
from tests.sample_cars import LOADS, ROADSTER

FRONT = Axle(60.0, 1400.0, 30e6, 550.0, 80.0, 310.0)
REAR = Axle(240.0, 1420.0, 18e6, 500.0, 110.0, 320.0)
CG = 520.0


@pytest.mark.parametrize("lateral_g", [0.2, 0.8, -0.5])
def test_the_leaned_mass_is_held_by_springs_against_force_and_weight(lateral_g: float) -> None:
    car = turn(FRONT, REAR, CG, lateral_g)
    assert car is not None
    # Moments about the roll axis: stiffness x angle = m a h + m g h angle.
    mass = FRONT.sprung_mass + REAR.sprung_mass
    held = (FRONT.roll_stiffness + REAR.roll_stiffness) * car.roll_angle
    push = mass * GRAVITY * car.roll_arm * (lateral_g + car.roll_angle)
    assert held == pytest.approx(push, rel=1e-12)
    assert math.copysign(1.0, car.roll_angle) == math.copysign(1.0, lateral_g)
    assert car.roll_gradient == pytest.approx(car.roll_angle / lateral_g)


def test_without_leaning_the_transfer_is_that_of_the_whole_weight() -> None:
    for track in (1200.0, 1500.0):
        front, rear = replace(FRONT, track=track), replace(REAR, track=track)
        car = turn(front, rear, CG, 0.7, leaning=False)
        assert car is not None
        weight = (550 + 500) * CG + 80 * 310 + 110 * 320
        total = car.front.total + car.rear.total
        assert total == pytest.approx(weight * 0.7 * GRAVITY / track, rel=1e-12)
        leaning = turn(front, rear, CG, 0.7)
        assert leaning is not None
        more = 1050 * GRAVITY * leaning.roll_arm * leaning.roll_angle / track
        assert leaning.front.total + leaning.rear.total == pytest.approx(total + more, rel=1e-12)


def test_springs_too_soft_for_the_mass_hold_no_turn() -> None:
    soft = 1050 * GRAVITY * roll_arm(CG, 60.0, 240.0, 550 / 1050)
    for share, holds in ((0.999, False), (1.0, False), (1.001, True)):
        front, rear = (replace(a, roll_stiffness=0.5 * share * soft) for a in (FRONT, REAR))
        assert (turn(front, rear, CG, 0.5) is not None) == holds


def test_straight_ahead_nothing_moves() -> None:
    car = turn(FRONT, REAR, CG, 0.0)
    assert car is not None
    assert (car.roll_angle, car.roll_gradient, car.front.total, car.rear.total) == (0, 0, 0, 0)


def test_the_roll_axis_is_taken_at_the_mass_center_s_station() -> None:
    assert roll_arm(500.0, 100.0, 300.0, 1.0) == 400.0
    assert roll_arm(500.0, 100.0, 300.0, 0.0) == 200.0
    assert roll_arm(500.0, 100.0, 300.0, 0.25) == 250.0


def test_rates_frequency_and_stiffness() -> None:
    # One wheel up by track/2 x angle, the other down: two forces on arms of half a track.
    rate, bar, track, angle = 20.0, 5.0, 1400.0, 0.01
    moment = 2.0 * (rate + bar) * (0.5 * track * angle) * 0.5 * track
    assert roll_stiffness(rate, bar, track) * angle == pytest.approx(moment)
    assert ride_frequency(wheel_rate_for(1.4, 290.0), 290.0) == pytest.approx(1.4)
    assert wheel_rate(80.0, 0.5) == 20.0
    # A mass on a spring: 1 kg on 1 N/mm swings at sqrt(1000)/(2 pi) Hz.
    assert ride_frequency(1.0, 1.0) == pytest.approx(5.0329, abs=1e-4)


def test_jacking_is_what_the_contact_lines_lift() -> None:
    # A roll center 50 mm up on a track of 1400: both lines rise 50 in 700.
    slope = 50.0 / 700.0
    assert jacking(3000.0, 1000.0, slope, slope) == pytest.approx(2000.0 * slope)
    assert jacking(2000.0, 2000.0, slope, slope) == 0.0
    assert jacking(3000.0, 1000.0, -slope, -slope) < 0.0


def test_a_car_s_loads_make_the_same_turn_as_its_axles() -> None:
    loads = replace(LOADS, front_wheel_rate=25.0)
    car = car_in_turn(loads, 520.7, 60.0, 1422.4, 0.6)
    assert isinstance(car, Turn)
    mass, share = loads.sprung_mass or 0.0, loads.front_share or 0.0
    rear_track = loads.rear_track or 0.0
    front = Axle(60.0, 1422.4, 0.5 * (25.0 + 12.0) * 1422.4**2, mass * share, 82.0, 317.5)
    rear = Axle(
        loads.rear_roll_center_height or 0.0, rear_track, 0.5 * 22.0 * rear_track**2,
        mass * (1 - share), 118.0, 323.85,
    )  # fmt: skip
    same = turn(front, rear, 520.7, 0.6)
    assert same is not None
    assert car.roll_angle == pytest.approx(same.roll_angle, rel=1e-12)
    for got, expected in ((car.front, same.front), (car.rear, same.rear)):
        parts = (expected.geometric, expected.elastic, expected.unsprung)
        assert (got.geometric, got.elastic, got.unsprung) == pytest.approx(parts, rel=1e-12)
    stiffer = car_in_turn(loads, 520.7, 60.0, 1422.4, 0.6, front_wheel_rate=50.0)
    assert isinstance(stiffer, Turn)
    assert stiffer.roll_angle < car.roll_angle
    level = replace(loads, rear_track=None, unsprung_front_height=None, unsprung_rear_height=None)
    plain = car_in_turn(level, 520.7, 60.0, 1422.4, 0.6)
    assert isinstance(plain, Turn)
    assert plain.front.unsprung == plain.rear.unsprung == 0.0


def test_what_is_still_to_be_given_is_named() -> None:
    nothing = car_in_turn(Loads(), 500.0, 60.0, 1400.0, 0.6)
    assert isinstance(nothing, str)
    for words in ("sprung weight", "front share", "front wheel rate", "rear wheel rate",
                  "rear roll center"):  # fmt: skip
        assert words in nothing
    one = car_in_turn(replace(LOADS, front_wheel_rate=None), 500.0, 60.0, 1400.0, 0.6)
    assert one == "To see the car in a turn, type a front wheel rate or ride frequency."


def test_a_car_of_no_weight_or_track_is_said_so() -> None:
    whole = replace(LOADS, front_wheel_rate=25.0)
    for loads, track in (
        (replace(whole, sprung_mass=0.0), 1400.0), (whole, 0.0), (whole, -3.0), (whole, math.nan),
    ):  # fmt: skip
        answer = car_in_turn(loads, 500.0, 60.0, track, 0.6)
        assert isinstance(answer, str)
        assert "above zero" in answer
    soft = replace(whole, front_wheel_rate=0.0, rear_wheel_rate=0.0, front_bar_rate=0.0)
    answer = car_in_turn(soft, 500.0, 60.0, 1400.0, 0.6)
    assert isinstance(answer, str)
    assert "too soft" in answer


def test_a_turn_is_said_in_words() -> None:
    car = replace(ROADSTER, loads=replace(LOADS, front_wheel_rate=25.0))
    lines = turn_words(car, 0.6)
    assert lines[0].startswith("In a steady turn of 0.6 g the body leans")
    assert any(line.startswith("Front axle:") for line in lines)
    assert len(turn_words(replace(car, cg_height=None), 0.6)) == 1
