"""The car's parts on the floor: a few path items that follow the solution."""

from __future__ import annotations

from collections import defaultdict

from PySide6.QtCore import Qt
from PySide6.QtGui import QBrush, QColor, QLinearGradient, QPainterPath, QPen
from PySide6.QtWidgets import QGraphicsPathItem, QGraphicsScene

from app.floor.paths import NO_BRUSH, NO_PEN, brush, path_of, pen, same_outlines
from app.floor.stillness import Stillness
from app.palette import BROKEN_DASH, CHALK_DASH, Palette, mixed
from geometry.faces import FRONT, Face
from geometry.front_parts import OPEN_ROLES, ROLES, Part, Role
from geometry.layout import SIDES, SideName
from geometry.linkage import Array

PARTS_Z = 10.0
FOUND_Z = 5.0

OWNERS: tuple[SideName | None, ...] = (None, *SIDES)
_WIDTHS: dict[str, float] = {"tire": 1.8, "groove": 1.2}
_BARS: dict[str, float] = {"rim": 5.0, "spring": 11.0}
"""Roles that are bars of this thickness, mm, drawn as a line in a line."""
_FUSED = frozenset({"knuckle", "arm", "low arm", "relay", *_BARS})
"""Roles whose outlines melt into one: drawn first with an edge, then filled over it."""
_FOUND_ROLES = ("tire", "arm", "low arm", "knuckle", "tie", "strut", "rack", "relay")


def rounded(color: str, dark: bool, across: bool = True) -> QBrush:
    """A brush that makes a flat outline look round: ``across`` its width, or along its height."""
    light, shade = mixed(color, "#FFFFFF", 0.10 if dark else 0.16), mixed(color, "#000000", 0.30)
    over = QLinearGradient(0.0, 0.0, 1.0 if across else 0.0, 0.0 if across else 1.0)
    over.setCoordinateMode(QLinearGradient.CoordinateMode.ObjectMode)
    for at, tone in ((0.0, shade), (0.22, color), (0.40, light), (0.62, color), (1.0, shade)):
        over.setColorAt(at, QColor(tone))
    return QBrush(over)


class PartItems:
    """One path item per owner and role (two where outlines melt into one)."""

    def __init__(
        self,
        scene: QGraphicsScene,
        still: Stillness,
        roles: tuple[Role, ...] = ROLES,
        face: Face = FRONT,
    ) -> None:
        self._still, self._roles, self._face = still, roles, face
        self._items: dict[tuple[SideName | None, Role], list[QGraphicsPathItem]] = {}
        self._broken: dict[SideName | None, bool] = dict.fromkeys(OWNERS, False)
        self._shapes: dict[tuple[SideName | None, Role], list[Array]] = {}
        self._palette: Palette | None = None
        self._ratio = 1.0
        self._pens: dict[str, QPen] = {}
        self._brushes: dict[str, QBrush] = {}
        self.found = QGraphicsPathItem()
        self.found.setZValue(FOUND_Z)
        scene.addItem(self.found)
        for depth, role in enumerate(roles):
            for owner in OWNERS:
                layers = 2 if role in _FUSED else 1
                self._items[owner, role] = [
                    self._new(scene, PARTS_Z + depth * 0.1 + 0.01 * layer)
                    for layer in range(layers)
                ]

    @staticmethod
    def _new(scene: QGraphicsScene, z: float) -> QGraphicsPathItem:
        item = QGraphicsPathItem()
        item.setZValue(z)
        scene.addItem(item)
        return item

    def dress(self, palette: Palette, ratio: float) -> None:
        """Take colors; ``ratio`` is the device pixel ratio, which cosmetic pens count in."""
        self._palette, self._ratio = palette, ratio
        for role, (fill, edge) in palette.parts.items():
            width = _WIDTHS.get(role, 1.3) * ratio
            self._pens[role] = NO_PEN if edge is None else pen(edge, width)
            if role in _BARS and edge is not None and fill is not None:
                self._pens[role] = pen(edge, _BARS[role], cosmetic=False)
                self._pens[f"{role} core"] = pen(fill, 0.5 * _BARS[role], cosmetic=False)
                for bar in (self._pens[role], self._pens[f"{role} core"]):
                    bar.setJoinStyle(Qt.PenJoinStyle.RoundJoin)
            elif role in _FUSED and edge is not None:
                # Half of it disappears under the fill.
                self._pens[role] = pen(edge, 2.0 * width)
            self._brushes[role] = NO_BRUSH if role in _BARS else brush(fill)
        self._brushes["tire"] = rounded(
            palette.parts["tire"][0] or palette.floor, palette.dark, self._face is FRONT
        )
        self._pens["broken"] = pen(palette.broken, 1.4 * ratio, BROKEN_DASH)
        self.found.setPen(pen(palette.dust, 2.2 * ratio, CHALK_DASH))
        for owner in OWNERS:
            self._style(owner)

    def _style(self, owner: SideName | None) -> None:
        for role in self._roles:
            items = self._items[owner, role]
            if self._broken[owner]:
                items[0].setPen(NO_PEN if role.endswith("light") else self._pens["broken"])
                items[0].setBrush(NO_BRUSH)
            else:
                items[0].setPen(self._pens[role])
                items[0].setBrush(self._brushes[role])
            for over in items[1:]:
                core = self._pens.get(f"{role} core", NO_PEN)
                over.setPen(NO_PEN if self._broken[owner] else core)
                over.setBrush(NO_BRUSH if self._broken[owner] else self._brushes[role])

    def show(self, parts: list[Part], broken: set[SideName]) -> None:
        """Follow a solution's parts; sides in ``broken`` are only outlined."""
        grouped: dict[tuple[SideName | None, Role], list[Array]] = defaultdict(list)
        for part in parts:
            grouped[part.side, part.role].append(part.outline)
        for key, items in self._items.items():
            outlines = grouped.get(key, [])
            # While one nail is dragged, most parts stand still and cost nothing.
            if same_outlines(outlines, self._shapes.get(key, [])):
                continue
            self._shapes[key] = outlines
            path = path_of(outlines, key[1] not in OPEN_ROLES)
            for item in items:
                self._still.moved(item)
                item.setPath(path)
        for owner in SIDES:
            if self._broken[owner] != (owner in broken):
                self._broken[owner] = owner in broken
                self._style(owner)

    def show_found(self, parts: list[Part] | None) -> None:
        """The other car beneath, as chalk dust; None where there is none to see."""
        if parts is None:
            if not self.found.path().isEmpty():
                self.found.setPath(QPainterPath())
            return
        self._still.moved(self.found)
        self.found.setPath(path_of([p.outline for p in parts if p.role in _FOUND_ROLES], True))
