"""Ball joints and rod ends: how far each swings through travel and steering."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from geometry import layout as names
from geometry.corner import Corner, Poses
from geometry.linkage import Array, dot, unit


@dataclass(frozen=True)
class JointSwing:
    """How far one joint swings from its ride-height place over some poses.

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


def _angle(a: Array, b: Array) -> Array:
    return np.asarray(np.arccos(np.clip(dot(unit(a), unit(b)), -1.0, 1.0)))


def joint_swings(corner: Corner, poses: Poses) -> tuple[JointSwing, ...]:
    """Each joint's swing from ride height: the part it joins against the knuckle's stud.

    A ball joint's stud stands in the knuckle, so its swing is the angle that its arm turns
    through as the knuckle sees it; a rod end at the rack's side swings against the body.
    """
    with np.errstate(all="ignore"):
        ride = corner.poses(0.0)
        to_knuckle = _knuckle_turn(ride, poses)

        def seen(now: Array) -> Array:
            return np.asarray(np.einsum("ji...,j...->i...", to_knuckle, now))

        arms = [
            (names.LOWER_BALL, ride.lower_ball - corner.lower_rear,
             poses.lower_ball - corner.lower_rear),
            (names.TIE_OUTER, ride.tie_outer - ride.tie_inner, poses.tie_outer - poses.tie_inner),
        ]
        if not corner.is_strut:
            rear = corner.axis_of("upper")[1]
            arms.append(
                (names.UPPER_BALL, ride.upper_ball - rear, poses.upper_ball - rear)
            )
        out = [JointSwing(name, _angle(before, seen(now))) for name, before, now in arms]
        rod_ride, rod = ride.tie_outer - ride.tie_inner, poses.tie_outer - poses.tie_inner
        out.append(JointSwing(names.TIE_INNER, _angle(rod_ride, rod)))
    return tuple(out)


def _knuckle_turn(ride: Poses, poses: Poses) -> Array:
    """The knuckle's rotation (3, 3, ...) from ride height to each pose."""
    before, now = _frame(ride), _frame(poses)
    return np.asarray(np.einsum("ia...,ja...->ij...", now, before))


def _frame(poses: Poses) -> Array:
    """Columns: spin axis, kingpin across it, and the third, (3, 3, ...)."""
    spin = poses.spin_axis
    kingpin = poses.upper_ball - poses.lower_ball
    second = unit(kingpin - dot(kingpin, spin) * spin)
    third = np.stack(
        [
            spin[1] * second[2] - spin[2] * second[1],
            spin[2] * second[0] - spin[0] * second[2],
            spin[0] * second[1] - spin[1] * second[0],
        ]
    )
    return np.stack([spin, second, third], axis=1)
