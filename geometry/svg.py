"""A drawing as an SVG file at true size: one user unit is one millimeter, text stays text.

Written after the SVG 1.1 recommendation (W3C); only what every reader knows is used.
"""

from __future__ import annotations

import math
import os
from itertools import groupby
from xml.etree import ElementTree as ET

from geometry.drawing import (
    Arc,
    Bounds,
    Circle,
    Drawing,
    Item,
    Line,
    Place,
    Polygon,
    Polyline,
    Style,
    Text,
)
from geometry.lettering import CAPITAL, FAMILIES
from geometry.output_file import replace_file

NAMESPACE = "http://www.w3.org/2000/svg"
_ANCHORS = {"left": "start", "center": "middle", "right": "end"}


def svg_text(drawing: Drawing, title: str = "", margin: float = 2.0) -> str:
    """The drawing as the text of an SVG file, its shown area and ``margin`` mm round it.

    Runs of items on one layer share a group with ``data-layer``. Raises DrawingError for
    an empty drawing.
    """
    area = drawing.shown(margin)
    width, height = _number(area.width), _number(area.height)
    root = ET.Element(
        "svg",
        {
            "xmlns": NAMESPACE,
            "version": "1.1",
            "width": f"{width}mm",
            "height": f"{height}mm",
            "viewBox": f"0 0 {width} {height}",
        },
    )
    if title:
        ET.SubElement(root, "title").text = title
    writer = _Writer(area)
    for layer, items in groupby(drawing.items, key=lambda item: item.style.layer):
        parent = ET.SubElement(root, "g", {"data-layer": layer})
        for item in items:
            writer.add(parent, item)
    ET.indent(root, " ")
    return '<?xml version="1.0" encoding="UTF-8"?>\n' + ET.tostring(root, "unicode") + "\n"


def write_svg(
    drawing: Drawing, path: str | os.PathLike[str], title: str = "", margin: float = 2.0
) -> None:
    """Write the drawing to an SVG file. Raises DrawingError or OutputError."""
    replace_file(path, svg_text(drawing, title, margin).encode("utf-8"))


class _Writer:
    """Turns items into elements, from y up to y down with the area's top left as origin."""

    def __init__(self, area: Bounds) -> None:
        self._left, self._top = area.left, area.top

    def add(self, parent: ET.Element, item: Item) -> None:
        match item:
            case Line():
                (x1, y1), (x2, y2) = self._xy(item.start), self._xy(item.end)
                shape = {"x1": x1, "y1": y1, "x2": x2, "y2": y2}
                ET.SubElement(parent, "line", shape | _look(item.style, filled=False))
            case Polyline():
                name = "polygon" if item.closed else "polyline"
                points = " ".join(",".join(self._xy(p)) for p in item.points)
                ET.SubElement(parent, name, {"points": points} | _look(item.style))
            case Polygon():
                rings = " ".join(self._ring(ring) for ring in item.rings)
                shape = {"d": rings, "fill-rule": "evenodd"}
                ET.SubElement(parent, "path", shape | _look(item.style))
            case Circle():
                x, y = self._xy(item.center)
                shape = {"cx": x, "cy": y, "r": _number(item.radius)}
                ET.SubElement(parent, "circle", shape | _look(item.style))
            case Arc():
                shape = {"d": self._arc(item)}
                ET.SubElement(parent, "path", shape | _look(item.style, filled=False))
            case Text():
                self._text(parent, item)

    def _xy(self, place: Place) -> tuple[str, str]:
        return _number(place[0] - self._left), _number(self._top - place[1])

    def _ring(self, ring: tuple[Place, ...]) -> str:
        return "M " + " L ".join(" ".join(self._xy(p)) for p in ring) + " Z"

    def _arc(self, arc: Arc) -> str:
        """The arc in two halves, so that a full turn is drawn too and no flag is in doubt."""
        radius = _number(arc.radius)
        stops = [arc.at(arc.start + share * arc.sweep) for share in (0.0, 0.5, 1.0)]
        start, middle, end = (" ".join(self._xy(place)) for place in stops)
        # Counterclockwise with y up is the negative sweep with y down.
        half = f"A {radius} {radius} 0 0 0"
        return f"M {start} {half} {middle} {half} {end}"

    def _text(self, parent: ET.Element, item: Text) -> None:
        x, y = self._xy(item.at)
        look = {
            "x": x,
            "y": _number(self._top - item.at[1] + item.drop),
            "font-family": ", ".join(
                name if name.islower() else f"'{name}'" for name in FAMILIES[item.family]
            ),
            "font-size": _number(item.height / CAPITAL),
            "text-anchor": _ANCHORS[item.h],
            "fill": item.style.stroke or "none",
            "xml:space": "preserve",
        }
        if item.bold:
            look["font-weight"] = "bold"
        if item.angle:
            look["transform"] = f"rotate({_number(-math.degrees(item.angle))} {x} {y})"
        ET.SubElement(parent, "text", look).text = item.text


def _look(style: Style, filled: bool = True) -> dict[str, str]:
    look = {"fill": (style.fill if filled else None) or "none"}
    if style.stroke is None:
        return look | {"stroke": "none"}
    look |= {"stroke": style.stroke, "stroke-width": _number(style.width)}
    look |= {"stroke-linecap": "butt" if style.dash else "round", "stroke-linejoin": "round"}
    if style.dash:
        look["stroke-dasharray"] = " ".join(map(_number, style.dash))
    return look


def _number(value: float) -> str:
    """A plain decimal to the nanometer, without an exponent or a negative zero."""
    text = f"{value:.6f}".rstrip("0").rstrip(".")
    return "0" if text == "-0" else text
