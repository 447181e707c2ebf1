"""The signs of the floor on paper: nails, centers, strings and tags as drawing items.

Sizes are millimeters on paper. Places are on paper too.
"""

from __future__ import annotations

import math
from collections.abc import Iterator

from geometry import floor_colors as colors
from geometry.bounds import Bounds, Place
from geometry.drawing import Circle, Item, Line, Polygon, Polyline, Style, Text
from geometry.labels import Box
from geometry.lettering import BELOW_BASELINE, text_width

LETTER_HEIGHT = 2.0
_PAD = 1.2

STRING_STYLES = {
    "arm": Style(colors.VERMILLION, 0.35, (3.4, 1.2), layer="strings"),
    "contact": Style(colors.BLUE, 0.35, (3.2, 1.0, 0.6, 1.0), layer="strings"),
    "tie": Style(colors.GREEN, 0.35, (1.3, 1.0), layer="strings"),
}
_PAPER = "#FFFFFF"


def nail(at: Place, locked: bool) -> Iterator[Item]:
    """A nail's head with its cross; a locked one is filled."""
    ink = Style(colors.INK, 0.22, fill=colors.INK if locked else _PAPER, layer="nails")
    yield Circle(at, 1.1, ink)
    cross = Style(_PAPER if locked else colors.INK, 0.18, layer="nails")
    x, y = at
    if not locked:
        yield Line((x, y - 0.7), (x, y + 0.7), cross)
    yield Line((x - 0.7, y), (x + 0.7, y), cross)


def plumb_bob(at: Place) -> Iterator[Item]:
    """An instant center: the bob's tip stands on it."""
    x, y = at
    style = Style(colors.VERMILLION, 0.3, fill=colors.VERMILLION, layer="centers")
    yield Polygon(((x, y), (x + 1.1, y + 2.4), (x + 0.5, y + 3.9), (x - 0.5, y + 3.9),
                   (x - 1.1, y + 2.4)), style=style)
    yield Line((x, y + 3.9), (x, y + 6.0), Style(colors.VERMILLION, 0.3, layer="centers"))


def ring_on_bar(at: Place) -> Iterator[Item]:
    """The roll center."""
    x, y = at
    style = Style(colors.BLUE, 0.45, layer="centers")
    yield Circle(at, 1.5, style)
    yield Line((x - 3.6, y), (x - 1.5, y), style)
    yield Line((x + 1.5, y), (x + 3.6, y), style)


def quartered(at: Place) -> Iterator[Item]:
    """The center of gravity, as drafting draws it."""
    x, y = at
    line = Style(colors.INK, 0.3, fill=_PAPER, layer="centers")
    yield Circle(at, 1.9, line)
    solid = Style(colors.INK, 0.1, fill=colors.INK, layer="centers")
    for start in (0.0, math.pi):
        angles = [start + k * math.pi / 16 for k in range(9)]
        arc = [(x + 1.9 * math.cos(a), y + 1.9 * math.sin(a)) for a in angles]
        yield Polygon(((x, y), *arc), style=solid)


def pivot(at: Place, kind: str) -> Iterator[Item]:
    """One of the inner tie-rod pivot's three places: open ring, filled ring, ringed dot."""
    solid = kind == "curvature center"
    style = Style(colors.GREEN, 0.35, fill=colors.GREEN if solid else _PAPER, layer="centers")
    yield Circle(at, 1.35, style)
    if kind == "best fit":
        yield Circle(at, 0.5, Style(colors.GREEN, 0.2, fill=colors.GREEN, layer="centers"))


def tag_size(title: str, detail: str) -> tuple[float, float]:
    """Width and height of a tag, mm."""
    width = text_width(title, LETTER_HEIGHT, bold=True)
    if detail:
        width += LETTER_HEIGHT + text_width(detail, LETTER_HEIGHT)
    return width + 2 * _PAD, LETTER_HEIGHT * (1.0 + BELOW_BASELINE) + 2 * 0.8


def tag(box: Box, title: str, detail: str) -> Iterator[Item]:
    """A strip of masking tape with its words; the box counts y upward from its ``top``."""
    strip = Style(colors.TAG_EDGE, 0.15, fill=colors.TAG, layer="tags")
    bounds = Bounds(box.left, box.top, box.right, box.bottom)
    yield Polygon(bounds.corners, style=strip)
    ink = Style(colors.TAG_INK, layer="tags")
    base = box.top + 0.8 + BELOW_BASELINE * LETTER_HEIGHT
    x = box.left + _PAD
    yield Text((x, base), title, LETTER_HEIGHT, bold=True, style=ink)
    if detail:
        x += text_width(title, LETTER_HEIGHT, bold=True) + LETTER_HEIGHT
        yield Text((x, base), detail, LETTER_HEIGHT, style=ink)


def leader(box: Box, anchor: Place, clear: float) -> Iterator[Item]:
    """A thin line from a tag to what it names, where the two stand apart."""
    x = min(max(anchor[0], box.left), box.right)
    y = min(max(anchor[1], box.top), box.bottom)
    far = math.dist((x, y), anchor)
    if far > clear + 3.0:
        share = clear / far
        start = anchor[0] + share * (x - anchor[0]), anchor[1] + share * (y - anchor[1])
        yield Polyline((start, (x, y)), style=Style(colors.TAG_EDGE, 0.18, layer="tags"))
