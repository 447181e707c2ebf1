"""A row of widgets that breaks into more rows where there is not room for all."""

from __future__ import annotations

from PySide6.QtCore import QRect, QSize, Qt
from PySide6.QtWidgets import QLayout, QLayoutItem, QWidget

_GAP = 10
_ROW_GAP = 4


class FlowRow(QLayout):
    """Items from left to right, as many in a row as fit; what room is left goes to those
    that can use it."""

    def __init__(self) -> None:
        super().__init__()
        self._items: list[QLayoutItem] = []
        self.setContentsMargins(0, 0, 0, 0)

    def addItem(self, item: QLayoutItem) -> None:
        self._items.append(item)

    def count(self) -> int:
        return len(self._items)

    def itemAt(self, index: int) -> QLayoutItem | None:
        return self._items[index] if 0 <= index < len(self._items) else None

    def takeAt(self, index: int) -> QLayoutItem | None:
        return self._items.pop(index) if 0 <= index < len(self._items) else None

    def expandingDirections(self) -> Qt.Orientation:
        return Qt.Orientation.Horizontal

    def hasHeightForWidth(self) -> bool:
        return True

    def heightForWidth(self, width: int) -> int:
        rows = self._rows(width)
        return sum(map(_height, rows)) + _ROW_GAP * (len(rows) - 1)

    def sizeHint(self) -> QSize:
        return self.minimumSize()

    def minimumSize(self) -> QSize:
        sizes = [item.minimumSize() for item in self._items]
        return QSize(
            max((size.width() for size in sizes), default=0),
            max((size.height() for size in sizes), default=0),
        )

    def _rows(self, width: int) -> list[list[QLayoutItem]]:
        rows: list[list[QLayoutItem]] = [[]]
        used = 0
        for item in self._items:
            wanted = item.minimumSize().width()
            if rows[-1] and used + _GAP + wanted > width:
                rows.append([])
                used = 0
            used += wanted + (_GAP if rows[-1] else 0)
            rows[-1].append(item)
        return rows

    def setGeometry(self, rect: QRect) -> None:
        super().setGeometry(rect)
        top = rect.top()
        for row in self._rows(rect.width()):
            high = _height(row)
            free = rect.width() - _GAP * (len(row) - 1) - sum(
                item.minimumSize().width() for item in row
            )
            growing = [i for i in row if i.expandingDirections() & Qt.Orientation.Horizontal]
            left = rect.left()
            for item in row:
                wide = item.minimumSize().width()
                if item in growing:
                    wide += max(free, 0) // len(growing)
                item.setGeometry(QRect(left, top, wide, high))
                left += wide + _GAP
            top += high + _ROW_GAP


def _height(row: list[QLayoutItem]) -> int:
    return max((item.sizeHint().height() for item in row), default=0)


def flow_of(*widgets: QWidget) -> FlowRow:
    """A flow row of these widgets."""
    flow = FlowRow()
    for widget in widgets:
        flow.addWidget(widget)
    return flow
