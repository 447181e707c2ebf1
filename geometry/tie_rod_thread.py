"""Thread in hold at a tie rod's adjuster: what another length of the rod leaves of it.

A rod made longer at its adjuster is turned out of its thread by as much. All of a change is
taken at one end, which is the worse case; turned evenly at both ends each gives half.
"""

from __future__ import annotations

import math

from geometry import layout as names
from geometry.finding_checks.finding import Finding
from geometry.finding_checks.wording import Wording
from geometry.layout import SIDES, Layout, Side, TieRod

LEAST_DIAMETERS = 1.5
"""Thread in hold that is wanted, in diameters (common practice, no source)."""

PRACTICE = "1 1/2 diameters: common practice, no source"


def tie_rod_length(side: Side) -> float:
    """The tie rod's length, mm, from center to center of its ends."""
    inner, outer = side[names.TIE_INNER], side[names.TIE_OUTER]
    return math.dist(inner, outer)


def thread_left(side: Side) -> float | None:
    """Thread in hold at the rod's length now, mm; None where it was not measured."""
    rod = side.tie_rod
    if rod.thread_engaged is None or rod.measured_length is None:
        return None
    return rod.thread_engaged - (tie_rod_length(side) - rod.measured_length)


def least_thread(rod: TieRod) -> float | None:
    """The thread in hold that is wanted, mm: typed, or from the diameter; None if neither."""
    if rod.least_engaged is not None:
        return rod.least_engaged
    return None if rod.thread_diameter is None else LEAST_DIAMETERS * rod.thread_diameter


def thread_findings(layout: Layout) -> list[Finding]:
    """Each tie rod whose thread in hold is less than wanted, or that has come out of it."""
    words = Wording(layout.units)
    out = []
    for name in SIDES[:1] if layout.linked else SIDES:
        side = layout.side(name)
        left, least = thread_left(side), least_thread(side.tie_rod)
        if left is None or not math.isfinite(left) or left >= max(least or 0.0, 1e-9):
            continue
        longer = tie_rod_length(side) - (side.tie_rod.measured_length or 0.0)
        change = f"{words.tape(longer)} {'longer' if longer > 0.0 else 'shorter'}"
        wanted = "" if least is None else f" Wanted: at least {words.tape(least)}."
        headline = (
            f"Tie rod keeps only {words.tape(left)} of thread in hold."
            if left > 0.0
            else "Tie rod is longer than its thread reaches: it comes apart."
        )
        source = PRACTICE if side.tie_rod.least_engaged is None else "set in this layout"
        out.append(
            Finding(
                code="thread-short",
                severity="wrong",
                side=None if layout.linked else name,
                headline=headline,
                detail=f"It is {change} than when its thread was measured, all of it taken at "
                f"one end.{wanted} Fit a longer sleeve or rod; never run a joint on less thread.",
                figure=left,
                tolerance=least or 0.0,
                tolerance_source=source,
                points=(names.TIE_OUTER,),
            )
        )
    return out
