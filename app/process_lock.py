"""A lock that lives exactly as long as the process that holds it.

The system lets go of it when the process ends, however it ends, so nothing here is fooled
by a process number that was given to another program.
"""

from __future__ import annotations

import contextlib
import os
import sys
from pathlib import Path


def _seize(descriptor: int) -> bool:
    """Lock an open file for this process alone; False if another holds it."""
    try:
        if sys.platform == "win32":
            import msvcrt

            # Far behind the process number, which others may want to read.
            os.lseek(descriptor, 1_000, os.SEEK_SET)
            msvcrt.locking(descriptor, msvcrt.LK_NBLCK, 1)
        else:
            import fcntl

            fcntl.flock(descriptor, fcntl.LOCK_EX | fcntl.LOCK_NB)
    except OSError:
        return False
    return True


class ProcessLock:
    """A lock file held from ``take`` to ``release`` or to the end of the process."""

    def __init__(self, path: Path) -> None:
        self.path = path
        self._descriptor: int | None = None

    @property
    def held(self) -> bool:
        return self._descriptor is not None

    def take(self) -> bool:
        """Hold the lock; False if another window holds it. OSError if it can't be made."""
        if self.held:
            return True
        self.path.parent.mkdir(parents=True, exist_ok=True)
        # Another holder may take its file away between opening and locking: then try again.
        for _ in range(3):
            descriptor = os.open(self.path, os.O_RDWR | os.O_CREAT, 0o600)
            if not _seize(descriptor):
                os.close(descriptor)
                return False
            if self._is_still_there(descriptor):
                # The number is for people to read; the lock holds on a full disk without it.
                with contextlib.suppress(OSError):
                    os.ftruncate(descriptor, 0)
                    os.lseek(descriptor, 0, os.SEEK_SET)
                    os.write(descriptor, f"{os.getpid()}\n".encode())
                self._descriptor = descriptor
                return True
            os.close(descriptor)
        return False

    def _is_still_there(self, descriptor: int) -> bool:
        try:
            return os.path.samestat(os.fstat(descriptor), self.path.stat())
        except OSError:
            return False

    def release(self) -> None:
        """Let go and take the file away."""
        if self._descriptor is None:
            return
        if sys.platform != "win32":
            # While still locked, so that nobody locks a file that is about to go.
            with contextlib.suppress(OSError):
                self.path.unlink()
        os.close(self._descriptor)
        self._descriptor = None
        if sys.platform == "win32":
            with contextlib.suppress(OSError):
                self.path.unlink()


def is_free(path: Path) -> bool:
    """True if no living process holds the lock at ``path``."""
    lock = ProcessLock(path)
    try:
        free = lock.take()
    except OSError:
        return False
    lock.release()
    return free
