"""No-go shapes on the floor: hatched outlines nothing may enter."""

from __future__ import annotations

import numpy as np
from PySide6.QtCore import Qt
from PySide6.QtGui import QBrush, QColor
from PySide6.QtWidgets import QGraphicsPathItem, QGraphicsScene

from app.floor.paths import path_of, pen
from app.palette import Palette
from geometry.faces import Face
from geometry.layout import SIDES, NoGo
from geometry.standing import sign_of

NO_GO_Z = 7.0


class NoGoItems:
    """All shapes in one item, remade when they change."""

    def __init__(self, scene: QGraphicsScene, face: Face) -> None:
        self._face = face
        self._item = QGraphicsPathItem()
        self._item.setZValue(NO_GO_Z)
        scene.addItem(self._item)
        self._shown: tuple[NoGo, ...] = ()
        self.places: list[tuple[str, float, float]] = []

    def dress(self, palette: Palette, ratio: float) -> None:
        self._item.setPen(pen(palette.no_go, 1.6 * ratio))
        self._item.setBrush(QBrush(QColor(palette.no_go), Qt.BrushStyle.BDiagPattern))

    def show(self, shapes: tuple[NoGo, ...]) -> None:
        if shapes == self._shown:
            return
        self._shown = shapes
        self.places = []
        outlines = []
        for shape in shapes:
            if shape.view != self._face.name or len(shape.outline) < 3:
                continue
            for side in SIDES if shape.side is None else (shape.side,):
                outline = np.array(shape.outline, dtype=float) * (
                    sign_of(side), self._face.way
                )
                outlines.append(outline)
                middle = 0.5 * (outline.min(axis=0) + outline.max(axis=0))
                self.places.append((shape.name, float(middle[0]), float(outline[:, 1].max())))
        self._item.setPath(path_of(outlines, True))
