"""Targets typed in the window, met or missed, and where one nail may sit for all of them."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest
import shapely
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLineEdit

from app.panels.nail_zone import NailZoneDialog
from geometry.layout import (
    LOWER_BALL,
    MM_PER_INCH,
    TIE_INNER,
    UPPER_INNER,
    NoGo,
    Target,
)
from geometry.layout_file import job_from_text, job_to_text
from geometry.solution import solve
from geometry.tolerances import FIGURES
from tests.sample_cars import SAMPLES

KEY = Qt.Key
GAIN = math.radians(0.8) / MM_PER_INCH
WANTED = (Target("roll center height", 65.0, 110.0), Target("camber gain", GAIN, None))


def opened(window, qtbot) -> NailZoneDialog:
    window.activateWindow()
    QTest.keyClick(window, KEY.Key_T, Qt.KeyboardModifier.ControlModifier)
    dialog = window.findChild(NailZoneDialog)
    qtbot.waitUntil(dialog.isActiveWindow)
    settle(dialog, qtbot)
    return dialog


def settle(dialog: NailZoneDialog, qtbot) -> None:
    dialog._document.settle()
    qtbot.waitUntil(lambda: not dialog.background.busy, timeout=60_000)


def type_into(dialog: NailZoneDialog, row: int, column: int, text: str) -> None:
    table = dialog.targets.table
    table.setCurrentCell(row, column)
    table.setFocus()
    QTest.keyClick(table, KEY.Key_F2)
    editor = QApplication.focusWidget()
    assert isinstance(editor, QLineEdit)
    editor.selectAll()
    QTest.keyClick(editor, KEY.Key_Delete)
    QTest.keyClicks(editor, text)
    QTest.keyClick(editor, KEY.Key_Return)
    # The table takes what was typed a round of events later.
    QApplication.processEvents()


@pytest.fixture
def wanting(make_window):
    """The healthy car, with a roll center wanted that it does not have."""
    job = SAMPLES["healthy-roadster"]
    return make_window(job.with_planned(replace(job.planned, targets=WANTED)))


def test_a_target_is_added_typed_and_judged_one_step_each(window, qtbot):
    document = window.document
    before = document.layout
    dialog = opened(window, qtbot)
    QTest.mouseClick(dialog.targets.add, Qt.MouseButton.LeftButton)
    assert document.layout.targets == (Target("roll center height"),)
    type_into(dialog, 0, 1, "3")
    assert document.layout.targets == (Target("roll center height", 76.2),)
    type_into(dialog, 0, 2, "4 1/2")
    assert document.layout.targets == (Target("roll center height", 76.2, 114.3),)
    document.settle()
    table = dialog.targets.table
    assert table.item(0, 4).text() == "2 3/8 in"
    assert "missed" in table.item(0, 5).text()
    type_into(dialog, 0, 1, "2")
    document.settle()
    assert "met" in table.item(0, 5).text()
    assert job_from_text(job_to_text(document.job)).planned.targets == document.layout.targets
    QTest.mouseClick(dialog.targets.remove, Qt.MouseButton.LeftButton)
    assert document.layout.targets == ()
    for _ in range(5):
        document.undo()
    assert document.layout == before
    assert document.undo_text is None


def test_a_limit_that_can_not_be_is_refused_and_changes_nothing(wanting, qtbot):
    document = wanting.document
    dialog = opened(wanting, qtbot)
    for text, reason in (("nonsense", "read"), ("9", "more than")):
        type_into(dialog, 0, 1, text)
        assert document.layout.targets == WANTED
        assert reason in dialog.targets.reason.text()
        assert dialog.targets.table.item(0, 1).text() == text
    type_into(dialog, 0, 1, "")
    assert document.layout.targets[0] == Target("roll center height", None, 110.0)
    assert dialog.targets.reason.text() == ""


def test_verdicts_follow_the_car(wanting, qtbot):
    dialog = opened(wanting, qtbot)
    document, table = wanting.document, dialog.targets.table
    assert "missed" in table.item(0, 5).text()
    for up in (370.0, 380.0, 391.0):
        place = document.layout.left[UPPER_INNER]
        document.preview_point("left", UPPER_INNER, place._replace(up=up))
        document.settle()
        value = FIGURES["roll center height"].value(document.solution)
        assert ("met" in table.item(0, 5).text()) == (65.0 <= value <= 110.0)
    document.cancel_preview()


def test_the_nail_put_into_its_zone_meets_every_target(wanting, qtbot):
    document = wanting.document
    before = document.layout
    dialog = opened(wanting, qtbot)
    assert dialog.nail.currentData() == ("left", UPPER_INNER)
    assert "missed: roll center height" in dialog.words.text()
    assert "outside" in dialog.words.text()
    assert not wanting.front.scene.marks.nail_zone.path().isEmpty()
    QTest.mouseClick(dialog.put, Qt.MouseButton.LeftButton)
    settle(dialog, qtbot)
    solution = solve(document.layout)
    for target in WANTED:
        value = FIGURES[target.figure].value(solution)
        assert target.low <= value <= (target.high or math.inf)
    assert "has room as it stands" in dialog.words.text()
    assert not dialog.put.isEnabled()
    document.undo()
    assert document.layout == before


def test_the_chosen_nail_is_the_one_looked_at(wanting, qtbot):
    dialog = opened(wanting, qtbot)
    wanting.document.select("left", LOWER_BALL)
    settle(dialog, qtbot)
    assert dialog.nail.currentData() == ("left", LOWER_BALL)
    assert dialog.zone.name == LOWER_BALL
    # A zone of a nail on the knuckle is that of ride height, and goes while the wheel is moved.
    item = wanting.front.scene.marks.nail_zone
    assert not item.path().isEmpty()
    wanting.document.set_travel(20.0, 20.0)
    wanting.document.settle()
    assert item.path().isEmpty()


def test_no_go_shapes_cut_the_zone(wanting, qtbot):
    dialog = opened(wanting, qtbot)
    whole = dialog.area
    low_over, _, high_over, high_up = whole.bounds
    block = shapely.box(low_over - 5.0, 0.0, 0.5 * (low_over + high_over), high_up + 50.0)
    corners = tuple((float(x), float(y)) for x, y in list(block.exterior.coords)[:-1])
    layout = wanting.document.layout
    shape = NoGo("Block", corners, clearance=0.0)
    wanting.document.apply_layout("add shape", replace(layout, no_go=(shape,)))
    settle(dialog, qtbot)
    assert 0.0 < dialog.area.area < whole.area
    assert "No-go shapes take a part" in dialog.words.text()
    assert dialog.area.intersection(block).area == pytest.approx(0.0, abs=1e-6)


def test_what_can_not_be_had_is_said(wanting, qtbot):
    dialog = opened(wanting, qtbot)
    layout = wanting.document.layout
    for targets, words in (
        ((), "No target is set"),
        ((Target("half track", 5000.0, None),), "does not change it"),
        ((Target("roll center height", 19_000.0, None),), "No place"),
    ):
        wanting.document.apply_layout("other targets", replace(layout, targets=targets))
        settle(dialog, qtbot)
        assert words in dialog.words.text()
        assert not dialog.put.isEnabled()
        assert wanting.front.scene.marks.nail_zone.path().isEmpty()


def test_a_locked_nail_stays(wanting, qtbot):
    dialog = opened(wanting, qtbot)
    wanting.document.set_locked(UPPER_INNER, True)
    settle(dialog, qtbot)
    assert "locked" in dialog.words.text()
    assert not dialog.put.isEnabled()


def test_closing_takes_the_hatching_away(wanting, qtbot):
    dialog = opened(wanting, qtbot)
    QTest.keyClick(dialog, KEY.Key_Escape)
    assert wanting.front.scene.marks.nail_zone.path().isEmpty()


def test_another_car_brings_its_own_nails_and_targets(wanting, qtbot):
    dialog = opened(wanting, qtbot)
    wanting.document.open_job(SAMPLES["strut-hatch"], None)
    settle(dialog, qtbot)
    names = [dialog.nail.itemData(i)[1] for i in range(dialog.nail.count())]
    assert UPPER_INNER not in names
    assert TIE_INNER in names
    assert dialog.targets.table.rowCount() == 0
    wanting.document.open_job(SAMPLES["unequal-sides"], None)
    settle(dialog, qtbot)
    sides = {dialog.nail.itemData(i)[0] for i in range(dialog.nail.count())}
    assert sides == {"left", "right"}
