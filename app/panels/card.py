"""A card: a titled frame that holds one panel in the right-hand column."""

from __future__ import annotations

from PySide6.QtWidgets import QFrame, QHBoxLayout, QLabel, QVBoxLayout, QWidget


class Card(QFrame):
    """A frame with a heading; put the panel's content into ``body``."""

    def __init__(self, title: str, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("card")
        outer = QVBoxLayout(self)
        outer.setContentsMargins(8, 6, 8, 6)
        outer.setSpacing(4)
        self.head = QHBoxLayout()
        self.heading = QLabel(title)
        self.heading.setObjectName("heading")
        self.head.addWidget(self.heading)
        self.head.addStretch(1)
        outer.addLayout(self.head)
        self.body = QVBoxLayout()
        self.body.setContentsMargins(0, 0, 0, 0)
        self.body.setSpacing(2)
        outer.addLayout(self.body)
        self.setAccessibleName(title)
