"""Writing a finished file in one step: the old one stays whole until the new one is."""

from __future__ import annotations

import contextlib
import errno
import os
import tempfile
from pathlib import Path

_REASONS = {
    errno.EACCES: "you have no permission to write there",
    errno.EPERM: "the file is write-protected",
    errno.EROFS: "the disk can only be read",
    errno.ENOENT: "the folder does not exist",
    errno.ENOTDIR: "the folder does not exist",
    errno.EISDIR: "a folder has that name",
    errno.ENOSPC: "the disk is full",
    errno.EDQUOT: "the disk is full",
    errno.ENAMETOOLONG: "the name is too long",
}


class OutputError(OSError):
    """A file could not be written; the message is a plain sentence."""

    def __init__(self, message: str) -> None:
        super().__init__(message)


def replace_file(path: str | os.PathLike[str], data: bytes) -> None:
    """Write ``data`` to ``path`` by way of a new file beside it, so a crash leaves one whole.

    A link is followed and an existing file's permissions are kept. Raises OutputError.
    """
    target = Path(path)
    temporary: str | None = None
    try:
        target = Path(os.path.realpath(path))
        if target.is_dir():
            raise IsADirectoryError(errno.EISDIR, "is a folder")
        if target.exists() and not os.access(target, os.W_OK):
            raise PermissionError(errno.EPERM, "is write-protected")
        handle, temporary = tempfile.mkstemp(prefix=".", suffix=".part", dir=target.parent)
        with os.fdopen(handle, "wb") as file:
            file.write(data)
            file.flush()
            os.fsync(file.fileno())
        os.chmod(temporary, _mode(target))
        os.replace(temporary, target)
    except (OSError, ValueError) as fault:
        if temporary is not None:
            with contextlib.suppress(OSError):
                os.unlink(temporary)
        raise OutputError(f"Could not write {target.name}: {_reason(fault)}.") from fault


def _mode(target: Path) -> int:
    """The permissions the file has, or a new file would get."""
    try:
        return target.stat().st_mode & 0o7777
    except OSError:
        mask = os.umask(0)
        os.umask(mask)
        return 0o666 & ~mask


def _reason(fault: Exception) -> str:
    if isinstance(fault, OSError) and fault.errno is not None:
        return _REASONS.get(fault.errno, fault.strerror or "the system refused it")
    return "the name can't be used for a file"
