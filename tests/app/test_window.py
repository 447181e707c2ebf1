"""The whole window by real keys and clicks: typing, refusing, undoing, saving, reopening."""

from __future__ import annotations

import pytest
from PySide6.QtCore import QSettings, Qt
from PySide6.QtWidgets import QFileDialog, QLineEdit

from app.document import Document
from app.window import MainWindow
from geometry.layout import LOWER_INNER
from geometry.layout_file import job_to_text, read_job
from geometry.lengths import format_length
from tests.sample_cars import SAMPLES


@pytest.fixture
def window(qtbot, tmp_path, monkeypatch):
    QSettings.setPath(QSettings.Format.IniFormat, QSettings.Scope.UserScope, str(tmp_path))
    monkeypatch.setenv("BOBLINE_DATA", str(tmp_path / "data"))
    window = MainWindow(Document(SAMPLES["healthy-roadster"]))
    qtbot.addWidget(
        window, before_close_func=lambda w: w.document.open_job(w.document.job, None)
    )
    window.show()
    qtbot.waitExposed(window)
    return window


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
