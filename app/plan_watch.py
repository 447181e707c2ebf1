"""The steering from lock to lock, worked out on a worker a moment after the car was changed."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import QObject, Signal

from app.background import Background
from app.document import Document
from geometry.layout import Layout
from geometry.plan_figures import PlanFigures, plan_figures


class PlanWatch(QObject):
    """Keeps a document's steering figures up to date, and its steering findings in its list.

    What only the steering card shows is worked out while something ``wants`` it.
    """

    changed = Signal()
    """Newer figures stand, or the ones that stand belong to an older car."""

    def __init__(self, document: Document) -> None:
        super().__init__(document)
        self._document = document
        self._asked: tuple[Layout, float, bool] | None = None
        self._wanted = False
        self.figures: PlanFigures | None = None
        self.background = Background(self, wait_ms=120)
        self.background.answered.connect(self._take)
        document.solved.connect(self.look)
        document.opened.connect(self.look)
        self.look()

    def want(self, wanted: bool) -> None:
        """Whether everything is wanted, or the findings alone."""
        self._wanted = wanted
        self.look()

    @property
    def current(self) -> PlanFigures | None:
        """The figures, if they are of the car as it stands and complete."""
        figures = self.figures
        if figures is None or figures.on_string is None:
            return None
        same = figures.layout == self._document.layout and figures.span == self._document.span
        return figures if same else None

    def look(self) -> None:
        """Ask again if the car or the span is another than last time."""
        layout, span, full = self._document.layout, self._document.span, self._wanted
        asked = self._asked
        if asked is not None and asked[1:] in ((span, full), (span, True)) and asked[0] == layout:
            return
        self._asked = (layout, span, full)

        def question(stopped: Callable[[], bool]) -> PlanFigures | None:
            return plan_figures(layout, span, stopped, full=full)

        self.background.ask(question)
        self.changed.emit()

    def _take(self, figures: PlanFigures | None) -> None:
        if figures is not None:
            self.figures = figures
            self._document.set_slow_findings("steering", figures.findings)
            self.changed.emit()
