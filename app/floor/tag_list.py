"""Which tags the front floor shows now, most wanted first."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from app.floor.scene import FloorScene
from app.floor.shape_marks import shape_tags
from app.floor.tag_parts import inside, measured, mirrored, nails, no_go, notices, point, reach
from app.floor.tags import TagSpec
from geometry import floor_words
from geometry.labels import Box
from geometry.layout import SIDES, TIE_INNER
from geometry.lengths import format_angle
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
    specs += notices(view, area)
    specs += shape_tags(view, area)
    specs += reach(view)
    specs += measured(view)
    specs += nails(view, area)
    specs += _centers(view, area)
    specs += _gravity(view, area)
    specs += _road(view)
    specs += _pivots(view)
    specs += no_go(view, area)
    return specs, _soft(view)


def _scene(view: FloorView) -> FloorScene:
    assert isinstance(view.scene, FloorScene)
    return view.scene


def _soft(view: FloorView) -> list[Box]:
    to_px, scene = view.canvas.to_px, _scene(view)
    boxes = [Box(*to_px(*place), 0.0, 0.0).grown(7.0) for place in scene.places.values()]
    marks = [place for place in (scene.roll, scene.gravity) if place is not None]
    marks += [c.place for c in scene.centers.values() if not c.at_infinity]
    marks += list(scene.pivots.values())
    return boxes + [Box(*to_px(*place), 0.0, 0.0).grown(9.0) for place in marks]


def _centers(view: FloorView, area: Box) -> list[TagSpec]:
    scene, solution = _scene(view), view.document.shown_solution
    units = view.document.units
    out = []
    if scene.roll is not None:
        words = floor_words.roll_words(solution, units)
        out.append(point(view, area, "roll center", "Roll center", words, scene.roll, 11.0))
    alike = mirrored(view)
    for side in SIDES:
        center = scene.centers.get(side)
        if center is None:
            continue
        off = center.at_infinity or not inside(view, *view.canvas.to_px(*center.place))
        if alike and side == "right" and not off:
            continue
        words = floor_words.center_words(center, scene.stands[side], units)
        title = f"{floor_words.capital(side)} instant center"
        if alike and not off:
            title = "Instant center"
        out.append(
            point(view, area, f"center {side}", title, words, center.place, 13.0,
                  center.at_infinity)
        )
    return out


def _gravity(view: FloorView, area: Box) -> list[TagSpec]:
    place = _scene(view).gravity
    if place is None:
        return []
    words = f"{tape_text(place[1], view.document.units)} up"
    return [point(view, area, "gravity", "Center of gravity", words, place, 13.0)]


def _road(view: FloorView) -> list[TagSpec]:
    """How both tires lean to the one floor under them, where it is tilted."""
    road = view.document.shown_solution.road
    if road is None:
        return []
    stands = _scene(view).stands
    middle = [0.5 * (stands["left"].contact[k] + stands["right"].contact[k]) for k in (0, 1)]
    px = view.canvas.to_px(*middle)
    if not inside(view, *px):
        return []
    left, right = (format_angle(float(road.sides[side].camber[0])) for side in SIDES)
    title = f"Floor tilted {format_angle(abs(float(road.roll[0])))}"
    return [TagSpec("road", title, f"camber to it: left {left}, right {right}", px, 8.0)]


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
            place = _scene(view).pivots.get((side, kind))
            px = None if place is None else view.canvas.to_px(*place)
            if px is None or not inside(view, *px) or math.dist(px, nail) < _APART:
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
            if place is None:
                # Gone with an edit that the floor draws in the coming frame.
                continue
            words = floor_words.place_words(*place, view.document.units)
            title = floor_words.capital(", ".join(kinds))
            out.append(TagSpec(f"{kinds[0]} {side}", title, words, px, 9.0))
    return out
