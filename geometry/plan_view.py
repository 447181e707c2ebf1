"""The steering seen from above: wheel angles through the lock, Ackermann, turning circle.

All poses come from the spatial solver with the rack (or the pitman arm's end) displaced.
Angles are radians, lengths mm. X is forward and Y to the left; turns are named by the
side that they go to. The wheels stay at the travel given, and the body stands level.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from geometry.ackermann import (
    Lock,
    SteeredCars,
    ideal_inner,
    ideal_outer,
    inner_and_outer,
    kingpin_on_floor,
    percent_ackermann,
    steer_of,
)
from geometry.corner import Corner, Poses
from geometry.layout import SIDES, Layout, SideName, other_side
from geometry.linkage import Array
from geometry.solution import Solution
from geometry.steering import RackLimits, car_axes, inner_shifts, rack_limits, steering_faults
from geometry.turning_circle import TurningCircle, free_rolling, widths

TOE_OUT_ANGLE = float(np.radians(20.0))
"""The outer wheel's angle at which service manuals give toe-out on turns.

US Army TM 9-8000, para 33-17: the excess over 20 degrees of the inner wheel.
"""

LOCK_STEPS = 41
"""Racks from straight ahead to each lock."""


@dataclass(frozen=True)
class WheelSteer:
    """One wheel through the lock; arrays (n,) over the racks, NaN where parts don't meet.

    steer    steer angle, rad, positive to the left (ISO 8855:2011, 7.1.8), static toe in it
    turned   the same from the wheel's own straight-ahead heading
    contact, wheel_center, spin   (3, n) in the car's axes: X forward, Y left, Z up
    ``poses`` holds camber, caster and all else in the side's own measures; ``straight`` the
    straight-ahead pose, shape (1,).
    """

    side: SideName
    poses: Poses
    straight: Poses
    steer: Array
    turned: Array

    @property
    def camber(self) -> Array:
        return self.poses.camber

    @property
    def caster(self) -> Array:
        return self.poses.caster

    @property
    def contact(self) -> Array:
        return self.poses.contact * car_axes(self.side)

    @property
    def wheel_center(self) -> Array:
        return self.poses.wheel_center * car_axes(self.side)

    @property
    def spin(self) -> Array:
        """Unit vector outboard along the axle, (3, n), in the car's axes."""
        return self.poses.spin_axis * car_axes(self.side)


@dataclass(frozen=True)
class ToeOut:
    """Toe-out on turns at one outer angle: rad, and the rack that gives it, mm."""

    turn: SideName
    rack: float
    outer: float
    inner: float
    ideal_inner: float | None

    @property
    def excess(self) -> float:
        """How much more the inner wheel has turned than the outer, rad."""
        return self.inner - self.outer


@dataclass(frozen=True)
class SteeredTravel:
    """Bump steer with the wheels turned: toe through travel at each rack.

    ``rack`` (m,) and ``travel`` (n,) mm; ``toe_change`` (m, n) rad per side, toe-in
    positive, against the toe at ride height with the same rack; NaN where the parts don't
    meet.
    """

    rack: Array
    travel: Array
    toe_change: Mapping[SideName, Array]

    def range_of(self, side: SideName) -> Array:
        """Peak to peak (m,), rad; NaN where a pose of the travel is missing."""
        change = self.toe_change[side]
        return np.asarray(np.max(change, axis=1) - np.min(change, axis=1))


@dataclass(frozen=True)
class PlanView:
    """A car's steering from lock to lock. ``rack`` (n,) mm runs from right to left.

    ``travel`` mm is where the wheels are held; ``sides`` hold both wheels; ``notes`` say in
    sentences why a figure is missing.
    """

    layout: Layout
    travel: Mapping[SideName, float]
    limits: RackLimits
    rack: Array
    sides: Mapping[SideName, WheelSteer]

    @property
    def left(self) -> WheelSteer:
        return self.sides["left"]

    @property
    def right(self) -> WheelSteer:
        return self.sides["right"]

    @cached_property
    def assembles(self) -> np.ndarray:
        """(n,) bool: where both sides meet."""
        return np.asarray(self.left.poses.assembles & self.right.poses.assembles)

    @cached_property
    def ahead(self) -> int:
        """The index of straight ahead."""
        return int(np.argmin(np.abs(self.rack)))

    @cached_property
    def wheelbase(self) -> float | None:
        given = self.layout.wheelbase
        return given if given is not None and given > 0.0 else None

    @cached_property
    def spacing(self) -> float | None:
        """Kingpin spacing, mm: between the axes where they meet the floor, straight ahead."""
        both = [kingpin_on_floor(wheel.straight)[1, 0] for wheel in self.sides.values()]
        total = float(sum(both))
        return total if np.isfinite(total) else None

    @cached_property
    def ratio(self) -> float | None:
        """Kingpin spacing over wheelbase; None if either is missing."""
        if self.spacing is None or self.wheelbase is None:
            return None
        return self.spacing / self.wheelbase

    @cached_property
    def notes(self) -> tuple[str, ...]:
        """Why figures are missing, as sentences."""
        notes = list(steering_faults(self.layout))
        if self.wheelbase is None:
            notes.append(
                "The wheelbase is not given, so Ackermann and the turning circle are not known."
            )
        if not bool(self.assembles[self.ahead]):
            notes.append("The front end does not go together straight ahead at this travel.")
        elif self.spacing is None:
            notes.append("A kingpin axis lies level and never meets the floor.")
        return tuple(notes)

    # --- inner and outer -----------------------------------------------------------------

    @cached_property
    def _told_apart(self) -> tuple[Array, Array, Array]:
        return inner_and_outer(self.left.turned, self.right.turned)

    @property
    def turn(self) -> Array:
        """(n,): +1 in a left turn, -1 in a right turn, 0 straight ahead."""
        return self._told_apart[0]

    @property
    def inner(self) -> Array:
        """The inner wheel's turned angle (n,), rad, positive into the turn."""
        return self._told_apart[1]

    @property
    def outer(self) -> Array:
        """The outer wheel's turned angle (n,), rad, positive into the turn."""
        return self._told_apart[2]

    @cached_property
    def ideal_outer(self) -> Array | None:
        """The outer angle (n,), rad, that rolls without slip beside the same inner angle."""
        return None if self.ratio is None else ideal_outer(self.inner, self.ratio)

    @cached_property
    def percent(self) -> Array | None:
        """Percent Ackermann (n,), at straight ahead its limit; NaN where it doesn't exist.

        100 x (inner - outer) / (inner - ideal outer), the ideal at the same inner angle.
        """
        if self.ratio is None:
            return None
        percent = percent_ackermann(self.inner, self.outer, self.ratio)
        limit = self.straight_ahead_percent
        percent[self.ahead] = np.nan if limit is None else limit
        return percent

    @cached_property
    def straight_ahead_percent(self) -> float | None:
        """Percent Ackermann in the limit of small angles, the mean of both turns."""
        return _number(self._cars.straight_ahead_percent()[0])

    def percent_at(self, inner: float) -> float | None:
        """Percent Ackermann with the inner wheel turned by ``inner`` rad, mean of both turns.

        None if the wheel doesn't get there or the wheelbase isn't given.
        """
        return _number(self._cars.percent_at(inner)[0])

    @cached_property
    def lock_percent(self) -> dict[SideName, float | None]:
        """Percent Ackermann at the stop of a left and of a right turn."""
        out: dict[SideName, float | None] = {"left": None, "right": None}
        if self.percent is not None:
            for turn, index in self._stops.items():
                out[turn] = _number(self.percent[index])
        return out

    @cached_property
    def is_reverse(self) -> bool:
        """True if the outer wheel turns more than the inner, at either stop or straight ahead."""
        figures = [self.straight_ahead_percent, *self.lock_percent.values()]
        return any(figure is not None and figure < 0.0 for figure in figures)

    @cached_property
    def _stops(self) -> dict[SideName, int]:
        """The index of the last rack that meets, for each turn that the car can make."""
        found: dict[SideName, int] = {}
        for order in (range(self.ahead, -1, -1), range(self.ahead, self.rack.size)):
            last = self.ahead
            for index in order:
                if not self.assembles[index]:
                    break
                last = index
            if self.turn[last] > 0.0:
                found["left"] = last
            elif self.turn[last] < 0.0:
                found["right"] = last
        return found

    def stop(self, turn: SideName) -> int | None:
        """The index of the last rack that meets on the way to a turn's stop; None without one."""
        return self._stops.get(turn)

    @cached_property
    def _cars(self) -> SteeredCars:
        return SteeredCars([self.layout], self.lock, dict(self.travel))

    @property
    def lock(self) -> Lock:
        """The racks at both ends of the lock, mm."""
        return Lock(float(self.rack[0]), float(self.rack[-1]))

    # --- toe-out on turns, slip and turning circle -----------------------------------------

    @cached_property
    def toe_out(self) -> dict[SideName, ToeOut | None]:
        """Toe-out on turns with the outer wheel at TOE_OUT_ANGLE; None if it isn't reached."""
        return self.toe_out_at(TOE_OUT_ANGLE)

    def toe_out_at(self, outer: float) -> dict[SideName, ToeOut | None]:
        """The inner wheel's angle with the outer turned by ``outer`` rad, for both turns."""
        racks = self._cars.rack_where("outer", outer)
        _, inner, _ = inner_and_outer(*self._cars.turned(racks))
        ideal = None if self.ratio is None else float(ideal_inner(outer, self.ratio))
        return {
            turn: ToeOut(turn, float(racks[0, k]), outer, float(inner[0, k]), ideal)
            if np.isfinite(inner[0, k])
            else None
            for k, turn in enumerate(SIDES)
        }

    @cached_property
    def _rolling(self) -> tuple[Array, list[Array]] | None:
        """Signed curvature (n,), 1/mm, left positive, and the left and right slip (n,)."""
        if self.wheelbase is None:
            return None
        wheels = [self.left, self.right]
        return free_rolling(
            [wheel.contact for wheel in wheels], [wheel.turned for wheel in wheels], self.wheelbase
        )

    @cached_property
    def slip(self) -> dict[SideName, Array] | None:
        """How far each front tire runs off its own heading (n,), rad; None without wheelbase.

        Positive when it is turned farther to the left than it rolls. The turn center is
        taken on the rear axle's line, where both tires slip alike and opposite; a car that
        meets the Ackermann condition has none.
        """
        if self._rolling is None:
            return None
        return dict(zip(SIDES, self._rolling[1], strict=True))

    @cached_property
    def turning_circle(self) -> dict[SideName, TurningCircle | None]:
        """The tightest left and right turn; None where there is none."""
        out: dict[SideName, TurningCircle | None] = {"left": None, "right": None}
        for turn, index in self._stops.items():
            out[turn] = self._circle(turn, index)
        return out

    def _circle(self, turn: SideName, index: int) -> TurningCircle | None:
        if self._rolling is None or self.wheelbase is None:
            return None
        curvature = float(self._rolling[0][index])
        if not np.isfinite(curvature) or curvature == 0.0:
            return None
        outer = self.sides[other_side(turn)]
        tire = self.layout.side(outer.side).tire
        curb, wall = widths(
            np.array([-self.wheelbase, 1.0 / curvature]),
            outer.contact[:, index],
            outer.wheel_center[:, index],
            outer.spin[:, index],
            tire.radius,
            tire.width,
        )
        into_turn = 1.0 if turn == "left" else -1.0
        slips = dict(zip(SIDES, self._rolling[1], strict=True))
        return TurningCircle(
            turn=turn,
            rack=float(self.rack[index]),
            center=abs(1.0 / curvature),
            curb_to_curb=curb,
            wall_to_wall=wall,
            inner_slip=into_turn * float(slips[turn][index]),
            outer_slip=into_turn * float(slips[outer.side][index]),
        )

    # --- bump steer while steered ------------------------------------------------------------

    def steered_travel(self, rack: Array | float, span: float, steps: int = 41) -> SteeredTravel:
        """Toe through travel from -span to +span mm with the rack at each ``rack`` (m,), mm."""
        racks = np.atleast_1d(np.asarray(rack, dtype=float))
        travel = np.linspace(-span, span, steps)
        every = np.concatenate([[0.0], travel])
        shifts = inner_shifts(self.layout, np.repeat(racks, every.size))
        changes: dict[SideName, Array] = {}
        for side in SIDES:
            poses = Corner.of(self.layout.side(side)).poses(
                np.tile(every, racks.size), shifts[side]
            )
            toe = poses.toe.reshape(racks.size, every.size)
            changes[side] = toe[:, 1:] - toe[:, :1]
        return SteeredTravel(racks, travel, changes)


def _number(value: Array | float) -> float | None:
    return float(value) if np.isfinite(value) else None


def _racks(limits: RackLimits) -> Array:
    """Racks from lock to lock with straight ahead among them, a hair inside dead center."""
    ends = []
    for lock, limit in (
        (limits.lock_right, limits.right),
        (limits.lock_left, limits.left),
    ):
        ends.append(lock - np.sign(lock) * min(0.05, abs(lock)) if lock == limit else lock)
    right, left = (np.linspace(0.0, end, LOCK_STEPS) for end in ends)
    return np.unique(np.concatenate([right, left]))


def plan_view(solution: Solution, travel: float | Mapping[SideName, float] = 0.0) -> PlanView:
    """The steering of a solved car from lock to lock, wheels held at ``travel`` mm.

    Ride height if not given, as Ackermann and toe-out on turns are understood. Figures are
    worked out when they are first asked for.
    """
    return plan_of(solution.layout, travel)


def plan_of(layout: Layout, travel: float | Mapping[SideName, float] = 0.0) -> PlanView:
    """The same from a layout alone."""
    held: dict[SideName, float] = (
        dict(travel) if isinstance(travel, Mapping) else {side: float(travel) for side in SIDES}
    )
    limits = rack_limits(layout, held)
    rack = _racks(limits)
    shifts = inner_shifts(layout, rack)
    sides: dict[SideName, WheelSteer] = {}
    for side in SIDES:
        corner = Corner.of(layout.side(side))
        poses = corner.poses(held[side], shifts[side])
        straight = corner.poses(held[side])
        sides[side] = WheelSteer(
            side=side,
            poses=poses,
            straight=straight,
            steer=steer_of(side, poses.toe),
            turned=steer_of(side, poses.toe - straight.toe),
        )
    return PlanView(layout, held, limits, rack, sides)
