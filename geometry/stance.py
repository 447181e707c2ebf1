"""Ride-height changes: the same drop by spring, by dropped knuckle or by tire.

Each gives a new car as it stands on the floor at its new height, so that it can be solved,
drawn and compared like any other. A raise is a negative drop.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np

from geometry import layout as names
from geometry.corner import Corner, contact_point
from geometry.inner_pivot import held_motion, held_travel
from geometry.layout import (
    KNUCKLE_POINTS,
    SIDES,
    Layout,
    LayoutError,
    Point,
    RelayRod,
    Side,
)
from geometry.linkage import Array
from geometry.springs import lower_mount


@dataclass(frozen=True)
class Stance:
    """How far the body comes down, mm, and by what; the drops add up.

    ``rear`` is the drop at the rear axle; None means the same as the front (no rake).
    """

    spring: float = 0.0
    spindle: float = 0.0
    tire: float = 0.0
    rear: float | None = None

    @property
    def front(self) -> float:
        return self.spring + self.spindle + self.tire


def lowered(layout: Layout, stance: Stance) -> Layout:
    """The car at its new stance, toe set again to its static figure.

    Raises LayoutError in a plain sentence if the drop can't be reached or would leave the
    tire no radius, or if a rake is asked for without a wheelbase.
    """
    out = layout
    if stance.spring:
        out = by_spring(out, stance.spring)
    if stance.spindle:
        out = by_spindle(out, stance.spindle)
    if stance.tire:
        out = by_tire(out, stance.tire)
    if stance.rear is not None and stance.rear != stance.front:
        out = raked(out, stance.front - stance.rear)
    return out


def by_spring(layout: Layout, drop: float) -> Layout:
    """The body comes down on its wheels: travel +drop, then toe is set again there."""
    sides = [_sprung(layout.side(side), drop) for side in SIDES]
    fall = 0.5 * (sides[0][1] + sides[1][1])
    out = replace(
        layout, left=sides[0][0], right=None if layout.linked else sides[1][0]
    )
    return body_things_down(out, fall)


def _sprung(side: Side, drop: float) -> tuple[Side, float]:
    """One side at travel ``drop`` with its toe held, on the floor; and how far its body fell."""
    corner = Corner.of(side)
    motion = held_travel(corner, np.array([drop]))
    poses = corner.poses(drop)
    if not (motion.assembles.all() and poses.assembles.all()):
        droop, bump = (float(stop) for stop in corner.travel_stops())
        stop = bump if drop > 0.0 else -droop
        # A corner that turns over before its parts stop meeting has no stop to name.
        where = f": they stop meeting {abs(stop):.0f} mm from here" if math.isfinite(stop) else ""
        raise LayoutError(f"The parts can't reach that height{where}.")
    # With toe held the kingpin's two points are the pose's own; the rest turns about it.
    swing = _held_swing(corner, drop)
    spin, wheel, outer, strut = _held_knuckle(corner, swing)
    contact = contact_point(wheel, spin, corner.tire_radius)
    rise = float(contact[2, 0] - _ride_contact(corner))
    moved = {
        names.LOWER_BALL: corner.lower_ball_at(swing)[:, 0],
        names.TIE_OUTER: outer[:, 0],
        names.WHEEL_CENTER: wheel[:, 0],
    }
    if corner.is_strut:
        moved[names.STRUT_LOWER] = strut[:, 0]
    else:
        moved[names.UPPER_BALL] = corner.guide.upper(corner.lower_ball_at(swing))[0][:, 0]
    points = {name: _down(p, rise) for name, p in side.points.items()}
    points |= {name: _down(Point(p[1], p[2], p[0]), rise) for name, p in moved.items()}
    if names.SPRING_LOWER in points:
        # The spring's lower mount rides on its arm or knuckle, wherever that went.
        lower = corner.lower_ball_at(swing)
        held = replace(
            poses,
            lower_ball=lower,
            upper_ball=np.broadcast_to(corner.guide.upper(lower)[0], lower.shape),
            tie_outer=outer,
            strut_lower=strut if corner.is_strut else None,
        )
        mount = lower_mount(side, corner, held)[:, 0]
        points[names.SPRING_LOWER] = _down(Point(mount[1], mount[2], mount[0]), rise)
    camber = float(-math.asin(float(np.clip(spin[2, 0], -1.0, 1.0))))
    points = {name: _clean(p) for name, p in points.items()}
    return replace(side, points=points, static_camber=camber), rise


def _held_swing(corner: Corner, travel: float) -> Array:
    """The lower arm's swing (1,) that gives a travel with the toe held."""
    low, high, _, _ = corner.swing_range
    a, b = float(low[..., 0]), float(high[..., 0])
    for _ in range(80):
        middle = 0.5 * (a + b)
        here = float(held_motion(corner, np.array([middle])).travel[0])
        # Beyond the parts' reach the answer is missing; come back toward ride height.
        too_far = not math.isfinite(here)
        if (here > travel) or (too_far and middle > 0.0):
            b = middle
        else:
            a = middle
    return np.array([0.5 * (a + b)])


def _held_knuckle(corner: Corner, swing: Array) -> tuple[Array, Array, Array, Array]:
    """Spin axis, wheel center, outer tie-rod end and strut lower mount with the toe held."""
    motion = held_motion(corner, swing)
    lower = corner.lower_ball_at(swing)
    upper, in_knuckle, _ = corner.guide.upper(lower)
    spin = motion.spin_along + motion.spin_arm
    ride = _frame(in_knuckle - corner.lower_ball, corner.spin_axis)
    now = _frame(upper - lower, spin)

    def carried(place: Array) -> Array:
        local = np.einsum("ki...,k...->i...", ride, place - corner.lower_ball)
        return np.asarray(lower + np.einsum("ki...,i...->k...", now, local))

    strut = corner.points.get(names.STRUT_LOWER, corner.wheel_center)
    return spin, carried(corner.wheel_center), motion.tie_outer, carried(strut)


def _frame(kingpin: Array, spin: Array) -> Array:
    """A right-handed frame (3, 3, n), columns: along the kingpin, and the spin axis across it."""
    first = kingpin / np.linalg.norm(kingpin, axis=0)
    side = spin - np.sum(spin * first, axis=0) * first
    second = side / np.linalg.norm(side, axis=0)
    first, second = np.broadcast_arrays(first, second)
    return np.stack([first, second, np.cross(first, second, axis=0)], axis=1)


def _ride_contact(corner: Corner) -> float:
    return float(contact_point(corner.wheel_center, corner.spin_axis, corner.tire_radius)[2, 0])


def by_spindle(layout: Layout, drop: float) -> Layout:
    """A dropped knuckle: the wheel sits higher on it, every other pivot nearer the floor."""
    return body_things_down(
        _each_side(
            layout,
            lambda side: replace(
                side,
                points={
                    name: p if name == names.WHEEL_CENTER else _down(p, drop)
                    for name, p in side.points.items()
                },
            ),
        ),
        drop,
    )


def by_tire(layout: Layout, drop: float) -> Layout:
    """A smaller tire: loaded radius less ``drop``, and everything down with the wheel."""

    def change(side: Side) -> Side:
        if side.tire.radius - drop <= 0.0:
            raise LayoutError("That leaves the tire no radius.")
        return replace(
            side,
            points={name: _down(p, drop) for name, p in side.points.items()},
            tire=replace(side.tire, radius=side.tire.radius - drop),
        )

    return body_things_down(_each_side(layout, change), drop)


def raked(layout: Layout, nose_down: float) -> Layout:
    """The car pitched about its front wheel centers: the nose ``nose_down`` mm lower than the
    tail over the wheelbase, which takes caster away."""
    if not layout.wheelbase:
        raise LayoutError("A rake needs the wheelbase. Type it in the measure sheet.")
    angle = math.atan2(nose_down, layout.wheelbase)
    cos, sin = math.cos(angle), math.sin(angle)
    center = layout.left[names.WHEEL_CENTER]

    def turned(p: Point) -> Point:
        fore, up = p.fore - center.fore, p.up - center.up
        return Point(
            p.over, center.up + up * cos - fore * sin, center.fore + fore * cos + up * sin
        )

    out = _each_side(
        layout,
        lambda side: replace(
            side, points={name: turned(p) for name, p in side.points.items()}
        ),
    )
    if isinstance(out.steering, RelayRod):
        steering = out.steering
        for name in names.RELAY_POINTS:
            steering = steering.moved(name, turned(steering[name]))
        out = replace(out, steering=steering)
    return out


def _each_side(layout: Layout, change: Callable[[Side], Side]) -> Layout:
    right = None if layout.right is None else change(layout.right)
    return replace(layout, left=change(layout.left), right=right)


def _clean(point: Point) -> Point:
    """A place to a picometer: what is finer is rounding, and reads badly in a sheet."""
    return Point(*(round(float(part), 9) + 0.0 for part in point))


def _down(point: Point, drop: float) -> Point:
    return Point(point.over, point.up - drop, point.fore)


def body_things_down(layout: Layout, drop: float) -> Layout:
    """What hangs on the body besides the sides' points: steering, mass center, front no-gos."""
    steering = layout.steering
    if isinstance(steering, RelayRod):
        for name in names.RELAY_POINTS:
            steering = steering.moved(name, _down(steering[name], drop))
    return replace(
        layout,
        steering=steering,
        cg_height=None if layout.cg_height is None else layout.cg_height - drop,
        no_go=tuple(
            replace(shape, outline=tuple((over, up - drop) for over, up in shape.outline))
            if shape.view == "front"
            else shape
            for shape in layout.no_go
        ),
    )


def aligned(layout: Layout, camber: float) -> Layout:
    """Static camber set by shims at the upper inner pivots (or a strut's top mount), and toe again.

    The knuckle leans about its lower ball joint; the upper inner pivots move in or out by
    what keeps the upper arm's length. Raises LayoutError where the arm can't reach.
    """
    return _each_side(layout, lambda side: _side_aligned(side, camber))


def _side_aligned(side: Side, camber: float) -> Side:
    lean = camber - side.static_camber
    ball = side[names.LOWER_BALL]
    cos, sin = math.cos(lean), math.sin(lean)

    def leaned(p: Point) -> Point:
        over, up = p.over - ball.over, p.up - ball.up
        # Positive camber takes the top outboard.
        return Point(ball.over + over * cos + up * sin, ball.up + up * cos - over * sin, p.fore)

    points = dict(side.points)
    for name in KNUCKLE_POINTS:
        if name in points and name != names.LOWER_BALL:
            points[name] = leaned(points[name])
    if side.is_strut:
        points[names.STRUT_TOP] = leaned(points[names.STRUT_TOP])
    else:
        pivot, rear = side.arm_pivots("upper")
        shim = _shim(pivot, side[names.UPPER_BALL], points[names.UPPER_BALL])
        if rear is None:
            points[names.UPPER_INNER] = pivot._replace(over=pivot.over + shim)
        else:
            points[names.UPPER_INNER_FRONT] = pivot._replace(over=pivot.over + shim)
            points[names.UPPER_INNER_REAR] = rear._replace(over=rear.over + shim)
    new = replace(side, points=points, static_camber=camber)
    fall = _ride_contact(Corner.of(new)) - _ride_contact(Corner.of(side))
    return replace(new, points={name: _down(p, fall) for name, p in points.items()})


def _shim(pivot: Point, before: Point, after: Point) -> float:
    """How far outboard, mm, an inner pivot goes so that its arm still reaches the ball joint."""
    length_sq = sum((a - b) ** 2 for a, b in zip(pivot, before, strict=True))
    across = length_sq - (after.up - pivot.up) ** 2 - (after.fore - pivot.fore) ** 2
    if across < 0.0:
        raise LayoutError("The upper arm is too short to set that camber with shims.")
    reach = math.copysign(math.sqrt(across), before.over - pivot.over)
    return after.over - reach - pivot.over
