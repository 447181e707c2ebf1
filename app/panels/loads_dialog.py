"""Weights, springs and bars, and the car in a steady turn: roll, transfer and wheel lean."""

from __future__ import annotations

from dataclasses import replace

from PySide6.QtCore import Qt, QTimer
from PySide6.QtWidgets import QDialog, QDialogButtonBox, QHBoxLayout, QLabel, QVBoxLayout, QWidget

from app.document import Document
from app.panels.form import Form
from geometry.layout import Layout, Loads
from geometry.loads import ride_frequency, wheel_rate_for
from geometry.turn_words import turn_words

_FIELDS = (
    ("sprung_mass", "Sprung weight", "mass"),
    ("front_share", "Front share of it", "share"),
    ("unsprung_front", "Unsprung weight, front", "mass"),
    ("unsprung_rear", "Unsprung weight, rear", "mass"),
    ("unsprung_front_height", "Unsprung height, front", "length"),
    ("unsprung_rear_height", "Unsprung height, rear", "length"),
    ("front_wheel_rate", "Front wheel rate", "rate"),
    ("rear_wheel_rate", "Rear wheel rate", "rate"),
    ("front_bar_rate", "Front bar, at the wheel", "rate"),
    ("rear_bar_rate", "Rear bar, at the wheel", "rate"),
    ("rear_roll_center_height", "Rear roll center height", "length"),
    ("rear_track", "Rear track (blank: as front)", "length"),
)
_NEEDED_NUMBERS = ("unsprung_front", "unsprung_rear", "front_bar_rate", "rear_bar_rate")


class LoadsDialog(QDialog):
    """Edits Layout.loads as one undo step; the turn is worked out as figures are typed."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setWindowTitle("Weights and springs")
        self._document = document
        self._layout = document.settled_layout()
        units = self._layout.units
        loads = self._layout.loads
        row = QHBoxLayout()
        self.form = Form(units)
        self.form.add("cg_height", "Center of gravity height", "length", self._layout.cg_height)
        for key, label, kind in _FIELDS:
            self.form.add(key, label, kind, getattr(loads, key))  # type: ignore[arg-type]
        self.form.add("front_hz", "or front ride frequency", "frequency", None,
                      tip="Sets the front wheel rate from the corner's sprung weight")
        self.form.add("rear_hz", "or rear ride frequency", "frequency", None,
                      tip="Sets the rear wheel rate from the corner's sprung weight")
        self.form.add("lateral_g", "Lateral g to look at (share of 1 g)", "share", 0.6, blank=False)
        row.addWidget(self.form, 1)
        self.answer = QLabel()
        self.answer.setWordWrap(True)
        self.answer.setMinimumWidth(300)
        self.answer.setAlignment(Qt.AlignmentFlag.AlignTop)
        self.answer.setAccessibleName("The car in a turn")
        row.addWidget(self.answer, 1)
        column = QVBoxLayout(self)
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
        self._timer.setInterval(150)
        self._timer.timeout.connect(self.refresh)
        self.form.changed.connect(self._timer.start)
        self.resize(760, 480)
        self.refresh()

    def changed(self) -> Layout | None:
        """The car with the weights as typed, or None while a field is refused."""
        values = self.form.values()
        if values is None:
            return None
        cg_height = values.pop("cg_height")
        values.pop("lateral_g")
        front_hz, rear_hz = values.pop("front_hz"), values.pop("rear_hz")
        for key in _NEEDED_NUMBERS:
            values[key] = values[key] or 0.0
        mass, share = values["sprung_mass"], values["front_share"]
        if mass is not None and share is not None:
            for hertz, key, part in (
                (front_hz, "front_wheel_rate", share), (rear_hz, "rear_wheel_rate", 1.0 - share)
            ):
                if hertz is not None:
                    values[key] = wheel_rate_for(hertz, 0.5 * mass * part)
        return replace(self._layout, cg_height=cg_height, loads=Loads(**values))  # type: ignore[arg-type]

    def refresh(self) -> None:
        """Say how the car stands in the turn, or what is still to be given."""
        layout = self.changed()
        self.ok.setEnabled(layout is not None)
        if layout is None:
            return
        lateral = self.form.fields["lateral_g"].value() or 0.6
        lines = list(turn_words(layout, lateral))
        lines += _frequency_lines(layout.loads)
        self.answer.setText("\n\n".join(lines))

    def _accept(self) -> None:
        layout = self.changed()
        if layout is not None:
            self._document.apply_layout("set weights and springs", layout)
            self.accept()


def _frequency_lines(loads: Loads) -> list[str]:
    if loads.sprung_mass is None or loads.front_share is None:
        return []
    out = []
    for where, rate, share in (
        ("Front", loads.front_wheel_rate, loads.front_share),
        ("Rear", loads.rear_wheel_rate, 1.0 - loads.front_share),
    ):
        if rate and share > 0.0:
            hertz = ride_frequency(rate, 0.5 * loads.sprung_mass * share)
            out.append(f"{where} ride frequency {hertz:.2f} Hz (a road car has 1 to 2).")
    return out
