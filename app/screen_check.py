"""Whether a window can open here, asked before Qt is imported.

Qt ends the whole program where a library it needs is missing; this finds out first and says
calmly what to install. Nothing here imports Qt's widgets unless they are there.
"""

from __future__ import annotations

import ctypes
import os
import sys

QT_LIBRARIES = "libegl1 libgl1 libglib2.0-0 libfontconfig1 libxkbcommon0 libdbus-1-3"
"""Debian packages that Qt's own libraries need before they can be loaded at all."""

XCB_LIBRARIES = {
    "libxcb-cursor.so.0": "libxcb-cursor0",
    "libxcb-icccm.so.4": "libxcb-icccm4",
    "libxcb-keysyms.so.1": "libxcb-keysyms1",
    "libxcb-shape.so.0": "libxcb-shape0",
    "libxkbcommon-x11.so.0": "libxkbcommon-x11-0",
}
"""What a window on an X11 screen needs besides: library and its Debian package."""

WITHOUT_WINDOW = "`bobline figures FILE` works without a window."


def why_no_window() -> str | None:
    """A plain sentence on why no window can open here, or None if one can."""
    return _no_screen() or _no_xcb() or _no_qt()


def _no_screen() -> str | None:
    screen = any(os.environ.get(name) for name in ("DISPLAY", "WAYLAND_DISPLAY", "QT_QPA_PLATFORM"))
    if screen or not sys.platform.startswith("linux"):
        return None
    return f"There is no screen here to open a window on. {WITHOUT_WINDOW}"


def _no_xcb() -> str | None:
    platform = os.environ.get("QT_QPA_PLATFORM", "")
    wayland = os.environ.get("WAYLAND_DISPLAY") and not platform
    if not sys.platform.startswith("linux") or wayland or platform.split(":")[0] not in ("", "xcb"):
        return None
    missing = [package for library, package in XCB_LIBRARIES.items() if not _loads(library)]
    if not missing:
        return None
    return (
        "The window needs system libraries that are missing here. On Debian or Ubuntu: "
        f"sudo apt install {' '.join(missing)}"
    )


def _loads(library: str) -> bool:
    try:
        ctypes.CDLL(library)
    except OSError:
        return False
    return True


def _no_qt() -> str | None:
    try:
        import PySide6.QtPrintSupport
        import PySide6.QtSvg
        import PySide6.QtWidgets  # noqa: F401
    except ModuleNotFoundError:
        return (
            "The window needs PySide6, which is not installed for this Python. "
            "Install the program again from its folder: pip install ."
        )
    except ImportError as error:
        return (
            f"The window needs system libraries that are missing here ({error}). "
            f"On Debian or Ubuntu: sudo apt install {QT_LIBRARIES}"
        )
    return None
