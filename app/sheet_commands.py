"""The Sheets menu: what is printed for the customer and the shop, seen first, then on paper."""

from __future__ import annotations

import datetime
from collections.abc import Callable
from functools import partial
from importlib import import_module
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject
from PySide6.QtWidgets import QMessageBox

from app import files
from geometry.pages import Pages
from geometry.sheets.options import SheetOptions

if TYPE_CHECKING:
    from app.commands import Commands
    from geometry.sheets.catalog import SheetKind

SHEETS: tuple[tuple[SheetKind, str, str, str], ...] = (
    ("customer", "&Customer sheet", "geometry.sheets.customer", "customer_sheet"),
    ("lowering", "Three ways to &lower", "geometry.sheets.ways", "lowering_sheet"),
    ("build", "&Build sheet", "geometry.sheets.build", "build_sheet"),
    ("set-out", "Set-&out list", "geometry.sheets.set_out_sheet", "set_out_sheet"),
    ("pattern", "&Full-size pattern, tiled", "geometry.sheets.pattern_sheet", "pattern_sheet"),
)
"""Name, words, and where the sheet is made; imported when first used."""


class SheetCommands(QObject):
    """Adds a preview and a PDF command for every sheet."""

    def __init__(self, commands: Commands) -> None:
        super().__init__(commands)
        self._window, self._document = commands.window, commands.document
        menu = self._window.menuBar().addMenu("&Sheets")
        for name, words, _, _ in SHEETS:
            commands.add(menu, f"sheet {name}", f"{words}…", partial(self.preview, name),
                         "Ctrl+Shift+P" if name == "customer" else None, icon="sheet")
        menu.addSeparator()
        save = menu.addMenu("Save as &PDF")
        for name, words, _, _ in SHEETS:
            commands.add(save, f"pdf {name}", f"{words}…", partial(self.save_pdf, name))
        cut = menu.addMenu("Full-size pattern as &drawing")
        commands.add(cut, "pattern dxf", "&DXF…", partial(self.save_drawing, "dxf"))
        commands.add(cut, "pattern svg", "&SVG…", partial(self.save_drawing, "svg"))
        commands.add(menu, "set-out csv", "Set-out list as CS&V…", self.save_set_out)

    def pages(self, name: str) -> Pages:
        """A sheet of the document as it stands, dated today."""
        _, _, module, function = next(sheet for sheet in SHEETS if sheet[0] == name)
        make: Callable[..., Pages] = getattr(import_module(module), function)
        options = SheetOptions(date=datetime.date.today(), span=self._document.span)
        return make(self._document.job, options)

    def save_drawing(self, kind: str) -> None:
        """The front view at true size for a cutting table or a plotter."""
        from geometry.dxf import write_dxf
        from geometry.sheets.patterns import pattern
        from geometry.solution import solve
        from geometry.svg import write_svg

        name = f"{self._document.layout.title} pattern"
        path = files.ask_export(self._window, "Save full-size pattern", name,
                                f"{kind.upper()} (*.{kind})")
        if path is None:
            return
        try:
            # At ride height, whatever pose the floor shows.
            drawing = pattern(solve(self._document.layout), "front view")
            if kind == "dxf":
                write_dxf(drawing, path, self._document.units)
            else:
                write_svg(drawing, path)
        except (OSError, ValueError) as reason:
            QMessageBox.warning(self._window, "Bobline", f"“{path.name}” was not written: {reason}")

    def save_set_out(self) -> None:
        """The set-out list as a table for a spreadsheet."""
        from geometry.sheets.set_out import set_out_csv
        from geometry.text_file import write_text_file

        name = f"{self._document.layout.title} set-out"
        path = files.ask_export(self._window, "Save set-out list", name, "Set-out list (*.csv)")
        if path is None:
            return
        try:
            write_text_file(path, set_out_csv(self._document.solution))
        except OSError as reason:
            QMessageBox.warning(self._window, "Bobline", f"“{path.name}” was not written: {reason}")

    def preview(self, kind: SheetKind) -> None:
        """Show the sheet with its choices; it is printed and saved from there."""
        from app.sheets.dialog import open_sheets

        open_sheets(self._document, self._window, kind)

    def save_pdf(self, name: str) -> None:
        """Write the sheet as a PDF file at true size."""
        from app.sheets.pdf import write_pdf

        proposed = f"{self._document.layout.title} {name}"
        path = files.ask_export(self._window, "Save as PDF", proposed, "PDF (*.pdf)")
        if path is None:
            return
        try:
            write_pdf(self.pages(name), path)
        except (OSError, ValueError) as reason:
            QMessageBox.warning(self._window, "Bobline", f"“{path.name}” was not written: {reason}")
