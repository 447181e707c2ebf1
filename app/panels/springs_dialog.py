"""Springs, joints and tie-rod thread of one corner: limits typed, and what they come to."""

from __future__ import annotations

from dataclasses import replace
from typing import Literal

from PySide6.QtCore import Qt, QTimer
from PySide6.QtWidgets import (
    QAbstractItemView,
    QComboBox,
    QDialog,
    QDialogButtonBox,
    QHBoxLayout,
    QHeaderView,
    QLabel,
    QScrollArea,
    QTableWidget,
    QTableWidgetItem,
    QVBoxLayout,
    QWidget,
)

from app.document import Document
from app.panels.form import Form
from geometry.layout import Layout, SideName, Spring, TieRod
from geometry.lengths import format_length
from geometry.quantities import format_quantity, unit_of
from geometry.spring_table import SpringRow, motion_of, rate_for_frequency, spring_rows
from geometry.spring_words import corner_words
from geometry.tie_rod_thread import tie_rod_length

_Carrier = Literal["lower arm", "upper arm", "knuckle"]
_ON: tuple[_Carrier, ...] = ("lower arm", "upper arm", "knuckle")


class SpringsDialog(QDialog):
    """Edits Side.spring and Side.tie_rod (both sides while linked) as one undo step."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setWindowTitle("Springs, joints and tie rods")
        self._document = document
        self._layout = document.settled_layout()
        chosen = document.selection
        self._side: SideName = chosen[0] if chosen and not self._layout.linked else "left"
        column = QVBoxLayout(self)
        if not self._layout.linked:
            column.addWidget(QLabel(f"The {self._side} side (choose a nail of the other first)."))
        row = QHBoxLayout()
        fields = _scrolled(self._fields(), "Measures and limits")
        # Fields are never pushed out of sight sideways; the table has its own way to scroll.
        fields.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        fields.setMinimumWidth(self.form.minimumSizeHint().width() + 24)
        row.addWidget(fields, 1)
        row.addLayout(self._answers(), 3)
        column.addLayout(row)
        buttons = QDialogButtonBox(
            QDialogButtonBox.StandardButton.Ok | QDialogButtonBox.StandardButton.Cancel
        )
        self.ok = buttons.button(QDialogButtonBox.StandardButton.Ok)
        buttons.accepted.connect(self._accept)
        buttons.rejected.connect(self.reject)
        column.addWidget(buttons)
        self._timer = QTimer(self)
        self._timer.setSingleShot(True)
        self._timer.setInterval(120)
        self._timer.timeout.connect(self.refresh)
        self.form.changed.connect(self._timer.start)
        self.mount.activated.connect(self.refresh)
        self.resize(980, 620)
        self.refresh()

    def _fields(self) -> Form:
        side, units = self._layout.side(self._side), self._layout.units
        self.form = Form(units)
        self.mount = QComboBox()
        self.mount.addItems(_ON)
        self.mount.setCurrentIndex(_ON.index(side.spring.lower_mount_on))
        add = self.form.add
        add("rate", "&Spring rate", "rate", side.spring.rate, check=_positive)
        add("wanted", "or for a ride &frequency of", "frequency", None, check=_positive,
            tip="Sets the spring rate from the corner's sprung weight and the motion ratio")
        self.form.add_widget("Lower &mount on", self.mount)
        add("shortest", "S&hortest between mounts", "length", side.spring.shortest,
            check=_positive, tip="Where the shock or spring bottoms")
        add("longest", "&Longest between mounts", "length", side.spring.longest,
            check=_positive, tip="Where the shock tops out")
        rod = side.tie_rod
        add("thread_engaged", "Tie-rod &thread in hold", "length", rod.thread_engaged,
            check=_not_less, tip="Measured at the adjuster, at the end that has less")
        add("measured_length", "at a tie-rod length of", "length",
            self._measured_length(), check=_not_less,
            tip="Center to center, when the thread was measured: as found unless typed")
        add("thread_diameter", "Thread &diameter", "length", rod.thread_diameter,
            check=_positive)
        least = add("least_engaged", "Least &wanted in hold", "length", rod.least_engaged,
                    check=_not_less, tip="Left blank: 1 1/2 diameters")
        least.field.setPlaceholderText("1 1/2 dia.")
        return self.form

    def _measured_length(self) -> float:
        """The rod's length when its thread was measured: as found, unless it is known."""
        known = self._layout.side(self._side).tie_rod.measured_length
        found = self._document.job.found
        return known or tie_rod_length((found or self._layout).side(self._side))

    def _answers(self) -> QVBoxLayout:
        column = QVBoxLayout()
        units = self._layout.units
        rate = unit_of("rate", units)
        self.table = QTableWidget(0, 7)
        self.table.setAccessibleName("The spring through its travel")
        self.table.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
        self.table.verticalHeader().hide()
        self.table.setHorizontalHeaderLabels([
            f"travel,\n{units}", f"length,\n{units}", f"to bottom,\n{units}", f"to top,\n{units}",
            "motion\nratio", f"wheel rate,\n{rate}", "ride,\nHz",
        ])
        header = self.table.horizontalHeader()
        header.setSectionResizeMode(QHeaderView.ResizeMode.ResizeToContents)
        header.setStretchLastSection(True)
        column.addWidget(self.table, 3)
        self.words = QLabel()
        self.words.setWordWrap(True)
        self.words.setAlignment(Qt.AlignmentFlag.AlignTop)
        self.words.setAccessibleName("What the spring, joints and thread come to")
        column.addWidget(_scrolled(self.words, "What follows from them"), 3)
        return column

    def changed(self) -> Layout | None:
        """The car with the figures as typed, or None while a field is refused."""
        values = self.form.values()
        if values is None:
            return None
        wanted = values["wanted"]
        spring = Spring(
            values["rate"], _ON[self.mount.currentIndex()], values["shortest"], values["longest"]
        )
        engaged = values["thread_engaged"]
        rod = TieRod(
            engaged, values["thread_diameter"], values["least_engaged"],
            None if engaged is None else values["measured_length"] or self._measured_length(),
        )
        side = replace(self._layout.side(self._side), spring=spring, tie_rod=rod)
        layout = self._layout.with_side(self._side, side)
        motion = None if wanted is None else motion_of(layout, self._side, self._document.span)
        if wanted is not None and motion is not None:
            rate = rate_for_frequency(layout, motion, wanted)
            if rate is not None:
                side = replace(side, spring=replace(spring, rate=rate))
                layout = self._layout.with_side(self._side, side)
        return layout

    def refresh(self) -> None:
        """Fill the table and the words for what the fields say."""
        layout = self.changed()
        self.ok.setEnabled(layout is not None)
        if layout is None:
            return
        motion = motion_of(layout, self._side, self._document.span)
        rows = () if motion is None else spring_rows(layout, self._side, motion)
        self.table.setRowCount(len(rows))
        for at, row in enumerate(rows):
            for place, text in enumerate(self._cells(row)):
                item = QTableWidgetItem(text)
                item.setTextAlignment(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
                self.table.setItem(at, place, item)
        wanted = self.form.fields["wanted"].value()
        lines = corner_words(layout, self._side, self._document.span, wanted)
        self.words.setText("\n\n".join(lines))

    def _cells(self, row: SpringRow) -> list[str]:
        units = self._layout.units

        def size(mm: float | None) -> str:
            return "–" if mm is None else format_length(mm, units, 16)

        rate = "–" if row.wheel_rate is None else format_quantity(row.wheel_rate, "rate", units)
        return [
            size(row.travel), size(row.length), size(row.to_shortest), size(row.to_longest),
            "–" if row.ratio is None else f"{row.ratio:.3f}",
            rate, "–" if row.frequency is None else f"{row.frequency:.2f}",
        ]

    def _accept(self) -> None:
        layout = self.changed()
        if layout is not None:
            self._document.apply_layout("set spring and tie rod", layout)
            self.accept()


def _scrolled(widget: QWidget, name: str) -> QScrollArea:
    """At large text what does not fit is scrolled, not cut."""
    area = QScrollArea()
    area.setAccessibleName(name)
    area.setWidgetResizable(True)
    area.setFrameShape(QScrollArea.Shape.NoFrame)
    area.setWidget(widget)
    return area


def _positive(value: float) -> str | None:
    return None if value > 0.0 else "It has to be more than nothing."


def _not_less(value: float) -> str | None:
    return None if value >= 0.0 else "It can't be less than nothing."
