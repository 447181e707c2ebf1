"""The tags that every floor shows: notices, the tape, nails, no-go shapes, points off the floor."""

from __future__ import annotations

from typing import TYPE_CHECKING

from app.floor import wording
from app.floor.nails import Key
from app.floor.tags import TagSpec
from geometry import floor_words
from geometry.labels import Box

if TYPE_CHECKING:
    from app.floor.view import FloorView


def notices(view: FloorView, area: Box) -> list[TagSpec]:
    noticed = view.noticed
    if noticed is None:
        return []
    title, detail, key = noticed
    anchor = (area.left + 0.5 * area.width, area.top + 10.0)
    if key in view.scene.places:
        anchor = view.canvas.to_px(*view.scene.places[key])
    return [TagSpec("notice", title, detail, anchor, 14.0, "notice")]


def reach(view: FloorView) -> list[TagSpec]:
    """A calm word on each side that can't stand in this pose."""
    stuck = [stand for stand in view.scene.stands.values() if not stand.meets]
    units, travel = view.document.units, view.document.shown_solution.travel
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


def measured(view: FloorView) -> list[TagSpec]:
    if len(view.tape_ends) != 2:
        return []
    start, end = view.tape_ends
    units = view.document.units
    middle = view.canvas.to_px(0.5 * (start[0] + end[0]), 0.5 * (start[1] + end[1]))
    title = wording.distance_words(start, end, units)
    words = wording.measured_words(start, end, units, view.face)
    return [TagSpec("measured", title, words, middle, 12.0)]


def nails(view: FloorView, area: Box) -> list[TagSpec]:
    """The nail under the pointer and the chosen one, also when that is off the floor."""
    keys: list[Key] = []
    dragged = view.hand.drag
    for key in (None if dragged is None else dragged.key, view.hovered, view.chosen):
        if key is not None and key in view.scene.places and key not in keys:
            keys.append(key)
    # The dragged layout is the shown one; what is measured is its ride-height place.
    solution = view.document.shown_solution
    layout = solution.layout
    away = any(solution.travel.values()) or bool(solution.rack)
    out = []
    for rank, key in enumerate(keys):
        detail = wording.nail_words(layout, key, view.face)
        if away:
            detail += " at ride height"
        if key[1] in layout.locked:
            detail += " · locked"
        name = wording.nail_name(layout, key)
        out.append(point(view, area, f"nail {rank}", name, detail, view.scene.places[key], 14.0))
    return out


def inside(view: FloorView, x: float, y: float) -> bool:
    port = view.viewport().rect()
    return 0 <= x <= port.width() and 0 <= y <= port.height()


def point(
    view: FloorView, area: Box, key: str, title: str, detail: str,
    place: tuple[float, float], clear: float, infinite: bool = False,
) -> TagSpec:
    """A tag beside a point, or at the edge with an arrow where the point is off the floor."""
    if infinite:
        # A direction: from the middle of the view toward it.
        x0, y0 = area.left + 0.5 * area.width, area.top + 0.5 * area.height
        way = (place[0], -place[1])
        return TagSpec(key, title, detail, to_edge(area, (x0, y0), way), 6.0, "edge", way)
    x, y = view.canvas.to_px(*place)
    if inside(view, x, y):
        return TagSpec(key, title, detail, (x, y), clear)
    held = (min(max(x, area.left), area.right), min(max(y, area.top), area.bottom))
    return TagSpec(key, title, detail, held, 6.0, "edge", (x - held[0], y - held[1]))


def to_edge(
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


def mirrored(view: FloorView) -> bool:
    """True if the right side stands as the left one's mirror image: one tag speaks for both."""
    solution = view.document.shown_solution
    travel = solution.travel
    return solution.layout.linked and travel["left"] == travel["right"] and not solution.rack


def no_go(view: FloorView, area: Box) -> list[TagSpec]:
    out = []
    shape = view.shapes.held_shape()
    named: set[str] = set() if shape is None else {shape.name}
    for index, (name, x, y) in enumerate(view.scene.no_go.places):
        if name in named:
            continue
        named.add(name)
        px, py = view.canvas.to_px(x, y)
        if inside(view, px, py):
            out.append(TagSpec(f"no-go {index}", floor_words.capital(name), "", (px, py), 6.0))
    return out
