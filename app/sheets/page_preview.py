"""Pages as they will print, one at a time, painted by the painter that prints them."""

from __future__ import annotations

from PySide6.QtCore import QRectF, QSize, Qt, Signal
from PySide6.QtGui import QColor, QKeyEvent, QPainter, QPaintEvent, QPixmap, QWheelEvent
from PySide6.QtWidgets import QSizePolicy, QWidget

from app.sheets.painter import paint_page, to_device
from geometry.pages import Page, Pages

_AROUND = 12
_SHADE = QColor("#8E8B84")
_STEPS = {
    Qt.Key.Key_PageDown: 1, Qt.Key.Key_Right: 1, Qt.Key.Key_Down: 1, Qt.Key.Key_Space: 1,
    Qt.Key.Key_PageUp: -1, Qt.Key.Key_Left: -1, Qt.Key.Key_Up: -1,
}


class PagePreview(QWidget):
    """Shows one page of a document as large as fits; keys and the wheel turn the pages."""

    turned = Signal()

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._pages: Pages | None = None
        self._index = 0
        self._picture: QPixmap | None = None
        self._words = ""
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Expanding)
        self.setMinimumSize(320, 320)
        self.setAccessibleName("Preview of the pages")

    def sizeHint(self) -> QSize:
        return QSize(560, 700)

    @property
    def count(self) -> int:
        return 0 if self._pages is None else len(self._pages)

    @property
    def index(self) -> int:
        """Which page is shown, from 0."""
        return self._index

    def show_pages(self, pages: Pages) -> None:
        """Show other pages, staying at the same number if there is one."""
        self._pages, self._words = pages, ""
        self._go(min(self._index, len(pages) - 1))

    def show_words(self, words: str) -> None:
        """Say why there are no pages."""
        self._pages, self._words = None, words
        self._go(0)

    def turn(self, step: int) -> None:
        """Go on, or back, by some pages."""
        wanted = min(max(self._index + step, 0), max(self.count - 1, 0))
        if wanted != self._index:
            self._go(wanted)

    def _go(self, index: int) -> None:
        self._index, self._picture = index, None
        self.setAccessibleDescription(
            f"Page {index + 1} of {self.count}" if self.count else self._words
        )
        self.update()
        self.turned.emit()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        key = Qt.Key(event.key())
        if key in _STEPS:
            self.turn(_STEPS[key])
        elif key == Qt.Key.Key_Home:
            self.turn(-self.count)
        elif key == Qt.Key.Key_End:
            self.turn(self.count)
        else:
            super().keyPressEvent(event)

    def wheelEvent(self, event: QWheelEvent) -> None:
        way = event.angleDelta().y()
        if way:
            self.turn(-1 if way > 0 else 1)
        event.accept()

    def resizeEvent(self, _event: object) -> None:
        self._picture = None

    def paintEvent(self, _event: QPaintEvent) -> None:
        painter = QPainter(self)
        painter.fillRect(self.rect(), _SHADE)
        if self._pages is None:
            painter.setPen(QColor("#FFFFFF"))
            room = QRectF(self.rect()).adjusted(24, 24, -24, -24)
            flags = Qt.AlignmentFlag.AlignCenter | Qt.TextFlag.TextWordWrap
            painter.drawText(room, int(flags), self._words)
        else:
            if self._picture is None:
                self._picture = self._painted(self._pages[self._index])
            ratio = self._picture.devicePixelRatio()
            x = 0.5 * (self.width() - self._picture.width() / ratio)
            y = 0.5 * (self.height() - self._picture.height() / ratio)
            painter.drawPixmap(int(x), int(y), self._picture)
        painter.end()

    def _painted(self, page: Page) -> QPixmap:
        """The page on white, as large as fits the widget."""
        ratio = self.devicePixelRatioF()
        scale = min(
            (self.width() - 2 * _AROUND) / page.size.width,
            (self.height() - 2 * _AROUND) / page.size.height,
        )
        dots = max(scale, 0.1) * ratio
        picture = QPixmap(
            max(1, round(page.size.width * dots)), max(1, round(page.size.height * dots))
        )
        picture.setDevicePixelRatio(ratio)
        picture.fill(QColor("#FFFFFF"))
        painter = QPainter(picture)
        try:
            # The painter counts the picture in its own logical pixels.
            paint_page(painter, page, to_device(page.sheet, dots / ratio))
        finally:
            painter.end()
        return picture
