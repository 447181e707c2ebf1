"""Where one nail may sit so that the car keeps every target it was given.

The nail is moved over a grid in the front view, each place a whole car of its own; the
zone is what all targets' regions share. Relay-rod points and points that no wanted figure
depends on have no zone: the answer says so.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
import shapely
from shapely.geometry.base import BaseGeometry

from geometry.corner import Corner, space
from geometry.figure_batches import BATCH_FIGURES, CURVES, CarBatch, figures_of, range_of
from geometry.layout import Layout, Side, SideName, Target, other_side
from geometry.linkage import Array
from geometry.tolerances import FIGURES
from geometry.zone_edge import onto_level
from geometry.zone_shapes import (
    NOTHING,
    Progress,
    Room,
    Stop,
    areas_of,
    filled_in,
    region_at_most,
    room_in,
)

PIVOT_STEPS = (41, 41)
PIVOT_HALF_SIZE = (50.8, 50.8)
PIVOT_TRAVELS = 41

_CHUNK = 512
"""Cars solved at a time: few enough to be stopped within a tenth of a second or two."""

FINER = 6
"""How much finer the grid becomes between its places for figures over travel."""


@dataclass(frozen=True)
class Bound:
    """One limit of one target: a figure at least (``low``) or at most (high) a value."""

    figure: str
    limit: float
    low: bool

    @property
    def label(self) -> str:
        return f"{FIGURES[self.figure].label} at {'least' if self.low else 'most'}"

    def past(self, values: Array) -> Array:
        """How far values (...) lie past the limit: negative or zero within, NaN if none.

        A swing arm goes through infinity where the arms are parallel and comes back on the
        other side; its inverse passes there smoothly.
        """
        if self.figure != "swing arm":
            return np.asarray(self.limit - values if self.low else values - self.limit)
        with np.errstate(all="ignore"):
            bend = 1.0 / values
        if self.limit == 0.0:
            return np.asarray(-bend if self.low else bend)
        edge = 1.0 / self.limit
        between = self.low == (self.limit > 0.0)
        # At least a positive length, or at most a negative one: between the limit and
        # parallel. Else: beyond either of the two.
        sign = 1.0 if edge > 0.0 else -1.0
        if between:
            return np.asarray(np.maximum(-sign * bend, sign * (bend - edge)))
        return np.asarray(np.minimum(sign * bend, sign * (edge - bend)))


@dataclass(frozen=True)
class PivotZone:
    """Which places of one nail keep every target.

    overs (m,), ups (k,)   places in the side's measures, mm
    past       each bound's (k, m) distance past its limit, in the figure's unit (swing arm:
               1/mm); NaN where there is no such figure
    zone       the places that keep them all: a Polygon or MultiPolygon, empty if none
    trouble    why there is no zone, as a sentence; empty if there is one
    """

    side: SideName
    name: str
    overs: Array
    ups: Array
    past: dict[Bound, Array]
    present: tuple[float, float]
    zone: BaseGeometry
    trouble: str = ""

    @cached_property
    def inside(self) -> np.ndarray:
        """(k, m) bool: True where every bound holds."""
        shape = (self.ups.size, self.overs.size)
        out = np.full(shape, bool(self.past))
        for values in self.past.values():
            out &= values <= 0.0
        return out

    @cached_property
    def margin(self) -> Array:
        """(k, m): how well the worst bound is kept, positive inside, as a share of the range
        that its figure has over the grid; NaN where a figure is missing."""
        scaled = [-values / _spread(values) for values in self.past.values()]
        shape = (self.ups.size, self.overs.size)
        return np.min(np.stack(scaled), axis=0) if scaled else np.full(shape, np.nan)

    @property
    def room(self) -> Room | None:
        """The room around the nail as it stands; None if it stands outside."""
        return room_in(self.zone, self.present)


def _spread(values: Array) -> float:
    found = values[np.isfinite(values)]
    size = float(np.ptp(found)) if found.size else 0.0
    return size if size > 0.0 else 1.0


def bounds_of(targets: Iterable[Target]) -> tuple[Bound, ...]:
    """The limits that targets set on figures this program has, least ones first."""
    out = []
    for target in targets:
        if target.figure in BATCH_FIGURES:
            for limit, low in ((target.low, True), (target.high, False)):
                if limit is not None and np.isfinite(limit):
                    out.append(Bound(target.figure, float(limit), low))
    return tuple(out)


def _values(cars: CarBatch, figure: str) -> Array:
    """A figure (k,); a swing arm stays infinite where the arms are parallel, as the edge of a
    region may run there."""
    if figure == "swing arm":
        with np.errstate(all="ignore"):
            return np.asarray(1.0 / figures_of(cars, "camber gain"))
    return figures_of(cars, figure)


class _Nail:
    """One nail of one side, ready to be put anywhere."""

    def __init__(self, layout: Layout, side: SideName, name: str, span: float) -> None:
        self.layout, self.name = layout, name
        self.side: Side = layout.side(side)
        self.place = self.side[name]
        self.travel = np.linspace(-span, span, PIVOT_TRAVELS)
        far = other_side(side)
        self.other = None if layout.linked else Corner.of(layout.side(far))

    def cars(self, places: Array) -> CarBatch:
        """The cars (k,) with the nail at places (2, k), over and up in mm."""
        points = {name: space(point) for name, point in self.side.points.items()}
        fore = np.full(places.shape[1], self.place.fore)
        points[self.name] = np.stack([fore, places[0], places[1]])
        side = self.side
        corner = Corner(points, side.static_camber, side.static_toe, side.tire.radius)
        return CarBatch(corner, self.other, side, self.travel)

    def values(self, places: Array, figure: str) -> Array:
        """A figure (k,) with the nail at places (2, k)."""
        return _values(self.cars(places), figure)

    def samples(self, places: Array, bounds: Sequence[Bound]) -> dict[Bound, Array]:
        """Each bound's distance past its limit (k,), or the curve (k, n) it is judged by."""
        cars = self.cars(places)
        out: dict[Bound, Array] = {}
        values: dict[str, Array] = {}
        with np.errstate(all="ignore"):
            for bound in bounds:
                key = bound.figure
                if key not in values:
                    values[key] = CURVES[key](cars) if key in CURVES else _values(cars, key)
                out[bound] = values[key] if key in CURVES else bound.past(values[key])
        return out


def pivot_zone(
    layout: Layout,
    side: SideName,
    name: str,
    targets: Sequence[Target] | None = None,
    *,
    center: tuple[float, float] | None = None,
    half_size: tuple[float, float] = PIVOT_HALF_SIZE,
    steps: tuple[int, int] = PIVOT_STEPS,
    span: float = 75.0,
    exact: bool = False,
    progress: Progress | None = None,
    stop: Stop | None = None,
) -> PivotZone | None:
    """Where a nail may sit, over and up, so that every target holds; None if stopped.

    ``targets`` are the layout's own if None. The grid stands around ``center`` (over, up),
    the nail's place if not given, ``half_size`` mm each way with ``steps`` places over and
    up. ``span`` mm is the half travel for figures over travel. ``exact`` moves the edge onto
    the limits themselves. Nothing raises for a complete layout.
    """
    present = layout.point(side, name) if name in layout.side(side).points else None
    place = (0.0, 0.0) if present is None else (present.over, present.up)
    middle = place if center is None else center
    overs = np.linspace(middle[0] - half_size[0], middle[0] + half_size[0], max(steps[0], 2))
    ups = np.linspace(middle[1] - half_size[1], middle[1] + half_size[1], max(steps[1], 2))
    bounds = bounds_of(layout.targets if targets is None else targets)
    if present is None:
        trouble = f"“{name}” is no point of the {side} side, so it has no zone."
        return PivotZone(side, name, overs, ups, {}, place, NOTHING, trouble)
    if not bounds:
        trouble = "No target is set that a zone could be drawn for."
        return PivotZone(side, name, overs, ups, {}, place, NOTHING, trouble)
    nail = _Nail(layout, side, name, span)
    grid = np.stack([part.ravel() for part in np.meshgrid(overs, ups)])
    parts: list[dict[Bound, Array]] = []
    for chunk in _chunks(grid, bounds):
        if stop is not None and stop():
            return None
        parts.append(nail.samples(chunk, bounds))
        if progress is not None:
            progress((0.7 if exact else 1.0) * min(1.0, len(parts) * _CHUNK / grid.shape[1]))
    shape = (ups.size, overs.size)
    past: dict[Bound, Array] = {}
    finer = FINER if any(bound.figure in CURVES for bound in bounds) else 1
    for bound in bounds:
        sampled = np.concatenate([part[bound] for part in parts])
        sampled = sampled.reshape(*shape, *sampled.shape[1:])
        if bound.figure in CURVES:
            rows = fine_rows(sampled, finer)
            with np.errstate(all="ignore"):
                ranges = np.stack([range_of(bound.figure, row, nail.side) for row in rows])
            past[bound] = bound.past(ranges)
        else:
            past[bound] = np.stack(list(fine_rows(sampled, finer)))
    overs, ups = (np.linspace(axis[0], axis[-1], (axis.size - 1) * finer + 1)
                  for axis in (overs, ups))
    zone = _common(nail, overs, ups, past, exact, stop)
    if zone is None:
        return None
    if progress is not None:
        progress(1.0)
    return PivotZone(side, name, overs, ups, past, place, zone, _trouble(zone, name, past))


def _chunks(grid: Array, bounds: Sequence[Bound]) -> Iterator[Array]:
    moving = any(bound.figure in CURVES for bound in bounds)
    size = _CHUNK if moving else grid.shape[1]
    for start in range(0, grid.shape[1], size):
        yield grid[:, start : start + size]


def fine_rows(values: Array, times: int) -> Iterator[Array]:
    """The rows of a grid (k, m, ...) made finer by cubics through four neighbors each way.

    Yields (k - 1) * times + 1 rows of (m - 1) * times + 1 places; NaN near what is NaN.
    """
    if times == 1:
        yield from values
        return
    missing = ~np.isfinite(values)
    whole = np.where(missing, 0.0, values)
    up, over = (_cubic_weights(count, times) for count in values.shape[:2])
    for row in up:
        near = np.flatnonzero(row)
        line = np.tensordot(row[near], whole[near], axes=1)
        gone = np.any(missing[near], axis=0).astype(float)
        fine, lost = np.tensordot(over, line, axes=1), np.tensordot(np.abs(over), gone, axes=1)
        yield np.where(lost > 0.0, np.nan, fine)


def _cubic_weights(count: int, times: int) -> Array:
    """Lagrange's weights ((count - 1) * times + 1, count) for finer places among ``count``."""
    degree = min(4, count)
    out = np.zeros(((count - 1) * times + 1, count))
    for row in range(out.shape[0]):
        at = row / times
        first = int(np.clip(np.floor(at) - (degree - 2) // 2, 0, count - degree))
        own = np.arange(first, first + degree)
        for k in own:
            rest = own[own != k]
            out[row, k] = np.prod((at - rest) / (k - rest))
    return out


def _common(
    nail: _Nail,
    overs: Array,
    ups: Array,
    past: dict[Bound, Array],
    exact: bool,
    stop: Stop | None,
) -> BaseGeometry | None:
    """What all bounds' regions share; each one's edge is contoured alone, to keep corners."""
    zone: BaseGeometry = shapely.box(overs[0], ups[0], overs[-1], ups[-1])
    for bound, values in past.items():
        spread = _spread(values)
        region = region_at_most(overs, ups, filled_in(values / spread, 1.0), 0.0)
        if exact and not region.is_empty:
            moved = _sharpened(nail, region, bound, spread, overs, ups, stop)
            if moved is None:
                return None
            region = moved
        zone = areas_of(shapely.intersection(zone, region))
    return zone


def _sharpened(
    nail: _Nail,
    region: BaseGeometry,
    bound: Bound,
    spread: float,
    overs: Array,
    ups: Array,
    stop: Stop | None,
) -> BaseGeometry | None:
    """A region with its corners on the bound itself; None if stopped."""
    shapes = []
    step = min(overs[1] - overs[0], ups[1] - ups[0])
    window = (overs[0], ups[0], overs[-1], ups[-1])
    for part in shapely.get_parts(region):
        rings = []
        for ring in (part.exterior, *part.interiors):
            places = np.asarray(ring.coords)[:-1].T
            chord = np.roll(places, -1, axis=1) - np.roll(places, 1, axis=1)
            size = np.maximum(np.hypot(chord[0], chord[1]), 1e-12)
            ways = np.stack([chord[1], -chord[0]]) / size
            found = onto_level(
                places, ways, step,
                lambda at: bound.past(nail.values(at, bound.figure)) / spread,
                window, 1e-9, None, stop,
            )
            if found is None:
                return None
            rings.append(found[0].T)
        shapes.append(shapely.make_valid(shapely.Polygon(rings[0], rings[1:])))
    return areas_of(shapely.union_all(shapes))


def _trouble(zone: BaseGeometry, name: str, past: dict[Bound, Array]) -> str:
    if not zone.is_empty:
        return ""
    for bound, values in past.items():
        found = np.isfinite(values)
        label = FIGURES[bound.figure].label
        if not np.any(found):
            return f"{label} does not exist anywhere near, so no zone can be drawn for it."
        if np.ptp(values[found]) <= 1e-12 * max(1.0, abs(bound.limit)) and values[found][0] > 0.0:
            return f"{label} misses its target, and moving this nail does not change it."
        if not np.any(values[found] <= 0.0):
            return f"No place of “{name}” near here brings {_lower(label)} to its target."
    return f"No place of “{name}” near here keeps all targets at once."


def _lower(label: str) -> str:
    return label[0].lower() + label[1:]
