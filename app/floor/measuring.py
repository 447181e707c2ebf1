"""The measuring tape stretched between two places on the floor."""

from __future__ import annotations

from PySide6.QtCore import QPointF
from PySide6.QtGui import QFont, QPainterPath
from PySide6.QtWidgets import QGraphicsItem, QGraphicsLineItem, QGraphicsPathItem, QGraphicsScene

from app.floor.paths import brush, pen
from app.palette import Palette
from geometry.standing import XY

_Z = 70.0


def _hook() -> QPainterPath:
    path = QPainterPath(QPointF(-7.0, 0.0))
    path.lineTo(7.0, 0.0)
    path.moveTo(0.0, -7.0)
    path.lineTo(0.0, 7.0)
    path.addEllipse(QPointF(0.0, 0.0), 3.0, 3.0)
    return path


class MeasuringTape:
    """A yellow band with dark edges and a hook at each end."""

    def __init__(self, scene: QGraphicsScene) -> None:
        self.ends: tuple[XY, ...] = ()
        self._edge, self._band = QGraphicsLineItem(), QGraphicsLineItem()
        self._hooks = [QGraphicsPathItem(_hook()) for _ in range(2)]
        for depth, item in enumerate((self._edge, self._band, *self._hooks)):
            item.setZValue(_Z + depth)
            item.setVisible(False)
            scene.addItem(item)
        for hook in self._hooks:
            hook.setFlag(QGraphicsItem.GraphicsItemFlag.ItemIgnoresTransformations)

    def dress(self, palette: Palette, font: QFont, ratio: float) -> None:
        self._edge.setPen(pen(palette.tape_edge, 6.0 * ratio))
        self._band.setPen(pen(palette.tape, 4.0 * ratio))
        for hook in self._hooks:
            hook.setPen(pen(palette.ink, 1.6, cosmetic=False))
            hook.setBrush(brush(palette.tape))

    def stretch(self, start: XY, end: XY) -> None:
        self.ends = (start, end)
        for line in (self._edge, self._band):
            line.setLine(*start, *end)
        for hook, place in zip(self._hooks, self.ends, strict=True):
            hook.setPos(*place)
        for item in (self._edge, self._band, *self._hooks):
            item.setVisible(True)

    def roll_up(self) -> None:
        self.ends = ()
        for item in (self._edge, self._band, *self._hooks):
            item.setVisible(False)
