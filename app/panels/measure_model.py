"""The measure sheet as a table model: one row a point or single value, every cell typed.

A cell shows a tape reading. Editing starts from the exact value; what can't be read is
refused with a plain reason, kept beside the cell until it is mended, and changes nothing.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from typing import Any, Literal

from PySide6.QtCore import QAbstractTableModel, QModelIndex, QPersistentModelIndex, Qt, Signal
from PySide6.QtGui import QBrush, QColor, QFont

from app import theme
from app.document import Document
from geometry.layout import RELAY_POINTS, SIDE_POINTS, Layout, Point, RelayRod, Side, SideName
from geometry.lengths import (
    format_angle,
    format_angle_exact,
    format_exact,
    format_length,
    parse_angle,
    parse_length,
)

Index = QModelIndex | QPersistentModelIndex
_TOP = QModelIndex()
COLUMNS = ("", "over", "up", "fore")
COORDINATES = ("over", "up", "fore")


@dataclass(frozen=True)
class ValueRow:
    """A single value of the sheet: its label, kind, and how it is read and set."""

    label: str
    kind: Literal["length", "angle"]
    read: Callable[[Layout, SideName], float | None]
    write: Callable[[Layout, SideName, float | None], Layout]
    optional: bool = False


def _side_value(field: str) -> tuple[Callable[..., float], Callable[..., Layout]]:
    def write(layout: Layout, side: SideName, value: float | None) -> Layout:
        given: dict[str, Any] = {field: value or 0.0}
        changed: Side = replace(layout.side(side), **given)
        return layout.with_side(side, changed)

    return (lambda layout, side: getattr(layout.side(side), field)), write


def _tire_value(field: str) -> tuple[Callable[..., float], Callable[..., Layout]]:
    def write(layout: Layout, side: SideName, value: float | None) -> Layout:
        old = layout.side(side)
        given: dict[str, Any] = {field: value or getattr(old.tire, field)}
        tire = replace(old.tire, **given)
        return layout.with_side(side, replace(old, tire=tire))

    return (lambda layout, side: getattr(layout.side(side).tire, field)), write


def _car_value(field: str) -> tuple[Callable[..., float | None], Callable[..., Layout]]:
    return (
        lambda layout, side: getattr(layout, field),
        lambda layout, side, value: replace(layout, **{field: value}),
    )


VALUES: tuple[ValueRow, ...] = (
    ValueRow("tire radius", "length", *_tire_value("radius")),
    ValueRow("tire width", "length", *_tire_value("width")),
    ValueRow("static camber", "angle", *_side_value("static_camber")),
    ValueRow("static toe", "angle", *_side_value("static_toe")),
    ValueRow("wheelbase", "length", *_car_value("wheelbase"), optional=True),
    ValueRow("center of gravity height", "length", *_car_value("cg_height"), optional=True),
)

Row = str | ValueRow
_LONGEST = 20_000.0
"""Millimeters; a longer car is a slip of the keys or of the unit."""


@dataclass(frozen=True)
class _Refusal:
    """A typed cell that was not taken: its text, why, and the value that stood there."""

    text: str
    reason: str
    value: float | None


class MeasureModel(QAbstractTableModel):
    """The sheet of one side of the document's car as planned."""

    refused = Signal(str)
    """Why the last typed cell was not taken; empty when one was."""

    def __init__(self, document: Document) -> None:
        super().__init__(document)
        self._document = document
        self._side: SideName = "left"
        self._rows: list[Row] = []
        self._units = document.units
        self._refusals: dict[tuple[int, int], _Refusal] = {}
        self._shown: list[tuple[object, ...]] = []
        self._strong = QFont()
        self._strong.setBold(True)
        self.refresh()

    @property
    def side(self) -> SideName:
        return self._side

    def set_side(self, side: SideName) -> None:
        """Show the left or the right side's points."""
        self._side = side
        self._refusals.clear()
        self.refresh()

    @property
    def rows(self) -> list[Row]:
        return self._rows

    def _wanted_rows(self) -> list[Row]:
        layout = self._document.layout
        points: list[Row] = [n for n in SIDE_POINTS if n in layout.side(self._side).points]
        if isinstance(layout.steering, RelayRod):
            points += RELAY_POINTS
        return points + list(VALUES)

    def refresh(self) -> None:
        """Follow the document: same rows are only repainted."""
        rows = self._wanted_rows()
        if self._document.units != self._units:
            self._units = self._document.units
            self._refusals.clear()
            self.headerDataChanged.emit(Qt.Orientation.Horizontal, 0, len(COLUMNS) - 1)
        self._drop_stale_refusals()
        shown = self._shown_rows(rows)
        if rows != self._rows:
            self.beginResetModel()
            self._rows = rows
            self._refusals.clear()
            self.endResetModel()
        else:
            # Only what reads differently is painted again; a drag changes one row.
            for row, (before, now) in enumerate(zip(self._shown, shown, strict=True)):
                if before != now:
                    self.dataChanged.emit(self.index(row, 0), self.index(row, len(COLUMNS) - 1))
        self._shown = shown

    def _shown_rows(self, rows: list[Row]) -> list[tuple[object, ...]]:
        """What decides how each row reads."""
        layout, found = self._document.layout, self._document.job.found
        out: list[tuple[object, ...]] = []
        for at, row in enumerate(rows):
            values = [self._value(row, column, layout) for column in (1, 2, 3)]
            was = [self._value(row, column, found) for column in (1, 2, 3)] if found else []
            refused = [self._refusals.get((at, column)) for column in (1, 2, 3)]
            out.append((layout.units, *values, *was, *refused, row in layout.locked))
        return out

    def _drop_stale_refusals(self) -> None:
        """A cell whose value was changed otherwise is not waiting to be mended any more."""
        layout = self._document.layout
        stale = [
            at for at, refusal in self._refusals.items()
            if at[0] >= len(self._rows)
            or self._value(self._rows[at[0]], at[1], layout) != refusal.value
        ]
        for at in stale:
            del self._refusals[at]

    def refusal(self, index: Index) -> str:
        """Why what stands in a cell was not taken; empty if it was."""
        held = self._refusals.get((index.row(), index.column()))
        return held.reason if held else ""

    def take_back(self, index: Index) -> None:
        """Show the car's value again where typing was refused."""
        if self._refusals.pop((index.row(), index.column()), None) is not None:
            self.dataChanged.emit(index, index)
            self.refused.emit("")

    def row_of(self, name: str) -> int | None:
        """The row of a point, or None if the sheet has none of that name."""
        return self._rows.index(name) if name in self._rows else None

    # --- what Qt asks -------------------------------------------------------------

    def rowCount(self, parent: Index = _TOP) -> int:
        return 0 if parent.isValid() else len(self._rows)

    def columnCount(self, parent: Index = _TOP) -> int:
        return 0 if parent.isValid() else len(COLUMNS)

    def headerData(
        self, section: int, orientation: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole
    ) -> Any:
        if orientation != Qt.Orientation.Horizontal:
            return None
        if role == Qt.ItemDataRole.DisplayRole:
            return f"{COLUMNS[section]}, {self._units}" if section else "locked"
        if role == Qt.ItemDataRole.ToolTipRole and section == 0:
            return "A checked nail is locked: it can't be dragged or typed away."
        if role == Qt.ItemDataRole.TextAlignmentRole and section == 0:
            return Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter
        return None

    def flags(self, index: Index) -> Qt.ItemFlag:
        enabled = Qt.ItemFlag.ItemIsEnabled | Qt.ItemFlag.ItemIsSelectable
        row = self._rows[index.row()]
        if index.column() == 0:
            return enabled | Qt.ItemFlag.ItemIsUserCheckable if isinstance(row, str) else enabled
        if isinstance(row, ValueRow) and index.column() != 1:
            return Qt.ItemFlag.ItemIsEnabled
        return enabled | Qt.ItemFlag.ItemIsEditable

    def _value(self, row: Row, column: int, layout: Layout) -> float | None:
        if isinstance(row, ValueRow):
            return row.read(layout, self._side) if column == 1 else None
        try:
            return layout.point(self._side, row)[column - 1]
        except KeyError:
            return None

    def _text(self, row: Row, value: float | None, *, exact: bool = False) -> str:
        if value is None:
            return ""
        units = self._document.units
        if isinstance(row, ValueRow) and row.kind == "angle":
            return format_angle_exact(value) if exact else format_angle(value)
        return format_exact(value, units) if exact else format_length(value, units)

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        row, column = self._rows[index.row()], index.column()
        label = row if isinstance(row, str) else row.label
        if column == 0:
            return self._label_data(row, label, role)
        refusal = self._refusals.get((index.row(), column))
        value = self._value(row, column, self._document.layout)
        if role == Qt.ItemDataRole.DisplayRole:
            return refusal.text if refusal else self._text(row, value)
        if role == Qt.ItemDataRole.EditRole:
            return refusal.text if refusal else self._text(row, value, exact=True)
        if role == Qt.ItemDataRole.ToolTipRole:
            return refusal.reason if refusal else self._tip(row, column, value)
        if role == Qt.ItemDataRole.ForegroundRole and refusal:
            return QBrush(QColor(theme.REFUSED))
        if role == Qt.ItemDataRole.BackgroundRole and refusal:
            return QBrush(QColor(theme.REFUSED_GROUND))
        if role == Qt.ItemDataRole.FontRole and self._differs(row, column, value):
            return self._strong
        if role == Qt.ItemDataRole.TextAlignmentRole:
            return Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter
        if role == Qt.ItemDataRole.AccessibleTextRole:
            where = COLUMNS[column] if isinstance(row, str) else ""
            said = f"{refusal.text}, refused" if refusal else self._text(row, value)
            return f"{label} {where} {said}".replace("  ", " ")
        return None

    def _tip(self, row: Row, column: int, value: float | None) -> str:
        """The exact value, and the one found where it differs."""
        exact = self._text(row, value, exact=True)
        found = self._document.job.found
        if found is None or not self._differs(row, column, value):
            return exact
        was = self._text(row, self._value(row, column, found))
        return f"{exact}; found at {was}" if was else exact

    def _label_data(self, row: Row, label: str, role: int) -> Any:
        if role in (Qt.ItemDataRole.DisplayRole, Qt.ItemDataRole.AccessibleTextRole):
            return label[0].upper() + label[1:]
        if isinstance(row, str) and role == Qt.ItemDataRole.CheckStateRole:
            locked = row in self._document.layout.locked
            return Qt.CheckState.Checked if locked else Qt.CheckState.Unchecked
        if isinstance(row, str) and role == Qt.ItemDataRole.ToolTipRole:
            return "Checked: the nail is locked and can't be dragged or typed away."
        return None

    def _differs(self, row: Row, column: int, value: float | None) -> bool:
        found = self._document.job.found
        return found is not None and self._value(row, column, found) != value

    def setData(self, index: Index, value: Any, role: int = Qt.ItemDataRole.EditRole) -> bool:
        row, column = self._rows[index.row()], index.column()
        if role == Qt.ItemDataRole.CheckStateRole and isinstance(row, str):
            self._document.set_locked(row, Qt.CheckState(value) == Qt.CheckState.Checked)
            return True
        if role != Qt.ItemDataRole.EditRole:
            return False
        return self._type(index.row(), row, column, str(value))

    def _type(self, at: int, row: Row, column: int, text: str) -> bool:
        """Take a typed cell: an edit of the document, or a refusal with its reason."""
        layout = self._document.settled_layout()
        standing = self._text(row, self._value(row, column, layout), exact=True)
        if (at, column) not in self._refusals and text.strip() == standing:
            # Opened and closed again: nothing to do.
            return True
        try:
            layout = self._typed(layout, row, column, text.strip())
        except ValueError as reason:
            self._refuse(at, column, text, str(reason))
            return True
        self._refusals.pop((at, column), None)
        self.refused.emit("")
        label = row if isinstance(row, str) else row.label
        verb = "move" if isinstance(row, str) else "set"
        self._document.apply_layout(f"{verb} {label}", layout)
        return True

    def _refuse(self, at: int, column: int, text: str, reason: str) -> None:
        value = self._value(self._rows[at], column, self._document.layout)
        self._refusals[at, column] = _Refusal(text, reason, value)
        index = self.index(at, column)
        self.dataChanged.emit(index, index)
        self.refused.emit(reason)

    def paste(self, start: Index, text: str) -> None:
        """Type a block of cells, tabs between columns and lines between rows, as one step.

        What can't be read is refused in its cell; the others are taken.
        """
        layout = self._document.settled_layout()
        refused: list[tuple[int, int, str, str]] = []
        for at, line in enumerate(text.rstrip("\n").split("\n"), start.row()):
            for column, cell in enumerate(line.rstrip("\r").split("\t"), start.column()):
                if at >= len(self._rows) or column >= len(COLUMNS):
                    continue
                if not self.flags(self.index(at, column)) & Qt.ItemFlag.ItemIsEditable:
                    continue
                self._refusals.pop((at, column), None)
                try:
                    layout = self._typed(layout, self._rows[at], column, cell.strip())
                except ValueError as reason:
                    refused.append((at, column, cell, str(reason)))
        self._document.apply_layout("paste measures", layout)
        self.refused.emit("")
        for at, column, cell, why in refused:
            self._refuse(at, column, cell, why)

    def _typed(self, layout: Layout, row: Row, column: int, text: str) -> Layout:
        """A car with one cell as typed; ValueError with a plain reason."""
        if isinstance(row, str):
            if row in layout.locked:
                raise ValueError(f"The {row} is locked. Take its check mark away to move it.")
            place = _believable(parse_length(text, self._document.units))
            point: Point = layout.point(self._side, row)
            moved = point._replace(**{COORDINATES[column - 1]: place})
            return layout.with_point(self._side, row, moved)
        if not text and row.optional:
            return row.write(layout, self._side, None)
        if row.kind == "angle":
            angle = parse_angle(text)
            if abs(angle) > 0.8:
                raise ValueError(f"{text} is too far for the {row.label}; 45° is the most.")
            return row.write(layout, self._side, angle)
        length = _believable(parse_length(text, self._document.units))
        if length <= 0.0:
            raise ValueError(f"The {row.label} has to be more than nothing.")
        return row.write(layout, self._side, length)


def _believable(length: float) -> float:
    """The length, unless it is longer than any car."""
    if abs(length) > _LONGEST:
        raise ValueError("No car is that long; is the unit right?")
    return length
