"""The steering arm's end: the string check, and where it belongs for a wanted Ackermann.

The arm's end (the outer tie-rod end) is moved across the car only; it keeps its height and
its place fore and aft, and the tie rod is cut again to keep the static toe. What such a
move does to bump steer is worked out beside it. Lengths mm, angles rad.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace

import numpy as np

from geometry import layout as names
from geometry.ackermann import SteeredCars
from geometry.corner import Corner
from geometry.inner_pivot import toe_range
from geometry.layout import SIDES, Layout, LayoutError, Point, RelayRod, Side, SideName, other_side
from geometry.linkage import COINCIDENT_MM, Array
from geometry.plan_view import PlanView
from geometry.solution import PIVOT_KINDS, SWEEP_STEPS, Solution

INNER_ANGLE = float(np.radians(20.0))
"""The inner wheel's angle at which a wanted percentage is met, if none is named."""

ARM_REACH = 100.0
"""How far inboard and outboard a place for the arm's end is looked for, mm."""

_TRIES = 21
_ROUNDS = 40
_PERCENT_TOLERANCE = 1e-8


@dataclass(frozen=True)
class ArmShape:
    """A steering arm seen from above, from the kingpin axis at the arm's own height.

    ``kingpin`` is the axis there and ``end`` the outer tie-rod end, in the side's measures.
    ``length`` is measured level; ``lean`` is the angle from straight fore-and-aft, positive
    where the end stands outboard of the axis.
    """

    kingpin: Point
    end: Point

    @property
    def is_ahead(self) -> bool:
        """True for an arm that points ahead of its kingpin axis."""
        return self.end.fore > self.kingpin.fore

    @property
    def length(self) -> float:
        return float(np.hypot(self.end.over - self.kingpin.over, self.end.fore - self.kingpin.fore))

    @property
    def lean(self) -> float:
        out = self.end.over - self.kingpin.over
        return float(np.arctan2(out, abs(self.end.fore - self.kingpin.fore)))

    @property
    def leans_right(self) -> bool:
        """True if it leans as Ackermann asks: outboard ahead of the axle, inboard behind it."""
        return self.lean > 0.0 if self.is_ahead else self.lean < 0.0


@dataclass(frozen=True)
class StringCheck:
    """One side's string from the kingpin axis to the middle of the rear axle (a rule of thumb).

    ``arm`` is the steering arm as it is; ``off`` how far its end stands off the string,
    measured straight across the car, outboard positive; ``needed`` the arm whose end, at
    the same height and fore, is on the string.
    """

    side: SideName
    arm: ArmShape
    off: float
    needed: ArmShape


@dataclass(frozen=True)
class ArmMove:
    """The outer tie-rod ends moved across the car, and all that comes with it.

    move            how far outboard each side's end goes, mm
    arms            the steering arm that each side then needs
    layout          the car with the ends moved, inner pivots left alone
    followed        the same with each inner pivot raised or lowered too, so that the tie
                    rod's line leans against the string to the instant center as before;
                    None where there is no such place
    inner           those inner pivots
    percent_before, percent_after   percent Ackermann at the inner angle ``inner_angle``
    toe_before, toe_alone, toe_followed   toe range over the travel per side, rad peak to
                    peak: as it is, with the inner pivot left alone, and with it moved too;
                    None where a pose is missing
    """

    inner_angle: float
    move: Mapping[SideName, float]
    arms: Mapping[SideName, ArmShape]
    layout: Layout
    followed: Layout | None
    inner: Mapping[SideName, Point] | None
    percent_before: float | None
    percent_after: float | None
    toe_before: Mapping[SideName, float | None]
    toe_alone: Mapping[SideName, float | None]
    toe_followed: Mapping[SideName, float | None]


def kingpin_at(side: Side, up: float) -> Point | None:
    """Where a side's kingpin axis passes a height, as measured; None where the axis lies level."""
    low = side[names.LOWER_BALL]
    high = side[names.STRUT_TOP if side.is_strut else names.UPPER_BALL]
    rise = high.up - low.up
    if abs(rise) < COINCIDENT_MM:
        return None
    share = (up - low.up) / rise
    return Point(
        low.over + share * (high.over - low.over), up, low.fore + share * (high.fore - low.fore)
    )


def arm_shape(side: Side) -> ArmShape | None:
    """A side's steering arm from its measured points; None where the kingpin lies level."""
    end = side[names.TIE_OUTER]
    axis = kingpin_at(side, end.up)
    return None if axis is None else ArmShape(axis, end)


def string_check(layout: Layout, side: SideName) -> StringCheck | None:
    """The string check on one side; None without a wheelbase or with a level kingpin.

    Common practice, and only a rule: a car that meets it has little more than half of the
    Ackermann condition near straight ahead.
    """
    arm = arm_shape(layout.side(side))
    if arm is None or layout.wheelbase is None or not layout.wheelbase > 0.0:
        return None
    rear = -layout.wheelbase
    reach = arm.kingpin.fore - rear
    if abs(reach) < COINCIDENT_MM:
        return None
    on_string = arm.kingpin.over * (arm.end.fore - rear) / reach
    needed = replace(arm, end=arm.end._replace(over=on_string))
    return StringCheck(side, arm, arm.end.over - on_string, needed)


def arm_on_string(solution: Solution, plan: PlanView, inner_angle: float = INNER_ANGLE) -> ArmMove:
    """The outer ends moved on to their strings. LayoutError where there is no string."""
    moves: dict[SideName, float] = {}
    for side in SIDES:
        check = string_check(solution.layout, side)
        if check is None:
            raise LayoutError(
                "The string check needs the wheelbase and a kingpin axis that stands up."
            )
        moves[side] = -check.off
    return _effects(solution, plan, moves, inner_angle)


def arm_for_percent(
    solution: Solution, plan: PlanView, percent: float, inner_angle: float = INNER_ANGLE
) -> ArmMove:
    """Where the outer ends belong for a wanted percent Ackermann at an inner wheel's angle.

    Both sides move outboard by the same amount; of several places the nearest is given.
    LayoutError, in a sentence, where no place within ARM_REACH gives it.
    """
    move = _move_for_percent(plan, percent, inner_angle)
    return _effects(solution, plan, dict.fromkeys(SIDES, move), inner_angle)


def _move_for_percent(plan: PlanView, percent: float, inner_angle: float) -> float:
    if plan.notes:
        raise LayoutError(plan.notes[0])
    tries = np.linspace(-ARM_REACH, ARM_REACH, _TRIES)
    gaps = _gaps(plan, tries, percent, inner_angle)
    if not np.any(np.isfinite(gaps)):
        raise LayoutError(
            f"The inner wheel does not reach {np.degrees(inner_angle):.0f} degrees"
            " within the steering's travel."
        )
    spans = np.flatnonzero(gaps[:-1] * gaps[1:] <= 0.0)
    if spans.size == 0:
        raise LayoutError(
            f"No place of the steering arm's end within {ARM_REACH:.0f} mm"
            f" gives {percent:.0f} percent Ackermann."
        )
    k = int(spans[np.argmin(np.abs(tries[spans] + tries[spans + 1]))])
    low, high = float(tries[k]), float(tries[k + 1])
    at_low, at_high = float(gaps[k]), float(gaps[k + 1])
    # Regula falsi by the Illinois rule: the bracket never lets the root go.
    best = high
    for _ in range(_ROUNDS):
        best = high if at_high == at_low else high - at_high * (high - low) / (at_high - at_low)
        now = float(_gaps(plan, np.array([best]), percent, inner_angle)[0])
        if not abs(now) > _PERCENT_TOLERANCE:
            break
        if now * at_high < 0.0:
            low, at_low = high, at_high
        else:
            at_low *= 0.5
        high, at_high = best, now
    return best


def _gaps(plan: PlanView, moves: Array, percent: float, inner_angle: float) -> Array:
    """Percent Ackermann beyond the wanted one (k,) with the arm's ends moved outboard (k,)."""
    cars = [with_arm_ends(plan.layout, dict.fromkeys(SIDES, float(move))) for move in moves]
    return SteeredCars(cars, plan.lock, dict(plan.travel)).percent_at(inner_angle) - percent


def with_arm_ends(layout: Layout, move: Mapping[SideName, float]) -> Layout:
    """A car with its outer tie-rod ends moved outboard by ``move`` mm (each linked side once)."""
    for side in SIDES[:1] if layout.linked else SIDES:
        end = layout.side(side)[names.TIE_OUTER]
        layout = layout.with_point(side, names.TIE_OUTER, end._replace(over=end.over + move[side]))
    return layout


def with_inner_ends(layout: Layout, places: Mapping[SideName, Point]) -> Layout:
    """A car with its inner tie-rod ends at other places (each linked side once)."""
    for side in SIDES[:1] if layout.linked else SIDES:
        layout = layout.with_point(side, names.TIE_INNER, places[side])
    return layout


def _effects(
    solution: Solution, plan: PlanView, move: Mapping[SideName, float], inner_angle: float
) -> ArmMove:
    """All that follows from moving the outer ends."""
    layout = with_arm_ends(solution.layout, move)
    inner = {side: _following_inner(solution, layout, side) for side in SIDES}
    places = {side: place for side, place in inner.items() if place is not None}
    followed = with_inner_ends(layout, places) if len(places) == len(SIDES) else None
    cars = [solution.layout, layout]
    percents = SteeredCars(cars, plan.lock, dict(plan.travel)).percent_at(inner_angle)
    before, after = (float(p) if np.isfinite(p) else None for p in percents)
    arms = {side: arm_shape(layout.side(side)) for side in SIDES}
    return ArmMove(
        inner_angle=inner_angle,
        move=dict(move),
        arms={side: arm for side, arm in arms.items() if arm is not None},
        layout=layout,
        followed=followed,
        inner=places if followed is not None else None,
        percent_before=before,
        percent_after=after,
        toe_before=_toe_ranges(solution.layout, solution.span),
        toe_alone=_toe_ranges(layout, solution.span),
        toe_followed=_toe_ranges(followed, solution.span),
    )


def _following_inner(solution: Solution, moved: Layout, side: SideName) -> Point | None:
    """The inner pivot, at its own over, that keeps the tie rod's line to the instant center.

    The instant center does not depend on the tie rod, so the line is turned about the new
    outer end by as much as the string from there to the instant center has turned. None
    where there is no instant center or the line would stand upright.
    """
    old, new = solution.layout.side(side), moved.side(side)
    inner, outer, end = old[names.TIE_INNER], old[names.TIE_OUTER], new[names.TIE_OUTER]
    center = solution.sides[side].ride_view.instant_center[:, 0]
    if not bool(np.all(np.isfinite(center))):
        return None
    # A center at infinity has its direction in place of a point, and the string keeps it.
    turned = _slope(center, end) - _slope(center, outer)
    slope = float(np.arctan2(inner.up - outer.up, inner.over - outer.over)) + turned
    if abs(np.cos(slope)) < 1e-3:
        return None
    return inner._replace(up=end.up + float(np.tan(slope)) * (inner.over - end.over))


def _slope(center: Array, outer: Point) -> float:
    """The direction, rad, of the string from an outer end to a homogeneous center."""
    return float(np.arctan2(center[1] - center[2] * outer.up, center[0] - center[2] * outer.over))


def _toe_ranges(layout: Layout | None, span: float) -> dict[SideName, float | None]:
    """Toe range of each side over travel from -span to +span, rad; None where poses miss."""
    if layout is None:
        return dict.fromkeys(SIDES)
    travel = np.linspace(-span, span, SWEEP_STEPS)
    ranges: dict[SideName, float | None] = {}
    for side in SIDES[:1] if layout.linked else SIDES:
        value = float(toe_range(Corner.of(layout.side(side)).poses(travel).toe))
        ranges[side] = value if np.isfinite(value) else None
    return {side: ranges.get(side, ranges["left"]) for side in SIDES}


def percent_by_inner_pivot(
    solution: Solution, plan: PlanView, inner_angle: float = INNER_ANGLE
) -> dict[str, float | None]:
    """Percent Ackermann at an inner wheel's angle for each of PIVOT_KINDS.

    The converse of an arm move: what moving the inner tie-rod pivots to the string rule's
    point, the curvature center or the best fit does to the steering. None where there is
    no such point or the wheel doesn't reach the angle.
    """
    cars: dict[str, Layout] = {}
    for kind in PIVOT_KINDS:
        places: dict[SideName, Point] = {}
        for side in SIDES:
            place = solution.sides[side].pivots.place(kind)
            if place is not None:
                fore = solution.layout.side(side)[names.TIE_INNER].fore
                places[side] = Point(place[0], place[1], fore)
        if len(places) == len(SIDES):
            cars[kind] = with_inner_ends(solution.layout, places)
    if not cars:
        return dict.fromkeys(PIVOT_KINDS)
    steered = SteeredCars(list(cars.values()), plan.lock, dict(plan.travel))
    found = dict(zip(cars, steered.percent_at(inner_angle), strict=True))
    return {
        kind: float(found[kind]) if kind in found and np.isfinite(found[kind]) else None
        for kind in PIVOT_KINDS
    }


SWAPPED_NOTE = (
    "The outer and inner tie-rod ends were placed by turning the knuckles around to the"
    " other side of the car, not measured."
)
"""What a car with swapped knuckles takes for granted."""


def swapped_knuckles(layout: Layout) -> Layout:
    """Each knuckle put on the other side, so that its steering arm points the other way.

    A knuckle turned around about its kingpin keeps its arm's lean out- or inboard and has
    it ahead instead of behind (or the other way about): the outer tie-rod end's fore is
    mirrored at the kingpin axis at its height. The rack, or the relay rod with its arms,
    goes as far ahead of the axes as it was behind them (their mean, if they differ).
    Everything else stays, and the rack then has to move the other way for the same turn.
    LayoutError where a kingpin axis lies level.
    """
    shapes = {side: arm_shape(layout.side(side)) for side in SIDES}
    new: dict[SideName, Side] = {}
    shifts: list[float] = []
    for side in SIDES:
        own, other = layout.side(side), layout.side(other_side(side))
        here, there = shapes[side], shapes[other_side(side)]
        up = other[names.TIE_OUTER].up + own[names.LOWER_BALL].up - other[names.LOWER_BALL].up
        axis = kingpin_at(own, up)
        if here is None or there is None or axis is None:
            raise LayoutError("A kingpin axis that lies level has no arm ahead or behind it.")
        end = Point(
            axis.over + there.end.over - there.kingpin.over,
            up,
            axis.fore - (there.end.fore - there.kingpin.fore),
        )
        shifts.append(2.0 * (here.kingpin.fore - own[names.TIE_INNER].fore))
        new[side] = own.moved(names.TIE_OUTER, end)
    # A rack or a relay rod is one piece: both inner ends go together.
    shift = float(np.mean(shifts))
    for side in SIDES:
        inner = new[side][names.TIE_INNER]
        new[side] = new[side].moved(names.TIE_INNER, inner._replace(fore=inner.fore + shift))
    steering = layout.steering
    if isinstance(steering, RelayRod):
        for name in names.RELAY_POINTS:
            point = steering[name]
            steering = steering.moved(name, point._replace(fore=point.fore + shift))
    return replace(
        layout,
        left=new["left"],
        right=None if layout.linked else new["right"],
        steering=steering,
        assumed=(*layout.assumed, SWAPPED_NOTE),
    )
