"""Strange geometry never hurts: a million random and adversarial cars, nothing wrong shown.

    python -m tests.fuzz.cars                  # 1,000,000 corners and 20,000 whole cars
    python -m tests.fuzz.cars --corners 20000 --cars 200 --seed 7

Corners go in batches through poses, instant centers, roll center, held toe and the three
inner pivots; whole cars through everything a window shows. A fault is an exception, a
warning, a number that is not finite in any text, or a pose that claims to assemble while a
part has changed its length. Every fault is told with the seed that makes it again.
"""

from __future__ import annotations

import argparse
import math
import sys
import time
import traceback
import warnings
from collections.abc import Callable, Iterator
from typing import Any

import numpy as np
import shapely
from numpy.typing import NDArray

from geometry import layout as names
from geometry.clearance import clearances, pose_set
from geometry.clearance_findings import clearance_findings
from geometry.compare import compare, differences, overall
from geometry.corner import Corner, Poses
from geometry.curves import curves_to_csv
from geometry.drops import three_ways
from geometry.figures import figures
from geometry.findings import findings
from geometry.front_parts import front_parts
from geometry.front_strings import strings
from geometry.front_view import front_view, roll_center
from geometry.inner_pivot import curvature_center, held_travel, string_rule
from geometry.joints import joint_swings
from geometry.layout import SIDES, Layout, LayoutError, Target
from geometry.layout_file import job_from_text, job_to_text
from geometry.pivot_zones import pivot_zone
from geometry.plan_findings import plan_findings
from geometry.plan_view import plan_of
from geometry.readouts import READOUTS, format_readout
from geometry.roll import rolled
from geometry.sketch import Brief, sketch
from geometry.solution import Solution, pick, solve
from geometry.springs import spring_motion
from geometry.standing import standing
from geometry.turn_words import turn_words
from geometry.zones import rack_zone_of
from tests.fuzz import car_steps
from tests.fuzz.holding import FaultError, finite, hold, plain
from tests.fuzz.strange_cars import Batch, batch, car

BATCH = 250
TRAVELS = np.array([-80.0, -20.0, 0.0, 20.0, 80.0])
LENGTH_SHARE = 1e-6
"""How far a rigid part's length may be off, as a share of the corner's whole size."""


# --- corners by the batch --------------------------------------------------------------


def check_batch(cars: Batch) -> None:
    """One batch of corners through every array function."""
    corner = cars.corner()
    poses = corner.poses(TRAVELS, 20.0 * np.array([[0.0], [1.0], [0.0]]))
    ride = corner.poses(0.0)
    view, ride_view = front_view(corner, poses), front_view(corner, ride)
    for one in (poses, ride):
        check_poses(corner, one)
    check_ride(corner, ride)
    for center in (roll_center(view, view), roll_center(ride_view, ride_view)):
        known = np.isfinite(center)
        hold(bool(np.all(known[0] == known[1])), "half a roll center")
    for homogeneous in (view.instant_center, string_rule(corner, ride_view)):
        w = homogeneous[2]
        hold(bool(np.all(np.isnan(w) | (w == 0.0) | (w == 1.0))), "a point with an odd weight")
        held = np.isfinite(homogeneous).all(axis=0) | np.isnan(homogeneous).any(axis=0)
        hold(bool(np.all(held)), "an infinite place")
    curved = curvature_center(corner)
    hold(not np.any(np.isinf(curved)), "a center of curvature at infinity")
    held_motion = held_travel(corner, TRAVELS)
    off = np.abs(held_motion.travel - TRAVELS)[held_motion.assembles]
    hold(not off.size or float(off.max()) < 1e-5, "held motion misses its travel")


def _size(corner: Corner) -> NDArray[np.float64]:
    """The largest distance of any point from the lower ball joint, mm, (*cars, 1)."""
    away = [np.linalg.norm(p - corner.lower_ball, axis=0) for p in corner.points.values()]
    return np.asarray(np.max(away, axis=0))


def rigid_pairs(corner: Corner, poses: Poses) -> Iterator[tuple[str, Any, Any, Any, Any]]:
    """Every distance that can't change: (part, ride a, ride b, now a, now b)."""
    for which, point in zip(("front", "rear"), corner.axis_of("lower"), strict=True):
        yield f"lower arm {which}", point, corner.lower_ball, point, poses.lower_ball
    yield ("steering arm", corner.lower_ball, corner.tie_outer, poses.lower_ball, poses.tie_outer)
    yield ("wheel to ball joint", corner.lower_ball, corner.wheel_center, poses.lower_ball,
           poses.wheel_center)  # fmt: skip
    yield ("wheel to rod end", corner.tie_outer, corner.wheel_center, poses.tie_outer,
           poses.wheel_center)  # fmt: skip
    yield "tie rod", corner.tie_inner, corner.tie_outer, poses.tie_inner, poses.tie_outer
    if corner.is_strut:
        lower = corner.points[names.STRUT_LOWER]
        yield "strut foot", corner.lower_ball, lower, poses.lower_ball, poses.strut_lower
    else:
        yield "knuckle", corner.lower_ball, corner.upper_ride, poses.lower_ball, poses.upper_ball
        for which, point in zip(("front", "rear"), corner.axis_of("upper"), strict=True):
            yield f"upper arm {which}", point, corner.upper_ride, point, poses.upper_ball


def check_poses(corner: Corner, poses: Poses) -> None:
    """A pose that assembles keeps every length and its travel; one that doesn't holds nothing."""
    meets = poses.assembles
    size = np.broadcast_to(_size(corner), meets.shape)
    for part, a, b, now_a, now_b in rigid_pairs(corner, poses):
        with np.errstate(all="ignore"):
            change = np.linalg.norm(now_b - now_a, axis=0) - np.linalg.norm(b - a, axis=0)
            wrong = meets & ~(np.abs(change) <= LENGTH_SHARE * size + 1e-9)
        if np.any(wrong):
            at = np.unravel_index(np.argmax(np.where(wrong, np.abs(change), -1.0)), meets.shape)
            raise FaultError(f"{part} changed its length by {change[at]} of {size[at]} (car {at})")
    rise = (poses.wheel_center - corner.wheel_center)[2] - poses.travel
    wrong = meets & ~(np.abs(rise) <= 1e-6)
    hold(not np.any(wrong), "a wheel that misses its travel")
    spin = np.linalg.norm(poses.spin_axis, axis=0)
    hold(not np.any(meets & ~(np.abs(spin - 1.0) < 1e-6)), "a spin axis not of length 1")
    for key, value in poses.__dict__.items():
        if key in ("travel", "assembles", "swing") or value is None:
            continue
        # The strut's top mount is in the body and stands whatever the wheel does.
        if key == "upper_ball" and corner.is_strut:
            continue
        hold(not np.any(np.isfinite(value) & ~meets), f"{key} in a pose that doesn't assemble")


def check_ride(corner: Corner, ride: Poses) -> None:
    """At ride height every point stands where it was measured."""
    size = _size(corner)
    for now, was in (
        (ride.lower_ball, corner.lower_ball),
        (ride.tie_outer, corner.tie_outer),
        (ride.wheel_center, corner.wheel_center),
        (ride.upper_ball, corner.upper_ride),
    ):
        with np.errstate(all="ignore"):
            off = np.linalg.norm(now - was, axis=0)
            wrong = ride.assembles & ~(off <= 1e-4 * size + 1e-9)
        if np.any(wrong):
            at = np.unravel_index(np.argmax(wrong), wrong.shape)
            raise FaultError(f"ride height is not where it was measured: off {off[at]} (car {at})")


# --- whole cars ---------------------------------------------------------------------------


def check_car(layout: Layout, rng: np.random.Generator) -> None:
    """One whole car through all that the window shows of it."""
    travel, rack, span = (
        float(rng.choice(choices))
        for choices in (
            [0.0, 0.0, 40.0, -60.0, 900.0], [0.0, 0.0, 15.0, -60.0, 500.0],
            [75.0, 75.0, 1.0, 600.0, 1e-6],
        )
    )  # fmt: skip
    solution = solve(layout, travel, rack, span)
    for step in STEPS:
        step(layout, solution, rng)


def _readouts(layout: Layout, solution: Solution, rng: np.random.Generator) -> None:
    for readout in READOUTS:
        for side in SIDES:
            value = readout.read(solution, side)
            hold(value is None or math.isfinite(value), f"{readout.key} is {value}")
            plain(format_readout(readout.unit, value, layout.units))


def _findings(layout: Layout, solution: Solution, rng: np.random.Generator) -> None:
    found = list(findings(solution))
    if rng.random() < 0.1:
        found += clearance_findings(layout, solution.span, 40.0)
        found += plan_findings(plan_of(layout))
    for finding in found:
        plain(f"{finding.text} {finding.detail} {finding.headline}")
        for number in (finding.figure, finding.tolerance):
            hold(number is None or math.isfinite(number), f"{finding.code}: {number}")
        if finding.cure is not None:
            finding.cure.applied(layout)


def _figures(layout: Layout, solution: Solution, rng: np.random.Generator) -> None:
    if rng.random() < 0.3:
        finite(figures(layout, (-2.0, 0.0, 3.0), (0.0, 1.0), 2.0, "in"))
        plain(curves_to_csv(solution))


def _drawn(layout: Layout, solution: Solution, rng: np.random.Generator) -> None:
    both = {side: standing(solution, side) for side in SIDES}
    for side in SIDES:
        for name, place in both[side].points.items():
            finite(place, f"{side} {name}")
        finite([both[side].axle, both[side].contact, both[side].shift], f"{side} wheel")
    for part in front_parts(solution):
        finite([(float(x), float(y)) for x, y in part.outline], f"outline of {part.role}")
    for string in strings(solution, both):
        finite([v for v in string.__dict__.values() if isinstance(v, tuple | float)], "a string")


def _pivots(layout: Layout, solution: Solution, rng: np.random.Generator) -> None:
    for side in SIDES:
        state = solution.sides[side]
        for kind, place in state.pivots.places.items():
            finite(list(place or ()), kind)
        for kind, turned in state.pivots.ranges.items():
            hold(turned is None or math.isfinite(turned), f"{kind} is {turned}")
            whole = bool(state.pivots.motion.assembles.all())
            hold(turned is None or whole, f"{kind} has a toe range the parts can't reach")


def _parts(layout: Layout, solution: Solution, rng: np.random.Generator) -> None:
    for side in SIDES:
        state = solution.sides[side]
        motion = spring_motion(state.side, state.corner, state.sweep)
        if motion is not None:
            motion.wheel_rate(state.side.spring.rate or 0.0)
        for joint in joint_swings(state.corner, pick(state.sweep, slice(None, None, 8))):
            hold(not math.isinf(joint.most), f"{joint.name} leans {joint.most}")


def _turned(layout: Layout, solution: Solution, rng: np.random.Generator) -> None:
    if rng.random() < 0.3:
        for line in turn_words(layout, float(rng.choice([0.0, 0.6, 2.0]))):
            plain(line)
        rolled(layout, np.radians([-3.0, 0.0, 3.0]))


def _drops(layout: Layout, solution: Solution, rng: np.random.Generator) -> None:
    if rng.random() < 0.1:
        for way in three_ways(layout, float(rng.choice([50.0, -30.0, 1e4])), solution.span):
            plain(way.reason)
            if way.solution is not None and way.layout is not None:
                for row in compare(solution, way.solution):
                    plain(f"{row.was} {row.now} {row.sentence}")
                plain(overall(compare(solution, way.solution)))
                plain(" ".join(differences(layout, way.layout)))


def _room(layout: Layout, solution: Solution, rng: np.random.Generator) -> None:
    if rng.random() < 0.1:
        for one in clearances(pose_set(layout, 60.0, 40.0, 5, 3)):
            finite([one.room, one.wanted, one.travel, one.rack], f"room of {one.part}")
            finite([*(one.part_at or ()), *(one.thing_at or ())], f"place of {one.part}")


def _file(layout: Layout, solution: Solution, rng: np.random.Generator) -> None:
    if rng.random() < 0.1:
        job = names.Job(layout)
        hold(job_from_text(job_to_text(job)) == job, "a file that reads back otherwise")


def _zones(layout: Layout, solution: Solution, rng: np.random.Generator) -> None:
    if rng.random() >= 0.1:
        return
    side = SIDES[int(rng.integers(2))]
    rack = rack_zone_of(solution, side, rack=float(rng.choice([0.0, 20.0])))
    plain(rack.words(layout.units))
    hold(bool(rack.zone.is_valid), "a zone whose outline crosses itself")
    finite([list(place) for place in shapely.get_coordinates(rack.zone)], "a rack zone")
    for line in (line for lines in rack.contours.values() for line in lines):
        hold(bool(np.isfinite(line).all()), "a contour through nowhere")
    held = list(layout.side(side).points)
    name = held[int(rng.integers(len(held)))]
    targets = [Target("roll center height", 0.0, 80.0), Target("toe range", None, 2.0)]
    nail = pivot_zone(layout, side, name, targets, steps=(7, 7), span=solution.span)
    hold(nail is not None, "a zone that was stopped by nobody")
    if nail is not None:
        plain(nail.trouble)
        finite([list(place) for place in shapely.get_coordinates(nail.zone)], "a pivot zone")


def _sketched(layout: Layout, solution: Solution, rng: np.random.Generator) -> None:
    if rng.random() >= 0.05:
        return
    draw = [float(rng.choice([low, high, rng.uniform(low, high), 0.0, 1e6, -1e6],
                             p=[0.1, 0.1, 0.65, 0.05, 0.05, 0.05]))
            for low, high in ((1200, 1700), (120, 260), (300, 520), (-0.1, 0.3), (-60, 150),
                              (-0.1, 0.2), (-180, 180), (150, 400), (180, 350), (-80, 250),
                              (0.0, 0.002), (10.0, 120.0))]  # fmt: skip
    try:
        made = sketch(Brief(layout.left.tire, *draw[:11], span=draw[11], units=layout.units))
    except LayoutError as reason:
        plain(reason)
        hold(str(reason).endswith("."), f"no sentence: {reason}")
        return
    plain(" ".join((*made.met, *made.missed)))
    _readouts(made.layout, solve(made.layout), rng)


STEPS: list[Callable[[Layout, Solution, np.random.Generator], None]] = [
    _readouts, _findings, _figures, _drawn, _pivots, _parts, _turned, _drops, _room, _file,
    _zones, _sketched, car_steps.on_paper, car_steps.leaned, car_steps.lock_to_lock,
    car_steps.mended,
]  # fmt: skip


# --- the run ------------------------------------------------------------------------------


def _told(what: str, problem: BaseException) -> str:
    trace = traceback.extract_tb(problem.__traceback__)
    where = " < ".join(f"{frame.name}:{frame.lineno}" for frame in reversed(trace[-5:]))
    return f"{what}: {type(problem).__name__}: {str(problem)[:200]} [{where}]"


def corners_run(seed: int, count: int, budget: float = math.inf) -> tuple[int, list[str]]:
    """How many corners were tried, and the faults found."""
    faults: list[str] = []
    done, number, end = 0, 0, time.monotonic() + budget
    while done < count and time.monotonic() < end:
        size = min(BATCH, count - done)
        cars = batch(np.random.default_rng([seed, 1, number]), size)
        with warnings.catch_warnings():
            warnings.simplefilter("error")
            try:
                check_batch(cars)
            except Exception as problem:  # noqa: BLE001 - any at all is what is looked for
                faults.append(_told(f"corners {number} of {size}, seed {seed}", problem))
        done, number = done + size, number + 1
    return done, faults


def cars_run(seed: int, count: int, budget: float = math.inf) -> tuple[int, list[str]]:
    """How many whole cars were tried, and the faults found."""
    faults: list[str] = []
    end, number = time.monotonic() + budget, 0
    while number < count and time.monotonic() < end:
        faults += one_car(seed, number)
        number += 1
    return number, faults


def one_car(seed: int, number: int) -> list[str]:
    """The faults of one whole car."""
    rng = np.random.default_rng([seed, 2, number])
    layout, recipe = car(rng)
    with warnings.catch_warnings():
        warnings.simplefilter("error")
        try:
            check_car(layout, rng)
        except LayoutError as problem:
            return [_told(f"car {number}, seed {seed} ({recipe}) refused", problem)]
        except Exception as problem:  # noqa: BLE001 - any at all is what is looked for
            return [_told(f"car {number}, seed {seed} ({recipe})", problem)]
    return []


def main(arguments: list[str] | None = None) -> int:
    parser = argparse.ArgumentParser(
        description=__doc__, formatter_class=argparse.RawTextHelpFormatter
    )
    parser.add_argument("--corners", type=int, default=1_000_000)
    parser.add_argument("--cars", type=int, default=20_000)
    parser.add_argument("--seed", type=int, default=20240)
    parser.add_argument("--minutes", type=float, default=math.inf, help="stop each half after this")
    given = parser.parse_args(arguments)
    bad = 0
    for words, run, count in (
        ("corners", corners_run, given.corners), ("whole cars", cars_run, given.cars)
    ):  # fmt: skip
        begun = time.monotonic()
        done, faults = run(given.seed, count, given.minutes * 60.0)
        for fault in faults[:50]:
            print(fault)
        bad += len(faults)
        took = time.monotonic() - begun
        print(f"{done:,} {words}, {len(faults)} faults, {took:.0f} s", flush=True)
    return 1 if bad else 0


if __name__ == "__main__":
    sys.exit(main())
