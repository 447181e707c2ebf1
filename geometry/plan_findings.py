"""What is wrong with the steering from above: reverse Ackermann, dead center, uneven turns."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from geometry import layout as names
from geometry.finding_checks.finding import SEVERITIES, Cure, Finding, Move
from geometry.finding_checks.wording import Wording
from geometry.layout import SIDES, LayoutError, RelayRod
from geometry.plan_view import PlanView
from geometry.plan_words import effect_words
from geometry.solution import SPAN, solve
from geometry.steering import RACK_TRAVEL, steering_faults
from geometry.steering_arm import arm_on_string, arm_shape
from geometry.tolerances import PRACTICE, tolerance_source

TOE_OUT_DIFFERENCE = float(np.radians(1.5))
"""How far toe-out on turns may differ between a left and a right turn, rad."""


def plan_findings(plan: PlanView, span: float = SPAN) -> list[Finding]:
    """Every finding on a car's steering in plan, worst first; empty for a sound one.

    ``span`` mm is half the travel over which a cure's effect on bump steer is told.
    """
    with np.errstate(all="ignore"):
        found = [*_stuck(plan), *_dead_center(plan), *_reverse(plan, span), *_uneven(plan)]
    return sorted(found, key=lambda finding: SEVERITIES.index(finding.severity))


def _stuck(plan: PlanView) -> Iterator[Finding]:
    """Arms that can't move the steering as measured."""
    for sentence in steering_faults(plan.layout):
        yield Finding(
            "steering-stuck",
            "wrong",
            None,
            sentence,
            "Nothing about the steered wheels can be worked out until it is mended.",
            points=names.RELAY_POINTS,
        )


def _dead_center(plan: PlanView) -> Iterator[Finding]:
    """A tie rod that lines up with its arm before the rack's own stop."""
    if steering_faults(plan.layout) or not bool(plan.assembles[plan.ahead]):
        return
    words = Wording(plan.layout.units)
    limits = plan.limits
    # A travel that nobody measured is no proof that the steering gets there.
    measured = RACK_TRAVEL in plan.layout.tolerances
    source = tolerance_source(plan.layout, RACK_TRAVEL)
    what = "pitman arm's end" if isinstance(plan.layout.steering, RelayRod) else "rack"
    for way, limit, why in (
        ("left", limits.left, limits.why_left),
        ("right", limits.right, limits.why_right),
    ):
        if abs(limit) >= limits.setting:
            continue
        yield Finding(
            "steering-dead-center",
            "wrong" if measured else "warn",
            None,
            f"With the {what} {words.tape(limit)} to the {way}: {why[0].lower()}{why[1:]}",
            f"The {what} may travel {words.tape(limits.setting)} each way ({source}), and past"
            " dead center the wheels lock over or turn back.",
            figure=abs(limit),
            tolerance=limits.setting,
            tolerance_key=RACK_TRAVEL,
            tolerance_source=source,
            cure=Cure(f"Stop the {what} well short of that, or fit longer steering arms."),
            points=(names.TIE_OUTER, names.TIE_INNER),
        )


def _reverse(plan: PlanView, span: float) -> Iterator[Finding]:
    """An outer wheel that turns more than the inner one."""
    if not plan.is_reverse:
        return
    at_lock = [figure for figure in plan.lock_percent.values() if figure is not None]
    parts = []
    if plan.straight_ahead_percent is not None:
        parts.append(f"{round(plan.straight_ahead_percent)} percent near straight ahead")
    if at_lock:
        parts.append(f"{round(min(at_lock))} percent at lock")
    figures = [*at_lock, plan.straight_ahead_percent]
    yield Finding(
        "reverse-ackermann",
        "warn",
        None,
        f"Reverse Ackermann: the outer wheel turns more than the inner one ({', '.join(parts)}).",
        _lean_detail(plan),
        figure=min(figure for figure in figures if figure is not None) / 100.0,
        tolerance=0.0,
        cure=_to_string(plan, span),
        points=(names.TIE_OUTER,),
    )


def _lean_detail(plan: PlanView) -> str:
    shape = arm_shape(plan.layout.left)
    if shape is None or shape.leans_right:
        return "The tie rods' angles turn the wheels against what the steering arms would do."
    if shape.is_ahead:
        return (
            "A steering arm ahead of the axle must lean outboard, and this one does not."
            " A knuckle made for steering behind the axle, put on the other side, does this."
        )
    return (
        "A steering arm behind the axle must lean inboard, and this one does not."
        " A knuckle made for steering ahead of the axle, put on the other side, does this."
    )


def _to_string(plan: PlanView, span: float) -> Cure | None:
    """The outer ends moved on to their strings by a part made so, and what that does to
    Ackermann and to bump steer."""
    try:
        move = arm_on_string(solve(plan.layout, span=span), plan)
    except LayoutError:
        return None
    sides = SIDES[:1] if plan.layout.linked else SIDES
    moves = tuple(Move(names.TIE_OUTER, side, d_over=move.move[side]) for side in sides)
    return Cure(
        f"For the string check: {effect_words(move)} It takes a knuckle or steering arm made so;"
        " don't heat or bend one.",
        moves,
    )


def _uneven(plan: PlanView) -> Iterator[Finding]:
    """Toe-out on turns that differs between the two turns."""
    left, right = plan.toe_out["left"], plan.toe_out["right"]
    if left is None or right is None:
        return
    apart = abs(left.excess - right.excess)
    if apart <= TOE_OUT_DIFFERENCE:
        return
    words = Wording(plan.layout.units)
    yield Finding(
        "toe-out-uneven",
        "warn",
        None,
        f"Toe-out on turns is {words.angle(left.excess)} in a left turn and"
        f" {words.angle(right.excess)} in a right turn.",
        f"With the outer wheel at {words.angle(left.outer)}. Unlike or bent steering arms, or"
        " a rack off center, do this."
        f" Tolerance: at most {words.angle(TOE_OUT_DIFFERENCE)} apart ({PRACTICE}).",
        figure=apart,
        kind="angle",
        tolerance=TOE_OUT_DIFFERENCE,
        tolerance_source=PRACTICE,
        points=(names.TIE_OUTER, names.TIE_INNER),
    )
