"""The Sheets dialog: choose a sheet and its paper, see its pages, print or save them."""

from __future__ import annotations

import datetime
from collections.abc import Callable
from functools import partial
from pathlib import Path

from PySide6.QtCore import QDate, QTimer
from PySide6.QtWidgets import (
    QCheckBox,
    QComboBox,
    QDateEdit,
    QDialog,
    QFormLayout,
    QHBoxLayout,
    QLabel,
    QLineEdit,
    QMessageBox,
    QPlainTextEdit,
    QPushButton,
    QScrollArea,
    QSizePolicy,
    QVBoxLayout,
    QWidget,
)

from app import files, settings
from app.document import Document
from app.panels.form import QuantityField
from app.sheets.page_preview import PagePreview
from geometry.drawing import Drawing, DrawingError
from geometry.layout import SIDES, SideName
from geometry.output_file import OutputError
from geometry.pages import PAGE_SIZES, Pages, PageSize
from geometry.sheets.catalog import SHEETS, SheetKind
from geometry.sheets.options import SheetOptions
from geometry.sheets.pattern_sheet import pattern_sheet
from geometry.sheets.patterns import PATTERNS, PatternKind, kinds_for, pattern
from geometry.solution import solve

_PAPER = "sheets/paper"
_WAIT = 200


def open_sheets(document: Document, parent: QWidget | None, kind: SheetKind = "customer") -> None:
    """Show the Sheets dialog on one kind of sheet until it is closed."""
    dialog = SheetsDialog(document, parent, kind)
    dialog.exec()
    dialog.deleteLater()


class SheetsDialog(QDialog):
    """Makes sheets of a document as it stands; what is typed here is for this print only."""

    def __init__(
        self, document: Document, parent: QWidget | None = None, kind: SheetKind = "customer"
    ) -> None:
        super().__init__(parent)
        self.setWindowTitle("Sheets")
        self._document = document
        self._job = document.job
        self._units = self._job.planned.units
        self._pages: Pages | None = None
        self.preview = PagePreview()
        self.buttons: dict[str, QPushButton] = {}
        row = QHBoxLayout(self)
        row.addWidget(self._choices(kind))
        right = QVBoxLayout()
        right.addWidget(self.preview, 1)
        right.addLayout(self._turner())
        row.addLayout(right, 1)
        self._timer = QTimer(self)
        self._timer.setSingleShot(True)
        self._timer.setInterval(_WAIT)
        self._timer.timeout.connect(self.refresh)
        self.preview.turned.connect(self._say_page)
        self._fit_choices()
        self.refresh()
        self.resize(1000, 720)

    # --- building -------------------------------------------------------------------

    def _choices(self, kind: SheetKind) -> QWidget:
        """The left column: what goes on the sheet, and what is done with it."""
        inside = QWidget()
        inside.setObjectName("clear")
        column = QVBoxLayout(inside)
        self._form = QFormLayout()
        self._form.setFieldGrowthPolicy(QFormLayout.FieldGrowthPolicy.ExpandingFieldsGrow)
        self._form.setRowWrapPolicy(QFormLayout.RowWrapPolicy.WrapLongRows)
        column.addLayout(self._form)
        self.sheet = self._combo("&Sheet", [(s.kind, s.title) for s in SHEETS.values()])
        self.sheet.setCurrentIndex(list(SHEETS).index(kind))
        self.purpose = QLabel()
        self.purpose.setObjectName("quiet")
        self.purpose.setWordWrap(True)
        self._form.addRow(self.purpose)
        own = SheetOptions().paper_for(self._units).name
        papers = [("", f"As the units: {own}"), *((size.name, _paper_words(size))
                                                  for size in PAGE_SIZES)]
        self.paper = self._combo("&Paper", papers)
        self.paper.setCurrentIndex(max(self.paper.findData(settings.get_text(_PAPER)), 0))
        self.pattern = self._combo("P&attern", [
            (key, PATTERNS[key]) for key in kinds_for(self._job.planned)
        ])
        self.side = self._combo("Si&de", [(side, f"{side} side") for side in SIDES])
        self.tile = QCheckBox("&Tile over this paper")
        self.tile.setChecked(True)
        self.tile.setToolTip("Without this, all of it goes on one sheet for a plotter.")
        self._form.addRow(self.tile)
        start = SheetOptions().drop_for(self._units)
        self.drop = QuantityField("length", self._units, start, "Drop", blank=False, check=_within)
        self.drop.setToolTip("How far the body comes down; a raise is negative.")
        self._row(f"Dro&p, {self._units}", self.drop, self.drop.field)
        self.found = QCheckBox("Compare with as &found")
        self.found.setChecked(True)
        self._form.addRow(self.found)
        self._paperwork()
        column.addStretch(1)
        scroll = QScrollArea()
        scroll.setAccessibleName("What goes on the sheet")
        scroll.setWidgetResizable(True)
        scroll.setWidget(inside)
        left = QWidget()
        rows = QVBoxLayout(left)
        rows.setContentsMargins(0, 0, 0, 0)
        rows.addWidget(scroll, 1)
        rows.addLayout(self._buttons())
        left.setFixedWidth(max(300, 44 * self.fontMetrics().averageCharWidth()))
        for box in (self.sheet, self.paper, self.pattern, self.side):
            box.currentIndexChanged.connect(self._changed)
        for check in (self.tile, self.found):
            check.toggled.connect(self._changed)
        self.drop.changed.connect(self._changed)
        return left

    def _paperwork(self) -> None:
        """Shop, customer, date and notes, as the job card has them to begin with."""
        self.shop, self.customer = QLineEdit(self._job.shop), QLineEdit(self._job.customer)
        self.notes = QPlainTextEdit(self._job.notes)
        self.notes.setFixedHeight(84)
        self.notes.setTabChangesFocus(True)
        today = datetime.date.today()
        self.date = QDateEdit(QDate(today.year, today.month, today.day))
        self.date.setCalendarPopup(True)
        self.date.setDisplayFormat("MMMM d, yyyy")
        self._row("S&hop", self.shop)
        self._row("&Customer", self.customer)
        self._row("Dat&e", self.date)
        self._row("&Notes", self.notes)
        quiet = QLabel("For this print only; the job card keeps its own words.")
        quiet.setObjectName("quiet")
        quiet.setWordWrap(True)
        self._form.addRow(quiet)
        self.shop.textChanged.connect(self._changed)
        self.customer.textChanged.connect(self._changed)
        self.notes.textChanged.connect(self._changed)
        self.date.dateChanged.connect(self._changed)

    def _buttons(self) -> QVBoxLayout:
        column = QVBoxLayout()
        for name, words, act in (
            ("print", "P&rint…", self.print_pages),
            ("pdf", "Save PD&F…", self.save_pdf),
            ("csv", "Save CS&V…", self.save_csv),
            ("dxf", "Save D&XF…", partial(self.save_drawing, "dxf")),
            ("svg", "Save SV&G…", partial(self.save_drawing, "svg")),
            ("close", "Close", self.reject),
        ):
            button = QPushButton(words)
            button.setAutoDefault(False)
            button.clicked.connect(_without_argument(act))
            column.addWidget(button)
            self.buttons[name] = button
        self.buttons["print"].setDefault(True)
        return column

    def _turner(self) -> QHBoxLayout:
        row = QHBoxLayout()
        self.back, self.on = QPushButton("◀"), QPushButton("▶")
        self.back.setAccessibleName("Page before")
        self.on.setAccessibleName("Page after")
        self.place = QLabel()
        for button, step in ((self.back, -1), (self.on, 1)):
            button.setAutoDefault(False)
            button.clicked.connect(_without_argument(partial(self.preview.turn, step)))
        row.addStretch(1)
        row.addWidget(self.back)
        row.addWidget(self.place)
        row.addWidget(self.on)
        row.addStretch(1)
        return row

    def _combo(self, label: str, entries: list[tuple[str, str]]) -> QComboBox:
        box = QComboBox()
        for key, words in entries:
            box.addItem(words, key)
        # A long entry must not widen the column, but takes what room there is.
        box.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)
        box.setSizeAdjustPolicy(
            QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon
        )
        box.setMinimumContentsLength(12)
        self._row(label, box)
        return box

    def _row(self, label: str, widget: QWidget, buddy: QWidget | None = None) -> None:
        name = QLabel(label)
        name.setBuddy(buddy or widget)
        self._form.addRow(name, widget)
        (buddy or widget).setAccessibleName(label.replace("&", ""))

    # --- state ----------------------------------------------------------------------

    @property
    def kind(self) -> SheetKind:
        kind: SheetKind = self.sheet.currentData()
        return kind

    def options(self) -> SheetOptions | None:
        """What the fields say, or None while one is refused."""
        drop = self.drop.value()
        if self.kind == "lowering" and not self.drop.is_good:
            return None
        day = self.date.date()
        return SheetOptions(
            paper=next((s for s in PAGE_SIZES if s.name == self.paper.currentData()), None),
            shop=self.shop.text(),
            customer=self.customer.text(),
            notes=self.notes.toPlainText(),
            date=datetime.date(day.year(), day.month(), day.day()),
            span=self._document.span,
            drop=drop,
            show_found=self.found.isChecked(),
        )

    def _fit_choices(self) -> None:
        """Show only what this kind of sheet asks for."""
        kind = self.kind
        is_pattern = kind == "pattern"
        one_sided = is_pattern and self.pattern.currentData() != "front view"
        shown = {
            self.pattern: is_pattern,
            self.side: one_sided and not self._job.planned.linked,
            self.tile: is_pattern,
            self.drop: kind == "lowering",
            self.found: kind == "customer" and self._job.found is not None,
            self.notes: not is_pattern,
        }
        for widget, on in shown.items():
            self._form.setRowVisible(widget, on)
        self.paper.setEnabled(not is_pattern or self.tile.isChecked())
        self.buttons["csv"].setVisible(kind == "set-out")
        for name in ("dxf", "svg"):
            self.buttons[name].setVisible(is_pattern)
        purpose = SHEETS[kind].purpose
        self.purpose.setText(f"{purpose[:1].upper()}{purpose[1:]}.")

    def _changed(self) -> None:
        self._fit_choices()
        if self.sender() is self.paper:
            settings.put(_PAPER, self.paper.currentData())
        self._timer.start()

    def refresh(self) -> None:
        """Make the pages anew and show them."""
        self._timer.stop()
        options = self.options()
        self._pages, words = None, "Mend the field marked in red to see the pages."
        if options is not None:
            try:
                self._pages = self._made(options)
            except ValueError as reason:
                words = str(reason)
        if self._pages is None:
            self.preview.show_words(words)
        else:
            self.preview.show_pages(self._pages)
        self._say_page()
        for name in ("print", "pdf"):
            self.buttons[name].setEnabled(self._pages is not None)

    def _made(self, options: SheetOptions) -> Pages:
        if self.kind != "pattern":
            return SHEETS[self.kind].make(self._job, options)
        return pattern_sheet(self._job, options, self._pattern, self._side,
                             tile=self.tile.isChecked())

    @property
    def _pattern(self) -> PatternKind:
        kind: PatternKind = self.pattern.currentData()
        return kind

    @property
    def _side(self) -> SideName:
        return "right" if self.side.currentData() == "right" else "left"

    def current_pages(self) -> Pages | None:
        """The pages of what the fields say now."""
        if self._timer.isActive():
            self.refresh()
        return self._pages

    def _say_page(self) -> None:
        count, index = self.preview.count, self.preview.index
        self.place.setText(f"Page {index + 1} of {count}" if count else "")
        self.back.setEnabled(index > 0)
        self.on.setEnabled(index + 1 < count)

    # --- out ------------------------------------------------------------------------

    def print_pages(self) -> None:
        from app.sheets.printing import print_pages

        pages = self.current_pages()
        if pages is None:
            return
        try:
            print_pages(pages, pages.title, self)
        except (OSError, DrawingError) as reason:
            words = str(reason) if isinstance(reason, OutputError | DrawingError) else (
                files.sentence(reason))
            QMessageBox.warning(self, "Bobline", f"This was not printed. {words}")

    def save_pdf(self) -> None:
        from app.sheets.pdf import write_pdf

        pages = self.current_pages()
        if pages is not None:
            self._save("PDF", "pdf", lambda path: write_pdf(pages, path))

    def save_csv(self) -> None:
        """The set-out list as a table."""
        from geometry.sheets.set_out import set_out_csv
        from geometry.text_file import write_text_file

        solution = solve(self._job.planned, span=self._document.span)
        self._save("Set-out list", "csv", lambda path: write_text_file(path, set_out_csv(solution)))

    def save_drawing(self, kind: str) -> None:
        """The chosen pattern as one drawing at true size."""
        from geometry.dxf import write_dxf
        from geometry.svg import write_svg

        def write(path: Path) -> None:
            drawing = self.drawing()
            if kind == "dxf":
                write_dxf(drawing, path, self._units)
            else:
                write_svg(drawing, path, self._job.planned.title)

        self._save(f"{kind.upper()} drawing", kind, write)

    def drawing(self) -> Drawing:
        """The chosen pattern in true millimeters. Raises DrawingError."""
        solution = solve(self._job.planned, span=self._document.span)
        return pattern(solution, self._pattern, self._side)

    def _save(self, words: str, suffix: str, write: Callable[[Path], object]) -> None:
        """Ask where, write, and say so if it went wrong."""
        title = SHEETS[self.kind].title
        name = f"{Path(files.proposed_name(self._document)).stem}, {title.lower()}.{suffix}"
        path = files.ask_export(self, f"Save {title.lower()}", name, f"{words} (*.{suffix})")
        if path is None:
            return
        try:
            write(path)
        except (OSError, ValueError) as reason:
            files.tell_not_written(self, path, reason)


def _without_argument(act: Callable[..., object]) -> Callable[..., None]:
    """A slot that drops what the signal says (a button's checked state)."""

    def slot(*_said: object) -> None:
        act()

    return slot


def _paper_words(size: PageSize) -> str:
    if size.name.startswith("A"):
        return f"{size.name}, {size.width:g} × {size.height:g} mm"
    return f"{size.name}, {size.width / 25.4:g} × {size.height / 25.4:g} in"


def _within(value: float) -> str | None:
    if abs(value) > 300.0:
        return "That is more than any car takes."
    return "A drop of nothing has no sheet." if value == 0.0 else None
