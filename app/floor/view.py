"""FloorView: the front view of the open car, drawn from its solution and edited by hand.

The view from above (``app.floor.above``) is a FloorView too: all habits of the hand are the
same, only what stands on the floor and which two measures it shows differ.
"""

from __future__ import annotations

from PySide6.QtCore import QEvent, QPointF, QRectF, Qt, QTimer, Signal
from PySide6.QtGui import (
    QAccessible,
    QAccessibleAnnouncementEvent,
    QContextMenuEvent,
    QWheelEvent,
)
from PySide6.QtWidgets import QGridLayout, QLabel, QWidget

from app.document import Document
from app.floor import wording
from app.floor.hand import Hand
from app.floor.handled_canvas import HandledCanvas
from app.floor.measuring import MeasuringTape
from app.floor.menu import nail_menu
from app.floor.nails import REACH, Key, nearest
from app.floor.scene import CarScene, FloorScene, zone_outlines
from app.floor.shape_hand import ShapeHand
from app.floor.tag_list import tag_list
from app.floor.tags import TagSpec
from app.floor.tapes import Tape
from app.palette import DARK, LIGHT, Palette
from geometry.drawing import Drawing
from geometry.faces import FRONT, Face
from geometry.finding_checks.finding import Finding
from geometry.floor_drawing import floor_drawing, floor_pages
from geometry.labels import Box
from geometry.layout import RELAY_POINTS, SideName
from geometry.pages import Pages
from geometry.standing import XY

_NOTICE_MS = 4500


class FloorView(QWidget):
    """The floor with its two tapes."""

    face: Face = FRONT

    pointer_moved = Signal(float, float)
    """The pointer's place: over (left of the car positive) and the second measure, mm."""
    place_asked = Signal(str, str)
    """A person wants to type a place for a nail (side, point name)."""
    shape_asked = Signal(int)
    """A person wants to type a no-go shape; its place in Layout.no_go."""
    tape_mode_changed = Signal(bool)
    announced = Signal(str)
    """What a screen reader was told."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.document = document
        self.scene: CarScene = self._new_scene()
        self.hand = Hand(self)
        self.shapes = ShapeHand(self)
        self.canvas = HandledCanvas(self.scene, self)
        self.measuring = MeasuringTape(self.scene)
        self.across = Tape(Qt.Orientation.Horizontal, self)
        self.upright = Tape(
            Qt.Orientation.Vertical, self, name=self.face.second, down=self.face.way < 0.0
        )
        self._corner = QLabel(self)
        self._corner.setAlignment(Qt.AlignmentFlag.AlignCenter)
        grid = QGridLayout(self)
        grid.setContentsMargins(0, 0, 0, 0)
        grid.setSpacing(0)
        grid.addWidget(self.upright, 0, 0)
        grid.addWidget(self.canvas, 0, 1)
        grid.addWidget(self._corner, 1, 0)
        grid.addWidget(self.across, 1, 1)
        self.setFocusProxy(self.canvas)
        self.setMinimumSize(320, 240)
        self.snapping = True
        self.hovered: Key | None = None
        self._awake, self._stale = True, False
        self._notice: tuple[str, str, Key | None] | None = None
        self._tape_mode = False
        self._palette: Palette = LIGHT
        self._notice_timer = QTimer(self)
        self._notice_timer.setSingleShot(True)
        self._notice_timer.setInterval(_NOTICE_MS)
        self._notice_timer.timeout.connect(self._notice_over)
        self._dress()
        self.refresh()
        self._fit_content()
        self.canvas.moved.connect(self.lay_out)
        document.solved.connect(self.refresh)
        document.edited.connect(self._edited)
        document.selected.connect(self._selected)
        document.opened.connect(self._opened)

    def _new_scene(self) -> CarScene:
        return FloorScene()

    def viewport(self) -> QWidget:
        """The widget that takes the mouse."""
        return self.canvas.viewport()

    # --- looks ------------------------------------------------------------------------

    def set_dark(self, dark: bool) -> None:
        """The dark floor, or the light one."""
        self._palette = DARK if dark else LIGHT
        self._dress()
        self.lay_out()

    def _dress(self) -> None:
        palette = self._palette
        self.scene.dress(palette, self.font(), self.devicePixelRatioF())
        self.shapes.marks.dress(palette, self.devicePixelRatioF())
        self.measuring.dress(palette, self.font(), self.devicePixelRatioF())
        self.canvas.dress(palette, self.document.units)
        self.across.dress(palette)
        self.upright.dress(palette)
        self._corner.setText(self.document.units)
        self._corner.setStyleSheet(
            f"background: {palette.tape}; color: {palette.tape_ink};"
            f"border: 1px solid {palette.tape_edge};"
        )
        self.canvas.viewport().update()

    def changeEvent(self, event: QEvent) -> None:
        super().changeEvent(event)
        if event.type() in (QEvent.Type.FontChange, QEvent.Type.DevicePixelRatioChange):
            self._dress()
            self.lay_out()

    # --- following the document -------------------------------------------------------

    def wake(self, awake: bool) -> None:
        """A floor that is not in sight sleeps: it follows nothing until it is woken."""
        self._awake = awake
        if awake and self._stale:
            self._dress()
            self.refresh()
            if self.canvas.fitted:
                self.fit()

    def refresh(self) -> None:
        """Draw the solution that stands."""
        self._stale = not self._awake
        if self._stale:
            return
        document = self.document
        self.scene.follow(document.shown_solution, document.outline_solution)
        if self.hovered not in self.scene.places:
            self.hovered = None
        self.lay_out()

    def lay_out(self) -> None:
        """Fit what depends on zoom and place: strings' ends, tags and tapes."""
        canvas = self.canvas
        self.scene.stretch(canvas.in_view(30.0))
        self.scene.nails.choose(self.chosen)
        self.scene.nails.hover(self.hovered if self.hand.drag is None else self.hand.drag.key)
        self.shapes.lay_out()
        port = canvas.viewport().rect()
        area = Box(4.0, 4.0, port.width() - 8.0, port.height() - 8.0)
        specs, soft = self._tags(area)
        self.scene.tags.show(specs, area, soft, [], canvas.from_px)
        x, y = canvas.to_px(0.0, 0.0)
        self.across.lay(x, canvas.dots, self.document.units)
        self.upright.lay(y, canvas.dots, self.document.units)

    def _tags(self, area: Box) -> tuple[list[TagSpec], list[Box]]:
        """The tags to show, most wanted first, and boxes that they should not cover."""
        return tag_list(self, area)

    def _edited(self) -> None:
        self.hand.forget()
        if self._stale:
            return
        if self.canvas.unit != self.document.units:
            self._dress()
            self.lay_out()

    def _selected(self) -> None:
        if self.document.selection is not None:
            self.shapes.let_go()
        if self._awake:
            self.lay_out()

    def _opened(self) -> None:
        self.hand.forget()
        self.hovered = None
        self._notice = None
        self.measuring.roll_up()
        self.scene.set_zone("left", [])
        self.scene.set_zone("right", [])
        self.scene.set_nail_zone("left", "", [])
        self._stale = not self._awake
        if self._stale:
            self.canvas.fitted = True
            return
        self._dress()
        self.refresh()
        self.fit()

    def _fit_content(self) -> None:
        """What "fit" shows: the car at ride height, its center of gravity, some floor."""
        tops, outs = [300.0], [300.0]
        for stand in self.scene.stands.values():
            tire = stand.state.side.tire
            points = stand.state.side.points.values()
            wheel = stand.state.side["wheel center"]
            tops += [wheel.up + tire.radius, *(p.up for p in points)]
            outs += [wheel.over + 0.5 * tire.width, *(abs(p.over) for p in points)]
        high = self.document.layout.cg_height
        top = max([*tops, high or 0.0]) + 70.0
        out = min(max(outs), 5000.0) + 60.0
        low = -0.14 * top
        self.canvas.set_content(QRectF(-out, low, 2 * out, min(top, 5000.0) - low))

    # --- zoom -------------------------------------------------------------------------

    def fit(self) -> None:
        """Show the whole car."""
        self._fit_content()
        self.canvas.fit()

    def zoom_in(self) -> None:
        self.canvas.zoom(1.25)

    def zoom_out(self) -> None:
        self.canvas.zoom(1 / 1.25)

    def wheel(self, event: QWheelEvent) -> None:
        """Zoom at the pointer."""
        turn = event.angleDelta().y()
        if turn:
            self.canvas.zoom(1.0015**turn, event.position())

    # --- nails ------------------------------------------------------------------------

    @property
    def chosen(self) -> Key | None:
        """The chosen nail, once the floor shows it."""
        key = self.document.selection
        return key if key in self.scene.places else None

    def nail_at(self, px: QPointF) -> Key | None:
        """The nail under a viewport position."""
        at = self.canvas.to_mm(px)
        return nearest(self.scene.places, at, REACH / self.canvas.dots, self.chosen)

    def hover(self, key: Key | None) -> None:
        if key != self.hovered:
            self.hovered = key
            self.show_cursor()
            self.lay_out()

    def point_at(self, px: QPointF) -> None:
        """Tell the tapes and the status bar where the pointer is."""
        self.across.point(px.x())
        self.upright.point(px.y())
        over, second = self.canvas.to_mm(px)
        self.pointer_moved.emit(over, self.face.way * second)

    def pointer_left(self) -> None:
        self.across.point(None)
        self.upright.point(None)
        if self.hand.drag is None:
            self.hover(None)

    def may_move(self, key: Key) -> bool:
        """True if a nail may be moved now; otherwise says calmly why not."""
        name = wording.nail_name(self.document.layout, key)
        if self.document.showing_found:
            self.notice(
                "The car as found is shown to look at.", "Switch to as planned to move nails."
            )
            return False
        if key[1] in self.document.layout.locked:
            self.notice(f"{name} is locked.", "Unlock it to move it.", key)
            return False
        self.notice(None)
        return True

    def notice(self, title: str | None, detail: str = "", key: Key | None = None) -> None:
        """Show a calm tag for a while (None: put it away)."""
        wanted = None if title is None else (title, detail, key)
        if title is not None:
            self._notice_timer.start()
            self.announce(f"{title} {detail}")
        if wanted != self._notice:
            self._notice = wanted
            self.lay_out()

    def _notice_over(self) -> None:
        self.notice(None)

    @property
    def noticed(self) -> tuple[str, str, Key | None] | None:
        return self._notice

    def walkable(self) -> list[Key]:
        """The nails in the order in which Tab walks them; of mirrored sides only the left."""
        layout = self.document.layout
        return [
            (side, name)
            for side, name in self.scene.places
            if side == "left" or not layout.linked or name in RELAY_POINTS
        ]

    def walk(self, forward: bool) -> bool:
        """Choose the next nail; False past the last, so that Tab leaves the floor."""
        keys = self.walkable()
        if not keys:
            return False
        chosen = self.chosen
        if chosen is not None and chosen not in keys:
            chosen = ("left", chosen[1])
        if chosen is None:
            to = 0 if forward else len(keys) - 1
        else:
            to = keys.index(chosen) + (1 if forward else -1)
        if not 0 <= to < len(keys):
            return False
        self.choose(keys[to])
        return True

    def choose(self, key: Key) -> None:
        """Choose a nail, bring it into view and announce it."""
        self.document.select(*key)
        self.canvas.reveal(*self.scene.places[key])
        self.announce_nail(key)

    def focused(self, reason: Qt.FocusReason) -> None:
        keys = self.walkable()
        if keys and reason == Qt.FocusReason.TabFocusReason:
            self.choose(keys[0])
        elif keys and reason == Qt.FocusReason.BacktabFocusReason:
            self.choose(keys[-1])

    def announce_nail(self, key: Key) -> None:
        self.announce(wording.spoken(self.document.layout, key, self.face))

    def announce(self, words: str) -> None:
        """Tell a screen reader."""
        QAccessible.updateAccessibility(QAccessibleAnnouncementEvent(self.canvas, words))
        self.announced.emit(words)

    def double_click(self, px: QPointF) -> None:
        """On a nail: type its place. Elsewhere: the whole car."""
        key = self.nail_at(px)
        if self.shapes.double_click(px, on_nail=key is not None):
            return
        if key is None:
            self.fit()
        else:
            self.document.select(*key)
            self.place_asked.emit(*key)

    def ask_menu(self, event: QContextMenuEvent) -> None:
        by_mouse = event.reason() == QContextMenuEvent.Reason.Mouse
        key = self.nail_at(QPointF(event.pos())) if by_mouse else self.chosen
        at = event.globalPos()
        if not by_mouse and key is not None:
            x, y = self.canvas.to_px(*self.scene.places[key])
            at = self.viewport().mapToGlobal(QPointF(x, y).toPoint())
        self.hand.cancel()
        if key is not None:
            self.document.select(*key)
        elif by_mouse:
            self.shapes.take_up(QPointF(event.pos()))
        menu = nail_menu(self, key)
        menu.exec(at)
        menu.deleteLater()

    # --- findings and zones -------------------------------------------------------------

    def point_out(self, finding: object) -> None:
        """Show what a finding is about: choose its first point and bring it into view."""
        if not isinstance(finding, Finding):
            return
        side: SideName = finding.side or "left"
        for name in finding.points:
            for key in ((side, name), ("left", name), ("right", name)):
                if key in self.scene.places:
                    self.choose(key)
                    return

    def set_zone(self, side: SideName, polygons: object) -> None:
        """Tint where a side's inner tie-rod pivot may sit.

        ``polygons``: a shapely Polygon or MultiPolygon, or a list of (n, 2) arrays, in side
        measure (over, up; mm); None or an empty list for none.
        """
        self.scene.set_zone(side, zone_outlines(polygons))

    def set_nail_zone(self, side: SideName, name: str, polygons: object) -> None:
        """Hatch where a nail may sit, in the same forms; None or an empty list for none."""
        self.scene.set_nail_zone(side, name, zone_outlines(polygons))

    # --- the measuring tape -------------------------------------------------------------

    @property
    def tape_mode(self) -> bool:
        """True while pressing and dragging measures instead of moving nails."""
        return self._tape_mode

    @tape_mode.setter
    def tape_mode(self, on: bool) -> None:
        if on == self._tape_mode:
            return
        self.hand.cancel()
        self.shapes.stop_drawing()
        self._tape_mode = on
        if not on:
            self.roll_up_tape()
        self.show_cursor()
        self.tape_mode_changed.emit(on)

    @property
    def tape_ends(self) -> tuple[XY, ...]:
        return self.measuring.ends

    def stretch_tape(self, start: XY, end: XY) -> None:
        self.measuring.stretch(start, end)
        self.lay_out()

    def roll_up_tape(self) -> None:
        if self.measuring.ends:
            self.measuring.roll_up()
            self.lay_out()

    def tape_words(self) -> str:
        """What the tape reads, as one sentence."""
        if len(self.tape_ends) != 2:
            return ""
        start, end = self.tape_ends
        units = self.document.units
        far = wording.distance_words(start, end, units)
        return f"{far}: {wording.measured_words(start, end, units, self.face)}"

    def show_cursor(self) -> None:
        if self.hand.panning is not None:
            shape = Qt.CursorShape.ClosedHandCursor
        elif self.hand.space:
            shape = Qt.CursorShape.OpenHandCursor
        elif self._tape_mode or self.shapes.drawing is not None:
            shape = Qt.CursorShape.CrossCursor
        elif self.hovered is not None:
            shape = Qt.CursorShape.PointingHandCursor
        else:
            shape = Qt.CursorShape.ArrowCursor
        self.viewport().setCursor(shape)

    # --- pictures -----------------------------------------------------------------------

    def drawing(self) -> Drawing:
        """The floor as it stands as a neutral drawing, for pictures."""
        return floor_drawing(self.document.shown_solution, self.document.outline_solution)

    def pages(self) -> Pages:
        """The floor as it stands, on paper."""
        return floor_pages(self.document.shown_solution, self.document.outline_solution)
