"""AboveView: the car from above, with the same habits of the hand as the front floor.

The car's left stays at the viewer's right, so that a nail keeps its column from floor to
floor; forward points down the screen, to a viewer who stands ahead of the car and looks down.
Dragging moves a nail over and fore, and keeps its height.
"""

from __future__ import annotations

from PySide6.QtCore import QRectF
from PySide6.QtWidgets import QWidget

from app.document import Document
from app.floor.above_scene import AboveScene
from app.floor.above_tags import above_tags
from app.floor.scene import CarScene
from app.floor.tags import TagSpec
from app.floor.view import FloorView
from geometry.drawing import Drawing
from geometry.faces import ABOVE
from geometry.labels import Box
from geometry.pages import Pages
from geometry.plan_drawing import plan_drawing, plan_floor_pages

_AROUND = 90.0


class AboveView(FloorView):
    """The floor from above with its two tapes, over and fore."""

    face = ABOVE

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        self._whole = False
        super().__init__(document, parent)
        self.canvas.low_share = 0.5
        self.fit()

    def _new_scene(self) -> CarScene:
        return AboveScene()

    def _tags(self, area: Box) -> tuple[list[TagSpec], list[Box]]:
        return above_tags(self, area)

    @property
    def shows_whole(self) -> bool:
        """True if "fit" shows the rear axle too, and not the front end alone."""
        return self._whole

    def fit(self) -> None:
        """Show the whole front end."""
        self._whole = False
        super().fit()

    def fit_all(self) -> None:
        """Show the car back to its rear axle, where the wheelbase is known."""
        self._whole = True
        super().fit()

    def _fit_content(self) -> None:
        outs, ahead, behind = [300.0], [300.0], [300.0]
        for stand in self.scene.stands.values():
            side = stand.state.side
            tire, wheel = side.tire, side["wheel center"]
            points = side.points.values()
            outs += [wheel.over + 0.6 * tire.width, *(abs(p.over) for p in points)]
            ahead += [wheel.fore + tire.radius, *(p.fore for p in points)]
            behind += [tire.radius - wheel.fore, *(-p.fore for p in points)]
        out = min(max(outs), 5000.0) + _AROUND
        low = -(min(max(ahead), 5000.0) + _AROUND)
        high = min(max(behind), 5000.0) + _AROUND
        wheelbase = self.document.layout.wheelbase
        if self._whole and wheelbase is not None and wheelbase > 0.0:
            high = max(high, min(wheelbase, 20_000.0) + 420.0)
        self.canvas.set_content(QRectF(-out, low, 2 * out, high - low))

    def drawing(self) -> Drawing:
        """The floor as it stands as a neutral drawing, for pictures."""
        document = self.document
        return plan_drawing(document.shown_solution, document.outline_solution, whole=self._whole)

    def pages(self) -> Pages:
        """The floor as it stands, on paper."""
        document = self.document
        return plan_floor_pages(
            document.shown_solution, document.outline_solution, whole=self._whole
        )
