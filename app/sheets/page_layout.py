"""Puts pages on a paged device (a PDF writer or a printer), each at its own size."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import QMarginsF, QSizeF
from PySide6.QtGui import QPagedPaintDevice, QPageLayout, QPageSize, QPainter, QTransform

from app.sheets.painter import paint_page, to_device
from geometry.drawing import Bounds
from geometry.layout import MM_PER_INCH
from geometry.output_file import OutputError
from geometry.pages import A3, A4, LEGAL, LETTER, TABLOID, Page, PageSize

_STANDARD = {
    LETTER: QPageSize.PageSizeId.Letter,
    LEGAL: QPageSize.PageSizeId.Legal,
    TABLOID: QPageSize.PageSizeId.Tabloid,
    A4: QPageSize.PageSizeId.A4,
    A3: QPageSize.PageSizeId.A3,
}


def page_layout(size: PageSize) -> QPageLayout:
    """Qt's layout of a sheet, its whole area drawable: our pages keep their own margins."""
    upright = size.portrait
    standard = _STANDARD.get(upright)
    if standard is not None:
        paper = QPageSize(standard)
    else:
        paper = QPageSize(
            QSizeF(upright.width, upright.height),
            QPageSize.Unit.Millimeter,
            size.name,
            QPageSize.SizeMatchPolicy.ExactMatch,
        )
    turned = size.width > size.height
    orientation = QPageLayout.Orientation.Landscape if turned else QPageLayout.Orientation.Portrait
    layout = QPageLayout(paper, orientation, QMarginsF(0, 0, 0, 0))
    layout.setMode(QPageLayout.Mode.FullPageMode)
    return layout


def paint_pages(
    device: QPagedPaintDevice, pages: Sequence[Page], resolution: int, one_paper: bool = False
) -> None:
    """Draw pages one after another at true size; ``resolution`` is the device's, dots per inch.

    ``one_paper`` is for printers, most of which keep one paper for a whole job: pages that
    lie on the other side of the same sheet are turned to it. Raises OutputError where the
    device refuses to start or to turn a page, or a page needs another paper.
    """
    paper = pages[0].size
    if one_paper and any(page.size.portrait != paper.portrait for page in pages):
        raise OutputError("All pages of one print must be on the same size of paper.")
    device.setPageLayout(page_layout(paper))
    painter = QPainter()
    if not painter.begin(device):
        raise OutputError("The printer or file could not be opened for drawing.")
    try:
        for index, page in enumerate(pages):
            if index:
                if page.size != paper and not one_paper:
                    paper = page.size
                    device.setPageLayout(page_layout(paper))
                if not device.newPage():
                    raise OutputError(f"Page {index + 1} could not be printed.")
            sheet = Bounds(0.0, 0.0, paper.width, paper.height)
            on_sheet = QTransform()
            if page.size != paper:
                on_sheet = QTransform(0, 1, -1, 0, page.size.height, 0)
            paint_page(painter, page, on_sheet * to_device(sheet, resolution / MM_PER_INCH))
    finally:
        painter.end()
