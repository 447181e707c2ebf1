"""Outlines of parts: their sizes, and that nothing degenerate makes them raise."""

from __future__ import annotations

import math

import numpy as np
import pytest
from shapely.geometry import Polygon

from geometry import shapes
from geometry.front_parts import OPEN_ROLES, front_parts
from geometry.front_strings import instant_center, strings
from geometry.layout import SIDES, TIE_INNER, WHEEL_CENTER
from geometry.solution import solve
from geometry.standing import nail_places, standing
from tests.sample_cars import CARS, DEGENERATE, RELAY_CAR, ROADSTER, STRUT_CAR, UNEQUAL_SIDES


def test_a_tube_has_the_area_of_its_bar_and_ends():
    outline = Polygon(shapes.tube((10, 20), (130, 110), 12.0))
    assert outline.area == pytest.approx(150 * 24 + math.pi * 144, rel=0.02)
    assert outline.is_valid


def test_a_tapered_tubes_sides_are_common_tangents():
    outline = shapes.tube((0, 0), (100, 0), 20.0, 8.0)
    assert Polygon(outline).bounds == pytest.approx((-20.0, -20.0, 108.0, 20.0), abs=0.5)
    on_first = np.abs(np.hypot(*outline.T) - 20.0) < 1e-9
    on_second = np.abs(np.hypot(*(outline - (100, 0)).T) - 8.0) < 1e-9
    assert (on_first ^ on_second).all()
    for index in range(len(outline)):
        here, there = index - 1, index
        if on_first[here] != on_first[there]:
            side = outline[there] - outline[here]
            assert side @ outline[here if on_first[here] else there] == pytest.approx(0, abs=1e-6)


def test_tubes_without_length_are_round():
    assert Polygon(shapes.tube((5, 5), (5, 5), 7.0)).area == pytest.approx(math.pi * 49, rel=0.02)
    assert np.isnan(shapes.tube((np.nan, 0), (1, 1), 3.0)).all()


def test_a_tire_has_its_radius_and_width():
    outline = shapes.tire(310.0, 205.0)
    assert outline.max(axis=0) == pytest.approx((102.5, 310.0))
    assert outline.min(axis=0) == pytest.approx((-102.5, -310.0))
    assert Polygon(outline).is_valid


@pytest.mark.parametrize(
    ("a", "b", "expected"),
    [
        ((-10, 5), (20, 5), (0, 5, 10, 5)),
        ((5, -1e6), (5, 1e6), (5, 0, 5, 10)),
        ((2, 3), (4, 5), (2, 3, 4, 5)),
        ((-5, -5), (15, 15), (0, 0, 10, 10)),
    ],
)
def test_lines_are_clipped_to_a_box(a, b, expected):
    assert shapes.clipped(a, b, (0, 0, 10, 10)) == pytest.approx(expected)


def test_lines_outside_a_box_are_gone():
    assert shapes.clipped((-5, 12), (20, 12), (0, 0, 10, 10)) is None
    assert shapes.clipped((-5, 4), (4, -9), (0, 0, 10, 10)) is None
    assert shapes.clipped((np.nan, 4), (4, 4), (0, 0, 10, 10)) is None


@pytest.mark.parametrize("car", [*CARS, *DEGENERATE])
@pytest.mark.parametrize(
    ("travel", "rack"), [(0.0, 0.0), (60.0, 20.0), (-90.0, -40.0), (700.0, 0.0)]
)
def test_every_car_has_finite_parts_and_nails_in_every_pose(car, travel, rack):
    solution = solve(CARS.get(car) or DEGENERATE[car], travel, rack)
    parts = front_parts(solution)
    assert parts
    for part in parts:
        assert np.isfinite(part.outline).all()
        assert part.closed == (part.role not in OPEN_ROLES)
    places = nail_places(solution)
    assert list(places) == list(solution.layout.nails())
    assert np.isfinite(list(places.values())).all()
    for string in strings(solution, {side: standing(solution, side) for side in SIDES}):
        assert np.isfinite([string.start, string.end]).all()


def test_the_left_side_stands_at_positive_x():
    places = nail_places(solve(UNEQUAL_SIDES))
    for (side, name), (x, y) in places.items():
        point = UNEQUAL_SIDES.point(side, name)
        assert (x, y) == pytest.approx((point.over if side == "left" else -point.over, point.up))


def test_a_mirrored_car_has_mirrored_parts():
    parts = front_parts(solve(ROADSTER, 30.0))
    left = [p for p in parts if p.side == "left"]
    right = [p for p in parts if p.side == "right"]
    assert [p.role for p in left] == [p.role for p in right]
    for one, two in zip(left, right, strict=True):
        if one.role == "spring":
            continue
        mirrored = two.outline * (-1.0, 1.0)
        assert one.outline.min(axis=0) == pytest.approx(mirrored.min(axis=0), abs=1e-6)
        assert one.outline.max(axis=0) == pytest.approx(mirrored.max(axis=0), abs=1e-6)


def test_the_tire_stands_on_its_contact_and_leans_with_camber():
    state = standing(solve(ROADSTER, 50.0), "left")
    camber = float(state.state.now.camber[0])
    assert state.axle == pytest.approx((math.cos(camber), -math.sin(camber)), abs=1e-4)
    center = state.points[WHEEL_CENTER]
    assert math.dist(center, state.contact) == pytest.approx(ROADSTER.left.tire.radius, rel=1e-3)


def test_steering_moves_relay_and_tie_ends_the_same_way():
    solution = solve(RELAY_CAR, 0.0, 25.0)
    still = nail_places(solve(RELAY_CAR))
    moved = nail_places(solution)
    for key in (("left", "pitman arm end"), ("right", "idler arm end"), ("left", TIE_INNER)):
        assert moved[key][0] - still[key][0] == pytest.approx(25.0, abs=1.5)
    assert moved["left", "pitman arm pivot"] == still["left", "pitman arm pivot"]


@pytest.mark.parametrize("car", [ROADSTER, STRUT_CAR, RELAY_CAR])
def test_arm_strings_end_at_the_instant_center_and_contact_strings_pass_the_roll_center(car):
    solution = solve(car, 20.0)
    both = {side: standing(solution, side) for side in SIDES}
    roll = solution.roll_center_place
    for side in SIDES:
        center = instant_center(solution, side)
        own = [s for s in strings(solution, both) if s.side == side]
        assert [s.kind for s in own] == ["arm", "arm", "contact", "tie"]
        for string in own[:2]:
            assert string.end == pytest.approx(center.place, abs=1e-6)
        start, end = np.array(own[2].start), np.array(own[2].end)
        for place in (roll, center.place, both[side].contact):
            way = end - start
            off = way[0] * (place[1] - start[1]) - way[1] * (place[0] - start[0])
            assert abs(off) / np.hypot(*way) < 1e-6
            share = float((np.array(place) - start) @ way / (way @ way))
            assert -1e-9 <= share <= 1 + 1e-9
