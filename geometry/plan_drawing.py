"""The floor from above as a neutral drawing to scale, for pictures and paper."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from geometry import floor_colors as colors
from geometry import floor_signs as signs
from geometry.drawing import Circle, Drawing, Item, Line, Polyline, Style
from geometry.faces import ABOVE
from geometry.floor_drawing import (
    Sheet,
    caption,
    frame_of,
    inside,
    no_go,
    one_page,
    pale,
    placed_tags,
    sheet_for,
    solid,
    tapes,
)
from geometry.floor_words import capital, reach_words
from geometry.front_parts import Part
from geometry.layout import SIDES, SideName
from geometry.pages import LETTER, Pages, PageSize
from geometry.plan_parts import PLAN_ROLES, plan_parts
from geometry.plan_strings import PlanKind, PlanMarks, plan_marks, plan_strings, rear_tires
from geometry.plan_words import center_words, off_string
from geometry.shapes import clipped
from geometry.solution import Solution
from geometry.standing import XY, Standing, nail_places, standing

_STYLES: dict[PlanKind, Style] = {
    "rear": Style(colors.CHALK, 0.45, layer="chalk"),
    "turn": Style(colors.BLUE, 0.3, (2.6, 0.8, 0.4, 0.8), layer="strings"),
    "check": Style(colors.GREEN, 0.3, (1.2, 0.8), layer="strings"),
    "axis": Style(colors.INK, 0.2, (2.0, 0.7, 0.5, 0.7), layer="strings"),
    "kingpin": Style(colors.VERMILLION, 0.35, (2.8, 1.0), layer="strings"),
}


def plan_drawing(
    solution: Solution,
    found: Solution | None = None,
    width: float = 254.0,
    height: float = 175.0,
    *,
    whole: bool = False,
) -> Drawing:
    """The view from above at a round scale, at most ``width`` by ``height`` mm.

    ``found`` is drawn as a pale outline beneath; ``whole`` shows the car back to its rear axle,
    where the wheelbase is known. Everything is in mm on paper from the lower left corner.
    """
    both = {side: standing(solution, side, ABOVE) for side in SIDES}
    parts = plan_parts(solution)
    marks = plan_marks(solution, both)
    sheet = _sheet(parts, marks, width, height, whole)
    items: list[Item] = list(_ground(sheet, solution, both, marks))
    if found is not None and found.layout != solution.layout:
        items += pale(sheet, plan_parts(found))
    items += no_go(sheet, solution, ABOVE)
    items += solid(sheet, parts, {s for s in SIDES if not both[s].meets}, PLAN_ROLES)
    for string in plan_strings(solution, both, marks):
        part = clipped(string.start, string.end, sheet.shown)
        if part is not None:
            items.append(
                Line(sheet.place(part[:2]), sheet.place(part[2:]), _STYLES[string.kind])
            )
    nails = nail_places(solution, ABOVE)
    for (_, name), at in nails.items():
        items += signs.nail(sheet.place(at), name in solution.layout.locked)
    items += _signs(sheet, marks)
    items += placed_tags(sheet, _tag_words(sheet, solution, both, marks), nails.values())
    items += tapes(sheet, solution, ABOVE.way)
    items += caption(sheet, solution)
    return Drawing(tuple(items), frame_of(sheet))


def plan_floor_pages(
    solution: Solution,
    found: Solution | None = None,
    size: PageSize = LETTER,
    *,
    whole: bool = False,
) -> Pages:
    """The view from above on one sheet: on its long side, or upright for the whole car."""
    return one_page(
        lambda width, height: plan_drawing(solution, found, width, height, whole=whole),
        solution.layout.title,
        size if whole else size.landscape,
    )


def _sheet(
    parts: list[Part], marks: PlanMarks, width: float, height: float, whole: bool
) -> Sheet:
    corners = np.vstack([part.outline for part in parts])
    out = float(np.abs(corners[:, 0]).max()) + 40.0
    low, top = float(corners[:, 1].min()) - 90.0, float(corners[:, 1].max()) + 60.0
    if whole and marks.rear is not None:
        top = max(top, marks.rear[1] + 420.0)
    return sheet_for(out, low, top, width, height)


def _ground(
    sheet: Sheet, solution: Solution, both: dict[SideName, Standing], marks: PlanMarks
) -> Iterator[Item]:
    """Centerline, front axle line and the rear tires, where they are known."""
    area, zero = sheet.area, sheet.place((0.0, 0.0))
    chalk = Style(colors.CHALK, 0.4, layer="chalk")
    yield Line((area.left, zero[1]), (area.right, zero[1]), chalk)
    yield Line((zero[0], area.bottom), (zero[0], area.top), chalk)
    for outline in rear_tires(solution, both, marks):
        if outline[:, 1].max() < sheet.shown.top:
            style = Style(colors.CHALK, 0.3, (2.2, 0.5), layer="chalk")
            yield Polyline(sheet.places(outline), True, style)


def _signs(sheet: Sheet, marks: PlanMarks) -> Iterator[Item]:
    foot = Style(colors.VERMILLION, 0.35, layer="signs")
    wanted = Style(colors.GREEN, 0.4, layer="signs")
    for place in marks.kingpins.values():
        yield Circle(sheet.place(place), 1.1, foot)
    for place in marks.wanted.values():
        yield Circle(sheet.place(place), 1.5, wanted)
    for rear, style in ((marks.rear, wanted), (marks.center, Style(colors.BLUE, 0.4))):
        if rear is not None and inside(sheet, rear):
            yield Circle(sheet.place(rear), 1.5, style)


def _tag_words(
    sheet: Sheet, solution: Solution, both: dict[SideName, Standing], marks: PlanMarks
) -> Iterator[tuple[str, str, XY]]:
    """What the paper's tags say: title, detail and the place on the floor."""
    unit = solution.layout.units
    for side, stand in both.items():
        if not stand.meets:
            words = reach_words(stand.state, solution.travel[side], unit)
            yield f"{capital(side)} side {words}", "", stand.points["wheel center"]
    yield "Front of the car", "", (0.0, 2.0 * sheet.shown.bottom)
    for side, check in marks.checks.items():
        yield f"{capital(side)} string check", off_string(check, unit), marks.wanted[side]
    if marks.center is not None:
        yield "Turn center", center_words(marks.center[0], unit), marks.center
