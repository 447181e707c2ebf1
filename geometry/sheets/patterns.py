"""Full-size patterns: drawings in true millimeters to tile, plot, or cut from.

Each has one layer for each part. Holes are marked by their centers only, since the size of
a hole is the part's own affair.
"""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Literal

from geometry import floor_signs as signs
from geometry import layout as names
from geometry.bounds import Bounds, DrawingError, Place
from geometry.dimensions import center_mark, dimension
from geometry.drawing import Drawing, Item, Line, Polygon, Style, Text
from geometry.finding_checks.wording import Wording
from geometry.front_strings import strings
from geometry.labels import Box, Label, place_labels
from geometry.layout import SIDES, Layout, Point, Side, SideName
from geometry.lengths import format_length
from geometry.shapes import clipped, tube
from geometry.sheets.car_art import Look, all_parts, extent, frame_for, part_items, stands
from geometry.sheets.look import CENTERLINE, INK, ink
from geometry.solution import Solution
from geometry.standing import sign_of
from geometry.steering_arm import arm_shape

PatternKind = Literal[
    "front view", "one side", "brackets", "lower arm", "upper arm", "steering arm"
]

PATTERNS: dict[PatternKind, str] = {
    "front view": "Front view, whole car",
    "one side": "Front view, one side",
    "brackets": "Inner pivots, for brackets",
    "lower arm": "Lower arm",
    "upper arm": "Upper arm",
    "steering arm": "Steering arm, from above",
}
"""Every pattern and what it is called."""

LETTERING = 3.5
_GUIDE = Style("#6F7479", 0.25, layer="guide")
_MARK = Style(INK, 0.25, layer="holes")
_CENTER = Style(INK, 0.2, (12.0, 2.0, 2.0, 2.0), layer="centerlines")
_FLOOR = Style(INK, 0.4, layer="floor")
_AROUND = 45.0


@dataclass(frozen=True)
class _Hole:
    """A center to mark and the words beside it."""

    at: Place
    words: str


def kinds_for(layout: Layout, side: SideName = "left") -> tuple[PatternKind, ...]:
    """The patterns a car has."""
    own = layout.side(side)
    left_out: set[str] = {"upper arm"} if own.is_strut else set()
    if arm_shape(own) is None:
        left_out.add("steering arm")
    return tuple(kind for kind in PATTERNS if kind not in left_out)


def pattern(solution: Solution, kind: PatternKind, side: SideName = "left") -> Drawing:
    """A pattern in true mm, framed, with its title in it.

    Raises DrawingError, in a sentence, for a part that the car has not or that has no size.
    """
    layout = solution.layout
    if kind in ("front view", "one side"):
        sides: tuple[SideName, ...] = SIDES if kind == "front view" else (side,)
        drawing = _front(solution, sides)
    elif kind == "brackets":
        drawing = _brackets(layout, side)
    elif kind == "steering arm":
        drawing = _steering_arm(layout, side)
    else:
        drawing = _arm(layout, side, "lower" if kind == "lower arm" else "upper")
    frame = drawing.shown()
    mark = "" if kind == "front view" or layout.linked else f", {side}"
    title = f"{layout.title}: {PATTERNS[kind].lower()}{mark}, full size"
    size = 1.4 * LETTERING
    room = Text((0.0, 0.0), title, size, bold=True).width + 4.0
    # A small pattern still has to hold its own title.
    more = max(0.0, 0.5 * (room - frame.width))
    frame = Bounds(frame.left - more, frame.bottom - 12.0, frame.right + more, frame.top)
    words = Text((frame.left + 2.0, frame.bottom + 3.0), title, size, bold=True,
                 style=ink(layer="title"))
    return Drawing((*drawing.items, words), frame)


# --- the front view ---------------------------------------------------------------------


def _front(solution: Solution, sides: tuple[SideName, ...]) -> Drawing:
    """The car, or one side of it, with nails, strings, centerline and floor."""
    units = solution.layout.units
    if len(sides) == 2:
        frame = frame_for([solution], _AROUND)
    else:
        box = extent(solution, sides)
        frame = Bounds(min(box.left, 0.0), box.bottom, max(box.right, 0.0), box.top)
        frame = frame.padded(_AROUND)
    both = stands(solution)
    look = Look(fills=False, springs=False, grooves=False)
    items: list[Item] = [
        Line((frame.left, 0.0), (frame.right, 0.0), _FLOOR),
        Line((0.0, frame.bottom), (0.0, frame.top), CENTERLINE),
        *part_items(all_parts(solution, sides), look),
    ]
    for string in strings(solution, both):
        part = clipped(string.start, string.end, frame) if string.side in sides else None
        if part is not None:
            items.append(Line(part[:2], part[2:], signs.STRING_STYLES[string.kind]))
    holes = []
    for side in sides:
        for name, place in both[side].points.items():
            point = solution.layout.side(side)[name]
            over, up = (format_length(v, units) for v in (point.over, point.up))
            holes.append(_Hole(place, f"{name}: {over} over, {up} up"))
    items += _holes(holes, frame)
    return Drawing(tuple(items), frame)


def _holes(holes: list[_Hole], frame: Bounds) -> Iterator[Item]:
    """Center marks with their words, none over another."""
    area = Box(frame.left, frame.bottom, frame.width, frame.height).grown(-2.0)
    labels = []
    for number, hole in enumerate(holes):
        yield from center_mark(hole.at, 4.0, _MARK)
        width = Text((0.0, 0.0), hole.words, LETTERING).width + 3.0
        labels.append(Label(str(number), hole.at, width, 1.9 * LETTERING, 7.0))
    soft = [Box(*hole.at, 0.0, 0.0).grown(6.0) for hole in holes]
    for key, box in place_labels(labels, area, soft).items():
        hole = holes[int(key)]
        plate = Bounds(box.left, box.top, box.right, box.bottom)
        yield Polygon(plate.corners, style=Style(None, fill="#FFFFFF", layer="labels"))
        yield from signs.leader(box, hole.at, 6.0)
        at = (box.left + 1.5, box.top + 0.55 * LETTERING)
        yield Text(at, hole.words, LETTERING, style=ink(layer="labels"))


# --- parts ------------------------------------------------------------------------------


def _brackets(layout: Layout, side: SideName) -> Drawing:
    """The inner pivots of one side against the centerline and a level line at a round height."""
    own, units = layout.side(side), layout.units
    wanted = (
        names.LOWER_INNER, names.LOWER_INNER_FRONT, names.LOWER_INNER_REAR, names.UPPER_INNER,
        names.UPPER_INNER_FRONT, names.UPPER_INNER_REAR, names.TIE_INNER,
    )
    points = {name: own[name] for name in wanted if name in own.points}
    sign = sign_of(side)
    step = 25.4 if units == "in" else 50.0
    datum = math.floor((min(p.up for p in points.values()) - 20.0) / step) * step
    places = {name: (sign * p.over, p.up) for name, p in points.items()}
    box = Bounds.around([*places.values(), (0.0, datum)])
    frame = Bounds(box.left - _AROUND, box.bottom - 15.0, box.right + _AROUND, box.top + _AROUND)
    items: list[Item] = [
        Line((0.0, frame.bottom), (0.0, frame.top), CENTERLINE),
        Line((frame.left, datum), (frame.right, datum), _FLOOR),
    ]
    for x, y in places.values():
        items.append(Line((x, frame.bottom), (x, frame.top), _CENTER))
        items.append(Line((frame.left, y), (frame.right, y), _CENTER))
    holes = []
    for name, point in points.items():
        over, up, fore = (format_length(v, units) for v in point)
        holes.append(_Hole(places[name], f"{name}: {over} over, {up} up, {fore} fore"))
    level = format_length(datum, units, mark=True)
    line = "the floor line" if abs(datum) < 1e-6 else f"level, {level} up from the floor"
    holes_and_words = list(_holes(holes, frame))
    words = Text((frame.left + 3.0, datum - 1.5), line, LETTERING, v="top",
                 style=ink(layer="labels"))
    return Drawing((*items, *holes_and_words, words), frame)


def _arm(layout: Layout, side: SideName, arm: Literal["lower", "upper"]) -> Drawing:
    """An arm laid flat in its true shape: bushings, ball joint and the lines between them."""
    own = layout.side(side)
    ball_name = f"{arm} ball joint"
    if ball_name not in own.points or (arm == "upper" and own.is_strut):
        raise DrawingError(f"This side has no {arm} arm.")
    front, rear = own.arm_pivots(arm)
    flat = _flat(front, rear, own[ball_name])
    labels = {"ball": ball_name, "front": f"{arm} inner pivot", "rear": ""}
    if rear is not None:
        labels |= {"front": f"{arm} inner pivot front", "rear": f"{arm} inner pivot rear"}
    words = Wording(layout.units)
    pairs = [("front", "ball")] + ([("rear", "ball"), ("front", "rear")] if rear else [])
    frame = Bounds.around(flat.values()).padded(_AROUND)
    items: list[Item] = []
    for first, second in pairs:
        a, b = flat[first], flat[second]
        if math.dist(a, b) < 1.0:
            raise DrawingError(f"This {arm} arm has two pivots in one place.")
        if second == "ball":
            outline = tube(a, b, 16.0, 13.0)
            shape = tuple((float(x), float(y)) for x, y in outline)
            items.append(Polygon(shape, style=_GUIDE))
        items.append(_through(a, b))
        length = words.of(math.dist(a, b), "length")
        offset = -24.0 if (first, second) == ("rear", "ball") else 24.0
        items += dimension(a, b, length, offset, height=LETTERING).items
    holes = list(_holes([_Hole(flat[key], labels[key]) for key in flat], frame))
    return Drawing((*items, *holes), frame)


def _flat(front: Point, rear: Point | None, ball: Point) -> dict[str, Place]:
    """The arm's centers in its own plane, the ball joint to the right."""
    if rear is None:
        return {"front": (0.0, 0.0), "ball": (math.dist(front, ball), 0.0)}
    spread, to_front, to_rear = (
        math.dist(front, rear), math.dist(front, ball), math.dist(rear, ball),
    )
    if spread < 1.0:
        raise DrawingError("The front and the rear bushing of this arm stand in one place.")
    # Bushings on an upright line, the front one on top; the ball joint by its two lengths.
    down = (to_front**2 - to_rear**2 + spread**2) / (2.0 * spread)
    out = math.sqrt(max(to_front**2 - down**2, 0.0))
    return {"front": (0.0, 0.0), "rear": (0.0, -spread), "ball": (out, -down)}


def _through(a: Place, b: Place) -> Item:
    """A centerline through two centers and some way past them."""
    size = math.dist(a, b)
    dx, dy = (25.0 * (b[k] - a[k]) / size for k in (0, 1))
    return Line((a[0] - dx, a[1] - dy), (b[0] + dx, b[1] + dy), _CENTER)


def _steering_arm(layout: Layout, side: SideName) -> Drawing:
    """The steering arm seen from above at its end's height, the car's front downward."""
    own = layout.side(side)
    arm = arm_shape(own)
    if arm is None:
        raise DrawingError("A kingpin axis that lies level has no steering arm to draw.")
    if arm.length < 1.0:
        raise DrawingError("The tie-rod end stands on the kingpin axis: there is no arm to draw.")
    sign, words = sign_of(side), Wording(layout.units)

    def spot(point: Point) -> Place:
        return sign * point.over, -point.fore

    axis, end = spot(arm.kingpin), spot(arm.end)
    frame = Bounds.around([axis, end, *_plane(own, sign)]).padded(_AROUND + 15.0)
    shape = tuple((float(x), float(y)) for x, y in tube(axis, end, 18.0, 11.0))
    items: list[Item] = [
        Polygon(shape, style=_GUIDE),
        _through(axis, end),
        Line((axis[0], frame.bottom), (axis[0], frame.top), _CENTER),
        *dimension(axis, end, words.of(arm.length, "length"), 26.0, height=LETTERING).items,
    ]
    low, high = ((sign * own[names.WHEEL_CENTER].over, y) for y in (frame.bottom, frame.top))
    items.append(Line(low, high, Style(INK, 0.25, (6.0, 3.0), layer="wheel plane")))
    if frame.bottom < 0.0 < frame.top:
        items.append(Line((frame.left, 0.0), (frame.right, 0.0), CENTERLINE))
    items += _string_line(layout, axis, frame)
    height = format_length(arm.end.up, layout.units, mark=True)
    holes = [
        _Hole(axis, f"kingpin axis, {height} up"),
        _Hole(end, "tie rod outer"),
    ]
    front = Text((frame.left + 3.0, frame.bottom + 3.0), "front of the car ↓", LETTERING,
                 style=ink(layer="labels"))
    return Drawing((*items, *_holes(holes, frame), front), frame)


def _plane(own: Side, sign: float) -> list[Place]:
    return [(sign * own[names.WHEEL_CENTER].over, 0.0)]


def _string_line(layout: Layout, axis: Place, frame: Bounds) -> list[Item]:
    """The string from the kingpin axis to the middle of the rear axle, as far as it is shown."""
    if layout.wheelbase is None:
        return []
    way = (0.0 - axis[0], layout.wheelbase - axis[1])
    start = (axis[0] - way[0], axis[1] - way[1])
    part = clipped(start, (0.0, layout.wheelbase), frame)
    style = Style(signs.STRING_STYLES["tie"].stroke, 0.3, (4.0, 1.5), layer="strings")
    return [] if part is None else [Line(part[:2], part[2:], style)]
