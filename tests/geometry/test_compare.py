"""As found against as planned: verdicts that follow from the figures, and what was moved."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from geometry import layout as names
from geometry.compare import bump_toe_change, compare, differences, overall
from geometry.layout import Layout, Point
from geometry.solution import solve
from geometry.tolerances import camber_gain, tolerance
from tests.sample_cars import (
    CARS,
    DEGENERATE,
    KNUCKLE_SWAP,
    PARALLEL_EQUAL,
    RACK_LOW,
    RELAY_CAR,
    ROADSTER,
    STRUT_CAR,
    UNEQUAL_SIDES,
)


def rows(found: Layout, planned: Layout) -> dict[str, object]:
    return {row.key: row for row in compare(solve(found), solve(planned))}


@pytest.mark.parametrize("found", [RACK_LOW, KNUCKLE_SWAP], ids=lambda car: car.title)
def test_a_cure_of_bump_steer_is_better_and_its_undoing_worse(found: Layout) -> None:
    cure, undoing = rows(found, ROADSTER)["bump steer"], rows(ROADSTER, found)["bump steer"]
    assert (cure.verdict, undoing.verdict) == ("better", "worse")
    assert (cure.was, cure.now) == (undoing.now, undoing.was)
    assert cure.sentence.startswith(f"{cure.heading}: was {cure.was}, now {cure.now}.")
    state = solve(found).left
    # A second way: toe at the tire over the bump half of the sweep.
    toe = 2.0 * state.side.tire.radius * np.sin(state.sweep.toe[state.sweep.travel >= 0.0])
    assert bump_toe_change(state) == pytest.approx(float(np.ptp(toe)))
    assert cure.was == f"{np.ptp(toe) / 25.4:.3f} in"


@pytest.mark.parametrize("name", CARS)
def test_a_car_against_itself_is_the_same_in_every_figure(name: str) -> None:
    solution = solve(CARS[name])
    compared = compare(solution, solution)
    assert {row.verdict for row in compared} == {"the same"}
    assert all("no change" in row.sentence for row in compared)
    assert overall(compared) == "No change in these figures."
    assert differences(CARS[name], CARS[name]) == ()


@pytest.mark.parametrize("planned", [PARALLEL_EQUAL, STRUT_CAR, CARS["arms-sloping-wrong"]],
                         ids=lambda car: car.title)  # fmt: skip
def test_verdicts_follow_from_how_far_each_figure_is_out(planned: Layout) -> None:
    old, new = solve(ROADSTER), solve(planned)

    def out(value: float, low: str, high: str) -> float:
        low_limit, high_limit = tolerance(planned, low), tolerance(planned, high)
        return max(low_limit - value, value - high_limit, 0.0)

    for key, read, limits in (
        ("camber", lambda s: camber_gain(s.left) or 0.0, ("camber gain low", "camber gain high")),
        ("roll center", lambda s: s.ride_roll_center[1], ("roll center low", "roll center high")),
    ):
        change = out(read(new), *limits) - out(read(old), *limits)
        row = next(row for row in compare(old, new) if row.key == key)
        if row.verdict in ("better", "worse"):
            assert (change < 0.0) == (row.verdict == "better")
        else:
            assert abs(change) < 0.5


def test_a_change_too_small_to_read_is_none() -> None:
    inner = ROADSTER.left[names.TIE_INNER]
    hair = ROADSTER.with_point("left", names.TIE_INNER, inner._replace(up=inner.up + 0.001))
    assert {row.verdict for row in rows(ROADSTER, hair).values()} == {"the same"}


def test_what_can_not_be_figured_is_said_so() -> None:
    found = compare(solve(DEGENERATE["everything at the origin"]), solve(ROADSTER))
    assert {row.verdict for row in found} == {"can't be told"}
    for row in found:
        assert row.was == "none" and row.now != "none"
        assert "can't be compared" in row.sentence
    assert overall(found) == "Changed, but neither better nor worse in these figures."


def test_the_worse_side_speaks_for_the_car() -> None:
    row = rows(UNEQUAL_SIDES, ROADSTER)["bump steer"]
    solution = solve(UNEQUAL_SIDES)
    worst = max(bump_toe_change(state) or 0.0 for state in solution.sides.values())
    assert row.was == f"{worst / 25.4:.3f} in"


def test_the_whole_in_one_sentence() -> None:
    better = compare(solve(RACK_LOW), solve(ROADSTER))
    worse = compare(solve(ROADSTER), solve(RACK_LOW))
    assert overall(better) == "Better in bump steer, and nothing worse in these figures."
    assert overall(worse) == "Worse in bump steer, and nothing better in these figures."
    some = (*better, replace(worse[0], heading="Camber over a bump"))
    assert overall(some) == "Better in bump steer, worse in camber."
    two = (*worse, replace(worse[0], heading="Camber"), replace(worse[0], heading="Roll center"))
    assert overall(two).startswith("Worse in bump steer, camber and roll center,")


def test_what_was_moved_is_told_in_the_planned_car_s_units() -> None:
    place = ROADSTER.left[names.TIE_INNER]
    to = Point(place.over + 12.7, place.up - 25.4, place.fore + 6.35)
    planned = ROADSTER.with_point("left", names.TIE_INNER, to)
    told = ("Tie rod inner moved 1 in down, 1/2 in outboard, 1/4 in forward.",)
    assert differences(ROADSTER, planned) == told
    assert differences(planned, ROADSTER) == (
        "Tie rod inner moved 1 in up, 1/2 in inboard, 1/4 in back.",
    )
    metric = replace(planned, units="mm")
    assert "25" in differences(ROADSTER, metric)[0] and "mm" in differences(ROADSTER, metric)[0]
    nudged = ROADSTER.with_point("left", names.TIE_INNER, place._replace(up=place.up + 0.04))
    assert differences(ROADSTER, nudged) == ()


def test_sides_points_tires_and_angles_that_differ_are_all_told() -> None:
    side = ROADSTER.left
    points = {n: p for n, p in side.points.items() if n != names.SPRING_TOP}
    tire = replace(side.tire, radius=side.tire.radius + 12.7)
    right = replace(side, points=points, tire=tire, static_camber=0.0, static_toe=0.0)
    told = differences(ROADSTER, replace(ROADSTER, right=right))
    assert "Spring top mount (right) taken away." in told
    assert any(line.startswith("Static camber (right) from -0.50°") for line in told)
    assert any(line.startswith("Static toe (right) from 0.10°") for line in told)
    assert any(line.startswith("Tire radius (right) from 12 1/2 in to 13 in") for line in told)
    assert not any("(left)" in line for line in told)
    back = differences(replace(ROADSTER, right=right), ROADSTER)
    assert "Spring top mount (right) added." in back


def test_a_relay_rod_s_points_are_told_too() -> None:
    end = RELAY_CAR.steering[names.IDLER_END]  # type: ignore[index]
    planned = RELAY_CAR.with_point("right", names.IDLER_END, end._replace(up=end.up + 12.7))
    assert differences(RELAY_CAR, planned) == ("Idler arm end moved 1/2 in up.",)
    assert differences(ROADSTER, RELAY_CAR) == ()
