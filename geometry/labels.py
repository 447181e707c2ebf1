"""Places labels so that none hides another or leaves its area: greedy, plain geometry.

Works in any unit (pixels on the screen, mm on paper) with y in either direction.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from typing import NamedTuple


class Box(NamedTuple):
    """An upright rectangle: left, top, width, height (top is the lesser y)."""

    left: float
    top: float
    width: float
    height: float

    @property
    def right(self) -> float:
        return self.left + self.width

    @property
    def bottom(self) -> float:
        return self.top + self.height

    def grown(self, by: float) -> Box:
        return Box(self.left - by, self.top - by, self.width + 2 * by, self.height + 2 * by)

    def overlaps(self, other: Box) -> bool:
        """True if the two share more than an edge."""
        return (
            self.left < other.right
            and other.left < self.right
            and self.top < other.bottom
            and other.top < self.bottom
        )

    def holds(self, other: Box) -> bool:
        """True if the other lies wholly inside."""
        return (
            self.left <= other.left + 1e-9
            and self.top <= other.top + 1e-9
            and other.right <= self.right + 1e-9
            and other.bottom <= self.bottom + 1e-9
        )

    def clamped(self, area: Box) -> Box:
        """The same size moved into the area as far as it fits."""
        left = min(max(self.left, area.left), max(area.right - self.width, area.left))
        top = min(max(self.top, area.top), max(area.bottom - self.height, area.top))
        return self._replace(left=left, top=top)


@dataclass(frozen=True)
class Label:
    """A label for one anchor. ``clear`` is the radius of the mark that must stay visible.

    An anchor outside the area is taken to its edge. ``must`` labels are kept even where
    that hides soft obstacles; any label may be left out when there is no room at all.
    """

    key: str
    anchor: tuple[float, float]
    width: float
    height: float
    clear: float = 8.0


_DIRECTIONS = (
    (1.0, -0.6), (-1.0, -0.6), (1.0, 0.6), (-1.0, 0.6), (0.0, -1.0), (0.0, 1.0), (1.0, 0.0),
    (-1.0, 0.0),
)
_RINGS = (0.0, 14.0, 30.0, 52.0, 84.0, 130.0)
_GAP = 3.0


def _around(label: Label, anchor: tuple[float, float], ring: float) -> Iterable[Box]:
    """Boxes beside the anchor in eight directions, ``ring`` beyond its mark."""
    x, y = anchor
    reach = label.clear + ring
    for dx, dy in _DIRECTIONS:
        size = math.hypot(dx, dy)
        px, py = x + reach * dx / size, y + reach * dy / size
        left = px if dx > 0 else px - label.width if dx < 0 else px - 0.5 * label.width
        top = py if dy > 0 else py - label.height if dy < 0 else py - 0.5 * label.height
        yield Box(left, top, label.width, label.height)


def place_labels(
    labels: Sequence[Label],
    area: Box,
    soft: Sequence[Box] = (),
    hard: Sequence[Box] = (),
    before: Mapping[str, tuple[float, float]] | None = None,
) -> dict[str, Box]:
    """A box for each label, first ones first; a label without room is left out.

    No box overlaps another, a ``hard`` box, or leaves ``area``; ``soft`` boxes are avoided
    where there is a choice. ``before`` holds each label's last offset from its anchor, and
    a label stays there if that is nearly as good, so that labels don't jump about.
    """
    taken = list(hard)
    out: dict[str, Box] = {}
    for label in labels:
        if label.width > area.width or label.height > area.height:
            continue
        box = _best(label, area, soft, taken, (before or {}).get(label.key))
        if box is not None:
            out[label.key] = box
            taken.append(box.grown(_GAP))
    return out


def _best(
    label: Label,
    area: Box,
    soft: Sequence[Box],
    taken: Sequence[Box],
    before: tuple[float, float] | None,
) -> Box | None:
    x = min(max(label.anchor[0], area.left), area.right)
    y = min(max(label.anchor[1], area.top), area.bottom)
    mark = Box(x, y, 0.0, 0.0).grown(0.7 * label.clear)
    best: tuple[float, Box] | None = None

    def consider(raw: Box, cost: float) -> None:
        nonlocal best
        box = raw.clamped(area)
        cost += 0.5 * (abs(box.left - raw.left) + abs(box.top - raw.top))
        if best is not None and cost >= best[0]:
            return
        if any(box.overlaps(other) for other in taken) or not area.holds(box):
            return
        cost += 60.0 * sum(box.overlaps(other) for other in soft)
        if box.overlaps(mark):
            cost += 90.0
        if best is None or cost < best[0]:
            best = cost, box

    if before is not None:
        consider(Box(x + before[0], y + before[1], label.width, label.height),
                 0.5 * math.hypot(*_gap(before, label)) - 12.0)
    for ring in _RINGS:
        for rank, box in enumerate(_around(label, (x, y), ring)):
            consider(box, ring + 2.0 * rank)
        if best is not None and best[0] < ring + 14.0:
            break
    if best is None:
        for box in _grid(label, area):
            consider(box, 200.0 + math.hypot(box.left - x, box.top - y))
    return None if best is None else best[1]


def _gap(offset: tuple[float, float], label: Label) -> tuple[float, float]:
    """How far a box at an offset stands from its anchor, per axis."""
    dx = max(offset[0], -offset[0] - label.width, 0.0)
    dy = max(offset[1], -offset[1] - label.height, 0.0)
    return dx, dy


def _grid(label: Label, area: Box) -> Iterable[Box]:
    """Boxes all over the area, for a label with no room near its anchor."""
    rows = max(int((area.height - label.height) // 8), 0)
    columns = max(int((area.width - label.width) // 24), 0)
    for row in range(rows + 1):
        for column in range(columns + 1):
            yield Box(area.left + 24 * column, area.top + 8 * row, label.width, label.height)
