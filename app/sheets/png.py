"""Drawings and pages as pictures."""

from __future__ import annotations

import os

from PySide6.QtCore import QBuffer, QIODevice
from PySide6.QtGui import QColor, QImage, QPainter

from app.sheets.painter import paint_drawing, paint_page, to_device
from geometry.drawing import Bounds, Drawing, DrawingError
from geometry.layout import MM_PER_INCH
from geometry.output_file import OutputError, replace_file
from geometry.pages import Page

LARGEST = 120_000_000
"""Pixels that a picture may have; above, it would not fit a common machine's memory."""


def drawing_image(
    drawing: Drawing, dpi: float = 150.0, margin: float = 2.0, background: str | None = "#ffffff"
) -> QImage:
    """The drawing's shown area and ``margin`` mm round it, at true size.

    ``background`` None leaves it clear. Raises DrawingError if there is nothing to draw or
    the picture would be too large.
    """
    area = drawing.shown(margin)
    image = _blank(area, dpi, background)
    painter = QPainter(image)
    try:
        paint_drawing(painter, drawing, to_device(area, dpi / MM_PER_INCH))
    finally:
        painter.end()
    return image


def page_image(page: Page, dpi: float = 150.0, background: str | None = "#ffffff") -> QImage:
    """A whole page as a picture. Raises DrawingError if it would be too large."""
    image = _blank(page.sheet, dpi, background)
    painter = QPainter(image)
    try:
        paint_page(painter, page, to_device(page.sheet, dpi / MM_PER_INCH))
    finally:
        painter.end()
    return image


def write_png(
    subject: Drawing | Page,
    path: str | os.PathLike[str],
    dpi: float = 150.0,
    background: str | None = "#ffffff",
) -> None:
    """Write a drawing or a page to a PNG file. Raises DrawingError or OutputError."""
    if isinstance(subject, Page):
        image = page_image(subject, dpi, background)
    else:
        image = drawing_image(subject, dpi, background=background)
    save_png(image, path)


def save_png(image: QImage, path: str | os.PathLike[str]) -> None:
    """Write a picture to a PNG file. Raises OutputError."""
    buffer = QBuffer()
    buffer.open(QIODevice.OpenModeFlag.WriteOnly)
    # PySide takes the format as text here though its stubs ask for bytes.
    if not image.save(buffer, "PNG"):  # type: ignore[call-overload]
        raise OutputError("The picture could not be made into a PNG file.")
    replace_file(path, bytes(buffer.data().data()))


def _blank(area: Bounds, dpi: float, background: str | None) -> QImage:
    """An empty picture of an area, mm, that knows its own resolution."""
    dots = dpi / MM_PER_INCH
    width, height = max(1, round(area.width * dots)), max(1, round(area.height * dots))
    if width * height > LARGEST:
        raise DrawingError(f"A picture of {width} by {height} pixels is too large; lower its dpi.")
    image = QImage(width, height, QImage.Format.Format_ARGB32_Premultiplied)
    if image.isNull():
        raise DrawingError(f"There is no memory for a picture of {width} by {height} pixels.")
    image.setDotsPerMeterX(round(dots * 1000))
    image.setDotsPerMeterY(round(dots * 1000))
    image.fill(QColor(0, 0, 0, 0) if background is None else QColor(background))
    return image
