"""Pages as a PDF file at true size, lines as vectors and text as text."""

from __future__ import annotations

import os

from PySide6.QtCore import QBuffer, QIODevice
from PySide6.QtGui import QPdfWriter

from app.sheets.page_layout import page_layout, paint_pages
from geometry.output_file import replace_file
from geometry.pages import Pages

RESOLUTION = 1200
"""Dots per inch of the PDF's own grid; lines keep fractions of a dot."""


def pdf_bytes(pages: Pages) -> bytes:
    """The pages as the bytes of a PDF file. Raises OutputError."""
    buffer = QBuffer()
    buffer.open(QIODevice.OpenModeFlag.WriteOnly)
    writer = QPdfWriter(buffer)
    writer.setResolution(RESOLUTION)
    writer.setTitle(pages.title)
    writer.setCreator("Bobline")
    writer.setPageLayout(page_layout(pages[0].size))
    paint_pages(writer, pages.pages, RESOLUTION)
    return bytes(buffer.data().data())


def write_pdf(pages: Pages, path: str | os.PathLike[str]) -> None:
    """Write the pages to a PDF file; an older one stays whole until then. Raises OutputError."""
    replace_file(path, pdf_bytes(pages))
