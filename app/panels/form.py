"""Typed fields in dialogs: each reads what a person would write and refuses it in place."""

from __future__ import annotations

from collections.abc import Callable
from typing import Literal

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QFormLayout, QLabel, QLineEdit, QVBoxLayout, QWidget

from geometry.layout import UnitName
from geometry.lengths import format_angle, format_length, parse_angle, parse_length
from geometry.quantities import Quantity, format_quantity, parse_quantity, unit_of

Kind = Literal["length", "angle", "mass", "rate", "share", "frequency"]


def _read(kind: Kind, text: str, units: UnitName) -> float:
    if kind == "length":
        return parse_length(text, units)
    if kind == "angle":
        return parse_angle(text)
    quantity: Quantity = kind
    return parse_quantity(text, quantity, units)


def _show(kind: Kind, value: float, units: UnitName) -> str:
    if kind == "length":
        return format_length(value, units, 64, decimals=2)
    if kind == "angle":
        return format_angle(value)
    quantity: Quantity = kind
    return format_quantity(value, quantity, units)


def _unit(kind: Kind, units: UnitName) -> str:
    if kind == "length":
        return units
    if kind == "angle":
        return "°"
    quantity: Quantity = kind
    return unit_of(quantity, units)


class QuantityField(QWidget):
    """One typed quantity with its unit; a blank means not given where that is allowed."""

    changed = Signal()

    def __init__(
        self,
        kind: Kind,
        units: UnitName,
        value: float | None,
        name: str,
        *,
        blank: bool = True,
        check: Callable[[float], str | None] | None = None,
    ) -> None:
        super().__init__()
        self._kind, self._units, self._blank, self._check = kind, units, blank, check
        self._given = value
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        self.field = QLineEdit("" if value is None else _show(kind, value, units))
        self._first = self.field.text()
        self.field.setPlaceholderText("not given" if blank else "")
        self.field.setAccessibleName(f"{name}, {_unit(kind, units)}")
        # A sign that is cut off would make another figure of it.
        self.field.setMinimumWidth(self.field.fontMetrics().horizontalAdvance("−12 15/16") + 12)
        column.addWidget(self.field)
        self.reason = QLabel()
        self.reason.setObjectName("refusal")
        self.reason.setWordWrap(True)
        self.reason.hide()
        column.addWidget(self.reason)
        self.field.textChanged.connect(self._typed)

    def _typed(self) -> None:
        self.value()
        self.changed.emit()

    @property
    def is_good(self) -> bool:
        return not self.reason.text()

    def value(self) -> float | None:
        """What stands in the field; None if blank or refused (then ``is_good`` is False)."""
        text = self.field.text().strip()
        words, value = "", None
        if text == self._first.strip():
            # Untouched, so nothing is lost to the rounding of what is shown.
            value = self._given
        elif text:
            try:
                value = _read(self._kind, text, self._units)
            except ValueError as error:
                words = str(error)
        if value is not None and self._check is not None:
            words = self._check(value) or ""
        if value is None and not words and not self._blank:
            words = "A figure is needed here."
        self.reason.setText(words)
        self.reason.setVisible(bool(words))
        return None if words else value


class Form(QWidget):
    """A column of labeled quantity fields, read all at once."""

    changed = Signal()

    def __init__(self, units: UnitName) -> None:
        super().__init__()
        self._units = units
        self._rows = QFormLayout(self)
        self._rows.setContentsMargins(0, 0, 0, 0)
        self._rows.setFieldGrowthPolicy(QFormLayout.FieldGrowthPolicy.ExpandingFieldsGrow)
        self.fields: dict[str, QuantityField] = {}

    def add(
        self,
        key: str,
        label: str,
        kind: Kind,
        value: float | None,
        *,
        blank: bool = True,
        check: Callable[[float], str | None] | None = None,
        tip: str = "",
    ) -> QuantityField:
        """Add a field; ``check`` returns a reason to refuse a value, or None."""
        field = QuantityField(kind, self._units, value, label, blank=blank, check=check)
        field.setToolTip(tip)
        field.changed.connect(self.changed)
        name = QLabel(f"{label}, {_unit(kind, self._units)}")
        name.setBuddy(field.field)
        self._rows.addRow(name, field)
        self.fields[key] = field
        return field

    def add_widget(self, label: str, widget: QWidget) -> None:
        """Add any other widget as a row."""
        self._rows.addRow(label, widget)

    def values(self) -> dict[str, float | None] | None:
        """All values by key, or None while one of them is refused."""
        values = {key: field.value() for key, field in self.fields.items()}
        return values if all(field.is_good for field in self.fields.values()) else None
