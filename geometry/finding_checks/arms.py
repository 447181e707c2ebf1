"""The arms at ride height: their level, the instant center, camber gain and scrub radius."""

from __future__ import annotations

import math
from collections.abc import Iterator
from typing import Literal

import numpy as np

from geometry import layout as names
from geometry.finding_checks.finding import Cure, Finding, Subject
from geometry.layout import Side
from geometry.linkage import Array
from geometry.tolerances import camber_gain, lower_arm_slope

ArmName = Literal["lower", "upper"]

LARGEST_MOVE = 300.0
"""A pivot's move beyond this, mm, is no cure that a shop could make."""


def pivot_names(side: Side, arm: ArmName) -> tuple[str, ...]:
    """The inner pivots that an arm was measured by."""
    return tuple(
        name
        for name in (f"{arm} inner pivot", f"{arm} inner pivot front", f"{arm} inner pivot rear")
        if name in side.points
    )


def arm_points(side: Side) -> tuple[str, ...]:
    """The points that fix a corner's instant center."""
    if side.is_strut:
        upper: tuple[str, ...] = (names.STRUT_TOP, names.STRUT_LOWER)
    else:
        upper = (*pivot_names(side, "upper"), names.UPPER_BALL)
    return (*pivot_names(side, "lower"), names.LOWER_BALL, *upper)


def rise_to_aim(subject: Subject, arm: ArmName, target: Array) -> float | None:
    """How far to raise an arm's inner pivots, mm, so that its line passes ``target``.

    ``target`` (3,) is homogeneous in the front view through the wheel center. The arm's
    plane holds its inner axis and its ball joint; raising the axis by d changes the plane's
    normal by d (up x axis), so that d follows from one linear equation. None if no such
    rise exists.
    """
    corner = subject.state.corner
    front, rear = corner.axis_of(arm)
    ball = corner.lower_ball if arm == "lower" else corner.points[names.UPPER_BALL]
    along = (front - rear)[:, 0].tolist()
    out = (ball - rear)[:, 0].tolist()
    over, up, w = (float(v) for v in target)
    way = [0.0, over, up]
    if w == 1.0:
        ball_fore, ball_over, ball_up = ball[:, 0].tolist()
        way = [float(corner.wheel_center[0, 0]) - ball_fore, over - ball_over, up - ball_up]
    normal = (
        along[1] * out[2] - along[2] * out[1],
        along[2] * out[0] - along[0] * out[2],
        along[0] * out[1] - along[1] * out[0],
    )
    change = along[1] * way[0] - along[0] * way[1]
    if change == 0.0:
        return None
    rise = sum(n * v for n, v in zip(normal, way, strict=True)) / change
    return rise if math.isfinite(rise) and abs(rise) <= LARGEST_MOVE else None


def check(subject: Subject) -> Iterator[Finding]:
    """Everything about one side's arms."""
    yield from _level(subject)
    gain = camber_gain(subject.state)
    if gain is not None and bool(subject.state.ride.assembles[0]):
        yield from _camber(subject, gain)
    yield from _camber_through_bump(subject, gain)
    yield from _scrub(subject)


def _level(subject: Subject) -> Iterator[Finding]:
    slope = lower_arm_slope(subject.state)
    if slope is None or abs(slope) <= max(subject.limit("lower arm slope"), 0.0):
        return
    words, side = subject.words, subject.state.side
    pivots = pivot_names(side, "lower")
    rise = rise_to_aim(subject, "lower", np.array([1.0, 0.0, 0.0]))
    way = "up" if slope > 0.0 else "down"
    cure = None
    if rise is not None:
        # A healthy arm need not be dead level: half of the tolerance is left standing.
        rise *= 1.0 - 0.5 * subject.limit("lower arm slope") / abs(slope)
        verb = "Raise" if rise > 0.0 else "Lower"
        cure = Cure(
            f"{verb} the lower inner pivot{'s' if len(pivots) > 1 else ''} {words.tape(rise)}, "
            "or bring the ball joint back with a knuckle that suits the ride height.",
            tuple(subject.move(name, up=rise) for name in pivots),
        )
    yield subject.finding(
        "lower-arm-not-level",
        "warn",
        f"{subject.name('lower arm')} slopes {way} {words.angle(abs(slope))} toward the wheel at "
        "ride height.",
        "Far from level, the arm pushes the tire sideways in travel and moves the roll center.",
        figure=slope,
        kind="angle",
        key="lower arm slope",
        cure=cure,
        points=(*pivots, names.LOWER_BALL),
    )


def _gain_cure(subject: Subject, gain: float) -> Cure | None:
    """Turn the upper arm (a strut's lower arm) about its ball joint until camber gain fits."""
    if gain == 0.0:
        return None
    state, words = subject.state, subject.words
    arm: ArmName = "lower" if state.side.is_strut else "upper"
    line = (state.ride_view.upper_line if arm == "lower" else state.ride_view.lower_line)[:, 0]
    over = float(state.ride.contact[1, 0]) - 1.0 / gain
    up = -(line[0] * over + line[2]) / line[1]
    rise = rise_to_aim(subject, arm, np.array([over, up, 1.0]))
    if rise is None or not words.counts(rise):
        return None
    pivots = pivot_names(state.side, arm)
    verb = "Raise" if rise > 0.0 else "Lower"
    return Cure(
        f"{verb} the {arm} inner pivot{'s' if len(pivots) > 1 else ''} {words.tape(rise)} for "
        f"{words.rate(gain, ' of camber gain')}.",
        tuple(subject.move(name, up=rise) for name in pivots),
    )


def _camber(subject: Subject, gain: float) -> Iterator[Finding]:
    """One finding at most on where the instant center stands and what it does to camber."""
    words, points = subject.words, arm_points(subject.state.side)
    low, high = subject.limit("camber gain low"), subject.limit("camber gain high")
    shortest = subject.limit("swing arm short")
    middle = 0.5 * (low + high)
    if gain == 0.0:
        yield subject.finding(
            "parallel-arms",
            "note",
            f"{subject.name('arms')} run parallel at ride height: no instant center within reach "
            "and no camber gain.",
            f"Camber gain here usually is {words.rate(low)} or more.",
            figure=0.0,
            kind="rate",
            key="camber gain low",
            cure=_gain_cure(subject, middle),
            points=points,
        )
        return
    arm = 1.0 / gain
    if arm < 0.0:
        yield subject.finding(
            "instant-center-outboard",
            "warn",
            f"{subject.name('instant center')} is on the wrong side, {words.tape(arm)} outboard "
            f"of the tire: the wheel leans its top out {words.rate(-gain)}.",
            "The arm lines should meet inboard, so that the tire leans in as the car rolls on it. "
            f"Wanted: {words.rate(low, ' of camber gain')} at least.",
            figure=gain,
            kind="rate",
            key="camber gain low",
            cure=_gain_cure(subject, middle),
            points=points,
        )
    elif arm < shortest:
        yield subject.finding(
            "swing-arm-short",
            "warn",
            f"{subject.name('swing arm')} is very short, {words.tape(arm)}: camber changes "
            f"{words.rate(gain)}.",
            "The tire scrubs sideways and the car jacks up in a turn.",
            figure=arm,
            key="swing arm short",
            cure=_gain_cure(subject, high),
            points=points,
        )
    elif gain < low or gain > high:
        key, less = ("camber gain low", True) if gain < low else ("camber gain high", False)
        yield subject.finding(
            "camber-gain-low" if less else "camber-gain-high",
            "note",
            f"{subject.name('camber gain')} is {'low' if less else 'high'}, {words.rate(gain)}: "
            f"the swing arm is {words.tape(arm)}.",
            figure=gain,
            kind="rate",
            key=key,
            cure=_gain_cure(subject, middle),
            points=points,
        )


def _camber_through_bump(subject: Subject, gain: float | None) -> Iterator[Finding]:
    """Camber that ends more top-out than it began, though it starts the right way."""
    if gain is not None and gain < 0.0:
        return
    motion = subject.state.pivots.motion
    middle = motion.travel.size // 2
    camber = -np.arcsin(np.clip(motion.spin_along[2] + motion.spin_arm[2], -1.0, 1.0))
    bump = np.where(motion.assembles[middle:], camber[middle:], np.nan)
    if not bool(np.all(np.isfinite(bump))):
        return
    lost = float(bump[-1] - bump[0])
    if lost <= subject.limit("camber loss"):
        return
    words = subject.words
    turn = float(motion.travel[middle + int(np.argmin(bump))])
    start = (
        "from the start" if turn <= 0.0 else f"after {words.tape(turn)} of bump it turns back"
    )
    yield subject.finding(
        "camber-gain-wrong-way",
        "warn",
        f"{subject.name('wheel')} leans its top out {words.angle(lost)} in "
        f"{words.tape(subject.solution.span)} of bump ({start}).",
        "In bump the top should lean in.",
        figure=lost,
        kind="angle",
        key="camber loss",
        points=arm_points(subject.state.side),
    )


def _scrub(subject: Subject) -> Iterator[Finding]:
    scrub, limit = float(subject.state.ride.scrub_radius[0]), subject.limit("scrub radius")
    if not math.isfinite(scrub) or abs(scrub) <= limit:
        return
    words = subject.words
    move = math.copysign(limit, scrub) - scrub
    where = "outboard" if scrub > 0.0 else "inboard"
    toward = "inboard" if move < 0.0 else "outboard"
    yield subject.finding(
        "scrub-radius-large",
        "warn",
        f"{subject.name('scrub radius')} is {words.tape(scrub)}: the tire meets the floor "
        f"{where} of the kingpin axis.",
        "The more scrub, the harder braking and potholes pull at the steering.",
        figure=scrub,
        key="scrub radius",
        cure=Cure(
            f"Set the wheel {words.tape(move)} farther {toward} (wheel offset or spacer).",
            (subject.move(names.WHEEL_CENTER, over=move),),
        )
        if abs(move) <= LARGEST_MOVE
        else None,
        points=(names.WHEEL_CENTER, names.LOWER_BALL),
    )
