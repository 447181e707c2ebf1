"""The curves beside the floor: figures through the whole travel, with a cursor on the travel.

Each plot draws its lines as plain path items and its own grid, which costs a tenth of the
plot library's curve items and grid (see DEVELOPERS.md), and keeps its range until a curve
leaves it or fills too little of it.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np
import pyqtgraph as pg
from PySide6.QtCore import QEvent, QPointF, QRectF, Qt, Signal
from PySide6.QtGui import (
    QColor,
    QFont,
    QFontMetrics,
    QMouseEvent,
    QPainterPath,
    QPen,
    QResizeEvent,
    QShowEvent,
)
from PySide6.QtWidgets import (
    QGraphicsItem,
    QGraphicsPathItem,
    QGraphicsRectItem,
    QHBoxLayout,
    QLabel,
    QSizePolicy,
    QVBoxLayout,
    QWidget,
)

from app import theme
from app.document import Document
from geometry.curves import BY_KEY, Curve, axis_label, in_units, sweep_words
from geometry.layout import MM_PER_INCH, SideName
from geometry.solution import Solution

if TYPE_CHECKING:
    from app.panels.large_curves import LargeCurves

TOE, STEERED_TOE = "toe", "toe change"
"""The first curve, straight ahead and with the steering off center: a steered wheel's toe is
the steering itself, in which bump steer would not be seen."""
SHOWN = (TOE, "camber", "roll center", "track")
COLORS = {TOE: "#D55E00", STEERED_TOE: "#D55E00", "camber": "#0072B2",
          "roll center": "#009E73", "track": "#8B3A6F"}
LEAST_PLOT = 110
"""Pixels in which a plot can still be read."""
FOUND_COLOR = "#8C8A84"
BAND_COLOR = "#E4EFE4"

_CUT = Qt.TextElideMode.ElideRight
_KEPT = QGraphicsItem.CacheMode.DeviceCoordinateCache
"""For what only changes with the range: a picture of it is kept and not painted anew."""


def _pen(color: str, width: float, style: Qt.PenStyle = Qt.PenStyle.SolidLine) -> QPen:
    pen = QPen(QColor(color), width, style)
    pen.setCosmetic(True)
    return pen


def nice_range(low: float, high: float) -> tuple[float, float]:
    """A range of round numbers that holds [low, high] with some air."""
    span = max(high - low, 1e-3)
    step = 10.0 ** math.floor(math.log10(span))
    step = next(step * m for m in (0.1, 0.2, 0.5, 1.0, 2.0) if span / (step * m) <= 8.0)
    air = 0.05 * span
    return math.floor((low - air) / step) * step, math.ceil((high + air) / step) * step


def label_step(low: float, high: float, most: int) -> float:
    """The distance between at most ``most`` round-numbered labels on a range."""
    rough = (high - low) / max(most, 1)
    power = 10.0 ** math.floor(math.log10(rough))
    return next(power * m for m in (1.0, 2.0, 5.0, 10.0) if power * m >= rough * (1 - 1e-9))


class _Plot(pg.PlotWidget):
    """A plot that reports where a person puts the cursor and that it was double-clicked."""

    picked = Signal(float)
    enlarged = Signal()

    def __init__(self) -> None:
        super().__init__(background=theme.CARD, enableMenu=False)
        self.hideButtons()
        self.setMouseEnabled(False, False)
        self.setViewportUpdateMode(self.ViewportUpdateMode.BoundingRectViewportUpdate)
        # The card's color covers it all, so that nothing needs to be painted beneath.
        self.viewport().setAttribute(Qt.WidgetAttribute.WA_OpaquePaintEvent)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Ignored)
        self.setMinimumHeight(LEAST_PLOT)

    def _pick(self, event: QMouseEvent) -> None:
        scene = self.mapToScene(event.position().toPoint())
        self.picked.emit(float(self.getViewBox().mapSceneToView(scene).x()))

    def mousePressEvent(self, event: QMouseEvent) -> None:
        if event.button() == Qt.MouseButton.LeftButton:
            self._pick(event)
        event.accept()

    def mouseMoveEvent(self, event: QMouseEvent) -> None:
        if event.buttons() & Qt.MouseButton.LeftButton:
            self._pick(event)
        event.accept()

    def mouseReleaseEvent(self, event: QMouseEvent) -> None:
        event.accept()

    def mouseDoubleClickEvent(self, event: QMouseEvent) -> None:
        self.enlarged.emit()
        event.accept()

    def wheelEvent(self, event: object) -> None:
        """Plots keep their range; the wheel stays with the panel."""


class CurvePlot(QWidget):
    """One curve: as planned strong, as found dashed behind, band, grid and travel cursor."""

    def __init__(self, curve: Curve, document: Document, *, large: bool = False) -> None:
        super().__init__()
        self.curve = curve
        self._document = document
        self._large = large
        self._range: tuple[float, float] | None = None
        self._frame: tuple[float, float, float, float, str] | None = None
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        self.plot = _Plot()
        self.title = QLabel()
        self.title.setObjectName("curve title")
        self.title.setAlignment(Qt.AlignmentFlag.AlignCenter)
        column.addWidget(self.title)
        column.addWidget(self.plot, 1)
        box = self.plot.getPlotItem()
        for name in ("left", "bottom"):
            axis = box.getAxis(name)
            axis.setStyle(tickLength=-3)
            axis.setPen(QPen(QColor(theme.LINE)))
            axis.setTextPen(QPen(QColor(theme.QUIET)))
            axis.setCacheMode(_KEPT)
        self._band = QGraphicsRectItem()
        self._band.setPen(QPen(Qt.PenStyle.NoPen))
        self._band.setBrush(QColor(BAND_COLOR))
        self._grid = self._path("#E6E2D8", 1.0)
        self._found = self._path(FOUND_COLOR, 1.0, Qt.PenStyle.DashLine)
        color = COLORS.get(curve.key, theme.STEEL)
        self._right = self._path(color, 1.0, Qt.PenStyle.DotLine)
        self._planned = self._path(color, 2.0 if large else 1.5)
        self._cursor = self._path(theme.INK, 1.0)
        self._right_cursor = self._path(theme.INK, 1.0, Qt.PenStyle.DotLine)
        self.plot.addItem(self._band)
        for item in (self._grid, self._found, self._right, self._planned, self._cursor,
                     self._right_cursor):
            self.plot.addItem(item)
        self.plot.picked.connect(self._set_travel)
        self._name()
        self.plot.setToolTip(
            "Click or drag to move the wheels. Solid: as planned; dotted: right side where it "
            "differs; dashed gray: as found; tinted: within tolerance. Double-click: large."
        )
        self._size()
        self.refresh()

    def _name(self) -> None:
        self.plot.setAccessibleName(f"{self.curve.label} through the travel")

    def show_curve(self, curve: Curve) -> None:
        """Take another curve from the next drawing on."""
        if curve is not self.curve:
            self.curve = curve
            self._range = self._frame = None
            self._name()

    def _size(self) -> None:
        """Letters and axes as the text size asks; their places are kept fixed for speed."""
        small = QFont(self.font())
        small.setPointSizeF(small.pointSizeF() * (1.0 if self._large else 0.85))
        letters = QFontMetrics(small)
        box = self.plot.getPlotItem()
        for name in ("left", "bottom"):
            box.getAxis(name).setStyle(tickFont=small)
        # Room above for half of the topmost number.
        box.setContentsMargins(2, letters.height() // 2, 8, 2)
        box.getAxis("left").setWidth(letters.horizontalAdvance("−0.000") + 8)
        box.getAxis("bottom").setHeight(letters.height() + 6)
        self._frame = None

    def changeEvent(self, event: QEvent) -> None:
        super().changeEvent(event)
        if event.type() == QEvent.Type.FontChange and hasattr(self, "plot"):
            self._size()
            self.refresh()

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        # Other room, other number of labels.
        self._frame = None
        self.refresh()

    def _path(
        self, color: str, width: float, style: Qt.PenStyle = Qt.PenStyle.SolidLine
    ) -> QGraphicsPathItem:
        item = QGraphicsPathItem()
        item.setPen(_pen(color, width, style))
        return item

    def _set_travel(self, place: float) -> None:
        scale = MM_PER_INCH if self._document.units == "in" else 1.0
        span = self._document.span
        travel = min(max(place * scale, -span), span)
        self._document.set_travel(travel, travel)

    def _lines(self, solution: Solution, side: SideName) -> tuple[np.ndarray, np.ndarray]:
        units = self._document.units
        travel = in_units("length", solution.sides[side].sweep.travel, units)
        return travel, in_units(self.curve.kind, self.curve.read(solution, side), units)

    def refresh(self) -> None:
        """Draw the document's solution."""
        document = self._document
        solution, found = document.solution, document.found_solution
        units = document.units
        x, y = self._lines(solution, "left")
        drawn = [y]
        self._set_path(self._planned, x, y)
        right_x, right_y = self._lines(solution, "right")
        differs = self.curve.key != "roll center" and not np.array_equal(y, right_y, equal_nan=True)
        self._right.setVisible(differs)
        if differs:
            self._set_path(self._right, right_x, right_y)
            drawn.append(right_y)
        self._found.setVisible(found is not None)
        if found is not None:
            found_x, found_y = self._lines(found, "left")
            self._set_path(self._found, found_x, found_y)
            drawn.append(found_y)
        values = np.concatenate(drawn)
        values = values[np.isfinite(values)]
        low, high = (float(values.min()), float(values.max())) if values.size else (-1.0, 1.0)
        if self.curve.band is not None:
            self._place_band(solution, x, y)
        self._fit_range(float(x[0]), float(x[-1]), low, high, units)
        self._place_cursor(units)

    def _set_path(self, item: QGraphicsPathItem, x: np.ndarray, y: np.ndarray) -> None:
        item.setPath(pg.arrayToQPath(x, y, connect="finite"))

    def _place_band(self, solution: Solution, x: np.ndarray, y: np.ndarray) -> None:
        assert self.curve.band is not None
        half = float(
            in_units(self.curve.kind, np.array(self.curve.band(solution)), self._document.units)
        )
        middle = float(y[len(y) // 2])
        visible = math.isfinite(middle)
        self._band.setVisible(visible)
        if visible:
            self._band.setRect(
                QRectF(float(x[0]), middle - half, float(x[-1] - x[0]), 2.0 * half)
            )

    def _fit_range(self, left: float, right: float, low: float, high: float, units: str) -> None:
        """Keep the range while the curves fit it well; a moving range costs four frames."""
        kept = self._range
        least = {"length": 0.05 if units == "in" else 1.0, "angle": 0.5}[self.curve.kind]
        if high - low < least:
            middle = 0.5 * (low + high)
            low, high = middle - 0.5 * least, middle + 0.5 * least
        fits = kept is not None and kept[0] <= low and high <= kept[1]
        roomy = kept is not None and (kept[1] - kept[0]) > 4.0 * (high - low)
        if not fits or roomy:
            self._range = nice_range(low, high)
        assert self._range is not None
        frame = (left, right, *self._range, units)
        if frame == self._frame:
            return
        self._frame = frame
        box = self.plot.getPlotItem()
        self.title.setText(axis_label(self.curve, self._document.units))
        self.plot.setRange(xRange=(left, right), yRange=self._range, padding=0.0)
        letters = self.fontMetrics()
        high = max(2, self.height() // (3 * letters.height()))
        wide = max(3, (self.width() - 50) // (2 * letters.horizontalAdvance("+00")))
        y_step = label_step(*self._range, min(8, high))
        x_step = label_step(left, right, min(12, wide))
        decimals = max(0, -math.floor(math.log10(y_step) + 1e-9))
        xs = np.arange(math.ceil(left / x_step), math.floor(right / x_step) + 1) * x_step
        ys = np.arange(
            math.ceil(self._range[0] / y_step - 1e-9),
            math.floor(self._range[1] / y_step + 1e-9) + 1,
        ) * y_step
        box.getAxis("bottom").setTicks([[(float(v), f"{v:+g}" if v else "0") for v in xs]])
        box.getAxis("left").setTicks([[(float(v), f"{v:.{decimals}f}") for v in ys]])
        grid = QPainterPath()
        for v in xs:
            grid.moveTo(float(v), self._range[0])
            grid.lineTo(float(v), self._range[1])
        for v in ys:
            grid.moveTo(left, float(v))
            grid.lineTo(right, float(v))
        self._grid.setPath(grid)

    def _place_cursor(self, units: str) -> None:
        travel = self._document.travel
        assert self._range is not None
        for item, place in ((self._cursor, travel["left"]), (self._right_cursor, travel["right"])):
            at = place / MM_PER_INCH if units == "in" else place
            path = QPainterPath(QPointF(at, self._range[0]))
            path.lineTo(at, self._range[1])
            item.setPath(path)
        self._right_cursor.setVisible(travel["left"] != travel["right"])


class SweepCaption(QLabel):
    """What the curves go through, and how their lines are told apart; cut short where narrow."""

    def __init__(self) -> None:
        super().__init__()
        self.setObjectName("curve title")
        self.setAlignment(Qt.AlignmentFlag.AlignCenter)
        self.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Fixed)
        self._words = ""

    def refresh(self, document: Document, first: str = "") -> None:
        """Say it of the document's solution, after the words ``first``, if any."""
        words = sweep_words(document.solution, document.roll)
        words = f"{first} · {words}" if first else words
        if document.found_solution is not None:
            words += " · solid: as planned, dashed: as found"
        if words != self._words:
            self._words = words
            self.setAccessibleName(words)
            self.setToolTip(words)
            self._fit()

    def _fit(self) -> None:
        room = max(self.width() - 4, 0)
        self.setText(self.fontMetrics().elidedText(self._words, _CUT, room))

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self._fit()


class CurvesPanel(QWidget):
    """A row of the curves that matter most; any of them opens large."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._document = document
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(2)
        self.caption = SweepCaption()
        column.addWidget(self.caption)
        row = QHBoxLayout()
        row.setSpacing(6)
        column.addLayout(row, 1)
        self.plots: list[CurvePlot] = []
        for key in SHOWN:
            plot = CurvePlot(BY_KEY[key], document)
            plot.plot.enlarged.connect(self.enlarge)
            self.plots.append(plot)
            row.addWidget(plot)
        self._alone = False
        self.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Preferred)
        self._large: LargeCurves | None = None
        document.solved.connect(self.refresh)
        document.edited.connect(self.refresh)
        document.opened.connect(self.refresh)

    def refresh(self) -> None:
        """Draw what is in sight; what is hidden costs nothing."""
        if not self.isVisible():
            return
        had = self.plots[0].curve
        self.plots[0].show_curve(BY_KEY[STEERED_TOE if self._document.rack else TOE])
        if self.plots[0].curve is not had:
            self._fit_number()
        self._say()
        for plot in self.plots:
            plot.refresh()

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self._fit_number()

    def changeEvent(self, event: QEvent) -> None:
        super().changeEvent(event)
        if event.type() == QEvent.Type.FontChange and hasattr(self, "plots"):
            self._fit_number()

    def _fit_number(self) -> None:
        """As many curves as have room to be read; all of them are in the large window."""
        letters = self.fontMetrics()
        needed = max(
            letters.horizontalAdvance(axis_label(p.curve, self._document.units)) for p in self.plots
        )
        fitting = max(1, (self.width() + 6) // (max(needed + 16, 130) + 6))
        for number, plot in enumerate(self.plots):
            plot.setVisible(number < fitting)
        # A lone plot has its name in the caption: at large letters each line counts.
        self._alone = fitting == 1
        self.plots[0].title.setVisible(not self._alone)
        lines = 1 if self._alone else 2
        self.setMinimumHeight(LEAST_PLOT + lines * letters.height() + 6)
        self._say()

    def _say(self) -> None:
        first = axis_label(self.plots[0].curve, self._document.units) if self._alone else ""
        self.caption.refresh(self._document, first)

    def showEvent(self, event: QShowEvent) -> None:
        super().showEvent(event)
        self.refresh()

    def enlarge(self) -> None:
        """All curves in a window of their own, alive beside the floor."""
        if self._large is None:
            from app.panels.large_curves import LargeCurves

            self._large = LargeCurves(self._document, self.window())
        self._large.show()
        self._large.raise_()
        self._large.refresh()
