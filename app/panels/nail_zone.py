"""Targets, and where one nail may sit so that all of them are kept: hatched on the floor."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import QSize, Qt
from PySide6.QtWidgets import (
    QCheckBox,
    QComboBox,
    QDialog,
    QGroupBox,
    QHBoxLayout,
    QLabel,
    QProgressBar,
    QPushButton,
    QVBoxLayout,
    QWidget,
)
from shapely.geometry.base import BaseGeometry

from app.background import Background
from app.document import Document
from app.floor.view import FloorView
from app.panels.targets import TargetsTable, judged, keeps
from geometry.finding_checks.wording import Wording
from geometry.layout import RELAY_POINTS, UPPER_INNER, Layout, SideName, Target, UnitName
from geometry.pivot_zones import PivotZone, pivot_zone
from geometry.solution import solve
from geometry.tolerances import FIGURES
from geometry.zone_shapes import cut, room_in, way_into

_COARSE = (21, 21)


class NailZoneDialog(QDialog):
    """Edits the targets, and keeps one nail's zone up to date on the floor while it is open."""

    def __init__(
        self, document: Document, floor: FloorView, parent: QWidget | None = None
    ) -> None:
        super().__init__(parent)
        self.setWindowTitle("Targets and pivot zone")
        self._document, self._floor = document, floor
        self._asked: tuple[Layout, float, SideName, str] | None = None
        self.zone: PivotZone | None = None
        self.area: BaseGeometry | None = None
        self.background = Background(self, wait_ms=60)
        self.background.told.connect(self._news)
        self.background.answered.connect(self._done)
        self._build()
        document.solved.connect(self.ask)
        document.opened.connect(self._opened)
        document.selected.connect(self._chosen)
        self._list_nails()
        self._chosen()
        self.ask()

    def _build(self) -> None:
        column = QVBoxLayout(self)
        self.targets = TargetsTable(self._document)
        column.addWidget(self.targets, 1)
        box = QGroupBox("Where one nail may sit so that all targets are met")
        inner = QVBoxLayout(box)
        row = QHBoxLayout()
        label = QLabel("&Nail")
        self.nail = QComboBox()
        label.setBuddy(self.nail)
        self.nail.currentIndexChanged.connect(self.ask)
        self.shown = QCheckBox("&Hatch it on the floor")
        self.shown.setChecked(True)
        self.shown.toggled.connect(self._draw)
        row.addWidget(label)
        row.addWidget(self.nail, 1)
        row.addWidget(self.shown)
        inner.addLayout(row)
        self.words = QLabel()
        self.words.setWordWrap(True)
        self.words.setAlignment(Qt.AlignmentFlag.AlignTop)
        self.words.setMinimumHeight(4 * self.fontMetrics().lineSpacing())
        self.words.setAccessibleName("Room for the nail")
        inner.addWidget(self.words)
        self.progress = QProgressBar()
        self.progress.setRange(0, 100)
        self.progress.setAccessibleName("How far the zone is worked out")
        # Seen only while there is something to wait for, without moving what is below.
        policy = self.progress.sizePolicy()
        policy.setRetainSizeWhenHidden(True)
        self.progress.setSizePolicy(policy)
        inner.addWidget(self.progress)
        column.addWidget(box)
        row = QHBoxLayout()
        self.put = QPushButton("&Put the nail into its zone")
        self.put.setToolTip("Move it to the place in the zone that is nearest (one undo step)")
        self.put.clicked.connect(self.put_in)
        close = QPushButton("&Close")
        close.clicked.connect(self.reject)
        for button in (self.put, close):
            button.setAutoDefault(False)
        row.addWidget(self.put)
        row.addStretch(1)
        row.addWidget(close)
        column.addLayout(row)
        letters = self.fontMetrics()
        wanted = QSize(110 * letters.averageCharWidth(), 32 * letters.height())
        self.resize(wanted.boundedTo(self.screen().availableSize() - QSize(40, 60)))

    # --- which nail ---------------------------------------------------------------------

    def _list_nails(self) -> None:
        """The nails of this car that stand on a wheel's side."""
        layout = self._document.layout
        had = self.nail.currentData()
        blocked = self.nail.blockSignals(True)
        self.nail.clear()
        for side, name in layout.nails():
            if name in RELAY_POINTS or (layout.linked and side == "right"):
                continue
            words = name if layout.linked else f"{side} {name}"
            self.nail.addItem(words[:1].upper() + words[1:], (side, name))
        at = self._index_of(had or ("left", UPPER_INNER))
        self.nail.setCurrentIndex(max(at, 0))
        self.nail.blockSignals(blocked)

    def _index_of(self, key: tuple[SideName, str]) -> int:
        return next(
            (i for i in range(self.nail.count()) if tuple(self.nail.itemData(i)) == tuple(key)), -1
        )

    def _chosen(self) -> None:
        """Follow the nail that is chosen on the floor."""
        key = self._document.selection
        if key is None:
            return
        side: SideName = "left" if self._document.layout.linked else key[0]
        at = self._index_of((side, key[1]))
        if at >= 0:
            self.nail.setCurrentIndex(at)

    def _opened(self) -> None:
        self._list_nails()
        self.ask()

    # --- working it out -------------------------------------------------------------------

    def ask(self) -> None:
        """Work the zone out for the car as it now stands, coarse first."""
        layout, span = self._document.layout, self._document.span
        key = self.nail.currentData()
        if key is None:
            return
        side, name = key
        if name not in layout.side(side).points:
            self._list_nails()
            self.ask()
            return
        asked = (layout, span, side, name)
        if asked == self._asked:
            return
        self._asked = asked
        # What stood belongs to another car: it is not shown as if it were true.
        self.zone = self.area = None
        self._draw()
        self.words.setText("Working it out …")
        self.put.setEnabled(False)
        self.progress.setValue(0)
        self.progress.show()

        def question(
            stopped: Callable[[], bool], tell: Callable[[object], None]
        ) -> PivotZone | None:
            coarse = pivot_zone(layout, side, name, steps=_COARSE, span=span, stop=stopped)
            if coarse is None:
                return None
            if not coarse.trouble:
                tell(coarse)
            return pivot_zone(
                layout, side, name, span=span, exact=True, progress=tell, stop=stopped
            )

        self.background.ask(question, tells=True)

    def _news(self, news: PivotZone | float) -> None:
        if isinstance(news, PivotZone):
            self._show(news)
        else:
            self.progress.setValue(round(100.0 * news))

    def _done(self, zone: PivotZone | None) -> None:
        if zone is not None:
            self.progress.hide()
            self._show(zone)

    def _show(self, zone: PivotZone) -> None:
        layout = self._document.layout
        self.zone = zone
        self.area = cut(zone.zone, layout.no_go, zone.side)
        self.words.setText(self._said(zone, self.area))
        room = room_in(self.area, zone.present) if not self.area.is_empty else None
        locked = zone.name in layout.locked
        self.put.setEnabled(not self.area.is_empty and room is None and not locked)
        self._draw()

    def _said(self, zone: PivotZone, area: BaseGeometry) -> str:
        units = self._document.units
        missed = missed_targets(self._document.layout, self._document.span)
        parts = []
        if missed:
            parts.append(f"As it stands, missed: {', '.join(missed)}.")
        if zone.trouble:
            parts.append(zone.trouble)
        elif area.is_empty:
            parts.append("No-go shapes cover all of the zone: nothing is left to build in.")
        else:
            room = room_in(area, zone.present)
            if room is not None:
                parts.append(f"The nail has room as it stands: {room.words(units)}.")
            else:
                way = _way_words(area, zone, units)
                parts.append(f"The nail stands outside of its zone: {way}.")
            if area.area < zone.zone.area * (1.0 - 1e-9):
                parts.append("No-go shapes take a part of it.")
        if zone.name in self._document.layout.locked:
            parts.append("The nail is locked.")
        return " ".join(parts)

    def _draw(self) -> None:
        key: tuple[SideName, str] = self.nail.currentData() or ("left", "")
        side, name = key
        self._floor.set_nail_zone(side, name, self.area if self.shown.isChecked() else None)

    def put_in(self) -> None:
        """Move the nail to the nearest place of its zone, a little inside the edge."""
        zone, area = self.zone, self.area
        if zone is None or area is None or area.is_empty:
            return
        inner = area.buffer(-0.5)
        over, up = way_into(area if inner.is_empty else inner, zone.present)
        old = self._document.settled_layout().point(zone.side, zone.name)
        self._document.move_point(
            zone.side, zone.name, old._replace(over=old.over + over, up=old.up + up)
        )

    def done(self, result: int) -> None:
        self.background.finish()
        self._floor.set_nail_zone("left", "", None)
        super().done(result)


def _way_words(area: BaseGeometry, zone: PivotZone, units: UnitName) -> str:
    """How far the zone is from the nail, and how large it is."""
    words = Wording(units)
    over, up = way_into(area, zone.present)
    parts = [
        f"{words.tape(size)} {more if size > 0.0 else less}"
        for size, more, less in ((up, "up", "down"), (over, "out", "in"))
        if abs(size) > 0.05
    ]
    low_over, low_up, high_over, high_up = area.bounds
    return (
        f"{' and '.join(parts) or 'just'} to its edge. It is {words.tape(high_over - low_over)} "
        f"wide and {words.tape(high_up - low_up)} high in all"
    )


def missed_targets(layout: Layout, span: float) -> list[str]:
    """The figures that miss their targets as the car stands, in words."""
    solution = solve(layout, span=span)
    return [
        _lower(target)
        for target in layout.targets
        if target.figure in FIGURES
        and any(keeps(target, value) is False for _, value in judged(target, solution))
    ]


def _lower(target: Target) -> str:
    label = FIGURES[target.figure].label
    return label[:1].lower() + label[1:]
