"""The last net: an unexpected error shows a calm message and never closes the window."""

from __future__ import annotations

import sys
import traceback
from types import TracebackType

from PySide6.QtWidgets import QApplication, QMessageBox

from app.resources import __version__


class Trouble:
    """Catches what nothing else caught and tells the person once, not a hundred times."""

    def __init__(self) -> None:
        self._showing = False
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
        if self._showing or QApplication.instance() is None:
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
