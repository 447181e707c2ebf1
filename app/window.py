"""The main window: the floor with its panels, and every menu command."""

from __future__ import annotations

from pathlib import Path

from PySide6.QtCore import QByteArray, Qt
from PySide6.QtGui import QCloseEvent, QDragEnterEvent, QDropEvent, QGuiApplication
from PySide6.QtWidgets import (
    QButtonGroup,
    QHBoxLayout,
    QLabel,
    QMainWindow,
    QSplitter,
    QToolButton,
    QVBoxLayout,
    QWidget,
)

from app import files, settings
from app.commands import Commands
from app.document import Document
from app.floor.view import FloorView
from app.panels.findings import FindingsPanel
from app.panels.measure_sheet import MeasureSheetPanel
from app.panels.readouts import ReadoutsPanel
from app.panels.stance_bar import StanceBar
from app.watch import RoomWatch
from geometry.layout import Job
from geometry.lengths import format_length

GUIDANCE = (
    "This is a sample car. Drag any nail and watch the strings follow, or choose "
    "File ▸ New to type your own car's measures."
)


class MainWindow(QMainWindow):
    """One document, its floor and its panels."""

    def __init__(self, document: Document) -> None:
        super().__init__()
        self.document = document
        document.setParent(self)
        self.setAcceptDrops(True)
        self.floor = FloorView(document, self)
        self.stance_bar = StanceBar(document)
        self.findings_panel = FindingsPanel(document)
        self.readouts_panel = ReadoutsPanel(document)
        self.measure_panel = MeasureSheetPanel(document)
        self._lay_out()
        self._build_status()
        self.commands = Commands(self)
        self.room_watch = RoomWatch(document)
        self.findings_panel.shown.connect(self._point_out)
        document.edited.connect(self._show_name)
        document.opened.connect(self._opened)
        self._restore()
        self._show_name()

    # --- layout ---------------------------------------------------------------------

    def _lay_out(self) -> None:
        self.guidance = self._guidance_line()
        top = QHBoxLayout()
        top.setContentsMargins(0, 0, 0, 0)
        top.setSpacing(12)
        top.addWidget(self._car_switch())
        top.addWidget(self.stance_bar, 1)
        left = QWidget()
        column = QVBoxLayout(left)
        column.setContentsMargins(8, 4, 4, 4)
        column.setSpacing(4)
        column.addLayout(top)
        column.addWidget(self.guidance)
        self.lower = QSplitter(Qt.Orientation.Vertical)
        self.lower.setChildrenCollapsible(False)
        self.lower.addWidget(self.floor)
        column.addWidget(self.lower, 1)

        self.right = QSplitter(Qt.Orientation.Vertical)
        self.right.setChildrenCollapsible(False)
        for panel, height in (
            (self.findings_panel, 200),
            (self.readouts_panel, 200),
            (self.measure_panel, 320),
        ):
            panel.setMinimumHeight(90)
            self.right.addWidget(panel)
            self.right.setStretchFactor(self.right.count() - 1, height)
        self.across = QSplitter(Qt.Orientation.Horizontal)
        self.across.setChildrenCollapsible(False)
        self.across.addWidget(left)
        self.across.addWidget(self.right)
        self.across.setStretchFactor(0, 1)
        self.across.setStretchFactor(1, 0)
        self.across.setSizes([880, 392])
        self.setCentralWidget(self.across)
        self.resize(1280, 800)

    def _guidance_line(self) -> QWidget:
        holder = QWidget()
        row = QHBoxLayout(holder)
        row.setContentsMargins(0, 0, 0, 0)
        words = QLabel(GUIDANCE)
        words.setObjectName("guidance")
        words.setWordWrap(True)
        row.addWidget(words, 1)
        done = QToolButton()
        done.setText("Got it")
        done.clicked.connect(self._dismiss_guidance)
        row.addWidget(done)
        holder.setVisible(not settings.get_bool("guidance seen", False))
        return holder

    def _dismiss_guidance(self) -> None:
        settings.put("guidance seen", True)
        self.guidance.hide()

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
        bar = self.statusBar()
        bar.addWidget(self._place)
        bar.addWidget(self._snap)
        self.floor.pointer_moved.connect(self._show_place)
        self.show_snap()

    def _show_place(self, over: float, up: float) -> None:
        units = self.document.units
        side = "left" if over >= 0 else "right"
        self._place.setText(
            f"{format_length(abs(over), units)} over ({side}) · {format_length(up, units)} up {units}"
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
        self.setWindowTitle(f"{name}[*] – Bobline")
        self.show_snap()

    def _opened(self) -> None:
        self.floor.fit()

    def _point_out(self, finding: object) -> None:
        self.floor.point_out(finding)

    def open_path(self, path: Path) -> bool:
        """Open a file in this window, after asking about unsaved work."""
        if not files.may_close(self.document, self):
            return False
        job = files.read(path, self)
        if job is None:
            return False
        self.document.open_job(job, path)
        settings.add_recent(path)
        return True

    def open_new(self, job: Job) -> None:
        """Put an unsaved job on the floor, after asking about unsaved work."""
        if files.may_close(self.document, self):
            self.document.open_job(job, None)

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
        if not geometry.isEmpty():
            self.restoreGeometry(geometry)
            screen = QGuiApplication.screenAt(self.geometry().center())
            area = (screen or QGuiApplication.primaryScreen()).availableGeometry()
            if not area.contains(self.geometry().center()):
                self.move(area.topLeft())
            self.resize(self.size().boundedTo(area.size()))
        for name, splitter in self._splitters():
            state: QByteArray = settings.get_bytes(f"{name} splitter")
            if not state.isEmpty():
                splitter.restoreState(state)

    def _splitters(self) -> list[tuple[str, QSplitter]]:
        return [("across", self.across), ("right", self.right), ("lower", self.lower)]

    def closeEvent(self, event: QCloseEvent) -> None:
        if not files.may_close(self.document, self):
            event.ignore()
            return
        self.room_watch.background.finish()
        settings.put("window geometry", self.saveGeometry())
        for name, splitter in self._splitters():
            settings.put(f"{name} splitter", splitter.saveState())
        event.accept()
