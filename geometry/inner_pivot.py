"""Where the inner tie-rod pivot belongs: string rule, curvature center and best fit.

All three stand in the front view at the rack's fore-aft station. The knuckle's motion with
its toe held does not depend on the inner pivot, so it is solved once (``HeldMotion``) and
any number of inner pivots are then judged against it in one array expression.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from geometry.corner import Corner
from geometry.front_view import FrontView, inner_pivot_of
from geometry.linkage import Array, cross, dot, homogeneous, line_through, meeting, unit
from geometry.minimax import minimax

STENCIL_STEP = 0.01
"""Arm swing between the samples of the eighth-order difference formulas, rad."""
_FIRST = np.array([1 / 280, -4 / 105, 1 / 5, -4 / 5, 0.0, 4 / 5, -1 / 5, 4 / 105, -1 / 280])
_SECOND = np.array(
    [-1 / 560, 8 / 315, -1 / 5, 8 / 5, -205 / 72, 8 / 5, -1 / 5, 8 / 315, -1 / 560]
)


@dataclass(frozen=True)
class HeldMotion:
    """A corner moved with its toe held at the static toe; shapes (*cars, n).

    The knuckle may still turn about the kingpin by an angle ``turn`` away from that place:
    the outer tie-rod end is then ``axle + cos(turn) * arm + sin(turn) * across``, and the
    spin axis likewise. Vectors (3, ...); travel (...) mm; assembles (...) bool.
    """

    travel: Array
    assembles: np.ndarray
    axle: Array
    arm: Array
    across: Array
    spin_along: Array
    spin_arm: Array
    spin_across: Array

    @property
    def tie_outer(self) -> Array:
        """The outer tie-rod end (3, ...) while the toe is held."""
        return self.axle + self.arm

    def toe_at(self, turn: Array) -> Array:
        """Toe (...), rad, with the knuckle turned about the kingpin by ``turn`` (...) rad."""
        cos, sin = np.cos(turn), np.sin(turn)
        fore = self.spin_along[0] + cos * self.spin_arm[0] + sin * self.spin_across[0]
        over = self.spin_along[1] + cos * self.spin_arm[1] + sin * self.spin_across[1]
        return np.asarray(np.arctan2(fore, over))

    def toe_for(self, inner: Array, rod: Array, shift: Array | None = None) -> Array:
        """Toe (...), rad, for inner pivots (3, ...) with tie rods of length ``rod`` (...).

        NaN where the tie rod can't reach or the arms don't meet. ``shift`` (3, ...) moves the
        inner pivot (rack).
        """
        toe = self.toe_at(self.turn_for(inner if shift is None else inner + shift, rod))
        # Where the arms don't meet the motion holds the nearest it came, which is no pose.
        return np.where(self.assembles, toe, np.nan)

    def turn_for(self, inner: Array, rod: Array) -> Array:
        """The knuckle's turn (...), rad, about the kingpin that fits a tie rod.

        One trigonometric equation a pose: a cos(turn) + b sin(turn) = c.
        """
        base = self.axle - inner
        a, b = dot(base, self.arm), dot(base, self.across)
        c = 0.5 * (rod * rod - dot(base, base) - dot(self.arm, self.arm))
        size = np.hypot(a, b)
        # Of the two solutions the car was built in the one near turn = 0.
        swing = np.arccos(np.where(np.abs(c) <= size, c / size, np.nan))
        middle = np.arctan2(b, a)
        return np.asarray(middle - np.where(middle < 0.0, -swing, swing))


def held_motion(corner: Corner, swing: Array) -> HeldMotion:
    """The corner with the lower arm at each ``swing`` (..., n), rad, and its toe held."""
    with np.errstate(all="ignore"):
        lower = corner.lower_ball_at(swing)
        upper, in_knuckle, margin = corner.guide.upper(lower)
        axis = unit(upper - lower)
        ride_axis = unit(in_knuckle - corner.lower_ball)
        along, spin_arm, spin_across, fits = _hold_toe(corner, axis, ride_axis)

        # The knuckle's frame at ride height and now: kingpin, and the spin axis beside it.
        side_ride = corner.spin_axis - dot(corner.spin_axis, ride_axis) * ride_axis
        third_ride = cross(ride_axis, side_ride)
        size = dot(side_ride, side_ride)

        def carried(place: Array) -> tuple[Array, Array, Array]:
            high = dot(place, ride_axis)
            x, y = dot(place, side_ride) / size, dot(place, third_ride) / size
            return (
                high * axis,
                x * spin_arm + y * spin_across,
                x * spin_across - y * spin_arm,
            )

        axle, arm, across = carried(corner.tie_outer - corner.lower_ball)
        wheel_axle, wheel_arm, _ = carried(corner.wheel_center - corner.lower_ball)
        travel = (lower + wheel_axle + wheel_arm)[2] - corner.wheel_center[2]
        return HeldMotion(
            travel=travel,
            assembles=np.asarray(
                (margin >= 0.0) & fits & np.isfinite(travel) & corner.as_built
            ),
            axle=lower + axle,
            arm=arm,
            across=across,
            spin_along=along,
            spin_arm=spin_arm,
            spin_across=spin_across,
        )


def _hold_toe(
    corner: Corner, axis: Array, ride_axis: Array
) -> tuple[Array, Array, Array, np.ndarray]:
    """The spin axis split along and across the kingpin, turned so that toe is static."""
    spin_high = dot(corner.spin_axis, ride_axis)
    side = corner.spin_axis - spin_high * ride_axis
    size = np.sqrt(dot(side, side))
    # A first frame across the moved kingpin, near the ride-height one.
    first = unit(side - dot(side, axis) * axis)
    second = cross(axis, first)
    toe = corner.static_toe
    heading = np.stack([np.cos(toe), -np.sin(toe), np.zeros_like(toe)])
    a, b = size * dot(first, heading), size * dot(second, heading)
    c = -spin_high * dot(axis, heading)
    reach = np.hypot(a, b)
    swing = np.arccos(np.clip(c / reach, -1.0, 1.0))
    middle = np.arctan2(b, a)
    turn = middle - np.where(middle < 0.0, -swing, swing)
    cos, sin = np.cos(turn), np.sin(turn)
    spin_arm = size * (cos * first + sin * second)
    return spin_high * axis, spin_arm, cross(axis, spin_arm), np.abs(c) <= reach


def held_travel(corner: Corner, travel: Array) -> HeldMotion:
    """The toe-held motion at given wheel travels (n,), mm (secant steps on the arm's swing)."""
    shape = np.broadcast_shapes((*corner.cars, 1), travel.shape)
    travel = np.broadcast_to(travel, shape)
    with np.errstate(all="ignore"):
        low, high, swings, _ = corner.swing_range
        now = corner.start(travel)
        before = now - 0.1 * (swings[1] - swings[0])
        gap_before = held_motion(corner, before).travel - travel
        for _ in range(12):
            motion = held_motion(corner, now)
            gap = motion.travel - travel
            if not np.any(np.abs(gap) > 1e-9):
                break
            # A pose that is found stays put while others are still looked for: two steps from
            # the same place have no slope and would throw it anywhere.
            settled = np.abs(gap) <= 1e-10
            move = np.where(settled, 0.0, gap * (now - before) / (gap - gap_before))
            after = np.clip(now - move, low, high)
            after = np.where(np.isfinite(after), after, now)
            before, gap_before, now = now, gap, after
        ok = motion.assembles & (np.abs(gap) < 1e-6)
    return HeldMotion(**{**motion.__dict__, "assembles": np.asarray(ok)})


def string_rule(corner: Corner, view: FrontView) -> Array:
    """The string rule's point (*cars): homogeneous (3, *cars), at ride height.

    Common practice: the string from the outer tie-rod end to the instant center, crossed
    with the string through the lower and upper inner pivots. On a strut corner the second
    string runs from the lower inner pivot to the top mount. ``view`` holds ride height as
    its only pose.
    """
    with np.errstate(all="ignore"):
        center = view.instant_center[..., 0]
        outer = homogeneous(corner.tie_outer[1], corner.tie_outer[2])[..., 0]
        lower = inner_pivot_of(corner, "lower")
        if corner.is_strut:
            top = corner.upper_ride
            upper = homogeneous(top[1], top[2])[..., 0]
        else:
            upper = inner_pivot_of(corner, "upper")
        return meeting(line_through(outer, center), line_through(lower, upper))


def curvature_center(corner: Corner) -> Array:
    """The inner pivot (2, *cars), over and up in mm, that leaves toe no slope or curvature.

    The tie rod's length stays the same to second order when, for the path P of the outer
    end with toe held, (P - Q).P' = 0 and P'.P' + (P - Q).P'' = 0: two linear equations in
    Q's over and up at the rack's station. For a plane linkage Q is the path's center of
    curvature, as Bobillier's theorem and the Euler-Savary equation give it (Hartenberg and
    Denavit, Kinematic Synthesis of Linkages, 1964, ch. 7); parallel arms need no limit
    form here. NaN where the path has no center (a straight path).
    """
    with np.errstate(all="ignore"):
        swing = STENCIL_STEP * np.arange(-4.0, 5.0)
        path = held_motion(corner, swing).tie_outer
        speed = path @ _FIRST / STENCIL_STEP
        bend = path @ _SECOND / STENCIL_STEP**2
        outer, inner = corner.tie_outer[..., 0], corner.tie_inner[..., 0]
        fore = outer[0] - inner[0]
        right_first = fore * speed[0]
        right_second = fore * bend[0] + dot(speed, speed)
        det = speed[1] * bend[2] - speed[2] * bend[1]
        size = np.hypot(speed[1], speed[2]) * np.hypot(bend[1], bend[2])
        det = np.where(np.abs(det) > 1e-9 * size, det, np.nan)
        # (P - Q) across the front view, from the two equations.
        over = (-right_first * bend[2] + right_second * speed[2]) / det
        up = (-right_second * speed[1] + right_first * bend[1]) / det
        return np.stack([outer[1] - over, outer[2] - up])


def toe_of(motion: HeldMotion, corner: Corner, pivots: Array) -> Array:
    """Toe (*cars, k, n), rad, for inner pivots (2, *cars, k) at the rack's station.

    Each tie rod is cut to length at ride height.
    """
    inner = np.stack(np.broadcast_arrays(corner.tie_inner[0], pivots[0], pivots[1]))[..., None]
    rod = corner.tie_outer[..., None] - inner
    flat = ("travel", "assembles")
    grown = HeldMotion(
        **{
            name: value[..., None, :] if value.ndim > 1 or name in flat else value
            for name, value in motion.__dict__.items()
        }
    )
    return grown.toe_for(inner, np.sqrt(dot(rod, rod)))


def toe_range(toe: Array) -> Array:
    """Peak to peak over the last axis; NaN if any pose of it is missing."""
    return np.asarray(np.max(toe, axis=-1) - np.min(toe, axis=-1))


def best_fit(corner: Corner, motion: HeldMotion, start: Array) -> Array:
    """The inner pivot (2,), over and up in mm, with the least toe range over a motion.

    For a single corner (cars == ()). Minimax by exchange on the linearised toe, repeated
    on the exact toe until it settles; ``start`` (2,) is the first guess (the curvature
    center, or the present pivot).
    """
    with np.errstate(all="ignore"):
        place = np.array(start, dtype=float)
        toe = toe_of(motion, corner, place[:, None])[0]
        least = toe_range(toe)
        if not np.isfinite(least):
            return np.full(2, np.nan)
        step = 1e-3
        for _ in range(12):
            probes = place[:, None] + step * np.array([[0, 1, -1, 0, 0], [0, 0, 0, 1, -1]])
            toes = toe_of(motion, corner, probes)
            slopes = np.stack([toes[1] - toes[2], toes[3] - toes[4]], axis=1) / (2 * step)
            move = minimax(slopes, toes[0])
            if move is None:
                break
            # Shorten a step that overshoots where the linear picture does not hold.
            shares = np.array([1.0, 0.5, 0.25, 0.1, 0.03, 0.01])
            ranges = toe_range(toe_of(motion, corner, place[:, None] + move[:, None] * shares))
            choice = int(np.nanargmin(ranges)) if np.any(np.isfinite(ranges)) else 0
            if not ranges[choice] < least * (1.0 - 1e-9):
                break
            place, least = place + shares[choice] * move, ranges[choice]
            if np.hypot(*(shares[choice] * move)) < 1e-6:
                break
        return place
