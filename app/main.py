"""Start the window."""

from __future__ import annotations

import signal
import sys
from pathlib import Path

from PySide6.QtCore import QCoreApplication, QTimer
from PySide6.QtGui import QIcon
from PySide6.QtWidgets import QApplication

from app import settings, theme
from app.document import Document
from app.resources import data_path
from app.trouble import Trouble
from app.window import MainWindow
from geometry.layout import Job
from geometry.open_file import open_job

FIRST_SAMPLE = "healthy-roadster.bobline"


def first_job() -> Job:
    """What stands on the floor when no file was asked for: the healthy sample car."""
    return open_job(data_path("sample_layouts") / FIRST_SAMPLE)


def run(path: str | None) -> int:
    """Show the window with a file, or with the first sample, until it is closed."""
    # Long work in threads would otherwise hold a frame up for 5 ms at a time.
    sys.setswitchinterval(0.0005)
    QCoreApplication.setOrganizationName(settings.ORGANIZATION)
    QCoreApplication.setApplicationName("Bobline")
    application = QApplication.instance() or QApplication(sys.argv[:1])
    assert isinstance(application, QApplication)
    application.setDesktopFileName("bobline")
    application.setWindowIcon(QIcon(str(data_path("icons") / "bobline.svg")))
    theme.dress(application, settings.get_int("text size", 100, 100, 200))
    trouble = Trouble()
    trouble.install()
    signal.signal(signal.SIGINT, signal.SIG_DFL)
    document = Document(first_job())
    window = MainWindow(document)
    trouble.keep = window.recovery.look
    window.show()
    # After the window is up, so that what there is to ask or tell has a place.
    QTimer.singleShot(0, lambda: _begin(window, path))
    return application.exec()


def _begin(window: MainWindow, path: str | None) -> None:
    """Open the file that was asked for, then offer kept work."""
    if path is not None:
        window.open_path(Path(path))
    window.offer_kept_work()
