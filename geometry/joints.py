"""Ball joints and rod ends: how far each leans in its socket through travel and steering.

Turning about its own stud costs a joint nothing, so steering counts only as far as it
leans the stud. Studs of ball joints and of the outer tie-rod end are taken to stand along
the kingpin at ride height, in the middle of their sockets; a real one that is set at an
angle has more room one way and less the other.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from geometry import layout as names
from geometry.corner import Corner, Poses
from geometry.linkage import Array, cross, dot, unit


@dataclass(frozen=True)
class JointSwing:
    """How far one joint leans from its ride-height place over some poses.

    swing (...) rad; ``most`` the largest of it, rad; ``at`` the index of that pose.
    """

    name: str
    swing: Array

    @property
    def at(self) -> int:
        return int(np.nanargmax(self.swing)) if np.any(np.isfinite(self.swing)) else 0

    @property
    def most(self) -> float:
        return float(np.ravel(self.swing)[self.at])


def joint_swings(corner: Corner, poses: Poses) -> tuple[JointSwing, ...]:
    """Each joint's lean from ride height.

    A ball joint leans by the angle between its stud, which rides with the knuckle, and its
    socket, which rides with the arm. A rod end's socket may turn about the rod, so only the
    angle between stud and rod counts. The rack's end leans with the rod against the body.
    """
    with np.errstate(all="ignore"):
        ride = corner.poses(0.0)
        stud = unit(ride.upper_ball - ride.lower_ball)
        knuckle = _turn(_knuckle_edges(ride), _knuckle_edges(poses))
        stud_now = _turned(knuckle, stud)
        out = [
            _ball(names.LOWER_BALL, corner.lower_front, corner.lower_rear,
                  ride.lower_ball, poses.lower_ball, stud, stud_now)
        ]
        if not corner.is_strut:
            front, rear = corner.axis_of("upper")
            out.append(
                _ball(names.UPPER_BALL, front, rear, ride.upper_ball, poses.upper_ball, stud,
                      stud_now)
            )
        rod_ride, rod = ride.tie_outer - ride.tie_inner, poses.tie_outer - poses.tie_inner
        out.append(
            JointSwing(names.TIE_OUTER, np.abs(_angle(rod, stud_now) - _angle(rod_ride, stud)))
        )
        out.append(JointSwing(names.TIE_INNER, _angle(rod_ride, rod)))
    return tuple(out)


def _ball(
    name: str, front: Array, rear: Array, ride: Array, now: Array, stud: Array, stud_now: Array
) -> JointSwing:
    """The lean of a ball joint between its arm's socket and the knuckle's stud."""
    axis = front - rear
    arm = _turn((axis, ride - rear), (axis, now - rear))
    return JointSwing(name, _angle(_turned(arm, stud), stud_now))


def _angle(a: Array, b: Array) -> Array:
    """Angle (...) between vectors (3, ...); exact for small angles too."""
    across = cross(a, b)
    return np.asarray(np.arctan2(np.sqrt(dot(across, across)), dot(a, b)))


def _knuckle_edges(poses: Poses) -> tuple[Array, Array]:
    """Two directions that ride with the knuckle."""
    # A strut slides through its top mount, so only its lower mount stays where it is.
    upper = poses.upper_ball if poses.strut_lower is None else poses.strut_lower
    return poses.spin_axis, upper - poses.lower_ball


def _turn(before: tuple[Array, Array], now: tuple[Array, Array]) -> Array:
    """The rotation (3, 3, ...) that carries one pair of edges of a rigid part to another."""
    return np.asarray(np.einsum("ia...,ja...->ij...", _frame(*now), _frame(*before)))


def _frame(first: Array, second: Array) -> Array:
    """Right-handed frame (3, 3, ...), columns: along ``first``, ``second`` across it, third."""
    along = unit(first)
    across = unit(second - dot(second, along) * along)
    along, across = np.broadcast_arrays(along, across)
    return np.stack([along, across, cross(along, across)], axis=1)


def _turned(rotation: Array, vector: Array) -> Array:
    return np.asarray(np.einsum("ij...,j...->i...", rotation, vector))
