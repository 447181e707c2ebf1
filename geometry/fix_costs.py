"""What a fix costs elsewhere on the car: roll center, camber gain, Ackermann, rod and room."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import shapely

from geometry import layout as names
from geometry.ackermann import Lock, SteeredCars
from geometry.corner import lengths
from geometry.finding_checks.wording import Wording
from geometry.layout import MM_PER_INCH, SIDES, Layout, SideName, UnitName
from geometry.solution import Solution, solve
from geometry.steering import DEFAULT_RACK_TRAVEL, RACK_TRAVEL
from geometry.tolerances import camber_gain
from geometry.zone_shapes import no_go_area

INNER_ANGLE = math.radians(20.0)
"""Ackermann is compared with the inner wheel turned this far (as service manuals give it)."""

THREAD = "keep 1 1/2 diameters of thread engaged (common practice, no source)"

_BODY_POINTS = (
    names.TIE_INNER,
    names.UPPER_INNER,
    names.UPPER_INNER_FRONT,
    names.UPPER_INNER_REAR,
)


@dataclass(frozen=True)
class Costs:
    """Changes against the car as it was, at ride height; None where a figure doesn't exist.

    roll_center    mm, up positive
    camber_gain    rad/mm of travel, more lean-in positive
    ackermann      points of percent Ackermann, inner wheel at INNER_ANGLE (or straight ahead
                   where it does not get there)
    tie_rod        mm, longer positive
    runs_into      names of no-go shapes that a moved pivot now stands in
    """

    roll_center: float | None
    camber_gain: float | None
    ackermann: float | None
    tie_rod: float
    runs_into: tuple[str, ...] = ()

    @property
    def thread_lost(self) -> float:
        """Thread engagement lost at the adjuster, mm, all of it taken at one end."""
        return max(0.0, self.tie_rod)

    def words(self, units: UnitName) -> tuple[str, ...]:
        """What changes elsewhere, as sentences; what no tape or gauge could tell is left out."""
        words = Wording(units)
        out: list[str] = [f"A pivot would stand inside “{name}”." for name in self.runs_into]
        if self.roll_center is not None and words.counts(self.roll_center):
            way = "higher" if self.roll_center > 0.0 else "lower"
            out.append(f"Roll center {words.tape(self.roll_center)} {way}.")
        gain = self.camber_gain
        if gain is not None and abs(math.degrees(gain) * words.travel_step) >= 0.005:
            way = "more" if gain > 0.0 else "less"
            out.append(f"{words.rate(abs(gain), f' {way} camber gain')}.")
        if self.ackermann is not None and abs(self.ackermann) >= 0.5:
            way = "more" if self.ackermann > 0.0 else "less"
            points = f"{abs(self.ackermann):.0f}"
            out.append(f"Ackermann {points} point{'' if points == '1' else 's'} {way}.")
        if words.counts(self.tie_rod):
            size = words.tape(self.tie_rod)
            if self.tie_rod > 0.0:
                out.append(f"Tie rod {size} longer: that much less thread in hold; {THREAD}.")
            else:
                out.append(f"Tie rod {size} shorter.")
        return tuple(out)


def costs_of(before: Layout, after: Sequence[Layout], side: SideName) -> list[Costs]:
    """The costs of each changed car against the car before."""
    if not after:
        return []
    base = solve(before, span=MM_PER_INCH)
    percents = _percents([before, *after])
    rod = lengths(before.side(side)).get("tie rod", math.nan)
    taken = _runs_into(before)
    out = []
    for car, percent in zip(after, percents[1:], strict=True):
        now = solve(car, span=MM_PER_INCH)
        out.append(
            Costs(
                _difference(_roll_center(now), _roll_center(base)),
                _difference(camber_gain(now.sides[side]), camber_gain(base.sides[side])),
                _difference(percent, percents[0]),
                lengths(car.side(side))["tie rod"] - rod,
                tuple(name for name in _runs_into(car) if name not in taken),
            )
        )
    return out


def _difference(now: float | None, was: float | None) -> float | None:
    return None if now is None or was is None else now - was


def _roll_center(solution: Solution) -> float | None:
    center = solution.ride_roll_center
    return None if center is None else center[1]


def _percents(cars: Sequence[Layout]) -> list[float | None]:
    """Percent Ackermann of each car; None without a wheelbase or where the wheels don't turn."""
    wheelbase = cars[0].wheelbase
    if not wheelbase or wheelbase <= 0.0:
        return [None] * len(cars)
    travel = abs(cars[0].tolerances.get(RACK_TRAVEL, DEFAULT_RACK_TRAVEL)) or DEFAULT_RACK_TRAVEL
    steered = SteeredCars(cars, Lock(-travel, travel))
    turned = steered.percent_at(INNER_ANGLE)
    if not all(math.isfinite(value) for value in turned):
        # All by the same measure, or the differences would mean nothing.
        turned = steered.straight_ahead_percent()
    return [float(value) if math.isfinite(value) else None for value in turned]


def _runs_into(car: Layout) -> tuple[str, ...]:
    """The no-go shapes, front view, in which a pivot of the body or the rack stands."""
    out = []
    for shape in car.no_go:
        for side in SIDES:
            area = no_go_area([shape], side)
            points = car.side(side).points
            if any(
                area.contains(shapely.Point(points[name].over, points[name].up))
                for name in _BODY_POINTS
                if name in points
            ):
                out.append(shape.name)
                break
    return tuple(out)
