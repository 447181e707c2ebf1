"""The measure sheet beside the floor: every number on the car, typed as read off a tape."""

from __future__ import annotations

from PySide6.QtCore import QEvent, QItemSelectionModel, QModelIndex, Qt
from PySide6.QtWidgets import QComboBox, QHeaderView, QLabel, QStyle, QWidget

from app.document import Document
from app.panels.card import Card
from app.panels.measure_model import MeasureModel
from app.panels.sheet_table import SheetTable
from geometry.layout import SideName

_WIDEST_LABEL = "Center of gravity height"
_WIDEST_POINT = "Lower inner pivot front"
_WIDEST_LENGTH = "−8 15/16"


class MeasureSheetPanel(Card):
    """The table with its side chooser, and a line below for what was refused and why."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__("Measure sheet", parent)
        self._document = document
        self.model = MeasureModel(document)
        self.side_box = QComboBox()
        self.side_box.addItems(["left", "right"])
        self.side_box.setAccessibleName("Side shown in the measure sheet")
        self.side_box.currentTextChanged.connect(self._side_chosen)
        self._mirrored = QLabel()
        self._mirrored.setObjectName("quiet")
        self.head.addWidget(self._mirrored)
        self.head.addWidget(self.side_box)
        self.table = SheetTable(self.model)
        header = self.table.horizontalHeader()
        header.setSectionResizeMode(QHeaderView.ResizeMode.ResizeToContents)
        header.setSectionResizeMode(0, QHeaderView.ResizeMode.Stretch)
        header.setDefaultAlignment(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
        self.body.addWidget(self.table)
        self.refusal = QLabel()
        self.refusal.setObjectName("refusal")
        self.refusal.setWordWrap(True)
        self.refusal.hide()
        self.body.addWidget(self.refusal)
        self.model.refused.connect(self._show_refusal)
        self._answering = False
        self._size()
        self.table.selectionModel().currentChanged.connect(self._cell_chosen)
        document.solved.connect(self.refresh)
        document.edited.connect(self.refresh)
        document.opened.connect(self.refresh)
        document.selected.connect(self._nail_chosen)
        self.refresh()

    def _size(self) -> None:
        """Columns and rows as wide and high as the letters need."""
        # The card's own letters: a change of font reaches the table only after the card.
        letters = self.fontMetrics()
        self.table.verticalHeader().setDefaultSectionSize(letters.height() + 7)
        header = self.table.horizontalHeader()
        width = letters.horizontalAdvance(_WIDEST_LENGTH) + 10
        for column in (1, 2, 3):
            header.setSectionResizeMode(column, QHeaderView.ResizeMode.Fixed)
            self.table.setColumnWidth(column, width)

    def wanted_width(self) -> int:
        """What the panel needs so that no cell is cut, pixels."""
        letters = self.fontMetrics()
        columns = 3 * (letters.horizontalAdvance(_WIDEST_LENGTH) + 10)
        box = self.style().pixelMetric(QStyle.PixelMetric.PM_IndicatorWidth) + 8
        point = letters.horizontalAdvance(_WIDEST_POINT) + box
        label = max(letters.horizontalAdvance(_WIDEST_LABEL), point) + 8
        return label + columns + self.table.verticalScrollBar().sizeHint().width() + 24

    def changeEvent(self, event: QEvent) -> None:
        super().changeEvent(event)
        if event.type() == QEvent.Type.FontChange and hasattr(self, "table"):
            self._size()

    def refresh(self) -> None:
        """Follow the document's car."""
        linked = self._document.layout.linked
        self._mirrored.setText("right mirrors left" if linked else "side")
        self.side_box.setVisible(not linked)
        if linked and self.model.side == "right":
            self.side_box.setCurrentText("left")
        self.model.refresh()
        self._show_refusal(self.model.refusal(self.table.currentIndex()))

    def start_typing(self) -> None:
        """Put the keyboard into the first cell of the sheet (a new car)."""
        self.table.setFocus(Qt.FocusReason.OtherFocusReason)
        self.table.setCurrentIndex(self.model.index(0, 1))

    def type_place(self, side: SideName, name: str) -> None:
        """Open a nail's first cell to type its place."""
        if not self._document.layout.linked:
            self.side_box.setCurrentText(side)
        row = self.model.row_of(name)
        if row is not None:
            self.table.setFocus(Qt.FocusReason.OtherFocusReason)
            self.table.open_cell(self.model.index(row, 1))

    def _side_chosen(self, side: str) -> None:
        self.model.set_side("right" if side == "right" else "left")

    def _show_refusal(self, reason: str) -> None:
        self.refusal.setText(reason)
        self.refusal.setVisible(bool(reason))

    def _cell_chosen(self, current: QModelIndex, _before: QModelIndex) -> None:
        if not current.isValid():
            return
        self._show_refusal(self.model.refusal(current))
        row = self.model.rows[current.row()]
        if isinstance(row, str) and not self._answering:
            self._answering = True
            self._document.select(self.model.side, row)
            self._answering = False

    def _nail_chosen(self) -> None:
        chosen = self._document.selection
        if chosen is None or self._answering:
            return
        side, name = chosen
        if not self._document.layout.linked and side != self.model.side:
            self.side_box.setCurrentText(side)
        row = self.model.row_of(name)
        current = self.table.currentIndex()
        if row is None or (current.row() == row and self.table.selectionModel().hasSelection()):
            return
        # The choice came from elsewhere; don't answer it with another one.
        self._answering = True
        column = current.column() if current.column() > 0 else 1
        index = self.model.index(row, column)
        self.table.selectionModel().setCurrentIndex(
            index, QItemSelectionModel.SelectionFlag.ClearAndSelect
        )
        self.table.scrollTo(index)
        self._answering = False
