"""The readouts: the figures of the pose on the floor, as planned, as found, and the change."""

from __future__ import annotations

from PySide6.QtCore import QEvent, Qt
from PySide6.QtWidgets import (
    QAbstractItemView,
    QHeaderView,
    QTableWidget,
    QTableWidgetItem,
    QWidget,
)

from app.document import Document
from app.panels.card import Card
from geometry.layout import SideName
from geometry.readouts import READOUTS, Readout, change_text, format_readout, unit_words

_HEADS = ["", "planned", "found", "change"]
_AIR = 10
"""Room beside the letters of a figure, pixels."""


class ReadoutsPanel(Card):
    """A table of figures; a second and third column appear when the job holds a car as found."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__("Readouts", parent)
        self._document = document
        self.table = QTableWidget(0, 4)
        self.table.setAccessibleName("Readouts")
        self.table.setShowGrid(False)
        self.table.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
        self.table.setSelectionMode(QAbstractItemView.SelectionMode.SingleSelection)
        self.table.verticalHeader().hide()
        self.table.setHorizontalHeaderLabels(_HEADS)
        header = self.table.horizontalHeader()
        # Measured by hand: a header that follows its contents measures all of them again
        # with every figure that changes, a quarter of a millisecond each.
        header.setSectionResizeMode(QHeaderView.ResizeMode.Fixed)
        header.setSectionResizeMode(0, QHeaderView.ResizeMode.Stretch)
        header.setDefaultAlignment(Qt.AlignmentFlag.AlignRight)
        self.body.addWidget(self.table)
        self._rows: list[tuple[Readout, SideName]] = []
        self._units = document.units
        self._widths = [0] * 4
        self._items: dict[tuple[int, int], QTableWidgetItem] = {}
        self.table.setTabKeyNavigation(False)
        document.solved.connect(self.refresh)
        document.opened.connect(self.refresh)
        self.refresh()

    def _wanted(self) -> list[tuple[Readout, SideName]]:
        layout = self._document.layout
        travel = self._document.travel
        uneven = (
            not layout.linked
            or self._document.rack != 0.0
            or travel["left"] != travel["right"]
        )
        rows: list[tuple[Readout, SideName]] = []
        for readout in READOUTS:
            if readout.key == "strut length" and not layout.left.is_strut:
                continue
            if readout.key == "roll center over" and not uneven:
                continue
            whole = readout.key in ("roll center", "roll center over", "track")
            rows.append((readout, "left"))
            if uneven and not whole:
                rows.append((readout, "right"))
        return rows

    def refresh(self) -> None:
        """Show the figures of the document's solution."""
        rows = self._wanted()
        if rows != self._rows or self._units != self._document.units:
            self._build(rows)
        planned, found = self._document.solution, self._document.found_solution
        units = self._document.units
        if self.table.isColumnHidden(2) != (found is None):
            for column in (2, 3):
                self.table.setColumnHidden(column, found is None)
        for row, (readout, side) in enumerate(rows):
            value = readout.read(planned, side)
            self._put(row, 1, format_readout(readout.unit, value, units))
            tip = readout.tip if value is not None else readout.missing
            # Every set is a repaint of its own; most frames change no tip.
            if self._items[row, 0].toolTip() != tip:
                for column in range(4):
                    self._items[row, column].setToolTip(tip)
            if found is not None:
                was = readout.read(found, side)
                self._put(row, 2, format_readout(readout.unit, was, units))
                self._put(row, 3, change_text(readout.unit, was, value, units))

    def _build(self, rows: list[tuple[Readout, SideName]]) -> None:
        self._rows, self._units = rows, self._document.units
        self.table.setRowCount(len(rows))
        for row, (readout, side) in enumerate(rows):
            for column in range(4):
                item = QTableWidgetItem("" if column else self._label(readout, side))
                if column:
                    item.setTextAlignment(
                        Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter
                    )
                self.table.setItem(row, column, item)
                self._items[row, column] = item
        self._size()

    def _label(self, readout: Readout, side: SideName) -> str:
        unit = unit_words(readout.unit, self._units)
        sides = {s for r, s in self._rows if r is readout}
        where = f", {side}" if len(sides) > 1 else ""
        return readout.label + where + (f", {unit}" if unit else "")

    def _size(self) -> None:
        """Rows as high as the letters need, columns as wide as what stands in them."""
        height = self.fontMetrics().height() + 5
        self.table.verticalHeader().setMinimumSectionSize(1)
        self.table.verticalHeader().setDefaultSectionSize(height)
        self.table.horizontalHeader().setFixedHeight(height)
        self._widths = [0] * 4
        for column in range(1, 4):
            self._widen(column, _HEADS[column])
            for row in range(len(self._rows)):
                self._widen(column, self._items[row, column].text())

    def _widen(self, column: int, text: str) -> None:
        """Make room for a text; a column that is wide enough stays as it is."""
        width = self.fontMetrics().horizontalAdvance(text) + _AIR
        if width > self._widths[column]:
            self._widths[column] = width
            self.table.setColumnWidth(column, width)

    def changeEvent(self, event: QEvent) -> None:
        super().changeEvent(event)
        if event.type() == QEvent.Type.FontChange and hasattr(self, "table"):
            self._size()

    def _put(self, row: int, column: int, text: str) -> None:
        item = self._items[row, column]
        if item.text() != text:
            item.setText(text)
            self._widen(column, text)

    def text_of(self, key: str, side: SideName = "left", column: int = 1) -> str:
        """What stands in the table for a figure (for tests and the clipboard)."""
        for row, (readout, its_side) in enumerate(self._rows):
            if readout.key == key and its_side == side:
                return self._items[row, column].text()
        raise KeyError(key)
