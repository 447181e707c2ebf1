"""What the program remembers between runs: window, recent files, floor and text settings."""

from __future__ import annotations

from pathlib import Path

from PySide6.QtCore import QByteArray, QSettings

ORGANIZATION = "Bobline"
RECENT_KEPT = 10


def _store() -> QSettings:
    # One form on every system, so that it can be read, moved and taken away by hand.
    return QSettings(
        QSettings.Format.IniFormat, QSettings.Scope.UserScope, ORGANIZATION, "bobline"
    )


def get_bool(key: str, default: bool) -> bool:
    value = _store().value(key, default)
    return value in (True, "true", "1", 1)


def get_int(key: str, default: int, low: int, high: int) -> int:
    """A remembered whole number, kept within bounds whatever the file says."""
    try:
        value = int(str(_store().value(key, default)))
    except ValueError:
        return default
    return min(max(value, low), high)


def get_bytes(key: str) -> QByteArray:
    value = _store().value(key)
    return value if isinstance(value, QByteArray) else QByteArray()


def get_text(key: str, default: str = "") -> str:
    value = _store().value(key, default)
    return value if isinstance(value, str) else default


def put(key: str, value: object) -> None:
    _store().setValue(key, value)


def recent_files() -> list[Path]:
    """Files opened or saved lately, newest first."""
    value = _store().value("recent", [])
    # A list of one comes back from the file as plain text.
    names = [value] if isinstance(value, str) else value if isinstance(value, list) else []
    return [Path(str(name)) for name in names if name][:RECENT_KEPT]


def add_recent(path: Path) -> None:
    """Put a file at the head of the recent ones."""
    full = path.resolve()
    names = [str(full)] + [str(p) for p in recent_files() if p != full]
    put("recent", names[:RECENT_KEPT])


def forget_recent() -> None:
    put("recent", [])
