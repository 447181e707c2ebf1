"""The construction lines and points of the view from above, as they stand on the floor.

Places are as in ``geometry.standing`` for the floor from above: x to the car's left, y to its
rear, mm. Ends may lie far off; a view clips.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Literal

import numpy as np

from geometry import layout as names
from geometry.ackermann import kingpin_on_floor
from geometry.layout import SIDES, SideName
from geometry.linkage import Array
from geometry.plan_parts import arm_bushings, tire_above
from geometry.solution import Solution
from geometry.standing import XY, Standing
from geometry.steered_now import SteeredNow, steered_now
from geometry.steering_arm import StringCheck, string_check

PlanKind = Literal["check", "turn", "rear", "axis", "kingpin"]
PLAN_KINDS: tuple[PlanKind, ...] = ("rear", "turn", "check", "axis", "kingpin")
_NO_WHEELBASE_REACH = 6000.0
_AXIS_BEYOND = 70.0
_FAR = 40_000.0


@dataclass(frozen=True)
class PlanString:
    """One line between two places.

    check     the string from the kingpin axis, at the steering arm's height, to the middle of
              the rear axle
    turn      square to a steered wheel, to where it crosses the rear axle's line
    rear      the rear axle's line
    axis      an arm's inner axis through its two bushings
    kingpin   the kingpin axis from the floor to its upper end
    """

    side: SideName | None
    kind: PlanKind
    start: XY
    end: XY


@dataclass(frozen=True)
class PlanMarks:
    """Points that are no nails: where kingpin axes meet the floor, where the arms' ends would
    have to be for the string check, the middle of the rear axle, and the turn's center.

    ``checks`` holds each side's string check while the wheels point straight ahead.
    """

    kingpins: dict[SideName, XY]
    wanted: dict[SideName, XY]
    checks: dict[SideName, StringCheck]
    rear: XY | None
    center: XY | None
    now: SteeredNow | None


def plan_marks(solution: Solution, both: dict[SideName, Standing]) -> PlanMarks:
    """The construction points of a solved car in its chosen pose."""
    wheelbase = _wheelbase(solution)
    rear = None if wheelbase is None else (0.0, wheelbase)
    kingpins = {
        side: place for side in SIDES if (place := kingpin_foot(both[side])) is not None
    }
    checks: dict[SideName, StringCheck] = {}
    wanted: dict[SideName, XY] = {}
    if _is_straight(solution):
        for side, stand in both.items():
            check = string_check(solution.layout, side)
            if check is not None and stand.meets:
                checks[side] = check
                wanted[side] = _beside_end(stand, check)
    now = steered_now(solution)
    center = None
    if now is not None and now.center is not None and wheelbase is not None:
        center = (now.center, wheelbase)
    return PlanMarks(kingpins, wanted, checks, rear, center, now)


def _wheelbase(solution: Solution) -> float | None:
    given = solution.layout.wheelbase
    return given if given is not None and given > 0.0 else None


def _is_straight(solution: Solution) -> bool:
    return abs(solution.rack) < 1e-9


def _beside_end(stand: Standing, check: StringCheck) -> XY:
    """The wanted end, moved along with the real one by the wheel's travel."""
    x, y = stand.points[names.TIE_OUTER]
    return x - stand.sign * check.off, y


def kingpin_foot(stand: Standing) -> XY | None:
    """Where a side's kingpin axis meets the floor; None where it lies level or far off."""
    poses = stand.state.now if stand.meets else stand.state.ride
    place = kingpin_on_floor(poses)[:, 0]
    if not np.isfinite(place).all():
        return None
    x, y = stand.face.seen(stand.sign, place)
    return (x, y) if abs(x) < _FAR and abs(y) < _FAR else None


def plan_strings(
    solution: Solution, both: dict[SideName, Standing], marks: PlanMarks
) -> list[PlanString]:
    """Every line of a car in its chosen pose."""
    out: list[PlanString] = []
    for side, stand in both.items():
        out += _axes(stand)
        upper = names.STRUT_TOP if stand.state.side.is_strut else names.UPPER_BALL
        if side in marks.kingpins:
            out.append(PlanString(side, "kingpin", marks.kingpins[side], stand.points[upper]))
    if marks.rear is not None:
        out += _rear(solution, both, marks, marks.rear)
        for side, check in marks.checks.items():
            stand = both[side]
            x, y = stand.points[names.TIE_OUTER]
            end = check.arm.end
            start = (
                x + stand.sign * (check.arm.kingpin.over - end.over),
                y + stand.face.way * (check.arm.kingpin.fore - end.fore),
            )
            out.append(PlanString(side, "check", start, marks.rear))
    return out + _turn(both, marks)


def _axes(stand: Standing) -> list[PlanString]:
    out = []
    for arm in ("lower", "upper"):
        bushings = arm_bushings(stand.points, arm)
        if len(bushings) == 2:
            (x1, y1), (x2, y2) = bushings
            size = math.hypot(x2 - x1, y2 - y1)
            if size > 1e-6:
                dx, dy = _AXIS_BEYOND * (x2 - x1) / size, _AXIS_BEYOND * (y2 - y1) / size
                ends = (x1 - dx, y1 - dy), (x2 + dx, y2 + dy)
                out.append(PlanString(stand.side, "axis", *ends))
    return out


def rear_half_track(solution: Solution, both: dict[SideName, Standing]) -> float:
    """Half the rear track, mm: as given, or as wide as the front one."""
    given = solution.layout.loads.rear_track
    if given is not None and given > 0.0:
        return 0.5 * given
    return 0.5 * sum(abs(stand.contact[0]) for stand in both.values())


def _rear(
    solution: Solution, both: dict[SideName, Standing], marks: PlanMarks, rear: XY
) -> list[PlanString]:
    """The rear axle, and on a turn its line as far as the lines from the front wheels reach."""
    half = rear_half_track(solution, both)
    ends = [-half, half]
    if marks.now is not None and marks.now.crossing is not None:
        ends += [min(max(x, -_FAR), _FAR) for x in marks.now.crossing.values()]
    return [PlanString(None, "rear", (min(ends), rear[1]), (max(ends), rear[1]))]


def _turn(both: dict[SideName, Standing], marks: PlanMarks) -> list[PlanString]:
    """From each front tire's contact square to the wheel, into the turn."""
    now = marks.now
    if now is None or now.turn is None:
        return []
    out = []
    for side, stand in both.items():
        angle = now.turned[side]
        x, y = stand.contact
        if abs(angle) < 1e-6:
            continue
        reach = _NO_WHEELBASE_REACH
        if now.crossing is not None:
            reach = min(abs(now.crossing[side] - x) / abs(math.cos(angle)), 2.0 * _FAR)
        toward = 1.0 if angle > 0.0 else -1.0
        way = toward * math.cos(angle), abs(math.sin(angle))
        out.append(PlanString(side, "turn", (x, y), (x + reach * way[0], y + reach * way[1])))
    return out


def rear_tires(
    solution: Solution, both: dict[SideName, Standing], marks: PlanMarks
) -> list[Array]:
    """The rear tires as the front ones are made, where the rear track is known."""
    if marks.rear is None or solution.layout.loads.rear_track is None:
        return []
    half = rear_half_track(solution, both)
    out = []
    for stand in both.values():
        tire = stand.state.side.tire
        if tire.radius > 1.0:
            middle = np.array([stand.sign * half, marks.rear[1]])
            out.append(tire_above(tire.radius, tire.width) + middle)
    return out
