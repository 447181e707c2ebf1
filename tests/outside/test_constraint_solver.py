"""A second witness for every pose: SciPy's general solver on raw distance constraints.

The witness knows nothing of arms' angles, branches or spheres. It moves the knuckle as a
rigid body (three places, three turns) until bushings, ball joints, tie rod, strut and wheel
travel all keep the lengths that were measured (SciPy, scipy.optimize.root, hybr method).
"""

from __future__ import annotations

import numpy as np
import pytest
from scipy.optimize import root
from scipy.spatial.transform import Rotation

from geometry import layout as names
from geometry.corner import Corner, space
from geometry.layout import Side
from tests.outside.witness import witness
from tests.random_cars import KINDS, random_side

TOLERANCE_MM = 1e-7
SOURCE = "SciPy, scipy.optimize.root on raw distance constraints"
TRAVELS = (-60.0, -25.0, 0.0, 30.0, 65.0)


def bushings(side: Side, arm: str) -> list[np.ndarray]:
    """Two points of an arm's inner axis, as measured or along the car's own X axis."""
    front, rear = side.arm_pivots(arm)
    second = space(front) + np.array([100.0, 0.0, 0.0]) if rear is None else space(rear)
    return [space(front), second]


def constraints(side: Side, travel: float, shift: np.ndarray):
    """The six gaps, mm, of a knuckle pose (three places, three turns) from all constraints."""
    ride = {name: space(p) for name, p in side.points.items()}
    wheel = ride[names.WHEEL_CENTER]
    ends = [("lower", names.LOWER_BALL)] + [("upper", names.UPPER_BALL)] * (not side.is_strut)
    arms = [
        (ball, bushing, np.linalg.norm(ride[ball] - bushing))
        for arm, ball in ends
        for bushing in bushings(side, arm)
    ]
    if side.is_strut:
        axis = ride[names.STRUT_TOP] - ride[names.STRUT_LOWER]
        across = np.cross(axis / np.linalg.norm(axis), (1.0, 0.0, 0.0))
        across /= np.linalg.norm(across)
        third = np.cross(axis / np.linalg.norm(axis), across)
    rod = np.linalg.norm(ride[names.TIE_OUTER] - ride[names.TIE_INNER])
    upper = names.STRUT_LOWER if side.is_strut else names.UPPER_BALL
    carried_names = (names.LOWER_BALL, upper, names.TIE_OUTER)

    def carried(pose: np.ndarray, place: np.ndarray) -> np.ndarray:
        return pose[:3] + wheel + Rotation.from_rotvec(pose[3:]).apply(place - wheel)

    def gaps(pose: np.ndarray) -> np.ndarray:
        turn = Rotation.from_rotvec(pose[3:])
        hub = pose[:3] + wheel
        now = {name: hub + turn.apply(ride[name] - wheel) for name in carried_names}
        out = [np.linalg.norm(now[ball] - bushing) - length for ball, bushing, length in arms]
        if side.is_strut:
            foot = ride[names.STRUT_TOP] - now[names.STRUT_LOWER]
            out += [float(foot @ turn.apply(edge)) for edge in (across, third)]
        out.append(np.linalg.norm(now[names.TIE_OUTER] - ride[names.TIE_INNER] - shift) - rod)
        out.append(pose[2] - travel)
        return np.array(out)

    return gaps, carried, ride


@pytest.mark.outside
@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("seed", range(12))
def test_every_pose_agrees_with_a_general_solver(kind: str, seed: int) -> None:
    rng = np.random.default_rng(1000 * KINDS.index(kind) + seed)
    side = random_side(rng, kind)
    corner = Corner.of(side)
    rack = float(rng.uniform(-25.0, 25.0))
    shift = np.array([0.0, rack, 0.0])
    poses = corner.poses(np.array(TRAVELS), shift[:, None])
    assert poses.assembles.all()
    worst = 0.0
    # The witness walks out from ride height, so that it stays on the assembly that was built.
    for side_of_ride in ([2, 1, 0], [2, 3, 4]):
        guess = np.zeros(6)
        for index in side_of_ride:
            for share in np.linspace(0.2, 1.0, 5) if index == 2 else (1.0,):
                gaps, carried, ride = constraints(side, TRAVELS[index], share * shift)
                solved = root(gaps, guess, tol=1e-14)
                assert np.abs(gaps(solved.x)).max() < 1e-9
                guess = solved.x
            for name, place in (
                (names.LOWER_BALL, poses.lower_ball),
                (names.TIE_OUTER, poses.tie_outer),
                (names.WHEEL_CENTER, poses.wheel_center),
            ):
                expected = carried(guess, ride[name])
                worst = max(worst, float(np.abs(place[:, index] - expected).max()))
            spin = Rotation.from_rotvec(guess[3:]).apply(corner.spin_axis[:, 0])
            assert np.abs(poses.spin_axis[:, index] - spin).max() < 1e-9
    witness(SOURCE, f"{kind} car {seed}: largest gap between places, mm", 0.0, worst, TOLERANCE_MM)
