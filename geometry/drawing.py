"""One neutral drawing in real millimeters: what every sheet, picture and file is made from.

Coordinates are millimeters, x to the right, y up; angles are radians, counterclockwise.
A drawing is plain data, so a test reads it directly; the backends (painter, PDF, PNG,
SVG, DXF) are the only places that convert to anything else. Line widths, dashes and text
heights are sizes on paper: they stay as they are when a drawing is scaled to fit a sheet.
"""

from __future__ import annotations

import cmath
import math
import re
from collections.abc import Callable, Iterable, Iterator
from dataclasses import dataclass, replace
from typing import Literal, TypeAlias

from geometry.bounds import Bounds, DrawingError, Move, Place
from geometry.lettering import BELOW_BASELINE, FontRole, text_width

__all__ = [
    "PLAIN",
    "Arc",
    "Bounds",
    "Circle",
    "Drawing",
    "DrawingError",
    "Horizontal",
    "Item",
    "Line",
    "Move",
    "Place",
    "Polygon",
    "Polyline",
    "Style",
    "Text",
    "Vertical",
    "group",
    "rectangle",
]

Horizontal = Literal["left", "center", "right"]
Vertical = Literal["baseline", "bottom", "middle", "top"]

_COLOR = re.compile("#[0-9a-fA-F]{6}")
_DROPS = {"baseline": 0.0, "bottom": -BELOW_BASELINE, "middle": 0.5, "top": 1.0}
_SHARES = {"left": 0.0, "center": 0.5, "right": 1.0}
_SWAPPED: dict[Horizontal, Horizontal] = {"left": "right", "right": "left", "center": "center"}
_NOT_TEXT = dict.fromkeys((*range(32), *range(0x7F, 0xA0), 0x2028, 0x2029, 0xFFFE, 0xFFFF), " ")
_NOT_TEXT |= dict.fromkeys(range(0xD800, 0xE000), "\N{REPLACEMENT CHARACTER}")


@dataclass(frozen=True)
class Style:
    """How an item looks and which part of the car or sheet it belongs to.

    ``stroke`` and ``fill`` are colors as "#rrggbb" or None for none; a text is inked in
    ``stroke``. ``width`` is the line's width, mm; ``dash`` the lengths of dash and gap in
    turn, mm (empty = continuous). ``layer`` names the part: "arms", "strings", "no-go",
    "dimensions", "text" and so on; files with layers use it.
    """

    stroke: str | None = "#000000"
    width: float = 0.25
    dash: tuple[float, ...] = ()
    fill: str | None = None
    layer: str = "outline"

    def __post_init__(self) -> None:
        for color in (self.stroke, self.fill):
            if color is not None and not _COLOR.fullmatch(color):
                raise DrawingError(f"No color is called '{color}'; write it as #rrggbb.")
        if len(self.dash) % 2 or not all(math.isfinite(d) and d > 0 for d in self.dash):
            raise DrawingError("A dash needs lengths above zero in pairs: dash, gap.")
        if not (math.isfinite(self.width) and self.width > 0):
            raise DrawingError("A line's width must be above zero.")


PLAIN = Style()


@dataclass(frozen=True)
class Line:
    """A straight line between two places."""

    start: Place
    end: Place
    style: Style = PLAIN

    def __post_init__(self) -> None:
        _check(self.start, self.end)

    @property
    def bounds(self) -> Bounds:
        return Bounds.around((self.start, self.end))

    def moved(self, move: Move) -> Line:
        return replace(self, start=move(self.start), end=move(self.end))


@dataclass(frozen=True)
class Polyline:
    """Straight lines through places in turn; ``closed`` joins the last to the first."""

    points: tuple[Place, ...]
    closed: bool = False
    style: Style = PLAIN

    def __post_init__(self) -> None:
        object.__setattr__(self, "points", _places(self.points))

    @property
    def bounds(self) -> Bounds:
        return Bounds.around(self.points)

    def moved(self, move: Move) -> Polyline:
        return replace(self, points=tuple(map(move, self.points)))


@dataclass(frozen=True)
class Polygon:
    """A closed outline with any number of holes, each a closed outline of its own."""

    outline: tuple[Place, ...]
    holes: tuple[tuple[Place, ...], ...] = ()
    style: Style = PLAIN

    def __post_init__(self) -> None:
        object.__setattr__(self, "outline", _places(self.outline))
        object.__setattr__(self, "holes", tuple(map(_places, self.holes)))

    @property
    def rings(self) -> tuple[tuple[Place, ...], ...]:
        """The outline, then its holes."""
        return (self.outline, *self.holes)

    @property
    def bounds(self) -> Bounds:
        return Bounds.around(self.outline)

    def moved(self, move: Move) -> Polygon:
        outline, *holes = (tuple(map(move, ring)) for ring in self.rings)
        return replace(self, outline=outline, holes=tuple(holes))


@dataclass(frozen=True)
class Circle:
    """A full circle; ``radius`` mm."""

    center: Place
    radius: float
    style: Style = PLAIN

    def __post_init__(self) -> None:
        _check(self.center)
        _check_radius(self.radius)

    @property
    def bounds(self) -> Bounds:
        return Bounds(*self.center, *self.center).padded(self.radius)

    def moved(self, move: Move) -> Circle:
        return replace(self, center=move(self.center), radius=self.radius * move.scale)


@dataclass(frozen=True)
class Arc:
    """Part of a circle, counterclockwise from angle ``start`` to angle ``end``, radians.

    The sweep is above zero and at most one turn; an end at or below the start goes on
    round past it. An arc is never filled.
    """

    center: Place
    radius: float
    start: float
    end: float
    style: Style = PLAIN

    def __post_init__(self) -> None:
        _check(self.center, (self.start, self.end))
        _check_radius(self.radius)

    @property
    def sweep(self) -> float:
        """The angle swept, radians, above 0 and at most 2 pi."""
        return (self.end - self.start) % math.tau or math.tau

    def at(self, angle: float) -> Place:
        """The place on the arc's circle at an angle, radians."""
        x, y = self.center
        return x + self.radius * math.cos(angle), y + self.radius * math.sin(angle)

    @property
    def bounds(self) -> Bounds:
        first = math.ceil(self.start / (math.pi / 2))
        last = math.floor((self.start + self.sweep) / (math.pi / 2))
        quarters = [k * math.pi / 2 for k in range(first, last + 1)]
        angles = (self.start, self.start + self.sweep, *quarters)
        return Bounds.around(map(self.at, angles))

    def moved(self, move: Move) -> Arc:
        start, end = move.angle(self.start), move.angle(self.start + self.sweep)
        if move.mirror:
            start, end = end, start
        return replace(
            self, center=move(self.center), radius=self.radius * move.scale, start=start, end=end
        )


@dataclass(frozen=True)
class Text:
    """One line of text at a place.

    ``height`` is the height of a capital letter, mm, as in drafting. ``h`` and ``v`` say
    which part of the text stands at the place: "middle" is half the capital height, "top"
    the top of a capital, "bottom" the foot of a letter like g. ``angle`` turns the text
    about the place, radians. Control characters (a tab, a line end) become spaces; for
    several lines see `geometry.lettering.wrapped`.
    """

    at: Place
    text: str
    height: float = 2.5
    h: Horizontal = "left"
    v: Vertical = "baseline"
    bold: bool = False
    angle: float = 0.0
    family: FontRole = "sans"
    style: Style = Style(layer="text")

    def __post_init__(self) -> None:
        _check(self.at, (self.angle, self.height))
        if self.height <= 0:
            raise DrawingError("Text needs a height above zero.")
        object.__setattr__(self, "text", self.text.translate(_NOT_TEXT))

    @property
    def width(self) -> float:
        """How far the text runs, mm, by the metrics in `geometry.lettering`."""
        return text_width(self.text, self.height, self.bold, self.family)

    @property
    def drop(self) -> float:
        """How far the baseline stands below the place ``at``, mm, before turning."""
        return self.height * _DROPS[self.v]

    @property
    def bounds(self) -> Bounds:
        left = -self.width * _SHARES[self.h]
        box = Bounds(
            left,
            -self.drop - BELOW_BASELINE * self.height,
            left + self.width,
            self.height - self.drop,
        )
        turn = Move(cmath.rect(1, self.angle), complex(*self.at))
        return Bounds.around(map(turn, box.corners))

    def moved(self, move: Move) -> Text:
        """The text moved, still readable: mirrored, it swaps its anchor and not its letters."""
        h, angle = self.h, self.angle + cmath.phase(move.factor)
        if move.mirror:
            angle = cmath.phase(move.factor) - self.angle
            h = _SWAPPED[h]
        return replace(self, at=move(self.at), h=h, angle=angle)


Item: TypeAlias = Line | Polyline | Polygon | Circle | Arc | Text


@dataclass(frozen=True)
class Drawing:
    """Items in the order they are drawn, the last on top.

    ``frame`` is the area a picture of it should show, mm; None means the items' bounds.
    """

    items: tuple[Item, ...] = ()
    frame: Bounds | None = None

    def __post_init__(self) -> None:
        object.__setattr__(self, "items", tuple(self.items))

    def __add__(self, other: Drawing) -> Drawing:
        """Both drawings as one, ``other`` on top; a frame holds both frames."""
        return group(self, other)

    def __iter__(self) -> Iterator[Item]:
        return iter(self.items)

    def __len__(self) -> int:
        return len(self.items)

    @property
    def bounds(self) -> Bounds | None:
        """The rectangle around all items, line widths left out; None with no items."""
        boxes = [item.bounds for item in self.items]
        if not boxes:
            return None
        return Bounds.around(corner for box in boxes for corner in (box[:2], box[2:]))

    def shown(self, margin: float = 0.0) -> Bounds:
        """The area a picture shows: the frame, or else the bounds, and ``margin`` mm round it.

        Raises DrawingError where there is nothing to show.
        """
        area = self.frame or self.bounds
        if area is None:
            raise DrawingError("There is nothing to draw.")
        return area.padded(margin)

    @property
    def layers(self) -> tuple[str, ...]:
        """The layers' names, in the order they first appear."""
        return tuple(dict.fromkeys(item.style.layer for item in self.items))

    def on_layer(self, layer: str) -> Drawing:
        """Only the items of one layer."""
        return replace(self, items=tuple(i for i in self.items if i.style.layer == layer))

    def restyled(self, change: Callable[[Style], Style]) -> Drawing:
        """The same items, each with the style that ``change`` makes of its own."""
        return replace(self, items=tuple(replace(i, style=change(i.style)) for i in self.items))

    def moved(self, move: Move) -> Drawing:
        """The drawing after a move of the plane."""
        frame = None if self.frame is None else Bounds.around(map(move, self.frame.corners))
        return Drawing(tuple(item.moved(move) for item in self.items), frame)

    def translated(self, dx: float, dy: float) -> Drawing:
        """The drawing shifted, mm."""
        return self.moved(Move(shift=complex(dx, dy)))

    def scaled(self, factor: float, about: Place = (0.0, 0.0)) -> Drawing:
        """The shapes scaled about a place; widths, dashes and lettering keep paper size."""
        if not (math.isfinite(factor) and factor > 0):
            raise DrawingError("A scale must be above zero.")
        return self.moved(Move(complex(factor), complex(*about) * (1 - factor)))

    def rotated(self, angle: float, about: Place = (0.0, 0.0)) -> Drawing:
        """The drawing turned about a place, radians counterclockwise."""
        turn = cmath.rect(1, angle)
        return self.moved(Move(turn, complex(*about) * (1 - turn)))

    def mirrored(self, x: float = 0.0) -> Drawing:
        """Left and right swapped about the upright line at ``x``; text stays readable."""
        return self.moved(Move(shift=complex(2 * x, 0), mirror=True))


def group(*parts: Item | Drawing) -> Drawing:
    """Items and drawings as one drawing, in the order given."""
    items: list[Item] = []
    frame: Bounds | None = None
    for part in parts:
        if not isinstance(part, Drawing):
            items.append(part)
            continue
        items.extend(part.items)
        if part.frame is not None:
            frame = part.frame if frame is None else frame.joined(part.frame)
    return Drawing(tuple(items), frame)


def rectangle(box: Bounds, style: Style = PLAIN) -> Polyline:
    """A rectangle as a closed polyline."""
    return Polyline(box.corners, True, style)


def _check(*places: Place) -> None:
    if not all(math.isfinite(v) for place in places for v in place):
        raise DrawingError("A place in the drawing is not a number, so it can't be drawn.")


def _check_radius(radius: float) -> None:
    if not (math.isfinite(radius) and radius > 0):
        raise DrawingError("A circle needs a radius above zero.")


def _places(places: Iterable[Place]) -> tuple[Place, ...]:
    points = tuple((float(x), float(y)) for x, y in places)
    if not points:
        raise DrawingError("An outline needs at least one place.")
    _check(*points)
    return points
