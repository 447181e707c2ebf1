"""Targets: what is wanted of the car's figures, met or missed, typed in a table."""

from __future__ import annotations

from dataclasses import replace

from PySide6.QtCore import Qt
from PySide6.QtGui import QBrush, QColor
from PySide6.QtWidgets import (
    QAbstractItemView,
    QComboBox,
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
from app.panels.tolerances import limit_text, read_limit, unit_of_limit
from geometry.finding_checks.wording import Wording
from geometry.layout import SIDES, SideName, Target
from geometry.solution import Solution
from geometry.tolerances import FIGURES, Figure

_HEADS = ("Figure", "From", "To", "Unit", "Now", "Target")
_FIGURE, _LOW, _HIGH, _UNIT, _NOW, _VERDICT = range(6)


def keeps(target: Target, value: float | None) -> bool | None:
    """Whether a figure keeps a target; None where there is no such figure."""
    if value is None:
        return None
    low_ok = target.low is None or value >= target.low
    return low_ok and (target.high is None or value <= target.high)


def judged(target: Target, solution: Solution) -> list[tuple[SideName, float | None]]:
    """The target's figure for each side that has its own."""
    figure = FIGURES[target.figure]
    apart = figure.per_side and not solution.layout.linked
    return [(side, figure.value(solution, side)) for side in (SIDES if apart else SIDES[:1])]


class TargetsTable(QWidget):
    """The layout's targets; every change is one undo step."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._document = document
        self._reasons: dict[tuple[int, int], tuple[str, str]] = {}
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        row = QHBoxLayout()
        self.figure = QComboBox()
        for key, figure in FIGURES.items():
            self.figure.addItem(figure.label, key)
        self.figure.setAccessibleName("Figure to set a target for")
        self.add = QPushButton("&Add target")
        self.add.clicked.connect(self._add)
        self.remove = QPushButton("&Remove target")
        self.remove.clicked.connect(self._remove)
        for button in (self.add, self.remove):
            # Enter belongs to the cell that is being typed in.
            button.setAutoDefault(False)
        row.addWidget(self.figure, 1)
        row.addWidget(self.add)
        row.addWidget(self.remove)
        column.addLayout(row)
        self.table = self._new_table()
        column.addWidget(self.table, 1)
        self.reason = QLabel()
        self.reason.setObjectName("refusal")
        self.reason.setWordWrap(True)
        self.reason.hide()
        column.addWidget(self.reason)
        document.solved.connect(self.refresh)
        document.opened.connect(self._opened)
        self.refresh()

    def _new_table(self) -> QTableWidget:
        table = QTableWidget(0, len(_HEADS))
        table.setAccessibleName("Targets")
        table.setHorizontalHeaderLabels(list(_HEADS))
        table.verticalHeader().hide()
        table.verticalHeader().setDefaultSectionSize(table.fontMetrics().height() + 7)
        table.setSelectionMode(QAbstractItemView.SelectionMode.SingleSelection)
        table.setTabKeyNavigation(False)
        header = table.horizontalHeader()
        header.setSectionResizeMode(QHeaderView.ResizeMode.ResizeToContents)
        header.setSectionResizeMode(_FIGURE, QHeaderView.ResizeMode.Stretch)
        table.setMinimumHeight(5 * (table.fontMetrics().height() + 7))
        table.itemChanged.connect(self._typed)
        table.currentCellChanged.connect(self._show_reason)
        return table

    @property
    def targets(self) -> tuple[Target, ...]:
        return self._document.settled_layout().targets

    # --- showing ----------------------------------------------------------------------

    def refresh(self) -> None:
        """Follow the document: the targets, and the figures as they stand."""
        shown = self._document.layout.targets
        if self.table.rowCount() != len(shown):
            self.table.setRowCount(len(shown))
        blocked = self.table.blockSignals(True)
        for row, target in enumerate(shown):
            self._fill(row, target)
        self.table.blockSignals(blocked)
        self.remove.setEnabled(bool(shown))

    def _fill(self, row: int, target: Target) -> None:
        units = self._document.units
        figure = FIGURES.get(target.figure)
        if figure is None:
            texts = [target.figure, "", "", "", "–", "not known here"]
        else:
            texts = [
                figure.label,
                *(_limit(figure, limit, self._document) for limit in (target.low, target.high)),
                unit_of_limit(figure.kind, units),
                *self._verdict(target, figure),
            ]
        for column, text in enumerate(texts):
            refused = self._reasons.get((row, column))
            item = self.table.item(row, column)
            if item is None:
                item = QTableWidgetItem()
                if column not in (_LOW, _HIGH) or figure is None:
                    item.setFlags(Qt.ItemFlag.ItemIsEnabled | Qt.ItemFlag.ItemIsSelectable)
                if column in (_LOW, _HIGH, _NOW):
                    item.setTextAlignment(
                        Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter
                    )
                self.table.setItem(row, column, item)
            said = refused[0] if refused else text
            if item.text() != said:
                item.setText(said)
            item.setToolTip(refused[1] if refused else "Blank: no limit" if column in (
                _LOW, _HIGH) else text)
            item.setForeground(QBrush(QColor(theme.REFUSED)) if refused else QBrush())
            item.setBackground(QBrush(QColor(theme.REFUSED_GROUND)) if refused else QBrush())

    def _verdict(self, target: Target, figure: Figure) -> tuple[str, str]:
        """The figure as it stands, and whether that is what was wanted."""
        words = Wording(self._document.units)
        found = judged(target, self._document.solution)
        said = ["–" if value is None else words.of(value, figure.kind) for _, value in found]
        if len(found) > 1:
            said = [f"{side} {text}" for (side, _), text in zip(found, said, strict=True)]
        kept = [keeps(target, value) for _, value in found]
        if target.low is None and target.high is None:
            verdict = "no limit given"
        elif None in kept:
            verdict = "can't be judged"
        else:
            verdict = "✔ met" if all(kept) else "✖ missed"
        return ", ".join(said), verdict

    def _show_reason(self) -> None:
        at = (self.table.currentRow(), self.table.currentColumn())
        _, words = self._reasons.get(at, ("", ""))
        if not words and self._reasons:
            _, words = next(iter(self._reasons.values()))
        self.reason.setText(words)
        self.reason.setVisible(bool(words))

    def _opened(self) -> None:
        self._reasons.clear()
        self._show_reason()
        self.refresh()

    # --- changing ---------------------------------------------------------------------

    def _apply(self, text: str, targets: tuple[Target, ...]) -> None:
        layout = self._document.settled_layout()
        self._document.apply_layout(text, replace(layout, targets=targets))
        self.refresh()

    def _add(self) -> None:
        key = str(self.figure.currentData())
        self._apply("add target", (*self.targets, Target(key)))
        self.table.setCurrentCell(len(self.targets) - 1, _LOW)
        self.table.setFocus(Qt.FocusReason.OtherFocusReason)

    def _remove(self) -> None:
        row = max(self.table.currentRow(), 0)
        if row < len(self.targets):
            self._reasons.clear()
            self._show_reason()
            kept = tuple(t for at, t in enumerate(self.targets) if at != row)
            self._apply("remove target", kept)

    def _typed(self, item: QTableWidgetItem) -> None:
        row, column = item.row(), item.column()
        if column not in (_LOW, _HIGH) or row >= len(self.targets):
            return
        target = self.targets[row]
        figure = FIGURES[target.figure]
        text = item.text().strip()
        old = target.low if column == _LOW else target.high
        self._reasons.pop((row, column), None)
        if text != _limit(figure, old, self._document):
            try:
                value = read_limit(figure.kind, text, self._document.units) if text else None
                low, high = (value, target.high) if column == _LOW else (target.low, value)
                if low is not None and high is not None and low > high:
                    raise ValueError("“From” is more than “to”, so nothing could meet it.")
            except ValueError as reason:
                self._reasons[row, column] = (text, str(reason))
            else:
                changed = replace(target, low=low, high=high)
                targets = (*self.targets[:row], changed, *self.targets[row + 1 :])
                self._apply(f"set target for {figure.label.lower()}", targets)
        self.refresh()
        self._show_reason()


def _limit(figure: Figure, limit: float | None, document: Document) -> str:
    return "" if limit is None else limit_text(figure.kind, limit, document.units)
