"""The figures of a car as one plain object, ready for JSON: what ``bobline figures`` prints.

Spreadsheets, scripts and independent checks rely on these keys. Lengths are in the chosen
unit, angles in degrees, all in full double precision; what does not exist is None.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Any

import numpy as np

from geometry import layout as names
from geometry.corner import Corner, Poses, space
from geometry.finding_checks.finding import SEVERITIES, Finding
from geometry.findings import findings
from geometry.front_view import FrontView, front_view, roll_center
from geometry.layout import MM_PER_INCH, SIDE_POINTS, SIDES, Layout, Side, UnitName
from geometry.linkage import Array
from geometry.plan_findings import plan_findings
from geometry.plan_view import plan_view
from geometry.solution import SPAN, CornerState, Solution, solve
from geometry.springs import lower_mount
from geometry.steering import inner_shifts

PROGRAM = "bobline"

_RANGE_STEPS = 601
"""Poses over the span for a toe range; a peak between two is missed by about 1e-6 deg."""

_ANGLES = ("toe", "camber", "caster", "kingpin_inclination")
_LENGTHS = ("scrub_radius", "mechanical_trail", "half_track")
_PIVOT_KEYS = {
    "string rule": "string_rule",
    "curvature center": "curvature_center",
    "best fit": "best_fit",
}


def figures(
    layout: Layout,
    travel: Sequence[float] = (0.0,),
    rack: Sequence[float] = (0.0,),
    span: float | None = None,
    units: UnitName | None = None,
    version: str = "",
) -> dict[str, Any]:
    """Every figure of a car for each travel (both wheels alike) and rack place.

    ``units`` is the unit of all lengths, those given and those given back (None: the
    layout's own). ``span`` is half the travel over which toe ranges and the best fit are
    judged (None: SPAN). Nothing raises for a complete layout: a pose that can't be
    reached has ``assembles`` False and None for its figures.
    """
    unit = units or layout.units
    scale = MM_PER_INCH if unit == "in" else 1.0
    half = SPAN / scale if span is None else float(span)
    with np.errstate(all="ignore"):
        solution = solve(layout, 0.0, 0.0, half * scale)
        return {
            "program": PROGRAM,
            "version": version,
            "title": layout.title,
            "units": {"length": unit, "angle": "deg"},
            "assumptions": list(layout.assumed),
            "poses": _poses(layout, np.array(travel, float), np.array(rack, float), scale),
            "tie_rod": [_tie_rod(solution.sides[side], half, scale) for side in SIDES],
            "findings": [
                {"code": finding.code, "severity": finding.severity, "text": finding.text}
                for finding in _findings(solution)
            ],
        }


def _findings(solution: Solution) -> list[Finding]:
    """What the front view and the view from above find, worst first, as the window lists it."""
    found = [*findings(solution), *plan_findings(plan_view(solution), solution.span)]
    return sorted(found, key=lambda finding: SEVERITIES.index(finding.severity))


def _number(value: float, scale: float = 1.0) -> float | None:
    """A figure in the wanted unit, None where there is none; never a negative zero."""
    return float(value) / scale + 0.0 if math.isfinite(value) else None


def _place(over: float, up: float, scale: float) -> dict[str, float] | None:
    """A front-view place, None if either part is missing."""
    if not (math.isfinite(over) and math.isfinite(up)):
        return None
    return {"over": float(over) / scale + 0.0, "up": float(up) / scale + 0.0}


def _poses(layout: Layout, travel: Array, rack: Array, scale: float) -> list[dict[str, Any]]:
    """One object per side, travel and rack; each side's poses are solved in one call.

    Travels and racks come in the unit that ``scale`` (mm) stands for.
    """
    travels = np.repeat(travel, rack.size)
    racks = np.tile(rack, travel.size)
    shifts = inner_shifts(layout, racks * scale)
    corners = {side: Corner.of(layout.side(side)) for side in SIDES}
    poses = {side: corners[side].poses(travels * scale, shifts[side]) for side in SIDES}
    views = {side: front_view(corners[side], poses[side]) for side in SIDES}
    center = roll_center(views["left"], views["right"])
    rows: list[dict[str, Any]] = []
    for side in SIDES:
        # The roll center is found in the left side's measure; the right one's runs against it.
        over = center[0] if side == "left" else -center[0]
        points = pose_points(layout.side(side), corners[side], poses[side])
        for k in range(travels.size):
            row: dict[str, Any] = {
                "side": side,
                "travel": float(travels[k]),
                "rack": float(racks[k]),
            }
            row |= _figures_of(poses[side], views[side], k, scale)
            row["roll_center"] = _place(over[k], center[1, k], scale)
            row["points"] = _points_of(points, k, scale) if row["assembles"] else None
            rows.append(row)
    return rows


def _figures_of(poses: Poses, view: FrontView, k: int, scale: float) -> dict[str, Any]:
    """What one side's pose number ``k`` has of its own."""
    row: dict[str, Any] = {"assembles": bool(poses.assembles[k])}
    row |= {name: _number(math.degrees(getattr(poses, name)[k])) for name in _ANGLES}
    row |= {name: _number(getattr(poses, name)[k], scale) for name in _LENGTHS}
    instant = view.instant_center[:, k]
    finite = bool(instant[2] == 1.0)
    row["instant_center"] = _place(instant[0], instant[1], scale) if finite else None
    row["swing_arm_length"] = _number(view.swing_arm[k], scale)
    return row


def _points_of(
    points: dict[str, Array], k: int, scale: float
) -> dict[str, dict[str, float] | None]:
    """Where pose ``k`` has every point: over, up, fore in the body's frame.

    None for one that its part can't place (a spring mount on an arm of no length).
    """
    return {name: _space(place[:, k], scale) for name, place in points.items()}


def _space(place: Array, scale: float) -> dict[str, float] | None:
    """A point of the car, None if any part is missing."""
    if not np.isfinite(place).all():
        return None
    fore, over, up = (float(part) / scale + 0.0 for part in place)
    return {"over": over, "up": up, "fore": fore}


def pose_points(side: Side, corner: Corner, poses: Poses) -> dict[str, Array]:
    """Every point that a side was measured with, as it stands in each pose.

    (3, n) mm in the body's frame, in the order of a measure sheet. What is fixed in the
    body stands still; the spring's lower mount rides on the part that carries it. NaN where
    the pose does not assemble.
    """
    moved = poses.moved_points()
    still = np.where(poses.assembles, 1.0, np.nan)
    out: dict[str, Array] = {}
    for name in SIDE_POINTS:
        if name not in side.points:
            continue
        if name == names.SPRING_LOWER:
            out[name] = lower_mount(side, corner, poses)
        elif name in moved:
            out[name] = moved[name]
        else:
            out[name] = space(side[name])[:, None] * still
    return out


def _tie_rod(state: CornerState, span: float, scale: float) -> dict[str, Any]:
    """The three places for the inner tie-rod pivot and the toe range each leaves."""
    inner = state.side[names.TIE_INNER]
    places: dict[str, tuple[float, float] | None] = {"as_is": (inner.over, inner.up)}
    for kind, key in _PIVOT_KEYS.items():
        places[key] = state.pivots.place(kind)
    ranges = toe_ranges(state.side, list(places.values()), span * scale)
    row: dict[str, Any] = {"side": state.name}
    for key in _PIVOT_KEYS.values():
        place = places[key]
        row[key] = None if place is None else _place(*place, scale)
    row["toe_range"] = {
        key: _number(math.degrees(value)) for key, value in zip(places, ranges, strict=True)
    }
    row["travel_range"] = [-span, span]
    return row


def toe_ranges(side: Side, places: Sequence[tuple[float, float] | None], span: float) -> Array:
    """Peak-to-peak toe (k,), rad, over +-``span`` mm for inner tie-rod pivots at k places.

    On the exact motion, the toe free, where the quick sweep behind the best fit takes the
    wheel's height from the knuckle with its toe held (some thousandths of the range off
    where the pivot is far from its best spot). NaN where a place or a pose is missing.
    """
    points = {name: space(point) for name, point in side.points.items()}
    fore = points[names.TIE_INNER][0]
    points[names.TIE_INNER] = np.array(
        [(fore, *(place or (math.nan, math.nan))) for place in places]
    ).T
    batch = Corner(points, side.static_camber, side.static_toe, side.tire.radius)
    poses = batch.poses(np.linspace(-span, span, _RANGE_STEPS))
    toe = np.where(poses.assembles, poses.toe, np.nan)
    return np.asarray(np.max(toe, axis=-1) - np.min(toe, axis=-1))
