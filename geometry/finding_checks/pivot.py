"""The inner tie-rod pivot: how far off its best spot, and where its rod points."""

from __future__ import annotations

import math
from collections.abc import Iterator

import numpy as np

from geometry import layout as names
from geometry.finding_checks.finding import Cure, Finding, Severity, Subject
from geometry.finding_checks.wording import TAPE
from geometry.layout import MM_PER_INCH, Rack
from geometry.linkage import Array
from geometry.tolerances import toe_length

TOE_SHOWN = {"in": MM_PER_INCH / 1000, "mm": 0.01}
"""The finest toe that is said, mm."""

ALREADY_BEST = 0.9
"""A best fit that leaves more than this share of the present toe change cures nothing."""


def check(subject: Subject) -> Iterator[Finding]:
    """The toe change over the chosen travel (rack centered), and the tie rod's aim."""
    state = subject.state
    # Poses out of reach have no toe; the reach check speaks of them.
    lengths = toe_length(state.side, state.centered_toe)
    over_limit = False
    if bool(np.all(np.isfinite(lengths))):
        total = float(lengths.max() - lengths.min())
        over_limit = total > subject.limit("toe range")
        if over_limit:
            yield _off_its_spot(subject, lengths, total)
    yield from _aim(subject, lengths, "note" if over_limit else "warn")


def _toe_words(subject: Subject, toe: float) -> str:
    return f"{subject.words.fine(toe)} toe-{'in' if toe > 0.0 else 'out'}"


def _first_bump(subject: Subject, lengths: Array) -> str:
    """The toe change in the first inch (or 25 mm) of bump, or as far as the travel goes."""
    words, travel = subject.words, subject.state.sweep.travel
    step = min(words.travel_step, subject.solution.span)
    start, end = np.interp([0.0, step], travel, lengths)
    where = "the first inch" if words.units == "in" else "the first 25 mm"
    if step < words.travel_step:
        where = f"the first {words.tape(step)}"
    gained = float(end - start)
    if abs(gained) < 0.5 * TOE_SHOWN[words.units]:
        return f"no toe change in {where} of bump"
    return f"{_toe_words(subject, gained)} in {where} of bump"


def _off_its_spot(subject: Subject, lengths: Array, total: float) -> Finding:
    state, words, pivots = subject.state, subject.words, subject.state.pivots
    severity: Severity = "wrong" if total > subject.limit("toe range wrong") else "warn"
    span = words.span(subject.solution.span)
    detail = f"Toe at this wheel changes {words.fine(total)} in all over {span}, steering centered."
    points = (names.TIE_INNER, names.TIE_OUTER)
    first = _first_bump(subject, lengths)
    best, left = pivots.place("best fit"), pivots.ranges["best fit"]
    remains = math.inf if left is None else float(toe_length(state.side, left))
    if best is None or remains > ALREADY_BEST * total:
        return subject.finding(
            "toe-change-remains",
            severity,
            f"{subject.name('toe')} changes too much in travel ({first}), and no other spot for "
            "the inner tie-rod pivot makes it much better.",
            f"{detail} Look at the steering arm's end and at the arms.",
            figure=total,
            kind="toe",
            key="toe range",
            points=points,
        )
    present = state.side[names.TIE_INNER]
    over, up = best[0] - present.over, best[1] - present.up
    detail += f" At its best spot {words.fine(remains)} would be left."
    if remains > subject.limit("toe range"):
        detail += (
            " That is still more than allowed: the steering arm's end or the arms need to"
            " change as well."
        )
    return subject.finding(
        "inner-pivot-off",
        severity,
        f"{subject.name('inner tie-rod pivot')} is {_offset(subject, over, up)} of its best "
        f"spot: {first}.",
        detail,
        figure=total,
        kind="toe",
        key="toe range",
        cure=Cure(_cure_text(subject, over, up), (subject.move(names.TIE_INNER, over, up),)),
        points=points,
    )


def _offset(subject: Subject, over: float, up: float) -> str:
    """Where the pivot stands against its best spot, which lies ``over`` and ``up`` from it."""
    words = subject.words
    parts = [
        f"{words.tape(size)} {low if size > 0.0 else high}"
        for size, low, high in ((up, "low", "high"), (over, "inboard", "outboard"))
        if words.counts(size)
    ]
    if not parts:
        return f"within {words.tape(TAPE[words.units])}, but short,"
    return " and ".join(parts)


def _cure_text(subject: Subject, over: float, up: float) -> str:
    words = subject.words
    raise_it = "Raise" if up > 0.0 else "Lower"
    outward = "outboard" if over > 0.0 else "inboard"
    if not isinstance(subject.layout.steering, Rack):
        what = "the tie rod's inner end on the relay rod"
    elif subject.side is None:
        what = "the rack"
    else:
        what = f"the {subject.side} end of the rack"
    if words.counts(up) and words.counts(over):
        return (
            f"{raise_it} {what} {words.tape(up)} and set the pivot {words.tape(over)} "
            f"farther {outward}."
        )
    if words.counts(over):
        return f"Set the pivot {words.tape(over)} farther {outward}."
    return f"{raise_it} {what} {words.tape(up)}."


def _aim(subject: Subject, lengths: Array, severity: Severity) -> Iterator[Finding]:
    """The toe curve's slope at ride height, which the tie rod's aim decides."""
    motion = subject.state.pivots.motion
    middle = motion.travel.size // 2
    low, high = middle - 1, middle + 1
    slope = float((lengths[high] - lengths[low]) / (motion.travel[high] - motion.travel[low]))
    if not math.isfinite(slope) or abs(slope) <= subject.limit("toe rate"):
        return
    # A rod across the outer end's path (toe held) leaves the toe no slope; for arms that
    # turn about level fore-aft axes this is the aim at the instant center.
    outer = motion.tie_outer[:, low : high + 1]
    path, end = outer[:, 2] - outer[:, 0], outer[:, 1]
    inner = subject.state.side[names.TIE_INNER]
    fore, over = end[0] - inner.fore, end[1] - inner.over
    up = float(end[2] + (fore * path[0] + over * path[1]) / path[2] - inner.up)
    words = subject.words
    direction = "in" if slope > 0.0 else "out"
    cure = None
    if math.isfinite(up) and words.counts(up):
        verb = "Raise" if up > 0.0 else "Lower"
        cure = Cure(
            f"{verb} its inner end {words.tape(up)} to aim it.",
            (subject.move(names.TIE_INNER, up=up),),
        )
    yield subject.finding(
        "tie-rod-aim",
        severity,
        f"{subject.name('tie rod')} {_miss(subject)}: "
        f"{words.slope(slope, f' toe-{direction}')} in bump, at ride height.",
        "Aimed at the instant center, the tie rod starts out with no toe change.",
        figure=slope,
        kind="slope",
        key="toe rate",
        cure=cure,
        points=(names.TIE_INNER, names.TIE_OUTER),
    )


def _miss(subject: Subject) -> str:
    """By how much the tie rod's line misses the instant center, in the front view."""
    state, words = subject.state, subject.words
    inner, outer = state.side[names.TIE_INNER], state.side[names.TIE_OUTER]
    over, up, w = (float(v) for v in state.ride_view.instant_center[:, 0])
    rod_over, rod_up = inner.over - outer.over, inner.up - outer.up
    to_over, to_up = (over - outer.over, up - outer.up) if w == 1.0 else (over, up)
    sine = rod_over * to_up - rod_up * to_over
    cosine = rod_over * to_over + rod_up * to_up
    if not math.isfinite(sine) or (sine == 0.0 and cosine == 0.0):
        return "does not point along the arms' motion"
    # The angle between two lines, 0 to 90 degrees, whichever way each points.
    off = words.angle(math.atan2(abs(sine), abs(cosine)))
    if w != 1.0:
        return f"is not parallel to the arms (off by {off})"
    if rod_over != 0.0:
        passes = outer.up + rod_up / rod_over * to_over
        side = "below" if passes < up else "above"
        return f"points {words.tape(passes - up)} {side} the instant center ({off} off)"
    return f"does not point at the instant center ({off} off)"
