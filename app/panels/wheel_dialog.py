"""Another tire or wheel: size text, offset or backspace, and what the change does."""

from __future__ import annotations

from dataclasses import replace

from PySide6.QtWidgets import QDialog, QDialogButtonBox, QLabel, QLineEdit, QVBoxLayout, QWidget

from app.document import Document
from app.panels.form import Form
from geometry.compare import compare
from geometry.layout import Layout, Tire
from geometry.lengths import format_length
from geometry.solution import solve
from geometry.tires import (
    TireSizeError,
    backspace_of,
    offset_for,
    parse_tire_size,
    wheel_changed,
    with_tire,
)


class WheelDialog(QDialog):
    """Changes the wheel of the chosen side (both while linked) as one undo step."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setWindowTitle("Tire and wheel")
        self._document = document
        self._layout = document.settled_layout()
        chosen = document.selection
        self._side = chosen[0] if chosen and not self._layout.linked else "left"
        tire = self._layout.side(self._side).tire
        self._tire = tire
        column = QVBoxLayout(self)
        self.size_text = QLineEdit(tire.size)
        self.size_text.setPlaceholderText("205/55R16, 31x10.5R15 or 6.00-16")
        self.size_text.setAccessibleName("Tire size")
        self.form = Form(self._layout.units)
        self.form.add_widget("Tire &size", self.size_text)
        for key, label, value in (
            ("radius", "Loaded radius", tire.radius),
            ("width", "Tire width", tire.width),
            ("rim_diameter", "Rim diameter", tire.rim_diameter),
            ("rim_width", "Rim width", tire.rim_width),
        ):
            self.form.add(key, label, "length", value, blank=False, check=_positive)
        self.form.add(
            "backspace", "Backspace", "length", backspace_of(tire), blank=False,
            tip="From the mounting face to the rim's inner edge",
        )
        column.addWidget(self.form)
        self.words = QLabel()
        self.words.setWordWrap(True)
        column.addWidget(self.words)
        buttons = QDialogButtonBox(
            QDialogButtonBox.StandardButton.Ok | QDialogButtonBox.StandardButton.Cancel
        )
        self.ok = buttons.button(QDialogButtonBox.StandardButton.Ok)
        buttons.accepted.connect(self._accept)
        buttons.rejected.connect(self.reject)
        column.addWidget(buttons)
        self.size_text.textChanged.connect(self._size_typed)
        self.form.changed.connect(self.refresh)
        self.resize(480, 420)
        self.refresh()

    def _size_typed(self, text: str) -> None:
        """Fill the dimensions from the size as soon as it can be read."""
        if not text.strip():
            return
        try:
            size = parse_tire_size(text)
        except TireSizeError as reason:
            self.words.setText(str(reason))
            return
        made = with_tire(self._tire, size, text)
        for key in ("radius", "width", "rim_diameter"):
            field = self.form.fields[key].field
            field.setText(format_length(getattr(made, key), self._layout.units, 64, decimals=1))
        self.refresh()

    def changed(self) -> Layout | None:
        """The car with the wheel as typed, or None while a field is refused."""
        values = self.form.values()
        if values is None:
            return None
        backspace = values.pop("backspace")
        assert backspace is not None
        known = {key: value for key, value in values.items() if value is not None}
        tire: Tire = replace(self._tire, **known, size=self.size_text.text().strip())
        if self.form.fields["backspace"].field.isModified() or "rim_width" in known:
            tire = replace(tire, offset=offset_for(backspace, tire.rim_width))
        return wheel_changed(self._layout, self._side, tire)

    def refresh(self) -> None:
        """Say what the change does to the car."""
        layout = self.changed()
        self.ok.setEnabled(layout is not None)
        if layout is None:
            return
        span = self._document.span
        rows = compare(solve(self._layout, span=span), solve(layout, span=span))
        lines = [f"{row.heading}: {row.was}, then {row.now}." for row in rows]
        before = self._layout.side(self._side).points["wheel center"].over
        after = layout.side(self._side).points["wheel center"].over
        if abs(after - before) > 0.05:
            way = "wider" if after > before else "narrower"
            shown = format_length(abs(after - before), layout.units, mark=True)
            lines.insert(0, f"Half track {shown} {way}.")
        self.words.setText("\n".join(lines))

    def _accept(self) -> None:
        layout = self.changed()
        if layout is not None:
            self._document.apply_layout("change tire and wheel", layout)
            self.accept()


def _positive(value: float) -> str | None:
    return None if value > 0.0 else "It has to be more than nothing."
