"""The row above the floor: wheel travel, rack and units, each by slider or typed."""

from __future__ import annotations

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QComboBox, QHBoxLayout, QLabel, QLineEdit, QSlider, QWidget

from app.document import Document
from geometry.lengths import format_length, parse_length

_STEPS_PER_MM = 4


class LengthControl(QWidget):
    """A label, a slider and a field that reads tape text; all three show one length."""

    moved = Signal(float)

    def __init__(self, label: str, reach: float, document: Document) -> None:
        super().__init__()
        self._document = document
        self._value = 0.0
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, 0, 0)
        name = QLabel(label)
        self.slider = QSlider(Qt.Orientation.Horizontal)
        self.slider.setRange(-round(reach * _STEPS_PER_MM), round(reach * _STEPS_PER_MM))
        self.slider.setPageStep(round(25 * _STEPS_PER_MM))
        self.slider.setSingleStep(_STEPS_PER_MM)
        self.slider.setMinimumWidth(70)
        self.slider.setAccessibleName(label)
        self.field = QLineEdit("0")
        self.field.setAccessibleName(f"{label}, typed")
        self.field.setFixedWidth(self.field.fontMetrics().horizontalAdvance("−12 15/16  "))
        self.field.setAlignment(Qt.AlignmentFlag.AlignRight)
        name.setBuddy(self.field)
        for widget in (name, self.slider, self.field):
            row.addWidget(widget)
        row.setStretch(1, 1)
        self.slider.valueChanged.connect(self._slid)
        self.field.editingFinished.connect(self._typed)

    def show_value(self, value: float) -> None:
        """Show a length, mm, without telling anyone."""
        self._value = value
        blocked = self.slider.blockSignals(True)
        self.slider.setValue(round(value * _STEPS_PER_MM))
        self.slider.blockSignals(blocked)
        if not self.field.hasFocus() or not self.field.isModified():
            self.field.setText(format_length(value, self._document.units))
            self.field.setStyleSheet("")
            self.field.setToolTip("")

    def _slid(self, steps: int) -> None:
        self.moved.emit(steps / _STEPS_PER_MM)

    def _typed(self) -> None:
        if not self.field.isModified():
            return
        try:
            value = parse_length(self.field.text() or "0", self._document.units)
        except ValueError as reason:
            self.field.setStyleSheet("color: #B33A00;")
            self.field.setToolTip(str(reason))
            return
        self.field.setModified(False)
        self.moved.emit(value)
        self.show_value(value)


class StanceBar(QWidget):
    """Where the wheels and the rack stand on the floor. Not part of the car, so no undo."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._document = document
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(12)
        self.which = QComboBox()
        self.which.addItems(["Both wheels", "Left wheel", "Right wheel"])
        self.which.setAccessibleName("Which wheel the travel moves")
        self.travel = LengthControl("Tra&vel", 125.0, document)
        self.travel.setToolTip("Wheel travel against the body; bump positive, droop negative")
        self.rack = LengthControl("&Rack", 100.0, document)
        self.rack.setToolTip("Rack or pitman end moved to the car's left, positive")
        row.addWidget(self.which)
        row.addWidget(self.travel, 1)
        row.addWidget(self.rack, 1)
        self.travel.moved.connect(self._set_travel)
        self.rack.moved.connect(document.set_rack)
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
        self.travel.show_value(self._document.travel["right" if side == "right" else "left"])
        self.rack.show_value(self._document.rack)

    def ride_height(self) -> None:
        """Both wheels to ride height, rack centered."""
        self._document.set_travel(0.0, 0.0)
        self._document.set_rack(0.0)
