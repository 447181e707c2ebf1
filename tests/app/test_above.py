"""The floor from above under a hand, the steering card beside it, and the body rolled over."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from PySide6.QtCore import QPointF, Qt
from PySide6.QtWidgets import QApplication

from app.document import Document
from app.floor.above import AboveView
from app.panels.percent_dialog import PercentDialog
from geometry.faces import ABOVE
from geometry.finding_checks.wording import Wording
from geometry.kingpin_sketch import kingpin_sketches
from geometry.layout import LOWER_BALL, SIDES, TIE_INNER, TIE_OUTER, Job, Layout
from geometry.lengths import parse_length
from geometry.plan_figures import plan_figures
from geometry.plan_view import plan_of
from geometry.roll import rolled
from geometry.solution import solve
from geometry.standing import nail_places
from geometry.steered_now import steered_now
from geometry.steering_arm import arm_for_percent, string_check, swapped_knuckles
from geometry.steering_rows import degrees
from tests.app.hands import drag, move, press, pull, release
from tests.sample_cars import CARS, DEGENERATE, ROADSTER, SAMPLES, UNEQUAL_SIDES

OUTER = ("left", TIE_OUTER)
INCH = 25.4
SHIFT, CTRL = Qt.KeyboardModifier.ShiftModifier, Qt.KeyboardModifier.ControlModifier


@pytest.fixture
def above(qtbot):
    """Makes a shown floor from above for a car or job."""

    def make(car: Layout | Job, size: tuple[int, int] = (840, 520)) -> AboveView:
        view = AboveView(Document(car if isinstance(car, Job) else Job(car)))
        view.document.setParent(view)
        qtbot.addWidget(view)
        view.resize(*size)
        view.show()
        view.document.settle()
        view.fit()
        return view

    return make


def figures_of(window, qtbot):
    """Wait until the worker's figures are of the car as it stands."""
    window.document.settle()
    qtbot.waitUntil(lambda: window.plan_watch.current is not None, timeout=20_000)
    return window.plan_watch.current


# --- dragging ------------------------------------------------------------------------


@pytest.mark.parametrize("car", ["healthy-roadster", "skewed-arms", "steering-box-sedan",
                                 "unequal-sides", "strut-hatch"])
def test_dragging_each_nail_moves_it_over_and_fore_and_keeps_its_height(above, car):
    view = above(CARS[car])
    document = view.document
    view.canvas.zoom(1.5)
    step = INCH / 16 if document.units == "in" else 1.0
    for key in list(view.scene.places):
        before = document.layout
        old, start = before.point(*key), view.scene.places[key]
        view.canvas.reveal(*start)
        document.select(*key)
        drag(view, start, (start[0] + 17.0, start[1] - 23.0))
        new = document.layout.point(*key)
        outward = 1 if key[0] == "left" else -1
        assert new.over == pytest.approx(old.over + outward * 17.0, abs=0.51 * step + 1.0)
        # Up the screen is rearward, so down the y axis is forward.
        assert new.fore == pytest.approx(old.fore + 23.0, abs=0.51 * step + 1.0)
        assert new.up == old.up
        for value in (new.over, new.fore):
            assert round(value / step) * step == pytest.approx(value, abs=1e-9)
        assert document.undo_text == f"move {key[1]}"
        document.undo()
        document.settle()
        assert document.layout == before


def test_the_outer_end_dragged_from_rear_to_front_steer_never_jumps(above):
    view = above(ROADSTER, (900, 700))
    document = view.document
    document.select(*OUTER)
    start = view.scene.places[OUTER]
    wanted = (start[0] + 40.0, start[1] - 260.0)
    first, last = (QPointF(*view.canvas.to_px(*place)) for place in (start, wanted))
    press(view, first)
    before = start
    for share in np.linspace(0.0, 1.0, 60):
        move(view, first + float(share) * (last - first))
        document.settle()
        now = view.scene.places[OUTER]
        assert all(math.isfinite(value) for value in now)
        # A step of the hand is some 5 mm; the nail stays under it all the way.
        assert math.dist(now, before) < 12.0
        before = now
    release(view, last)
    document.settle()
    point = document.layout.point(*OUTER)
    assert ROADSTER.point(*OUTER).fore < 0.0 < point.fore
    assert point.fore == pytest.approx(-wanted[1], abs=2.0)
    assert document.undo_text == "move tie rod outer"
    document.undo()
    document.settle()
    assert document.layout == ROADSTER and document.undo_text is None


def test_escape_puts_a_dragged_nail_back(above, qtbot):
    view = above(ROADSTER)
    start = view.scene.places[OUTER]
    end = pull(view, start, (start[0], start[1] - 60.0))
    assert view.scene.places[OUTER][1] == pytest.approx(start[1] - 60.0, abs=2.0)
    qtbot.keyClick(view.canvas, Qt.Key.Key_Escape)
    release(view, end)
    view.document.settle()
    assert view.document.layout == ROADSTER


def test_arrow_keys_nudge_over_and_fore_down_being_forward(above, qtbot):
    view = above(ROADSTER)
    view.document.select(*OUTER)
    view.canvas.setFocus()
    for key, modifiers, over, fore in (
        (Qt.Key.Key_Down, Qt.KeyboardModifier.NoModifier, 0.0, INCH / 16),
        (Qt.Key.Key_Up, SHIFT, 0.0, -INCH / 2),
        (Qt.Key.Key_Right, CTRL, INCH / 64, 0.0),
    ):
        old = view.document.layout.point(*OUTER)
        qtbot.keyClick(view.canvas, key, modifiers)
        new = view.document.layout.point(*OUTER)
        assert new.over - old.over == pytest.approx(over, abs=1e-9)
        assert new.fore - old.fore == pytest.approx(fore, abs=1e-9)
        assert new.up == old.up


def test_a_locked_nail_stays_and_says_so(above):
    view = above(replace(ROADSTER, locked=frozenset({TIE_OUTER})))
    start = view.scene.places[OUTER]
    drag(view, start, (start[0] + 30.0, start[1] + 30.0))
    assert view.document.layout.point(*OUTER) == ROADSTER.point(*OUTER)
    assert view.noticed is not None and "locked" in view.noticed[0]


def test_tab_walks_the_nails_and_a_screen_reader_hears_over_and_fore(above, qtbot):
    view = above(ROADSTER)
    heard: list[str] = []
    view.announced.connect(heard.append)
    view.walk(True)
    assert view.chosen == ("left", "lower inner pivot")
    view.choose(OUTER)
    assert "23 over, -5 1/8 fore" in heard[-1]


def test_the_pointer_tells_over_and_fore(above):
    view = above(ROADSTER)
    told: list[tuple[float, float]] = []
    view.pointer_moved.connect(lambda over, fore: told.append((over, fore)))
    move(view, QPointF(*view.canvas.to_px(250.0, -130.0)), button=Qt.MouseButton.NoButton)
    assert told[-1] == pytest.approx((250.0, 130.0), abs=1.5)


# --- what stands there -----------------------------------------------------------------


@pytest.mark.parametrize("car", CARS)
def test_lock_to_lock_shows_only_poses_that_exist(above, car):
    view = above(CARS[car])
    document = view.document
    plan = plan_of(CARS[car])
    for rack in np.linspace(plan.rack[0], plan.rack[-1], 15):
        document.set_rack(float(rack))
        document.settle()
        assert all(stand.meets for stand in view.scene.stands.values())
        expected = nail_places(solve(CARS[car], 0.0, float(rack)), ABOVE)
        for key, place in view.scene.places.items():
            assert place == pytest.approx(expected[key], abs=1e-9)
            assert all(math.isfinite(value) for value in place)


@pytest.mark.parametrize("car", {**CARS, **DEGENERATE})
def test_any_car_is_shown_beyond_its_locks_too(above, car):
    view = above({**CARS, **DEGENERATE}[car])
    for rack in (0.0, 95.0, -240.0):
        view.document.set_rack(rack)
        view.document.settle()
        assert not view.grab().isNull()
        view.drawing()


@pytest.mark.parametrize("car", CARS)
@pytest.mark.parametrize("rack", [0.0, 45.0])
def test_tags_never_cover_each_other_and_forward_is_always_told(above, car, rack):
    view = above(CARS[car])
    view.document.set_rack(rack)
    view.document.settle()
    boxes = view.scene.tags.boxes
    assert "front" in boxes
    port = view.viewport().rect()
    names = list(boxes)
    for at, one in enumerate(names):
        box = boxes[one]
        assert box.left >= 0 and box.top >= 0
        assert box.right <= port.width() and box.bottom <= port.height()
        assert not any(box.overlaps(boxes[other]) for other in names[at + 1 :])


def test_fit_shows_the_front_end_and_fit_all_the_rear_axle(above):
    view = above(ROADSTER)
    assert view.canvas.in_view()[3] < ROADSTER.wheelbase
    view.fit_all()
    assert view.canvas.in_view()[3] > ROADSTER.wheelbase
    tires = [stand.points["wheel center"] for stand in view.scene.stands.values()]
    for place in tires:
        x, y = view.canvas.to_px(*place)
        assert 0 < x < view.viewport().width() and 0 < y < view.viewport().height()


def test_a_floor_out_of_sight_follows_nothing_until_it_is_woken(above):
    view = above(ROADSTER)
    view.wake(False)
    before = view.scene.places[OUTER]
    view.document.move_point(*OUTER, ROADSTER.point(*OUTER)._replace(fore=-100.0))
    view.document.settle()
    assert view.scene.places[OUTER] == before
    view.wake(True)
    assert view.scene.places[OUTER][1] == pytest.approx(100.0)


# --- the window --------------------------------------------------------------------------


def test_both_floors_take_turns_and_keep_the_chosen_nail(window, qtbot):
    document = window.document
    document.select("left", LOWER_BALL)
    front = window.floor
    window.commands.actions["floor above"].trigger()
    assert window.floor is window.above and window.above.isVisible() and not front.isVisible()
    assert window.steering_panel.isVisible() and not window.readouts_panel.isVisible()
    assert window.lock_curves.isVisible() and not window.curves.isVisible()
    assert window.floor.chosen == ("left", LOWER_BALL)
    window.commands.actions["zoom in"].trigger()
    assert not window.above.canvas.fitted and front.canvas.fitted
    start = window.floor.scene.places[OUTER]
    drag(window.floor, start, (start[0] + 20.0, start[1]))
    window.commands.actions["floor front"].trigger()
    assert window.floor is front and front.isVisible()
    x = front.scene.places[OUTER][0]
    assert x == pytest.approx(document.layout.point(*OUTER).over)
    assert x != pytest.approx(ROADSTER.point(*OUTER).over)


def test_finding_of_the_plan_joins_the_list_and_points_at_its_nail(make_window, qtbot):
    out = ROADSTER.point(*OUTER)
    car = ROADSTER.with_point("left", TIE_OUTER, out._replace(over=out.over + 60.0))
    window = make_window(Job(car))
    qtbot.waitUntil(
        lambda: "reverse-ackermann" in {f.code for f in window.document.findings}, timeout=20_000
    )
    found = next(f for f in window.document.findings if f.code == "reverse-ackermann")
    window.show_floor("above")
    window.floor.point_out(found)
    assert window.document.selection == OUTER


@pytest.mark.parametrize("car", ["healthy-roadster", "unequal-sides", "steering-box-sedan",
                                 "front-steer-coupe", "strut-hatch"])
def test_the_cards_figures_are_the_geometrys(make_window, qtbot, car):
    window = make_window(SAMPLES[car])
    window.show_floor("above")
    layout = SAMPLES[car].planned
    document, panel = window.document, window.steering_panel
    document.set_rack(35.0)
    figures_of(window, qtbot)
    now = steered_now(solve(layout, 0.0, 35.0))
    assert now is not None and now.scrub is not None
    for side, right in (("left", False), ("right", True)):
        words = "left" if now.turned[side] > 0 else "right"
        assert panel.now.text_of("turned", right) == f"{degrees(abs(now.turned[side]))} {words}"
        assert panel.now.text_of("scrub now", right) == degrees(now.scrub[side])
    assert f"{round(now.percent)} % here" in panel.percent.text()
    plan = plan_of(layout)
    assert f"{round(plan.straight_ahead_percent)} % near straight ahead" in panel.percent.text()
    for turn, right in (("left", False), ("right", True)):
        percent, circle = plan.lock_percent[turn], plan.turning_circle[turn]
        assert panel.locks.text_of("percent", right) == f"{round(percent)} %"
        assert panel.locks.text_of("toe out", right) == degrees(plan.toe_out[turn].excess)
        assert panel.locks.text_of("inner", right) == degrees(plan.inner[plan.stop(turn)])
        shown = panel.locks.text_of("curb", right)
        if document.units == "in":
            feet, _, rest = shown.partition(" ft")
            inches = 12 * int(feet) + int(rest.strip().removesuffix(" in") or 0)
            assert inches == round(circle.curb_to_curb / INCH)
        else:
            assert float(shown.removesuffix(" m")) == round(circle.curb_to_curb / 1000.0, 2)


@pytest.mark.parametrize("car", ["healthy-roadster", "strut-hatch", "unequal-sides"])
def test_the_kingpin_is_drawn_with_its_figures(make_window, qtbot, car):
    window = make_window(SAMPLES[car])
    window.show_floor("above")
    solution = window.document.solution
    sides = SIDES[:1] if solution.layout.linked else SIDES
    texts = window.steering_panel.kingpin.texts()
    assert len(texts) == 2 * len(sides)
    for side in sides:
        state = solution.sides[side]
        words = Wording(solution.layout.units)
        front, side_view = kingpin_sketches(state)
        # The drawn axis goes through both of its joints, as measured.
        upper = "strut top mount" if state.side.is_strut else "upper ball joint"
        for name in ("lower ball joint", upper):
            point = state.side[name]
            over, _ = front.axis(point.up)
            assert over == pytest.approx(point.over - float(state.ride.half_track[0]), abs=0.5)
            rearward, _ = side_view.axis(point.up)
            contact = float(state.ride.contact[0, 0])
            assert rearward == pytest.approx(contact - point.fore, abs=0.5)
        said = " ".join(texts)
        for figure in (state.ride.scrub_radius, state.ride.mechanical_trail):
            assert words.tape(float(figure[0])) in said
        for angle in (state.ride.kingpin_inclination, state.ride.caster):
            assert words.angle(float(angle[0])) in said


def test_the_string_check_follows_the_drag_and_needs_no_worker(window):
    window.show_floor("above")
    view, panel = window.floor, window.steering_panel
    start = view.scene.places[OUTER]
    pull(view, start, (start[0] - 25.0, start[1]))
    check = string_check(window.document.layout, "left")
    assert check is not None and check.off < -20.0
    assert "inboard of the string" in panel.string.text()
    assert view.scene.marks.checks["left"].off == pytest.approx(check.off)


def test_putting_the_arm_on_the_string_is_one_step_and_keeps_bump_steer(window, qtbot):
    window.show_floor("above")
    document, panel = window.document, window.steering_panel
    figures = figures_of(window, qtbot)
    before = document.layout
    panel.to_string.click()
    assert document.layout == figures.on_string.followed
    assert document.undo_text == "put steering arm on the string"
    for side in SIDES:
        check = string_check(document.layout, side)
        assert check is not None and check.off == pytest.approx(0.0, abs=1e-9)
    figures_of(window, qtbot)
    assert not panel.to_string.isEnabled()
    document.undo()
    assert document.layout == before and document.undo_text is None


def test_the_inner_pivot_may_be_left_alone(window, qtbot):
    window.show_floor("above")
    figures = figures_of(window, qtbot)
    window.steering_panel.follow.setChecked(False)
    window.steering_panel.to_string.click()
    assert window.document.layout == figures.on_string.layout
    assert window.document.layout.left[TIE_INNER] == ROADSTER.left[TIE_INNER]


def test_a_wanted_percentage_is_set_by_one_step(window, qtbot, answers):
    window.show_floor("above")
    figures = figures_of(window, qtbot)
    expected = arm_for_percent(solve(ROADSTER, span=window.document.span), figures.plan, 75.0)
    seen: list[str] = []

    def type_it(dialog):
        assert isinstance(dialog, PercentDialog)
        dialog.field.setText("nonsense")
        assert not dialog.ok.isEnabled() and "percentage" in dialog.answer.text()
        dialog.field.setText("75 %")
        qtbot.waitUntil(dialog.ok.isEnabled, timeout=20_000)
        seen.append(dialog.answer.text())
        dialog.ok.click()

    answers.do(type_it)
    window.steering_panel.to_percent.click()
    assert window.document.layout == expected.followed
    assert window.document.undo_text == "set percent Ackermann"
    # Bump steer is told in the same breath.
    assert "becomes 75 %" in seen[0] and "toe range" in seen[0]
    figures_of(window, qtbot)
    assert "75 % with the inner wheel at 20°" in window.steering_panel.percent.text()


def test_swapping_the_knuckles_is_one_step(window, qtbot):
    window.show_floor("above")
    window.steering_panel.swap.click()
    assert window.document.layout == swapped_knuckles(ROADSTER)
    assert window.document.undo_text == "swap knuckles"
    window.document.undo()
    assert window.document.layout == ROADSTER


def test_locked_ends_hold_the_buttons_back(make_window, qtbot):
    window = make_window(Job(replace(ROADSTER, locked=frozenset({TIE_OUTER}))))
    window.show_floor("above")
    figures_of(window, qtbot)
    panel = window.steering_panel
    for button in (panel.to_string, panel.to_percent, panel.swap):
        assert not button.isEnabled() and "locked" in button.toolTip()


def test_without_a_wheelbase_the_card_asks_for_it(make_window, qtbot):
    window = make_window(Job(replace(ROADSTER, wheelbase=None)))
    window.show_floor("above")
    figures_of(window, qtbot)
    panel = window.steering_panel
    assert "wheelbase" in panel.percent.text()
    assert panel.string.text() == "" and not panel.to_string.isEnabled()
    assert panel.locks.text_of("curb") == "–" and panel.locks.text_of("inner") != "–"


def test_a_drag_never_waits_for_the_plan(window, qtbot, monkeypatch):
    import app.plan_watch as plan_watch

    asked: list[Layout] = []

    def counted(layout, *args, **kwargs):
        asked.append(layout)
        return plan_figures(layout, *args, **kwargs)

    window.show_floor("above")
    figures_of(window, qtbot)
    monkeypatch.setattr(plan_watch, "plan_figures", counted)
    view = window.floor
    start = view.scene.places[OUTER]
    end = pull(view, start, (start[0] - 20.0, start[1] + 10.0))
    assert asked == []
    release(view, end)
    figures = figures_of(window, qtbot)
    assert asked[-1] == window.document.layout == figures.layout


def test_clicking_a_steering_curve_moves_the_rack(window, qtbot):
    window.show_floor("above")
    figures_of(window, qtbot)
    plot = window.lock_curves.plots[1]
    plot.plot.picked.emit(1.5)
    assert window.document.rack == pytest.approx(1.5 * INCH)
    plot.plot.picked.emit(50.0)
    assert window.document.rack == pytest.approx(float(plan_of(ROADSTER).rack[-1]))


@pytest.mark.parametrize("size", [(1280, 800), (1920, 1080)])
def test_nothing_in_the_card_is_cut(make_window, qtbot, size):
    window = make_window(Job(UNEQUAL_SIDES))
    window.resize(*size)
    window.show_floor("above")
    figures_of(window, qtbot)
    QApplication.processEvents()
    panel = window.steering_panel
    inner = panel.area.widget()
    assert inner.width() <= panel.area.viewport().width()
    for grid in (panel.now, panel.locks):
        for cells in grid._cells.values():
            for label in cells:
                assert label.width() >= label.sizeHint().width() - 1, label.text()


# --- roll ------------------------------------------------------------------------------------


@pytest.mark.parametrize("car", ["healthy-roadster", "strut-hatch", "unequal-sides"])
def test_a_rolled_body_stands_on_one_tilted_floor(car):
    document = Document(Job(CARS[car]))
    roll = math.radians(2.5)
    document.set_roll(roll)
    solution = document.solution
    pose = rolled(CARS[car], roll)
    assert solution.road is not None
    for side in SIDES:
        assert solution.travel[side] == pytest.approx(float(pose.sides[side].poses.travel[0]))
        assert float(solution.road.sides[side].camber[0]) == pytest.approx(
            float(pose.sides[side].camber[0]), abs=1e-9
        )
    assert float(solution.road.roll[0]) == pytest.approx(roll, abs=1e-9)
    assert solution.roll_center == pytest.approx(tuple(pose.roll_center[:, 0]), abs=1e-6)
    # Positive roll lifts the left side: its wheel droops.
    assert document.travel["left"] < 0.0 < document.travel["right"]
    assert document.level_travel == {"left": 0.0, "right": 0.0}


def test_roll_and_travel_stand_together_and_one_wheel_alone_ends_it():
    document = Document(Job(ROADSTER))
    document.set_roll(math.radians(2.0))
    document.set_travel(20.0, 20.0)
    assert 0.5 * sum(document.travel.values()) == pytest.approx(20.0)
    document.set_travel(left=50.0)
    assert document.roll == 0.0 and document.travel == {"left": 50.0, "right": 20.0}
    assert document.solution.road is not None
    document.set_travel(0.0, 0.0)
    assert document.solution.road is None and not document.is_changed


def test_the_roll_control_leans_the_body_and_home_levels_it(window, qtbot):
    bar, document = window.stance_bar, window.document
    bar.roll.field.setText("2.5")
    bar.roll.field.setModified(True)
    bar.roll.field.editingFinished.emit()
    document.settle()
    assert document.roll == pytest.approx(math.radians(2.5))
    assert bar.roll.field.text() == "2.5°" and bar.travel.field.text() == "0"
    assert "road" in window.floor.scene.tags.boxes
    bar.roll.field.setText("40")
    bar.roll.field.setModified(True)
    bar.roll.field.editingFinished.emit()
    assert document.roll == pytest.approx(math.radians(2.5))
    assert "15 degrees" in window.statusBar().currentMessage()
    bar.ride_height()
    document.settle()
    assert document.roll == 0.0 and document.travel == {"left": 0.0, "right": 0.0}


def test_length_text_is_still_read_by_the_travel_control(window):
    bar, document = window.stance_bar, window.document
    bar.travel.field.setText("1 1/2")
    bar.travel.field.setModified(True)
    bar.travel.field.editingFinished.emit()
    assert document.travel["left"] == parse_length("1 1/2", "in")
