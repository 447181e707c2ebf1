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
    """Every string of a car whose parts meet, in its chosen pose."""
    out: list[String] = []
    for side in SIDES:
        if both[side].meets:
            out += _side_strings(solution, both[side])
    return out


def _side_strings(solution: Solution, stand: Standing) -> list[String]:
    view, points = stand.state.now_view, stand.points
    center = instant_center(solution, stand.side)
    seen = None if center is None else center.seen
    lines = []
    lower = [points[names.LOWER_BALL], *_bushings(points, "lower")]
    lines.append(("arm", _along(view.lower_line[:, 0], stand.sign, lower, seen)))
    if stand.state.side.is_strut:
        upper = [points[names.STRUT_TOP]]
    else:
        upper = [points[names.UPPER_BALL], *_bushings(points, "upper")]
    lines.append(("arm", _along(view.upper_line[:, 0], stand.sign, upper, seen)))
    roll = solution.roll_center_place
    contact = [stand.contact] if roll is None else [stand.contact, roll]
    lines.append(("contact", _along(view.contact_line[:, 0], stand.sign, contact, seen)))
    outer, inner = points[names.TIE_OUTER], points[names.TIE_INNER]
    way = (inner[0] - outer[0], inner[1] - outer[1])
    size = math.hypot(*way)
    if size > 1e-6:
        a, b = -way[1] / size, way[0] / size
        line = np.array([a * stand.sign, b, -(a * outer[0] + b * outer[1])])
        lines.append(("tie", _along(line, stand.sign, [outer, inner], seen)))
    return [
        String(stand.side, kind, *ends)  # type: ignore[arg-type]
        for kind, ends in lines
        if ends is not None
    ]


def _bushings(points: dict[str, XY], arm: str) -> list[XY]:
    found = (f"{arm} inner pivot", f"{arm} inner pivot front", f"{arm} inner pivot rear")
    return [points[name] for name in found if name in points]


def _along(
    line: Array, sign: float, places: list[XY], seen: XY | None
) -> tuple[XY, XY] | None:
    """The stretch of a line (a, b, c), in side measure, that passes all places' feet on it."""
    a, b, c = sign * float(line[0]), float(line[1]), float(line[2])
    if not math.isfinite(a + b + c):
        return None
    feet = []
    for x, y in [*places, seen] if seen is not None else places:
        off = a * x + b * y + c
        feet.append((x - off * a, y - off * b))
    along = [b * x - a * y for x, y in feet]
    start, end = feet[along.index(min(along))], feet[along.index(max(along))]
    if math.hypot(end[0] - start[0], end[1] - start[1]) < 1e-6:
        return None
    # Strings start at the wheel, so that their dashes stay put while the center wanders.
    return (start, end) if abs(start[0] - places[0][0]) < abs(end[0] - places[0][0]) else (end, start)


def inner_pivot_places(stand: Standing) -> dict[str, XY]:
    """The three places for the inner tie-rod pivot, moved along with the steering."""
    out = {}
    for kind in PIVOT_KINDS[1:]:
        place = stand.state.pivots.places.get(kind)
        if place is not None:
            x, y = stand.at(*place)
            out[kind] = (x + stand.shift[0], y + stand.shift[1])
    return out


def tire_floor(both: dict[SideName, Standing]) -> tuple[XY, XY] | None:
    """The floor both tires stand on in the chosen pose, contact to contact."""
    if not all(stand.meets for stand in both.values()):
        return None
    return both["right"].contact, both["left"].contact
