"""What shows that a no-go shape is being drawn or is held: its line, corners and tags."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtCore import QPointF, QRectF
from PySide6.QtGui import QPainterPath, QPolygonF
from PySide6.QtWidgets import QGraphicsPathItem, QGraphicsScene

from app.floor import wording
from app.floor.paths import NO_BRUSH, brush, pen
from app.floor.tags import TagSpec
from app.palette import Palette
from geometry import floor_words
from geometry.labels import Box
from geometry.standing import XY

if TYPE_CHECKING:
    from app.floor.view import FloorView

_Z = 58.0
_CORNER = 4.5
"""Half of a corner's square, pixels."""


class ShapeMarks:
    """A dashed line along the outline, a square at each corner, the held one filled."""

    def __init__(self, scene: QGraphicsScene) -> None:
        self._line, self._corners, self._held = (QGraphicsPathItem() for _ in range(3))
        for depth, item in enumerate((self._line, self._corners, self._held)):
            item.setZValue(_Z + depth)
            item.setBrush(NO_BRUSH)
            scene.addItem(item)

    def dress(self, palette: Palette, ratio: float) -> None:
        self._line.setPen(pen(palette.ink, 1.8 * ratio, (5.0, 3.0)))
        for item in (self._corners, self._held):
            item.setPen(pen(palette.ink, 1.6 * ratio))
        self._corners.setBrush(brush(palette.floor))
        self._held.setBrush(brush(palette.ink))

    def show(self, corners: list[XY], held: int | None, dots: float, *, closed: bool) -> None:
        """Corners (mm) of an outline; ``dots`` pixels per mm."""
        path = QPainterPath()
        if len(corners) > 1:
            path.addPolygon(QPolygonF([QPointF(*place) for place in corners]))
            if closed:
                path.closeSubpath()
        self._line.setPath(path)
        half = _CORNER / dots
        plain, filled = QPainterPath(), QPainterPath()
        for at, (x, y) in enumerate(corners):
            square = QRectF(x - half, y - half, 2 * half, 2 * half)
            (filled if at == held else plain).addRect(square)
        self._corners.setPath(plain)
        self._held.setPath(filled)


def shape_tags(view: FloorView, area: Box) -> list[TagSpec]:
    """How to go on while a shape is drawn; the name, place and room of the one that is held."""
    hand, units = view.shapes, view.document.units
    middle = (area.left + 0.5 * area.width, area.top + 10.0)
    if hand.drawing is not None:
        out = [TagSpec("drawing", *hand.guidance(), middle, 14.0, "notice")]
        if hand.aim is not None:
            words = wording.place_words(
                (abs(hand.aim[0]), view.face.way * hand.aim[1]), units, view.face
            )
            at = view.canvas.to_px(*hand.aim)
            out.append(TagSpec("aim", f"Corner {len(hand.drawing) + 1}", words, at, 12.0))
        return out
    held, shape = hand.held, hand.held_shape()
    if held is None or shape is None:
        return []
    corners = hand.held_corners()
    title = floor_words.capital(shape.name) or "Shape"
    if held.corner is None:
        at = (float(np.mean([x for x, _ in corners])), max(y for _, y in corners))
    else:
        at = corners[held.corner]
        title += f", corner {held.corner + 1} of {len(corners)}"
        title += f": {hand.corner_words(held.corner)}"
    return [TagSpec("held shape", title, hand.room_words, view.canvas.to_px(*at), 10.0)]
