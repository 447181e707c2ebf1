"""Rack zones and pivot zones against the true position solve, place by place."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
import shapely

from geometry.corner import Corner
from geometry.figure_batches import BATCH_FIGURES, CarBatch, figures_of
from geometry.inner_pivot import held_travel, toe_of, toe_range
from geometry.layout import (
    LOWER_BALL,
    SIDES,
    STRUT_TOP,
    TIE_INNER,
    UPPER_INNER,
    Layout,
    NoGo,
    Point,
    Target,
    other_side,
)
from geometry.pivot_zones import Bound, fine_rows
from geometry.solution import solve
from geometry.steering import inner_shifts
from geometry.toe_law import ToeLaw, rods_to
from geometry.tolerances import FIGURES
from geometry.zone_edge import onto_level
from geometry.zone_shapes import lines_at, region_at_most
from geometry.zones import (
    cut,
    motion_at,
    pivot_zone,
    rack_zone,
    rack_zone_of,
    refine_edge,
    room_in,
    true_ranges,
)
from tests.sample_cars import CARS, DEGENERATE

RELATIVE = np.linspace(-75.0, 75.0, 41)
GAIN = math.radians(1.0) / 25.4


def moved_inner(layout: Layout, over: float, up: float) -> Layout:
    return layout.with_point("left", TIE_INNER, Point(over, up, layout.left[TIE_INNER].fore))


# --- toe law ---------------------------------------------------------------------------


@pytest.mark.parametrize("name", CARS)
def test_toe_law_gives_what_the_toe_of_each_pivot_is(name: str):
    corner = Corner.of(CARS[name].left)
    motion = held_travel(corner, RELATIVE)
    inner, outer = corner.tie_inner[:, 0], corner.tie_outer[:, 0]
    overs, ups = (part.ravel() for part in np.meshgrid(
        inner[1] + np.linspace(-60, 60, 19), inner[2] + np.linspace(-60, 60, 17)))
    law, rods = ToeLaw(motion, outer), rods_to(outer, inner[0], overs, ups)
    known = toe_of(motion, corner, np.stack([overs, ups]))
    assert np.abs(law.ranges(rods) - toe_range(known)).max() < 1e-13
    assert np.abs(law.toes(rods) + corner.static_toe - known).max() < 1e-13


def test_toe_law_knows_where_a_rod_cannot_reach():
    corner = Corner.of(CARS["healthy-roadster"].left)
    motion = held_travel(corner, RELATIVE)
    outer, fore = corner.tie_outer[:, 0], float(corner.tie_inner[0, 0])
    far = rods_to(outer, fore, np.array([570.0, 280.0]), np.array([256.0, 237.0]))
    ranges = ToeLaw(motion, outer).ranges(far)
    assert np.isnan(ranges[0]) and np.isfinite(ranges[1])
    assert ToeLaw(motion, outer).ranges(far[:, :0]).shape == (0,)


def test_motion_through_travel_does_not_depend_on_who_is_solved_beside():
    side = CARS["healthy-roadster"].left
    others = [side.moved(UPPER_INNER, Point(342.9 + d, 390.525 - 0.7 * d)) for d in range(-9, 10)]
    together = held_travel(Corner.of(*others), RELATIVE)
    for row, one in enumerate(others):
        alone = held_travel(Corner.of(one), RELATIVE)
        assert together.assembles[row].all() and alone.assembles.all()
        assert np.abs(together.tie_outer[:, row] - alone.tie_outer).max() < 1e-7


# --- rack zone ---------------------------------------------------------------------------


@pytest.mark.parametrize("name", CARS)
def test_edge_of_the_rack_zone_holds_the_tolerance_when_solved_again(name: str):
    layout = CARS[name]
    solution = solve(layout)
    zone = rack_zone_of(solution, "left", full=True)
    edge = refine_edge(solution.left.corner, zone)
    assert edge is not None and edge.exact.sum() > 100 and edge.exact.mean() > 0.95
    for k in np.flatnonzero(edge.exact)[::17]:
        place = edge.places[:, k]
        again = Corner.of(moved_inner(layout, *place).left).poses(zone.travel).toe
        assert abs(math.degrees(float(np.ptp(again)) - zone.tolerance)) < 1e-9
    # Just inside is within the tolerance, just outside is not; the very tips of a slender
    # zone fall between the grid's columns.
    low, high = (edge.zone.bounds[k] for k in (0, 2))
    for shape, outside in ((edge.zone.buffer(-0.05), False), (edge.zone.buffer(0.05), True)):
        ring = shapely.get_coordinates(shapely.boundary(shape)).T
        ring = ring[:, (ring[0] > low + zone.steps[0]) & (ring[0] < high - zone.steps[0])]
        past = true_ranges(solution.left.corner, ring, zone.travel) > zone.tolerance
        assert past.size > 50 and (past == outside).all()


def test_steered_rack_zone_holds_the_tolerance_off_center():
    layout = CARS["healthy-roadster"]
    solution = solve(layout)
    zone = rack_zone_of(solution, "left", full=True, rack=40.0)
    edge = refine_edge(solution.left.corner, zone)
    assert edge is not None and edge.exact.mean() > 0.95
    shift = inner_shifts(layout, 40.0)["left"]
    for k in np.flatnonzero(edge.exact)[::29]:
        car = Corner.of(moved_inner(layout, *edge.places[:, k]).left)
        toe = car.poses(zone.travel, np.repeat(shift, zone.travel.size, axis=1)).toe
        # Well off straight ahead, and its change over the travel is the tolerance.
        assert abs(toe[20]) > math.radians(5.0)
        assert abs(math.degrees(float(np.ptp(toe)) - zone.tolerance)) < 1e-9
    assert zone.zone.area != pytest.approx(rack_zone_of(solution, "left").zone.area, rel=0.02)


def test_steered_motion_without_steering_is_the_plain_one():
    corner = Corner.of(CARS["skewed-arms"].left)
    plain, still = motion_at(corner, RELATIVE), motion_at(corner, RELATIVE, np.zeros(3))
    assert np.abs(plain.tie_outer - still.tie_outer).max() < 1e-8


def test_zone_lies_about_the_best_fit_and_grows_with_the_tolerance():
    solution = solve(CARS["rack-set-low"])
    corner, motion = solution.left.corner, solution.left.pivots.motion
    best = solution.left.pivots.place("best fit")
    assert best is not None
    areas = []
    for tolerance in (0.001, 0.002, 0.004):
        zone = rack_zone(corner, motion, tolerance, steps=(60, 60))
        assert zone.zone.covers(shapely.Point(best))
        assert zone.best == pytest.approx(best, abs=0.05)
        border = shapely.box(zone.overs[0], zone.ups[0], zone.overs[-1], zone.ups[-1]).boundary
        assert zone.zone.distance(border) > 0.0
        areas.append(zone.zone.area)
    assert areas[0] < areas[1] < areas[2]


def test_zone_says_in_words_how_much_room_there_is():
    healthy = rack_zone_of(solve(CARS["healthy-roadster"]), "left", full=True)
    assert healthy.holds_present
    assert healthy.words("in").startswith("The inner tie-rod pivot has room as it stands: ")
    low = rack_zone_of(solve(CARS["rack-set-low"]), "left", full=True)
    assert not low.holds_present and "stands outside" in low.words("in")
    place, room = healthy.room or ((0.0, 0.0), None)
    assert place == healthy.present and room is not None
    # A hair inside each end is in the zone; a hair past it is not.
    for d_over, d_up, size in ((0, 1, room.up), (0, -1, room.down), (-1, 0, room.inboard),
                               (1, 0, room.outboard)):
        for share, within in ((0.98, True), (1.05, False)):
            at = shapely.Point(place[0] + d_over * size * share, place[1] + d_up * size * share)
            assert healthy.zone.covers(at) is within


def test_no_zone_where_the_tolerance_is_out_of_reach():
    solution = solve(CARS["cut-springs"])
    state = solution.left
    zone = rack_zone(state.corner, state.pivots.motion, 1e-7)
    assert zone.zone.is_empty and zone.room is None
    assert "No place for the inner tie-rod pivot" in zone.words("in")
    edge = refine_edge(state.corner, zone)
    assert edge is not None and edge.zone.is_empty


@pytest.mark.parametrize("name", DEGENERATE)
def test_degenerate_cars_get_a_sentence(name: str):
    solution = solve(DEGENERATE[name])
    for rack in (0.0, 25.0):
        zone = rack_zone_of(solution, "left", rack=rack)
        assert zone.words("in").endswith(".") and "nan" not in zone.words("mm").lower()
        edge = refine_edge(solution.left.corner, zone)
        assert edge is not None and np.isfinite(edge.places).all()


def test_refining_can_be_stopped_and_tells_how_far_it_is():
    solution = solve(CARS["healthy-roadster"])
    zone = rack_zone_of(solution, "left")
    assert refine_edge(solution.left.corner, zone, stop=lambda: True) is None
    told: list[float] = []
    assert refine_edge(solution.left.corner, zone, progress=told.append) is not None
    assert told == sorted(told) and told[-1] == 1.0


# --- pivot zones -------------------------------------------------------------------------


def test_batch_figures_are_those_a_target_can_name():
    assert BATCH_FIGURES.keys() == FIGURES.keys()


@pytest.mark.parametrize("name", CARS)
def test_batch_figures_are_the_figures_of_each_solved_car(name: str):
    layout = CARS[name]
    solution = solve(layout)
    for side in SIDES:
        own, far = layout.side(side), layout.side(other_side(side))
        cars = CarBatch(
            Corner.of(own, own), None if layout.linked else Corner.of(far), own,
            solution.left.sweep.travel,
        )
        for key, figure in FIGURES.items():
            value = figure.value(solution, side)
            values = figures_of(cars, key)
            if value is None:
                assert np.isnan(values).all()
            else:
                assert values == pytest.approx([value, value], rel=1e-9, abs=1e-9)


@pytest.mark.parametrize(
    ("car", "nail", "targets"),
    [
        ("healthy-roadster", UPPER_INNER, (Target("roll center height", 20.0, 60.0),
                                           Target("camber gain", 0.5 * GAIN, GAIN))),
        ("healthy-roadster", LOWER_BALL, (Target("toe range", None, 2.0),
                                          Target("swing arm", 1200.0, 3500.0))),
        ("unequal-sides", UPPER_INNER, (Target("roll center height", 20.0, 50.0),)),
        ("strut-hatch", STRUT_TOP, (Target("roll center height", 60.0, 120.0),
                                    Target("scrub radius", -20.0, 40.0))),
        ("parallel-equal-arms", UPPER_INNER, (Target("swing arm", 2000.0, None),)),
        ("skewed-arms", TIE_INNER, (Target("toe range", None, 1.5),)),
    ],
)
def test_pivot_zone_is_where_the_solved_car_keeps_its_targets(
    car: str, nail: str, targets: tuple[Target, ...]
):
    layout = CARS[car]
    zone = pivot_zone(layout, "left", nail, targets, steps=(31, 31), half_size=(30.0, 30.0))
    assert zone is not None and not zone.trouble
    area = shapely.box(zone.overs[0], zone.ups[0], zone.overs[-1], zone.ups[-1])
    assert 0.0 < zone.zone.area < area.area
    rng = np.random.default_rng(4)
    wrong = tried = 0
    for shape, wanted in ((zone.zone.buffer(-0.3), True), (area - zone.zone.buffer(0.3), False)):
        places = [p for p in rng.uniform(zone.overs[0] + [0, zone.ups[0] - zone.overs[0]],
                                         [zone.overs[-1], zone.ups[-1]], (1500, 2))
                  if shape.covers(shapely.Point(p))][:12]
        for over, up in places:
            moved = layout.with_point("left", nail, Point(over, up, layout.left[nail].fore))
            solution = solve(moved)
            keeps = True
            for target in targets:
                value = FIGURES[target.figure].value(solution, "left")
                keeps &= value is not None
                keeps &= target.low is None or (value or 0.0) >= target.low
                keeps &= target.high is None or (value or 0.0) <= target.high
            wrong += keeps is not wanted
            tried += 1
    assert tried >= 12 and wrong == 0


def test_inside_and_margin_agree_with_the_zone():
    targets = (Target("roll center height", 20.0, 60.0), Target("camber gain", None, GAIN))
    zone = pivot_zone(CARS["healthy-roadster"], "left", UPPER_INNER, targets)
    assert zone is not None and zone.inside.any() and not zone.inside.all()
    assert ((zone.margin >= 0.0) == zone.inside).all()
    for row, column in ((3, 5), (20, 20), (33, 11)):
        at = shapely.Point(zone.overs[column], zone.ups[row])
        assert zone.inside[row, column] == zone.zone.buffer(1e-6).covers(at)


def test_exact_pivot_zone_stands_on_the_limit():
    layout, target = CARS["healthy-roadster"], Target("roll center height", 30.0, 55.0)
    zone = pivot_zone(layout, "left", UPPER_INNER, (target,), exact=True, steps=(21, 21))
    assert zone is not None
    border = shapely.box(zone.overs[0], zone.ups[0], zone.overs[-1], zone.ups[-1]).boundary
    corners = [p for p in shapely.get_coordinates(zone.zone)
               if border.distance(shapely.Point(p)) > 1e-3][::9]
    assert corners
    for over, up in corners:
        center = solve(layout.with_point("left", UPPER_INNER, Point(over, up))).ride_roll_center
        assert center is not None
        assert min(abs(center[1] - 30.0), abs(center[1] - 55.0)) < 1e-5


@pytest.mark.parametrize("limit", [-2000.0, 0.0, 2000.0])
@pytest.mark.parametrize("low", [True, False])
def test_swing_arm_limits_reach_across_parallel_arms(limit: float, low: bool):
    arms = np.array([-1e6, -3000.0, -1000.0, -10.0, 10.0, 1000.0, 3000.0, 1e6])
    past = Bound("swing arm", limit, low).past(arms)
    assert ((past <= 0.0) == (arms >= limit if low else arms <= limit)).all()


def test_pivot_zone_says_why_there_is_none():
    layout = CARS["healthy-roadster"]
    fixed = pivot_zone(layout, "left", TIE_INNER, (Target("roll center height", 300.0, None),))
    assert fixed is not None and fixed.zone.is_empty and "does not change it" in fixed.trouble
    none = pivot_zone(layout, "left", TIE_INNER)
    assert none is not None and none.trouble.startswith("No target")
    absent = pivot_zone(layout, "left", STRUT_TOP, (Target("scrub radius", 0.0, 50.0),))
    assert absent is not None and "no point" in absent.trouble
    too_much = pivot_zone(layout, "left", UPPER_INNER, (Target("roll center height", 900.0, None),))
    assert too_much is not None and too_much.zone.is_empty and "No place" in too_much.trouble


def test_pivot_zone_can_be_stopped():
    calls = []

    def stop() -> bool:
        calls.append(1)
        return len(calls) > 2

    targets = (Target("toe range", None, 2.0),)
    told: list[float] = []
    assert pivot_zone(CARS["healthy-roadster"], "left", UPPER_INNER, targets, stop=stop,
                      progress=told.append) is None
    assert told and 0.0 < told[-1] < 1.0


@pytest.mark.parametrize("name", DEGENERATE)
def test_pivot_zones_of_degenerate_cars_never_break(name: str):
    layout = DEGENERATE[name]
    targets = (*(Target(key, -100.0, 100.0) for key in FIGURES), Target("no figure", 0.0, 1.0))
    for nail in layout.left.points:
        zone = pivot_zone(layout, "left", nail, targets, steps=(5, 5))
        assert zone is not None and (zone.trouble != "") == zone.zone.is_empty


# --- shapes ------------------------------------------------------------------------------


def test_regions_keep_their_holes_and_their_pieces():
    axis = np.linspace(-3.0, 3.0, 121)
    x, y = np.meshgrid(axis, axis)
    ring = region_at_most(axis, axis, np.abs(np.hypot(x, y) - 1.5), 0.5)
    assert len(ring.interiors) == 1 and ring.area == pytest.approx(math.pi * 3.0, rel=1e-3)
    two = region_at_most(axis, axis, np.minimum(np.hypot(x - 1.5, y), np.hypot(x + 1.5, y)), 0.7)
    assert two.geom_type == "MultiPolygon"
    room = room_in(ring, (1.5, 0.0))
    assert room is not None and room.inboard == pytest.approx(0.5, abs=0.01)
    assert room_in(ring, (0.0, 0.0)) is None
    (line,) = lines_at(axis, axis, np.hypot(x, y), 2.0)
    assert np.hypot(*line.T) == pytest.approx(2.0, abs=1e-3)


def test_no_go_shapes_are_cut_out_with_their_clearance():
    zone = shapely.box(0.0, 0.0, 100.0, 100.0)
    corner = ((50.0, 50.0), (200.0, 50.0), (200.0, 200.0), (50.0, 200.0))
    rail = NoGo("rail", corner, clearance=10.0)
    left = cut(zone, (rail,), "left")
    assert left.area == pytest.approx(100.0**2 - 60.0**2 + (1 - math.pi / 4) * 100.0, rel=1e-3)
    mirrored = NoGo("rail", tuple((-x, y) for x, y in corner), clearance=0.0)
    assert cut(zone, (mirrored,), "left").area == pytest.approx(7500.0)
    own = replace(mirrored, side="right")
    assert cut(zone, (own,), "left").area == pytest.approx(7500.0)
    assert cut(zone, (own,), "right").area == pytest.approx(10000.0)
    above = replace(rail, view="above")
    assert cut(zone, (above,), "left").area == pytest.approx(10000.0)
    assert cut(zone, (NoGo("all", ((-1, -1), (101, -1), (101, 101), (-1, 101))),), "left").is_empty


def test_edges_are_found_to_the_last_digit():
    angle = np.linspace(0.0, 6.2, 40)
    ways = np.stack([np.cos(angle), np.sin(angle)])

    def past(at: np.ndarray) -> np.ndarray:
        # A kink on the way, and nothing beyond 3.
        away = np.hypot(at[0], at[1])
        return np.where(away > 3.0, np.nan, np.maximum(away - 2.0, 5.0 * (away - 2.0)))

    found = onto_level(1.9 * ways, ways, 0.5, past, (-9.0, -9.0, 9.0, 9.0), 1e-14)
    assert found is not None and found[1].all()
    assert np.hypot(*found[0]) == pytest.approx(2.0, abs=1e-14)


def test_finer_rows_reproduce_cubics_and_spread_what_is_missing():
    x, y = np.meshgrid(np.arange(7.0), np.arange(6.0))
    fine = np.stack(list(fine_rows(x**3 - 2 * x * y**2 + 4, 3)))
    fx, fy = np.meshgrid(np.linspace(0, 6, 19), np.linspace(0, 5, 16))
    assert fine == pytest.approx(fx**3 - 2 * fx * fy**2 + 4, abs=1e-10)
    gone = np.where((x == 6) & (y == 5), np.nan, x)
    fine = np.stack(list(fine_rows(gone, 3)))
    assert np.isnan(fine[-1, -1]) and np.isfinite(fine[0, 0])


# --- speed -------------------------------------------------------------------------------
