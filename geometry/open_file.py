"""The one door for files: a layout or a measure sheet, told apart by what is in it."""

from __future__ import annotations

from pathlib import Path

from geometry.layout import Job
from geometry.layout_file import SIZE_LIMIT, LayoutFileError, job_from_text
from geometry.measure_sheet import MeasureSheetError, looks_like_sheet, measure_sheet_from_text
from geometry.measure_sheet import SIZE_LIMIT as SHEET_LIMIT
from geometry.text_file import TextFileError, read_text_file


def open_job(path: Path | str) -> Job:
    """The job in a layout file or measure sheet.

    Raises OSError, or a ValueError with ``faults``: TextFileError, LayoutFileError or
    MeasureSheetError, every fault a plain sentence.
    """
    text = read_text_file(path, SIZE_LIMIT)
    if text.lstrip().startswith("{"):
        return job_from_text(text)
    if looks_like_sheet(text):
        if len(text) > SHEET_LIMIT:
            raise MeasureSheetError("A measure sheet of that size can't be one car's.")
        return measure_sheet_from_text(text)
    if not text.strip():
        raise TextFileError("The file is empty.")
    raise LayoutFileError(
        "This is neither a layout nor a measure sheet. A layout starts with {, a measure "
        "sheet with the header item,value,over,up,fore."
    )
