"""From outlines in mm to painter paths, and pens made once."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from PySide6.QtCore import QPointF, Qt
from PySide6.QtGui import QBrush, QColor, QPainterPath, QPen, QPolygonF

from geometry.linkage import Array

NO_PEN = QPen(Qt.PenStyle.NoPen)
NO_BRUSH = QBrush(Qt.BrushStyle.NoBrush)


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
    """True if two lists of outlines are the same, number for number."""
    return len(some) == len(others) and all(
        a is b or (a.shape == b.shape and bool((a == b).all()))
        for a, b in zip(some, others, strict=True)
    )


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
