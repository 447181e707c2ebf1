"""The yellow tapes along two edges of the floor, with a mark where the pointer is."""

from __future__ import annotations

from PySide6.QtCore import QPointF, QRectF, QSize, Qt
from PySide6.QtGui import QColor, QFont, QFontMetricsF, QPainter, QPaintEvent, QPen, QPixmap
from PySide6.QtWidgets import QSizePolicy, QWidget

from app.palette import LIGHT, Palette
from geometry.layout import UnitName
from geometry.tape import marks


class Tape(QWidget):
    """One tape. ``origin`` is the pixel of its zero, ``dots`` its pixels per mm.

    An upright tape's measures, called ``name``, grow up the screen, or down it with ``down``.
    """

    def __init__(
        self, orientation: Qt.Orientation, parent: QWidget | None = None, *,
        name: str = "up", down: bool = False,
    ) -> None:
        super().__init__(parent)
        self._across = orientation == Qt.Orientation.Horizontal
        self._way = 1.0 if self._across or down else -1.0
        self._palette = LIGHT
        self._unit: UnitName = "in"
        self._origin, self._dots = 0.0, 1.0
        self._pointer: float | None = None
        self._picture: QPixmap | None = None
        fixed, free = QSizePolicy.Policy.Fixed, QSizePolicy.Policy.Ignored
        self.setSizePolicy(free if self._across else fixed, fixed if self._across else free)
        self.setAttribute(Qt.WidgetAttribute.WA_OpaquePaintEvent)
        self.setAccessibleName("Tape, over" if self._across else f"Tape, {name}")

    def thickness(self) -> int:
        """How wide the strip must be for its numerals and ticks."""
        metrics = QFontMetricsF(self._font())
        if self._across:
            return round(metrics.capHeight() + 22)
        return round(metrics.horizontalAdvance("−360") + 17)

    def sizeHint(self) -> QSize:
        size = self.thickness()
        return QSize(80, size) if self._across else QSize(size, 80)

    def minimumSizeHint(self) -> QSize:
        size = self.thickness()
        return QSize(20, size) if self._across else QSize(size, 20)

    def _font(self) -> QFont:
        font = QFont(self.font())
        font.setPointSizeF(max(0.86 * font.pointSizeF(), 5.0))
        return font

    def dress(self, palette: Palette) -> None:
        self._palette = palette
        self._forget()

    def lay(self, origin: float, dots: float, unit: UnitName) -> None:
        """Follow the floor's zoom and place."""
        if (origin, dots, unit) != (self._origin, self._dots, self._unit):
            self._origin, self._dots, self._unit = origin, dots, unit
            self._forget()

    def point(self, at: float | None) -> None:
        """Show where the pointer is, in pixels along the tape."""
        if at != self._pointer:
            self._pointer = at
            self.update()

    def _forget(self) -> None:
        self._picture = None
        self.update()

    def resizeEvent(self, event: object) -> None:
        self._forget()

    def changeEvent(self, event: object) -> None:
        self.updateGeometry()
        self._forget()

    def paintEvent(self, event: QPaintEvent) -> None:
        if self._picture is None or self._picture.devicePixelRatio() != self.devicePixelRatioF():
            self._picture = self._drawn()
        painter = QPainter(self)
        painter.drawPixmap(0, 0, self._picture)
        if self._pointer is not None:
            painter.setPen(QPen(QColor(self._palette.tape_red), 1.0))
            at = round(self._pointer) + 0.5
            if self._across:
                painter.drawLine(QPointF(at, 0.0), QPointF(at, self.height()))
            else:
                painter.drawLine(QPointF(0.0, at), QPointF(self.width(), at))

    def _drawn(self) -> QPixmap:
        ratio = self.devicePixelRatioF()
        picture = QPixmap(round(self.width() * ratio), round(self.height() * ratio))
        picture.setDevicePixelRatio(ratio)
        picture.fill(QColor(self._palette.tape))
        painter = QPainter(picture)
        painter.setRenderHint(QPainter.RenderHint.TextAntialiasing)
        self._paint_edge(painter)
        self._paint_marks(painter)
        painter.end()
        return picture

    def _paint_edge(self, painter: QPainter) -> None:
        painter.setPen(QPen(QColor(self._palette.tape_edge), 1.0))
        box = QRectF(0.5, 0.5, self.width() - 1.0, self.height() - 1.0)
        painter.drawRect(box)

    def _paint_marks(self, painter: QPainter) -> None:
        font = self._font()
        painter.setFont(font)
        metrics = QFontMetricsF(font)
        length = self.width() if self._across else self.height()
        low, high = sorted((self._mm(0.0), self._mm(length)))
        room = max(metrics.horizontalAdvance("0000"), 2.4 * metrics.height())
        ink, red = QColor(self._palette.tape_ink), QColor(self._palette.tape_red)
        deep = (self.height() if self._across else self.width()) - 2.0
        tick_deep = deep - (metrics.capHeight() + 6 if self._across else 0)
        for mark in marks(low, high, self._unit, self._dots, room):
            at = round(self._px(mark.at)) + 0.5
            painter.setPen(QPen(red if mark.round else ink, 1.0))
            if self._across:
                size = min(3.0 + tick_deep * mark.size, tick_deep)
                painter.drawLine(QPointF(at, 1.0), QPointF(at, size))
                if mark.numeral:
                    wide = metrics.horizontalAdvance(mark.numeral)
                    if at - 0.5 * wide > 2.0 and at + 0.5 * wide < length - 2.0:
                        painter.drawText(QPointF(at - 0.5 * wide, deep - 2.0), mark.numeral)
            else:
                numeral = f"−{mark.numeral}" if mark.numeral and mark.at < 0.0 else mark.numeral
                self._paint_up(painter, metrics, numeral, mark.size, at, deep)

    def _paint_up(
        self, painter: QPainter, metrics: QFontMetricsF, numeral: str, size: float, at: float,
        deep: float,
    ) -> None:
        """A tick from the floor's edge, its numeral sitting on the tick's line at the left."""
        reach = (3.0 + 9.0 * size) if not numeral else 12.0
        painter.drawLine(QPointF(deep + 1.0, at), QPointF(deep + 1.0 - reach, at))
        if numeral:
            wide = metrics.horizontalAdvance(numeral)
            base = at + 0.5 * metrics.capHeight()
            if metrics.capHeight() + 2.0 < base < self.height() - 3.0:
                painter.drawText(QPointF(deep - 14.0 - wide, base), numeral)

    def _px(self, mm: float) -> float:
        return self._origin + self._way * mm * self._dots

    def _mm(self, px: float) -> float:
        return self._way * (px - self._origin) / self._dots
