"""The measure sheet beside the floor: every number on the car, typed as read off a tape."""

from __future__ import annotations

from PySide6.QtCore import QItemSelectionModel, QModelIndex, Qt
from PySide6.QtGui import QKeySequence, QShortcut
from PySide6.QtWidgets import (
    QAbstractItemView,
    QApplication,
    QComboBox,
    QHeaderView,
    QLabel,
    QTableView,
    QWidget,
)

from app.document import Document
from app.panels.card import Card
from app.panels.measure_model import MeasureModel
from geometry.layout import SideName


class MeasureSheetPanel(Card):
    """The table with its side chooser, and a line below for what was refused and why."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__("Measure sheet", parent)
        self._document = document
        self.model = MeasureModel(document)
        self._side = QComboBox()
        self._side.addItems(["left", "right"])
        self._side.setAccessibleName("Side shown in the measure sheet")
        self._side.currentTextChanged.connect(self._side_chosen)
        self._mirrored = QLabel()
        self._mirrored.setObjectName("quiet")
        self.head.addWidget(self._mirrored)
        self.head.addWidget(self._side)
        self.table = QTableView()
        self.table.setModel(self.model)
        self.table.setAccessibleName("Measure sheet")
        self.table.verticalHeader().hide()
        self.table.setSelectionMode(QAbstractItemView.SelectionMode.SingleSelection)
        self.table.setEditTriggers(
            QAbstractItemView.EditTrigger.DoubleClicked
            | QAbstractItemView.EditTrigger.EditKeyPressed
            | QAbstractItemView.EditTrigger.AnyKeyPressed
        )
        header = self.table.horizontalHeader()
        header.setSectionResizeMode(QHeaderView.ResizeMode.Stretch)
        header.setSectionResizeMode(0, QHeaderView.ResizeMode.ResizeToContents)
        header.setDefaultAlignment(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
        self.table.verticalHeader().setDefaultSectionSize(self.table.fontMetrics().height() + 7)
        self.table.verticalHeader().setMinimumSectionSize(1)
        self.body.addWidget(self.table)
        self._refusal = QLabel()
        self._refusal.setObjectName("refusal")
        self._refusal.setWordWrap(True)
        self._refusal.hide()
        self.body.addWidget(self._refusal)
        self.model.refused.connect(self._show_refusal)
        self._follow_selection = True
        self.table.selectionModel().currentChanged.connect(self._cell_chosen)
        document.solved.connect(self.refresh)
        document.edited.connect(self.refresh)
        document.opened.connect(self.refresh)
        document.selected.connect(self._nail_chosen)
        self._copy_keys = QShortcut(QKeySequence.StandardKey.Copy, self.table)
        self._copy_keys.setContext(Qt.ShortcutContext.WidgetShortcut)
        self._copy_keys.activated.connect(self._copy)
        self._paste_keys = QShortcut(QKeySequence.StandardKey.Paste, self.table)
        self._paste_keys.setContext(Qt.ShortcutContext.WidgetShortcut)
        self._paste_keys.activated.connect(self._paste)
        self.refresh()

    def refresh(self) -> None:
        """Follow the document's car."""
        linked = self._document.layout.linked
        self._mirrored.setText("right mirrors left" if linked else "")
        self._side.setVisible(not linked)
        if linked and self.model.side == "right":
            self._side.setCurrentText("left")
        self.model.refresh()

    def _side_chosen(self, side: str) -> None:
        self.model.set_side("right" if side == "right" else "left")

    def _show_refusal(self, reason: str) -> None:
        self._refusal.setText(reason)
        self._refusal.setVisible(bool(reason))

    def _cell_chosen(self, current: QModelIndex, _before: QModelIndex) -> None:
        if not current.isValid() or not self._follow_selection:
            return
        row = self.model.rows[current.row()]
        if isinstance(row, str):
            side: SideName = self.model.side
            self._document.select(side, row)

    def _nail_chosen(self) -> None:
        chosen = self._document.selection
        if chosen is None:
            return
        side, name = chosen
        if not self._document.layout.linked and side != self.model.side:
            self._side.setCurrentText(side)
        row = self.model.row_of(name)
        current = self.table.currentIndex()
        if row is None or current.row() == row:
            return
        # The choice came from elsewhere; don't answer it with another one.
        self._follow_selection = False
        column = current.column() if current.column() > 0 else 1
        self.table.selectionModel().setCurrentIndex(
            self.model.index(row, column), QItemSelectionModel.SelectionFlag.ClearAndSelect
        )
        self._follow_selection = True

    def _copy(self) -> None:
        index = self.table.currentIndex()
        if index.isValid():
            QApplication.clipboard().setText(str(self.model.data(index) or ""))

    def _paste(self) -> None:
        index = self.table.currentIndex()
        if index.isValid() and self.model.flags(index) & Qt.ItemFlag.ItemIsEditable:
            self.model.setData(index, QApplication.clipboard().text())
