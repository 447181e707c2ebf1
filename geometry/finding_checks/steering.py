"""A relay rod's two arms: unequal ones steer the wheels apart."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import replace

import numpy as np

from geometry import layout as names
from geometry.finding_checks.finding import Cure, Finding, Move, Subject
from geometry.layout import MM_PER_INCH, SIDES, Layout, Point, RelayRod
from geometry.linkage import Array
from geometry.steering import inner_shifts
from geometry.tolerances import toe_length

STEERED = np.array([-MM_PER_INCH, MM_PER_INCH])
"""Where the toe is compared: the pitman arm's end an inch to each side."""


def check(subject: Subject) -> Iterator[Finding]:
    """Unequal pitman and idler arms, with the toe they cause when steered."""
    relay = subject.layout.steering
    if not isinstance(relay, RelayRod):
        return
    yield from _no_length(subject, relay)
    longer = _length(relay.idler_pivot, relay.idler_end) - _length(
        relay.pitman_pivot, relay.pitman_end
    )
    higher = relay.idler_end.up - relay.pitman_end.up
    limit = subject.limit("relay difference")
    if abs(longer) <= limit and abs(higher) <= limit:
        return
    words = subject.words
    parts = [
        text
        for size, text in (
            (longer, f"{words.tape(longer)} {'longer' if longer > 0.0 else 'shorter'}"),
            (higher, f"{words.tape(higher)} {'higher' if higher > 0.0 else 'lower'}"),
        )
        if abs(size) > limit
    ]
    worst = _toe_difference(subject, relay)
    step = words.tape(MM_PER_INCH)
    if worst is None:
        caused = f"the arms can't follow {step} to each side"
    elif abs(worst) < 0.005:
        caused = f"no toe comes of it with the relay rod {step} to either side"
    else:
        caused = (
            f"the wheels toe {'in' if worst > 0.0 else 'out'} {words.fine(worst)} between them "
            f"with the relay rod {step} to one side"
        )
    yield subject.finding(
        "relay-arms-unequal",
        "warn" if worst is None or abs(worst) > subject.limit("relay toe") else "note",
        f"Idler arm is {' and '.join(parts)} than the pitman arm: {caused}.",
        "Compared with an idler arm that matches the pitman arm.",
        figure=worst,
        kind="toe",
        key="relay toe",
        cure=_matching(relay),
        points=names.RELAY_POINTS,
        whole_car=True,
    )


def _length(pivot: Point, end: Point) -> float:
    """An arm's length in plan, mm."""
    return math.hypot(end.over - pivot.over, end.fore - pivot.fore)


def _no_length(subject: Subject, relay: RelayRod) -> Iterator[Finding]:
    """A pitman or idler arm whose two points are one place steers nothing."""
    limit = subject.limit("point spacing")
    arms = ((names.PITMAN_PIVOT, names.PITMAN_END), (names.IDLER_PIVOT, names.IDLER_END))
    for pivot, end in arms:
        gap = math.hypot(relay[end].over - relay[pivot].over, relay[end].fore - relay[pivot].fore)
        if gap < limit:
            arm = pivot.removesuffix(" pivot")
            yield subject.finding(
                "points-coincide",
                "wrong",
                f"The {arm} has no length: its pivot and its end are in the same place "
                "seen from above.",
                f"They are {subject.words.fine(gap)} apart, and an arm without length can't "
                "move the relay rod; one of them was measured or typed wrong.",
                figure=gap,
                key="point spacing",
                points=(pivot, end),
                whole_car=True,
            )


def _matched(relay: RelayRod) -> RelayRod:
    """The relay with its idler end where the pitman arm's mirror image would have it,
    measured from the idler's own pivot."""
    arm = np.subtract(relay.pitman_end, relay.pitman_pivot)
    pivot = relay.idler_pivot
    end = Point(pivot.over + arm[0], relay.pitman_end.up, pivot.fore + arm[2])
    return replace(relay, idler_end=end)


def _matching(relay: RelayRod) -> Cure:
    new, old = _matched(relay).idler_end, relay.idler_end
    move = Move(
        names.IDLER_END,
        relay.side_of(names.IDLER_END),
        new.over - old.over,
        new.up - old.up,
        new.fore - old.fore,
    )
    return Cure("Match the idler arm to the pitman arm, in length and in height.", (move,))


def _toe_difference(subject: Subject, relay: RelayRod) -> float | None:
    """Total toe (both wheels), mm, beyond that of matched arms, the worse of both ways."""
    layout = subject.layout
    built = _total_toe(subject, layout)
    matched = _total_toe(subject, replace(layout, steering=_matched(relay)))
    apart = built - matched
    if not bool(np.all(np.isfinite(apart))):
        return None
    return float(apart[int(np.argmax(np.abs(apart)))])


def _total_toe(subject: Subject, layout: Layout) -> Array:
    shifts = inner_shifts(layout, STEERED)
    total = np.zeros(2)
    for name in SIDES:
        state = subject.solution.sides[name]
        toe = state.corner.poses(np.zeros(2), shifts[name]).toe
        total = total + toe_length(state.side, toe)
    return total
