"""Work that takes longer than a frame: done on a worker with what it was given.

A new question makes the answer to an older one worthless; it is stopped and dropped.
"""

from __future__ import annotations

import traceback
from collections.abc import Callable
from threading import Event
from typing import Any

from PySide6.QtCore import QObject, QRunnable, QThreadPool, QTimer, Signal, Slot


class _Job(QRunnable):
    """One run of a question on a worker thread."""

    def __init__(
        self, owner: Background, number: int, question: Callable[..., Any], tells: bool
    ) -> None:
        super().__init__()
        self._owner, self._number, self._question = owner, number, question
        self._tells = tells
        self.stop = Event()

    def _tell(self, news: object) -> None:
        if not self.stop.is_set():
            self._owner.came_along.emit(self._number, news)

    def run(self) -> None:
        more = (self._tell,) if self._tells else ()
        try:
            answer, trouble = self._question(self.stop.is_set, *more), ""
        except Exception:  # noqa: BLE001 - whatever it was, the window has to hear of it
            answer, trouble = None, traceback.format_exc()
        try:
            self._owner.came_back.emit(self._number, answer, trouble)
        except RuntimeError:
            # The window closed while the work was going on; nobody waits for it.
            return


class Background(QObject):
    """Asks one kind of question, waits for quiet first, and keeps only the newest answer.

    A question is called with ``stopped``, a function that turns true when the answer is no
    longer wanted; it must not touch Qt. A long one may ask to be called with ``tell`` as well,
    a function that hands on how far it has come; each such piece of news is ``told``.
    """

    answered = Signal(object)
    """The newest question's answer."""
    failed = Signal(str)
    """The newest question raised; holds the trace."""
    told = Signal(object)
    """News of the newest question while it is being worked on."""
    came_back = Signal(int, object, str)
    came_along = Signal(int, object)

    def __init__(self, parent: QObject, wait_ms: int = 120) -> None:
        super().__init__(parent)
        self._number = 0
        self._job: _Job | None = None
        self._question: Callable[..., Any] | None = None
        self._tells = False
        self._pool = QThreadPool(self)
        self._pool.setMaxThreadCount(1)
        self._timer = QTimer(self)
        self._timer.setSingleShot(True)
        self._timer.setInterval(wait_ms)
        self._timer.timeout.connect(self._start)
        self.came_back.connect(self._take)
        self.came_along.connect(self._hand_on)

    @property
    def busy(self) -> bool:
        """True from asking until the newest answer is there."""
        return self._timer.isActive() or self._job is not None

    def ask(self, question: Callable[..., Any], *, tells: bool = False) -> None:
        """Ask after a moment of quiet; what was asked before is dropped."""
        self.drop()
        self._question, self._tells = question, tells
        self._timer.start()

    def drop(self) -> None:
        """Stop and forget what is being worked on."""
        self._number += 1
        self._timer.stop()
        if self._job is not None:
            self._job.stop.set()
            self._job = None

    def finish(self) -> None:
        """Drop everything and wait until no thread runs (before the window goes)."""
        self.drop()
        self._pool.waitForDone(10_000)

    def _start(self) -> None:
        assert self._question is not None
        self._job = _Job(self, self._number, self._question, self._tells)
        self._pool.start(self._job)

    @Slot(int, object, str)
    def _take(self, number: int, answer: object, trouble: str) -> None:
        if number != self._number:
            return
        self._job = None
        if trouble:
            self.failed.emit(trouble)
        else:
            self.answered.emit(answer)

    @Slot(int, object)
    def _hand_on(self, number: int, news: object) -> None:
        if number == self._number:
            self.told.emit(news)
