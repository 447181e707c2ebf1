"""The front-view construction where a single level axis does not hide what it does."""

from __future__ import annotations

import numpy as np
import pytest

from geometry import layout as names
from geometry.corner import Corner, space
from geometry.front_view import (
    FrontView,
    distance_to_line,
    front_view,
    inner_pivot_of,
    roll_center,
    roll_center_place,
)
from geometry.layout import Point, Side
from geometry.linkage import homogeneous, line_through
from tests.sample_cars import ROADSTER, SKEWED_ARMS, STRUT_CAR


def viewed(contact: tuple[float, float], center: tuple[float, float, float]) -> FrontView:
    """A front view of nothing but a contact point and an instant center, in one pose."""
    middle = np.array(center)[:, None]
    foot = homogeneous(np.array([contact[0]]), np.array([contact[1]]))
    line = line_through(foot, middle)
    return FrontView(line, line, middle, foot, line, np.array([1.0]))


@pytest.mark.parametrize("arm", ["lower", "upper"])
def test_an_arm_of_two_bushings_has_its_pivot_where_its_axis_passes_the_wheel(arm: str) -> None:
    side = SKEWED_ARMS.left
    ahead = side[names.WHEEL_CENTER]._replace(fore=37.0)
    found = inner_pivot_of(Corner.of(side.moved(names.WHEEL_CENTER, ahead)), arm)
    front, rear = (space(p) for p in side.arm_pivots(arm) if p is not None)  # type: ignore[arg-type]
    share = (37.0 - rear[0]) / (front[0] - rear[0])
    assert found[:2] == pytest.approx((rear + share * (front - rear))[1:], abs=1e-9)
    assert found[2] == 1.0


def test_an_axis_straight_across_gives_the_middle_of_its_bushings() -> None:
    side = SKEWED_ARMS.left
    front, rear = side.arm_pivots("lower")
    assert rear is not None
    across: Side = side.moved(names.LOWER_INNER_FRONT, front._replace(fore=rear.fore))
    found = inner_pivot_of(Corner.of(across), "lower")
    assert found[0] == pytest.approx(0.5 * (front.over + rear.over))
    assert found[1] == pytest.approx(0.5 * (front.up + rear.up))


def test_a_strut_corner_has_no_upper_pivot() -> None:
    with pytest.raises(ValueError, match="no upper arm"):
        inner_pivot_of(Corner.of(STRUT_CAR.left), "upper")


def test_contact_lines_that_run_parallel_meet_nowhere() -> None:
    # Left leans up inboard, right up outboard by as much: one direction, apart.
    left = viewed((700.0, 0.0), (0.0, 140.0, 1.0))
    right = viewed((700.0, 0.0), (0.0, -140.0, 1.0))
    assert roll_center_place(left, right)[2, 0] == 0.0
    assert np.all(np.isnan(roll_center(left, right)))


def test_contact_lines_along_the_floor_meet_midway() -> None:
    level = viewed((700.0, 0.0), (0.0, 0.0, 1.0))
    far = viewed((650.0, 0.0), (0.0, 0.0, 1.0))
    assert roll_center(level, far)[:, 0] == pytest.approx([25.0, 0.0])
    at_infinity = viewed((700.0, 0.0), (-1.0, 0.0, 0.0))
    assert roll_center(at_infinity, at_infinity)[:, 0] == pytest.approx([0.0, 0.0])


def test_no_line_on_one_side_leaves_no_roll_center() -> None:
    sound = viewed((700.0, 0.0), (0.0, 140.0, 1.0))
    none = viewed((700.0, 0.0), (np.nan, np.nan, np.nan))
    for pair in ((sound, none), (none, sound), (none, none)):
        assert np.all(np.isnan(roll_center(*pair)))


def test_tires_in_one_place_stand_on_no_one_floor() -> None:
    left = viewed((0.0, 0.0), (-100.0, 50.0, 1.0))
    right = viewed((0.0, 0.0), (-100.0, 70.0, 1.0))
    assert np.all(np.isnan(roll_center(left, right)))


def test_the_height_is_taken_square_to_the_floor_under_both_tires() -> None:
    # The right tire stands 100 lower: the floor leans, the point does not.
    left = viewed((700.0, 100.0), (0.0, 300.0, 1.0))
    right = viewed((700.0, 0.0), (0.0, 300.0, 1.0))
    found = roll_center(left, right)[:, 0]
    place = roll_center_place(left, right)[:, 0]
    assert place == pytest.approx([0.0, 300.0, 1.0])
    # 250 above the floor's middle, along a normal to a slope of 100 in 1400.
    assert found[1] == pytest.approx(250.0 * 1400.0 / np.hypot(1400.0, 100.0))


def test_a_strut_s_upper_line_is_square_to_the_strut_at_its_top_mount() -> None:
    corner = Corner.of(STRUT_CAR.left)
    poses = corner.poses(np.array([0.0, 40.0]))
    view = front_view(corner, poses)
    assert poses.strut_lower is not None
    for k in range(2):
        axis = poses.upper_ball[:, k] - poses.strut_lower[:, k]
        # The plane through the mount, square to the strut, seen at the wheel's station.
        over, fore = 100.0, poses.wheel_center[0, k]
        top = poses.upper_ball[:, k]
        up = top[2] - (axis[0] * (fore - top[0]) + axis[1] * (over - top[1])) / axis[2]
        off = distance_to_line(view.upper_line[:, k], over, up)
        assert off == pytest.approx(0.0, abs=1e-9)


def test_a_skewed_arm_s_line_is_its_plane_at_the_wheel_s_station() -> None:
    corner = Corner.of(SKEWED_ARMS.left)
    poses = corner.poses(np.array([25.0]))
    view = front_view(corner, poses)
    for arm, ball, line in (
        ("lower", poses.lower_ball, view.lower_line), ("upper", poses.upper_ball, view.upper_line),
    ):  # fmt: skip
        front, rear = (p[:, 0] for p in corner.axis_of(arm))
        fore = poses.wheel_center[0, 0]
        for share in (-0.5, 2.0):
            # A place of the plane at that station: along the arm, then along its axis.
            base = rear + share * (ball[:, 0] - rear)
            axis = front - rear
            place = base + (fore - base[0]) / axis[0] * axis
            assert distance_to_line(line[:, 0], place[1], place[2]) == pytest.approx(0.0, abs=1e-9)


def test_camber_rate_is_one_over_the_swing_arm() -> None:
    state = front_view(Corner.of(ROADSTER.left), Corner.of(ROADSTER.left).poses(0.0))
    assert state.camber_rate[0] * state.swing_arm[0] == pytest.approx(-1.0)
    assert isinstance(ROADSTER.left[names.LOWER_BALL], Point)
