"""The program started where Qt can't run: it says what to do, and never just ends.

Libraries are really hidden, by something empty mounted over them for that one process; that
takes root on Linux.
"""

from __future__ import annotations

import os
import shutil
import socket
import subprocess
import sys
from collections.abc import Iterator
from pathlib import Path

import pytest

from app.screen_check import QT_LIBRARIES

ROOT = Path(__file__).resolve().parents[2]
pytestmark = pytest.mark.skipif(not sys.platform.startswith("linux"), reason="Linux screens")
NO_SCREEN = ("DISPLAY", "WAYLAND_DISPLAY", "QT_QPA_PLATFORM", "XDG_RUNTIME_DIR")


def start(words: list[str], **environment: str) -> subprocess.CompletedProcess[str]:
    """Start the program with only these screens named."""
    plain = {key: value for key, value in os.environ.items() if key not in NO_SCREEN}
    return subprocess.run(
        [*words, sys.executable, "-m", "app"], cwd=ROOT, env={**plain, **environment},
        capture_output=True, text=True, timeout=60, check=False,
    )


def place_of(library: str) -> str | None:
    """Where a library lies, by its name with its version; None if it is not there."""
    with Path("/proc/self/maps").open(encoding="utf-8") as maps:
        folders = {str(Path(line.split()[-1]).parent) for line in maps if "libc.so" in line}
    found = [Path(folder) / library for folder in folders]
    return next((os.path.realpath(path) for path in found if path.exists()), None)


def without(library: str, **environment: str) -> subprocess.CompletedProcess[str]:
    """Start the program where ``library`` is not to be had."""
    place = place_of(library)
    if os.geteuid() != 0 or not shutil.which("unshare"):
        pytest.skip("hiding a library takes root and unshare")
    if place is None:
        pytest.skip(f"{library} is not here anyway")
    hide = ["unshare", "--mount", "sh", "-c", 'mount --bind /dev/null "$0" && exec "$@"', place]
    if subprocess.run([*hide, "true"], capture_output=True, check=False).returncode:
        pytest.skip("nothing can be mounted here")
    return start(hide, **environment)


def is_told(done: subprocess.CompletedProcess[str], words: str) -> None:
    """One calm line that holds ``words``, and an ordinary end."""
    assert done.returncode == 1, done
    assert words in done.stderr
    assert done.stderr.startswith("bobline: ") and done.stderr.count("\n") == 1
    assert done.stdout == ""


@pytest.mark.parametrize("library", ["libEGL.so.1", "libxkbcommon.so.0"])
def test_without_what_qt_needs_to_load_its_packages_are_named(library):
    is_told(without(library, QT_QPA_PLATFORM="offscreen"), f"sudo apt install {QT_LIBRARIES}")


@pytest.mark.parametrize(
    ("library", "package"),
    [("libxcb-cursor.so.0", "libxcb-cursor0"), ("libxcb-randr.so.0", "libxcb-randr0")],
)
def test_without_what_an_x11_window_needs_its_package_is_named(library, package):
    is_told(without(library, DISPLAY=":7937"), f"sudo apt install {package}")


def test_a_screen_that_does_not_answer_is_told():
    done = start([], DISPLAY=":7937")
    if "sudo apt install" in done.stderr:
        pytest.skip("X11's libraries are not here")
    is_told(done, "The screen that DISPLAY names does not answer")
    done = start([], QT_QPA_PLATFORM="xcb")
    is_told(done, "The screen that DISPLAY names does not answer")


@pytest.fixture
def deaf_screen(tmp_path: Path) -> Iterator[str]:
    """A Wayland screen's door that nobody listens behind."""
    with socket.socket(socket.AF_UNIX) as door:
        door.bind(str(tmp_path / "wayland-7"))
        yield "wayland-7"


def test_a_wayland_screen_that_is_gone_is_told(tmp_path, deaf_screen):
    done = start([], WAYLAND_DISPLAY=deaf_screen, XDG_RUNTIME_DIR=str(tmp_path))
    if "sudo apt install" in done.stderr:
        pytest.skip("Wayland's libraries are not here")
    is_told(done, "The screen that WAYLAND_DISPLAY names does not answer")


def test_no_screen_at_all_is_told():
    is_told(start([]), "There is no screen here")
