"""A frame of the floor: following a solution and painting it, while a nail is dragged."""

from __future__ import annotations

from statistics import median
from time import perf_counter

import pytest

from app.document import Document
from app.floor.view import FloorView
from geometry.layout import LOWER_BALL, Job, Point
from tests.sample_cars import ROADSTER

pytestmark = pytest.mark.speed

FRAME_MS = 40.0
"""Ten to twelve on a quiet machine; the rest is room for a busy one."""


def test_following_and_painting_a_drag_keeps_up(qtbot):
    view = FloorView(Document(Job(ROADSTER)))
    view.document.setParent(view)
    qtbot.addWidget(view)
    view.resize(840, 520)
    view.show()
    view.document.settle()
    start = ROADSTER.left[LOWER_BALL]
    view.document.select("left", LOWER_BALL)
    times = []
    for step in range(40):
        to = Point(start.over + 0.5 * step, start.up + 0.25 * step, start.fore)
        view.document.preview_point("left", LOWER_BALL, to)
        # The solve has a test of its own.
        assert view.document.solution.left.pivots.places
        begin = perf_counter()
        view.refresh()
        view.viewport().repaint()
        times.append(1000.0 * (perf_counter() - begin))
    view.document.cancel_preview()
    view.document.settle()
    assert median(times) < FRAME_MS
