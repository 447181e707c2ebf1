"""The figures a car is built by: lengths, angles, adjustments and what each place may be off."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from geometry import layout as names
from geometry.corner import space
from geometry.finding_checks.wording import TAPE, Wording
from geometry.layout import SIDES, Layout, LayoutError, RelayRod, Side, SideName
from geometry.lengths import format_angle
from geometry.linkage import Array
from geometry.readouts import BY_KEY
from geometry.solution import CornerState, Solution, solve
from geometry.stance import aligned
from geometry.steering_arm import arm_shape, string_check
from geometry.tolerances import lower_arm_slope
from geometry.zones import rack_zone_of


@dataclass(frozen=True)
class Figure:
    """One line of a build sheet: what it is, its value with unit, and a remark."""

    label: str
    value: str
    remark: str = ""


def part_lengths(layout: Layout, side: SideName) -> list[Figure]:
    """True lengths from pivot to pivot, center to center."""
    words = Wording(layout.units)
    points = layout.side(side).points
    pairs = [
        ("Lower arm", names.LOWER_INNER, names.LOWER_BALL),
        ("Lower arm, front bushing to ball joint", names.LOWER_INNER_FRONT, names.LOWER_BALL),
        ("Lower arm, rear bushing to ball joint", names.LOWER_INNER_REAR, names.LOWER_BALL),
        ("Lower arm, between its bushings", names.LOWER_INNER_FRONT, names.LOWER_INNER_REAR),
        ("Upper arm", names.UPPER_INNER, names.UPPER_BALL),
        ("Upper arm, front bushing to ball joint", names.UPPER_INNER_FRONT, names.UPPER_BALL),
        ("Upper arm, rear bushing to ball joint", names.UPPER_INNER_REAR, names.UPPER_BALL),
        ("Upper arm, between its bushings", names.UPPER_INNER_FRONT, names.UPPER_INNER_REAR),
        ("Tie rod", names.TIE_INNER, names.TIE_OUTER),
        ("Strut, lower mount to top mount", names.STRUT_LOWER, names.STRUT_TOP),
        ("Spring, between its mounts", names.SPRING_LOWER, names.SPRING_TOP),
        ("Knuckle, between ball joints", names.LOWER_BALL, names.UPPER_BALL),
        ("Knuckle, lower ball joint to strut's lower mount", names.LOWER_BALL, names.STRUT_LOWER),
        ("Knuckle, lower ball joint to tie-rod end", names.LOWER_BALL, names.TIE_OUTER),
        ("Knuckle, upper ball joint to tie-rod end", names.UPPER_BALL, names.TIE_OUTER),
        ("Knuckle, lower ball joint to wheel center", names.LOWER_BALL, names.WHEEL_CENTER),
        ("Knuckle, upper ball joint to wheel center", names.UPPER_BALL, names.WHEEL_CENTER),
    ]
    return [
        Figure(label, words.signed_tape(math.dist(points[a], points[b])))
        for label, a, b in pairs
        if a in points and b in points
    ]


def ride_angles(solution: Solution, side: SideName) -> list[Figure]:
    """Angles at ride height, to a tenth, as a level or protractor reads them."""
    state = solution.sides[side]
    ride = state.ride
    slopes = [
        ("Lower arm line", lower_arm_slope(state)),
        ("Upper arm line", _line_slope(state.ride_view.upper_line)),
        ("Tie rod", _tie_slope(state.side)),
    ]
    if state.side.is_strut:
        slopes[1] = ("Line square to the strut, through its top", slopes[1][1])
    out = [Figure(f"{label}, off level", _slope_words(value)) for label, value in slopes
           if value is not None]
    for label, value, plus, minus in (
        ("Kingpin inclination", ride.kingpin_inclination, "top inboard", "top outboard"),
        ("Caster", ride.caster, "top rearward", "top forward"),
        ("Static camber", ride.camber, "top outboard", "top inboard"),
        ("Static toe, per wheel", ride.toe, "toe-in", "toe-out"),
    ):
        out.append(Figure(label, _signed_angle(float(value[0]), plus, minus)))
    return out


def _line_slope(line: Array) -> float | None:
    """A front-view line's slope, rad, positive rising toward the wheel."""
    a, b = (float(v) for v in line[:2, 0])
    if not math.isfinite(a + b):
        return None
    return math.atan2(-a, b) if b >= 0.0 else math.atan2(a, -b)


def _tie_slope(side: Side) -> float | None:
    inner, outer = side[names.TIE_INNER], side[names.TIE_OUTER]
    if inner[:2] == outer[:2]:
        return None
    return math.atan2(outer.up - inner.up, outer.over - inner.over)


def _slope_words(value: float) -> str:
    return _signed_angle(value, "up toward the wheel", "down toward the wheel")


def _signed_angle(value: float, plus: str, minus: str) -> str:
    text = format_angle(abs(value))
    if text in ("–", "0°"):
        return text
    return f"{text} {plus if value > 0.0 else minus}"


def steering_figures(solution: Solution) -> list[Figure]:
    """Rack or relay rod, tie rods and steering arms."""
    layout = solution.layout
    words = Wording(layout.units)
    left, right = (layout.side(side)[names.TIE_INNER] for side in SIDES)
    width = math.hypot(left.over + right.over, left.up - right.up, left.fore - right.fore)
    kind = "Relay rod" if isinstance(layout.steering, RelayRod) else "Rack"
    out = [Figure(f"{kind}, inner tie-rod pivot to inner tie-rod pivot", words.signed_tape(width))]
    if isinstance(layout.steering, RelayRod):
        relay = layout.steering
        for label, a, b in (
            ("Pitman arm, center to center", relay.pitman_pivot, relay.pitman_end),
            ("Idler arm, center to center", relay.idler_pivot, relay.idler_end),
        ):
            out.append(Figure(label, words.signed_tape(math.dist(a, b))))
    for side in _sides(layout):
        mark = "" if len(_sides(layout)) == 1 else f", {side}"
        arm = arm_shape(layout.side(side))
        if arm is None:
            continue
        where = "ahead of" if arm.is_ahead else "behind"
        out.append(Figure(
            f"Steering arm{mark}, kingpin axis to tie-rod end, level",
            words.signed_tape(arm.length), f"{where} the axis",
        ))
        lean = format_angle(abs(arm.lean))
        way = "outboard" if arm.lean > 0.0 else "inboard"
        out.append(Figure(f"Steering arm{mark}, lean seen from above",
                          lean if lean == "0°" else f"{lean} {way}"))
        check = string_check(layout, side)
        if check is not None:
            off = "on the string" if not words.counts(check.off) else (
                f"{words.tape(check.off)} {'outboard' if check.off > 0.0 else 'inboard'} of it"
            )
            out.append(Figure(
                f"Tie-rod end{mark} against the string from kingpin axis to rear axle's middle",
                off, "a rule of thumb, no source",
            ))
    return out


def _sides(layout: Layout) -> tuple[SideName, ...]:
    return ("left",) if layout.linked else SIDES


def wheel_figures(layout: Layout, side: SideName) -> list[Figure]:
    """The wheel the figures are for."""
    words = Wording(layout.units)
    tire = layout.side(side).tire
    size = f"size {tire.size}" if tire.size else ""
    return [
        Figure("Tire radius, loaded", words.signed_tape(tire.radius), size),
        Figure("Wheel center to mounting face", words.signed_tape(tire.offset),
               "positive: the face lies outboard"),
    ]


def adjustments(solution: Solution, side: SideName) -> list[Figure]:
    """What shims and tie-rod turns do near the planned setting."""
    layout = solution.layout
    words = Wording(layout.units)
    out: list[Figure] = []
    shim = shim_for(layout, side, math.radians(0.5))
    if shim is not None:
        where = "strut top moved" if layout.side(side).is_strut else "shim at both upper pivots"
        way = "inboard" if shim < 0.0 else "outboard"
        out.append(Figure("Half a degree more negative camber", words.tape(shim),
                          f"{where} {way}, then set toe again"))
    rod = rod_for(solution.sides[side], TAPE["in"])
    if rod is not None:
        verb = "longer" if rod > 0.0 else "shorter"
        size = words.tape(TAPE["in"]) if layout.units == "in" else "1.6 mm"
        out.append(Figure(f"{size} more toe-in at the tire, one wheel", words.fine(rod),
                          f"tie rod {verb}"))
    return out


def shim_for(layout: Layout, side: SideName, more: float) -> float | None:
    """How far the upper inner pivots (or strut top) go outboard, mm, for ``more`` rad of
    negative camber; None where it can't be set."""
    own = layout.side(side)
    try:
        after = aligned(layout, own.static_camber - more).side(side)
    except LayoutError:
        return None
    name = next(n for n in (names.STRUT_TOP, names.UPPER_INNER, names.UPPER_INNER_FRONT)
                if n in own.points)
    move = after[name].over - own[name].over
    return move if math.isfinite(move) else None


def rod_for(state: CornerState, toe_mm: float) -> float | None:
    """How much longer the tie rod gets, mm, for ``toe_mm`` more toe-in at the tire.

    The knuckle turned about its kingpin axis by what gives that toe.
    """
    side = state.side
    low = space(side[names.LOWER_BALL])
    high = space(side[names.STRUT_TOP if side.is_strut else names.UPPER_BALL])
    axis = high - low
    size = float(np.linalg.norm(axis))
    spin = state.ride.spin_axis[:, 0]
    if not (size > 1e-6 and side.tire.radius > 1.0 and np.isfinite(spin).all()):
        return None
    axis = axis / size

    def turned(vector: Array, angle: float) -> Array:
        along = float(axis @ vector) * axis
        across = vector - along
        return np.asarray(
            along + across * math.cos(angle) + np.cross(axis, across) * math.sin(angle)
        )

    def toe(angle: float) -> float:
        heading = turned(spin, angle)
        return 2.0 * side.tire.radius * math.sin(math.atan2(heading[0], heading[1]))

    step = 1e-3
    slope = (toe(step) - toe(-step)) / (2.0 * step)
    if abs(slope) < 1e-6:
        return None
    outer, inner = space(side[names.TIE_OUTER]), space(side[names.TIE_INNER])
    moved = low + turned(outer - low, toe_mm / slope)
    change = float(np.linalg.norm(moved - inner) - np.linalg.norm(outer - inner))
    return change if math.isfinite(change) else None


def rack_room(solution: Solution, side: SideName) -> str:
    """How far the inner tie-rod pivot may be off, as a sentence; empty where it can't be told."""
    if not bool(np.isfinite(solution.sides[side].sweep.toe).all()):
        return "The parts don't meet over the whole travel, so no room can be given."
    return rack_zone_of(solution, side).words(solution.layout.units)


def toe_cost(solution: Solution, side: SideName, name: str) -> float | None:
    """The most toe range, mm at the tire, that a sixteenth (1 mm) of error at a nail adds.

    The nail moved up, down, in and out in turn, toe set again; None where a car can't be
    judged. Never less than zero.
    """
    layout = solution.layout
    step = TAPE[layout.units]
    read = BY_KEY["toe range"].read
    now = read(solution, side)
    if now is None:
        return None
    worst = 0.0
    place = layout.side(side)[name]
    for over, up in ((step, 0.0), (-step, 0.0), (0.0, step), (0.0, -step)):
        moved = place._replace(over=place.over + over, up=place.up + up)
        other = read(solve(layout.with_point(side, name, moved), span=solution.span), side)
        if other is None:
            return None
        worst = max(worst, other - now)
    return worst
