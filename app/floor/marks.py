"""Strings and construction points: instant centers, roll center, center of gravity, pivots."""

from __future__ import annotations

from PySide6.QtCore import QLineF, QPointF, QRectF, Qt
from PySide6.QtGui import QBrush, QColor, QPainterPath
from PySide6.QtWidgets import (
    QGraphicsItem,
    QGraphicsLineItem,
    QGraphicsPathItem,
    QGraphicsScene,
)

from app.floor.paths import NO_BRUSH, NO_PEN, brush, path_of, pen, same_outlines, same_place
from app.floor.stillness import Stillness
from app.palette import ARM_DASH, CONTACT_DASH, TIE_DASH, Palette
from geometry.front_strings import String, StringKind
from geometry.layout import SIDES, SideName
from geometry.linkage import Array
from geometry.shapes import clipped
from geometry.standing import XY

STRINGS_Z = 30.0
ZONE_Z = 28.0
MARKS_Z = 40.0

_KINDS: tuple[StringKind, ...] = ("contact", "arm", "tie")
_DASHES = {"arm": ARM_DASH, "contact": CONTACT_DASH, "tie": TIE_DASH}
_MOST = 4


class StringItems:
    """The strings, clipped to what is in view so that far ends cost nothing."""

    def __init__(self, scene: QGraphicsScene) -> None:
        self._items: dict[StringKind, list[QGraphicsLineItem]] = {}
        for kind in _KINDS:
            self._items[kind] = []
            for _ in range(_MOST):
                item = QGraphicsLineItem()
                item.setZValue(STRINGS_Z)
                item.setVisible(False)
                scene.addItem(item)
                self._items[kind].append(item)
        self.floor = QGraphicsLineItem()
        self.floor.setZValue(STRINGS_Z - 1.0)
        self.floor.setVisible(False)
        scene.addItem(self.floor)

    def dress(self, palette: Palette, ratio: float) -> None:
        colors = {
            "arm": palette.arm_string,
            "contact": palette.contact_string,
            "tie": palette.tie_string,
        }
        for kind, items in self._items.items():
            made = pen(colors[kind], 1.7 * ratio, _DASHES[kind])
            for item in items:
                item.setPen(made)
        self.floor.setPen(pen(palette.chalk_core, 1.4 * ratio, (7.0, 3.0)))

    def show(
        self,
        strings: list[String],
        box: tuple[float, float, float, float],
        tire_floor: tuple[XY, XY] | None,
    ) -> None:
        """Stretch the strings inside a box (left, bottom, right, top), mm."""
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
        part = None if tire_floor is None else clipped(*tire_floor, box)
        if part is not None:
            self.floor.setLine(QLineF(*part))
        self.floor.setVisible(part is not None)


def _sized(item: QGraphicsItem, z: float) -> QGraphicsItem:
    item.setFlag(QGraphicsItem.GraphicsItemFlag.ItemIgnoresTransformations)
    item.setZValue(z)
    item.setVisible(False)
    return item


class Mark(QGraphicsPathItem):
    """A sign of fixed size at a place: an outline path and a filled one over it."""

    def __init__(self, scene: QGraphicsScene, still: Stillness, outline: QPainterPath,
                 solid: QPainterPath, z: float = MARKS_Z) -> None:
        super().__init__(outline)
        _sized(self, z)
        self.solid = QGraphicsPathItem(solid, self)
        self._still = still
        self._place: XY | None = None
        scene.addItem(self)

    def dress(self, edge: str, fill: str | None, solid: str, width: float) -> None:
        self.setPen(pen(edge, width, cosmetic=False))
        self.setBrush(brush(fill))
        self.solid.setPen(NO_PEN)
        self.solid.setBrush(brush(solid))

    def put(self, place: XY | None) -> None:
        """Stand at a place on the floor, or vanish."""
        if same_place(place, self._place):
            return
        self._place = place
        if place is not None:
            self._still.all_moved((self, self.solid))
            self.setPos(*place)
        self.setVisible(place is not None)


def _bob() -> tuple[QPainterPath, QPainterPath]:
    """A plumb bob whose tip stands on the place, with its cord."""
    body = QPainterPath(QPointF(0, 0))
    body.lineTo(5.5, -10)
    body.quadTo(6.5, -16, 2.2, -18)
    body.lineTo(2.2, -21)
    body.lineTo(-2.2, -21)
    body.lineTo(-2.2, -18)
    body.quadTo(-6.5, -16, -5.5, -10)
    body.closeSubpath()
    body.moveTo(0, -21)
    body.lineTo(0, -30)
    shade = QPainterPath(QPointF(0, -1))
    shade.lineTo(4.6, -10)
    shade.quadTo(5.4, -15.4, 1.8, -17)
    shade.lineTo(0, -17)
    shade.closeSubpath()
    return body, shade


def _ring_on_bar() -> tuple[QPainterPath, QPainterPath]:
    path = QPainterPath()
    path.addEllipse(QPointF(0, 0), 7, 7)
    path.moveTo(-17, 0)
    path.lineTo(-7, 0)
    path.moveTo(7, 0)
    path.lineTo(17, 0)
    dot = QPainterPath()
    dot.addEllipse(QPointF(0, 0), 1.8, 1.8)
    return path, dot


def _quartered() -> tuple[QPainterPath, QPainterPath]:
    """The drafting standard's center of gravity: a circle with two quarters filled."""
    path = QPainterPath()
    path.addEllipse(QPointF(0, 0), 9, 9)
    quarters = QPainterPath()
    for start in (0, 180):
        quarters.moveTo(0, 0)
        quarters.arcTo(QRectF(-9, -9, 18, 18), start, 90)
        quarters.closeSubpath()
    return path, quarters


def _pivot(kind: str) -> tuple[QPainterPath, QPainterPath]:
    ring, solid = QPainterPath(), QPainterPath()
    ring.addEllipse(QPointF(0, 0), 6.5, 6.5)
    if kind == "curvature center":
        solid.addEllipse(QPointF(0, 0), 6.5, 6.5)
    elif kind == "best fit":
        solid.addEllipse(QPointF(0, 0), 2.4, 2.4)
    return ring, solid


class MarkItems:
    """All construction points of a car."""

    def __init__(self, scene: QGraphicsScene, still: Stillness) -> None:
        self.centers = {side: Mark(scene, still, *_bob()) for side in SIDES}
        self.roll = Mark(scene, still, *_ring_on_bar(), MARKS_Z + 1)
        self.gravity = Mark(scene, still, *_quartered())
        self.pivots = {
            (side, kind): Mark(scene, still, *_pivot(kind), MARKS_Z + 12)
            for side in SIDES
            for kind in ("string rule", "curvature center", "best fit")
        }
        self.zones = {side: self._zone(scene) for side in SIDES}
        # Hatched, to be told from a rack zone where both lie over each other.
        self.nail_zone = self._zone(scene)
        self.nail_zone.setZValue(ZONE_Z + 0.5)
        self._zones: dict[SideName, list[Array]] = {side: [] for side in SIDES}

    @staticmethod
    def _zone(scene: QGraphicsScene) -> QGraphicsPathItem:
        item = QGraphicsPathItem()
        item.setZValue(ZONE_Z)
        scene.addItem(item)
        return item

    def dress(self, palette: Palette, ratio: float) -> None:
        ground = palette.mark_fill
        for center in self.centers.values():
            center.dress(palette.arm_string, ground, palette.arm_string, 1.7)
        self.roll.dress(palette.contact_string, ground, palette.contact_string, 2.4)
        self.roll.setBrush(NO_BRUSH)
        self.gravity.dress(palette.ink, ground, palette.ink, 1.8)
        for mark in self.pivots.values():
            mark.dress(palette.tie_string, ground, palette.tie_string, 1.8)
        for zone in self.zones.values():
            # See-through, as it lies over the rack; it is small, so that this costs little.
            tint = QColor(palette.zone)
            tint.setAlphaF(0.62)
            zone.setBrush(QBrush(tint))
            zone.setPen(pen(palette.zone_edge, 1.2 * ratio, (3.0, 2.0)))

        self.nail_zone.setBrush(QBrush(QColor(palette.contact_string), Qt.BrushStyle.BDiagPattern))
        self.nail_zone.setPen(pen(palette.contact_string, 2.0 * ratio))

    def set_nail_zone(self, outlines: list[Array]) -> None:
        """Hatch where one nail may sit: outlines (n, 2) on the floor."""
        path = path_of(outlines, True)
        path.setFillRule(Qt.FillRule.OddEvenFill)
        self.nail_zone.setPath(path)

    def set_zone(self, side: SideName, outlines: list[Array]) -> None:
        """Tint where a side's inner tie-rod pivot may sit: outlines (n, 2) on the floor."""
        if same_outlines(outlines, self._zones[side]):
            return
        self._zones[side] = outlines
        path = path_of(outlines, True)
        path.setFillRule(Qt.FillRule.OddEvenFill)
        self.zones[side].setPath(path)
