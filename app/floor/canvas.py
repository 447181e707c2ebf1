"""The floor itself: concrete, chalk lines, zoom and pan. Knows nothing of cars."""

from __future__ import annotations

from functools import lru_cache

import numpy as np
from PySide6.QtCore import QPointF, QRect, QRectF, Qt, Signal
from PySide6.QtGui import (
    QImage,
    QPainter,
    QPixmap,
    QPolygonF,
    QResizeEvent,
    QTransform,
)
from PySide6.QtWidgets import QFrame, QGraphicsScene, QGraphicsView, QWidget

from app.floor.paths import pen
from app.palette import CHALK_DASH, LIGHT, Palette, mixed
from geometry.layout import UnitName

FINEST, COARSEST = 60.0, 0.02
"""Zoom limits, pixels per mm."""

_WORLD = 50_000.0
_DOTS = {"in": (25.4, 304.8), "mm": (25.0, 250.0)}


@lru_cache(maxsize=4)
def concrete(color: str, grain: int) -> QPixmap:
    """A tile of concrete: fine grain over soft blotches, the same every time."""
    size = 256
    random = np.random.default_rng(7)
    fine = random.normal(0.0, 0.55 * grain, (size, size))
    waves = np.fft.fft2(random.normal(0.0, 1.0, (size, size)))
    far = np.hypot(np.fft.fftfreq(size)[:, None], np.fft.fftfreq(size)[None, :]) * size
    soft = np.fft.ifft2(waves * np.exp(-((far / 7.0) ** 2))).real
    soft *= 0.8 * grain / max(float(np.abs(soft).max()), 1e-9)
    base = np.array([int(color[i : i + 2], 16) for i in (1, 3, 5)], dtype=float)
    pixels = np.clip(base + (fine + soft)[:, :, None], 0, 255).astype(np.uint8)
    pixels = np.ascontiguousarray(pixels)
    image = QImage(pixels.data, size, size, 3 * size, QImage.Format.Format_RGB888)
    return QPixmap.fromImage(image.copy())


@lru_cache(maxsize=1)
def _powder() -> tuple[np.ndarray, np.ndarray]:
    """Specks of chalk beside a snapped line: places along it, mm, and beside it, pixels."""
    random = np.random.default_rng(11)
    return random.uniform(-3000.0, 3000.0, 9000), random.normal(0.0, 2.6, 9000)


class Canvas(QGraphicsView):
    """A view in mm with y up, zoomed at the pointer and panned by hand."""

    moved = Signal()
    """Zoom or place changed."""

    def __init__(self, scene: QGraphicsScene, parent: QWidget | None = None) -> None:
        super().__init__(scene, parent)
        self._held_scene = scene
        scene.setSceneRect(-_WORLD, -_WORLD, 2 * _WORLD, 2 * _WORLD)
        scene.setItemIndexMethod(QGraphicsScene.ItemIndexMethod.NoIndex)
        self.look = LIGHT
        self.unit: UnitName = "in"
        self.fitted = True
        self._content = QRectF(-900, -100, 1800, 900)
        self.low_share = 0.35
        """How much of the height that is to spare in a fitted view goes below the content."""
        self.setFrameShape(QFrame.Shape.NoFrame)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setVerticalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setTransformationAnchor(QGraphicsView.ViewportAnchor.NoAnchor)
        self.setResizeAnchor(QGraphicsView.ViewportAnchor.NoAnchor)
        self.setRenderHint(QPainter.RenderHint.Antialiasing)
        self.setViewportUpdateMode(QGraphicsView.ViewportUpdateMode.BoundingRectViewportUpdate)
        self.setCacheMode(QGraphicsView.CacheModeFlag.CacheBackground)
        self.setOptimizationFlag(QGraphicsView.OptimizationFlag.DontSavePainterState)
        self.viewport().setMouseTracking(True)
        # The concrete covers it all, so that nothing needs to be painted beneath.
        self.viewport().setAttribute(Qt.WidgetAttribute.WA_OpaquePaintEvent)

    # --- place and zoom -------------------------------------------------------------

    @property
    def dots(self) -> float:
        """Pixels per mm."""
        return float(self.transform().m11())

    def to_px(self, x: float, y: float) -> tuple[float, float]:
        """A place on the floor, mm, in the viewport's pixels."""
        point = self.viewportTransform().map(QPointF(x, y))
        return point.x(), point.y()

    def to_mm(self, px: QPointF) -> tuple[float, float]:
        """A viewport position as a place on the floor, mm."""
        inverse, _ = self.viewportTransform().inverted()
        point = inverse.map(px)
        return point.x(), point.y()

    def from_px(self, px: QPointF) -> QPointF:
        inverse, _ = self.viewportTransform().inverted()
        return inverse.map(px)

    def in_view(self, margin: float = 0.0) -> tuple[float, float, float, float]:
        """What is in view, mm (left, bottom, right, top), and ``margin`` pixels round it."""
        left, top = self.to_mm(QPointF(-margin, -margin))
        port = self.viewport().rect()
        right, bottom = self.to_mm(QPointF(port.width() + margin, port.height() + margin))
        return left, bottom, right, top

    def _set(self, dots: float, mm: tuple[float, float], px: QPointF) -> None:
        """Zoom so that a place on the floor stands at a pixel."""
        dots = min(max(dots, COARSEST), FINEST)
        self.setTransform(QTransform(dots, 0.0, 0.0, -dots, 0.0, 0.0))
        port = self.viewport().rect()
        x = mm[0] + (0.5 * port.width() - px.x()) / dots
        y = mm[1] - (0.5 * port.height() - px.y()) / dots
        self.centerOn(x, y)
        self.resetCachedContent()
        self.moved.emit()

    def zoom(self, factor: float, at: QPointF | None = None) -> None:
        """Zoom by a factor, the place under ``at`` (the middle if None) staying put."""
        px = QPointF(self.viewport().rect().center()) if at is None else at
        self.fitted = False
        self._set(self.dots * factor, self.to_mm(px), px)

    def pan(self, dx: float, dy: float) -> None:
        """Move the floor by pixels."""
        middle = QPointF(self.viewport().rect().center())
        self.fitted = False
        self._set(self.dots, self.to_mm(middle), middle + QPointF(dx, dy))

    def set_content(self, content: QRectF) -> None:
        """What ``fit`` shows, mm (y up, so the rectangle's top is its lowest y)."""
        self._content = content

    def fit(self) -> None:
        """Show the whole car."""
        port, box = self.viewport().rect(), self._content
        if port.width() < 10 or port.height() < 10:
            return
        dots = min(port.width() / box.width(), port.height() / box.height())
        spare = port.height() - dots * box.height()
        low = port.height() - self.low_share * spare
        self._set(dots, (box.center().x(), box.top()), QPointF(0.5 * port.width(), low))
        self.fitted = True

    def reveal(self, x: float, y: float, margin: float = 40.0) -> None:
        """Pan just far enough to bring a place into view."""
        px, py = self.to_px(x, y)
        port = self.viewport().rect()
        dx = max(margin - px, 0.0) + min(port.width() - margin - px, 0.0)
        dy = max(margin - py, 0.0) + min(port.height() - margin - py, 0.0)
        if dx or dy:
            self.pan(dx, dy)

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        if self.fitted:
            self.fit()
        else:
            self.resetCachedContent()
            self.moved.emit()

    # --- background ---------------------------------------------------------------------

    def dress(self, palette: Palette, unit: UnitName) -> None:
        if palette is not self.look or unit != self.unit:
            self.look, self.unit = palette, unit
            self.resetCachedContent()
            self.viewport().update()

    def drawBackground(self, painter: QPainter, rect: QRectF | QRect) -> None:
        port = painter.worldTransform().mapRect(QRectF(rect)).toAlignedRect()
        port = port.adjusted(-1, -1, 1, 1)
        origin = painter.worldTransform().map(QPointF(0.0, 0.0))
        dots = self.dots
        painter.save()
        painter.resetTransform()
        tile = concrete(self.look.floor, self.look.grain)
        shift = QPointF((port.left() - origin.x()) % 256, (port.top() - origin.y()) % 256)
        painter.drawTiledPixmap(QRectF(port), tile, shift)
        self._paint_dots(painter, port, origin, dots)
        self._paint_chalk(painter, port, origin, dots)
        painter.restore()

    def _paint_dots(self, painter: QPainter, port: QRect, origin: QPointF, dots: float) -> None:
        fine, strong = _DOTS[self.unit]
        for step, color, size in ((fine, self.look.dot, 1.8), (strong, self.look.dot_strong, 3.6)):
            if step * dots < 7.0:
                continue
            painter.setPen(pen(color, size))
            xs = _steps(port.left(), port.right(), origin.x(), step * dots)
            ys = _steps(port.top(), port.bottom(), origin.y(), step * dots)
            painter.drawPoints(QPolygonF([QPointF(x, y) for x in xs for y in ys]))

    def _paint_chalk(self, painter: QPainter, port: QRect, origin: QPointF, dots: float) -> None:
        """The centerline and the floor line as chalk lines: core, powder and haze."""
        look = self.look
        x, y = round(origin.x()) + 0.5, round(origin.y()) + 0.5
        lines = (
            (QPointF(x, port.top()), QPointF(x, port.bottom())),
            (QPointF(port.left(), y), QPointF(port.right(), y)),
        )
        haze = (
            (8.0, mixed(look.floor, look.chalk, 0.22), ()),
            (4.6, mixed(look.floor, look.chalk, 0.62), ()),
            (1.5, look.chalk_core, CHALK_DASH),
        )
        for width, color, dash in haze:
            painter.setPen(pen(color, width, dash))
            for line in lines:
                painter.drawLine(*line)
        along, beside = _powder()
        painter.setPen(pen(mixed(look.floor, look.chalk, 0.75), 1.1))
        points = []
        for upright, at, start, low, high in (
            (True, along * dots + origin.y(), x, port.top(), port.bottom()),
            (False, along * dots + origin.x(), y, port.left(), port.right()),
        ):
            inside = (at > low) & (at < high)
            pairs = zip(at[inside].tolist(), (start + beside[inside]).tolist(), strict=True)
            points += [QPointF(b, a) if upright else QPointF(a, b) for a, b in pairs]
        painter.drawPoints(QPolygonF(points[:4000]))


def _steps(low: float, high: float, origin: float, step: float) -> list[float]:
    first = int(np.ceil((low - origin) / step))
    last = int(np.floor((high - origin) / step))
    return [origin + k * step for k in range(first, last + 1)]
