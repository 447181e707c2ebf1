"""Springs through the travel: motion ratio a second way, what carries the mount, stops."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest

from geometry import layout as names
from geometry.corner import Corner, space
from geometry.layout import Side
from geometry.springs import lower_mount, spring_motion, stroke_words
from tests.sample_cars import ROADSTER, ROADSTER_SIDE, SKEWED_ARMS, STRUT_CAR

TRAVEL = np.linspace(-60.0, 60.0, 61)


def carried_by(side: Side, carrier: str) -> Side:
    return replace(side, spring=replace(side.spring, lower_mount_on=carrier))


SKEWED = replace(
    SKEWED_ARMS.left,
    points={
        **SKEWED_ARMS.left.points,
        names.SPRING_TOP: ROADSTER_SIDE[names.SPRING_TOP],
        names.SPRING_LOWER: ROADSTER_SIDE[names.SPRING_LOWER],
    },
)
STRUT = replace(
    STRUT_CAR.left,
    points={
        **STRUT_CAR.left.points,
        names.SPRING_TOP: STRUT_CAR.left[names.STRUT_TOP],
        names.SPRING_LOWER: STRUT_CAR.left[names.STRUT_LOWER],
    },
)
CASES = {
    "lower arm": ROADSTER_SIDE,
    "upper arm": carried_by(ROADSTER_SIDE, "upper arm"),
    "knuckle": carried_by(ROADSTER_SIDE, "knuckle"),
    "skewed lower arm": SKEWED,
    "skewed upper arm": carried_by(SKEWED, "upper arm"),
    "strut": carried_by(STRUT, "knuckle"),
    "strut's lower arm": carried_by(STRUT, "lower arm"),
}


@pytest.mark.parametrize("name", CASES)
def test_motion_ratio_by_virtual_work(name: str) -> None:
    """A second way: the mount's speed along the spring, from a tiny travel at each place."""
    side = CASES[name]
    corner = Corner.of(side)
    motion = spring_motion(side, corner, corner.poses(TRAVEL))
    assert motion is not None
    step = 1e-3
    top = space(side[names.SPRING_TOP])
    for k in range(5, 56, 10):
        near = corner.poses(TRAVEL[k] + np.array([-step, 0.0, step]))
        mount = lower_mount(side, corner, near)
        speed = (mount[:, 2] - mount[:, 0]) / (2.0 * step)
        along = top - mount[:, 1]
        expected = float(speed @ along) / math.dist(top, mount[:, 1])
        assert motion.motion_ratio[k] == pytest.approx(expected, abs=2e-5)


@pytest.mark.parametrize("name", CASES)
def test_the_mount_keeps_its_distances_to_what_carries_it(name: str) -> None:
    side = CASES[name]
    corner = Corner.of(side)
    poses = corner.poses(TRAVEL)
    mount = lower_mount(side, corner, poses)
    here = space(side[names.SPRING_LOWER])
    carrier = side.spring.lower_mount_on
    if carrier == "knuckle":
        fixed = [(corner.tie_outer, poses.tie_outer), (corner.wheel_center, poses.wheel_center),
                 (corner.lower_ball, poses.lower_ball)]  # fmt: skip
    else:
        arm = "lower" if carrier == "lower arm" else "upper"
        ball = (corner.lower_ball, poses.lower_ball)
        if arm == "upper":
            ball = (corner.upper_ride, poses.upper_ball)
        fixed = [(place, place) for place in corner.axis_of(arm)] + [ball]
    for was, now in fixed:
        before = np.linalg.norm(here[:, None] - was, axis=0)
        assert np.linalg.norm(mount - now, axis=0) == pytest.approx(
            np.broadcast_to(before, TRAVEL.shape), abs=1e-7
        )
    assert mount[:, 30] == pytest.approx(here, abs=1e-7)


def test_a_strut_s_spring_moves_with_the_strut() -> None:
    side = CASES["strut"]
    corner = Corner.of(side)
    poses = corner.poses(TRAVEL)
    motion = spring_motion(side, corner, poses)
    assert motion is not None and poses.strut_lower is not None
    length = np.linalg.norm(poses.upper_ball - poses.strut_lower, axis=0)
    assert motion.length == pytest.approx(length, abs=1e-8)
    assert np.all((motion.motion_ratio > 0.85) & (motion.motion_ratio < 1.05))


def test_wheel_rate_is_the_force_s_change_with_travel() -> None:
    """A second way: the wheel force from the work stored, differentiated twice."""
    side = ROADSTER_SIDE
    corner = Corner.of(side)
    motion = spring_motion(side, corner, corner.poses(TRAVEL))
    assert motion is not None
    rate, free = 70.0, float(motion.length[30]) + 60.0
    stored = 0.5 * rate * (free - motion.length) ** 2
    force = np.gradient(stored, TRAVEL, edge_order=2)
    change = np.gradient(force, TRAVEL, edge_order=2)
    whole = motion.wheel_rate(rate) + motion.changing_ratio_rate(rate * 60.0)
    assert whole[30] == pytest.approx(change[30], rel=2e-3)


def test_no_mounts_no_spring_and_missing_poses_are_missing() -> None:
    bare = {n: p for n, p in ROADSTER_SIDE.points.items() if not n.startswith("spring")}
    corner = Corner.of(ROADSTER_SIDE)
    assert spring_motion(replace(ROADSTER_SIDE, points=bare), corner, corner.poses(TRAVEL)) is None
    far = corner.poses(np.linspace(-600.0, 600.0, 41))
    motion = spring_motion(ROADSTER_SIDE, corner, far)
    assert motion is not None
    assert np.array_equal(np.isfinite(motion.length), far.assembles)


def test_where_the_spring_bottoms_and_tops() -> None:
    corner = Corner.of(ROADSTER.left)
    motion = spring_motion(ROADSTER.left, corner, corner.poses(TRAVEL))
    assert motion is not None
    # It gets shorter in bump all the way, so a length is reached at one travel.
    assert np.all(np.diff(motion.length) < 0.0)
    assert stroke_words(motion, float(motion.length[50]), float(motion.length[10])) == (
        TRAVEL[50], TRAVEL[10],
    )  # fmt: skip
    assert stroke_words(motion, 1.0, 1e4) == (None, None)
    assert stroke_words(motion, None, None) == (None, None)
