"""The whole window by real keys and clicks: typing, refusing, undoing, saving, reopening."""

from __future__ import annotations

import sys
import threading
from collections import Counter

import pytest
from PySide6.QtCore import QPointF, Qt, QThreadPool, QTimer
from PySide6.QtGui import QContextMenuEvent, QGuiApplication
from PySide6.QtTest import QTest
from PySide6.QtWidgets import (
    QAbstractButton,
    QApplication,
    QComboBox,
    QFileDialog,
    QLabel,
    QLineEdit,
    QMenu,
    QToolButton,
)

from app import settings, theme
from app.floor.tag_list import tag_list
from app.trouble import Trouble
from app.window import FIRST_WORDS, NEW_WORDS
from geometry.labels import Box
from geometry.layout import LOWER_INNER, TIE_INNER, UPPER_INNER, Point
from geometry.layout_file import job_to_text, read_job
from geometry.lengths import format_length
from tests.app.hands import drag, pull
from tests.sample_cars import CARS, DEGENERATE, SAMPLES

ELSEWHERE = Point(350.0, 390.0, 0.0)


def type_cell(qtbot, window, name: str, column: int, text: str) -> None:
    """Type into a cell of the measure sheet and press Enter, as a person would."""
    panel = window.measure_panel
    index = panel.model.index(panel.model.row_of(name), column)
    panel.table.setCurrentIndex(index)
    qtbot.keyClick(panel.table, Qt.Key.Key_Return)
    editor = panel.table.indexWidget(index) or panel.table.viewport().findChild(QLineEdit)
    assert isinstance(editor, QLineEdit)
    editor.selectAll()
    qtbot.keyClicks(editor, text)
    qtbot.keyClick(editor, Qt.Key.Key_Return)
    # Qt takes the typed text in a later turn of its loop.
    qtbot.wait(20)


def test_a_bad_number_is_refused_with_its_reason_and_changes_nothing(qtbot, window):
    before = job_to_text(window.document.job)
    type_cell(qtbot, window, LOWER_INNER, 2, "9 1/0")
    assert job_to_text(window.document.job) == before
    panel = window.measure_panel
    index = panel.model.index(panel.model.row_of(LOWER_INNER), 2)
    assert panel.model.data(index) == "9 1/0"
    assert "zero" in panel.model.data(index, Qt.ItemDataRole.ToolTipRole)
    type_cell(qtbot, window, LOWER_INNER, 2, "6 3/4")
    assert window.document.layout.left[LOWER_INNER].up == 6.75 * 25.4


def test_typed_places_move_the_figures_and_undo_gives_the_same_bytes(qtbot, window):
    before = job_to_text(window.document.job)
    for step, text in enumerate(("7", "178 mm", '7 1/8"', "6.9")):
        type_cell(qtbot, window, LOWER_INNER, 2, text)
        assert window.document.undo_text == "move lower inner pivot", step
    window.document.settle()
    center = window.document.solution.roll_center
    assert window.readouts_panel.text_of("roll center") == format_length(center[1], "in")
    while window.document.undo_text:
        window.commands.actions["undo"].trigger()
    assert job_to_text(window.document.job) == before
    assert not window.document.is_changed


@pytest.mark.parametrize("name", SAMPLES)
def test_each_sample_is_saved_and_reopened_equal(window, name, tmp_path, monkeypatch):
    window.document.open_job(SAMPLES[name], None)
    target = tmp_path / "kept.bobline"
    monkeypatch.setattr(QFileDialog, "getSaveFileName", lambda *a, **k: (str(target), ""))
    window.commands.actions["save as"].trigger()
    assert read_job(target) == SAMPLES[name]
    window.document.open_job(SAMPLES["healthy-roadster"], None)
    assert window.open_path(target)
    assert window.document.job == SAMPLES[name] and not window.document.is_changed


def test_units_change_no_point(window):
    points = dict(window.document.layout.left.points)
    window.document.set_units("mm")
    window.document.settle()
    assert dict(window.document.layout.left.points) == points
    assert window.readouts_panel.text_of("roll center") == format_length(
        window.document.solution.roll_center[1], "mm"
    )


# --- commands and keys ------------------------------------------------------------------


def menus_of(window) -> dict[str, list]:
    """Every menu of the window by its words, with its entries."""
    found = {"": window.menuBar().actions()}
    for menu in window.menuBar().findChildren(QMenu):
        found[menu.title()] = [a for a in menu.actions() if not a.isSeparator()]
    return found


def test_every_entry_has_an_access_key_of_its_own_in_its_menu(window):
    for title, entries in menus_of(window).items():
        if "sa&mple" in title or "Te&xt size" in title or title == "Open &recent":
            continue
        keys = []
        for entry in entries:
            words = entry.text().replace("&&", "")
            assert "&" in words, f"{title}: {words} has no access key"
            keys.append(words[words.index("&") + 1].lower())
        twice = [key for key, number in Counter(keys).items() if number > 1]
        assert not twice, f"{title}: {twice} twice"


def test_no_two_commands_share_a_key(window):
    keys = Counter(
        key.toString() for action in window.commands.actions.values() for key in action.shortcuts()
    )
    own = window.commands.layout_commands.actions.values()
    layout_keys = (action.shortcut().toString() for action in own)
    keys.update(key for key in layout_keys if key)
    assert [key for key, number in keys.items() if number > 1] == []


def test_the_menu_says_what_it_undoes(window):
    window.document.move_point("left", UPPER_INNER, ELSEWHERE)
    assert window.commands.actions["undo"].text() == "&Undo move upper inner pivot"
    QTest.keyClick(window, Qt.Key.Key_Z, Qt.KeyboardModifier.ControlModifier)
    assert window.commands.actions["undo"].text() == "&Undo"
    assert not window.commands.actions["undo"].isEnabled()
    assert window.commands.actions["redo"].text() == "&Redo move upper inner pivot"
    QTest.keyClick(window, Qt.Key.Key_Y, Qt.KeyboardModifier.ControlModifier)
    assert window.document.layout.point("left", UPPER_INNER) == ELSEWHERE


def test_letters_that_are_commands_on_the_floor_can_be_typed_elsewhere(window):
    window.activateWindow()
    window.measure_panel.table.setFocus()
    window.measure_panel.table.setCurrentIndex(window.measure_panel.model.index(0, 1))
    QTest.keyClick(window.measure_panel.table, Qt.Key.Key_T)
    assert not window.floor.tape_mode
    window.floor.setFocus()
    QTest.keyClick(window.floor.canvas, Qt.Key.Key_T)
    assert window.floor.tape_mode
    assert window.commands.actions["tape"].isChecked()


def test_home_on_the_floor_goes_back_to_ride_height(window):
    window.document.set_travel(25.0, 25.0)
    window.document.set_rack(10.0)
    window.activateWindow()
    window.floor.setFocus()
    QTest.keyClick(window.floor.canvas, Qt.Key.Key_Home)
    assert window.document.travel == {"left": 0.0, "right": 0.0}
    assert window.document.rack == 0.0


def test_f6_walks_the_panels_and_comes_round(window):
    window.activateWindow()
    window.floor.setFocus()
    seen = []
    for _ in range(5):
        QTest.keyClick(QApplication.focusWidget(), Qt.Key.Key_F6)
        seen.append(QApplication.focusWidget())
    assert len(set(map(id, seen))) == 5
    assert seen[-1] is window.floor.canvas
    assert seen[2] is window.measure_panel.table


def test_the_tool_strip_follows_the_document(window):
    window.document.select("left", TIE_INNER)
    assert window.tools.buttons["lock"].isEnabled()
    window.document.set_locked(TIE_INNER, True)
    window.document.set_linked(False)
    for name, on in (("lock", True), ("link", False), ("snap", True)):
        assert window.tools.buttons[name].isChecked() == on, name
    window.tools.buttons["lock"].click()
    assert TIE_INNER not in window.document.layout.locked


# --- the floor in the window --------------------------------------------------------------


def test_a_drag_is_one_step_that_all_panels_follow(window):
    before = job_to_text(window.document.job)
    start = window.floor.scene.places["left", TIE_INNER]
    drag(window.floor, start, (start[0], start[1] - 25.4))
    document = window.document
    assert document.undo_text == f"move {TIE_INNER}"
    sheet = window.measure_panel
    row = sheet.model.row_of(TIE_INNER)
    up = document.layout.point("left", TIE_INNER).up
    assert sheet.model.data(sheet.model.index(row, 2)) == format_length(up, "in")
    assert sheet.table.currentIndex().row() == row
    assert any(row.finding.code.startswith("inner") or "tie-rod" in row.head.text()
               for row in window.findings_panel.rows)
    document.undo()
    assert document.undo_text is None
    assert job_to_text(document.job) == before


def test_escape_puts_a_dragged_nail_back(window):
    before = window.document.job
    start = window.floor.scene.places["left", TIE_INNER]
    pull(window.floor, start, (start[0], start[1] - 25.4))
    assert window.document.layout != before.planned
    QTest.keyClick(window.floor.canvas, Qt.Key.Key_Escape)
    assert window.document.job == before
    assert not window.document.is_changed


def test_enter_on_a_nail_opens_its_cell(window):
    window.activateWindow()
    window.floor.setFocus()
    window.document.select("left", UPPER_INNER)
    QTest.keyClick(window.floor.canvas, Qt.Key.Key_Return)
    sheet = window.measure_panel
    assert sheet.model.rows[sheet.table.currentIndex().row()] == UPPER_INNER
    assert sheet.table.state() == sheet.table.State.EditingState


def test_linking_sides_that_differ_asks_which_one_stays(window, answers):
    window.document.set_linked(False)
    window.document.move_point("right", UPPER_INNER, ELSEWHERE)
    answers.press("Cancel")
    window.commands.actions["link"].trigger()
    assert not window.document.layout.linked
    assert not window.commands.actions["link"].isChecked()
    answers.press("Right")
    window.commands.actions["link"].trigger()
    assert window.document.layout.linked
    assert window.document.layout.point("left", UPPER_INNER) == ELSEWHERE


# --- as found and as planned -----------------------------------------------------------------


def test_the_switch_shows_the_car_as_found_and_an_edit_comes_back(window):
    found = window.car_buttons.button(0)
    assert not found.isEnabled()
    window.commands.actions["keep found"].trigger()
    window.document.move_point("left", UPPER_INNER, ELSEWHERE)
    QTest.mouseClick(found, Qt.MouseButton.LeftButton)
    assert window.document.shown_solution.layout == window.document.job.found
    assert window.document.outline_solution.layout == window.document.layout
    assert window.commands.actions["show found"].isChecked()
    window.document.move_point("left", UPPER_INNER, Point(345.0, 390.0, 0.0))
    assert window.car_buttons.button(1).isChecked()
    assert not window.document.showing_found


def test_a_nail_is_put_back_as_found_from_the_menu(window):
    back = window.commands.actions["nail back"]
    was = window.document.layout.point("left", UPPER_INNER)
    window.commands.actions["keep found"].trigger()
    window.document.select("left", UPPER_INNER)
    assert not back.isEnabled()
    window.document.move_point("left", UPPER_INNER, ELSEWHERE)
    assert back.isEnabled()
    back.trigger()
    assert window.document.layout.point("left", UPPER_INNER) == was
    assert not back.isEnabled()


def test_keeping_another_car_as_found_asks(window, answers):
    window.commands.actions["keep found"].trigger()
    first = window.document.job.found
    window.document.move_point("left", UPPER_INNER, ELSEWHERE)
    answers.press("No")
    window.commands.actions["keep found"].trigger()
    assert window.document.job.found == first
    answers.press("Yes")
    window.commands.actions["keep found"].trigger()
    assert window.document.job.found == window.document.layout


def test_what_differs_lists_each_move(window, answers):
    assert not window.commands.actions["differs"].isEnabled()
    window.commands.actions["keep found"].trigger()
    told = []

    def read(dialog):
        told.append(dialog.words.toPlainText())
        dialog.reject()

    answers.do(read)
    window.commands.actions["differs"].trigger()
    assert "the same car" in told[0]
    old = window.document.layout.point("left", UPPER_INNER)
    window.document.move_point("left", UPPER_INNER, old._replace(up=old.up - 25.4))
    answers.do(read)
    window.commands.actions["differs"].trigger()
    assert "Upper inner pivot moved 1 in down." in told[1]
    assert "Roll center" in told[1]


# --- a new car, guidance ------------------------------------------------------------------------


@pytest.mark.parametrize("kind", ["A-arm", "strut", "relay rod"])
def test_a_new_car_starts_in_the_first_cell_and_says_what_to_do(window, kind):
    window.activateWindow()
    window.commands.actions[f"new {kind}"].trigger()
    sheet = window.measure_panel
    assert window.document.path is None and not window.document.is_changed
    assert sheet.table.hasFocus()
    assert (sheet.table.currentIndex().row(), sheet.table.currentIndex().column()) == (0, 1)
    assert window.document.selection == ("left", sheet.model.rows[0])
    assert window.guidance.isVisible()
    assert NEW_WORDS in {label.text() for label in window.guidance.findChildren(QLabel)}


def test_the_first_words_are_said_until_they_were_read(make_window):
    first = make_window()
    assert first.guidance.isVisible()
    assert FIRST_WORDS in {label.text() for label in first.guidance.findChildren(QLabel)}
    first.guidance.findChild(QToolButton).click()
    assert not first.guidance.isVisible()
    first.close()
    assert not make_window().guidance.isVisible()


# --- looks ---------------------------------------------------------------------------------------


def cut_texts(window) -> list[str]:
    """Words that have less room on the screen than they need."""
    cut = []
    for label in window.findChildren(QLabel):
        if label.isVisible() and label.text() and not label.visibleRegion().isEmpty():
            needed = label.heightForWidth(label.width()) if label.wordWrap() else 0
            if label.height() < needed or (
                not label.wordWrap() and label.width() < label.minimumSizeHint().width()
            ):
                cut.append(label.text())
    for button in window.findChildren(QAbstractButton):
        small = button.width() < button.minimumSizeHint().width()
        if button.isVisible() and button.text() and small:
            cut.append(button.text())
    for box in window.findChildren(QComboBox):
        letters = box.fontMetrics().horizontalAdvance(box.currentText())
        if box.isVisible() and box.width() < letters + 20:
            cut.append(box.currentText())
    for field in window.findChildren(QLineEdit):
        letters = field.fontMetrics().horizontalAdvance(field.text())
        if field.isVisible() and field.width() < letters + 6:
            cut.append(field.text())
    return cut


@pytest.mark.parametrize("percent", [100, 130, 200])
@pytest.mark.parametrize("name", ["unequal-sides", "rack-set-low"])
def test_nothing_is_cut_at_any_text_size(make_window, qtbot, percent, name):
    window = make_window(SAMPLES[name])
    window.resize(1280, 800)
    window.commands.actions[f"text {max(percent, 100)}"].trigger()
    try:
        # Layouts nested in splitters and stacks find their sizes over some rounds of events.
        qtbot.waitUntil(lambda: not cut_texts(window), timeout=10_000)
        assert window.width() <= 1280 and window.height() <= 800
        assert window.minimumSizeHint().width() <= 1280
        assert window.minimumSizeHint().height() <= 800
        assert cut_texts(window) == []
        table = window.measure_panel.table
        assert not table.horizontalScrollBar().isVisible()
        for column in (1, 2, 3):
            room = table.columnWidth(column)
            assert room >= table.fontMetrics().horizontalAdvance("24 15/16") + 4
    finally:
        theme.dress(QApplication.instance(), 100)
    assert settings.get_int("text size", 100, 100, 200) == percent


def test_the_dark_floor_and_hidden_curves_are_remembered(make_window):
    first = make_window()
    first.commands.actions["dark"].trigger()
    first.commands.actions["curves"].trigger()
    assert not first.curves.isVisible()
    first.close()
    second = make_window()
    assert second.commands.actions["dark"].isChecked()
    image = second.floor.grab().toImage()
    corner = image.pixelColor(image.width() - 40, 40)
    assert corner.lightness() < 90
    assert not second.curves.isVisible()


def test_the_window_comes_back_where_it_was_and_on_a_screen(make_window):
    area = QGuiApplication.primaryScreen().availableGeometry()
    first = make_window()
    first.resize(700, 560)
    first.across.setSizes([400, 300])
    first.close()
    second = make_window()
    assert abs(second.width() - max(700, second.minimumSizeHint().width())) < 20
    second.move(area.right() + 5000, area.bottom() + 5000)
    second.close()
    third = make_window()
    assert area.intersects(third.geometry())


@pytest.mark.parametrize("name", sorted(set(DEGENERATE)))
def test_cars_that_can_not_work_are_shown_with_words(make_window, name):
    window = make_window()
    window.document.apply_layout("try", DEGENERATE[name])
    window.document.settle()
    for travel in (0.0, 60.0, -60.0):
        window.document.set_travel(travel, travel)
        window.document.settle()
    texts = [label.text() for label in window.findChildren(QLabel)]
    table = window.readouts_panel.table
    texts += [
        table.item(row, column).text()
        for row in range(table.rowCount()) for column in range(table.columnCount())
    ]
    assert not [text for text in texts if "nan" in text.lower().split() or "inf" in text.split()]
    assert window.findings_panel.rows, "nothing is said of it"


def test_every_car_goes_through_all_poses(window):
    for name, layout in CARS.items():
        window.document.apply_layout(name, layout)
        for travel, rack in ((0.0, 0.0), (76.2, 0.0), (-76.2, 30.0), (200.0, -90.0)):
            window.document.set_travel(travel, travel)
            window.document.set_rack(rack)
            window.document.settle()
        window.document.set_travel(0.0, 0.0)
        window.document.set_rack(0.0)


# --- when something goes wrong -----------------------------------------------------------


def test_an_unexpected_error_shows_a_calm_message_and_the_window_lives(
    window, answers, monkeypatch, capsys, qtbot
):
    trouble = Trouble()
    monkeypatch.setattr(sys, "excepthook", sys.excepthook)
    trouble.install()
    before = window.document.job

    def fail() -> None:
        raise RuntimeError("a mistake in the program")

    answers.press("OK")
    QTimer.singleShot(0, fail)
    qtbot.waitUntil(lambda: answers.all_asked)
    qtbot.wait(20)
    assert "Your work is still here" in answers.said[0]
    assert "a mistake in the program" in trouble.reports[0]
    assert "a mistake in the program" in capsys.readouterr().err
    assert window.isVisible() and window.document.job is before
    window.document.move_point("left", UPPER_INNER, ELSEWHERE)
    window.document.settle()


def test_errors_on_top_of_each_other_show_one_message(window, answers, monkeypatch, qtbot):
    trouble = Trouble()
    monkeypatch.setattr(sys, "excepthook", sys.excepthook)
    trouble.install()

    def fail() -> None:
        raise RuntimeError("again")

    def answer(dialog) -> None:
        for _ in range(5):
            QTimer.singleShot(0, fail)
        QTimer.singleShot(30, dialog.accept)

    answers.do(answer)
    QTimer.singleShot(0, fail)
    qtbot.waitUntil(lambda: len(trouble.reports) == 6)
    qtbot.wait(100)
    assert len(answers.said) == 1
    assert QApplication.activeModalWidget() is None


def test_an_error_that_goes_on_and_on_is_told_once_and_the_work_is_kept(
    window, answers, monkeypatch, qtbot
):
    trouble = Trouble()
    monkeypatch.setattr(sys, "excepthook", sys.excepthook)
    trouble.install()
    trouble.keep = window.recovery.look
    window.document.move_point("left", UPPER_INNER, ELSEWHERE)
    window.document.edited.disconnect(window.recovery.look)
    window.document.solved.disconnect(window.recovery.look)
    window.recovery._timer.stop()

    def fail() -> None:
        raise RuntimeError("in drawing the floor")

    again = QTimer(window)
    again.timeout.connect(fail)
    answers.press("OK")
    again.start(10)
    qtbot.waitUntil(lambda: answers.all_asked and len(trouble.reports) > 30)
    assert QApplication.activeModalWidget() is None
    assert len(answers.said) == 1
    again.stop()
    # Not by the change itself, whose way to the recovery file was cut.
    qtbot.waitUntil(window.recovery.file.exists, timeout=4000)
    window.document.edited.connect(window.recovery.look)
    window.document.solved.connect(window.recovery.look)
    # Another kind of error is told, and so is this one when it comes again much later.
    monkeypatch.setattr("app.trouble.QUIET_SECONDS", 0.0)
    answers.press("OK")
    QTimer.singleShot(0, fail)
    qtbot.waitUntil(lambda: answers.all_asked)
    qtbot.wait(20)
    assert len(answers.said) == 2


def test_a_closed_window_leaves_no_thread_and_no_running_timer(make_window):
    before = set(threading.enumerate())
    window = make_window()
    window.document.move_point("left", UPPER_INNER, ELSEWHERE)
    window.document.settle()
    QTest.qWait(900)
    assert set(threading.enumerate()) != before, "nothing ran that could be left"
    window.document.open_job(window.document.job, None)
    window.close()
    assert {t.name for t in threading.enumerate()} <= {t.name for t in before}
    assert QThreadPool.globalInstance().activeThreadCount() == 0
    QTest.qWait(1500)
    running = [
        timer for timer in window.findChildren(QTimer) if timer.isActive()
    ]
    assert running == []


# --- a frame behind ----------------------------------------------------------------------


def test_a_nail_that_is_not_drawn_yet_can_be_asked_about(make_window):
    """An edit brings nails that the floor draws a moment later; the menu may come between."""
    window = make_window()
    view, document = window.floor, window.document
    asked: list[str] = []

    def look() -> None:
        menu = QApplication.activePopupWidget()
        asked.extend(action.text() for action in menu.actions())
        menu.close()

    document.apply_layout("another car", SAMPLES["steering-box-sedan"].planned)
    nail = next(key for key in document.layout.nails() if key[1] == "idler arm pivot")
    document.select(*nail)
    view.lay_out()
    port = view.viewport()
    middle = port.rect().center()
    QTimer.singleShot(100, look)
    QApplication.sendEvent(
        port,
        QContextMenuEvent(QContextMenuEvent.Reason.Keyboard, middle, port.mapToGlobal(middle)),
    )
    assert any("ype a place" in words for words in asked), asked
    assert view.chosen == nail


AREA = Box(4.0, 4.0, 1000.0, 800.0)


def test_tags_can_be_laid_out_between_an_edit_and_its_frame(make_window):
    """A place for the tie rod that the floor still shows may be gone from the car already."""
    window = make_window(SAMPLES["healthy-roadster"])
    view, document = window.floor, window.document
    document.select("left", "tie rod inner")
    document.settle()
    nail = QPointF(*view.canvas.to_px(*view.scene.places["left", "tie rod inner"]))
    view.canvas.zoom(12.0, nail)
    specs, _ = tag_list(view, AREA)
    assert any("fit" in spec.title or "rule" in spec.title for spec in specs)
    for name in sorted(DEGENERATE):
        document.apply_layout("another car", DEGENERATE[name])
        # As a change of the letters' size does, before the frame that follows the edit.
        view.lay_out()
        document.undo()
        document.settle()
