"""The floor's canvas with its mouse, keys and gestures handed to the FloorView that owns it."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent, QPointF, Qt
from PySide6.QtGui import (
    QContextMenuEvent,
    QFocusEvent,
    QKeyEvent,
    QMouseEvent,
    QNativeGestureEvent,
    QWheelEvent,
)
from PySide6.QtWidgets import QGestureEvent, QPinchGesture

from app.floor.canvas import Canvas
from app.floor.scene import CarScene

if TYPE_CHECKING:
    from app.floor.view import FloorView


class HandledCanvas(Canvas):
    """The canvas with its events handed to a FloorView."""

    def __init__(self, scene: CarScene, owner: FloorView) -> None:
        super().__init__(scene, owner)
        self._owner = owner
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.viewport().grabGesture(Qt.GestureType.PinchGesture)
        views = {"front": "front view", "above": "view from above"}
        self.setAccessibleName(f"Floor, {views[owner.face.name]}")
        self.setAccessibleDescription(
            "Tab walks the nails, arrow keys move the chosen one. The measure sheet holds the "
            "same places as a table."
        )

    def mousePressEvent(self, event: QMouseEvent) -> None:
        self._owner.hand.press(event)
        event.accept()

    def mouseMoveEvent(self, event: QMouseEvent) -> None:
        self._owner.hand.move(event)
        event.accept()

    def mouseReleaseEvent(self, event: QMouseEvent) -> None:
        self._owner.hand.release(event)
        event.accept()

    def mouseDoubleClickEvent(self, event: QMouseEvent) -> None:
        self._owner.double_click(event.position())
        event.accept()

    def wheelEvent(self, event: QWheelEvent) -> None:
        self._owner.wheel(event)
        event.accept()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        # What the hand asks about has to be on the floor as it stands now.
        self._owner.document.settle()
        if not self._owner.hand.key(event):
            event.ignore()

    def keyReleaseEvent(self, event: QKeyEvent) -> None:
        if not self._owner.hand.key_up(event):
            event.ignore()

    def contextMenuEvent(self, event: QContextMenuEvent) -> None:
        self._owner.document.settle()
        self._owner.ask_menu(event)
        event.accept()

    def focusNextPrevChild(self, forward: bool) -> bool:
        return self._owner.walk(forward) or super().focusNextPrevChild(forward)

    def focusInEvent(self, event: QFocusEvent) -> None:
        super().focusInEvent(event)
        self._owner.focused(event.reason())

    def focusOutEvent(self, event: QFocusEvent) -> None:
        super().focusOutEvent(event)
        # A window that is being taken down sends this after Python has let go of it.
        owner = getattr(self, "_owner", None)
        if owner is not None:
            owner.hand.space = False

    def viewportEvent(self, event: QEvent) -> bool:
        if event.type() == QEvent.Type.Leave:
            self._owner.pointer_left()
        if event.type() == QEvent.Type.Gesture and isinstance(event, QGestureEvent):
            pinch = event.gesture(Qt.GestureType.PinchGesture)
            if isinstance(pinch, QPinchGesture):
                middle = self.viewport().mapFromGlobal(pinch.centerPoint().toPoint())
                self.zoom(pinch.scaleFactor(), QPointF(middle))
                event.accept()
                return True
        if isinstance(event, QNativeGestureEvent) and (
            event.gestureType() == Qt.NativeGestureType.ZoomNativeGesture
        ):
            self.zoom(1.0 + event.value(), event.position())
            return True
        return super().viewportEvent(event)
