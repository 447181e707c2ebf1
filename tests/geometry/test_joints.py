"""How far ball joints and rod ends lean, against rotations found from whole bodies."""

from __future__ import annotations

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy.spatial.transform import Rotation

from geometry import layout as names
from geometry.corner import Corner, Poses
from geometry.joints import joint_swings
from geometry.layout import Layout
from geometry.solution import solve
from geometry.steering import inner_shifts
from tests.sample_cars import CARS, DEGENERATE, ROADSTER, SKEWED_ARMS, STRUT_CAR

TRAVEL = np.linspace(-70.0, 70.0, 15)
Vector = NDArray[np.float64]


def turned(ride: list[Vector], now: list[Vector], vector: Vector) -> Vector:
    """``vector`` as it goes along with a body known by some of its points, (3,) each."""
    a, b = np.array(ride), np.array(now)
    a, b = a - a.mean(axis=0), b - b.mean(axis=0)
    rotation, _ = Rotation.align_vectors(b, a)
    assert np.abs(rotation.apply(a) - b).max() < 1e-6
    return rotation.apply(vector)


def between(a: Vector, b: Vector) -> float:
    return 2.0 * float(np.arctan2(np.linalg.norm(a / np.linalg.norm(a) - b / np.linalg.norm(b)),
                                  np.linalg.norm(a / np.linalg.norm(a) + b / np.linalg.norm(b))))


def knuckle(poses: Poses, k: int) -> list[Vector]:
    points = [poses.lower_ball, poses.tie_outer, poses.wheel_center,
              poses.wheel_center + 100.0 * poses.spin_axis]  # fmt: skip
    return [p[:, k] for p in points]


@pytest.mark.parametrize("rack", [0.0, 35.0])
@pytest.mark.parametrize("car", [ROADSTER, SKEWED_ARMS, STRUT_CAR], ids=lambda car: car.title)
def test_joint_swing_a_second_way(car: Layout, rack: float) -> None:
    corner = Corner.of(car.left)
    poses = corner.poses(TRAVEL, np.repeat(inner_shifts(car, rack)["left"], TRAVEL.size, axis=1))
    ride = corner.poses(0.0)
    swings = {joint.name: joint for joint in joint_swings(corner, poses)}
    stud = (ride.upper_ball - ride.lower_ball)[:, 0]
    for k in range(0, TRAVEL.size, 2):
        stud_now = turned(knuckle(ride, 0), knuckle(poses, k), stud)
        for name, arm, was, now in (
            (names.LOWER_BALL, "lower", ride.lower_ball, poses.lower_ball),
            (names.UPPER_BALL, "upper", ride.upper_ball, poses.upper_ball),
        ):
            if name not in swings:
                assert corner.is_strut and arm == "upper"
                continue
            axis = [place[:, 0] for place in corner.axis_of(arm)]
            socket = turned([*axis, was[:, 0]], [*axis, now[:, k]], stud)
            assert swings[name].swing[k] == pytest.approx(between(socket, stud_now), abs=1e-7)
        rod_ride = (ride.tie_outer - ride.tie_inner)[:, 0]
        rod = (poses.tie_outer - poses.tie_inner)[:, k]
        assert swings[names.TIE_INNER].swing[k] == pytest.approx(between(rod_ride, rod), abs=1e-7)
        lean = abs(between(rod, stud_now) - between(rod_ride, stud))
        assert swings[names.TIE_OUTER].swing[k] == pytest.approx(lean, abs=1e-7)


def test_no_joint_leans_at_ride_height() -> None:
    for car in CARS.values():
        corner = Corner.of(car.left)
        for joint in joint_swings(corner, corner.poses(0.0)):
            assert joint.most == pytest.approx(0.0, abs=1e-7)
            assert joint.at == 0


def test_steering_alone_costs_an_upright_stud_nothing() -> None:
    """A level tie rod on an upright kingpin turns about the stud and never leans it."""
    side = ROADSTER.left
    low = side[names.LOWER_BALL]
    for name, point in (
        (names.UPPER_BALL, low._replace(up=low.up + 250.0)),
        (names.TIE_OUTER, low._replace(up=low.up + 100.0, fore=-130.0)),
        (names.TIE_INNER, low._replace(up=low.up + 100.0, fore=-130.0, over=250.0)),
    ):
        side = side.moved(name, point)
    corner = Corner.of(side)
    shifts = np.stack([0.0 * TRAVEL, 0.5 * TRAVEL, 0.0 * TRAVEL])
    swings = {joint.name: joint.most for joint in joint_swings(corner, corner.poses(0.0, shifts))}
    assert swings[names.LOWER_BALL] == pytest.approx(0.0, abs=1e-6)
    assert swings[names.TIE_OUTER] == pytest.approx(0.0, abs=1e-6)
    assert swings[names.TIE_INNER] > 0.005


def test_the_worst_pose_is_named_and_missing_ones_are_passed_over() -> None:
    corner = Corner.of(ROADSTER.left)
    joints = joint_swings(corner, corner.poses(np.array([-900.0, 10.0, 60.0])))
    for joint in joints:
        assert joint.at == 2
        assert joint.most == joint.swing[2] > joint.swing[1]
        assert np.isnan(joint.swing[0])


def test_a_car_that_does_not_meet_has_no_swing() -> None:
    state = solve(DEGENERATE["everything at the origin"]).left
    for joint in joint_swings(state.corner, state.sweep):
        assert np.isnan(joint.most)
        assert joint.at == 0
