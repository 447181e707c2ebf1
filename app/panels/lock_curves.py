"""The curves under the floor from above: the steering from lock to lock, with a rack cursor."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
import pyqtgraph as pg
from PySide6.QtCore import QEvent, QPointF, Qt
from PySide6.QtGui import QColor, QFont, QFontMetrics, QPainterPath, QPen, QResizeEvent, QShowEvent
from PySide6.QtWidgets import (
    QGraphicsPathItem,
    QHBoxLayout,
    QLabel,
    QSizePolicy,
    QVBoxLayout,
    QWidget,
)

from app import theme
from app.document import Document
from app.panels.curves import _pen, _Plot, label_step, nice_range
from app.plan_watch import PlanWatch
from geometry.layout import MM_PER_INCH
from geometry.linkage import Array
from geometry.plan_view import PlanView

_SMALL = float(np.radians(1.0))
"""Below this inner angle, rad, a percentage is a quotient of next to nothings."""

Lines = tuple[Array, Array | None, Array | None]
"""A strong line, a dotted one for the other wheel, and a dashed one for the ideal."""


def percent_lines(plan: PlanView) -> Lines:
    """Percent Ackermann over the rack, without the quotients of next to nothings."""
    if plan.percent is None:
        return np.full(plan.rack.shape, np.nan), None, None
    percent = np.where(np.abs(plan.inner) < _SMALL, np.nan, plan.percent)
    percent[plan.ahead] = plan.percent[plan.ahead]
    return percent, None, None


def angle_lines(plan: PlanView) -> Lines:
    """Both wheels' turned angles, degrees to the left, and the ideal outer wheel's."""
    ideal = None if plan.ideal_outer is None else np.degrees(plan.turn * plan.ideal_outer)
    return np.degrees(plan.left.turned), np.degrees(plan.right.turned), ideal


def scrub_lines(plan: PlanView) -> Lines:
    """How far each tire runs off its heading, degrees."""
    if plan.slip is None:
        return np.full(plan.rack.shape, np.nan), None, None
    return np.degrees(plan.slip["left"]), np.degrees(plan.slip["right"]), None


def camber_lines(plan: PlanView) -> Lines:
    return np.degrees(plan.left.camber), np.degrees(plan.right.camber), None


def caster_lines(plan: PlanView) -> Lines:
    return np.degrees(plan.left.caster), np.degrees(plan.right.caster), None


@dataclass(frozen=True)
class LockCurve:
    """One plot: what it is called, how its lines are read, and the least range it shows."""

    key: str
    title: str
    read: Callable[[PlanView], Lines]
    color: str
    least: float
    tip: str


CURVES = (
    LockCurve("percent", "Ackermann, %", percent_lines, "#D55E00", 20.0,
              "100: both wheels roll without slip; 0: both turn alike; below 0: reverse."),
    LockCurve("angles", "Wheel angles, °", angle_lines, "#0072B2", 4.0,
              "Solid: left wheel; dotted: right wheel; dashed gray: the outer wheel's ideal."),
    LockCurve("scrub", "Tire scrub, °", scrub_lines, "#8B3A6F", 1.0,
              "How far a tire is turned to the left of the way it rolls. Solid: left wheel."),
    LockCurve("camber", "Camber, °", camber_lines, "#009E73", 1.0,
              "Solid: left wheel; dotted: right wheel."),
    LockCurve("caster", "Caster, °", caster_lines, "#3E4C59", 1.0,
              "Solid: left wheel; dotted: right wheel."),
)


class LockPlot(QWidget):
    """One curve from lock to lock with a cursor on the rack."""

    def __init__(self, curve: LockCurve, document: Document) -> None:
        super().__init__()
        self.curve = curve
        self._document = document
        self._range = (-1.0, 1.0)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        self.title = QLabel(curve.title)
        self.title.setAlignment(Qt.AlignmentFlag.AlignCenter)
        self.plot = _Plot()
        column.addWidget(self.title)
        column.addWidget(self.plot, 1)
        self.plot.setAccessibleName(f"{curve.title} from lock to lock")
        self.plot.setToolTip(f"{curve.tip} Click or drag to move the rack.")
        for name in ("left", "bottom"):
            axis = self.plot.getPlotItem().getAxis(name)
            axis.setStyle(tickLength=-3)
            axis.setPen(QPen(QColor(theme.LINE)))
            axis.setTextPen(QPen(QColor(theme.QUIET)))
        self._grid = self._path("#E6E2D8", 1.0)
        self._ideal = self._path("#8C8A84", 1.0, Qt.PenStyle.DashLine)
        self._other = self._path(curve.color, 1.0, Qt.PenStyle.DotLine)
        self._line = self._path(curve.color, 1.5)
        self._cursor = self._path(theme.INK, 1.0)
        self.plot.picked.connect(self._set_rack)
        self._plan: PlanView | None = None
        self._size()

    def _path(
        self, color: str, width: float, style: Qt.PenStyle = Qt.PenStyle.SolidLine
    ) -> QGraphicsPathItem:
        item = QGraphicsPathItem()
        item.setPen(_pen(color, width, style))
        self.plot.addItem(item)
        return item

    @property
    def _scale(self) -> float:
        return MM_PER_INCH if self._document.units == "in" else 1.0

    def _set_rack(self, place: float) -> None:
        plan = self._plan
        if plan is not None:
            low, high = float(plan.rack[0]), float(plan.rack[-1])
            self._document.set_rack(min(max(place * self._scale, low), high))

    def _size(self) -> None:
        small = QFont(self.font())
        small.setPointSizeF(0.85 * small.pointSizeF())
        letters = QFontMetrics(small)
        box = self.plot.getPlotItem()
        for name in ("left", "bottom"):
            box.getAxis(name).setStyle(tickFont=small)
        box.setContentsMargins(2, letters.height() // 2, 8, 2)
        box.getAxis("left").setWidth(letters.horizontalAdvance("−000.0") + 8)
        box.getAxis("bottom").setHeight(letters.height() + 6)

    def changeEvent(self, event: QEvent) -> None:
        super().changeEvent(event)
        if event.type() == QEvent.Type.FontChange and hasattr(self, "_plan"):
            self._size()
            self.draw(self._plan)

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self.draw(self._plan)

    def draw(self, plan: PlanView | None) -> None:
        """Draw a car's steering; nothing while none is known."""
        self._plan = plan
        if plan is None:
            for item in (self._line, self._other, self._ideal, self._cursor):
                item.setPath(QPainterPath())
            # Numbers along the edges would be of nothing.
            for edge in ("left", "bottom"):
                self.plot.getPlotItem().getAxis(edge).setTicks([[]])
            return
        x = plan.rack / self._scale
        lines = self.curve.read(plan)
        for item, line in zip((self._line, self._other, self._ideal), lines, strict=True):
            item.setVisible(line is not None)
            if line is not None:
                item.setPath(pg.arrayToQPath(x, line, connect="finite"))
        values = np.concatenate([line for line in lines if line is not None])
        values = values[np.isfinite(values)]
        low, high = (float(values.min()), float(values.max())) if values.size else (-1.0, 1.0)
        short = 0.5 * max(self.curve.least - (high - low), 0.0)
        self._range = nice_range(low - short, high + short)
        self._frame(float(x[0]), float(x[-1]))
        self.point()

    def _frame(self, left: float, right: float) -> None:
        if not right > left:
            left, right = left - 1.0, right + 1.0
        low, high = self._range
        self.plot.setRange(xRange=(left, right), yRange=(low, high), padding=0.0)
        letters = self.fontMetrics()
        y_step = label_step(low, high, min(8, max(2, self.height() // (3 * letters.height()))))
        wide = max(3, (self.width() - 50) // (2 * letters.horizontalAdvance("+00")))
        x_step = label_step(left, right, min(12, wide))
        xs = np.arange(math.ceil(left / x_step), math.floor(right / x_step) + 1) * x_step
        ys = np.arange(
            math.ceil(low / y_step - 1e-9), math.floor(high / y_step + 1e-9) + 1
        ) * y_step
        decimals = max(0, -math.floor(math.log10(y_step) + 1e-9))
        box = self.plot.getPlotItem()
        box.getAxis("bottom").setTicks([[(float(v), f"{v:+g}" if v else "0") for v in xs]])
        box.getAxis("left").setTicks([[(float(v), f"{v + 0.0:.{decimals}f}") for v in ys]])
        grid = QPainterPath()
        for v in xs:
            grid.moveTo(float(v), low)
            grid.lineTo(float(v), high)
        for v in ys:
            grid.moveTo(left, float(v))
            grid.lineTo(right, float(v))
        self._grid.setPath(grid)

    def point(self) -> None:
        """Put the cursor where the rack stands."""
        at = self._document.rack / self._scale
        path = QPainterPath(QPointF(at, self._range[0]))
        path.lineTo(at, self._range[1])
        self._cursor.setPath(path)


class LockCurves(QWidget):
    """A row of the steering's curves, as many as have room to be read."""

    def __init__(self, document: Document, watch: PlanWatch) -> None:
        super().__init__()
        self._document, self._watch = document, watch
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(6)
        self.plots = [LockPlot(curve, document) for curve in CURVES]
        for plot in self.plots:
            row.addWidget(plot)
        self.setMinimumHeight(130)
        self.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Preferred)
        watch.changed.connect(self.redraw)
        document.solved.connect(self._point)
        document.edited.connect(self.redraw)

    def redraw(self) -> None:
        """Draw the figures that stand; older ones stay until newer ones come."""
        figures = self._watch.figures
        if self.isVisible():
            for plot in self.plots:
                plot.draw(None if figures is None else figures.plan)

    def _point(self) -> None:
        if self.isVisible() and self._watch.figures is not None:
            for plot in self.plots:
                plot.point()

    def showEvent(self, event: QShowEvent) -> None:
        super().showEvent(event)
        self.redraw()

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        needed = self.fontMetrics().horizontalAdvance("Wheel angles, °  ") + 16
        fitting = max(1, (self.width() + 6) // (max(needed, 130) + 6))
        for number, plot in enumerate(self.plots):
            plot.setVisible(number < fitting)
