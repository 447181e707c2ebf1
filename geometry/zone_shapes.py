"""Zones as shapes: regions of a grid below a level, their room each way, and cuts out of them.

Shapes are shapely geometries in one side's measures, (over, up) mm.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
import shapely
import shapely.ops
from shapely.geometry.base import BaseGeometry

from geometry.layout import MM_PER_INCH, NoGo, SideName, UnitName
from geometry.lengths import format_length
from geometry.linkage import Array

NOTHING: BaseGeometry = shapely.Polygon()
"""The zone of what can't be had anywhere."""

FAR_RAY = 1e5
"""Longer than any way across a zone, mm."""

Progress = Callable[[float], None]
"""Told how much of a long work is done, 0 to 1."""
Stop = Callable[[], bool]
"""Asked now and then; True when the answer is no longer wanted."""


def filled_in(values: Array, worse: float) -> Array:
    """Grid values with something ``worse`` where there is none, so that contours close there."""
    return np.where(np.isfinite(values), values, worse)


def region_at_most(overs: Array, ups: Array, values: Array, level: float) -> BaseGeometry:
    """Where grid values (k, m) over ``ups`` (k,) and ``overs`` (m,) are at most ``level``.

    A Polygon or MultiPolygon, empty if nowhere. Values must be finite.
    """
    if not np.any(values <= level):
        return NOTHING
    import contourpy  # costs a fifth of a second, and only zones need it

    below = float(np.min(values)) - 1.0 - abs(float(np.min(values)))
    maker = contourpy.contour_generator(
        overs, ups, values, fill_type=contourpy.FillType.OuterOffset
    )
    shapes = []
    for corners, offsets in zip(*maker.filled(below, level), strict=True):
        rings = [corners[a:b] for a, b in pairwise(offsets)]
        if len(rings[0]) > 3:
            shapes.append(shapely.Polygon(rings[0], [r for r in rings[1:] if len(r) > 3]))
    return areas_of(shapely.union_all(shapely.make_valid(np.array(shapes, dtype=object))))


def lines_at(overs: Array, ups: Array, values: Array, level: float) -> list[Array]:
    """The contour lines (n, 2), over and up in mm, on which grid values are ``level``."""
    import contourpy

    maker = contourpy.contour_generator(
        overs, ups, values, line_type=contourpy.LineType.Separate
    )
    return [np.asarray(line) for line in maker.lines(level)]


def areas_of(shape: BaseGeometry) -> BaseGeometry:
    """Only what has an area: cuts and touching edges leave lines and points behind."""
    parts = [part for part in shapely.get_parts(shape) if part.geom_type == "Polygon"]
    parts = [part for part in parts if part.area > 0.0]
    if not parts:
        return NOTHING
    return parts[0] if len(parts) == 1 else shapely.MultiPolygon(parts)


@dataclass(frozen=True)
class Room:
    """How far one can go from a place inside a zone, straight up, down, in and out, mm."""

    up: float
    down: float
    inboard: float
    outboard: float

    def words(self, units: UnitName) -> str:
        """As a builder says it: "1/8 in up or down, 3/8 in in or 1/4 in out"."""
        return f"{_both(self.up, 'up', self.down, 'down', units)}, " + _both(
            self.inboard, "in", self.outboard, "out", units
        )


def _both(first: float, this: str, second: float, that: str, units: UnitName) -> str:
    a, b = _down_to_tape(first, units), _down_to_tape(second, units)
    return f"{a} {this} or {that}" if a == b else f"{a} {this} or {b} {that}"


def _down_to_tape(mm: float, units: UnitName) -> str:
    """A size never said larger than it is: rounded down to a 32nd (64th where small) or 0.1 mm."""
    if units == "mm":
        return _said(mm, 0.1, "mm", 1, "less than 0.1 mm")
    small = mm < MM_PER_INCH / 8
    return _said(mm, MM_PER_INCH / (64 if small else 32), "in", 64, "less than 1/64 in")


def _said(mm: float, step: float, units: UnitName, denominator: int, least: str) -> str:
    steps = math.floor(mm / step + 1e-9)
    return format_length(steps * step, units, denominator, mark=True) if steps else least


def way_into(zone: BaseGeometry, place: tuple[float, float]) -> tuple[float, float]:
    """The shortest move (over, up), mm, that brings a place into a zone that isn't empty."""
    _, nearest = shapely.ops.nearest_points(shapely.Point(place), zone)
    return nearest.x - place[0], nearest.y - place[1]


def room_in(zone: BaseGeometry, place: tuple[float, float]) -> Room | None:
    """The room around a place (over, up); None if it is not inside the zone."""
    if zone.is_empty or not zone.covers(shapely.Point(place)):
        return None
    over, up = place

    def way(d_over: float, d_up: float) -> float:
        ray = shapely.LineString(
            [place, (over + FAR_RAY * d_over, up + FAR_RAY * d_up)]
        )
        inside = shapely.get_parts(shapely.intersection(ray, zone))
        start = shapely.Point(place)
        # Only the piece that begins here: what lies beyond a gap is out of reach.
        near = [part.length for part in inside if part.distance(start) < 1e-9 * (1.0 + abs(up))]
        return float(max(near, default=0.0))

    return Room(way(0.0, 1.0), way(0.0, -1.0), way(-1.0, 0.0), way(1.0, 0.0))


def no_go_area(shapes: Iterable[NoGo], side: SideName) -> BaseGeometry:
    """All front-view no-go shapes with their clearance, in one side's measures.

    A shape that is mirrored stands on both sides of the centerline.
    """
    areas = []
    for shape in shapes:
        if shape.view != "front" or len(shape.outline) < 3:
            continue
        corners = np.array(shape.outline, dtype=float)
        signs = (1.0, -1.0) if shape.side is None else (1.0 if shape.side == side else -1.0,)
        for sign in signs:
            outline = shapely.make_valid(shapely.Polygon(corners * (sign, 1.0)))
            areas.append(shapely.buffer(outline, max(shape.clearance, 0.0)))
    return shapely.union_all(areas) if areas else NOTHING


def cut(zone: BaseGeometry, shapes: Iterable[NoGo], side: SideName) -> BaseGeometry:
    """A zone of ``side`` without what its no-go shapes and their clearances take away."""
    return areas_of(shapely.difference(zone, no_go_area(shapes, side)))
