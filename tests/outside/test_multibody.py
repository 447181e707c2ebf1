"""A third witness for the poses, where it is installed: a multibody program's own solver.

Exudyn (exudyn on PyPI, pinned in the extra ``witness``) knows the knuckle as a rigid body with
Euler parameters, the arms and the tie rod as distance constraints and the strut as a sliding
joint, and finds the static pose by its own Newton iteration. Nothing needs it: without it this
file is skipped.
"""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest

from geometry import layout as names
from geometry.corner import Corner, space
from geometry.layout import Side
from tests.outside.witness import witness
from tests.random_cars import KINDS, random_side

ABSENT = "the optional witness is not installed"
exudyn: Any = pytest.importorskip("exudyn", reason=ABSENT)
items: Any = pytest.importorskip("exudyn.itemInterface", reason=ABSENT)

pytestmark = pytest.mark.outside

TOLERANCE_MM = 1e-7
SOURCE = "Exudyn, a multibody program, static solve on its own constraints"
TRAVELS = (-50.0, 25.0, 60.0)
KNUCKLE = (names.LOWER_BALL, names.TIE_OUTER, names.WHEEL_CENTER)


def arm_axis(side: Side, arm: str) -> list[np.ndarray]:
    """Two points of an arm's inner axis, as measured or along the car's own X axis."""
    front, rear = side.arm_pivots(arm)
    second = space(front) + np.array([100.0, 0.0, 0.0]) if rear is None else space(rear)
    return [space(front), second]


class Model:
    """One corner as that program holds it, the wheel held at a travel and the rack at a shift."""

    def __init__(self, side: Side, travel: float, rack: float) -> None:
        self.system = exudyn.SystemContainer()
        self.mbs = self.system.AddSystem()
        self.ride = {name: space(place) for name, place in side.points.items()}
        self.center = self.ride[names.WHEEL_CENTER]
        self.ground = self.mbs.AddObject(items.ObjectGround())
        node = self.mbs.AddNode(
            items.NodeRigidBodyEP(referenceCoordinates=[*self.center, 1.0, 0.0, 0.0, 0.0])
        )
        self.body = self.mbs.AddObject(
            items.ObjectRigidBody(mass=1.0, inertia=[1.0, 1.0, 1.0, 0.0, 0.0, 0.0],
                                  nodeNumber=node)
        )
        links = [(names.LOWER_BALL, pivot, pivot) for pivot in arm_axis(side, "lower")]
        if side.is_strut:
            self.slide()
        else:
            links += [(names.UPPER_BALL, pivot, pivot) for pivot in arm_axis(side, "upper")]
        inner = self.ride[names.TIE_INNER]
        links.append((names.TIE_OUTER, inner, inner + np.array([0.0, rack, 0.0])))
        for end, measured, now in links:
            self.rod(end, now, float(np.linalg.norm(self.ride[end] - measured)))
        self.hold(travel)
        self.mbs.Assemble()

    def carried(self, place: np.ndarray) -> list[float]:
        return [float(part) for part in place - self.center]

    def rod(self, end: str, pivot: np.ndarray, length: float) -> None:
        on_ground = self.mbs.AddMarker(
            items.MarkerBodyPosition(bodyNumber=self.ground, localPosition=list(pivot))
        )
        on_body = self.mbs.AddMarker(
            items.MarkerBodyPosition(
                bodyNumber=self.body, localPosition=self.carried(self.ride[end])
            )
        )
        self.mbs.AddObject(
            items.ObjectConnectorDistance(markerNumbers=[on_ground, on_body], distance=length)
        )

    def joint(self, first: int, at: list[float], second: int, to: list[float],
              axes: list[int], turn: np.ndarray) -> None:
        """Hold ``second`` at ``to`` along some axes of ``first``'s frame ``turn`` at ``at``."""
        markers = [
            self.mbs.AddMarker(
                items.MarkerBodyRigid(
                    bodyNumber=number, localHT=exudyn.HT(rotation=frame, translation=place)
                )
            )
            for number, place, frame in ((first, at, turn), (second, to, np.eye(3)))
        ]
        self.mbs.AddObject(
            items.ObjectJointGeneric(markerNumbers=markers, constrainedAxes=axes)
        )

    def slide(self) -> None:
        """The top mount stays on the strut's line, which is fixed in the knuckle."""
        top, foot = self.ride[names.STRUT_TOP], self.ride[names.STRUT_LOWER]
        along = (top - foot) / np.linalg.norm(top - foot)
        across = np.cross(along, (1.0, 0.0, 0.0))
        across /= np.linalg.norm(across)
        turn = np.column_stack([along, across, np.cross(along, across)])
        self.joint(self.body, self.carried(foot), self.ground, list(top), [0, 1, 1, 0, 0, 0], turn)

    def hold(self, travel: float) -> None:
        level = [0.0, 0.0, float(self.center[2] + travel)]
        self.joint(self.ground, level, self.body, [0.0] * 3, [0, 0, 1, 0, 0, 0], np.eye(3))

    def places(self) -> dict[str, np.ndarray]:
        settings = exudyn.SimulationSettings()
        settings.staticSolver.newton.relativeTolerance = 1e-13
        settings.staticSolver.newton.absoluteTolerance = 1e-11
        settings.staticSolver.numberOfLoadSteps = 1
        settings.solution.file.write = False
        settings.staticSolver.verboseMode = 0
        assert self.mbs.SolveStatic(settings)
        return {
            name: np.array(
                self.mbs.GetObjectOutputBody(
                    self.body, exudyn.OutputVariableType.Position, self.carried(self.ride[name])
                )
            )
            for name in KNUCKLE
        }


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("seed", range(4))
def test_poses_agree_with_a_multibody_program(kind: str, seed: int) -> None:
    rng = np.random.default_rng(500 + 10 * KINDS.index(kind) + seed)
    side = random_side(rng, kind)
    rack = float(rng.uniform(-15.0, 15.0))
    poses = Corner.of(side).poses(np.array(TRAVELS), np.array([[0.0], [rack], [0.0]]))
    assert poses.assembles.all()
    ours = dict(zip(KNUCKLE, (poses.lower_ball, poses.tie_outer, poses.wheel_center), strict=True))
    worst = 0.0
    for k, travel in enumerate(TRAVELS):
        theirs = Model(side, travel, rack).places()
        worst = max(worst, *(float(np.abs(ours[n][:, k] - theirs[n]).max()) for n in KNUCKLE))
    witness(SOURCE, f"{kind} car {seed}: largest gap between places, mm", 0.0, worst, TOLERANCE_MM)
