"""Writing a finished file in one step: the old one stays whole until the new one is."""

from __future__ import annotations

import errno
import os
from pathlib import Path

from geometry.text_file import write_file

_GONE = "the drive or the network it is on has gone"
_REASONS = {
    errno.EACCES: "you have no permission to write there",
    errno.EPERM: "the file is write-protected",
    errno.EROFS: "the disk can only be read",
    errno.ENOENT: "the folder does not exist",
    errno.ENOTDIR: "the folder does not exist",
    errno.EISDIR: "a folder has that name",
    errno.ENOSPC: "the disk is full",
    errno.EDQUOT: "the disk is full",
    errno.EFBIG: "the disk takes no file as large",
    errno.ENAMETOOLONG: "the name is too long",
    errno.ELOOP: "it is a link that leads in a circle",
    errno.EBUSY: "another program holds it",
    errno.EIO: "the disk or the drive failed",
    **dict.fromkeys((errno.ENODEV, errno.ENXIO, errno.ENOTCONN, errno.ESTALE), _GONE),
}
"""Why a file can't be written, as the end of a sentence."""
_UNREAD = {
    **_REASONS,
    errno.EACCES: "you have no permission to read it",
    errno.EPERM: "you have no permission to read it",
    errno.ENOENT: "it is not there; it was moved or renamed, or its drive is not plugged in",
    errno.ENOTDIR: "it is not there; it was moved or renamed, or its drive is not plugged in",
    errno.EISDIR: "it is a folder",
}


class OutputError(OSError):
    """A file could not be written; the message is a plain sentence."""

    def __init__(self, message: str) -> None:
        super().__init__(message)


def replace_file(path: str | os.PathLike[str], data: bytes) -> None:
    """Write ``data`` to ``path`` so that a crash leaves the old file or the new one whole.

    A link is followed and an existing file's permissions are kept. Raises OutputError.
    """
    try:
        write_file(path, data)
    except (OSError, ValueError) as fault:
        name = Path(path).name
        raise OutputError(f"Could not write {name}: {plain_reason(fault)}.") from fault


def plain_reason(fault: Exception, *, reading: bool = False) -> str:
    """Why a file could not be written (or read), as the end of a sentence."""
    if isinstance(fault, OSError) and fault.errno is not None:
        reasons = _UNREAD if reading else _REASONS
        return reasons.get(fault.errno, fault.strerror or "the system refused it")
    return "the name can't be used for a file"
