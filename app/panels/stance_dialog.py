"""Lower or raise the car: by spring, dropped knuckle or tire, with the three side by side."""

from __future__ import annotations

from dataclasses import replace

from PySide6.QtCore import QTimer
from PySide6.QtWidgets import (
    QAbstractItemView,
    QCheckBox,
    QDialog,
    QDialogButtonBox,
    QHeaderView,
    QLabel,
    QTableWidget,
    QTableWidgetItem,
    QVBoxLayout,
    QWidget,
)

from app.document import Document
from app.panels.form import Form
from geometry.drops import alignment, three_ways
from geometry.layout import Layout, LayoutError
from geometry.lengths import format_length
from geometry.readouts import BY_KEY, Readout, format_readout, unit_words
from geometry.solution import Solution, solve
from geometry.stance import Stance, aligned, lowered

SHOWN = ("roll center", "swing arm", "camber gain", "toe range", "camber", "scrub radius")


class StanceDialog(QDialog):
    """Takes the car as planned to another ride height as one undo step."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setWindowTitle("Lower or raise")
        self._document = document
        self._layout = document.settled_layout()
        units = self._layout.units
        column = QVBoxLayout(self)
        intro = QLabel(
            "How far the body comes down, and by what (a raise is negative). Toe is set again "
            "at the new height. The table shows the whole drop taken each way."
        )
        intro.setWordWrap(True)
        column.addWidget(intro)
        self.form = Form(units)
        start = {"spring": 63.5 if units == "in" else 60.0, "spindle": 0.0, "tire": 0.0}
        labels = {"spring": "By &springs", "spindle": "By dropped &knuckle",
                  "tire": "By smaller &tire"}
        for key, label in labels.items():
            self.form.add(key, label, "length", start[key], blank=False, check=_within)
        self.form.add("rear", "Rear axle too (blank: the same)", "length", None, check=_within)
        column.addWidget(self.form)
        self.table = self._table()
        column.addWidget(self.table)
        self.words = QLabel()
        self.words.setWordWrap(True)
        column.addWidget(self.words)
        self.align = QCheckBox("Set the static camber again with shims")
        column.addWidget(self.align)
        self.keep = QCheckBox("Keep the car as it is now as found")
        self.keep.setChecked(document.job.found is None)
        column.addWidget(self.keep)
        self.buttons = QDialogButtonBox(
            QDialogButtonBox.StandardButton.Apply | QDialogButtonBox.StandardButton.Cancel
        )
        self.apply_button = self.buttons.button(QDialogButtonBox.StandardButton.Apply)
        self.apply_button.setText("Change the plan")
        self.apply_button.clicked.connect(self._apply)
        self.buttons.rejected.connect(self.reject)
        column.addWidget(self.buttons)
        self._timer = QTimer(self)
        self._timer.setSingleShot(True)
        self._timer.setInterval(150)
        self._timer.timeout.connect(self.refresh)
        self.form.changed.connect(self._timer.start)
        self.resize(620, 560)
        self.refresh()

    def _table(self) -> QTableWidget:
        table = QTableWidget(len(SHOWN), 5)
        table.setAccessibleName("The same drop taken three ways")
        table.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
        table.verticalHeader().hide()
        table.setHorizontalHeaderLabels(["", "as it is", "springs", "knuckle", "tire"])
        header = table.horizontalHeader()
        header.setSectionResizeMode(QHeaderView.ResizeMode.Stretch)
        header.setSectionResizeMode(0, QHeaderView.ResizeMode.ResizeToContents)
        for row, key in enumerate(SHOWN):
            readout = BY_KEY[key]
            unit = unit_words(readout.unit, self._layout.units)
            table.setItem(row, 0, QTableWidgetItem(f"{readout.label}{', ' + unit if unit else ''}"))
            for place in range(1, 5):
                table.setItem(row, place, QTableWidgetItem())
        return table

    def stance(self) -> Stance | None:
        """What the fields say, or None while one is refused."""
        values = self.form.values()
        if values is None:
            return None
        return Stance(
            values["spring"] or 0.0, values["spindle"] or 0.0, values["tire"] or 0.0, values["rear"]
        )

    def refresh(self) -> None:
        """Fill the table and the words for what the fields say."""
        stance = self.stance()
        self.apply_button.setEnabled(stance is not None)
        if stance is None:
            return
        span = self._document.span
        ways = three_ways(self._layout, stance.front, span)
        solutions: list[Solution | None] = [solve(self._layout, span=span)]
        solutions += [way.solution for way in ways]
        for place, solution in enumerate(solutions, 1):
            for row, key in enumerate(SHOWN):
                item = self.table.item(row, place)
                assert item is not None
                item.setText(self._figure(BY_KEY[key], solution))
        reasons = [f"{way.label.capitalize()}: {way.reason}" for way in ways if way.reason]
        self.words.setText(" ".join([self._alignment_words(stance), *reasons]).strip())

    def _figure(self, readout: Readout, solution: Solution | None) -> str:
        if solution is None:
            return "–"
        return format_readout(readout.unit, readout.read(solution, "left"), self._layout.units)

    def _alignment_words(self, stance: Stance) -> str:
        try:
            car = lowered(self._layout, stance)
        except LayoutError as reason:
            self.apply_button.setEnabled(False)
            return str(reason)
        after = alignment(car, self._layout, self._document.span)
        if not after.leaves:
            return "An alignment afterward leaves nothing wrong in the figures above."
        return "An alignment afterward can't mend this: " + " ".join(after.leaves)

    def _changed(self, stance: Stance) -> Layout:
        car = lowered(self._layout, stance)
        if self.align.isChecked():
            car = aligned(car, self._layout.left.static_camber)
        return car

    def _apply(self) -> None:
        stance = self.stance()
        if stance is None:
            return
        try:
            car = self._changed(stance)
        except LayoutError as reason:
            self.words.setText(str(reason))
            return
        job = self._document.job
        if self.keep.isChecked():
            job = replace(job, found=self._layout)
        words = stance_words(stance, self._layout)
        self._document.apply(words[:1].lower() + words[1:], replace(job, planned=car, stance=words))
        self.accept()


def stance_words(stance: Stance, layout: Layout) -> str:
    """The change in a few words: "Lowered 2 1/2 in by springs"."""
    parts = [
        f"{format_length(abs(drop), layout.units, mark=True)} by {way}"
        for drop, way in (
            (stance.spring, "springs"), (stance.spindle, "dropped knuckle"),
            (stance.tire, "smaller tire" if stance.tire > 0 else "larger tire"),
        )
        if drop
    ]
    verb = "Lowered" if stance.front >= 0.0 else "Raised"
    rear = ""
    if stance.rear is not None:
        rear = f", rear {format_length(stance.rear, layout.units, mark=True)}"
    return f"{verb} {', '.join(parts) or 'nothing'}{rear}"


def _within(value: float) -> str | None:
    return None if abs(value) <= 300.0 else "That is more than any car takes."
