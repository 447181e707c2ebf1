"""What can be done with a nail, on the right button or the menu key."""

from __future__ import annotations

from functools import partial
from typing import TYPE_CHECKING

from PySide6.QtWidgets import QMenu

from app.floor.nails import Key
from app.floor.wording import nail_name
from geometry.floor_words import capital
from geometry.layout import TIE_INNER, Point

if TYPE_CHECKING:
    from app.floor.view import FloorView


def nail_menu(view: FloorView, key: Key | None) -> QMenu:
    """The menu for a nail, or for the bare floor."""
    menu = QMenu(view)
    if key is None:
        menu.addAction("&Fit to floor", view.fit)
        tape = menu.addAction("&Tape measure")
        tape.setCheckable(True)
        tape.setChecked(view.tape_mode)
        tape.toggled.connect(partial(setattr, view, "tape_mode"))
        shape_entries(view, menu)
        return menu
    layout = view.document.layout
    free = not view.document.showing_found
    locked = key[1] in layout.locked
    menu.addSection(nail_name(layout, key))
    typed = menu.addAction("&Type a place…", partial(view.place_asked.emit, *key))
    typed.setEnabled(free and not locked)
    words = "&Unlock" if locked else "&Lock"
    lock = menu.addAction(words, partial(view.document.set_locked, key[1], not locked))
    lock.setEnabled(free)
    if key[1] == TIE_INNER:
        for kind in ("best fit", "curvature center", "string rule"):
            place = view.document.solution.sides[key[0]].pivots.place(kind)
            act = menu.addAction(f"Send to the {kind}", partial(send_to_pivot, view, key, kind))
            act.setEnabled(free and not locked and place is not None)
    return menu


def send_to_pivot(view: FloorView, key: Key, kind: str) -> None:
    """Move an inner tie-rod pivot to one of its three places, at its fore as measured."""
    place = view.document.solution.sides[key[0]].pivots.place(kind)
    if place is not None and view.may_move(key):
        fore = view.document.settled_layout().point(*key).fore
        view.document.move_point(*key, Point(*place, fore))
        view.announce_nail(key)


def shape_entries(view: FloorView, menu: QMenu) -> None:
    """What can be done about no-go shapes on the bare floor, or with the one that is held."""
    menu.addSeparator()
    menu.addAction("&Draw a no-go shape", view.shapes.start_drawing)
    menu.addAction("Draw a no-go &box", partial(view.shapes.start_drawing, boxed=True))
    held, shape = view.shapes.held, view.shapes.held_shape()
    if held is None or shape is None:
        return
    menu.addSection(capital(shape.name))
    menu.addAction("&Name, room and corners…", partial(view.shape_asked.emit, held.index))
    what = "shape" if held.corner is None else "corner"
    menu.addAction(f"Take {what} &away", view.shapes.delete)
