"""What may be moved on this car and how far: a checked row for each kind of shop move."""

from __future__ import annotations

import json
import math
from dataclasses import asdict

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QCheckBox, QGridLayout, QLabel, QWidget

from app import settings
from app.panels.form import QuantityField
from geometry.layout import MM_PER_INCH, Layout, SideName, UnitName
from geometry.shop_moves import ARM_KINDS, KINDS, Allowances, Kind, moved_nails, steps_words

LABELS: dict[Kind, str] = {
    "rack_height": "Rack or relay rod &up or down",
    "inner_width": "&Inner tie-rod ends out or in",
    "outer_spacer": "&Spacers at the outer tie-rod end",
    "arm_end": "&Outer end along the steering arm",
    "knuckle_height": "Other &knuckle, tie-rod end higher or lower",
    "upper_mount_height": "Upper arm &mount up or down",
    "upper_mount_width": "Upper arm mount out or i&n",
    "ball_joint": "&Taller upper ball joint",
}
_FARTHEST = 12.0 * MM_PER_INCH
_REMEMBERED = "fix list may move"


def remembered() -> tuple[Allowances, frozenset[str]]:
    """How far moves may go and which are left out, as last given; the usual if never."""
    usual = asdict(Allowances())
    try:
        kept = json.loads(settings.get_text(_REMEMBERED, "{}"))
        far = {key: float(kept["far"][key]) for key in usual}
        without = frozenset(key for key in kept["without"] if key in usual)
    except (ValueError, KeyError, TypeError):
        return Allowances(), frozenset()
    if not all(math.isfinite(value) and 0.0 < value <= _FARTHEST for value in far.values()):
        return Allowances(), frozenset()
    return Allowances(**far), without


def _too_far(value: float) -> str | None:
    if value <= 0.0:
        return "More than nothing, or take the check mark away."
    return "No shop moves a pivot that far." if value > _FARTHEST else None


class AllowancesForm(QWidget):
    """Reads ``Allowances`` for a car; rows that can't be had on it are shut, and say why."""

    changed = Signal()

    def __init__(self, units: UnitName, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setObjectName("clear")
        self.boxes: dict[Kind, QCheckBox] = {}
        self.fields: dict[Kind, QuantityField] = {}
        grid = QGridLayout(self)
        grid.setContentsMargins(0, 0, 0, 0)
        grid.setHorizontalSpacing(10)
        grid.setVerticalSpacing(2)
        far, without = remembered()
        rows = (len(LABELS) + 1) // 2
        for column in (1, 4):
            most = QLabel(f"at most, {units}")
            most.setObjectName("quiet")
            grid.addWidget(most, 0, column)
        grid.setColumnMinimumWidth(2, 14)
        for number, kind in enumerate(LABELS):
            row, column = 1 + number % rows, 3 * (number // rows)
            box = QCheckBox(LABELS[kind])
            box.setChecked(kind not in without)
            name = LABELS[kind].replace("&", "")
            field = QuantityField(
                "length", units, far.of(kind), f"{name}, at most", blank=False, check=_too_far
            )
            field.field.setFixedWidth(9 * self.fontMetrics().averageCharWidth() + 12)
            steps = steps_words(kind, units)
            field.setToolTip(steps)
            field.field.setAccessibleDescription(steps)
            box.toggled.connect(field.setEnabled)
            field.setEnabled(box.isChecked())
            box.toggled.connect(self.changed)
            field.changed.connect(self.changed)
            grid.addWidget(box, row, column)
            grid.addWidget(field, row, column + 1)
            self.boxes[kind], self.fields[kind] = box, field
        grid.setColumnStretch(5, 1)

    def suit(self, layout: Layout, side: SideName) -> None:
        """Shut the rows of moves that this car does not have or that a lock forbids."""
        own = layout.side(side)
        for kind in KINDS:
            box = self.boxes[kind]
            locked = sorted(moved_nails(kind, own) & layout.locked)
            why = steps_words(kind, layout.units)
            if own.is_strut and kind in ARM_KINDS:
                why = "A strut has no upper arm."
            elif locked:
                why = f"The {locked[0]} is locked; unlock it first."
            can = not locked and not (own.is_strut and kind in ARM_KINDS)
            box.setEnabled(can)
            box.setToolTip(why)
            box.setAccessibleDescription(why)
            self.fields[kind].setEnabled(can and box.isChecked())

    def value(self) -> Allowances | None:
        """What may be moved and how far; None while a checked field is refused."""
        far: dict[str, float] = {}
        for kind, field in self.fields.items():
            wanted = self.boxes[kind].isChecked() and self.boxes[kind].isEnabled()
            value = field.value() if wanted else 0.0
            if value is None:
                return None
            far[kind] = value
        return Allowances(**far)

    def remember(self) -> None:
        """Keep the rows for the next time."""
        usual = Allowances()
        far = {kind: field.value() or usual.of(kind) for kind, field in self.fields.items()}
        without = [kind for kind, box in self.boxes.items() if not box.isChecked()]
        settings.put(_REMEMBERED, json.dumps({"far": far, "without": without}))
