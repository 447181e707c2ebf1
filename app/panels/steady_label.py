"""A label for words that change in every frame of a drag."""

from __future__ import annotations

from PySide6.QtCore import QSize, Qt
from PySide6.QtGui import QPainter, QPaintEvent, QResizeEvent
from PySide6.QtWidgets import QLabel

_HIGHEST = 4000
_WRAP = Qt.TextFlag.TextWordWrap


class SteadyLabel(QLabel):
    """Wrapped plain words that ask for another layout only when they need other room.

    A plain label asks with every change of its text, and a list of them then costs a layout
    of the whole list in every frame.
    """

    def __init__(self) -> None:
        super().__init__()
        self._words = ""
        self._needs = 0

    def setText(self, words: str) -> None:
        if words == self._words:
            return
        self._words = words
        self.setAccessibleName(words)
        needs = self.heightForWidth(self.width())
        if needs != self._needs:
            self._needs = needs
            self.updateGeometry()
        self.update()

    def text(self) -> str:
        return self._words

    def hasHeightForWidth(self) -> bool:
        return True

    def heightForWidth(self, width: int) -> int:
        letters = self.fontMetrics()
        return letters.boundingRect(0, 0, width, _HIGHEST, _WRAP, self._words).height()

    def sizeHint(self) -> QSize:
        return QSize(self.fontMetrics().averageCharWidth() * 20, self.fontMetrics().height())

    def minimumSizeHint(self) -> QSize:
        return QSize(0, self.fontMetrics().height())

    def resizeEvent(self, event: QResizeEvent) -> None:
        super().resizeEvent(event)
        self._needs = self.heightForWidth(self.width())

    def paintEvent(self, event: QPaintEvent) -> None:
        painter = QPainter(self)
        flags = int(Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter) | _WRAP.value
        self.style().drawItemText(
            painter, self.rect(), flags, self.palette(), self.isEnabled(), self._words,
            self.foregroundRole(),
        )
