"""A zone's edge moved onto the exact level of the figure it stands for."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from geometry.linkage import Array
from geometry.zone_shapes import Progress, Stop

_WIDENINGS = 5
_ROUNDS = 160
"""Smooth figures take some ten; a kink just on the edge takes all the halvings there are."""

OUT_OF_REACH = 1.0
"""What a place that can't be judged counts as: well past any level."""

_Past = Callable[[Array], Array]


def onto_level(
    places: Array,
    ways: Array,
    step: float,
    past: _Past,
    window: tuple[float, float, float, float],
    exact: float,
    progress: Progress | None = None,
    stop: Stop | None = None,
) -> tuple[Array, np.ndarray] | None:
    """Places (2, k) moved along their unit ``ways`` (2, k) to where ``past`` is zero.

    ``past`` takes places (2, j) and gives (j,), negative inside the zone, NaN where there is
    nothing. ``step`` mm is how far off the edge may first be thought. Places on the border of
    ``window`` (low over, low up, high over, high up) stay. Returns the places and which of
    them are now within ``exact`` of zero (bool (k,)); None if stopped.
    """
    low_over, low_up, high_over, high_up = window
    border = (
        (places[0] <= low_over) | (places[0] >= high_over)
        | (places[1] <= low_up) | (places[1] >= high_up)
    )
    out, done = places.copy(), np.zeros(places.shape[1], dtype=bool)
    free = np.flatnonzero(~border)
    if not free.size:
        return out, done

    def at(rows: np.ndarray, along: Array) -> Array:
        return past(places[:, rows] + along * ways[:, rows])

    bracket = _bracketed(at, free, step, stop)
    if bracket is None:
        return None
    rows, a, b, at_a, at_b = bracket
    size = float(np.abs(places).max())
    tell = progress or (lambda share: None)
    for count in range(_ROUNDS):
        if not rows.size:
            break
        if stop is not None and stop():
            return None
        tell(min(1.0, 0.2 + 0.1 * count))
        middle = b - at_b * (b - a) / (at_b - at_a)
        # Every third time halve: a kink where another pair of poses takes over stalls secants.
        middle = 0.5 * (a + b) if count % 3 == 2 else middle
        now = at(rows, middle)
        now = np.where(np.isfinite(now), now, OUT_OF_REACH)
        # Neighboring floats: no nearer place is left, and the edge is the end of reach.
        hit = (np.abs(now) <= exact) | (np.abs(b - a) <= 4e-16 * size)
        out[:, rows[hit]] = (places[:, rows] + middle * ways[:, rows])[:, hit]
        done[rows[hit]] = np.abs(now[hit]) <= exact
        crossed = np.sign(now) != np.sign(at_b)
        a, at_a = np.where(crossed, b, a), np.where(crossed, at_b, 0.5 * at_a)
        b, at_b = middle, now
        keep = ~hit
        rows, a, b, at_a, at_b = rows[keep], a[keep], b[keep], at_a[keep], at_b[keep]
    out[:, rows] = places[:, rows] + b * ways[:, rows]
    tell(1.0)
    return out, done


def _bracketed(
    at: Callable[[np.ndarray, Array], Array], rows: np.ndarray, step: float, stop: Stop | None
) -> tuple[np.ndarray, Array, Array, Array, Array] | None:
    """Rows with the edge between two places along their way: (rows, a, b, at a, at b).

    Steps outward both ways until the sign changes; rows where it never does are left out.
    """
    here = at(rows, np.zeros(rows.size))
    found: list[tuple[np.ndarray, Array, Array, Array, Array]] = []
    for round_ in range(_WIDENINGS):
        if stop is not None and stop():
            return None
        size = np.full(rows.size, 0.05 * step * 4.0**round_)
        for sign in (1.0, -1.0):
            there = at(rows, sign * size)
            good = np.isfinite(here) & np.isfinite(there) & (np.sign(here) != np.sign(there))
            found.append(
                (rows[good], np.zeros(int(good.sum())), sign * size[good], here[good], there[good])
            )
            rows, here, size = rows[~good], here[~good], size[~good]
            if not rows.size:
                break
        if not rows.size:
            break
    parts = [np.concatenate([part[k] for part in found]) for k in range(5)]
    return parts[0].astype(int), parts[1], parts[2], parts[3], parts[4]
