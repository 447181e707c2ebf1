"""The fixes as a table: the move, the curve it leaves, what remains, and what it costs."""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np
from PySide6.QtCore import QSize, Qt
from PySide6.QtGui import QIcon, QResizeEvent
from PySide6.QtWidgets import QAbstractItemView, QHeaderView, QTableWidget, QTableWidgetItem

from app.panels.toe_picture import small_picture
from geometry.finding_checks.wording import Wording
from geometry.fixes import Fix
from geometry.layout import UnitName
from geometry.linkage import Array
from geometry.tolerances import toe_length

_HEADS = (
    "Move", "Toe left", "Tolerance", "Roll center", "Camber gain", "Ackermann", "Tie rod",
    "Moved in all",
)
_TIPS = (
    "What to do, in sizes a shop has",
    "Toe change that is left at each tire over the whole travel",
    "Whether that is within the tolerance",
    "How far the roll center moves at ride height; up is positive",
    "Change of the camber gained per inch (or 25 mm) of bump; more is positive",
    "Change of percent Ackermann with the inner wheel at 20 degrees, in points",
    "How much longer (positive) or shorter the tie rod has to be",
    "All sizes of the move added up",
)


class FixTable(QTableWidget):
    """One row a fix, best first; the chosen row is the one that is shown on the floor."""

    def __init__(self) -> None:
        super().__init__(0, len(_HEADS))
        self.setAccessibleName("Fixes, best first")
        for column, (text, tip) in enumerate(zip(_HEADS, _TIPS, strict=True)):
            item = QTableWidgetItem(text)
            item.setToolTip(tip)
            self.setHorizontalHeaderItem(column, item)
        self.verticalHeader().hide()
        self.setWordWrap(True)
        self.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
        self.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        self.setSelectionMode(QAbstractItemView.SelectionMode.SingleSelection)
        self.setHorizontalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)
        self.setVerticalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)
        self.setTabKeyNavigation(False)
        header = self.horizontalHeader()
        header.setSectionResizeMode(QHeaderView.ResizeMode.ResizeToContents)
        header.setSectionResizeMode(0, QHeaderView.ResizeMode.Fixed)
        header.setMinimumSectionSize(48)
        self.fixes: tuple[Fix, ...] = ()

    def show_fixes(
        self, found: Sequence[Fix], before: Array, tolerance: float, units: UnitName
    ) -> None:
        """Fill the rows. ``before`` (n,) rad is the toe curve as it stands."""
        letters = self.fontMetrics()
        size = QSize(11 * letters.averageCharWidth(), 2 * letters.height())
        blocked = self.blockSignals(True)
        self.setUpdatesEnabled(False)
        self.setIconSize(size)
        self.clearContents()
        self.setRowCount(len(found))
        self.fixes = tuple(found)
        for row, fix in enumerate(found):
            picture = small_picture(
                size, self.devicePixelRatioF(), fix.travel, before, fix.toe, tolerance
            )
            for column, text in enumerate(cells(fix, units)):
                item = QTableWidgetItem(text)
                if column:
                    item.setTextAlignment(
                        Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter
                    )
                else:
                    icon = QIcon(picture)
                    # The same picture where the row is chosen, not a tinted one.
                    icon.addPixmap(picture, QIcon.Mode.Selected)
                    item.setIcon(icon)
                    item.setData(Qt.ItemDataRole.AccessibleTextRole, spoken(fix, units))
                self.setItem(row, column, item)
        self.blockSignals(blocked)
        self.setUpdatesEnabled(True)
        self._share_width()

    def _share_width(self) -> None:
        """The words get what the figures leave, and never less than can be read."""
        header = self.horizontalHeader()
        others = sum(header.sectionSize(column) for column in range(1, self.columnCount()))
        least = 44 * self.fontMetrics().averageCharWidth()
        self.setColumnWidth(0, max(least, self.viewport().width() - others))
        self.resizeRowsToContents()

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self._share_width()

    @property
    def chosen(self) -> Fix | None:
        """The fix of the chosen row."""
        rows = self.selectionModel().selectedRows()
        return self.fixes[rows[0].row()] if rows else None


def cells(fix: Fix, units: UnitName) -> tuple[str, ...]:
    """A row's texts; what no tape or gauge could tell is a dash."""
    words, costs = Wording(units), fix.costs
    gain, ackermann = "–", "–"
    if costs.camber_gain is not None:
        degrees = round(math.degrees(costs.camber_gain) * words.travel_step, 2)
        gain = f"{degrees:+.2f}°".replace("-", "−") if degrees else "–"
    if costs.ackermann is not None and abs(costs.ackermann) >= 0.5:
        ackermann = f"{costs.ackermann:+.0f}".replace("-", "−")
    return (
        fix.text,
        words.fine(fix.remains),
        "✔ within" if fix.cures else "✖ over",
        _signed(words, costs.roll_center),
        gain,
        ackermann,
        _signed(words, costs.tie_rod),
        words.tape(fix.changed),
    )


def _signed(words: Wording, mm: float | None) -> str:
    if mm is None or not words.counts(mm):
        return "–"
    return f"{'+' if mm > 0.0 else '−'}{words.tape(mm)}"


def spoken(fix: Fix, units: UnitName) -> str:
    """A row as sentences."""
    within = "Within the tolerance." if fix.cures else "Still over the tolerance."
    return " ".join((fix.text, fix.remains_words(units), within, *fix.costs.words(units)))


def shown_toe(fix: Fix, toe: Array, scale: float) -> Array:
    """Toe (n,), rad, as the length that is shown at the tire."""
    return np.asarray(toe_length(fix.layout.side(fix.side), toe)) / scale
