"""Undo and redo over whole jobs."""

from __future__ import annotations

from dataclasses import replace

import pytest

from app.document import Document
from app.history import History
from geometry.layout import UPPER_INNER, Job, Point
from geometry.layout_file import job_to_text
from tests.sample_cars import SAMPLES

JOB = SAMPLES["healthy-roadster"]


def noted(words: str) -> Job:
    return replace(JOB, notes=words)


def test_steps_go_back_to_the_opening_state_and_forth_again():
    history = History(JOB)
    for words in "abc":
        assert history.push(f"write {words}", noted(words))
    assert history.undo_text == "write c"
    while history.undo():
        pass
    assert history.job is JOB
    assert history.undo_text is None
    assert history.redo_text == "write a"
    while history.redo():
        pass
    assert history.job.notes == "c"


def test_a_new_step_drops_what_was_undone():
    history = History(JOB)
    history.push("a", noted("a"))
    history.undo()
    history.push("b", noted("b"))
    assert history.redo_text is None
    assert not history.redo()
    assert history.job.notes == "b"


def test_a_step_that_changes_nothing_is_none():
    history = History(JOB)
    assert not history.push("nothing", replace(JOB))
    assert history.undo_text is None
    assert history.is_clean


def test_the_saved_mark_is_met_from_both_sides():
    history = History(JOB)
    history.push("a", noted("a"))
    history.mark_clean()
    history.push("b", noted("b"))
    assert not history.is_clean
    history.undo()
    assert history.is_clean
    history.undo()
    assert not history.is_clean
    history.redo()
    assert history.is_clean


def test_a_saved_state_that_was_dropped_can_not_be_met_again():
    history = History(JOB)
    history.push("a", noted("a"))
    history.mark_clean()
    history.undo()
    history.push("b", noted("b"))
    assert not history.is_clean
    history.undo()
    assert not history.is_clean


def test_a_preview_is_no_step_and_goes_with_the_next_act():
    history = History(JOB)
    history.preview(noted("dragging"))
    assert history.job.notes == "dragging"
    assert history.settled is JOB
    assert history.undo_text is None
    history.push("move", noted("dropped"))
    assert not history.previewing
    history.undo()
    assert history.job is JOB


@pytest.mark.parametrize("name", sorted(SAMPLES))
def test_undo_of_every_kind_of_edit_comes_back_to_the_same_bytes(qapp, name):
    document = Document(SAMPLES[name])
    before = job_to_text(document.job)
    layout = document.layout
    side, nail = next(iter(layout.nails()))
    document.move_point(side, nail, Point(123.4, 56.7, 8.9))
    document.set_locked(nail, True)
    document.set_linked(not layout.linked)
    document.set_units("mm" if layout.units == "in" else "in")
    document.keep_as_found()
    document.set_job_card("Another", "Harrow Lane", "A customer", "Notes")
    document.plan_from_found()
    assert job_to_text(document.job) != before
    while document.undo_text is not None:
        document.undo()
    assert job_to_text(document.job) == before
    assert not document.is_changed


def test_undo_says_what_it_undoes(qapp):
    document = Document(JOB)
    document.move_point("left", UPPER_INNER, Point(350.0, 390.0, 0.0))
    assert document.undo_text == "move upper inner pivot"
    document.undo()
    assert document.redo_text == "move upper inner pivot"


def test_put_back_as_found_moves_one_nail_only(qapp):
    document = Document(JOB)
    document.keep_as_found()
    document.move_point("left", UPPER_INNER, Point(350.0, 390.0, 0.0))
    document.move_point("left", "tie rod inner", Point(260.0, 240.0, -130.0))
    document.put_back_as_found("left", UPPER_INNER)
    assert document.layout.point("left", UPPER_INNER) == JOB.planned.point("left", UPPER_INNER)
    assert document.layout.point("left", "tie rod inner").over == 260.0
    assert document.undo_text == "put upper inner pivot back as found"
