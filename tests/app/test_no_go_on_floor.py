"""No-go shapes drawn and moved on both floors with mouse and keys."""

from __future__ import annotations

from dataclasses import replace
from functools import partial

import pytest
from PySide6.QtCore import QEvent, Qt

from app.document import Document
from app.floor.above import AboveView
from app.floor.view import FloorView
from geometry.layout import Job
from tests.app.hands import NONE, at, drag, hover, press, pull, release, send
from tests.sample_cars import ROADSTER

BARE = Job(replace(ROADSTER, no_go=()))


def click(view, mm, modifiers=NONE) -> None:
    hover(view, mm)
    press(view, at(view, mm), modifiers=modifiers)
    release(view, at(view, mm), modifiers=modifiers)


def draw(view, *corners) -> None:
    """Click corners on the floor, mm, and close the shape with a double click on the last."""
    for corner in corners:
        click(view, corner)
    send(view, QEvent.Type.MouseButtonDblClick, at(view, corners[-1]))
    release(view, at(view, corners[-1]))
    view.document.settle()


@pytest.fixture
def make_floor(qtbot):
    """Makes one of the two floors of a car."""

    def make(name="front", job=BARE):
        view = (AboveView if name == "above" else FloorView)(Document(job))
        view.document.setParent(view)
        qtbot.addWidget(view)
        view.resize(840, 520)
        view.show()
        view.document.settle()
        view.fit()
        return view

    made = []

    def kept(*given, **named):
        made.append(make(*given, **named))
        return made[-1]

    yield kept
    for view in made:
        view.shapes.background.finish()


@pytest.fixture(params=["front", "above"])
def floor(request, make_floor):
    """Each of the two floors of a car that has no shapes yet, about to be drawn on."""
    view = make_floor(request.param)
    view.shapes.start_drawing()
    return view


def shapes(view):
    return view.document.layout.no_go


PAN = ((100.0, 150.0), (250.0, 150.0), (180.0, 260.0))


def floor_places(view, places=PAN):
    """The same measures as places on this floor, on the tape's fraction."""
    step = 25.4 / 16
    return [(round(a / step) * step, view.face.way * round(b / step) * step) for a, b in places]


def test_a_shape_is_drawn_corner_by_corner_as_one_step(floor):
    corners = floor_places(floor)
    draw(floor, *corners)
    (shape,) = shapes(floor)
    assert shape.view == floor.face.name
    assert shape.side is None, "it keeps to one side, so it stands mirrored"
    for made, wanted in zip(shape.outline, corners, strict=True):
        assert made[0] == pytest.approx(wanted[0], abs=1.6)
        assert floor.face.way * made[1] == pytest.approx(wanted[1], abs=1.6)
        sixteenths = made[0] / 25.4 * 16
        assert sixteenths == pytest.approx(round(sixteenths), abs=1e-9)
    assert floor.shapes.drawing is None
    assert floor.document.undo_text == "draw no-go shape"
    floor.document.undo()
    assert shapes(floor) == ()
    assert floor.document.undo_text is None


def test_the_first_corner_or_enter_closes_and_backspace_takes_one_back(floor, qtbot):
    corners = floor_places(floor)
    for corner in corners:
        click(floor, corner)
    click(floor, (400.0, floor.face.way * 300.0))
    qtbot.keyClick(floor.canvas, Qt.Key.Key_Backspace)
    click(floor, corners[0])
    assert len(shapes(floor)) == 1
    assert len(shapes(floor)[0].outline) == 3
    floor.shapes.start_drawing()
    for corner in corners[:2]:
        click(floor, corner)
    qtbot.keyClick(floor.canvas, Qt.Key.Key_Return)
    assert floor.shapes.drawing is not None, "two corners are no shape"
    assert floor.noticed is not None and "three corners" in floor.noticed[0]
    click(floor, corners[2])
    qtbot.keyClick(floor.canvas, Qt.Key.Key_Return)
    assert len(shapes(floor)) == 2
    assert len({shape.name for shape in shapes(floor)}) == 2


def test_escape_stops_drawing_and_nothing_is_made(floor, qtbot):
    click(floor, (100.0, floor.face.way * 100.0))
    qtbot.keyClick(floor.canvas, Qt.Key.Key_Escape)
    assert floor.shapes.drawing is None
    assert not floor.document.is_changed
    # The next click is a hand on the floor again.
    click(floor, (100.0, floor.face.way * 100.0))
    assert shapes(floor) == ()


def test_a_box_takes_two_clicks_and_across_the_middle_it_stands_once(floor):
    floor.shapes.start_drawing(boxed=True)
    way = floor.face.way
    click(floor, (-101.6, way * 152.4))
    click(floor, (203.2, way * 254.0))
    (shape,) = shapes(floor)
    assert shape.side == "left"
    overs = sorted({round(a, 6) for a, _ in shape.outline})
    seconds = sorted({round(b, 6) for _, b in shape.outline})
    assert overs == pytest.approx([-101.6, 203.2], abs=1.6)
    assert seconds == pytest.approx([152.4, 254.0], abs=1.6)


def test_clicks_on_one_line_are_refused_in_words(floor, qtbot):
    for x in (100.0, 200.0, 300.0):
        click(floor, (x, floor.face.way * 100.0))
    qtbot.keyClick(floor.canvas, Qt.Key.Key_Return)
    assert shapes(floor) == ()
    assert floor.noticed is not None and "one line" in floor.noticed[0]


def test_a_shape_is_dragged_whole_and_by_a_corner(floor, qtbot):
    corners = floor_places(floor)
    draw(floor, *corners)
    floor.shapes.let_go()
    before = shapes(floor)[0]
    way = floor.face.way
    middle = (177.0, way * 185.0)
    drag(floor, middle, (middle[0] + 50.8, middle[1] + 25.4))
    moved = shapes(floor)[0]
    assert floor.document.undo_text == "move no-go shape"
    for was, now in zip(before.outline, moved.outline, strict=True):
        assert now[0] - was[0] == pytest.approx(50.8, abs=1.6)
        assert way * (now[1] - was[1]) == pytest.approx(25.4, abs=1.6)
    corner = moved.outline[1]
    place = (corner[0], way * corner[1])
    drag(floor, place, (place[0] + 76.2, place[1]))
    bent = shapes(floor)[0]
    assert bent.outline[0] == moved.outline[0]
    assert bent.outline[2] == moved.outline[2]
    assert bent.outline[1][0] - corner[0] == pytest.approx(76.2, abs=1.6)
    assert floor.document.undo_text == "move corner"
    floor.document.undo()
    floor.document.undo()
    assert shapes(floor)[0] == before


def test_the_mirrored_side_is_dragged_the_other_way(floor):
    draw(floor, *floor_places(floor))
    before = shapes(floor)[0]
    way = floor.face.way
    drag(floor, (-177.0, way * 185.0), (-227.8, way * 185.0))
    assert shapes(floor)[0].outline[0][0] - before.outline[0][0] == pytest.approx(50.8, abs=1.6)
    assert shapes(floor)[0].outline[0][1] == before.outline[0][1]


def test_escape_puts_a_dragged_shape_back(floor, qtbot):
    draw(floor, *floor_places(floor))
    before = shapes(floor)
    pull(floor, (177.0, floor.face.way * 185.0), (300.0, floor.face.way * 185.0))
    assert shapes(floor) != before
    qtbot.keyClick(floor.canvas, Qt.Key.Key_Escape)
    assert shapes(floor) == before
    assert floor.document.undo_text == "draw no-go shape"


def test_keys_nudge_walk_and_delete(floor, qtbot):
    draw(floor, *floor_places(floor), (120.0, floor.face.way * 240.0))
    before = shapes(floor)[0]
    canvas = floor.canvas
    qtbot.keyClick(canvas, Qt.Key.Key_Right)
    moved = shapes(floor)[0]
    assert [b[0] - a[0] for a, b in zip(before.outline, moved.outline, strict=True)] == (
        pytest.approx([25.4 / 16] * 4)
    )
    qtbot.keyClick(canvas, Qt.Key.Key_PageDown)
    assert floor.shapes.held.corner == 0
    qtbot.keyClick(canvas, Qt.Key.Key_Up, Qt.KeyboardModifier.ShiftModifier)
    up = shapes(floor)[0]
    assert up.outline[1:] == moved.outline[1:]
    assert floor.face.way * (up.outline[0][1] - moved.outline[0][1]) == pytest.approx(12.7)
    qtbot.keyClick(canvas, Qt.Key.Key_Delete)
    assert len(shapes(floor)[0].outline) == 3
    qtbot.keyClick(canvas, Qt.Key.Key_PageDown)
    qtbot.keyClick(canvas, Qt.Key.Key_Delete)
    assert len(shapes(floor)[0].outline) == 3, "three corners are the least"
    qtbot.keyClick(canvas, Qt.Key.Key_PageUp)
    qtbot.keyClick(canvas, Qt.Key.Key_Delete)
    assert shapes(floor) == ()
    for _ in range(5):
        floor.document.undo()
    assert shapes(floor) == ()
    assert floor.document.undo_text is None


def test_the_held_shape_says_how_much_room_it_leaves(make_floor, qtbot):
    view = make_floor()
    view.shapes.start_drawing(boxed=True)
    inner = ROADSTER.left["tie rod inner"]
    low = inner.up + 100.0
    click(view, (-100.0, low))
    click(view, (100.0, low + 50.0))
    qtbot.waitUntil(lambda: "of room to the rack" in view.shapes.room_words, timeout=5000)
    pull(view, (0.0, low + 25.0), (0.0, low - 75.0))
    qtbot.waitUntil(lambda: "enters it by" in view.shapes.room_words, timeout=5000)
    qtbot.keyClick(view.canvas, Qt.Key.Key_Escape)
    qtbot.waitUntil(lambda: "of room to the rack" in view.shapes.room_words, timeout=5000)


def test_the_menu_draws_on_the_floor_in_sight_and_enter_names_the_shape(
    make_window, qtbot, answers
):
    window = make_window(BARE)
    window.commands.layout_commands.actions["draw no-go"].trigger()
    front = window.front
    draw(front, *floor_places(front))
    answers.do(partial(name_it, qtbot))
    qtbot.keyClick(front.canvas, Qt.Key.Key_Return)
    assert answers.said == ["No-go shapes"]
    assert shapes(front)[0].name == "oil pan"
    window.show_floor("above")
    above = window.floor
    click(above, (177.0, above.face.way * 185.0))
    assert above.shapes.held is None, "the other floor's shape"
    assert above.scene.no_go.places == []
    assert len(front.scene.no_go.places) == 2
    window.commands.layout_commands.actions["draw box"].trigger()
    assert (above.shapes.drawing, front.shapes.drawing) == ([], None)
    window.show_floor("front")
    assert above.shapes.drawing is None


def name_it(qtbot, dialog) -> None:
    dialog.name.clear()
    qtbot.keyClicks(dialog.name, "oil pan")
    qtbot.keyClick(dialog.name, Qt.Key.Key_Return)


def test_nothing_is_drawn_on_the_car_as_found(make_floor):
    view = make_floor(job=replace(BARE, found=BARE.planned))
    view.document.show_found(True)
    view.shapes.start_drawing()
    assert view.shapes.drawing is None
    assert view.noticed is not None and "as found" in view.noticed[0]
