"""A front end's parts as outlines seen from above, in the order they are drawn.

Places are as in ``geometry.standing`` for the floor from above: x to the car's left, y to its
rear, mm. The tires are drawn first although they stand highest, so that what lies beneath
them can be seen and taken hold of.
"""

from __future__ import annotations

import math
from collections.abc import Iterator
from functools import lru_cache

import numpy as np

from geometry import layout as names
from geometry import shapes
from geometry.ackermann import axis_at_height
from geometry.faces import ABOVE
from geometry.front_parts import ARM, TIE, Part, Role, car_parts
from geometry.layout import SIDES
from geometry.linkage import Array
from geometry.solution import Solution
from geometry.standing import XY, Standing, standing

PLAN_ROLES: tuple[Role, ...] = (
    "tire", "groove", "low arm", "low arm light", "spring", "hub", "rack", "rack light",
    "bellows", "clamp", "relay", "relay light", "tie", "tie light", "knuckle",
    "knuckle light", "strut", "arm", "arm light", "eye", "bush", "joint",
)
"""Every role from the back to the front."""

_BARREL = 26.0
"""Half of how long a bushing is drawn, mm."""
_COIL = 52.0
_STEERING_ARM = (21.0, 13.0)


def plan_parts(solution: Solution) -> list[Part]:
    """Every part of a car in its chosen pose, from above; what has no place is left out."""
    both = {side: standing(solution, side, ABOVE) for side in SIDES}
    parts = [part for stand in both.values() for part in plan_side_parts(stand)]
    return parts + car_parts(solution, both)


def plan_side_parts(stand: Standing) -> list[Part]:
    """The parts of one side, standing on the floor from above."""
    return [
        Part(stand.side, role, outline)
        for role, outline in _outlines(stand)
        if math.isfinite(float(outline.sum()))
    ]


def arm_root(stand: Standing) -> XY:
    """Where the steering arm springs from the kingpin axis, at the arm's own height."""
    poses = stand.state.now if stand.meets else stand.state.ride
    place = axis_at_height(poses, poses.tie_outer[2])[:, 0]
    if bool(np.isfinite(place).all()) and abs(float(place[1])) < 1e5:
        return stand.face.seen(stand.sign, place)
    return stand.points[names.LOWER_BALL]


def _outlines(stand: Standing) -> Iterator[tuple[Role, Array]]:
    points = stand.points
    yield from _wheel(stand)
    yield from _arm(points, "lower")
    if names.SPRING_TOP in points and not stand.state.side.is_strut:
        yield "spring", _ring(points[names.SPRING_TOP], _COIL)
    yield from _knuckle(stand)
    if stand.state.side.is_strut:
        yield from _strut(points)
    yield from _arm(points, "upper")
    inner, outer = points[names.TIE_INNER], points[names.TIE_OUTER]
    yield "tie", shapes.tube(inner, outer, TIE)
    yield "tie light", shapes.sheen(inner, outer, TIE)
    yield "joint", shapes.circle(outer, 15.0)


def _wheel(stand: Standing) -> Iterator[tuple[Role, Array]]:
    tire = stand.state.side.tire
    if not tire.radius > 1.0:
        return
    center, axle = stand.points[names.WHEEL_CENTER], stand.axle

    def put(local: Array) -> Array:
        # The wheel's own x runs outboard, whichever side it is on.
        return shapes.carried(local, center, axle)

    yield "tire", put(tire_above(tire.radius, tire.width))
    for line in tread_lines(tire.radius, tire.width):
        yield "groove", put(line)
    yield "hub", put(shapes.hub(tire.offset, tire.rim_width, tire.radius))


@lru_cache(maxsize=32)
def tire_above(radius: float, width: float) -> Array:
    """A tire seen from above: x along the axle, y along its heading, with round shoulders."""
    half = 0.5 * width
    depth, shoulder = min(0.16 * radius, 0.5 * width), min(0.2 * width, half)
    quarter = np.linspace(0.0, math.pi / 2, 8)
    corner = np.column_stack(
        [half - shoulder + shoulder * np.cos(quarter), radius - depth + depth * np.sin(quarter)]
    )
    upper = np.vstack([corner, corner[::-1] * (-1.0, 1.0)])
    return np.vstack([upper, -upper])


@lru_cache(maxsize=32)
def tread_lines(radius: float, width: float) -> list[Array]:
    """Grooves that run around the tread, as straight lines (2, 2) along the heading."""
    return [
        np.array([(share * width, -0.93 * radius), (share * width, 0.93 * radius)])
        for share in (-0.27, 0.0, 0.27)
    ]


def _ring(center: XY, radius: float) -> Array:
    """A closed circle as an open line."""
    around = shapes.circle(center, radius)
    return np.vstack([around, around[:1]])


def _arm(points: dict[str, XY], arm: str) -> Iterator[tuple[Role, Array]]:
    ball = points.get(f"{arm} ball joint")
    bushings = arm_bushings(points, arm)
    if ball is None or not bushings:
        return
    size = ARM if arm == "lower" else 0.86 * ARM
    tube, light = _ARM_ROLES[arm]
    for bushing in bushings:
        yield tube, shapes.tube(bushing, ball, size, 0.8 * size)
        yield light, shapes.sheen(bushing, ball, 0.9 * size)
    along = _axis_way(bushings)
    for bushing in bushings:
        at, reach = np.array(bushing), _BARREL * along
        yield "eye", shapes.tube(at - reach, at + reach, 1.25 * size)
        yield "bush", shapes.tube(at - 0.8 * reach, at + 0.8 * reach, 0.6 * size)
    yield "joint", shapes.circle(ball, 1.25 * size)


_ARM_ROLES: dict[str, tuple[Role, Role]] = {
    "lower": ("low arm", "low arm light"),
    "upper": ("arm", "arm light"),
}


def arm_bushings(points: dict[str, XY], arm: str) -> list[XY]:
    """The inner pivots of an arm as they stand: one, or the front and the rear bushing."""
    found = (f"{arm} inner pivot", f"{arm} inner pivot front", f"{arm} inner pivot rear")
    return [points[name] for name in found if name in points]


def _axis_way(bushings: list[XY]) -> Array:
    """The direction of an arm's inner axis; straight fore and aft where only one is known."""
    way = np.subtract(bushings[-1], bushings[0])
    size = float(np.hypot(*way))
    return np.array([0.0, 1.0]) if size < 1e-6 else np.asarray(way / size)


def _knuckle(stand: Standing) -> Iterator[tuple[Role, Array]]:
    points = stand.points
    center, axle = np.array(points[names.WHEEL_CENTER]), np.array(stand.axle)
    hub = center + axle * (min(stand.state.side.tire.offset, 60.0) - 50.0)
    upper = names.STRUT_LOWER if stand.state.side.is_strut else names.UPPER_BALL
    for name in (names.LOWER_BALL, upper):
        yield "knuckle", shapes.tube(points[name], hub, 19.0, 34.0)
    outer = points[names.TIE_OUTER]
    root = arm_root(stand)
    yield "knuckle", shapes.tube(root, outer, *_STEERING_ARM)
    yield "knuckle", shapes.circle(root, 24.0)
    yield "knuckle light", shapes.sheen(root, outer, 12.0)


def _strut(points: dict[str, XY]) -> Iterator[tuple[Role, Array]]:
    low, top = points[names.STRUT_LOWER], points[names.STRUT_TOP]
    yield "strut", shapes.tube(low, top, 25.0)
    yield "spring", _ring(top, 1.25 * _COIL)
    yield "eye", shapes.circle(top, 34.0)
    yield "bush", shapes.circle(top, 20.0)
