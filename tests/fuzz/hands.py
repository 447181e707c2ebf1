"""Random hands on a real window: nothing they do breaks it, fills the memory or is not undone.

    python -m tests.fuzz.hands                       # 20,000 acts
    python -m tests.fuzz.hands --actions 500 --seed 7

Drags, keys, menus, dialogs, typing, sliders, files, resizing, closing and reopening in any
order and at odd moments. Any Python exception or Qt warning is a fault. Now and then, and at
the end, everything is undone, and the car must be the one that was opened, letter for letter.
The seed gives the same acts; when workers and timers come in between is the machine's.
"""

from __future__ import annotations

import argparse
import faulthandler
import gc
import os
import random
import sys
import tempfile
import threading
import time
import traceback
from collections import deque
from pathlib import Path
from types import TracebackType
from typing import IO, Any

os.environ.setdefault("QT_QPA_PLATFORM", "offscreen")

from PySide6.QtCore import QMessageLogContext, QSettings, QtMsgType, qInstallMessageHandler
from PySide6.QtWidgets import QApplication, QDialog

from app import settings, theme
from app.document import Document
from app.window import MainWindow
from geometry.layout import Job
from geometry.layout_file import job_from_text, job_to_text
from tests.fuzz.answers import Answers
from tests.fuzz.hand_acts import Acts, breathe
from tests.sample_cars import SAMPLES

_ABOUT_ITSELF = "This plugin does not support"
"""What the screen that is not there says about itself."""
_CLOSE_EVERY = 90
_UNDO_EVERY = 60
_REMEMBERED = 60
_FLAT = 0.05
"""How much the memory may grow over the second half."""


def resident_mb() -> float | None:
    """Memory in use, MB; None where the system doesn't tell."""
    try:
        pages = int(Path("/proc/self/statm").read_text().split()[1])
    except (OSError, ValueError, IndexError):
        return None
    return pages * os.sysconf("SC_PAGE_SIZE") / 1e6


class Watch:
    """Catches exceptions and Qt's warnings while the hands are at work."""

    def __init__(self, trail: IO[str] | None = None) -> None:
        self.faults: list[str] = []
        self.acts: deque[str] = deque(maxlen=_REMEMBERED)
        self._trail = trail

    def tell(self, act: str) -> None:
        self.acts.append(act)
        if self._trail is not None:
            # Written at once: what ends the process leaves no other trace.
            print(act, file=self._trail, flush=True)

    def fault(self, words: str) -> None:
        self.faults.append(f"{words}\nafter:\n  " + "\n  ".join(self.acts))

    def __enter__(self) -> Watch:
        self._hooks = sys.excepthook, threading.excepthook, sys.unraisablehook
        sys.excepthook = self._raised
        threading.excepthook = lambda a: self._raised(a.exc_type, a.exc_value, a.exc_traceback)
        sys.unraisablehook = lambda a: self._raised(a.exc_type, a.exc_value, a.exc_traceback)
        self._handler = qInstallMessageHandler(self._said)
        return self

    def __exit__(self, *_: object) -> None:
        sys.excepthook, threading.excepthook, sys.unraisablehook = self._hooks
        qInstallMessageHandler(self._handler)

    def _raised(
        self, kind: type[BaseException], error: BaseException | None, trace: TracebackType | None
    ) -> None:
        self.fault("".join(traceback.format_exception(kind, error, trace)))

    def _said(self, kind: QtMsgType, context: QMessageLogContext, words: str) -> None:
        if kind != QtMsgType.QtDebugMsg and not words.startswith(_ABOUT_ITSELF):
            self.fault(f"Qt: {words}")


class Hands:
    """A window, its hands, and what they have found."""

    def __init__(self, seed: int, folder: Path, trail: IO[str] | None = None) -> None:
        self.watch = Watch(trail)
        self.chance = random.Random(seed)
        self.folder = folder
        self.answers = Answers(self.chance, folder, self.watch.tell)
        self.opened_with = ""
        self._open_window(SAMPLES[self.chance.choice(list(SAMPLES))])

    def _open_window(self, job: Job) -> None:
        document = Document(job)
        self.window = MainWindow(document)
        document.opened.connect(self._note_opening)
        self._note_opening()
        self.acts = Acts(self.window, self.chance, self.folder, self.answers, self.watch.tell)
        self.window.show()
        breathe()

    def _note_opening(self) -> None:
        self.opened_with = job_to_text(self.window.document.job)

    def run(self, actions: int) -> list[tuple[int, float]]:
        """Do ``actions`` acts; the memory in use, MB, at a hundred moments of the run."""
        memory: list[tuple[int, float]] = []
        every = max(1, actions // 100)
        with self.watch:
            self.answers.start()
            for number in range(1, actions + 1):
                self._do_one()
                if number % every == 0:
                    gc.collect()
                    now = resident_mb()
                    if now is not None:
                        memory.append((number, now))
                if len(self.watch.faults) >= 5:
                    break
            self._guarded(self.undo_all)
            self._guarded(self._leave)
            self.answers.stop()
        return memory

    def _do_one(self) -> None:
        chance = self.chance
        if chance.random() < 1 / _CLOSE_EVERY:
            self._guarded(self.reopen)
        elif chance.random() < 1 / _UNDO_EVERY:
            self._guarded(self.undo_all)
        else:
            self._guarded(self.acts.act)
        if chance.random() < 0.6:
            self._guarded(breathe)

    def _guarded(self, act: Any) -> None:
        try:
            act()
        except Exception:  # noqa: BLE001 - whatever it was is what this looks for
            self.watch.fault(traceback.format_exc())

    def undo_all(self) -> None:
        """Undo to the start: the car that was opened stands there again, letter for letter."""
        document = self.window.document
        self.watch.tell("undo all")
        document.cancel_preview()
        # Whatever was done until here can be saved and opened again.
        if job_from_text(job_to_text(document.job)) != document.job:
            self.watch.fault("What stands is not what its file gives back.")
        while document.undo_text is not None:
            document.undo()
        breathe()
        now = job_to_text(document.job)
        if now != self.opened_with:
            self.watch.fault(f"Undone is not as opened.\n{self.opened_with}\n---\n{now}")

    def reopen(self) -> None:
        """Close the window at an odd moment; if it closed, open another."""
        self.watch.tell("close")
        self.window.close()
        if not self.window.isVisible():
            self._let_go()
            self.watch.tell("reopen")
            self._open_window(SAMPLES[self.chance.choice(list(SAMPLES))])

    def _let_go(self) -> None:
        for widget in QApplication.topLevelWidgets():
            if isinstance(widget, QDialog) and widget.isVisible():
                widget.close()
        self.window.deleteLater()
        breathe()

    def _leave(self) -> None:
        self.window.document.open_job(self.window.document.job, None)
        self.window.close()
        self._let_go()


def prepare(folder: Path) -> Path:
    """Settings and kept work of the run's own, and some files to open, sound and not."""
    QSettings.setPath(QSettings.Format.IniFormat, QSettings.Scope.UserScope, str(folder / "own"))
    os.environ["BOBLINE_DATA"] = str(folder / "own" / "data")
    files = folder / "files"
    files.mkdir(parents=True, exist_ok=True)
    sound = job_to_text(SAMPLES["rack-set-low"])
    (files / "sound.bobline").write_text(sound, encoding="utf-8")
    (files / "cut off.bobline").write_text(sound[: len(sound) // 2], encoding="utf-8")
    (files / "empty.csv").write_text("", encoding="utf-8")
    (files / "letters.txt").write_bytes(bytes(range(256)))
    settings.put("guidance seen", False)
    return files


def growth(memory: list[tuple[int, float]]) -> float | None:
    """By what share the memory grew over the second half; None if it is not known."""
    second = [mb for _, mb in memory[len(memory) // 2 :]]
    if len(second) < 10:
        return None
    part = len(second) // 5
    first, last = sorted(second[:part]), sorted(second[-part:])
    return last[part // 2] / first[part // 2] - 1.0


def main() -> int:
    options = argparse.ArgumentParser(description="Random hands on the window.")
    options.add_argument("--actions", type=int, default=20_000)
    options.add_argument("--seed", type=int, default=None, help="random if not given")
    options.add_argument("--trail", type=argparse.FileType("w"), help="write every act here")
    given = options.parse_args()
    seed = random.SystemRandom().randrange(10**6) if given.seed is None else given.seed
    print(f"seed {seed}, {given.actions} acts", flush=True)
    sys.setswitchinterval(0.0005)
    begin = time.monotonic()
    faulthandler.enable()
    with tempfile.TemporaryDirectory() as place:
        files = prepare(Path(place))
        application = QApplication.instance() or QApplication([])
        assert isinstance(application, QApplication)
        theme.dress(application, 100)
        hands = Hands(seed, files, given.trail)
        memory = hands.run(given.actions)
    faults = list(hands.watch.faults)
    grown = growth(memory)
    for number, mb in memory[:: max(1, len(memory) // 20)]:
        print(f"{number:>8} acts {mb:8.1f} MB")
    if grown is not None:
        print(f"memory over the second half: {100 * grown:+.1f} %")
        if given.actions >= 5000 and grown > _FLAT:
            faults.append(f"The memory grew by {100 * grown:.1f} % over the second half.")
    for fault in faults:
        print(fault, "\n")
    print(f"{len(faults)} faults in {time.monotonic() - begin:.0f} s, seed {seed}")
    return 1 if faults else 0


if __name__ == "__main__":
    sys.exit(main())
