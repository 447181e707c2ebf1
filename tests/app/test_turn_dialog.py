"""The car in a turn: what is drawn and said of it, beside the floor and on it."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest

from app.panels.turn_dialog import TurnDialog
from geometry.drawing import Circle, Text
from geometry.layout import UPPER_INNER, Loads
from geometry.sheets.look import BLUE
from geometry.sheets.turn_picture import leaning_car, turn_frame
from geometry.turn_words import cornering
from tests.sample_cars import DEGENERATE, SAMPLES

KEY = Qt.Key
BOTH = Qt.KeyboardModifier.ControlModifier | Qt.KeyboardModifier.ShiftModifier


def opened(window, qtbot) -> TurnDialog:
    window.activateWindow()
    QTest.keyClick(window, KEY.Key_B, BOTH)
    dialog = window.findChild(TurnDialog)
    qtbot.waitUntil(dialog.isActiveWindow)
    return dialog


def texts(drawing) -> list[str]:
    return [item.text for item in drawing if isinstance(item, Text)]


@pytest.fixture
def lowered(make_window):
    return make_window(SAMPLES["cut-springs"])


def test_both_cars_are_drawn_with_the_lean_that_was_worked_out(lowered, qtbot):
    dialog = opened(lowered, qtbot)
    dialog.slider.setFocus()
    for _ in range(2):
        QTest.keyClick(dialog.slider, KEY.Key_PageUp)
    assert dialog.lateral_g == pytest.approx(0.8)
    job = lowered.document.job
    for car, view, words in zip((job.found, job.planned), dialog.views, dialog.words, strict=True):
        assert view.isVisible()
        picture = cornering(car, 0.8)
        lean = math.degrees(picture.turn.roll_angle)
        assert f"leans {lean:.1f}°" in words.text()
        outer = math.degrees(float(picture.pose.right.camber[0]))
        inner = math.degrees(float(picture.pose.left.camber[0]))
        said = texts(view.drawing())
        assert f"outer tire {outer:.1f}°" in said
        assert f"inner tire {inner:.1f}°" in said
    assert dialog.words[0].text() != dialog.words[1].text()


def test_the_road_is_level_and_the_centers_stand_where_they_are():
    car = SAMPLES["healthy-roadster"].planned
    picture = cornering(car, 0.8)
    scale = 10.0
    drawing = leaning_car(car, picture, turn_frame([car], 0.1), scale, marks=True)
    center = next(i for i in drawing if isinstance(i, Circle) and i.style.stroke == BLUE)
    height = float(picture.pose.roll_center[1, 0])
    assert center.center[1] * scale == pytest.approx(height, abs=1e-6)
    # The lower edge of each tire is on the road, by the contacts turned by hand.
    roll = float(picture.pose.roll[0])
    for side, sign in (("left", 1.0), ("right", -1.0)):
        contact = picture.pose.sides[side].poses.contact[:, 0]
        over, up = sign * float(contact[1]), float(contact[2])
        turned = over * math.sin(roll) + up * math.cos(roll)
        left = picture.pose.left.poses.contact[:, 0]
        ground = float(left[1]) * math.sin(roll) + float(left[2]) * math.cos(roll)
        assert turned == pytest.approx(ground, abs=1e-6)
    # A left turn leans the body to its right, which is the viewer's left.
    gravity = next(i for i in drawing if isinstance(i, Circle) and i.radius == 1.6)
    assert gravity.center[0] < 0.0


def test_straight_ahead_the_car_stands_level(lowered, qtbot):
    dialog = opened(lowered, qtbot)
    dialog.slider.setValue(0)
    said = texts(dialog.views[1].drawing())
    assert any(words.startswith("left tire") for words in said)
    assert "leans 0" in dialog.words[1].text()


def test_the_floor_leans_too_and_stands_level_again(lowered, qtbot):
    document = lowered.document
    dialog = opened(lowered, qtbot)
    QTest.mouseClick(dialog.on_floor, Qt.MouseButton.LeftButton,
                     pos=dialog.on_floor.rect().topLeft() + dialog.on_floor.rect().center() / 8)
    assert dialog.on_floor.isChecked()
    assert document.roll == pytest.approx(cornering(document.layout, 0.6).turn.roll_angle)
    dialog.slider.setValue(90)
    assert document.roll == pytest.approx(cornering(document.layout, 0.9).turn.roll_angle)
    QTest.keyClick(dialog, KEY.Key_Escape)
    assert document.roll == 0.0


def test_a_roll_set_by_hand_is_left_alone(lowered, qtbot):
    lowered.document.set_roll(0.02)
    dialog = opened(lowered, qtbot)
    dialog.slider.setValue(30)
    QTest.keyClick(dialog, KEY.Key_Escape)
    assert lowered.document.roll == 0.02


def test_it_goes_into_the_turn_and_out_again(lowered, qtbot):
    dialog = opened(lowered, qtbot)
    seen: set[str] = set()
    QTest.mouseClick(dialog.play, Qt.MouseButton.LeftButton)

    def moved() -> bool:
        seen.add(dialog.figure.text())
        return len(seen) > 3

    qtbot.waitUntil(moved, timeout=20_000)
    QTest.mouseClick(dialog.play, Qt.MouseButton.LeftButton)
    assert dialog.figure.text() == "0.60 g"
    qtbot.wait(120)
    assert dialog.figure.text() == "0.60 g"


def test_weights_that_are_missing_are_asked_for(make_window, qtbot):
    job = SAMPLES["healthy-roadster"]
    window = make_window(job.with_planned(replace(job.planned, loads=Loads())))
    dialog = opened(window, qtbot)
    assert "type" in dialog.words[1].text()
    assert "sprung weight" in dialog.words[1].text()
    assert not dialog.views[1].isVisible()
    assert dialog.weights.isEnabled()


def test_an_edit_of_the_car_is_followed(lowered, qtbot):
    document = lowered.document
    dialog = opened(lowered, qtbot)
    before = dialog.words[1].text()
    place = document.layout.left[UPPER_INNER]
    document.move_point("left", UPPER_INNER, place._replace(up=place.up + 25.0))
    document.settle()
    assert dialog.words[1].text() != before
    document.undo()
    document.settle()
    assert dialog.words[1].text() == before


@pytest.mark.parametrize("name", sorted(DEGENERATE))
def test_cars_that_can_not_work_are_answered_in_words(make_window, qtbot, name):
    window = make_window()
    loads = window.document.layout.loads
    car = replace(DEGENERATE[name], loads=loads, cg_height=500.0)
    window.document.apply_layout("another car", car)
    dialog = opened(window, qtbot)
    dialog.slider.setValue(150)
    said = dialog.words[1].text()
    assert said
    assert "nan" not in said.lower()
    dialog.views[1].grab()
