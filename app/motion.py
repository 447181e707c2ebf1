"""The car over a bump, moving on the floor: both cars of the document go through it together."""

from __future__ import annotations

import math

from PySide6.QtCore import QElapsedTimer, QObject, QTimer, Signal

from app.document import Document

PERIOD_S = 3.2
FRAME_MS = 16


class BumpMotion(QObject):
    """Drives the wheels' travel down and up over the chosen span until it is stopped.

    What stood before comes back when it stops. Any edit of the car stops it.
    """

    running_changed = Signal(bool)

    def __init__(self, document: Document) -> None:
        super().__init__(document)
        self._document = document
        self._before = document.level_travel
        self._clock = QElapsedTimer()
        self._timer = QTimer(self)
        self._timer.setInterval(FRAME_MS)
        self._timer.timeout.connect(self._step)
        document.edited.connect(self.stop)
        document.opened.connect(self.stop)

    @property
    def running(self) -> bool:
        return self._timer.isActive()

    def start(self) -> None:
        """Set off from ride height."""
        if not self.running:
            self._before = self._document.level_travel
            self._clock.start()
            self._timer.start()
            self.running_changed.emit(True)

    def stop(self) -> None:
        """Stop and put the wheels back where they stood."""
        if self.running:
            self._timer.stop()
            self._document.set_travel(self._before["left"], self._before["right"])
            self.running_changed.emit(False)

    def toggle(self, on: bool) -> None:
        if on:
            self.start()
        else:
            self.stop()

    def _step(self) -> None:
        phase = math.sin(2.0 * math.pi * self._clock.elapsed() / 1000.0 / PERIOD_S)
        travel = phase * self._document.span
        self._document.set_travel(travel, travel)
