"""Tags on the floor: strips of masking tape that never cover each other or leave the view."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Literal

from PySide6.QtCore import QPointF
from PySide6.QtGui import QFont, QFontMetricsF, QPainterPath, QPen, QPolygonF
from PySide6.QtWidgets import (
    QGraphicsItem,
    QGraphicsLineItem,
    QGraphicsPathItem,
    QGraphicsScene,
    QGraphicsSimpleTextItem,
)

from app.floor.paths import brush, pen
from app.floor.stillness import Stillness
from app.palette import Palette
from geometry.labels import Box, Label, place_labels

TAGS_Z = 80.0
_PAD_X, _PAD_Y = 8.0, 3.0
_TOOTH = 3.0
_ARROW = 15.0

Look = Literal["tape", "edge", "notice"]


@dataclass(frozen=True)
class TagSpec:
    """What one tag says and where its anchor is, in the view's pixels.

    ``arrow`` is the direction (x right, y down) in which something lies off the floor.
    """

    key: str
    title: str
    detail: str
    anchor: tuple[float, float]
    clear: float = 9.0
    look: Look = "tape"
    arrow: tuple[float, float] | None = None

    @property
    def words(self) -> tuple[object, ...]:
        return self.title, self.detail, self.look, self.arrow is not None


class Tag(QGraphicsPathItem):
    """One strip with a bold and a plain text on one line."""

    def __init__(self, scene: QGraphicsScene, still: Stillness) -> None:
        super().__init__()
        self._still = still
        self._way: tuple[float, float] | None = None
        self.setFlag(QGraphicsItem.GraphicsItemFlag.ItemIgnoresTransformations)
        self.setZValue(TAGS_Z)
        self.title = QGraphicsSimpleTextItem(self)
        self.detail = QGraphicsSimpleTextItem(self)
        self.arrow = QGraphicsPathItem(self)
        self.width = self.height = 0.0
        self._words: tuple[object, ...] = ()
        scene.addItem(self)

    def dress(self, palette: Palette) -> None:
        self.setPen(pen(palette.tag_edge, 1.0, cosmetic=False))
        self.setBrush(brush(palette.tag))
        self.title.setBrush(brush(palette.tag_ink))
        self.detail.setBrush(brush(palette.tag_ink))
        self.arrow.setBrush(brush(palette.tag_ink))
        self.arrow.setPen(pen(palette.tag_ink, 1.0, cosmetic=False))

    def say(self, spec: TagSpec, bold: QFont, plain: QFont) -> None:
        """Take words and size; cheap while they stay the same."""
        if spec.words != self._words:
            self._words = spec.words
            self._write(spec, bold, plain)
        if spec.arrow is not None and spec.arrow != self._way:
            self._way = spec.arrow
            self.arrow.setPath(_arrow_path(spec.arrow))

    def _write(self, spec: TagSpec, bold: QFont, plain: QFont) -> None:
        self._still.all_moved((self, self.title, self.detail))
        x = _PAD_X + (_ARROW if spec.arrow is not None else 0.0)
        metrics = QFontMetricsF(bold)
        for item, text, font in ((self.title, spec.title, bold), (self.detail, spec.detail, plain)):
            item.setFont(font)
            item.setText(text)
            item.setPos(x, _PAD_Y)
            item.setVisible(bool(text))
            if text:
                x += QFontMetricsF(font).horizontalAdvance(text)
            if text and item is self.title and spec.detail:
                x += 0.6 * metrics.horizontalAdvance("n")
        self.width = round(x + _PAD_X)
        self.height = round(metrics.height() + 2 * _PAD_Y)
        self.arrow.setVisible(spec.arrow is not None)
        self.arrow.setPos(_PAD_X + 0.5 * _ARROW - 4.0, 0.5 * self.height)
        self.setPath(_torn_strip(self.width, self.height))

    def forget(self) -> None:
        """Write anew the next time (another font)."""
        self._words = ()


def _torn_strip(width: float, height: float) -> QPainterPath:
    """A strip of tape with toothed ends, as torn off the roll."""
    teeth = max(int(height // 5), 2)
    points = [QPointF(0.0, 0.0), QPointF(width, 0.0)]
    for k in range(1, 2 * teeth):
        inset = _TOOTH * 0.7 if k % 2 else 0.0
        points.append(QPointF(width - inset, height * k / (2 * teeth)))
    points += [QPointF(width, height), QPointF(0.0, height)]
    for k in range(2 * teeth - 1, 0, -1):
        inset = _TOOTH * 0.7 if k % 2 else 0.0
        points.append(QPointF(inset, height * k / (2 * teeth)))
    path = QPainterPath()
    path.addPolygon(QPolygonF(points))
    path.closeSubpath()
    return path


def _arrow_path(way: tuple[float, float]) -> QPainterPath:
    size = (way[0] ** 2 + way[1] ** 2) ** 0.5 or 1.0
    x, y = 5.0 * way[0] / size, 5.0 * way[1] / size
    path = QPainterPath(QPointF(x, y))
    path.lineTo(-0.7 * x - 0.85 * y, -0.7 * y + 0.85 * x)
    path.lineTo(-0.7 * x + 0.85 * y, -0.7 * y - 0.85 * x)
    path.closeSubpath()
    return path


class TagItems:
    """All tags in view; laid out anew whenever something moves."""

    def __init__(self, scene: QGraphicsScene, still: Stillness) -> None:
        self._scene, self._still = scene, still
        self._tags: dict[str, Tag] = {}
        self._leaders: dict[str, QGraphicsLineItem] = {}
        self._offsets: dict[str, tuple[float, float]] = {}
        self._palette: Palette | None = None
        self._bold, self._plain = QFont(), QFont()
        self._ratio = 1.0
        self.boxes: dict[str, Box] = {}

    def dress(self, palette: Palette, font: QFont, ratio: float) -> None:
        self._palette, self._ratio = palette, ratio
        self._plain = QFont(font)
        self._bold = QFont(font)
        self._bold.setBold(True)
        for key, tag in self._tags.items():
            tag.dress(palette)
            tag.forget()
            self._leaders[key].setPen(self._leader_pen())

    def _leader_pen(self) -> QPen:
        assert self._palette is not None
        return pen(self._palette.tag_quiet, 1.0 * self._ratio)

    def _tag(self, key: str) -> Tag:
        if key not in self._tags:
            assert self._palette is not None
            tag = Tag(self._scene, self._still)
            tag.dress(self._palette)
            self._tags[key] = tag
            leader = QGraphicsLineItem()
            leader.setZValue(TAGS_Z - 1.0)
            leader.setPen(self._leader_pen())
            self._scene.addItem(leader)
            self._leaders[key] = leader
        return self._tags[key]

    def show(
        self,
        specs: Sequence[TagSpec],
        area: Box,
        soft: Sequence[Box],
        hard: Sequence[Box],
        to_scene: Callable[[QPointF], QPointF],
    ) -> None:
        """Lay the tags out, the first ones first; ``to_scene`` maps view pixels to the scene."""
        labels = []
        for spec in specs:
            tag = self._tag(spec.key)
            tag.say(spec, self._bold, self._plain)
            labels.append(
                Label(spec.key, spec.anchor, tag.width, tag.height, spec.clear, spec.look == "edge")
            )
        self.boxes = place_labels(labels, area, soft, hard, self._offsets)
        shown = {spec.key: spec for spec in specs}
        for key, tag in self._tags.items():
            box = self.boxes.get(key)
            tag.setVisible(box is not None)
            if box is None:
                self._leaders[key].setVisible(False)
                continue
            spec = shown[key]
            tag.setPos(to_scene(QPointF(round(box.left), round(box.top))))
            self._offsets[key] = box.left - spec.anchor[0], box.top - spec.anchor[1]
            self._lead(key, spec, box, to_scene)
        for key in [k for k in self._offsets if k not in self.boxes]:
            del self._offsets[key]

    def _lead(
        self, key: str, spec: TagSpec, box: Box, to_scene: Callable[[QPointF], QPointF]
    ) -> None:
        """A thin line from a tag to what it names, where it had to go some way off."""
        x = min(max(spec.anchor[0], box.left), box.right)
        y = min(max(spec.anchor[1], box.top), box.bottom)
        dx, dy = x - spec.anchor[0], y - spec.anchor[1]
        far = (dx * dx + dy * dy) ** 0.5
        leader = self._leaders[key]
        wanted = spec.arrow is None and spec.look == "tape" and far > spec.clear + 12.0
        leader.setVisible(wanted)
        if wanted:
            share = spec.clear / far
            start = to_scene(QPointF(spec.anchor[0] + share * dx, spec.anchor[1] + share * dy))
            end = to_scene(QPointF(x, y))
            leader.setLine(start.x(), start.y(), end.x(), end.y())
