"""Outlines of a front end's parts as arrays in mm: the one idea of what each part looks like.

Every function is pure and gives an (n, 2) array, x to the car's left and y up, without
repeating the first place at the end. Screen, pictures, sheets and clearance checks all use
these outlines. What has no length gives a round outline, and NaN in gives NaN out.
"""

from __future__ import annotations

import math
from functools import lru_cache

import numpy as np

from geometry.linkage import Array

Pair = tuple[float, float] | Array

_CORNER_STEPS = 9


@lru_cache(maxsize=64)
def _unit_arc(start: float, end: float, steps: int) -> Array:
    angles = np.linspace(start, end, steps)
    return np.column_stack([np.cos(angles), np.sin(angles)])


def circle(center: Pair, radius: float, steps: int = 30) -> Array:
    """A circle's outline (steps, 2)."""
    around = _unit_arc(0.0, math.tau * (1 - 1 / steps), steps)
    return np.asarray(center, dtype=float) + radius * around


def tube(a: Pair, b: Pair, radius: float, radius_b: float | None = None) -> Array:
    """A tube with round ends from ``a`` to ``b``, tapered if ``radius_b`` is given."""
    start, end = np.asarray(a, dtype=float), np.asarray(b, dtype=float)
    second = radius if radius_b is None else radius_b
    along = end - start
    length = math.hypot(along[0], along[1])
    if not math.isfinite(length):
        return np.full((2, 2), np.nan)
    if length <= abs(radius - second) + 1e-9:
        return circle(start if radius >= second else end, max(radius, second))
    # The sides touch both circles a little ahead of or behind square.
    lean = math.asin((radius - second) / length)
    way = math.atan2(along[1], along[0])
    back = _unit_arc(math.pi / 2 - lean, 3 * math.pi / 2 + lean, _CORNER_STEPS)
    front = _unit_arc(-math.pi / 2 + lean, math.pi / 2 - lean, _CORNER_STEPS)
    local = np.vstack([radius * back, second * front + (length, 0.0)])
    return start + turned(local, way)


def turned(points: Array, angle: float) -> Array:
    """Places (n, 2) turned about the origin, radians counterclockwise."""
    cos, sin = math.cos(angle), math.sin(angle)
    return np.asarray(points @ np.array([[cos, sin], [-sin, cos]]))


def sheen(a: Pair, b: Pair, radius: float) -> Array:
    """The strip of light along a tube's upper flank."""
    start, end = np.asarray(a, dtype=float), np.asarray(b, dtype=float)
    along = end - start
    length = math.hypot(along[0], along[1])
    if not length > 3.0 * radius:
        return np.full((2, 2), np.nan)
    along = along / length
    across = np.array([-along[1], along[0]])
    if across[1] < 0.0:
        across = -across
    shift = 0.42 * radius * across
    return tube(
        start + 0.9 * radius * along + shift, end - 0.9 * radius * along + shift, 0.16 * radius
    )


def carried(local: Array, origin: Pair, axis: Pair) -> Array:
    """Places (n, 2) in a part's own axes, x along ``axis`` (unit), moved to where it is."""
    ax, ay = float(axis[0]), float(axis[1])
    return np.asarray(
        np.asarray(origin, dtype=float) + local @ np.array([[ax, ay], [-ay, ax]])
    )


@lru_cache(maxsize=32)
def tire(radius: float, width: float) -> Array:
    """A tire seen from the front, x along the axle, y up in the wheel's plane.

    Tread narrower than the sidewalls' bulge, with round shoulders.
    """
    half, depth = 0.5 * width, min(0.3 * width, 0.45 * radius)
    shoulder = min(0.34 * width, half)
    quarter = _unit_arc(0.0, math.pi / 2, _CORNER_STEPS)
    corner = np.column_stack(
        [half - shoulder + shoulder * quarter[:, 0], radius - depth + depth * quarter[:, 1]]
    )
    upper = np.vstack([corner, corner[::-1] * (-1.0, 1.0)])
    return np.vstack([upper, -upper])


@lru_cache(maxsize=32)
def grooves(radius: float, width: float) -> list[Array]:
    """Tread grooves' edges at the top and bottom of a tire, as short lines (2, 2)."""
    out = []
    deep = min(9.0, 0.1 * radius)
    for share in (-0.3, -0.1, 0.1, 0.3):
        for end in (1.0, -1.0):
            x = share * width
            out.append(np.array([[x, end * radius], [x, end * (radius - deep)]]))
    return out


def rim_radius(radius: float, rim_diameter: float) -> float:
    """A rim's bead radius, kept inside the tire it is drawn in."""
    return max(min(0.5 * rim_diameter, 0.84 * radius), 0.0)


@lru_cache(maxsize=32)
def rim_window(radius: float, rim_diameter: float, rim_width: float) -> Array:
    """What is open to look through between the beads: a rectangle (4, 2)."""
    high, half = rim_radius(radius, rim_diameter), 0.5 * rim_width
    return np.array([(half, high), (-half, high), (-half, -high), (half, -high)])


@lru_cache(maxsize=32)
def rim_line(radius: float, rim_diameter: float, rim_width: float, upper: bool) -> Array:
    """The rim's cut edge from the outboard to the inboard flange, an open line (10, 2)."""
    bead, half = rim_radius(radius, rim_diameter), 0.5 * rim_width
    flange, drop = min(bead + 15.0, 0.94 * radius), 0.88 * bead
    sign = 1.0 if upper else -1.0
    shape = [
        (half + 5.0, flange - 3.0), (half, flange), (half - 3.0, bead),
        (0.3 * rim_width, bead - 2.0),
        (0.2 * rim_width, drop), (-0.2 * rim_width, drop), (-0.32 * rim_width, bead - 2.0),
        (3.0 - half, bead), (-half, flange), (-half - 5.0, flange - 3.0),
    ]
    return np.array(shape) * (1.0, sign)


@lru_cache(maxsize=32)
def disc_line(radius: float, rim_diameter: float, rim_width: float, offset: float) -> Array:
    """The wheel disc's cut edge from rim to rim through its mounting face, open (6, 2)."""
    drop = 0.88 * rim_radius(radius, rim_diameter)
    face = min(max(offset, -0.45 * rim_width), 0.45 * rim_width)
    rim = min(max(face, -0.18 * rim_width), 0.18 * rim_width)
    hub = min(72.0, 0.5 * drop)
    return np.array(
        [(rim, drop), (face, 0.62 * drop), (face, hub), (face, -hub), (face, -0.62 * drop),
         (rim, -drop)]
    )


@lru_cache(maxsize=32)
def hub(offset: float, rim_width: float, radius: float) -> Array:
    """The hub behind the wheel's mounting face, a stepped outline (8, 2)."""
    face = min(max(offset, -0.45 * rim_width), 0.45 * rim_width)
    high = min(62.0, 0.3 * radius)
    return np.array(
        [(face, high), (face - 10.0, high), (face - 10.0, 0.5 * high), (face - 46.0, 0.42 * high),
         (face - 46.0, -0.42 * high), (face - 10.0, -0.5 * high), (face - 10.0, -high),
         (face, -high)]
    )


def bellows(a: Pair, b: Pair, big: float, small: float, folds: int = 7) -> Array:
    """A folded rubber boot from ``a`` (its big end) to ``b``."""
    start, end = np.asarray(a, dtype=float), np.asarray(b, dtype=float)
    along = end - start
    length = math.hypot(along[0], along[1])
    if not length > 1e-9:
        return np.full((2, 2), np.nan)
    along = along / length
    steps = np.linspace(0.0, length, 2 * folds + 1)
    size = np.linspace(big, small, 2 * folds + 1)
    size[::2] *= 0.68
    top = np.column_stack([steps, size])
    local = np.vstack([top, top[::-1] * (1.0, -1.0)])
    return carried(local, start, along)


def coil(a: Pair, b: Pair, radius: float, turns: float = 6.0) -> Array:
    """A coil spring from mount ``a`` to mount ``b``, as one open line."""
    start, end = np.asarray(a, dtype=float), np.asarray(b, dtype=float)
    along = end - start
    length = math.hypot(along[0], along[1])
    if not length > 1e-9:
        return np.full((2, 2), np.nan)
    steps = np.linspace(0.0, 1.0, int(turns * 10) + 1)
    rise = np.clip((steps - 0.06) / 0.88, 0.0, 1.0)
    swing = radius * np.sin(rise * turns * math.tau)
    return carried(np.column_stack([steps * length, swing]), start, along / length)


def clipped(
    a: Pair, b: Pair, box: tuple[float, float, float, float]
) -> tuple[float, float, float, float] | None:
    """The part of the line from ``a`` to ``b`` inside a box (left, bottom, right, top).

    Gives (x1, y1, x2, y2), or None where nothing of it is inside (Liang and Barsky, 1984).
    """
    x1, y1, x2, y2 = float(a[0]), float(a[1]), float(b[0]), float(b[1])
    dx, dy = x2 - x1, y2 - y1
    if not math.isfinite(x1 + y1 + dx + dy):
        return None
    low, high = 0.0, 1.0
    left, bottom, right, top = box
    for step, room in ((-dx, x1 - left), (dx, right - x1), (-dy, y1 - bottom), (dy, top - y1)):
        if step == 0.0:
            if room < 0.0:
                return None
            continue
        share = room / step
        if step < 0.0:
            low = max(low, share)
        else:
            high = min(high, share)
    if low > high:
        return None
    return x1 + low * dx, y1 + low * dy, x1 + high * dx, y1 + high * dy
