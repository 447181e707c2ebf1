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

from app.document import Document
from geometry.layout import RELAY_POINTS, SIDE_POINTS, Layout, Point, RelayRod, Side, SideName
from geometry.lengths import (
    format_angle,
    format_exact,
    format_length,
    parse_angle,
    parse_length,
)

Index = QModelIndex | QPersistentModelIndex
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
        changed: Side = replace(layout.side(side), **{field: value or 0.0})
        return layout.with_side(side, changed)

    return (lambda layout, side: getattr(layout.side(side), field)), write


def _tire_value(field: str) -> tuple[Callable[..., float], Callable[..., Layout]]:
    def write(layout: Layout, side: SideName, value: float | None) -> Layout:
        old = layout.side(side)
        tire = replace(old.tire, **{field: value or getattr(old.tire, field)})
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


class MeasureModel(QAbstractTableModel):
    """The sheet of one side of the document's car as planned."""

    refused = Signal(str)
    """Why the last typed cell was not taken; empty when one was."""

    def __init__(self, document: Document) -> None:
        super().__init__(document)
        self._document = document
        self._side: SideName = "left"
        self._rows: list[Row] = []
        self._refusals: dict[tuple[int, int], tuple[str, str]] = {}
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

    def row_of(self, name: str) -> int | None:
        """The row of a point, or None if the sheet has none of that name."""
        return self._rows.index(name) if name in self._rows else None

    # --- what Qt asks -------------------------------------------------------------

    def rowCount(self, parent: Index = QModelIndex()) -> int:
        return 0 if parent.isValid() else len(self._rows)

    def columnCount(self, parent: Index = QModelIndex()) -> int:
        return 0 if parent.isValid() else len(COLUMNS)

    def headerData(
        self, section: int, orientation: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole
    ) -> Any:
        if role == Qt.ItemDataRole.DisplayRole and orientation == Qt.Orientation.Horizontal:
            return COLUMNS[section]
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
            return format_angle(value)
        return format_exact(value, units) if exact else format_length(value, units)

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        row, column = self._rows[index.row()], index.column()
        label = row if isinstance(row, str) else row.label
        if column == 0:
            return self._label_data(row, label, role)
        refusal = self._refusals.get((index.row(), column))
        value = self._value(row, column, self._document.layout)
        if role == Qt.ItemDataRole.DisplayRole:
            return refusal[0] if refusal else self._text(row, value)
        if role == Qt.ItemDataRole.EditRole:
            return refusal[0] if refusal else self._text(row, value, exact=True)
        if role == Qt.ItemDataRole.ToolTipRole:
            return refusal[1] if refusal else self._text(row, value, exact=True)
        if role == Qt.ItemDataRole.ForegroundRole and refusal:
            return QBrush(QColor("#B33A00"))
        if role == Qt.ItemDataRole.FontRole and self._differs(row, column, value):
            return self._strong
        if role == Qt.ItemDataRole.TextAlignmentRole:
            return Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter
        if role == Qt.ItemDataRole.AccessibleTextRole:
            where = COLUMNS[column] if isinstance(row, str) else ""
            return f"{label} {where} {self._text(row, value)}".replace("  ", " ")
        return None

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
        try:
            layout = self._typed(row, column, text.strip())
        except ValueError as reason:
            self._refusals[at, column] = (text, str(reason))
            self.refused.emit(str(reason))
            return True
        self._refusals.pop((at, column), None)
        self.refused.emit("")
        label = row if isinstance(row, str) else row.label
        verb = "move" if isinstance(row, str) else "set"
        self._document.apply_layout(f"{verb} {label}", layout)
        return True

    def _typed(self, row: Row, column: int, text: str) -> Layout:
        """The car with one cell as typed; ValueError with a plain reason."""
        layout = self._document.settled_layout()
        if isinstance(row, str):
            if row in layout.locked:
                raise ValueError(f"The {row} is locked. Take its check mark away to move it.")
            place = parse_length(text, self._document.units)
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
        length = parse_length(text, self._document.units)
        if length <= 0.0:
            raise ValueError(f"The {row.label} has to be more than nothing.")
        return row.write(layout, self._side, length)
