"""Which tags the floor from above shows now, most wanted first."""

from __future__ import annotations

from typing import TYPE_CHECKING

from app.floor.above_scene import AboveScene
from app.floor.shape_marks import shape_tags
from app.floor.tag_parts import inside, measured, mirrored, nails, no_go, notices, point, reach
from app.floor.tags import TagSpec
from geometry import plan_words
from geometry.floor_words import capital
from geometry.labels import Box
from geometry.layout import SIDES

if TYPE_CHECKING:
    from app.floor.above import AboveView


def above_tags(view: AboveView, area: Box) -> tuple[list[TagSpec], list[Box]]:
    """The tags, and boxes (pixels) that they should rather not cover."""
    scene = view.scene
    assert isinstance(scene, AboveScene)
    specs = notices(view, area) + shape_tags(view, area) + reach(view) + measured(view)
    specs += nails(view, area)
    specs += _turn(view, scene, area)
    specs += _checks(view, scene)
    specs += _front(area)
    specs += no_go(view, area)
    return specs, _soft(view, scene)


def _soft(view: AboveView, scene: AboveScene) -> list[Box]:
    to_px = view.canvas.to_px
    marks = [*scene.marks.kingpins.values(), *scene.marks.wanted.values()]
    places = [*scene.places.values(), *(place for place in marks if place is not None)]
    return [Box(*to_px(*place), 0.0, 0.0).grown(8.0) for place in places]


def _front(area: Box) -> list[TagSpec]:
    """Which way is forward, always in sight."""
    below = (area.left + 0.5 * area.width, area.bottom)
    return [TagSpec("front", "Front of the car", "", below, 6.0, "edge", (0.0, 1.0))]


def _checks(view: AboveView, scene: AboveScene) -> list[TagSpec]:
    """How far each steering arm's end is off the string, at the place where it would be on it."""
    out = []
    alike = mirrored(view)
    for side, check in scene.marks.checks.items():
        if alike and side == "right":
            continue
        px = view.canvas.to_px(*scene.marks.wanted[side])
        if inside(view, *px):
            title = "String check" if alike else f"{capital(side)} string check"
            words = plan_words.off_string(check, view.document.units)
            out.append(TagSpec(f"check {side}", title, words, px, 12.0))
    return out


def _turn(view: AboveView, scene: AboveScene, area: Box) -> list[TagSpec]:
    """Where the car's turn centers, and where each wheel's own line meets the rear axle's."""
    now, rear, units = scene.marks.now, scene.marks.rear, view.document.units
    if now is None or now.turn is None or rear is None or now.crossing is None:
        return []
    out = []
    if scene.marks.center is not None:
        words = plan_words.center_words(scene.marks.center[0], units)
        out.append(point(view, area, "center", "Turn center", words, scene.marks.center, 11.0))
    for side in SIDES:
        which = "Inner" if side == now.turn else "Outer"
        words = plan_words.center_words(now.crossing[side], units) + " at the rear axle"
        place = (now.crossing[side], rear[1])
        title = f"{which} wheel's line"
        out.append(point(view, area, f"line {which}", title, words, place, 10.0))
    return out
