"""A front end's parts as outlines in the front view, in the order they are drawn.

The floor on the screen, its pictures and the sheets all draw these; only colors differ.
Outlines are (n, 2) arrays on the floor, mm (see ``geometry.standing``).
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from functools import lru_cache
from typing import Literal, ParamSpec, cast

import numpy as np

from geometry import layout as names
from geometry import shapes
from geometry.layout import RELAY_POINTS, SIDES, RelayRod, SideName, Tire
from geometry.linkage import Array
from geometry.solution import Solution
from geometry.standing import XY, Standing, relay_standing, standing

Role = Literal[
    "tire", "groove", "window", "rim", "hub", "spring", "strut", "rod", "tie", "tie light",
    "rack", "rack light", "bellows", "clamp", "relay", "relay light", "arm", "arm light",
    "knuckle", "knuckle light", "eye", "bush", "joint", "low arm", "low arm light",
]
ROLES: tuple[Role, ...] = (
    "tire", "groove", "window", "rim", "hub", "spring", "strut", "rod", "rack", "rack light",
    "bellows", "clamp", "relay", "relay light", "tie", "tie light", "arm", "arm light",
    "knuckle", "knuckle light", "eye", "bush", "joint",
)
"""Every role of the front view from the back to the front."""

OPEN_ROLES = frozenset({"groove", "rim", "spring"})
"""Roles that are lines, not filled outlines."""

ARM, TIE, RACK, RELAY = 15.0, 9.5, 22.0, 13.0
_HUB_FACE = 30.0
_KEPT = 32
"""Outlines remembered of each sort: both sides of both cars, on both floors, and more."""


@dataclass(frozen=True)
class Part:
    """One outline of a part. ``side`` is None for what belongs to the whole car."""

    side: SideName | None
    role: Role
    outline: Array

    @property
    def closed(self) -> bool:
        return self.role not in OPEN_ROLES


def front_parts(solution: Solution) -> list[Part]:
    """Every part of a car in its chosen pose; what has no place is left out."""
    both = {side: standing(solution, side) for side in SIDES}
    parts = [part for stand in both.values() for part in side_parts(stand)]
    parts += car_parts(solution, both)
    return parts


Outlines = Iterator[tuple[Role, Array]]
P = ParamSpec("P")


def _once(draw: Callable[P, Outlines]) -> Callable[P, tuple[tuple[Role, Array], ...]]:
    """Outlines remembered by what they are made of; those without a place are left out.

    While one nail is dragged most parts stand still, and the same arrays tell that they do.
    """

    def drawn(*given: P.args, **named: P.kwargs) -> tuple[tuple[Role, Array], ...]:
        found = [
            (role, outline)
            for role, outline in draw(*given, **named)
            if math.isfinite(float(outline.sum()))
        ]
        for _, outline in found:
            outline.setflags(write=False)
        return tuple(found)

    return cast("Callable[P, tuple[tuple[Role, Array], ...]]", lru_cache(maxsize=_KEPT)(drawn))


def side_parts(stand: Standing) -> list[Part]:
    """The parts of one side. Outlines of parts that stand still are the same arrays again."""
    return [Part(stand.side, role, outline) for role, outline in _side_outlines(stand)]


def _side_outlines(stand: Standing) -> Outlines:
    side, points = stand.state.side, stand.points
    yield from _wheel(side.tire, points[names.WHEEL_CENTER], stand.axle, stand.sign)
    if names.SPRING_TOP in points and names.SPRING_LOWER in points:
        yield from _spring(points[names.SPRING_LOWER], points[names.SPRING_TOP])
    if side.is_strut:
        yield from _strut(points[names.STRUT_LOWER], points[names.STRUT_TOP])
    for arm, size in (("lower", ARM), ("upper", 0.86 * ARM)):
        ball = points.get(f"{arm} ball joint")
        if ball is not None:
            yield from _arm(ball, _bushings(points, arm), size)
    upper = points[names.STRUT_LOWER if side.is_strut else names.UPPER_BALL]
    yield from _knuckle(
        (points[names.LOWER_BALL], upper), points[names.TIE_OUTER],
        points[names.WHEEL_CENTER], stand.axle, side.tire.offset,
    )
    yield from _tie(points[names.TIE_INNER], points[names.TIE_OUTER])


@_once
def _wheel(tire: Tire, center: XY, axle: XY, sign: float) -> Outlines:
    if not tire.radius > 1.0:
        return

    def put(local: Array) -> Array:
        # The wheel's own axes are x outboard and y up; on the right side that is mirrored.
        return shapes.carried(local * (1.0, sign), center, axle)

    yield "tire", put(shapes.tire(tire.radius, tire.width))
    for line in shapes.grooves(tire.radius, tire.width):
        yield "groove", put(line)
    rim = (tire.radius, tire.rim_diameter, tire.rim_width)
    yield "window", put(shapes.rim_window(*rim))
    for upper in (True, False):
        yield "rim", put(shapes.rim_line(*rim, upper))
    yield "rim", put(shapes.disc_line(*rim, tire.offset))
    yield "hub", put(shapes.hub(tire.offset, tire.rim_width, tire.radius))


@_once
def _spring(low: XY, top: XY) -> Outlines:
    yield "spring", shapes.coil(low, top, 42.0)


@_once
def _tie(inner: XY, outer: XY) -> Outlines:
    yield "tie", shapes.tube(inner, outer, TIE)
    yield "tie light", shapes.sheen(inner, outer, TIE)
    yield "joint", shapes.circle(outer, 15.0)


@_once
def _strut(low_end: XY, top_end: XY) -> Outlines:
    low, top = np.array(low_end), np.array(top_end)
    yield "rod", shapes.tube(low + 0.5 * (top - low), top, 9.0)
    yield "strut", shapes.tube(low, low + 0.58 * (top - low), 25.0)
    yield "spring", shapes.coil(low + 0.5 * (top - low), low + 0.97 * (top - low), 55.0, 5.0)
    # The top mount's plate lies square to the strut.
    way = top - low
    size = float(np.hypot(way[0], way[1]))
    if size > 1e-6:
        square = np.array([-way[1], way[0]]) / size
        yield "clamp", shapes.tube(top - 58.0 * square, top + 58.0 * square, 8.0)


def _bushings(points: dict[str, XY], arm: str) -> tuple[XY, ...]:
    found = (f"{arm} inner pivot", f"{arm} inner pivot rear", f"{arm} inner pivot front")
    return tuple(points[name] for name in found if name in points)


@_once
def _arm(ball: XY, bushings: tuple[XY, ...], size: float) -> Outlines:
    for bushing in bushings:
        yield "arm", shapes.tube(bushing, ball, size, 0.8 * size)
        yield "arm light", shapes.sheen(bushing, ball, 0.9 * size)
    for bushing in bushings:
        yield "eye", shapes.circle(bushing, 1.42 * size)
        yield "bush", shapes.circle(bushing, 0.92 * size)
    yield "joint", shapes.circle(ball, 1.25 * size)


@_once
def _knuckle(
    ends: tuple[XY, XY], tie_outer: XY, wheel_center: XY, wheel_axle: XY, offset: float
) -> Outlines:
    lower, upper = np.array(ends[0]), np.array(ends[1])
    center, axle = np.array(wheel_center), np.array(wheel_axle)
    hub = center + axle * (min(offset, 60.0) - 10.0 - _HUB_FACE)
    yield "knuckle", shapes.tube(lower, hub, 17.0, 40.0)
    yield "knuckle", shapes.tube(upper, hub, 17.0, 40.0)
    outer = np.array(tie_outer)
    way = upper - lower
    size = float(way @ way)
    # The steering arm springs from the knuckle nearest to the outer tie-rod end.
    share = min(max(float((outer - lower) @ way) / size, 0.15), 0.85) if size > 1e-6 else 0.5
    root = lower + share * way
    root = root + 0.45 * (hub - root)
    yield "knuckle", shapes.tube(root, outer, 22.0, 11.0)
    yield "knuckle light", shapes.circle(hub, 24.0)
    yield "joint", shapes.circle(lower, 17.0)


def car_parts(solution: Solution, both: dict[SideName, Standing]) -> list[Part]:
    """The steering's parts that belong to both sides: a rack, or a relay rod with its arms."""
    if isinstance(solution.layout.steering, RelayRod):
        outlines = _relay(relay_standing(solution, both["left"].face), both)
        return [Part(None, role, outline) for role, outline in outlines]
    inner = [both[side].points[names.TIE_INNER] for side in SIDES]
    shifts = [both[side].shift if both[side].meets else (0.0, 0.0) for side in SIDES]
    return [Part(None, role, outline) for role, outline in _rack(*inner, *shifts)]


@_once
def _rack(left: XY, right: XY, left_shift: XY, right_shift: XY) -> Outlines:
    inner = {"left": np.array(left), "right": np.array(right)}
    rest = {"left": inner["left"] - left_shift, "right": inner["right"] - right_shift}
    way = rest["left"] - rest["right"]
    length = float(np.hypot(way[0], way[1]))
    if not length > 1.0:
        return
    way = way / length
    boot = min(0.24 * length, 120.0)
    ends = {"left": rest["left"] - boot * way, "right": rest["right"] + boot * way}
    yield "rack", shapes.tube(ends["right"], ends["left"], RACK)
    yield "rack light", shapes.sheen(ends["right"], ends["left"], RACK)
    square = np.array([-way[1], way[0]])
    body = float(np.hypot(*(ends["left"] - ends["right"])))
    for share in (0.14, 0.86):
        at = ends["right"] + share * body * way
        yield "clamp", shapes.tube(at - 0.8 * RACK * square, at + 0.8 * RACK * square, 10.0)
    for side in SIDES:
        yield "bellows", shapes.bellows(ends[side], inner[side], 1.05 * RACK, 0.75 * RACK)


def _relay(
    points: dict[str, XY], both: dict[SideName, Standing]
) -> tuple[tuple[Role, Array], ...]:
    inner = [stand.points[names.TIE_INNER] for stand in both.values()]
    return _relay_rod(*(points[name] for name in RELAY_POINTS), *inner)


@_once
def _relay_rod(
    pitman_pivot: XY, pitman: XY, idler_pivot: XY, idler: XY, left: XY, right: XY
) -> Outlines:
    yield "relay", shapes.tube(idler, pitman, RELAY)
    yield "relay light", shapes.sheen(idler, pitman, RELAY)
    start, end = np.array(idler), np.array(pitman)
    way = end - start
    size = float(way @ way)
    for inner in (np.array(left), np.array(right)):
        share = min(max(float((inner - start) @ way) / size, 0.0), 1.0) if size > 1e-6 else 0.0
        yield "relay", shapes.tube(start + share * way, inner, 11.0)
    for arm_end, pivot in ((pitman, pitman_pivot), (idler, idler_pivot)):
        yield "relay", shapes.tube(pivot, arm_end, 19.0, 13.0)
        yield "eye", shapes.circle(pivot, 20.0)
