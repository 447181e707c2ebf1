"""A window in a process of its own that is in the middle of a drag until it is killed.

Writes what stands on its floor to the file named first; the layout file named second, if
any, is opened before.
"""

from __future__ import annotations

import sys
from pathlib import Path

from PySide6.QtCore import QTimer
from PySide6.QtWidgets import QApplication

from app.document import Document
from app.window import MainWindow
from geometry.layout import UPPER_INNER, Point
from geometry.layout_file import job_to_text
from tests.app.hands import pull
from tests.sample_cars import SAMPLES


def main(tell: Path, opened: Path | None) -> None:
    application = QApplication([])
    window = MainWindow(Document(SAMPLES["healthy-roadster"]))
    window.show()
    if opened is not None:
        assert window.open_path(opened)
    document = window.document
    document.move_point("left", UPPER_INNER, Point(350.0, 390.0, 0.0))

    def drag() -> None:
        start = window.floor.scene.places["left", "tie rod inner"]
        pull(window.floor, start, (start[0] - 40.0, start[1] + 30.0))
        assert document.previewing
        tell.with_suffix(".new").write_text(job_to_text(document.job))
        tell.with_suffix(".new").replace(tell)

    QTimer.singleShot(100, drag)
    application.exec()


if __name__ == "__main__":
    main(Path(sys.argv[1]), Path(sys.argv[2]) if len(sys.argv) > 2 else None)
