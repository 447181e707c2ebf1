"""The readouts: the figures of the pose on the floor, as planned, as found, and the change."""

from __future__ import annotations

from PySide6.QtCore import Qt
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


class ReadoutsPanel(Card):
    """A table of figures; a second and third column appear when the job holds a car as found."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__("Readouts", parent)
        self._document = document
        self._table = QTableWidget(0, 4)
        self._table.setAccessibleName("Readouts")
        self._table.setShowGrid(False)
        self._table.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
        self._table.setSelectionMode(QAbstractItemView.SelectionMode.SingleSelection)
        self._table.verticalHeader().hide()
        self._table.setHorizontalHeaderLabels(["", "planned", "found", "change"])
        header = self._table.horizontalHeader()
        header.setSectionResizeMode(QHeaderView.ResizeMode.ResizeToContents)
        header.setSectionResizeMode(0, QHeaderView.ResizeMode.Stretch)
        header.setDefaultAlignment(Qt.AlignmentFlag.AlignRight)
        self.body.addWidget(self._table)
        self._rows: list[tuple[Readout, SideName]] = []
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
        if rows != self._rows:
            self._build(rows)
        planned, found = self._document.solution, self._document.found_solution
        units = self._document.units
        if self._table.isColumnHidden(2) != (found is None):
            for column in (2, 3):
                self._table.setColumnHidden(column, found is None)
        for row, (readout, side) in enumerate(rows):
            value = readout.read(planned, side)
            unit = unit_words(readout.unit, units)
            sides = {s for r, s in rows if r is readout}
            where = f", {side}" if len(sides) > 1 else ""
            label = readout.label + where + (f", {unit}" if unit else "")
            self._put(row, 0, label)
            self._put(row, 1, format_readout(readout.unit, value, units))
            tip = readout.tip if value is not None else readout.missing
            # Every set is a repaint of its own; most frames change no tip.
            if self._table.item(row, 0).toolTip() != tip:
                for column in range(4):
                    self._table.item(row, column).setToolTip(tip)
            if found is not None:
                was = readout.read(found, side)
                self._put(row, 2, format_readout(readout.unit, was, units))
                self._put(row, 3, change_text(readout.unit, was, value, units))

    def _build(self, rows: list[tuple[Readout, SideName]]) -> None:
        self._rows = rows
        self._table.setRowCount(len(rows))
        height = self._table.fontMetrics().height() + 5
        for row in range(len(rows)):
            self._table.setRowHeight(row, height)
            for column in range(4):
                item = QTableWidgetItem()
                if column:
                    item.setTextAlignment(
                        Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter
                    )
                self._table.setItem(row, column, item)

    def _put(self, row: int, column: int, text: str) -> None:
        item = self._table.item(row, column)
        if item.text() != text:
            item.setText(text)

    def text_of(self, key: str, side: SideName = "left", column: int = 1) -> str:
        """What stands in the table for a figure (for tests and the clipboard)."""
        for row, (readout, its_side) in enumerate(self._rows):
            if readout.key == key and its_side == side:
                return self._table.item(row, column).text()
        raise KeyError(key)
