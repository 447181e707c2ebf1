"""A drawing as a DXF file (R2010) at true size, one layer for each part.

Circles and arcs are written as such, lettering as TEXT, so a cutting or drafting program
measures the same lengths. The reading library is imported only when a file is written.
"""

from __future__ import annotations

import io
import math
import os
from typing import TYPE_CHECKING, Any

from geometry.drawing import (
    Arc,
    Circle,
    Drawing,
    DrawingError,
    Item,
    Line,
    Polygon,
    Polyline,
    Style,
    Text,
)
from geometry.layout import MM_PER_INCH, UnitName
from geometry.output_file import replace_file

if TYPE_CHECKING:
    from ezdxf.document import Drawing as Document

_INSUNITS = {"in": 1, "mm": 4}
"""Codes of the header variable $INSUNITS (DXF reference, from memory: 1 inch, 4 mm)."""

_LINEWEIGHTS = (
    0, 5, 9, 13, 15, 18, 20, 25, 30, 35, 40, 50,
    53, 60, 70, 80, 90, 100, 106, 120, 140, 158, 200, 211,
)  # fmt: skip
"""The line weights a DXF file can hold, hundredths of a mm (DXF reference, from memory)."""

_FORBIDDEN = str.maketrans(dict.fromkeys('<>/\\":;?*|,=`', "-"))
_TEXT_STYLE = "Bobline"


def dxf_bytes(drawing: Drawing, units: UnitName = "mm") -> bytes:
    """The drawing as the bytes of a DXF file whose unit is ``units``.

    Raises DrawingError for an empty drawing.
    """
    if not drawing.items:
        raise DrawingError("There is nothing to draw.")
    from ezdxf.filemanagement import new

    document = new("R2010")
    document.header["$INSUNITS"] = _INSUNITS[units]
    document.header["$MEASUREMENT"] = 0 if units == "in" else 1
    document.header["$LTSCALE"] = 1.0
    document.styles.add(_TEXT_STYLE, font="arial.ttf")
    writer = _Writer(document, 1 / MM_PER_INCH if units == "in" else 1.0)
    for item in drawing:
        writer.add(item)
    box = drawing.bounds
    if box is not None:
        low, high = writer.point(box[:2]), writer.point(box[2:])
        document.header["$EXTMIN"], document.header["$EXTMAX"] = (*low, 0.0), (*high, 0.0)
    text = io.StringIO()
    document.write(text)
    return text.getvalue().encode(document.output_encoding, "dxfreplace")


def write_dxf(drawing: Drawing, path: str | os.PathLike[str], units: UnitName = "mm") -> None:
    """Write the drawing to a DXF file. Raises DrawingError or OutputError."""
    replace_file(path, dxf_bytes(drawing, units))


class _Writer:
    """Turns items into entities, from mm into the file's unit."""

    def __init__(self, document: Document, factor: float) -> None:
        self._document = document
        self._space = document.modelspace()
        self._factor = factor

    def point(self, place: tuple[float, ...]) -> tuple[float, float]:
        return place[0] * self._factor, place[1] * self._factor

    def add(self, item: Item) -> None:
        look = self._look(item.style)
        drawn = item.style.stroke is not None
        match item:
            case Line() if drawn:
                self._space.add_line(self.point(item.start), self.point(item.end), look)
            case Polyline():
                self._outlines((item.points,), item.closed, item.style, look)
            case Polygon():
                self._outlines(item.rings, True, item.style, look)
            case Circle():
                self._circle(item, look)
            case Arc() if drawn:
                self._space.add_arc(
                    self.point(item.center),
                    item.radius * self._factor,
                    math.degrees(item.start),
                    math.degrees(item.start + item.sweep),
                    dxfattribs=look,
                )
            case Text() if drawn:
                self._text(item, look)
            case _:
                pass

    def _circle(self, item: Circle, look: dict[str, Any]) -> None:
        center, radius = self.point(item.center), item.radius * self._factor
        hatch = self._hatch(item.style)
        if hatch is not None:
            hatch.paths.add_edge_path().add_arc(center, radius, 0.0, 360.0)
        if item.style.stroke is not None:
            self._space.add_circle(center, radius, look)

    def _outlines(
        self,
        rings: tuple[tuple[tuple[float, float], ...], ...],
        closed: bool,
        style: Style,
        look: dict[str, Any],
    ) -> None:
        points = [[self.point(place) for place in ring] for ring in rings]
        hatch = self._hatch(style) if len(points[0]) > 2 else None
        if hatch is not None:
            for index, ring in enumerate(points):
                # Flags of the DXF reference: 1 external, 16 outermost.
                hatch.paths.add_polyline_path(ring, is_closed=True, flags=1 if index == 0 else 16)
        if style.stroke is None:
            return
        for ring in points:
            if len(ring) > 1:
                self._space.add_lwpolyline(ring, close=closed, dxfattribs=look)

    def _hatch(self, style: Style) -> Any:
        """A solid fill below what follows; a white one is bare paper and left out."""
        if style.fill is None or style.fill.lower() == "#ffffff":
            return None
        layer = self._layer(style)
        hatch = self._space.add_hatch(dxfattribs={"layer": layer, "hatch_style": 0})
        hatch.set_solid_fill(color=7, style=0, rgb=_rgb(style.fill))
        if _is_ink(style.fill):
            hatch.dxf.discard("true_color")
        return hatch

    def _text(self, item: Text, look: dict[str, Any]) -> None:
        from ezdxf.enums import TextEntityAlignment

        v = {"baseline": "", "bottom": "BOTTOM_", "middle": "MIDDLE_", "top": "TOP_"}[item.v]
        entity = self._space.add_text(
            _escaped(item.text),
            height=item.height * self._factor,
            rotation=math.degrees(item.angle),
            dxfattribs={**look, "style": _TEXT_STYLE, "linetype": "CONTINUOUS"},
        )
        entity.set_placement(self.point(item.at), align=TextEntityAlignment[f"{v}{item.h.upper()}"])

    def _look(self, style: Style) -> dict[str, Any]:
        weight = min(_LINEWEIGHTS, key=lambda w: abs(w - 100 * style.width))
        look: dict[str, Any] = {
            "layer": self._layer(style),
            "linetype": self._linetype(style.dash),
            "lineweight": weight,
            "color": 7,
        }
        if style.stroke is not None and not _is_ink(style.stroke):
            look["true_color"] = _packed(style.stroke)
        return look

    def _layer(self, style: Style) -> str:
        name = style.layer.translate(_FORBIDDEN).strip() or "0"
        if name not in self._document.layers:
            layer = self._document.layers.add(name, color=7)
            color = style.stroke or style.fill
            if color is not None and not _is_ink(color):
                layer.rgb = _rgb(color)
        return name

    def _linetype(self, dash: tuple[float, ...]) -> str:
        """The linetype of a dash, defined in the file's unit at its first use."""
        if not dash:
            return "CONTINUOUS"
        sizes = "_".join(f"{length:g}" for length in dash)
        name = f"DASH_{sizes}_MM"
        if name not in self._document.linetypes:
            signed = [d * self._factor * (-1 if i % 2 else 1) for i, d in enumerate(dash)]
            pattern = [sum(map(abs, signed)), *signed]
            self._document.linetypes.add(name, pattern, description=f"Dash {sizes} mm")
        return name


def _is_ink(color: str) -> bool:
    """True for black, which files keep as color 7: black on white paper, white on black."""
    return color.lower() == "#000000"


def _rgb(color: str) -> Any:
    from ezdxf.colors import RGB

    return RGB.from_hex(color)


def _packed(color: str) -> int:
    return int(color[1:], 16)


def _escaped(text: str) -> str:
    """The text with DXF's own codes (%%d, ^J) made plain characters again."""
    return text.replace("^", "^ ").replace("%%", "%%%%%%")
