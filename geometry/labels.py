"""Places labels so that none hides another or leaves its area: greedy, plain geometry.

Works in any unit (pixels on the screen, mm on paper) with y in either direction.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np


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


@dataclass(frozen=True)
class Label:
    """A label for one anchor. ``clear`` is the radius of the mark that should stay visible.

    An anchor outside the area is taken to its edge. ``edge`` labels stand against the edge
    that their anchor is at and only slide along it while there is room.
    """

    key: str
    anchor: tuple[float, float]
    width: float
    height: float
    clear: float = 8.0
    edge: bool = False


GAP = 3.0
"""Clear room kept between two labels."""

_SOFT, _MARK, _FALLBACK, _HABIT = 90.0, 90.0, 200.0, 12.0
_DIRECTIONS = (
    (1.0, -0.6), (-1.0, -0.6), (1.0, 0.6), (-1.0, 0.6), (0.0, -1.0), (0.0, 1.0), (1.0, 0.0),
    (-1.0, 0.0),
)
_RINGS = (0.0, 14.0, 30.0, 52.0, 84.0, 130.0)


@dataclass(frozen=True)
class _Way:
    """A way to go from an anchor: a unit direction, how far, and the box's share beyond it."""

    cost: float
    x: float
    y: float
    reach: float
    share_x: float
    share_y: float


def _ways() -> list[_Way]:
    """Every way to try, cheapest first."""
    out = []
    for ring in _RINGS:
        for rank, (x, y) in enumerate(_DIRECTIONS):
            # A box stands beyond its place in the direction it was sent to.
            shares = [0.0 if part > 0.0 else 1.0 if part < 0.0 else 0.5 for part in (x, y)]
            size = math.hypot(x, y)
            out.append(_Way(ring + 2.0 * rank, x / size, y / size, ring, *shares))
    return sorted(out, key=lambda way: way.cost)


_WAYS = _ways()
_SLIDES = (0.0, *(sign * step for step in range(6, 300, 6) for sign in (1.0, -1.0)))

Place = tuple[float, float, float]
"""A place to try: its cost there if nothing is in the way, then left and top."""


def place_labels(
    labels: Sequence[Label],
    area: Box,
    soft: Sequence[Box] = (),
    hard: Sequence[Box] = (),
    before: Mapping[str, tuple[float, float]] | None = None,
) -> dict[str, Box]:
    """A box for each label, first ones first; a label without room is left out.

    No box overlaps another, a ``hard`` box, or leaves ``area``; ``soft`` boxes are avoided
    where there is a choice. ``before`` holds each label's last offset (left, top) from its
    anchor, and a label stays there if that is nearly as good, so that labels don't jump.
    """
    taken, shy = list(hard), list(soft)
    out: dict[str, Box] = {}
    for label in labels:
        if label.width > area.width or label.height > area.height:
            continue
        box = _best(label, area, shy, taken, (before or {}).get(label.key))
        if box is not None:
            out[label.key] = box
            taken.append(box.grown(GAP))
    return out


def _best(
    label: Label, area: Box, soft: Sequence[Box], taken: Sequence[Box],
    before: tuple[float, float] | None,
) -> Box | None:
    x = min(max(label.anchor[0], area.left), area.right)
    y = min(max(label.anchor[1], area.top), area.bottom)
    places = _along_edge(label, x, y, area) if label.edge else _around(label, x, y, before)
    mark = 0.7 * label.clear
    shy = [(box.left, box.top, box.right, box.bottom, _SOFT) for box in soft]
    if not label.edge:
        shy.append((x - mark, y - mark, x + mark, y + mark, _MARK))
    found = _cheapest(label, area, places, shy, taken)
    if found is None:
        found = _cheapest(label, area, _grid(label, x, y, area), shy, taken)
    return None if found is None else Box(*found, label.width, label.height)


def _cheapest(
    label: Label, area: Box, places: Iterable[Place],
    shy: Sequence[tuple[float, float, float, float, float]], taken: Sequence[Box],
) -> tuple[float, float] | None:
    """The cheapest place (left, top) that is free, after moving each into the area.

    ``places`` come cheapest first, so that the search ends at the first one that could not
    be better any more, which is nearly always after a few.
    """
    width, height = label.width, label.height
    most_left, most_top = area.right - width, area.bottom - height
    best, least = None, math.inf
    for cost, left, top in places:
        if cost >= least:
            break
        x = min(max(left, area.left), most_left)
        y = min(max(top, area.top), most_top)
        cost += 0.5 * (abs(x - left) + abs(y - top))
        if cost >= least:
            continue
        right, bottom = x + width, y + height
        if any(
            x < box.left + box.width and right > box.left
            and y < box.top + box.height and bottom > box.top
            for box in taken
        ):
            continue
        for a, b, c, d, penalty in shy:
            if x < c and right > a and y < d and bottom > b:
                cost += penalty
        if cost < least:
            best, least = (x, y), cost
    return best


def _around(
    label: Label, x: float, y: float, before: tuple[float, float] | None
) -> Iterator[Place]:
    """Places round an anchor, and the one it had before where habit puts it among them."""
    width, height, clear = label.width, label.height, label.clear
    old = math.inf
    if before is not None:
        off_x = max(before[0], -before[0] - width, 0.0)
        off_y = max(before[1], -before[1] - height, 0.0)
        old = 0.8 * math.hypot(off_x, off_y) - _HABIT
    for way in _WAYS:
        if before is not None and old < way.cost:
            yield old, x + before[0], y + before[1]
            before = None
        far = clear + way.reach
        left = x + far * way.x - way.share_x * width
        top = y + far * way.y - way.share_y * height
        yield way.cost, left, top
    if before is not None:
        yield old, x + before[0], y + before[1]


def _along_edge(label: Label, x: float, y: float, area: Box) -> Iterator[Place]:
    """Places against the area's edge nearest to the anchor, sliding along it."""
    gaps = (x - area.left, area.right - x, y - area.top, area.bottom - y)
    edge = gaps.index(min(gaps))
    left, top = x - 0.5 * label.width, y - 0.5 * label.height
    left = (area.left, area.right - label.width, left, left)[edge]
    top = (top, top, area.top, area.bottom - label.height)[edge]
    for slide in _SLIDES:
        if edge < 2:
            yield abs(slide), left, top + slide
        else:
            yield abs(slide), left + 2.0 * slide, top


def _grid(label: Label, x: float, y: float, area: Box) -> list[Place]:
    """Places all over the area, nearest first, for a label with no room near its anchor."""
    lefts = np.arange(area.left, area.right - label.width + 1e-9, 24.0).tolist()
    tops = np.arange(area.top, area.bottom - label.height + 1e-9, 8.0).tolist()
    return sorted(
        (_FALLBACK + math.hypot(left - x, top - y), left, top) for top in tops for left in lefts
    )
