"""A table for typing: Tab and Enter go through the cells, blocks are copied and pasted."""

from __future__ import annotations

from PySide6.QtCore import QModelIndex, Qt
from PySide6.QtGui import QKeyEvent, QKeySequence
from PySide6.QtWidgets import (
    QAbstractItemDelegate,
    QAbstractItemView,
    QApplication,
    QTableView,
    QWidget,
)

from app.panels.measure_model import MeasureModel

_EDITABLE = Qt.ItemFlag.ItemIsEditable


class SheetTable(QTableView):
    """The measure sheet's cells."""

    def __init__(self, model: MeasureModel) -> None:
        super().__init__()
        self._cells = model
        self.setModel(model)
        self.setAccessibleName("Measure sheet")
        self.verticalHeader().hide()
        self.verticalHeader().setMinimumSectionSize(1)
        self.setSelectionMode(QAbstractItemView.SelectionMode.ContiguousSelection)
        self.setEditTriggers(
            QAbstractItemView.EditTrigger.DoubleClicked
            | QAbstractItemView.EditTrigger.EditKeyPressed
            | QAbstractItemView.EditTrigger.AnyKeyPressed
        )
        self.setHorizontalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)

    def open_cell(self, index: QModelIndex) -> None:
        """Go to a cell and open it for typing; one that is open already stays as it is."""
        self.setCurrentIndex(index)
        if self.state() != self.State.EditingState:
            self.edit(index)

    # --- where the keys go ----------------------------------------------------------

    def _next_editable(self, start: QModelIndex, by: int) -> QModelIndex:
        """The next cell to type into after ``start``, row by row; invalid at either end."""
        columns = self._cells.columnCount()
        at = start.row() * columns + start.column() + by
        while 0 <= at < self._cells.rowCount() * columns:
            index = self._cells.index(at // columns, at % columns)
            if self._cells.flags(index) & _EDITABLE:
                return index
            at += by
        return QModelIndex()

    def _below(self, start: QModelIndex) -> QModelIndex:
        """The next cell to type into below ``start``, or in the next column's first row."""
        for row in range(start.row() + 1, self._cells.rowCount()):
            index = self._cells.index(row, start.column())
            if self._cells.flags(index) & _EDITABLE:
                return index
        return start

    def moveCursor(
        self, action: QAbstractItemView.CursorAction, modifiers: Qt.KeyboardModifier
    ) -> QModelIndex:
        ways = QAbstractItemView.CursorAction
        if action in (ways.MoveNext, ways.MovePrevious):
            by = 1 if action == ways.MoveNext else -1
            index = self._next_editable(self.currentIndex(), by)
            return index if index.isValid() else self.currentIndex()
        return super().moveCursor(action, modifiers)

    def focusNextPrevChild(self, forward: bool) -> bool:
        """Tab goes through the cells and leaves the table past the last one."""
        current = self.currentIndex()
        by = 1 if forward else -1
        if current.isValid() and self._next_editable(current, by).isValid():
            # Left to keyPressEvent, which moves the cursor.
            return False
        self.setTabKeyNavigation(False)
        moved = super().focusNextPrevChild(forward)
        self.setTabKeyNavigation(True)
        return moved

    def closeEditor(self, editor: QWidget, hint: QAbstractItemDelegate.EndEditHint) -> None:
        hints = QAbstractItemDelegate.EndEditHint
        start = self.currentIndex()
        if hint == hints.SubmitModelCache:
            # Also said when the cell is left for another one: then the cursor is there already.
            left = self.indexAt(editor.geometry().center()) != start
            super().closeEditor(editor, hints.NoHint)
            if not left:
                self._go(self._below(start), start)
        elif hint in (hints.EditNextItem, hints.EditPreviousItem):
            super().closeEditor(editor, hints.NoHint)
            self._go(self._next_editable(start, 1 if hint == hints.EditNextItem else -1), start)
        else:
            super().closeEditor(editor, hint)

    def _go(self, to: QModelIndex, start: QModelIndex) -> None:
        """Go on from a cell, unless what was typed there has to be mended first."""
        if to.isValid() and not self._cells.refusal(start):
            self.setCurrentIndex(to)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        index = self.currentIndex()
        if event.matches(QKeySequence.StandardKey.Copy):
            self.copy()
        elif event.matches(QKeySequence.StandardKey.Paste):
            self.paste()
        elif event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
            # The same key, passed on by an editor that it is just closing, is not another one.
            if self.state() != self.State.EditingState and self._cells.flags(index) & _EDITABLE:
                self.edit(index)
        elif event.key() == Qt.Key.Key_Escape and self._cells.refusal(index):
            self._cells.take_back(index)
        else:
            super().keyPressEvent(event)

    # --- clipboard ------------------------------------------------------------------

    def copy(self) -> None:
        """The chosen cells as text, tabs between columns and lines between rows."""
        chosen = self.selectionModel().selectedIndexes()
        if not chosen:
            return
        lines: dict[int, list[str]] = {}
        for index in sorted(chosen, key=lambda i: (i.row(), i.column())):
            role = Qt.ItemDataRole.DisplayRole if index.column() == 0 else Qt.ItemDataRole.EditRole
            lines.setdefault(index.row(), []).append(str(self._cells.data(index, role) or ""))
        QApplication.clipboard().setText("\n".join("\t".join(cells) for cells in lines.values()))

    def paste(self) -> None:
        """Type the clipboard's block from the current cell on."""
        index = self.currentIndex()
        if index.isValid() and self._cells.flags(index) & _EDITABLE:
            self._cells.paste(index, QApplication.clipboard().text())
