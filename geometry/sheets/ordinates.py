"""Ordinate dimensions: every nail's distance from one line, set along an edge, never crowded."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from geometry.drawing import Item, Place, Polyline, Style, Text
from geometry.lettering import LINE_SPACING
from geometry.sheets.look import SMALL, ink

THIN = Style("#8B8F94", 0.13, layer="dimensions")
_JOG = 6.0
"""How far a line runs aslant to reach a label that had to give way, mm."""


@dataclass(frozen=True)
class Ordinate:
    """One place in a drawing (paper mm) and the words that stand for its distance."""

    at: Place
    words: str


def spread(values: Sequence[float], gap: float) -> list[float]:
    """Places in rising order at least ``gap`` apart, as near to the values as can be.

    The least sum of squared moves (pooled adjacent values); values must rise.
    """
    pools: list[tuple[float, int]] = []
    for number, value in enumerate(values):
        mean, count = value - number * gap, 1
        while pools and pools[-1][0] > mean:
            other, size = pools.pop()
            mean, count = (mean * count + other * size) / (count + size), count + size
        pools.append((mean, count))
    flat = [mean for mean, count in pools for _ in range(count)]
    return [mean + number * gap for number, mean in enumerate(flat)]


def below(ordinates: Sequence[Ordinate], edge: float, height: float = SMALL) -> Iterator[Item]:
    """Distances across, read along a lower edge at y = ``edge``; words stand upright below."""
    rising = sorted(ordinates, key=lambda o: o.at[0])
    places = spread([o.at[0] for o in rising], LINE_SPACING * height)
    for ordinate, x in zip(rising, places, strict=True):
        start = ordinate.at
        run = (start, (start[0], edge + _JOG), (x, edge + 1.0), (x, edge))
        yield Polyline(run, style=THIN)
        at = (x, edge - 0.8)
        yield Text(at, ordinate.words, height, "right", "middle", angle=math.pi / 2,
                   style=ink(layer="dimensions"))


def beside(
    ordinates: Sequence[Ordinate], edge: float, left: bool, height: float = SMALL
) -> Iterator[Item]:
    """Distances up, read along an upright edge at x = ``edge``; words stand outside of it."""
    rising = sorted(ordinates, key=lambda o: o.at[1])
    places = spread([o.at[1] for o in rising], LINE_SPACING * height)
    out = -1.0 if left else 1.0
    for ordinate, y in zip(rising, places, strict=True):
        start = ordinate.at
        run = (start, (edge - out * _JOG, start[1]), (edge - out * 1.0, y), (edge, y))
        yield Polyline(run, style=THIN)
        yield Text((edge + out * 0.8, y), ordinate.words, height, "right" if left else "left",
                   "middle", style=ink(layer="dimensions"))
