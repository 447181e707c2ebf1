"""The floor under a hand: dragging, nudging, walking, measuring, tags and what is painted."""

from __future__ import annotations

from dataclasses import replace
from itertools import combinations

import pytest
from PySide6.QtCore import QPoint, QPointF, Qt
from PySide6.QtGui import QColor, QWheelEvent
from PySide6.QtWidgets import QApplication

from app.document import Document
from app.floor.menu import nail_menu, send_to_pivot
from app.floor.tags import TAGS_Z
from app.floor.view import FloorView
from app.palette import DARK, LIGHT
from geometry.layout import (
    LOWER_BALL,
    TIE_INNER,
    UPPER_INNER,
    Job,
    Layout,
    Point,
)
from geometry.lengths import parse_length
from geometry.readouts import BY_KEY
from geometry.solution import solve
from tests.app.hands import at, drag, hover, move, press, pull, release
from tests.sample_cars import (
    CARS,
    DEGENERATE,
    RACK_LOW,
    ROADSTER,
    SAMPLES,
    STRUT_CAR,
    UNEQUAL_SIDES,
)

SHIFT, CTRL, ALT = (
    Qt.KeyboardModifier.ShiftModifier,
    Qt.KeyboardModifier.ControlModifier,
    Qt.KeyboardModifier.AltModifier,
)
INNER = ("left", TIE_INNER)
INCH = 25.4


@pytest.fixture
def floor(qtbot):
    """Makes a shown floor of about the main window's size for a car or job."""

    def make(car: Layout | Job, size: tuple[int, int] = (840, 520)) -> FloorView:
        view = FloorView(Document(car if isinstance(car, Job) else Job(car)))
        view.document.setParent(view)
        qtbot.addWidget(view)
        view.resize(*size)
        view.show()
        view.document.settle()
        view.fit()
        return view

    return make


def moved_by(place, dx, dy):
    return place[0] + dx, place[1] + dy


# --- dragging ------------------------------------------------------------------------


@pytest.mark.parametrize("car", ["healthy-roadster", "skewed-arms", "steering-box-sedan",
                                 "unequal-sides"])
def test_dragging_each_nail_moves_its_point_to_the_tapes_fraction(floor, car):
    view = floor(CARS[car])
    document = view.document
    view.canvas.zoom(1.6)
    for key in list(view.scene.places):
        before = document.layout
        old, start = before.point(*key), view.scene.places[key]
        view.canvas.reveal(*start)
        # Nails may stand so close that the one chosen has to be told.
        document.select(*key)
        drag(view, start, moved_by(start, 21.3, -13.9))
        new = document.layout.point(*key)
        sixteenth = INCH / 16
        outward = 1 if key[0] == "left" else -1
        assert new.over == pytest.approx(old.over + outward * 21.3, abs=0.51 * sixteenth + 1.0)
        assert new.up == pytest.approx(old.up - 13.9, abs=0.51 * sixteenth + 1.0)
        for value in (new.over, new.up):
            assert round(value / sixteenth) * sixteenth == pytest.approx(value, abs=1e-9)
            assert parse_length(f"{round(value / sixteenth)}/16", "in") == value
        assert new.fore == old.fore
        others = {k: before.point(*k) for k in before.nails() if k[1] != key[1]}
        assert {k: document.layout.point(*k) for k in others} == others
        assert document.undo_text == f"move {key[1]}"
        document.undo()
        document.settle()
        assert document.layout == before


def test_readouts_after_a_drag_are_those_of_the_moved_layout(floor):
    view = floor(ROADSTER)
    start = view.scene.places[INNER]
    drag(view, start, moved_by(start, 0.0, 12.0))
    expected = solve(view.document.layout, span=view.document.span)
    for key in ("bump steer", "roll center", "tie rod", "toe range"):
        shown = BY_KEY[key].read(view.document.solution, "left")
        assert shown == BY_KEY[key].read(expected, "left")
    before = solve(ROADSTER, span=view.document.span)
    assert BY_KEY["toe range"].read(expected, "left") != BY_KEY["toe range"].read(before, "left")


def test_a_drag_is_one_step_and_previews_on_the_way(floor):
    view = floor(ROADSTER)
    start = view.scene.places[INNER]
    end = pull(view, start, moved_by(start, 0.0, 30.0))
    assert view.document.undo_text is None
    assert view.scene.places[INNER][1] == pytest.approx(start[1] + 30.0, abs=2.0)
    release(view, end)
    assert view.document.undo_text == "move tie rod inner"
    view.document.undo()
    assert view.document.undo_text is None


def test_escape_puts_a_dragged_nail_back(floor, qtbot):
    view = floor(ROADSTER)
    start = view.scene.places[INNER]
    end = pull(view, start, moved_by(start, 40.0, 30.0))
    qtbot.keyClick(view.canvas, Qt.Key.Key_Escape)
    view.document.settle()
    assert view.document.layout == ROADSTER
    assert view.scene.places[INNER] == pytest.approx(start)
    move(view, end + QPointF(30, 0))
    release(view, end)
    view.document.settle()
    assert view.document.layout == ROADSTER and view.document.undo_text is None


def test_another_button_puts_a_dragged_nail_back(floor):
    view = floor(ROADSTER)
    start = view.scene.places[INNER]
    end = pull(view, start, moved_by(start, 40.0, 30.0))
    press(view, end, button=Qt.MouseButton.RightButton)
    release(view, end)
    assert view.document.layout == ROADSTER


def test_a_press_without_a_move_only_chooses(floor):
    view = floor(ROADSTER)
    px = at(view, view.scene.places[INNER])
    press(view, px)
    move(view, px + QPointF(1, 1))
    release(view, px + QPointF(1, 1))
    assert view.chosen == INNER
    assert view.document.layout == ROADSTER and view.document.undo_text is None


def test_a_nail_does_not_jump_to_the_pointer_that_takes_its_rim(floor):
    view = floor(ROADSTER)
    view.snapping = False
    start = view.scene.places[INNER]
    px = at(view, start) + QPointF(4, 3)
    press(view, px)
    move(view, px + QPointF(20, 0))
    release(view, px + QPointF(20, 0))
    new = view.document.layout.point(*INNER)
    assert new.over == pytest.approx(start[0] + 20 / view.canvas.dots, abs=1e-6)
    assert new.up == ROADSTER.point(*INNER).up


def test_alt_frees_a_drag_from_the_tape(floor):
    view = floor(ROADSTER)
    start = view.scene.places[INNER]
    px = at(view, start)
    press(view, px, modifiers=ALT)
    move(view, px + QPointF(11, -7), modifiers=ALT)
    release(view, px + QPointF(11, -7), modifiers=ALT)
    new = view.document.layout.point(*INNER)
    assert new.over == pytest.approx(start[0] + 11 / view.canvas.dots, abs=1e-6)
    assert new.up == pytest.approx(start[1] + 7 / view.canvas.dots, abs=1e-6)


def test_shift_keeps_a_drag_straight(floor):
    view = floor(ROADSTER)
    start = view.scene.places[INNER]
    drag(view, start, moved_by(start, 9.0, 40.0), SHIFT)
    new = view.document.layout.point(*INNER)
    assert new.over == ROADSTER.point(*INNER).over
    assert new.up > start[1] + 30.0


def test_the_mirrored_side_follows_and_the_unlinked_one_does_not(floor):
    view = floor(ROADSTER)
    start = view.scene.places["right", UPPER_INNER]
    assert start[0] < 0.0
    drag(view, start, moved_by(start, -20.0, 0.0))
    assert view.document.layout.left[UPPER_INNER].over > ROADSTER.left[UPPER_INNER].over + 15.0
    assert view.document.layout.linked

    view = floor(UNEQUAL_SIDES)
    start = view.scene.places["right", UPPER_INNER]
    drag(view, start, moved_by(start, -20.0, 0.0))
    assert view.document.layout.left == UNEQUAL_SIDES.left
    assert view.document.layout.side("right")[UPPER_INNER].over > -start[0] + 15.0


def test_in_bump_a_drag_moves_the_ride_height_point_by_as_much(floor):
    view = floor(ROADSTER)
    view.document.set_travel(30.0, 30.0)
    view.document.settle()
    view.snapping = False
    key = ("left", LOWER_BALL)
    start = view.scene.places[key]
    old = ROADSTER.point(*key)
    assert start[1] > old.up + 20.0
    px = at(view, start)
    press(view, px)
    move(view, px + QPointF(0, -10))
    release(view, px + QPointF(0, -10))
    new = view.document.layout.point(*key)
    assert new.up == pytest.approx(old.up + 10 / view.canvas.dots, abs=1e-6)
    assert new.over == old.over


def test_a_locked_nail_stays_and_says_so(floor, qtbot):
    car = replace(ROADSTER, locked=frozenset({TIE_INNER}))
    view = floor(car)
    said = []
    view.announced.connect(said.append)
    start = view.scene.places[INNER]
    drag(view, start, moved_by(start, 40.0, 30.0))
    assert view.document.layout == car
    assert view.noticed is not None and "locked" in view.noticed[0]
    assert any("locked" in words for words in said)
    qtbot.keyClick(view.canvas, Qt.Key.Key_Up)
    assert view.document.layout == car


def test_the_car_as_found_is_only_looked_at(floor):
    job = SAMPLES["cut-springs"]
    view = floor(job)
    view.document.show_found(True)
    view.document.settle()
    start = view.scene.places[INNER]
    drag(view, start, moved_by(start, 40.0, 30.0))
    assert view.document.job == job
    assert view.noticed is not None and "as found" in view.noticed[0]


# --- keys ------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("car", "modifier", "inches_or_mm"),
    [
        (ROADSTER, Qt.KeyboardModifier.NoModifier, "1/16"),
        (ROADSTER, SHIFT, "1/2"),
        (ROADSTER, CTRL, "1/64"),
        (STRUT_CAR, Qt.KeyboardModifier.NoModifier, "1"),
        (STRUT_CAR, SHIFT, "10"),
        (STRUT_CAR, CTRL, "0.1"),
    ],
)
def test_arrow_keys_nudge_by_the_tapes_steps(floor, qtbot, car, modifier, inches_or_mm):
    view = floor(car)
    step = parse_length(inches_or_mm, car.units)
    for side, outward in (("left", Qt.Key.Key_Right), ("right", Qt.Key.Key_Left)):
        view.document.select(side, TIE_INNER)
        old = view.document.layout.point(side, TIE_INNER)
        qtbot.keyClick(view.canvas, outward, modifier)
        new = view.document.layout.point(side, TIE_INNER)
        assert (new.over, new.up) == (pytest.approx(old.over + step, abs=1e-9), old.up)
        qtbot.keyClick(view.canvas, Qt.Key.Key_Up, modifier)
        newer = view.document.layout.point(side, TIE_INNER)
        assert (newer.over, newer.up) == (new.over, pytest.approx(old.up + step, abs=1e-9))
        view.document.undo()
        view.document.undo()
        assert view.document.layout == car


def test_nudging_there_and_back_is_exact(floor, qtbot):
    view = floor(ROADSTER)
    view.document.select(*INNER)
    for _ in range(7):
        qtbot.keyClick(view.canvas, Qt.Key.Key_Down)
    for _ in range(7):
        qtbot.keyClick(view.canvas, Qt.Key.Key_Up)
    assert view.document.layout == ROADSTER


def test_tab_walks_the_nails_in_the_sheets_order_and_then_leaves(floor, qtbot):
    view = floor(CARS["steering-box-sedan"])
    said = []
    view.announced.connect(said.append)
    walked = []
    while view.walk(True):
        walked.append(view.chosen)
    expected = [
        key for key in view.document.layout.nails()
        if key[0] == "left" or "arm" in key[1]
    ]
    assert walked == expected
    assert len(said) == len(walked)
    assert said[0] == "Lower inner pivot: 9 1/4 over, 6 9/16 up, inches"
    assert view.walk(False)
    assert view.chosen == expected[-2]
    view.document.select(*expected[0])
    assert not view.walk(False)


def test_tab_key_reaches_the_walk(floor, qtbot):
    view = floor(ROADSTER)
    view.document.select(*INNER)
    qtbot.keyClick(view.canvas, Qt.Key.Key_Tab)
    order = view.walkable()
    assert view.chosen == order[order.index(INNER) + 1]
    qtbot.keyClick(view.canvas, Qt.Key.Key_Backtab, SHIFT)
    assert view.chosen == INNER


def test_unlinked_sides_are_both_walked(floor):
    view = floor(UNEQUAL_SIDES)
    assert view.walkable() == list(UNEQUAL_SIDES.nails())


def test_typing_a_place_is_asked_for_by_key_and_double_click(floor, qtbot):
    view = floor(ROADSTER)
    view.document.select(*INNER)
    with qtbot.waitSignal(view.place_asked) as asked:
        qtbot.keyClick(view.canvas, Qt.Key.Key_Return)
    assert tuple(asked.args) == INNER
    with qtbot.waitSignal(view.place_asked):
        view.double_click(at(view, view.scene.places[INNER]))


# --- zoom and pan -----------------------------------------------------------------------


def test_the_wheel_zooms_at_the_pointer(floor):
    view = floor(ROADSTER)
    px = QPointF(600, 120)
    before, dots = view.canvas.to_mm(px), view.canvas.dots
    wheel = QWheelEvent(
        px, view.viewport().mapToGlobal(px), QPoint(), QPoint(0, 240), Qt.MouseButton.NoButton,
        Qt.KeyboardModifier.NoModifier, Qt.ScrollPhase.NoScrollPhase, False,
    )
    QApplication.sendEvent(view.viewport(), wheel)
    assert view.canvas.dots > 1.3 * dots
    assert view.canvas.to_mm(px) == pytest.approx(before, abs=1.0 / view.canvas.dots)


@pytest.mark.parametrize("button", [Qt.MouseButton.MiddleButton, Qt.MouseButton.LeftButton])
def test_middle_or_space_drag_pans(floor, qtbot, button):
    view = floor(ROADSTER)
    if button == Qt.MouseButton.LeftButton:
        qtbot.keyPress(view.canvas, Qt.Key.Key_Space)
    start = view.scene.places[INNER]
    px = at(view, start)
    press(view, px, button=button)
    move(view, px + QPointF(50, 20), button=button)
    release(view, px + QPointF(50, 20), button=button)
    now = at(view, start)
    assert (now.x(), now.y()) == pytest.approx((px.x() + 50, px.y() + 20), abs=1.0)
    assert view.document.layout == ROADSTER


def test_fit_shows_the_whole_car_again(floor):
    view = floor(ROADSTER)
    fitted = view.canvas.in_view()
    view.zoom_in()
    view.zoom_in()
    assert view.canvas.in_view() != pytest.approx(fitted)
    view.double_click(QPointF(5, 5))
    assert view.canvas.in_view() == pytest.approx(fitted, abs=2.0)
    port = view.viewport().rect()
    for place in view.scene.places.values():
        assert port.contains(at(view, place).toPoint())


def test_the_pointers_place_is_told(floor, qtbot):
    view = floor(ROADSTER)
    with qtbot.waitSignal(view.pointer_moved) as told:
        hover(view, (100.0, 200.0))
    assert told.args == pytest.approx([100.0, 200.0], abs=1.0)


# --- the measuring tape -------------------------------------------------------------------


def test_the_tape_measures_between_nails(floor):
    view = floor(ROADSTER)
    view.tape_mode = True
    start = view.scene.places["left", LOWER_BALL]
    end = view.scene.places["right", LOWER_BALL]
    px = at(view, start) + QPointF(3, -2)
    press(view, px)
    move(view, at(view, (0.0, 100.0)))
    release(view, at(view, end) + QPointF(-2, 3))
    assert view.tape_ends == (start, end)
    assert view.tape_words() == "48 7/8 in: 48 7/8 over · 0 up · 0.0°"
    assert view.document.layout == ROADSTER and view.chosen is None
    view.tape_mode = False
    assert view.tape_ends == ()


def test_the_tape_works_by_keys(floor, qtbot):
    view = floor(ROADSTER)
    with qtbot.waitSignal(view.tape_mode_changed):
        qtbot.keyClick(view.canvas, Qt.Key.Key_T)
    view.document.select("left", LOWER_BALL)
    qtbot.keyClick(view.canvas, Qt.Key.Key_Return)
    view.document.select("left", UPPER_INNER)
    qtbot.keyClick(view.canvas, Qt.Key.Key_Return)
    assert view.tape_ends == (
        view.scene.places["left", LOWER_BALL],
        view.scene.places["left", UPPER_INNER],
    )
    qtbot.keyClick(view.canvas, Qt.Key.Key_Escape)
    assert not view.tape_mode and view.tape_ends == ()


# --- the menu -------------------------------------------------------------------------------


def test_the_menu_locks_and_sends_to_the_best_fit(floor):
    view = floor(RACK_LOW)
    best = view.document.solution.left.pivots.place("best fit")
    texts = [a.text() for a in nail_menu(view, INNER).actions()]
    assert "Send to the best fit" in texts
    assert "Send to the best fit" not in [
        a.text() for a in nail_menu(view, ("left", LOWER_BALL)).actions()
    ]
    send_to_pivot(view, INNER, "best fit")
    new = view.document.layout.left[TIE_INNER]
    assert new == Point(*best, RACK_LOW.left[TIE_INNER].fore)
    menu = nail_menu(view, INNER)
    next(a for a in menu.actions() if a.text() == "&Lock").trigger()
    assert TIE_INNER in view.document.layout.locked
    assert view.scene.nails.nails == {} or not view.document.settle()
    assert view.scene.nails.nails[INNER].locked


# --- tags ----------------------------------------------------------------------------------

POSES = {
    "ride": ((0.0, 0.0), 0.0),
    "bump": ((60.0, 60.0), 0.0),
    "roll and steer": ((45.0, -45.0), 30.0),
    "out of reach": ((700.0, 0.0), 0.0),
}


@pytest.mark.parametrize("car", [*CARS, *DEGENERATE])
@pytest.mark.parametrize("pose", POSES)
def test_tags_never_overlap_or_leave_the_floor(floor, car, pose):
    view = floor(CARS.get(car) or DEGENERATE[car])
    travel, rack = POSES[pose]
    view.document.set_travel(*travel)
    view.document.set_rack(rack)
    view.document.select(*INNER)
    view.document.settle()
    view.hover(("right", LOWER_BALL))
    for zoom in (1.0, 2.5, 3.0):
        view.canvas.zoom(zoom)
        rects = {
            key: tag.sceneTransform().mapRect(tag.boundingRect())
            for key, tag in view.scene.tags._tags.items()
            if tag.isVisible()
        }
        painted = {
            key: view.scene.tags._tags[key]
            .deviceTransform(view.canvas.viewportTransform())
            .mapRect(view.scene.tags._tags[key].boundingRect())
            for key in rects
        }
        assert painted
        port = view.viewport().rect()
        for key, rect in painted.items():
            assert rect.left() >= 0 and rect.top() >= 0, key
            assert rect.right() <= port.width() and rect.bottom() <= port.height(), key
            tag = view.scene.tags._tags[key]
            for text in (tag.title, tag.detail):
                if text.isVisible():
                    assert tag.boundingRect().contains(text.mapRectToParent(text.boundingRect()))
        for (one, a), (two, b) in combinations(painted.items(), 2):
            assert not a.intersects(b), (one, two)


@pytest.mark.parametrize("car", [*CARS, *DEGENERATE])
def test_no_tag_says_nan(floor, car):
    view = floor(CARS.get(car) or DEGENERATE[car])
    for travel, rack in POSES.values():
        view.document.set_travel(*travel)
        view.document.set_rack(rack)
        view.document.settle()
        words = " ".join(
            f"{tag.title.text()} {tag.detail.text()}" for tag in view.scene.tags._tags.values()
        )
        assert "nan" not in words.lower().split() and "inf" not in words.lower().split()


def test_out_of_reach_says_where_it_stops(floor):
    view = floor(ROADSTER)
    view.document.set_travel(700.0, 700.0)
    view.document.settle()
    droop, bump = view.document.solution.left.stops
    tag = view.scene.tags._tags["reach"]
    assert tag.isVisible()
    assert tag.title.text().startswith("Can't reach here: stops at ")
    shown = tag.title.text().removeprefix("Can't reach here: stops at ").removesuffix(" in in bump")
    assert parse_length(shown, "in") == pytest.approx(bump, abs=INCH / 32 + 1e-9)
    # The wheels are then outlined where they stand at ride height.
    assert view.scene.places["left", LOWER_BALL] == pytest.approx(
        ROADSTER.left[LOWER_BALL][:2]
    )


def test_an_instant_center_off_the_floor_gets_an_edge_tag(floor):
    view = floor(ROADSTER)
    center = view.document.solution.left.now_view.instant_center[:, 0]
    assert not view.canvas.in_view()[0] < center[0] < view.canvas.in_view()[2]
    tag = view.scene.tags._tags["center left"]
    assert tag.isVisible() and tag.arrow.isVisible()
    assert tag.detail.text().startswith("-41 11/16 over")
    box = view.scene.tags.boxes["center left"]
    assert box.left == 4.0


def test_the_tag_of_a_hovered_nail_names_it(floor):
    view = floor(ROADSTER)
    hover(view, view.scene.places["right", UPPER_INNER])
    assert view.hovered == ("right", UPPER_INNER)
    tag = view.scene.tags._tags["nail 0"]
    assert (tag.title.text(), tag.detail.text()) == (
        "Upper inner pivot", "13 1/2 over · 15 3/8 up",
    )


# --- what is painted ---------------------------------------------------------------------


def color_at(view, mm):
    image = view.canvas.viewport().grab().toImage()
    return image.pixelColor(at(view, mm).toPoint())


def close(a: QColor, b: QColor, by: int = 45) -> bool:
    return max(abs(a.red() - b.red()), abs(a.green() - b.green()), abs(a.blue() - b.blue())) <= by


def test_the_cars_left_is_on_the_viewers_right(floor):
    view = floor(UNEQUAL_SIDES)
    left = at(view, view.scene.places["left", LOWER_BALL])
    right = at(view, view.scene.places["right", LOWER_BALL])
    assert left.x() > view.viewport().width() / 2 > right.x()


def test_tires_and_floor_have_their_colors(floor):
    for palette, dark in ((LIGHT, False), (DARK, True)):
        view = floor(STRUT_CAR)
        view.set_dark(dark)
        tire = QColor(palette.parts["tire"][0])
        for x in (735.0, -735.0):
            assert close(color_at(view, (x, 550.0)), tire)
        assert close(color_at(view, (150.0, 620.0)), QColor(palette.floor), 25)
        assert not close(color_at(view, (150.0, 620.0)), tire, 25)


def test_higher_places_are_painted_higher(floor):
    view = floor(ROADSTER)
    assert at(view, (0.0, 500.0)).y() < at(view, (0.0, 100.0)).y()


def below_tags(view):
    return {i for i in view.scene.items() if i.topLevelItem().zValue() < TAGS_Z - 1.0}


def test_items_are_kept_while_the_car_keeps_its_nails(floor):
    view = floor(ROADSTER)
    start = view.scene.places[INNER]
    drag(view, start, moved_by(start, 20.0, 20.0))
    nails, items = dict(view.scene.nails.nails), below_tags(view)
    start = view.scene.places[INNER]
    drag(view, start, moved_by(start, -10.0, -15.0))
    assert view.scene.nails.nails == nails
    assert below_tags(view) == items


def test_another_car_gets_its_own_nails(floor):
    view = floor(ROADSTER)
    view.document.open_job(Job(STRUT_CAR), None)
    view.document.settle()
    assert set(view.scene.nails.nails) == set(STRUT_CAR.nails())
    assert view.scene.nails.nails.keys() == view.scene.places.keys()


def test_the_found_outline_shows_only_where_it_differs(floor):
    same = floor(SAMPLES["rack-set-low"])
    assert same.scene.parts.found.path().isEmpty()
    start = same.scene.places[INNER]
    drag(same, start, moved_by(start, 0.0, 12.7))
    assert not same.scene.parts.found.path().isEmpty()
    differs = floor(SAMPLES["cut-springs"])
    assert not differs.scene.parts.found.path().isEmpty()
