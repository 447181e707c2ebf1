"""A hand that meets every dialog and menu that comes up: fiddles with it, then ends it somehow.

Nothing it does leaves the folder it was given, and no dialog waits for anybody.
"""

from __future__ import annotations

import random
from collections.abc import Callable
from pathlib import Path

from PySide6.QtCore import QObject, Qt, QTimer
from PySide6.QtTest import QTest
from PySide6.QtWidgets import (
    QAbstractButton,
    QApplication,
    QCheckBox,
    QComboBox,
    QDialog,
    QFileDialog,
    QLineEdit,
    QMenu,
    QMessageBox,
    QWidget,
)
from shiboken6 import isValid

EVERY_MS = 4
PRINTER = ("rint", "Page setup")
"""Buttons that need a printer, which there is none of."""
_MOST_LOOKS = 6
"""A dialog that is still there after as many looks is sent away."""

TYPED = (
    "9 1/16", "230", "230 mm", "-4 1/2", "0", "", " ", "12,5", "1/0", "nan", "inf", "1e9", "abc",
    "9 1/", "--3", "0.5", "-0.5", "30'", "99999999", "½", "1' 2 1/2\"", "3\n4", "x" * 200, "🙂",
    "25.4", "14", "7.25", "0°30'",
)
"""What a person might type anywhere, good and bad."""


class Answers(QObject):
    """Looks for a dialog or menu every few milliseconds, also inside the dialog's own loop."""

    def __init__(self, chance: random.Random, folder: Path, tell: Callable[[str], None]) -> None:
        super().__init__()
        self._chance, self._folder, self._tell = chance, folder, tell
        self._looks: dict[int, int] = {}
        self._running = False

    def start(self) -> None:
        self._running = True
        self._later()

    def stop(self) -> None:
        self._running = False

    def _later(self) -> None:
        # A new timer each time: one timer does not fire again within its own slot, and an
        # answer may bring up the next dialog.
        if self._running:
            QTimer.singleShot(EVERY_MS, self, self._look)

    def _look(self) -> None:
        self._later()
        popup, modal = QApplication.activePopupWidget(), QApplication.activeModalWidget()
        if isinstance(popup, QMenu):
            self._answer_menu(popup)
        elif popup is not None:
            popup.close()
        elif isinstance(modal, QDialog):
            self._answer_dialog(modal)
        elif modal is not None:
            modal.close()
        else:
            self._looks.clear()

    def _answer_menu(self, menu: QMenu) -> None:
        actions = [a for a in menu.actions() if a.isEnabled() and not a.isSeparator()]
        if actions and self._chance.random() < 0.6:
            action = self._chance.choice(actions)
            if action.menu() is None:
                self._tell(f"menu “{action.text()}”")
                menu.setActiveAction(action)
                QTest.keyClick(menu, Qt.Key.Key_Return)
                return
        menu.close()

    def _answer_dialog(self, dialog: QDialog) -> None:
        looks = self._looks[id(dialog)] = self._looks.get(id(dialog), 0) + 1
        self._tell(f"{type(dialog).__name__} “{dialog.windowTitle()}”")
        if looks > _MOST_LOOKS:
            dialog.reject()
        elif isinstance(dialog, QFileDialog):
            self._answer_files(dialog)
        else:
            if not isinstance(dialog, QMessageBox):
                self._fiddle(dialog)
            if isValid(dialog) and dialog.isVisible():
                self._end(dialog)

    def _answer_files(self, dialog: QFileDialog) -> None:
        if self._chance.random() < 0.3:
            dialog.reject()
            return
        saving = dialog.acceptMode() == QFileDialog.AcceptMode.AcceptSave
        files = sorted(self._folder.iterdir())
        if saving:
            path = self._folder / self._chance.choice(["one", "two.bobline", "three", "4.csv"])
        elif files:
            path = self._chance.choice(files)
        else:
            dialog.reject()
            return
        self._tell(f"  file {path.name}")
        # As typed, which needs no listing of the folder.
        dialog.findChild(QLineEdit, "fileNameEdit").setText(str(path))
        dialog.accept()

    def _fiddle(self, dialog: QDialog) -> None:
        """Type, choose and click a few things in a dialog."""
        chance = self._chance
        for _ in range(chance.choice([0, 0, 1, 2, 4])):
            if not isValid(dialog):
                return
            inside = [w for w in dialog.findChildren(QWidget) if w.isVisible() and w.isEnabled()]
            fields = [w for w in inside if isinstance(w, QLineEdit | QComboBox | QCheckBox)]
            if not fields:
                return
            self.fiddle_with(chance.choice(fields))

    def fiddle_with(self, field: QWidget) -> None:
        """Change one field as a hand would."""
        chance = self._chance
        if isinstance(field, QComboBox):
            if field.count():
                field.setCurrentIndex(chance.randrange(field.count()))
        elif isinstance(field, QLineEdit):
            if field.isReadOnly():
                return
            field.selectAll()
            field.insert(chance.choice(TYPED).replace("\n", " "))
            if chance.random() < 0.5:
                field.editingFinished.emit()
        elif isinstance(field, QAbstractButton):
            field.click()

    def _end(self, dialog: QDialog) -> None:
        buttons = [
            b for b in dialog.findChildren(QAbstractButton)
            if b.isVisible() and b.isEnabled() and b.text() and not isinstance(b, QCheckBox)
            and not any(word in b.text() for word in PRINTER)
        ]
        if buttons and self._chance.random() < 0.75:
            button = self._chance.choice(buttons)
            self._tell(f"  “{button.text()}”")
            button.click()
        else:
            dialog.reject()
