"""Places labels so that none hides another or leaves its area: greedy, plain geometry.

Works in any unit (pixels on the screen, mm on paper) with y in either direction.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np

from geometry.linkage import Array


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
_DIRECTIONS = np.array(
    [(1.0, -0.6), (-1.0, -0.6), (1.0, 0.6), (-1.0, 0.6), (0.0, -1.0), (0.0, 1.0), (1.0, 0.0),
     (-1.0, 0.0)]
)
_RINGS = np.array([0.0, 14.0, 30.0, 52.0, 84.0, 130.0])
_WAYS = np.tile(_DIRECTIONS / np.hypot(*_DIRECTIONS.T)[:, None], (_RINGS.size, 1))
_REACHES = np.repeat(_RINGS, len(_DIRECTIONS))
# A box stands beyond its place in the direction it was sent to.
_SHARES = np.tile(np.where(_DIRECTIONS > 0, 0.0, np.where(_DIRECTIONS < 0, 1.0, 0.5)),
                  (_RINGS.size, 1))
_COSTS = _REACHES + 2.0 * np.tile(np.arange(len(_DIRECTIONS)), _RINGS.size)
_SLIDES = np.concatenate([[0.0], np.repeat(np.arange(6.0, 300.0, 6.0), 2)])
_SLIDES[2::2] *= -1.0


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
    taken = _rows(hard)
    shy = _rows(soft)
    out: dict[str, Box] = {}
    for label in labels:
        if label.width > area.width or label.height > area.height:
            continue
        box = _best(label, area, shy, taken, (before or {}).get(label.key))
        if box is not None:
            out[label.key] = box
            taken = np.vstack([taken, _rows([box.grown(GAP)])])
    return out


def _rows(boxes: Sequence[Box]) -> Array:
    """Boxes as rows of left, top, right, bottom (n, 4)."""
    rows = np.array(boxes, dtype=float).reshape(-1, 4)
    rows[:, 2:] += rows[:, :2]
    return rows


def _overlaps(lefts_tops: Array, size: Array, others: Array) -> np.ndarray:
    """(n, m) bool: which of n boxes of one size overlap which of m others."""
    low = lefts_tops[:, None, :]
    return np.asarray(
        ((low < others[None, :, 2:]) & (low + size > others[None, :, :2])).all(axis=2)
    )


def _best(
    label: Label, area: Box, soft: Array, taken: Array, before: tuple[float, float] | None
) -> Box | None:
    x = min(max(label.anchor[0], area.left), area.right)
    y = min(max(label.anchor[1], area.top), area.bottom)
    anchor, size = np.array([x, y]), np.array([label.width, label.height])
    if label.edge:
        places, costs = _along_edge(anchor, size, area)
    else:
        places = anchor + (label.clear + _REACHES)[:, None] * _WAYS - _SHARES * size
        costs = _COSTS.copy()
        if before is not None:
            places = np.vstack([places, anchor + before])
            off = np.maximum(np.maximum(before, -np.asarray(before) - size), 0.0)
            costs = np.append(costs, 0.8 * float(np.hypot(*off)) - _HABIT)
    index = _cheapest(label, anchor, size, area, places, costs, soft, taken)
    if index is None:
        places = _grid(label, area)
        costs = _FALLBACK + np.hypot(*(places - anchor).T)
        index = _cheapest(label, anchor, size, area, places, costs, soft, taken)
    return None if index is None else Box(*index, label.width, label.height)


def _cheapest(
    label: Label, anchor: Array, size: Array, area: Box, places: Array, costs: Array,
    soft: Array, taken: Array,
) -> tuple[float, float] | None:
    """The cheapest place (left, top) that is free, after moving each into the area."""
    low = np.array([area.left, area.top])
    inside = np.clip(places, low, np.array([area.right, area.bottom]) - size)
    costs = costs + 0.5 * np.abs(inside - places).sum(axis=1)
    free = ~_overlaps(inside, size, taken).any(axis=1)
    if not free.any():
        return None
    costs = costs + _SOFT * _overlaps(inside, size, soft).sum(axis=1)
    mark = 0.7 * label.clear
    around = np.concatenate([anchor - mark, anchor + mark])[None, :]
    costs = costs + (0.0 if label.edge else _MARK) * _overlaps(inside, size, around)[:, 0]
    best = int(np.argmin(np.where(free, costs, math.inf)))
    return float(inside[best, 0]), float(inside[best, 1])


def _along_edge(anchor: Array, size: Array, area: Box) -> tuple[Array, Array]:
    """Places against the area's edge nearest to the anchor, sliding along it."""
    gaps = (
        anchor[0] - area.left, area.right - anchor[0], anchor[1] - area.top,
        area.bottom - anchor[1],
    )
    start = anchor - 0.5 * size
    upright = int(np.argmin(gaps)) < 2
    slide = np.stack([0.0 * _SLIDES, _SLIDES], axis=1) if upright else np.stack(
        [2.0 * _SLIDES, 0.0 * _SLIDES], axis=1
    )
    start[0] = (area.left, area.right - size[0], start[0], start[0])[int(np.argmin(gaps))]
    start[1] = (start[1], start[1], area.top, area.bottom - size[1])[int(np.argmin(gaps))]
    return start + slide, np.abs(_SLIDES)


def _grid(label: Label, area: Box) -> Array:
    """Places all over the area (n, 2), for a label with no room near its anchor."""
    lefts = np.arange(area.left, area.right - label.width + 1e-9, 24.0)
    tops = np.arange(area.top, area.bottom - label.height + 1e-9, 8.0)
    return np.stack(np.meshgrid(lefts, tops), axis=-1).reshape(-1, 2)
