"""A short run of the damaged files (``python -m tests.fuzz.readers`` makes a hundred thousand)."""

from __future__ import annotations

import importlib.util
import os
import re
from pathlib import Path

import pytest

from geometry.layout_file import job_to_text
from geometry.measure_sheet import MeasureSheetError, measure_sheet_from_text
from tests.fuzz.damage import LAYOUT_TEXTS, SHEET_TEXTS, WAYS, damaged
from tests.fuzz.readers import READERS, check, check_layout, check_sheet, limited, run_reader

on_posix = pytest.mark.skipif(os.name != "posix", reason="memory limits and pipes are POSIX's")


@pytest.mark.parametrize("name", READERS)
def test_damaged_files_are_read_whole_or_refused_in_words(name: str) -> None:
    read, refused = run_reader(name, 250, 7)
    assert read + refused >= 200
    assert refused > read


def test_every_way_of_damage_changes_something() -> None:
    for way in range(len(WAYS)):
        texts = [
            damaged(seed, [(way, place, 21)]) == seed
            for seed in (LAYOUT_TEXTS[0], SHEET_TEXTS[0])
            for place in (0, 5, 77, 1234, 99_999)
        ]
        assert not all(texts), WAYS[way].__name__


def test_sound_files_pass_the_same_check() -> None:
    assert all(check_layout(text) for text in LAYOUT_TEXTS)
    assert any(check_sheet(text) for text in SHEET_TEXTS)


def test_the_check_notices_an_undocumented_refusal_and_half_a_job() -> None:
    def refuses_badly(text: str) -> None:
        raise MeasureSheetError("no full stop")

    with pytest.raises(AssertionError):
        check(refuses_badly, "", (MeasureSheetError,))  # type: ignore[arg-type]
    with pytest.raises(AssertionError):
        check(lambda text: None, "", (MeasureSheetError,))  # type: ignore[arg-type,return-value]
    with pytest.raises(KeyError):
        check(lambda text: {}[text], "", (MeasureSheetError,))  # type: ignore[index]


@on_posix
def test_the_worst_files_are_refused_within_a_gigabyte_and_seconds(tmp_path: Path) -> None:
    done = limited(["-m", "tests.fuzz.hard_files", str(tmp_path)], seconds=60)
    assert done.returncode == 0, done.stdout + done.stderr
    lines = done.stdout.splitlines()
    # Of each file: its name, what was said, and how long it took.
    seconds = [float(re.search(r"\[([\d.]+) s", line)[1]) for line in lines]  # type: ignore[index]
    assert len(lines) == 49
    assert max(seconds) < 10.0
    said = dict(line.split(": ", 1) for line in lines)
    assert "nested too deep" in said["brackets a hundred thousand deep"]
    assert "larger than 8 MB" in said["five hundred megabytes"]
    for name in ("a pipe that nobody writes to", "a link to zeros without end"):
        assert "a device or a pipe" in said[name]


@on_posix
def test_too_little_memory_ends_the_limited_process() -> None:
    done = limited(["-c", "x = bytearray(2 * 2**30)"], seconds=20)
    assert done.returncode != 0
    assert "MemoryError" in done.stderr


@on_posix
@pytest.mark.skipif(importlib.util.find_spec("atheris") is None, reason="atheris is not installed")
def test_a_coverage_guided_run_finds_nothing() -> None:
    done = limited(
        ["-m", "tests.fuzz.readers", "--here", "--guided", "--reader", "sheet", "--seconds", "3"],
        seconds=60,
        memory=None,
    )
    assert done.returncode == 0, done.stderr[-2000:]
    assert "Done" in done.stderr


def test_a_sheet_gives_no_wheelbase_that_a_layout_file_refuses() -> None:
    # Found by the coverage-guided run: a job that could be opened but never saved.
    rows = SHEET_TEXTS[0].splitlines()
    short = [re.sub(r"^wheelbase,[^,]*", "wheelbase,0.042 mm", row) for row in rows]
    assert short != rows
    with pytest.raises(MeasureSheetError, match="wheelbase"):
        measure_sheet_from_text("\n".join(short))
    least = [re.sub(r"^wheelbase,[^,]*", "wheelbase,1 mm", row) for row in rows]
    assert job_to_text(measure_sheet_from_text("\n".join(least)))


def test_a_sheet_gives_no_title_that_a_layout_file_refuses() -> None:
    halved = SHEET_TEXTS[0].replace("title,", "title,\ud800", 1)
    with pytest.raises(MeasureSheetError, match="half a letter"):
        measure_sheet_from_text(halved)


def test_a_row_without_end_is_called_that() -> None:
    with pytest.raises(MeasureSheetError, match=r"read 200,000 letters, expected one row"):
        measure_sheet_from_text("item,value,over,up,fore\n" + "9" * 200_000)
