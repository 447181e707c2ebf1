"""The file a document lives in: where it is, how it was last seen, and who else has it open."""

from __future__ import annotations

import hashlib
import os
from dataclasses import dataclass
from pathlib import Path

from PySide6.QtCore import QStandardPaths

from app.process_lock import ProcessLock, is_free


def data_folder() -> Path:
    """Where the program keeps what it needs to remember of a person's work.

    ``BOBLINE_DATA`` names another place (tests, a stick with a portable setup).
    """
    own = os.environ.get("BOBLINE_DATA")
    if own:
        return Path(own)
    place = QStandardPaths.StandardLocation.GenericDataLocation
    return Path(QStandardPaths.writableLocation(place)) / "bobline"


@dataclass(frozen=True)
class FileMark:
    """How a file was when it was last read or written here."""

    size: int
    modified_ns: int
    digest: str

    @staticmethod
    def of(path: Path) -> FileMark | None:
        """The mark of a file as it is now; None if it can't be read."""
        try:
            if not path.is_file():
                return None
            status = path.stat()
            digest = hashlib.sha256(path.read_bytes()).hexdigest()
        except OSError:
            return None
        return FileMark(status.st_size, status.st_mtime_ns, digest)

    def differs(self, path: Path) -> bool:
        """True if the file's content is another one now; a file that is gone does not differ."""
        try:
            status = path.stat()
        except OSError:
            return False
        if (status.st_size, status.st_mtime_ns) == (self.size, self.modified_ns):
            return False
        now = FileMark.of(path)
        return now is not None and now.digest != self.digest


class HomeFile:
    """A document's file, its mark and the claim on it that other windows can see."""

    def __init__(self) -> None:
        self.path: Path | None = None
        self.mark: FileMark | None = None
        self._claim: ProcessLock | None = None
        self._drive: int | None = None

    def settle(self, path: Path | None, mark: FileMark | None) -> None:
        """Live in ``path`` from now on (None: in no file yet)."""
        self.leave()
        self.path, self.mark = path, mark
        self._drive = None if path is None else _drive_of(path)
        if path is not None:
            claim = ProcessLock(_claim_path(path))
            # Without the claim all goes on; another window just isn't warned.
            try:
                self._claim = claim if claim.take() else None
            except OSError:
                self._claim = None

    def leave(self) -> None:
        """Give up the claim on the file."""
        if self._claim is not None:
            self._claim.release()
            self._claim = None

    def is_open_elsewhere(self, path: Path) -> bool:
        """True if another window has ``path`` open."""
        claim = _claim_path(path)
        own = self._claim is not None and self._claim.path == claim
        try:
            return not own and claim.exists() and not is_free(claim)
        except OSError:
            return False

    def drive_has_gone(self) -> bool:
        """True if the file is not there and its folder now lies on another drive.

        A stick that was pulled out may leave an empty folder behind; what is written there
        would be hidden as soon as the stick is back.
        """
        if self.path is None or self._drive is None or self.path.exists():
            return False
        return _drive_of(self.path) not in (None, self._drive)

    def changed_outside(self) -> bool:
        """True if another program has changed the file since it was read or written here."""
        return self.path is not None and self.mark is not None and self.mark.differs(self.path)


def _drive_of(path: Path) -> int | None:
    """What the system calls the drive that a file's folder is on; None if there is no folder."""
    try:
        return path.parent.stat().st_dev
    except OSError:
        return None


def _claim_path(path: Path) -> Path:
    """The lock file of a layout file; any way to the file leads to the same one."""
    name = os.path.normcase(os.path.realpath(path))
    return data_folder() / "open" / f"{hashlib.sha256(name.encode()).hexdigest()[:32]}.lock"
