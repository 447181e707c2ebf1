"""What a corner's spring, joints and tie-rod thread come to, in a builder's words."""

from __future__ import annotations

import math

import numpy as np

from geometry.clearance import pose_set
from geometry.finding_checks.wording import Wording
from geometry.joints import joint_swings
from geometry.layout import Layout, SideName
from geometry.loads import ride_frequency, wheel_rate
from geometry.quantities import format_quantity, unit_of
from geometry.spring_table import (
    changing_ratio_term,
    corner_mass,
    motion_of,
    rate_for_frequency,
    ride_ratio,
)
from geometry.springs import SpringMotion, stroke_words
from geometry.steering import least_lock
from geometry.tie_rod_thread import least_thread, thread_left
from geometry.tolerances import tolerance

JOINT_LIMITS = {"lower ball joint": "ball joint swing", "upper ball joint": "ball joint swing",
                "tie rod outer": "rod end swing", "tie rod inner": "rod end swing"}
"""The tolerance that limits each joint's swing."""


def corner_words(
    layout: Layout, side: SideName, span: float, wanted: float | None = None
) -> list[str]:
    """Lines on one corner over the travel; ``wanted`` is a ride frequency asked for, Hz."""
    with np.errstate(all="ignore"):
        motion = motion_of(layout, side, span)
        lines = (
            ["Measure the spring's top and lower mount in the measure sheet to see its travel."]
            if motion is None
            else _spring_lines(layout, side, motion, wanted)
        )
        return [*lines, *_joint_lines(layout, side, span), *_thread_lines(layout, side)]


def _rate(value: float, layout: Layout) -> str:
    return f"{format_quantity(value, 'rate', layout.units)} {unit_of('rate', layout.units)}"


def _spring_lines(
    layout: Layout, side: SideName, motion: SpringMotion, wanted: float | None
) -> list[str]:
    spring, mass, ratio = layout.side(side).spring, corner_mass(layout), ride_ratio(motion)
    if ratio is None:
        return ["The corner can't stand at ride height, so the spring has no figures there."]
    line = f"Motion ratio {ratio:.3f} at ride height, by virtual work: the spring's lean is in it"
    lines = [line + ", and counts squared in the wheel rate."]
    if wanted is not None:
        rate = rate_for_frequency(layout, motion, wanted)
        if rate is not None:
            lines.append(f"{wanted:.2f} Hz takes a spring of {_rate(rate, layout)}.")
        elif mass is None:
            lines.append("For a ride frequency, give the sprung weight and its front share "
                         "under Weights and springs first.")
        else:
            lines.append("This spring has no leverage at ride height: no rate gives that.")
    if spring.rate:
        at_wheel = wheel_rate(spring.rate, ratio)
        line = f"Wheel rate {_rate(at_wheel, layout)} at ride height"
        if mass is not None and at_wheel > 0.0:
            hertz = ride_frequency(at_wheel, mass)
            line += f", ride frequency {hertz:.2f} Hz (a road car has 1 to 2)"
        lines.append(line + ".")
    term = changing_ratio_term(layout, motion)
    if term is not None:
        sign = "adds" if term >= 0.0 else "takes away"
        lines.append(f"The changing motion ratio {sign} {_rate(abs(term), layout)} more at the "
                     "wheel under the corner's weight; it is left out above.")
    return [*lines, *_stroke_lines(layout, side, motion)]


def _stroke_lines(layout: Layout, side: SideName, motion: SpringMotion) -> list[str]:
    words, spring = Wording(layout.units), layout.side(side).spring
    bottoms, tops = stroke_words(motion, spring.shortest, spring.longest)
    out = []
    for limit, at, verb in (
        (spring.shortest, bottoms, "bottoms"), (spring.longest, tops, "tops out")
    ):
        if limit is None:
            continue
        if at is None:
            out.append(f"It never {verb} over the chosen travel.")
            continue
        way = "bump" if at > 0.0 else "droop"
        out.append(f"It {verb} at {words.tape(at)} of {way}.")
    return out


def _joint_lines(layout: Layout, side: SideName, span: float) -> list[str]:
    words = Wording(layout.units)
    poses = pose_set(layout, span, least_lock(layout))
    parts = []
    for joint in joint_swings(poses.corners[side], poses.poses[side]):
        limit = tolerance(layout, JOINT_LIMITS[joint.name])
        if math.isfinite(joint.most):
            over = " (too far)" if joint.most > limit else ""
            parts.append(f"{joint.name} {words.angle(joint.most)} of {words.angle(limit)}{over}")
    if not parts:
        return []
    line = f"Joints swing from ride height, over travel and steering: {', '.join(parts)}."
    return [line + " The limits are under Edit ▸ Tolerances."]


def _thread_lines(layout: Layout, side: SideName) -> list[str]:
    words, one = Wording(layout.units), layout.side(side)
    left, least = thread_left(one), least_thread(one.tie_rod)
    if left is None:
        return []
    line = (
        f"Tie-rod thread in hold now: {words.tape(left)}"
        if left > 0.0
        else "The tie rod is longer than its thread reaches: it comes apart"
    )
    if least is not None:
        line += f", wanted at least {words.tape(least)}"
        line += "." if left >= least else ": too little."
        return [line]
    return [line + ". Give the thread's diameter to have it judged."]
