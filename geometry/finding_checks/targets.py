"""What the person wants of the car, met or missed."""

from __future__ import annotations

import math
from collections.abc import Iterator

from geometry.finding_checks.finding import Finding, Subject
from geometry.layout import Target
from geometry.tolerances import FIGURES, Figure


def check(subjects: tuple[Subject, ...]) -> Iterator[Finding]:
    """One finding a target (and side, where the sides differ)."""
    for target in subjects[0].layout.targets:
        figure = FIGURES.get(target.figure)
        if figure is None:
            yield subjects[0].finding(
                "target-unknown",
                "note",
                f"Target '{target.figure}' is not a figure that this program has.",
                whole_car=True,
            )
            continue
        for subject in subjects if figure.per_side else subjects[:1]:
            yield _judged(subject, target, figure)


def _judged(subject: Subject, target: Target, figure: Figure) -> Finding:
    words = subject.words
    value = figure.value(subject.solution, subject.state.name)
    low, high = (
        limit if limit is not None and math.isfinite(limit) else None
        for limit in (target.low, target.high)
    )
    if low is not None and high is not None:
        wanted = f"{words.of(low, figure.kind)} to {words.of(high, figure.kind)}"
    elif low is not None:
        wanted = f"at least {words.of(low, figure.kind)}"
    elif high is not None:
        wanted = f"at most {words.of(high, figure.kind)}"
    else:
        wanted = "no limit given"
    label = figure.label[0].lower() + figure.label[1:]
    name = subject.name(label) if figure.per_side else figure.label
    detail = f"Target: {wanted} (set in this layout)."
    if value is None:
        return subject.finding(
            "target-not-judged",
            "note",
            f"{name} can't be judged against its target: there is no such figure here.",
            detail,
            kind=figure.kind,
            whole_car=not figure.per_side,
        )
    said = words.of(value, figure.kind)
    short = low is not None and value < low
    over = high is not None and value > high
    if short or over:
        edge = low if short else high
        by = words.of(abs(value - (edge or 0.0)), figure.kind)
        return subject.finding(
            "target-missed",
            "warn",
            f"{name} misses its target: {said}, {by} too {'low' if short else 'high'}.",
            detail,
            figure=value,
            kind=figure.kind,
            whole_car=not figure.per_side,
        )
    return subject.finding(
        "target-met",
        "note",
        f"{name} meets its target: {said}.",
        detail,
        figure=value,
        kind=figure.kind,
        whole_car=not figure.per_side,
    )
