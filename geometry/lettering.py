"""How much room text takes on paper, known without a window or an installed font.

The advances are those of DejaVu Sans and its bold (read from the fonts' own tables), the
widest of the families asked for, so text set in another of them never runs longer.
"""

from __future__ import annotations

import re
import unicodedata
from typing import Literal

FontRole = Literal["sans", "mono"]

FAMILIES: dict[FontRole, tuple[str, ...]] = {
    "sans": ("DejaVu Sans", "Noto Sans", "Segoe UI", "Helvetica Neue", "sans-serif"),
    "mono": ("DejaVu Sans Mono", "Noto Sans Mono", "Consolas", "Menlo", "monospace"),
}
"""Font families by role, the first one found is used; the last is the generic one."""

CAPITAL = 0.729
"""Height of a capital over the font's size (em), DejaVu Sans; the others lie within 3 %."""

BELOW_BASELINE = 0.3
"""How far letters like g reach below the baseline, over the height of a capital."""

LINE_SPACING = 1.8
"""From baseline to baseline over the height of a capital: lines then never touch."""

_REGULAR = """
    318 401 460 838 636 950 780 275 390 390 500 838 318 361 318 337 636 636 636 636 636 636
    636 636 636 636 337 337 838 838 838 531 1000 684 686 698 770 632 575 775 752 295 295 656
    557 863 748 787 603 787 695 635 611 732 684 989 685 611 685 390 337 390 838 500 500 613
    635 550 635 615 352 635 634 278 278 579 278 974 634 612 635 635 411 521 392 634 592 818
    592 592 525 636 337 636 838"""
_BOLD = """
    348 456 521 838 696 1002 872 306 457 457 523 838 380 415 380 365 696 696 696 696 696 696
    696 696 696 696 400 400 838 838 838 580 1000 774 762 734 830 683 683 821 837 372 372 775
    637 995 837 850 733 850 770 720 682 812 774 1103 771 724 725 457 365 457 838 500 500 675
    716 593 716 678 435 716 712 343 343 665 343 1042 712 687 716 716 493 595 478 712 652 924
    645 652 582 712 365 712 838"""
_OTHERS = {
    "\N{NO-BREAK SPACE}": 318,
    "\N{DEGREE SIGN}": 500,
    "\N{VULGAR FRACTION ONE HALF}": 1035,
    "\N{VULGAR FRACTION ONE QUARTER}": 1035,
    "\N{VULGAR FRACTION THREE QUARTERS}": 1035,
    "\N{EN DASH}": 500,
    "\N{PLUS-MINUS SIGN}": 838,
    "\N{MULTIPLICATION SIGN}": 838,
    "\N{MINUS SIGN}": 838,
    "\N{PRIME}": 264,
    "\N{DOUBLE PRIME}": 447,
    "\N{MIDDLE DOT}": 380,
}
"""Advances of signs beyond ASCII, thousandths of an em, the bold font's for both."""


def _table(advances: str) -> dict[str, float]:
    table = {chr(32 + i): int(a) / 1000 for i, a in enumerate(advances.split())}
    return table | {sign: advance / 1000 for sign, advance in _OTHERS.items()}


_ADVANCES = {False: _table(_REGULAR), True: _table(_BOLD)}
_UNLISTED = 1.04
_BREAKS = re.compile("[ \t\r\f\v]+")
_MONO = 0.602


def _advance(char: str, bold: bool) -> float:
    """One character's advance in em; an accented letter is as wide as its plain one."""
    table = _ADVANCES[bold]
    if char in table:
        return table[char]
    if unicodedata.combining(char):
        return 0.0
    return table.get(unicodedata.normalize("NFD", char)[0], _UNLISTED)


def text_width(text: str, height: float, bold: bool = False, family: FontRole = "sans") -> float:
    """How far one line of text runs, mm, with capitals ``height`` mm tall."""
    size = height / CAPITAL
    if family == "mono":
        return size * _MONO * len(text)
    return size * sum(_advance(char, bold) for char in text)


def wrapped(
    text: str, width: float, height: float, bold: bool = False, family: FontRole = "sans"
) -> list[str]:
    """The text broken between words into lines of at most ``width`` mm.

    Line ends in the text are kept, an empty line too. A word longer than a line is cut; a
    no-break space keeps two words together.
    """
    lines: list[str] = []
    for paragraph in text.splitlines() or [""]:
        line = ""
        for word in _BREAKS.split(paragraph.strip()):
            longer = f"{line} {word}" if line else word
            if text_width(longer, height, bold, family) <= width:
                line = longer
                continue
            if line:
                lines.append(line)
            line = word
            while len(line) > 1 and text_width(line, height, bold, family) > width:
                fits = _fitting(line, width, height, bold, family)
                lines.append(line[:fits])
                line = line[fits:]
        lines.append(line)
    return lines


def shortened(
    text: str, width: float, height: float, bold: bool = False, family: FontRole = "sans"
) -> str:
    """The text if it fits ``width`` mm, or else its beginning and an ellipsis."""
    if text_width(text, height, bold, family) <= width:
        return text
    room = width - text_width("…", height, bold, family)
    return text[: _fitting(text, room, height, bold, family)].rstrip() + "…"


def _fitting(text: str, width: float, height: float, bold: bool, family: FontRole) -> int:
    """How many characters of a too long text fit in ``width`` mm, at least one."""
    count = 1
    while count < len(text) and text_width(text[: count + 1], height, bold, family) <= width:
        count += 1
    return count
