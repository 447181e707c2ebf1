"""Set percent Ackermann: where the steering arm's end belongs for it, and what that costs."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtWidgets import (
    QDialog,
    QDialogButtonBox,
    QFormLayout,
    QLabel,
    QLineEdit,
    QVBoxLayout,
    QWidget,
)

from app.background import Background
from app.document import Document
from geometry import plan_words
from geometry.layout import SIDES, LayoutError
from geometry.plan_figures import PlanFigures
from geometry.solution import solve
from geometry.steering_arm import INNER_ANGLE, ArmMove, arm_for_percent

_LOW, _HIGH = -200.0, 300.0


class PercentDialog(QDialog):
    """Reads a percentage and shows the move that gives it; ``chosen`` is the one taken."""

    def __init__(
        self, document: Document, figures: PlanFigures, parent: QWidget | None = None
    ) -> None:
        super().__init__(parent)
        self.setWindowTitle("Set percent Ackermann")
        self._figures = figures
        self._solution = solve(figures.layout, span=document.span)
        self._move: ArmMove | None = None
        self.chosen: ArmMove | None = None
        column = QVBoxLayout(self)
        form = QFormLayout()
        self.field = QLineEdit("100")
        self.field.selectAll()
        self.field.setAccessibleName("Wanted percent Ackermann")
        form.addRow("Wanted &percent Ackermann, inner wheel at 20°", self.field)
        column.addLayout(form)
        self.answer, rule, caution = QLabel(), QLabel(plan_words.PERCENT_RULE), QLabel(
            plan_words.CAUTION
        )
        for label in (self.answer, rule, caution):
            label.setWordWrap(True)
            column.addWidget(label)
        rule.setObjectName("quiet")
        caution.setObjectName("quiet")
        self.answer.setMinimumHeight(5 * self.fontMetrics().lineSpacing())
        self.buttons = QDialogButtonBox(
            QDialogButtonBox.StandardButton.Ok | QDialogButtonBox.StandardButton.Cancel
        )
        self.ok = self.buttons.button(QDialogButtonBox.StandardButton.Ok)
        self.ok.setText("Set it")
        self.buttons.accepted.connect(self.accept)
        self.buttons.rejected.connect(self.reject)
        column.addStretch(1)
        column.addWidget(self.buttons)
        self.background = Background(self, wait_ms=120)
        self.background.answered.connect(self._take)
        self.background.failed.connect(self._failed)
        self.field.textChanged.connect(self._ask)
        self.resize(62 * self.fontMetrics().averageCharWidth(), 0)
        self._ask()

    def wanted(self) -> float:
        """The percentage typed; ValueError with a plain reason."""
        text = self.field.text().strip().removesuffix("%").strip().replace("−", "-")
        try:
            value = float(text)
        except ValueError:
            raise ValueError("Type a percentage, such as 60.") from None
        if not _LOW <= value <= _HIGH:
            raise ValueError(f"Between {_LOW:.0f} and {_HIGH:.0f} percent, please.")
        return value

    def _ask(self) -> None:
        self._move = None
        self.ok.setEnabled(False)
        try:
            wanted = self.wanted()
        except ValueError as reason:
            self.background.drop()
            self._tell(str(reason), refusal=True)
            return
        self._tell("Working it out …")
        solution, plan = self._solution, self._figures.plan

        def question(stopped: Callable[[], bool]) -> ArmMove | str:
            try:
                return arm_for_percent(solution, plan, wanted, INNER_ANGLE)
            except LayoutError as reason:
                return str(reason)

        self.background.ask(question)

    def _take(self, answer: ArmMove | str) -> None:
        if isinstance(answer, str):
            self._tell(answer, refusal=True)
            return
        self._move = answer
        self.ok.setEnabled(True)
        layout, said = self._figures.layout, []
        for side in SIDES[:1] if layout.linked else SIDES:
            words = plan_words.move_words(
                answer, side, layout.side(side).tire.radius, layout.units
            )
            arm = answer.arms.get(side)
            needed = "" if arm is None else (
                f" The steering arm is then {plan_words.arm_words(arm, layout.units)}."
            )
            name = "" if layout.linked else f"{side}: "
            line = f"{name}{words}{needed}"
            said.append(line[:1].upper() + line[1:])
        self._tell("\n".join(said))

    def _failed(self, _trace: str) -> None:
        self._tell("This could not be worked out for this car.", refusal=True)

    def _tell(self, words: str, *, refusal: bool = False) -> None:
        self.answer.setObjectName("refusal" if refusal else "cure")
        self.answer.style().unpolish(self.answer)
        self.answer.style().polish(self.answer)
        self.answer.setText(words)

    def done(self, result: int) -> None:
        if result == QDialog.DialogCode.Accepted:
            self.chosen = self._move
        self.background.finish()
        super().done(result)
