"""Every menu command of the main window: its words, its keys and what it does."""

from __future__ import annotations

from collections.abc import Callable
from functools import partial
from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject
from PySide6.QtGui import QAction, QActionGroup, QIcon, QKeySequence
from PySide6.QtWidgets import QApplication, QMenu, QMessageBox

from app import files, settings, theme
from app.layout_commands import LayoutCommands
from app.resources import __version__, data_path
from geometry.measure_sheet import measure_sheet_from_text, starting_sheet, write_measure_sheet

if TYPE_CHECKING:
    from app.window import MainWindow

CAUTIONS = (
    "Steering and suspension can kill. Support the car on stands on hard, level ground with "
    "the wheels chocked; a jack is never a support.\n\n"
    "Heating, bending or welding a steering arm, knuckle or control arm is for qualified "
    "people and may be barred where you are: replace the part, or have it done by them.\n\n"
    "Torque castle nuts, tighten on to the next slot, and fit a new cotter pin. Have the "
    "finished work inspected and aligned before it goes on the road. Local codes rule.\n\n"
    "Bobline computes from what you measured. It does not know what a part can carry."
)

KEYS = (
    "Tab, Shift+Tab: walk the nails\n"
    "Arrow keys: nudge the chosen nail 1/16 in (1 mm); with Shift 1/2 in (10 mm); with Ctrl "
    "1/64 in (0.1 mm)\n"
    "Esc: put back a nail being dragged\n"
    "Alt while dragging: no snapping\n"
    "Mouse wheel: zoom at the pointer; middle button or Space and drag: pan\n"
    "T: tape measure from place to place\n"
    "Home: back to ride height, rack centered"
)


class Commands(QObject):
    """Builds the menus of a window and keeps their state true."""

    def __init__(self, window: MainWindow) -> None:
        super().__init__(window)
        self.window = window
        self.document = window.document
        self.actions: dict[str, QAction] = {}
        self._file_menu()
        self._edit_menu()
        self._view_menu()
        self._layout_menu()
        self._help_menu()
        self.document.edited.connect(self.refresh)
        self.refresh()

    # --- building -------------------------------------------------------------------

    def _add(
        self,
        menu: QMenu,
        name: str,
        words: str,
        act: Callable[..., object],
        keys: QKeySequence | QKeySequence.StandardKey | str | None = None,
        *,
        icon: str = "",
        checkable: bool = False,
    ) -> QAction:
        action = QAction(words, self.window)
        if keys is not None:
            action.setShortcut(QKeySequence(keys))
        if icon:
            action.setIcon(QIcon(str(data_path("icons") / f"{icon}.svg")))
        if checkable:
            action.setCheckable(True)
            action.toggled.connect(act)
        else:
            action.triggered.connect(lambda _checked=False: act())
        menu.addAction(action)
        self.actions[name] = action
        return action

    def _file_menu(self) -> None:
        standard = QKeySequence.StandardKey
        menu = self.window.menuBar().addMenu("&File")
        new = menu.addMenu("&New")
        kinds = (("A-arm", "A-&arm car…"), ("strut", "&Strut car…"),
                 ("relay rod", "A-arm car with &relay rod…"))
        for kind, words in kinds:
            self._add(new, f"new {kind}", words, partial(self.new, kind),
                      standard.New if kind == "A-arm" else None)
        self._add(menu, "open", "&Open…", self.open, standard.Open)
        self.samples = menu.addMenu("Open &sample")
        for path in sorted(data_path("sample_layouts").iterdir()):
            if path.suffix in (files.SUFFIX, ".csv"):
                words = path.stem.replace("-", " ").capitalize()
                suffix = " (measure sheet)" if path.suffix == ".csv" else ""
                self._add(self.samples, f"sample {path.name}", words + suffix,
                          partial(self.open_sample, path))
        self.recent = menu.addMenu("Open &recent")
        self.recent.aboutToShow.connect(self._fill_recent)
        menu.addSeparator()
        self._add(menu, "save", "&Save", self.save, standard.Save)
        self._add(menu, "save as", "Save &As…", self.save_as, "Ctrl+Shift+S")
        self._add(menu, "revert", "Re&vert…", self.revert)
        menu.addSeparator()
        self.export = menu.addMenu("&Export")
        self._add(self.export, "export png", "Floor picture, &PNG…", partial(self.picture, "png"))
        self._add(self.export, "export svg", "Floor picture, &SVG…", partial(self.picture, "svg"))
        self._add(self.export, "export csv", "&Measure sheet, CSV…", self.export_sheet)
        self._add(menu, "preview", "Print previe&w…", self.print_preview)
        self._add(menu, "print", "&Print…", self.print_floor, standard.Print)
        menu.addSeparator()
        self._add(menu, "quit", "&Quit", self.window.close, "Ctrl+Q")

    def _edit_menu(self) -> None:
        standard = QKeySequence.StandardKey
        menu = self.window.menuBar().addMenu("&Edit")
        self._add(menu, "undo", "&Undo", self.document.undo, standard.Undo)
        self._add(menu, "redo", "&Redo", self.document.redo, "Ctrl+Shift+Z")
        menu.addSeparator()
        self._add(menu, "link", "&Link sides (right mirrors left)", self._link, checkable=True)
        self._add(menu, "lock", "Loc&k chosen nail", self._lock, "Ctrl+L", checkable=True)
        self._add(menu, "snap", "S&nap to the tape", self._snap, checkable=True)
        menu.addSeparator()
        self._add(menu, "settings", "&Tolerances…", self.tolerances)

    def _view_menu(self) -> None:
        floor = self.window.floor
        menu = self.window.menuBar().addMenu("&View")
        self._add(menu, "fit", "&Fit to floor", floor.fit, "Ctrl+0")
        self._add(menu, "zoom in", "Zoom &in", floor.zoom_in, "Ctrl++")
        self._add(menu, "zoom out", "Zoom &out", floor.zoom_out, "Ctrl+-")
        menu.addSeparator()
        self._add(menu, "ride height", "Back to &ride height",
                  self.window.stance_bar.ride_height, "Home")
        self._add(menu, "tape", "&Tape measure", self._tape, "T", checkable=True)
        menu.addSeparator()
        units = QActionGroup(self)
        for unit, words in (("in", "&Inches"), ("mm", "&Millimeters")):
            action = QAction(words, self.window, checkable=True)
            action.triggered.connect(partial(self._units, unit))
            units.addAction(action)
            menu.addAction(action)
            self.actions[f"units {unit}"] = action
        menu.addSeparator()
        self._add(menu, "dark", "&Dark floor", self._dark, checkable=True)
        self.actions["dark"].setChecked(settings.get_bool("dark floor", False))
        size = menu.addMenu("Te&xt size")
        for percent in (100, 125, 150, 200):
            self._add(size, f"text {percent}", f"{percent} %", partial(self._text_size, percent))

    def _layout_menu(self) -> None:
        menu = self.window.menuBar().addMenu("&Layout")
        self._add(menu, "keep found", "&Keep as found", self.document.keep_as_found)
        self._add(menu, "from found", "&Plan again from as found", self.document.plan_from_found)
        self.layout_menu = menu
        self.layout_commands = LayoutCommands(self.window, menu)

    def _help_menu(self) -> None:
        menu = self.window.menuBar().addMenu("&Help")
        self._add(menu, "keys", "&Keys and mouse", partial(self._tell, "Keys and mouse", KEYS), "F1")
        self._add(menu, "cautions", "&Cautions", partial(self._tell, "Cautions", CAUTIONS))
        about = f"Bobline {__version__}\n\nThe shop floor for front ends: pivots in, centers out."
        self._add(menu, "about", "&About Bobline", partial(self._tell, "About Bobline", about))

    def _tell(self, title: str, words: str) -> None:
        QMessageBox.information(self.window, title, words)

    # --- state ----------------------------------------------------------------------

    def refresh(self) -> None:
        """Words and check marks follow the document."""
        document = self.document
        for name, text, verb in (
            ("undo", document.undo_text, "&Undo"),
            ("redo", document.redo_text, "&Redo"),
        ):
            self.actions[name].setText(f"{verb} {text}" if text else verb)
            self.actions[name].setEnabled(text is not None)
        self._check("link", document.layout.linked)
        chosen = document.selection
        self.actions["lock"].setEnabled(chosen is not None)
        self._check("lock", chosen is not None and chosen[1] in document.layout.locked)
        self._check("snap", self.window.floor.snapping)
        self.actions[f"units {document.units}"].setChecked(True)
        self.actions["revert"].setEnabled(document.path is not None and document.is_changed)
        self.actions["from found"].setEnabled(document.job.found is not None)

    def _check(self, name: str, on: bool) -> None:
        """Set a check mark without acting on it."""
        action = self.actions[name]
        blocked = action.blockSignals(True)
        action.setChecked(on)
        action.blockSignals(blocked)

    # --- file -----------------------------------------------------------------------

    def new(self, kind: str) -> None:
        self.window.open_new(measure_sheet_from_text(starting_sheet(kind)))

    def open(self) -> None:
        path = files.ask_open(self.window)
        if path is not None:
            self.window.open_path(path)

    def open_sample(self, path: Path) -> None:
        """Open a sample as a new, unsaved car, so that the sample itself stays as it is."""
        if files.may_close(self.document, self.window):
            job = files.read(path, self.window)
            if job is not None:
                self.document.open_job(job, None)

    def _fill_recent(self) -> None:
        self.recent.clear()
        for path in settings.recent_files():
            action = self.recent.addAction(path.name)
            action.setToolTip(str(path))
            action.setEnabled(path.exists())
            action.triggered.connect(partial(self._open_recent, path))
        if self.recent.isEmpty():
            self.recent.addAction("None yet").setEnabled(False)
        else:
            self.recent.addSeparator()
            self.recent.addAction("Forget these", settings.forget_recent)

    def _open_recent(self, path: Path) -> None:
        self.window.open_path(path)

    def save(self) -> None:
        files.save(self.document, self.window)

    def save_as(self) -> None:
        files.save_as(self.document, self.window)

    def revert(self) -> None:
        path = self.document.path
        if path is None:
            return
        answer = QMessageBox.question(
            self.window, "Bobline",
            f"Go back to “{path.name}” as it was last saved? What you changed since is lost.",
        )
        if answer == QMessageBox.StandardButton.Yes:
            job = files.read(path, self.window)
            if job is not None:
                self.document.open_job(job, path)

    # --- pictures and paper -----------------------------------------------------------

    def picture(self, kind: str) -> None:
        """The floor as it stands, at true proportions, as a PNG or SVG file."""
        name = files.proposed_name(self.document)
        pattern = f"{kind.upper()} picture (*.{kind})"
        path = files.ask_export(self.window, "Export floor picture", name, pattern)
        if path is None:
            return
        drawing = self.window.floor.drawing()
        try:
            if kind == "svg":
                from geometry.svg import write_svg

                write_svg(drawing, path)
            else:
                from app.sheets.png import write_png

                write_png(drawing, path)
        except OSError as error:
            files.tell_written(self.window, path, error)

    def export_sheet(self) -> None:
        name = files.proposed_name(self.document)
        path = files.ask_export(self.window, "Export measure sheet", name, "Measure sheet (*.csv)")
        if path is None:
            return
        try:
            write_measure_sheet(path, self.document.layout)
        except OSError as error:
            files.tell_written(self.window, path, error)

    def print_floor(self) -> None:
        from app.sheets.printing import print_pages

        print_pages(self.window.floor.pages(), self.document.layout.title, self.window)

    def print_preview(self) -> None:
        from app.sheets.printing import preview_pages

        preview_pages(self.window.floor.pages(), self.document.layout.title, self.window)

    # --- edit and view ------------------------------------------------------------------

    def _link(self, on: bool) -> None:
        self.document.set_linked(on)

    def _lock(self, on: bool) -> None:
        chosen = self.document.selection
        if chosen is not None:
            self.document.set_locked(chosen[1], on)

    def _snap(self, on: bool) -> None:
        self.window.floor.snapping = on
        self.window.show_snap()

    def _tape(self, on: bool) -> None:
        self.window.floor.tape_mode = on

    def _units(self, unit: str, _checked: bool = True) -> None:
        self.document.set_units("mm" if unit == "mm" else "in")

    def _dark(self, on: bool) -> None:
        settings.put("dark floor", on)
        self.window.floor.set_dark(on)

    def _text_size(self, percent: int) -> None:
        settings.put("text size", percent)
        application = QApplication.instance()
        assert isinstance(application, QApplication)
        theme.dress(application, percent)

    def tolerances(self) -> None:
        from app.panels.tolerances import ToleranceDialog

        ToleranceDialog(self.document, self.window).exec()
