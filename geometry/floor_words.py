"""What the floor says about its points, in a builder's words, on the screen and on paper."""

from __future__ import annotations

import math

from geometry.front_strings import InstantCenter
from geometry.layout import UnitName
from geometry.lengths import format_length
from geometry.solution import CornerState, Solution
from geometry.standing import Standing

_FAR = 25_000.0


def capital(words: str) -> str:
    """The words with their first letter large."""
    return words[:1].upper() + words[1:]


def center_words(center: InstantCenter, stand: Standing, unit: UnitName) -> str:
    """How far off an instant center is, in its side's measures."""
    if center.at_infinity:
        return "none: the arms run parallel"
    over, up = stand.sign * center.place[0], center.place[1]
    if abs(over) > _FAR or abs(up) > _FAR:
        far = math.hypot(over, up) / (304.8 if unit == "in" else 1000.0)
        return f"{far:,.0f} {'ft' if unit == 'in' else 'm'} off"
    return f"{format_length(over, unit)} over · {format_length(up, unit)} up"


def roll_words(solution: Solution, unit: UnitName) -> str:
    """Where the roll center stands above the tires' floor."""
    if solution.roll_center is None:
        return "none: the contact lines run parallel"
    over, up = solution.roll_center
    text = f"{format_length(up, unit)} up"
    if abs(over) > 0.5:
        side = "left" if over > 0 else "right"
        text += f" · {format_length(abs(over), unit)} {side}"
    return text


def place_words(over: float, up: float, unit: UnitName) -> str:
    """A computed place, rounded to a 16th or a tenth of a millimeter."""
    return f"{format_length(over, unit)} over · {format_length(up, unit)} up"


def reach_words(state: CornerState, travel: float, unit: UnitName) -> str:
    """Why a side is only outlined: where its travel stops."""
    droop, bump = state.stops
    if math.isfinite(bump) and travel > bump >= 0.0:
        return f"can't reach here: stops at {format_length(bump, unit, mark=True)} in bump"
    if math.isfinite(droop) and travel < droop <= 0.0:
        return f"can't reach here: stops at {format_length(-droop, unit, mark=True)} in droop"
    if not bool(state.ride.assembles[0]):
        return "does not go together as measured"
    return "can't reach here with the steering turned this far"


def pose_words(solution: Solution) -> str:
    """How the wheels and the steering stand, as a caption: "Ride height", "Bump 1 in" …"""
    unit = solution.layout.units
    left, right = solution.travel["left"], solution.travel["right"]

    def travel(mm: float) -> str:
        if abs(mm) < 1e-9:
            return "ride height"
        word = "bump" if mm > 0.0 else "droop"
        return f"{word} {format_length(abs(mm), unit, mark=True)}"

    words = travel(left) if left == right else f"left {travel(left)}, right {travel(right)}"
    if abs(solution.rack) > 1e-9:
        words += f", {steering_words(solution.rack, unit)}"
    return capital(words)


def steering_words(rack: float, unit: UnitName) -> str:
    """How the steering stands, ``rack`` mm to the left: "steering 1 in to the left"."""
    if abs(rack) <= 1e-9:
        return "steering straight"
    side = "left" if rack > 0.0 else "right"
    return f"steering {format_length(abs(rack), unit, mark=True)} to the {side}"
