"""The steering card: wheel angles, Ackermann, the string check, and moves that cure them."""

from __future__ import annotations

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QHideEvent, QShowEvent
from PySide6.QtWidgets import (
    QCheckBox,
    QGridLayout,
    QLabel,
    QPushButton,
    QScrollArea,
    QSizePolicy,
    QVBoxLayout,
    QWidget,
)

from app.document import Document
from app.panels.card import Card
from app.panels.flow import flow_of
from app.panels.kingpin import KingpinCard
from app.plan_watch import PlanWatch
from geometry import plan_words
from geometry.layout import RELAY_POINTS, SIDES, TIE_INNER, TIE_OUTER, Layout, LayoutError
from geometry.steered_now import steered_now
from geometry.steering_arm import ArmMove, string_check, swapped_knuckles
from geometry.steering_rows import Row, degrees, lock_rows, now_rows
from geometry.turning_circle import TURNING_ASSUMPTIONS

NO_WHEELBASE = (
    "Type the wheelbase in the measure sheet: Ackermann, the string check and the turning circle"
    " need it."
)
WORKING = "Working it out …"


def _words(kind: str = "quiet") -> QLabel:
    label = QLabel()
    label.setObjectName(kind)
    label.setWordWrap(True)
    policy = QSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Minimum)
    policy.setHeightForWidth(True)
    label.setSizePolicy(policy)
    return label


def _say(label: QLabel, words: str) -> None:
    if label.text() != words:
        label.setText(words)
    if label.isHidden() == bool(words):
        label.setVisible(bool(words))


class RowGrid(QWidget):
    """Labeled figures in two columns."""

    def __init__(self, left: str, right: str) -> None:
        super().__init__()
        self._grid = QGridLayout(self)
        self._grid.setContentsMargins(0, 0, 0, 0)
        self._grid.setHorizontalSpacing(12)
        self._grid.setVerticalSpacing(1)
        self._grid.setColumnStretch(0, 1)
        self._cells: dict[str, tuple[QLabel, QLabel, QLabel]] = {}
        for column, words in ((1, left), (2, right)):
            head = QLabel(words)
            head.setObjectName("quiet")
            self._grid.addWidget(head, 0, column, Qt.AlignmentFlag.AlignRight)

    def show_rows(self, rows: list[Row]) -> None:
        for row in rows:
            if row.key not in self._cells:
                self._add(row)
            for label, text in zip(
                self._cells[row.key], (row.label, row.left, row.right), strict=True
            ):
                if label.text() != text:
                    label.setText(text)

    def _add(self, row: Row) -> None:
        at = self._grid.rowCount()
        cells = QLabel(row.label), QLabel(), QLabel()
        # In large letters a label breaks before a figure is cut.
        cells[0].setWordWrap(True)
        cells[0].setMinimumWidth(12 * self.fontMetrics().averageCharWidth())
        for column, label in enumerate(cells):
            label.setToolTip(row.tip)
            self._grid.addWidget(
                label, at, column,
                Qt.AlignmentFlag.AlignRight if column else Qt.AlignmentFlag(0),
            )
        self._cells[row.key] = cells

    def text_of(self, key: str, right: bool = False) -> str:
        """What stands in the card for a figure (for tests)."""
        return self._cells[key][2 if right else 1].text()


class SteeringPanel(Card):
    """Figures of the steering: those of the pose in every frame, the others when they arrive."""

    refused = Signal(str)
    """Why something was not done; empty when it was."""

    def __init__(self, document: Document, watch: PlanWatch, parent: QWidget | None = None) -> None:
        super().__init__("Steering", parent)
        self._document, self._watch = document, watch
        self.state = QLabel()
        self.state.setObjectName("quiet")
        self.head.addWidget(self.state)
        holder = QWidget()
        holder.setObjectName("clear")
        column = QVBoxLayout(holder)
        column.setContentsMargins(0, 0, 6, 0)
        column.setSpacing(5)
        self.percent = _words("heading")
        self.percent.setToolTip(plan_words.PERCENT_RULE)
        self.turn = _words("cure")
        self.string = _words("cure")
        self.arm = _words("cure")
        self.rule = _words()
        self.now = RowGrid("left wheel", "right wheel")
        self.effect, self.converse = _words("cure"), _words("cure")
        self.locks = RowGrid("left turn", "right turn")
        self.small = _words()
        for label in (self.percent, self.turn):
            column.addWidget(label)
        column.addWidget(self.now)
        for label in (self.string, self.arm):
            column.addWidget(label)
        column.addLayout(self._buttons())
        column.addWidget(self.follow)
        self.kingpin = KingpinCard()
        for widget in (self.effect, self.converse, self.rule, self.locks, self.kingpin):
            column.addWidget(widget)
        column.addWidget(self.small)
        column.addStretch(1)
        self.area = QScrollArea()
        self.area.setWidgetResizable(True)
        self.area.setAccessibleName("Steering")
        self.area.setWidget(holder)
        self.body.addWidget(self.area)
        document.solved.connect(self.refresh)
        document.edited.connect(self.refresh)
        watch.changed.connect(self._figures_changed)
        _say(self.small, " ".join((plan_words.PERCENT_RULE, *TURNING_ASSUMPTIONS,
                                   plan_words.CAUTION)))

    def _buttons(self) -> QVBoxLayout:
        self.to_string = QPushButton("Put steering arm on the &string")
        self.to_percent = QPushButton("Set &percent Ackermann…")
        self.swap = QPushButton("S&wap knuckles front/rear steer")
        self.to_string.clicked.connect(self._put_on_string)
        self.to_percent.clicked.connect(self._ask_percent)
        self.swap.clicked.connect(self._swap)
        self.follow = QCheckBox("Move the inner pivot along with it")
        self.follow.setToolTip(
            "Raised or lowered so that the tie rod's line leans to the instant center as before,"
            " which keeps most of the bump steer as it is."
        )
        self.follow.setChecked(True)
        wrap = QVBoxLayout()
        wrap.addLayout(flow_of(self.to_string, self.to_percent, self.swap))
        return wrap

    # --- showing ---------------------------------------------------------------------

    def showEvent(self, event: QShowEvent) -> None:
        super().showEvent(event)
        self._watch.want(True)
        self.refresh()
        self._figures_changed()

    def hideEvent(self, event: QHideEvent) -> None:
        super().hideEvent(event)
        self._watch.want(False)

    def refresh(self) -> None:
        """Show the pose that stands."""
        if not self.isVisible():
            return
        solution = self._document.solution
        layout = solution.layout
        now = steered_now(solution)
        self.now.show_rows(now_rows(solution, now))
        percent = None if now is None else now.percent
        self._show_percent(percent)
        if now is None:
            _say(self.turn, "The parts can't meet in this pose.")
        elif now.turn is None:
            _say(self.turn, "The wheels point straight ahead.")
        else:
            ideal = "" if now.ideal is None else f"; ideal outer {degrees(now.ideal)}"
            _say(self.turn, f"Turning {now.turn}: inner wheel {degrees(now.inner)}, "
                            f"outer {degrees(now.outer)}{ideal}.")
        self._show_string(layout)
        self.kingpin.show_car(solution)
        self._enable()

    def _show_percent(self, now: float | None) -> None:
        figures = self._watch.current
        if self._document.layout.wheelbase is None:
            _say(self.percent, NO_WHEELBASE)
            return
        if figures is None:
            # What takes longer stands there in a moment; "not known" would be untrue till then.
            here = "" if now is None else f": {plan_words.percent_text(now)} here"
            _say(self.percent, f"Ackermann{here}")
            return
        ahead, at_20 = figures.plan.straight_ahead_percent, figures.percent_at_20
        _say(self.percent, plan_words.heading_words(now, ahead, at_20))

    def _show_string(self, layout: Layout) -> None:
        unit = layout.units
        said, arms = [], []
        for side in SIDES[:1] if layout.linked else SIDES:
            check = string_check(layout, side)
            if check is None:
                continue
            name = "" if layout.linked else f"{side}: "
            said.append(name + plan_words.off_string(check, unit))
            arms.append(name + plan_words.arm_needs(check, unit))
        _say(self.string, f"String check: {'; '.join(said)}." if said else "")
        _say(self.arm, f"{'. '.join(arm[:1].upper() + arm[1:] for arm in arms)}." if arms else "")
        _say(self.rule, plan_words.HALF_RULE if said else "")

    def _figures_changed(self) -> None:
        if not self.isVisible():
            return
        figures = self._watch.current
        _say(self.state, "" if figures is not None else WORKING)
        units = self._document.units
        self.locks.show_rows(lock_rows(figures, units))
        effect, converse = "", ""
        if figures is not None:
            if isinstance(figures.on_string, ArmMove):
                effect = f"To the string: {plan_words.effect_words(figures.on_string)}"
            converse = plan_words.best_fit_words(dict(figures.by_inner))
        _say(self.effect, effect)
        _say(self.converse, converse)
        self.refresh()

    def _enable(self) -> None:
        figures, document = self._watch.current, self._document
        locked = document.layout.locked
        reason = ""
        if document.showing_found:
            reason = "Switch to as planned to change the car."
        elif TIE_OUTER in locked:
            reason = f"The {TIE_OUTER} is locked; unlock it first."
        ready = not reason and figures is not None
        move = None if figures is None else figures.on_string
        can_move = ready and isinstance(move, ArmMove)
        if ready and isinstance(move, str):
            reason = move
        if can_move and isinstance(move, ArmMove):
            can_move = any(abs(part) > 1e-6 for part in move.move.values())
            reason = "" if can_move else "It is on the string."
        follows = isinstance(move, ArmMove) and move.followed is not None
        self.follow.setEnabled(follows and TIE_INNER not in locked)
        for button, on in ((self.to_string, can_move),
                           (self.to_percent, ready and document.layout.wheelbase is not None)):
            button.setEnabled(bool(on))
            button.setToolTip(reason or plan_words.CAUTION)
        held = sorted(locked & {TIE_OUTER, TIE_INNER, *RELAY_POINTS})
        self.swap.setEnabled(not document.showing_found and not held)
        self.swap.setToolTip(
            f"The {held[0]} is locked; unlock it first." if held else
            "Each knuckle on the other side, its arm ahead instead of behind or the other way."
        )

    # --- acts, each one undo step -----------------------------------------------------------

    def chosen_layout(self, move: ArmMove) -> Layout:
        """The car a move gives: with the inner pivots moved along if that is wanted."""
        along = self.follow.isChecked() and self.follow.isEnabled()
        return move.followed if along and move.followed is not None else move.layout

    def _put_on_string(self) -> None:
        figures = self._watch.current
        if figures is not None and isinstance(figures.on_string, ArmMove):
            layout = self.chosen_layout(figures.on_string)
            self._document.apply_layout("put steering arm on the string", layout)
            self.refused.emit("")

    def _ask_percent(self) -> None:
        from app.panels.percent_dialog import PercentDialog

        figures = self._watch.current
        if figures is None:
            return
        dialog = PercentDialog(self._document, figures, self.window())
        dialog.exec()
        move = dialog.chosen
        dialog.deleteLater()
        if move is not None:
            self._document.apply_layout("set percent Ackermann", self.chosen_layout(move))

    def _swap(self) -> None:
        try:
            layout = swapped_knuckles(self._document.settled_layout())
        except LayoutError as reason:
            self.refused.emit(str(reason))
            return
        self._document.apply_layout("swap knuckles", layout)
        self.refused.emit("")
