"""The findings: what is wrong, how much, and what would cure it, as cards to click."""

from __future__ import annotations

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QKeyEvent, QMouseEvent
from PySide6.QtWidgets import (
    QFrame,
    QGridLayout,
    QLabel,
    QScrollArea,
    QSizePolicy,
    QToolButton,
    QVBoxLayout,
    QWidget,
)

from app.document import Document
from app.panels.card import Card
from app.panels.steady_label import SteadyLabel
from geometry.findings import Finding
from geometry.layout import Layout

MARKS = {"wrong": ("✖", "Wrong", "#B33A00"), "warn": ("▲", "Look at", "#8A5A00"),
         "note": ("●", "Note", "#5E625F")}
"""Sign, word and color of each severity; the sign and word carry it without the color."""
NOTHING = "Nothing to find fault with in this car, as far as it was measured."


def _text_label(kind: str) -> QLabel:
    label = SteadyLabel()
    label.setObjectName(kind)
    # As high as its lines need at the width there is, and never a column of single words.
    policy = QSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Minimum)
    policy.setHeightForWidth(True)
    label.setSizePolicy(policy)
    return label


class FindingRow(QFrame):
    """One finding: severity mark, headline, wrapped detail and, if it has one, its cure.

    The row is filled again with each new finding in its place, so that a drag builds nothing.
    """

    chosen = Signal(object)
    cure_wanted = Signal(object)

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("finding")
        self.finding: Finding | None = None
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setCursor(Qt.CursorShape.PointingHandCursor)
        grid = QGridLayout(self)
        grid.setContentsMargins(4, 4, 4, 4)
        grid.setHorizontalSpacing(8)
        grid.setVerticalSpacing(1)
        self.mark = QLabel()
        grid.addWidget(self.mark, 0, 0, Qt.AlignmentFlag.AlignTop)
        self.head, self.detail, self.cure = map(_text_label, ("heading", "quiet", "cure"))
        grid.addWidget(self.head, 0, 1, 1, 2)
        grid.addWidget(self.cure, 1, 1)
        grid.addWidget(self.detail, 2, 1, 1, 2)
        self.do_it = QToolButton()
        self.do_it.setText("Do it")
        self.do_it.clicked.connect(self._want_cure)
        grid.addWidget(self.do_it, 1, 2, Qt.AlignmentFlag.AlignTop)
        grid.setColumnStretch(1, 1)

    def show_finding(self, finding: Finding, layout: Layout) -> None:
        """Fill the row; ``layout`` tells which nails are locked."""
        if self.finding is None or finding.severity != self.finding.severity:
            sign, word, color = MARKS[finding.severity]
            self.mark.setText(sign)
            self.mark.setStyleSheet(f"color: {color};")
            self.mark.setToolTip(word)
        self.finding = finding
        word = MARKS[finding.severity][1]
        cure = finding.cure
        for label, text in (
            (self.head, finding.headline),
            (self.detail, finding.detail),
            (self.cure, "" if cure is None else cure.text),
        ):
            if label.text() != text:
                label.setText(text)
                label.setVisible(bool(text))
        self.setAccessibleName(f"{word}: {finding.headline}")
        self.setAccessibleDescription(f"{finding.detail} {self.cure.text()}".strip())
        moves = () if cure is None else cure.moves
        self.do_it.setVisible(bool(moves))
        locked = sorted({move.point for move in moves} & layout.locked)
        self.do_it.setEnabled(not locked)
        self.do_it.setAccessibleName(f"Do it: {self.cure.text()}")
        self.do_it.setToolTip(
            f"The {locked[0]} is locked; unlock it first."
            if locked
            else "Make this move on the car as planned (can be undone)"
        )

    def _want_cure(self) -> None:
        self.cure_wanted.emit(self.finding)

    def mousePressEvent(self, event: QMouseEvent) -> None:
        self.setFocus(Qt.FocusReason.MouseFocusReason)
        self.chosen.emit(self.finding)
        event.accept()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter, Qt.Key.Key_Space):
            self.chosen.emit(self.finding)
        elif event.key() in (Qt.Key.Key_Down, Qt.Key.Key_Up):
            self.focusNextPrevChild(event.key() == Qt.Key.Key_Down)
        else:
            super().keyPressEvent(event)


class FindingsPanel(Card):
    """All findings, worst first; a click shows one on the floor."""

    shown = Signal(object)
    """A Finding to point out on the floor."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__("Findings", parent)
        self._document = document
        self.count = QLabel()
        self.count.setObjectName("quiet")
        self.head.addWidget(self.count)
        self.area = QScrollArea()
        self.area.setWidgetResizable(True)
        self.area.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.area.setAccessibleName("Findings")
        holder = QWidget()
        holder.setObjectName("clear")
        self._column = QVBoxLayout(holder)
        self._column.setContentsMargins(0, 0, 4, 0)
        self._column.setSpacing(2)
        self._fine = _text_label("quiet")
        self._fine.setText(NOTHING)
        self._column.addWidget(self._fine)
        self._column.addStretch(1)
        self.area.setWidget(holder)
        self.body.addWidget(self.area)
        self._made: list[FindingRow] = []
        self._shown: tuple[tuple[Finding, ...], frozenset[str]] | None = None
        document.solved.connect(self.refresh)
        document.opened.connect(self.refresh)
        document.edited.connect(self.refresh)
        self.refresh()

    @property
    def rows(self) -> list[FindingRow]:
        """The rows in sight, worst first."""
        return self._made[: len(self._shown[0])] if self._shown else []

    def refresh(self) -> None:
        """Show the document's findings."""
        found, layout = self._document.findings, self._document.layout
        if self._shown == (found, layout.locked):
            return
        self._shown = found, layout.locked
        while len(self._made) < len(found):
            row = FindingRow()
            row.chosen.connect(self._choose)
            row.cure_wanted.connect(self._cure)
            self._column.insertWidget(len(self._made), row)
            self._made.append(row)
        for row, finding in zip(self._made, found, strict=False):
            if row.finding != finding or row.do_it.isVisibleTo(row):
                row.show_finding(finding, layout)
            row.setVisible(True)
        for row in self._made[len(found) :]:
            row.setVisible(False)
        self._fine.setVisible(not found)
        wrong = sum(f.severity == "wrong" for f in found)
        other = len(found) - wrong
        parts = [f"{wrong} wrong"] * bool(wrong) + [f"{other} to look at"] * bool(other)
        self.count.setText(", ".join(parts))

    def _choose(self, finding: Finding) -> None:
        self.shown.emit(finding)

    def _cure(self, finding: Finding) -> None:
        cure = finding.cure
        if cure is not None and cure.moves:
            layout = cure.applied(self._document.settled_layout())
            words = cure.text.rstrip(".")
            self._document.apply_layout(words[:1].lower() + words[1:], layout)
