"""The car in a turn: leaned on a level road as found and as planned, still or moving."""

from __future__ import annotations

import math

from PySide6.QtCore import QElapsedTimer, Qt, QTimer
from PySide6.QtGui import QColor, QPainter, QPaintEvent
from PySide6.QtWidgets import (
    QCheckBox,
    QDialog,
    QHBoxLayout,
    QLabel,
    QPushButton,
    QSizePolicy,
    QSlider,
    QVBoxLayout,
    QWidget,
)

from app.document import Document
from app.sheets.painter import paint_drawing, to_device
from geometry.bounds import Bounds
from geometry.drawing import Drawing
from geometry.layout import Job, Layout
from geometry.sheets.look import BODY
from geometry.sheets.turn_picture import leaning_car, turn_frame
from geometry.turn_words import CornerPicture, cornering, turn_words

MOST_G = 1.5
"""More than any road tire holds (common practice, no source)."""
_FIRST_G = 0.6
_PERIOD_S = 4.0
_FRAME_MS = 40
_PER_MM = 3.8
"""Pixels of the screen for a mm of the drawing at the usual text size."""


class TurnView(QWidget):
    """One car's picture, as large as fits."""

    def __init__(self) -> None:
        super().__init__()
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Expanding)
        self.setMinimumSize(300, 170)
        self._car: tuple[Layout, CornerPicture, Bounds] | None = None

    def show_car(self, layout: Layout, picture: CornerPicture, frame: Bounds) -> None:
        """``frame`` mm: what has to be in sight, the same for all cars and all leans."""
        self._car = layout, picture, frame
        self.update()

    def drawing(self) -> Drawing | None:
        """What is painted, in mm of paper."""
        if self._car is None:
            return None
        layout, picture, frame = self._car
        return leaning_car(layout, picture, frame, self._scale(frame), marks=True)

    def _scale(self, frame: Bounds) -> float:
        per_mm = self._per_mm()
        below = 3.0 * BODY
        return max(
            frame.width / max(self.width() / per_mm - 4.0, 1.0),
            frame.height / max(self.height() / per_mm - 4.0 - below, 1.0),
        )

    def _per_mm(self) -> float:
        # Letters as high as the window's own.
        return max(_PER_MM, 0.62 * self.fontMetrics().ascent() / BODY)

    def paintEvent(self, _event: QPaintEvent) -> None:
        painter = QPainter(self)
        painter.fillRect(self.rect(), QColor("#FFFFFF"))
        drawing = self.drawing()
        if drawing is None or drawing.frame is None:
            return
        per_mm, frame = self._per_mm(), drawing.frame
        wide = 0.5 * (self.width() / per_mm - frame.width)
        high = self.height() / per_mm - frame.height - 3.0 * BODY
        area = Bounds(
            frame.left - wide, frame.bottom, frame.right + wide, frame.top + 0.5 * high
        )
        paint_drawing(painter, drawing, to_device(area, per_mm))


class TurnDialog(QDialog):
    """Both cars in the same steady turn to the left, beside the live window."""

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setWindowTitle("In a turn")
        self._document = document
        self._clock = QElapsedTimer()
        self._timer = QTimer(self)
        self._timer.setInterval(_FRAME_MS)
        self._timer.timeout.connect(self._step)
        self._leaned = False
        self._frame: tuple[tuple[Job, float], Bounds] | None = None
        self._build()
        document.edited.connect(self._changed)
        document.opened.connect(self._changed)
        document.solved.connect(self._follow)
        self._shown: tuple[object, ...] | None = None
        self._changed()

    def _build(self) -> None:
        column = QVBoxLayout(self)
        row = QHBoxLayout()
        label = QLabel("&Lateral g")
        self.slider = QSlider(Qt.Orientation.Horizontal)
        self.slider.setRange(0, round(100 * MOST_G))
        self.slider.setPageStep(10)
        self.slider.setValue(round(100 * _FIRST_G))
        self.slider.setAccessibleName("Lateral g of the turn")
        label.setBuddy(self.slider)
        self.figure = QLabel()
        self.figure.setMinimumWidth(self.fontMetrics().horizontalAdvance("0.00 g  "))
        self.slider.valueChanged.connect(self.refresh)
        self.play = QPushButton("&Into the turn and out")
        self.play.setCheckable(True)
        self.play.setAutoDefault(False)
        self.play.toggled.connect(self._played)
        self.on_floor = QCheckBox("Lean the car on the &floor, too")
        self.on_floor.toggled.connect(self._lean_floor)
        for widget, stretch in (
            (label, 0), (self.slider, 1), (self.figure, 0), (self.play, 0), (self.on_floor, 0)
        ):
            row.addWidget(widget, stretch)
        column.addLayout(row)
        pictures = QHBoxLayout()
        self.views: list[TurnView] = []
        self.heads: list[QLabel] = []
        self.words: list[QLabel] = []
        self.columns: list[QWidget] = []
        for name in ("As found", "As planned"):
            holder = QWidget()
            inner = QVBoxLayout(holder)
            inner.setContentsMargins(0, 0, 0, 0)
            head, view, words = QLabel(name), TurnView(), QLabel()
            head.setObjectName("heading")
            view.setAccessibleName(f"The car {name.lower()}, leaned on a level road")
            words.setWordWrap(True)
            words.setAlignment(Qt.AlignmentFlag.AlignTop)
            words.setAccessibleName(f"The car {name.lower()} in a turn")
            words.setMinimumHeight(9 * self.fontMetrics().lineSpacing())
            inner.addWidget(head)
            inner.addWidget(view, 1)
            inner.addWidget(words)
            pictures.addWidget(holder, 1)
            self.columns.append(holder)
            self.heads.append(head)
            self.views.append(view)
            self.words.append(words)
        column.addLayout(pictures, 1)
        column.addLayout(self._last_row())
        letters = self.fontMetrics()
        self.resize(165 * letters.averageCharWidth(), 36 * letters.height())

    def _last_row(self) -> QHBoxLayout:
        row = QHBoxLayout()
        note = QLabel(
            "A steady turn to the left on a level road, from the weights and springs given. "
            "The thin line is plumb."
        )
        note.setObjectName("quiet")
        note.setWordWrap(True)
        self.weights = QPushButton("&Weights and springs…")
        self.weights.clicked.connect(self._ask_weights)
        close = QPushButton("&Close")
        close.clicked.connect(self.reject)
        row.addWidget(note, 1)
        for button in (self.weights, close):
            button.setAutoDefault(False)
            row.addWidget(button)
        return row

    # --- what is shown ------------------------------------------------------------------

    @property
    def lateral_g(self) -> float:
        """The g chosen, or where the motion has got to."""
        if not self._timer.isActive():
            return self.slider.value() / 100.0
        phase = 2.0 * math.pi * self._clock.elapsed() / 1000.0 / _PERIOD_S
        return self.slider.value() / 100.0 * 0.5 * (1.0 - math.cos(phase))

    def _cars(self) -> list[Layout | None]:
        job = self._document.job
        return [job.found, job.planned]

    def _changed(self) -> None:
        self._shown = None
        self.refresh()

    def _follow(self) -> None:
        if self._shown is None or self._shown[0] is not self._document.job:
            self.refresh()

    def refresh(self) -> None:
        """Draw both cars at the g that stands."""
        cars = self._cars()
        lateral = self.lateral_g
        self._shown = (self._document.job, lateral)
        self.figure.setText(f"{lateral:.2f} g")
        self.columns[0].setVisible(cars[0] is not None)
        frame = self._frame_of([car for car in cars if car is not None])
        for car, view, words in zip(cars, self.views, self.words, strict=True):
            if car is not None:
                self._show(car, view, words, lateral, frame)
        self._lean_floor(self.on_floor.isChecked())

    def _frame_of(self, cars: list[Layout]) -> Bounds:
        """Room for all cars at the steepest lean; the same while they move."""
        steepest = self.slider.value() / 100.0
        asked = (self._document.job, steepest)
        if self._frame is None or self._frame[0] != asked:
            leans = [
                abs(picture.turn.roll_angle)
                for car in cars
                if not isinstance(picture := cornering(car, steepest), str)
            ]
            self._frame = asked, turn_frame(cars, max(leans, default=0.0))
        return self._frame[1]

    def _show(
        self, car: Layout, view: TurnView, words: QLabel, lateral: float, frame: Bounds
    ) -> None:
        picture = cornering(car, lateral)
        reached = not isinstance(picture, str) and bool(picture.pose.assembles[0])
        view.setVisible(reached)
        if not isinstance(picture, str) and reached:
            view.show_car(car, picture, frame)
        if self._timer.isActive() and reached:
            # The words are those of the whole turn, and can't be read while they change.
            return
        said = turn_words(car, lateral)
        if not isinstance(picture, str) and not reached:
            said = ("At that lean the front parts can't reach.", *said)
        words.setText("\n".join(said))

    # --- moving -------------------------------------------------------------------------

    def _played(self, on: bool) -> None:
        if on:
            self._clock.start()
            self._timer.start()
        else:
            self._timer.stop()
            self.refresh()

    def _step(self) -> None:
        self.refresh()

    def _lean_floor(self, on: bool) -> None:
        """The same lean on the floor in the window; level again when that is taken back."""
        picture = cornering(self._document.layout, self.lateral_g) if on else ""
        if isinstance(picture, str):
            if self._leaned:
                self._document.set_roll(0.0)
            self._leaned = False
            return
        self._leaned = True
        self._document.set_roll(picture.turn.roll_angle)

    def _ask_weights(self) -> None:
        from app.panels.loads_dialog import LoadsDialog

        self.play.setChecked(False)
        dialog = LoadsDialog(self._document, self)
        dialog.exec()
        dialog.deleteLater()

    def done(self, result: int) -> None:
        self._timer.stop()
        self._lean_floor(False)
        super().done(result)
