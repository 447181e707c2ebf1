"""Files in and out: limits, odd files, encodings, and the old file's survival."""

from __future__ import annotations

import os
import stat
import sys
from pathlib import Path

import pytest

from geometry.text_file import TextFileError, printable, read_text_file, write_text_file

posix = pytest.mark.skipif(os.name != "posix", reason="POSIX files")


@pytest.mark.parametrize("mark", [b"", b"\xef\xbb\xbf"])
def test_utf_8_is_read_with_or_without_a_mark(tmp_path: Path, mark: bytes) -> None:
    file = tmp_path / "a"
    file.write_bytes(mark + "9 ½ ″\n".encode())
    assert read_text_file(file, 100) == "9 ½ ″\n"


@pytest.mark.parametrize(
    ("data", "words"),
    [
        ("a\nb\nHöhe".encode("cp1252"), "Line 3: the text is not UTF-8"),
        ("item".encode("utf-16"), "UTF-16"),
        (b"a\x00b", "not a text file"),
        (b"x" * 1001, "larger than"),
    ],
)
def test_other_files_are_refused_in_plain_words(tmp_path: Path, data: bytes, words: str) -> None:
    file = tmp_path / "a"
    file.write_bytes(data)
    with pytest.raises(TextFileError, match=words) as caught:
        read_text_file(file, 1000)
    assert caught.value.faults == (str(caught.value),)


def test_a_file_of_just_the_limit_is_read(tmp_path: Path) -> None:
    (tmp_path / "a").write_bytes(b"x" * 1000)
    assert len(read_text_file(tmp_path / "a", 1000)) == 1000


def test_a_folder_is_refused(tmp_path: Path) -> None:
    with pytest.raises(TextFileError, match="folder"):
        read_text_file(tmp_path, 1000)


@posix
def test_a_pipe_is_refused_without_waiting_for_a_writer(tmp_path: Path) -> None:
    os.mkfifo(tmp_path / "pipe")
    with pytest.raises(TextFileError, match="device or a pipe"):
        read_text_file(tmp_path / "pipe", 1000)


@posix
def test_an_endless_device_is_refused() -> None:
    with pytest.raises(TextFileError, match="device or a pipe"):
        read_text_file("/dev/zero", 1000)


@pytest.mark.skipif(not sys.platform.startswith("linux"), reason="Linux's own files")
def test_a_file_that_says_it_is_empty_is_read_no_further_than_the_limit() -> None:
    with pytest.raises(TextFileError, match="larger than"):
        read_text_file("/proc/self/maps", 10)


def test_a_missing_file_is_the_systems_own_error(tmp_path: Path) -> None:
    with pytest.raises(FileNotFoundError):
        read_text_file(tmp_path / "none", 1000)


def test_a_new_file_is_written_with_the_usual_permissions(tmp_path: Path) -> None:
    write_text_file(tmp_path / "a", "½\n")
    (tmp_path / "b").touch()
    assert (tmp_path / "a").read_bytes() == "½\n".encode()
    assert (tmp_path / "a").stat().st_mode == (tmp_path / "b").stat().st_mode


@posix
def test_an_old_files_permissions_are_kept(tmp_path: Path) -> None:
    file = tmp_path / "a"
    file.write_text("old")
    file.chmod(0o640)
    write_text_file(file, "new")
    assert file.read_text() == "new"
    assert stat.S_IMODE(file.stat().st_mode) == 0o640


@posix
def test_a_link_stays_a_link_and_its_file_gets_the_text(tmp_path: Path) -> None:
    folder = tmp_path / "jobs"
    folder.mkdir()
    (folder / "real").write_text("old")
    link = tmp_path / "link"
    link.symlink_to(folder / "real")
    write_text_file(link, "new")
    assert link.is_symlink()
    assert (folder / "real").read_text() == "new"
    assert sorted(p.name for p in tmp_path.iterdir()) == ["jobs", "link"]


@pytest.mark.parametrize("step", ["fsync", "replace", "chmod"])
def test_the_old_file_survives_a_failure_at_any_step(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, step: str
) -> None:
    file = tmp_path / "a"
    file.write_text("old")

    def fail(*args: object) -> None:
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(os, step, fail)
    with pytest.raises(OSError, match="No space"):
        write_text_file(file, "new")
    assert file.read_text() == "old"
    assert [p.name for p in tmp_path.iterdir()] == ["a"]


def test_a_folder_is_not_written_over(tmp_path: Path) -> None:
    with pytest.raises(OSError, match="folder or device"):
        write_text_file(tmp_path, "new")


def test_a_missing_folder_is_the_systems_own_error(tmp_path: Path) -> None:
    with pytest.raises(FileNotFoundError):
        write_text_file(tmp_path / "none" / "a", "new")


def test_a_very_long_name_can_be_saved(tmp_path: Path) -> None:
    file = tmp_path / ("ü" * 120)
    write_text_file(file, "new")
    assert file.read_text() == "new"


def test_text_from_a_file_is_made_safe_to_show() -> None:
    assert printable("a\x1b[2Jb\n\ud800½") == "a�[2Jb��½"
    assert printable("x" * 50) == "x" * 40
