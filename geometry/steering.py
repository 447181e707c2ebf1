"""Where the inner tie-rod ends go when the steering moves: a rack, or a relay rod.

``rack`` is the displacement to the car's left, mm: of the rack itself, or of the pitman
arm's end on a relay-rod car. Both kinds answer the same question in one function.
"""

from __future__ import annotations

import numpy as np

from geometry import layout as names
from geometry.corner import space
from geometry.layout import SIDES, Layout, RelayRod, SideName
from geometry.linkage import Array, cross, dot, unit

_UP = np.array([0.0, 0.0, 1.0])


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


def _relay_shifts(layout: Layout, relay: RelayRod, rack: Array) -> dict[SideName, Array]:
    """Pitman and idler arms turn about vertical axes; the relay rod joins their ends.

    The rod is taken not to roll about its own length, so its inner ends keep their height
    beside it.
    """
    pitman, pitman_pivot = _in_car(relay, names.PITMAN_END), _in_car(relay, names.PITMAN_PIVOT)
    idler, idler_pivot = _in_car(relay, names.IDLER_END), _in_car(relay, names.IDLER_PIVOT)
    with np.errstate(all="ignore"):
        pitman_now = _turned_to(pitman, pitman_pivot, pitman[1] + rack)
        idler_now = _follow(idler, idler_pivot, pitman, pitman_now)
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
    left = radius_sq - across**2
    fore = np.sqrt(np.where(left >= 0.0, left, np.nan)) * (1.0 if arm[0] >= 0.0 else -1.0)
    return np.stack([pivot[0] + fore, over, np.full_like(over, end[2])])


def _follow(idler: Array, pivot: Array, pitman: Array, pitman_now: Array) -> Array:
    """The idler's end (3, n): on its own circle, the relay rod's length from the pitman's."""
    arm = idler - pivot
    rod = idler - pitman
    radius_sq = arm[0] ** 2 + arm[1] ** 2
    rise = pitman_now[2] - idler[2]
    flat_sq = dot(rod, rod) - rise**2
    to_x, to_y = pitman_now[0] - pivot[0], pitman_now[1] - pivot[1]
    gap_sq = to_x**2 + to_y**2
    along = (radius_sq - flat_sq + gap_sq) / (2.0 * gap_sq)
    high_sq = radius_sq / gap_sq - along**2
    high = np.sqrt(np.where(high_sq >= 0.0, high_sq, np.nan))
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
