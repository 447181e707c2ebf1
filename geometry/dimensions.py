"""Dimension lines, leaders, center marks and check bars for drawings that are built from.

The label is given by the caller, since only the caller knows the unit and the scale. All
sizes are paper sizes in mm: scale the part's drawing first, then dimension it.
"""

from __future__ import annotations

import cmath
import math
from dataclasses import replace
from typing import Literal

from geometry.drawing import (
    Arc,
    Circle,
    Drawing,
    DrawingError,
    Horizontal,
    Item,
    Line,
    Place,
    Polyline,
    Style,
    Text,
)

DIMENSION = Style(stroke="#303030", width=0.18, layer="dimensions")
ARROW_LENGTH = 2.5
"""mm; common drafting practice, no source."""
ARROW_WIDTH = 0.8
GAP = 1.0
"""From the measured point to the extension line, mm."""
OVERSHOOT = 1.5
"""How far an extension line passes its dimension line, mm."""


def arrow_head(tip: Place, direction: float, style: Style = DIMENSION) -> Polyline:
    """A filled arrow head with its tip at a place, pointing in ``direction``, radians."""
    x, y = tip
    turn = cmath.rect(1, direction)
    back = [turn * complex(-ARROW_LENGTH, side * ARROW_WIDTH / 2) for side in (1, -1)]
    points = (tip, *((x + b.real, y + b.imag) for b in back))
    filled = Style(None, style.width, (), style.stroke, style.layer)
    return Polyline(points, True, filled)


def dimension(
    start: Place,
    end: Place,
    label: str,
    offset: float = 8.0,
    along: Literal["points", "across", "up"] = "points",
    height: float = 2.5,
    style: Style = DIMENSION,
) -> Drawing:
    """A dimension between two places, its line ``offset`` mm away from ``start``.

    ``along`` measures straight between the places, across (level) or up (plumb). The line
    stands to the left of the way from start to end, or to its right if ``offset`` is
    negative; across it stands above, up to the right. The label reads from the bottom or
    the right; where it and the arrows don't fit between, they stand outside. Raises
    DrawingError where the two places coincide in the measured direction.
    """
    a, b = complex(*start), complex(*end)
    way, away = _directions(a, b, along)
    span = ((b - a) * way.conjugate()).real
    if abs(span) < 1e-9:
        raise DrawingError(f"There is no length to dimension for '{label}'.")
    foot_a = a + away * offset
    foot_b = foot_a + way * span
    items: list[Item] = []
    for point, foot in ((a, foot_a), (b, foot_b)):
        items += _extension(point, foot, away, style)
    items += _arrows_and_label(foot_a, foot_b, label, height, style)
    return Drawing(tuple(items))


def _directions(a: complex, b: complex, along: str) -> tuple[complex, complex]:
    """Unit vectors along the measured length and from the points to the dimension line."""
    if along == "across":
        return 1 + 0j, 1j
    if along == "up":
        return 1j, 1 + 0j
    length = abs(b - a)
    way = (b - a) / length if length else 1 + 0j
    return way, 1j * way


def _extension(point: complex, foot: complex, away: complex, style: Style) -> list[Item]:
    """The line from a measured point to just past the dimension line; none if too short."""
    reach = ((foot - point) * away.conjugate()).real
    if abs(reach) <= GAP:
        return []
    out = away * math.copysign(1.0, reach)
    return [Line(_place(point + out * GAP), _place(foot + out * OVERSHOOT), style)]


def _arrows_and_label(
    a: complex, b: complex, label: str, height: float, style: Style
) -> list[Item]:
    """The dimension line itself, its arrow heads and its label, inside if they fit."""
    if _reads_backward(cmath.phase(b - a)):
        a, b = b, a
    way = (b - a) / abs(b - a)
    angle = cmath.phase(way)
    ink = Style(style.stroke, layer=style.layer)
    above = _place((a + b) / 2 + 1j * way * GAP)
    text = Text(above, label, height, "center", "bottom", angle=angle, style=ink)
    room = abs(b - a)
    inside = room >= 3 * ARROW_LENGTH
    if inside:
        line = [Line(_place(a), _place(b), style)]
        heads = [arrow_head(_place(a), angle + math.pi, style), arrow_head(_place(b), angle, style)]
    else:
        tail = way * 2 * ARROW_LENGTH
        line = [Line(_place(a - tail), _place(b + tail), style)]
        heads = [arrow_head(_place(a), angle, style), arrow_head(_place(b), angle + math.pi, style)]
    if text.width > room - (2 * GAP if inside else 0):
        start = b + way * (GAP if inside else 2 * ARROW_LENGTH + GAP)
        text = Text(_place(start), label, height, "left", "middle", angle=angle, style=ink)
    return [*line, *heads, text]


def angle_dimension(
    center: Place,
    radius: float,
    start: float,
    end: float,
    label: str,
    height: float = 2.5,
    style: Style = DIMENSION,
) -> Drawing:
    """An arc with arrow heads from angle ``start`` counterclockwise to ``end``, labeled outside."""
    arc = Arc(center, radius, start, end, style)
    finish = start + arc.sweep
    middle = start + arc.sweep / 2
    outward = 1.0
    if arc.sweep * radius < 3 * ARROW_LENGTH:
        outward = -1.0
        tail = min(2 * ARROW_LENGTH / radius, math.pi / 2)
        arc = Arc(center, radius, start - tail, finish + tail, style)
    # A head lies along the chord of its own length, so that it follows the arc.
    lean = min(ARROW_LENGTH / (2 * radius), 0.5)
    heads = (
        arrow_head(arc.at(start), start - outward * (math.pi / 2 - lean), style),
        arrow_head(arc.at(finish), finish + outward * (math.pi / 2 - lean), style),
    )
    ink = Style(style.stroke, layer=style.layer)
    text = Text(center, label, height, "center", "middle", style=ink)
    # The tangent at the middle then keeps the label's whole box off the arc.
    half_box = abs(math.cos(middle)) * text.width / 2 + abs(math.sin(middle)) * height / 2
    away = cmath.rect(radius + 1.5 * GAP + half_box, middle)
    text = replace(text, at=(center[0] + away.real, center[1] + away.imag))
    return Drawing((arc, *heads, text))


def leader(
    tip: Place, elbow: Place, label: str, height: float = 2.5, style: Style = DIMENSION
) -> Drawing:
    """An arrow to ``tip`` from a label that stands level beside ``elbow``, away from the tip."""
    side = 1.0 if elbow[0] >= tip[0] else -1.0
    shelf = (elbow[0] + side * 2 * GAP, elbow[1])
    line = Polyline((tip, elbow, shelf), False, style)
    h: Horizontal = "left" if side > 0 else "right"
    ink = Style(style.stroke, layer=style.layer)
    text = Text((shelf[0] + side * GAP, shelf[1]), label, height, h, "middle", style=ink)
    way = complex(*tip) - complex(*elbow)
    if abs(way) < 1e-9:
        return Drawing((line, text))
    return Drawing((line, arrow_head(tip, cmath.phase(way), style), text))


def center_mark(at: Place, radius: float = 2.5, style: Style = DIMENSION) -> Drawing:
    """A hole's center: a circle and a cross that passes it by half its radius."""
    x, y = at
    reach = 1.5 * radius
    return Drawing(
        (
            Circle(at, radius, style),
            Line((x - reach, y), (x + reach, y), style),
            Line((x, y - reach), (x, y + reach), style),
        )
    )


def check_bar(
    at: Place, length: float, label: str, height: float = 2.5, style: Style = DIMENSION
) -> Drawing:
    """A level bar of a known length, mm, from its left end; measured to prove a print's scale."""
    x, y = at
    ends = (x, x + length)
    ticks = [Line((end, y - 1.5), (end, y + 1.5), style) for end in ends]
    ink = Style(style.stroke, layer=style.layer)
    text = Text((x + length / 2, y + 2.0), label, height, "center", "bottom", style=ink)
    return Drawing((Line((x, y), (x + length, y), style), *ticks, text))


def _reads_backward(angle: float) -> bool:
    """True for a direction in which a label would stand on its head."""
    return not -math.pi / 2 + 1e-9 < angle <= math.pi / 2 + 1e-9


def _place(z: complex) -> Place:
    return z.real, z.imag
