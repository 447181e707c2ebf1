"""The row above the floor: wheel travel, rack and roll, each by slider or typed."""

from __future__ import annotations

import math

from PySide6.QtCore import QEvent, QObject, Qt, Signal
from PySide6.QtGui import QKeyEvent
from PySide6.QtWidgets import (
    QComboBox,
    QHBoxLayout,
    QLabel,
    QLineEdit,
    QSizePolicy,
    QSlider,
    QWidget,
)

from app import theme
from app.document import Document
from geometry.lengths import format_angle, format_length, parse_angle, parse_length
from geometry.road import MOST_ROLL

_STEPS_PER_MM = 4
_FARTHEST = 500.0
"""What can be typed, mm; the slider's reach is shorter."""


class LengthField(QLineEdit):
    """A field for one length: Esc takes back what was typed, Enter keeps the words marked."""

    def keyPressEvent(self, event: QKeyEvent) -> None:
        if event.key() == Qt.Key.Key_Escape and self.isModified():
            self.undo_typing.emit()
            return
        super().keyPressEvent(event)

    undo_typing = Signal()


class LengthControl(QWidget):
    """A label, a slider and a field that reads tape text; all three show one length, mm."""

    per_step = 1.0 / _STEPS_PER_MM
    """What one step of the slider is worth."""
    steps = _STEPS_PER_MM, 25 * _STEPS_PER_MM
    """Slider steps of an arrow key and of a page key."""
    widest = "−12 15/16  "

    moved = Signal(float)
    refused = Signal(str)
    """Why what was typed was not taken; empty when it was."""

    def __init__(self, label: str, reach: float, document: Document) -> None:
        super().__init__()
        self._document = document
        self._value = 0.0
        plain = label.replace("&", "")
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, 0, 0)
        name = QLabel(label)
        self.slider = QSlider(Qt.Orientation.Horizontal)
        self.slider.setRange(-round(reach / self.per_step), round(reach / self.per_step))
        self.slider.setSingleStep(self.steps[0])
        self.slider.setPageStep(self.steps[1])
        self.slider.setAccessibleName(plain)
        self.field = LengthField(self._text())
        self.field.setAccessibleName(f"{plain}, typed")
        self.field.setAlignment(Qt.AlignmentFlag.AlignRight)
        name.setBuddy(self.field)
        for widget in (name, self.slider, self.field):
            row.addWidget(widget)
        row.setStretch(1, 1)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Preferred)
        self._size()
        self.slider.valueChanged.connect(self._slid)
        self.field.editingFinished.connect(self._typed)
        self.field.undo_typing.connect(self._take_back)

    def _size(self) -> None:
        width = self.fontMetrics().horizontalAdvance(self.widest)
        self.field.setFixedWidth(width + 8)
        self.slider.setMinimumWidth(70)

    def changeEvent(self, event: QEvent) -> None:
        super().changeEvent(event)
        if event.type() == QEvent.Type.FontChange:
            self._size()

    def show_value(self, value: float) -> None:
        """Show a length, mm, without telling anyone."""
        self._value = value
        blocked = self.slider.blockSignals(True)
        self.slider.setValue(round(value / self.per_step))
        self.slider.blockSignals(blocked)
        if not self.field.isModified():
            self._show_text()

    def _text(self) -> str:
        return format_length(self._value, self._document.units)

    def _read(self, text: str) -> float:
        """What was typed; ValueError with a plain reason if it can't be taken."""
        value = parse_length(text, self._document.units)
        if abs(value) > _FARTHEST:
            raise ValueError("No car's suspension or rack goes that far.")
        return value

    def _show_text(self) -> None:
        self.field.setText(self._text())
        self.field.setStyleSheet("")
        self.field.setToolTip("")

    def _take_back(self) -> None:
        self._show_text()
        self.field.selectAll()
        self.refused.emit("")

    def _slid(self, steps: int) -> None:
        # What was typed and refused gives way to the hand on the slider.
        self.field.setModified(False)
        self.refused.emit("")
        self.moved.emit(steps * self.per_step)

    def _typed(self) -> None:
        if not self.field.isModified():
            return
        try:
            value = self._read(self.field.text() or "0")
        except ValueError as reason:
            self.field.setStyleSheet(f"color: {theme.REFUSED};")
            self.field.setToolTip(str(reason))
            self.refused.emit(str(reason))
            return
        self.field.setModified(False)
        self.refused.emit("")
        self.moved.emit(value)
        self.show_value(value)


class AngleControl(LengthControl):
    """The same for an angle, rad, read and shown in degrees."""

    per_step = math.radians(0.05)
    steps = 2, 20
    widest = "−12.00°"

    def _text(self) -> str:
        return format_angle(self._value)

    def _read(self, text: str) -> float:
        value = parse_angle(text)
        if abs(value) > MOST_ROLL:
            raise ValueError(f"No body rolls farther than {math.degrees(MOST_ROLL):.0f} degrees.")
        return value


class StanceBar(QObject):
    """Where the wheels and the rack stand on the floor. Not part of the car, so no undo.

    Holds the widgets ``which``, ``travel``, ``rack`` and ``roll``; the window places them.
    """

    refused = Signal(str)

    def __init__(self, document: Document, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._document = document
        self.which = QComboBox()
        self.which.addItems(["Both wheels", "Left wheel", "Right wheel"])
        self.which.setAccessibleName("Which wheel the travel moves")
        self.travel = LengthControl("Tra&vel", 125.0, document)
        self.travel.setToolTip("Wheel travel against the body; bump positive, droop negative")
        self.rack = LengthControl("&Rack", 100.0, document)
        self.rack.setToolTip("Rack or pitman end moved to the car's left, positive")
        self.roll = AngleControl("R&oll", math.radians(8.0), document)
        self.roll.setToolTip("The body leaned over both tires; its left side up is positive")
        self.roll.moved.connect(document.set_roll)
        self.roll.refused.connect(self.refused)
        self.travel.moved.connect(self._set_travel)
        self.rack.moved.connect(document.set_rack)
        self.travel.refused.connect(self.refused)
        self.rack.refused.connect(self.refused)
        self.which.currentIndexChanged.connect(self.refresh)
        document.solved.connect(self.refresh)
        document.edited.connect(self.refresh)
        self.refresh()

    def _set_travel(self, travel: float) -> None:
        which = self.which.currentIndex()
        self._document.set_travel(
            left=None if which == 2 else travel, right=None if which == 1 else travel
        )

    def refresh(self) -> None:
        """Show what the document has."""
        side = "right" if self.which.currentIndex() == 2 else "left"
        asked = self._document.level_travel
        self.travel.show_value(asked["right" if side == "right" else "left"])
        self.rack.show_value(self._document.rack)
        self.roll.show_value(self._document.roll)

    def ride_height(self) -> None:
        """Both wheels to ride height, the body level, the rack centered."""
        self._document.set_roll(0.0)
        self._document.set_travel(0.0, 0.0)
        self._document.set_rack(0.0)
