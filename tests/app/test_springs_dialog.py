"""Springs, joints and tie-rod thread typed in their dialog."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest
from PySide6.QtCore import Qt

from app.document import Document
from app.panels.springs_dialog import SpringsDialog
from geometry.clearance_findings import clearance_findings
from geometry.corner import Corner
from geometry.layout import Job, Loads
from geometry.lengths import format_exact
from geometry.spring_table import motion_of, rate_for_frequency, spring_rows
from geometry.springs import spring_motion
from geometry.tie_rod_thread import tie_rod_length
from tests.sample_cars import DEGENERATE, ROADSTER, STRUT_CAR

CAR = replace(ROADSTER, loads=Loads(sprung_mass=1200.0, front_share=0.5))


@pytest.fixture
def dialog(qtbot):
    def make(job: Job) -> SpringsDialog:
        made = SpringsDialog(Document(job))
        qtbot.addWidget(made)
        made.show()
        return made

    return make


def type_in(qtbot, dialog, key: str, text: str) -> None:
    field = dialog.form.fields[key].field
    field.selectAll()
    qtbot.keyClicks(field, text)
    dialog.refresh()


def test_the_rate_for_a_frequency_gives_that_frequency_back() -> None:
    """A second way: the mass hung on the spring, through the work it stores."""
    motion = motion_of(CAR, "left", 75.0)
    rate = rate_for_frequency(CAR, motion, 1.4)
    near = Corner.of(CAR.left)
    travel = [-0.5, 0.0, 0.5]
    lengths = spring_motion(CAR.left, near, near.poses(travel)).length
    slope = (lengths[0] - lengths[2]) / 1.0
    hertz = math.sqrt(rate * slope**2 * 1000.0 / 300.0) / (2.0 * math.pi)
    assert hertz == pytest.approx(1.4, abs=1e-3)
    assert rate_for_frequency(replace(CAR, loads=Loads()), motion, 1.4) is None


def test_rows_hold_stroke_left_each_way() -> None:
    rows = spring_rows(CAR, "left", motion_of(CAR, "left", 75.0))
    assert [row.travel for row in rows] == pytest.approx([-75 + 18.75 * k for k in range(9)])
    for row in rows:
        assert row.to_shortest == pytest.approx(row.length - CAR.left.spring.shortest)
        assert row.to_longest == pytest.approx(CAR.left.spring.longest - row.length)
        assert row.wheel_rate == pytest.approx(CAR.left.spring.rate * row.ratio**2)


def test_limits_are_typed_shown_found_and_kept(dialog, qtbot):
    made = dialog(Job(CAR))
    document = made._document
    assert made.table.rowCount() == 9
    length = float(motion_of(CAR, "left", document.span).length[48])
    type_in(qtbot, made, "shortest", format_exact(length, CAR.units))
    assert "It bottoms at" in made.words.text()
    qtbot.keyClick(made, Qt.Key.Key_Return)
    assert document.undo_text == "set spring and tie rod"
    assert document.layout.left.spring.shortest == pytest.approx(length, abs=0.01)
    codes = {one.code for one in clearance_findings(document.layout, document.span, 0.0)}
    assert "spring-bottoms" in codes


def test_a_frequency_sets_the_rate(dialog, qtbot):
    made = dialog(Job(CAR))
    type_in(qtbot, made, "wanted", "1.4")
    assert "1.40 Hz takes a spring of" in made.words.text()
    assert "ride frequency 1.40 Hz" in made.words.text()
    made._accept()
    motion = motion_of(CAR, "left", made._document.span)
    wanted = rate_for_frequency(CAR, motion, 1.4)
    assert made._document.layout.left.spring.rate == pytest.approx(wanted)


def test_thread_is_measured_at_the_rod_as_found(dialog, qtbot):
    inner = CAR.left["tie rod inner"]
    planned = CAR.with_point("left", "tie rod inner", inner._replace(over=inner.over - 12.7))
    made = dialog(Job(planned, found=CAR))
    type_in(qtbot, made, "thread_engaged", "1")
    type_in(qtbot, made, "thread_diameter", "9/16")
    assert "too little" in made.words.text()
    made._accept()
    rod = made._document.layout.left.tie_rod
    assert rod.measured_length == pytest.approx(tie_rod_length(CAR.left))
    assert "thread-short" in {one.code for one in made._document.findings}
    made._document.undo()
    assert "thread-short" not in {one.code for one in made._document.findings}


def test_a_negative_length_is_refused_in_place(dialog, qtbot):
    made = dialog(Job(CAR))
    type_in(qtbot, made, "shortest", "-4")
    assert not made.ok.isEnabled()
    assert "more than nothing" in made.form.fields["shortest"].reason.text()


@pytest.mark.parametrize("car", [STRUT_CAR, *DEGENERATE.values()], ids=lambda car: car.title)
def test_any_car_gets_words_and_no_nan(dialog, car):
    made = dialog(Job(car))
    cells = [
        made.table.item(row, column).text()
        for row in range(made.table.rowCount()) for column in range(7)
    ]
    assert made.words.text()
    assert not any("nan" in text.lower() for text in [*cells, made.words.text()])
