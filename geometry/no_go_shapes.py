"""No-go shapes as a hand draws and moves them: corners, boxes, and the room that is left.

Places on a floor are (x, y) mm, x to the car's left and y up the screen (see ``faces``); a
shape's outline is measured on its own side.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np
import shapely

from geometry.clearance import Clearance, clearances, pose_set
from geometry.faces import Face
from geometry.layout import LONGEST_NAME, SIDES, Layout, NoGo, SideName
from geometry.linkage import Array
from geometry.standing import XY, sign_of

THINNEST = 0.1
"""An outline whose area is that of a strip thinner than this, mm, is a line and no shape."""


@dataclass(frozen=True)
class Held:
    """What of a shape is held: its place in Layout.no_go, the side it was taken on, and the
    corner, or None for the whole shape."""

    index: int
    side: SideName
    corner: int | None = None


def shape_sides(shape: NoGo) -> tuple[SideName, ...]:
    """The sides on which a shape stands."""
    return SIDES if shape.side is None else (shape.side,)


def on_floor(shape: NoGo, side: SideName, face: Face) -> Array:
    """A shape's corners (n, 2) where they stand on a floor, mm."""
    return np.array(shape.outline, dtype=float) * (sign_of(side), face.way)


def drawn_shape(corners: list[XY], face: Face, layout: Layout) -> NoGo:
    """The shape that was drawn through places on a floor.

    One that keeps to one side of the car stands mirrored on both while the sides are linked;
    one that crosses the centerline stands where it was drawn and is measured from the left.
    Raises ValueError with a plain reason for what encloses nothing.
    """
    xs = [x for x, _ in corners]
    crosses = min(xs, default=0.0) < 0.0 < max(xs, default=0.0)
    right = not crosses and min(xs, default=0.0) < 0.0
    measured: SideName = "right" if right else "left"
    outline = tuple(
        (sign_of(measured) * x + 0.0, face.way * y + 0.0) for x, y in _without_repeats(corners)
    )
    reason = outline_fault(outline)
    if reason:
        raise ValueError(reason)
    side = None if layout.linked and not crosses else measured
    return NoGo(free_name(layout), outline, face.name, side)


def _without_repeats(corners: list[XY]) -> list[XY]:
    """The corners, each place only once where it was clicked twice in a row."""
    out: list[XY] = []
    for corner in corners:
        if not out or math.dist(out[-1], corner) > 1e-6:
            out.append(corner)
    if len(out) > 1 and math.dist(out[0], out[-1]) <= 1e-6:
        out.pop()
    return out


def box_corners(one: XY, opposite: XY) -> list[XY]:
    """The four corners of an upright box between two opposite ones."""
    (x0, y0), (x1, y1) = one, opposite
    return [(x0, y0), (x1, y0), (x1, y1), (x0, y1)]


def outline_fault(outline: tuple[XY, ...]) -> str:
    """Why an outline is no shape, or an empty text."""
    if len(outline) < 3:
        return "A shape needs three corners at least."
    ring = shapely.Polygon(outline)
    if ring.length <= 0.0 or shapely.make_valid(ring).area < 0.5 * THINNEST * ring.length:
        return "All corners lie on one line, so the shape encloses nothing."
    return ""


def free_name(layout: Layout) -> str:
    """A name for another shape that none has yet."""
    taken = {shape.name for shape in layout.no_go}
    number = len(taken) + 1
    while f"shape {number}" in taken:
        number += 1
    return f"shape {number}"[:LONGEST_NAME]


# --- moving ---------------------------------------------------------------------------


def with_shape(layout: Layout, index: int, shape: NoGo | None) -> Layout:
    """The car with one shape replaced, or taken away (None)."""
    new = () if shape is None else (shape,)
    return replace(layout, no_go=(*layout.no_go[:index], *new, *layout.no_go[index + 1:]))


def moved_shape(shape: NoGo, corner: int | None, over: float, second: float) -> NoGo:
    """A shape with one corner, or all of them (None), moved by two measures, mm."""
    outline = tuple(
        (a + over, b + second) if corner is None or corner == at else (a, b)
        for at, (a, b) in enumerate(shape.outline)
    )
    return replace(shape, outline=outline)


def without_corner(shape: NoGo, corner: int) -> NoGo:
    """A shape less one corner. Raises ValueError with a plain reason if too few are left."""
    outline = tuple(place for at, place in enumerate(shape.outline) if at != corner)
    if len(outline) < 3:
        raise ValueError("A shape needs three corners at least; delete the whole shape instead.")
    return replace(shape, outline=outline)


# --- taking hold ------------------------------------------------------------------------


def held_at(
    layout: Layout, face: Face, place: XY, reach: float, chosen: Held | None
) -> Held | None:
    """The shape, or corner of one, at a place on a floor; ``reach`` mm takes hold of a corner.

    The corners of the chosen shape come first, then any corner, then what lies on top.
    """
    nearest: tuple[float, Held] | None = None
    covering: Held | None = None
    for index, shape in enumerate(layout.no_go):
        if shape.view != face.name or len(shape.outline) < 3:
            continue
        for side in shape_sides(shape):
            corners = on_floor(shape, side, face)
            gaps = np.hypot(*(corners - place).T)
            at = int(np.argmin(gaps))
            gap = float(gaps[at])
            if chosen is not None and (chosen.index, chosen.side) == (index, side):
                gap -= reach
            if float(gaps[at]) <= reach and (nearest is None or gap < nearest[0]):
                nearest = (gap, Held(index, side, at))
            outline = shapely.make_valid(shapely.Polygon(corners))
            if shapely.distance(outline, shapely.Point(place)) <= 0.4 * reach:
                covering = Held(index, side)
    return covering if nearest is None else nearest[1]


# --- the room that is left -----------------------------------------------------------


def least_room(layout: Layout, index: int, span: float, rack_reach: float) -> Clearance | None:
    """The tightest place of one shape over travel and steering; None if no part has any."""
    alone = replace(layout, no_go=(layout.no_go[index],))
    with np.errstate(all="ignore"):
        found = clearances(pose_set(alone, span, rack_reach))
    return next((one for one in found if one.view is not None), None)
