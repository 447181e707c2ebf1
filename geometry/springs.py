"""A spring or coil-over on a corner: motion ratio, lengths, wheel rate and ride frequency."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from geometry import layout as names
from geometry.corner import Corner, Poses, space
from geometry.layout import Side
from geometry.linkage import Array, cross, norm, rigid_coefficients, rigid_place, unit
from geometry.loads import wheel_rate


@dataclass(frozen=True)
class SpringMotion:
    """The spring through the travel; arrays of the poses' shape.

    length mm between mounts; motion_ratio spring travel per wheel travel (positive when bump
    shortens it), by virtual work, so lean is counted; lower_mount (3, ...) mm.
    """

    travel: Array
    length: Array
    motion_ratio: Array
    lower_mount: Array

    def wheel_rate(self, spring_rate: float) -> Array:
        """Wheel rate (...), N/mm, without the term from the changing motion ratio."""
        return np.asarray(wheel_rate(spring_rate, 1.0) * self.motion_ratio**2)

    def changing_ratio_rate(self, spring_force: float) -> Array:
        """The left-out term (...), N/mm: spring force x change of motion ratio per travel."""
        return np.asarray(spring_force * np.gradient(self.motion_ratio, self.travel, axis=-1))


def lower_mount(side: Side, corner: Corner, poses: Poses) -> Array:
    """Where the spring's lower mount stands (3, n) in each pose, on the part that carries it."""
    mount = space(side[names.SPRING_LOWER])[:, None]
    carrier = side.spring.lower_mount_on
    if carrier == "knuckle" or (carrier == "upper arm" and corner.is_strut):
        first, second = corner.upper_ride - corner.lower_ball, corner.tie_outer - corner.lower_ball
        if corner.is_strut and poses.strut_lower is not None:
            # The upper point of a strut's kingpin slides; its lower mount rides on the knuckle.
            first = corner.points[names.STRUT_LOWER] - corner.lower_ball
            now_first = poses.strut_lower - poses.lower_ball
        else:
            now_first = poses.upper_ball - poses.lower_ball
        now_second = poses.tie_outer - poses.lower_ball
        place = rigid_coefficients(first, second, mount - corner.lower_ball)
        return poses.lower_ball + rigid_place(
            place, now_first, now_second, cross(now_first, now_second)
        )
    if carrier == "lower arm":
        front, rear, ball, now = (
            corner.lower_front, corner.lower_rear, corner.lower_ball, poses.lower_ball
        )
    else:
        front, rear = corner.axis_of("upper")
        ball, now = corner.upper_ride, poses.upper_ball
    axis = unit(front - rear)
    first, second = axis, ball - rear
    place = rigid_coefficients(first, second, mount - rear)
    return rear + rigid_place(place, axis, now - rear, cross(axis, now - rear))


def spring_motion(side: Side, corner: Corner, poses: Poses) -> SpringMotion | None:
    """The spring through a set of poses with rising travel, or None if it has no mounts.

    The ratio is taken from neighboring poses; give a few dozen over the travel.
    """
    if names.SPRING_TOP not in side.points or names.SPRING_LOWER not in side.points:
        return None
    with np.errstate(all="ignore"):
        lower = lower_mount(side, corner, poses)
        length = norm(space(side[names.SPRING_TOP])[:, None] - lower)
        ratio = -np.gradient(length, poses.travel, axis=-1, edge_order=2)
    return SpringMotion(poses.travel, length, np.asarray(ratio), lower)


def stroke_words(
    motion: SpringMotion, shortest: float | None, longest: float | None
) -> tuple[float | None, float | None]:
    """The travel, mm, at which the spring bottoms and tops, None where it never does."""

    def reached(limit: float | None, *, short: bool) -> float | None:
        if limit is None:
            return None
        beyond = motion.length <= limit if short else motion.length >= limit
        travels = motion.travel[beyond & np.isfinite(motion.length)]
        if not travels.size:
            return None
        return float(travels[np.argmin(np.abs(travels))])

    return reached(shortest, short=True), reached(longest, short=False)


