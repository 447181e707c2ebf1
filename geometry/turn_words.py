"""The car in a steady turn, said in words: roll, transfer, jacking, and how the tires lean."""

from __future__ import annotations

import math
from dataclasses import dataclass

from geometry.finding_checks.wording import Wording
from geometry.layout import Layout
from geometry.loads import GRAVITY, Transfer, Turn, car_in_turn, jacking
from geometry.quantities import N_PER_POUND
from geometry.roll import RolledPose, rolled
from geometry.solution import Solution, solve
from geometry.springs import spring_motion


@dataclass(frozen=True)
class CornerPicture:
    """A car in a steady turn: the loads' answer and the rolled pose that goes with it."""

    turn: Turn
    pose: RolledPose


def cornering(layout: Layout, lateral_g: float) -> CornerPicture | str:
    """The car leaned over by a turn to the left, or a plain sentence on what is missing."""
    if layout.cg_height is None:
        return "To see the car in a turn, type the center of gravity height."
    solution = solve(layout)
    center = solution.ride_roll_center
    if center is None:
        return "This car has no roll center at ride height, so its roll can't be worked out."
    track = float(solution.left.ride.half_track[0] + solution.right.ride.half_track[0])
    answer = car_in_turn(
        layout.loads, layout.cg_height, center[1], track, lateral_g,
        front_wheel_rate=front_wheel_rate(solution),
    )
    if isinstance(answer, str):
        return answer
    # A left turn leans the body to its right: the left side rises, which is positive.
    return CornerPicture(answer, rolled(layout, answer.roll_angle))


def front_wheel_rate(solution: Solution) -> float | None:
    """The front wheel rate, N/mm: as given, or else from the springs and their mounts.

    At ride height, the mean of both sides; None where a rate or a mount is not given.
    """
    given = solution.layout.loads.front_wheel_rate
    if given is not None:
        return given
    rates = []
    for state in (solution.left, solution.right):
        rate = state.side.spring.rate
        motion = spring_motion(state.side, state.corner, state.sweep)
        if rate is None or motion is None:
            return None
        rates.append(float(motion.wheel_rate(rate)[motion.travel.size // 2]))
    mean = 0.5 * (rates[0] + rates[1])
    return mean if math.isfinite(mean) and mean > 0.0 else None


def _force(newton: float, units: str) -> str:
    return f"{round(newton / N_PER_POUND)} lb" if units == "in" else f"{round(newton)} N"


def _transfer(name: str, part: Transfer, units: str) -> str:
    return (
        f"{name} axle: {_force(part.total, units)} moves to the outer wheel, "
        f"{_force(part.geometric, units)} of it through the roll center, "
        f"{_force(part.elastic, units)} through springs and bars and "
        f"{_force(part.unsprung, units)} from the wheels' own weight."
    )


def turn_words(layout: Layout, lateral_g: float) -> tuple[str, ...]:
    """Plain sentences on the car in a turn of ``lateral_g``, or on what is missing."""
    picture = cornering(layout, lateral_g)
    if isinstance(picture, str):
        return (picture,)
    words = Wording(layout.units)
    turn = picture.turn
    lines = [
        (f"In a steady turn of {lateral_g:.2g} g the body leans {words.angle(turn.roll_angle)} "
        f"({words.angle(turn.roll_gradient)} per g). The roll arm, from the roll axis up to the "
        f"center of gravity, is {words.signed_tape(turn.roll_arm)}."),
        _transfer("Front", turn.front, layout.units),
        _transfer("Rear", turn.rear, layout.units),
    ]
    lean = _lean_words(picture, words)
    if lean:
        lines.append(lean)
    lift = _lift(layout, picture, lateral_g)
    if lift is not None:
        way = "lifts" if lift > 0.0 else "pulls down"
        lines.append(f"The arms' own push {way} the nose by {_force(abs(lift), layout.units)}.")
    return tuple(lines)


def _lean_words(picture: CornerPicture, words: Wording) -> str:
    """How the outer and inner tire lean to the road (a left turn: the right one is outer)."""
    outer, inner = (float(picture.pose.sides[side].camber[0]) for side in ("right", "left"))
    if not (math.isfinite(outer) and math.isfinite(inner)):
        return "At that lean the front parts can't reach; the tires' lean can't be told."
    return (
        f"The outer front tire then leans {words.angle(outer)} to the road and the inner one "
        f"{words.angle(inner)} (positive: top outboard)."
    )


def _lift(layout: Layout, picture: CornerPicture, lateral_g: float) -> float | None:
    """Net lift, N, of the front by its contact lines, side force shared as the wheel loads."""
    solution = solve(layout)
    loads = layout.loads
    if loads.sprung_mass is None or loads.front_share is None:
        return None
    weight = (loads.sprung_mass * loads.front_share + loads.unsprung_front) * GRAVITY
    moved = picture.turn.front.total
    slopes = []
    for state in (solution.right, solution.left):
        a, b = (float(v) for v in state.ride_view.contact_line[:2, 0])
        if not math.isfinite(a + b) or b == 0.0:
            return None
        # Rise toward the centerline per length inboard.
        slopes.append(a / b)
    outer, inner = 0.5 * weight + moved, max(0.5 * weight - moved, 0.0)
    return jacking(outer * lateral_g, inner * lateral_g, slopes[0], slopes[1])
