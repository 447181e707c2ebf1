"""The limits that findings judge by: every one can be set, and says where it comes from."""

from __future__ import annotations

import math
from dataclasses import replace

from PySide6.QtCore import Qt
from PySide6.QtGui import QBrush, QColor
from PySide6.QtWidgets import (
    QAbstractItemView,
    QDialog,
    QDialogButtonBox,
    QHBoxLayout,
    QHeaderView,
    QLabel,
    QPushButton,
    QTableWidget,
    QTableWidgetItem,
    QVBoxLayout,
    QWidget,
)

from app import theme
from app.document import Document
from app.panels.form import QuantityField
from geometry.layout import UnitName
from geometry.lengths import format_angle, format_length, parse_angle, parse_length
from geometry.readouts import PER_TRAVEL
from geometry.tolerances import LAYOUT, TOLERANCES, Kind, Tolerance

_LABEL, _VALUE, _UNIT, _SOURCE = range(4)


def unit_of_limit(kind: Kind, units: UnitName) -> str:
    """The unit a limit is typed in."""
    travel = "in" if units == "in" else "25 mm"
    return {
        "length": units,
        "toe": f"{units} at the tire",
        "angle": "°",
        "rate": f"° per {travel}",
        "slope": f"{units} per {units}",
    }[kind]


def limit_text(kind: Kind, value: float, units: UnitName) -> str:
    """A limit as it is typed."""
    if kind == "length":
        return format_length(value, units, 64, decimals=2)
    if kind == "toe":
        # Decimal, as toe gauges read.
        return f"{value / 25.4:.4g}" if units == "in" else f"{value:.4g}"
    if kind == "angle":
        return format_angle(value)
    if kind == "rate":
        return f"{math.degrees(value) * PER_TRAVEL[units]:.4g}°"
    return f"{value:.4g}"


def read_limit(kind: Kind, text: str, units: UnitName) -> float:
    """A typed limit in internal units; ValueError with a plain reason."""
    text = text.strip()
    if not text:
        raise ValueError("A figure is needed here; “Use the default” brings back the usual one.")
    if kind in ("length", "toe"):
        value = parse_length(text, units)
    elif kind == "angle":
        value = parse_angle(text)
    elif kind == "rate":
        value = parse_angle(text) / PER_TRAVEL[units]
    else:
        try:
            value = float(text.replace(",", "."))
        except ValueError:
            raise ValueError(f"“{text[:30]}” is not a plain number, such as 0.015.") from None
    if not math.isfinite(value) or abs(value) > 20_000.0:
        raise ValueError("That is more than any car needs.")
    return value


class ToleranceDialog(QDialog):
    """A table of all limits, and the span of travel they are judged over.

    The limits are kept in the layout as one undo step; the span belongs to the view.
    """

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setWindowTitle("Tolerances")
        self._document = document
        self._layout = document.settled_layout()
        self._units = self._layout.units
        self._values: dict[str, float] = {}
        self._reasons: dict[str, str] = {}
        self._keys = list(TOLERANCES)
        column = QVBoxLayout(self)
        self._add_span(column)
        self.table = self._new_table()
        column.addWidget(self.table)
        self.reason = QLabel()
        self.reason.setObjectName("refusal")
        self.reason.setWordWrap(True)
        column.addWidget(self.reason)
        self._add_buttons(column)
        for row, key in enumerate(self._keys):
            self._fill(row, self._layout.tolerances.get(key))
        self.table.itemChanged.connect(self._typed)
        self.table.currentCellChanged.connect(self._show_reason)
        self.table.setCurrentCell(0, _VALUE)
        letter, line = self.fontMetrics().averageCharWidth(), self.fontMetrics().height()
        self.resize(min(120 * letter, 1200), min(32 * line, 700))
        self._show_reason()

    def _add_span(self, column: QVBoxLayout) -> None:
        row = QHBoxLayout()
        words = QLabel(f"&Travel each way that curves and findings look at, {self._units}")
        self.span = QuantityField(
            "length", self._units, self._document.span, "Travel each way", blank=False,
            check=_check_span,
        )
        self.span.setMaximumWidth(self.fontMetrics().averageCharWidth() * 30)
        words.setBuddy(self.span.field)
        self.span.changed.connect(self._show_reason)
        row.addWidget(words)
        row.addWidget(self.span)
        row.addStretch(1)
        column.addLayout(row)

    def _new_table(self) -> QTableWidget:
        table = QTableWidget(len(self._keys), 4)
        table.setAccessibleName("Tolerances")
        table.setHorizontalHeaderLabels(["Limit", "Value", "Unit", "Where it comes from"])
        table.verticalHeader().hide()
        table.verticalHeader().setDefaultSectionSize(table.fontMetrics().height() + 7)
        table.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        table.setEditTriggers(QAbstractItemView.EditTrigger.AllEditTriggers)
        table.setTabKeyNavigation(False)
        table.setWordWrap(False)
        header = table.horizontalHeader()
        header.setDefaultAlignment(Qt.AlignmentFlag.AlignLeft)
        header.setSectionResizeMode(QHeaderView.ResizeMode.ResizeToContents)
        header.setStretchLastSection(True)
        return table

    def _add_buttons(self, column: QVBoxLayout) -> None:
        row = QHBoxLayout()
        self.one_default = QPushButton("Use the &default")
        self.all_defaults = QPushButton("&All defaults")
        self.one_default.clicked.connect(self._reset_one)
        self.all_defaults.clicked.connect(self._reset_all)
        for button in (self.one_default, self.all_defaults):
            button.setAutoDefault(False)
            row.addWidget(button)
        row.addStretch(1)
        buttons = QDialogButtonBox(
            QDialogButtonBox.StandardButton.Ok | QDialogButtonBox.StandardButton.Cancel
        )
        self.ok = buttons.button(QDialogButtonBox.StandardButton.Ok)
        buttons.accepted.connect(self._take)
        buttons.rejected.connect(self.reject)
        row.addWidget(buttons)
        column.addLayout(row)

    # --- rows -----------------------------------------------------------------------

    def _fill(self, row: int, own: float | None) -> None:
        """Show a limit: the layout's ``own``, or the default for None."""
        entry: Tolerance = TOLERANCES[self._keys[row]]
        value = entry.value if own is None else own
        self._values.pop(entry.key, None)
        if own is not None:
            self._values[entry.key] = own
        self._reasons.pop(entry.key, None)
        texts = (
            f"{entry.label}, {entry.bound}",
            limit_text(entry.kind, value, self._units),
            unit_of_limit(entry.kind, self._units),
            entry.source if own is None or own == entry.value else LAYOUT,
        )
        blocked = self.table.blockSignals(True)
        for at, text in enumerate(texts):
            item = QTableWidgetItem(text)
            item.setToolTip(text)
            if at == _VALUE:
                item.setTextAlignment(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
            else:
                item.setFlags(Qt.ItemFlag.ItemIsEnabled | Qt.ItemFlag.ItemIsSelectable)
            self.table.setItem(row, at, item)
        self.table.blockSignals(blocked)

    def _typed(self, item: QTableWidgetItem) -> None:
        if item.column() != _VALUE:
            return
        row = item.row()
        entry = TOLERANCES[self._keys[row]]
        standing = self._values.get(entry.key, entry.value)
        if item.text().strip() == limit_text(entry.kind, standing, self._units):
            # Untouched, so nothing is lost to the rounding of what is shown.
            self._fill(row, self._values.get(entry.key))
            self._show_reason()
            return
        try:
            value = read_limit(entry.kind, item.text(), self._units)
        except ValueError as reason:
            self._refuse(item, entry.key, str(reason))
        else:
            self._fill(row, None if value == entry.value else value)
        self._show_reason()

    def _refuse(self, item: QTableWidgetItem, key: str, reason: str) -> None:
        self._reasons[key] = reason
        blocked = self.table.blockSignals(True)
        item.setForeground(QBrush(QColor(theme.REFUSED)))
        item.setBackground(QBrush(QColor(theme.REFUSED_GROUND)))
        item.setToolTip(reason)
        self.table.blockSignals(blocked)

    def _show_reason(self) -> None:
        """Why the current limit, or else any other, was refused; OK waits until none is."""
        row = self.table.currentRow()
        key = self._keys[row] if 0 <= row < len(self._keys) else ""
        words = self._reasons.get(key, "")
        if not words and self._reasons:
            key, words = next(iter(self._reasons.items()))
            words = f"{TOLERANCES[key].label}: {words}"
        self.reason.setText(words)
        self.span.value()
        self.ok.setEnabled(not self._reasons and self.span.is_good)

    def _reset_one(self) -> None:
        row = self.table.currentRow()
        if row >= 0:
            self._fill(row, None)
            self._show_reason()

    def _reset_all(self) -> None:
        for row in range(len(self._keys)):
            self._fill(row, None)
        self._show_reason()

    def _take(self) -> None:
        span = self.span.value()
        if self._reasons or span is None:
            return
        # Keys this version does not know stay as they are.
        others = {k: v for k, v in self._layout.tolerances.items() if k not in TOLERANCES}
        changed = replace(self._layout, tolerances={**others, **self._values})
        if changed != self._layout:
            self._document.apply_layout("set tolerances", changed)
        self._document.set_span(span)
        self.accept()


def _check_span(span: float) -> str | None:
    if not 5.0 <= span <= 300.0:
        return "Between 5 mm and 300 mm, each way from ride height."
    return None
