"""Files in and out, safely: reading within limits, writing so that the old file survives."""

from __future__ import annotations

import contextlib
import errno
import os
import stat
import sys
import tempfile
from pathlib import Path


class TextFileError(ValueError):
    """A file that can't be read as text; ``faults`` holds the plain sentences."""

    def __init__(self, *faults: str) -> None:
        super().__init__("\n".join(faults))
        self.faults = faults


def read_text_file(path: Path | str, limit: int) -> str:
    """The text of an ordinary file of at most ``limit`` bytes, UTF-8 with or without a mark.

    Devices, pipes and folders are refused without being read. Raises TextFileError with a
    plain sentence, or OSError as the system gives it.
    """
    path = Path(path)
    # Looked at before it is opened: opening alone makes some devices act.
    _refuse(path.stat(), limit)
    # Opened without waiting, so that a pipe put in the file's place can't hang the program.
    waitless = getattr(os, "O_NONBLOCK", 0) | getattr(os, "O_NOCTTY", 0)
    descriptor = os.open(path, os.O_RDONLY | waitless | getattr(os, "O_BINARY", 0))
    with os.fdopen(descriptor, "rb") as file:
        _refuse(os.fstat(file.fileno()), limit)
        data = file.read(limit + 1)
    if len(data) > limit:
        raise TextFileError(_too_large(limit))
    if data.startswith((b"\xff\xfe", b"\xfe\xff")):
        raise TextFileError("The text is in UTF-16. Save it as UTF-8 and try again.")
    try:
        text = data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = data.count(b"\n", 0, error.start) + 1
        raise TextFileError(
            f"Line {line}: the text is not UTF-8. Save it as UTF-8 and try again."
        ) from None
    if "\x00" in text:
        raise TextFileError("This is not a text file.")
    return text


def _refuse(status: os.stat_result, limit: int) -> None:
    """Raise TextFileError for what is no ordinary file of a fair size."""
    if stat.S_ISDIR(status.st_mode):
        raise TextFileError("This is a folder, not a file.")
    if not stat.S_ISREG(status.st_mode):
        raise TextFileError("This is a device or a pipe, not an ordinary file.")
    if status.st_size > limit:
        raise TextFileError(_too_large(limit))


def printable(text: str, most: int = 40) -> str:
    """The beginning of a text from a file, safe to show: no control letters or halves."""
    return "".join(letter if letter.isprintable() else "\ufffd" for letter in text[:most])


def _too_large(limit: int) -> str:
    return f"The file is larger than {limit // 1_000_000} MB; no car's measures are that long."


def write_text_file(path: Path | str, text: str) -> None:
    """Write text as UTF-8 by ``write_file``, with its promises and errors."""
    write_file(path, text.encode("utf-8"))


def write_file(path: os.PathLike[str] | str, data: bytes) -> None:
    """Write a file so that the old one stands until the new one is safely on disk.

    A link is followed to the file it names; the old file's permissions are kept. Raises
    OSError (ValueError for a name no system takes), and then the old file is untouched and
    nothing is left behind.
    """
    target = Path(os.path.realpath(path))
    if target.exists() and not target.is_file():
        raise IsADirectoryError(
            errno.EISDIR, "there is a folder or device of that name", str(target)
        )
    mode: int | None = None
    with contextlib.suppress(FileNotFoundError):
        mode = stat.S_IMODE(target.stat().st_mode)
        if not os.access(target, os.W_OK):
            if _can_only_be_read(target.parent):
                raise OSError(errno.EROFS, "the disk can only be read", str(target))
            raise PermissionError(errno.EPERM, "the file is write-protected", str(target))
    descriptor, temporary = tempfile.mkstemp(
        dir=target.parent, prefix=f".{target.name[:40]}.", suffix=".part"
    )
    try:
        with os.fdopen(descriptor, "wb") as file:
            file.write(data)
            file.flush()
            os.fsync(file.fileno())
        if mode is None:
            mask = os.umask(0)
            os.umask(mask)
            mode = 0o666 & ~mask
        os.chmod(temporary, mode)
        os.replace(temporary, target)
    except BaseException:
        with contextlib.suppress(OSError):
            os.unlink(temporary)
        raise
    _sync_folder(target.parent)


def _can_only_be_read(folder: Path) -> bool:
    """True for a folder on a disk that takes no writing at all."""
    if sys.platform == "win32":
        return False
    return bool(os.statvfs(folder).f_flag & os.ST_RDONLY)


def _sync_folder(folder: Path) -> None:
    """Make the new name survive a power cut, where the system has a way to."""
    if os.name != "posix":
        return
    with contextlib.suppress(OSError):
        descriptor = os.open(folder, os.O_RDONLY)
        try:
            os.fsync(descriptor)
        finally:
            os.close(descriptor)
