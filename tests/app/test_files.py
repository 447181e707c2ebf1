"""Opening, saving, reverting and exporting, with every question answered by hand."""

from __future__ import annotations

import os
from dataclasses import replace

import pytest
from PySide6.QtCore import QMimeData, QPoint, QPointF, Qt, QUrl
from PySide6.QtGui import QDragEnterEvent, QDropEvent, QImage
from PySide6.QtWidgets import QApplication, QFileDialog, QPlainTextEdit

from app import files, settings
from app.document import Document
from app.resources import sample_paths
from geometry.drawing import DrawingError
from geometry.layout import UPPER_INNER, Point
from geometry.layout_file import job_to_text, read_job, write_job
from geometry.measure_sheet import read_measure_sheet
from geometry.output_file import OutputError
from tests.sample_cars import SAMPLES

ELSEWHERE = Point(350.0, 390.0, 0.0)
ROADSTER = SAMPLES["healthy-roadster"]


@pytest.fixture
def home(tmp_path):
    path = tmp_path / "roadster.bobline"
    write_job(path, ROADSTER)
    return path


def change(window) -> None:
    window.document.move_point("left", UPPER_INNER, ELSEWHERE)


def save_dialog_gives(monkeypatch, path) -> list[str]:
    """The file dialog answers with a path; returns what names it was offered."""
    offered: list[str] = []

    def dialog(parent, title, proposed, pattern):
        offered.append(proposed)
        return str(path), pattern

    monkeypatch.setattr(QFileDialog, "getSaveFileName", dialog)
    return offered


@pytest.mark.parametrize("path", sample_paths(), ids=lambda path: path.name)
def test_every_sample_opens_from_the_menu_as_a_new_car(window, path):
    window.commands.actions[f"sample {path.name}"].trigger()
    assert window.document.path is None
    assert not window.document.is_changed
    assert window.document.layout.title in window.windowTitle()


def test_a_file_is_opened_changed_saved_and_opened_equal(window, home):
    assert window.open_path(home)
    assert window.windowTitle().startswith("roadster.bobline")
    assert not window.isWindowModified()
    change(window)
    assert window.isWindowModified()
    window.commands.actions["save"].trigger()
    assert not window.isWindowModified()
    assert read_job(home) == window.document.job
    window.document.undo()
    assert window.isWindowModified()
    window.document.redo()
    assert not window.isWindowModified()


def test_save_as_proposes_a_name_and_adds_the_suffix(window, tmp_path, monkeypatch):
    offered = save_dialog_gives(monkeypatch, tmp_path / "my.car")
    window.commands.actions["save"].trigger()
    assert offered[0].endswith(f"{ROADSTER.planned.title}.bobline")
    assert read_job(tmp_path / "my.car.bobline") == ROADSTER
    assert window.document.path == tmp_path / "my.car.bobline"


@pytest.mark.parametrize(
    ("title", "name"),
    [("Car 1/2: \"best\"", "Car 1 2 best.bobline"), ("  ", "Untitled.bobline"),
     ("..", "Untitled.bobline"), ("Käfer", "Käfer.bobline")],
)
def test_a_proposed_name_is_safe_on_every_system(qapp, title, name):
    document = Document(replace(ROADSTER, planned=replace(ROADSTER.planned, title=title)))
    assert files.proposed_name(document).replace("  ", " ").replace("  ", " ") == name


def test_a_name_that_gets_its_suffix_asks_before_it_takes_a_files_place(
    window, tmp_path, monkeypatch, answers
):
    other = tmp_path / "other.bobline"
    other.write_text("another car")
    save_dialog_gives(monkeypatch, tmp_path / "other")
    answers.press("No")
    window.commands.actions["save as"].trigger()
    assert other.read_text() == "another car"
    answers.press("Yes")
    window.commands.actions["save as"].trigger()
    assert read_job(other) == ROADSTER


def test_a_measure_sheet_is_saved_as_a_layout_and_left_as_it_was(window, tmp_path, monkeypatch):
    sheet = next(path for path in sample_paths() if path.suffix == ".csv")
    copy = tmp_path / sheet.name
    copy.write_bytes(sheet.read_bytes())
    assert window.open_path(copy)
    change(window)
    offered = save_dialog_gives(monkeypatch, tmp_path / "x.bobline")
    window.commands.save()
    assert offered == [str(copy.with_suffix(".bobline"))]
    assert copy.read_bytes() == sheet.read_bytes()


# --- questions -------------------------------------------------------------------------


def test_closing_with_changes_asks_and_cancel_keeps_all(window, answers):
    change(window)
    answers.press("Cancel")
    assert not window.close()
    assert window.isVisible() and window.document.is_changed
    assert "Save the changes" in answers.said[0]


def test_discard_closes_without_saving(window, home, answers):
    window.open_path(home)
    change(window)
    answers.press("Discard")
    assert window.close()
    assert read_job(home) == ROADSTER


def test_save_on_closing_saves_first(window, home, answers):
    window.open_path(home)
    change(window)
    answers.press("Save")
    assert window.close()
    assert read_job(home) == window.document.job != ROADSTER


def test_save_on_closing_that_is_given_up_does_not_close(window, answers, monkeypatch):
    change(window)
    save_dialog_gives(monkeypatch, "")
    answers.press("Save")
    assert not window.close()
    assert window.document.is_changed


@pytest.mark.parametrize("name", ["new A-arm", "sample strut-hatch.bobline"])
def test_another_car_asks_about_unsaved_work_first(window, answers, name):
    change(window)
    before = window.document.job
    answers.press("Cancel")
    window.commands.actions[name].trigger()
    assert window.document.job is before


def test_a_drag_under_way_is_put_back_before_the_question(window):
    window.document.preview_point("left", UPPER_INNER, ELSEWHERE)
    assert files.may_close(window.document, window)
    assert not window.document.previewing


def test_revert_goes_back_to_the_saved_car(window, home, answers):
    window.open_path(home)
    change(window)
    answers.press("No")
    window.commands.actions["revert"].trigger()
    assert window.document.is_changed
    answers.press("Yes")
    window.commands.actions["revert"].trigger()
    assert window.document.job == ROADSTER
    assert not window.document.is_changed


def test_a_file_changed_by_another_program_is_not_saved_over_unasked(
    window, home, answers, tmp_path, monkeypatch
):
    window.open_path(home)
    change(window)
    theirs = replace(ROADSTER, notes="theirs")
    write_job(home, theirs)
    answers.press("Cancel")
    window.commands.save()
    assert read_job(home) == theirs
    assert window.document.is_changed
    save_dialog_gives(monkeypatch, tmp_path / "mine.bobline")
    answers.press("Save As…")
    window.commands.save()
    assert read_job(home) == theirs
    assert read_job(tmp_path / "mine.bobline") == window.document.job


def test_saving_over_another_programs_change_can_be_chosen(window, home, answers):
    window.open_path(home)
    change(window)
    write_job(home, replace(ROADSTER, notes="theirs"))
    answers.press("Save over it")
    window.commands.save()
    assert read_job(home) == window.document.job
    # Asked once, not again.
    window.document.undo()
    window.commands.save()
    assert read_job(home) == ROADSTER


def test_a_file_that_was_only_touched_is_saved_without_a_question(window, home):
    window.open_path(home)
    change(window)
    os.utime(home, ns=(1, 1))
    window.commands.save()
    assert not window.document.is_changed


def test_a_file_that_is_gone_is_written_again(window, home):
    window.open_path(home)
    change(window)
    home.unlink()
    window.commands.save()
    assert read_job(home) == window.document.job


def test_two_windows_on_one_file_are_warned(make_window, home, answers, tmp_path):
    first = make_window()
    assert first.open_path(home)
    second = make_window()
    answers.press("Cancel")
    assert not second.open_path(home)
    link = tmp_path / "link.bobline"
    link.symlink_to(home)
    answers.press("Open anyway")
    assert second.open_path(link)
    assert second.document.job == ROADSTER
    first.close()
    third = make_window()
    assert third.open_path(home)


def test_saving_onto_a_file_another_window_has_open_asks(
    make_window, home, answers, monkeypatch
):
    first = make_window()
    first.open_path(home)
    second = make_window(SAMPLES["strut-hatch"])
    save_dialog_gives(monkeypatch, home)
    answers.press("No")
    second.commands.save_as()
    assert read_job(home) == ROADSTER


# --- what goes wrong --------------------------------------------------------------------


def read_faults(answers) -> list[str]:
    """The next dialog's list of faults, when it has come up."""
    told: list[str] = []

    def look(dialog):
        told.append(dialog.findChild(QPlainTextEdit).toPlainText())
        dialog.reject()

    answers.do(look)
    return told


@pytest.mark.parametrize(
    ("text", "says"),
    [("", "empty"), ("hello", "neither a layout nor a measure sheet"),
     ('{"format": "bobline layout", "left": 7}', "version"), ("\x00\x01", "not a text file")],
)
def test_a_file_that_can_not_be_read_is_told_and_changes_nothing(
    window, tmp_path, answers, text, says
):
    bad = tmp_path / "bad.bobline"
    bad.write_text(text)
    before = window.document.job
    told = read_faults(answers)
    assert not window.open_path(bad)
    assert says in told[0]
    assert window.document.job is before
    assert bad not in settings.recent_files()


def test_a_missing_file_is_told(window, tmp_path, answers):
    told = read_faults(answers)
    assert not window.open_path(tmp_path / "gone.bobline")
    assert told[0].startswith("It is not there") and told[0].endswith(".")


def full_disk(*args):
    raise OSError(28, "No space left on device")


def test_a_full_disk_is_told_and_the_work_stays(window, home, answers, monkeypatch):
    window.open_path(home)
    change(window)
    monkeypatch.setattr("geometry.text_file.os.fsync", full_disk)
    answers.press("OK")
    window.commands.save()
    monkeypatch.undo()
    assert "the disk is full" in answers.said[0]
    assert window.document.is_changed
    assert read_job(home) == ROADSTER


# --- dropping and remembering -----------------------------------------------------------


def drop(window, mime: QMimeData) -> bool:
    place, keys = QPoint(200, 200), Qt.KeyboardModifier.NoModifier
    held, act = Qt.MouseButton.LeftButton, Qt.DropAction.CopyAction
    enter = QDragEnterEvent(place, act, mime, held, keys)
    enter.ignore()
    QApplication.sendEvent(window, enter)
    if not enter.isAccepted():
        return False
    QApplication.sendEvent(window, QDropEvent(QPointF(place), act, mime, held, keys))
    return True


def test_a_file_dropped_on_the_window_is_opened(window, home):
    mime = QMimeData()
    mime.setUrls([QUrl.fromLocalFile(str(home))])
    assert drop(window, mime)
    assert window.document.path == home


def test_what_is_no_file_is_not_taken(window):
    mime = QMimeData()
    mime.setText("9 1/16")
    assert not drop(window, mime)
    mime = QMimeData()
    mime.setUrls([QUrl("https://example.org/a.bobline")])
    assert not drop(window, mime)


def test_files_are_remembered_newest_first(window, tmp_path):
    paths = [tmp_path / f"{number}.bobline" for number in range(12)]
    for path in paths:
        write_job(path, ROADSTER)
        window.open_path(path)
    window.open_path(paths[5])
    recent = settings.recent_files()
    assert recent[:2] == [paths[5], paths[11]]
    assert len(recent) == settings.RECENT_KEPT
    paths[11].unlink()
    window.commands.recent.aboutToShow.emit()
    entries = window.commands.recent.actions()
    assert "5.bobline" in entries[0].text() and entries[0].isEnabled()
    assert not entries[1].isEnabled()
    entries[2].trigger()
    assert window.document.path == recent[2]
    entries[-1].trigger()
    assert settings.recent_files() == []


# --- pictures, sheets and paper ---------------------------------------------------------


@pytest.mark.parametrize("kind", ["png", "svg"])
def test_the_floor_is_written_as_a_picture(window, tmp_path, monkeypatch, kind):
    save_dialog_gives(monkeypatch, tmp_path / "floor")
    window.commands.actions[f"export {kind}"].trigger()
    data = (tmp_path / f"floor.{kind}").read_bytes()
    assert data.startswith(b"\x89PNG" if kind == "png" else b"<?xml")


@pytest.mark.parametrize("error", [DrawingError("The picture is too large."),
                                   OutputError("Could not write floor.png: the disk is full.")])
def test_a_picture_that_can_not_be_made_is_told(window, tmp_path, monkeypatch, answers, error):
    save_dialog_gives(monkeypatch, tmp_path / "floor.png")

    def fail():
        raise error

    monkeypatch.setattr(window.floor, "drawing", fail)
    answers.press("OK")
    window.commands.actions["export png"].trigger()
    assert str(error) in answers.said[0]


@pytest.mark.parametrize("error", [OutputError("The printer refused."), DrawingError("Nothing.")])
def test_a_printer_that_refuses_is_told(window, monkeypatch, answers, error):
    def fail(*args):
        raise error

    monkeypatch.setattr("app.sheets.printing.print_pages", fail)
    answers.press("OK")
    window.commands.actions["print"].trigger()
    assert str(error) in answers.said[0]


def test_the_floor_is_copied_as_a_picture(window):
    QApplication.clipboard().clear()
    window.commands.actions["copy picture"].trigger()
    image: QImage = QApplication.clipboard().image()
    assert image.width() > 400 and image.height() > 200


def test_the_measure_sheet_reads_back_as_the_same_points(window, tmp_path, monkeypatch):
    save_dialog_gives(monkeypatch, tmp_path / "sheet")
    window.commands.actions["export csv"].trigger()
    again = read_measure_sheet(tmp_path / "sheet.csv")
    assert again.planned.left.points == ROADSTER.planned.left.points


def test_the_curves_are_written_as_a_table(window, tmp_path, monkeypatch):
    save_dialog_gives(monkeypatch, tmp_path / "curves.csv")
    window.commands.actions["export curves"].trigger()
    head = (tmp_path / "curves.csv").read_text().splitlines()[0]
    assert head.startswith("travel (in),rack (in),toe left (in)")


def test_an_export_that_can_not_be_written_is_told(window, tmp_path, monkeypatch, answers):
    save_dialog_gives(monkeypatch, tmp_path / "nowhere" / "sheet.csv")
    answers.press("OK")
    window.commands.actions["export csv"].trigger()
    assert "folder does not exist" in answers.said[0]
    assert job_to_text(window.document.job) == job_to_text(ROADSTER)
