"""Curves and zones with the steering off center, by real keys and mouse in the window."""

from __future__ import annotations

import csv
import math
from pathlib import Path

import numpy as np
import pytest
import shapely
from PySide6.QtCore import QPoint, QPointF, Qt
from PySide6.QtGui import QImage
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QFileDialog, QPushButton

from app.panels.large_curves import LargeCurves
from app.panels.rack_zone import RackZoneDialog
from geometry.curves import CURVES
from geometry.layout import MM_PER_INCH
from geometry.zones import rack_zone_of
from tests.sample_cars import SAMPLES

KEY = Qt.Key
CTRL = Qt.KeyboardModifier.ControlModifier


def steer(window, text: str) -> None:
    """Type where the rack stands, as a person would."""
    field = window.stance_bar.rack.field
    field.setFocus()
    field.selectAll()
    QTest.keyClicks(field, text)
    QTest.keyClick(field, KEY.Key_Return)
    window.document.settle()


def large(window, qtbot) -> LargeCurves:
    window.activateWindow()
    QTest.keyClick(window, KEY.Key_G, CTRL)
    dialog = window.findChild(LargeCurves)
    qtbot.waitExposed(dialog)
    QApplication.processEvents()
    return dialog


def drawn(plot) -> np.ndarray:
    path = plot._planned.path()
    return np.array([path.elementAt(i).y for i in range(path.elementCount())])


def floor_zone(window, side) -> float:
    """The area that is tinted on the floor for a side, square mm."""
    rings = window.front.scene._zones[side]
    return float(sum(shapely.Polygon(ring).area for ring in rings))


def test_the_curves_tell_bump_steer_apart_from_the_steering(window):
    plot = window.curves.plots[0]
    assert plot.title.text() == "Toe, in"
    assert window.curves.caption.accessibleName().startswith("Steering straight")
    steer(window, "1")
    assert plot.title.text() == "Toe change, in"
    assert window.curves.caption.accessibleName().startswith("Steering 1 in to the left")
    sweep = window.document.solution.left.sweep
    radius = window.document.layout.left.tire.radius
    expected = 2.0 * radius * np.sin(sweep.toe - sweep.toe[40]) / MM_PER_INCH
    assert drawn(plot) == pytest.approx(expected)
    assert plot._range[1] - plot._range[0] < 1.0
    steer(window, "0")
    assert plot.title.text() == "Toe, in"


def test_the_zone_on_the_floor_is_that_of_the_steering_as_it_stands(window):
    document = window.document
    straight = floor_zone(window, "left")
    steer(window, "1")
    for side in ("left", "right"):
        zone = rack_zone_of(document.solution, side, rack=25.4).zone
        assert floor_zone(window, side) == pytest.approx(zone.area)
    assert floor_zone(window, "left") != pytest.approx(floor_zone(window, "right"), rel=1e-3)
    steer(window, "0")
    assert floor_zone(window, "left") == pytest.approx(straight)


def test_the_rack_zone_window_follows_the_rack_and_moves_it(window, qtbot):
    document = window.document
    steer(window, "1")
    window.activateWindow()
    QTest.keyClick(window, KEY.Key_R, CTRL)
    dialog = window.findChild(RackZoneDialog)
    qtbot.waitUntil(lambda: not dialog.background.busy, timeout=60_000)
    assert dialog.windowTitle() == "Rack zone, left wheel, steering 1 in to the left"
    assert dialog.zone.shift[1] == pytest.approx(25.4)
    document.select("right", "tie rod inner")
    assert dialog.windowTitle().startswith("Rack zone, right wheel")
    assert dialog.words.text() == "Working it out …"
    qtbot.waitUntil(lambda: not dialog.background.busy, timeout=60_000)
    slider = dialog.off_center.slider
    slider.setFocus()
    QTest.keyClick(slider, KEY.Key_Right)
    # A step of 1 mm from the quarter millimeter that is nearest to an inch.
    assert document.rack == pytest.approx(26.5)
    field = dialog.off_center.field
    field.setFocus()
    field.selectAll()
    QTest.keyClicks(field, "0")
    QTest.keyClick(field, KEY.Key_Return)
    document.settle()
    assert dialog.windowTitle() == "Rack zone, both wheels, steering straight"
    qtbot.waitUntil(lambda: not dialog.background.busy, timeout=60_000)
    assert dialog.zone.shift is None


def test_a_rolled_car_has_a_line_for_each_wheel(window):
    document = window.document
    document.set_roll(math.radians(2.0))
    document.settle()
    assert "rolled" in window.curves.caption.accessibleName()
    plot = window.curves.plots[1]
    assert plot._right_cursor.isVisible()
    for item, side in ((plot._cursor, "left"), (plot._right_cursor, "right")):
        assert item.path().elementAt(0).x * MM_PER_INCH == pytest.approx(document.travel[side])
    document.set_roll(0.0)
    document.settle()
    assert not plot._right_cursor.isVisible()


def test_dragging_the_line_in_a_large_curve_moves_the_car(window, qtbot):
    dialog = large(window, qtbot)
    document = window.document
    plot = dialog.plots[3]
    port = plot.plot.viewport()

    def pixel(inches: float) -> QPoint:
        middle = QPointF(inches, sum(plot._range) / 2)
        return plot.plot.mapFromScene(plot.plot.getViewBox().mapViewToScene(middle))

    QTest.mousePress(port, Qt.MouseButton.LeftButton, pos=pixel(0.0))
    QTest.mouseMove(port, pixel(1.0))
    QTest.mouseMove(port, pixel(2.0))
    QTest.mouseRelease(port, Qt.MouseButton.LeftButton, pos=pixel(2.0))
    document.settle()
    assert document.travel["left"] == pytest.approx(2.0 * MM_PER_INCH, abs=1.0)
    places = [p._cursor.path().elementAt(0).x * MM_PER_INCH for p in dialog.plots]
    assert places == pytest.approx([document.travel["left"]] * len(CURVES))


def test_one_curve_alone_and_all_again(window, qtbot):
    dialog = large(window, qtbot)
    port = dialog.plots[4].plot.viewport()
    QTest.mouseDClick(port, Qt.MouseButton.LeftButton, pos=port.rect().center())
    assert [p.isVisible() for p in dialog.plots] == [i == 4 for i in range(len(CURVES))]
    assert dialog.choice.currentText() == CURVES[4].label
    dialog.choice.setFocus()
    QTest.keyClick(dialog.choice, KEY.Key_Home)
    assert all(p.isVisible() for p in dialog.plots)


def test_curves_are_saved_as_picture_and_table(window, qtbot, tmp_path, monkeypatch):
    steer(window, "1/2")
    dialog = large(window, qtbot)
    buttons = {b.text(): b for b in dialog.findChildren(QPushButton)}
    for words, suffix in (("Save &picture, PNG…", "png"), ("Save &table, CSV…", "csv")):
        path = str(tmp_path / f"curves.{suffix}")
        monkeypatch.setattr(QFileDialog, "getSaveFileName", lambda *a, to=path: (to, ""))
        QTest.keyClick(buttons[words], KEY.Key_Space)
    image = QImage(str(tmp_path / "curves.png"))
    assert image.width() >= dialog.sheet.width() and image.height() >= dialog.sheet.height()
    rows = list(csv.DictReader(Path(tmp_path / "curves.csv").read_text().splitlines()))
    assert len(rows) == 81
    assert {row["rack (in)"] for row in rows} == {"0.5"}
    sweep = window.document.solution.right.sweep
    found = [float(row["kingpin inclination right (deg)"]) for row in rows]
    assert found == pytest.approx(np.degrees(sweep.kingpin_inclination))


def test_a_picture_that_can_not_be_written_is_said(window, qtbot, tmp_path, monkeypatch, answers):
    dialog = large(window, qtbot)
    path = str(tmp_path / "nowhere" / "curves.png")
    monkeypatch.setattr(QFileDialog, "getSaveFileName", lambda *a: (path, ""))
    answers.press("OK")
    dialog.save_picture()
    assert "folder does not exist" in answers.said[0]


def test_a_relay_rod_car_steers_too(make_window, qtbot):
    window = make_window(SAMPLES["steering-box-sedan"])
    steer(window, "2")
    assert "Toe change" in window.curves.plots[0].title.text()
    dialog = large(window, qtbot)
    assert all(math.isfinite(edge) for plot in dialog.plots for edge in plot._range)
