"""The main window: the floor with its panels, and every menu command."""

from __future__ import annotations

from pathlib import Path

from PySide6.QtCore import QByteArray, QEvent, Qt, QTimer
from PySide6.QtGui import (
    QCloseEvent,
    QDragEnterEvent,
    QDropEvent,
    QGuiApplication,
    QShowEvent,
)
from PySide6.QtWidgets import (
    QApplication,
    QButtonGroup,
    QHBoxLayout,
    QLabel,
    QMainWindow,
    QMessageBox,
    QSplitter,
    QStackedWidget,
    QToolButton,
    QVBoxLayout,
    QWidget,
)

from app import files, settings
from app.commands import Commands
from app.document import Document
from app.floor.above import AboveView
from app.floor.view import FloorView
from app.home_file import FileMark
from app.panels.curves import CurvesPanel
from app.panels.findings import FindingsPanel
from app.panels.flow import flow_of
from app.panels.lock_curves import LockCurves
from app.panels.measure_sheet import MeasureSheetPanel
from app.panels.rack_zone import FloorZones
from app.panels.readouts import ReadoutsPanel
from app.panels.stance_bar import StanceBar
from app.panels.steering import SteeringPanel
from app.panels.tool_strip import ToolStrip
from app.plan_watch import PlanWatch
from app.recovery import Left, Recovery, left_behind
from app.watch import RoomWatch
from geometry.layout import Job
from geometry.lengths import format_length

FIRST_WORDS = (
    "This is a sample car: drag any nail. File ▸ New starts your own from its measures."
)
NEW_WORDS = (
    "The measures of the new car are only plausible. Type your own over them in the measure "
    "sheet; Tab goes on to the next cell."
)


class MainWindow(QMainWindow):
    """One document, its floor and its panels."""

    def __init__(self, document: Document) -> None:
        super().__init__()
        self.document = document
        document.setParent(self)
        self.setAcceptDrops(True)
        self.front = FloorView(document, self)
        self.floor: FloorView = self.front
        self.above: AboveView | None = None
        self.stance_bar = StanceBar(document)
        self.findings_panel = FindingsPanel(document)
        self.readouts_panel = ReadoutsPanel(document)
        self.measure_panel = MeasureSheetPanel(document)
        self.curves = CurvesPanel(document)
        self.plan_watch = PlanWatch(document)
        self.steering_panel = SteeringPanel(document, self.plan_watch)
        self.lock_curves = LockCurves(document, self.plan_watch)
        self._lay_out()
        self._build_status()
        self.commands = Commands(self)
        self.tools = ToolStrip(self.commands)
        self.menuBar().setCornerWidget(self.tools)
        self.recovery = Recovery(document)
        self.recovery.failed.connect(self._tell_not_kept)
        self.room_watch = RoomWatch(document)
        self.zones = FloorZones(document, self.front)
        self.findings_panel.shown.connect(self._point_out)
        self.steering_panel.refused.connect(self.show_refusal)
        self.front.place_asked.connect(self._type_place)
        self.front.shape_asked.connect(self.commands.layout_commands.type_no_go)
        self.stance_bar.refused.connect(self.show_refusal)
        document.edited.connect(self._show_name)
        document.opened.connect(self._opened)
        self._restore()
        self._show_name()

    # --- layout ---------------------------------------------------------------------

    def _lay_out(self) -> None:
        self.guidance = self._guidance_line()
        bar = self.stance_bar
        left = QWidget()
        column = QVBoxLayout(left)
        column.setContentsMargins(8, 4, 2, 2)
        column.setSpacing(4)
        column.addLayout(flow_of(
            self._floor_switch(), self._car_switch(), bar.which, bar.travel, bar.rack, bar.roll
        ))
        column.addWidget(self.guidance)
        self.stack = QSplitter(Qt.Orientation.Vertical)
        self.stack.setChildrenCollapsible(False)
        self.floors, self.curve_stack = QStackedWidget(), QStackedWidget()
        self.floors.addWidget(self.front)
        self.curve_stack.addWidget(self.curves)
        self.curve_stack.addWidget(self.lock_curves)
        self.stack.addWidget(self.floors)
        self.stack.addWidget(self.curve_stack)
        self.stack.setStretchFactor(0, 1)
        self.stack.setStretchFactor(1, 0)
        column.addWidget(self.stack, 1)

        self.right = QSplitter(Qt.Orientation.Vertical)
        self.right.setChildrenCollapsible(False)
        self.right.setContentsMargins(2, 4, 8, 2)
        self.cards = QStackedWidget()
        self.cards.addWidget(self.readouts_panel)
        self.cards.addWidget(self.steering_panel)
        for panel, share in (
            (self.findings_panel, 2), (self.cards, 2), (self.measure_panel, 3)
        ):
            self.right.addWidget(panel)
            self.right.setStretchFactor(self.right.count() - 1, share)
        self.across = QSplitter(Qt.Orientation.Horizontal)
        self.across.setChildrenCollapsible(False)
        self.across.addWidget(left)
        self.across.addWidget(self.right)
        self.across.setStretchFactor(0, 1)
        self.across.setStretchFactor(1, 0)
        self.setCentralWidget(self.across)
        self.resize(1280, 800)
        self._shared_out = False

    def _share_out(self) -> None:
        """The first sizes of the panels: more than two thirds of the left side to the floor."""
        self._shared_out = True
        right = self.measure_panel.wanted_width() + 12
        self.across.setSizes([max(self.width() - right, 320), right])
        high = self.stack.height()
        self.stack.setSizes([high * 68 // 100, high * 32 // 100])
        self._share_right(27, 28, 45)

    def _share_right(self, *shares: int) -> None:
        high = self.right.height()
        self.right.setSizes([high * share // 100 for share in shares])

    # --- floors -----------------------------------------------------------------------

    def show_floor(self, name: str) -> None:
        """The floor from the "front" or from "above", each with its own card and curves."""
        above = name == "above"
        if above == (self.floor is self.above):
            return
        had = self.floor.canvas.hasFocus()
        if above and self.above is None:
            self.above = self._new_above()
        wanted: FloorView = self.above if above and self.above is not None else self.front
        wanted.snapping, wanted.tape_mode = self.floor.snapping, False
        self.floor.tape_mode = False
        self.floor.shapes.stop_drawing()
        self.floor.wake(False)
        self.floor = wanted
        wanted.wake(True)
        self.floors.setCurrentWidget(wanted)
        self.curve_stack.setCurrentWidget(self.lock_curves if above else self.curves)
        self.cards.setCurrentWidget(self.steering_panel if above else self.readouts_panel)
        self._shares[not above] = self.right.sizes()
        self.right.setSizes(self._shares.get(above) or self._first_shares())
        self._floor_buttons.button(int(above)).setChecked(True)
        self.commands.view_commands.refresh()
        if had:
            wanted.setFocus(Qt.FocusReason.OtherFocusReason)

    def _first_shares(self) -> list[int]:
        """The steering card says much: it gets half of the column."""
        return [self.right.height() * share // 100 for share in (20, 50, 30)]

    def _new_above(self) -> AboveView:
        view = AboveView(self.document, self)
        view.set_dark(self.commands.actions["dark"].isChecked())
        view.pointer_moved.connect(self._show_place)
        view.place_asked.connect(self._type_place)
        view.shape_asked.connect(self.commands.layout_commands.type_no_go)
        self.commands.attach(view)
        self.floors.addWidget(view)
        return view

    def _floor_switch(self) -> QWidget:
        """From where the car is seen."""
        holder = QWidget()
        row = QHBoxLayout(holder)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(0)
        self._shares: dict[bool, list[int]] = {}
        self._floor_buttons = QButtonGroup(self)
        for key, words in (("front", "Front"), ("above", "Above")):
            button = QToolButton()
            button.setObjectName("segment")
            button.setText(words)
            button.setCheckable(True)
            button.setToolTip(f"The floor from {'the front' if key == 'front' else 'above'}")
            self._floor_buttons.addButton(button, int(key == "above"))
            row.addWidget(button)
        self._floor_buttons.button(0).setChecked(True)
        self._floor_buttons.idClicked.connect(self._switch_floor)
        return holder

    def _switch_floor(self, which: int) -> None:
        self.show_floor("above" if which else "front")

    def showEvent(self, event: QShowEvent) -> None:
        super().showEvent(event)
        if not self._shared_out:
            # Only now is it known how much room there is.
            self._share_out()
            self._restore_splitters()

    def changeEvent(self, event: QEvent) -> None:
        super().changeEvent(event)
        # Python may be asked before the window is built.
        if event.type() == QEvent.Type.FontChange and getattr(self, "_shared_out", False):
            # The panels hear of it in no fixed order, so some still have their old letters.
            QTimer.singleShot(0, self, self._share_out)

    def _guidance_line(self) -> QWidget:
        holder = QWidget()
        row = QHBoxLayout(holder)
        row.setContentsMargins(0, 0, 0, 0)
        self._guidance_words = QLabel(FIRST_WORDS)
        self._guidance_words.setObjectName("guidance")
        self._guidance_words.setWordWrap(True)
        row.addWidget(self._guidance_words, 1)
        done = QToolButton()
        done.setText("Got it")
        done.clicked.connect(self._dismiss_guidance)
        row.addWidget(done)
        holder.setVisible(not settings.get_bool("guidance seen", False))
        return holder

    def _dismiss_guidance(self) -> None:
        if self._guidance_words.text() == FIRST_WORDS:
            settings.put("guidance seen", True)
        self.guidance.hide()

    def guide(self, words: str) -> None:
        """Say in the line above the floor what to do next; empty for nothing."""
        self._guidance_words.setText(words)
        self.guidance.setVisible(bool(words))

    def _car_switch(self) -> QWidget:
        """Which of the document's two cars the floor shows strongly."""
        holder = QWidget()
        row = QHBoxLayout(holder)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(0)
        self.car_buttons = QButtonGroup(self)
        for key, words in (("found", "As found"), ("planned", "As planned")):
            button = QToolButton()
            button.setObjectName("segment")
            button.setText(words)
            button.setCheckable(True)
            self.car_buttons.addButton(button, 0 if key == "found" else 1)
            row.addWidget(button)
        self.car_buttons.button(1).setChecked(True)
        self.car_buttons.idClicked.connect(self._switch_car)
        self._show_switch()
        self.document.edited.connect(self._show_switch)
        return holder

    def _switch_car(self, which: int) -> None:
        self.document.show_found(which == 0)

    def _show_switch(self) -> None:
        has_found = self.document.job.found is not None
        button = self.car_buttons.button(0)
        button.setEnabled(has_found)
        button.setToolTip(
            "" if has_found else "Keep the car as found first: Layout ▸ Keep as found"
        )
        self.car_buttons.button(0 if self.document.showing_found else 1).setChecked(True)

    def _build_status(self) -> None:
        self._place = QLabel()
        self._snap = QLabel()
        self._car = QLabel()
        bar = self.statusBar()
        bar.addWidget(self._place)
        bar.addWidget(self._snap)
        bar.addPermanentWidget(self._car)
        self.front.pointer_moved.connect(self._show_place)
        self.show_snap()

    def _show_place(self, over: float, second: float) -> None:
        units = self.document.units
        side = "left" if over >= 0 else "right"
        self._place.setText(
            f"{format_length(abs(over), units)} over ({side}) · "
            f"{format_length(second, units)} {self.floor.face.second}, {units}"
        )

    def show_snap(self) -> None:
        """Say in the status bar what dragging snaps to."""
        step = "1/16 in" if self.document.units == "in" else "1 mm"
        self._snap.setText(f"snap {step}" if self.floor.snapping else "snap off")

    # --- document -------------------------------------------------------------------

    def _show_name(self) -> None:
        document = self.document
        name = document.path.name if document.path else document.layout.title
        self.setWindowTitle(f"{name}[*] – Bobline")
        self.setWindowModified(document.is_changed)
        self.setWindowFilePath("" if document.path is None else str(document.path))
        # Setting the file path puts its own words into the title.
        self.setWindowTitle(f"{name}[*] – Bobline")
        shown = "as found" if document.showing_found else "as planned"
        changed = " · changed" if document.is_changed else ""
        self._car.setText(f"{document.layout.title}, {shown}{changed}")
        self.show_snap()

    def show_refusal(self, reason: str) -> None:
        """Say in the status bar why something typed was not taken; empty when it was."""
        self.statusBar().showMessage(reason)

    def _type_place(self, side: str, name: str) -> None:
        self.measure_panel.type_place("right" if side == "right" else "left", name)

    def walk_panels(self, by: int) -> None:
        """Give the keyboard to the next panel, or the one before."""
        above = self.floor is self.above
        card = self.steering_panel.area if above else self.readouts_panel.table
        stops = [self.floor, self.findings_panel.area, card,
                 self.measure_panel.table, self.stance_bar.travel.field]
        has = QApplication.focusWidget()
        at = next(
            (i for i, stop in enumerate(stops) if has is not None and
             (stop is has or stop.isAncestorOf(has))), -1 if by > 0 else 0
        )
        stop = stops[(at + by) % len(stops)]
        stop.setFocus(Qt.FocusReason.ShortcutFocusReason)

    def _opened(self) -> None:
        self.guide("")

    def _point_out(self, finding: object) -> None:
        self.floor.point_out(finding)

    def open_path(self, path: Path) -> bool:
        """Open a file in this window, after asking about unsaved work."""
        if not files.may_close(self.document, self):
            return False
        wanted = "open"
        if self.document.file.is_open_elsewhere(path):
            wanted = files.ask_open_elsewhere(path, self)
            if not wanted:
                return False
        mark = FileMark.of(path)
        job = files.read(path, self)
        if job is None:
            return False
        if wanted == "copy":
            self.document.open_job(job, None)
        else:
            self.document.open_job(job, path, mark)
            settings.add_recent(path)
        return True

    def open_new(self, job: Job) -> None:
        """Put an unsaved job on the floor, after asking about unsaved work."""
        if files.may_close(self.document, self):
            self.document.open_job(job, None)
            self.guide(NEW_WORDS)
            self.measure_panel.start_typing()

    # --- kept work --------------------------------------------------------------------

    def offer_kept_work(self) -> None:
        """Offer back what windows left that ended without asking, if there is any."""
        from app.panels.recovery_dialog import RecoveryDialog

        left = left_behind()
        if not left:
            return
        dialog = RecoveryDialog(left, self)
        dialog.exec()
        chosen = dialog.chosen
        dialog.deleteLater()
        if chosen is not None:
            self.take_back(chosen)

    def take_back(self, left: Left) -> bool:
        """Put kept work on the floor, marked as changed, with the file it came from."""
        if left.record is None or not files.may_close(self.document, self):
            return False
        lock = left.taken()
        if lock is None:
            QMessageBox.information(self, "Bobline", "Another window has taken this work back.")
            return False
        try:
            job = left.record.job()
        except ValueError as error:
            files.show_faults(self, "The kept work can't be read.", str(error).splitlines())
            lock.release()
            return False
        path = left.record.path
        if path is not None and self.document.file.is_open_elsewhere(path):
            path = None
        self.document.open_job(job, path, left.record.mark)
        self.document.mark_changed()
        # Only when it is kept again here does the old record go.
        if self.recovery.keep_now():
            left.remove()
        lock.release()
        return True

    def _tell_not_kept(self, reason: str) -> None:
        self.guide(
            f"Unsaved work can't be kept against a crash just now: {reason}. Save often."
        )

    def dragEnterEvent(self, event: QDragEnterEvent) -> None:
        if any(url.isLocalFile() for url in event.mimeData().urls()):
            event.acceptProposedAction()

    def dropEvent(self, event: QDropEvent) -> None:
        local = [url.toLocalFile() for url in event.mimeData().urls() if url.isLocalFile()]
        if local:
            event.acceptProposedAction()
            self.open_path(Path(local[0]))

    # --- closing and coming back ------------------------------------------------------

    def _restore(self) -> None:
        geometry = settings.get_bytes("window geometry")
        if not geometry.isEmpty() and self.restoreGeometry(geometry):
            self._clamp()

    def _restore_splitters(self) -> None:
        same_text = settings.get_int("splitters at text size", 100, 100, 200) == (
            settings.get_int("text size", 100, 100, 200)
        )
        for name, splitter in self._splitters():
            state: QByteArray = settings.get_bytes(f"{name} splitter")
            if same_text and not state.isEmpty():
                splitter.restoreState(state)

    def _clamp(self) -> None:
        """Keep the window on a screen that is there now."""
        screen = QGuiApplication.screenAt(self.geometry().center())
        area = (screen or QGuiApplication.primaryScreen()).availableGeometry()
        self.resize(self.size().boundedTo(area.size()))
        place = self.geometry()
        place.moveLeft(max(area.left(), min(place.left(), area.right() - place.width())))
        place.moveTop(max(area.top(), min(place.top(), area.bottom() - place.height())))
        self.setGeometry(place)

    def _splitters(self) -> list[tuple[str, QSplitter]]:
        return [("across", self.across), ("right", self.right), ("lower", self.stack)]

    def closeEvent(self, event: QCloseEvent) -> None:
        if not files.may_close(self.document, self):
            event.ignore()
            return
        self.commands.layout_commands.motion.stop()
        self.room_watch.background.finish()
        self.plan_watch.background.finish()
        for floor in (self.front, self.above):
            if floor is not None:
                floor.shapes.background.finish()
        self.recovery.end()
        self.document.file.leave()
        settings.put("window geometry", self.saveGeometry())
        settings.put("splitters at text size", settings.get_int("text size", 100, 100, 200))
        self.show_floor("front")
        for name, splitter in self._splitters():
            settings.put(f"{name} splitter", splitter.saveState())
        event.accept()
