"""The Layout menu's dialogs: typed figures in, one undo step out, refusals in place."""

from __future__ import annotations

from dataclasses import replace

import ezdxf
import pytest
from PySide6.QtCore import Qt

from app.background import Background
from app.document import Document
from app.motion import BumpMotion
from app.panels.loads_dialog import LoadsDialog
from app.panels.no_go_dialog import NoGoDialog
from app.panels.sketch_dialog import SketchDialog
from app.panels.stance_dialog import StanceDialog
from app.panels.wheel_dialog import WheelDialog
from app.watch import RoomWatch
from geometry.layout import Loads
from geometry.solution import solve
from geometry.stance import Stance, lowered
from tests.sample_cars import SAMPLES


@pytest.fixture
def document(qapp):
    return Document(SAMPLES["healthy-roadster"])


def type_into(qtbot, field, text):
    """Replace a field's text as a person would."""
    field.selectAll()
    qtbot.keyClicks(field, text)


def test_lowering_by_springs_is_one_step_to_the_lowered_car(qtbot, document):
    before = document.layout
    dialog = StanceDialog(document)
    qtbot.addWidget(dialog)
    type_into(qtbot, dialog.form.fields["spring"].field, "1 1/2")
    dialog.keep.setChecked(True)
    qtbot.mouseClick(dialog.apply_button, Qt.MouseButton.LeftButton)
    assert document.layout == lowered(before, Stance(spring=38.1))
    assert document.job.found == before
    assert document.undo_text == "lowered 1 1/2 in by springs"
    document.undo()
    assert document.layout == before and document.job.found == SAMPLES["healthy-roadster"].found


def test_the_three_ways_stand_side_by_side(qtbot, document):
    dialog = StanceDialog(document)
    qtbot.addWidget(dialog)
    type_into(qtbot, dialog.form.fields["spring"].field, "2")
    dialog.refresh()
    heights = [dialog.table.item(0, column).text() for column in range(1, 5)]
    # A dropped knuckle and a smaller tire keep the arms' slopes; springs do not.
    assert heights[2] == heights[3] != heights[1]
    assert "can't mend" in dialog.words.text()


def test_a_bad_drop_is_refused_in_place(qtbot, document):
    dialog = StanceDialog(document)
    qtbot.addWidget(dialog)
    field = dialog.form.fields["spring"]
    type_into(qtbot, field.field, "two")
    dialog.refresh()
    assert "Can't read" in field.reason.text()
    assert not dialog.apply_button.isEnabled()


def test_a_drop_out_of_reach_is_said_in_words(qtbot, document):
    dialog = StanceDialog(document)
    qtbot.addWidget(dialog)
    type_into(qtbot, dialog.form.fields["spring"].field, "-11")
    dialog.refresh()
    assert "stop meeting" in dialog.words.text()
    assert not dialog.apply_button.isEnabled()


def test_weights_give_the_turn_in_words(qtbot, document):
    document.apply_layout("weights", replace(document.layout, loads=Loads()))
    dialog = LoadsDialog(document)
    qtbot.addWidget(dialog)
    assert "type the sprung weight" in dialog.answer.text()
    for key, text in (
        ("sprung_mass", "1280 kg"), ("front_share", "54"), ("front_hz", "1.3"),
        ("rear_hz", "1.4"), ("rear_roll_center_height", "10"),
    ):
        type_into(qtbot, dialog.form.fields[key].field, text)
    dialog.refresh()
    assert "the body leans" in dialog.answer.text()
    assert "Front ride frequency 1.30 Hz" in dialog.answer.text()
    dialog.ok.click()
    loads = document.layout.loads
    assert loads.sprung_mass == 1280.0 and loads.front_share == pytest.approx(0.54)
    assert loads.front_wheel_rate == pytest.approx(0.5 * 1280 * 0.54 * 66.7183 / 1000, rel=1e-4)


def test_untouched_weights_keep_every_digit(qtbot, document):
    loads = Loads(1234.56789, 0.5432101, 11.1, 22.2, front_wheel_rate=23.456789)
    document.apply_layout("weights", replace(document.layout, loads=loads))
    dialog = LoadsDialog(document)
    qtbot.addWidget(dialog)
    changed = dialog.changed()
    assert changed is not None and changed.loads == loads


def test_a_tire_size_fills_the_wheel_and_moves_the_car(qtbot, document):
    before = document.layout
    dialog = WheelDialog(document)
    qtbot.addWidget(dialog)
    type_into(qtbot, dialog.size_text, "205/55R16")
    dialog.ok.click()
    tire = document.layout.left.tire
    assert tire.size == "205/55R16"
    assert tire.width == pytest.approx(205.0, abs=0.3)
    assert tire.radius == pytest.approx(0.5 * 631.9 * 0.97, abs=0.3)
    rise = tire.radius - before.left.tire.radius
    for name, point in document.layout.left.points.items():
        assert point.up == pytest.approx(before.left[name].up + rise, abs=1e-9)


def test_less_backspace_makes_the_track_wider(qtbot, document):
    dialog = WheelDialog(document)
    qtbot.addWidget(dialog)
    track = solve(document.layout).left.ride.half_track[0]
    field = dialog.form.fields["backspace"]
    value = field.value()
    type_into(qtbot, field.field, f"{value - 25.4:.3f} mm")
    assert "1 in wider" in dialog.words.text()
    dialog.ok.click()
    assert solve(document.layout).left.ride.half_track[0] == pytest.approx(track + 25.4, abs=0.01)


def test_a_no_go_shape_is_typed_and_found_in_the_way(qtbot, document):
    document.apply_layout("clear", replace(document.layout, no_go=()))
    dialog = NoGoDialog(document)
    qtbot.addWidget(dialog)
    dialog.add_box()
    type_into(qtbot, dialog.name, "oil pan")
    for row, (over, up) in enumerate((("0", "6"), ("8", "6"), ("8", "9 1/2"), ("0", "9 1/2"))):
        dialog.table.item(row, 0).setText(over)
        dialog.table.item(row, 1).setText(up)
    dialog._accept()
    (shape,) = document.layout.no_go
    assert shape.name == "oil pan"
    assert shape.outline[2] == pytest.approx((203.2, 241.3))
    watch = RoomWatch(document)
    with qtbot.waitSignal(watch.background.answered, timeout=20_000):
        pass
    assert any("enters the oil pan" in finding.headline for finding in document.findings)
    watch.background.finish()


def test_a_bad_corner_is_refused_in_place(qtbot, document):
    dialog = NoGoDialog(document)
    qtbot.addWidget(dialog)
    dialog.add_box()
    dialog.table.item(0, 0).setText("far")
    assert "Can't read" in dialog.reason.text()
    before = document.layout
    dialog._accept()
    assert document.layout == before


def test_outlines_come_from_a_dxf_in_true_size(qtbot, document, tmp_path):
    drawing = ezdxf.new(units=1)
    drawing.modelspace().add_lwpolyline(
        [(0, 5), (6, 5), (6, 8)], close=True, dxfattribs={"layer": "pan"}
    )
    path = tmp_path / "pan.dxf"
    drawing.saveas(path)
    dialog = NoGoDialog(document)
    qtbot.addWidget(dialog)
    before = len(dialog.shapes)
    dialog.import_from(path)
    assert "Reading" in dialog.reason.text() and not dialog._ok.isEnabled()
    qtbot.waitUntil(lambda: len(dialog.shapes) == before + 1, timeout=10_000)
    assert dialog.reason.text() == "" and dialog._ok.isEnabled()
    shape = dialog.shapes[-1]
    assert (shape.name, shape.side) == ("pan", "left")
    wanted = ((0.0, 127.0), (152.4, 127.0), (152.4, 203.2))
    for corner, place in zip(shape.outline, wanted, strict=True):
        assert corner == pytest.approx(place, abs=1e-9)
    (tmp_path / "no.dxf").write_text("nothing")
    dialog.import_from(tmp_path / "no.dxf")
    qtbot.waitUntil(lambda: "not a DXF drawing" in dialog.reason.text(), timeout=10_000)
    dialog.import_from(tmp_path / "gone.dxf")
    qtbot.waitUntil(lambda: "gone.dxf" in dialog.reason.text(), timeout=10_000)
    qtbot.waitUntil(dialog._ok.isEnabled, timeout=10_000)
    assert "can't be read: it is not there" in dialog.reason.text()


def test_the_car_goes_over_a_bump_and_comes_back(qtbot, document):
    document.set_travel(10.0, 10.0)
    motion = BumpMotion(document)
    seen = []
    document.solved.connect(lambda: seen.append(document.travel["left"]))
    motion.start()
    qtbot.waitUntil(lambda: len(seen) > 5, timeout=10_000)
    motion.stop()
    assert len(set(seen)) > 3
    assert document.travel == {"left": 10.0, "right": 10.0}


def test_an_older_question_is_dropped(qtbot):
    from PySide6.QtCore import QObject

    owner = QObject()
    background = Background(owner, wait_ms=1)
    answers = []
    background.answered.connect(answers.append)
    background.ask(lambda stopped: "old")
    background.ask(lambda stopped: "new")
    qtbot.waitUntil(lambda: bool(answers), timeout=5_000)
    assert answers == ["new"] and not background.busy
    with qtbot.waitSignal(background.failed, timeout=5_000) as trouble:
        background.ask(lambda stopped: 1 / 0)
    assert "ZeroDivisionError" in trouble.args[0]
    background.finish()


def test_a_sketch_is_laid_out_from_typed_figures(qtbot):
    dialog = SketchDialog("in")
    qtbot.addWidget(dialog)
    type_into(qtbot, dialog.form.fields["roll_center"].field, "1 1/2")
    type_into(qtbot, dialog.angles.fields["camber_gain"].field, "0.9")
    qtbot.waitUntil(dialog.ok.isEnabled, timeout=10_000)
    dialog.ok.click()
    assert dialog.job is not None
    solution = solve(dialog.job.planned)
    assert solution.ride_roll_center[1] == pytest.approx(38.1, abs=0.2)
    assert 25.4 * 57.29578 / solution.left.ride_view.swing_arm[0] == pytest.approx(0.9, rel=0.01)


def test_a_frame_too_wide_to_sketch_is_refused_in_words(qtbot):
    dialog = SketchDialog("mm")
    qtbot.addWidget(dialog)
    type_into(qtbot, dialog.form.fields["frame_half"].field, "640")
    dialog.refresh()
    assert "no lower arm fits" in dialog.answer.text()
    assert not dialog.ok.isEnabled()
