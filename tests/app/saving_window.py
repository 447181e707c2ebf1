"""A window in a process of its own that is in the middle of saving until it is killed.

Opens the layout file named second, changes it, writes what then stands to the file named
first, and saves; the disk never answers.
"""

from __future__ import annotations

import sys
import time
from pathlib import Path

from PySide6.QtCore import QTimer
from PySide6.QtWidgets import QApplication

import geometry.text_file
from app.document import Document
from app.window import MainWindow
from geometry.layout import UPPER_INNER, Point
from geometry.layout_file import job_to_text
from tests.sample_cars import SAMPLES


def main(tell: Path, opened: Path) -> None:
    application = QApplication([])
    window = MainWindow(Document(SAMPLES["strut-hatch"]))
    window.show()
    assert window.open_path(opened)
    document = window.document
    document.move_point("left", UPPER_INNER, Point(350.0, 390.0, 0.0))
    stood = job_to_text(document.job)

    def save() -> None:
        if not window.recovery.file.exists():
            return
        waiting.stop()

        def never(descriptor: int) -> None:
            tell.with_suffix(".new").write_text(stood)
            tell.with_suffix(".new").replace(tell)
            time.sleep(600.0)

        geometry.text_file.os.fsync = never
        window.commands.save()

    waiting = QTimer()
    waiting.timeout.connect(save)
    waiting.start(20)
    application.exec()


if __name__ == "__main__":
    main(Path(sys.argv[1]), Path(sys.argv[2]))
