"""One side of a car from the front and from above with every nail's distances, to scale."""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass

from geometry import layout as names
from geometry.bounds import Bounds, Place
from geometry.dimensions import dimension
from geometry.drawing import (
    Circle,
    Drawing,
    DrawingError,
    Item,
    Line,
    Polygon,
    Polyline,
    Style,
    Text,
)
from geometry.finding_checks.wording import Wording
from geometry.front_parts import side_parts
from geometry.layout import Point, SideName
from geometry.lengths import format_length
from geometry.shapes import circle, clipped, tube
from geometry.sheets.car_art import SCALES, Look, part_items
from geometry.sheets.look import CENTERLINE, GROUND, HAIR, INK, SMALL, SOFT, ink
from geometry.sheets.nails import Nail
from geometry.sheets.ordinates import Ordinate, below, beside
from geometry.solution import Solution
from geometry.standing import sign_of, standing
from geometry.steering_arm import kingpin_at

_EDGE = 28.0
"""Room for the words beside a drawing, mm."""
_UNDER = 25.0
"""Room for the words below it."""
_ABOVE = 4.0


@dataclass(frozen=True)
class SideSheet:
    """How one side is laid on paper: scale 1 : ``scale``, x mirrored for the right side."""

    side: SideName
    scale: float

    def place(self, over: float, second: float) -> Place:
        return sign_of(self.side) * over / self.scale, second / self.scale


def side_scale(solution: Solution, side: SideName, width: float, height: float) -> float:
    """A round scale at which one side, from the centerline out, fits the paper."""
    box = _reach(solution, side)
    need = max(box.width / (width - 2 * _EDGE), box.height / (height - _UNDER - _ABOVE))
    return float(next((scale for scale in SCALES if scale >= need), SCALES[-1]))


def _reach(solution: Solution, side: SideName) -> Bounds:
    """What one side takes up: its own over and up, mm, the centerline and floor included."""
    stand = standing(solution, side)
    places = [(0.0, 0.0), (0.0, 1.0), (1.0, 0.0)]
    places += [(stand.sign * float(x), float(y)) for part in side_parts(stand)
               for x, y in part.outline]
    places += [(stand.sign * x, y) for x, y in stand.points.values()]
    box = Bounds.around([p for p in places if abs(p[0]) < 5000 and abs(p[1]) < 5000])
    return Bounds(box.left, box.bottom, box.right, box.top)


def front_dimensions(
    solution: Solution, side: SideName, nails: Sequence[Nail], scale: float
) -> Drawing:
    """One side from the front: over and up of every nail, and the lengths between pivots."""
    sheet = SideSheet(side, scale)
    box = _reach(solution, side)
    stand = standing(solution, side)
    true = Drawing(tuple(part_items(side_parts(stand), Look(springs=False, grooves=False))))
    area = Bounds.around([sheet.place(box.left, box.bottom), sheet.place(box.right, box.top)])
    items: list[Item] = [
        Line((area.left - 6.0, 0.0), (area.right + 6.0, 0.0), GROUND),
        *true.scaled(1.0 / scale).items,
        Line((0.0, area.bottom - 2.0), (0.0, area.top + 3.0), CENTERLINE),
    ]
    units = solution.layout.units
    places = {nail.letter: sheet.place(nail.place.over, nail.place.up) for nail in nails}
    middle = area.center[0]
    overs = [Ordinate(places[n.letter], f"{n.letter}  {format_length(n.place.over, units)}")
             for n in nails]
    ups = [Ordinate(places[n.letter], f"{n.letter}  {format_length(n.place.up, units)}")
           for n in nails]
    items += below(overs, area.bottom - 8.0)
    items += beside([o for o in ups if o.at[0] < middle], area.left - 10.0, True)
    items += beside([o for o in ups if o.at[0] >= middle], area.right + 10.0, False)
    items += _letters(places)
    items += _lengths(solution, side, sheet, items)
    frame = Bounds(
        area.left - _EDGE, area.bottom - _UNDER, area.right + _EDGE, area.top + _ABOVE
    )
    return Drawing(tuple(items), _with_words(frame, items))


def _with_words(frame: Bounds, items: Sequence[Item]) -> Bounds:
    """A frame grown to hold every word in it."""
    for item in items:
        if isinstance(item, Text):
            frame = frame.joined(item.bounds.padded(0.5))
    return frame


def _letters(places: dict[str, Place]) -> Iterator[Item]:
    """A letter on a small white disc at every nail; nails too near to tell apart share one."""
    for at, letters in _together(places):
        words = Text(at, " ".join(letters), 1.7, "center", "middle", bold=True,
                     style=ink(layer="nails"))
        white = Style(INK, 0.18, fill="#FFFFFF", layer="nails")
        if len(letters) == 1:
            yield Circle(at, 1.75, white)
        else:
            yield Polygon(words.bounds.padded(0.5).corners, style=white)
        yield words


def _together(places: dict[str, Place]) -> list[tuple[Place, list[str]]]:
    """Letters by the place they stand at, those whose words would touch in one group."""
    groups = [(place, [letter]) for letter, place in places.items()]
    while True:
        boxes = [
            Text(at, " ".join(letters), 1.7, "center", "middle", bold=True).bounds.padded(0.1)
            for at, letters in groups
        ]
        pair = next(
            ((i, k) for k in range(len(boxes)) for i in range(k) if _overlap(boxes[i], boxes[k])),
            None,
        )
        if pair is None:
            return groups
        first, second = pair
        groups[first][1].extend(groups[second][1])
        del groups[second]


_PAIRS = (
    (names.LOWER_INNER, names.LOWER_BALL),
    (names.UPPER_INNER, names.UPPER_BALL),
    (names.TIE_INNER, names.TIE_OUTER),
    (names.LOWER_BALL, names.UPPER_BALL),
)


def _lengths(
    solution: Solution, side: SideName, sheet: SideSheet, before: list[Item]
) -> Iterator[Item]:
    """True pivot-to-pivot lengths, each set where its words are clear of all others."""
    words = Wording(solution.layout.units)
    points = solution.layout.side(side).points
    taken = [item.bounds.padded(0.4) for item in before if isinstance(item, Text)]
    for first, second in _PAIRS:
        if first not in points or second not in points:
            continue
        a, b = points[first], points[second]
        length = math.dist(a, b)
        start, end = sheet.place(a.over, a.up), sheet.place(b.over, b.up)
        for offset in (6.0, -6.0, 9.0, -9.0, 12.0, -12.0, 16.0, -16.0):
            try:
                drawn = dimension(start, end, words.of(length, "length"), offset, height=SMALL)
            except DrawingError:
                break
            text = next(item for item in drawn if isinstance(item, Text))
            box = text.bounds
            if not any(_overlap(box, other) for other in taken):
                yield Polygon(_text_plate(text), style=Style(None, fill="#FFFFFF", layer="labels"))
                yield from drawn.items
                taken.append(box.padded(0.4))
                break


def _text_plate(text: Text) -> tuple[Place, ...]:
    """The corners of a turned text's own box."""
    level = Text((0.0, 0.0), text.text, text.height, text.h, text.v).bounds.padded(0.2)
    cos, sin = math.cos(text.angle), math.sin(text.angle)
    return tuple(
        (text.at[0] + x * cos - y * sin, text.at[1] + x * sin + y * cos) for x, y in level.corners
    )


def _overlap(a: Bounds, b: Bounds) -> bool:
    return a.left < b.right and b.left < a.right and a.bottom < b.top and b.bottom < a.top


def above_dimensions(
    solution: Solution, side: SideName, nails: Sequence[Nail], scale: float
) -> Drawing:
    """One side from above, the car's front downward, with every nail's fore of the axle line."""
    sheet = SideSheet(side, scale)
    across = _reach(solution, side)
    fores = [-nail.place.fore for nail in nails] + [0.0]
    around = 55.0
    low, high = min(fores) - around, max(fores) + around
    area = Bounds.around([sheet.place(across.left, low), sheet.place(across.right, high)])
    own = solution.layout.side(side)
    items: list[Item] = [
        Line((area.left - 6.0, 0.0), (area.right + 6.0, 0.0), CENTERLINE),
        Line((0.0, area.bottom - 2.0), (0.0, area.top + 2.0), CENTERLINE),
        *_tire(sheet, own.tire.radius, own.tire.width, own[names.WHEEL_CENTER],
               own.static_toe, area),
        *_plan_parts(sheet, own.points, kingpin_at(own, own[names.TIE_OUTER].up)),
    ]
    units = solution.layout.units
    places = {n.letter: sheet.place(n.place.over, -n.place.fore) for n in nails}
    ordinates = [Ordinate(places[n.letter], f"{n.letter}  {format_length(n.place.fore, units)}")
                 for n in nails]
    middle = area.center[0]
    items += beside([o for o in ordinates if o.at[0] < middle], area.left - 10.0, True)
    items += beside([o for o in ordinates if o.at[0] >= middle], area.right + 10.0, False)
    items += _letters(places)
    at = (area.left - _EDGE, area.bottom - 4.0)
    note = Text(at, "front of the car ↓", SMALL, style=ink(SOFT))
    frame = Bounds(area.left - _EDGE, area.bottom - 6.0, area.right + _EDGE, area.top + 4.0)
    return Drawing((*items, note), _with_words(frame, items))


def _tire(
    sheet: SideSheet, radius: float, width: float, center: Point, toe: float, area: Bounds
) -> Iterator[Item]:
    """The tire's outline from above at its static toe, as far as it is shown."""
    out, ahead = sheet.place(center.over, -center.fore)
    lean = -toe * sign_of(sheet.side)
    half_w, half_l = 0.5 * width / sheet.scale, radius / sheet.scale
    corners = [
        (out + x * math.cos(lean) - y * math.sin(lean), ahead + x * math.sin(lean)
         + y * math.cos(lean))
        for x, y in ((half_w, half_l), (-half_w, half_l), (-half_w, -half_l), (half_w, -half_l))
    ]
    for a, b in zip(corners, [*corners[1:], corners[0]], strict=True):
        part = clipped(a, b, area)
        if part is not None:
            yield Line(part[:2], part[2:], Style("#3A3F44", 0.2, layer="tires"))


def _plan_parts(
    sheet: SideSheet, own: Mapping[str, Point], kingpin: Point | None
) -> Iterator[Item]:
    """Arms, tie rod and steering arm from above."""

    def spot(point: Point) -> Place:
        return sheet.place(point.over, -point.fore)

    def bar(a: Point, b: Point, size: float, fill: str, layer: str) -> Item:
        outline = tube(spot(a), spot(b), size / sheet.scale)
        return Polygon(tuple((float(x), float(y)) for x, y in outline),
                       style=Style("#3A3F44", 0.2, fill=fill, layer=layer))

    for arm, fill in (("lower", "#DCE3EA"), ("upper", "#F0F3F6")):
        ball = own.get(f"{arm} ball joint")
        inner = [own[n] for n in (f"{arm} inner pivot", f"{arm} inner pivot front",
                                  f"{arm} inner pivot rear") if n in own]
        for pivot in inner:
            if ball is not None:
                yield bar(pivot, ball, 11.0, fill, "arms")
        if len(inner) == 2:
            yield Polyline((spot(inner[0]), spot(inner[1])), style=HAIR)
    yield bar(own[names.TIE_INNER], own[names.TIE_OUTER], 8.0, "#DFEAE4", "tie rods")
    if kingpin is not None:
        yield bar(kingpin, own[names.TIE_OUTER], 9.0, "#EDEAF0", "knuckles")
        at = spot(kingpin)
        ring = circle(at, 14.0 / sheet.scale)
        yield Polygon(tuple((float(x), float(y)) for x, y in ring),
                      style=Style("#3A3F44", 0.2, fill="#FFFFFF", layer="knuckles"))
