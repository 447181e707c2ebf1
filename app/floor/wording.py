"""What nails and the measuring tape say, on tags and to a screen reader."""

from __future__ import annotations

import math

from app.floor.nails import Key
from geometry.faces import FRONT, Face
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


def nail_words(layout: Layout, key: Key, face: Face = FRONT) -> str:
    """Where a nail is measured, at ride height, by the two measures of a floor."""
    point, unit = layout.point(*key), layout.units
    return place_words((point.over, face.measure(point)), unit, face)


def place_words(measures: XY, unit: UnitName, face: Face = FRONT) -> str:
    """A place by the two measures of a floor, mm."""
    over, second = measures
    return f"{tape_text(over, unit)} over · {tape_text(second, unit)} {face.second}"


def spoken(layout: Layout, key: Key, face: Face = FRONT) -> str:
    """The same for a screen reader."""
    point = layout.point(*key)
    unit = "inches" if layout.units == "in" else "millimeters"
    locked = ", locked" if key[1] in layout.locked else ""
    return (
        f"{nail_name(layout, key)}: {tape_text(point.over, layout.units)} over, "
        f"{tape_text(face.measure(point), layout.units)} {face.second}, {unit}{locked}"
    )


def measured_words(start: XY, end: XY, unit: UnitName, face: Face = FRONT) -> str:
    """What the measuring tape reads between two places."""
    dx, dy = end[0] - start[0], face.way * (end[1] - start[1])
    words = ("down", "up") if face.second == "up" else ("to the rear", "to the front")
    rise = words[dy >= 0.0]
    angle = math.degrees(math.atan2(abs(dy), abs(dx)))
    return f"{tape_text(abs(dx), unit)} over · {tape_text(abs(dy), unit)} {rise} · {angle:.1f}°"


def distance_words(start: XY, end: XY, unit: UnitName) -> str:
    return format_length(math.dist(start, end), unit, 16 if unit == "in" else 1, mark=True)
