"""Rigid pieces and the places where they can meet: small pure functions on arrays.

Space vectors are arrays with the component first, ``(3, ...)`` in the order fore, over,
up, so that every function takes one pose or a million. Lines in the front view are
homogeneous triples ``(3, ...)``: ``a*over + b*up + c = 0``; points are ``(over, up, w)``,
with ``w = 0`` for a point at infinity in that direction.
"""

from __future__ import annotations

from typing import TypeAlias

import numpy as np
from numpy.typing import NDArray

Array: TypeAlias = NDArray[np.float64]

PARALLEL_SINE = 1e-9
"""Two lines whose directions differ by less (sine of the angle) count as parallel."""

EDGE_SINE_SQ = 1e-10
"""Two edges of a rigid part count as one line where the squared sine of the angle between
them is less: what hangs on them could then turn freely, and rounding would choose its place."""

COINCIDENT_MM = 1e-6
"""Parallel lines closer than this are one line; points closer than this are one point."""


def dot(a: Array, b: Array) -> Array:
    """Scalar product over the first axis; shapes (3, ...) broadcast."""
    return np.asarray(a[0] * b[0] + a[1] * b[1] + a[2] * b[2])


def cross(a: Array, b: Array) -> Array:
    """Vector product over the first axis; shapes (3, ...) broadcast."""
    out = np.empty(np.broadcast_shapes(a.shape, b.shape))
    np.subtract(a[1] * b[2], a[2] * b[1], out=out[0, ...])
    np.subtract(a[2] * b[0], a[0] * b[2], out=out[1, ...])
    np.subtract(a[0] * b[1], a[1] * b[0], out=out[2, ...])
    return out


def norm(a: Array) -> Array:
    """Length over the first axis."""
    return np.asarray(np.sqrt(dot(a, a)))


def unit(a: Array) -> Array:
    """``a`` at length 1; NaN where ``a`` has no length."""
    return np.asarray(a / norm(a))


def three_spheres(
    center: Array,
    to_second: Array,
    to_third: Array,
    radius_sq: Array,
    second_sq: Array,
    third_sq: Array,
    branch: Array,
) -> tuple[Array, Array]:
    """Where three spheres meet, on one of the two sides of their centers' plane.

    ``center`` (3, ...) is the first sphere's center, ``to_second`` and ``to_third`` lead
    from it to the others'; the radii come squared. ``branch`` is +1 for the meeting on
    the side of ``to_second x to_third``, -1 for the other. Returns the point (3, ...) and
    the squared distance (...) to the centers' plane, mm2: negative where the spheres do
    not meet, and there the point is the nearest in that plane. NaN where the centers
    stand in one line (EDGE_SINE_SQ).
    """
    ee = dot(to_second, to_second)
    ff = dot(to_third, to_third)
    ef = dot(to_second, to_third)
    along_second = 0.5 * (radius_sq - second_sq + ee)
    along_third = 0.5 * (radius_sq - third_sq + ff)
    normal = cross(to_second, to_third)
    # The same as ee * ff - ef * ef, but with far less lost where the edges are near one line.
    det = dot(normal, normal)
    det = np.where(det > EDGE_SINE_SQ * ee * ff, det, np.nan)
    a = (along_second * ff - along_third * ef) / det
    b = (along_third * ee - along_second * ef) / det
    height_sq = radius_sq - (a * along_second + b * along_third)
    c = branch * np.sqrt(np.maximum(height_sq, 0.0) / det)
    return center + a * to_second + b * to_third + c * normal, np.asarray(height_sq)


def rigid_coefficients(first: Array, second: Array, place: Array) -> Array:
    """``place`` in the skew frame of two edges: (3, ...) coefficients a, b, c.

    ``place = a*first + b*second + c*(first x second)``. The coefficients stay the same
    when all three are carried along by one rigid body, which makes them the cheapest way
    to place a knuckle's other points. NaN where the edges are parallel (EDGE_SINE_SQ).
    """
    ee = dot(first, first)
    ff = dot(second, second)
    ef = dot(first, second)
    normal = cross(first, second)
    det = dot(normal, normal)
    det = np.where(det > EDGE_SINE_SQ * ee * ff, det, np.nan)
    we = dot(place, first)
    wf = dot(place, second)
    wn = dot(place, normal)
    return np.stack(
        np.broadcast_arrays((we * ff - wf * ef) / det, (wf * ee - we * ef) / det, wn / det)
    )


def rigid_place(coefficients: Array, first: Array, second: Array, normal: Array) -> Array:
    """The vector (3, ...) that has ``coefficients`` in the moved edges' frame."""
    return np.asarray(
        coefficients[0] * first + coefficients[1] * second + coefficients[2] * normal
    )


def plane_trace(normal: Array, through: Array, fore: Array) -> Array:
    """The line (3, ...) in which a plane cuts the transverse plane at ``fore``.

    The plane has ``normal`` (3, ...) and passes ``through`` (3, ...). The line is scaled so
    that (a, b) has length 1; NaN where the plane is itself transverse.
    """
    line = np.stack(
        np.broadcast_arrays(normal[1], normal[2], normal[0] * fore - dot(normal, through))
    )
    return np.asarray(line / np.hypot(line[0], line[1]))


def line_through(p: Array, q: Array) -> Array:
    """The line through two homogeneous points (3, ...), (a, b) at length 1; NaN if one point."""
    line = cross(p, q)
    size = np.hypot(line[0], line[1])
    return np.asarray(line / np.where(size > 0.0, size, np.nan))


def meeting(first: Array, second: Array) -> Array:
    """Where two lines with unit (a, b) meet: a homogeneous point (3, ...).

    ``w`` is 1 for a finite point and exactly 0 for parallel lines, with (over, up) then
    their unit direction. All three are NaN where the lines lie on one another.
    """
    point = cross(first, second)
    w = point[2]
    parallel = np.abs(w) < PARALLEL_SINE
    # For parallel lines the cross product's first two parts are direction x distance.
    apart = np.hypot(point[0], point[1])
    same = parallel & (apart < COINCIDENT_MM)
    scale = np.where(parallel, np.nan, w)
    finite = point / scale
    direction = np.stack(np.broadcast_arrays(-first[1], first[0], np.zeros_like(w)))
    out = np.where(parallel, direction, finite)
    return np.asarray(np.where(same, np.nan, out))


def homogeneous(over: Array, up: Array) -> Array:
    """A finite front-view point as (over, up, 1)."""
    return np.stack(np.broadcast_arrays(over, up, np.ones(())))
