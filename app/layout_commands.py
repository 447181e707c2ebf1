"""Commands that change the whole car: stance, wheel, weights, no-go shapes; and its motion."""

from __future__ import annotations

from collections.abc import Callable
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, Qt
from PySide6.QtGui import QAction, QKeySequence
from PySide6.QtWidgets import QDialog, QMenu

from app.motion import BumpMotion

if TYPE_CHECKING:
    from app.window import MainWindow


class LayoutCommands(QObject):
    """Adds the Layout menu's dialogs to a window. Each dialog's change is one undo step."""

    def __init__(self, window: MainWindow, menu: QMenu) -> None:
        super().__init__(window)
        self.window = window
        self.document = window.document
        self.actions: dict[str, QAction] = {}
        menu.addSeparator()
        for name, words, act, keys in (
            ("stance", "&Lower or raise…", self.stance, "Ctrl+D"),
            ("wheel", "&Tire and wheel…", self.wheel, ""),
            ("loads", "&Weights and springs…", self.loads, ""),
            ("springs", "&Springs, joints and tie rods…", self.springs, ""),
            ("no-go", "&No-go shapes…", self.no_go, ""),
            ("draw no-go", "Dr&aw a no-go shape", self.draw_no_go, "Ctrl+E"),
            ("draw box", "Draw a no-go bo&x", self.draw_box, "Ctrl+Shift+E"),
            ("zone", "&Rack zone…", self.zone, "Ctrl+R"),
            ("targets", "Tar&gets and pivot zone…", self.targets, "Ctrl+T"),
            ("fixes", "F&ix list…", self.fixes, "Ctrl+F"),
        ):
            self._add(menu, name, words, act, keys)
        menu.addSeparator()
        self._add(menu, "turn", "In a t&urn…", self.turn, "Ctrl+Shift+B")
        self.motion = BumpMotion(self.document)
        play = self._add(menu, "play", "&Over a bump", None, "Ctrl+B")
        play.setCheckable(True)
        play.toggled.connect(self.motion.toggle)
        self.motion.running_changed.connect(play.setChecked)

    def _add(
        self, menu: QMenu, name: str, words: str, act: Callable[[], object] | None, keys: str
    ) -> QAction:
        action = QAction(words, self.window)
        if keys:
            action.setShortcut(QKeySequence(keys))
        if act is not None:
            action.triggered.connect(act)
        menu.addAction(action)
        self.actions[name] = action
        return action

    def zone(self) -> None:
        """The rack zone in a window of its own beside the floor."""
        from app.panels.rack_zone import RackZoneDialog

        dialog = RackZoneDialog(self.document, self.window)
        dialog.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        dialog.show()

    def turn(self) -> None:
        """The car leaned in a turn, as found and as planned, beside the floor."""
        from app.panels.turn_dialog import TurnDialog

        dialog = TurnDialog(self.document, self.window)
        dialog.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        dialog.show()

    def targets(self) -> None:
        """What is wanted of the car, and where a nail may sit for it, beside the floor."""
        from app.panels.nail_zone import NailZoneDialog

        dialog = NailZoneDialog(self.document, self.window.front, self.window)
        dialog.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        dialog.show()

    def fixes(self) -> None:
        """The fix list in a window of its own beside the floor."""
        from app.panels.fix_list import FixListDialog

        dialog = FixListDialog(self.document, self.window)
        dialog.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        dialog.show()

    def _run(self, dialog: QDialog) -> None:
        dialog.exec()
        dialog.deleteLater()

    def stance(self) -> None:
        from app.panels.stance_dialog import StanceDialog

        self._run(StanceDialog(self.document, self.window))

    def wheel(self) -> None:
        from app.panels.wheel_dialog import WheelDialog

        self._run(WheelDialog(self.document, self.window))

    def loads(self) -> None:
        from app.panels.loads_dialog import LoadsDialog

        self._run(LoadsDialog(self.document, self.window))

    def springs(self) -> None:
        from app.panels.springs_dialog import SpringsDialog

        self._run(SpringsDialog(self.document, self.window))

    def no_go(self) -> None:
        from app.panels.no_go_dialog import NoGoDialog

        self._run(NoGoDialog(self.document, self.window))

    def type_no_go(self, index: int) -> None:
        """The same with the shape at a place in Layout.no_go shown."""
        from app.panels.no_go_dialog import NoGoDialog

        self._run(NoGoDialog(self.document, self.window, index))

    def draw_no_go(self) -> None:
        """Draw an outline on the floor in sight, corner by corner."""
        self.window.floor.shapes.start_drawing()

    def draw_box(self) -> None:
        """Draw an upright box on the floor in sight from corner to corner."""
        self.window.floor.shapes.start_drawing(boxed=True)
