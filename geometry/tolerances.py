"""The named limits that findings and zones judge by, and the figures a target can name.

Every limit is a setting: ``Layout.tolerances`` overrides the value here by its key. Lengths
mm, angles rad, rates rad/mm, slopes mm/mm.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal

import numpy as np

from geometry.layout import MM_PER_INCH, Layout, Side, SideName
from geometry.linkage import Array
from geometry.solution import CornerState, Solution

Kind = Literal["length", "toe", "angle", "rate", "slope"]
"""length mm; toe mm at the tire; angle rad; rate rad per mm of travel; slope mm of toe per
mm of travel."""

PRACTICE = "common practice, no source"
CHOSEN = "this program's own choice, no source"
LAYOUT = "set in this layout"

_DEG = math.pi / 180.0
_DEG_PER_INCH = _DEG / MM_PER_INCH


@dataclass(frozen=True)
class Tolerance:
    """One named limit: its value in internal units, what it limits and where it comes from.

    ``bound`` says which way it limits.
    """

    key: str
    value: float
    kind: Kind
    label: str
    source: str
    bound: Literal["at most", "at least"] = "at most"


_TABLE = (
    # Toe through travel.
    Tolerance("toe range", MM_PER_INCH / 16, "toe",
              "Toe change over the chosen travel, per wheel", PRACTICE),
    Tolerance("toe range wrong", MM_PER_INCH / 4, "toe",
              "Toe change over the chosen travel counted as wrong, per wheel", CHOSEN),
    Tolerance("toe rate", 0.015, "slope",
              "Toe change per travel at ride height, per wheel", PRACTICE),
    # Arms and camber.
    Tolerance("lower arm slope", 8.0 * _DEG, "angle",
              "Lower arm's slope at ride height", CHOSEN),
    Tolerance("camber gain low", 0.5 * _DEG_PER_INCH, "rate", "Least camber gain", PRACTICE,
              "at least"),
    Tolerance("camber gain high", 1.0 * _DEG_PER_INCH, "rate", "Most camber gain", PRACTICE),
    Tolerance("camber loss", 0.1 * _DEG, "angle",
              "Camber lost toward top-out over the chosen bump", CHOSEN),
    Tolerance("swing arm short", 40.0 * MM_PER_INCH, "length", "Shortest swing arm", CHOSEN,
              "at least"),
    Tolerance("scrub radius", 3.0 * MM_PER_INCH, "length",
              "Largest scrub radius, either way", CHOSEN),
    # Roll center.
    Tolerance("roll center low", 0.0, "length", "Lowest roll center", PRACTICE, "at least"),
    Tolerance("roll center high", 3.0 * MM_PER_INCH, "length", "Highest roll center", PRACTICE),
    # A tape measure tells a sixteenth; a difference below that can't be measured.
    Tolerance("roll center path", MM_PER_INCH / 16, "length",
              "Roll center by construction against the contact point's path", PRACTICE),
    # Steering.
    Tolerance("relay difference", 1.5, "length",
              "Difference between pitman and idler arm, length or height", CHOSEN),
    Tolerance("relay toe", MM_PER_INCH / 16, "toe",
              "Total toe change from unequal pitman and idler arms", CHOSEN),
    Tolerance("rack travel", 75.0, "length", "Rack travel each way", PRACTICE),
    # Joints.
    Tolerance("ball joint swing", 25.0 * _DEG, "angle",
              "Ball-joint swing from ride height", PRACTICE),
    Tolerance("rod end swing", 25.0 * _DEG, "angle",
              "Tie-rod end swing from ride height (a plain rod end has 12 to 18°)", PRACTICE),
    # Measuring slips.
    Tolerance("point spacing", 3.0, "length", "Least distance between two joined pivots", CHOSEN,
              "at least"),
    Tolerance("toggle angle", 10.0 * _DEG, "angle",
              "Least angle between an arm and the line through the ball joints", CHOSEN,
              "at least"),
    Tolerance("steering lever", MM_PER_INCH, "length",
              "Least lever of the tie rod about the kingpin axis", CHOSEN, "at least"),
    Tolerance("knuckle reach", 24.0 * MM_PER_INCH, "length",
              "Farthest knuckle point from the wheel center", CHOSEN),
    Tolerance("tire gap", MM_PER_INCH / 4, "length", "Tire off the floor at ride height", CHOSEN),
    Tolerance("static camber", 5.0 * _DEG, "angle", "Largest static camber believed", CHOSEN),
    Tolerance("static toe", 2.0 * _DEG, "angle", "Largest static toe believed", CHOSEN),
    Tolerance("side difference", MM_PER_INCH / 8, "length",
              "Difference between left and right measures", CHOSEN),
)

TOLERANCES: dict[str, Tolerance] = {entry.key: entry for entry in _TABLE}


def tolerance(layout: Layout, key: str) -> float:
    """A limit in internal units: the layout's own, or else the table's. KeyError if unknown."""
    default = TOLERANCES[key].value
    own = layout.tolerances.get(key, default)
    return own if math.isfinite(own) else default


def tolerance_source(layout: Layout, key: str) -> str:
    """Where a limit comes from, in words."""
    own = layout.tolerances.get(key)
    if own is None or not math.isfinite(own) or own == TOLERANCES[key].value:
        return TOLERANCES[key].source
    return LAYOUT


def toe_length(side: Side, toe: Array | float) -> Array:
    """Toe (...), rad, as a length at the tire, mm per wheel: tire diameter x sin(toe)."""
    return np.asarray(2.0 * side.tire.radius * np.sin(toe))


def toe_angle(side: Side, length: float) -> float:
    """The toe angle, rad, that a length at the tire stands for, mm per wheel."""
    diameter = 2.0 * side.tire.radius
    return math.asin(min(1.0, max(-1.0, length / diameter))) if diameter > 0.0 else 0.0


# --- figures that a target can name ----------------------------------------------------


@dataclass(frozen=True)
class Figure:
    """A figure that a Target can hold to a range; judged at ride height.

    ``read`` gives it in internal units, None where there is none. ``per_side`` is False for
    figures of the whole car, which read the same for either side.
    """

    key: str
    label: str
    kind: Kind
    per_side: bool
    read: Callable[[Solution, SideName], float | None]

    def value(self, solution: Solution, side: SideName = "left") -> float | None:
        """The figure, or None if there is none."""
        value = self.read(solution, side)
        return value if value is not None and math.isfinite(value) else None


def _ride(attribute: str) -> Callable[[Solution, SideName], float | None]:
    def read(solution: Solution, side: SideName) -> float | None:
        return float(getattr(solution.sides[side].ride, attribute)[0])

    return read


def _roll_center(solution: Solution, side: SideName) -> float | None:
    center = solution.ride_roll_center
    return None if center is None else center[1]


def _roll_center_movement(solution: Solution, side: SideName) -> float | None:
    heights = solution.roll_center_sweep[1]
    with np.errstate(all="ignore"):
        return float(np.max(heights) - np.min(heights))


def swing_arm(state: CornerState) -> float | None:
    """The ride-height swing arm, mm, inboard positive; None where the arms are parallel."""
    value = float(state.ride_view.swing_arm[0])
    return value if math.isfinite(value) else None


def camber_gain(state: CornerState) -> float | None:
    """Camber gained per travel at ride height, rad/mm: positive leans the top in in bump."""
    value = float(state.ride_view.swing_arm[0])
    if math.isnan(value) or value == 0.0:
        return None
    return 1.0 / value


def _toe_range(solution: Solution, side: SideName) -> float | None:
    state = solution.sides[side]
    lengths = toe_length(state.side, state.centered_toe)
    change = float(lengths.max() - lengths.min())
    return change if math.isfinite(change) else None


def _arm_slope(solution: Solution, side: SideName) -> float | None:
    return lower_arm_slope(solution.sides[side])


def lower_arm_slope(state: CornerState) -> float | None:
    """The lower arm line's slope at ride height, rad: positive rises toward the wheel."""
    a, b = (float(v) for v in state.ride_view.lower_line[:2, 0])
    if not (math.isfinite(a) and math.isfinite(b)):
        return None
    # The line's direction is (b, -a); turned so that it leads outboard.
    return math.atan2(-a, b) if b >= 0.0 else math.atan2(a, -b)


_FIGURES = (
    Figure("roll center height", "Roll center height", "length", False, _roll_center),
    Figure("roll center movement", "Roll center movement over the chosen travel", "length",
           False, _roll_center_movement),
    Figure("camber gain", "Camber gain (top in, in bump)", "rate", True,
           lambda solution, side: camber_gain(solution.sides[side])),
    Figure("swing arm", "Swing arm", "length", True,
           lambda solution, side: swing_arm(solution.sides[side])),
    Figure("toe range", "Toe change over the chosen travel", "toe", True, _toe_range),
    Figure("scrub radius", "Scrub radius", "length", True, _ride("scrub_radius")),
    Figure("mechanical trail", "Mechanical trail", "length", True, _ride("mechanical_trail")),
    Figure("caster", "Caster", "angle", True, _ride("caster")),
    Figure("kingpin inclination", "Kingpin inclination", "angle", True,
           _ride("kingpin_inclination")),
    Figure("lower arm slope", "Lower arm slope", "angle", True, _arm_slope),
    Figure("half track", "Half track", "length", True, _ride("half_track")),
)

FIGURES: dict[str, Figure] = {figure.key: figure for figure in _FIGURES}
