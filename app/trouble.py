"""The last net: an unexpected error shows a calm message and never closes the window."""

from __future__ import annotations

import sys
import time
import traceback
from collections.abc import Callable
from types import TracebackType

from PySide6.QtWidgets import QApplication, QMessageBox

from app.resources import __version__

QUIET_SECONDS = 3.0
"""The same error again within this time is kept but not told: it would bury the window."""


class Trouble:
    """Catches what nothing else caught and tells the person once, not a hundred times."""

    def __init__(self) -> None:
        self.keep: Callable[[], None] = lambda: None
        """Sees to it that the work is kept against worse; called at each error."""
        self._showing = False
        self._last: dict[str, float] = {}
        self.reports: list[str] = []

    def install(self) -> None:
        """Take the place of Python's own last handler."""
        sys.excepthook = self.handle

    def handle(
        self,
        kind: type[BaseException],
        error: BaseException,
        trace: TracebackType | None,
    ) -> None:
        """Keep the report and show it; a second error while one is shown is only kept."""
        if issubclass(kind, KeyboardInterrupt):
            QApplication.quit()
            return
        report = f"Bobline {__version__}, Python {sys.version.split()[0]}, {sys.platform}\n"
        report += "".join(traceback.format_exception(kind, error, trace))
        self.reports.append(report)
        print(report, file=sys.stderr)
        self.keep()
        again = self._comes_again(report)
        if self._showing or again or QApplication.instance() is None:
            return
        self._showing = True
        try:
            box = QMessageBox(QApplication.activeWindow())
            box.setIcon(QMessageBox.Icon.Warning)
            box.setWindowTitle("Bobline")
            box.setText("Something went wrong inside Bobline. Your work is still here.")
            box.setInformativeText(
                "Save it under a new name to be sure. To help get this mended, send the text "
                "under “Show Details” with a word on what you were doing."
            )
            box.setDetailedText(report)
            box.exec()
        finally:
            self._showing = False
            self._last[report] = time.monotonic()

    def _comes_again(self, report: str) -> bool:
        """True for an error that goes on and on, as one in drawing the floor: it was told."""
        now = time.monotonic()
        before = self._last.get(report)
        if before is not None:
            self._last[report] = now
        return before is not None and now - before < QUIET_SECONDS
