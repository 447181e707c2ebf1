"""Dialogs that only tell: text that can be read at any size, selected and copied."""

from __future__ import annotations

from collections.abc import Sequence
from html import escape

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QDialog, QDialogButtonBox, QTextBrowser, QVBoxLayout, QWidget


class TellDialog(QDialog):
    """Words in a window with a Close button; long ones scroll."""

    def __init__(self, title: str, html: str, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setWindowTitle(title)
        column = QVBoxLayout(self)
        self.words = QTextBrowser()
        self.words.setObjectName("card")
        self.words.setHtml(html)
        self.words.setAccessibleName(title)
        self.words.setTextInteractionFlags(
            Qt.TextInteractionFlag.TextSelectableByMouse
            | Qt.TextInteractionFlag.TextSelectableByKeyboard
        )
        column.addWidget(self.words)
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Close)
        buttons.rejected.connect(self.reject)
        column.addWidget(buttons)
        letter = self.fontMetrics().averageCharWidth()
        line = self.fontMetrics().lineSpacing()
        self.resize(min(74 * letter, 1000), min(26 * line, 640))


def paragraphs(words: str) -> str:
    """Plain text with blank lines between paragraphs, as HTML."""
    return "".join(f"<p>{escape(part)}</p>" for part in words.split("\n\n"))


def table(rows: Sequence[Sequence[str]], head: Sequence[str] = ()) -> str:
    """Rows of plain text as an HTML table; the first column stands out."""
    lines = []
    if head:
        cells = "".join(f'<th align="left">{escape(cell)}</th>' for cell in head)
        lines.append(f"<tr>{cells}</tr>")
    for row in rows:
        cells = "".join(
            f"<td><b>{escape(cell)}</b></td>" if at == 0 else f"<td>{escape(cell)}</td>"
            for at, cell in enumerate(row)
        )
        lines.append(f"<tr>{cells}</tr>")
    return f'<table cellspacing="0" cellpadding="4">{"".join(lines)}</table>'
