"""The most used commands as buttons beside the menus; each has its words and keys as a tip."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent, QSize, Qt
from PySide6.QtWidgets import QHBoxLayout, QToolButton, QWidget

if TYPE_CHECKING:
    from app.commands import Commands

_SHOWN = (
    ("open", "save", "print"),
    ("undo", "redo"),
    ("zoom out", "fit", "zoom in"),
    ("snap", "tape", "lock", "link"),
    ("dark",),
)


class ToolStrip(QWidget):
    """Rows of small buttons that follow the menu's actions in all they do."""

    def __init__(self, commands: Commands) -> None:
        super().__init__(commands.window)
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, 8, 0)
        row.setSpacing(1)
        self.buttons: dict[str, QToolButton] = {}
        for group, names in enumerate(_SHOWN):
            if group:
                row.addSpacing(9)
            for name in names:
                button = QToolButton()
                button.setObjectName("tool")
                button.setAutoRaise(True)
                button.setDefaultAction(commands.actions[name])
                button.setToolButtonStyle(Qt.ToolButtonStyle.ToolButtonIconOnly)
                # The menus and their keys do the same; Tab stays short.
                button.setFocusPolicy(Qt.FocusPolicy.NoFocus)
                row.addWidget(button)
                self.buttons[name] = button
        self._size()

    def _size(self) -> None:
        side = max(18, round(1.1 * self.fontMetrics().height()))
        for button in self.buttons.values():
            button.setIconSize(QSize(side, side))

    def changeEvent(self, event: QEvent) -> None:
        super().changeEvent(event)
        if event.type() == QEvent.Type.FontChange and hasattr(self, "buttons"):
            self._size()
