"""The least peak-to-peak of a plane family of curves, by Stiefel's exchange."""

from __future__ import annotations

import numpy as np

from geometry.linkage import Array

_MOST_EXCHANGES = 60


def minimax(slopes: Array, offsets: Array) -> Array | None:
    """The x (2,) with the least peak-to-peak of ``offsets + slopes @ x`` over n samples.

    ``slopes`` (n, 2), ``offsets`` (n,). Four samples that share the extreme value decide a
    fit with two slopes and a level; the worst sample takes the place of one of them until
    none is worse (E. Stiefel, Numerische Mathematik 1 (1959) 1-28, from memory). None where
    the slopes do not determine x.
    """
    scale = np.abs(slopes).max(axis=0)
    if len(offsets) < 4 or not np.all(np.isfinite(slopes)) or not np.all(scale > 0.0):
        return None
    unit_slopes = slopes / scale
    # Plain floats: four samples at a time are too few for arrays to pay.
    rows = list(
        zip(unit_slopes[:, 0].tolist(), unit_slopes[:, 1].tolist(), offsets.tolist(), strict=True)
    )
    chosen = np.linspace(0, len(rows) - 1, 4).round().astype(int).tolist()
    size = float(np.abs(offsets - offsets.mean()).max()) or 1.0
    fit: tuple[float, float, float] | None = None
    for _ in range(_MOST_EXCHANGES):
        level = _level([rows[i] for i in chosen])
        fit = _fit([rows[i] for i in chosen])
        if level is None or fit is None:
            return None
        rest = offsets + unit_slopes[:, 0] * fit[0] + unit_slopes[:, 1] * fit[1] + fit[2]
        worst = int(np.argmax(np.abs(rest)))
        if abs(rest[worst]) <= level + 1e-13 * size or worst in chosen:
            break
        trials = [(_level(_with(rows, chosen, drop, worst)) or -1.0, drop) for drop in range(4)]
        best, drop = max(trials)
        if best <= level * (1.0 + 1e-15):
            break
        chosen[drop] = worst
    assert fit is not None
    return np.asarray(np.array(fit[:2]) / scale)


_Row = tuple[float, float, float]


def _with(rows: list[_Row], chosen: list[int], drop: int, worst: int) -> list[_Row]:
    return [rows[worst if place == drop else i] for place, i in enumerate(chosen)]


def _weights(rows: list[_Row]) -> tuple[float, float, float, float]:
    """How the four samples balance each other: signed areas of the triangles left."""

    def area(p: _Row, q: _Row, r: _Row) -> float:
        return (q[0] - p[0]) * (r[1] - p[1]) - (r[0] - p[0]) * (q[1] - p[1])

    a, b, c, d = rows
    return area(b, c, d), -area(a, c, d), area(a, b, d), -area(a, b, c)


def _level(rows: list[_Row]) -> float | None:
    """The common size of error that four samples force on any fit; None if they can't."""
    weights = _weights(rows)
    total = sum(map(abs, weights))
    if not total > 1e-14:
        return None
    return abs(sum(w * row[2] for w, row in zip(weights, rows, strict=True))) / total


def _fit(rows: list[_Row]) -> tuple[float, float, float] | None:
    """The two slopes' x and the level shift that leave four samples with equal errors."""
    weights = _weights(rows)
    total = sum(map(abs, weights))
    if not total > 1e-14:
        return None
    error = sum(w * row[2] for w, row in zip(weights, rows, strict=True)) / total
    signs = [-1.0 if w < 0.0 else 1.0 for w in weights]
    # Leave out the sample whose weight, the triangle of the other three, is largest.
    left_out = max(range(4), key=lambda i: abs(weights[i]))
    p, q, r = (i for i in range(4) if i != left_out)
    (a1, b1, o1), (a2, b2, o2), (a3, b3, o3) = rows[p], rows[q], rows[r]
    o1, o2, o3 = (o - s * error for o, s in ((o1, signs[p]), (o2, signs[q]), (o3, signs[r])))
    det = (a2 - a1) * (b3 - b1) - (a3 - a1) * (b2 - b1)
    if det == 0.0:
        return None
    x = -((o2 - o1) * (b3 - b1) - (o3 - o1) * (b2 - b1)) / det
    y = -((a2 - a1) * (o3 - o1) - (a3 - a1) * (o2 - o1)) / det
    return x, y, -(o1 + a1 * x + b1 * y)
