"""A car's front view as plain line art for paper: white ground, thin lines, few tints.

Shapes are drawn in true size and scaled to paper; line widths and lettering are sizes on
paper. Places are (x, y) as in ``geometry.standing``: the car's left is to the right.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass

import numpy as np

from geometry import floor_signs as signs
from geometry import layout as names
from geometry.bounds import Bounds, Place
from geometry.drawing import Circle, Drawing, Item, Line, Polygon, Polyline, Style, Text
from geometry.front_parts import ROLES, Part, Role, car_parts, side_parts
from geometry.front_strings import instant_center, strings
from geometry.labels import Box, Label, place_labels
from geometry.layout import SIDES, SideName
from geometry.shapes import clipped
from geometry.sheets.look import CENTERLINE, GROUND, INK, SMALL, ink
from geometry.solution import Solution
from geometry.standing import XY, Standing, relay_standing, standing

SCALES = (1, 2, 3, 4, 5, 6, 8, 10, 12, 15, 16, 20, 24, 25, 30, 40, 50, 75, 100, 200, 500, 1000)
"""Round scales that a picture may have."""

FARTHEST = 20_000.0
"""A part that is drawn farther off than this, mm, is left out: it is a slip of measuring."""

_EDGE = "#3A3F44"
_LAYERS: dict[Role, str] = {
    "tire": "tires", "groove": "tires", "window": "wheels", "rim": "wheels", "hub": "wheels",
    "spring": "springs", "strut": "struts", "rod": "struts", "rack": "rack",
    "rack light": "rack", "bellows": "rack", "clamp": "brackets", "relay": "relay rod",
    "relay light": "relay rod", "tie": "tie rods", "tie light": "tie rods", "arm": "arms",
    "arm light": "arms", "knuckle": "knuckles", "knuckle light": "knuckles", "eye": "arms",
    "bush": "arms", "joint": "joints",
}
_FILLS: dict[Role, str] = {
    "tire": "#E4E2DD", "window": "#FFFFFF", "hub": "#F3F2EF", "strut": "#E9E9E7",
    "rod": "#FFFFFF", "rack": "#EFECE6", "bellows": "#DAD7D1", "clamp": "#D2D0CC",
    "relay": "#EFECE6", "tie": "#DFEAE4", "arm": "#DCE3EA", "knuckle": "#EDEAF0",
    "knuckle light": "#FFFFFF", "eye": "#FFFFFF", "bush": "#FFFFFF", "joint": "#FFFFFF",
}
_SHEEN = frozenset({"rack light", "relay light", "tie light", "arm light"})


@dataclass(frozen=True)
class Look:
    """How much of a car is drawn. ``fills`` False leaves bare outlines, for cutting."""

    fills: bool = True
    springs: bool = True
    grooves: bool = True


def part_items(parts: Iterable[Part], look: Look) -> Iterator[Item]:
    """Parts from the back to the front, in true size."""
    for part in sorted(parts, key=lambda p: ROLES.index(p.role)):
        if part.role in _SHEEN or (part.role == "spring" and not look.springs):
            continue
        if part.role == "groove" and not look.grooves:
            continue
        if float(np.abs(part.outline).max()) > FARTHEST:
            continue
        places = tuple((float(x), float(y)) for x, y in part.outline)
        layer = _LAYERS[part.role]
        fill = _FILLS.get(part.role) if look.fills else None
        style = Style(_EDGE, 0.2, fill=fill, layer=layer)
        if part.closed:
            yield Polygon(places, style=style)
        else:
            yield Polyline(places, style=Style(_EDGE, 0.2, layer=layer))


def all_parts(solution: Solution, sides: tuple[SideName, ...] = SIDES) -> list[Part]:
    """The parts of the chosen sides, and the steering if both are drawn."""
    both = stands(solution)
    parts = [part for side in sides for part in side_parts(both[side])]
    return parts + car_parts(solution, both) if len(sides) == 2 else parts


def stands(solution: Solution) -> dict[SideName, Standing]:
    return {side: standing(solution, side) for side in SIDES}


def extent(solution: Solution, sides: tuple[SideName, ...] = SIDES) -> Bounds:
    """What the parts of a car take up in the front view, mm, nails and floor included."""
    places = [place for part in all_parts(solution, sides) for place in part.outline]
    both = stands(solution)
    places += [np.array(p) for side in sides for p in both[side].points.values()]
    places += [np.array(p) for p in relay_standing(solution).values() if len(sides) == 2]
    near = np.array([p for p in places if float(np.abs(p).max()) < FARTHEST] or [(0.0, 0.0)])
    low, high = near.min(axis=0), near.max(axis=0)
    return Bounds(
        float(low[0]), min(float(low[1]), 0.0), float(high[0]), max(float(high[1]), 1.0)
    )


def frame_for(solutions: Iterable[Solution], around: float = 40.0) -> Bounds:
    """One frame about the centerline that holds every car, ``around`` mm larger than they."""
    boxes = [extent(solution) for solution in solutions]
    out = max(max(-box.left, box.right) for box in boxes) + around
    low = min(box.bottom for box in boxes) - around
    return Bounds(-out, low, out, max(box.top for box in boxes) + around)


def scale_for(frame: Bounds, width: float, height: float) -> float:
    """The largest round scale (its 1 : n) at which a frame fits the paper."""
    need = max(frame.width / width, frame.height / height)
    return float(next((scale for scale in SCALES if scale >= need), SCALES[-1]))


def front_art(
    solution: Solution,
    frame: Bounds,
    scale: float,
    *,
    look: Look | None = None,
    labels: Iterable[tuple[str, XY]] = (),
    with_strings: bool = True,
) -> Drawing:
    """The front view of a car in its pose, in paper mm with the centerline's foot at (0, 0).

    ``frame`` is the part of the floor that is shown, mm; ``labels`` are words for places.
    Sides whose parts can't meet stand as measured, and a label says so.
    """
    both = stands(solution)
    true = Drawing(tuple(part_items(all_parts(solution), look or Look())))
    lines = list(_strings(solution, both, frame)) if with_strings else []
    paper = Bounds(*(value / scale for value in frame))
    items: list[Item] = [
        Line((paper.left, 0.0), (paper.right, 0.0), GROUND),
        *true.scaled(1.0 / scale).items,
        Line((0.0, paper.bottom), (0.0, paper.top), CENTERLINE),
        *Drawing(tuple(lines)).scaled(1.0 / scale).items,
    ]
    items += _signs(solution, both, frame, scale)
    words = [*labels, *_broken(both)]
    items += _labels(words, paper, scale, _marks(both, scale))
    return Drawing(tuple(items), paper)


def _broken(both: dict[SideName, Standing]) -> Iterator[tuple[str, XY]]:
    for side, stand in both.items():
        if not stand.meets:
            yield f"{side} side: the parts can't meet here", stand.points[names.WHEEL_CENTER]


def _strings(
    solution: Solution, both: dict[SideName, Standing], frame: Bounds
) -> Iterator[Item]:
    for string in strings(solution, both):
        part = clipped(string.start, string.end, frame)
        if part is not None:
            yield Line(part[:2], part[2:], signs.STRING_STYLES[string.kind])


def _signs(
    solution: Solution, both: dict[SideName, Standing], frame: Bounds, scale: float
) -> Iterator[Item]:
    """Nails as small rings, instant centers and the roll center, where they are shown."""
    for stand in both.values():
        for x, y in stand.points.values():
            if holds(frame, (x, y)):
                style = Style(INK, 0.2, fill="#FFFFFF", layer="nails")
                yield Circle((x / scale, y / scale), 0.55, style)
    if not solution.assembles:
        return
    for side in SIDES:
        center = instant_center(solution, side)
        if center is not None and not center.at_infinity and holds(frame, center.place):
            yield from signs.plumb_bob(_down(center.place, scale))
    roll = solution.roll_center_place
    if roll is not None and holds(frame, roll):
        yield from signs.ring_on_bar(_down(roll, scale))


def _marks(both: dict[SideName, Standing], scale: float) -> list[Box]:
    return [
        Box(x / scale, y / scale, 0.0, 0.0).grown(1.2)
        for stand in both.values()
        for x, y in stand.points.values()
    ]


def _labels(
    words: Iterable[tuple[str, XY]], paper: Bounds, scale: float, soft: list[Box]
) -> Iterator[Item]:
    """Words beside their places on plates of white, with a thin line where they stand off."""
    area = Box(paper.left, paper.bottom, paper.width, paper.height).grown(-0.5)
    listed = list(words)
    labels = [
        Label(str(k), _down(at, scale), *plate_size(text), 2.4) for k, (text, at) in
        enumerate(listed)
    ]
    for key, box in place_labels(labels, area, soft).items():
        text, at = listed[int(key)]
        yield from signs.leader(box, _down(at, scale), 2.0)
        yield from plate(box, text)


def plate_size(text: str) -> tuple[float, float]:
    """Width and height of a label's plate, mm."""
    return Text((0.0, 0.0), text, SMALL).width + 1.6, SMALL * 1.3 + 1.2


def plate(box: Box, text: str) -> Iterator[Item]:
    """A label on white; the box counts y upward from its ``top``."""
    bounds = Bounds(box.left, box.top, box.right, box.bottom)
    yield Polygon(bounds.corners, style=Style(None, fill="#FFFFFF", layer="labels"))
    at = (box.left + 0.8, box.top + 0.6 + 0.3 * SMALL)
    yield Text(at, text, SMALL, style=ink(layer="labels"))


def holds(frame: Bounds, at: XY) -> bool:
    return frame.left <= at[0] <= frame.right and frame.bottom <= at[1] <= frame.top


def _down(at: XY, scale: float) -> Place:
    return at[0] / scale, at[1] / scale
