"""The fix list in the window: searching, showing a move, making it, and taking it back."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from PySide6.QtCore import QPoint, Qt
from PySide6.QtTest import QTest

from app.panels.allowances import remembered
from app.panels.fix_list import FixListDialog
from geometry.layout import MM_PER_INCH, TIE_INNER, TIE_OUTER
from geometry.solution import solve
from geometry.tolerances import tolerance
from tests.app.hands import pull, release
from tests.sample_cars import DEGENERATE, SAMPLES

KEY = Qt.Key


def opened(window, qtbot, done: bool = True) -> FixListDialog:
    """The dialog as the menu's key opens it, by default with the search ended."""
    window.activateWindow()
    QTest.keyClick(window, KEY.Key_F, Qt.KeyboardModifier.ControlModifier)
    dialog = window.findChild(FixListDialog)
    if done:
        qtbot.waitUntil(lambda: not dialog.background.busy, timeout=60_000)
    return dialog


def click_row(dialog: FixListDialog, row: int) -> None:
    table = dialog.table
    table.scrollToItem(table.item(row, 0))
    place = table.visualItemRect(table.item(row, 0)).center()
    QTest.mouseClick(table.viewport(), Qt.MouseButton.LeftButton, pos=QPoint(place))


def toe_change(layout, span: float) -> float:
    """Toe change over the travel at the tire, mm, by a solve of its own."""
    state = solve(layout, span=span).left
    return float(2.0 * state.side.tire.radius * np.sin(np.ptp(state.sweep.toe)))


@pytest.fixture
def low_rack(make_window):
    return make_window(SAMPLES["rack-set-low"])


def test_every_move_shown_is_on_the_floor_and_keeps_its_promise(low_rack, qtbot):
    document = low_rack.document
    before = document.layout
    dialog = opened(low_rack, qtbot)
    assert dialog.table.rowCount() > 8
    words = set()
    for row in range(4):
        click_row(dialog, row)
        fix = dialog.table.chosen
        assert document.previewing
        assert document.layout == fix.layout != before
        document.settle()
        left = toe_change(document.layout, document.span)
        assert left == pytest.approx(fix.remains, abs=1e-6)
        assert (left <= tolerance(before, "toe range")) == fix.cures
        assert dialog.table.item(row, 1).text() == f"{left / MM_PER_INCH:.3f} in"
        assert ("within" in dialog.table.item(row, 2).text()) == fix.cures
        words.add(dialog.words.text())
    assert len(words) == 4
    assert document.settled_layout() == before
    assert document.undo_text is None


def test_making_a_move_is_one_undo_step_and_leaves_nothing_to_fix(low_rack, qtbot):
    document = low_rack.document
    before = document.layout
    dialog = opened(low_rack, qtbot)
    click_row(dialog, 0)
    fix = dialog.table.chosen
    QTest.mouseClick(dialog.make, Qt.MouseButton.LeftButton)
    assert document.layout == document.settled_layout() == fix.layout
    assert document.undo_text == "raise the rack 1/2 in"
    qtbot.waitUntil(lambda: not dialog.background.busy, timeout=60_000)
    assert "nothing to fix" in dialog.state.text()
    assert dialog.table.rowCount() == 0
    document.undo()
    assert document.layout == before
    assert document.undo_text is None


def test_escape_puts_the_car_back(low_rack, qtbot):
    document = low_rack.document
    before = document.layout
    dialog = opened(low_rack, qtbot)
    click_row(dialog, 1)
    assert document.layout != before
    QTest.keyClick(dialog, KEY.Key_Escape)
    assert not dialog.isVisible()
    assert document.layout == before
    assert not document.previewing


def test_arrow_keys_go_from_move_to_move(low_rack, qtbot):
    dialog = opened(low_rack, qtbot)
    dialog.table.setFocus()
    seen = []
    for _ in range(3):
        QTest.keyClick(dialog.table, KEY.Key_Down)
        seen.append(low_rack.document.layout)
    assert len(set(map(id, seen))) == 3
    assert dialog.table.chosen is dialog.table.fixes[dialog.table.currentRow()]


def test_a_drag_takes_over_from_a_shown_move_and_makes_the_list_old(low_rack, qtbot):
    document = low_rack.document
    dialog = opened(low_rack, qtbot)
    click_row(dialog, 0)
    document.settle()
    view = low_rack.floor
    start = view.scene.places["left", TIE_INNER]
    end = pull(view, start, (start[0] - 12.0, start[1] - 9.0))
    assert dialog.table.chosen is None
    assert not dialog.make.isEnabled()
    release(view, end)
    document.settle()
    assert dialog.table.rowCount() == 0
    assert "changed" in dialog.state.text()
    QTest.mouseClick(dialog.again, Qt.MouseButton.LeftButton)
    qtbot.waitUntil(lambda: not dialog.background.busy, timeout=60_000)
    assert dialog.table.rowCount() > 0


def test_what_may_not_move_is_in_no_fix_and_is_remembered(low_rack, qtbot):
    dialog = opened(low_rack, qtbot)
    box = dialog.allowed.boxes["rack_height"]
    QTest.mouseClick(box, Qt.MouseButton.LeftButton, pos=QPoint(8, box.height() // 2))
    field = dialog.allowed.fields["outer_spacer"].field
    field.selectAll()
    QTest.keyClicks(field, "1/4")
    QTest.mouseClick(dialog.again, Qt.MouseButton.LeftButton)
    qtbot.waitUntil(lambda: not dialog.background.busy, timeout=60_000)
    moves = [move for fix in dialog.table.fixes for move in fix.moves]
    assert moves
    assert all(move.kind != "rack_height" for move in moves)
    spacers = [abs(move.amount) for move in moves if move.kind == "outer_spacer"]
    assert all(size <= 0.25 * MM_PER_INCH + 1e-9 for size in spacers)
    far, without = remembered()
    assert without == {"rack_height"}
    assert far.outer_spacer == pytest.approx(0.25 * MM_PER_INCH)


def test_a_size_that_can_not_be_read_is_refused_in_place(low_rack, qtbot):
    dialog = opened(low_rack, qtbot)
    field = dialog.allowed.fields["arm_end"]
    field.field.selectAll()
    QTest.keyClicks(field.field, "half")
    assert field.reason.text()
    QTest.mouseClick(dialog.again, Qt.MouseButton.LeftButton)
    assert "can't be read" in dialog.state.text()
    assert not dialog.background.busy


def test_a_long_search_can_be_stopped(low_rack, qtbot):
    dialog = opened(low_rack, qtbot, done=False)
    QTest.mouseClick(dialog.stop, Qt.MouseButton.LeftButton)
    assert not dialog.background.busy
    assert "Stopped" in dialog.state.text()
    assert dialog.again.isEnabled()
    rows = dialog.table.rowCount()
    qtbot.wait(300)
    assert dialog.table.rowCount() == rows


def test_locked_nails_and_missing_parts_shut_their_rows(make_window, qtbot):
    strut = SAMPLES["strut-hatch"]
    inner = strut.planned.left[TIE_INNER]
    low = strut.planned.with_point("left", TIE_INNER, inner._replace(up=inner.up - 12.0))
    low = replace(low, locked=frozenset({TIE_OUTER}))
    window = make_window(strut.with_planned(low))
    dialog = opened(window, qtbot)
    boxes = dialog.allowed.boxes
    shut = {kind for kind, box in boxes.items() if not box.isEnabled()}
    assert shut == {"outer_spacer", "arm_end", "knuckle_height", "upper_mount_height",
                    "upper_mount_width", "ball_joint"}
    assert "locked" in boxes["outer_spacer"].toolTip()
    assert "strut" in boxes["ball_joint"].toolTip()
    assert dialog.table.rowCount() > 0
    for fix in dialog.table.fixes:
        assert fix.layout.left[TIE_OUTER] == low.left[TIE_OUTER]


def test_each_side_of_a_car_measured_apart_is_cured_by_itself(make_window, qtbot):
    job = SAMPLES["unequal-sides"]
    right = job.planned.right[TIE_INNER]
    low = job.planned.with_point("right", TIE_INNER, right._replace(up=right.up - 10.0))
    window = make_window(job.with_planned(low))
    dialog = opened(window, qtbot)
    assert "nothing to fix" in dialog.state.text()
    assert dialog.side_box.isVisible()
    dialog.side_box.setFocus()
    QTest.keyClick(dialog.side_box, KEY.Key_Down)
    qtbot.waitUntil(lambda: not dialog.background.busy, timeout=60_000)
    click_row(dialog, 0)
    assert "The other wheel then keeps" in dialog.words.text()
    state = solve(window.document.layout, span=window.document.span).right
    kept = 2.0 * state.side.tire.radius * np.sin(np.ptp(state.sweep.toe))
    assert kept == pytest.approx(dialog.table.chosen.remains, abs=1e-6)


@pytest.mark.parametrize("name", sorted(DEGENERATE))
def test_cars_that_can_not_work_are_answered_in_words(make_window, qtbot, name):
    window = make_window()
    window.document.apply_layout("another car", DEGENERATE[name])
    dialog = opened(window, qtbot)
    assert dialog.state.text()
    assert "nan" not in dialog.state.text().lower()
    for row in range(dialog.table.rowCount()):
        assert "nan" not in " ".join(
            dialog.table.item(row, column).text() for column in range(dialog.table.columnCount())
        ).lower()


def test_another_car_on_the_floor_empties_the_list(low_rack, qtbot):
    dialog = opened(low_rack, qtbot)
    click_row(dialog, 0)
    other = SAMPLES["knuckle-swap"]
    low_rack.document.open_job(other, None)
    assert dialog.table.rowCount() == 0
    assert low_rack.document.job == other
    QTest.keyClick(dialog, KEY.Key_Escape)
    assert low_rack.document.job == other


def test_units_follow_the_car(low_rack, qtbot):
    dialog = opened(low_rack, qtbot)
    assert " in" in dialog.table.item(0, 1).text()
    assert dialog.table.item(0, 0).text() == "Raise the rack 1/2 in."
    dialog.close()
    low_rack.document.set_units("mm")
    dialog = FixListDialog(low_rack.document, low_rack)
    qtbot.waitUntil(lambda: not dialog.background.busy, timeout=60_000)
    assert dialog.table.item(0, 1).text().endswith("mm")
    assert "mm" in dialog.table.item(0, 0).text()
    dialog.reject()
