"""Inks, line widths and letter heights that all sheets share; mm on paper."""

from __future__ import annotations

from geometry.drawing import Style
from geometry.floor_colors import BLUE, GREEN, INK, VERMILLION

__all__ = ["BLUE", "GREEN", "INK", "VERMILLION"]

SOFT = "#54585D"
"""Ink of side notes: 7:1 on white, so that it survives a copier."""
RULE = "#A9A498"
TINT = "#F1EFEA"
BAND = "#E3EFE6"

TITLE, HEAD, BODY, SMALL = 5.0, 3.0, 2.3, 1.9
"""Heights of capitals: a sheet's title, a section's, running text, captions."""

CENTERLINE = Style(INK, 0.18, (8.0, 1.5, 1.5, 1.5), layer="centerline")
GROUND = Style(INK, 0.35, layer="floor")
HAIR = Style(RULE, 0.15, layer="rules")
RULE_LINE = Style(INK, 0.35, layer="rules")

VERDICT_INK = {
    "better": GREEN,
    "worse": "#A63C00",
    "the same": SOFT,
    "different": BLUE,
    "can't be told": SOFT,
}
VERDICT_WORDS = {
    "better": "Better",
    "worse": "Worse",
    "the same": "No change",
    "different": "Changed",
    "can't be told": "Can't be told",
}


def ink(color: str = INK, layer: str = "text") -> Style:
    """The style of text in a color."""
    return Style(color, layer=layer)
