"""Pictures kept of the items that stand still, so that a drag paints only what moves.

Painting the outlines anew is most of a frame: of an 8.4 ms repaint the parts took 5. An item
that has stood still for two frames is kept as a picture; one that moves goes back to being
drawn, as a picture remade in every frame costs more than none.
"""

from __future__ import annotations

from collections.abc import Iterable

from PySide6.QtGui import QPixmapCache
from PySide6.QtWidgets import QGraphicsItem

_AFTER = 2
"""Frames without a move after which an item counts as standing still."""
_ROOM_KB = 128 * 1024
"""Room for the kept pictures: a large screen's worth of a car that fills it."""

_DRAWN = QGraphicsItem.CacheMode.NoCache
_KEPT = QGraphicsItem.CacheMode.DeviceCoordinateCache


class Stillness:
    """Knows which items moved lately, and keeps pictures of the others."""

    def __init__(self) -> None:
        self._moved: dict[QGraphicsItem, int] = {}
        self._frame = 0
        if QPixmapCache.cacheLimit() < _ROOM_KB:
            QPixmapCache.setCacheLimit(_ROOM_KB)

    def moved(self, item: QGraphicsItem) -> None:
        """An item was given another shape or look, or is new."""
        if item not in self._moved:
            item.setCacheMode(_DRAWN)
        self._moved[item] = self._frame

    def all_moved(self, items: Iterable[QGraphicsItem]) -> None:
        for item in items:
            self.moved(item)

    def frame(self) -> None:
        """A new frame begins: keep pictures of what has not moved for a while."""
        self._frame += 1
        still = [item for item, at in self._moved.items() if self._frame - at > _AFTER]
        for item in still:
            del self._moved[item]
            item.setCacheMode(_KEPT)

    def forget(self, items: Iterable[QGraphicsItem]) -> None:
        """Items that leave the scene."""
        for item in items:
            self._moved.pop(item, None)
