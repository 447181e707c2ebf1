"""The floor as a neutral drawing, for pictures and paper."""

from __future__ import annotations

from geometry.drawing import Bounds, Drawing, Polygon, Polyline, Style
from geometry.front_parts import front_parts
from geometry.pages import LETTER, Page, Pages
from geometry.solution import Solution


def floor_drawing(solution: Solution, found: Solution | None = None) -> Drawing:
    items = []
    for part in front_parts(solution):
        points = tuple((float(x) / 8, float(y) / 8) for x, y in part.outline)
        style = Style(layer=part.role)
        items.append(Polygon(points, (), style) if part.closed else Polyline(points, False, style))
    return Drawing(tuple(items))


def floor_pages(solution: Solution, found: Solution | None = None) -> Pages:
    drawing = floor_drawing(solution, found)
    page = Page(LETTER.landscape).with_placed(drawing, (139.7, 80.0))
    return Pages((page,), solution.layout.title)
