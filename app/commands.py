"""Every menu command of the main window: its words, its keys and what it does."""

from __future__ import annotations

from collections.abc import Callable
from functools import partial
from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, Qt
from PySide6.QtGui import QAction, QIcon, QKeySequence
from PySide6.QtWidgets import QApplication, QDialog, QMenu, QMessageBox

from app import files, settings
from app.help_words import CAUTIONS, KEYS
from app.home_file import FileMark
from app.layout_commands import LayoutCommands
from app.panels.tell_dialog import TellDialog, paragraphs, table
from app.recovery import left_behind
from app.resources import __version__, data_path, sample_paths
from app.sheet_commands import SheetCommands
from app.view_commands import ViewCommands
from geometry.curves import curves_to_csv
from geometry.drawing import DrawingError
from geometry.layout import SideName
from geometry.measure_sheet import measure_sheet_from_text
from geometry.output_file import OutputError
from geometry.sheet_writing import measure_sheet_to_text, starting_sheet
from geometry.text_file import write_text_file

if TYPE_CHECKING:
    from app.floor.view import FloorView
    from app.window import MainWindow


class Commands(QObject):
    """Builds the menus of a window and keeps their state true."""

    def __init__(self, window: MainWindow) -> None:
        super().__init__(window)
        self.window = window
        self.document = window.document
        self.actions: dict[str, QAction] = {}
        self._checking = False
        self._on_floor: list[QAction] = []
        self._file_menu()
        self._edit_menu()
        self._view_menu()
        self._layout_menu()
        self.sheets = SheetCommands(self)
        self._help_menu()
        self.document.edited.connect(self.refresh)
        self.document.selected.connect(self.refresh)
        self.window.floor.tape_mode_changed.connect(self.actions["tape"].setChecked)
        self.refresh()

    # --- building -------------------------------------------------------------------

    def add(
        self,
        menu: QMenu,
        name: str,
        words: str,
        act: Callable[..., object],
        keys: QKeySequence | QKeySequence.StandardKey | str | None = None,
        *,
        icon: str = "",
        checkable: bool = False,
        on_floor: bool = False,
    ) -> QAction:
        """Add a command to a menu; ``on_floor``: its key counts only while the floor has the
        keyboard, so that it can be typed elsewhere."""
        action = QAction(words, self.window)
        if keys is not None:
            action.setShortcut(QKeySequence(keys))
        if icon:
            action.setIcon(QIcon(str(data_path("icons") / f"{icon}.svg")))
        if checkable:
            action.setCheckable(True)
            action.toggled.connect(partial(self._toggle, act))
        else:
            action.triggered.connect(lambda _checked=False: act())
        if on_floor:
            action.setShortcutContext(Qt.ShortcutContext.WidgetWithChildrenShortcut)
            self._on_floor.append(action)
            self.window.floor.addAction(action)
        menu.addAction(action)
        self.actions[name] = action
        return action

    def attach(self, floor: FloorView) -> None:
        """Let the floor's own keys count on another floor too, and follow its tape."""
        floor.addActions(self._on_floor)
        floor.tape_mode_changed.connect(self.actions["tape"].setChecked)

    def _file_menu(self) -> None:
        standard = QKeySequence.StandardKey
        menu = self.window.menuBar().addMenu("&File")
        new = menu.addMenu(_icon("new"), "&New")
        kinds = (("A-arm", "A-&arm car"), ("strut", "&Strut car"),
                 ("relay rod", "A-arm car with &relay rod"))
        for kind, words in kinds:
            self.add(new, f"new {kind}", words, partial(self.new, kind),
                     standard.New if kind == "A-arm" else None)
        self.add(new, "sketch", "S&ketch from figures…", self.sketch, "Ctrl+Shift+N")
        self.add(menu, "open", "&Open…", self.open, standard.Open, icon="open")
        self.samples = menu.addMenu("Open sa&mple")
        for path in sample_paths():
            words = path.stem.replace("-", " ").capitalize()
            words += "" if path.suffix == files.SUFFIX or "sheet" in words else " (measure sheet)"
            self.add(self.samples, f"sample {path.name}", words, partial(self.open_sample, path))
        self.recent = menu.addMenu("Open &recent")
        self.recent.setToolTipsVisible(True)
        self.recent.aboutToShow.connect(self._fill_recent)
        self.add(menu, "take back", "Wor&k to take back…", self.take_back)
        menu.aboutToShow.connect(self._look_for_kept_work)
        menu.addSeparator()
        self.add(menu, "save", "&Save", self.save, standard.Save, icon="save")
        self.add(menu, "save as", "Save &As…", self.save_as, "Ctrl+Shift+S")
        self.add(menu, "revert", "Re&vert…", self.revert)
        menu.addSeparator()
        self.export = menu.addMenu("&Export")
        self.add(self.export, "export png", "Floor picture, &PNG…",
                 partial(self.picture, "png"), icon="picture")
        self.add(self.export, "export svg", "Floor picture, &SVG…", partial(self.picture, "svg"))
        self.add(self.export, "export csv", "&Measure sheet, CSV…", self.export_sheet, icon="sheet")
        self.add(self.export, "export curves", "&Curves, CSV…", self.export_curves, icon="curves")
        self.add(menu, "preview", "Print previe&w…", self.print_preview)
        self.add(menu, "print", "&Print…", self.print_floor, standard.Print, icon="print")
        menu.addSeparator()
        self.add(menu, "quit", "&Quit", self.window.close, "Ctrl+Q")

    def _edit_menu(self) -> None:
        standard = QKeySequence.StandardKey
        menu = self.window.menuBar().addMenu("&Edit")
        self.add(menu, "undo", "&Undo", self.document.undo, standard.Undo, icon="undo")
        redo = self.add(menu, "redo", "&Redo", self.document.redo, icon="redo")
        redo.setShortcuts([QKeySequence("Ctrl+Shift+Z"), QKeySequence("Ctrl+Y")])
        menu.addSeparator()
        self.add(menu, "copy picture", "&Copy floor picture", self.copy_picture, "Ctrl+Shift+C",
                 icon="picture")
        menu.addSeparator()
        self.add(menu, "link", "Lin&k sides (right mirrors left)", self._link, icon="link",
                 checkable=True)
        self.add(menu, "lock", "&Lock chosen nail", self._lock, "Ctrl+L", icon="lock",
                 checkable=True)
        self.add(menu, "snap", "S&nap to the tape", self._snap, icon="snap", checkable=True)
        menu.addSeparator()
        self.add(menu, "settings", "&Tolerances…", self.tolerances)

    def _view_menu(self) -> None:
        self.view_menu = self.window.menuBar().addMenu("&View")
        self.view_commands = ViewCommands(self, self.view_menu)

    def _layout_menu(self) -> None:
        menu = self.window.menuBar().addMenu("&Layout")
        self.add(menu, "keep found", "&Keep as found", self.keep_as_found, icon="found")
        self.add(menu, "from found", "&Plan again from as found", self.document.plan_from_found)
        self.add(menu, "nail back", "Put chosen nail &back as found", self.nail_back)
        self.add(menu, "differs", "What &differs…", self.differences)
        menu.addSeparator()
        self.add(menu, "job card", "&Job card…", self.job_card)
        self.layout_menu = menu
        self.layout_commands = LayoutCommands(self.window, menu)

    def _help_menu(self) -> None:
        menu = self.window.menuBar().addMenu("&Help")
        self.add(menu, "keys", "&Keys and mouse", self.tell_keys, "F1")
        self.add(menu, "cautions", "&Cautions", self.tell_cautions)
        self.add(menu, "about", "&About Bobline", self.tell_about)

    def tell_keys(self) -> None:
        self.run(TellDialog("Keys and mouse", table(KEYS), self.window))

    def tell_cautions(self) -> None:
        self.run(TellDialog("Cautions", paragraphs(CAUTIONS), self.window))

    def tell_about(self) -> None:
        about = f"Bobline {__version__}\n\nThe shop floor for front ends: pivots in, centers out."
        QMessageBox.about(self.window, "About Bobline", about)

    def run(self, dialog: QDialog) -> None:
        """Show a dialog until it is closed, and let it go."""
        dialog.exec()
        dialog.deleteLater()

    # --- state ----------------------------------------------------------------------

    def refresh(self) -> None:
        """Words and check marks follow the document."""
        document = self.document
        for name, text, verb in (
            ("undo", document.undo_text, "&Undo"),
            ("redo", document.redo_text, "&Redo"),
        ):
            action = self.actions[name]
            action.setText(f"{verb} {text}" if text else verb)
            action.setEnabled(text is not None)
        self.check("link", document.layout.linked)
        chosen = document.selection
        self.actions["lock"].setEnabled(chosen is not None)
        locked = chosen is not None and chosen[1] in document.layout.locked
        self.check("lock", locked)
        self.check("snap", self.window.floor.snapping)
        self.actions["revert"].setEnabled(document.path is not None)
        has_found = document.job.found is not None
        self.actions["from found"].setEnabled(has_found)
        self.actions["differs"].setEnabled(has_found)
        self.actions["nail back"].setEnabled(not locked and self._is_moved(chosen))
        self.view_commands.refresh()

    def _is_moved(self, chosen: tuple[SideName, str] | None) -> bool:
        """True if a nail was found elsewhere than it is planned."""
        if chosen is None:
            return False
        found = self.document.found_place(*chosen)
        return found is not None and found != self.document.layout.point(*chosen)

    def check(self, name: str, on: bool) -> None:
        """Set a check mark, also on the tool strip's button, without acting on it."""
        self._checking = True
        self.actions[name].setChecked(on)
        self._checking = False

    def _toggle(self, act: Callable[..., object], on: bool) -> None:
        if not self._checking:
            act(on)

    # --- file -----------------------------------------------------------------------

    def new(self, kind: str) -> None:
        """A car of a kind with plausible measures to type over."""
        self.window.open_new(measure_sheet_from_text(starting_sheet(kind)))

    def sketch(self) -> None:
        """A front end from what is known and wanted, laid out ready to drag."""
        from app.panels.sketch_dialog import SketchDialog

        dialog = SketchDialog(self.document.units, self.window)
        dialog.exec()
        if dialog.job is not None:
            self.window.open_new(dialog.job)
        dialog.deleteLater()

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
        for number, path in enumerate(settings.recent_files(), 1):
            name = path.name.replace("&", "&&")
            action = self.recent.addAction(f"&{number} {name}" if number < 10 else name)
            action.setToolTip(str(path))
            action.setEnabled(path.exists())
            action.triggered.connect(partial(self._open_recent, path))
        if self.recent.isEmpty():
            self.recent.addAction("None yet").setEnabled(False)
        else:
            self.recent.addSeparator()
            self.recent.addAction("&Forget these", settings.forget_recent)

    def _open_recent(self, path: Path, _checked: bool = False) -> None:
        self.window.open_path(path)

    def _look_for_kept_work(self) -> None:
        self.actions["take back"].setEnabled(bool(left_behind()))

    def take_back(self) -> None:
        self.window.offer_kept_work()

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
            mark = FileMark.of(path)
            job = files.read(path, self.window)
            if job is not None:
                self.document.open_job(job, path, mark)

    # --- pictures and paper -----------------------------------------------------------

    def picture(self, kind: str) -> None:
        """The floor as it stands, at true proportions, as a PNG or SVG file."""
        name = files.proposed_name(self.document)
        pattern = f"{kind.upper()} picture (*.{kind})"
        path = files.ask_export(self.window, "Export floor picture", name, pattern)
        if path is None:
            return
        try:
            drawing = self.window.floor.drawing()
            if kind == "svg":
                from geometry.svg import write_svg

                write_svg(drawing, path)
            else:
                from app.sheets.png import write_png

                write_png(drawing, path)
        except (OSError, DrawingError) as error:
            files.tell_not_written(self.window, path, error)

    def copy_picture(self) -> None:
        """The floor as it stands on the clipboard."""
        from app.sheets.png import drawing_image

        try:
            image = drawing_image(self.window.floor.drawing())
        except DrawingError as error:
            QMessageBox.warning(self.window, "Bobline", f"There is no picture to copy. {error}")
            return
        QApplication.clipboard().setImage(image)

    def export_sheet(self) -> None:
        self._export_text("Export measure sheet", "Measure sheet (*.csv)",
                          lambda: measure_sheet_to_text(self.document.settled_layout()))

    def export_curves(self) -> None:
        self._export_text("Export curves", "Curves (*.csv)",
                          lambda: curves_to_csv(self.document.solution))

    def _export_text(self, title: str, pattern: str, text: Callable[[], str]) -> None:
        name = files.proposed_name(self.document)
        path = files.ask_export(self.window, title, name, pattern)
        if path is None:
            return
        try:
            write_text_file(path, text())
        except (OSError, ValueError) as error:
            files.tell_not_written(self.window, path, error)

    def print_floor(self) -> None:
        from app.sheets.printing import print_pages

        self._on_paper(print_pages)

    def print_preview(self) -> None:
        from app.sheets.printing import preview_pages

        self._on_paper(preview_pages)

    def _on_paper(self, act: Callable[..., object]) -> None:
        try:
            act(self.window.floor.pages(), self.document.layout.title, self.window)
        except (OSError, DrawingError) as error:
            words = str(error) if isinstance(error, OutputError | DrawingError) else (
                files.sentence(error)
            )
            QMessageBox.warning(self.window, "Bobline", f"This was not printed. {words}")

    # --- edit -------------------------------------------------------------------------

    def _link(self, on: bool) -> None:
        layout = self.document.settled_layout()
        if not on or layout.left == layout.right:
            self.document.set_linked(on)
            return
        keep = self._ask_which_side()
        if keep is None:
            self.check("link", False)
        else:
            self.document.set_linked(True, keep)

    def _ask_which_side(self) -> SideName | None:
        """Which side both become like; None for neither."""
        box = QMessageBox(self.window)
        box.setIcon(QMessageBox.Icon.Question)
        box.setWindowTitle("Bobline")
        box.setText("The sides differ. Which one should both be like?")
        box.setInformativeText("The other side's own measures go (Undo brings them back).")
        left = box.addButton("&Left", QMessageBox.ButtonRole.AcceptRole)
        right = box.addButton("&Right", QMessageBox.ButtonRole.AcceptRole)
        box.addButton(QMessageBox.StandardButton.Cancel)
        box.exec()
        clicked = box.clickedButton()
        if clicked is left:
            return "left"
        return "right" if clicked is right else None

    def _lock(self, on: bool) -> None:
        chosen = self.document.selection
        if chosen is not None:
            self.document.set_locked(chosen[1], on)

    def _snap(self, on: bool) -> None:
        self.window.floor.snapping = on
        self.window.show_snap()

    def tolerances(self) -> None:
        from app.panels.tolerances import ToleranceDialog

        self.run(ToleranceDialog(self.document, self.window))

    # --- as found and as planned ----------------------------------------------------------

    def keep_as_found(self) -> None:
        """Take the car as it stands as the one found; asks if another would be lost."""
        job = self.document.job
        if job.found is not None and job.found != job.planned:
            answer = QMessageBox.question(
                self.window, "Bobline",
                "A car as found is kept already. Put the car as planned in its place?",
            )
            if answer != QMessageBox.StandardButton.Yes:
                return
        self.document.keep_as_found()

    def nail_back(self) -> None:
        chosen = self.document.selection
        if chosen is not None:
            self.document.put_back_as_found(*chosen)

    def differences(self) -> None:
        from app.panels.differences_dialog import DifferencesDialog

        if self.document.job.found is not None:
            self.run(DifferencesDialog(self.document, self.window))

    def job_card(self) -> None:
        from app.panels.job_card import JobCardDialog

        self.run(JobCardDialog(self.document, self.window))


def _icon(name: str) -> QIcon:
    return QIcon(str(data_path("icons") / f"{name}.svg"))
