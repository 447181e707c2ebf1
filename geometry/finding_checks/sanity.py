"""Points that can't be right: slips of the tape, the pencil or the unit."""

from __future__ import annotations

import math
from collections.abc import Iterator

from geometry import layout as names
from geometry.finding_checks.arms import pivot_names
from geometry.finding_checks.finding import Finding, Subject
from geometry.layout import (
    KNUCKLE_POINTS,
    MM_PER_INCH,
    SIDE_POINTS,
    Point,
    Side,
)

HALF_TRACK = (250.0, 1500.0)
"""Over of a wheel center, mm, that a car could have."""

_JOINED = (
    (names.LOWER_BALL, names.UPPER_BALL),
    (names.TIE_INNER, names.TIE_OUTER),
    (names.TIE_OUTER, names.LOWER_BALL),
    (names.TIE_OUTER, names.UPPER_BALL),
    (names.STRUT_TOP, names.STRUT_LOWER),
    (names.STRUT_TOP, names.LOWER_BALL),
    (names.LOWER_INNER_FRONT, names.LOWER_INNER_REAR),
    (names.UPPER_INNER_FRONT, names.UPPER_INNER_REAR),
    *((inner, names.LOWER_BALL) for inner in (
        names.LOWER_INNER, names.LOWER_INNER_FRONT, names.LOWER_INNER_REAR)),
    *((inner, names.UPPER_BALL) for inner in (
        names.UPPER_INNER, names.UPPER_INNER_FRONT, names.UPPER_INNER_REAR)),
)
"""Pairs of pivots that one part joins: they can't be in one place."""


def check(subject: Subject) -> Iterator[Finding]:
    """Measuring slips on one side, worst first."""
    scale = list(_units_mixed(subject))
    yield from scale
    yield from _coincident(subject)
    yield from _does_not_assemble(subject)
    yield from _inner_outboard(subject)
    yield from _below_floor(subject)
    if not scale:
        yield from _far_from_wheel(subject)
        yield from _wheel_inboard(subject)
        yield from _lever(subject)
    yield from _toggled(subject)
    yield from _static_values(subject)


def sides_differ(left: Subject, right: Subject) -> Iterator[Finding]:
    """Measures that do not match between the two sides of an unlinked car."""
    a, b = left.state.side.points, right.state.side.points
    if set(a) != set(b):
        lone = [name for name in SIDE_POINTS if (name in a) != (name in b)]
        yield left.finding(
            "sides-measured-differently",
            "note",
            "The two sides were not measured by the same points.",
            f"Only on one side: {', '.join(lone)}.",
            points=lone,
            whole_car=True,
        )
    limit = left.limit("side difference")
    apart = {
        name: max(abs(p - q) for p, q in zip(a[name], b[name], strict=True))
        for name in SIDE_POINTS
        if name in a and name in b
    }
    differing = sorted((n for n in apart if apart[n] > limit), key=lambda n: -apart[n])
    if not differing:
        return
    words, worst = left.words, differing[0]
    others = f", and {len(differing) - 1} more" if len(differing) > 1 else ""
    listed = "; ".join(f"{name} {words.tape(apart[name])}" for name in differing)
    listed = listed[0].upper() + listed[1:]
    yield left.finding(
        "sides-differ",
        "warn",
        f"Left and right differ: {worst} by {words.tape(apart[worst])}{others}.",
        f"{listed}. Measure again, or look for a bent frame.",
        figure=apart[worst],
        key="side difference",
        points=differing,
        whole_car=True,
    )


def _units_mixed(subject: Subject) -> Iterator[Finding]:
    """A whole side that is an inch's ratio away from a size that a car could have."""
    side, words = subject.state.side, subject.words
    track = abs(side[names.WHEEL_CENTER].over)
    low, high = HALF_TRACK
    if low <= track <= high:
        return
    small = track < low
    factor = MM_PER_INCH if small else 1.0 / MM_PER_INCH
    fits = low <= track * factor <= high
    meant = "inches read as millimeters" if small else "millimeters read as inches"
    hint = (
        f" All would fit if they were {meant}."
        if fits
        else " Check the unit of the measures."
    )
    yield subject.finding(
        "units-mixed",
        "wrong",
        f"{subject.name('wheel center')} {words.tape(track)} from the centerline is no car's "
        f"size.{hint}",
        f"Expected {words.tape(low)} to {words.tape(high)}.",
        figure=track,
        points=(names.WHEEL_CENTER,),
    )


def _apart(p: Point, q: Point) -> tuple[float, float, float]:
    return p.over - q.over, p.up - q.up, p.fore - q.fore


def _coincident(subject: Subject) -> Iterator[Finding]:
    points, limit = subject.state.side.points, subject.limit("point spacing")
    for first, second in _JOINED:
        if first in points and second in points:
            gap = math.dist(points[first], points[second])
            if gap < limit:
                place = "in the same place" if gap < 0.5 else "almost in the same place"
                yield subject.finding(
                    "points-coincide",
                    "wrong",
                    f"{subject.name(first)} and {second} are {place}.",
                    f"They are {subject.words.fine(gap)} apart; a part joins them, so one of "
                    "them was measured or typed wrong.",
                    figure=gap,
                    key="point spacing",
                    points=(first, second),
                )


def _does_not_assemble(subject: Subject) -> Iterator[Finding]:
    ride = subject.state.ride
    contact = float(ride.contact[2, 0])
    if bool(ride.assembles[0]) and math.isfinite(contact):
        return
    yield subject.finding(
        "does-not-assemble",
        "wrong",
        f"The {'' if subject.side is None else f'{subject.side} '}points do not make a front end "
        "that can move: nothing can be figured from them.",
        "Two joined pivots may be in one place, an arm may stand straight up or in line with "
        "the ball joints, or the tie rod may have no lever on the knuckle.",
        points=(names.LOWER_BALL, names.TIE_OUTER),
    )


def _inner_outboard(subject: Subject) -> Iterator[Finding]:
    side, words = subject.state.side, subject.words
    pairs = [
        *((name, names.LOWER_BALL) for name in pivot_names(side, "lower")),
        *((name, names.UPPER_BALL) for name in pivot_names(side, "upper")),
        (names.TIE_INNER, names.TIE_OUTER),
    ]
    for inner, outer in pairs:
        if outer not in side.points:
            continue
        past = side[inner].over - side[outer].over
        if past >= 0.0:
            by = f" by {words.tape(past)}" if words.counts(past) else ""
            yield subject.finding(
                "inner-outboard-of-outer",
                "wrong",
                f"{subject.name(inner)} is not inboard of the {outer}{by}.",
                "Over is measured from the car's centerline, outboard positive.",
                figure=past,
                points=(inner, outer),
            )


def _below_floor(subject: Subject) -> Iterator[Finding]:
    side = subject.state.side
    low = [name for name in SIDE_POINTS if name in side.points and side[name].up < 0.0]
    if low:
        worst = min(low, key=lambda name: side[name].up)
        depth = -side[worst].up
        others = f", and {len(low) - 1} more" if len(low) > 1 else ""
        yield subject.finding(
            "point-below-floor",
            "wrong",
            f"{subject.name(worst)} is {subject.words.tape(depth)} below the floor{others}.",
            "Up is measured from the floor the tires stand on.",
            figure=side[worst].up,
            points=low,
        )


def _far_from_wheel(subject: Subject) -> Iterator[Finding]:
    side, words = subject.state.side, subject.words
    limit, center = subject.limit("knuckle reach"), side[names.WHEEL_CENTER]
    for name in KNUCKLE_POINTS:
        # A strut's lower mount is any second point on the strut, so it may stand far up.
        if name in side.points and name != names.STRUT_LOWER:
            gap = math.dist(side[name], center)
            if gap > limit:
                yield subject.finding(
                    "point-far-from-wheel",
                    "wrong",
                    f"{subject.name(name)} is {words.tape(gap)} from the wheel center, too far "
                    "for a point on the knuckle.",
                    "Check its unit and its side.",
                    figure=gap,
                    key="knuckle reach",
                    points=(name, names.WHEEL_CENTER),
                )


def _wheel_inboard(subject: Subject) -> Iterator[Finding]:
    side, words = subject.state.side, subject.words
    center = side[names.WHEEL_CENTER].over
    for name in (names.LOWER_BALL, names.UPPER_BALL):
        if name in side.points and side[name].over > center:
            past = side[name].over - center
            yield subject.finding(
                "wheel-inboard",
                "warn",
                f"{subject.name('wheel center')} is {words.tape(past)} inboard of the {name}.",
                "Wheel center is the middle of the wheel in the tire's center plane; check it "
                "was not measured at the hub's or the rim's inner face.",
                figure=past,
                points=(names.WHEEL_CENTER, name),
            )


def _lever(subject: Subject) -> Iterator[Finding]:
    """The tie rod's pull must pass the kingpin axis at a distance, or it can't steer."""
    side = subject.state.side
    lower, inner, outer = (
        side[name] for name in (names.LOWER_BALL, names.TIE_INNER, names.TIE_OUTER)
    )
    axis = _apart(side[names.STRUT_TOP if side.is_strut else names.UPPER_BALL], lower)
    rod, arm = _apart(outer, inner), _apart(outer, lower)
    size = math.hypot(*axis) * math.hypot(*rod)
    if size < 1e-9:
        return
    turning = (
        arm[1] * rod[2] - arm[2] * rod[1],
        arm[2] * rod[0] - arm[0] * rod[2],
        arm[0] * rod[1] - arm[1] * rod[0],
    )
    lever = abs(sum(t * a for t, a in zip(turning, axis, strict=True))) / size
    if lever < subject.limit("steering lever"):
        yield subject.finding(
            "tie-rod-no-lever",
            "wrong",
            f"{subject.name('tie rod')} pulls almost straight at the kingpin axis: its lever is "
            f"{subject.words.tape(lever)}.",
            "Check how far ahead of or behind the axle line the outer tie-rod end is.",
            figure=lever,
            key="steering lever",
            points=(names.TIE_OUTER, names.TIE_INNER, names.LOWER_BALL),
        )


def _toggled(subject: Subject) -> Iterator[Finding]:
    """An arm nearly in line with the ball joints is about to snap over."""
    side, words = subject.state.side, subject.words
    if side.is_strut:
        return
    lower, upper = side[names.LOWER_BALL], side[names.UPPER_BALL]
    kingpin = (upper.over - lower.over, upper.up - lower.up)
    for arm, line, ball in (
        ("lower arm", subject.state.ride_view.lower_line, names.LOWER_BALL),
        ("upper arm", subject.state.ride_view.upper_line, names.UPPER_BALL),
    ):
        # sine of the angle between the arm's line and the kingpin's, from the line's normal
        size = math.hypot(*kingpin)
        sine = abs(float(line[0, 0] * kingpin[0] + line[1, 0] * kingpin[1])) / (size or 1.0)
        if not math.isfinite(sine) or size == 0.0:
            continue
        angle = math.asin(min(1.0, sine))
        if angle < subject.limit("toggle angle"):
            yield subject.finding(
                "arm-toggled",
                "wrong",
                f"{subject.name(arm)} is within {words.angle(angle)} of the line through the "
                "ball joints: it is about to lock over center.",
                figure=angle,
                kind="angle",
                key="toggle angle",
                points=(*pivot_names(side, "lower" if ball == names.LOWER_BALL else "upper"),
                        names.LOWER_BALL, names.UPPER_BALL),
            )


def _static_values(subject: Subject) -> Iterator[Finding]:
    side, words = subject.state.side, subject.words
    for label, value, code in (
        ("static camber", side.static_camber, "static-camber-large"),
        ("static toe", side.static_toe, "static-toe-large"),
    ):
        if abs(value) > subject.limit(label):
            yield subject.finding(
                code,
                "warn",
                f"{subject.name(label)} of {words.angle(value)} is hard to believe.",
                "It is given in degrees, per wheel.",
                figure=value,
                kind="angle",
                key=label,
                points=(names.WHEEL_CENTER,),
            )
    yield from _tire_gap(side, subject)


def _tire_gap(side: Side, subject: Subject) -> Iterator[Finding]:
    gap, words = float(subject.state.ride.contact[2, 0]), subject.words
    if not math.isfinite(gap) or abs(gap) <= subject.limit("tire gap"):
        return
    what = f"{words.tape(gap)} {'above' if gap > 0.0 else 'below'} the floor"
    yield subject.finding(
        "tire-off-floor",
        "warn",
        f"{subject.name('tire')} would stand {what} at ride height.",
        f"The loaded radius is {words.tape(side.tire.radius)} and the wheel center "
        f"{words.tape(side[names.WHEEL_CENTER].up)} up; the two should match.",
        figure=gap,
        key="tire gap",
        points=(names.WHEEL_CENTER,),
    )
