"""What nails and the measuring tape say, on tags and to a screen reader."""

from __future__ import annotations

import math

from app.floor.nails import Key
from geometry.floor_words import capital
from geometry.layout import RELAY_POINTS, Layout, UnitName
from geometry.lengths import format_length
from geometry.standing import XY
from geometry.tape import tape_text


def nail_name(layout: Layout, key: Key) -> str:
    """A nail's name, with its side where the two sides differ."""
    side, name = key
    if layout.linked or name in RELAY_POINTS:
        return capital(name)
    return f"{capital(side)} {name}"


def place_words(over: float, up: float, unit: UnitName) -> str:
    return f"{tape_text(over, unit)} over · {tape_text(up, unit)} up"


def nail_words(layout: Layout, key: Key) -> str:
    """Where a nail is measured, at ride height."""
    point = layout.point(*key)
    return place_words(point.over, point.up, layout.units)


def spoken(layout: Layout, key: Key) -> str:
    """The same for a screen reader."""
    point = layout.point(*key)
    unit = "inches" if layout.units == "in" else "millimeters"
    locked = ", locked" if key[1] in layout.locked else ""
    return (
        f"{nail_name(layout, key)}: {tape_text(point.over, layout.units)} over, "
        f"{tape_text(point.up, layout.units)} up, {unit}{locked}"
    )


def measured_words(start: XY, end: XY, unit: UnitName) -> str:
    """What the measuring tape reads between two places."""
    dx, dy = end[0] - start[0], end[1] - start[1]
    rise = "down" if dy < 0.0 else "up"
    angle = math.degrees(math.atan2(abs(dy), abs(dx)))
    return f"{tape_text(abs(dx), unit)} over · {tape_text(abs(dy), unit)} {rise} · {angle:.1f}°"


def distance_words(start: XY, end: XY, unit: UnitName) -> str:
    return format_length(math.dist(start, end), unit, 16 if unit == "in" else 1, mark=True)
