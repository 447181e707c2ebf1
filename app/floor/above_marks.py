"""Lines and points of the view from above: strings, kingpin feet, wanted arm ends, the turn."""

from __future__ import annotations

from PySide6.QtCore import QLineF, QPointF
from PySide6.QtGui import QPainterPath
from PySide6.QtWidgets import QGraphicsLineItem, QGraphicsPathItem, QGraphicsScene

from app.floor.marks import MARKS_Z, STRINGS_Z, Mark
from app.floor.paths import NO_BRUSH, path_of, pen
from app.floor.stillness import Stillness
from app.palette import ARM_DASH, CHALK_DASH, CONTACT_DASH, TIE_DASH, Palette
from geometry.layout import SIDES
from geometry.linkage import Array
from geometry.plan_strings import PLAN_KINDS, PlanKind, PlanMarks, PlanString
from geometry.shapes import clipped

_DASHES: dict[PlanKind, tuple[float, ...]] = {
    "rear": CHALK_DASH, "turn": CONTACT_DASH, "check": TIE_DASH, "axis": (8.0, 3.0, 2.0, 3.0),
    "kingpin": ARM_DASH,
}
_WIDTHS: dict[PlanKind, float] = {
    "rear": 2.4, "turn": 1.7, "check": 1.7, "axis": 1.3, "kingpin": 1.9,
}
_MOST = 4
_REAR_TIRES_Z = 6.0


class PlanStringItems:
    """The lines, clipped to what is in view."""

    def __init__(self, scene: QGraphicsScene) -> None:
        self._items: dict[PlanKind, list[QGraphicsLineItem]] = {kind: [] for kind in PLAN_KINDS}
        for items in self._items.values():
            for _ in range(_MOST):
                item = QGraphicsLineItem()
                item.setZValue(STRINGS_Z)
                item.setVisible(False)
                scene.addItem(item)
                items.append(item)

    def dress(self, palette: Palette, ratio: float) -> None:
        colors: dict[PlanKind, str] = {
            "rear": palette.chalk_core, "turn": palette.contact_string,
            "check": palette.tie_string, "axis": palette.ink, "kingpin": palette.arm_string,
        }
        for kind, items in self._items.items():
            made = pen(colors[kind], _WIDTHS[kind] * ratio, _DASHES[kind])
            for item in items:
                item.setPen(made)

    def show(self, strings: list[PlanString], box: tuple[float, float, float, float]) -> None:
        """Draw the lines inside a box (left, bottom, right, top), mm."""
        waiting = {kind: list(items) for kind, items in self._items.items()}
        for string in strings:
            part = clipped(string.start, string.end, box)
            if part is not None:
                item = waiting[string.kind].pop()
                item.setLine(QLineF(*part))
                item.setVisible(True)
        for items in waiting.values():
            for item in items:
                item.setVisible(False)


def _foot() -> tuple[QPainterPath, QPainterPath]:
    """Where a kingpin axis meets the floor: a ring with a cross through it."""
    path = QPainterPath()
    path.addEllipse(QPointF(0, 0), 5.0, 5.0)
    for x, y in ((9.0, 0.0), (0.0, 9.0)):
        path.moveTo(-x, -y)
        path.lineTo(x, y)
    return path, QPainterPath()


def _ring(dotted: bool) -> tuple[QPainterPath, QPainterPath]:
    ring, dot = QPainterPath(), QPainterPath()
    ring.addEllipse(QPointF(0, 0), 7.0, 7.0)
    if dotted:
        dot.addEllipse(QPointF(0, 0), 2.4, 2.4)
    return ring, dot


class PlanMarkItems:
    """All construction points of a car from above, and its rear tires as a chalk outline."""

    def __init__(self, scene: QGraphicsScene, still: Stillness) -> None:
        self.kingpins = {side: Mark(scene, still, *_foot()) for side in SIDES}
        # Above the nails, as the wanted end often lies within a nail's head of the real one.
        self.wanted = {side: Mark(scene, still, *_ring(False), MARKS_Z + 12) for side in SIDES}
        self.rear = Mark(scene, still, *_ring(True))
        self.center = Mark(scene, still, *_ring(True))
        self.rear_tires = QGraphicsPathItem()
        self.rear_tires.setZValue(_REAR_TIRES_Z)
        scene.addItem(self.rear_tires)

    def dress(self, palette: Palette, ratio: float) -> None:
        ground = palette.mark_fill
        for mark in self.kingpins.values():
            mark.dress(palette.arm_string, ground, palette.arm_string, 1.8)
        for mark in self.wanted.values():
            mark.dress(palette.tie_string, ground, palette.tie_string, 1.9)
            mark.setBrush(NO_BRUSH)
        self.rear.dress(palette.tie_string, ground, palette.tie_string, 1.9)
        self.center.dress(palette.contact_string, ground, palette.contact_string, 1.9)
        self.rear_tires.setPen(pen(palette.chalk, 1.6 * ratio, CHALK_DASH))

    def show(self, marks: PlanMarks, rear_tires: list[Array]) -> None:
        for side in SIDES:
            self.kingpins[side].put(marks.kingpins.get(side))
            self.wanted[side].put(marks.wanted.get(side))
        self.rear.put(marks.rear)
        self.center.put(marks.center)
        self.rear_tires.setPath(path_of(rear_tires, True))
