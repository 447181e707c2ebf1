"""Offers back what windows left that ended without asking."""

from __future__ import annotations

from PySide6.QtCore import Qt
from PySide6.QtWidgets import (
    QDialog,
    QDialogButtonBox,
    QLabel,
    QListWidget,
    QListWidgetItem,
    QMessageBox,
    QVBoxLayout,
    QWidget,
)

from app.recovery import Left

_LEFT = Qt.ItemDataRole.UserRole


class RecoveryDialog(QDialog):
    """A list of kept work: take one back, throw one away, or leave it for later."""

    def __init__(self, left: list[Left], parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setWindowTitle("Work to take back")
        self.chosen: Left | None = None
        column = QVBoxLayout(self)
        words = QLabel(
            "Bobline ended last time before this work was saved. It was kept, and nothing of "
            "it is lost. Taken back, it is on the floor as you left it, still to be saved."
        )
        words.setWordWrap(True)
        column.addWidget(words)
        self.list = QListWidget()
        self.list.setAccessibleName("Kept work")
        self.list.setWordWrap(True)
        for one in left:
            item = QListWidgetItem(_words(one))
            item.setData(_LEFT, one)
            self.list.addItem(item)
        self.list.setCurrentRow(0)
        self.list.currentRowChanged.connect(self._show)
        self.list.itemDoubleClicked.connect(self._take)
        column.addWidget(self.list)
        buttons = QDialogButtonBox()
        roles = QDialogButtonBox.ButtonRole
        self.take = buttons.addButton("&Take it back", roles.AcceptRole)
        self.throw = buttons.addButton("Throw &away…", roles.DestructiveRole)
        self.later = buttons.addButton("&Later", roles.RejectRole)
        self.take.setDefault(True)
        self.take.clicked.connect(self._take)
        self.throw.clicked.connect(self._throw)
        self.later.clicked.connect(self.reject)
        column.addWidget(buttons)
        self.resize(64 * self.fontMetrics().averageCharWidth(), 15 * self.fontMetrics().height())
        self._show()

    def _current(self) -> Left | None:
        item = self.list.currentItem()
        return None if item is None else item.data(_LEFT)

    def _show(self) -> None:
        one = self._current()
        self.take.setEnabled(one is not None and one.record is not None)
        self.throw.setEnabled(one is not None)

    def _take(self) -> None:
        one = self._current()
        if one is not None and one.record is not None:
            self.chosen = one
            self.accept()

    def _throw(self) -> None:
        one = self._current()
        if one is None:
            return
        answer = QMessageBox.question(
            self, "Bobline", f"Throw this away for good?\n\n{_words(one)}",
            QMessageBox.StandardButton.Yes | QMessageBox.StandardButton.No,
            QMessageBox.StandardButton.No,
        )
        if answer == QMessageBox.StandardButton.Yes:
            one.throw_away()
            self.list.takeItem(self.list.currentRow())
            self._show()
            if not self.list.count():
                self.reject()


def _words(left: Left) -> str:
    record = left.record
    if record is None:
        return f"{left.file.name}: can't be read any more"
    where = "never saved to a file" if record.path is None else str(record.path)
    return f"{record.title}, kept {record.time_words}\n{where}"
