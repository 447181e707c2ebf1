"""What a random hand can do to a window: one act each, none of them needing an answer."""

from __future__ import annotations

import random
from collections.abc import Callable, Iterator
from pathlib import Path

from PySide6.QtCore import QEvent, QEventLoop, QPoint, QPointF, Qt, QTimer
from PySide6.QtGui import QAction, QContextMenuEvent, QWheelEvent
from PySide6.QtTest import QTest
from PySide6.QtWidgets import (
    QAbstractButton,
    QApplication,
    QComboBox,
    QDialog,
    QLineEdit,
    QMenu,
    QSlider,
    QWidget,
)

from app.document import Document
from app.window import MainWindow
from tests.app import hands
from tests.fuzz.answers import PRINTER, TYPED, Answers

_NEVER = ("&Quit", "&Print…")
"""Closing has an act of its own; nothing is sent to a printer."""
_KEYS = (
    "Tab", "Backtab", "Left", "Right", "Up", "Down", "Escape", "T", "Delete", "Space", "Return",
    "F2", "Plus", "Minus", "Home", "End", "Backspace", "A", "5", "PageUp", "PageDown",
)
_MODIFIERS = (
    Qt.KeyboardModifier.NoModifier, Qt.KeyboardModifier.NoModifier,
    Qt.KeyboardModifier.ShiftModifier, Qt.KeyboardModifier.ControlModifier,
    Qt.KeyboardModifier.AltModifier,
)


def breathe(ms: int = 0) -> None:
    """Let the window and its workers go on; 0 handles only what is waiting."""
    if ms:
        loop = QEventLoop()
        QTimer.singleShot(ms, loop.quit)
        loop.exec()
    QApplication.processEvents()
    # No event loop of its own runs here, so that what was let go has to be sent off; never
    # before calls that were posted earlier and may still be about it.
    QApplication.sendPostedEvents(None, QEvent.Type.DeferredDelete.value)


def press_key(key: Qt.Key, modifiers: Qt.KeyboardModifier = hands.NONE) -> None:
    """One key where the keyboard is, and all that it brings, as between two keys of a person."""
    at = QApplication.focusWidget()
    if at is not None:
        QTest.keyClick(at, key, modifiers)
    breathe()


def all_actions(menu: QMenu) -> Iterator[QAction]:
    for action in menu.actions():
        inner = action.menu()
        if isinstance(inner, QMenu):
            yield from all_actions(inner)
        elif not action.isSeparator() and action.text() not in _NEVER:
            yield action


class Acts:
    """The acts on one window, by weight."""

    def __init__(
        self, window: MainWindow, chance: random.Random, folder: Path, answers: Answers,
        tell: Callable[[str], None],
    ) -> None:
        self.window, self.chance, self.folder = window, chance, folder
        self._answers, self._tell = answers, tell
        self._weights: dict[Callable[[], None], int] = {
            self.drag: 22, self.key: 22, self.command: 20, self.undo: 8, self.slide: 8,
            self.type_in_sheet: 10, self.paste_in_sheet: 2, self.type_anywhere: 4,
            self.resize: 2, self.zoom: 5, self.press_button: 4, self.menu_on_floor: 4,
            self.plot: 4, self.point_at_finding: 3, self.shut_side_window: 3, self.split: 2,
            self.wait: 4, self.open_file: 2, self.stretch_tape: 2, self.odd_release: 2,
        }

    @property
    def document(self) -> Document:
        return self.window.document

    def act(self) -> None:
        """One random act."""
        acts = list(self._weights)
        act = self.chance.choices(acts, list(self._weights.values()))[0]
        self._tell(act.__name__)
        act()

    # --- on the floor ---------------------------------------------------------------

    def _place(self) -> QPointF:
        port = self.window.floor.viewport()
        return QPointF(
            self.chance.randint(-20, port.width() + 20), self.chance.randint(-20, port.height())
        )

    def _nail_px(self) -> QPointF:
        places = list(self.window.floor.scene.places.values())
        return hands.at(self.window.floor, self.chance.choice(places))

    def drag(self) -> None:
        """Take hold of a nail, or of nothing, and drag it; let go, cancel, or do neither."""
        floor, chance = self.window.floor, self.chance
        start = self._nail_px() if chance.random() < 0.9 else self._place()
        way = QPointF(chance.gauss(0, 40), chance.gauss(0, 40))
        button = chance.choice([Qt.MouseButton.LeftButton] * 6 + [Qt.MouseButton.MiddleButton])
        modifiers = chance.choice(_MODIFIERS)
        hands.press(floor, start, button=button, modifiers=modifiers)
        steps = chance.randint(1, 6)
        for step in range(1, steps + 1):
            hands.move(floor, start + step / steps * way, button=button, modifiers=modifiers)
            if chance.random() < 0.4:
                breathe()
        end = chance.random()
        if end < 0.75:
            hands.release(floor, start + way, button=button, modifiers=modifiers)
        elif end < 0.85:
            press_key(Qt.Key.Key_Escape)
            hands.release(floor, start + way, button=button)
        elif end < 0.92:
            hands.press(floor, start + way, button=Qt.MouseButton.RightButton)
            hands.release(floor, start + way, button=button)
        # Otherwise the hand is still holding on while it does something else.

    def odd_release(self) -> None:
        """A button let go that nobody saw pressed, or pressed twice."""
        send = self.chance.choice([hands.release, hands.press])
        send(self.window.floor, self._place())

    def stretch_tape(self) -> None:
        floor = self.window.floor
        floor.tape_mode = True
        hands.press(floor, self._nail_px())
        hands.move(floor, self._place())
        if self.chance.random() < 0.7:
            hands.release(floor, self._place())
        if self.chance.random() < 0.5:
            floor.tape_mode = False

    def zoom(self) -> None:
        floor, at = self.window.floor, self._place()
        turn = self.chance.choice([120, -120, 360, -360, 15, -2400, 2400])
        port = floor.viewport()
        QApplication.sendEvent(
            port,
            QWheelEvent(
                at, QPointF(port.mapToGlobal(at)), QPoint(), QPoint(0, turn),
                Qt.MouseButton.NoButton, Qt.KeyboardModifier.NoModifier,
                Qt.ScrollPhase.NoScrollPhase, False,
            ),
        )
        if self.chance.random() < 0.4:
            QTest.mouseDClick(port, Qt.MouseButton.LeftButton, pos=at.toPoint())

    def menu_on_floor(self) -> None:
        px = (self._nail_px() if self.chance.random() < 0.7 else self._place()).toPoint()
        port = self.window.floor.viewport()
        reasons = QContextMenuEvent.Reason
        reason = self.chance.choice([reasons.Mouse, reasons.Keyboard])
        # The view's own event: it comes to its viewport.
        QApplication.sendEvent(port, QContextMenuEvent(reason, px, port.mapToGlobal(px)))

    # --- keys, menus and buttons ------------------------------------------------------

    def key(self) -> None:
        chance = self.chance
        if chance.random() < 0.4:
            self.window.floor.canvas.setFocus()
        key = getattr(Qt.Key, f"Key_{chance.choice(_KEYS)}")
        for _ in range(chance.choice([1, 1, 1, 3, 8])):
            press_key(key, chance.choice(_MODIFIERS))

    def command(self) -> None:
        """Any command of the menus that is not greyed."""
        menus = [a.menu() for a in self.window.menuBar().actions()]
        for menu in menus:
            if self.chance.random() < 0.2:
                menu.aboutToShow.emit()
        recent = self.window.commands.recent
        if self.chance.random() < 0.1:
            recent.aboutToShow.emit()
        actions = [a for a in all_actions(self.chance.choice(menus)) if a.isEnabled()]
        if not actions:
            return
        action = self.chance.choice(actions)
        self._tell(f"  “{action.text()}”")
        action.trigger()

    def undo(self) -> None:
        for _ in range(self.chance.choice([1, 1, 2, 5, 20])):
            name = "undo" if self.chance.random() < 0.6 else "redo"
            self.window.commands.actions[name].trigger()
            if self.chance.random() < 0.1:
                breathe()

    def press_button(self) -> None:
        """Any button in the window, or another entry of a choice."""
        inside = [
            w for w in self.window.findChildren(QWidget)
            if isinstance(w, QAbstractButton | QComboBox) and w.isVisible() and w.isEnabled()
            and w.window() is self.window and "rint" not in w.toolTip()
        ]
        if inside:
            field = self.chance.choice(inside)
            self._tell(f"  {field.accessibleName() or getattr(field, 'text', str)()}")
            self._answers.fiddle_with(field)

    def type_anywhere(self) -> None:
        fields = [
            w for w in QApplication.allWidgets()
            if isinstance(w, QLineEdit) and w.isVisible() and w.isEnabled()
        ]
        if fields:
            self._answers.fiddle_with(self.chance.choice(fields))

    # --- panels -----------------------------------------------------------------------

    def slide(self) -> None:
        sliders = [s for s in self.window.findChildren(QSlider) if s.isVisible()]
        if sliders:
            slider = self.chance.choice(sliders)
            for _ in range(self.chance.choice([1, 1, 4])):
                slider.setValue(self.chance.randint(slider.minimum(), slider.maximum()))
                breathe()

    def type_in_sheet(self) -> None:
        """Type into a cell and leave it by Enter, Tab, Escape or not at all."""
        chance, table = self.chance, self.window.measure_panel.table
        cells = table.model()
        index = cells.index(chance.randrange(cells.rowCount()), chance.randrange(4))
        table.setFocus()
        table.setCurrentIndex(index)
        if chance.random() < 0.05:
            press_key(Qt.Key.Key_Space)
            return
        if not cells.flags(index) & Qt.ItemFlag.ItemIsEditable:
            return
        press_key(Qt.Key.Key_F2)
        fields = [f for f in table.findChildren(QLineEdit) if f.isVisible()]
        if not fields:
            return
        fields[-1].selectAll()
        fields[-1].insert(self._length() if chance.random() < 0.6 else chance.choice(TYPED))
        leave = chance.choice(["Return", "Tab", "Escape", "Backtab", ""])
        if leave:
            press_key(getattr(Qt.Key, f"Key_{leave}"))

    def _length(self) -> str:
        return f"{self.chance.uniform(-3, 30):.3f} in"

    def paste_in_sheet(self) -> None:
        table = self.window.measure_panel.table
        text = "\n".join(
            "\t".join(self.chance.choice([self._length(), *TYPED[:12]]) for _ in range(2))
            for _ in range(self.chance.randint(1, 4))
        )
        QApplication.clipboard().setText(text)
        table.setFocus()
        press_key(Qt.Key.Key_V, Qt.KeyboardModifier.ControlModifier)
        press_key(Qt.Key.Key_C, Qt.KeyboardModifier.ControlModifier)

    def plot(self) -> None:
        """Press, drag or double-click a curve."""
        plots = [p.plot for p in self.window.curves.plots if p.plot.isVisible()]
        if not plots:
            return
        port = self.chance.choice(plots).viewport()
        at = QPoint(self.chance.randint(0, port.width()), self.chance.randint(0, port.height()))
        if self.chance.random() < 0.15:
            QTest.mouseDClick(port, Qt.MouseButton.LeftButton, pos=at)
        else:
            QTest.mouseClick(port, Qt.MouseButton.LeftButton, pos=at)

    def point_at_finding(self) -> None:
        rows = self.window.findings_panel.rows
        if rows:
            row = self.chance.choice(rows)
            QTest.mouseClick(row, Qt.MouseButton.LeftButton)
            if row.do_it.isVisible() and row.do_it.isEnabled() and self.chance.random() < 0.4:
                row.do_it.click()

    # --- the window -------------------------------------------------------------------

    def resize(self) -> None:
        self.window.resize(self.chance.randint(300, 1900), self.chance.randint(200, 1200))

    def split(self) -> None:
        for splitter in (self.window.across, self.window.right, self.window.stack):
            if self.chance.random() < 0.5:
                splitter.setSizes([self.chance.randint(0, 900) for _ in range(splitter.count())])

    def shut_side_window(self) -> None:
        """Close one of the windows beside the main one, or fiddle with it."""
        beside = [
            w for w in QApplication.topLevelWidgets()
            if isinstance(w, QDialog) and w.isVisible() and not w.isModal()
        ]
        if beside:
            dialog = self.chance.choice(beside)
            fields = [
                f for f in dialog.findChildren(QWidget)
                if isinstance(f, QLineEdit | QComboBox | QAbstractButton)
                and f.isVisible() and f.isEnabled()
                and not any(word in getattr(f, "text", str)() for word in PRINTER)
            ]
            if fields and self.chance.random() < 0.75:
                self._answers.fiddle_with(self.chance.choice(fields))
            else:
                dialog.close()

    def open_file(self) -> None:
        """A file from the folder, sound or not, or one that is not there."""
        files = [*sorted(self.folder.iterdir()), self.folder / "missing.bobline"]
        self.window.open_path(self.chance.choice(files))

    def wait(self) -> None:
        """Give slow workers and timers their moment."""
        breathe(self.chance.choice([5, 20, 60, 250]))
