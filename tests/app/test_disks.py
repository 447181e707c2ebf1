"""Real disks that are full, can only be read, or go away while a window works on them.

They are small drives in memory, mounted for the test: that takes root on Linux.
"""

from __future__ import annotations

import os
import shutil
import subprocess
import sys
from collections.abc import Callable, Iterator
from pathlib import Path

import pytest

from geometry.layout import UPPER_INNER, Point
from geometry.layout_file import read_job, write_job
from tests.app.test_files import change, read_faults, save_dialog_gives
from tests.sample_cars import SAMPLES

ROADSTER = SAMPLES["healthy-roadster"]


def mount(*words: str) -> str:
    """Mount something; why it could not be, or nothing."""
    if not sys.platform.startswith("linux") or os.geteuid() != 0 or not shutil.which("mount"):
        return "mounting a drive takes root on Linux"
    done = subprocess.run(["mount", *words], capture_output=True, text=True, check=False)
    return f"no drive can be mounted here: {done.stderr.strip()}" if done.returncode else ""


def take_away(place: Path) -> None:
    subprocess.run(["umount", "--lazy", str(place)], check=True)


@pytest.fixture
def drive(tmp_path: Path) -> Iterator[Path]:
    """A drive of 64 KB of its own."""
    place = tmp_path / "stick"
    place.mkdir()
    trouble = mount("-t", "tmpfs", "-o", "size=64k", "none", str(place))
    if trouble:
        pytest.skip(trouble)
    yield place
    if place.is_mount():
        take_away(place)


@pytest.fixture
def home(drive: Path) -> Path:
    path = drive / "car.bobline"
    write_job(path, ROADSTER)
    return path


def fill(drive: Path) -> Path:
    """Take all the room that is left."""
    filler = drive / "photos"
    with filler.open("wb", buffering=0) as file:
        try:
            while True:
                file.write(bytes(512))
        except OSError:
            return filler


def only_readable(drive: Path) -> None:
    trouble = mount("-o", "remount,ro", str(drive))
    assert not trouble, trouble


def is_refused(window, home: Path, answers, words: str) -> None:
    """Saving says why in plain words, the old file is whole, and the work is still there."""
    old = home.read_bytes()
    names = sorted(home.parent.iterdir())
    mine = window.document.job
    answers.press("OK")
    window.commands.save()
    assert words in answers.said[-1]
    assert "your work is still open here" in answers.said[-1]
    assert window.document.is_changed and window.document.job is mine
    assert home.read_bytes() == old
    assert sorted(home.parent.iterdir()) == names


def test_a_full_disk_keeps_the_old_file_and_the_work(window, drive, home, answers):
    window.open_path(home)
    change(window)
    filler = fill(drive)
    is_refused(window, home, answers, "the disk is full")
    filler.unlink()
    window.commands.save()
    assert not window.document.is_changed
    assert read_job(home) == window.document.job


def test_exports_onto_a_full_disk_say_so_and_leave_nothing(
    window, drive, monkeypatch, answers
):
    fill(drive)
    for name, kind in (("export svg", "svg"), ("export png", "png"), ("export csv", "csv")):
        save_dialog_gives(monkeypatch, drive / f"floor.{kind}")
        answers.press("OK")
        window.commands.actions[name].trigger()
        assert "disk is full" in answers.said[-1]
    assert [path.name for path in drive.iterdir()] == ["photos"]


def test_a_drive_that_can_only_be_read_opens_and_is_never_written(window, drive, home, answers):
    only_readable(drive)
    assert window.open_path(home)
    change(window)
    is_refused(window, home, answers, "the disk can only be read")


def test_a_drive_that_is_pulled_out_is_told_and_the_work_goes_elsewhere(
    window, drive, home, answers, tmp_path, monkeypatch
):
    window.open_path(home)
    change(window)
    take_away(drive)
    # Its folder is left behind, empty, on another drive.
    answers.press("OK")
    window.commands.save()
    assert "the drive or the network it is on has gone" in answers.said[-1]
    assert list(drive.iterdir()) == [] and window.document.is_changed
    elsewhere = tmp_path / "kept.bobline"
    save_dialog_gives(monkeypatch, elsewhere)
    window.commands.save_as()
    assert read_job(elsewhere) == window.document.job
    assert not window.document.is_changed


def test_a_folder_that_is_gone_is_told(window, tmp_path, answers):
    home = tmp_path / "stick" / "car.bobline"
    home.parent.mkdir()
    write_job(home, ROADSTER)
    window.open_path(home)
    change(window)
    shutil.rmtree(home.parent)
    answers.press("OK")
    window.commands.save()
    assert "the folder does not exist" in answers.said[-1]
    assert window.document.is_changed
    answers.press("Discard")
    read = read_faults(answers)
    assert not window.open_path(home)
    assert "It is not there" in read[0]


@pytest.fixture
def no_room(drive: Path, monkeypatch: pytest.MonkeyPatch) -> Callable[[], None]:
    """The person's own folder is on a full drive; calling makes room."""
    (drive / "data").mkdir()
    monkeypatch.setenv("BOBLINE_DATA", str(drive / "data"))
    return fill(drive).unlink


def test_work_that_can_not_be_kept_is_said_and_kept_once_there_is_room(
    no_room, make_window, qtbot
):
    window = make_window()
    window.document.move_point("left", UPPER_INNER, Point(350.0, 390.0, 0.0))
    qtbot.waitUntil(lambda: "the disk is full" in window._guidance_words.text(), timeout=5000)
    assert window.isVisible() and not window.recovery.file.exists()
    no_room()
    qtbot.waitUntil(window.recovery.file.exists, timeout=5000)


def test_a_person_without_a_folder_of_their_own_can_still_work(drive, make_window, qtbot,
                                                               monkeypatch, tmp_path):
    only_readable(drive)
    monkeypatch.setenv("BOBLINE_DATA", str(drive / "data"))
    window = make_window()
    window.offer_kept_work()
    path = tmp_path / "car.bobline"
    write_job(path, ROADSTER)
    assert window.open_path(path)
    change(window)
    qtbot.waitUntil(lambda: "only be read" in window._guidance_words.text(), timeout=5000)
    window.commands.save()
    assert read_job(path) == window.document.job


@pytest.mark.skipif(os.name != "posix", reason="permissions are POSIX's")
def test_a_folder_of_another_person_is_not_written(tmp_path):
    # Root may write anywhere, so a plain user tries in a process of their own.
    home = tmp_path / "car.bobline"
    write_job(home, ROADSTER)
    old = home.read_bytes()
    home.chmod(0o644)
    tmp_path.chmod(0o555)
    done = subprocess.run(
        [sys.executable, "-c", _AS_NOBODY, str(home)], cwd=Path(__file__).parents[2],
        capture_output=True, text=True, check=False,
    )
    tmp_path.chmod(0o755)
    assert done.returncode == 0, done.stderr
    assert done.stdout.strip() in ("the file is write-protected",
                                   "you have no permission to write there")
    assert home.read_bytes() == old
    assert [path.name for path in tmp_path.iterdir() if path.suffix == ".part"] == []


_AS_NOBODY = """
import os, sys
from geometry.layout_file import write_job
from geometry.output_file import plain_reason
from tests.sample_cars import SAMPLES
if os.geteuid() == 0:
    os.chdir(os.path.dirname(sys.argv[1]))
    os.setgid(65534)
    os.setuid(65534)
try:
    write_job(os.path.basename(sys.argv[1]), SAMPLES["strut-hatch"])
except OSError as error:
    print(plain_reason(error))
"""
