"""The curves through the travel: what each shows, in which unit, from a Solution."""

from __future__ import annotations

import csv
import io
from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal

import numpy as np

from geometry.floor_words import capital, steering_words
from geometry.layout import MM_PER_INCH, SIDES, SideName, UnitName
from geometry.lengths import format_length
from geometry.linkage import Array
from geometry.readouts import toe_length
from geometry.solution import Solution
from geometry.tolerances import tolerance


@dataclass(frozen=True)
class Curve:
    """One figure against wheel travel. ``read`` gives (n,) in mm or rad, NaN where missing.

    ``band`` gives the half width of the tolerance band around the ride-height figure, in
    the same unit, or None if no tolerance goes with the curve.
    """

    key: str
    label: str
    kind: Literal["length", "angle"]
    read: Callable[[Solution, SideName], Array]
    band: Callable[[Solution], float] | None = None


def _pose(attribute: str) -> Callable[[Solution, SideName], Array]:
    def read(solution: Solution, side: SideName) -> Array:
        return np.asarray(getattr(solution.sides[side].sweep, attribute))

    return read


def _toe(solution: Solution, side: SideName) -> Array:
    state = solution.sides[side]
    return toe_length(state, state.sweep.toe)


def _toe_change(solution: Solution, side: SideName) -> Array:
    """Toe against ride height with the steering as it stands.

    A steered wheel's toe is the steering itself, in which bump steer would be lost.
    """
    state = solution.sides[side]
    toe = state.sweep.toe
    return toe_length(state, toe - toe[toe.size // 2])


def _roll_center(solution: Solution, side: SideName) -> Array:
    return np.asarray(solution.roll_center_sweep[1])


def _track_change(solution: Solution, side: SideName) -> Array:
    state = solution.sides[side]
    return np.asarray(state.sweep.half_track - state.ride.half_track[0])


def _toe_band(solution: Solution) -> float:
    return 0.5 * tolerance(solution.layout, "toe range")


CURVES: tuple[Curve, ...] = (
    Curve("toe", "Toe", "length", _toe, _toe_band),
    Curve("toe change", "Toe change", "length", _toe_change, _toe_band),
    Curve("camber", "Camber", "angle", _pose("camber")),
    Curve("roll center", "Roll center up", "length", _roll_center),
    Curve("track", "Half track change", "length", _track_change),
    Curve("caster", "Caster", "angle", _pose("caster")),
    Curve("kingpin inclination", "Kingpin inclination", "angle", _pose("kingpin_inclination")),
    Curve("scrub radius", "Scrub radius", "length", _pose("scrub_radius")),
    Curve("mechanical trail", "Mechanical trail", "length", _pose("mechanical_trail")),
)
BY_KEY = {curve.key: curve for curve in CURVES}


def in_units(kind: Literal["length", "angle"], values: Array, units: UnitName) -> Array:
    """Values (mm or rad) in the chosen length unit, or in degrees."""
    if kind == "angle":
        return np.degrees(values)
    return values / MM_PER_INCH if units == "in" else values


def sweep_words(solution: Solution, roll: float = 0.0) -> str:
    """What the curves go through, as a caption; ``roll`` rad is the body's, left side up +."""
    units = solution.layout.units
    words = capital(steering_words(solution.rack, units))
    words += f", {format_length(solution.span, units, mark=True)} of bump and of droop"
    if roll:
        words += ", against the body; the lines mark the wheels as it is rolled"
    return words


def axis_label(curve: Curve, units: UnitName) -> str:
    """The curve's name with its unit, as it stands over a plot."""
    return f"{curve.label}, {'°' if curve.kind == 'angle' else units}"


def curves_to_csv(solution: Solution) -> str:
    """All curves of both sides as a CSV table in the layout's units, full precision.

    Each row also tells where the rack stood.
    """
    units = solution.layout.units
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\n")
    columns = [(curve, side) for curve in CURVES for side in SIDES]
    writer.writerow(
        [f"travel ({units})", f"rack ({units})"]
        + [f"{c.label.lower()} {side} ({'deg' if c.kind == 'angle' else units})"
           for c, side in columns]
    )
    travel = in_units("length", solution.left.sweep.travel, units)
    rack = repr(float(in_units("length", np.array(solution.rack), units)) + 0.0)
    table = [in_units(c.kind, c.read(solution, side), units) for c, side in columns]
    for row, height in enumerate(travel):
        cells = [values[row] for values in table]
        writer.writerow([repr(float(height) + 0.0), rack]
                        + [repr(float(v) + 0.0) if np.isfinite(v) else "" for v in cells])
    return out.getvalue()
