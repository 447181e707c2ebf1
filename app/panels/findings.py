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
        self.setFocusPolicy(Qt.FocusPolicy.TabFocus)
        self.setCursor(Qt.CursorShape.PointingHandCursor)
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 3, 0, 3)
        row.setSpacing(8)
        self._mark = QLabel()
        row.addWidget(self._mark, 0, Qt.AlignmentFlag.AlignTop)
        words = QVBoxLayout()
        words.setSpacing(1)
        self._head, self._cure, self._detail = QLabel(), QLabel(), QLabel()
        self._head.setObjectName("heading")
        self._detail.setObjectName("quiet")
        for label in (self._head, self._cure, self._detail):
            label.setWordWrap(True)
            words.addWidget(label)
        row.addLayout(words, 1)
        self._button = QToolButton()
        self._button.setText("Do it")
        self._button.clicked.connect(self._want_cure)
        row.addWidget(self._button, 0, Qt.AlignmentFlag.AlignTop)
        self._severity = ""
        self.show_finding(finding)

    def show_finding(self, finding: Finding) -> None:
        """Show another finding in this row; labels are reused, since a drag changes only words."""
        self.finding = finding
        sign, word, color = MARKS[finding.severity]
        if finding.severity != self._severity:
            self._severity = finding.severity
            self._mark.setText(sign)
            self._mark.setStyleSheet(f"color: {color};")
            self._mark.setToolTip(word)
        cure = finding.cure
        for label, text in (
            (self._head, finding.headline),
            (self._cure, "" if cure is None else cure.text),
            (self._detail, finding.detail),
        ):
            if label.text() != text:
                label.setText(text)
                label.setVisible(bool(text))
        can_do = cure is not None and bool(cure.moves)
        if can_do == self._button.isHidden():
            self._button.setVisible(can_do)
        self._button.setToolTip(
            "" if cure is None else f"{cure.text} On the car as planned; can be undone."
        )
        self._button.setAccessibleName(f"Do it: {finding.headline}")
        self.setAccessibleName(f"{word}: {finding.headline}")
        self.setAccessibleDescription(f"{'' if cure is None else cure.text} {finding.detail}")

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
        holder = QWidget()
        self._column = QVBoxLayout(holder)
        self._column.setContentsMargins(0, 0, 4, 0)
        self._column.setSpacing(2)
        self._fine = QLabel("Nothing to find fault with in this car, as far as it was measured.")
        self._fine.setWordWrap(True)
        self._fine.setObjectName("quiet")
        self._column.addWidget(self._fine)
        self._column.addStretch(1)
        self._area.setWidget(holder)
        self._rows: list[FindingRow] = []
        self._shown: tuple[Finding, ...] | None = None
        document.solved.connect(self.refresh)
        document.opened.connect(self.refresh)
        self.refresh()

    @property
    def rows(self) -> list[FindingRow]:
        return self._rows

    def refresh(self) -> None:
        """Show the document's findings."""
        found = self._document.findings
        if found == self._shown:
            return
        self._shown = found
        while len(self._rows) > len(found):
            row = self._rows.pop()
            self._column.removeWidget(row)
            row.hide()
            row.deleteLater()
        for row, finding in zip(self._rows, found, strict=False):
            row.show_finding(finding)
        for finding in found[len(self._rows):]:
            row = FindingRow(finding)
            row.chosen.connect(self._choose)
            row.cure_wanted.connect(self._apply_cure)
            self._column.insertWidget(len(self._rows), row)
            self._rows.append(row)
        self._fine.setVisible(not found)
        wrong = sum(f.severity == "wrong" for f in found)
        self._count.setText(f"{wrong} wrong, {len(found) - wrong} more" if found else "")

    def _choose(self, finding: Finding) -> None:
        if finding.points:
            self._document.select(finding.side or "left", finding.points[0])
        self.shown.emit(finding)

    def _apply_cure(self, finding: Finding) -> None:
        if finding.cure is not None:
            layout = finding.cure.applied(self._document.settled_layout())
            text = finding.cure.text.rstrip(".")
            self._document.apply_layout(text[:1].lower() + text[1:], layout)
