"""Body roll and single-wheel bump: the tires stay on one floor, the body leans over it.

The body stands still here as everywhere, so it is the floor that tilts. Roll has the sign
of ISO 8855: positive turns the body about X by the right-hand rule, so its left side
rises and the left wheel goes into droop.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np

from geometry.corner import TRAVEL_TOLERANCE, Corner, Poses, contact_point, ground_offsets
from geometry.front_view import (
    FrontView,
    front_view,
    roll_center,
    roll_center_place,
)
from geometry.layout import SIDES, Layout, SideName
from geometry.linkage import Array, dot
from geometry.steering import inner_shifts

_GOES: dict[SideName, float] = {"left": -1.0, "right": 1.0}
"""Which way each wheel travels in positive roll: droop on the left, bump on the right."""

_FLOOR_STEPS = 40
"""Most rounds for a floor under two wheels; each gains some three digits."""


@dataclass(frozen=True)
class RolledSide:
    """One side of a car on a tilted floor; arrays (n,), in the side's own axes.

    ``poses`` stand in the body's frame, with contact point, scrub radius and trail taken
    on the tilted floor; ``view`` is the front-view construction from that contact.
    ``camber`` and ``toe`` are measured against the tilted floor, rad.
    """

    poses: Poses
    view: FrontView
    camber: Array
    toe: Array


@dataclass(frozen=True)
class RolledPose:
    """A car with both tires on a floor that is tilted against the body.

    ``roll`` (n,) rad, left side up positive; ``heave`` (n,) mm, the mean of both wheels'
    travel; ``rack`` mm. ``assembles`` (n,) bool: False where the parts can't follow, with
    NaN in everything there.
    """

    roll: Array
    heave: Array
    rack: float
    assembles: np.ndarray
    sides: dict[SideName, RolledSide]

    @property
    def left(self) -> RolledSide:
        return self.sides["left"]

    @property
    def right(self) -> RolledSide:
        return self.sides["right"]

    @cached_property
    def floor_line(self) -> Array:
        """The floor in the body's front view, (3, n): a*over + b*up + c = 0 in the left's over.

        (a, b) has length 1 and points up off the floor.
        """
        a, b = np.sin(self.roll), np.cos(self.roll)
        contact = self.left.poses.contact
        return np.stack([a, b, -(a * contact[1] + b * contact[2])])

    @cached_property
    def roll_center(self) -> Array:
        """(2, n) mm: left over in the body's frame, and height above the tilted floor.

        NaN where the contact lines are parallel: there is no roll center.
        """
        return roll_center(self.left.view, self.right.view)

    @cached_property
    def roll_center_place(self) -> Array:
        """(2, n) mm: the same point in the body's frame, left over and up, for drawing."""
        point = roll_center_place(self.left.view, self.right.view)
        return np.where(point[2] == 1.0, point[:2], np.nan)

    @cached_property
    def roll_center_offset(self) -> Array:
        """(n,) mm: how far left of the middle between the contacts it stands, along the floor."""
        middle = 0.5 * (self.left.view.contact + _mirrored(self.right.view.contact))
        gap = self.roll_center_place - middle[:2]
        return np.asarray(gap[0] * np.cos(self.roll) - gap[1] * np.sin(self.roll))

    @cached_property
    def track(self) -> Array:
        """(n,) mm: distance between the contact points, along the floor."""
        left, right = self.left.poses.contact, self.right.poses.contact
        return np.asarray(np.hypot(left[1] + right[1], left[2] - right[2]))


def rolled(
    layout: Layout,
    roll: Array | float,
    heave: Array | float = 0.0,
    rack: float = 0.0,
) -> RolledPose:
    """The car rolled by ``roll`` (n,) rad with both tires on one floor.

    Which point the body rolls about is not a matter of geometry alone (it takes loads), so
    the roll is made with the mean of both wheels' travel at ``heave`` (n,) mm: equal
    springs keep it there. Exact for the tilted floor; no small angles.
    """
    roll_n, heave_n = np.broadcast_arrays(
        np.atleast_1d(np.asarray(roll, dtype=float)), np.asarray(heave, dtype=float)
    )
    corners = {side: Corner.of(layout.side(side)) for side in SIDES}
    shifts = inner_shifts(layout, rack)
    normals = {side: floor_normal(side, roll_n) for side in SIDES}

    def poses_at(half: Array) -> dict[SideName, Poses]:
        return {
            side: corners[side].poses(heave_n + sign * half, _spread(shifts[side], half.size))
            for side, sign in _GOES.items()
        }

    def gap_at(poses: dict[SideName, Poses]) -> Array:
        heights = {side: _height(corners[side], poses[side], normals[side]) for side in SIDES}
        return heights["left"] - heights["right"]

    with np.errstate(all="ignore"):
        # Each wheel's contact rises by about cos(roll) per travel.
        half = np.tan(roll_n) * 0.5 * sum(corners[side].wheel_center[1, 0] for side in SIDES)
        poses = poses_at(half)
        gap = gap_at(poses)
        slope = -2.0 * np.cos(roll_n)
        for _ in range(_FLOOR_STEPS):
            if not np.any(np.abs(gap) > TRAVEL_TOLERANCE):
                break
            after = half - np.where(gap == 0.0, 0.0, gap / slope)
            poses = poses_at(after)
            gap_after = gap_at(poses)
            secant = (gap_after - gap) / (after - half)
            slope = np.where(np.isfinite(secant) & (secant < 0.0), secant, slope)
            half, gap = after, gap_after
        on_floor = np.abs(gap) < 100.0 * TRAVEL_TOLERANCE
    return _on_floor(corners, poses, roll_n, heave_n, rack, on_floor)


def single_wheel_bump(
    layout: Layout, side: SideName, travel: Array | float, rack: float = 0.0
) -> RolledPose:
    """One wheel at ``travel`` (n,) mm, the other at ride height, on the floor under both.

    The floor is the line that touches both tires, so the body's roll over it follows from
    the travel. The same pose as a body rolled by that angle and heaved by half the travel.
    """
    moved = np.atleast_1d(np.asarray(travel, dtype=float))
    return on_both_tires(
        layout,
        {name: moved if name == side else np.zeros_like(moved) for name in SIDES},
        rack,
    )


def on_both_tires(layout: Layout, travel: dict[SideName, Array], rack: float = 0.0) -> RolledPose:
    """The wheels at given travels (n,) mm, and the one floor line that touches both tires."""
    corners = {side: Corner.of(layout.side(side)) for side in SIDES}
    shifts = inner_shifts(layout, rack)
    poses = {
        side: corners[side].poses(travel[side], _spread(shifts[side], travel[side].size))
        for side in SIDES
    }
    heave = 0.5 * (travel["left"] + travel["right"])
    roll = np.zeros_like(heave)
    settled = np.zeros(heave.shape, dtype=bool)
    with np.errstate(all="ignore"):
        for _ in range(_FLOOR_STEPS):
            left, right = (
                contact_point(
                    poses[side].wheel_center,
                    poses[side].spin_axis,
                    corners[side].tire_radius,
                    floor_normal(side, roll),
                )
                for side in SIDES
            )
            # The floor falls to the left by the roll angle.
            after = np.arctan2(right[2] - left[2], left[1] + right[1])
            settled = np.abs(after - roll) < 1e-14
            roll = np.where(np.isfinite(after), after, roll)
            if np.all(settled | ~np.isfinite(after)):
                break
    return _on_floor(corners, poses, roll, heave, rack, settled)


def floor_normal(side: SideName, roll: Array) -> Array:
    """The floor's unit normal (3, n) in a side's own axes, for a body rolled by ``roll`` (n,)."""
    over = np.sin(roll) if side == "left" else -np.sin(roll)
    return np.stack([np.zeros_like(roll), over, np.cos(roll)])


def _on_floor(
    corners: dict[SideName, Corner],
    poses: dict[SideName, Poses],
    roll: Array,
    heave: Array,
    rack: float,
    on_floor: np.ndarray,
) -> RolledPose:
    """Both sides seen from the tilted floor; NaN where either does not stand on it."""
    meets = on_floor & poses["left"].assembles & poses["right"].assembles
    sides: dict[SideName, RolledSide] = {
        side: _from_floor(corners[side], _only(poses[side], meets), floor_normal(side, roll))
        for side in SIDES
    }
    return RolledPose(roll, heave, rack, meets, sides)


def _from_floor(corner: Corner, poses: Poses, normal: Array) -> RolledSide:
    with np.errstate(all="ignore"):
        outward = np.stack([np.zeros_like(normal[0]), normal[2], -normal[1]])

        def seen(vector: Array) -> Array:
            """A vector's parts along the floor (fore, over) and off it."""
            return np.stack([vector[0], dot(vector, outward), dot(vector, normal)])

        spin = seen(poses.spin_axis)
        contact = contact_point(poses.wheel_center, poses.spin_axis, corner.tire_radius, normal)
        scrub, trail = ground_offsets(
            seen(poses.lower_ball), seen(poses.upper_ball), spin, seen(contact)
        )
        tilted = replace(poses, contact=contact, scrub_radius=scrub, mechanical_trail=trail)
        return RolledSide(
            poses=tilted,
            view=front_view(corner, tilted),
            camber=-np.arcsin(np.clip(spin[2], -1.0, 1.0)),
            toe=np.arctan2(spin[0], spin[1]),
        )


def _height(corner: Corner, poses: Poses, normal: Array) -> Array:
    """How far the contact lies along the floor's normal (n,), mm."""
    contact = contact_point(poses.wheel_center, poses.spin_axis, corner.tire_radius, normal)
    return dot(contact, normal)


def _only(poses: Poses, keep: np.ndarray) -> Poses:
    """Poses with everything NaN where ``keep`` (n,) is False."""
    changed: dict[str, object] = {}
    for name, value in poses.__dict__.items():
        if name == "assembles":
            changed[name] = keep
        elif name != "travel" and value is not None:
            changed[name] = np.where(keep, value, np.nan)
    return replace(poses, **changed)  # type: ignore[arg-type]


def _spread(shift: Array, count: int) -> Array:
    return np.repeat(shift, count, axis=1)


def _mirrored(point: Array) -> Array:
    return np.stack([-point[0], point[1], point[2]])
