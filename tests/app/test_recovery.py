"""Work is never lost: windows killed in the middle of a drag, and what comes back."""

from __future__ import annotations

import os
import signal
import subprocess
import sys
import time
from dataclasses import replace
from pathlib import Path

import pytest
from PySide6.QtWidgets import QListWidget

from app.document import Document
from app.home_file import FileMark
from app.process_lock import ProcessLock, is_free
from app.recovery import Record, Recovery, left_behind, recovery_folder
from geometry.layout import UPPER_INNER, Point
from geometry.layout_file import job_to_text, write_job
from tests.sample_cars import SAMPLES

ROOT = Path(__file__).resolve().parents[2]
posix = pytest.mark.skipif(os.name != "posix", reason="SIGKILL")
ELSEWHERE = Point(350.0, 390.0, 0.0)


class Child:
    """A window in another process that is in the middle of a drag, or of saving."""

    def __init__(self, tmp_path: Path, opened: Path | None, doing: str) -> None:
        self.told = tmp_path / "told"
        words = [sys.executable, "-m", f"tests.app.{doing}", str(self.told)]
        words += [str(opened)] if opened else []
        self.process = subprocess.Popen(
            words, cwd=ROOT, env={**os.environ, "QT_QPA_PLATFORM": "offscreen"},
            stdout=subprocess.DEVNULL, stderr=subprocess.PIPE,
        )

    def wait(self) -> str:
        """What stands on its floor, in the middle of its drag."""
        until = time.monotonic() + 60.0
        while not self.told.exists():
            if self.process.poll() is not None:
                raise AssertionError(self.process.stderr.read().decode())
            assert time.monotonic() < until, "the window never came to its drag"
            time.sleep(0.02)
        return self.told.read_text()

    def kill(self) -> None:
        if self.process.poll() is None:
            self.process.send_signal(signal.SIGKILL)
        self.process.wait()
        self.process.stderr.close()


@pytest.fixture
def start(tmp_path):
    children = []

    def begin(opened: Path | None = None, doing: str = "dragging_window") -> Child:
        children.append(Child(tmp_path, opened, doing))
        return children[-1]

    yield begin
    for child in children:
        child.kill()


@posix
def test_a_window_killed_in_a_drag_gives_all_of_it_back(
    start, make_window, tmp_path, answers, qtbot
):
    home = tmp_path / "car.bobline"
    write_job(home, SAMPLES["healthy-roadster"])
    child = start(home)
    stood = child.wait()
    time.sleep(2.0)
    child.kill()

    window = make_window(SAMPLES["strut-hatch"])
    assert len(left_behind()) == 1
    answers.press("Take it back")
    window.offer_kept_work()
    assert "Work to take back" in answers.said[0]
    document = window.document
    assert job_to_text(document.job) == stood
    assert document.path == home
    assert document.is_changed
    assert window.isWindowModified()
    # It is kept again here, and by nobody else.
    assert left_behind() == []
    assert window.recovery.file.exists()
    # Saving lands in the file it came from, without a question: nobody else wrote it.
    window.commands.save()
    assert job_to_text(SAMPLES["healthy-roadster"]) != home.read_text() == stood
    window.close()
    assert list(recovery_folder().iterdir()) == []


@posix
def test_a_window_killed_while_saving_leaves_the_old_file_and_gives_the_new_work_back(
    start, make_window, tmp_path, answers
):
    home = tmp_path / "car.bobline"
    write_job(home, SAMPLES["healthy-roadster"])
    before = home.read_bytes()
    child = start(home, "saving_window")
    stood = child.wait()
    child.kill()
    assert home.read_bytes() == before

    window = make_window(SAMPLES["strut-hatch"])
    answers.press("Take it back")
    window.offer_kept_work()
    assert job_to_text(window.document.job) == stood
    assert window.document.path == home
    window.commands.save()
    assert home.read_text() == stood
    window.close()
    assert list(recovery_folder().iterdir()) == []


_WRITES = """
import sys, itertools
from geometry.layout_file import write_job
from tests.sample_cars import SAMPLES
jobs = itertools.cycle([SAMPLES["healthy-roadster"], SAMPLES["strut-hatch"]])
for job in jobs:
    write_job(sys.argv[1], job)
    print(flush=True)
"""


@posix
def test_a_program_killed_at_any_moment_of_its_writing_leaves_a_whole_file(tmp_path):
    home = tmp_path / "car.bobline"
    whole = {job_to_text(SAMPLES[name]) for name in ("healthy-roadster", "strut-hatch")}
    for kill in range(3):
        writer = subprocess.Popen(
            [sys.executable, "-c", _WRITES, str(home)], cwd=ROOT, stdout=subprocess.PIPE
        )
        writer.stdout.read(5)
        time.sleep(0.0037 * kill)
        writer.send_signal(signal.SIGKILL)
        writer.wait()
        writer.stdout.close()
        assert home.read_text() in whole


@posix
def test_each_change_is_kept_within_two_seconds(start):
    child = start()
    stood = child.wait()
    until = time.monotonic() + 2.0
    kept = ""
    while time.monotonic() < until and kept != stood:
        for file in recovery_folder().glob("*.json"):
            kept = Record.from_text(file.read_text()).layout
        time.sleep(0.02)
    assert kept == stood


@posix
def test_a_living_windows_work_is_not_offered_and_its_file_is_known_to_be_open(
    start, make_window, tmp_path, answers
):
    home = tmp_path / "car.bobline"
    write_job(home, SAMPLES["healthy-roadster"])
    child = start(home)
    child.wait()
    time.sleep(1.5)
    assert left_behind() == []
    window = make_window(SAMPLES["strut-hatch"])
    window.offer_kept_work()
    answers.press("Cancel")
    assert not window.open_path(home)
    assert "open in another Bobline window" in answers.said[0]
    assert window.document.layout.title == SAMPLES["strut-hatch"].planned.title
    answers.press("Open a copy")
    assert window.open_path(home)
    assert window.document.path is None
    child.kill()
    # The system let go of the dead window's claim.
    assert window.open_path(home)
    assert window.document.path == home


def lose(qtbot, job, path=None) -> Path:
    """Keep a job's change as a window does, then end without cleaning up."""
    document = Document(job, path)
    recovery = Recovery(document, wait_ms=1)
    document.move_point("left", UPPER_INNER, ELSEWHERE)
    qtbot.waitUntil(recovery.file.exists, timeout=3000)
    recovery._worker.shutdown(wait=True)
    # What the system does when a process dies: the lock is let go, its file stays.
    os.close(recovery._lock._descriptor)
    recovery._lock._descriptor = None
    document.file.leave()
    document.deleteLater()
    return recovery.file


def test_a_clean_end_leaves_nothing(make_window, qtbot):
    window = make_window()
    window.document.move_point("left", UPPER_INNER, ELSEWHERE)
    qtbot.waitUntil(window.recovery.file.exists, timeout=2000)
    window.document.undo()
    qtbot.waitUntil(lambda: not window.recovery.file.exists(), timeout=2000)
    window.document.redo()
    qtbot.waitUntil(window.recovery.file.exists, timeout=2000)
    window.document.open_job(window.document.job, None)
    window.close()
    assert list(recovery_folder().iterdir()) == []


def test_what_can_not_be_kept_is_said(window, monkeypatch, qtbot):
    monkeypatch.setattr("app.recovery.write_text_file", full_disk)
    window.document.move_point("left", UPPER_INNER, ELSEWHERE)
    qtbot.waitUntil(lambda: "the disk is full" in window._guidance_words.text(), timeout=4000)
    assert window.guidance.isVisible()
    monkeypatch.undo()


def full_disk(*args):
    raise OSError(28, "No space left on device")


def test_later_leaves_it_and_throwing_away_asks_first(make_window, qtbot, answers):
    file = lose(qtbot, SAMPLES["rack-set-low"])
    window = make_window()
    answers.press("Later")
    window.offer_kept_work()
    assert file.exists()
    answers.press("Throw away…")
    answers.press("No")
    answers.press("Throw away…")
    answers.press("Yes")
    answers_in_one_dialog(window, answers)
    assert not file.exists()
    assert left_behind() == []


def answers_in_one_dialog(window, answers):
    window.offer_kept_work()
    assert answers.said[1:] and any("for good" in said for said in answers.said)


def test_damaged_kept_work_can_only_be_thrown_away(make_window, qtbot, answers):
    recovery_folder().mkdir(parents=True)
    (recovery_folder() / "abc.json").write_text('{"bobline recovery": 1, "tit')
    (recovery_folder() / "abd.json").write_text("[]")
    (recovery_folder() / ".abc.json.x.part").write_text("half")
    window = make_window()
    seen = []

    def look(dialog):
        names = dialog.findChild(QListWidget)
        seen.append([names.item(i).text() for i in range(names.count())])
        assert not dialog.take.isEnabled()
        dialog.later.click()

    answers.do(look)
    window.offer_kept_work()
    assert len(seen[0]) == 2 and all("can't be read" in words for words in seen[0])
    for left in left_behind():
        left.throw_away()
    assert list(recovery_folder().glob("*abc*")) == []


def test_a_kept_layout_that_can_not_be_read_is_told_and_stays(make_window, answers):
    recovery_folder().mkdir(parents=True)
    record = Record("Bad", '{"format": "bobline layout", "left": 7}', None, None, "2026-01-01")
    file = recovery_folder() / "abc.json"
    file.write_text(record.to_text())
    window = make_window()
    before = window.document.job
    answers.press("Take it back")
    answers.press("Close")
    window.offer_kept_work()
    assert window.document.job is before
    assert file.exists()


def test_only_one_window_gets_the_work_back(make_window, qtbot, answers):
    lose(qtbot, SAMPLES["rack-set-low"])
    (left,) = left_behind()
    other = ProcessLock(left.file.with_suffix(".lock"))
    assert other.take()
    window = make_window()
    answers.press("OK")
    assert not window.take_back(left)
    assert "Another window" in answers.said[0]
    other.release()
    assert window.take_back(left)
    assert window.document.layout.point("left", UPPER_INNER) == ELSEWHERE


def test_a_file_that_was_changed_since_is_asked_about_before_it_is_saved_over(
    make_window, qtbot, answers, tmp_path
):
    home = tmp_path / "car.bobline"
    write_job(home, SAMPLES["healthy-roadster"])
    mark = FileMark.of(home)
    window = make_window()
    window.document.open_job(SAMPLES["healthy-roadster"], home, mark)
    window.document.move_point("left", UPPER_INNER, ELSEWHERE)
    text = Record.of(window.document.job, home, mark).to_text()
    recovery_folder().mkdir(parents=True, exist_ok=True)
    (recovery_folder() / "abc.json").write_text(text)
    window.document.open_job(SAMPLES["strut-hatch"], None)
    write_job(home, replace(SAMPLES["healthy-roadster"], notes="by another program"))
    (left,) = left_behind()
    assert window.take_back(left)
    answers.press("Cancel")
    window.commands.save()
    assert "changed by another program" in answers.said[0]
    assert "by another program" in home.read_text()


def test_a_lock_is_free_again_once_released(tmp_path):
    lock = ProcessLock(tmp_path / "a" / "x.lock")
    assert lock.take()
    assert not is_free(lock.path)
    assert not ProcessLock(lock.path).take()
    lock.release()
    assert is_free(lock.path)
    assert not lock.path.exists()
