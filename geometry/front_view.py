"""Instant centers, swing arms and roll centers in the front view (Aronhold and Kennedy).

Everything is homogeneous, so arms that run parallel have their instant center at infinity
in a direction, and the construction carries on.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from geometry.corner import Corner, Poses
from geometry.linkage import (
    Array,
    cross,
    homogeneous,
    line_through,
    meeting,
    plane_trace,
    unit,
)


@dataclass(frozen=True)
class FrontView:
    """The front-view construction of one side, in that side's over and up.

    lower_line, upper_line, contact_line   (3, ...) lines, (a, b) of length 1
    instant_center   (3, ...): (over, up, 1), or (direction, 0) at infinity; NaN where the
                     arm lines lie on one another or the pose doesn't assemble
    swing_arm        (...) mm from contact to instant center, inboard positive; infinite
                     where the arms are parallel
    """

    lower_line: Array
    upper_line: Array
    instant_center: Array
    contact: Array
    contact_line: Array
    swing_arm: Array

    @property
    def camber_rate(self) -> Array:
        """Camber change per travel (...), rad/mm: one over the swing arm, leaning in in bump."""
        with np.errstate(all="ignore"):
            return np.asarray(-1.0 / self.swing_arm)


def front_view(corner: Corner, poses: Poses) -> FrontView:
    """The construction for every pose of a corner."""
    with np.errstate(all="ignore"):
        fore = poses.wheel_center[0]
        lower_normal = cross(
            corner.lower_front - corner.lower_rear, poses.lower_ball - corner.lower_rear
        )
        lower = plane_trace(lower_normal, corner.lower_rear, fore)
        strut_axis = poses.upper_ball - poses.lower_ball
        through = poses.upper_ball
        if poses.strut_lower is not None:
            strut_axis = unit(poses.upper_ball - poses.strut_lower)
        upper_normal = corner.guide.front_line_normal(
            poses.upper_ball, poses.lower_ball, strut_axis
        )
        upper = plane_trace(upper_normal, through, fore)
        center = meeting(lower, upper)
        contact = homogeneous(poses.contact[1], poses.contact[2])
        contact_line = line_through(contact, center)
        at_infinity = center[2] == 0.0
        swing = poses.contact[1] - center[0]
        return FrontView(
            lower,
            upper,
            center,
            contact,
            contact_line,
            np.asarray(np.where(at_infinity, np.inf, swing)),
        )


def mirrored_line(line: Array) -> Array:
    """A line (3, ...) as the other side of the car measures it."""
    return np.stack([-line[0], line[1], line[2]])


def mirrored_point(point: Array) -> Array:
    """A homogeneous point (3, ...) as the other side of the car measures it."""
    return np.stack([-point[0], point[1], point[2]])


def roll_center_place(left: FrontView, right: FrontView) -> Array:
    """Where the two contact lines meet, in the body's frame: (left over, up, w), (3, ...).

    ``w`` is 1, or 0 where the lines are parallel. Where they lie on one another every
    point of them would do; the one midway between the contacts is given, as it is the
    limit from either side on a mirrored car.
    """
    with np.errstate(all="ignore"):
        right_line = mirrored_line(right.contact_line)
        point = meeting(left.contact_line, right_line)
        middle = 0.5 * (left.contact + mirrored_point(right.contact))
        same = np.isnan(point[0]) & np.isfinite(left.contact_line[0] + right_line[0])
        return np.asarray(np.where(same, middle, point))


def roll_center(left: FrontView, right: FrontView) -> Array:
    """The roll center (2, ...), mm: left over, and up above the floor both tires stand on.

    NaN where the contact lines are parallel: there is no roll center.
    """
    with np.errstate(all="ignore"):
        point = roll_center_place(left, right)
        floor = line_through(mirrored_point(right.contact), left.contact)
        floor = floor * np.where(floor[1] < 0.0, -1.0, 1.0)
        up = distance_to_line(floor, point[0], point[1])
        # Tires in one place stand on no one floor, and then there is no height over it.
        exists = (point[2] == 1.0) & np.isfinite(up)
        return np.stack([np.where(exists, point[0], np.nan), np.where(exists, up, np.nan)])


def inner_pivot_of(corner: Corner, arm: str) -> Array:
    """Where an arm's inner axis passes the wheel center's transverse plane, homogeneous.

    (3, *cars): the front-view inner pivot. An axis that never passes that plane gives the
    middle of its two bushings.
    """
    if arm == "upper" and corner.is_strut:
        raise ValueError("A strut corner has no upper arm.")
    if arm == "lower":
        front, rear = corner.lower_front, corner.lower_rear
    else:
        front, rear = corner.axis_of("upper")
    axis = front - rear
    with np.errstate(all="ignore"):
        share = (corner.wheel_center[0] - rear[0]) / axis[0]
        share = np.where(np.isfinite(share) & (np.abs(axis[0]) > 1e-9), share, 0.5)
    place = rear + share * axis
    return homogeneous(place[1], place[2])[..., 0]


def distance_to_line(line: Array, over: Array | float, up: Array | float) -> Array:
    """Signed distance (...), mm, of a front-view place from a line with unit (a, b)."""
    return np.asarray(line[0] * over + line[1] * up + line[2])

