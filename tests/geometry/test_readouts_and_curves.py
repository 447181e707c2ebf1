"""Readouts and curves: each figure a second way, its text, and its table."""

from __future__ import annotations

import csv
import io
import math

import numpy as np
import pytest

from geometry import layout as names
from geometry.curves import BY_KEY as CURVES_BY_KEY
from geometry.curves import CURVES, axis_label, curves_to_csv, in_units, sweep_words
from geometry.layout import SIDES
from geometry.readouts import BY_KEY, READOUTS, change_text, format_readout, unit_words
from geometry.solution import solve
from geometry.tolerances import tolerance
from geometry.zones import rack_zone_of
from tests.sample_cars import CARS, DEGENERATE, PARALLEL_EQUAL, ROADSTER, STRUT_CAR, UNEQUAL_SIDES


def read(key: str, solution: object, side: str = "left") -> float | None:
    return BY_KEY[key].read(solution, side)  # type: ignore[arg-type]


def test_readouts_against_the_wheel_s_own_motion() -> None:
    """Bump steer and camber gain as slopes from two nearby solves."""
    for car, at in ((ROADSTER, 20.0), (STRUT_CAR, 20.0), (ROADSTER, -74.6), (ROADSTER, 85.0)):
        solution = solve(car, travel=at)
        low, high = solve(car, travel=at - 0.1).left.now, solve(car, travel=at + 0.1).left.now
        diameter = 2.0 * car.left.tire.radius
        toe = diameter * float(np.sin(high.toe[0]) - np.sin(low.toe[0])) / 0.2
        assert read("bump steer", solution) == pytest.approx(toe, abs=2e-5)
        # The swing arm turns the wheel about the instant center, steering aside.
        gain = float(high.camber[0] - low.camber[0]) / 0.2
        assert read("camber gain", solution) == pytest.approx(gain, abs=3e-5)


def test_the_instant_center_lies_on_both_arm_lines() -> None:
    solution = solve(ROADSTER)
    over, up = read("instant center over", solution), read("instant center up", solution)
    for arm in ("lower", "upper"):
        pivot, ball = ROADSTER.left[f"{arm} inner pivot"], ROADSTER.left[f"{arm} ball joint"]
        # In the wheel center's plane an arm that turns about a level axis shows as it is.
        share = (over - pivot.over) / (ball.over - pivot.over)
        assert pivot.up + share * (ball.up - pivot.up) == pytest.approx(up, abs=1e-6)
    contact = solution.left.now.contact[:, 0]
    assert read("swing arm", solution) == pytest.approx(contact[1] - over)
    height = contact[2] + (up - contact[2]) * contact[1] / (contact[1] - over)
    assert read("roll center", solution) == pytest.approx(height - contact[2])


def test_the_roll_center_s_place_reads_from_either_side() -> None:
    solution = solve(UNEQUAL_SIDES)
    left, right = (read("roll center over", solution, side) for side in SIDES)
    assert left is not None and left == pytest.approx(-(right or 0.0))
    assert left != 0.0


def test_lengths_toe_and_track() -> None:
    solution = solve(ROADSTER, travel=30.0)
    side, now = ROADSTER.left, solution.left.now
    rod = math.dist(side[names.TIE_INNER], side[names.TIE_OUTER])
    assert read("tie rod", solution) == pytest.approx(rod)
    assert read("track", solution) == pytest.approx(2.0 * float(now.contact[1, 0]))
    assert read("toe", solution) == pytest.approx(float(now.toe[0]))
    toe = 2 * side.tire.radius * math.sin(float(now.toe[0]))
    assert read("toe length", solution) == pytest.approx(toe)
    swept = 2 * side.tire.radius * np.sin(solution.left.sweep.toe)
    assert read("toe range", solution) == pytest.approx(float(np.ptp(swept)))
    assert read("strut length", solution) is None
    strut = solve(STRUT_CAR)
    length = math.dist(STRUT_CAR.left[names.STRUT_TOP], STRUT_CAR.left[names.STRUT_LOWER])
    assert read("strut length", strut) == pytest.approx(length)
    assert (read("strut length", solve(STRUT_CAR, travel=30.0)) or 0.0) < length


def test_what_there_is_none_of_reads_none_with_words_for_it() -> None:
    parallel = solve(PARALLEL_EQUAL)
    assert read("instant center over", parallel) is None
    assert read("swing arm", parallel) is None
    assert "parallel" in BY_KEY["swing arm"].missing
    nothing = solve(DEGENERATE["everything at the origin"])
    for readout in READOUTS:
        value = readout.read(nothing, "left")
        assert value is None or readout.key in ("tie rod", "strut length")
        assert readout.missing.endswith(".")
    far = solve(ROADSTER, travel=900.0)
    assert read("toe range", far) is not None
    assert read("camber", far) is None


@pytest.mark.parametrize(
    ("unit", "value", "inches", "metric"),
    [
        ("length", 233.3625, "9 3/16", "233.4"),
        ("fine length", 2.54, "0.100", "2.54"),
        ("fine length", -0.0001, "0.000", "0.00"),
        ("angle", math.radians(-0.5), "-0.5°", "-0.5°"),
        ("angle per travel", math.radians(0.75) / 25.4, "+0.75°", "+0.74°"),
        ("angle per travel", -1e-9, "0.00°", "0.00°"),
        ("length per travel", 0.01, "+0.010", "+0.25"),
        ("length per travel", -0.01, "-0.010", "-0.25"),
        ("length", None, "–", "–"),
    ],
)
def test_figures_as_they_stand_on_the_screen(
    unit: str, value: float | None, inches: str, metric: str
) -> None:
    assert format_readout(unit, value, "in") == inches  # type: ignore[arg-type]
    assert format_readout(unit, value, "mm") == metric  # type: ignore[arg-type]


def test_units_stand_beside_their_labels() -> None:
    assert unit_words("length", "in") == "in"
    assert unit_words("angle", "mm") == ""
    assert unit_words("angle per travel", "mm") == "per 25 mm"
    assert unit_words("length per travel", "in") == "in per in"


def test_a_change_has_its_sign_or_is_none() -> None:
    assert change_text("length", 25.4, 50.8, "in") == "+1"
    assert change_text("length", 50.8, 25.4, "in") == "-1"
    assert change_text("length", 25.4, 25.5, "in") == "–"
    assert change_text("angle", None, 1.0, "in") == change_text("angle", 1.0, None, "in") == "–"
    assert change_text("angle", 0.0, math.radians(0.5), "in") == "+0.5°"


def test_curves_are_the_poses_of_the_sweep() -> None:
    solution = solve(ROADSTER, travel=10.0, rack=5.0, span=60.0)
    for k in (0, 17, 40, 80):
        travel = float(solution.left.sweep.travel[k])
        one = solve(ROADSTER, travel, 5.0).right
        for key in ("camber", "caster", "kingpin inclination", "scrub radius",
                    "mechanical trail"):  # fmt: skip
            expected = float(getattr(one.now, key.replace(" ", "_"))[0])
            assert CURVES_BY_KEY[key].read(solution, "right")[k] == pytest.approx(expected)
        toe = 2 * ROADSTER.left.tire.radius * math.sin(float(one.now.toe[0]))
        assert CURVES_BY_KEY["toe"].read(solution, "right")[k] == pytest.approx(toe, abs=1e-9)
        center = solve(ROADSTER, travel, 5.0).roll_center
        assert center is not None
        assert CURVES_BY_KEY["roll center"].read(solution, "left")[k] == pytest.approx(center[1])
        track = float(one.now.half_track[0] - one.ride.half_track[0])
        assert CURVES_BY_KEY["track"].read(solution, "right")[k] == pytest.approx(track, abs=1e-9)


def test_the_toe_band_is_half_its_limit_each_way() -> None:
    bands = {curve.key: curve.band for curve in CURVES if curve.band is not None}
    assert bands["toe"](solve(ROADSTER)) == 0.5 * tolerance(ROADSTER, "toe range")


def test_units_and_labels_of_curves() -> None:
    assert in_units("length", np.array([25.4]), "in") == pytest.approx([1.0])
    assert in_units("length", np.array([25.4]), "mm") == pytest.approx([25.4])
    assert in_units("angle", np.array([math.pi]), "in") == pytest.approx([180.0])
    assert axis_label(CURVES_BY_KEY["toe"], "in") == "Toe, in"
    assert axis_label(CURVES_BY_KEY["camber"], "mm") == "Camber, °"


@pytest.mark.parametrize("name", ["healthy-roadster", "strut-hatch"])
def test_the_table_of_curves_reads_back_in_the_layout_s_units(name: str) -> None:
    solution = solve(CARS[name], span=300.0)
    table = list(csv.DictReader(io.StringIO(curves_to_csv(solution))))
    units = CARS[name].units
    scale = 25.4 if units == "in" else 1.0
    assert len(table) == 81
    assert "-0.0" not in {cell for row in table for cell in row.values()}
    for k, row in enumerate(table):
        travel = float(row[f"travel ({units})"])
        assert travel == pytest.approx(solution.left.sweep.travel[k] / scale)
        camber = row["camber left (deg)"]
        if bool(solution.left.sweep.assembles[k]):
            assert math.radians(float(camber)) == pytest.approx(solution.left.sweep.camber[k])
        else:
            assert camber == ""
    assert not solution.left.sweep.assembles.all()


def test_steered_toe_change_is_toe_against_ride_height_at_that_rack() -> None:
    """Straight ahead nothing but the static toe is between the two; steered, the steering."""
    car = CARS["rack-set-low"]
    for rack in (0.0, 25.0, -50.0):
        solution = solve(car, rack=rack, span=60.0)
        for side in SIDES:
            change = CURVES_BY_KEY["toe change"].read(solution, side)
            ride = float(solve(car, 0.0, rack).sides[side].now.toe[0])
            for k in (0, 23, 80):
                travel = float(solution.left.sweep.travel[k])
                toe = float(solve(car, travel, rack).sides[side].now.toe[0])
                expected = 2.0 * car.side(side).tire.radius * math.sin(toe - ride)
                assert change[k] == pytest.approx(expected, abs=1e-9)


def test_a_rack_good_straight_ahead_can_be_out_of_its_zone_off_center() -> None:
    """What the toe change through the travel says steered, the steered zone says too."""
    car = CARS["healthy-roadster"]
    outside = set()
    for rack in (0.0, 25.0, 50.0):
        solution = solve(car, rack=rack)
        for side in SIDES:
            change = CURVES_BY_KEY["toe change"].read(solution, side)
            kept = float(np.ptp(change)) <= tolerance(car, "toe range")
            assert rack_zone_of(solution, side, full=True, rack=rack).holds_present == kept
            if not kept:
                outside.add(rack)
    assert 0.0 not in outside and outside


def test_curves_say_what_they_go_through() -> None:
    inches = solve(CARS["healthy-roadster"], rack=-25.4, span=76.2)
    assert sweep_words(inches) == "Steering 1 in to the right, 3 in of bump and of droop"
    assert sweep_words(solve(CARS["healthy-roadster"], span=76.2)).startswith("Steering straight,")
    assert "rolled" in sweep_words(inches, 0.02)
