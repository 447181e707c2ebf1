"""The findings: what is wrong, how much, and what would cure it, as cards to click."""

from __future__ import annotations

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QKeyEvent, QMouseEvent
from PySide6.QtWidgets import (
    QFrame,
    QHBoxLayout,
    QLabel,
    QScrollArea,
    QToolButton,
    QVBoxLayout,
    QWidget,
)

from app.document import Document
from app.panels.card import Card
from geometry.findings import Finding

MARKS = {"wrong": ("✖", "Wrong", "#B33A00"), "warn": ("▲", "Look at", "#8A5A00"),
         "note": ("●", "Note", "#5E625F")}
"""Sign, word and color of each severity; the sign and word carry it without the color."""


class FindingRow(QFrame):
    """One finding: severity mark, headline, wrapped detail and, if it has one, its cure."""

    chosen = Signal(object)
    cure_wanted = Signal(object)

    def __init__(self, finding: Finding, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.finding = finding
        sign, word, color = MARKS[finding.severity]
        self.setFocusPolicy(Qt.FocusPolicy.TabFocus)
        self.setAccessibleName(f"{word}: {finding.headline}")
        self.setAccessibleDescription(finding.detail)
        self.setCursor(Qt.CursorShape.PointingHandCursor)
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 3, 0, 3)
        row.setSpacing(8)
        mark = QLabel(sign)
        mark.setStyleSheet(f"color: {color};")
        mark.setToolTip(word)
        row.addWidget(mark, 0, Qt.AlignmentFlag.AlignTop)
        words = QVBoxLayout()
        words.setSpacing(1)
        head = QLabel(finding.headline)
        head.setObjectName("heading")
        head.setWordWrap(True)
        words.addWidget(head)
        detail = QLabel(finding.detail)
        detail.setObjectName("quiet")
        detail.setWordWrap(True)
        words.addWidget(detail)
        row.addLayout(words, 1)
        if finding.cure is not None:
            button = QToolButton()
            button.setText("Do it")
            button.setAccessibleName(f"Do it: {finding.headline}")
            button.setToolTip("Make this move on the car as planned (can be undone)")
            button.clicked.connect(self._want_cure)
            row.addWidget(button, 0, Qt.AlignmentFlag.AlignTop)

    def _want_cure(self) -> None:
        self.cure_wanted.emit(self.finding)

    def mousePressEvent(self, event: QMouseEvent) -> None:
        self.chosen.emit(self.finding)
        event.accept()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter, Qt.Key.Key_Space):
            self.chosen.emit(self.finding)
        else:
            super().keyPressEvent(event)


class FindingsPanel(Card):
    """All findings, worst first; a click shows one on the floor."""

    shown = Signal(object)
    """A Finding to point out on the floor."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__("Findings", parent)
        self._document = document
        self._count = QLabel()
        self._count.setObjectName("quiet")
        self.head.addWidget(self._count)
        self._area = QScrollArea()
        self._area.setWidgetResizable(True)
        self._area.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.body.addWidget(self._area)
        self._rows: list[FindingRow] = []
        self._shown: tuple[Finding, ...] | None = None
        document.solved.connect(self.refresh)
        document.opened.connect(self.refresh)
        self.refresh()

    @property
    def rows(self) -> list[FindingRow]:
        return self._rows

    def refresh(self) -> None:
        """Show the document's findings; rebuilt only when they read differently."""
        found = self._document.findings
        if found == self._shown:
            return
        self._shown = found
        holder = QWidget()
        column = QVBoxLayout(holder)
        column.setContentsMargins(0, 0, 4, 0)
        column.setSpacing(2)
        self._rows = []
        for finding in found:
            row = FindingRow(finding)
            row.chosen.connect(self._choose)
            row.cure_wanted.connect(self._cure)
            self._rows.append(row)
            column.addWidget(row)
        if not found:
            fine = QLabel("Nothing to find fault with in this car, as far as it was measured.")
            fine.setWordWrap(True)
            fine.setObjectName("quiet")
            column.addWidget(fine)
        column.addStretch(1)
        place = self._area.verticalScrollBar().value()
        self._area.setWidget(holder)
        self._area.verticalScrollBar().setValue(place)
        wrong = sum(f.severity == "wrong" for f in found)
        self._count.setText(f"{wrong} wrong, {len(found) - wrong} more" if found else "")

    def _choose(self, finding: Finding) -> None:
        if finding.points:
            self._document.select(finding.side or "left", finding.points[0])
        self.shown.emit(finding)

    def _cure(self, finding: Finding) -> None:
        if finding.cure is not None:
            layout = finding.cure.applied(self._document.settled_layout())
            self._document.apply_layout(finding.cure.text, layout)
