"""A front end from nothing: tire, track, knuckle, frame and targets in, a starting car out.

The instant center follows from the wanted roll center and camber gain; the arm lines run
through it; the arms' length ratio is what moves the roll center least, as far as the ball
joints can follow; the inner tie-rod pivot is the best fit. What could not be met is said.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np

from geometry import layout as names
from geometry.finding_checks.wording import Wording
from geometry.joints import joint_swings
from geometry.layout import Layout, LayoutError, Point, Rack, Side, Tire, UnitName
from geometry.solution import Solution, solve
from geometry.tolerances import camber_gain, toe_length, tolerance

RATIO_STEPS = 13
LEAST_ARM = 120.0
"""The shortest arm that is proposed, mm."""


@dataclass(frozen=True)
class Brief:
    """What a builder knows and wants before there is a car; mm and rad.

    track is between the contact points. ``lower_up`` and ``upper_up`` are the ball joints'
    heights, ``frame_half`` where the lower arm's bushing can be fixed, over.
    ``upper_frame_half`` is the same for the upper arm; None lets the program choose between
    the frame and what leaves the arm LEAST_ARM. ``longest_lower`` limits the lower arm's length
    from pivot to ball joint; None for no limit. ``steering_arm`` is how far behind the
    kingpin axis the outer tie-rod end stands (negative: ahead). ``camber_gain`` is lean-in
    per travel, rad/mm.
    """

    tire: Tire
    track: float
    lower_up: float
    upper_up: float
    kingpin_inclination: float
    scrub_radius: float
    caster: float
    steering_arm: float
    tie_up: float
    frame_half: float
    roll_center: float
    camber_gain: float
    upper_frame_half: float | None = None
    longest_lower: float | None = None
    wheelbase: float | None = None
    static_camber: float = 0.0
    static_toe: float = 0.0
    span: float = 76.2
    units: UnitName = "in"
    title: str = "New front end"


@dataclass(frozen=True)
class Sketch:
    """A starting front end; in words what of the brief it meets, what it misses, and what else
    is worth knowing of it that nothing was wanted for."""

    layout: Layout
    met: tuple[str, ...]
    missed: tuple[str, ...]
    facts: tuple[str, ...] = ()


def sketch(brief: Brief) -> Sketch:
    """A car that meets the brief as nearly as its parts allow.

    Raises LayoutError in a plain sentence where the brief contradicts itself.
    """
    _check(brief)
    knuckle = _knuckle(brief)
    center = _instant_center(brief)
    lower = _lower_inner(brief, knuckle[names.LOWER_BALL], center)
    best: tuple[tuple[float, float], Layout] | None = None
    for over in _upper_overs(brief, knuckle[names.UPPER_BALL]):
        upper = _inner(knuckle[names.UPPER_BALL], center, over)
        car = _with_tie_rod(_car(brief, knuckle, lower, upper), brief.span)
        solution = solve(car, span=brief.span)
        movement = _movement(solution)
        # An arm whose ball joint can't follow is no arm, however still the roll center stands.
        too_far = max(0.0, _swing(solution) - tolerance(car, "ball joint swing"))
        rank = too_far, movement
        if math.isfinite(sum(rank)) and (best is None or rank < best[0]):
            best = (rank, car)
    if best is None:
        raise LayoutError(
            "No arms between this frame and this knuckle reach the whole travel. Try a narrower "
            "frame, less travel, or other ball-joint heights."
        )
    return _report(brief, best[1])


def _check(brief: Brief) -> None:
    half = 0.5 * brief.track
    figures = [v for v in vars(brief).values() if isinstance(v, float)]
    if not all(math.isfinite(v) for v in (*figures, brief.tire.radius)):
        raise LayoutError("Every figure has to be a plain number.")
    if half <= 0.0 or brief.tire.radius <= 0.0:
        raise LayoutError("Track and tire radius have to be more than nothing.")
    if brief.upper_up - brief.lower_up < 50.0:
        raise LayoutError("The upper ball joint has to stand well above the lower one.")
    if not brief.lower_up > 0.0:
        raise LayoutError("The lower ball joint has to be above the floor.")
    lower_over = half - brief.scrub_radius - brief.lower_up * math.tan(brief.kingpin_inclination)
    if brief.frame_half > lower_over - LEAST_ARM:
        raise LayoutError("The frame is so wide that no lower arm fits between it and the wheel.")
    if brief.camber_gain <= 0.0:
        raise LayoutError("The camber gain has to be more than nothing for arms that meet inboard.")
    if half - 1.0 / brief.camber_gain > lower_over - LEAST_ARM:
        raise LayoutError(
            "The camber gain is so high that the arms would meet right at the ball joints. Ask for "
            "less."
        )
    if brief.longest_lower is not None and brief.longest_lower < LEAST_ARM:
        raise LayoutError("The longest lower arm wanted is shorter than any that is proposed.")
    if abs(brief.steering_arm) < 25.0:
        raise LayoutError("The steering arm has to be longer than that to steer by.")


def _knuckle(brief: Brief) -> dict[str, Point]:
    """The knuckle's points from kingpin inclination, caster, scrub radius and heights.

    The kingpin axis passes beside the wheel center in the side view without offset, so that
    the mechanical trail is what the caster gives.
    """
    half = 0.5 * brief.track
    radius = brief.tire.radius
    floor_over = half - brief.scrub_radius

    def on_axis(up: float) -> Point:
        over = floor_over - up * math.tan(brief.kingpin_inclination)
        return Point(over, up, (radius - up) * math.tan(brief.caster))

    at_arm = on_axis(brief.tie_up)
    fore = at_arm.fore - brief.steering_arm
    over = at_arm.over
    if brief.wheelbase:
        # On the string from the kingpin axis to the middle of the rear axle.
        over = at_arm.over * (1.0 - brief.steering_arm / (brief.wheelbase + at_arm.fore))
    # The wheel center leans with the static camber about the contact point.
    lean = radius * math.sin(brief.static_camber) * math.cos(brief.static_toe)
    return {
        names.LOWER_BALL: on_axis(brief.lower_up),
        names.UPPER_BALL: on_axis(brief.upper_up),
        names.TIE_OUTER: Point(over, brief.tie_up, fore),
        names.WHEEL_CENTER: Point(half + lean, radius * math.cos(brief.static_camber), 0.0),
    }


def _instant_center(brief: Brief) -> tuple[float, float]:
    """Over and up of the instant center that gives roll center and camber gain."""
    half = 0.5 * brief.track
    arm = 1.0 / brief.camber_gain
    return half - arm, brief.roll_center * arm / half


def _inner(ball: Point, center: tuple[float, float], over: float) -> Point:
    """The inner pivot at ``over`` on the line from a ball joint to the instant center."""
    slope = (ball.up - center[1]) / (ball.over - center[0])
    return Point(over, ball.up - slope * (ball.over - over), ball.fore)


def _lower_inner(brief: Brief, ball: Point, center: tuple[float, float]) -> Point:
    """The lower inner pivot at the frame, or as near to it as the longest arm goes."""
    at_frame = _inner(ball, center, brief.frame_half)
    length = math.dist(at_frame, ball)
    if brief.longest_lower is None or length <= brief.longest_lower:
        return at_frame
    reach = (ball.over - brief.frame_half) * brief.longest_lower / length
    return _inner(ball, center, ball.over - reach)


def _upper_overs(brief: Brief, ball: Point) -> list[float]:
    if brief.upper_frame_half is not None:
        return [brief.upper_frame_half]
    most = ball.over - LEAST_ARM
    return [float(v) for v in np.linspace(min(brief.frame_half, most), most, RATIO_STEPS)]


def _car(brief: Brief, knuckle: dict[str, Point], lower: Point, upper: Point) -> Layout:
    outer = knuckle[names.TIE_OUTER]
    guess = Point(0.5 * (lower.over + upper.over), outer.up, outer.fore)
    points = {
        names.LOWER_INNER: lower,
        names.UPPER_INNER: upper,
        **knuckle,
        names.TIE_INNER: guess,
    }
    side = Side(points, brief.tire, brief.static_camber, brief.static_toe)
    return Layout(
        side, steering=Rack(), title=brief.title, units=brief.units, wheelbase=brief.wheelbase,
        assumed=("Sketched from figures; nothing was measured on a car.",),
    )


def _with_tie_rod(car: Layout, span: float) -> Layout:
    """The inner tie-rod pivot at its best fit over the travel."""
    pivots = solve(car, span=span).left.pivots
    place = pivots.places["best fit"] or pivots.places["curvature center"]
    if place is None:
        return car
    fore = car.left[names.TIE_INNER].fore
    return replace(car, left=car.left.moved(names.TIE_INNER, Point(*place, fore)))


def _movement(solution: Solution) -> float:
    """How far the roll center moves against the floor over the travel, mm; NaN out of reach."""
    heights = solution.roll_center_sweep[1]
    return float(np.max(heights) - np.min(heights))


def _swing(solution: Solution) -> float:
    """How far a ball joint leans from ride height at most, rad, through the travel; NaN out of
    reach. Steering turns the knuckle about its ball joints and leans neither."""
    return max(
        float(np.max(joint.swing))
        for joint in joint_swings(solution.left.corner, solution.left.sweep)
        if joint.name in (names.LOWER_BALL, names.UPPER_BALL)
    )


def _report(brief: Brief, car: Layout) -> Sketch:
    words = Wording(brief.units)
    solution = solve(car, span=brief.span)
    met: list[str] = []
    missed: list[str] = []
    facts: list[str] = []

    def judge(good: bool, text: str) -> None:
        (met if good else missed).append(text)

    swing, most = _swing(solution), tolerance(car, "ball joint swing")
    if swing > most:
        missed.append(f"A ball joint swings {words.angle(swing)} over that travel, more than the "
                      f"{words.angle(most)} that such a joint has. A longer arm swings less.")
    center = solution.ride_roll_center
    if center is not None:
        judge(
            abs(center[1] - brief.roll_center) < 1.0,
            f"Roll center {words.signed_tape(center[1])} up, wanted "
            f"{words.signed_tape(brief.roll_center)}.",
        )
    gain = camber_gain(solution.left)
    if gain is not None:
        judge(
            abs(gain - brief.camber_gain) < 0.02 * brief.camber_gain,
            f"Camber gain {words.rate(gain)}, wanted {words.rate(brief.camber_gain)}.",
        )
    range_ = solution.left.pivots.ranges["as is"]
    if range_ is not None:
        toe = float(toe_length(car.left, range_))
        limit = tolerance(car, "toe range")
        judge(
            toe <= limit,
            f"Toe change {words.fine(toe)} over {words.tape(brief.span)} each way, "
            f"at most {words.fine(limit)} wanted.",
        )
    facts.append(f"The roll center moves {words.tape(_movement(solution))} over that travel.")
    for arm in ("lower", "upper"):
        pivot, ball = car.left[f"{arm} inner pivot"], car.left[f"{arm} ball joint"]
        length = math.dist(pivot, ball)
        possible = length >= LEAST_ARM - 0.5 and pivot.up > 0.0
        (facts if possible else missed).append(
            f"{arm.capitalize()} arm {words.tape(length)} long, its bushing "
            f"{words.tape(pivot.over)} over and {words.signed_tape(pivot.up)} up.",
        )
    bracket = car.left[names.LOWER_INNER].over - brief.frame_half
    if words.counts(bracket):
        judge(
            False,
            f"The lower arm ends {words.tape(bracket)} short of the frame: it needs a bracket that "
            "long, or a wider frame.",
        )
    tie = car.left[names.TIE_INNER]
    possible = 0.0 < tie.over < car.left[names.TIE_OUTER].over
    (facts if possible else missed).append(
        f"Rack {words.tape(2.0 * tie.over)} between its inner pivots, {words.signed_tape(tie.up)} "
        f"up, {words.tape(tie.fore)} {'ahead of' if tie.fore > 0 else 'behind'} the axle line.",
    )
    return Sketch(car, tuple(met), tuple(missed), tuple(facts))
