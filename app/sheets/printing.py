"""Printing and its preview, over the same pages that make the PDF.

Qt's print support is imported only when used: it costs time at the start of the program.
"""

from __future__ import annotations

from collections.abc import Iterable
from typing import TYPE_CHECKING

from shiboken6 import delete

from app.sheets.page_layout import page_layout, paint_pages
from geometry.output_file import OutputError
from geometry.pages import Page, Pages

if TYPE_CHECKING:
    from PySide6.QtPrintSupport import QPrinter
    from PySide6.QtWidgets import QWidget


def new_printer(pages: Pages) -> QPrinter:
    """A printer set up for the pages: the document's name and the first page's paper."""
    from PySide6.QtPrintSupport import QPrinter

    printer = QPrinter(QPrinter.PrinterMode.HighResolution)
    printer.setDocName(pages.title)
    printer.setCreator("Bobline")
    # Full page, so that a millimeter counts from the sheet's edge; our margins stay clear
    # of what printers can't reach.
    printer.setFullPage(True)
    printer.setPageLayout(page_layout(pages[0].size))
    return printer


def paint_on_printer(printer: QPrinter, pages: Pages) -> None:
    """Print the pages the printer was told to, as often as it was told. Raises OutputError."""
    chosen = list(pages.pages)
    if printer.fromPage() > 0:
        chosen = chosen[printer.fromPage() - 1 : printer.toPage() or None] or chosen
    if printer.pageOrder() == printer.PageOrder.LastPageFirst:
        chosen.reverse()
    # Where the driver can't make copies, they are drawn again here.
    copies = 1 if printer.supportsMultipleCopies() else max(1, printer.copyCount())
    if copies > 1 and not printer.collateCopies():
        drawn = [page for page in chosen for _ in range(copies)]
    else:
        drawn = chosen * copies
    paint_pages(printer, drawn, printer.resolution(), one_paper=True)


def print_pages(pages: Iterable[Page], title: str, parent: QWidget | None = None) -> bool:
    """Ask for a printer and print; False if the person thought better of it.

    Raises OutputError where the printer refuses.
    """
    from PySide6.QtPrintSupport import QAbstractPrintDialog, QPrintDialog

    document = Pages(tuple(pages), title)
    printer = new_printer(document)
    dialog = QPrintDialog(printer, parent)
    dialog.setWindowTitle(f"Print {title}")
    dialog.setOption(QAbstractPrintDialog.PrintDialogOption.PrintPageRange, len(document) > 1)
    dialog.setMinMax(1, len(document))
    try:
        if not dialog.exec():
            return False
        paint_on_printer(printer, document)
    finally:
        # At once, since the dialog points at the printer, which goes when this returns.
        delete(dialog)
    return True


def preview_pages(pages: Iterable[Page], title: str, parent: QWidget | None = None) -> None:
    """Show the pages as they will print; the preview's own button prints them."""
    from PySide6.QtPrintSupport import QPrintPreviewDialog
    from PySide6.QtWidgets import QMessageBox

    document = Pages(tuple(pages), title)
    printer = new_printer(document)
    dialog = QPrintPreviewDialog(printer, parent)
    dialog.setWindowTitle(f"Print preview: {title}")
    dialog.resize(1000, 720)

    def paint(printer: QPrinter) -> None:
        try:
            paint_on_printer(printer, document)
        except OutputError as fault:
            QMessageBox.warning(dialog, "Print", str(fault))

    dialog.paintRequested.connect(paint)
    try:
        dialog.exec()
    finally:
        delete(dialog)
