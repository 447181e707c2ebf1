"""The figures object, against the definitions worked out a second way from its own points."""

from __future__ import annotations

import json
import math
from typing import Any

import numpy as np
import pytest

from geometry import layout as names
from geometry.figures import figures
from geometry.finding_checks.finding import SEVERITIES
from geometry.layout import Layout
from tests.sample_cars import CARS, CUT, DEGENERATE, PARALLEL_EQUAL, ROADSTER, UNEQUAL_SIDES

POSE_KEYS = {
    "side", "travel", "rack", "assembles", "toe", "camber", "caster", "kingpin_inclination",
    "scrub_radius", "mechanical_trail", "half_track", "instant_center", "swing_arm_length",
    "roll_center", "points",
}  # fmt: skip
FIGURE_KEYS = POSE_KEYS - {"side", "travel", "rack", "assembles"}
TRAVELS, RACKS = [-40.0, 0.0, 55.0], [0.0, 20.0]


def space(point: dict[str, float]) -> np.ndarray:
    return np.array([point["fore"], point["over"], point["up"]])


def of_side(rows: list[dict[str, Any]], side: str) -> list[dict[str, Any]]:
    return [row for row in rows if row["side"] == side]


@pytest.fixture(scope="module", params=CARS)
def car(request: pytest.FixtureRequest) -> tuple[Layout, dict[str, Any]]:
    layout = CARS[request.param]
    return layout, figures(layout, TRAVELS, RACKS, units="mm", version="9")


def test_the_object_has_the_promised_keys_in_the_promised_order(car):
    layout, got = car
    assert list(got) == [
        "program", "version", "title", "units", "assumptions", "poses", "tie_rod", "findings",
    ]  # fmt: skip
    assert got["program"] == "bobline"
    assert got["version"] == "9"
    assert got["title"] == layout.title
    assert got["units"] == {"length": "mm", "angle": "deg"}
    places = [(row["side"], row["travel"], row["rack"]) for row in got["poses"]]
    assert places == [(s, t, r) for s in ("left", "right") for t in TRAVELS for r in RACKS]
    assert all(set(row) == POSE_KEYS for row in got["poses"])
    assert [row["side"] for row in got["tie_rod"]] == ["left", "right"]
    for row in got["tie_rod"]:
        assert set(row["toe_range"]) == {"as_is", "string_rule", "curvature_center", "best_fit"}
        assert row["travel_range"] == [-75.0, 75.0]
    assert all(set(finding) == {"code", "severity", "text"} for finding in got["findings"])
    json.dumps(got, allow_nan=False)


def test_every_sound_car_assembles_over_the_span(car):
    assert all(row["assembles"] for row in car[1]["poses"])


def test_ride_height_gives_back_what_was_measured(car):
    layout, got = car
    for row in got["poses"]:
        if row["travel"] == 0.0 and row["rack"] == 0.0:
            side = layout.side(row["side"])
            assert row["toe"] == pytest.approx(math.degrees(side.static_toe), abs=1e-9)
            assert row["camber"] == pytest.approx(math.degrees(side.static_camber), abs=1e-9)
            assert set(row["points"]) == set(side.points)
            for name, point in side.points.items():
                got_point = row["points"][name]
                assert (got_point["over"], got_point["up"], got_point["fore"]) == pytest.approx(
                    tuple(point), abs=1e-8
                )


def test_rigid_lengths_hold_in_every_pose(car):
    layout, got = car
    knuckle = [n for n in names.KNUCKLE_POINTS if n in layout.left.points]
    pairs = [(a, b) for i, a in enumerate(knuckle) for b in knuckle[i + 1 :]]
    pairs.append((names.TIE_INNER, names.TIE_OUTER))
    for arm in ("lower", "upper"):
        pairs += [
            (name, f"{arm} ball joint")
            for name in (f"{arm} inner pivot front", f"{arm} inner pivot rear",
                         f"{arm} inner pivot")
            if name in layout.left.points
        ]
    if names.SPRING_LOWER in layout.left.points:
        pairs += [(names.SPRING_LOWER, names.LOWER_BALL), (names.SPRING_LOWER, names.LOWER_INNER)]
    for row in got["poses"]:
        points = layout.side(row["side"]).points
        for a, b in pairs:
            built = math.dist(points[a], points[b])
            now = np.linalg.norm(space(row["points"][a]) - space(row["points"][b]))
            assert now == pytest.approx(built, abs=1e-7), (a, b, row["travel"], row["rack"])


def test_a_struts_axis_always_passes_its_top_mount():
    for row in figures(CARS["strut-hatch"], TRAVELS, RACKS)["poses"]:
        # The lower mount and the top mount are given; the axis's third point is worked out
        # from the knuckle as a rigid body at ride height.
        ride = CARS["strut-hatch"].left.points
        body = [names.LOWER_BALL, names.TIE_OUTER, names.WHEEL_CENTER, names.STRUT_LOWER]
        before = np.array([[ride[n].fore, ride[n].over, ride[n].up] for n in body])
        after = np.array([space(row["points"][n]) for n in body])
        u, _, vt = np.linalg.svd((before - before.mean(0)).T @ (after - after.mean(0)))
        turn = (u @ np.diag([1, 1, np.sign(np.linalg.det(u @ vt))]) @ vt).T
        top = np.array([ride[names.STRUT_TOP].fore, ride[names.STRUT_TOP].over,
                        ride[names.STRUT_TOP].up])
        axis = turn @ (top - before[3])
        to_top = space(row["points"][names.STRUT_TOP]) - after[3]
        off = np.linalg.norm(np.cross(axis, to_top)) / np.linalg.norm(axis)
        assert off < 1e-6


def test_travel_is_the_wheel_centers_rise_and_rack_the_inner_ends_way(car):
    layout, got = car
    for row in got["poses"]:
        side = layout.side(row["side"])
        rise = row["points"][names.WHEEL_CENTER]["up"] - side[names.WHEEL_CENTER].up
        assert rise == pytest.approx(row["travel"], abs=1e-8)
        if layout.title != "Steering-box sedan":
            # The rack moves to the car's left: outboard for the left end.
            way = row["rack"] if row["side"] == "left" else -row["rack"]
            shift = row["points"][names.TIE_INNER]["over"] - side[names.TIE_INNER].over
            assert shift == pytest.approx(way, abs=1e-9)


def test_kingpin_angles_come_from_the_ball_joints(car):
    for row in car[1]["poses"]:
        points = row["points"]
        upper = points.get(names.UPPER_BALL) or points[names.STRUT_TOP]
        lower = points[names.LOWER_BALL]
        rise = upper["up"] - lower["up"]
        lean = math.degrees(math.atan2(lower["over"] - upper["over"], rise))
        back = math.degrees(math.atan2(lower["fore"] - upper["fore"], rise))
        assert row["kingpin_inclination"] == pytest.approx(lean, abs=1e-9)
        assert row["caster"] == pytest.approx(back, abs=1e-9)


def test_the_contact_follows_from_wheel_center_and_camber(car):
    layout, got = car
    for row in got["poses"]:
        radius = layout.side(row["side"]).tire.radius
        camber, toe = math.radians(row["camber"]), math.radians(row["toe"])
        # Down the wheel's plane from its center: over by sin(camber) across the heading.
        over = row["points"][names.WHEEL_CENTER]["over"] - radius * math.sin(camber) * math.cos(toe)
        assert row["half_track"] == pytest.approx(over, abs=1e-8)


@pytest.mark.parametrize("name", ["healthy-roadster", "unequal-sides", "knuckle-swap"])
def test_instant_center_swing_arm_and_roll_center_by_slopes(name: str):
    """School geometry on the pose's own points: slopes and crossings, straight ahead."""
    layout = CARS[name]
    got = figures(layout, TRAVELS, [0.0], units="mm")
    contacts, slopes = {}, {}
    for row in got["poses"]:
        p = row["points"]

        def line(inner: str, outer: str, p=p) -> tuple[float, float]:
            slope = (p[outer]["up"] - p[inner]["up"]) / (p[outer]["over"] - p[inner]["over"])
            return slope, p[inner]["up"] - slope * p[inner]["over"]

        m1, c1 = line(names.LOWER_INNER, names.LOWER_BALL)
        m2, c2 = line(names.UPPER_INNER, names.UPPER_BALL)
        over = (c2 - c1) / (m1 - m2)
        up = m1 * over + c1
        assert row["instant_center"]["over"] == pytest.approx(over, rel=1e-9)
        assert row["instant_center"]["up"] == pytest.approx(up, rel=1e-7)
        assert row["swing_arm_length"] == pytest.approx(row["half_track"] - over, rel=1e-9)
        radius = layout.side(row["side"]).tire.radius
        ground = p[names.WHEEL_CENTER]["up"] - radius * math.cos(math.radians(row["camber"]))
        key = row["side"], row["travel"]
        contacts[key] = row["half_track"], ground
        slopes[key] = (up - ground) / (over - row["half_track"])
    for travel in TRAVELS:
        (lo, lu), (ro, ru) = contacts["left", travel], contacts["right", travel]
        ml, mr = slopes["left", travel], slopes["right", travel]
        # left: up = lu + ml (x - lo); right, mirrored: up = ru + mr (-x - ro).
        x = (ru - mr * ro - lu + ml * lo) / (ml + mr)
        up = lu + ml * (x - lo)
        tilt = (lu - ru) / (lo + ro)
        height = (up - ru - tilt * (x + ro)) / math.hypot(1.0, tilt)
        left, right = (
            next(r for r in of_side(got["poses"], side) if r["travel"] == travel)["roll_center"]
            for side in ("left", "right")
        )
        assert left["over"] == pytest.approx(x, abs=1e-6)
        assert right["over"] == pytest.approx(-x, abs=1e-6)
        assert left["up"] == right["up"] == pytest.approx(height, abs=1e-6)


def test_camber_gain_is_one_over_the_swing_arm():
    step = 0.01
    low, mid, high = of_side(
        figures(ROADSTER, [-step, 0.0, step], units="mm")["poses"], "left"
    )
    slope = math.radians(high["camber"] - low["camber"]) / (2 * step)
    # Toe turns the wheel a little about a leaning axis, so the two differ by some hundredths.
    assert slope == pytest.approx(-1.0 / mid["swing_arm_length"], rel=0.02)


def test_toe_ranges_as_the_swept_poses_have_them():
    sweep = list(np.linspace(-75.0, 75.0, 3001))
    for layout in (ROADSTER, UNEQUAL_SIDES, CARS["strut-hatch"], CARS["knuckle-swap"]):
        got = figures(layout, sweep, units="mm")
        for row in got["tie_rod"]:
            toes = [pose["toe"] for pose in of_side(got["poses"], row["side"])]
            assert row["toe_range"]["as_is"] == pytest.approx(max(toes) - min(toes), abs=2e-6)


@pytest.mark.parametrize("kind", ["string_rule", "curvature_center", "best_fit"])
def test_moving_the_pivot_to_a_place_leaves_the_range_promised(kind: str):
    layout = CARS["rack-set-low"]
    promised = figures(layout, units="mm")["tie_rod"][0]
    inner = layout.left[names.TIE_INNER]._replace(**promised[kind])
    moved = figures(layout.with_point("left", names.TIE_INNER, inner), units="mm")["tie_rod"][0]
    assert moved["toe_range"]["as_is"] == pytest.approx(promised["toe_range"][kind], abs=1e-8)


def test_span_decides_the_range():
    short = figures(ROADSTER, span=25.0, units="mm")["tie_rod"][0]
    toes = [
        pose["toe"]
        for pose in of_side(
            figures(ROADSTER, list(np.linspace(-25, 25, 601)), units="mm")["poses"], "left"
        )
    ]
    assert short["travel_range"] == [-25.0, 25.0]
    assert short["toe_range"]["as_is"] == pytest.approx(max(toes) - min(toes), abs=1e-9)


def test_inches_and_millimeters_say_the_same():
    inch = figures(UNEQUAL_SIDES, [1.0], [0.5], units="in", span=3.0)
    metric = figures(UNEQUAL_SIDES, [25.4], [12.7], units="mm", span=76.2)
    assert inch["units"]["length"] == "in"

    def compare(a: Any, b: Any, angle: bool) -> None:
        if isinstance(a, dict):
            for key in a:
                turned = angle or key in ("toe", "camber", "caster", "kingpin_inclination")
                compare(a[key], b[key], turned or key == "toe_range")
        elif isinstance(a, list):
            for one, other in zip(a, b, strict=True):
                compare(one, other, angle)
        elif isinstance(a, float):
            assert a * (1.0 if angle else 25.4) == pytest.approx(b, abs=1e-6)
        else:
            assert a == b

    compare(inch["poses"], metric["poses"], False)
    compare(inch["tie_rod"], metric["tie_rod"], False)


def test_left_and_right_of_a_mirrored_car_agree_and_part_when_steered():
    straight = figures(ROADSTER, [30.0], [0.0], units="mm")["poses"]
    assert {**straight[0], "side": ""} == {**straight[1], "side": ""}
    left, right = figures(ROADSTER, [30.0], [15.0], units="mm")["poses"]
    other_left, other_right = figures(ROADSTER, [30.0], [-15.0], units="mm")["poses"]
    # A rack behind the axle pushed left turns the wheels right: left toes in, right toes out.
    assert left["toe"] > 1.0
    assert right["toe"] < -1.0
    assert left["toe"] == pytest.approx(other_right["toe"], abs=1e-10)
    assert right["toe"] == pytest.approx(other_left["toe"], abs=1e-10)
    assert left["roll_center"]["over"] == pytest.approx(-right["roll_center"]["over"])


def test_parallel_arms_have_no_instant_center():
    row = figures(PARALLEL_EQUAL)["poses"][0]
    assert row["assembles"]
    assert row["instant_center"] is None
    assert row["swing_arm_length"] is None
    assert row["roll_center"] == {"over": pytest.approx(0.0), "up": pytest.approx(0.0, abs=1e-9)}


def test_a_pose_out_of_reach_is_null_and_the_others_are_not():
    reached, missed = of_side(figures(ROADSTER, [0.0, 4000.0], units="mm")["poses"], "left")
    assert reached["assembles"]
    assert missed["assembles"] is False
    assert missed["travel"] == 4000.0
    assert all(missed[key] is None for key in FIGURE_KEYS)


def test_a_rack_out_of_reach_is_null():
    rows = figures(CARS["steering-box-sedan"], [0.0], [500.0], units="mm")["poses"]
    assert [row["assembles"] for row in rows] == [False, False]


@pytest.mark.parametrize("name", DEGENERATE)
def test_degenerate_cars_give_plain_json(name: str):
    got = figures(DEGENERATE[name], [-1.0, 0.0, 1.0], [-0.5, 0.0, 0.5])
    text = json.dumps(got, allow_nan=False)
    assert len(got["poses"]) == 18
    assert "NaN" not in text
    assert all(
        all(row[key] is None for key in FIGURE_KEYS)
        for row in got["poses"]
        if not row["assembles"]
    )


def test_many_poses_are_one_solve_a_side(monkeypatch: pytest.MonkeyPatch):
    from geometry.corner import Corner

    calls: list[int] = []
    real = Corner.poses

    def counted(self: Corner, travel: Any, shift: Any = None) -> Any:
        calls.append(np.size(travel))
        return real(self, travel, shift)

    monkeypatch.setattr("geometry.figures.solve", lambda *a: pytest.fail("not here"))
    monkeypatch.setattr(Corner, "poses", counted)
    from geometry.figures import _poses

    rows = _poses(ROADSTER, np.linspace(-50, 50, 40), np.linspace(-20, 20, 25), 1.0)
    assert calls == [1000, 1000]
    assert len(rows) == 2000


def test_assumptions_and_findings_are_passed_on():
    from dataclasses import replace

    from geometry.findings import findings
    from geometry.solution import solve

    layout = replace(CARS["rack-set-low"], assumed=("The outer tie rod is 5 in behind.",))
    got = figures(layout)
    assert got["assumptions"] == ["The outer tie rod is 5 in behind."]
    want = findings(solve(layout, 0.0, 0.0, 75.0))
    assert want
    assert got["findings"] == [
        {"code": f.code, "severity": f.severity, "text": f.text} for f in want
    ]


def test_findings_from_above_stand_among_the_others_worst_first():
    from geometry.steering_arm import swapped_knuckles

    got = figures(swapped_knuckles(ROADSTER))["findings"]
    assert "reverse-ackermann" in [row["code"] for row in got]
    order = [SEVERITIES.index(row["severity"]) for row in got]
    assert order == sorted(order)


def test_lowered_on_springs_is_the_same_linkage_two_and_a_half_inches_up_its_travel():
    """The cut-springs car at ride height against the healthy one at that travel."""
    lowered = figures(CARS["cut-springs"], [0.0], units="mm")["poses"][0]
    high = figures(ROADSTER, [CUT], units="mm")["poses"][0]
    assert lowered["toe"] == pytest.approx(math.degrees(ROADSTER.left.static_toe), abs=1e-9)
    for key in ("kingpin_inclination", "caster"):
        assert lowered[key] == pytest.approx(high[key], abs=1e-3)
    assert lowered["camber"] == pytest.approx(high["camber"], abs=1e-2)
    assert lowered["roll_center"]["up"] == pytest.approx(high["roll_center"]["up"], abs=0.1)
