"""Room around the moving parts: against no-go shapes, and between the tire and its arms.

A no-go shape is an outline on one of the two floors. A part counts as reaching it wherever
their outlines meet on that floor, however far apart they may be the third way: draw shapes
where the parts really pass. The tire against arms and tie rod is checked in space.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Literal

import numpy as np
import shapely
from shapely.geometry.base import BaseGeometry

from geometry import layout as names
from geometry.corner import Corner, Poses, space
from geometry.layout import MM_PER_INCH, SIDES, Layout, NoGo, Side, SideName
from geometry.linkage import Array, dot
from geometry.springs import lower_mount
from geometry.steering import inner_shifts

View = Literal["front", "above"]

ARM_RADIUS = 16.0
TIE_ROD_RADIUS = 9.0
RACK_RADIUS = 24.0
SPRING_RADIUS = 55.0
STRUT_RADIUS = 28.0
"""Outside radii that parts are given, mm, while nothing else is known of them."""

TIRE_ROOM = MM_PER_INCH
"""Room wanted between a tire and any part, mm (a provincial inspection manual, second hand)."""

_SEGMENT_STEPS = 48


@dataclass(frozen=True)
class PoseSet:
    """The poses that are checked: every travel with every rack place, mm, flattened (n,)."""

    travel: Array
    rack: Array
    poses: dict[SideName, Poses]
    corners: dict[SideName, Corner]
    layout: Layout


@dataclass(frozen=True)
class Clearance:
    """The least room between one part and one thing over all poses.

    room mm, negative or zero where they meet; travel and rack mm of that pose; ``part_at``
    and ``thing_at`` the nearest places on that floor, x to the car's left, mm.
    """

    part: str
    side: SideName | None
    thing: str
    view: View | None
    room: float
    wanted: float
    travel: float
    rack: float
    part_at: tuple[float, float] | None = None
    thing_at: tuple[float, float] | None = None

    @property
    def is_met(self) -> bool:
        return self.room >= self.wanted


def pose_set(
    layout: Layout, span: float, rack_reach: float = 0.0, travels: int = 9, racks: int = 3
) -> PoseSet:
    """Poses over the travel from -span to span and the rack from -reach to reach, in one solve.

    No-go shapes stand on the body, and each side's parts follow that side's travel alone:
    body roll and single-wheel bump bring no place that the travel of each side does not.
    """
    travel = np.linspace(-span, span, travels)
    rack = np.linspace(-rack_reach, rack_reach, racks) if rack_reach else np.zeros(1)
    grid_rack, grid_travel = (g.ravel() for g in np.meshgrid(rack, travel, indexing="ij"))
    shifts = inner_shifts(layout, grid_rack)
    corners = {side: Corner.of(layout.side(side)) for side in SIDES}
    poses = {side: corners[side].poses(grid_travel, shifts[side]) for side in SIDES}
    return PoseSet(grid_travel, grid_rack, poses, corners, layout)


# --- parts as outlines on a floor -----------------------------------------------------


def _flat(places: Array, side: SideName, view: View) -> Array:
    """Places (3, n) as (n, 2) on a floor: x to the car's left, then up or fore."""
    x = places[1] if side == "left" else -places[1]
    return np.stack(np.broadcast_arrays(x, places[2] if view == "front" else places[0]), axis=-1)


def _capsules(a: Array, b: Array, radius: float, ends: Literal["round", "flat"] = "round") -> Array:
    """Tubes (n,) between places (n, 2); None where a place is missing."""
    good = np.isfinite(a).all(axis=-1) & np.isfinite(b).all(axis=-1)
    out = np.full(len(a), None, dtype=object)
    if good.any():
        lines = shapely.linestrings(np.stack([a[good], b[good]], axis=1))
        out[good] = shapely.buffer(lines, radius, quad_segs=6, cap_style=ends)
    return out


def _tire_outlines(poses: Poses, side: SideName, view: View, tire: names.Tire) -> Array:
    """The tire's outline (n,) on a floor: the shadow of its cylinder, hull of two discs."""
    angles = np.linspace(0.0, 2.0 * np.pi, 32, endpoint=False)
    spin = poses.spin_axis
    up = np.array([[0.0], [0.0], [1.0]])
    first = up - dot(up, spin) * spin
    first = first / np.sqrt(dot(first, first))
    second = np.stack(
        [
            spin[1] * first[2] - spin[2] * first[1],
            spin[2] * first[0] - spin[0] * first[2],
            spin[0] * first[1] - spin[1] * first[0],
        ]
    )
    ring = tire.radius * (
        np.cos(angles) * first[..., None] + np.sin(angles) * second[..., None]
    )
    half = 0.5 * tire.width * spin[..., None]
    rims = np.concatenate([ring + half, ring - half], axis=-1) + poses.wheel_center[..., None]
    places = _flat(rims, side, view)
    good = np.isfinite(places).all(axis=(-1, -2))
    out = np.full(len(places), None, dtype=object)
    if good.any():
        out[good] = shapely.convex_hull(shapely.multipoints(places[good]))
    return out


def arm_pivot_names(corner: Corner, arm: str) -> list[str]:
    """The names of an arm's inner pivots: the single one, or its front and rear bushings."""
    keys = (f"{arm} inner pivot", f"{arm} inner pivot front", f"{arm} inner pivot rear")
    return [key for key in keys if key in corner.points]


def spring_ends(side: Side, corner: Corner, poses: Poses) -> tuple[Array, Array] | None:
    """The spring's or coil-over's mounts (3, n) in each pose; None where they weren't given."""
    if names.SPRING_TOP not in side.points or names.SPRING_LOWER not in side.points:
        return None
    foot = lower_mount(side, corner, poses)
    return np.broadcast_to(space(side[names.SPRING_TOP])[:, None], foot.shape), foot


def part_outlines(poses: PoseSet, view: View) -> Iterator[tuple[str, SideName | None, Array]]:
    """Each moving part's outline (n,) on a floor in every pose: (part, side, geometries).

    Every outline is convex; an arm with two bushings comes as two legs of one name.
    """
    ends: dict[SideName, Array] = {}
    for side in SIDES:
        state, corner = poses.poses[side], poses.corners[side]
        layout_side = poses.layout.side(side)

        def tubes(
            a: Array, b: Array, radius: float, state: Poses = state, side: SideName = side
        ) -> Array:
            full = np.broadcast_to(a, state.lower_ball.shape)
            return _capsules(_flat(full, side, view), _flat(b, side, view), radius)

        for arm in ("lower",) if corner.is_strut else ("lower", "upper"):
            ball = state.lower_ball if arm == "lower" else state.upper_ball
            for name in arm_pivot_names(corner, arm):
                yield f"{arm} arm", side, tubes(corner.points[name], ball, ARM_RADIUS)
        if state.strut_lower is not None:
            yield "strut", side, tubes(state.upper_ball, state.strut_lower, STRUT_RADIUS)
        yield "tie rod", side, tubes(state.tie_inner, state.tie_outer, TIE_ROD_RADIUS)
        spring = spring_ends(layout_side, corner, state)
        if spring is not None:
            # A coil ends at its seats, so that nothing stands out past the mounts.
            top, foot = (_flat(end, side, view) for end in spring)
            yield "spring", side, _capsules(top, foot, SPRING_RADIUS, "flat")
        yield "tire", side, _tire_outlines(state, side, view, layout_side.tire)
        ends[side] = _flat(state.tie_inner, side, view)
    steering = "relay rod" if isinstance(poses.layout.steering, names.RelayRod) else "rack"
    yield steering, None, _capsules(ends["left"], ends["right"], RACK_RADIUS)


def no_go_outlines(layout: Layout, view: View) -> Iterator[tuple[NoGo, BaseGeometry]]:
    """Each no-go shape of a floor, x to the car's left; mirrored ones stand on both sides."""
    for shape in layout.no_go:
        if shape.view != view or len(shape.outline) < 3:
            continue
        corners = np.array(shape.outline)
        for side in SIDES if shape.side is None else (shape.side,):
            flipped = corners * (1.0 if side == "left" else -1.0, 1.0)
            outline = shapely.make_valid(shapely.Polygon(flipped))
            if not outline.is_empty:
                yield shape, outline


# --- answers ------------------------------------------------------------------------


def swept(poses: PoseSet, view: View) -> dict[tuple[str, SideName | None], BaseGeometry]:
    """What each part sweeps on a floor: the union of its hulls from pose to pose.

    Hulls join neighbors along the travel at one rack place, so nothing between two poses
    is missed.
    """
    out: dict[tuple[str, SideName | None], BaseGeometry] = {}
    joined = poses.rack[1:] == poses.rack[:-1]
    for part, side, outlines in part_outlines(poses, view):
        both = np.array([g is not None for g in outlines])
        use = both[1:] & both[:-1] & joined
        hulls = shapely.convex_hull(shapely.union(outlines[1:][use], outlines[:-1][use]))
        known = [out[part, side]] if (part, side) in out else []
        out[part, side] = shapely.union_all([*known, *hulls, *outlines[both]])
    return out


def clearances(poses: PoseSet) -> tuple[Clearance, ...]:
    """The least room of every part to every no-go shape, and of the tires to their arms."""
    out: list[Clearance] = []
    views: tuple[View, ...] = ("front", "above")
    for view in views:
        shapes = list(no_go_outlines(poses.layout, view))
        if not shapes:
            continue
        for part, side, outlines in part_outlines(poses, view):
            for shape, outline in shapes:
                found = _least(poses, part, side, outlines, shape, outline, view)
                if found is not None:
                    out.append(found)
    out += _merged(list(tire_clearances(poses)))
    return tuple(sorted(_merged(out), key=lambda c: c.room - c.wanted))


def _merged(found: list[Clearance]) -> list[Clearance]:
    """One answer for each part, side and thing: the tightest."""
    best: dict[tuple[str, SideName | None, str, View | None], Clearance] = {}
    for one in found:
        key = (one.part, one.side, one.thing, one.view)
        if key not in best or one.room < best[key].room:
            best[key] = one
    return list(best.values())


def _least(
    poses: PoseSet,
    part: str,
    side: SideName | None,
    outlines: Array,
    shape: NoGo,
    outline: BaseGeometry,
    view: View,
) -> Clearance | None:
    rooms = np.array(shapely.distance(outlines, outline), dtype=float)
    if not np.any(np.isfinite(rooms)):
        return None
    at = int(np.nanargmin(rooms))
    room = float(rooms[at])
    link = shapely.shortest_line(outlines[at], outline)
    (ax, ay), (bx, by) = shapely.get_coordinates(link)
    if room == 0.0:
        room = -_depth(shapely.intersection(outlines[at], outline))
    return Clearance(
        part, side, shape.name, view, room, max(shape.clearance, TIRE_ROOM * (part == "tire")),
        float(poses.travel[at]), float(poses.rack[at]), (float(ax), float(ay)),
        (float(bx), float(by)),
    )


def _depth(shared: BaseGeometry) -> float:
    """How deep two outlines stand in one another, mm: the width of what they share."""
    # A touch along an edge can come beside what has an area; it has no depth.
    areas = [part for part in shapely.get_parts(shared) if part.area > 0.0]
    radii = [float(shapely.maximum_inscribed_circle(area).length) for area in areas]
    return 2.0 * max(radii, default=0.0)


def tire_clearances(poses: PoseSet) -> Iterator[Clearance]:
    """The tire against its own arms and tie rod, in space.

    The tire is the solid that its rectangular section (width x rim to tread) turns into
    about the spin axis; the tubes' middle lines are sampled along their length.
    """
    for side in SIDES:
        state, corner = poses.poses[side], poses.corners[side]
        rods = [("tie rod", state.tie_inner, state.tie_outer, TIE_ROD_RADIUS)]
        for arm in ("lower",) if corner.is_strut else ("lower", "upper"):
            ball = state.lower_ball if arm == "lower" else state.upper_ball
            for name in arm_pivot_names(corner, arm):
                pivot = np.broadcast_to(corner.points[name], ball.shape)
                rods.append((f"{arm} arm", pivot, ball, ARM_RADIUS))
        spring = spring_ends(poses.layout.side(side), corner, state)
        if spring is not None:
            rods.append(("spring", *spring, SPRING_RADIUS))
        for part, a, b, radius in rods:
            rooms = tire_room(state, poses.layout.side(side).tire, a, b) - radius
            if np.any(np.isfinite(rooms)):
                at = int(np.nanargmin(rooms))
                yield Clearance(
                    part, side, "tire", None, float(rooms[at]), 0.25 * TIRE_ROOM,
                    float(poses.travel[at]), float(poses.rack[at]),
                )


def tire_room(poses: Poses, tire: names.Tire, a: Array, b: Array) -> Array:
    """Distance (n,), mm, from the tire's solid to the lines from a to b (3, n); 0 inside it."""
    shares = np.linspace(0.0, 1.0, _SEGMENT_STEPS)
    with np.errstate(all="ignore"):
        line = a[..., None] + (b - a)[..., None] * shares - poses.wheel_center[..., None]
        along = dot(line, poses.spin_axis[..., None])
        out = np.sqrt(np.maximum(dot(line, line) - along**2, 0.0))
        beside = np.maximum(np.abs(along) - 0.5 * tire.width, 0.0)
        inner = 0.5 * tire.rim_diameter
        beyond = np.maximum(np.maximum(out - tire.radius, inner - out), 0.0)
        return np.asarray(np.min(np.hypot(beside, beyond), axis=-1))
