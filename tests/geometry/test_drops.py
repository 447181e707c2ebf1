"""The same drop three ways, what an alignment then mends, and turns and quantities in words."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest

from geometry import layout as names
from geometry.drops import WAYS, alignment, three_ways
from geometry.layout import Spring
from geometry.loads import Turn, car_in_turn
from geometry.quantities import QuantityError, format_quantity, parse_quantity, unit_of
from geometry.solution import solve
from geometry.stance import by_spindle, by_spring, by_tire
from geometry.turn_words import cornering, turn_words
from tests.sample_cars import LOADS, ROADSTER, STRUT_CAR

SPRUNG = replace(ROADSTER, loads=replace(LOADS, front_wheel_rate=25.0))


def test_three_ways_are_the_three_changes_of_stance() -> None:
    ways = three_ways(ROADSTER, 40.0, 60.0)
    assert [way.key for way in ways] == [key for key, _ in WAYS]
    for way, change in zip(ways, (by_spring, by_spindle, by_tire), strict=True):
        assert way.layout == change(ROADSTER, 40.0)
        assert way.solution is not None and way.solution.layout == way.layout
        assert way.solution.span == 60.0 and way.reason == ""


def test_a_way_that_can_t_be_had_gives_its_reason_and_the_others_stand() -> None:
    spring, spindle, tire = three_ways(ROADSTER, 350.0, 60.0)
    assert spring.layout is None and "stop meeting" in spring.reason
    assert spindle.solution is not None
    assert tire.solution is None and tire.reason == "That leaves the tire no radius."


def test_an_alignment_mends_camber_and_says_what_it_leaves() -> None:
    # Lowered by the springs the camber leans in; shims bring it back, not the bump steer.
    low = by_spring(ROADSTER, 60.0)
    told = alignment(low, ROADSTER, 75.0)
    assert told.after is not None
    camber = float(told.after.left.ride.camber[0])
    assert camber == pytest.approx(ROADSTER.left.static_camber, abs=1e-9)
    assert abs(low.left.static_camber - camber) > math.radians(0.5)
    assert len(told.mends) == 2
    worse = solve(low).left.pivots.ranges["as is"] or 0.0
    assert worse > 3.0 * (solve(ROADSTER).left.pivots.ranges["as is"] or 0.0)
    assert any(line.startswith("Bump steer") for line in told.leaves)
    assert alignment(ROADSTER, ROADSTER, 75.0).leaves == ()


def test_an_alignment_out_of_the_arm_s_reach_says_so() -> None:
    ball = ROADSTER.left[names.UPPER_BALL]
    short = ROADSTER.left.moved(names.UPPER_INNER, ball._replace(over=ball.over - 20.0))
    wanted = replace(ROADSTER, left=replace(ROADSTER.left, static_camber=math.radians(40.0)))
    told = alignment(replace(ROADSTER, left=short), wanted, 75.0)
    assert told.after is None and told.mends == ()
    assert "too short" in told.leaves[0]


def test_a_turn_s_words_say_the_turn_s_figures() -> None:
    picture = cornering(SPRUNG, 0.7)
    assert not isinstance(picture, str)
    solution = solve(SPRUNG)
    center = solution.ride_roll_center
    track = float(solution.left.ride.half_track[0] + solution.right.ride.half_track[0])
    assert center is not None
    turn = car_in_turn(SPRUNG.loads, SPRUNG.cg_height or 0.0, center[1], track, 0.7)
    assert isinstance(turn, Turn) and picture.turn == turn
    assert float(picture.pose.roll[0]) == turn.roll_angle
    # A left turn: the right wheel is outside and bumps.
    assert picture.pose.right.poses.travel[0] > 0.0 > picture.pose.left.poses.travel[0]
    said = " ".join(turn_words(SPRUNG, 0.7))
    assert f"{math.degrees(turn.roll_angle):.1f}°" in said
    assert f"{round(turn.front.total / 4.4482216152605)} lb moves to the outer wheel" in said
    assert f"{round(turn.rear.total)} N" in " ".join(turn_words(replace(SPRUNG, units="mm"), 0.7))


@pytest.mark.parametrize(
    ("change", "words"),
    [
        ({"cg_height": None}, "center of gravity height"),
        ({"loads": LOADS, "left": replace(ROADSTER.left, spring=Spring())}, "front wheel rate"),
        ({"left": STRUT_CAR.left, "loads": replace(LOADS, sprung_mass=None)}, "sprung weight"),
    ],
)
def test_what_keeps_a_turn_from_being_worked_out_is_the_only_line(
    change: dict[str, object], words: str
) -> None:
    lines = turn_words(replace(SPRUNG, **change), 0.6)  # type: ignore[arg-type]
    assert len(lines) == 1
    assert words in lines[0]


@pytest.mark.parametrize(
    ("kind", "value"), [("mass", 1280.0), ("rate", 70.0), ("share", 0.54), ("frequency", 1.25)]
)
def test_quantities_come_back_from_how_they_are_shown(kind: str, value: float) -> None:
    for units in ("in", "mm"):
        shown = format_quantity(value, kind, units)  # type: ignore[arg-type]
        with_unit = f"{shown} {unit_of(kind, units)}"  # type: ignore[arg-type]
        for text in (shown, with_unit, with_unit.upper(), shown.replace(".", ",")):
            again = parse_quantity(text, kind, units)  # type: ignore[arg-type]
            assert again == pytest.approx(value, rel=0.005)
        for bad in ("", "x", "1e5", "9" * 39, "9" * 50, "5 furlongs", "-5", "1/2", "nan"):
            with pytest.raises(QuantityError, match="should look like"):
                parse_quantity(bad, kind, units)  # type: ignore[arg-type]


def test_pounds_are_exact() -> None:
    # The international avoirdupois pound of 1959, and standard gravity.
    assert parse_quantity("1 lb", "mass", "mm") == 0.45359237
    assert parse_quantity("1 lb/in", "rate", "mm") == pytest.approx(0.1751268352, rel=1e-9)
    assert parse_quantity("50", "share", "in") == 0.5
