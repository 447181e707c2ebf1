"""From outlines in mm to painter paths, and pens made once."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from PySide6.QtCore import QPointF, Qt
from PySide6.QtGui import QBrush, QColor, QPainterPath, QPen, QPolygonF

from geometry.linkage import Array
from geometry.standing import XY

NO_PEN = QPen(Qt.PenStyle.NoPen)
NO_BRUSH = QBrush(Qt.BrushStyle.NoBrush)

_STILL = 1e-6
"""What moved by less, mm, stands still: far below a pixel, far above a solve's last digits."""


def pen(
    color: str, width: float, dash: Sequence[float] = (), *, cosmetic: bool = True
) -> QPen:
    """A pen in pixels (or mm, not cosmetic); dash lengths in pen widths."""
    made = QPen(QColor(color), width)
    made.setCosmetic(cosmetic)
    # Round joins cost a third of the floor's frame on outlines of many short sides.
    made.setJoinStyle(Qt.PenJoinStyle.BevelJoin)
    made.setCapStyle(Qt.PenCapStyle.FlatCap if dash else Qt.PenCapStyle.RoundCap)
    if dash:
        made.setDashPattern(list(dash))
    return made


def brush(color: str | None) -> QBrush:
    return NO_BRUSH if color is None else QBrush(QColor(color))


def same_outlines(some: Sequence[Array], others: Sequence[Array]) -> bool:
    """True if two lists of outlines are the same but for the last digits of a solve."""
    return len(some) == len(others) and all(
        a is b or (a.shape == b.shape and bool((abs(a - b) < _STILL).all()))
        for a, b in zip(some, others, strict=True)
    )


def same_place(a: XY | None, b: XY | None) -> bool:
    """The same of two places, which may be none."""
    if a is None or b is None:
        return a is b
    return abs(a[0] - b[0]) < _STILL and abs(a[1] - b[1]) < _STILL


def path_of(outlines: Iterable[Array], closed: bool) -> QPainterPath:
    """One path of many outlines (n, 2), filled as one piece where they overlap."""
    path = QPainterPath()
    path.setFillRule(Qt.FillRule.WindingFill)
    for outline in outlines:
        points = [QPointF(x, y) for x, y in outline.tolist()]
        path.addPolygon(QPolygonF(points))
        if closed:
            path.closeSubpath()
    return path
