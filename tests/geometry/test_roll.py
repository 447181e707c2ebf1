"""Body roll and single-wheel bump with both tires on one tilted floor."""

from dataclasses import replace

import numpy as np
import pytest

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
    Side,
    Tire,
)
from geometry.roll import RolledPose, rolled, single_wheel_bump
from geometry.solution import solve

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
PARALLEL = Side(
    {
        LOWER_INNER: (300, 200),
        LOWER_BALL: (650, 200),
        UPPER_INNER: (300, 420),
        UPPER_BALL: (650, 420),
        TIE_OUTER: (650, 310, -130),
        TIE_INNER: (300, 310, -130),
        WHEEL_CENTER: (700, 310),
    },
    Tire(310),
)
UNEVEN = Layout(
    ARMS, ARMS.moved(UPPER_INNER, Point(345, 402)).moved(LOWER_BALL, Point(625, 195, 3))
)
CARS = {"arms": Layout(ARMS), "strut": Layout(STRUT), "uneven": UNEVEN}
ROLL = np.radians([-4.0, -1.0, 0.0, 1e-6, 2.5, 4.0])


def lowest_in_road(pose: RolledPose, layout: Layout, k: int) -> list[float]:
    """Each tire circle's lowest height above a level road, by turning the body and looking."""
    roll = pose.roll[k]
    turn = np.array([[1, 0, 0], [0, np.cos(roll), -np.sin(roll)], [0, np.sin(roll), np.cos(roll)]])
    heights = []
    for name, sign in (("left", 1.0), ("right", -1.0)):
        poses = pose.sides[name].poses
        flip = np.array([1.0, sign, 1.0])
        center, spin = poses.wheel_center[:, k] * flip, poses.spin_axis[:, k] * flip
        first = np.cross(spin, [1.0, 0.0, 0.0])
        first /= np.linalg.norm(first)
        second = np.cross(spin, first)
        angle = np.linspace(0.0, 2.0 * np.pi, 20001)
        circle = center[:, None] + layout.side(name).tire.radius * (
            first[:, None] * np.cos(angle) + second[:, None] * np.sin(angle)
        )
        heights.append(float((turn @ circle)[2].min()))
    return heights


@pytest.mark.parametrize("car", CARS)
def test_both_tires_stand_on_one_level_road_in_roll(car: str) -> None:
    layout = CARS[car]
    pose = rolled(layout, ROLL, heave=12.0, rack=20.0)
    assert pose.assembles.all()
    for k in range(ROLL.size):
        left, right = lowest_in_road(pose, layout, k)
        # A circle sampled 20,000 times is 310 * (pi / 20000)**2 / 2 from its lowest point.
        assert left == pytest.approx(right, abs=2e-5)
    line = pose.floor_line
    for name, sign in (("left", 1.0), ("right", -1.0)):
        contact = pose.sides[name].poses.contact
        assert np.abs(line[0] * sign * contact[1] + line[1] * contact[2] + line[2]).max() < 1e-8


def test_positive_roll_lifts_the_left_side_and_droops_its_wheel() -> None:
    pose = rolled(CARS["arms"], np.radians(2.0), heave=5.0)
    left, right = (pose.sides[s].poses.travel[0] for s in ("left", "right"))
    assert left < 5.0 < right
    assert left + right == pytest.approx(10.0, abs=1e-9)
    assert right - left == pytest.approx(2.0 * np.tan(np.radians(2.0)) * 700.0, rel=0.02)


def test_roll_the_other_way_is_the_mirror_image() -> None:
    one, other = rolled(CARS["arms"], ROLL), rolled(CARS["arms"], -ROLL)
    for name in ("camber", "toe"):
        assert getattr(one.left, name) == pytest.approx(getattr(other.right, name), abs=1e-12)
    assert one.roll_center[0] == pytest.approx(-other.roll_center[0], abs=1e-6)
    assert one.roll_center[1] == pytest.approx(other.roll_center[1], abs=1e-6)
    assert one.roll_center_offset == pytest.approx(-other.roll_center_offset, abs=1e-6)


@pytest.mark.parametrize("car", CARS)
def test_no_roll_is_the_level_solve(car: str) -> None:
    pose, level = rolled(CARS[car], 0.0, heave=20.0), solve(CARS[car], 20.0)
    assert level.roll_center is not None
    if car != "uneven":
        assert pose.roll_center[:, 0] == pytest.approx(level.roll_center, abs=1e-7)
        assert pose.left.camber == pytest.approx(level.left.now.camber, abs=1e-12)
        assert pose.left.poses.scrub_radius == pytest.approx(level.left.now.scrub_radius)
        assert pose.track[0] == pytest.approx(2.0 * level.left.now.half_track[0])
    else:
        # The wheels' travels differ by what one level floor asks for.
        assert pose.left.poses.contact[2] == pytest.approx(pose.right.poses.contact[2], abs=1e-8)


def test_parallel_equal_arms_lean_the_wheels_with_the_body() -> None:
    """Exact: the wheels keep their place to the body, so camber changes by the roll itself."""
    roll = np.radians([-3.0, 1.0, 4.0])
    pose = rolled(Layout(PARALLEL), roll)
    assert pose.left.camber == pytest.approx(-roll, abs=1e-9)
    assert pose.right.camber == pytest.approx(roll, abs=1e-9)
    assert np.abs(pose.left.toe).max() < 1e-9


def test_toe_is_read_on_the_tilted_floor() -> None:
    """A toed-in wheel fixed to the leaning body: its trace on the floor, from first principles."""
    toed = Layout(replace(PARALLEL, static_toe=np.radians(1.0)))
    roll = np.radians(5.0)
    pose = rolled(toed, roll)
    spin = pose.left.poses.spin_axis[:, 0]
    trace = np.cross(spin, [0.0, np.sin(roll), np.cos(roll)])
    out = np.array([0.0, np.cos(roll), -np.sin(roll)])
    assert pose.left.toe[0] == pytest.approx(-np.arctan2(trace @ out, trace[0]), abs=1e-12)


def test_single_wheel_bump_is_the_same_pose_as_its_roll_and_heave() -> None:
    bump = single_wheel_bump(CARS["arms"], "left", np.array([-40.0, 0.0, 30.0, 60.0]))
    assert bump.assembles.all()
    assert bump.roll[0] > 0.0 == bump.roll[1] > bump.roll[2]
    again = rolled(CARS["arms"], bump.roll, heave=bump.heave)
    assert again.left.poses.travel == pytest.approx([-40.0, 0.0, 30.0, 60.0], abs=1e-7)
    assert again.roll_center == pytest.approx(bump.roll_center, abs=1e-4)


def test_roll_out_of_reach_is_marked_and_quiet() -> None:
    pose = rolled(CARS["arms"], np.radians([0.0, 60.0]))
    assert pose.assembles.tolist() == [True, False]
    assert np.isfinite(pose.left.camber[0]) and np.isnan(pose.left.camber[1])
    assert np.isnan(pose.roll_center[:, 1]).all()
