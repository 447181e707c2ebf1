"""The figures shown beside the floor: what each is called, its unit, and how it is read.

One table serves the window, the sheets and the comparison of as found with as planned.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal

import numpy as np

from geometry.corner import lengths
from geometry.layout import SideName
from geometry.lengths import format_angle, format_length
from geometry.linkage import Array, norm
from geometry.solution import CornerState, Solution

Unit = Literal["length", "fine length", "angle", "angle per travel", "length per travel"]

PER_TRAVEL = {"in": 25.4, "mm": 25.0}
"""Rates are given per inch of travel, or per 25 mm."""


@dataclass(frozen=True)
class Readout:
    """One figure. ``read`` gives it in mm and rad (rates per mm), or None if there is none."""

    key: str
    label: str
    unit: Unit
    read: Callable[[Solution, SideName], float | None]
    missing: str = "There is no figure in this pose."
    tip: str = ""


def _scalar(values: Array | float) -> float | None:
    value = float(np.ravel(np.asarray(values))[0])
    return value if math.isfinite(value) else None


def _pose(attribute: str) -> Callable[[Solution, SideName], float | None]:
    def read(solution: Solution, side: SideName) -> float | None:
        return _scalar(getattr(solution.sides[side].now, attribute))

    return read


def _roll_center_up(solution: Solution, side: SideName) -> float | None:
    return None if solution.roll_center is None else solution.roll_center[1]


def _roll_center_over(solution: Solution, side: SideName) -> float | None:
    if solution.roll_center is None:
        return None
    return solution.roll_center[0] if side == "left" else -solution.roll_center[0]


def _swing_arm(solution: Solution, side: SideName) -> float | None:
    return _scalar(solution.sides[side].now_view.swing_arm)


def _instant_center(part: int) -> Callable[[Solution, SideName], float | None]:
    def read(solution: Solution, side: SideName) -> float | None:
        center = solution.sides[side].now_view.instant_center[:, 0]
        return float(center[part]) if center[2] == 1.0 else None

    return read


def _camber_gain(solution: Solution, side: SideName) -> float | None:
    return _scalar(solution.sides[side].now_view.camber_rate)


def toe_length(state: CornerState, toe: Array | float) -> Array:
    """Toe (rad) as a length at the tire, per wheel, mm: tire diameter x sin(toe)."""
    return np.asarray(2.0 * state.side.tire.radius * np.sin(toe))


def bump_steer(state: CornerState) -> float | None:
    """Toe-in gained per travel where the wheel now stands, mm of toe per mm of travel.

    The slope, there, of the parabola through the three nearest places of the sweep; beyond
    the sweep the slope between two poses of their own.
    """
    travel, here = state.sweep.travel, float(state.now.travel[0])
    if not travel[0] <= here <= travel[-1]:
        near = state.corner.poses(here + np.array([-0.1, 0.1]), state.shift)
        low, high = toe_length(state, near.toe)
        return _scalar((high - low) / 0.2)
    toe = toe_length(state, state.sweep.toe)
    middle = min(max(int(np.argmin(np.abs(travel - here))), 1), toe.size - 2)
    (a, b, c), (ta, tb, tc) = (v[middle - 1 : middle + 2] for v in (toe, travel))
    before, after = (b - a) / (tb - ta), (c - b) / (tc - tb)
    bend = (after - before) / (tc - ta)
    return _scalar(before + bend * (2.0 * here - ta - tb))


def _toe_range(solution: Solution, side: SideName) -> float | None:
    toe = toe_length(solution.sides[side], solution.sides[side].sweep.toe)
    return _scalar(np.max(toe) - np.min(toe))


def _toe_length(solution: Solution, side: SideName) -> float | None:
    state = solution.sides[side]
    return _scalar(toe_length(state, state.now.toe))


def _tie_rod(solution: Solution, side: SideName) -> float | None:
    return lengths(solution.layout.side(side)).get("tie rod")


def _track(solution: Solution, side: SideName) -> float | None:
    return _scalar(solution.left.now.half_track + solution.right.now.half_track)


def _strut_length(solution: Solution, side: SideName) -> float | None:
    now = solution.sides[side].now
    if now.strut_lower is None:
        return None
    return _scalar(norm(now.upper_ball - now.strut_lower))


_PARALLEL = "The arms run parallel, so there is no instant center within reach."
_NO_POSE = "The parts can't meet in this pose."

READOUTS: tuple[Readout, ...] = (
    Readout(
        "roll center", "Roll center up", "length", _roll_center_up,
        "The two contact lines run parallel: there is no roll center.",
        "Height above the floor both tires stand on.",
    ),
    Readout(
        "roll center over", "Roll center over", "length", _roll_center_over,
        "The two contact lines run parallel: there is no roll center.",
    ),
    Readout(
        "swing arm", "Swing arm", "length", _swing_arm, _PARALLEL,
        "From the contact point to the instant center, inboard positive.",
    ),
    Readout("instant center over", "Instant center over", "length", _instant_center(0), _PARALLEL),
    Readout("instant center up", "Instant center up", "length", _instant_center(1), _PARALLEL),
    Readout(
        "camber gain", "Camber gain", "angle per travel", _camber_gain, _NO_POSE,
        "Camber change in bump; negative leans the top in.",
    ),
    Readout(
        "bump steer", "Bump steer", "length per travel",
        lambda solution, side: bump_steer(solution.sides[side]), _NO_POSE,
        "Toe gained in bump where the wheel now stands; toe-in positive.",
    ),
    Readout(
        "toe range", "Toe range", "fine length", _toe_range,
        "The parts can't meet over the whole chosen travel.",
        "Peak to peak over the chosen travel each way, at the tire, per wheel.",
    ),
    Readout("toe length", "Toe", "fine length", _toe_length, _NO_POSE, "Toe-in positive."),
    Readout("toe", "Toe angle", "angle", _pose("toe"), _NO_POSE, "Toe-in positive."),
    Readout("camber", "Camber", "angle", _pose("camber"), _NO_POSE, "Top outboard positive."),
    Readout("caster", "Caster", "angle", _pose("caster"), _NO_POSE, "Top rearward positive."),
    Readout(
        "kingpin inclination", "Kingpin inclination", "angle", _pose("kingpin_inclination"),
        _NO_POSE, "Top inboard positive.",
    ),
    Readout(
        "scrub radius", "Scrub radius", "length", _pose("scrub_radius"), _NO_POSE,
        "Positive: the contact point lies outboard of the kingpin axis.",
    ),
    Readout(
        "mechanical trail", "Mechanical trail", "length", _pose("mechanical_trail"), _NO_POSE,
        "Positive: the kingpin axis meets the floor ahead of the contact point.",
    ),
    Readout("tie rod", "Tie rod length", "length", _tie_rod),
    Readout("track", "Track", "length", _track, _NO_POSE),
    Readout("strut length", "Strut length", "length", _strut_length, "This corner has no strut."),
)

BY_KEY = {readout.key: readout for readout in READOUTS}


def format_readout(unit: Unit, value: float | None, units: Literal["in", "mm"]) -> str:
    """A figure as it stands on the screen, without its unit mark ("–" where there is none)."""
    if value is None:
        return "–"
    if unit == "length":
        return format_length(value, units)
    if unit == "fine length":
        size, decimals = (value / 25.4, 3) if units == "in" else (value, 2)
        return f"{round(size, decimals) + 0.0:.{decimals}f}"
    if unit == "angle":
        return format_angle(value)
    if unit == "angle per travel":
        return f"{signed(math.degrees(value) * PER_TRAVEL[units], 2)}°"
    per = value * PER_TRAVEL[units]
    return signed(per / 25.4, 3) if units == "in" else signed(per, 2)


def signed(value: float, decimals: int) -> str:
    """A decimal with its sign; what rounds to nothing has none."""
    text = f"{value:+.{decimals}f}"
    return text[1:] if float(text) == 0.0 else text


def unit_words(unit: Unit, units: Literal["in", "mm"]) -> str:
    """The unit as it stands beside a label."""
    travel = "in" if units == "in" else "25 mm"
    return {
        "length": units,
        "fine length": units,
        "angle": "",
        "angle per travel": f"per {travel}",
        "length per travel": f"{units} per {travel}",
    }[unit]


def change_text(
    unit: Unit, was: float | None, now: float | None, units: Literal["in", "mm"]
) -> str:
    """The change from one figure to another with its sign; "–" where it would read as none."""
    if was is None or now is None:
        return "–"
    text = format_readout(unit, now - was, units)
    if not any(mark in text for mark in "123456789"):
        return "–"
    return text if text[0] in "+-−" else f"+{text}"
