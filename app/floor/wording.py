"""What the floor's tags and announcements say, in a builder's words."""

from __future__ import annotations

import math

from app.floor.nails import Key
from geometry.front_strings import InstantCenter
from geometry.layout import RELAY_POINTS, Layout, UnitName
from geometry.lengths import format_length
from geometry.solution import CornerState, Solution
from geometry.standing import XY, Standing
from geometry.tape import tape_text


def capital(words: str) -> str:
    return words[:1].upper() + words[1:]


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


def center_words(center: InstantCenter, stand: Standing, unit: UnitName) -> str:
    """How far off an instant center is, in its side's measures."""
    if center.at_infinity:
        return "none: the arms run parallel"
    over, up = stand.sign * center.place[0], center.place[1]
    if abs(over) > 25_000.0 or abs(up) > 25_000.0:
        far = math.hypot(over, up) / (304.8 if unit == "in" else 1000.0)
        return f"{far:,.0f} {'ft' if unit == 'in' else 'm'} off"
    return f"{format_length(over, unit)} over · {format_length(up, unit)} up"


def roll_words(solution: Solution, unit: UnitName) -> str:
    if solution.roll_center is None:
        return "none: the contact lines run parallel"
    over, up = solution.roll_center
    text = f"{format_length(up, unit)} up"
    if abs(over) > 0.5:
        side = "left" if over > 0 else "right"
        text += f" · {format_length(abs(over), unit)} {side}"
    return text


def reach_words(state: CornerState, travel: float, unit: UnitName) -> str:
    """Why a side is only outlined: where its travel stops."""
    droop, bump = state.stops
    if math.isfinite(bump) and travel > bump and bump >= 0.0:
        return f"can't reach here: stops at {format_length(bump, unit, mark=True)} in bump"
    if math.isfinite(droop) and travel < droop and droop <= 0.0:
        return f"can't reach here: stops at {format_length(-droop, unit, mark=True)} in droop"
    if not bool(state.ride.assembles[0]):
        return "does not go together as measured"
    return "can't reach here with the steering turned this far"


def measured_words(start: XY, end: XY, unit: UnitName) -> str:
    """What the measuring tape reads between two places."""
    dx, dy = end[0] - start[0], end[1] - start[1]
    rise = "down" if dy < 0.0 else "up"
    angle = math.degrees(math.atan2(abs(dy), abs(dx)))
    return f"{tape_text(abs(dx), unit)} over · {tape_text(abs(dy), unit)} {rise} · {angle:.1f}°"


def distance_words(start: XY, end: XY, unit: UnitName) -> str:
    return format_length(math.dist(start, end), unit, 16 if unit == "in" else 1, mark=True)


def place_words_rounded(over: float, up: float, unit: UnitName) -> str:
    """A computed place, rounded to a 16th or a tenth of a millimeter."""
    return f"{format_length(over, unit)} over · {format_length(up, unit)} up"
