"""The hand on no-go shapes: drawing them corner by corner, and moving what is held of one."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from typing import TYPE_CHECKING

from PySide6.QtCore import QPointF, Qt
from PySide6.QtGui import QKeyEvent

from app.background import Background
from app.floor import wording
from app.floor.nails import REACH
from app.floor.shape_marks import ShapeMarks
from geometry.clearance import Clearance
from geometry.clearance_findings import room_words
from geometry.finding_checks.wording import Wording
from geometry.layout import NoGo
from geometry.no_go_shapes import (
    Held,
    box_corners,
    drawn_shape,
    held_at,
    least_room,
    moved_shape,
    on_floor,
    outline_fault,
    shape_sides,
    with_shape,
    without_corner,
)
from geometry.standing import XY, sign_of
from geometry.steering import least_lock
from geometry.tape import nudged, snapped

if TYPE_CHECKING:
    from app.floor.view import FloorView

_START = 3.0
_SHIFT = Qt.KeyboardModifier.ShiftModifier
_CTRL = Qt.KeyboardModifier.ControlModifier
_ALT = Qt.KeyboardModifier.AltModifier
_ARROWS = {
    Qt.Key.Key_Left: (-1, 0), Qt.Key.Key_Right: (1, 0),
    Qt.Key.Key_Up: (0, 1), Qt.Key.Key_Down: (0, -1),
}  # fmt: skip
_ENTER = (Qt.Key.Key_Return, Qt.Key.Key_Enter, Qt.Key.Key_F2)


@dataclass
class _Drag:
    """A shape or corner being dragged: where it was pressed and what it was and is."""

    pressed: QPointF
    start: NoGo
    last: NoGo
    moving: bool = False


class ShapeHand:
    """Draws and moves the no-go shapes of one floor; each act is one undo step."""

    def __init__(self, view: FloorView) -> None:
        self._view = view
        self.marks = ShapeMarks(view.scene)
        self.drawing: list[XY] | None = None
        """The corners clicked so far, mm on the floor; None while nothing is drawn."""
        self.boxed = False
        self.aim: XY | None = None
        self.held: Held | None = None
        self.room_words = ""
        self._drag: _Drag | None = None
        self._doing = False
        self.background = Background(view, wait_ms=30)
        self.background.answered.connect(self._take_room)

    @property
    def dragging(self) -> bool:
        return self._drag is not None

    @property
    def busy(self) -> bool:
        """True while the pointer's moves belong to a shape."""
        return self._drag is not None or self.drawing is not None

    # --- drawing --------------------------------------------------------------------

    def start_drawing(self, *, boxed: bool = False) -> None:
        """From now on clicks set corners; a box needs only two opposite ones."""
        view = self._view
        if not self._may_change():
            return
        view.hand.cancel()
        view.tape_mode = False
        view.document.select(None)
        self.held = None
        self.drawing, self.boxed, self.aim = [], boxed, None
        view.setFocus(Qt.FocusReason.OtherFocusReason)
        view.announce(" ".join(self.guidance()))
        view.show_cursor()
        view.lay_out()

    def stop_drawing(self) -> bool:
        """Forget what was drawn so far; False if nothing was."""
        if self.drawing is None:
            return False
        self.drawing = self.aim = None
        self._view.show_cursor()
        self._view.lay_out()
        return True

    def guidance(self) -> tuple[str, str]:
        """What to do next."""
        if self.boxed:
            which = "one corner" if not self.drawing else "the opposite corner"
            return f"Click {which} of the box.", "Esc stops."
        return (
            "Click corner after corner.",
            "Double-click or Enter closes the shape, Backspace takes one back, Esc stops.",
        )

    def click(self, px: QPointF, modifiers: Qt.KeyboardModifier) -> None:
        """Set a corner; on the first one, or a box's second, the shape is done."""
        assert self.drawing is not None
        place = self._aimed(px, modifiers)
        if self.drawing and not self.boxed and len(self.drawing) > 2:
            x, y = self._view.canvas.to_px(*self.drawing[0])
            if math.hypot(px.x() - x, px.y() - y) <= REACH:
                self.finish()
                return
        self.drawing.append(place)
        if self.boxed and len(self.drawing) == 2:
            self.drawing = box_corners(*self.drawing)
            self.finish()
            return
        self._view.lay_out()

    def finish(self) -> None:
        """Close the shape that is drawn and make it an undo step."""
        assert self.drawing is not None
        view = self._view
        layout = view.document.settled_layout()
        try:
            shape = drawn_shape(self.drawing, view.face, layout)
        except ValueError as reason:
            if self.boxed:
                self.drawing = self.drawing[:1]
            view.notice(str(reason), "Set another corner, or press Esc to stop.")
            view.lay_out()
            return
        self.drawing = self.aim = None
        self.held = Held(len(layout.no_go), shape_sides(shape)[0])
        self._apply("draw no-go shape", shape)
        view.show_cursor()
        where = "mirrored on both sides" if shape.side is None else "measured from the left"
        if shape.side == "right":
            where = "on the right side"
        view.notice(f"Drawn {where}.", "Enter names it and says how much room it wants.")

    def _aimed(self, px: QPointF, modifiers: Qt.KeyboardModifier) -> XY:
        """The place on the tape's fraction; with Shift straight from the last corner."""
        view = self._view
        x, y = view.canvas.to_mm(px)
        if view.snapping and not modifiers & _ALT:
            unit = view.document.units
            x, y = snapped(x, unit), snapped(y, unit)
        if modifiers & _SHIFT and self.drawing and not self.boxed:
            x0, y0 = self.drawing[-1]
            x, y = (x, y0) if abs(x - x0) >= abs(y - y0) else (x0, y)
        return x, y

    # --- holding and dragging ---------------------------------------------------------

    def held_shape(self) -> NoGo | None:
        """The shape that is held, as it is shown now."""
        shapes = self._view.document.layout.no_go
        if self.held is None or self.held.index >= len(shapes):
            return None
        shape = shapes[self.held.index]
        return shape if shape.view == self._view.face.name else None

    def held_corners(self) -> list[XY]:
        """Where its corners stand on the floor, mm."""
        shape = self.held_shape()
        if shape is None or self.held is None:
            return []
        return [(float(x), float(y)) for x, y in on_floor(shape, self.held.side, self._view.face)]

    def corner_words(self, corner: int) -> str:
        shape = self.held_shape()
        assert shape is not None
        view = self._view
        return wording.place_words(shape.outline[corner], view.document.units, view.face)

    def let_go(self) -> None:
        """Hold no shape any longer."""
        if self.held is not None:
            self.held = None
            self.room_words = ""
            self._view.lay_out()

    def hold(self, held: Held) -> None:
        """Choose a shape or one of its corners, and say what it is."""
        self.held, self.room_words = held, ""
        self._view.document.select(None)
        self._ask_room()
        self._view.lay_out()
        self._say_held()

    def at(self, px: QPointF) -> Held | None:
        """What of a shape is under a viewport position."""
        view = self._view
        return held_at(
            view.document.layout, view.face, view.canvas.to_mm(px),
            REACH / view.canvas.dots, self.held,
        )

    def take_up(self, px: QPointF) -> Held | None:
        """Choose what is under the pointer, or nothing."""
        found = None if self._view.document.showing_found else self.at(px)
        if found is None:
            self.let_go()
        else:
            self.hold(found)
        return found

    def press(self, px: QPointF) -> None:
        """Take hold of what is under the pointer to drag it."""
        found = self.take_up(px)
        if found is None:
            return
        shape = self._view.document.settled_layout().no_go[found.index]
        self._drag = _Drag(px, shape, shape)

    def move(self, px: QPointF, modifiers: Qt.KeyboardModifier) -> None:
        """Follow the pointer: with the next corner, or with what is dragged."""
        if self.drawing is not None:
            self.aim = self._aimed(px, modifiers)
            self._view.lay_out()
            return
        drag = self._drag
        if drag is None:
            return
        way = px - drag.pressed
        if not drag.moving and math.hypot(way.x(), way.y()) < _START:
            return
        drag.moving = True
        shape = self._dragged(drag, px, modifiers)
        if shape != drag.last and self.held is not None:
            drag.last = shape
            document = self._view.document
            document.preview_layout(with_shape(document.settled_layout(), self.held.index, shape))
            self._ask_room()

    def release(self, px: QPointF, modifiers: Qt.KeyboardModifier) -> None:
        drag, self._drag = self._drag, None
        if drag is None or not drag.moving:
            return
        self._change(self._dragged(drag, px, modifiers))

    def _dragged(self, drag: _Drag, px: QPointF, modifiers: Qt.KeyboardModifier) -> NoGo:
        """The shape where the pointer took it, its held (or first) corner on the fraction."""
        view, held = self._view, self.held
        assert held is not None
        way = px - drag.pressed
        dx, dy = way.x(), way.y()
        if modifiers & _SHIFT:
            dx, dy = (dx, 0.0) if abs(dx) >= abs(dy) else (0.0, dy)
        dots, unit = view.canvas.dots, view.document.units
        over = sign_of(held.side) * dx / dots
        second = -view.face.way * dy / dots
        if view.snapping and not modifiers & _ALT:
            first = drag.start.outline[held.corner or 0]
            over = snapped(first[0] + over, unit) - first[0]
            second = snapped(first[1] + second, unit) - first[1]
        return moved_shape(
            drag.start, held.corner,
            over if abs(dx) > 0.5 else 0.0, second if abs(dy) > 0.5 else 0.0,
        )

    def cancel(self) -> bool:
        """Put back what is being dragged; False if nothing was."""
        drag, self._drag = self._drag, None
        if drag is None:
            return False
        self._view.document.cancel_preview()
        self._ask_room()
        return drag.moving

    def forget(self) -> None:
        """The document changed under the hand."""
        if self._doing:
            return
        self._drag = None
        if self.held is not None:
            shape = self.held_shape()
            if shape is None or (self.held.corner or 0) >= len(shape.outline):
                self.held, self.room_words = None, ""
            else:
                self._ask_room()

    # --- keys -----------------------------------------------------------------------

    def key(self, event: QKeyEvent) -> bool:
        """Act on a key while a shape is drawn or held; False leaves it to others."""
        key = Qt.Key(event.key())
        if self.drawing is not None:
            return self._drawing_key(key)
        if self.held_shape() is None:
            return False
        if key in _ARROWS:
            keypad = Qt.KeyboardModifier.KeypadModifier
            return self._nudge(_ARROWS[key], event.modifiers() & ~keypad)
        if key in (Qt.Key.Key_Delete, Qt.Key.Key_Backspace):
            self.delete()
            return True
        if key in (Qt.Key.Key_PageDown, Qt.Key.Key_PageUp):
            self._walk_corners(1 if key == Qt.Key.Key_PageDown else -1)
            return True
        if key in _ENTER and self.held is not None:
            self._view.shape_asked.emit(self.held.index)
            return True
        if key == Qt.Key.Key_Escape and not self.dragging:
            self.let_go()
            return True
        return False

    def _drawing_key(self, key: Qt.Key) -> bool:
        assert self.drawing is not None
        if key == Qt.Key.Key_Escape:
            return self.stop_drawing()
        if key == Qt.Key.Key_Backspace:
            self.drawing = self.drawing[:-1]
            self._view.lay_out()
            return True
        if key in _ENTER:
            self.finish()
            return True
        return False

    def _walk_corners(self, way: int) -> None:
        """From the whole shape through its corners and back to the whole."""
        shape, held = self.held_shape(), self.held
        assert shape is not None and held is not None
        count = len(shape.outline) + 1
        at = 0 if held.corner is None else held.corner + 1
        to = (at + way) % count
        self.hold(Held(held.index, held.side, None if to == 0 else to - 1))

    def _nudge(self, way: tuple[int, int], modifiers: Qt.KeyboardModifier) -> bool:
        none = Qt.KeyboardModifier.NoModifier
        size = {none: "plain", _SHIFT: "large", _CTRL: "fine"}.get(modifiers)
        held, view = self.held, self._view
        if size is None or self.dragging or held is None or not self._may_change():
            return size is not None
        shape, unit = view.document.settled_layout().no_go[held.index], view.document.units
        over, second = shape.outline[held.corner or 0]
        to_over, to_second = over, second
        if way[0]:
            to_over = nudged(over, round(sign_of(held.side)) * way[0], size, unit)
        else:
            to_second = nudged(second, round(view.face.way) * way[1], size, unit)
        self._change(moved_shape(shape, held.corner, to_over - over, to_second - second))
        return True

    def delete(self) -> None:
        """Take away the held corner, or the whole shape if none is held."""
        held, document = self.held, self._view.document
        if held is None or self.dragging or not self._may_change():
            return
        shape = document.settled_layout().no_go[held.index]
        if held.corner is None:
            self.held = None
            self._apply(f"take away {shape.name or 'no-go shape'}", None, held.index)
            return
        try:
            fewer = without_corner(shape, held.corner)
        except ValueError as reason:
            self._view.notice(str(reason))
            return
        self.held = Held(held.index, held.side)
        self._change(fewer, "remove corner")

    def double_click(self, px: QPointF, *, on_nail: bool) -> bool:
        """Close what is drawn, or type the shape under the pointer; False for neither."""
        if self.drawing is not None:
            if not self.boxed:
                self.finish()
            return True
        found = None if on_nail or self._view.document.showing_found else self.at(px)
        if found is None:
            return False
        self.hold(found)
        self._view.shape_asked.emit(found.index)
        return True

    # --- acts -----------------------------------------------------------------------

    def _may_change(self) -> bool:
        if self._view.document.showing_found:
            self._view.notice(
                "The car as found is shown to look at.", "Switch to as planned to change shapes."
            )
            return False
        return True

    def _change(self, shape: NoGo, act: str = "") -> None:
        """Make a changed shape an undo step, or say why it is none."""
        assert self.held is not None
        reason = outline_fault(shape.outline)
        if reason:
            self._view.document.cancel_preview()
            self._view.notice(reason)
            return
        act = act or ("move no-go shape" if self.held.corner is None else "move corner")
        self._apply(act, shape, self.held.index)
        self._say_held()

    def _apply(self, act: str, shape: NoGo | None, index: int | None = None) -> None:
        document = self._view.document
        layout = document.settled_layout()
        self._doing = True
        document.apply_layout(
            act, with_shape(layout, len(layout.no_go) if index is None else index, shape)
        )
        self._doing = False
        self._ask_room()
        self._view.lay_out()

    # --- showing --------------------------------------------------------------------

    def lay_out(self) -> None:
        """Draw what is drawn or held at the zoom that stands."""
        dots = self._view.canvas.dots
        if self.drawing is not None:
            corners = list(self.drawing)
            if self.aim is not None:
                boxed = self.boxed and len(corners) == 1
                corners = box_corners(corners[0], self.aim) if boxed else [*corners, self.aim]
            self.marks.show(corners, len(corners) - 1, dots, closed=self.boxed)
            return
        corner = None if self.held is None else self.held.corner
        self.marks.show(self.held_corners(), corner, dots, closed=True)

    def _say_held(self) -> None:
        shape, held = self.held_shape(), self.held
        if shape is None or held is None:
            return
        words = shape.name or "no-go shape"
        if held.corner is not None:
            words += f", corner {held.corner + 1}: {self.corner_words(held.corner)}"
        self._view.announce(words)

    def _ask_room(self) -> None:
        """Ask a worker how much room the held shape leaves."""
        document, held = self._view.document, self.held
        if held is None or self.held_shape() is None:
            self.background.drop()
            self.room_words = ""
            return
        layout, span, index = document.layout, document.span, held.index

        def question(stopped: Callable[[], bool]) -> tuple[Clearance | None, Wording]:
            return least_room(layout, index, span, least_lock(layout)), Wording(layout.units)

        self.background.ask(question)

    def _take_room(self, answer: tuple[Clearance | None, Wording]) -> None:
        room, words = answer
        self.room_words = "" if room is None else room_words(room, words)
        self._view.lay_out()
