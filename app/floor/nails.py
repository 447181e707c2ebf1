"""Nails: the steel heads at every pivot, plain or locked, hovered or chosen."""

from __future__ import annotations

import math

from PySide6.QtCore import QPointF, QRectF
from PySide6.QtGui import QBrush, QColor, QPainterPath, QRadialGradient
from PySide6.QtWidgets import (
    QGraphicsEllipseItem,
    QGraphicsItem,
    QGraphicsPathItem,
    QGraphicsScene,
)

from app.floor.paths import NO_BRUSH, pen, same_place
from app.floor.stillness import Stillness
from app.palette import Palette
from geometry.layout import SideName
from geometry.standing import XY

NAILS_Z = 60.0
HEAD = 5.4
REACH = 13.0
"""How near the pointer takes hold of a nail, pixels."""

Key = tuple[SideName, str]


def _cross() -> QPainterPath:
    path = QPainterPath(QPointF(-3.2, 0))
    path.lineTo(3.2, 0)
    path.moveTo(0, -3.2)
    path.lineTo(0, 3.2)
    return path


def _padlock() -> QPainterPath:
    path = QPainterPath()
    path.addRect(QRectF(-3.0, -0.8, 6.0, 4.4))
    path.moveTo(-1.9, -0.8)
    path.lineTo(-1.9, -2.2)
    path.arcTo(QRectF(-1.9, -4.1, 3.8, 3.8), 180, -180)
    path.lineTo(1.9, -0.8)
    return path


class Nail(QGraphicsEllipseItem):
    """One nail head of fixed size on the screen."""

    def __init__(self, key: Key, locked: bool) -> None:
        super().__init__(QRectF(-HEAD, -HEAD, 2 * HEAD, 2 * HEAD))
        self.key = key
        self.locked = locked
        self.setFlag(QGraphicsItem.GraphicsItemFlag.ItemIgnoresTransformations)
        self.setZValue(NAILS_Z)
        self.sign = QGraphicsPathItem(_padlock() if locked else _cross(), self)
        self.ring = QGraphicsEllipseItem(QRectF(-10.0, -10.0, 20.0, 20.0), self)
        self.ring.setBrush(NO_BRUSH)
        self.ring.setVisible(False)

    def dress(self, palette: Palette) -> None:
        steel = QRadialGradient(QPointF(-1.8, -1.8), 1.7 * HEAD)
        if self.locked:
            steel.setColorAt(0.0, QColor(palette.nail_dark))
            steel.setColorAt(1.0, QColor(palette.nail_locked))
        else:
            steel.setColorAt(0.0, QColor(palette.nail_light))
            steel.setColorAt(1.0, QColor(palette.nail_dark))
        self.setBrush(QBrush(steel))
        self.setPen(pen(palette.nail_edge, 1.3, cosmetic=False))
        ink = palette.nail_light if self.locked else palette.nail_edge
        self.sign.setPen(pen(ink, 1.1, cosmetic=False))
        self.ring.setPen(pen(palette.chosen, 2.4, cosmetic=False))

    def swell(self, on: bool) -> None:
        self.setScale(1.45 if on else 1.0)
        self.setZValue(NAILS_Z + (1.0 if on else 0.0))

    def choose(self, on: bool) -> None:
        self.ring.setVisible(on)


class NailItems:
    """Every nail of a car; rebuilt only when the car has other nails."""

    def __init__(self, scene: QGraphicsScene, still: Stillness) -> None:
        self._scene, self._still = scene, still
        self._places: dict[Key, XY] = {}
        self.nails: dict[Key, Nail] = {}
        self._made: tuple[tuple[Key, ...], frozenset[str]] | None = None
        self._hovered: Key | None = None
        self._chosen: Key | None = None
        self._palette: Palette | None = None

    def dress(self, palette: Palette) -> None:
        self._palette = palette
        for nail in self.nails.values():
            nail.dress(palette)

    def show(self, places: dict[Key, XY], locked: frozenset[str]) -> None:
        """Follow a solution's nail places."""
        made = tuple(places), locked
        if made != self._made:
            self._rebuild(made)
        for key, place in places.items():
            if not same_place(self._places.get(key), place):
                nail = self.nails[key]
                self._still.all_moved((nail, nail.sign))
                nail.setPos(*place)
                self._places[key] = place

    def _rebuild(self, made: tuple[tuple[Key, ...], frozenset[str]]) -> None:
        for nail in self.nails.values():
            self._still.forget((nail, nail.sign))
            self._scene.removeItem(nail)
        self._places = {}
        keys, locked = made
        self.nails = {key: Nail(key, key[1] in locked) for key in keys}
        self._made = made
        for nail in self.nails.values():
            if self._palette is not None:
                nail.dress(self._palette)
            self._scene.addItem(nail)
        hovered, chosen = self._hovered, self._chosen
        self._hovered = self._chosen = None
        self.hover(hovered)
        self.choose(chosen)

    def hover(self, key: Key | None) -> None:
        if key != self._hovered:
            if self._hovered in self.nails:
                self.nails[self._hovered].swell(False)
            self._hovered = key
            if key in self.nails:
                self.nails[key].swell(True)

    def choose(self, key: Key | None) -> None:
        if key != self._chosen:
            if self._chosen in self.nails:
                self.nails[self._chosen].choose(False)
            self._chosen = key
            if key in self.nails:
                self.nails[key].choose(True)


def nearest(places: dict[Key, XY], at: XY, reach: float, favored: Key | None) -> Key | None:
    """The nail nearest to a place within ``reach``, all in one unit.

    Of nails in one place the favored (chosen) one is taken.
    """
    best: tuple[float, Key] | None = None
    for key, (x, y) in places.items():
        gap = math.hypot(x - at[0], y - at[1]) - (0.5 if key == favored else 0.0)
        if gap <= reach and (best is None or gap < best[0]):
            best = gap, key
    return None if best is None else best[1]
