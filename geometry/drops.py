"""Lowering or raising a car three ways by the same figure, and what an alignment then mends."""

from __future__ import annotations

from dataclasses import dataclass

from geometry.layout import Layout, LayoutError
from geometry.solution import Solution, solve
from geometry.stance import Stance, aligned, lowered

WAYS: tuple[tuple[str, str], ...] = (
    ("spring", "by spring"),
    ("spindle", "by dropped knuckle"),
    ("tire", "by smaller tire"),
)


@dataclass(frozen=True)
class Way:
    """One way to the same drop: the car and its solution, or the reason it can't be had."""

    key: str
    label: str
    layout: Layout | None
    solution: Solution | None
    reason: str = ""


def three_ways(layout: Layout, drop: float, span: float) -> tuple[Way, ...]:
    """The car lowered by ``drop`` mm (raised if negative) by spring, knuckle and tire."""
    out = []
    for key, label in WAYS:
        try:
            car = lowered(layout, Stance(**{key: drop}))
        except LayoutError as reason:
            out.append(Way(key, label, None, None, str(reason)))
            continue
        out.append(Way(key, label, car, solve(car, span=span)))
    return tuple(out)


@dataclass(frozen=True)
class Alignment:
    """A car before and after its camber is set again by shims: what that mends and what not."""

    before: Solution
    after: Solution | None
    mends: tuple[str, ...]
    leaves: tuple[str, ...]


def alignment(layout: Layout, wanted: Layout, span: float) -> Alignment:
    """Set the static camber and toe of ``wanted`` on a changed car, and say what is left wrong."""
    from geometry.compare import compare

    before = solve(layout, span=span)
    try:
        car = aligned(layout, wanted.left.static_camber)
    except LayoutError as reason:
        return Alignment(before, None, (), (str(reason),))
    after = solve(car, span=span)
    goal = solve(wanted, span=span)
    leaves = tuple(
        f"{row.heading} is then {row.now}; it was {row.was}."
        for row in compare(goal, after)
        if row.verdict in ("worse", "different")
    )
    mends = ("static camber, by shims", "static toe, by the tie rods")
    return Alignment(before, after, mends, leaves)
