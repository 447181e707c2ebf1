"""What is wrong with a car, by how much, and what would cure it.

``findings`` reads one Solution and never solves a pose the Solution holds already. It takes
any layout that is complete, degenerate ones too: what can't be figured is said in words.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from geometry.finding_checks import arms, pivot, reach, roll, sanity, steering, targets
from geometry.finding_checks.finding import SEVERITIES, Cure, Finding, Move, Severity, Subject
from geometry.finding_checks.wording import Wording
from geometry.layout import SIDES
from geometry.solution import Solution
from geometry.tie_rod_thread import thread_findings

__all__ = ["SEVERITIES", "Cure", "Finding", "Move", "Severity", "findings"]


HOPELESS = ("units-mixed", "does-not-assemble")
"""Slips that leave nothing else on their side worth judging."""


def findings(solution: Solution) -> tuple[Finding, ...]:
    """Every finding on a solved car, worst first.

    While the sides are linked one finding speaks for both (its ``side`` is None); the roll
    center, a relay rod and most targets are the whole car's either way.
    """
    with np.errstate(all="ignore"):
        found = list(_all(solution))
    return tuple(sorted(found, key=lambda finding: SEVERITIES.index(finding.severity)))


def _all(solution: Solution) -> Iterator[Finding]:
    words = Wording(solution.layout.units)
    left, right = (Subject(solution, solution.sides[name], name, words) for name in SIDES)
    linked = solution.layout.linked
    subjects = (Subject(solution, solution.left, None, words),) if linked else (left, right)
    judged = []
    for subject in subjects:
        slips = list(sanity.check(subject))
        yield from slips
        if not any(slip.code in HOPELESS for slip in slips):
            judged.append(subject)
    if not linked:
        yield from sanity.sides_differ(left, right)
    # A steered or one-wheel pose is not the same on both sides even while they are linked.
    same_pose = linked and solution.left.now is solution.right.now
    for subject in subjects if same_pose else (left, right):
        yield from reach.check(subject)
    for subject in judged:
        yield from pivot.check(subject)
        yield from arms.check(subject)
    if len(judged) == len(subjects):
        yield from roll.check(subjects)
    yield from steering.check(subjects[0])
    yield from targets.check(subjects)
    yield from thread_findings(solution.layout)
