"""The one door for files: a layout or a measure sheet, told apart by what is in it."""

from __future__ import annotations

from pathlib import Path

from geometry import layout_file, measure_sheet
from geometry.layout import Job
from geometry.text_file import TextFileError, read_text_file


def open_job(path: Path | str) -> Job:
    """The job in a layout file or measure sheet.

    Raises OSError, or a ValueError with ``faults``: TextFileError, LayoutFileError or
    MeasureSheetError, every fault a plain sentence.
    """
    text = read_text_file(path, layout_file.SIZE_LIMIT)
    if text.lstrip().startswith("{"):
        return layout_file.job_from_text(text)
    if not text.strip():
        raise TextFileError("The file is empty.")
    if not measure_sheet.has_header(text):
        raise TextFileError(
            "This is neither a layout nor a measure sheet. A layout starts with {, a measure "
            "sheet with the header item,value,over,up,fore."
        )
    if len(text.encode()) > measure_sheet.SIZE_LIMIT:
        raise TextFileError("The file is larger than 2 MB; no car's measures are that long.")
    return measure_sheet.measure_sheet_from_text(text)
