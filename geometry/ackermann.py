"""Inner, outer and ideal: the Ackermann condition, and cars steered to a wanted angle.

Every steered pose is the spatial solver's, with the rack displaced; nothing here is a plane
mechanism. A car's wheels are told apart by the turn: the inner wheel is the one on the
side of the turn's center. Turned angles are measured from the wheel's own straight-ahead
heading, so that static toe is no part of Ackermann.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Literal, TypeAlias

import numpy as np

from geometry.corner import Corner, Poses, space
from geometry.layout import SIDES, Layout, Side, SideName
from geometry.linkage import COINCIDENT_MM, Array
from geometry.steering import inner_shifts

LIMIT_STEP = 1.0
"""Rack displacements, mm, by whose multiples the limit at straight ahead is extrapolated."""

_Value: TypeAlias = Callable[[Array, Array], Array]

_TABLE_STEPS = 17
_REFINE_STEPS = 40
_ANGLE_TOLERANCE = 1e-13


def ideal_outer(inner: Array | float, ratio: Array | float) -> Array:
    """The outer wheel's angle (...), rad, that rolls without slip beside ``inner`` (...).

    cot(outer) - cot(inner) = ratio, the kingpin spacing over the wheelbase (Ackermann).
    """
    return np.arctan2(np.sin(inner), np.cos(inner) + ratio * np.sin(inner))


def ideal_inner(outer: Array | float, ratio: Array | float) -> Array:
    """The inner wheel's angle (...), rad, that rolls without slip beside ``outer`` (...)."""
    return np.arctan2(np.sin(outer), np.cos(outer) - ratio * np.sin(outer))


def percent_ackermann(inner: Array | float, outer: Array | float, ratio: Array | float) -> Array:
    """100 x (inner - outer) / (inner - ideal outer) (...), the ideal at the same inner angle.

    0 where both wheels turn alike, 100 where both roll without slip, negative (reverse
    Ackermann) where the outer wheel turns more. NaN where nothing is turned.
    """
    with np.errstate(all="ignore"):
        spread = inner - ideal_outer(inner, ratio)
        return np.asarray(100.0 * (inner - outer) / np.where(spread == 0.0, np.nan, spread))


def inner_and_outer(left: Array, right: Array) -> tuple[Array, Array, Array]:
    """Which wheel is inner: (turn, inner, outer), each (...), from the wheels' turned angles.

    ``left`` and ``right`` are positive to the left (ISO 8855). ``turn`` is +1 in a left
    turn, -1 in a right turn, 0 straight ahead; inner and outer are positive into the turn.
    """
    turn = np.sign(left + right)
    inner = np.where(turn >= 0.0, left, -right)
    outer = np.where(turn >= 0.0, right, -left)
    return turn, inner, outer


def steer_of(side: SideName, toe: Array) -> Array:
    """Steer angle (...), rad, positive to the left (ISO 8855:2011, 7.1.8), from toe-in (...)."""
    return 0.0 - toe if side == "left" else +toe


def kingpin_on_floor(poses: Poses) -> Array:
    """Where the kingpin axis meets the floor under the tire, (3, ...) mm in the side's axes.

    NaN where the axis lies level.
    """
    with np.errstate(all="ignore"):
        return axis_at_height(poses, poses.contact[2])


def axis_at_height(poses: Poses, up: Array | float) -> Array:
    """Where the kingpin axis passes a height ``up`` (...), (3, ...) mm; NaN if it never does."""
    axis = poses.upper_ball - poses.lower_ball
    with np.errstate(all="ignore"):
        rise = np.where(np.abs(axis[2]) < COINCIDENT_MM, np.nan, axis[2])
        return np.asarray(poses.lower_ball + (up - poses.lower_ball[2]) / rise * axis)


@dataclass(frozen=True)
class Lock:
    """How far the rack is moved to the right (negative) and to the left (positive), mm."""

    right: float
    left: float


class SteeredCars:
    """Some cars of one kind (k,), steered together: racks in, turned angles out.

    ``travel`` mm holds each side's wheels; the wheelbase is the first car's. Racks are
    (k, m) mm.
    """

    def __init__(
        self, layouts: Sequence[Layout], lock: Lock, travel: dict[SideName, float] | None = None
    ) -> None:
        self.layouts = tuple(layouts)
        self.lock = lock
        self.travel: dict[SideName, float] = dict(travel or dict.fromkeys(SIDES, 0.0))
        self.corners = {
            side: _together([layout.side(side) for layout in self.layouts]) for side in SIDES
        }
        straight = self._poses(np.zeros((len(self.layouts), 1)))
        self._ahead = {side: straight[side].toe for side in SIDES}
        self.spacing = np.add(*(kingpin_on_floor(straight[side])[1] for side in SIDES))
        wheelbase = self.layouts[0].wheelbase
        self.ratio = self.spacing / (wheelbase if wheelbase and wheelbase > 0.0 else np.nan)

    def _poses(self, rack: Array) -> dict[SideName, Poses]:
        shifts = [inner_shifts(car, row) for car, row in zip(self.layouts, rack, strict=True)]
        return {
            side: self.corners[side].poses(
                self.travel[side], np.stack([shift[side] for shift in shifts], axis=1)
            )
            for side in SIDES
        }

    def turned(self, rack: Array) -> tuple[Array, Array]:
        """How far the left and the right wheel have turned (k, m), rad, left positive."""
        poses = self._poses(rack)
        left, right = (steer_of(side, poses[side].toe - self._ahead[side]) for side in SIDES)
        return left, right

    def percent(self, rack: Array) -> Array:
        """Percent Ackermann (k, m); NaN where the parts don't meet, or without a wheelbase."""
        _, inner, outer = inner_and_outer(*self.turned(rack))
        return percent_ackermann(inner, outer, self.ratio)

    def straight_ahead_percent(self) -> Array:
        """The limit of percent Ackermann toward straight ahead (k,): the mean of both turns.

        Extrapolated by a cubic in the size of the rack displacement, as the ideal's third
        order makes the percentage start with a slope. On a car whose sides are not alike
        each turn alone has no limit, their mean has.
        """
        steps = LIMIT_STEP * np.arange(1.0, 5.0)
        racks = np.concatenate([steps, -steps])
        percent = self.percent(np.broadcast_to(racks, (len(self.layouts), racks.size)))
        both = 0.5 * (percent[:, :4] + percent[:, 4:])
        return np.asarray(both @ np.array([4.0, -6.0, 4.0, -1.0]))

    def rack_where(self, wheel: Literal["inner", "outer"], angle: float) -> Array:
        """The rack (k, 2), mm, that turns a wheel by ``angle`` rad: in a left and a right turn.

        The first place on the way from straight ahead to the lock; NaN if it isn't reached.
        """
        shares = np.linspace(0.0, 1.0, _TABLE_STEPS)
        halves = np.concatenate([self.lock.left * shares, self.lock.right * shares])
        table = np.broadcast_to(halves, (len(self.layouts), halves.size))
        with np.errstate(all="ignore"):
            shape = (len(self.layouts), 2, _TABLE_STEPS)
            angles = [part.reshape(shape) for part in self.turned(table)]
            # The turn that each half of the rack's travel makes, from its first step.
            turn = np.sign(angles[0][..., 1] + angles[1][..., 1])
            is_left = (turn > 0.0) == (wheel == "inner")
            sign = np.where(turn == 0.0, np.nan, turn)

            def value(left: Array, right: Array) -> Array:
                return np.where(is_left, left, right) * sign - angle

            rows = np.where(is_left[..., None], angles[0], angles[1]) * sign[..., None] - angle
            racks = self._crossing(table.reshape(shape), rows, value)
            left_first = turn[:, 0] >= 0.0
            return np.where(left_first[:, None], racks, racks[:, ::-1])

    def _crossing(self, table: Array, rows: Array, value: _Value) -> Array:
        """Where each row (k, 2, m) first rises through zero, refined by the Illinois rule."""
        past = rows >= 0.0
        first = np.argmax(past, axis=-1)[..., None]
        reached = past.any(axis=-1) & (first[..., 0] > 0)
        before = np.maximum(first - 1, 0)

        def pick(values: Array, index: np.ndarray) -> Array:
            return np.where(reached, np.take_along_axis(values, index, axis=-1)[..., 0], np.nan)

        low, high = pick(table, before), pick(table, first)
        at_low, at_high = pick(rows, before), pick(rows, first)
        best = high
        for _ in range(_REFINE_STEPS):
            middle = high - at_high * (high - low) / (at_high - at_low)
            middle = np.where(np.isfinite(middle), middle, 0.5 * (low + high))
            now = value(*self.turned(middle))
            best = middle
            if not np.any(np.abs(now) > _ANGLE_TOLERANCE):
                break
            crossed = now * at_high < 0.0
            low = np.where(crossed, high, low)
            at_low = np.where(crossed, at_high, 0.5 * at_low)
            high, at_high = middle, now
        return best

    def percent_at(self, inner: float) -> Array:
        """Percent Ackermann (k,) with the inner wheel turned by ``inner`` rad.

        The mean of a left and a right turn, or the one that is reached; NaN if neither is.
        """
        both = self.percent(self.rack_where("inner", inner))
        there = np.isfinite(both)
        count = there.sum(axis=1)
        total = np.where(there, both, 0.0).sum(axis=1)
        return np.where(count > 0, total / np.maximum(count, 1), np.nan)


def _together(sides: Sequence[Side]) -> Corner:
    """Sides of one kind as a batch of corners (k,), even where there is only one."""
    shared = [name for name in sides[0].points if all(name in s.points for s in sides)]
    return Corner(
        {name: np.stack([space(s[name]) for s in sides], axis=1) for name in shared},
        np.array([s.static_camber for s in sides]),
        np.array([s.static_toe for s in sides]),
        np.array([s.tire.radius for s in sides]),
    )
