"""By keyboard and by ear: all that takes the keyboard has a name, in the window and its dialogs."""

from __future__ import annotations

from PySide6.QtCore import Qt, QTimer
from PySide6.QtGui import QAction
from PySide6.QtWidgets import (
    QAbstractButton,
    QAbstractItemView,
    QApplication,
    QComboBox,
    QDialog,
    QFormLayout,
    QHeaderView,
    QLabel,
    QScrollBar,
    QWidget,
)

from tests.fuzz.hand_acts import all_actions
from tests.sample_cars import SAMPLES

FILES = ("&Open…", "Save &As…", "PNG", "SVG", "CSV", "DXF", "&Print…", "Print previe&w…",
         "Wor&k to take back…", "Re&vert…")  # fmt: skip
"""These bring up the system's own dialogs, or only ask."""


def name_of(widget: QWidget) -> str:
    """What a screen reader says of a widget: its own name, its words, or its label's."""
    for words in (widget.accessibleName(), getattr(widget, "text", str)(), widget.toolTip()):
        if words:
            return str(words)
    for label in widget.window().findChildren(QLabel):
        if label.buddy() is widget:
            return label.text()
    parent = widget.parentWidget()
    form = parent.layout() if parent is not None else None
    label = form.labelForField(widget) if isinstance(form, QFormLayout) else None
    return label.text() if isinstance(label, QLabel) else ""


def is_part(widget: QWidget) -> bool:
    """True for the inner parts of one control, which is named as a whole."""
    if isinstance(widget, QHeaderView | QScrollBar):
        return True
    above = widget.parentWidget()
    while above is not None and not above.isWindow():
        if isinstance(above, QComboBox) or (
            isinstance(above, QAbstractItemView) and name_of(above)
        ):
            return True
        above = above.parentWidget()
    return False


def nameless(window: QWidget) -> list[str]:
    """All visible widgets below ``window`` that take the keyboard and have no name."""
    tabbed = Qt.FocusPolicy.TabFocus
    return [
        f"{type(widget).__name__} in {type(widget.parentWidget()).__name__}"
        for widget in window.findChildren(QWidget)
        if widget.isVisible() and widget.window() is window and not is_part(widget)
        and (widget.focusPolicy() & tabbed == tabbed or isinstance(widget, QAbstractButton))
        # A list in an area is reached by its rows, and a plain button's picture has its words.
        and not name_of(widget) and not name_of(widget.parentWidget())
    ]


def test_all_that_takes_the_keyboard_in_the_window_has_a_name(make_window):
    window = make_window(SAMPLES["unequal-sides"])
    for floor in ("front", "above"):
        window.show_floor(floor)
        window.document.settle()
        QApplication.processEvents()
        assert nameless(window) == []


def opened_by(action: QAction) -> dict[str, list[str]]:
    """The nameless widgets of each dialog an action brings up, by its title; closes it."""
    found: dict[str, list[str]] = {}

    def look() -> None:
        for widget in QApplication.topLevelWidgets():
            if isinstance(widget, QDialog) and widget.isVisible():
                assert widget.windowTitle(), f"a window without a title by {action.text()}"
                found[widget.windowTitle()] = nameless(widget)
                widget.reject()

    looking = QTimer()
    looking.timeout.connect(look)
    looking.start(20)
    action.trigger()
    looking.stop()
    look()
    return found


def test_all_that_takes_the_keyboard_in_every_dialog_has_a_name(window):
    seen: dict[str, list[str]] = {}
    straight_to_file = [
        action for key, action in window.commands.actions.items() if key.startswith("pdf")
    ]
    for entry in window.menuBar().actions():
        for action in list(all_actions(entry.menu())):
            asks = "…" in action.text() and not any(word in action.text() for word in FILES)
            if asks and action.isEnabled() and action not in straight_to_file:
                found = opened_by(action)
                assert found, f"{action.text()} brought up nothing"
                seen |= found
    assert len(seen) >= 12, seen
    assert {title: names for title, names in seen.items() if names} == {}


def test_a_finding_and_a_readout_are_told_in_words_alone(make_window):
    window = make_window(SAMPLES["rack-set-low"])
    window.document.settle()
    QApplication.processEvents()
    rows = window.findings_panel.rows
    assert rows
    for row in rows:
        word, _, rest = row.accessibleName().partition(": ")
        # How bad it is stands in a word, not only in its color.
        assert word.istitle() and rest == row.finding.headline
        assert row.finding.detail in row.accessibleDescription()
    table = window.readouts_panel.table
    for line in range(table.rowCount()):
        told = [table.item(line, column) for column in range(table.columnCount())]
        assert told[0] is not None and told[0].text()
