"""Everything slow about a car's steering in one answer, to be worked out beside the window."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass

import numpy as np

from geometry.finding_checks.finding import Finding
from geometry.layout import SIDES, Layout, LayoutError, SideName
from geometry.plan_findings import plan_findings
from geometry.plan_view import PlanView, plan_of
from geometry.solution import solve
from geometry.steering_arm import ArmMove, arm_on_string, percent_by_inner_pivot


@dataclass(frozen=True)
class LockRow:
    """One turn at its stop. Angles rad, lengths mm; None for what doesn't exist.

    ``toe_range`` is bump steer there: peak to peak over the span, per wheel (inner, outer).
    """

    rack: float
    inner: float
    outer: float
    percent: float | None
    camber: tuple[float, float]
    caster: tuple[float, float]
    toe_range: tuple[float | None, float | None]


@dataclass(frozen=True)
class PlanFigures:
    """The steering of ``layout`` from lock to lock, its findings, and its cures' effects.

    ``on_string`` is a sentence where there is no string; None, as ``by_inner`` and ``locks``
    are empty, if only the findings were asked for.
    """

    layout: Layout
    span: float
    plan: PlanView
    findings: tuple[Finding, ...]
    on_string: ArmMove | str | None
    by_inner: Mapping[str, float | None]
    percent_at_20: float | None
    locks: Mapping[SideName, LockRow | None]


def plan_figures(
    layout: Layout, span: float, stopped: Callable[[], bool], *, full: bool = True
) -> PlanFigures | None:
    """Work it all out; None if stopped. ``span`` mm is half the travel of toe ranges."""
    plan = plan_of(layout)
    if stopped():
        return None
    found = tuple(plan_findings(plan, span))
    if not full or stopped():
        return None if stopped() else PlanFigures(layout, span, plan, found, None, {}, None, {})
    with np.errstate(all="ignore"):
        # Worked out here so that the window only reads.
        _ = plan.percent, plan.slip, plan.turning_circle, plan.straight_ahead_percent
        locks = _locks(plan, span)
        at_20 = plan.percent_at(float(np.radians(20.0)))
        if stopped():
            return None
        solution = solve(layout, span=span)
        on_string: ArmMove | str
        try:
            on_string = arm_on_string(solution, plan)
        except LayoutError as reason:
            on_string = str(reason)
        if stopped():
            return None
        by_inner = percent_by_inner_pivot(solution, plan)
    return PlanFigures(layout, span, plan, found, on_string, by_inner, at_20, locks)


def _locks(plan: PlanView, span: float) -> dict[SideName, LockRow | None]:
    """Both turns at their stops, by the last rack that meets on the way there."""
    rows: dict[SideName, LockRow | None] = {}
    for turn in SIDES:
        index = plan.stop(turn)
        rows[turn] = None if index is None else _lock(plan, turn, index, span)
    return rows


def _lock(plan: PlanView, turn: SideName, index: int, span: float) -> LockRow:
    outer: SideName = "right" if turn == "left" else "left"
    order = (plan.sides[turn], plan.sides[outer])
    steered = plan.steered_travel(float(plan.rack[index]), span)
    ranges = [float(steered.range_of(side)[0]) for side in (turn, outer)]
    camber, caster = (
        (float(getattr(order[0], name)[index]), float(getattr(order[1], name)[index]))
        for name in ("camber", "caster")
    )
    percent = None if plan.percent is None else float(plan.percent[index])
    return LockRow(
        rack=float(plan.rack[index]),
        inner=float(plan.inner[index]),
        outer=float(plan.outer[index]),
        percent=percent if percent is not None and np.isfinite(percent) else None,
        camber=camber,
        caster=caster,
        toe_range=(
            ranges[0] if np.isfinite(ranges[0]) else None,
            ranges[1] if np.isfinite(ranges[1]) else None,
        ),
    )
