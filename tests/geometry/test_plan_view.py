"""The steering from above: angles, Ackermann, toe-out on turns and the turning circle."""

from dataclasses import replace

import numpy as np
import pytest

from geometry.ackermann import ideal_inner, ideal_outer, inner_and_outer, percent_ackermann
from geometry.layout import (
    LOWER_BALL,
    LOWER_INNER,
    STRUT_LOWER,
    STRUT_TOP,
    TIE_INNER,
    TIE_OUTER,
    UPPER_BALL,
    UPPER_INNER,
    WHEEL_CENTER,
    Layout,
    Point,
    RelayRod,
    Side,
    Tire,
)
from geometry.plan_view import PlanView, plan_of, plan_view
from geometry.solution import solve
from geometry.turning_circle import free_rolling

ARMS = Side(
    {
        LOWER_INNER: (230, 200),
        LOWER_BALL: (620, 190, 5),
        UPPER_INNER: (330, 410),
        UPPER_BALL: (580, 440, -10),
        TIE_OUTER: (565, 350, -127),
        TIE_INNER: (300, 330.3, -127),
        WHEEL_CENTER: (700, 310),
    },
    Tire(310),
    np.radians(-0.5),
    np.radians(0.1),
)
STRUT = Side(
    {
        LOWER_INNER: (250, 200),
        LOWER_BALL: (680, 190, 5),
        STRUT_TOP: (560, 800, -30),
        STRUT_LOWER: (640, 400, -10),
        TIE_OUTER: (640, 350, -127),
        TIE_INNER: (300, 330.3, -127),
        WHEEL_CENTER: (750, 310),
    },
    Tire(310),
)
RELAY = RelayRod((260, 300, -220), (250, 330, -100), (260, 300, -220), (250, 330, -100))
REAR = Layout(ARMS, wheelbase=2800.0)
CARS = {
    "arms": REAR,
    "strut": Layout(STRUT, wheelbase=2600.0),
    "relay rod": replace(REAR, steering=RELAY),
    "uneven": replace(REAR, right=ARMS.moved(TIE_OUTER, Point(570, 352, -120))),
}
DEG = np.radians(1.0)


def with_arm(over: float, fore: float) -> Layout:
    """The rear-steer car with its arm's end and rack at other places."""
    side = ARMS.moved(TIE_OUTER, Point(over, 350, fore)).moved(TIE_INNER, Point(300, 330, fore))
    return replace(REAR, left=side)


def test_rack_left_steers_right_behind_the_axle_and_left_ahead_of_it() -> None:
    behind, ahead = plan_of(with_arm(565, -127)), plan_of(with_arm(630, 127))
    for wheel in ("left", "right"):
        assert behind.sides[wheel].steer[-1] < -20 * DEG
        assert ahead.sides[wheel].steer[-1] > 20 * DEG


def test_steer_angles_are_positive_to_the_left_with_toe_in_between_them() -> None:
    plan = plan_of(REAR)
    # Toe-in points the left wheel to the right (ISO 8855: negative) and the right one left.
    assert plan.left.steer[plan.ahead] == pytest.approx(-0.1 * DEG, abs=1e-12)
    assert plan.right.steer[plan.ahead] == pytest.approx(0.1 * DEG, abs=1e-12)
    assert plan.left.turned[plan.ahead] == plan.right.turned[plan.ahead] == 0.0


@pytest.mark.parametrize("car", ["arms", "strut"])
def test_a_mirrored_car_steers_alike_both_ways(car: str) -> None:
    plan = plan_of(CARS[car])
    assert plan.rack == pytest.approx(-plan.rack[::-1])
    assert plan.left.steer == pytest.approx(-plan.right.steer[::-1], abs=1e-10)
    assert plan.left.camber == pytest.approx(plan.right.camber[::-1], abs=1e-10)
    assert plan.percent is not None
    assert plan.percent == pytest.approx(plan.percent[::-1], abs=1e-5)
    left, right = plan.turning_circle["left"], plan.turning_circle["right"]
    assert left is not None and right is not None
    assert left.curb_to_curb == pytest.approx(right.curb_to_curb)


def test_unlinked_sides_with_the_same_points_read_like_linked_ones() -> None:
    linked, unlinked = plan_of(REAR), plan_of(REAR.unlinked())
    assert linked.percent is not None and unlinked.percent is not None
    assert unlinked.percent == pytest.approx(linked.percent, abs=1e-9)
    assert unlinked.spacing == linked.spacing


def test_kingpin_spacing_is_taken_on_the_floor() -> None:
    plan = plan_of(REAR)
    # The axis leans 40 mm inboard over 250 mm of height; its foot is 190 mm lower still.
    foot = 620 + 40 / 250 * (190 - plan.left.straight.contact[2, 0])
    assert plan.spacing == pytest.approx(2 * foot, abs=1e-9)


def test_percent_ackermann_is_0_when_parallel_and_100_when_ideal_and_negative_in_reverse() -> None:
    ratio, inner = 0.5, np.radians([5.0, 25.0, 45.0])
    assert percent_ackermann(inner, inner, ratio) == pytest.approx(0.0)
    assert percent_ackermann(inner, ideal_outer(inner, ratio), ratio) == pytest.approx(100.0)
    assert np.all(percent_ackermann(inner, inner + 0.01, ratio) < 0.0)
    assert ideal_inner(ideal_outer(inner, ratio), ratio) == pytest.approx(inner)
    assert np.isnan(percent_ackermann(0.0, 0.0, ratio))


def test_inner_is_the_wheel_on_the_side_of_the_turn() -> None:
    turn, inner, outer = inner_and_outer(np.array([0.3, -0.2]), np.array([0.2, -0.3]))
    assert turn.tolist() == [1.0, -1.0]
    assert inner.tolist() == [0.3, 0.3]
    assert outer.tolist() == [0.2, 0.2]


@pytest.mark.parametrize(
    ("over", "fore", "positive"),
    [(560, -127, True), (640, -127, False), (640, 127, True), (560, 127, False)],
)
def test_arms_lean_inboard_behind_the_axle_and_outboard_ahead_of_it(
    over: float, fore: float, positive: bool
) -> None:
    plan = plan_of(with_arm(over, fore))
    assert plan.straight_ahead_percent is not None
    assert (plan.straight_ahead_percent > 0.0) is positive
    assert plan.is_reverse is not positive


@pytest.mark.parametrize("car", ["arms", "strut"])
def test_the_small_angle_limit_continues_the_percentages(car: str) -> None:
    plan = plan_of(CARS[car])
    assert plan.percent is not None
    index = plan.ahead
    near = plan.percent[index + 1 : index + 5]
    fit = np.polynomial.Polynomial.fit(plan.rack[index + 1 : index + 5], near, 3)
    assert plan.percent[index] == pytest.approx(fit(0.0), abs=1e-3)


@pytest.mark.parametrize("car", CARS)
def test_toe_out_on_turns_is_a_real_pose(car: str) -> None:
    layout = CARS[car]
    plan = plan_of(layout)
    for turn, toe_out in plan.toe_out.items():
        assert toe_out is not None
        solution = solve(layout, rack=toe_out.rack)
        sign = 1.0 if turn == "left" else -1.0
        turned = {
            "left": -(solution.left.now.toe[0] - solution.left.ride.toe[0]) * sign,
            "right": (solution.right.now.toe[0] - solution.right.ride.toe[0]) * sign,
        }
        inner = turned[turn]
        outer = turned["right" if turn == "left" else "left"]
        assert outer == pytest.approx(20 * DEG, abs=1e-10)
        assert toe_out.inner == pytest.approx(inner, abs=1e-10)
        assert toe_out.excess == pytest.approx(inner - outer, abs=1e-10)


def test_an_angle_beyond_the_lock_is_missing_not_guessed() -> None:
    plan = plan_of(replace(REAR, tolerances={"rack travel": 20.0}))
    assert plan.toe_out == {"left": None, "right": None}
    assert plan.percent_at(20 * DEG) is None
    assert plan.percent_at(5 * DEG) is not None


def test_percent_at_an_angle_lies_on_the_curve_through_the_lock() -> None:
    plan = plan_of(REAR)
    assert plan.percent is not None
    for k in (50, 60, 70):
        assert plan.percent_at(float(plan.inner[k])) == pytest.approx(plan.percent[k], abs=1e-6)


def test_a_car_that_meets_the_condition_rolls_without_slip_about_its_center() -> None:
    """Exact: wheels set square to one center on the rear axle's line."""
    base, radius, half = 2800.0, 6000.0, 700.0
    contacts = [np.array([[0.0], [y], [0.0]]) for y in (half, -half)]
    turned = [np.arctan2(np.array([base]), radius - y) for y in (half, -half)]
    curvature, slips = free_rolling(contacts, turned, base)
    assert 1.0 / curvature[0] == pytest.approx(radius, rel=1e-9)
    assert np.abs(slips).max() < 1e-12


def test_turning_circle_is_measured_from_its_center_to_the_outer_tire() -> None:
    plan = plan_of(REAR)
    circle = plan.turning_circle["left"]
    assert circle is not None and plan.slip is not None
    index = int(np.argmin(np.abs(plan.rack - circle.rack)))
    contact = plan.right.contact[:2, index]
    to_contact = np.hypot(contact[0] + 2800.0, contact[1] - circle.center)
    # Half the tread's width farther out, at most, and more than nothing.
    assert to_contact < 0.5 * circle.curb_to_curb < to_contact + 0.5 * 205.0
    assert circle.wall_to_wall > circle.curb_to_curb
    assert circle.inner_slip == pytest.approx(-circle.outer_slip, abs=1e-12)
    # Beyond full Ackermann at lock: the inner wheel is turned farther than it rolls.
    assert plan.lock_percent["left"] is not None and plan.lock_percent["left"] > 100.0
    assert circle.inner_slip > 0.0
    assert circle.inner_slip == pytest.approx(plan.slip["left"][index])


def test_bump_steer_while_steered_is_counted_from_ride_height_at_that_rack() -> None:
    plan = plan_of(REAR)
    steered = plan.steered_travel([0.0, 40.0], 60.0, steps=7)
    for k, rack in enumerate((0.0, 40.0)):
        for side in ("left", "right"):
            toes = [solve(REAR, t, rack).sides[side].now.toe[0] for t in steered.travel]
            ride = solve(REAR, 0.0, rack).sides[side].now.toe[0]
            assert steered.toe_change[side][k] == pytest.approx(np.array(toes) - ride, abs=1e-10)
    assert steered.range_of("left")[1] > steered.range_of("left")[0]


def test_without_a_wheelbase_the_angles_stay_and_the_reason_is_said() -> None:
    plan = plan_view(solve(replace(REAR, wheelbase=None)))
    assert plan.percent is None and plan.ideal_outer is None and plan.slip is None
    assert plan.straight_ahead_percent is None and plan.percent_at(0.3) is None
    assert plan.turning_circle == {"left": None, "right": None}
    assert plan.toe_out["left"] is not None and plan.toe_out["left"].ideal_inner is None
    assert "wheelbase is not given" in plan.notes[0]
    assert not plan.is_reverse


def everything(plan: PlanView) -> None:
    """Asks for every figure; warnings are errors in this project's tests."""
    _ = (plan.percent, plan.lock_percent, plan.toe_out, plan.turning_circle, plan.slip)
    _ = (plan.is_reverse, plan.percent_at(0.3), plan.straight_ahead_percent)
    plan.steered_travel([-30.0, 0.0, 30.0], 60.0)


@pytest.mark.parametrize(
    ("layout", "travel", "words"),
    [
        (REAR, 2000.0, "does not go together"),
        (
            replace(REAR, steering=replace(RELAY, pitman_end=Point(260, 330, -220))),
            0.0,
            "no length",
        ),
        (with_arm(594.4, -4.6), 0.0, ""),
        (replace(REAR, left=ARMS.moved(TIE_OUTER, Point(300, 330.3, -127))), 0.0, ""),
    ],
    ids=[
        "out of reach",
        "no pitman arm",
        "arm on the kingpin",
        "tie rod without length",
    ],
)
def test_hopeless_steering_is_marked_and_said_without_a_warning(
    layout: Layout, travel: float, words: str
) -> None:
    plan = plan_of(layout, travel)
    everything(plan)
    missing = ~plan.left.poses.assembles
    assert np.isnan(plan.left.steer[missing]).all()
    assert np.isfinite(plan.left.steer[~missing]).all()
    if words:
        assert words in " ".join(plan.notes)
        assert plan.turning_circle == {"left": None, "right": None}


def test_a_level_kingpin_has_no_spacing_and_says_so() -> None:
    level = replace(REAR, left=ARMS.moved(UPPER_BALL, Point(700, 190, 5)))
    plan = plan_of(level)
    everything(plan)
    assert plan.spacing is None and plan.percent is None
    assert any("never meets the floor" in note for note in plan.notes)
