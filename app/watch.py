"""Checks that take longer than a frame: room to no-go shapes, joints, springs.

They run on a worker a moment after the car was last changed, and their findings join the
others when they arrive.
"""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import QObject

from app.background import Background
from app.document import Document
from geometry.clearance_findings import clearance_findings
from geometry.finding_checks.finding import Finding
from geometry.layout import Layout
from geometry.steering import least_lock


def room_findings(layout: Layout, span: float) -> list[Finding]:
    """Room, joint and spring findings over the travel and the steering's whole lock."""
    return clearance_findings(layout, span, least_lock(layout))


class RoomWatch(QObject):
    """Keeps a document's room findings up to date."""

    def __init__(self, document: Document) -> None:
        super().__init__(document)
        self._document = document
        self._asked: tuple[Layout, float] | None = None
        self.background = Background(self, wait_ms=150)
        self.background.answered.connect(self._take)
        document.solved.connect(self.look)
        document.opened.connect(self.look)
        self.look()

    def look(self) -> None:
        """Ask again if the car or the span is another than last time."""
        layout, span = self._document.layout, self._document.span
        if self._asked is not None and self._asked[1] == span and self._asked[0] == layout:
            return
        self._asked = (layout, span)

        def question(stopped: Callable[[], bool]) -> list[Finding]:
            return room_findings(layout, span)

        self.background.ask(question)

    def _take(self, found: list[Finding]) -> None:
        self._document.set_slow_findings("room", found)
