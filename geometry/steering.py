"""Where the inner tie-rod ends go when the steering moves: a rack, or a relay rod.

``rack`` is the displacement to the car's left, mm: of the rack itself, or of the pitman
arm's end on a relay-rod car. Both kinds answer the same question in one function.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from geometry import layout as names
from geometry.corner import Corner, space
from geometry.layout import SIDES, Layout, RelayRod, SideName
from geometry.linkage import COINCIDENT_MM, PARALLEL_SINE, Array, cross, dot, unit

_UP = np.array([0.0, 0.0, 1.0])

RACK_TRAVEL = "rack travel"
"""Key of ``Layout.tolerances``: how far the rack goes each way before its own stops, mm."""

DEFAULT_RACK_TRAVEL = 75.0
"""A rack's travel each way where the layout doesn't say, mm (common practice, no source)."""

RACK_SEARCH = 250.0
"""How far a geometric limit is looked for, mm; no steering goes there."""

_SEARCH_STEP = 5.0
_SEARCH_ROUNDS = 3
_SEARCH_SHARES = 41


@dataclass(frozen=True)
class RackLimits:
    """How far the rack (or the pitman arm's end) can go to the car's right and left, mm.

    ``right`` and ``left`` are where the parts stop meeting: right negative, left positive,
    infinite where that lies beyond RACK_SEARCH. ``setting`` is the rack's own travel each
    way. ``lock_right`` and ``lock_left`` are what the wheels can really be steered by, the
    nearer of the two. ``why_right`` and ``why_left`` say in a sentence what stops there.
    """

    right: float
    left: float
    setting: float
    why_right: str
    why_left: str

    @property
    def lock_right(self) -> float:
        """Rack displacement at the stop to the right (zero or negative), mm."""
        return max(self.right, -self.setting)

    @property
    def lock_left(self) -> float:
        """Rack displacement at the stop to the left (zero or positive), mm."""
        return min(self.left, self.setting)


def car_axes(side: SideName) -> Array:
    """(3, 1) factors from a side's own axes to the car's (over becomes left)."""
    return np.array([[1.0], [1.0 if side == "left" else -1.0], [1.0]])


def inner_shifts(layout: Layout, rack: Array | float) -> dict[SideName, Array]:
    """How far each inner tie-rod end moves (3, n), mm in its side's axes, per rack place (n,).

    NaN where a relay rod's arms can't follow.
    """
    rack = np.atleast_1d(np.asarray(rack, dtype=float))
    if isinstance(layout.steering, RelayRod):
        return _relay_shifts(layout, layout.steering, rack)
    along = np.stack([np.zeros_like(rack), rack, np.zeros_like(rack)])
    return {side: car_axes(side) * along for side in SIDES}


def _in_car(relay: RelayRod, name: str) -> Array:
    return space(relay[name]) * car_axes(relay.side_of(name))[:, 0]


def relay_ends(relay: RelayRod, rack: Array | float) -> tuple[Array, Array]:
    """Where the pitman and the idler arm's ends stand (3, n), mm in the car's axes.

    One for each rack place (n,); NaN where the arms can't follow.
    """
    rack = np.atleast_1d(np.asarray(rack, dtype=float))
    pitman, pitman_pivot = _in_car(relay, names.PITMAN_END), _in_car(relay, names.PITMAN_PIVOT)
    idler, idler_pivot = _in_car(relay, names.IDLER_END), _in_car(relay, names.IDLER_PIVOT)
    with np.errstate(all="ignore"):
        pitman_now = _turned_to(pitman, pitman_pivot, pitman[1] + rack)
        return pitman_now, _follow(idler, idler_pivot, pitman, pitman_now)


def _relay_shifts(layout: Layout, relay: RelayRod, rack: Array) -> dict[SideName, Array]:
    """Pitman and idler arms turn about vertical axes; the relay rod joins their ends.

    The rod is taken not to roll about its own length, so its inner ends keep their height
    beside it.
    """
    pitman, idler = _in_car(relay, names.PITMAN_END), _in_car(relay, names.IDLER_END)
    pitman_now, idler_now = relay_ends(relay, rack)
    with np.errstate(all="ignore"):
        ride, now = _rod_frame(pitman, idler), _rod_frame(pitman_now, idler_now)
        out: dict[SideName, Array] = {}
        for side in SIDES:
            axes = car_axes(side)
            inner = space(layout.side(side)[names.TIE_INNER])[:, None] * axes
            local = np.stack([dot(inner - pitman[:, None], edge[:, None]) for edge in ride])
            moved = pitman_now + sum(
                (local[k] * now[k] for k in range(3)), start=np.zeros_like(pitman_now)
            )
            out[side] = (moved - inner) * axes
    return out


def _turned_to(end: Array, pivot: Array, over: Array) -> Array:
    """An arm's end (3, n) turned about its vertical pivot until its over is as wanted (n,)."""
    arm = end - pivot
    radius_sq = arm[0] ** 2 + arm[1] ** 2
    across = over - pivot[1]
    left = _not_below_zero(radius_sq - across**2, radius_sq)
    fore = np.sqrt(left) * (1.0 if arm[0] >= 0.0 else -1.0)
    return np.stack([pivot[0] + fore, over, np.full_like(over, end[2])])


def _follow(idler: Array, pivot: Array, pitman: Array, pitman_now: Array) -> Array:
    """The idler's end (3, n): on its own circle, the relay rod's length from the pitman's.

    Seen from above, the meeting of two circles on the side on which the car was built.
    """
    arm = idler - pivot
    rod = idler - pitman
    radius_sq = arm[0] ** 2 + arm[1] ** 2
    rise = pitman_now[2] - idler[2]
    flat_sq = dot(rod, rod) - rise**2
    to_x, to_y = pitman_now[0] - pivot[0], pitman_now[1] - pivot[1]
    gap_sq = to_x**2 + to_y**2
    along = (radius_sq - flat_sq + gap_sq) / (2.0 * gap_sq)
    high_sq = radius_sq / gap_sq - along**2
    high = np.sqrt(_not_below_zero(high_sq, np.ones_like(high_sq)))
    to_pitman = pitman - pivot
    built = to_pitman[0] * arm[1] - to_pitman[1] * arm[0]
    high = high if built >= 0.0 else -high
    x = pivot[0] + along * to_x - high * to_y
    y = pivot[1] + along * to_y + high * to_x
    return np.stack([x, y, np.full_like(x, idler[2])])


def _rod_frame(pitman: Array, idler: Array) -> tuple[Array, Array, Array]:
    """Three unit edges that ride with the relay rod: along it, level across it, and up."""
    along = unit(idler - pitman)
    up = _UP.reshape(3, *(1,) * (along.ndim - 1))
    across = unit(cross(np.broadcast_to(up, along.shape), along))
    return along, across, cross(along, across)


def _not_below_zero(square: Array, size: Array) -> Array:
    """A square (...) with rounding below zero taken as zero, and NaN where it is really less.

    Arms in line with the relay rod at ride height have an exact zero here, which must not
    be lost to the last bit.
    """
    return np.where(square >= 0.0, square, np.where(square > -1e-12 * size, 0.0, np.nan))


def steering_faults(layout: Layout) -> list[str]:
    """What keeps the steering from moving as measured, as plain sentences; empty if nothing."""
    relay = layout.steering
    if not isinstance(relay, RelayRod):
        return []
    faults: list[str] = []
    arms: list[Array] = []
    for arm, pivot_name, end_name in (
        ("pitman", names.PITMAN_PIVOT, names.PITMAN_END),
        ("idler", names.IDLER_PIVOT, names.IDLER_END),
    ):
        reach = (_in_car(relay, end_name) - _in_car(relay, pivot_name))[:2]
        arms.append(reach)
        if np.hypot(*reach) < COINCIDENT_MM:
            faults.append(
                f"The {arm} arm has no length: its end stands straight above or below its"
                " pivot, so turning it moves nothing."
            )
    rod = (_in_car(relay, names.IDLER_END) - _in_car(relay, names.PITMAN_END))[:2]
    if np.hypot(*rod) < COINCIDENT_MM:
        faults.append(
            "The relay rod has no length: the pitman arm's end and the idler arm's end stand"
            " in one place."
        )
    if faults:
        return faults
    pitman, idler = arms
    if abs(pitman[0]) < PARALLEL_SINE * np.hypot(*pitman):
        faults.append(
            "The pitman arm points straight across the car, so its end can't move to the"
            " left or right from there. Measure it with the wheels straight ahead."
        )
    if abs(idler[0] * rod[1] - idler[1] * rod[0]) < PARALLEL_SINE * np.hypot(*idler) * np.hypot(
        *rod
    ):
        faults.append(
            "The idler arm lies in line with the relay rod: it may swing either way from"
            " there, so where it goes isn't decided."
        )
    return faults


def rack_limits(layout: Layout, travel: float | dict[SideName, float] = 0.0) -> RackLimits:
    """How far the steering goes each way with the wheels held at ``travel``, mm.

    The geometric limit is where a tie rod comes into line with its steering arm (dead
    center) or a relay rod's arms can no longer follow; it is found to 1e-3 mm. The rack's
    own travel is the ``RACK_TRAVEL`` tolerance, ``DEFAULT_RACK_TRAVEL`` if not given.
    """
    held: dict[SideName, float] = (
        dict(travel) if isinstance(travel, dict) else {side: float(travel) for side in SIDES}
    )
    setting = abs(layout.tolerances.get(RACK_TRAVEL, DEFAULT_RACK_TRAVEL))
    setting = setting if np.isfinite(setting) else DEFAULT_RACK_TRAVEL
    corners = {side: Corner.of(layout.side(side)) for side in SIDES}

    def meets(rack: Array) -> np.ndarray:
        shifts = inner_shifts(layout, rack)
        return np.asarray(
            np.logical_and.reduce(
                [corners[side].poses(held[side], shifts[side]).assembles for side in SIDES]
            )
        )

    steps = np.arange(0.0, RACK_SEARCH + _SEARCH_STEP, _SEARCH_STEP)
    fine = meets(np.concatenate([-steps, steps])).reshape(2, -1)
    inside = np.logical_and.accumulate(fine, axis=1).sum(axis=1) - 1
    free = inside == steps.size - 1
    stuck = inside < 0
    low = steps[np.maximum(inside, 0)]
    high = low + _SEARCH_STEP
    signs = np.array([-1.0, 1.0])
    shares = np.linspace(0.0, 1.0, _SEARCH_SHARES)
    for _ in range(_SEARCH_ROUNDS):
        tries = low[:, None] + (high - low)[:, None] * shares
        fine = meets((signs[:, None] * tries).ravel()).reshape(2, -1)
        fine[:, 0] = True
        last = np.logical_and.accumulate(fine, axis=1).sum(axis=1) - 1
        rows = np.arange(2)
        low, high = tries[rows, last], tries[rows, np.minimum(last + 1, shares.size - 1)]
    ends = np.where(stuck, 0.0, np.where(free, np.inf, low))
    reasons = [
        _why(layout, corners, held, sign, end, beyond, setting)
        for sign, end, beyond in zip(signs, ends, high + 1e-3, strict=True)
    ]
    return RackLimits(0.0 - float(ends[0]), float(ends[1]), setting, reasons[0], reasons[1])


def least_lock(layout: Layout) -> float:
    """The rack travel, mm, that the steering reaches both ways at ride height."""
    limits = rack_limits(layout)
    return min(limits.lock_left, -limits.lock_right)


def _why(
    layout: Layout,
    corners: dict[SideName, Corner],
    held: dict[SideName, float],
    sign: float,
    end: float,
    beyond: float,
    setting: float,
) -> str:
    """What stops the steering on one side (sign -1 right, +1 left), as a sentence."""
    if end >= setting:
        return "The rack reaches the end of its own travel."
    shifts = inner_shifts(layout, sign * beyond)
    if not all(np.all(np.isfinite(shift)) for shift in shifts.values()):
        faults = steering_faults(layout)
        return faults[0] if faults else "The pitman and idler arms can't swing any farther."
    for side in SIDES:
        if end == 0.0 and not corners[side].poses(held[side]).assembles[0]:
            return f"The {side} side does not go together at this travel."
        if not corners[side].poses(held[side], shifts[side]).assembles[0]:
            return f"The {side} tie rod comes into line with its steering arm."
    return "The parts stop meeting there."
