"""Whether a window can open here, asked before Qt is imported.

Qt ends the whole program where a library it needs is missing; this finds out first and says
calmly what to install. Nothing here imports Qt's widgets unless they are there.
"""

from __future__ import annotations

import ctypes
import os
import socket
import sys
from pathlib import Path

QT_LIBRARIES = "libegl1 libgl1 libglib2.0-0 libfontconfig1 libxkbcommon0 libdbus-1-3"
"""Debian packages that Qt's own libraries need before they can be loaded at all."""

XCB_LIBRARIES = {
    "libxcb-cursor.so.0": "libxcb-cursor0",
    "libxcb-icccm.so.4": "libxcb-icccm4",
    "libxcb-keysyms.so.1": "libxcb-keysyms1",
    "libxcb-shape.so.0": "libxcb-shape0",
    "libxcb-image.so.0": "libxcb-image0",
    "libxcb-randr.so.0": "libxcb-randr0",
    "libxcb-render-util.so.0": "libxcb-render-util0",
    "libxcb-sync.so.1": "libxcb-sync1",
    "libxcb-xfixes.so.0": "libxcb-xfixes0",
    "libxcb-xkb.so.1": "libxcb-xkb1",
    "libxkbcommon-x11.so.0": "libxkbcommon-x11-0",
    "libX11-xcb.so.1": "libx11-xcb1",
}
"""What a window on an X11 screen needs besides: library and its Debian package."""

WAYLAND_LIBRARIES = {
    "libwayland-client.so.0": "libwayland-client0",
    "libwayland-cursor.so.0": "libwayland-cursor0",
}
"""What a window on a Wayland screen needs besides."""

WITHOUT_WINDOW = "`bobline figures FILE` works without a window."


def why_no_window() -> str | None:
    """A plain sentence on why no window can open here, or None if one can."""
    return _no_screen() or _no_libraries() or _no_answer() or _no_qt()


def _no_screen() -> str | None:
    screen = any(os.environ.get(name) for name in ("DISPLAY", "WAYLAND_DISPLAY", "QT_QPA_PLATFORM"))
    if screen or not sys.platform.startswith("linux"):
        return None
    return f"There is no screen here to open a window on. {WITHOUT_WINDOW}"


def _ways() -> list[str]:
    """The kinds of screen Qt would try here, "wayland" first; none where it asks for another."""
    if not sys.platform.startswith("linux"):
        return []
    asked = os.environ.get("QT_QPA_PLATFORM", "").split(":")[0]
    if asked:
        return [asked] if asked in ("xcb", "wayland") else []
    named = (("wayland", "WAYLAND_DISPLAY"), ("xcb", "DISPLAY"))
    return [way for way, name in named if os.environ.get(name)]


def _no_libraries() -> str | None:
    """What is missing for the last kind of screen Qt would try, if no other one works."""
    missing: list[str] = []
    for way in _ways():
        needed = XCB_LIBRARIES if way == "xcb" else WAYLAND_LIBRARIES
        missing = [package for library, package in needed.items() if not _loads(library)]
        if not missing:
            return None
    if not missing:
        return None
    return (
        "The window needs system libraries that are missing here. On Debian or Ubuntu: "
        f"sudo apt install {' '.join(missing)}"
    )


def _no_answer() -> str | None:
    """A screen that is named but not there, at which Qt would end the whole program."""
    ways = _ways()
    asked = {"xcb": _x11_answers, "wayland": _wayland_answers}
    if not ways or any(asked[way]() for way in ways):
        return None
    names = " or ".join("DISPLAY" if way == "xcb" else "WAYLAND_DISPLAY" for way in ways)
    return f"The screen that {names} names does not answer. {WITHOUT_WINDOW}"


def _x11_answers() -> bool:
    try:
        xcb = ctypes.CDLL("libxcb.so.1")
    except OSError:
        return False
    xcb.xcb_connect.restype = ctypes.c_void_p
    for act in (xcb.xcb_connection_has_error, xcb.xcb_disconnect):
        act.argtypes = [ctypes.c_void_p]
    connection = xcb.xcb_connect(None, None)
    failed = bool(xcb.xcb_connection_has_error(connection))
    # Also what failed has to be given back.
    xcb.xcb_disconnect(connection)
    return not failed


def _wayland_answers() -> bool:
    name = os.environ.get("WAYLAND_DISPLAY", "wayland-0")
    place = Path(os.environ.get("XDG_RUNTIME_DIR", "")) / name
    try:
        with socket.socket(socket.AF_UNIX) as door:
            door.settimeout(2.0)
            door.connect(str(place))
    except OSError:
        return False
    return True


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
