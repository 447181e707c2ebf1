"""The measure sheet, typed with real keys."""

from __future__ import annotations

import pytest
from PySide6.QtCore import QPoint, Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLineEdit, QVBoxLayout, QWidget

from app.document import Document
from app.panels.measure_sheet import MeasureSheetPanel
from geometry.layout import Point
from geometry.layout_file import job_to_text
from geometry.lengths import parse_length
from tests.sample_cars import SAMPLES

KEY = Qt.Key


@pytest.fixture
def document(qapp) -> Document:
    return Document(SAMPLES["healthy-roadster"])


@pytest.fixture
def panel(qtbot, document) -> MeasureSheetPanel:
    panel = MeasureSheetPanel(document)
    qtbot.addWidget(panel)
    panel.resize(420, 500)
    panel.show()
    qtbot.waitExposed(panel)
    panel.activateWindow()
    return panel


def inch(number: float) -> float:
    return parse_length(f"{number} in", "mm")


def choose(panel: MeasureSheetPanel, name: str, column: int) -> None:
    """Click on a cell."""
    rows = [row if isinstance(row, str) else row.label for row in panel.model.rows]
    index = panel.model.index(rows.index(name), column)
    panel.table.scrollTo(index)
    place = panel.table.visualRect(index).center()
    QTest.mouseClick(panel.table.viewport(), Qt.MouseButton.LeftButton, pos=place)
    assert panel.table.currentIndex() == index


def editor_of(panel: MeasureSheetPanel) -> QLineEdit | None:
    return next((e for e in panel.table.findChildren(QLineEdit) if e.isVisible()), None)


def leave(editor: QLineEdit | None, end: Qt.Key = KEY.Key_Return) -> None:
    QTest.keyClick(editor, end)
    # What was typed is taken once the key has been dealt with.
    QApplication.processEvents()


def type_text(panel: MeasureSheetPanel, text: str, end: Qt.Key = KEY.Key_Return) -> None:
    """Type over the current cell and leave it with a key."""
    editor = editor_of(panel)
    if editor is None:
        QTest.keyClicks(panel.table, text[0])
        editor = editor_of(panel)
        text = text[1:]
    assert editor is not None
    QTest.keyClicks(editor, text)
    leave(editor, end)


def current(panel: MeasureSheetPanel) -> tuple[str, int]:
    index = panel.table.currentIndex()
    row = panel.model.rows[index.row()]
    return (row if isinstance(row, str) else row.label), index.column()


def shown(panel: MeasureSheetPanel) -> str:
    return str(panel.model.data(panel.table.currentIndex()))


@pytest.mark.parametrize(
    ("text", "mm"),
    [("9 1/16", 230.1875), ("9-1/16", 230.1875), ("9.0625", 230.1875), ("230 mm", 230.0),
     ('9" ', 228.6), ("1' 2 1/2", 368.3)],
)
def test_every_way_of_writing_a_length_is_read(panel, document, text, mm):
    choose(panel, "lower inner pivot", 1)
    type_text(panel, text)
    assert document.layout.point("left", "lower inner pivot").over == pytest.approx(mm, abs=1e-9)
    assert document.undo_text == "move lower inner pivot"


def test_typing_moves_only_the_one_measure(panel, document):
    before = document.layout.point("left", "tie rod outer")
    choose(panel, "tie rod outer", 2)
    type_text(panel, "10 1/4")
    assert document.layout.point("left", "tie rod outer") == before._replace(up=inch(10.25))


def test_enter_goes_down_and_tab_goes_on_through_the_rows(panel):
    choose(panel, "lower inner pivot", 1)
    type_text(panel, "9", KEY.Key_Return)
    assert current(panel) == ("lower ball joint", 1)
    type_text(panel, "24", KEY.Key_Tab)
    assert current(panel) == ("lower ball joint", 2)
    type_text(panel, "7", KEY.Key_Tab)
    type_text(panel, "0", KEY.Key_Tab)
    assert current(panel) == ("upper inner pivot", 1)


def test_tab_passes_over_cells_that_take_nothing(panel):
    choose(panel, "tire radius", 1)
    QTest.keyClick(panel.table, KEY.Key_Tab)
    assert current(panel) == ("tire width", 1)
    QTest.keyClick(panel.table, KEY.Key_Backtab)
    assert current(panel) == ("tire radius", 1)


def test_tab_past_the_last_cell_leaves_the_table(qtbot, document):
    holder = QWidget()
    column = QVBoxLayout(holder)
    panel, after = MeasureSheetPanel(document), QLineEdit()
    column.addWidget(panel)
    column.addWidget(after)
    qtbot.addWidget(holder)
    holder.resize(420, 600)
    holder.show()
    holder.activateWindow()
    qtbot.waitUntil(holder.isActiveWindow)
    choose(panel, "center of gravity height", 1)
    assert panel.table.hasFocus()
    QTest.keyClick(panel.table, KEY.Key_Tab)
    assert after.hasFocus()


def test_what_can_not_be_read_is_refused_in_place_and_mended(panel, document):
    before = job_to_text(document.job)
    choose(panel, "lower inner pivot", 1)
    type_text(panel, "nine")
    assert current(panel) == ("lower inner pivot", 1)
    assert shown(panel) == "nine"
    assert panel.refusal.isVisible() and "nine" in panel.refusal.text()
    assert job_to_text(document.job) == before
    assert document.undo_text is None
    type_text(panel, "9 1/2")
    assert not panel.refusal.isVisible()
    assert document.layout.point("left", "lower inner pivot").over == inch(9.5)
    document.undo()
    assert job_to_text(document.job) == before


def test_a_refused_cell_says_why_again_when_come_back_to(panel):
    choose(panel, "lower inner pivot", 1)
    type_text(panel, "nine")
    choose(panel, "tie rod inner", 1)
    assert not panel.refusal.isVisible()
    choose(panel, "lower inner pivot", 1)
    assert panel.refusal.isVisible()


def test_escape_takes_a_refused_cell_back(panel):
    choose(panel, "lower inner pivot", 1)
    was = shown(panel)
    type_text(panel, "nine")
    QTest.keyClick(panel.table, KEY.Key_Escape)
    assert shown(panel) == was
    assert not panel.refusal.isVisible()


def test_a_refused_cell_gives_way_when_its_nail_is_moved_otherwise(panel, document):
    choose(panel, "lower inner pivot", 1)
    type_text(panel, "nine")
    document.move_point("left", "lower inner pivot", Point(inch(10), 200.0, 0.0))
    document.settle()
    assert shown(panel) == "10"
    assert not panel.refusal.isVisible()


@pytest.mark.parametrize(
    ("row", "text", "why"),
    [("tire radius", "0", "more than nothing"), ("tire width", "-8", "more than nothing"),
     ("static camber", "80", "45°"), ("wheelbase", "5000 in", "No car"),
     ("static toe", "x", "x")],
)
def test_single_values_refuse_what_no_car_has(panel, document, row, text, why):
    before = document.job
    choose(panel, row, 1)
    type_text(panel, text)
    assert why in panel.refusal.text()
    assert document.job is before


def test_optional_values_may_be_blank(panel, document):
    choose(panel, "wheelbase", 1)
    QTest.keyClick(panel.table, KEY.Key_F2)
    editor = editor_of(panel)
    editor.clear()
    leave(editor)
    assert document.layout.wheelbase is None


def test_opening_and_closing_a_cell_changes_nothing(panel, document):
    document.move_point("left", "lower inner pivot", Point(234.56789, 165.4321, 1.23456789))
    before = document.job
    for column in (1, 2, 3):
        choose(panel, "lower inner pivot", column)
        QTest.keyClick(panel.table, KEY.Key_F2)
        leave(editor_of(panel))
    assert document.job is before


def test_a_locked_nail_is_refused_and_the_box_locks(panel, document):
    choose(panel, "lower inner pivot", 0)
    QTest.keyClick(panel.table, KEY.Key_Space)
    assert "lower inner pivot" in document.layout.locked
    choose(panel, "lower inner pivot", 1)
    type_text(panel, "12")
    assert "locked" in panel.refusal.text()
    assert document.layout.point("left", "lower inner pivot").over != inch(12)
    box = panel.table.visualRect(panel.model.index(0, 0))
    place = QPoint(box.left() + 10, box.center().y())
    QTest.mouseClick(panel.table.viewport(), Qt.MouseButton.LeftButton, pos=place)
    assert "lower inner pivot" not in document.layout.locked


def test_choosing_goes_both_ways(panel, document):
    choose(panel, "tie rod inner", 2)
    assert document.selection == ("left", "tie rod inner")
    document.select("right", "upper ball joint")
    assert current(panel) == ("upper ball joint", 2)
    # The choice is answered with no other one.
    assert document.selection == ("right", "upper ball joint")


def test_sides_that_differ_are_shown_one_at_a_time(panel, document, qtbot):
    assert not panel.side_box.isVisible()
    document.set_linked(False)
    assert panel.side_box.isVisible()
    document.select("right", "tie rod inner")
    assert panel.model.side == "right"
    type_text(panel, "11")
    assert document.layout.point("right", "tie rod inner").over == inch(11)
    assert document.layout.point("left", "tie rod inner").over != inch(11)
    document.set_linked(True, "right")
    assert panel.model.side == "left" and not panel.side_box.isVisible()


def test_a_block_from_a_spreadsheet_is_pasted_as_one_step(panel, document):
    before = job_to_text(document.job)
    choose(panel, "lower inner pivot", 1)
    QApplication.clipboard().setText("9 1/2\t6 1/2\t1/8\r\n24 1/4\t7\t0\r\n")
    QTest.keyClick(panel.table, KEY.Key_V, Qt.KeyboardModifier.ControlModifier)
    assert document.layout.point("left", "lower inner pivot") == (inch(9.5), inch(6.5), 3.175)
    assert document.layout.point("left", "lower ball joint") == (inch(24.25), inch(7), 0.0)
    assert document.undo_text == "paste measures"
    document.undo()
    assert job_to_text(document.job) == before


def test_a_pasted_cell_that_can_not_be_read_is_refused_alone(panel, document):
    choose(panel, "lower inner pivot", 1)
    QApplication.clipboard().setText("9 1/2\tlow")
    QTest.keyClick(panel.table, KEY.Key_V, Qt.KeyboardModifier.ControlModifier)
    assert document.layout.point("left", "lower inner pivot").over == inch(9.5)
    assert panel.model.data(panel.model.index(0, 2)) == "low"


def test_cells_are_copied_exactly(panel, document):
    document.move_point("left", "lower inner pivot", Point(234.56789, 165.4321, 0.0))
    document.settle()
    choose(panel, "lower inner pivot", 1)
    last = panel.table.visualRect(panel.model.index(0, 3)).center()
    QTest.mouseClick(panel.table.viewport(), Qt.MouseButton.LeftButton,
                     Qt.KeyboardModifier.ShiftModifier, last)
    QTest.keyClick(panel.table, KEY.Key_C, Qt.KeyboardModifier.ControlModifier)
    copied = QApplication.clipboard().text()
    assert copied.count("\t") == 2
    choose(panel, "tie rod inner", 1)
    QTest.keyClick(panel.table, KEY.Key_V, Qt.KeyboardModifier.ControlModifier)
    assert document.layout.point("left", "tie rod inner") == (
        document.layout.point("left", "lower inner pivot")
    )


def test_units_change_the_words_and_not_the_car(panel, document):
    before = document.layout.left.points
    document.set_units("mm")
    document.settle()
    header = panel.model.headerData(1, Qt.Orientation.Horizontal)
    assert header == "over, mm"
    assert document.layout.left.points == before
    choose(panel, "lower inner pivot", 1)
    type_text(panel, "240")
    assert document.layout.point("left", "lower inner pivot").over == 240.0


def test_what_differs_from_as_found_stands_out_and_says_what_was(panel, document):
    document.keep_as_found()
    choose(panel, "lower inner pivot", 1)
    type_text(panel, "10")
    index = panel.model.index(0, 1)
    assert panel.model.data(index, Qt.ItemDataRole.FontRole).bold()
    assert "found at 9 1/4" in panel.model.data(index, Qt.ItemDataRole.ToolTipRole)


@pytest.mark.parametrize("name", sorted(SAMPLES))
def test_every_car_has_its_sheet(qtbot, qapp, name):
    document = Document(SAMPLES[name])
    panel = MeasureSheetPanel(document)
    qtbot.addWidget(panel)
    panel.grab()
    names = {row for row in panel.model.rows if isinstance(row, str)}
    assert {nail for side, nail in document.layout.nails()} == names


def test_a_nail_typed_twice_keeps_its_open_cell(qtbot, document):
    panel, elsewhere = MeasureSheetPanel(document), QLineEdit()
    for widget in (panel, elsewhere):
        qtbot.addWidget(widget)
        widget.show()
    # In a window behind another one the cell does not close when the table takes the focus.
    elsewhere.activateWindow()
    qtbot.waitUntil(elsewhere.isActiveWindow)
    for _ in range(2):
        panel.type_place("left", "tie rod inner")
        assert panel.table.state() == panel.table.State.EditingState
    panel.type_place("left", "wheel center")
    assert panel.table.currentIndex().row() == panel.model.row_of("wheel center")
