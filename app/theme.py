"""The look of everything around the floor: warm paper and dark ink, one text size setting."""

from __future__ import annotations

from PySide6.QtGui import QColor, QFont, QPalette
from PySide6.QtWidgets import QApplication

PAPER = "#F1EEE8"
CARD = "#FBFAF6"
LINE = "#D8D3C8"
INK = "#25282C"
QUIET = "#5E625F"
STEEL = "#3E4C59"
CHOSEN = "#FCEBB0"
REFUSED = "#9C2A00"
REFUSED_GROUND = "#F9DED2"

_BASE_POINTS = 9.5

_SHEET = f"""
QMainWindow, QDialog {{ background: {PAPER}; }}
QFrame#card {{ background: {CARD}; border: 1px solid {LINE}; border-radius: 4px; }}
QLabel#heading {{ font-weight: bold; color: {INK}; }}
QLabel#quiet {{ color: {QUIET}; }}
QLabel#refusal {{ color: {REFUSED}; }}
QTableView, QTableWidget {{
    background: {CARD}; border: none; gridline-color: {LINE};
    selection-background-color: {CHOSEN}; selection-color: {INK};
}}
QHeaderView::section {{
    background: {CARD}; color: {QUIET}; border: none; padding: 2px 4px;
}}
QWidget#clear {{ background: transparent; }}
QLabel#cure {{ color: {INK}; }}
QFrame#finding {{ border: 1px solid transparent; border-radius: 3px; }}
QFrame#finding:hover {{ background: {PAPER}; }}
QFrame#finding:focus {{ border-color: {STEEL}; }}
QToolButton#tool {{ border: 1px solid transparent; border-radius: 3px; padding: 2px; }}
QToolButton#tool:hover {{ border-color: {LINE}; background: {CARD}; }}
QToolButton#tool:checked {{ background: {CHOSEN}; border-color: {LINE}; }}
QMenuBar {{ background: {PAPER}; spacing: 2px; }}
QMenuBar::item {{ background: transparent; color: {INK}; padding: 5px 8px; }}
QMenuBar::item:selected, QMenuBar::item:pressed {{ background: {STEEL}; color: white; }}
QTableView::indicator {{ width: 0.8em; height: 0.8em; }}
QScrollArea {{ background: transparent; border: none; }}
QToolButton#segment {{
    border: 1px solid {LINE}; padding: 3px 10px; background: {CARD}; color: {INK};
}}
QToolButton#segment:checked {{ background: {STEEL}; color: white; border-color: {STEEL}; }}
QSplitter::handle {{ background: {PAPER}; }}
QStatusBar {{ color: {QUIET}; }}
QLabel#guidance {{ background: {CHOSEN}; color: {INK}; padding: 4px 8px; }}
"""


def dress(application: QApplication, percent: int) -> None:
    """Give the program its palette, style sheet and text size (percent of the usual)."""
    application.setStyle("Fusion")
    palette = QPalette()
    roles = {
        QPalette.ColorRole.Window: PAPER,
        QPalette.ColorRole.Base: CARD,
        QPalette.ColorRole.AlternateBase: PAPER,
        QPalette.ColorRole.Button: CARD,
        QPalette.ColorRole.WindowText: INK,
        QPalette.ColorRole.Text: INK,
        QPalette.ColorRole.ButtonText: INK,
        QPalette.ColorRole.ToolTipBase: CHOSEN,
        QPalette.ColorRole.ToolTipText: INK,
        QPalette.ColorRole.Highlight: STEEL,
        QPalette.ColorRole.HighlightedText: "#FFFFFF",
        QPalette.ColorRole.PlaceholderText: QUIET,
    }
    for role, color in roles.items():
        palette.setColor(role, QColor(color))
    quiet = QColor("#9A9C98")
    for role in (QPalette.ColorRole.Text, QPalette.ColorRole.ButtonText):
        palette.setColor(QPalette.ColorGroup.Disabled, role, quiet)
    application.setPalette(palette)
    font = QFont(application.font())
    font.setPointSizeF(_BASE_POINTS * percent / 100.0)
    application.setFont(font)
    application.setStyleSheet(_SHEET)
