"""What every window test needs: places of its own, a window, and hands for dialogs."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from functools import partial
from pathlib import Path

import pytest
from PySide6.QtCore import QSettings, QTimer
from PySide6.QtWidgets import QApplication, QDialog, QMessageBox, QPushButton, QWidget

from app import theme
from app.document import Document
from app.window import MainWindow
from tests.sample_cars import SAMPLES


@pytest.fixture(autouse=True)
def own_places(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """Settings and kept work go to the test's own folder, never to the person's."""
    place = tmp_path / "own"
    place.mkdir()
    QSettings.setPath(QSettings.Format.IniFormat, QSettings.Scope.UserScope, str(place))
    monkeypatch.setenv("BOBLINE_DATA", str(place / "data"))
    return place


@pytest.fixture
def make_window(qtbot) -> Iterator[Callable[..., MainWindow]]:
    """Makes shown windows, by default with the healthy car, that close without asking."""
    made: list[MainWindow] = []

    def make(job=None, path: Path | None = None) -> MainWindow:
        theme.dress(QApplication.instance(), 100)
        window = MainWindow(Document(job or SAMPLES["healthy-roadster"], path))
        qtbot.addWidget(window, before_close_func=forget_changes)
        window.show()
        qtbot.waitExposed(window)
        QApplication.processEvents()
        made.append(window)
        return window

    yield make
    for window in made:
        forget_changes(window)


@pytest.fixture
def window(make_window) -> MainWindow:
    return make_window()


def forget_changes(window: MainWindow) -> None:
    """Let a window close without the question."""
    if window.document.is_changed or window.document.previewing:
        window.document.open_job(window.document.job, None)


class Answers:
    """Answers dialogs as they come up, one act each, and remembers what they said."""

    def __init__(self) -> None:
        self.said: list[str] = []
        self._acts: list[Callable[[QWidget], None]] = []
        self._timer = QTimer()
        self._timer.setInterval(5)
        self._timer.timeout.connect(self._look)

    def press(self, button: str) -> None:
        """Press the button of the next dialog whose words (without &) are these."""

        def act(dialog: QWidget) -> None:
            words = {b.text().replace("&", ""): b for b in dialog.findChildren(QPushButton)}
            assert button in words, f"no {button} among {sorted(words)}"
            words[button].click()

        self.do(act)

    def do(self, act: Callable[[QWidget], None]) -> None:
        self._acts.append(act)
        self._timer.start()

    def _look(self) -> None:
        dialog = QApplication.activeModalWidget()
        if dialog is None or not self._acts:
            return
        if isinstance(dialog, QMessageBox):
            self.said.append(f"{dialog.text()} {dialog.informativeText()}")
        else:
            self.said.append(dialog.windowTitle())
        # From a timer of its own: one that is still busy does not fire in a further dialog.
        QTimer.singleShot(0, partial(self._answer, self._acts.pop(0), dialog))

    def _answer(self, act: Callable[[QWidget], None], dialog: QWidget) -> None:
        try:
            act(dialog)
        except BaseException:
            # Never leave a test waiting in a dialog that nobody answers.
            if isinstance(dialog, QDialog):
                dialog.reject()
            raise

    @property
    def all_asked(self) -> bool:
        return not self._acts

    def stop(self) -> None:
        self._timer.stop()


@pytest.fixture
def answers(qapp) -> Iterator[Answers]:
    """Hands that answer dialogs; the test fails if an awaited one never came."""
    hands = Answers()
    yield hands
    hands.stop()
    assert hands.all_asked, "a dialog that was waited for never came"
