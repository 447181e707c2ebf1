"""No-go shapes: outlines nothing may enter, typed, drawn from a DXF file, or a plain box."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from pathlib import Path

from PySide6.QtCore import Qt
from PySide6.QtWidgets import (
    QComboBox,
    QDialog,
    QDialogButtonBox,
    QFileDialog,
    QFormLayout,
    QHBoxLayout,
    QHeaderView,
    QLabel,
    QLineEdit,
    QListWidget,
    QPushButton,
    QTableWidget,
    QTableWidgetItem,
    QVBoxLayout,
    QWidget,
)

from app.background import Background
from app.document import Document
from geometry.layout import LONGEST_NAME, Layout, NoGo, SideName
from geometry.lengths import format_exact, parse_length
from geometry.outlines import Outline, OutlineError, read_outlines
from geometry.output_file import plain_reason

_SIDES: tuple[tuple[str, SideName | None], ...] = (
    ("both sides, mirrored", None), ("left side", "left"), ("right side", "right"),
)
_VIEWS = (("front", "from the front (over, up)"), ("above", "from above (over, fore)"))


class NoGoDialog(QDialog):
    """Edits Layout.no_go; all changes are one undo step."""

    def __init__(
        self, document: Document, parent: QWidget | None = None, start: int = 0
    ) -> None:
        super().__init__(parent)
        self.setWindowTitle("No-go shapes")
        self._document = document
        self._layout: Layout = document.settled_layout()
        self.shapes: list[NoGo] = list(self._layout.no_go)
        self._filling = False
        self._reading = Background(self, wait_ms=1)
        self._reading.answered.connect(self._take_outlines)
        across = QHBoxLayout()
        across.addLayout(self._list_column(), 2)
        across.addLayout(self._shape_column(), 3)
        column = QVBoxLayout(self)
        column.addLayout(across)
        self.reason = QLabel()
        self.reason.setObjectName("refusal")
        self.reason.setWordWrap(True)
        column.addWidget(self.reason)
        buttons = QDialogButtonBox(
            QDialogButtonBox.StandardButton.Ok | QDialogButtonBox.StandardButton.Cancel
        )
        self._ok = buttons.button(QDialogButtonBox.StandardButton.Ok)
        buttons.accepted.connect(self._accept)
        buttons.rejected.connect(self.reject)
        column.addWidget(buttons)
        self.resize(720, 440)
        self._fill_list(start)

    def _list_column(self) -> QVBoxLayout:
        column = QVBoxLayout()
        self.list = QListWidget()
        self.list.setAccessibleName("No-go shapes")
        self.list.currentRowChanged.connect(self._show)
        column.addWidget(self.list)
        for words, act in (
            ("&New box", self.add_box),
            ("From &DXF…", self._import),
            ("&Take away", self.take_away),
        ):
            button = QPushButton(words)
            button.clicked.connect(act)
            column.addWidget(button)
        return column

    def _shape_column(self) -> QVBoxLayout:
        column = QVBoxLayout()
        form = QFormLayout()
        self.name = QLineEdit()
        self.name.setMaxLength(LONGEST_NAME)
        self.view = QComboBox()
        for key, words in _VIEWS:
            self.view.addItem(words, key)
        self.side = QComboBox()
        for words, _ in _SIDES:
            self.side.addItem(words)
        self.clearance = QLineEdit()
        form.addRow("N&ame", self.name)
        form.addRow("&Seen", self.view)
        form.addRow("S&tands on", self.side)
        form.addRow(f"&Room wanted, {self._layout.units}", self.clearance)
        column.addLayout(form)
        self.table = QTableWidget(0, 2)
        self.table.setAccessibleName("Corners of the shape")
        self.table.horizontalHeader().setSectionResizeMode(QHeaderView.ResizeMode.Stretch)
        column.addWidget(self.table)
        row = QHBoxLayout()
        for words, act in (
            ("Add &corner", self._add_corner),
            ("Remove c&orner", self._drop_corner),
        ):
            button = QPushButton(words)
            button.clicked.connect(act)
            row.addWidget(button)
        column.addLayout(row)
        self.name.textEdited.connect(self._edited)
        self.clearance.textEdited.connect(self._edited)
        self.view.activated.connect(self._edited)
        self.side.activated.connect(self._edited)
        self.table.itemChanged.connect(self._edited)
        return column

    # --- showing ---------------------------------------------------------------------

    def _fill_list(self, row: int) -> None:
        blocked = self.list.blockSignals(True)
        self.list.clear()
        self.list.addItems([shape.name or "(no name)" for shape in self.shapes])
        self.list.blockSignals(blocked)
        self.list.setCurrentRow(min(row, len(self.shapes) - 1))
        self._show(self.list.currentRow())

    def _show(self, row: int) -> None:
        has = 0 <= row < len(self.shapes)
        for widget in (self.name, self.view, self.side, self.clearance, self.table):
            widget.setEnabled(has)
        if not has:
            self.table.setRowCount(0)
            return
        shape = self.shapes[row]
        units = self._layout.units
        self._filling = True
        self.name.setText(shape.name)
        self.view.setCurrentIndex(0 if shape.view == "front" else 1)
        self.side.setCurrentIndex([key for _, key in _SIDES].index(shape.side))
        self.clearance.setText(format_exact(shape.clearance, units))
        self.table.setHorizontalHeaderLabels(
            ["over", "up" if shape.view == "front" else "fore"]
        )
        self.table.setRowCount(len(shape.outline))
        for at, corner in enumerate(shape.outline):
            for place, value in enumerate(corner):
                item = QTableWidgetItem(format_exact(value, units))
                item.setTextAlignment(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
                self.table.setItem(at, place, item)
        self._filling = False
        self.reason.clear()

    # --- editing ---------------------------------------------------------------------

    def _edited(self, *_changed: object) -> None:
        row = self.list.currentRow()
        if self._filling or not 0 <= row < len(self.shapes):
            return
        shape = self._read(self.shapes[row])
        if shape is None:
            return
        self.shapes[row] = shape
        self.list.item(row).setText(shape.name or "(no name)")
        self.table.setHorizontalHeaderLabels(["over", "up" if shape.view == "front" else "fore"])

    def _read(self, before: NoGo) -> NoGo | None:
        """The shape as it is typed, or None with the reason shown."""
        units = self._layout.units
        try:
            clearance = parse_length(self.clearance.text(), units)
            if clearance < 0.0:
                raise ValueError("The room wanted can't be less than nothing.")
            corners = []
            for at in range(self.table.rowCount()):
                cells = [self.table.item(at, place) for place in (0, 1)]
                over, second = (parse_length(c.text() if c else "", units) for c in cells)
                corners.append((over, second))
        except ValueError as reason:
            self.reason.setText(str(reason))
            return None
        self.reason.clear()
        view = self.view.currentData()
        side = _SIDES[self.side.currentIndex()][1]
        return replace(
            before, name=self.name.text().strip(), view=view, side=side, clearance=clearance,
            outline=tuple(corners),
        )

    def add_box(self) -> None:
        """A plain box to start from, under the engine."""
        big = 254.0 if self._layout.units == "in" else 250.0
        box = ((0.0, big / 2), (big, big / 2), (big, big), (0.0, big))
        self.shapes.append(NoGo(f"Shape {len(self.shapes) + 1}", box))
        self._fill_list(len(self.shapes) - 1)

    def take_away(self) -> None:
        row = self.list.currentRow()
        if 0 <= row < len(self.shapes):
            del self.shapes[row]
            self._fill_list(row)

    def _add_corner(self) -> None:
        row = self.list.currentRow()
        if 0 <= row < len(self.shapes):
            last = self.shapes[row].outline[-1] if self.shapes[row].outline else (0.0, 0.0)
            outline = (*self.shapes[row].outline, last)
            self.shapes[row] = replace(self.shapes[row], outline=outline)
            self._show(row)
            self.table.setCurrentCell(len(outline) - 1, 0)

    def _drop_corner(self) -> None:
        row, corner = self.list.currentRow(), self.table.currentRow()
        if not 0 <= row < len(self.shapes) or corner < 0:
            return
        if len(self.shapes[row].outline) <= 3:
            self.reason.setText("A shape needs three corners at least.")
            return
        outline = tuple(c for at, c in enumerate(self.shapes[row].outline) if at != corner)
        self.shapes[row] = replace(self.shapes[row], outline=outline)
        self._show(row)

    def _import(self) -> None:
        name, _ = QFileDialog.getOpenFileName(self, "Outlines from DXF", "", "DXF (*.dxf)")
        if name:
            self.import_from(Path(name))

    def import_from(self, path: Path) -> None:
        """Add every closed outline of a DXF file, named by its layer, once it is read."""
        self.reason.setText(f"Reading “{path.name}”…")
        self._ok.setEnabled(False)
        self._reading.ask(lambda stopped: _read_outlines(path, stopped))

    def _take_outlines(self, outlines: list[Outline] | str) -> None:
        """A drawing is read; a text says why it could not be."""
        self._ok.setEnabled(True)
        if isinstance(outlines, str):
            self.reason.setText(outlines)
            return
        for layer, outline in outlines:
            self.shapes.append(NoGo(layer, outline, side="left"))
        self._fill_list(len(self.shapes) - 1)

    def done(self, result: int) -> None:
        """Closing leaves no drawing being read."""
        self._reading.finish()
        super().done(result)

    def _accept(self) -> None:
        if self.reason.text():
            return
        layout = replace(self._layout, no_go=tuple(self.shapes))
        self._document.apply_layout("change no-go shapes", layout)
        self.accept()


def _read_outlines(path: Path, stopped: Callable[[], bool]) -> list[Outline] | str:
    """On a worker: a drawing's outlines, or why there are none."""
    try:
        return read_outlines(path, stopped)
    except OutlineError as reason:
        return f"“{path.name}”: {reason}"
    except OSError as error:
        return f"“{path.name}” can't be read: {plain_reason(error, reading=True)}."
