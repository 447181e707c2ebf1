"""Where a pivot may sit: the rack zone of the inner tie-rod pivot, and any nail's pivot zone.

The rack zone holds the inner tie-rod pivots, in the front view at the rack's fore-aft
station and with the rod cut to length for static toe, whose toe range over the travel stays
within a tolerance. Coarse zones are made in every frame; the full one and its exact edge
take longer and can be stopped.
"""

from __future__ import annotations

from copy import copy
from dataclasses import dataclass, field
from functools import cached_property

import numpy as np
import shapely
from shapely.geometry.base import BaseGeometry

from geometry import layout as names
from geometry.corner import Corner
from geometry.inner_pivot import HeldMotion, held_travel
from geometry.layout import SideName, UnitName
from geometry.linkage import Array
from geometry.minimax import minimax
from geometry.pivot_zones import PivotZone, pivot_zone
from geometry.solution import Solution
from geometry.steering import inner_shifts
from geometry.toe_law import ToeLaw, rods_to
from geometry.tolerances import toe_angle, tolerance
from geometry.zone_edge import onto_level
from geometry.zone_shapes import (
    NOTHING,
    Progress,
    Room,
    Stop,
    areas_of,
    cut,
    filled_in,
    lines_at,
    region_at_most,
    room_in,
)

__all__ = [
    "COARSE",
    "FULL",
    "PivotZone",
    "RackZone",
    "RefinedEdge",
    "Room",
    "cut",
    "motion_at",
    "pivot_zone",
    "rack_zone",
    "rack_zone_of",
    "refine_edge",
    "room_in",
    "thinned",
    "true_ranges",
]

COARSE = (24, 24)
"""Places over and up in a zone that is made anew in every frame."""
FULL = (96, 96)
COARSE_TRAVELS = 21
FULL_TRAVELS = 41

LEVELS = (0.25, 0.5, 1.0, 2.0, 4.0)
"""Contours shown, as shares of the tolerance."""

WIDEST = 400.0
"""No window goes farther than this from its middle, mm."""
NARROWEST = 0.5
_RAYS = 72
_WINDOW_POSES = 11
_MARGIN = 1.25

EDGE_EXACT = 4e-12
"""How near the tolerance a refined edge stands, rad of toe range (a quarter of 1e-9 deg)."""


@dataclass(frozen=True)
class RackZone:
    """Toe ranges over a grid of inner tie-rod pivots, and what of it is within the tolerance.

    overs (m,), ups (k,)   places in the side's measures, mm
    ranges     (k, m) rad, toe peak to peak over ``travel`` (n,) mm; NaN out of reach
    tolerance  rad; ``present`` and ``best`` (over, up) mm, ``best_range`` rad
    best       None where no place could be judged
    """

    overs: Array
    ups: Array
    ranges: Array
    tolerance: float
    travel: Array
    present: tuple[float, float]
    best: tuple[float, float] | None
    best_range: float | None
    shift: Array | None = field(default=None, repr=False)

    @property
    def steps(self) -> tuple[float, float]:
        """From one place of the grid to the next, over and up, mm."""
        return float(self.overs[1] - self.overs[0]), float(self.ups[1] - self.ups[0])

    @cached_property
    def _closed(self) -> Array:
        found = self.ranges[np.isfinite(self.ranges)]
        worst = max(4.0 * self.tolerance, float(found.max()) if found.size else 0.0)
        return filled_in(self.ranges, worst)

    @cached_property
    def zone(self) -> BaseGeometry:
        """The places within the tolerance, as a Polygon or MultiPolygon; empty if none."""
        return region_at_most(self.overs, self.ups, self._closed, self.tolerance)

    @cached_property
    def contours(self) -> dict[float, list[Array]]:
        """Contour lines (n, 2) of the toe range, by its value in rad."""
        return {
            share * self.tolerance: lines_at(
                self.overs, self.ups, self._closed, share * self.tolerance
            )
            for share in LEVELS
        }

    @property
    def holds_present(self) -> bool:
        """True if the pivot stands inside the zone as it is."""
        return bool(self.zone.covers(shapely.Point(self.present)))

    @property
    def room(self) -> tuple[tuple[float, float], Room] | None:
        """The zone's room around the present pivot, or else around its best spot; with the
        place it is measured from. None if neither is inside."""
        for place in (self.present, self.best):
            found = None if place is None else room_in(self.zone, place)
            if place is not None and found is not None:
                return place, found
        return None

    def words(self, units: UnitName) -> str:
        """The zone's size as a sentence."""
        if self.best is None or self.best_range is None:
            return "The parts don't meet over the whole travel, so no place can be judged."
        room = self.room
        if room is not None:
            here = room[0] == self.present
            where = "as it stands" if here else "from its best spot (it stands outside)"
            return f"The inner tie-rod pivot has room {where}: {room[1].words(units)}."
        if self.best_range > self.tolerance:
            return (
                "No place for the inner tie-rod pivot keeps the toe change within the tolerance"
                " over this travel: the steering arm's end or the arms have to change."
            )
        return "The zone is too small to show here."


@dataclass(frozen=True)
class RefinedEdge:
    """A zone's edge on the exact tolerance.

    ``zone`` is the shape; ``places`` (2, k) mm its corners; ``exact`` (k,) bool tells those
    that stand on the tolerance from those on the window's border or at the end of reach.
    """

    zone: BaseGeometry
    places: Array
    exact: np.ndarray


def thinned(motion: HeldMotion, poses: int) -> HeldMotion:
    """A single corner's motion with about as many poses, its ends and ride height kept."""
    count = motion.travel.shape[-1]
    step = max(1, (count - 1) // (poses - 1)) if poses > 1 else count
    if (count - 1) % step or (count // 2) % step:
        return motion
    return HeldMotion(
        **{
            name: value[..., ::step] if value.shape[-1:] == (count,) else value
            for name, value in motion.__dict__.items()
        }
    )


def motion_at(corner: Corner, travel: Array, shift: Array | None = None) -> HeldMotion:
    """A single corner moved with its toe held where the steering puts it at ride height.

    Straight ahead that is the static toe; ``shift`` (3,) mm is the inner pivot's way from
    there. The steered toe is that of the present inner pivot.
    """
    if shift is None:
        return held_travel(corner, travel)
    steered = copy(corner)
    # Only the held heading reads the static toe; the wheel stays mounted as it is.
    steered.static_toe = corner.poses(0.0, np.reshape(shift, (3, 1))).toe
    return held_travel(steered, travel)


def rack_zone(
    corner: Corner,
    motion: HeldMotion,
    tolerance_rad: float,
    *,
    center: tuple[float, float] | None = None,
    half_size: tuple[float, float] | None = None,
    steps: tuple[int, int] = COARSE,
    shift: Array | None = None,
) -> RackZone:
    """Toe ranges (rad) of a grid of inner pivots for one corner over a toe-held motion.

    ``center`` (over, up) mm is the grid's middle, the best fit if not given; ``half_size``
    its half width and height, chosen to hold the whole zone if not given. ``steps`` counts
    places over and up. ``shift`` (3,) mm is the inner pivot's way from straight ahead where
    the steering is off center; ``motion`` then comes from ``motion_at`` with the same shift.
    """
    outer, inner = corner.tie_outer[:, 0], corner.tie_inner[:, 0]
    law = ToeLaw(motion, outer, shift)
    present = (float(inner[1]), float(inner[2]))
    fore = float(inner[0])

    def judge(overs: Array, ups: Array) -> Array:
        return law.ranges(rods_to(outer, fore, overs, ups))

    start = np.array(present if center is None else center)
    best = _least_place(law, outer, fore, start) if center is None else start
    least = float(judge(best[:1], best[1:])[0])
    if not np.isfinite(least):
        best = start
    middle, half = best, half_size
    if half is None:
        middle, half = _window(law, outer, fore, best, max(tolerance_rad, 1.5 * least))
    while True:
        overs = np.linspace(middle[0] - half[0], middle[0] + half[0], max(steps[0], 2))
        ups = np.linspace(middle[1] - half[1], middle[1] + half[1], max(steps[1], 2))
        grid = np.meshgrid(overs, ups)
        ranges = judge(grid[0].ravel(), grid[1].ravel()).reshape(grid[0].shape)
        wider = None if half_size else _wider(ranges <= tolerance_rad, half)
        if wider is None:
            break
        half = wider
    found = bool(np.isfinite(least))
    place = (float(best[0]), float(best[1])) if found else None
    return RackZone(
        overs, ups, ranges, tolerance_rad, law.travel, present, place,
        least if found else None, shift,
    )


def _wider(inside: np.ndarray, half: tuple[float, float]) -> tuple[float, float] | None:
    """A larger window where the zone runs into this one's border; None if it does not."""
    across = bool(inside[:, 0].any() or inside[:, -1].any()) and half[0] < WIDEST
    along = bool(inside[0].any() or inside[-1].any()) and half[1] < WIDEST
    if not (across or along):
        return None
    grow = [min(WIDEST, 1.6 * size) if more else size
            for size, more in zip(half, (across, along), strict=True)]
    return grow[0], grow[1]


def _toes_near(law: ToeLaw, outer: Array, fore: float, place: Array) -> tuple[Array, Array]:
    """Toe (n,), rad, at a place (2,), and its slopes (n, 2), rad/mm, over and up."""
    step = 1e-2
    probes = place[:, None] + step * np.array([[0, 1, -1, 0, 0], [0, 0, 0, 1, -1]])
    toes = law.toes(rods_to(outer, fore, probes[0], probes[1]))
    return toes[0], np.stack([toes[1] - toes[2], toes[3] - toes[4]], axis=1) / (2.0 * step)


def _least_place(law: ToeLaw, outer: Array, fore: float, start: Array) -> Array:
    """The place (2,), over and up in mm, with the least toe range, from a first guess."""
    place = start.copy()
    shares = np.array([1.0, 0.5, 0.25, 0.1, 0.03])
    least = np.inf
    for _ in range(12):
        toes, slopes = _toes_near(law, outer, fore, place)
        if not (np.all(np.isfinite(toes)) and np.all(np.isfinite(slopes))):
            break
        move = minimax(slopes, toes)
        if move is None:
            break
        tries = place[:, None] + np.asarray(move)[:, None] * shares
        ranges = law.ranges(rods_to(outer, fore, tries[0], tries[1]))
        ranges = np.where(np.isfinite(ranges), ranges, np.inf)
        choice = int(np.argmin(ranges))
        if not ranges[choice] < least * (1.0 - 1e-6):
            break
        place, least = tries[:, choice], float(ranges[choice])
    return place


def _window(
    law: ToeLaw, outer: Array, fore: float, best: Array, level: float
) -> tuple[Array, tuple[float, float]]:
    """Middle (2,) and half size, mm, of a window around where the toe range is within ``level``.

    While toe is linear in the place, the zone is a polygon: along a ray from the best spot
    the first pair of poses whose toes part by ``level`` ends it.
    """
    toes, slopes = _toes_near(law, outer, fore, best)
    usable = bool(np.all(np.isfinite(toes)) and np.all(np.isfinite(slopes)))
    if not usable:
        return best, (50.8, 50.8)
    thin = slice(None, None, max(1, (toes.size - 1) // (_WINDOW_POSES - 1)))
    toes, slopes = toes[thin], slopes[thin]
    angles = np.linspace(0.0, 2.0 * np.pi, _RAYS, endpoint=False)
    ways = np.stack([np.cos(angles), np.sin(angles)])
    first, second = np.triu_indices(toes.size, 1)
    parting = (slopes[first] - slopes[second]) @ ways
    apart = (toes[first] - toes[second])[:, None]
    with np.errstate(all="ignore"):
        ends = (np.where(parting > 0.0, level, -level) - apart) / parting
    reach = np.clip(np.nan_to_num(ends, nan=WIDEST).min(axis=0), 0.0, WIDEST)
    corners = best[:, None] + reach * ways
    low, high = corners.min(axis=1), corners.max(axis=1)
    half = np.clip(0.5 * _MARGIN * (high - low), NARROWEST, WIDEST)
    return 0.5 * (low + high), (float(half[0]), float(half[1]))


def rack_zone_of(
    solution: Solution, side: SideName, *, full: bool = False, rack: float = 0.0
) -> RackZone:
    """The rack zone of a solved car's side, by its own tolerance and travel.

    Coarse unless ``full``. ``rack`` mm takes the steering off center to the car's left.
    """
    state = solution.sides[side]
    shift = inner_shifts(solution.layout, rack)[side][:, 0] if rack else None
    poses, steps = (FULL_TRAVELS, FULL) if full else (COARSE_TRAVELS, COARSE)
    limit = toe_angle(state.side, tolerance(solution.layout, "toe range"))
    if shift is None:
        motion = thinned(state.pivots.motion, poses)
        best = state.pivots.place("best fit")
    else:
        travel = np.linspace(-solution.span, solution.span, poses)
        motion, best = motion_at(state.corner, travel, shift), None
    return rack_zone(state.corner, motion, limit, center=best, steps=steps, shift=shift)


def true_ranges(
    corner: Corner, places: Array, travel: Array, shift: Array | None = None
) -> Array:
    """Toe peak to peak (k,), rad, by the true position solve, for inner pivots (2, k), mm.

    NaN where a pose of the ``travel`` (n,) is missing.
    """
    fore = np.full(places.shape[1], corner.tie_inner[0, 0])
    points = {name: place[:, 0] for name, place in corner.points.items()}
    points[names.TIE_INNER] = np.stack([fore, places[0], places[1]])
    sine = float(corner.spin_axis[2, 0])
    cars = Corner(
        points, -float(np.arcsin(sine)), float(corner.static_toe[0]), float(corner.tire_radius[0])
    )
    moved = None if shift is None else np.broadcast_to(np.reshape(shift, (3, 1)), (3, travel.size))
    toe = cars.poses(travel, moved).toe
    with np.errstate(all="ignore"):
        return np.asarray(toe.max(axis=-1) - toe.min(axis=-1))


def refine_edge(
    corner: Corner,
    zone: RackZone,
    *,
    progress: Progress | None = None,
    stop: Stop | None = None,
) -> RefinedEdge | None:
    """The zone with its edge moved onto the exact tolerance, found by the true position solve.

    None if stopped.
    """
    inside = (zone.overs[0], zone.ups[0], zone.overs[-1], zone.ups[-1])
    shapes: list[BaseGeometry] = []
    rings = [
        np.asarray(ring.coords)[:-1].T
        for part in shapely.get_parts(zone.zone)
        for ring in (part.exterior, *part.interiors)
    ]
    if not rings:
        return RefinedEdge(NOTHING, np.empty((2, 0)), np.empty(0, dtype=bool))

    def past(places: Array) -> Array:
        return true_ranges(corner, places, zone.travel, zone.shift) - zone.tolerance

    outward = [_outward(ring) for ring in rings]
    found = onto_level(
        np.concatenate(rings, axis=1),
        np.concatenate(outward, axis=1),
        min(zone.steps),
        past,
        inside,
        EDGE_EXACT,
        progress,
        stop,
    )
    if found is None:
        return None
    places, exact = found
    start = 0
    for part in shapely.get_parts(zone.zone):
        moved = []
        for ring in (part.exterior, *part.interiors):
            count = len(ring.coords) - 1
            moved.append(places[:, start : start + count].T)
            start += count
        shapes.append(shapely.make_valid(shapely.Polygon(moved[0], moved[1:])))
    return RefinedEdge(areas_of(shapely.union_all(shapes)), places, exact)


def _outward(ring: Array) -> Array:
    """Unit normals (2, k) of a ring (2, k), to the right of its way around.

    The way out of an area whose rings run as shapely's contours do does not matter: the
    edge is looked for on both sides.
    """
    chord = np.roll(ring, -1, axis=1) - np.roll(ring, 1, axis=1)
    size = np.hypot(chord[0], chord[1])
    with np.errstate(all="ignore"):
        return np.where(size > 0.0, np.stack([chord[1], -chord[0]]) / size, [[0.0], [1.0]])
