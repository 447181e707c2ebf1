"""Hands for tests: mouse and keys sent to the floor's viewport as a person would."""

from __future__ import annotations

from PySide6.QtCore import QEvent, QPointF, Qt
from PySide6.QtGui import QMouseEvent
from PySide6.QtWidgets import QApplication

from app.floor.view import FloorView

NONE = Qt.KeyboardModifier.NoModifier
LEFT = Qt.MouseButton.LeftButton


def send(
    view: FloorView,
    kind: QEvent.Type,
    px: QPointF,
    button: Qt.MouseButton = LEFT,
    modifiers: Qt.KeyboardModifier = NONE,
) -> None:
    """One mouse event at a viewport position, pixels."""
    port = view.viewport()
    changes = button if kind != QEvent.Type.MouseMove else Qt.MouseButton.NoButton
    held = Qt.MouseButton.NoButton if kind == QEvent.Type.MouseButtonRelease else button
    place = QPointF(port.mapToGlobal(px))
    QApplication.sendEvent(port, QMouseEvent(kind, px, place, changes, held, modifiers))


def press(view: FloorView, px: QPointF, **how) -> None:
    send(view, QEvent.Type.MouseButtonPress, px, **how)


def move(view: FloorView, px: QPointF, **how) -> None:
    send(view, QEvent.Type.MouseMove, px, **how)


def release(view: FloorView, px: QPointF, **how) -> None:
    send(view, QEvent.Type.MouseButtonRelease, px, **how)


def hover(view: FloorView, mm: tuple[float, float]) -> None:
    """The pointer over a place on the floor, no button held."""
    move(view, at(view, mm), button=Qt.MouseButton.NoButton)


def at(view: FloorView, mm: tuple[float, float]) -> QPointF:
    """A place on the floor, mm, in the viewport's pixels."""
    return QPointF(*view.canvas.to_px(*mm))


def pull(
    view: FloorView,
    from_mm: tuple[float, float],
    to_mm: tuple[float, float],
    modifiers: Qt.KeyboardModifier = NONE,
) -> QPointF:
    """Press at one place and move to another in steps, still holding; gives the last pixel."""
    start, end = at(view, from_mm), at(view, to_mm)
    press(view, start, modifiers=modifiers)
    for step in (0.25, 0.5, 0.75, 1.0):
        move(view, start + step * (end - start), modifiers=modifiers)
        view.document.settle()
    return end


def drag(
    view: FloorView,
    from_mm: tuple[float, float],
    to_mm: tuple[float, float],
    modifiers: Qt.KeyboardModifier = NONE,
) -> None:
    """Press, move in steps and let go, as a hand does."""
    end = pull(view, from_mm, to_mm, modifiers)
    release(view, end, modifiers=modifiers)
    view.document.settle()
