"""Small pictures of one wheel over a bump, from the front and from above."""

from __future__ import annotations

import math
from collections.abc import Iterator

from geometry import layout as names
from geometry.drawing import Bounds, Drawing, Item, Line, Move, Polygon, Style, Text, group
from geometry.front_parts import side_parts
from geometry.layout import SideName, UnitName
from geometry.lengths import format_length
from geometry.sheets.car_art import Look, part_items, scale_for
from geometry.sheets.look import INK, SMALL, SOFT, ink
from geometry.solution import Solution, solve
from geometry.standing import standing

STEPS = (-1.0, -0.5, 0.0, 0.5, 1.0)
"""Shares of the half travel that are shown."""
FACTORS = (1, 2, 5, 10, 20, 50)
_MOST = math.radians(14.0)
_WORDS = 3.9
_WHEEL_ROOM = 11.0
_THIN = Style("#6F7479", 0.15, (1.0, 0.8), layer="rules")


def strip_solutions(solution: Solution, side: SideName) -> list[Solution]:
    """The car at each step of the strip."""
    span = solution.span
    return [solve(solution.layout, share * span, span=span) for share in STEPS]


def turned_by(poses: list[Solution], side: SideName) -> list[float | None]:
    """How far a wheel has turned toward toe-in since ride height at each step, rad."""
    ride = float(poses[0].sides[side].ride.toe[0])
    out: list[float | None] = []
    for pose in poses:
        toe = float(pose.sides[side].now.toe[0])
        out.append(toe - ride if math.isfinite(toe - ride) else None)
    return out


def factor_for(turns: list[float | None]) -> int:
    """How many times larger the turning is drawn so that it can be seen; 1 is as it is."""
    most = max((abs(turn) for turn in turns if turn is not None), default=0.0)
    if most < math.radians(0.005):
        return 1
    return max(f for f in FACTORS if f * most <= _MOST or f == 1)


def turn_words(turn: float | None) -> str:
    """A wheel's turning in plain words, true size."""
    if turn is None:
        return "out of reach"
    size = f"{abs(math.degrees(turn)):.2f}"
    if float(size) == 0.0:
        return "0°"
    return f"{size}° {'in' if turn > 0.0 else 'out'}"


def travel_words(travel: float, units: UnitName) -> str:
    if travel == 0.0:
        return "ride height"
    return f"{'bump' if travel > 0.0 else 'droop'} {format_length(abs(travel), units, mark=True)}"


def bump_strip(
    poses: list[Solution], side: SideName, factor: int, width: float, frame: Bounds
) -> Drawing:
    """Five pictures side by side, in paper mm: the wheel from the front and from above.

    ``frame`` is the part of the floor that each shows, mm (see ``strip_frame``).
    """
    cell = width / len(poses)
    scale = scale_for(frame, cell - _WHEEL_ROOM - 3.0, 26.0)
    turns = turned_by(poses, side)
    tall = frame.height / scale
    radius = poses[0].sides[side].side.tire.radius
    half = max(radius, 1.0) / scale
    middle = 2 * _WORDS + 0.5 * max(tall, 2.0 * half)
    height = 2 * _WORDS + max(tall, 2.0 * half)
    items: list[Drawing] = []
    for number, (pose, turn) in enumerate(zip(poses, turns, strict=True)):
        x = number * cell
        front = _front(pose, side, frame, scale)
        box = front.shown()
        items.append(front.translated(x + 1.0 - box.left, middle - box.center[1]))
        above = _above(pose, side, scale, turn, factor)
        items.append(above.translated(x + cell - 0.5 * _WHEEL_ROOM - 0.5, middle))
        travel = pose.travel[side]
        words = travel_words(travel, pose.layout.units)
        center = x + 0.5 * cell
        items.append(group(
            Text((center, _WORDS + 0.8), words, SMALL, "center", style=ink(SOFT)),
            Text((center, 0.8), turn_words(turn), SMALL, "center", bold=True, style=ink()),
        ))
    return Drawing(group(*items).items, Bounds(0.0, 0.0, width, height))


def strip_frame(solutions: list[Solution], side: SideName) -> Bounds:
    """One frame that holds a side's parts in every pose of every car, mm on the floor."""
    boxes = []
    for solution in solutions:
        stand = standing(solution, side)
        places = [tuple(map(float, p)) for part in side_parts(stand) for p in part.outline]
        # Springs and struts may stand far up; the wheel and arms are what is looked at.
        top = stand.points[names.WHEEL_CENTER][1] + 1.05 * stand.state.side.tire.radius
        near = [(p[0], min(p[1], top)) for p in places if abs(p[0]) < 5000 and abs(p[1]) < 5000]
        boxes.append(Bounds.around(near or [(0.0, 0.0), (1.0, 1.0)]))
    out = boxes[0]
    for box in boxes[1:]:
        out = out.joined(box)
    return out.padded(10.0)


def _front(pose: Solution, side: SideName, frame: Bounds, scale: float) -> Drawing:
    stand = standing(pose, side)
    look = Look(springs=False, grooves=False)
    parts = [p for p in side_parts(stand) if p.role not in ("strut", "rod", "clamp")]
    if stand.state.side.is_strut:
        parts = [p for p in side_parts(stand) if p.role != "clamp"]
    true = Drawing(tuple(part_items(parts, look)))
    ride = stand.state.side[names.WHEEL_CENTER].up
    level = Line((frame.left, ride), (frame.right, ride), _THIN)
    drawing = group(*_inside(true, frame), level).scaled(1.0 / scale)
    return Drawing(drawing.items, Bounds(*(v / scale for v in frame)))


def _inside(drawing: Drawing, frame: Bounds) -> Iterator[Item]:
    """Only what lies within a frame; a strut's upper half would stand in the words."""
    for item in drawing:
        box = item.bounds
        if box.top <= frame.top + 1e-6 and box.left >= frame.left and box.right <= frame.right:
            yield item


def _above(
    pose: Solution, side: SideName, scale: float, turn: float | None, factor: int
) -> Drawing:
    """The tire from above, the car's front downward, about its own middle."""
    tire = pose.sides[side].side.tire
    half, wide = max(tire.radius, 1.0) / scale, min(0.5 * tire.width / scale, 3.2)
    straight = Line((0.0, -half - 1.0), (0.0, half + 1.0), _THIN)
    if turn is None:
        return Drawing((straight,))
    round_by = min(0.8, 0.4 * wide)
    corners = (
        (wide, half - round_by), (wide - round_by, half), (round_by - wide, half),
        (-wide, half - round_by), (-wide, round_by - half), (round_by - wide, -half),
        (wide - round_by, -half), (wide, round_by - half),
    )
    body = Polygon(corners, style=Style(INK, 0.2, fill="#E4E2DD", layer="tires"))
    line = Line((0.0, -half), (0.0, half), Style(INK, 0.3, layer="tires"))
    # Toe-in takes the front of either wheel toward the centerline; the front points down and
    # the left wheel stands to the right of the centerline.
    sign = -1.0 if side == "left" else 1.0
    wheel = group(body, line).moved(Move(complex(math.cos(sign * turn * factor),
                                                 math.sin(sign * turn * factor))))
    return group(wheel, straight)
