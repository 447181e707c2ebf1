"""The fix list: what may be moved, the moves that would cure the car, and making one."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from PySide6.QtCore import QSize, Qt
from PySide6.QtWidgets import (
    QComboBox,
    QDialog,
    QGroupBox,
    QHBoxLayout,
    QLabel,
    QProgressBar,
    QPushButton,
    QScrollArea,
    QSizePolicy,
    QSplitter,
    QVBoxLayout,
    QWidget,
)

from app.background import Background
from app.document import Document
from app.panels.allowances import AllowancesForm
from app.panels.fix_table import FixTable, shown_toe
from app.panels.toe_picture import ToePicture
from geometry.finding_checks.wording import Wording
from geometry.fixes import Fix, FixList, fixes
from geometry.layout import MM_PER_INCH, Layout, SideName
from geometry.solution import solve
from geometry.tolerances import toe_length, tolerance

_PICK = "Choose a move to see it on the floor and in the curves."
_CAUTION = (
    "A wrong move of a steering part can kill. Have the finished work inspected and aligned; "
    "local codes rule."
)


class FixListDialog(QDialog):
    """Searches on a worker beside the live window. A chosen move is a preview until it is made."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setWindowTitle("Fix list")
        self._document = document
        self._searched: tuple[Layout, float, SideName] | None = None
        self._shown: Fix | None = None
        self._found: FixList | None = None
        self._before = np.zeros(0)
        self.background = Background(self, wait_ms=30)
        self.background.answered.connect(self._done)
        self.background.told.connect(self._news)
        self.background.failed.connect(self._failed)
        self._build()
        document.solved.connect(self._follow)
        document.edited.connect(self._follow)
        document.opened.connect(self._opened)
        self.search()

    # --- layout -------------------------------------------------------------------------

    def _build(self) -> None:
        column = QVBoxLayout(self)
        self.state = QLabel()
        self.state.setObjectName("heading")
        self.state.setWordWrap(True)
        self.state.setAccessibleName("What the search is about")
        column.addWidget(self.state)
        column.addWidget(self._wishes())
        column.addWidget(self._moves(), 1)
        row = QHBoxLayout()
        caution = QLabel(_CAUTION)
        caution.setObjectName("quiet")
        caution.setWordWrap(True)
        row.addWidget(caution, 1)
        self.make = QPushButton("&Make this move")
        self.make.setToolTip("Move the car as planned; one undo step")
        self.make.clicked.connect(self.make_move)
        close = QPushButton("&Close")
        close.setAutoDefault(False)
        close.clicked.connect(self.reject)
        row.addWidget(self.make)
        row.addWidget(close)
        column.addLayout(row)
        letters = self.fontMetrics()
        wanted = QSize(185 * letters.averageCharWidth(), 42 * letters.height())
        self.resize(wanted.boundedTo(self.screen().availableSize() - QSize(40, 60)))

    def _wishes(self) -> QWidget:
        """What may be moved, and the search."""
        holder = QGroupBox("What may be moved, and how far")
        row = QHBoxLayout(holder)
        self.allowed = AllowancesForm(self._document.units)
        self.allowed.changed.connect(self._allowed_changed)
        # With large letters on a small screen the rows are wider than there is room.
        area = QScrollArea()
        area.setAccessibleName("What may be moved")
        area.setWidgetResizable(True)
        area.setWidget(self.allowed)
        bar = area.horizontalScrollBar().sizeHint().height()
        area.setMinimumHeight(self.allowed.sizeHint().height() + bar + 4)
        area.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)
        row.addWidget(area, 1)
        column = QVBoxLayout()
        self.side_box = QComboBox()
        self.side_box.addItems(["left wheel", "right wheel"])
        self.side_box.setAccessibleName("Wheel to cure")
        self.side_box.currentIndexChanged.connect(self.search)
        column.addWidget(self.side_box)
        column.addStretch(1)
        self.progress = QProgressBar()
        self.progress.setRange(0, 100)
        self.progress.setAccessibleName("How far the search is")
        column.addWidget(self.progress)
        buttons = QHBoxLayout()
        self.again = QPushButton("&Find moves")
        self.again.setDefault(True)
        self.again.clicked.connect(self.search)
        self.stop = QPushButton("Sto&p")
        self.stop.setAutoDefault(False)
        self.stop.clicked.connect(self.stop_search)
        buttons.addWidget(self.again)
        buttons.addWidget(self.stop)
        column.addLayout(buttons)
        row.addLayout(column)
        return holder

    def _moves(self) -> QWidget:
        """The moves, and the chosen one in words and as a curve."""
        split = QSplitter(Qt.Orientation.Vertical)
        split.setChildrenCollapsible(False)
        self.table = FixTable()
        self.table.itemSelectionChanged.connect(self._picked)
        self.table.doubleClicked.connect(self.make_move)
        split.addWidget(self.table)
        below = QWidget()
        row = QHBoxLayout(below)
        row.setContentsMargins(0, 4, 0, 0)
        self.words = QLabel(_PICK)
        self.words.setWordWrap(True)
        self.words.setAlignment(Qt.AlignmentFlag.AlignTop)
        self.words.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        self.words.setAccessibleName("The chosen move")
        area = QScrollArea()
        area.setAccessibleName("Words on the chosen move")
        area.setWidgetResizable(True)
        area.setWidget(self.words)
        row.addWidget(area, 1)
        self.picture = ToePicture()
        row.addWidget(self.picture, 1)
        split.addWidget(below)
        split.setStretchFactor(0, 3)
        split.setStretchFactor(1, 2)
        return split

    # --- searching ----------------------------------------------------------------------

    @property
    def side(self) -> SideName:
        right = self.side_box.currentIndex() == 1 and not self._document.layout.linked
        return "right" if right else "left"

    def search(self) -> None:
        """Look for moves that cure the car as it is planned now."""
        self._take_back()
        layout, span, side = self._document.settled_layout(), self._document.span, self.side
        self.side_box.setVisible(not layout.linked)
        self.allowed.suit(layout, side)
        allowances = self.allowed.value()
        if allowances is None:
            self.background.drop()
            self._show_idle("One of the figures can't be read; it says why.")
            return
        self._searched = layout, span, side
        self._found = None
        self._before = solve(layout, span=span).sides[side].sweep.toe
        self.table.show_fixes((), self._before, 0.0, layout.units)
        self.progress.setValue(0)
        self._say("Trying what a shop can move …")
        self._buttons(searching=True)

        def question(
            stopped: Callable[[], bool], tell: Callable[[object], None]
        ) -> FixList | None:
            last = None
            for last in fixes(layout, side, allowances, span, progress=tell, stop=stopped):
                tell(last)
            return last if last is not None and last.done else None

        self.background.ask(question, tells=True)

    def stop_search(self) -> None:
        """Stop; what has been found stays."""
        if self.background.busy:
            self.background.drop()
            self._buttons(searching=False)
            self._say("Stopped before all moves were tried.")

    def _news(self, news: FixList | float) -> None:
        if isinstance(news, FixList):
            self._show(news)
        else:
            self.progress.setValue(round(100.0 * news))

    def _done(self, found: FixList | None) -> None:
        self._buttons(searching=False)
        self.progress.setValue(100)
        if found is not None:
            self._show(found)

    def _failed(self, trace: str) -> None:
        self._show_idle("This could not be worked out for this car.")
        raise RuntimeError(trace)

    def _show(self, found: FixList) -> None:
        """Put a list into the table; the chosen move stays chosen."""
        assert self._searched is not None
        layout, _, side = self._searched
        kept = self._shown
        self._found = found
        units = layout.units
        self.table.show_fixes(found.fixes, self._before, found.tolerance, units)
        self._draw(None)
        if found.trouble:
            self.state.setText(found.trouble)
        else:
            good = sum(fix.cures for fix in found.fixes)
            self._say(
                f"{_count(good, 'move')} would bring it within the tolerance."
                if found.done else "Single moves are here; now trying them in pairs …"
            )
        self.words.setText(_PICK if found.fixes else "")
        for row, fix in enumerate(found.fixes):
            if kept is not None and fix.moves == kept.moves:
                self.table.selectRow(row)

    def _say(self, more: str) -> None:
        """The head line: how the car stands, and what the search has to say."""
        assert self._searched is not None
        layout, span, side = self._searched
        words = Wording(layout.units)
        moved = self._before[np.isfinite(self._before)]
        head = ""
        if moved.size == self._before.size:
            toe = toe_length(layout.side(side), moved)
            whose = "each wheel" if layout.linked else f"the {side} wheel"
            limit = words.toe(tolerance(layout, "toe range"))
            head = (
                f"Toe at {whose} changes {words.fine(float(toe.max() - toe.min()))} over "
                f"{words.span(span)}; the tolerance is {limit}. "
            )
        self.state.setText(head + more)

    def _show_idle(self, words: str) -> None:
        self._buttons(searching=False)
        self.state.setText(words)

    def _buttons(self, *, searching: bool) -> None:
        self.again.setEnabled(not searching)
        self.stop.setEnabled(searching)
        self.make.setEnabled(self._shown is not None)

    def _allowed_changed(self) -> None:
        self.allowed.remember()
        if self.background.busy:
            self.search()
        else:
            self._say_stale("What may be moved has changed: find moves again.")

    # --- showing and making a move ---------------------------------------------------------

    def _picked(self) -> None:
        """Show the chosen move on the floor and in the curves."""
        fix = self.table.chosen
        if fix is None or self._searched is None or fix is self._shown:
            return
        self._shown = fix
        self._document.preview_layout(fix.layout)
        units = fix.layout.units
        within = "within" if fix.cures else "still over"
        parts = [
            f"{fix.text} {fix.remains_words(units)} That is {within} the tolerance.",
            *fix.costs.words(units),
        ]
        if not fix.layout.linked and fix.other_range is not None:
            far = fix.layout.side("left" if fix.side == "right" else "right")
            left = Wording(units).fine(float(toe_length(far, fix.other_range)))
            parts.append(f"The other wheel then keeps {left}.")
        parts += fix.notes
        self.words.setText("\n".join(parts))
        self._draw(fix)
        self.make.setEnabled(True)

    def _draw(self, fix: Fix | None) -> None:
        found = self._found
        if found is None or self._searched is None or not np.isfinite(self._before).any():
            self.picture.clear()
            return
        layout, span, side = self._searched
        scale = MM_PER_INCH if layout.units == "in" else 1.0
        travel = np.linspace(-span, span, self._before.size) / scale
        own = layout.side(side)
        before = np.asarray(toe_length(own, self._before)) / scale
        after = None if fix is None else shown_toe(fix, fix.toe, scale)
        limit = float(toe_length(own, found.tolerance)) / scale
        self.picture.show_curves(travel, before, after, limit, layout.units)

    def _take_back(self) -> None:
        """Put the car back as it stood before a move was shown."""
        fix, self._shown = self._shown, None
        self.make.setEnabled(False)
        self.table.clearSelection()
        self.words.setText(_PICK)
        if fix is not None and self._document.previewing and self._document.layout == fix.layout:
            self._document.cancel_preview()

    def make_move(self) -> None:
        """Make the chosen move, one undo step, and see what is left to do."""
        fix = self._shown
        if fix is None:
            return
        self._shown = None
        text = fix.text.rstrip(".")
        self._document.apply_layout(text[:1].lower() + text[1:], fix.layout)
        self.search()

    # --- the car goes on ---------------------------------------------------------------------

    def _follow(self) -> None:
        """A move that is shown goes when the car is dragged; a changed car makes the list old."""
        document = self._document
        if self._shown is not None and document.layout != self._shown.layout:
            # Whoever moved the car has it now.
            self._shown = None
            self.table.clearSelection()
            self._draw(None)
            self.make.setEnabled(False)
        if self._searched is None:
            return
        layout, span, _ = self._searched
        if document.settled_layout() != layout or document.span != span:
            self._say_stale("The car has changed since: find moves again.")

    def _say_stale(self, words: str) -> None:
        if self.background.busy:
            self.background.drop()
        self._take_back()
        self._searched = None
        self._found = None
        self.table.show_fixes((), self._before, 0.0, self._document.units)
        self.picture.clear()
        self.words.setText("")
        self._show_idle(words)

    def _opened(self) -> None:
        self._shown = None
        self._say_stale("Another car is on the floor: find moves for it.")

    def done(self, result: int) -> None:
        self._take_back()
        self.background.finish()
        super().done(result)


def _count(number: int, what: str) -> str:
    if number == 0:
        return f"No {what} alone or in a pair"
    return f"{number} {what}{'' if number == 1 else 's'}"
