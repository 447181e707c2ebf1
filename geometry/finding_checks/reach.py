"""Travel that the parts can't reach: the chosen pose, and the chosen span."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from geometry import layout as names
from geometry.finding_checks.finding import Finding, Subject

GAPS = 32
"""Into how many parts one solve cuts the gap in which a stop lies."""


def check(subject: Subject) -> Iterator[Finding]:
    """Findings on one side's reach in the pose and the steering that were chosen."""
    state, words = subject.state, subject.words
    if not bool(state.ride.assembles[0]):
        return
    travel = subject.solution.travel[state.name]
    if not bool(state.now.assembles[0]):
        where = f"{words.tape(travel)} of {'bump' if travel >= 0.0 else 'droop'}"
        steered = " with the steering where it is" if subject.solution.rack else ""
        stop = _stops(subject, [0.0], [travel])[0]
        stop = _stops(subject, [stop], [stop + travel / GAPS])[0]
        yield subject.finding(
            "pose-out-of-reach",
            "wrong",
            f"{subject.name('wheel')} can't get to {where}{steered}: the parts don't meet there.",
            f"The parts stop meeting at {words.tape(stop)} of that.",
            figure=travel,
            points=(names.LOWER_BALL, names.TIE_OUTER),
        )
    yield from _short_of_span(subject)


def _short_of_span(subject: Subject) -> Iterator[Finding]:
    """Where the sweep ends before the chosen travel does, in bump and in droop."""
    state, words, span = subject.state, subject.words, subject.solution.span
    good = state.sweep.assembles
    if bool(np.all(good)):
        return
    middle = good.size // 2
    step = span / middle
    # How many steps each way the sweep goes without a gap; the stop lies within the next.
    reached = {
        name: int(np.argmin(ok)) - 1
        for name, ok in (("bump", good[middle:]), ("droop", good[middle::-1]))
        if not bool(np.all(ok))
    }
    ways = [1.0 if name == "bump" else -1.0 for name in reached]
    ends = [way * step * max(count, 0) for way, count in zip(ways, reached.values(), strict=True)]
    beyond = [end + way * step for way, end in zip(ways, ends, strict=True)]
    stops = _stops(subject, ends, beyond)
    for (name, count), stop in zip(reached.items(), stops, strict=True):
        end = f"stops after {words.tape(stop)} of {name}, short of the {words.tape(span)} chosen"
        if count < 0:
            end = f"can't move in {name} with the steering where it is"
        yield subject.finding(
            "travel-out-of-reach",
            "warn",
            f"{subject.name('wheel')} {end}: the parts don't meet beyond that.",
            "Toe range and best spot can't be judged over the whole chosen travel.",
            figure=abs(stop) if count >= 0 else 0.0,
            points=(names.LOWER_BALL, names.TIE_OUTER),
        )


def _stops(subject: Subject, reached: list[float], missed: list[float]) -> list[float]:
    """The last travels, mm, at which the parts meet, each between one reached and one missed.

    One solve of an array narrows every gap to a thirty-second. (The exact ``stops`` of the
    corner take a hundred solves, too long for a drag.)
    """
    gaps = np.linspace(reached, missed, GAPS + 1, axis=1)
    good = subject.state.corner.poses(gaps.ravel(), subject.state.shift).assembles
    good = good.reshape(gaps.shape)
    good[:, 0], good[:, -1] = True, False
    return [float(row[np.argmin(ok) - 1]) for row, ok in zip(gaps, good, strict=True)]
