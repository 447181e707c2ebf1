"""The construction lines and points of the front view, as they stand on the floor.

Places are (x, y) mm as in ``geometry.standing``. Ends may lie very far off; a view clips.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Literal

import numpy as np

from geometry import layout as names
from geometry.layout import SIDES, SideName
from geometry.linkage import Array
from geometry.solution import PIVOT_KINDS, Solution
from geometry.standing import XY, Standing, sign_of

StringKind = Literal["arm", "contact", "tie"]
FAR = 1e6
"""Where a string that runs to infinity is let end, mm."""


@dataclass(frozen=True)
class String:
    """One stretched string between two places."""

    side: SideName
    kind: StringKind
    start: XY
    end: XY


@dataclass(frozen=True)
class InstantCenter:
    """Where one side's instant center stands: a place, or a direction if ``at_infinity``."""

    side: SideName
    place: XY
    at_infinity: bool

    @property
    def seen(self) -> XY:
        """The place, or one far off in its direction."""
        if not self.at_infinity:
            return self.place
        return FAR * self.place[0], FAR * self.place[1]


def instant_center(solution: Solution, side: SideName) -> InstantCenter | None:
    """One side's instant center in the chosen pose; None if there is none.

    Of the two ends of a direction at infinity the one toward the car's middle is given.
    """
    over, up, weight = solution.sides[side].now_view.instant_center[:, 0]
    if not math.isfinite(over + up):
        return None
    sign = sign_of(side)
    if weight:
        return InstantCenter(side, (sign * float(over), float(up)), False)
    if over > 0.0 or (over == 0.0 and up < 0.0):
        over, up = -over, -up
    return InstantCenter(side, (sign * float(over), float(up)), True)


def strings(solution: Solution, both: dict[SideName, Standing]) -> list[String]:
    """Every string of a car whose parts meet, in its chosen pose.

    Arms and tie rods show their own line, so their strings start where the part ends.
    """
    out: list[String] = []
    for side in SIDES:
        if both[side].meets:
            out += _side_strings(solution, both[side])
    return out


def _side_strings(solution: Solution, stand: Standing) -> list[String]:
    view, points = stand.state.now_view, stand.points
    center = instant_center(solution, stand.side)
    if center is None:
        return []
    strut = stand.state.side.is_strut
    lower = [points[names.LOWER_BALL], *_bushings(points, "lower")]
    upper = (
        [points[names.STRUT_TOP]]
        if strut
        else [points[names.UPPER_BALL], *_bushings(points, "upper")]
    )
    roll = solution.roll_center_place
    contact = [stand.contact, center.seen, *([] if roll is None else [roll])]
    outer, inner = points[names.TIE_OUTER], points[names.TIE_INNER]
    found: list[tuple[StringKind, tuple[XY, XY] | None]] = [
        ("arm", _from_end(view.lower_line[:, 0], stand.sign, lower, center)),
        ("arm", _from_end(view.upper_line[:, 0], stand.sign, upper, center)),
        ("contact", _through(view.contact_line[:, 0], stand.sign, contact)),
        ("tie", _from_end(_line_of(outer, inner, stand.sign), stand.sign, [outer, inner], center)),
    ]
    return [String(stand.side, kind, *ends) for kind, ends in found if ends is not None]


def _line_of(a: XY, b: XY, sign: float) -> Array:
    """The line (3,) through two places on the floor, in a side's measure; NaN if they are one."""
    dx, dy = b[0] - a[0], b[1] - a[1]
    size = math.hypot(dx, dy)
    if size < 1e-6:
        return np.full(3, np.nan)
    p, q = -dy / size, dx / size
    return np.array([p * sign, q, -(p * a[0] + q * a[1])])


def _bushings(points: dict[str, XY], arm: str) -> list[XY]:
    found = (f"{arm} inner pivot", f"{arm} inner pivot front", f"{arm} inner pivot rear")
    return [points[name] for name in found if name in points]


def _feet(line: Array, sign: float, places: list[XY]) -> tuple[list[XY], list[float]] | None:
    """The feet of places on a line (a, b, c) in side measure, and how far along it they lie."""
    a, b, c = sign * float(line[0]), float(line[1]), float(line[2])
    if not math.isfinite(a + b + c):
        return None
    feet = []
    for x, y in places:
        off = a * x + b * y + c
        feet.append((x - off * a, y - off * b))
    return feet, [b * x - a * y for x, y in feet]


def _through(line: Array, sign: float, places: list[XY]) -> tuple[XY, XY] | None:
    """The stretch of a line that passes all places' feet, from the end near the first."""
    found = _feet(line, sign, places)
    if found is None:
        return None
    feet, along = found
    low, high = along.index(min(along)), along.index(max(along))
    if along[high] - along[low] < 1e-6:
        return None
    near_low = along[0] - along[low] <= along[high] - along[0]
    return (feet[low], feet[high]) if near_low else (feet[high], feet[low])


def _from_end(
    line: Array, sign: float, places: list[XY], center: InstantCenter
) -> tuple[XY, XY] | None:
    """From the part's end that is nearest to the instant center, on to the center's foot.

    A tie rod's line seldom meets the instant center: how far it passes by is what it shows.
    """
    found = _feet(line, sign, [*places, center.seen])
    if found is None:
        return None
    feet, along = found
    nearest = min(range(len(places)), key=lambda k: abs(along[k] - along[-1]))
    if abs(along[nearest] - along[-1]) < 1e-6:
        return None
    return feet[nearest], feet[-1]


def inner_pivot_places(solution: Solution, stand: Standing) -> dict[str, XY]:
    """The three places for the inner tie-rod pivot, moved along with the steering."""
    out = {}
    # A mirrored side has the same places in its own measures; they are costly to find.
    state = solution.left if solution.layout.linked else stand.state
    for kind in PIVOT_KINDS[1:]:
        place = state.pivots.places.get(kind)
        if place is not None:
            x, y = stand.at(*place)
            out[kind] = (x + stand.shift[0], y + stand.shift[1])
    return out


def tire_floor(both: dict[SideName, Standing]) -> tuple[XY, XY] | None:
    """The floor both tires stand on in the chosen pose, contact to contact."""
    if not all(stand.meets for stand in both.values()):
        return None
    return both["right"].contact, both["left"].contact
