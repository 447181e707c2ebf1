"""One corner's motion: wheel travel and tie-rod place in, exact poses out.

The body stands still and the wheel moves. All arrays carry one side's own axes, component
first: fore, over, up (mm). Poses have shape ``(*cars, n)``: ``cars`` is the shape of a
batch of corners solved together (empty for a single one), n the number of poses.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, fields
from functools import cached_property
from typing import Any, Protocol

import numpy as np

from geometry import layout as names
from geometry.layout import Side
from geometry.linkage import (
    Array,
    cross,
    dot,
    norm,
    rigid_coefficients,
    rigid_place,
    three_spheres,
    unit,
)

TRAVEL_TOLERANCE = 1e-10
"""How exactly the wanted travel is met, mm."""

SWING_LIMIT = 1.35
"""How far the lower arm is followed from ride height each way, rad."""

SWING_STEPS = 121

STOP_REACH = 40.0
"""How near a stop, mm of travel, a pose that was not found at once is looked for by halving."""

BLOCK = 16384
"""So many poses are worked on at a time: what a sweep needs of them then stays in the
processor's cache, and a sweep of a million costs no more a pose than one of ten thousand."""

MISSED_TRAVEL = 1e-6
"""How far the wheel may be off its travel in a pose that counts, mm: rounding in huge cars."""

LENGTH_SHARE = 1e-7
"""How far a rigid length may come out wrong, as a share of the corner's size, in a pose that
counts: rounding in a car measured some 1e-5 mm from a singular one makes more of it."""

AS_BUILT_SHARE = 1e-5
"""How near the parts must come to their measured places at ride height, likewise."""

UP = np.array([[0.0], [0.0], [1.0]])
AHEAD = np.array([[1.0], [0.0], [0.0]])


def space(point: names.Point) -> Array:
    """A measured point as a vector (3,): fore, over, up."""
    return np.array([point.fore, point.over, point.up])


@dataclass(frozen=True)
class Poses:
    """A corner in many poses; every array has the poses' shape, vectors (3, ...) ahead of it.

    travel            (...) mm, bump positive, as asked for
    assembles         (...) bool: False where the parts can't meet there; all else is NaN there
    lower_ball, upper_ball, tie_inner, tie_outer, wheel_center, contact   (3, ...) mm;
                      ``upper_ball`` is the strut's top mount on a strut corner
    strut_lower       (3, ...) mm, on a strut corner
    spin_axis         (3, ...) unit vector outboard along the axle
    toe, camber, caster, kingpin_inclination   (...) rad, signs as the measure sheet's
    scrub_radius, mechanical_trail, half_track (...) mm
    """

    travel: Array
    assembles: np.ndarray
    lower_ball: Array
    upper_ball: Array
    tie_inner: Array
    tie_outer: Array
    wheel_center: Array
    spin_axis: Array
    contact: Array
    toe: Array
    camber: Array
    caster: Array
    kingpin_inclination: Array
    scrub_radius: Array
    mechanical_trail: Array
    swing: Array
    strut_lower: Array | None = None

    @property
    def half_track(self) -> Array:
        """Over of the contact point, mm."""
        return np.asarray(self.contact[1])

    def moved_points(self) -> dict[str, Array]:
        """Every point that moves with the corner, by its measured name."""
        points = {
            names.LOWER_BALL: self.lower_ball,
            names.TIE_INNER: self.tie_inner,
            names.TIE_OUTER: self.tie_outer,
            names.WHEEL_CENTER: self.wheel_center,
        }
        if self.strut_lower is None:
            points[names.UPPER_BALL] = self.upper_ball
        else:
            points[names.STRUT_LOWER] = self.strut_lower
        return points


def joined(parts: list[Poses]) -> Poses:
    """Poses that follow one another, as one."""
    if len(parts) == 1:
        return parts[0]
    columns: dict[str, Any] = {}
    for field in fields(Poses):
        pieces = [getattr(part, field.name) for part in parts]
        columns[field.name] = None if pieces[0] is None else np.concatenate(pieces, axis=-1)
    return Poses(**columns)


class Guide(Protocol):
    """What holds the upper end of the kingpin: an upper arm or a strut."""

    def upper(self, lower_ball: Array) -> tuple[Array, Array, Array]:
        """For lower ball joints (3, ...): the kingpin's upper point in the body, the same
        point's place in the knuckle as it stands at ride height, and a margin (...) that is
        negative where the parts can't reach."""
        ...

    def front_line_normal(self, upper: Array, lower_ball: Array, strut_axis: Array) -> Array:
        """Normal (3, ...) of the plane whose front-view trace is the upper arm line."""
        ...


@dataclass(frozen=True)
class UpperArm:
    """An upper A-arm: the ball joint keeps its distances to both bushings."""

    front: Array
    rear: Array
    ball: Array
    lower_ball: Array

    @cached_property
    def _fixed(self) -> tuple[Array, Array, Array, Array, Array]:
        axis = self.rear - self.front
        front_sq = dot(self.ball - self.front, self.ball - self.front)
        rear_sq = dot(self.ball - self.rear, self.ball - self.rear)
        span = self.ball - self.lower_ball
        side = dot(cross(axis, self.lower_ball - self.front), self.ball - self.front)
        return axis, front_sq, rear_sq, dot(span, span), np.where(side < 0.0, -1.0, 1.0)

    def upper(self, lower_ball: Array) -> tuple[Array, Array, Array]:
        axis, front_sq, rear_sq, span_sq, branch = self._fixed
        ball, margin = three_spheres(
            self.front, axis, lower_ball - self.front, front_sq, rear_sq, span_sq, branch
        )
        return ball, self.ball, margin

    def front_line_normal(self, upper: Array, lower_ball: Array, strut_axis: Array) -> Array:
        return cross(self.rear - self.front, upper - self.front)


@dataclass(frozen=True)
class StrutGuide:
    """A strut: its axis is fixed in the knuckle and slides through the top mount."""

    top: Array
    lower: Array
    lower_ball: Array

    @cached_property
    def axis(self) -> Array:
        """Unit vector up the strut at ride height."""
        return unit(self.top - self.lower)

    def upper(self, lower_ball: Array) -> tuple[Array, Array, Array]:
        ride = self.top - self.lower_ball
        along = dot(self.axis, ride)
        now = self.top - lower_ball
        under_root = along * along + dot(now, now) - dot(ride, ride)
        root = np.sqrt(np.maximum(under_root, 0.0)) * np.where(along < 0.0, -1.0, 1.0)
        in_knuckle = self.top + (root - along) * self.axis
        return self.top + 0.0 * lower_ball, in_knuckle, under_root

    def front_line_normal(self, upper: Array, lower_ball: Array, strut_axis: Array) -> Array:
        return strut_axis


class Corner:
    """One corner, or a batch of them, ready to be moved.

    ``points`` maps point names to (3, *cars) arrays (shapes broadcast); static angles in
    radians and the loaded tire radius in mm are scalars or (*cars).
    """

    def __init__(
        self,
        points: Mapping[str, Array],
        static_camber: float | Array,
        static_toe: float | Array,
        tire_radius: float | Array,
    ) -> None:
        shape = np.broadcast_shapes(
            *(np.shape(p)[1:] for p in points.values()),
            np.shape(static_camber),
            np.shape(static_toe),
            np.shape(tire_radius),
        )
        self.cars = shape

        def place(name: str) -> Array:
            flat = np.asarray(points[name], dtype=float)
            return np.broadcast_to(flat.reshape(flat.shape + (1,) * (1 + len(shape) - flat.ndim))
                                   if flat.ndim == 1 else flat, (3, *shape))[..., None]

        def value(v: float | Array) -> Array:
            return np.broadcast_to(np.asarray(v, dtype=float), shape)[..., None]

        self.points = {name: place(name) for name in points}
        self.lower_front, self.lower_rear = self.axis_of("lower")
        self.lower_ball = self.points[names.LOWER_BALL]
        self.tie_inner = self.points[names.TIE_INNER]
        self.tie_outer = self.points[names.TIE_OUTER]
        self.wheel_center = self.points[names.WHEEL_CENTER]
        self.tire_radius = value(tire_radius)
        self.static_toe = value(static_toe)
        camber = value(static_camber)
        self.spin_axis = np.stack(
            [
                np.sin(self.static_toe) * np.cos(camber),
                np.cos(self.static_toe) * np.cos(camber),
                -np.sin(camber),
            ]
        )
        self.guide: Guide
        self.is_strut = names.STRUT_TOP in points
        if self.is_strut:
            top = self.points[names.STRUT_TOP]
            self.guide = StrutGuide(top, self.points[names.STRUT_LOWER], self.lower_ball)
            self.upper_ride = top
        else:
            front, rear = self.axis_of("upper")
            self.upper_ride = self.points[names.UPPER_BALL]
            self.guide = UpperArm(front, rear, self.upper_ride, self.lower_ball)

    @classmethod
    def of(cls, *sides: Side) -> Corner:
        """A single side's corner (cars shape ()), or several of one kind as a batch (k,)."""
        shared = [name for name in sides[0].points if all(name in s.points for s in sides)]
        if len(sides) == 1:
            side = sides[0]
            points = {name: space(side[name]) for name in shared}
            return cls(points, side.static_camber, side.static_toe, side.tire.radius)
        return cls(
            {name: np.stack([space(s[name]) for s in sides], axis=1) for name in shared},
            np.array([s.static_camber for s in sides]),
            np.array([s.static_toe for s in sides]),
            np.array([s.tire.radius for s in sides]),
        )

    def axis_of(self, arm: str) -> tuple[Array, Array]:
        """Two points on an arm's inner axis; a single pivot's axis runs straight ahead."""
        single = self.points.get(f"{arm} inner pivot")
        if single is not None:
            # 100 mm keeps the two distances of the ball joint well apart in size.
            return single + 100.0 * AHEAD.reshape(3, *(1,) * (single.ndim - 1)), single
        front = self.points[f"{arm} inner pivot front"]
        rear = self.points[f"{arm} inner pivot rear"]
        return front, rear

    # --- the lower arm's swing -------------------------------------------------------

    @cached_property
    def _swing(self) -> tuple[Array, Array, Array]:
        """Center of the lower ball joint's circle, and its two radii (positive lifts it)."""
        axis = unit(self.lower_front - self.lower_rear)
        arm = self.lower_ball - self.lower_rear
        center = self.lower_rear + dot(arm, axis) * axis
        radius = self.lower_ball - center
        lift = cross(axis, radius)
        upward = np.where(lift[2] < 0.0, -1.0, 1.0)
        return center, radius, lift * upward

    def lower_ball_at(self, swing: Array) -> Array:
        """The lower ball joint (3, ...) with the arm swung by ``swing`` (...) rad, up positive."""
        center, radius, lift = self._swing
        return np.asarray(center + np.cos(swing) * radius + np.sin(swing) * lift)

    @cached_property
    def swing_range(self) -> tuple[Array, Array, Array, Array]:
        """How far the arm can swing before the parts stop meeting or the wheel turns back.

        Returns lowest and highest swing (*cars, 1), and the table of swings (s,) and
        travels (*cars, s) found on the way, steering straight ahead.
        """
        swings = np.linspace(-SWING_LIMIT, SWING_LIMIT, SWING_STEPS)
        with np.errstate(all="ignore"):
            height, margin = self._wheel_height(swings, self.tie_inner)
            lift = height - self.wheel_center[2]
            rising = np.diff(lift, axis=-1) > 0.0
            ok = (margin >= 0.0) & np.isfinite(lift)
            good = ok[..., 1:] & ok[..., :-1] & rising
        middle = SWING_STEPS // 2
        above = np.logical_and.accumulate(good[..., middle:], axis=-1).sum(axis=-1)
        below = np.logical_and.accumulate(good[..., :middle][..., ::-1], axis=-1).sum(axis=-1)
        step = swings[1] - swings[0]
        low, high = (-(below + 1) * step)[..., None], ((above + 1) * step)[..., None]
        return low, high, swings, lift

    # --- the chain -------------------------------------------------------------------

    @cached_property
    def _tie(self) -> tuple[Array, Array, Array]:
        """Squared distances of the outer tie-rod end to lower ball joint and inner end, and
        the side of the kingpin-and-inner-end plane on which the car was built."""
        out = self.tie_outer - self.lower_ball
        rod = self.tie_outer - self.tie_inner
        side = dot(cross(self.upper_ride - self.lower_ball, self.tie_inner - self.lower_ball), out)
        return dot(out, out), dot(rod, rod), np.where(side < 0.0, -1.0, 1.0)

    def _chain(
        self, swing: Array, inner: Array
    ) -> tuple[Array, Array, Array, Array, Array]:
        """Lower ball, upper ball, outer tie-rod end (3, ...), the upper point's place in the
        knuckle, and the least margin (mm2, negative where the parts can't meet)."""
        lower = self.lower_ball_at(swing)
        upper, in_knuckle, margin = self.guide.upper(lower)
        out_sq, rod_sq, branch = self._tie
        to_upper = self.tie_outer - in_knuckle
        outer, tie_margin = three_spheres(
            lower, upper - lower, inner - lower, out_sq, dot(to_upper, to_upper), rod_sq, branch
        )
        return lower, upper, outer, in_knuckle, np.minimum(margin, tie_margin)

    @cached_property
    def _wheel_fixed(self) -> Array | None:
        """The wheel center's coefficients in the knuckle, where they are the same in all poses."""
        if self.is_strut:
            return None
        first, second = self.upper_ride - self.lower_ball, self.tie_outer - self.lower_ball
        return rigid_coefficients(first, second, self.wheel_center - self.lower_ball)

    def _knuckle_coefficients(self, in_knuckle: Array, place: Array) -> Array:
        first, second = in_knuckle - self.lower_ball, self.tie_outer - self.lower_ball
        return rigid_coefficients(first, second, place)

    def _wheel_height(self, swing: Array, inner: Array) -> tuple[Array, Array]:
        """Height of the wheel center (...) and the margin (...) at an arm swing."""
        lower, upper, outer, in_knuckle, margin = self._chain(swing, inner)
        c = self._wheel_fixed
        if c is None:
            c = self._knuckle_coefficients(in_knuckle, self.wheel_center - self.lower_ball)
        first, second = upper - lower, outer - lower
        up = first[0] * second[1] - first[1] * second[0]
        height = lower[2] + c[0] * first[2] + c[1] * second[2] + c[2] * up
        return np.asarray(height), margin

    # --- poses -----------------------------------------------------------------------

    def start(self, travel: Array) -> Array:
        """A first guess of the arm's swing for each travel, from the straight-ahead table."""
        low, high, swings, lift = self.swing_range
        flat_lift = lift.reshape(-1, lift.shape[-1])
        flat_travel = np.broadcast_to(travel, (*self.cars, travel.shape[-1]))
        flat_travel = flat_travel.reshape(-1, travel.shape[-1])
        bounds = zip(low.ravel(), high.ravel(), strict=True)
        out = np.empty_like(flat_travel)
        for row, (least, most) in enumerate(bounds):
            use = (swings > least + 1e-9) & (swings < most - 1e-9)
            xs, ys = flat_lift[row][use], swings[use]
            out[row] = np.interp(flat_travel[row], xs, ys) if xs.size else 0.0
        return out.reshape(*self.cars, travel.shape[-1])

    def swing_for(self, travel: Array, inner: Array) -> tuple[Array, np.ndarray]:
        """The arm's swing (...) that gives each travel, and where there is one (bool).

        Secant steps on the whole array from a table's first guess; converges to
        TRAVEL_TOLERANCE in three or four evaluations.
        """
        low, high, swings, _ = self.swing_range
        target = self.wheel_center[2] + travel
        now = self.start(travel)
        step = 0.05 * (swings[1] - swings[0])
        before = np.where(now > 0.0, now - step, now + step)
        gap_before = self._wheel_height(before, inner)[0] - target
        gap, margin = self._wheel_height(now, inner)
        gap = gap - target
        for _ in range(12):
            if not np.any(np.abs(gap) > 0.05 * TRAVEL_TOLERANCE):
                break
            slope = (gap - gap_before) / (now - before)
            # A pose that is found stays put while others are still looked for: two steps
            # from the same place have no slope and would throw it anywhere.
            settled = np.abs(gap) <= 0.05 * TRAVEL_TOLERANCE
            move = np.where(settled, 0.0, gap / slope)
            after = np.clip(now - np.clip(move, -0.2, 0.2), low, high)
            after = np.where(np.isfinite(after), after, now)
            if np.array_equal(after, now):
                break
            before, gap_before, now = now, gap, after
            gap, margin = self._wheel_height(now, inner)
            gap = gap - target
        found = (np.abs(gap) < 10.0 * TRAVEL_TOLERANCE) & (margin >= 0.0)
        found &= (now > low) & (now < high)
        if not found.all() and np.any(~found & self._near_a_stop(travel)):
            halved, there = self._swing_by_halves(target, inner)
            now, found = np.where(found, now, halved), found | there
        return now, np.asarray(found)

    def _near_a_stop(self, travel: Array) -> np.ndarray:
        """Where a travel (...) that was not found may still be one the parts can reach."""
        low, high, swings, lift = self.swing_range
        inside = (swings > low) & (swings < high)
        least = np.where(inside, lift, np.inf).min(axis=-1, keepdims=True)
        most = np.where(inside, lift, -np.inf).max(axis=-1, keepdims=True)
        return np.asarray((travel > least - STOP_REACH) & (travel < most + STOP_REACH))

    def _swing_by_halves(self, target: Array, inner: Array) -> tuple[Array, np.ndarray]:
        """Like swing_for, by halving: slow, but sure where the wheel's rise comes to a stand."""
        low, high, _, _ = self.swing_range
        shape = np.broadcast_shapes(target.shape, inner.shape[1:])
        up = target > self.wheel_center[2]
        below = np.broadcast_to(np.where(up, 0.0, low), shape)
        above = np.broadcast_to(np.where(up, high, 0.0), shape)
        for _ in range(48):
            middle = 0.5 * (below + above)
            height, margin = self._wheel_height(middle, inner)
            rising = self._wheel_height(middle + 1e-7, inner)[0] > height
            good = (margin >= 0.0) & rising
            # Going up, what can't be reached lies above; going down, below.
            lower = np.where(up, good & (height < target), ~good | (height < target))
            below, above = np.where(lower, middle, below), np.where(lower, above, middle)
        swing = np.where(up, below, above)
        height, margin = self._wheel_height(swing, inner)
        return swing, np.asarray((np.abs(height - target) < 1e-7) & (margin >= 0.0))

    def poses(self, travel: Array | float, shift: Array | None = None) -> Poses:
        """The corner at each wheel travel.

        travel: scalar or (n,) or (*cars, n), mm, bump positive.
        shift: how far the inner tie-rod end stands from its ride-height place, (3, n) or
        (3, *cars, n), mm; None = straight ahead.
        """
        travel = np.atleast_1d(np.asarray(travel, dtype=float))
        inner = self.tie_inner
        if shift is not None:
            if shift.ndim == 2:
                shift = shift.reshape(3, *(1,) * len(self.cars), shift.shape[-1])
            inner = inner + shift
        shape = np.broadcast_shapes((*self.cars, 1), travel.shape, inner.shape[1:])
        travel = np.broadcast_to(travel, shape)
        inner = np.broadcast_to(inner, (3, *shape))
        wide = max(1, BLOCK // max(1, int(np.prod(self.cars))))
        return joined(
            [
                self._block_of_poses(
                    travel[..., start : start + wide], inner[..., start : start + wide]
                )
                for start in range(0, max(1, shape[-1]), wide)
            ]
        )

    def _block_of_poses(self, travel: Array, inner: Array) -> Poses:
        """The poses for travels (*cars, n) and inner tie-rod ends (3, *cars, n)."""
        with np.errstate(all="ignore"):
            swing, found = self.swing_for(travel, inner)
            # At ride height the arm stands as it was measured, whatever rounding makes of a
            # wheel whose height hardly depends on it there.
            measured = (travel == 0.0) & np.all(inner == self.tie_inner, axis=0)
            swing = np.where(measured, 0.0, swing)
            return self._poses_at(travel, swing, inner, found)

    @cached_property
    def _size(self) -> Array:
        """The farthest measured point from the lower ball joint (*cars, 1), mm."""
        away = [norm(place - self.lower_ball) for place in self.points.values()]
        return np.asarray(np.max(np.broadcast_arrays(*away), axis=0))

    @cached_property
    def as_built(self) -> np.ndarray:
        """Whether the measured parts meet at ride height where they were measured, (*cars, 1).

        False for parts whose place their lengths do not decide: a tie rod that ends on the
        kingpin axis, an arm of no length.
        """
        with np.errstate(all="ignore"):
            still = np.zeros((*self.cars, 1))
            _, upper, outer, in_knuckle, _ = self._chain(still, self.tie_inner)
            off = norm(outer - self.tie_outer)
            off = off + norm(upper - self.upper_ride) + norm(in_knuckle - self.upper_ride)
            return np.asarray(off <= AS_BUILT_SHARE * self._size)

    def _kept(
        self,
        lower: Array,
        upper: Array,
        outer: Array,
        in_knuckle: Array,
        inner: Array,
        wheel: Array,
    ) -> np.ndarray:
        """Whether the parts kept their lengths (...), which singular parts do not."""
        knuckle = in_knuckle - self.lower_ball
        off = np.zeros(())
        for now, ride in (
            (upper - lower, knuckle),
            (outer - lower, self.tie_outer - self.lower_ball),
            (outer - inner, self.tie_outer - self.tie_inner),
            (wheel - lower, self.wheel_center - self.lower_ball),
            (wheel - outer, self.wheel_center - self.tie_outer),
        ):
            off = np.maximum(off, np.abs(norm(now) - norm(ride)))
        return np.asarray(off <= LENGTH_SHARE * self._size)

    def _poses_at(self, travel: Array, swing: Array, inner: Array, found: np.ndarray) -> Poses:
        swing = np.where(found, swing, np.nan)
        lower, upper, outer, in_knuckle, _ = self._chain(swing, inner)
        first, second = upper - lower, outer - lower
        normal = cross(first, second)

        def carried(place: Array) -> Array:
            return rigid_place(
                self._knuckle_coefficients(in_knuckle, place), first, second, normal
            )

        spin = carried(self.spin_axis)
        wheel = lower + carried(self.wheel_center - self.lower_ball)
        kept = self._kept(lower, upper, outer, in_knuckle, inner, wheel)
        found = found & self.as_built & kept & (np.abs(norm(spin) - 1.0) <= LENGTH_SHARE)
        found &= np.abs(wheel[2] - self.wheel_center[2] - travel) <= MISSED_TRAVEL
        lower, outer, wheel, spin, first = (
            np.where(found, place, np.nan) for place in (lower, outer, wheel, spin, first)
        )
        swing = np.where(found, swing, np.nan)
        strut = None
        if self.is_strut:
            strut = lower + carried(self.points[names.STRUT_LOWER] - self.lower_ball)
            upper = np.broadcast_to(upper, lower.shape)
        else:
            upper = np.where(found, upper, np.nan)
        contact = contact_point(wheel, spin, self.tire_radius)
        scrub, trail = ground_offsets(lower, upper, spin, contact)
        return Poses(
            travel=travel,
            assembles=found,
            lower_ball=lower,
            upper_ball=upper,
            tie_inner=np.where(found, inner, np.nan),
            tie_outer=outer,
            wheel_center=wheel,
            spin_axis=spin,
            contact=contact,
            toe=np.arctan2(spin[0], spin[1]),
            camber=-np.arcsin(np.clip(spin[2], -1.0, 1.0)),
            caster=np.arctan2(-first[0], first[2]),
            kingpin_inclination=np.arctan2(-first[1], first[2]),
            scrub_radius=scrub,
            mechanical_trail=trail,
            swing=swing,
            strut_lower=strut,
        )

    def travel_stops(self, shift: Array | None = None) -> tuple[Array, Array]:
        """The travels (*cars), mm, at which the parts stop meeting in droop and in bump.

        Infinite where the arm swings on past every travel a car could have. ``shift`` as in
        ``poses``, for one steering place (n = 1).
        """
        inner = self.tie_inner if shift is None else self.tie_inner + shift
        low, high, swings, _ = self.swing_range
        with np.errstate(all="ignore"):
            ends = []
            for end in (low, high):
                inside, outside = np.zeros_like(end), end
                for _ in range(50):
                    middle = 0.5 * (inside + outside)
                    # Looked at toward ride height only: a tie rod that comes straight moves
                    # the wheel fast just there, and a look beyond would end too soon.
                    height, margin = self._wheel_height(middle, inner)
                    before = self._wheel_height(middle - np.copysign(1e-7, end), inner)[0]
                    fine = (margin >= 0) & (np.copysign(1.0, end) * (height - before) > 0)
                    inside = np.where(fine, middle, inside)
                    outside = np.where(fine, outside, middle)
                travel = self._wheel_height(inside, inner)[0] - self.wheel_center[2]
                free = np.abs(inside) > SWING_LIMIT - 1e-3
                ends.append(np.where(free, np.copysign(np.inf, end), travel)[..., 0])
        return ends[0], ends[1]


def contact_point(wheel: Array, spin: Array, radius: Array, floor_up: Array | None = None) -> Array:
    """The lowest point (3, ...) of the tire's center circle over a floor, mm.

    ``floor_up`` (3, ...) is the floor's unit normal in the body's frame; straight up if None.
    """
    upward = UP.reshape(3, *(1,) * (wheel.ndim - 1)) if floor_up is None else floor_up
    in_plane = upward - dot(upward, spin) * spin
    return np.asarray(wheel - radius * unit(in_plane))


def ground_offsets(
    lower: Array, upper: Array, spin: Array, contact: Array
) -> tuple[Array, Array]:
    """Scrub radius and mechanical trail (...), mm, on the floor through the contact point.

    Both are measured across and along the wheel's own heading. Positive scrub: contact
    outboard of the kingpin axis (Heisler, Advanced Vehicle Technology, 10.1.5); positive
    trail: the axis meets the floor ahead of the contact.
    """
    axis = upper - lower
    ground = lower + (contact[2] - lower[2]) / axis[2] * axis
    level = np.hypot(spin[0], spin[1])
    out_x, out_y = spin[0] / level, spin[1] / level
    gap = contact - ground
    scrub = gap[0] * out_x + gap[1] * out_y
    # The heading is the outboard direction turned a quarter toward the front.
    trail = -(gap[0] * out_y - gap[1] * out_x)
    return np.asarray(scrub), np.asarray(trail)


def lengths(side: Side) -> dict[str, float]:
    """Pivot-to-pivot lengths of one side's rigid parts at ride height, mm."""
    pairs = {
        "tie rod": (names.TIE_INNER, names.TIE_OUTER),
        "knuckle": (names.LOWER_BALL, names.UPPER_BALL),
        "lower arm": (names.LOWER_INNER, names.LOWER_BALL),
        "upper arm": (names.UPPER_INNER, names.UPPER_BALL),
        "strut": (names.STRUT_LOWER, names.STRUT_TOP),
    }
    return {
        part: float(norm(space(side[a]) - space(side[b])))
        for part, (a, b) in pairs.items()
        if a in side.points and b in side.points
    }
