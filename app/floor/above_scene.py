"""What stands on the floor from above: items that follow the document's solution."""

from __future__ import annotations

from PySide6.QtGui import QFont

from app.floor.above_marks import PlanMarkItems, PlanStringItems
from app.floor.scene import CarScene, near
from app.palette import Palette
from geometry.faces import ABOVE
from geometry.front_parts import Part
from geometry.layout import SideName
from geometry.plan_parts import PLAN_ROLES, plan_side_parts
from geometry.plan_strings import (
    PlanMarks,
    PlanString,
    plan_marks,
    plan_strings,
    rear_tires,
)
from geometry.solution import Solution
from geometry.standing import Standing


class AboveScene(CarScene):
    """The car from above, with its strings and the turn it makes."""

    face = ABOVE
    roles = PLAN_ROLES

    def __init__(self) -> None:
        super().__init__()
        self._lines = PlanStringItems(self)
        self._points = PlanMarkItems(self, self._still)
        self._strings: list[PlanString] = []
        self.marks = PlanMarks({}, {}, {}, None, None, None)

    def dress(self, palette: Palette, font: QFont, ratio: float) -> None:
        super().dress(palette, font, ratio)
        self._lines.dress(palette, ratio)
        self._points.dress(palette, ratio)

    def _side_parts(self, stand: Standing) -> list[Part]:
        return plan_side_parts(stand)

    def _follow_marks(self, solution: Solution, both: dict[SideName, Standing]) -> None:
        self.marks = plan_marks(solution, both)
        self._strings = plan_strings(solution, both, self.marks)
        shown = self.marks
        if shown.center is not None and not near(shown.center):
            shown = PlanMarks(shown.kingpins, shown.wanted, shown.checks, shown.rear, None,
                              shown.now)
        self._points.show(shown, rear_tires(solution, both, self.marks))

    def stretch(self, box: tuple[float, float, float, float]) -> None:
        self._lines.show(self._strings, box)
