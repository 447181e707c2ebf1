"""The roll center at ride height: where it is, and whether the tires' paths agree."""

from __future__ import annotations

import math
from collections.abc import Iterator

import numpy as np

from geometry.corner import contact_point
from geometry.finding_checks.arms import arm_points, pivot_names, rise_to_aim
from geometry.finding_checks.finding import Cure, Finding, Move, Subject
from geometry.linkage import Array, cross, dot, homogeneous, line_through, meeting, unit
from geometry.solution import CornerState, Solution

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
    if up < low or up > high:
        wanted = low + INSIDE * (high - low) if up < low else high - INSIDE * (high - low)
        under = "below the floor" if up < 0.0 else "above the floor"
        yield first.finding(
            "roll-center-low" if up < low else "roll-center-high",
            "warn",
            f"Roll center is {words.tape(up)} {under}, too {'low' if up < low else 'high'}.",
            f"Usual: {words.signed_tape(low)} to {words.signed_tape(high)} above the floor.",
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
            arms = ("lower",)
        else:
            vertical = np.array([1.0, 0.0, -center[0]])
            goal = meeting(contact_line, vertical)
            if center[2] != 1.0:
                # Parallel arms stay parallel and take the contact line's slope.
                goal = np.array([-contact_line[1], contact_line[0], 0.0])
            arms = ("lower", "upper")
        for arm in arms:
            rise = rise_to_aim(subject, "lower" if arm == "lower" else "upper", goal)
            if rise is None:
                return None
            moves += [
                subject.move(n, up=rise)
                for n in pivot_names(side, "lower" if arm == "lower" else "upper")
            ]
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
    with np.errstate(all="ignore"):
        lines = []
        for state in solution.sides.values():
            contact, tangent = _contact_path(state)
            lines.append((contact, np.array([tangent[1], tangent[2], 0.0])))
            if state.name == "left" and solution.right.ride is state.ride:
                lines.append(lines[0])
                break
        (left, left_way), (right, right_way) = lines
        left_line = _normal_line(left, left_way)
        right_line = _normal_line(right, right_way) * np.array([-1.0, 1.0, 1.0])
        point = meeting(left_line, right_line)
        if point[2] != 1.0:
            return None
        floor = line_through(
            homogeneous(-right[1], right[2]), homogeneous(left[1], left[2])
        )
        floor = floor if floor[1] > 0.0 else -floor
        height = float(floor[0] * point[0] + floor[1] * point[1] + floor[2])
        return height if math.isfinite(height) else None


def _normal_line(through: Array, way: Array) -> Array:
    """The front-view line across a path's direction ``way`` (over, up, -)."""
    size = np.hypot(way[0], way[1])
    a, b = way[0] / size, way[1] / size
    return np.array([a, b, -(a * through[1] + b * through[2])])


def _contact_path(state: CornerState) -> tuple[Array, Array]:
    """The contact point (3,) at ride height and its velocity (3,) per travel, toe held.

    The motion of the sweep's three middle poses, less the turn about the kingpin that its
    toe change stands for: bump steer must not pass for the arms' doing.
    """
    step = state.pivots.motion.travel[-1] / (state.pivots.motion.travel.size // 2)
    if bool(np.any(state.shift != 0.0)):
        near = state.corner.poses(np.array([-step, 0.0, step]))
        contact, toe = near.contact, near.toe
    else:
        middle = state.sweep.travel.size // 2
        contact = state.sweep.contact[:, middle - 1 : middle + 2]
        toe = state.sweep.toe[middle - 1 : middle + 2]
    velocity = (contact[:, 2] - contact[:, 0]) / (2.0 * step)
    toe_rate = (toe[2] - toe[0]) / (2.0 * step)
    ride, turn = state.ride, np.array([-1e-4, 1e-4])
    axis = unit(ride.upper_ball - ride.lower_ball)

    def turned(vector: Array) -> Array:
        return np.asarray(
            np.cos(turn) * vector
            + np.sin(turn) * cross(axis, vector)
            + (1.0 - np.cos(turn)) * dot(axis, vector) * axis
        )

    wheel = ride.lower_ball + turned(ride.wheel_center - ride.lower_ball)
    spin = turned(ride.spin_axis)
    steered = contact_point(wheel, spin, np.broadcast_to(state.corner.tire_radius, (2,)))
    steered_toe = np.arctan2(spin[0], spin[1])
    per_toe = (steered[:, 1] - steered[:, 0]) / (steered_toe[1] - steered_toe[0])
    return contact[:, 1], velocity - toe_rate * per_toe
