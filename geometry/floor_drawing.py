"""The floor as a neutral drawing to scale, for pictures and paper."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator
from dataclasses import dataclass

import numpy as np

from geometry import floor_colors as colors
from geometry import floor_signs as signs
from geometry.bounds import Bounds, Place
from geometry.drawing import Drawing, Item, Line, Polygon, Polyline, Style, Text
from geometry.faces import FRONT, Face
from geometry.floor_words import capital, center_words, pose_words, reach_words, roll_words
from geometry.front_parts import OPEN_ROLES, ROLES, Part, Role, car_parts, side_parts
from geometry.front_strings import inner_pivot_places, instant_center, strings, tire_floor
from geometry.labels import Box, Label, place_labels
from geometry.layout import SIDES, SideName
from geometry.lettering import shortened, text_width
from geometry.linkage import Array
from geometry.pages import LETTER, Page, Pages, PageSize
from geometry.shapes import clipped
from geometry.solution import Solution
from geometry.standing import XY, Standing, nail_places, relay_standing, sign_of, standing
from geometry.tape import marks

_SCALES = (1, 2, 3, 4, 5, 6, 8, 10, 12, 15, 16, 20, 25, 30, 40, 50, 75, 100, 200, 500, 1000)
_TAPE = 7.5
_UPRIGHT = 9.5
_CAPTION = 5.0
_LAYERS: dict[Role, str] = {
    "tire": "wheels", "groove": "wheels", "window": "wheels", "rim": "wheels", "hub": "wheels",
    "spring": "springs", "strut": "springs", "rod": "springs", "knuckle": "knuckles",
    "knuckle light": "knuckles", "rack": "steering", "rack light": "steering",
    "bellows": "steering", "relay": "steering", "relay light": "steering", "tie": "steering",
    "tie light": "steering",
}
_BARS = {"rim": 5.0, "spring": 11.0, "groove": 1.0}


@dataclass(frozen=True)
class Sheet:
    """A floor laid on paper: what it shows (mm on the floor) and how it is scaled."""

    shown: Bounds
    scale: float
    origin: Place

    def place(self, at: XY) -> Place:
        return self.origin[0] + at[0] / self.scale, self.origin[1] + at[1] / self.scale

    def places(self, outline: Array) -> tuple[Place, ...]:
        moved = outline / self.scale + self.origin
        return tuple((float(x), float(y)) for x, y in moved)

    @property
    def area(self) -> Bounds:
        """What is shown, in mm on paper."""
        return Bounds(*self.place(self.shown[:2]), *self.place(self.shown[2:]))


def floor_drawing(
    solution: Solution,
    found: Solution | None = None,
    width: float = 254.0,
    height: float = 175.0,
) -> Drawing:
    """The front view of a solved car at a round scale, at most ``width`` by ``height`` mm.

    ``found`` is drawn as a pale outline beneath. Everything is in mm on paper from the
    drawing's lower left corner.
    """
    both = {side: standing(solution, side) for side in SIDES}
    parts = _parts(solution, both)
    sheet = _sheet(solution, parts, both, width, height)
    items: list[Item] = list(_ground(sheet, both, solution))
    if found is not None and found.layout != solution.layout:
        outline = _parts(found, {side: standing(found, side) for side in SIDES})
        items += pale(sheet, outline)
    items += no_go(sheet, solution)
    broken = {side for side in SIDES if not both[side].meets}
    items += solid(sheet, parts, broken)
    items += _strings(sheet, solution, both)
    items += _signs(sheet, solution, both)
    items += placed_tags(sheet, _tag_words(solution, both), nail_places(solution).values())
    items += tapes(sheet, solution)
    items += caption(sheet, solution)
    return Drawing(tuple(items), frame_of(sheet))


def floor_pages(
    solution: Solution, found: Solution | None = None, size: PageSize = LETTER
) -> Pages:
    """The front view on one sheet lying on its long side."""
    return one_page(
        lambda width, height: floor_drawing(solution, found, width, height),
        solution.layout.title,
        size.landscape,
    )


def one_page(make: Callable[[float, float], Drawing], title: str, sheet: PageSize) -> Pages:
    """A drawing made to fit a sheet's printable width and height, in its middle."""
    room = Page(sheet).printable
    drawing = make(room.width, room.height)
    frame = drawing.shown()
    at = (
        room.left + 0.5 * (room.width - frame.width) - frame.left,
        room.bottom + 0.5 * (room.height - frame.height) - frame.bottom,
    )
    clip = Bounds(frame.left + at[0], frame.bottom + at[1], frame.right + at[0], frame.top + at[1])
    return Pages((Page(sheet, title=title).with_placed(drawing, at, clip),), title)


def _parts(solution: Solution, both: dict[SideName, Standing]) -> list[Part]:
    parts = [part for stand in both.values() for part in side_parts(stand)]
    return parts + car_parts(solution, both)


def _sheet(
    solution: Solution, parts: list[Part], both: dict[SideName, Standing],
    width: float, height: float,
) -> Sheet:
    """Room for the whole car as it stands, its centerline in the middle."""
    contacts = np.array([stand.contact for stand in both.values()])
    corners = np.vstack([*(part.outline for part in parts), contacts])
    out = float(np.abs(corners[:, 0]).max()) + 40.0
    top = max(float(corners[:, 1].max()), solution.layout.cg_height or 0.0) + 60.0
    low = min(float(corners[:, 1].min()), 0.0) - 60.0
    return sheet_for(out, low, top, width, height)


def sheet_for(out: float, low: float, top: float, width: float, height: float) -> Sheet:
    """A floor from ``low`` to ``top`` and ``out`` mm each way, at a round scale on paper."""
    room = width - _UPRIGHT, height - _TAPE - _CAPTION
    need = max(2.0 * out / room[0], (top - low) / room[1])
    scale = float(next((s for s in _SCALES if s >= need), _SCALES[-1]))
    # What the round scale leaves over goes to floor at the sides.
    out = max(out, 0.5 * room[0] * scale)
    shown = Bounds(-out, low, out, top)
    return Sheet(shown, scale, (_UPRIGHT + out / scale, _TAPE + _CAPTION - low / scale))


def frame_of(sheet: Sheet) -> Bounds:
    """What a drawing shows: the floor with its tapes and its caption."""
    area = sheet.area
    return Bounds(area.left - _UPRIGHT, area.bottom - _TAPE - _CAPTION, area.right, area.top)


def _ground(sheet: Sheet, both: dict[SideName, Standing], solution: Solution) -> Iterator[Item]:
    """Floor line, centerline and, away from ride height, the floor the tires stand on."""
    area, zero = sheet.area, sheet.place((0.0, 0.0))
    chalk = Style(colors.CHALK, 0.4, layer="chalk")
    yield Line((area.left, zero[1]), (area.right, zero[1]), chalk)
    yield Line((zero[0], area.bottom), (zero[0], area.top), chalk)
    floor = tire_floor(both)
    if floor is not None and any(abs(t) > 1e-9 for t in solution.travel.values()):
        style = Style(colors.CHALK, 0.3, (2.5, 1.2), layer="chalk")
        yield Line(sheet.place(floor[0]), sheet.place(floor[1]), style)


def pale(sheet: Sheet, parts: list[Part]) -> Iterator[Item]:
    style = Style("#A9A59C", 0.3, (2.2, 0.5), layer="as found")
    for part in parts:
        if part.role in ("tire", "arm", "low arm", "knuckle", "tie", "strut", "rack", "relay"):
            yield Polyline(sheet.places(part.outline), True, style)


def no_go(sheet: Sheet, solution: Solution, face: Face = FRONT) -> Iterator[Item]:
    """The no-go shapes of one floor."""
    style = Style(colors.NO_GO, 0.35, fill="#F3E0DA", layer="no-go")
    for shape in solution.layout.no_go:
        if shape.view != face.name or len(shape.outline) < 3:
            continue
        for side in SIDES if shape.side is None else (shape.side,):
            outline = np.array(shape.outline, dtype=float) * (sign_of(side), face.way)
            yield Polygon(sheet.places(outline), style=style)


def solid(
    sheet: Sheet, parts: list[Part], broken: set[SideName], roles: tuple[Role, ...] = ROLES
) -> Iterator[Item]:
    """The parts from back to front; sides whose parts can't meet are only outlined."""
    for part in sorted(parts, key=lambda p: roles.index(p.role)):
        fill, edge = colors.PARTS[part.role]
        layer = _LAYERS.get(part.role, "arms")
        places = sheet.places(part.outline)
        if part.side in broken:
            if not part.role.endswith("light"):
                style = Style("#8D887D", 0.25, (1.5, 1.0), layer=layer)
                yield Polyline(places, part.closed, style)
        elif part.role in OPEN_ROLES:
            bar = _BARS[part.role] / sheet.scale
            yield Polyline(places, False, Style(edge, max(bar, 0.2), layer=layer))
            if fill is not None:
                yield Polyline(places, False, Style(fill, max(0.5 * bar, 0.1), layer=layer))
        else:
            yield Polygon(places, style=Style(edge, 0.2, fill=fill, layer=layer))


def _strings(
    sheet: Sheet, solution: Solution, both: dict[SideName, Standing]
) -> Iterator[Item]:
    for string in strings(solution, both):
        part = clipped(string.start, string.end, sheet.shown)
        if part is not None:
            style = signs.STRING_STYLES[string.kind]
            yield Line(sheet.place(part[:2]), sheet.place(part[2:]), style)


def inside(sheet: Sheet, at: XY) -> bool:
    box = sheet.shown
    return box.left <= at[0] <= box.right and box.bottom <= at[1] <= box.top


def _signs(sheet: Sheet, solution: Solution, both: dict[SideName, Standing]) -> Iterator[Item]:
    """Nails and construction points that lie inside."""
    relay = relay_standing(solution)
    for side, name in solution.layout.nails():
        at = relay[name] if name in relay else both[side].points[name]
        yield from signs.nail(sheet.place(at), name in solution.layout.locked)
    for side, stand in both.items():
        if not stand.meets:
            continue
        for kind, place in inner_pivot_places(solution, stand).items():
            if inside(sheet, place):
                yield from signs.pivot(sheet.place(place), kind)
        center = instant_center(solution, side)
        if center is not None and not center.at_infinity and inside(sheet, center.place):
            yield from signs.plumb_bob(sheet.place(center.place))
    roll = solution.roll_center_place
    if roll is not None and solution.assembles and inside(sheet, roll):
        yield from signs.ring_on_bar(sheet.place(roll))
    high = solution.layout.cg_height
    if high is not None:
        yield from signs.quartered(sheet.place((0.0, high)))


def _tag_words(
    solution: Solution, both: dict[SideName, Standing]
) -> Iterator[tuple[str, str, XY]]:
    """What the paper's tags say: title, detail and the place on the floor."""
    unit = solution.layout.units
    for side, stand in both.items():
        if not stand.meets:
            words = reach_words(stand.state, solution.travel[side], unit)
            yield f"{capital(side)} side {words}", "", stand.points["wheel center"]
    if solution.roll_center_place is not None and solution.assembles:
        yield "Roll center", roll_words(solution, unit), solution.roll_center_place
    for side, stand in both.items():
        center = instant_center(solution, side) if stand.meets else None
        if center is not None:
            words = center_words(center, stand, unit)
            yield f"{capital(side)} instant center", words, center.seen


def placed_tags(
    sheet: Sheet, words_at: Iterable[tuple[str, str, XY]], keep_clear: Iterable[XY]
) -> Iterator[Item]:
    """Tags (title, detail, place), none over another; those off the paper at its edge."""
    area = sheet.area
    box = Box(area.left, area.bottom, area.width, area.height).grown(-1.0)
    labels: list[Label] = []
    words: dict[str, tuple[str, str, Place | None]] = {}
    for index, (title, detail, at) in enumerate(words_at):
        outside = not inside(sheet, at)
        if outside:
            title = f"{_way(sheet, at)} {title}"
        anchor = sheet.place(at)
        labels.append(
            Label(str(index), anchor, *signs.tag_size(title, detail), 2.6, outside)
        )
        words[str(index)] = (title, detail, None if outside else anchor)
    soft = [Box(*sheet.place(place), 0.0, 0.0).grown(1.6) for place in keep_clear]
    for key, placed in place_labels(labels, box, soft).items():
        title, detail, beside = words[key]
        if beside is not None:
            yield from signs.leader(placed, beside, 2.6)
        yield from signs.tag(placed, title, detail)


def _way(sheet: Sheet, at: XY) -> str:
    """An arrow toward a place off the paper."""
    box = sheet.shown
    if at[0] < box.left:
        return "←"
    if at[0] > box.right:
        return "→"
    return "↓" if at[1] < box.bottom else "↑"


def tapes(sheet: Sheet, solution: Solution, way: float = 1.0) -> Iterator[Item]:
    """The tapes along the lower and the left edge, over whatever runs out there.

    ``way`` is +1 where the upright tape's measure grows up the paper, -1 where down.
    """
    area, unit = sheet.area, solution.layout.units
    fill = Style(colors.TAPE_EDGE, 0.2, fill=colors.TAPE, layer="tapes")
    lower = Bounds(area.left - _UPRIGHT, area.bottom - _TAPE, area.right, area.bottom)
    upright = Bounds(area.left - _UPRIGHT, area.bottom, area.left, area.top)
    yield Polygon(lower.corners, style=fill)
    yield Polygon(upright.corners, style=fill)
    dots = 1.0 / sheet.scale
    for mark in marks(sheet.shown.left, sheet.shown.right, unit, dots, 8.0, 1.0):
        x = sheet.place((mark.at, 0.0))[0]
        ink = Style(colors.TAPE_RED if mark.round else colors.TAPE_INK, 0.15, layer="tapes")
        yield Line((x, area.bottom), (x, area.bottom - 0.8 - 2.6 * mark.size), ink)
        if mark.numeral and area.left + 2.0 < x < area.right - 2.0:
            at = (x, area.bottom - _TAPE + 1.0)
            yield Text(at, mark.numeral, 1.8, "center", style=ink)
    for mark in marks(sheet.shown.bottom, sheet.shown.top, unit, dots, 8.0, 1.0):
        y = sheet.place((0.0, mark.at))[1]
        ink = Style(colors.TAPE_RED if mark.round else colors.TAPE_INK, 0.15, layer="tapes")
        yield Line((area.left, y), (area.left - 0.6 - 1.6 * mark.size, y), ink)
        if mark.numeral and area.bottom + 2.0 < y < area.top - 2.0:
            numeral = f"−{mark.numeral}" if way * mark.at < 0.0 else mark.numeral
            yield Text((area.left - 2.9, y), numeral, 1.8, "right", "middle", style=ink)


def caption(sheet: Sheet, solution: Solution) -> Iterator[Item]:
    area = sheet.area
    layout = solution.layout
    ink = Style(colors.INK, layer="text")
    y = area.bottom - _TAPE - _CAPTION + 1.4
    words = f"{pose_words(solution)}   ·   scale 1 : {sheet.scale:g}   ·   {layout.units}"
    yield Text((area.right, y), words, 2.0, "right", style=ink)
    room = area.width + _UPRIGHT - text_width(words, 2.0) - 6.0
    title = shortened(layout.title, room, 2.4, bold=True)
    yield Text((area.left - _UPRIGHT, y), title, 2.4, bold=True, style=ink)
