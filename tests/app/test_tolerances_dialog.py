"""The limits, typed."""

from __future__ import annotations

import math

import pytest

from app.document import Document
from app.panels.tolerances import ToleranceDialog, limit_text, read_limit
from geometry.layout_file import job_to_text
from geometry.tolerances import LAYOUT, TOLERANCES
from tests.sample_cars import SAMPLES

VALUE, SOURCE = 1, 3


@pytest.fixture
def document(qapp):
    return Document(SAMPLES["healthy-roadster"])


@pytest.fixture
def dialog(qtbot, document):
    dialog = ToleranceDialog(document)
    qtbot.addWidget(dialog)
    dialog.show()
    return dialog


def row_of(key):
    return list(TOLERANCES).index(key)


def write(dialog, key, text):
    dialog.table.setCurrentCell(row_of(key), VALUE)
    dialog.table.item(row_of(key), VALUE).setText(text)


def test_a_limit_is_set_as_one_step_and_undone(dialog, document):
    before = job_to_text(document.job)
    write(dialog, "toe range", "1/8")
    write(dialog, "lower arm slope", "6°")
    assert dialog.table.item(row_of("toe range"), SOURCE).text() == LAYOUT
    dialog.ok.click()
    assert dict(document.layout.tolerances) == {
        "toe range": 3.175, "lower arm slope": pytest.approx(math.radians(6.0))
    }
    assert document.undo_text == "set tolerances"
    document.undo()
    assert job_to_text(document.job) == before


def test_bad_typing_is_refused_in_place_and_mended(dialog, document):
    write(dialog, "toe range", "wide")
    assert dialog.table.item(row_of("toe range"), VALUE).text() == "wide"
    assert "wide" in dialog.reason.text()
    assert not dialog.ok.isEnabled()
    write(dialog, "toe range", "1/8")
    assert dialog.ok.isEnabled() and not dialog.reason.text()


def test_a_default_comes_back(dialog, document):
    write(dialog, "toe range", "1/8")
    dialog.one_default.click()
    assert dialog.table.item(row_of("toe range"), SOURCE).text() == TOLERANCES["toe range"].source
    write(dialog, "toe range", "x")
    dialog.all_defaults.click()
    dialog.ok.click()
    assert document.undo_text is None


def test_the_span_is_no_undo_step(dialog, document):
    dialog.span.field.setText("2")
    dialog.ok.click()
    assert document.span == pytest.approx(50.8)
    assert document.undo_text is None


@pytest.mark.parametrize("units", ["in", "mm"])
@pytest.mark.parametrize("key", sorted(TOLERANCES))
def test_every_limit_reads_back_as_it_is_shown(key, units):
    entry = TOLERANCES[key]
    text = limit_text(entry.kind, entry.value, units)
    again = read_limit(entry.kind, text, units)
    # Lengths in inches are shown to the tape's sixty-fourth; what is untouched stays exact.
    coarse = entry.kind == "length" and units == "in"
    exact = 25.4 / 128 if coarse else 0.005 if entry.kind == "length" else 0.0
    assert again == pytest.approx(entry.value, rel=2e-3, abs=exact)


def test_what_is_only_looked_at_stays_exact(dialog, document):
    write(dialog, "point spacing", dialog.table.item(row_of("point spacing"), VALUE).text())
    dialog.ok.click()
    assert document.undo_text is None
