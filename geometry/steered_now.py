"""The steering as it stands in one solved pose: angles, Ackermann, scrub and the turn's center.

Cheap enough for every frame; the same figures from lock to lock are ``geometry.plan_view``.
Lengths mm, angles rad.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from geometry.ackermann import (
    ideal_outer,
    inner_and_outer,
    kingpin_on_floor,
    percent_ackermann,
    steer_of,
)
from geometry.layout import SIDES, SideName
from geometry.linkage import Array
from geometry.solution import CornerState, Solution
from geometry.steering import car_axes
from geometry.turning_circle import free_rolling

STRAIGHT = float(np.radians(0.25))
"""A mean steer angle below this, rad, is no turn: its center would lie hundreds of feet off."""


@dataclass(frozen=True)
class SteeredNow:
    """Both front wheels in one pose.

    turned      each wheel's angle from its own straight-ahead heading, rad, left positive
    turn        where the car goes; None while it goes (nearly) straight ahead
    inner, outer   the wheels' turned angles into the turn
    percent     percent Ackermann; None straight ahead or without a wheelbase
    ideal       the outer angle that would roll without slip beside the same inner angle
    scrub       how far each tire runs off its own heading, rad, positive where it is turned
                farther to the left than it rolls; None without a wheelbase
    center      how far left of the centerline the car's turn centers on the rear axle's line
    crossing    how far left each wheel's axle line crosses the rear axle's line; with the
                Ackermann condition met, all three are one
    """

    turned: Mapping[SideName, float]
    turn: SideName | None
    inner: float
    outer: float
    percent: float | None = None
    ideal: float | None = None
    scrub: Mapping[SideName, float] | None = None
    center: float | None = None
    crossing: Mapping[SideName, float] | None = None


def _straight_toe(state: CornerState) -> float:
    """Toe with the steering straight ahead at the same travel."""
    if float(state.now.travel[0]) == float(state.ride.travel[0]):
        return float(state.ride.toe[0])
    return float(state.corner.poses(state.now.travel).toe[0])


def steered_now(solution: Solution) -> SteeredNow | None:
    """The steering in the pose that stands; None where the parts don't meet there."""
    if not solution.assembles:
        return None
    turned: dict[SideName, float] = {}
    for side, state in solution.sides.items():
        toe = np.array([float(state.now.toe[0]) - _straight_toe(state)])
        turned[side] = float(steer_of(side, toe)[0]) + 0.0
    if not all(np.isfinite(angle) for angle in turned.values()):
        return None
    mean = 0.5 * (turned["left"] + turned["right"])
    turn: SideName | None = None
    if abs(mean) >= STRAIGHT:
        turn = "left" if mean > 0.0 else "right"
    _, inner, outer = inner_and_outer(np.array(turned["left"]), np.array(turned["right"]))
    now = SteeredNow(turned, turn, float(inner), float(outer))
    wheelbase = solution.layout.wheelbase
    if turn is None or wheelbase is None or not wheelbase > 0.0:
        return now
    return _with_center(now, solution, wheelbase)


def _contact(solution: Solution, side: SideName) -> Array:
    """A tire's contact in the car's axes (3, 1): X forward, Y left."""
    return np.asarray(solution.sides[side].now.contact * car_axes(side))


def _with_center(now: SteeredNow, solution: Solution, wheelbase: float) -> SteeredNow:
    spacing = sum(float(kingpin_on_floor(state.ride)[1, 0]) for state in solution.sides.values())
    ratio = spacing / wheelbase
    contacts = {side: _contact(solution, side) for side in SIDES}
    angles = {side: np.array([now.turned[side]]) for side in SIDES}
    curvature, slips = free_rolling(
        [contacts[side] for side in SIDES], [angles[side] for side in SIDES], wheelbase
    )
    with np.errstate(all="ignore"):
        crossing: dict[SideName, float] = {
            side: float(
                contacts[side][1, 0]
                + (contacts[side][0, 0] + wheelbase) / np.tan(now.turned[side])
            )
            for side in SIDES
        }
        percent = float(percent_ackermann(now.inner, now.outer, ratio))
        ideal = float(ideal_outer(now.inner, ratio))
        center = float(1.0 / curvature[0])
    return SteeredNow(
        now.turned,
        now.turn,
        now.inner,
        now.outer,
        percent if np.isfinite(percent) else None,
        ideal if np.isfinite(ideal) else None,
        {side: float(slip[0]) for side, slip in zip(SIDES, slips, strict=True)},
        center if np.isfinite(center) else None,
        crossing if all(np.isfinite(place) for place in crossing.values()) else None,
    )
