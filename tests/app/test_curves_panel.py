"""The curves under the floor, clicked with a real mouse."""

from __future__ import annotations

import math

import numpy as np
import pytest
from PySide6.QtCore import QPointF, Qt
from PySide6.QtTest import QTest

from app.document import Document
from app.panels.curves import CurvesPanel, label_step, nice_range
from geometry.curves import BY_KEY
from geometry.layout import TIE_INNER
from tests.sample_cars import CARS, DEGENERATE, SAMPLES


@pytest.fixture
def document(qapp):
    return Document(SAMPLES["healthy-roadster"])


@pytest.fixture
def panel(qtbot, document):
    panel = CurvesPanel(document)
    qtbot.addWidget(panel)
    panel.resize(900, 200)
    panel.show()
    qtbot.waitExposed(panel)
    qtbot.wait(20)
    return panel


def pixel(plot, travel_in):
    """Where a travel lies on a plot's viewport."""
    scene = plot.plot.getViewBox().mapViewToScene(QPointF(travel_in, sum(plot._range) / 2))
    return plot.plot.mapFromScene(scene)


def test_a_click_moves_both_wheels_to_that_travel(panel, document):
    plot = panel.plots[0]
    QTest.mouseClick(
        plot.plot.viewport(), Qt.MouseButton.LeftButton, pos=pixel(plot, 1.5)
    )
    assert document.travel["left"] == document.travel["right"]
    assert document.travel["left"] == pytest.approx(1.5 * 25.4, abs=2.0)
    document.settle()
    cursor = plot._cursor.path().elementAt(0)
    assert cursor.x == pytest.approx(document.travel["left"] / 25.4)


def test_a_drag_past_the_end_stops_at_the_span(panel, document):
    plot = panel.plots[0]
    port = plot.plot.viewport()
    QTest.mousePress(port, Qt.MouseButton.LeftButton, pos=pixel(plot, 0.0))
    QTest.mouseMove(port, pixel(plot, 9.0))
    QTest.mouseRelease(port, Qt.MouseButton.LeftButton, pos=pixel(plot, 9.0))
    assert abs(document.travel["left"]) <= document.span


def test_a_double_click_shows_every_curve_large(panel):
    port = panel.plots[0].plot.viewport()
    QTest.mouseDClick(port, Qt.MouseButton.LeftButton, pos=port.rect().center())
    dialog = panel._large
    assert dialog.isVisible()
    assert [plot.curve.key for plot in panel._large.plots] == list(BY_KEY)
    dialog.close()


def test_the_curve_drawn_is_the_curve_solved(panel, document):
    plot = panel.plots[1]
    path = plot._planned.path()
    drawn = np.array([path.elementAt(i).y for i in range(path.elementCount())])
    camber = np.degrees(document.solution.left.sweep.camber)
    assert drawn == pytest.approx(camber[np.isfinite(camber)])


def test_a_small_change_keeps_the_range_and_a_large_one_takes_another(panel, document):
    plot = panel.plots[0]
    kept = plot._range
    old = document.layout.point("left", TIE_INNER)
    document.move_point("left", TIE_INNER, old._replace(up=old.up + 0.05))
    document.settle()
    assert plot._range == kept
    document.move_point("left", TIE_INNER, old._replace(up=old.up + 40.0))
    document.settle()
    assert plot._range != kept


def test_a_narrow_panel_shows_only_what_can_be_read(panel, qtbot):
    assert all(plot.isVisible() for plot in panel.plots)
    panel.resize(300, 200)
    qtbot.wait(20)
    shown = [plot for plot in panel.plots if plot.isVisible()]
    assert 1 <= len(shown) < len(panel.plots)
    assert all(plot.title.width() >= plot.title.minimumSizeHint().width() for plot in shown)


@pytest.mark.parametrize("name", sorted({**CARS, **DEGENERATE}))
def test_every_car_is_drawn_without_a_gap_becoming_a_number(panel, document, name):
    document.apply_layout(name, {**CARS, **DEGENERATE}[name])
    document.settle()
    for plot in panel.plots:
        assert all(map(math.isfinite, plot._range))
        path = plot._planned.path()
        assert all(math.isfinite(path.elementAt(i).y) for i in range(path.elementCount()))


@pytest.mark.parametrize(("low", "high"), [(0.0, 1.0), (-3.2, 5.9), (0.041, 0.049), (-900, 1e4)])
def test_ranges_are_round_and_hold_the_curve(low, high):
    bottom, top = nice_range(low, high)
    assert bottom <= low < high <= top
    assert top - bottom < 2.0 * (high - low)
    assert (top - bottom) / label_step(bottom, top, 6) <= 6.0 + 1e-9


def test_a_lone_curve_has_its_name_in_the_caption(panel, document, qtbot):

    def narrow() -> bool:
        # With each curve that goes a window of its own can become narrower.
        panel.resize(150, 200)
        return not panel.plots[0].title.isVisible()

    qtbot.waitUntil(narrow)
    document.set_rack(25.4)
    document.settle()
    assert panel.caption.accessibleName().startswith("Toe change, in · Steering 1 in to the left")
    panel.resize(900, 200)
    qtbot.waitUntil(panel.plots[0].title.isVisible)
    assert panel.caption.accessibleName().startswith("Steering 1 in")
