"""A toe curve as a small picture: as it stands dashed, after a move solid, tolerance tinted."""

from __future__ import annotations

import numpy as np
from PySide6.QtCore import QPointF, QRectF, QSize, Qt
from PySide6.QtGui import QColor, QPainter, QPainterPath, QPaintEvent, QPen, QPixmap
from PySide6.QtWidgets import QWidget

from app import theme
from app.panels.curves import BAND_COLOR, COLORS, FOUND_COLOR, label_step, nice_range
from geometry.linkage import Array


def _path(travel: Array, toe: Array, box: QRectF, reach: tuple[float, float]) -> QPainterPath:
    """The curve in a box; a gap where there is no figure."""
    path, pen_down = QPainterPath(), False
    low, high = reach
    across = box.width() / float(travel[-1] - travel[0])
    for x, y in zip(travel, toe, strict=True):
        if not np.isfinite(y):
            pen_down = False
            continue
        at = QPointF(
            box.left() + float(x - travel[0]) * across,
            box.bottom() - (float(y) - low) / (high - low) * box.height(),
        )
        if pen_down:
            path.lineTo(at)
        else:
            path.moveTo(at)
        pen_down = True
    return path


def draw_curves(
    painter: QPainter, box: QRectF, travel: Array, before: Array, after: Array | None,
    tolerance: float, reach: tuple[float, float],
) -> None:
    """Both curves and the tolerance band in a box. All toe in one unit; ``reach`` low, high."""
    low, high = reach
    middle = after if after is not None else before
    rest = float(middle[len(middle) // 2])
    painter.setClipRect(box)
    if np.isfinite(rest):
        scale = box.height() / (high - low)
        top = box.bottom() - (rest + tolerance / 2.0 - low) * scale
        painter.fillRect(
            QRectF(box.left(), top, box.width(), tolerance * scale), QColor(BAND_COLOR)
        )
    pen = QPen(QColor(FOUND_COLOR), 1.2, Qt.PenStyle.DashLine)
    painter.setPen(pen)
    painter.drawPath(_path(travel, before, box, reach))
    if after is not None:
        painter.setPen(QPen(QColor(COLORS["toe"]), 2.0))
        painter.drawPath(_path(travel, after, box, reach))
    painter.setClipping(False)


def reach_of(*curves: Array) -> tuple[float, float]:
    """Lowest and highest of all curves, with some air and never nothing."""
    values = np.concatenate(curves)
    values = values[np.isfinite(values)]
    if not values.size:
        return -1.0, 1.0
    low, high = float(values.min()), float(values.max())
    air = max(0.06 * (high - low), 1e-6)
    return low - air, high + air


def small_picture(
    size: QSize, ratio: float, travel: Array, before: Array, after: Array, tolerance: float
) -> QPixmap:
    """The curves as a picture for a table cell, for a screen of this pixel ratio."""
    pixmap = QPixmap(size * ratio)
    pixmap.setDevicePixelRatio(ratio)
    pixmap.fill(QColor(theme.CARD))
    painter = QPainter(pixmap)
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    box = QRectF(1.0, 1.0, size.width() - 2.0, size.height() - 2.0)
    draw_curves(painter, box, travel, before, after, tolerance, reach_of(before, after))
    painter.end()
    return pixmap


class ToePicture(QWidget):
    """The curves large, with figures on both axes."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setMinimumHeight(140)
        self.setAccessibleName("Toe through the travel, as it stands and after the move")
        self._curves: tuple[Array, Array, Array | None, float] | None = None
        self._units = ""

    def show_curves(
        self, travel: Array, before: Array, after: Array | None, tolerance: float, units: str
    ) -> None:
        """Travel (n,) and toe (n,) in the unit that is shown."""
        self._curves, self._units = (travel, before, after, tolerance), units
        self.update()

    def clear(self) -> None:
        self._curves = None
        self.update()

    def paintEvent(self, event: QPaintEvent) -> None:
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        painter.fillRect(self.rect(), QColor(theme.CARD))
        if self._curves is None:
            return
        travel, before, after, tolerance = self._curves
        letters = self.fontMetrics()
        low, high = nice_range(*reach_of(before, *([] if after is None else [after])))
        line = letters.height()
        left = letters.horizontalAdvance("−0.000 ") + 6
        right = 6 + letters.horizontalAdvance("+00") / 2
        box = QRectF(left, 1.4 * line, self.width() - left - right, self.height() - 2.9 * line)
        painter.setPen(QColor(theme.QUIET))
        painter.drawText(QPointF(6, line), f"Toe, {self._units}")
        self._draw_axes(painter, box, (float(travel[0]), float(travel[-1])), (low, high))
        draw_curves(painter, box, travel, before, after, tolerance, (low, high))
        self._draw_legend(painter, box, after is not None)

    def _draw_axes(
        self, painter: QPainter, box: QRectF, across: tuple[float, float],
        reach: tuple[float, float],
    ) -> None:
        letters = self.fontMetrics()
        low, high = reach
        step = label_step(low, high, max(3, int(box.height() / (1.6 * letters.height()))))
        decimals = max(0, -int(np.floor(np.log10(step) + 1e-9)))
        for value in np.arange(np.ceil(low / step - 1e-9), np.floor(high / step + 1e-9) + 1) * step:
            y = box.bottom() - (float(value) - low) / (high - low) * box.height()
            painter.setPen(QColor("#E6E2D8"))
            painter.drawLine(QPointF(box.left(), y), QPointF(box.right(), y))
            painter.setPen(QColor(theme.QUIET))
            text = f"{value + 0.0:.{decimals}f}"
            at = box.left() - letters.horizontalAdvance(text) - 5
            painter.drawText(QPointF(at, y + 0.35 * letters.height()), text)
        step = label_step(*across, 7)
        for value in np.arange(np.ceil(across[0] / step), np.floor(across[1] / step) + 1) * step:
            x = box.left() + (float(value) - across[0]) / (across[1] - across[0]) * box.width()
            painter.setPen(QColor("#E6E2D8"))
            painter.drawLine(QPointF(x, box.top()), QPointF(x, box.bottom()))
            painter.setPen(QColor(theme.QUIET))
            text = f"{value:+g}" if value else "0"
            painter.drawText(
                QPointF(x - letters.horizontalAdvance(text) / 2, box.bottom() + letters.height()),
                text,
            )

    def _draw_legend(self, painter: QPainter, box: QRectF, both: bool) -> None:
        """Which line is which, at the right above the curves."""
        letters = self.fontMetrics()
        x = box.right()
        words = [("as it stands", FOUND_COLOR, Qt.PenStyle.DashLine)]
        if both:
            words.insert(0, ("after the move", COLORS["toe"], Qt.PenStyle.SolidLine))
        for text, color, style in words:
            x -= letters.horizontalAdvance(text)
            painter.setPen(QColor(theme.INK))
            painter.drawText(QPointF(x, letters.height()), text)
            painter.setPen(QPen(QColor(color), 2.0, style))
            y = 0.65 * letters.height()
            painter.drawLine(QPointF(x - 26, y), QPointF(x - 6, y))
            x -= 44
