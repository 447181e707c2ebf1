"""The kingpin axis drawn small: inclination and scrub radius, caster and trail."""

from __future__ import annotations

import math
from collections.abc import Callable

from PySide6.QtCore import QPointF, QRectF, QSize, Qt
from PySide6.QtGui import QColor, QPainter, QPaintEvent, QPen
from PySide6.QtWidgets import QLabel, QSizePolicy, QVBoxLayout, QWidget

from geometry.kingpin_sketch import KingpinSketch, kingpin_sketches
from geometry.layout import SIDES
from geometry.solution import Solution

_ACROSS, _ABOVE = 1.15, 2.25
"""How far the drawing reaches each way from the contact point, and up, in tire radii."""


class _Drawing(QWidget):
    """One view: the tire, the floor, a plumb line and the kingpin axis."""

    def __init__(self) -> None:
        super().__init__()
        self._sketch: KingpinSketch | None = None
        self._mirror = 1.0
        policy = QSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)
        self.setSizePolicy(policy)

    def sizeHint(self) -> QSize:
        return QSize(120, 8 * self.fontMetrics().height())

    def show_sketch(self, sketch: KingpinSketch, mirror: float) -> None:
        self._sketch, self._mirror = sketch, mirror
        self.update()

    def paintEvent(self, event: QPaintEvent) -> None:
        sketch = self._sketch
        if sketch is None:
            return
        scale = min(self.width() / (2.0 * _ACROSS), self.height() / (_ABOVE + 0.15)) / max(
            sketch.radius, 1.0
        )
        middle, floor = 0.5 * self.width(), self.height() - 0.12 * sketch.radius * scale

        def at(way: float, up: float) -> QPointF:
            return QPointF(middle + self._mirror * way * scale, floor - up * scale)

        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        ink = self.palette().windowText().color()
        faint = QColor(ink)
        faint.setAlpha(110)
        painter.setPen(QPen(faint, 1.5))
        painter.drawLine(QPointF(0.0, floor), QPointF(float(self.width()), floor))
        self._tire(painter, sketch, at, scale)
        top = 2.15 * sketch.radius
        painter.setPen(QPen(faint, 1.0, Qt.PenStyle.DashLine))
        painter.drawLine(at(sketch.foot, 0.0), at(sketch.foot, top))
        painter.setPen(QPen(ink, 2.5))
        painter.drawLine(at(*sketch.axis(0.0)), at(*sketch.axis(top)))
        # From the axis's foot to the tire's middle: the offset that the words give.
        painter.setPen(QPen(ink, 4.0))
        painter.drawLine(at(sketch.foot, 0.0), at(0.0, 0.0))
        painter.setBrush(ink)
        painter.drawEllipse(at(sketch.foot, 0.0), 3.0, 3.0)
        painter.drawLine(at(0.0, 0.0), at(0.0, 0.12 * sketch.radius))

    def _tire(
        self,
        painter: QPainter,
        sketch: KingpinSketch,
        place: Callable[[float, float], QPointF],
        scale: float,
    ) -> None:
        radius = sketch.radius
        if sketch.view == "side":
            painter.drawEllipse(place(0.0, radius), radius * scale, radius * scale)
            return
        painter.save()
        painter.translate(place(0.0, 0.0))
        painter.rotate(math.degrees(sketch.camber) * self._mirror)
        size = radius * scale
        painter.drawRoundedRect(
            QRectF(-0.33 * size, -2.0 * size, 0.66 * size, 2.0 * size), 0.15 * size, 0.15 * size
        )
        painter.restore()


class KingpinCard(QWidget):
    """Both views of each wheel with their figures in words; one wheel while they are linked."""

    def __init__(self) -> None:
        super().__init__()
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 4, 0, 4)
        column.setSpacing(2)
        self._rows: list[tuple[_Drawing, QLabel]] = []
        for _ in range(4):
            drawing, label = _Drawing(), QLabel()
            label.setWordWrap(True)
            policy = QSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Minimum)
            policy.setHeightForWidth(True)
            label.setSizePolicy(policy)
            column.addWidget(drawing)
            column.addWidget(label)
            self._rows.append((drawing, label))

    def show_car(self, solution: Solution) -> None:
        """Draw the car as it stands straight ahead at ride height."""
        layout = solution.layout
        shown: list[tuple[KingpinSketch, float, str]] = []
        for side in SIDES[:1] if layout.linked else SIDES:
            name = "" if layout.linked else f"{side.capitalize()}: "
            for sketch in kingpin_sketches(solution.sides[side]):
                outer = 1.0 if side == "left" else -1.0
                where = "from ahead" if sketch.view == "front" else "from outside"
                words = f"{name}{sketch.words(layout.units)} Seen {where}, straight ahead."
                shown.append((sketch, outer, words))
        for number, (drawing, label) in enumerate(self._rows):
            there = number < len(shown)
            drawing.setVisible(there)
            label.setVisible(there)
            if there:
                sketch, outer, words = shown[number]
                drawing.show_sketch(sketch, outer)
                drawing.setAccessibleName(words)
                if label.text() != words:
                    label.setText(words)

    def texts(self) -> list[str]:
        """What stands under the drawings (for tests)."""
        return [label.text() for _, label in self._rows if not label.isHidden()]
