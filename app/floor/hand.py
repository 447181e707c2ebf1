"""The hand on the floor: dragging nails, panning, the measuring tape, and the keys."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

from PySide6.QtCore import QPointF, Qt
from PySide6.QtGui import QKeyEvent, QMouseEvent

from app.floor.nails import Key
from geometry.layout import Point
from geometry.standing import XY, sign_of
from geometry.tape import nudged, snapped

if TYPE_CHECKING:
    from app.floor.view import FloorView

_START = 3.0
"""How far the pointer goes before a press becomes a drag, pixels."""
_NONE = Qt.KeyboardModifier.NoModifier
_SHIFT = Qt.KeyboardModifier.ShiftModifier
_CTRL = Qt.KeyboardModifier.ControlModifier
_ALT = Qt.KeyboardModifier.AltModifier
_ARROWS = {
    Qt.Key.Key_Left: (-1, 0),
    Qt.Key.Key_Right: (1, 0),
    Qt.Key.Key_Up: (0, 1),
    Qt.Key.Key_Down: (0, -1),
}


@dataclass
class Drag:
    """A nail being dragged: where the pointer took it, and its measured place then.

    Dragging always moves the measured place, which is the one at ride height. Away from
    ride height a nail that moves with the wheel is moved by as much as the pointer goes.
    """

    key: Key
    pressed: QPointF
    start: Point
    last: Point
    moving: bool = False


class Hand:
    """Turns mouse and keys into acts on the document."""

    def __init__(self, view: FloorView) -> None:
        self._view = view
        self.drag: Drag | None = None
        self.panning: QPointF | None = None
        self.space = False
        self.measuring = False
        self.doing = False

    # --- mouse ----------------------------------------------------------------------

    def press(self, event: QMouseEvent) -> None:
        view, px = self._view, event.position()
        left = event.button() == Qt.MouseButton.LeftButton
        if self.drag is not None:
            self.cancel()
            return
        if event.button() == Qt.MouseButton.MiddleButton or (left and self.space):
            self.panning = px
            view.show_cursor()
            return
        if not left:
            return
        if view.shapes.drawing is not None:
            view.shapes.click(px, event.modifiers())
            return
        if view.tape_mode:
            place = self.tape_place(px, event.modifiers())
            view.stretch_tape(place, place)
            self.measuring = True
            return
        key = view.nail_at(px)
        if key is None:
            view.document.select(None)
            view.notice(None)
            view.shapes.press(px)
            return
        view.document.select(*key)
        if not view.may_move(key):
            return
        point = view.document.settled_layout().point(*key)
        self.drag = Drag(key, px, point, point)

    def move(self, event: QMouseEvent) -> None:
        view, px = self._view, event.position()
        view.point_at(px)
        if self.panning is not None:
            view.canvas.pan(px.x() - self.panning.x(), px.y() - self.panning.y())
            self.panning = px
        elif self.drag is not None:
            self._drag_to(px, event.modifiers())
        elif self.measuring:
            view.stretch_tape(view.tape_ends[0], self.tape_place(px, event.modifiers()))
        elif view.shapes.busy:
            view.shapes.move(px, event.modifiers())
        else:
            view.hover(view.nail_at(px))

    def release(self, event: QMouseEvent) -> None:
        view = self._view
        if self.panning is not None and event.button() in (
            Qt.MouseButton.MiddleButton,
            Qt.MouseButton.LeftButton,
        ):
            self.panning = None
            view.show_cursor()
        if event.button() != Qt.MouseButton.LeftButton:
            return
        if self.measuring:
            self.measuring = False
            view.stretch_tape(
                view.tape_ends[0], self.tape_place(event.position(), event.modifiers())
            )
        if view.shapes.dragging:
            view.shapes.release(event.position(), event.modifiers())
            return
        drag, self.drag = self.drag, None
        if drag is None:
            return
        if drag.moving:
            # The release may stand a little beyond the last move.
            drag.last = self._aim(drag, event.position(), event.modifiers())
            self.doing = True
            view.document.move_point(*drag.key, drag.last)
            self.doing = False
            view.announce_nail(drag.key)
        view.hover(view.nail_at(event.position()))

    def _drag_to(self, px: QPointF, modifiers: Qt.KeyboardModifier) -> None:
        drag = self.drag
        assert drag is not None
        way = px - drag.pressed
        if not drag.moving and math.hypot(way.x(), way.y()) < _START:
            return
        drag.moving = True
        to = self._aim(drag, px, modifiers)
        if to != drag.last:
            drag.last = to
            self._view.document.preview_point(*drag.key, to)

    def _aim(self, drag: Drag, px: QPointF, modifiers: Qt.KeyboardModifier) -> Point:
        """The measured place a drag asks for, on the tape's fraction unless freed."""
        view = self._view
        way = px - drag.pressed
        dx, dy = way.x(), way.y()
        if modifiers & _SHIFT:
            # Straight over, or straight along the floor's other measure.
            dx, dy = (dx, 0.0) if abs(dx) >= abs(dy) else (0.0, dy)
        dots, unit = view.canvas.dots, view.document.units
        face, start = view.face, drag.start
        over = start.over + sign_of(drag.key[0]) * dx / dots
        second = face.measure(start) - face.way * dy / dots
        if view.snapping and not modifiers & _ALT:
            over, second = snapped(over, unit), snapped(second, unit)
        # An axis along which the hand hasn't gone keeps what was measured.
        return face.moved(
            start,
            over if abs(dx) > 0.5 else start.over,
            second if abs(dy) > 0.5 else face.measure(start),
        )

    def tape_place(self, px: QPointF, modifiers: Qt.KeyboardModifier) -> XY:
        """Where the measuring tape takes hold: a nail nearby, or the tape's fraction."""
        view = self._view
        key = view.nail_at(px)
        if key is not None and not modifiers & _ALT:
            return view.scene.places[key]
        x, y = view.canvas.to_mm(px)
        if view.snapping and not modifiers & _ALT:
            return snapped(x, view.document.units), snapped(y, view.document.units)
        return x, y

    def cancel(self) -> bool:
        """Put back what is being dragged; False if nothing was."""
        if self._view.shapes.cancel():
            return True
        if self.drag is not None:
            self.drag = None
            self._view.document.cancel_preview()
            return True
        if self.measuring:
            self.measuring = False
            self._view.roll_up_tape()
            return True
        return False

    def forget(self) -> None:
        """The document changed under the hand: let go without an act."""
        if not self.doing:
            self.drag = None
            self._view.shapes.forget()

    # --- keys -----------------------------------------------------------------------

    def key(self, event: QKeyEvent) -> bool:
        """Act on a key; False leaves it to others."""
        view, key = self._view, Qt.Key(event.key())
        if view.shapes.key(event):
            return True
        if key == Qt.Key.Key_Space and not event.isAutoRepeat():
            self.space = True
            view.show_cursor()
            return True
        if key == Qt.Key.Key_Escape:
            return self._escape()
        if key in _ARROWS:
            keypad = Qt.KeyboardModifier.KeypadModifier
            return self._arrow(_ARROWS[key], event.modifiers() & ~keypad)
        plain = event.modifiers() == _NONE
        if key in (Qt.Key.Key_Return, Qt.Key.Key_Enter, Qt.Key.Key_F2) and plain:
            return self._enter()
        if key == Qt.Key.Key_T and plain:
            view.tape_mode = not view.tape_mode
            return True
        if event.text() in ("+", "="):
            view.zoom_in()
            return True
        if event.text() == "-":
            view.zoom_out()
            return True
        return False

    def key_up(self, event: QKeyEvent) -> bool:
        if event.key() == Qt.Key.Key_Space and not event.isAutoRepeat():
            self.space = False
            self._view.show_cursor()
            return True
        return False

    def _escape(self) -> bool:
        view = self._view
        if self.cancel():
            return True
        if view.tape_mode or view.tape_ends:
            view.tape_mode = False
            view.roll_up_tape()
            return True
        if view.document.selection is not None:
            view.document.select(None)
            view.notice(None)
            return True
        return False

    def _enter(self) -> bool:
        """Type a place for the chosen nail, or with the tape out, put an end of it there."""
        view, chosen = self._view, self._view.chosen
        if chosen is None:
            return False
        if not view.tape_mode:
            view.place_asked.emit(*chosen)
            return True
        place = view.scene.places[chosen]
        if len(view.tape_ends) == 2 and view.tape_ends[0] == view.tape_ends[1]:
            view.stretch_tape(view.tape_ends[0], place)
        else:
            view.stretch_tape(place, place)
        view.announce(view.tape_words())
        return True

    def _arrow(self, way: tuple[int, int], modifiers: Qt.KeyboardModifier) -> bool:
        view, chosen = self._view, self._view.chosen
        sizes = {_NONE: "plain", _SHIFT: "large", _CTRL: "fine"}
        size = sizes.get(modifiers)
        if size is None or self.drag is not None:
            return False
        if chosen is None:
            view.canvas.pan(-40.0 * way[0], 40.0 * way[1])
            return True
        if not view.may_move(chosen):
            return True
        layout = view.document.settled_layout()
        point, unit, face = layout.point(*chosen), layout.units, view.face
        over, second = point.over, face.measure(point)
        if way[0]:
            over = nudged(over, round(sign_of(chosen[0])) * way[0], size, unit)
        else:
            second = nudged(second, round(face.way) * way[1], size, unit)
        view.document.move_point(*chosen, face.moved(point, over, second))
        view.announce_nail(chosen)
        return True
