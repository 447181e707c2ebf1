"""The rack zone: where the inner tie-rod pivot may sit, on the floor and large with contours."""

from __future__ import annotations

import math
from collections.abc import Callable

import numpy as np
import pyqtgraph as pg
import shapely
from PySide6.QtCore import QObject, Qt
from PySide6.QtGui import QColor, QMouseEvent, QPainterPath
from PySide6.QtWidgets import (
    QDialog,
    QGraphicsItem,
    QGraphicsPathItem,
    QHBoxLayout,
    QLabel,
    QPushButton,
    QVBoxLayout,
    QWidget,
)
from shapely.geometry.base import BaseGeometry

from app import theme
from app.background import Background
from app.document import Document
from app.floor.view import FloorView
from app.panels.stance_bar import LengthControl
from geometry.finding_checks.wording import Wording
from geometry.floor_words import steering_words
from geometry.layout import MM_PER_INCH, SIDES, TIE_INNER, SideName
from geometry.solution import Solution
from geometry.tolerances import toe_length
from geometry.zone_shapes import cut
from geometry.zones import RackZone, rack_zone_of

ZONE_FILL = "#CFE6D8"
LINE_COLORS = ("#0B5D43", "#2B8A6B", "#009E73", "#C77C11", "#B33A00")


def buildable(zone: RackZone, solution: Solution, side: SideName) -> BaseGeometry:
    """What is left of a rack zone outside the no-go shapes."""
    return cut(zone.zone, solution.layout.no_go, side)


class FloorZones(QObject):
    """Tints the coarse zone of both sides on the floor in every frame."""

    def __init__(self, document: Document, floor: FloorView) -> None:
        super().__init__(floor)
        self._document, self._floor = document, floor
        self.shown = True
        self._made_of: tuple[object, ...] | None = None
        document.solved.connect(self.refresh)
        document.opened.connect(self._opened)
        self.refresh()

    def _opened(self) -> None:
        # The floor is swept when another car comes.
        self._made_of = None
        self.refresh()

    def show_zones(self, on: bool) -> None:
        self.shown = on
        self.refresh()

    def refresh(self) -> None:
        solution = self._document.shown_solution
        # Where the wheels stand now makes no difference to a zone; the steering does.
        made_of = solution.layout, solution.span, solution.rack, self.shown
        if made_of == self._made_of:
            return
        self._made_of = made_of
        areas: dict[SideName, BaseGeometry | None] = {}
        for side in SIDES:
            if not self.shown:
                areas[side] = None
            elif side == "right" and solution.layout.linked and not solution.rack:
                areas[side] = areas["left"]
            else:
                zone = rack_zone_of(solution, side, rack=solution.rack)
                areas[side] = buildable(zone, solution, side)
        for side, area in areas.items():
            self._floor.set_zone(side, area)


class _ZonePlot(pg.PlotWidget):
    """A plot that a click in it answers with a place."""

    def __init__(self, picked: Callable[[float, float], None]) -> None:
        super().__init__(background=theme.CARD, enableMenu=False)
        self._picked = picked
        self.hideButtons()
        self.setAspectLocked(True)
        self.setMouseEnabled(True, True)

    def mouseDoubleClickEvent(self, event: QMouseEvent) -> None:
        at = self.getViewBox().mapSceneToView(self.mapToScene(event.position().toPoint()))
        self._picked(at.x(), at.y())
        event.accept()


class RackZoneDialog(QDialog):
    """The full zone with its contours; double-click a place to put the pivot there."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._document = document
        self._side: SideName = "left"
        self._drawn: list[QGraphicsItem] = []
        self._asked: tuple[object, ...] | None = None
        column = QVBoxLayout(self)
        self.words = QLabel()
        self.words.setWordWrap(True)
        self.words.setAccessibleName("Size of the rack zone")
        column.addWidget(self.words)
        self.plot = _ZonePlot(self._put)
        self.plot.setAccessibleName("Toe range by place of the inner tie-rod pivot")
        column.addWidget(self.plot, 1)
        self.legend = QLabel()
        self.legend.setWordWrap(True)
        column.addWidget(self.legend)
        row = QHBoxLayout()
        self.off_center = LengthControl("Rack &off center", 60.0, document)
        self.off_center.moved.connect(document.set_rack)
        row.addWidget(self.off_center, 1)
        best = QPushButton("Put the pivot on its &best spot")
        best.clicked.connect(self._put_best)
        row.addWidget(best)
        column.addLayout(row)
        self.zone: RackZone | None = None
        self.background = Background(self, wait_ms=60)
        self.background.answered.connect(self.show_zone)
        document.solved.connect(self.ask)
        document.opened.connect(self.ask)
        document.selected.connect(self.ask)
        self.resize(640, 560)
        self.ask()

    def ask(self) -> None:
        """Work the full zone out for the car as it now stands."""
        chosen = self._document.selection
        solution = self._document.solution
        rack = solution.rack
        # A mirrored car's sides have one zone only while it goes straight ahead.
        apart = bool(rack) or not solution.layout.linked
        side = self._side = chosen[0] if chosen is not None and apart else "left"
        self.off_center.show_value(rack)
        parts = ["Rack zone", f"{side} wheel" if apart else "both wheels",
                 steering_words(rack, self._document.units)]
        self.setWindowTitle(", ".join(parts))
        asked = (solution.layout, solution.span, rack, side)
        if asked == self._asked:
            return
        self._asked = asked
        # What stands belongs to another car; it must not be read as this one's.
        self.words.setText("Working it out …")
        for item in self._drawn:
            item.setOpacity(0.3)

        def question(stopped: Callable[[], bool]) -> RackZone:
            return rack_zone_of(solution, side, full=True, rack=rack)

        self.background.ask(question)

    def _scale(self) -> float:
        return MM_PER_INCH if self._document.units == "in" else 1.0

    def show_zone(self, zone: RackZone) -> None:
        """Draw a worked-out zone: its area, contours with their values, the pivot and its best."""
        self.zone = zone
        units, scale = self._document.units, self._scale()
        words = Wording(units)
        for item in self._drawn:
            self.plot.removeItem(item)
        self._drawn = []
        solution = self._document.solution
        area = buildable(zone, solution, self._side)
        self._add(_filled(area, scale))
        tire = solution.layout.side(self._side)
        legend: list[str] = []
        for (level, lines), color in zip(zone.contours.items(), LINE_COLORS, strict=False):
            toe = words.fine(float(toe_length(tire, level)))
            exact = math.isclose(level, zone.tolerance)
            pen = pg.mkPen(color, width=2 if exact else 1,
                           style=Qt.PenStyle.SolidLine if exact else Qt.PenStyle.DashLine)
            for line in lines:
                self._add(pg.PlotCurveItem(line[:, 0] / scale, line[:, 1] / scale, pen=pen))
            if lines:
                mark = "tolerance " if exact else ""
                dash = "━" if exact else "┅"
                legend.append(f'<span style="color:{color}">{dash} {mark}{toe}</span>')
        self.legend.setText("Toe change over the travel: " + "&nbsp; ".join(legend))
        self._mark(zone.present, "o", theme.INK, "as it stands")
        if zone.best is not None:
            self._mark(zone.best, "+", "#009E73", "best spot")
        self.plot.setLabel("bottom", f"over, {units}")
        self.plot.setLabel("left", f"up, {units}")
        self.words.setText(zone.words(units) + self._cut_words(zone, area))

    def _cut_words(self, zone: RackZone, area: BaseGeometry) -> str:
        if zone.zone.is_empty or area.area >= zone.zone.area * (1.0 - 1e-9):
            return ""
        if area.is_empty:
            return " No-go shapes cover all of it: nothing is left to build in."
        return " No-go shapes take a part of it; what is tinted can be built."

    def _add(self, item: QGraphicsItem) -> None:
        self.plot.addItem(item)
        self._drawn.append(item)

    def _mark(self, place: tuple[float, float], symbol: str, color: str, label: str) -> None:
        scale = self._scale()
        x, y = place[0] / scale, place[1] / scale
        self._add(
            pg.ScatterPlotItem([x], [y], symbol=symbol, size=13, pen=pg.mkPen(color, width=2),
                               brush=None)
        )
        text = pg.TextItem(label, color=color, anchor=(-0.1, 1.1))
        text.setPos(x, y)
        self._add(text)

    # --- moving the pivot ----------------------------------------------------------------

    def _put(self, x: float, y: float) -> None:
        scale = self._scale()
        self._move(x * scale, y * scale)

    def _put_best(self) -> None:
        if self.zone is not None and self.zone.best is not None:
            self._move(*self.zone.best)

    def _move(self, over: float, up: float) -> None:
        layout = self._document.settled_layout()
        old = layout.point(self._side, TIE_INNER)
        self._document.move_point(self._side, TIE_INNER, old._replace(over=over, up=up))

    def done(self, result: int) -> None:
        self.background.finish()
        super().done(result)


def _filled(area: BaseGeometry, scale: float) -> QGraphicsPathItem:
    """A shapely area as a tinted path."""
    path = QPainterPath()
    path.setFillRule(Qt.FillRule.OddEvenFill)
    for part in shapely.get_parts(area):
        if part.geom_type != "Polygon":
            continue
        for ring in (part.exterior, *part.interiors):
            corners = np.asarray(ring.coords)[:, :2] / scale
            path.addPath(pg.arrayToQPath(corners[:, 0], corners[:, 1], connect="all"))
    item = QGraphicsPathItem(path)
    item.setBrush(QColor(ZONE_FILL))
    item.setPen(pg.mkPen(None))
    return item
