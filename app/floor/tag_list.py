"""Which tags the floor shows now, most wanted first."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from app.floor import wording
from app.floor.nails import Key
from app.floor.tags import TagSpec
from geometry import floor_words
from geometry.labels import Box
from geometry.layout import SIDES, TIE_INNER
from geometry.tape import tape_text

if TYPE_CHECKING:
    from app.floor.view import FloorView

_APART = 8.0
"""Pixels from which two points are told apart by eye."""
_CLOSE = 2.0
"""Pixels per mm from which the inner-pivot points carry tags without being asked."""


def tag_list(view: FloorView, area: Box) -> tuple[list[TagSpec], list[Box]]:
    """The tags, and boxes (pixels) that they should rather not cover."""
    specs: list[TagSpec] = []
    specs += _notices(view, area)
    specs += _reach(view)
    specs += _measured(view)
    specs += _nails(view, area)
    specs += _centers(view, area)
    specs += _gravity(view, area)
    specs += _pivots(view)
    specs += _no_go(view, area)
    return specs, _soft(view)


def _soft(view: FloorView) -> list[Box]:
    to_px = view.canvas.to_px
    boxes = [
        Box(*to_px(*place), 0.0, 0.0).grown(7.0) for place in view.scene.places.values()
    ]
    roll = view.scene.roll
    marks = [place for place in (roll, view.scene.gravity) if place is not None]
    marks += [c.place for c in view.scene.centers.values() if not c.at_infinity]
    marks += list(view.scene.pivots.values())
    return boxes + [Box(*to_px(*place), 0.0, 0.0).grown(9.0) for place in marks]


def _notices(view: FloorView, area: Box) -> list[TagSpec]:
    noticed = view.noticed
    if noticed is None:
        return []
    title, detail, key = noticed
    anchor = (area.left + 0.5 * area.width, area.top + 10.0)
    if key in view.scene.places:
        anchor = view.canvas.to_px(*view.scene.places[key])
    return [TagSpec("notice", title, detail, anchor, 14.0, "notice")]


def _reach(view: FloorView) -> list[TagSpec]:
    """A calm word on each side that can't stand in this pose."""
    stuck = [stand for stand in view.scene.stands.values() if not stand.meets]
    units, travel = view.document.units, view.document.travel
    words = {s.side: floor_words.reach_words(s.state, travel[s.side], units) for s in stuck}
    if len(stuck) == 2 and len(set(words.values())) == 1:
        anchor = view.canvas.to_px(0.0, max(s.points["wheel center"][1] for s in stuck))
        said = floor_words.capital(words["left"])
        return [TagSpec("reach", said, "", anchor, 30.0, "notice")]
    return [
        TagSpec(
            f"reach {stand.side}",
            f"{floor_words.capital(stand.side)} side {words[stand.side]}",
            "",
            view.canvas.to_px(*stand.points["wheel center"]),
            30.0,
            "notice",
        )
        for stand in stuck
    ]


def _measured(view: FloorView) -> list[TagSpec]:
    if len(view.tape_ends) != 2:
        return []
    start, end = view.tape_ends
    units = view.document.units
    middle = view.canvas.to_px(0.5 * (start[0] + end[0]), 0.5 * (start[1] + end[1]))
    title = wording.distance_words(start, end, units)
    return [TagSpec("measured", title, wording.measured_words(start, end, units), middle, 12.0)]


def _nails(view: FloorView, area: Box) -> list[TagSpec]:
    """The nail under the pointer and the chosen one, also when that is off the floor."""
    keys: list[Key] = []
    dragged = view.hand.drag
    for key in (None if dragged is None else dragged.key, view.hovered, view.chosen):
        if key is not None and key in view.scene.places and key not in keys:
            keys.append(key)
    # The dragged layout is the shown one; what is measured is its ride-height place.
    layout = view.document.shown_solution.layout
    away = any(view.document.travel.values()) or bool(view.document.rack)
    out = []
    for rank, key in enumerate(keys):
        detail = wording.nail_words(layout, key)
        if away:
            detail += " at ride height"
        if key[1] in layout.locked:
            detail += " · locked"
        name = wording.nail_name(layout, key)
        out.append(_point(view, area, f"nail {rank}", name, detail, view.scene.places[key], 14.0))
    return out


def _inside(view: FloorView, x: float, y: float) -> bool:
    port = view.viewport().rect()
    return 0 <= x <= port.width() and 0 <= y <= port.height()


def _point(
    view: FloorView, area: Box, key: str, title: str, detail: str,
    place: tuple[float, float], clear: float, infinite: bool = False,
) -> TagSpec:
    """A tag beside a point, or at the edge with an arrow where the point is off the floor."""
    if infinite:
        # A direction: from the middle of the view toward it.
        x0, y0 = area.left + 0.5 * area.width, area.top + 0.5 * area.height
        way = (place[0], -place[1])
        return TagSpec(key, title, detail, _to_edge(area, (x0, y0), way), 6.0, "edge", way)
    x, y = view.canvas.to_px(*place)
    if _inside(view, x, y):
        return TagSpec(key, title, detail, (x, y), clear)
    inside = (min(max(x, area.left), area.right), min(max(y, area.top), area.bottom))
    return TagSpec(key, title, detail, inside, 6.0, "edge", (x - inside[0], y - inside[1]))


def _to_edge(
    area: Box, start: tuple[float, float], way: tuple[float, float]
) -> tuple[float, float]:
    shares = [
        (edge - begin) / step
        for begin, step, edges in (
            (start[0], way[0], (area.left, area.right)),
            (start[1], way[1], (area.top, area.bottom)),
        )
        if step
        for edge in edges
        if (edge - begin) / step > 0.0
    ]
    share = min(shares, default=0.0)
    return start[0] + share * way[0], start[1] + share * way[1]


def _centers(view: FloorView, area: Box) -> list[TagSpec]:
    scene, solution = view.scene, view.document.shown_solution
    units = view.document.units
    out = []
    if scene.roll is not None:
        words = floor_words.roll_words(solution, units)
        out.append(_point(view, area, "roll center", "Roll center", words, scene.roll, 11.0))
    mirrored = _mirrored(view)
    for side in SIDES:
        center = scene.centers.get(side)
        if center is None:
            continue
        off = center.at_infinity or not _inside(view, *view.canvas.to_px(*center.place))
        if mirrored and side == "right" and not off:
            continue
        words = floor_words.center_words(center, scene.stands[side], units)
        title = f"{floor_words.capital(side)} instant center"
        if mirrored and not off:
            title = "Instant center"
        out.append(
            _point(view, area, f"center {side}", title, words, center.place, 13.0,
                   center.at_infinity)
        )
    return out


def _mirrored(view: FloorView) -> bool:
    """True if the right side stands as the left one's mirror image: one tag speaks for both."""
    solution = view.document.shown_solution
    travel = solution.travel
    return solution.layout.linked and travel["left"] == travel["right"] and not solution.rack


def _gravity(view: FloorView, area: Box) -> list[TagSpec]:
    place = view.scene.gravity
    if place is None:
        return []
    words = f"{tape_text(place[1], view.document.units)} up"
    return [_point(view, area, "gravity", "Center of gravity", words, place, 13.0)]


def _pivots(view: FloorView) -> list[TagSpec]:
    """The three places for an inner tie-rod pivot, where they can be told apart.

    Places that stand on one another share a tag; one that the nail hides needs none.
    """
    wanted = {key[0] for key in (view.hovered, view.chosen) if key and key[1] == TIE_INNER}
    out = []
    for side in SIDES:
        if side not in wanted and view.canvas.dots < _CLOSE:
            continue
        nail = view.canvas.to_px(*view.scene.places[side, TIE_INNER])
        groups: list[tuple[tuple[float, float], list[str]]] = []
        for kind in ("best fit", "curvature center", "string rule"):
            place = view.scene.pivots.get((side, kind))
            px = None if place is None else view.canvas.to_px(*place)
            if px is None or not _inside(view, *px) or math.dist(px, nail) < _APART:
                continue
            for at, kinds in groups:
                if math.dist(at, px) < _APART:
                    kinds.append(kind)
                    break
            else:
                groups.append((px, [kind]))
        state = view.document.shown_solution.sides[side]
        for px, kinds in groups:
            place = state.pivots.places[kinds[0]]
            assert place is not None
            words = floor_words.place_words(*place, view.document.units)
            title = floor_words.capital(", ".join(kinds))
            out.append(TagSpec(f"{kinds[0]} {side}", title, words, px, 9.0))
    return out


def _no_go(view: FloorView, area: Box) -> list[TagSpec]:
    out = []
    named: set[str] = set()
    for index, (name, x, y) in enumerate(view.scene.no_go.places):
        if name in named:
            continue
        named.add(name)
        px, py = view.canvas.to_px(x, y)
        if _inside(view, px, py):
            out.append(TagSpec(f"no-go {index}", floor_words.capital(name), "", (px, py), 6.0))
    return out
