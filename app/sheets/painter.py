"""Draws a neutral drawing with a QPainter: the one painter of print, preview, PDF and PNG."""

from __future__ import annotations

import math
from functools import lru_cache

from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import (
    QBrush,
    QColor,
    QFont,
    QFontMetricsF,
    QPainter,
    QPainterPath,
    QPen,
    QPolygonF,
    QTransform,
)

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
from geometry.lettering import FAMILIES, FontRole
from geometry.pages import Page

# Text is set at this many pixels and scaled down to its millimeters, since fonts come in
# whole pixels; large enough that hinting and rounding leave the advances alone.
_FONT_PIXELS = 200


def to_device(area: Bounds, dots_per_mm: float) -> QTransform:
    """From mm with y up to device pixels with y down, the area's top left at the origin."""
    return QTransform(
        dots_per_mm,
        0.0,
        0.0,
        -dots_per_mm,
        -area.left * dots_per_mm,
        area.top * dots_per_mm,
    )


def paint_page(painter: QPainter, page: Page, device: QTransform) -> None:
    """Draw all that stands on a page; ``device`` maps page mm to device pixels."""
    for placed in page.placed:
        painter.save()
        if placed.clip is not None:
            painter.setWorldTransform(device)
            painter.setClipRect(_rect(placed.clip), Qt.ClipOperation.IntersectClip)
        shift = QTransform.fromTranslate(*placed.at)
        paint_drawing(painter, placed.drawing, shift * device)
        painter.restore()


def paint_drawing(painter: QPainter, drawing: Drawing, device: QTransform) -> None:
    """Draw every item; ``device`` maps drawing mm (y up) to device pixels."""
    painter.save()
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    painter.setRenderHint(QPainter.RenderHint.TextAntialiasing)
    painter.setWorldTransform(device)
    for item in drawing:
        _paint(painter, item, device)
    painter.restore()


def _paint(painter: QPainter, item: Item, device: QTransform) -> None:
    if isinstance(item, Text):
        _paint_text(painter, item, device)
        return
    painter.setPen(_pen(item.style))
    painter.setBrush(_brush(item.style))
    match item:
        case Line():
            painter.drawLine(QPointF(*item.start), QPointF(*item.end))
        case Polyline(closed=True):
            painter.drawPolygon(_polygon(item.points))
        case Polyline():
            if item.style.fill is not None:
                painter.setPen(Qt.PenStyle.NoPen)
                painter.drawPolygon(_polygon(item.points))
                painter.setPen(_pen(item.style))
            painter.drawPolyline(_polygon(item.points))
        case Polygon():
            path = QPainterPath()
            path.setFillRule(Qt.FillRule.OddEvenFill)
            for ring in item.rings:
                path.addPolygon(_polygon(ring))
                path.closeSubpath()
            painter.drawPath(path)
        case Circle():
            painter.drawEllipse(QPointF(*item.center), item.radius, item.radius)
        case Arc():
            painter.setBrush(Qt.BrushStyle.NoBrush)
            painter.drawPath(_arc_path(item))


def _arc_path(arc: Arc) -> QPainterPath:
    """The arc as a path. Qt counts angles counterclockwise with y down: clockwise here."""
    box = _rect(Bounds(*arc.center, *arc.center).padded(arc.radius))
    start, sweep = -math.degrees(arc.start), -math.degrees(arc.sweep)
    path = QPainterPath()
    path.arcMoveTo(box, start)
    path.arcTo(box, start, sweep)
    return path


def _paint_text(painter: QPainter, item: Text, device: QTransform) -> None:
    if item.style.stroke is None or not item.text.strip():
        return
    font, capital = _font(item.family, item.bold)
    scale = item.height / capital
    advance = QFontMetricsF(font).horizontalAdvance(item.text)
    left = -advance * {"left": 0.0, "center": 0.5, "right": 1.0}[item.h]
    place = QTransform(scale, 0.0, 0.0, -scale, 0.0, 0.0)
    place *= QTransform().rotateRadians(item.angle)
    place *= QTransform.fromTranslate(*item.at)
    painter.setWorldTransform(place * device)
    painter.setFont(font)
    painter.setPen(QColor(item.style.stroke))
    painter.drawText(QPointF(left, item.drop / scale), item.text)
    painter.setWorldTransform(device)


@lru_cache(maxsize=8)
def _font(role: FontRole, bold: bool) -> tuple[QFont, float]:
    """A font of a role at the working size, and the height of its capitals in pixels."""
    font = QFont()
    font.setFamilies(FAMILIES[role][:-1])
    hint = QFont.StyleHint.SansSerif if role == "sans" else QFont.StyleHint.Monospace
    font.setStyleHint(hint)
    font.setHintingPreference(QFont.HintingPreference.PreferNoHinting)
    font.setPixelSize(_FONT_PIXELS)
    font.setBold(bold)
    return font, QFontMetricsF(font).capHeight() or 0.729 * _FONT_PIXELS


def _pen(style: Style) -> QPen:
    if style.stroke is None:
        return QPen(Qt.PenStyle.NoPen)
    pen = QPen(QColor(style.stroke), style.width)
    pen.setJoinStyle(Qt.PenJoinStyle.RoundJoin)
    pen.setCapStyle(Qt.PenCapStyle.RoundCap)
    if style.dash:
        # Qt counts dashes in pen widths; round caps would close short gaps.
        pen.setCapStyle(Qt.PenCapStyle.FlatCap)
        pen.setDashPattern([length / style.width for length in style.dash])
    return pen


def _brush(style: Style) -> QBrush:
    return QBrush() if style.fill is None else QBrush(QColor(style.fill))


def _polygon(points: tuple[Place, ...]) -> QPolygonF:
    return QPolygonF([QPointF(*point) for point in points])


def _rect(box: Bounds) -> QRectF:
    return QRectF(box.left, box.bottom, box.width, box.height)
