"""All curves in a window of their own, together or one alone, to be saved as picture or table."""

from __future__ import annotations

from functools import partial
from pathlib import Path

from PySide6.QtCore import QSize
from PySide6.QtWidgets import (
    QComboBox,
    QDialog,
    QGridLayout,
    QHBoxLayout,
    QLabel,
    QPushButton,
    QVBoxLayout,
    QWidget,
)

from app import files
from app.document import Document
from app.panels.curves import CurvePlot, SweepCaption
from app.sheets.png import save_png
from geometry.curves import BY_KEY, CURVES, curves_to_csv
from geometry.text_file import write_text_file

_ACROSS = 3


class LargeCurves(QDialog):
    """Stays alive beside the floor. A double-click shows one curve alone, or all again."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setWindowTitle("Curves through the travel")
        self._document = document
        column = QVBoxLayout(self)
        self.sheet = QWidget()
        inner = QVBoxLayout(self.sheet)
        inner.setContentsMargins(0, 0, 0, 0)
        self.caption = SweepCaption()
        inner.addWidget(self.caption)
        self._grid = QGridLayout()
        inner.addLayout(self._grid, 1)
        self.plots = [CurvePlot(curve, document, large=True) for curve in CURVES]
        for index, plot in enumerate(self.plots):
            self._grid.addWidget(plot, *divmod(index, _ACROSS))
            plot.plot.enlarged.connect(partial(self._toggle, index))
        column.addWidget(self.sheet, 1)
        column.addLayout(self._buttons())
        letters = self.fontMetrics()
        wanted = QSize(150 * letters.averageCharWidth(), 46 * letters.height())
        self.resize(wanted.boundedTo(self.screen().availableSize() - QSize(40, 60)))
        document.solved.connect(self.refresh)
        document.edited.connect(self.refresh)
        document.opened.connect(self.refresh)

    def _buttons(self) -> QHBoxLayout:
        row = QHBoxLayout()
        label = QLabel("&Show")
        self.choice = QComboBox()
        self.choice.addItems(["All curves", *(curve.label for curve in BY_KEY.values())])
        self.choice.currentIndexChanged.connect(self._choose)
        label.setBuddy(self.choice)
        picture = QPushButton("Save &picture, PNG…")
        picture.clicked.connect(self.save_picture)
        table = QPushButton("Save &table, CSV…")
        table.clicked.connect(self.save_table)
        close = QPushButton("&Close")
        close.clicked.connect(self.reject)
        row.addWidget(label)
        row.addWidget(self.choice)
        row.addStretch(1)
        for button in (picture, table, close):
            button.setAutoDefault(False)
            row.addWidget(button)
        return row

    def _toggle(self, index: int) -> None:
        self.choice.setCurrentIndex(index + 1 if self.choice.currentIndex() == 0 else 0)

    def _choose(self, choice: int) -> None:
        """All curves (0), or one of them alone."""
        for index, plot in enumerate(self.plots):
            plot.setVisible(choice in (0, index + 1))
        self.refresh()

    def refresh(self) -> None:
        """Draw what is in sight."""
        if not self.isVisible():
            return
        self.caption.refresh(self._document)
        for plot in self.plots:
            if plot.isVisible():
                plot.refresh()

    # --- files ----------------------------------------------------------------------------

    def _where(self, title: str, kind: str) -> Path | None:
        return files.ask_export(self, title, files.proposed_name(self._document), kind)

    def save_picture(self) -> None:
        """The curves as they stand here, as a PNG file."""
        path = self._where("Save curves as a picture", "PNG picture (*.png)")
        if path is not None:
            try:
                save_png(self.sheet.grab().toImage(), path)
            except OSError as error:
                files.tell_not_written(self, path, error)

    def save_table(self) -> None:
        """All curves of both wheels, as a CSV file."""
        path = self._where("Save curves as a table", "Curves (*.csv)")
        if path is not None:
            try:
                write_text_file(path, curves_to_csv(self._document.solution))
            except (OSError, ValueError) as error:
                files.tell_not_written(self, path, error)
