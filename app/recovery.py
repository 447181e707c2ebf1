"""Work that is never lost: every change stands in a recovery file within two seconds.

Each window keeps one record of its unsaved work in the person's own data folder and holds a
lock beside it while it lives. A record whose lock is free belongs to a window that ended
without asking, and is offered back.
"""

from __future__ import annotations

import contextlib
import json
import uuid
from concurrent.futures import Future, ThreadPoolExecutor
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path

from PySide6.QtCore import QObject, QTimer, Signal

from app.document import Document
from app.home_file import FileMark, data_folder
from app.process_lock import ProcessLock, is_free
from geometry.layout import Job
from geometry.layout_file import job_from_text, job_to_text
from geometry.output_file import plain_reason
from geometry.text_file import read_text_file, write_text_file

WAIT_MS = 700
"""From a change to its record being written; the writing itself takes far less than a second."""
_LARGEST = 20_000_000
_KIND = "bobline recovery"


def recovery_folder() -> Path:
    """Where the records lie."""
    return data_folder() / "recovery"


@dataclass(frozen=True)
class Record:
    """Unsaved work as it was kept: the job's text, its file if it had one, and when."""

    title: str
    layout: str
    path: Path | None
    mark: FileMark | None
    kept: str

    @staticmethod
    def of(job: Job, path: Path | None, mark: FileMark | None) -> Record:
        now = datetime.now().astimezone().isoformat(timespec="seconds")
        return Record(job.planned.title, job_to_text(job), path, mark, now)

    def to_text(self) -> str:
        mark = self.mark
        return json.dumps(
            {
                _KIND: 1,
                "title": self.title,
                "kept": self.kept,
                "path": None if self.path is None else str(self.path),
                "mark": None if mark is None else [mark.size, mark.modified_ns, mark.digest],
                "layout": self.layout,
            },
            indent=1,
        )

    @staticmethod
    def from_text(text: str) -> Record:
        """A record from its text; ValueError if it is none."""
        raw = json.loads(text)
        if not isinstance(raw, dict) or raw.get(_KIND) != 1:
            raise ValueError("This is not kept work.")
        path, mark = raw["path"], raw["mark"]
        return Record(
            str(raw["title"]),
            str(raw["layout"]),
            None if path is None else Path(str(path)),
            None if mark is None else FileMark(int(mark[0]), int(mark[1]), str(mark[2])),
            str(raw["kept"]),
        )

    def job(self) -> Job:
        """The work itself; ValueError if it can't be read."""
        return job_from_text(self.layout)

    @property
    def time_words(self) -> str:
        """When it was kept, as a person says it."""
        try:
            when = datetime.fromisoformat(self.kept)
        except ValueError:
            return "at an unknown time"
        return when.strftime("on %Y-%m-%d at %H:%M")


@dataclass(frozen=True)
class Left:
    """A record that a window left behind when it ended without asking."""

    file: Path
    record: Record | None
    """None if the file can't be read."""

    def taken(self) -> ProcessLock | None:
        """The lock that makes it this window's own; None if another took it meanwhile."""
        lock = ProcessLock(self.file.with_suffix(".lock"))
        try:
            if lock.take() and self.file.exists():
                return lock
        except OSError:
            return None
        lock.release()
        return None

    def remove(self) -> None:
        """Delete the file; its lock must be held."""
        _remove(self.file)

    def throw_away(self) -> None:
        """Delete it for good, unless another window is just taking it back."""
        lock = self.taken()
        if lock is not None:
            self.remove()
            lock.release()


def _remove(file: Path) -> None:
    """A record and what an interrupted write of it left."""
    with contextlib.suppress(OSError):
        file.unlink(missing_ok=True)
        for part in file.parent.glob(f".{file.name}.*.part"):
            part.unlink(missing_ok=True)


def left_behind() -> list[Left]:
    """What windows left that ended without asking, newest first."""
    out: list[Left] = []
    with contextlib.suppress(OSError):
        for lock in recovery_folder().glob("*.lock"):
            if not lock.with_suffix(".json").exists():
                # Of a window that ended with nothing unsaved; looking takes it away.
                is_free(lock)
        kept = recovery_folder().glob("*.json")
        free = [file for file in kept if is_free(file.with_suffix(".lock"))]
        out = [Left(file, _read(file)) for file in free]
    return sorted(out, key=lambda left: left.record.kept if left.record else "", reverse=True)


def _read(file: Path) -> Record | None:
    try:
        return Record.from_text(read_text_file(file, _LARGEST))
    except (OSError, ValueError, KeyError, TypeError, IndexError):
        return None


class Recovery(QObject):
    """Keeps one window's unsaved work in its record until it is saved or let go."""

    failed = Signal(str)
    """Keeping the work failed; why, in words. Said once until it works again."""

    def __init__(self, document: Document, wait_ms: int = WAIT_MS) -> None:
        super().__init__(document)
        self._document = document
        self._file = recovery_folder() / f"{uuid.uuid4().hex[:12]}.json"
        self._lock = ProcessLock(self._file.with_suffix(".lock"))
        # A lasting worker: writing waits for the disk, and no drag should.
        self._worker = ThreadPoolExecutor(1, "recovery")
        self._writing: Future[str] | None = None
        self._kept: tuple[Job, Path | None] | None = None
        self._told = False
        self._ended = False
        self._timer = QTimer(self)
        self._timer.setSingleShot(True)
        self._timer.setInterval(wait_ms)
        self._timer.timeout.connect(self._keep)
        document.edited.connect(self.look)
        document.solved.connect(self.look)

    @property
    def file(self) -> Path:
        return self._file

    def look(self) -> None:
        """Keep what stands a moment from now, unless that is on its way already."""
        if not self._ended and not self._timer.isActive():
            self._timer.start()

    def _keep(self) -> None:
        document = self._document
        if self._writing is not None:
            if not self._writing.done():
                self._timer.start()
                return
            self._tell(self._writing.result())
            self._writing = None
        if not document.is_changed and not document.previewing:
            self._drop()
            return
        now = (document.job, document.path)
        if self._kept is not None and self._kept[0] is now[0] and self._kept[1] == now[1]:
            return
        self._kept = now
        mark = document.file.mark
        self._writing = self._worker.submit(self._write, *now, mark)
        # Comes back once to see how the writing went.
        self._timer.start()

    def _write(self, job: Job, path: Path | None, mark: FileMark | None) -> str:
        """On the worker: put the record on disk; why not, in words, or nothing."""
        try:
            if not self._lock.take():
                return "another window holds its lock"
            write_text_file(self._file, Record.of(job, path, mark).to_text())
        except (OSError, ValueError) as error:
            return plain_reason(error) if isinstance(error, OSError) else str(error)
        return ""

    def _tell(self, trouble: str) -> None:
        if trouble and not self._told:
            self.failed.emit(trouble)
        self._told = bool(trouble)
        if trouble:
            self._kept = None

    def _drop(self) -> None:
        """Nothing is unsaved: the record goes."""
        if self._kept is not None:
            self._kept = None
            self._writing = self._worker.submit(self._forget)

    def _forget(self) -> str:
        _remove(self._file)
        return ""

    def keep_now(self) -> bool:
        """Put what stands on disk before going on; True if it is there."""
        self._timer.stop()
        document = self._document
        self._kept = (document.job, document.path)
        trouble = self._worker.submit(self._write, *self._kept, document.file.mark).result()
        self._tell(trouble)
        return not trouble

    def end(self) -> None:
        """The window closes and its work is saved or let go: leave nothing behind."""
        self._timer.stop()
        if self._ended:
            return
        self._ended = True
        self._document.edited.disconnect(self.look)
        self._document.solved.disconnect(self.look)
        self._worker.shutdown(wait=True)
        _remove(self._file)
        self._lock.release()
