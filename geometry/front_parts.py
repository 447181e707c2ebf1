"""A front end's parts as outlines in the front view, in the order they are drawn.

The floor on the screen, its pictures and the sheets all draw these; only colors differ.
Outlines are (n, 2) arrays on the floor, mm (see ``geometry.standing``).
"""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Literal

import numpy as np

from geometry import layout as names
from geometry import shapes
from geometry.layout import SIDES, RelayRod, SideName
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


def side_parts(stand: Standing) -> list[Part]:
    """The parts of one side."""
    return [
        Part(stand.side, role, outline)
        for role, outline in _side_outlines(stand)
        if math.isfinite(float(outline.sum()))
    ]


def _side_outlines(stand: Standing) -> Iterator[tuple[Role, Array]]:
    yield from _wheel(stand)
    points = stand.points
    if names.SPRING_TOP in points and names.SPRING_LOWER in points:
        yield "spring", shapes.coil(points[names.SPRING_LOWER], points[names.SPRING_TOP], 42.0)
    if stand.state.side.is_strut:
        yield from _strut(points)
    for arm in ("lower", "upper"):
        yield from _arm(points, arm)
    yield from _knuckle(stand)
    yield "tie", shapes.tube(points[names.TIE_INNER], points[names.TIE_OUTER], TIE)
    yield "tie light", shapes.sheen(points[names.TIE_INNER], points[names.TIE_OUTER], TIE)
    yield "joint", shapes.circle(points[names.TIE_OUTER], 15.0)


def _wheel(stand: Standing) -> Iterator[tuple[Role, Array]]:
    side = stand.state.side
    tire = side.tire
    if not tire.radius > 1.0:
        return
    center, axle = stand.points[names.WHEEL_CENTER], stand.axle

    def put(local: Array) -> Array:
        # The wheel's own axes are x outboard and y up; on the right side that is mirrored.
        return shapes.carried(local * (1.0, stand.sign), center, axle)

    yield "tire", put(shapes.tire(tire.radius, tire.width))
    for line in shapes.grooves(tire.radius, tire.width):
        yield "groove", put(line)
    rim = (tire.radius, tire.rim_diameter, tire.rim_width)
    yield "window", put(shapes.rim_window(*rim))
    for upper in (True, False):
        yield "rim", put(shapes.rim_line(*rim, upper))
    yield "rim", put(shapes.disc_line(*rim, tire.offset))
    yield "hub", put(shapes.hub(tire.offset, tire.rim_width, tire.radius))


def _strut(points: dict[str, XY]) -> Iterator[tuple[Role, Array]]:
    low, top = np.array(points[names.STRUT_LOWER]), np.array(points[names.STRUT_TOP])
    yield "rod", shapes.tube(low + 0.5 * (top - low), top, 9.0)
    yield "strut", shapes.tube(low, low + 0.58 * (top - low), 25.0)
    yield "spring", shapes.coil(low + 0.5 * (top - low), low + 0.97 * (top - low), 55.0, 5.0)
    # The top mount's plate lies square to the strut.
    way = top - low
    size = float(np.hypot(way[0], way[1]))
    if size > 1e-6:
        square = np.array([-way[1], way[0]]) / size
        yield "clamp", shapes.tube(top - 58.0 * square, top + 58.0 * square, 8.0)


def _arm(points: dict[str, XY], arm: str) -> Iterator[tuple[Role, Array]]:
    ball = points.get(f"{arm} ball joint")
    if ball is None:
        return
    bushings = [
        points[name]
        for name in (f"{arm} inner pivot", f"{arm} inner pivot rear", f"{arm} inner pivot front")
        if name in points
    ]
    size = ARM if arm == "lower" else 0.86 * ARM
    for bushing in bushings:
        yield "arm", shapes.tube(bushing, ball, size, 0.8 * size)
        yield "arm light", shapes.sheen(bushing, ball, 0.9 * size)
    for bushing in bushings:
        yield "eye", shapes.circle(bushing, 1.42 * size)
        yield "bush", shapes.circle(bushing, 0.92 * size)
    yield "joint", shapes.circle(ball, 1.25 * size)


def _knuckle(stand: Standing) -> Iterator[tuple[Role, Array]]:
    points = stand.points
    lower = np.array(points[names.LOWER_BALL])
    strut = stand.state.side.is_strut
    upper = np.array(points[names.STRUT_LOWER if strut else names.UPPER_BALL])
    center, axle = np.array(points[names.WHEEL_CENTER]), np.array(stand.axle)
    hub = center + axle * (min(stand.state.side.tire.offset, 60.0) - 10.0 - _HUB_FACE)
    yield "knuckle", shapes.tube(lower, hub, 17.0, 40.0)
    yield "knuckle", shapes.tube(upper, hub, 17.0, 40.0)
    outer = np.array(points[names.TIE_OUTER])
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
    else:
        outlines = _rack(both)
    return [
        Part(None, role, outline)
        for role, outline in outlines
        if math.isfinite(float(outline.sum()))
    ]


def _rack(both: dict[SideName, Standing]) -> Iterator[tuple[Role, Array]]:
    inner = {side: np.array(stand.points[names.TIE_INNER]) for side, stand in both.items()}
    rest = {
        side: inner[side] - np.array(stand.shift) if stand.meets else inner[side]
        for side, stand in both.items()
    }
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


def _relay(points: dict[str, XY], both: dict[SideName, Standing]) -> Iterator[tuple[Role, Array]]:
    pitman, idler = points[names.PITMAN_END], points[names.IDLER_END]
    yield "relay", shapes.tube(idler, pitman, RELAY)
    yield "relay light", shapes.sheen(idler, pitman, RELAY)
    start, end = np.array(idler), np.array(pitman)
    way = end - start
    size = float(way @ way)
    for stand in both.values():
        inner = np.array(stand.points[names.TIE_INNER])
        share = min(max(float((inner - start) @ way) / size, 0.0), 1.0) if size > 1e-6 else 0.0
        yield "relay", shapes.tube(start + share * way, inner, 11.0)
    for end_name, pivot in (
        (names.PITMAN_END, names.PITMAN_PIVOT),
        (names.IDLER_END, names.IDLER_PIVOT),
    ):
        yield "relay", shapes.tube(points[pivot], points[end_name], 19.0, 13.0)
        yield "eye", shapes.circle(points[pivot], 20.0)
