"""The View menu: zoom, pose, which car, units, and how the window looks."""

from __future__ import annotations

from collections.abc import Callable
from functools import partial
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject
from PySide6.QtGui import QAction, QActionGroup
from PySide6.QtWidgets import QApplication, QMenu

from app import settings, theme

if TYPE_CHECKING:
    from app.commands import Commands

TEXT_SIZES = (100, 115, 130, 150, 175, 200)


class ViewCommands(QObject):
    """Fills the View menu and keeps its marks true. Nothing here is an undo step but units."""

    def __init__(self, commands: Commands, menu: QMenu) -> None:
        super().__init__(commands)
        self._commands = commands
        self._window = commands.window
        self._document = commands.document
        add, window = commands.add, self._window
        self._choice(menu, "floor", (("front", "From th&e front", "Ctrl+1"),
                                     ("above", "From a&bove", "Ctrl+2")), self._floor)
        menu.addSeparator()
        add(menu, "fit", "&Fit to floor", lambda: window.floor.fit(), "Ctrl+0", icon="fit")
        add(menu, "fit all", "Fit who&le car, from above", self._fit_all, "Ctrl+9")
        add(menu, "zoom in", "Zoom &in", lambda: window.floor.zoom_in(), "Ctrl++",
            icon="zoom-in")
        add(menu, "zoom out", "Zoom &out", lambda: window.floor.zoom_out(), "Ctrl+-",
            icon="zoom-out")
        menu.addSeparator()
        add(menu, "ride height", "Back to ride &height", self._window.stance_bar.ride_height,
            "Home", on_floor=True)
        add(menu, "tape", "&Tape measure", self._tape, "T", icon="tape-measure",
            checkable=True, on_floor=True)
        menu.addSeparator()
        self._choice(menu, "show", (("found", "As foun&d", "Ctrl+3"),
                                    ("planned", "As &planned", "Ctrl+4")), self._car)
        menu.addSeparator()
        self._choice(menu, "units", (("in", "In&ches", ""), ("mm", "&Millimeters", "")),
                     self._units)
        menu.addSeparator()
        dark = add(menu, "dark", "Dark floo&r", self._dark, icon="dark-floor", checkable=True)
        curves = add(menu, "curves", "Cur&ves under the floor", self._curves, checkable=True)
        add(menu, "curves large", "Curves in their own &window", self._window.curves.enlarge,
            "Ctrl+G", icon="curves")
        sizes = menu.addMenu("Te&xt size")
        self._choice(sizes, "text", tuple((str(p), f"{p} %", "") for p in TEXT_SIZES),
                     self._text_size)
        menu.addSeparator()
        add(menu, "next panel", "&Next panel", partial(self._window.walk_panels, 1), "F6")
        add(menu, "last panel", "L&ast panel", partial(self._window.walk_panels, -1), "Shift+F6")
        dark.setChecked(settings.get_bool("dark floor", False))
        curves.setChecked(settings.get_bool("curves shown", True))
        self._curves(curves.isChecked())
        now = settings.get_int("text size", 100, 100, 200)
        nearest = min(TEXT_SIZES, key=lambda percent: abs(percent - now))
        commands.check(f"text {nearest}", True)

    def _choice(
        self,
        menu: QMenu,
        name: str,
        entries: tuple[tuple[str, str, str], ...],
        act: Callable[..., object],
    ) -> None:
        """Entries of which one is marked; ``act`` gets the key of the one chosen."""
        group = QActionGroup(self._window)
        for key, words, keys in entries:
            action = QAction(words, self._window)
            action.setCheckable(True)
            if keys:
                action.setShortcut(keys)
            action.triggered.connect(partial(act, key))
            group.addAction(action)
            menu.addAction(action)
            self._commands.actions[f"{name} {key}"] = action

    def refresh(self) -> None:
        """Marks follow the document."""
        document = self._document
        self._commands.check(f"units {document.units}", True)
        self._commands.actions["show found"].setEnabled(document.job.found is not None)
        shown = "found" if document.showing_found else "planned"
        self._commands.check(f"show {shown}", True)
        above = self._window.floor.face.name == "above"
        self._commands.check(f"floor {'above' if above else 'front'}", True)

    def _floor(self, name: str, _checked: bool = True) -> None:
        self._window.show_floor(name)

    def _fit_all(self) -> None:
        self._window.show_floor("above")
        if self._window.above is not None:
            self._window.above.fit_all()

    def _tape(self, on: bool) -> None:
        self._window.floor.tape_mode = on

    def _car(self, which: str, _checked: bool = True) -> None:
        self._document.show_found(which == "found")

    def _units(self, unit: str, _checked: bool = True) -> None:
        self._document.set_units("mm" if unit == "mm" else "in")

    def _dark(self, on: bool) -> None:
        settings.put("dark floor", on)
        self._window.front.set_dark(on)
        if self._window.above is not None:
            self._window.above.set_dark(on)

    def _curves(self, on: bool) -> None:
        settings.put("curves shown", on)
        self._window.curve_stack.setVisible(on)

    def _text_size(self, percent: str, _checked: bool = True) -> None:
        settings.put("text size", int(percent))
        application = QApplication.instance()
        assert isinstance(application, QApplication)
        theme.dress(application, int(percent))
