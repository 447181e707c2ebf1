"""The one door for files tells a layout from a measure sheet by what is in it."""

from __future__ import annotations

from pathlib import Path

import pytest

from geometry.layout_file import LayoutFileError, job_to_text
from geometry.measure_sheet import MeasureSheetError, starting_sheet
from geometry.open_file import open_job
from geometry.text_file import TextFileError
from tests.sample_cars import SAMPLES

JOB = SAMPLES["healthy-roadster"]


@pytest.mark.parametrize("name", ["a.bobline", "a.csv", "a"])
def test_a_layout_is_known_whatever_its_name(tmp_path: Path, name: str) -> None:
    (tmp_path / name).write_text("\n  " + job_to_text(JOB), encoding="utf-8-sig")
    assert open_job(tmp_path / name) == JOB


@pytest.mark.parametrize("name", ["a.bobline", "a.csv", "a"])
def test_a_measure_sheet_is_known_whatever_its_name(tmp_path: Path, name: str) -> None:
    (tmp_path / name).write_text(starting_sheet("strut").replace(",", ";"), encoding="utf-8-sig")
    assert open_job(str(tmp_path / name)).planned.left.is_strut


@pytest.mark.parametrize(
    ("data", "error", "words"),
    [
        (b"", TextFileError, "The file is empty."),
        (b"\n \n", TextFileError, "The file is empty."),
        (b"hello\nworld", TextFileError, "neither a layout nor a measure sheet"),
        (b"# only a remark", TextFileError, "neither a layout nor a measure sheet"),
        (b"[1, 2]", TextFileError, "neither a layout nor a measure sheet"),
        (b"{", LayoutFileError, "Line 1, column 2"),
        (b"{}", LayoutFileError, "not a layout file"),
        (b"item,value,over,up,fore\n", MeasureSheetError, "lower inner pivot"),
        (b"item,height\n", MeasureSheetError, "expected the header"),
        (b"item\n#" + b"x" * 2_000_000, TextFileError, "larger than 2 MB"),
        (b"\xff\xfei\x00", TextFileError, "UTF-16"),
    ],
)
def test_what_is_neither_is_refused_in_words(
    tmp_path: Path, data: bytes, error: type[ValueError], words: str
) -> None:
    (tmp_path / "a").write_bytes(data)
    with pytest.raises(error, match=words) as caught:
        open_job(tmp_path / "a")
    assert "\n".join(caught.value.faults) == str(caught.value)  # type: ignore[attr-defined]


def test_a_folder_is_refused_and_a_missing_file_is_the_systems_error(tmp_path: Path) -> None:
    with pytest.raises(TextFileError, match="folder"):
        open_job(tmp_path)
    with pytest.raises(FileNotFoundError):
        open_job(tmp_path / "none")
