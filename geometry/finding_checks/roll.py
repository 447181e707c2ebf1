"""The roll center at ride height: where it is, and whether the tires' paths agree."""

from __future__ import annotations

import math
from collections.abc import Iterator

import numpy as np

from geometry.finding_checks.arms import ArmName, arm_points, pivot_names, rise_to_aim
from geometry.finding_checks.finding import Cure, Finding, Move, Subject
from geometry.linkage import COINCIDENT_MM, PARALLEL_SINE, line_through, meeting
from geometry.solution import CornerState, Solution

LOWER_ONLY: tuple[ArmName, ...] = ("lower",)
BOTH_ARMS: tuple[ArmName, ...] = ("lower", "upper")
INSIDE = 0.25
"""A cure aims this share of the allowed range inside of the limit."""


def check(subjects: tuple[Subject, ...]) -> Iterator[Finding]:
    """Findings on the roll center, which is the whole car's."""
    first = subjects[0]
    solution = first.solution
    if not all(bool(state.ride.assembles[0]) for state in solution.sides.values()):
        return
    center = solution.ride_roll_center
    points = arm_points(first.state.side)
    if center is None:
        yield first.finding(
            "no-roll-center",
            "warn",
            "There is no roll center at ride height: the lines from the tires to the instant "
            "centers never meet.",
            "They run parallel, or an instant center can't be found because two arm lines lie "
            "on one another.",
            points=points,
            whole_car=True,
        )
        return
    low, high = first.limit("roll center low"), first.limit("roll center high")
    up, words = center[1], first.words
    # Parallel level arms have theirs on the floor, give or take the arithmetic.
    if up < low - COINCIDENT_MM or up > high + COINCIDENT_MM:
        wanted = low + INSIDE * (high - low) if up < low else high - INSIDE * (high - low)
        under = "below the floor" if up < 0.0 else "above the floor"
        yield first.finding(
            "roll-center-low" if up < low else "roll-center-high",
            "warn",
            f"Roll center is {words.tape(up)} {under}, too {'low' if up < low else 'high'}.",
            f"Wanted: {words.signed_tape(low)} to {words.signed_tape(high)} above the floor. "
            "Moving an arm moves the tie rod's best spot as well: set the rack after it.",
            figure=up,
            key="roll center low" if up < low else "roll center high",
            cure=_height_cure(subjects, wanted),
            points=points,
            whole_car=True,
        )
    yield from _path_difference(first, up)


def _height_cure(subjects: tuple[Subject, ...], wanted: float) -> Cure | None:
    """Raise or lower the inner pivots so that each contact line passes the wanted height.

    An A-arm car's instant centers move straight up or down, which leaves camber gain as it
    is; a strut car's moves along the strut's own line.
    """
    words = subjects[0].words
    moves: list[Move] = []
    parts: list[str] = []
    floor = _floor_at_centerline(subjects[0].solution)
    target = np.array([0.0, floor + wanted, 1.0])
    for subject in subjects:
        view, side = subject.state.ride_view, subject.state.side
        contact_line = line_through(view.contact[:, 0], target)
        center = view.instant_center[:, 0]
        if side.is_strut:
            goal = meeting(contact_line, view.upper_line[:, 0])
            arms = LOWER_ONLY
        else:
            vertical = np.array([1.0, 0.0, -center[0]])
            goal = meeting(contact_line, vertical)
            if center[2] != 1.0:
                # Parallel arms stay parallel and take the contact line's slope.
                goal = np.array([-contact_line[1], contact_line[0], 0.0])
            arms = BOTH_ARMS
        for arm in arms:
            rise = rise_to_aim(subject, arm, goal)
            if rise is None:
                return None
            moves += [subject.move(pivot, up=rise) for pivot in pivot_names(side, arm)]
            if words.counts(rise):
                parts.append(
                    f"{'raise' if rise > 0.0 else 'lower'} the "
                    f"{subject.name(f'{arm} inner pivots').lower()} {words.tape(rise)}"
                )
    if not parts:
        return None
    text = ", ".join(parts[:-1]) + (" and " if len(parts) > 1 else "") + parts[-1]
    return Cure(f"{text[0].upper()}{text[1:]} for {words.tape(wanted)}.", tuple(moves))


def _floor_at_centerline(solution: Solution) -> float:
    """Height in the body's frame, mm, of the floor both tires stand on, at the centerline."""
    left, right = solution.left.ride.contact[:, 0], solution.right.ride.contact[:, 0]
    span = float(left[1] + right[1])
    return float(left[2] * right[1] + right[2] * left[1]) / span if span else float(left[2])


def _path_difference(subject: Subject, up: float) -> Iterator[Finding]:
    """The construction's height against the one that the contact points' paths give."""
    by_path = roll_center_by_path(subject.solution)
    if by_path is None or abs(by_path - up) <= subject.limit("roll center path"):
        return
    words = subject.words
    yield subject.finding(
        "roll-center-path",
        "note",
        f"The tires' real paths put the roll center at {words.signed_tape(by_path)}, the strings "
        f"at {words.signed_tape(up)}.",
        "The arms' inner axes are skewed, so the front-view construction is not exact in space. "
        "The floor shows the construction.",
        figure=by_path - up,
        key="roll center path",
        points=arm_points(subject.state.side),
        whole_car=True,
    )


def roll_center_by_path(solution: Solution) -> float | None:
    """Height of the roll center above the floor, mm, where the normals of both contact points'
    front-view paths meet at ride height with the toe held; None if there is none.

    For a plane linkage this is the construction's height. None also if a wheel can't move a
    little either way.
    """
    left, left_way = _contact_path(solution.left)
    linked = solution.right.ride is solution.left.ride
    right, right_way = (left, left_way) if linked else _contact_path(solution.right)
    values = (*left, *left_way, *right, *right_way)
    if not all(math.isfinite(value) for value in values):
        return None
    # In the left side's over: the lines a over + b up = c across each path.
    a, b = left_way
    c = a * left[0] + b * left[1]
    d, e = -right_way[0], right_way[1]
    f = -d * right[0] + e * right[1]
    det = a * e - b * d
    if abs(det) <= PARALLEL_SINE * math.hypot(a, b) * math.hypot(d, e):
        return None
    over, up = (c * e - b * f) / det, (a * f - c * d) / det
    base, rise = left[0] + right[0], left[1] - right[1]
    size = math.hypot(base, rise)
    if size == 0.0:
        return None
    # Height above the line through both contacts, the floor they stand on.
    height = ((over - left[0]) * -rise + (up - left[1]) * base) / size
    return math.copysign(1.0, base) * height


def _contact_path(state: CornerState) -> tuple[tuple[float, float], tuple[float, float]]:
    """The contact point (over, up) at ride height and its velocity per travel, toe held.

    The motion of the sweep's three middle poses, less the turn about the kingpin that its
    toe change stands for: bump steer must not pass for the arms' doing.
    """
    middle = state.sweep.travel.size // 2
    contact, toe = state.sweep.contact[:, middle - 1 : middle + 2], state.sweep.toe
    toe = toe[middle - 1 : middle + 2]
    step = float(state.sweep.travel[middle + 1])
    if bool(np.any(state.shift != 0.0)):
        # The sweep is a steered one; the path is judged straight ahead.
        near = state.corner.poses(np.array([-step, 0.0, step]))
        contact, toe = near.contact, near.toe
    toe_rate = float(toe[2] - toe[0]) / (2.0 * step)
    over_rate, up_rate = (float(v) / (2.0 * step) for v in contact[1:, 2] - contact[1:, 0])
    over_turn, up_turn, toe_turn = _turning(state)
    share = toe_rate / toe_turn if toe_turn else math.nan
    place = float(contact[1, 1]), float(contact[2, 1])
    return place, (over_rate - share * over_turn, up_rate - share * up_turn)


def _turning(state: CornerState) -> tuple[float, float, float]:
    """Rates per turn of the knuckle about the kingpin axis at ride height: the contact
    point's over and up (mm/rad), and the toe (rad/rad)."""
    ride = state.ride
    lower, upper, wheel, spin = (
        tuple(float(v) for v in place[:, 0])
        for place in (ride.lower_ball, ride.upper_ball, ride.wheel_center, ride.spin_axis)
    )
    axis = tuple(u - v for u, v in zip(upper, lower, strict=True))
    arm = tuple(w - v for w, v in zip(wheel, lower, strict=True))
    size = math.hypot(*axis)
    level = math.hypot(spin[0], spin[1])
    if not (size > 0.0 and level > 0.0):
        return math.nan, math.nan, math.nan
    ds = [part / size for part in _crossed(axis, spin)]
    dw = [part / size for part in _crossed(axis, arm)]
    # The contact lies a radius along u below the wheel center, u = (up - s_z s) / level.
    radius = float(state.corner.tire_radius[0])
    level_rate = -spin[2] * ds[2] / level
    rates = []
    for k in (1, 2):
        u = (1.0 if k == 2 else 0.0) - spin[2] * spin[k]
        du = -(ds[2] * spin[k] + spin[2] * ds[k])
        rates.append(dw[k] - radius * (du / level - u * level_rate / level**2))
    return rates[0], rates[1], (ds[0] * spin[1] - spin[0] * ds[1]) / level**2


def _crossed(a: tuple[float, ...], b: tuple[float, ...]) -> tuple[float, float, float]:
    return a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]
