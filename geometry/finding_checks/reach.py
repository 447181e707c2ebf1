"""Travel that the parts can't reach: the chosen pose, and the chosen span."""

from __future__ import annotations

import math
from collections.abc import Iterator

import numpy as np

from geometry import layout as names
from geometry.finding_checks.finding import Finding, Subject


def check(subject: Subject) -> Iterator[Finding]:
    """Findings on one side's reach in the pose and the steering that were chosen."""
    state, words = subject.state, subject.words
    if not bool(state.ride.assembles[0]):
        return
    points = (names.LOWER_BALL, names.TIE_OUTER)
    travel = subject.solution.travel[state.name]
    if not bool(state.now.assembles[0]):
        where = f"{words.tape(travel)} of {'bump' if travel >= 0.0 else 'droop'}"
        steered = " with the steering where it is" if subject.solution.rack else ""
        yield subject.finding(
            "pose-out-of-reach",
            "wrong",
            f"{subject.name('wheel')} can't get to {where}{steered}: the parts don't meet there.",
            _stops(subject),
            figure=travel,
            points=points,
        )
    good = state.sweep.assembles
    if bool(np.all(good)):
        return
    middle = good.size // 2
    for name, ok in (("bump", good[middle:]), ("droop", good[middle::-1])):
        if bool(np.all(ok)):
            continue
        # The last travel of the sweep reached without a gap; the stop lies within one step.
        reached = int(np.argmin(ok)) - 1
        if reached < 0:
            yield subject.finding(
                "travel-out-of-reach",
                "warn",
                f"{subject.name('wheel')} can't move in {name} with the steering where it is.",
                points=points,
            )
            continue
        stop = _stop(subject, name, reached * subject.solution.span / middle)
        yield subject.finding(
            "travel-out-of-reach",
            "warn",
            f"{subject.name('wheel')} stops after {words.tape(stop)} of {name}, short of the "
            f"{words.tape(subject.solution.span)} chosen: the parts don't meet beyond that.",
            "Toe range and best spot can't be judged over the whole chosen travel.",
            figure=stop,
            points=points,
        )


def _stop(subject: Subject, way: str, at_least: float) -> float:
    """How far the wheel goes one way, mm: where the parts stop meeting."""
    droop, bump = subject.state.stops
    stop = bump if way == "bump" else -droop
    step = subject.solution.span / (subject.state.sweep.travel.size // 2)
    return stop if at_least <= stop <= at_least + step else at_least


def _stops(subject: Subject) -> str:
    droop, bump = subject.state.stops
    words = subject.words
    if not (math.isfinite(droop) or math.isfinite(bump)):
        return ""
    ends = [
        f"{words.tape(size)} of {name}"
        for size, name in ((bump, "bump"), (-droop, "droop"))
        if math.isfinite(size)
    ]
    return f"The parts stop meeting at {' and '.join(ends)}."
