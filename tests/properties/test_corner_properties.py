"""What must hold for every corner, whatever its measures."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from geometry import layout as names
from geometry.corner import Corner
from geometry.front_view import front_view
from geometry.inner_pivot import curvature_center
from geometry.layout import Layout, Point, Side
from geometry.linkage import norm
from geometry.solution import solve
from tests.random_cars import KINDS, random_side

TRAVEL = np.linspace(-70.0, 70.0, 29)
cars = st.builds(
    lambda seed, kind: random_side(np.random.default_rng(seed), kind),
    st.integers(0, 100_000),
    st.sampled_from(KINDS),
)
plane_cars = st.builds(
    lambda seed: random_side(np.random.default_rng(seed), "A-arm"), st.integers(0, 100_000)
)


@settings(deadline=None, max_examples=60)
@given(cars, st.floats(-25.0, 25.0))
def test_rigid_lengths_are_kept_through_the_travel(side: Side, rack: float) -> None:
    corner = Corner.of(side)
    shift = np.array([[0.0], [rack], [0.0]])
    poses = corner.poses(TRAVEL, shift)
    ride = corner.poses(0.0)
    ok = poses.assembles
    assert ok.any()
    pairs = [("lower_ball", "tie_outer"), ("lower_ball", "wheel_center"),
             ("tie_outer", "wheel_center")]
    if not side.is_strut:
        pairs += [("lower_ball", "upper_ball"), ("upper_ball", "wheel_center")]
    for a, b in pairs:
        length = norm(getattr(ride, a) - getattr(ride, b))
        now = norm(getattr(poses, a) - getattr(poses, b))
        assert np.abs(now - length)[ok].max() < 1e-9
    rod = norm(ride.tie_outer - ride.tie_inner)
    assert np.abs(norm(poses.tie_outer - poses.tie_inner) - rod)[ok].max() < 1e-9
    assert np.abs(poses.wheel_center[2] - ride.wheel_center[2] - TRAVEL)[ok].max() < 1e-9
    assert np.abs(norm(poses.spin_axis) - 1.0)[ok].max() < 1e-12


@settings(deadline=None, max_examples=40)
@given(cars, st.floats(-20.0, 20.0), st.floats(-50.0, 50.0))
def test_the_right_side_mirrors_the_left(side: Side, rack: float, travel: float) -> None:
    layout = Layout(side)
    steered_left, steered_right = solve(layout, travel, rack), solve(layout, travel, -rack)
    for figure in ("toe", "camber", "caster", "scrub_radius", "mechanical_trail"):
        a = getattr(steered_left.left.now, figure)
        b = getattr(steered_right.right.now, figure)
        np.testing.assert_allclose(a, b, rtol=0, atol=1e-12 * 1000)
    straight = solve(layout.unlinked(), travel)
    if straight.roll_center is not None:
        assert straight.roll_center[0] == pytest.approx(0.0, abs=1e-6)


@settings(deadline=None, max_examples=40)
@given(cars, st.floats(0.1, 10.0))
def test_figures_do_not_depend_on_the_unit(side: Side, scale: float) -> None:
    scaled = replace(
        side,
        points={n: Point(*(v * scale for v in p)) for n, p in side.points.items()},
        tire=replace(side.tire, radius=side.tire.radius * scale),
    )
    a = Corner.of(side).poses(TRAVEL)
    b = Corner.of(scaled).poses(TRAVEL * scale)
    both = a.assembles & b.assembles
    assert (a.assembles == b.assembles).mean() > 0.9 and both.any()
    np.testing.assert_allclose(a.toe[both], b.toe[both], rtol=0, atol=1e-11)
    np.testing.assert_allclose(a.camber[both], b.camber[both], rtol=0, atol=1e-11)
    np.testing.assert_allclose(
        scale * a.scrub_radius[both], b.scrub_radius[both], rtol=1e-9, atol=1e-9
    )


def held_toe_slope(side: Side, step: float = 0.02) -> float:
    """Toe change per travel at ride height, rad/mm, by central differences of fourth order."""
    toe = Corner.of(side).poses(step * np.array([-2.0, -1.0, 1.0, 2.0])).toe
    return float((toe[0] - 8 * toe[1] + 8 * toe[2] - toe[3]) / (12.0 * step))


@settings(deadline=None, max_examples=40)
@given(plane_cars, st.floats(0.3, 0.7))
def test_no_toe_slope_when_the_tie_rod_aims_at_the_instant_center(side: Side, share: float) -> None:
    # Toe measured from a wheel without toe: then the knuckle moves in a plane.
    side = replace(side, static_toe=0.0)
    corner = Corner.of(side)
    center = front_view(corner, corner.poses(0.0)).instant_center[:, 0]
    assert center[2] == 1.0
    outer = side[names.TIE_OUTER]
    reach = share * 350.0
    way = np.array([center[0] - outer.over, center[1] - outer.up])
    way /= np.hypot(*way)
    aimed = side.moved(
        names.TIE_INNER,
        Point(outer.over + reach * way[0], outer.up + reach * way[1], outer.fore),
    )
    assert abs(held_toe_slope(aimed)) < 1e-9


@settings(deadline=None, max_examples=40)
@given(cars)
def test_no_toe_slope_and_no_toe_curvature_at_the_curvature_center(side: Side) -> None:
    place = curvature_center(Corner.of(side))
    assert np.all(np.isfinite(place))
    if np.hypot(place[0] - side[names.TIE_OUTER].over, place[1] - side[names.TIE_OUTER].up) > 3000:
        return
    there = side.moved(names.TIE_INNER, Point(*map(float, place), side[names.TIE_INNER].fore))
    step = 1.0
    toe = Corner.of(there).poses(step * np.arange(-3.0, 4.0)).toe
    slope = toe @ np.array([-1, 9, -45, 0, 45, -9, 1]) / (60.0 * step)
    bend = toe @ np.array([2, -27, 270, -490, 270, -27, 2]) / (180.0 * step**2)
    assert abs(slope) < 1e-10
    assert abs(bend) < 1e-10


@settings(deadline=None, max_examples=40)
@given(plane_cars)
def test_camber_gain_is_one_over_the_swing_arm(side: Side) -> None:
    # Exact for a plane linkage whose wheel keeps straight: no toe, tie rod at its place.
    side = replace(side, static_toe=0.0, static_camber=0.0)
    place = curvature_center(Corner.of(side))
    side = side.moved(names.TIE_INNER, Point(*map(float, place), side[names.TIE_INNER].fore))
    corner = Corner.of(side)
    swing = front_view(corner, corner.poses(0.0)).swing_arm[0]
    step = 0.01
    camber = corner.poses(np.array([-step, step])).camber
    # The wheel center's rise per turn is its own distance from the instant center; with no
    # camber it stands right above the contact point.
    assert (camber[1] - camber[0]) / (2 * step) == pytest.approx(-1.0 / swing, rel=1e-5)


@settings(deadline=None, max_examples=30)
@given(cars)
def test_the_contact_point_is_the_lowest_of_the_tire_s_circle(side: Side) -> None:
    poses = Corner.of(side).poses(TRAVEL)
    ok = poses.assembles
    spin, wheel = poses.spin_axis[:, ok], poses.wheel_center[:, ok]
    first = np.cross(spin, np.array([[0.3], [0.1], [0.9]]), axis=0)
    first /= np.linalg.norm(first, axis=0)
    second = np.cross(spin, first, axis=0)
    around = np.linspace(0, 2 * np.pi, 721)[:, None, None]
    circle = wheel + side.tire.radius * (np.cos(around) * first + np.sin(around) * second)
    lowest = circle[:, 2].min(axis=0)
    assert np.all(poses.contact[2, ok] <= lowest + 1e-9)
    assert np.all(lowest - poses.contact[2, ok] < 0.01)


@settings(deadline=None, max_examples=25)
@given(cars)
def test_every_pose_between_the_stops_is_found_and_none_beyond(side: Side) -> None:
    corner = Corner.of(side)
    droop, bump = (float(v) for v in corner.travel_stops())
    low, high = max(droop, -250.0), min(bump, 250.0)
    # At a stop the wheel's rise stands still, so the last hundredths of a millimeter before
    # it may be taken for beyond; never the other way round.
    inside = np.linspace(low + 0.05, high - 0.05, 101)
    assert corner.poses(inside).assembles.all()
    beyond = [v for v in (droop - 0.05, bump + 0.05) if np.isfinite(v)]
    if beyond:
        assert not corner.poses(np.array(beyond)).assembles.any()
