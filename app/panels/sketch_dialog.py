"""Sketch from nothing: what the builder knows and wants, and a starting car to drag."""

from __future__ import annotations

import math

from PySide6.QtCore import QTimer
from PySide6.QtWidgets import QDialog, QDialogButtonBox, QHBoxLayout, QLabel, QVBoxLayout, QWidget

from app.panels.form import Form
from geometry.layout import Job, LayoutError, Tire, UnitName
from geometry.readouts import PER_TRAVEL
from geometry.sketch import Brief, Sketch, sketch

_INCH = 25.4
_LENGTHS = (
    ("radius", "Tire &radius (loaded)", 12.5, "What stands between wheel center and floor"),
    ("width", "Tire width", 8.0, ""),
    ("track", "&Track", 56.0, "Between the middles of the tires on the floor"),
    ("wheelbase", "&Wheelbase", 112.0, "Aims the steering arms at the middle of the rear axle"),
    ("lower_up", "Lower ball joint up", 6.75, "On the knuckle, wheels on the floor"),
    ("upper_up", "Upper ball joint up", 17.0, "On the knuckle, wheels on the floor"),
    ("tie_up", "Outer tie rod up", 10.0, "Height of the steering arm's end"),
    ("scrub_radius", "Scrub radius", 2.5, "Tire's middle outboard of the kingpin axis"),
    ("steering_arm", "Steering arm behind the axis", 5.0, "Negative: ahead of the axle"),
    ("frame_half", "&Lower bushing over", 9.5, "Half the width of the frame there"),
    ("upper_frame_half", "Upper bushing over", None,
     "Blank: where the roll center moves least through the travel"),
    ("roll_center", "Roll center wanted, up", 2.0, ""),
    ("span", "Travel each way", 3.0, ""),
)
_ANGLES = (
    ("kingpin_inclination", "&Kingpin inclination", 8.0),
    ("caster", "&Caster", 4.0),
    ("static_camber", "Static camber", -0.5),
    ("static_toe", "Static toe, a wheel", 0.05),
    ("camber_gain", "Camber gain per inch (25 mm)", 0.75),
)


class SketchDialog(QDialog):
    """Collects a brief; ``job`` holds the sketched car once it was accepted."""

    def __init__(self, units: UnitName, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setWindowTitle("Sketch a front end")
        self._units = units
        self.job: Job | None = None
        row = QHBoxLayout()
        self.form = Form(units)
        for key, label, inches, tip in _LENGTHS:
            value = None if inches is None else self._start(inches)
            self.form.add(key, label, "length", value,
                          blank=key in ("wheelbase", "upper_frame_half"), tip=tip)
        row.addWidget(self.form, 1)
        right = QVBoxLayout()
        self.angles = Form(units)
        for key, label, degrees in _ANGLES:
            self.angles.add(key, label, "angle", math.radians(degrees), blank=False)
        right.addWidget(self.angles)
        self.answer = QLabel()
        self.answer.setWordWrap(True)
        self.answer.setMinimumWidth(330)
        self.answer.setAccessibleName("What the sketch meets and misses")
        right.addWidget(self.answer, 1)
        row.addLayout(right, 1)
        column = QVBoxLayout(self)
        column.addLayout(row)
        buttons = QDialogButtonBox(
            QDialogButtonBox.StandardButton.Ok | QDialogButtonBox.StandardButton.Cancel
        )
        self.ok = buttons.button(QDialogButtonBox.StandardButton.Ok)
        self.ok.setText("Lay it out")
        buttons.accepted.connect(self._accept)
        buttons.rejected.connect(self.reject)
        column.addWidget(buttons)
        self._made: Sketch | None = None
        self._timer = QTimer(self)
        self._timer.setSingleShot(True)
        self._timer.setInterval(250)
        self._timer.timeout.connect(self.refresh)
        for form in (self.form, self.angles):
            form.changed.connect(self._typed)
        self.resize(820, 520)
        self.refresh()

    def _start(self, inches: float) -> float:
        """A first figure: inches as they are, millimeters to a round five."""
        mm = inches * _INCH
        return mm if self._units == "in" else 5.0 * round(mm / 5.0)

    def _typed(self) -> None:
        self.ok.setEnabled(False)
        self._timer.start()

    def brief(self) -> Brief | None:
        """The brief as typed, or None while a field is refused."""
        lengths, angles = self.form.values(), self.angles.values()
        if lengths is None or angles is None:
            return None
        radius, width = lengths.pop("radius"), lengths.pop("width")
        gain = angles.pop("camber_gain")
        assert radius is not None and width is not None and gain is not None
        if radius <= 0.0 or width <= 0.0:
            return None
        values = {**lengths, **angles, "camber_gain": gain / PER_TRAVEL[self._units]}
        return Brief(tire=Tire(radius, width), units=self._units, **values)  # type: ignore[arg-type]

    def refresh(self) -> None:
        """Sketch what is typed and say what it meets and misses."""
        brief = self.brief()
        self._made = None
        if brief is not None:
            try:
                self._made = sketch(brief)
            except LayoutError as reason:
                self.answer.setText(str(reason))
        if self._made is not None:
            lines = [f"✓ {words}" for words in self._made.met]
            lines += [f"✗ {words}" for words in self._made.missed]
            lines += [f"• {words}" for words in self._made.facts]
            self.answer.setText("\n".join(lines))
        self.ok.setEnabled(self._made is not None)

    def _accept(self) -> None:
        if self._timer.isActive():
            self._timer.stop()
            self.refresh()
        if self._made is not None:
            self.job = Job(self._made.layout)
            self.accept()
