"""Signs as standards and manuals have them; camber shims; tire sizes."""

from __future__ import annotations

import math

import numpy as np
import pytest

from geometry import layout as names
from geometry.ackermann import steer_of
from geometry.corner import Corner
from geometry.layout import Layout, Point, Side, Tire
from geometry.solution import solve
from geometry.stance import aligned
from geometry.tires import parse_tire_size
from tests.outside.witness import witness

pytestmark = pytest.mark.outside

HIGH = 13.75 * 25.4


def upright(
    caster: float = 0.0, inclination: float = 0.0, camber: float = 0.0, toe: float = 0.0
) -> Side:
    """Level arms and a kingpin 13.75 in high over the lower ball joint, leaned as asked, rad."""
    low = Point(600.0, 180.0)
    high = Point(
        low.over - HIGH * math.tan(inclination), low.up + HIGH, low.fore - HIGH * math.tan(caster)
    )
    return Side(
        {
            names.LOWER_INNER: low._replace(over=200.0),
            names.LOWER_BALL: low,
            names.UPPER_INNER: high._replace(over=high.over - 250.0),
            names.UPPER_BALL: high,
            names.TIE_INNER: Point(250.0, 260.0, -120.0),
            names.TIE_OUTER: Point(590.0, 265.0, -120.0),
            names.WHEEL_CENTER: Point(690.0, 310.0),
        },
        Tire(310.0),
        static_camber=camber,
        static_toe=toe,
    )


def test_signs_of_the_wheel_and_of_its_kingpin() -> None:
    one = math.radians(1.0)
    pose = Corner.of(upright(5 * one, 8 * one, camber=one, toe=one)).poses(0.0)
    iso = "ISO 8855:2011, cl. 7.1.6"
    manual = "US Army TM 9-2320-266-34, para 7-17"
    # Toe-in: the wheel's front edge nearer the centerline, its axle outboard end ahead.
    assert pose.spin_axis[0, 0] > 0.0
    witness(iso, "toe-in of 1°, degrees", 1.0, math.degrees(pose.toe[0]), 1e-9)
    # Top outboard: the axle's outboard end lower.
    assert pose.spin_axis[2, 0] < 0.0
    witness(manual, "camber of 1° top outboard", 1.0, math.degrees(pose.camber[0]), 1e-9)
    witness(manual, "caster of 5° top rearward", 5.0, math.degrees(pose.caster[0]), 1e-9)
    lean = math.degrees(pose.kingpin_inclination[0])
    witness("common practice, no source", "kingpin leaning 8° inboard", 8.0, lean, 1e-9)


def test_a_left_turn_steers_both_wheels_positive() -> None:
    # Tie rods behind the axle: the rack to the car's right turns the wheels to the left.
    source = "ISO 8855:2011, cl. 7.1.8"
    for rack, words, expected in ((-20.0, "left", 1.0), (20.0, "right", -1.0)):
        solution = solve(Layout(upright()), rack=rack)
        for side in names.SIDES:
            pose = solution.sides[side].now
            # To the car's left the wheel's front goes outboard on the left, inboard on the right.
            heading_left = -float(pose.spin_axis[0, 0]) * (1.0 if side == "left" else -1.0)
            assert math.copysign(1.0, heading_left) == expected
            steer = math.copysign(1.0, float(steer_of(side, pose.toe)[0]))
            witness(source, f"{side} wheel turned to the {words}: sign", expected, steer, 0.0)


def test_scrub_radius_is_positive_with_the_axis_inboard_of_the_tire() -> None:
    # The kingpin stands upright at 600, the tire's middle at 690 mm.
    source = "H. Heisler, Advanced Vehicle Technology, 10.1.5"
    got = Corner.of(upright()).poses(0.0).scrub_radius[0]
    witness(source, "axis 90 mm inboard of the contact: scrub radius, mm", 90.0, got, 1e-9)
    # Leaned so that the axis meets the floor 10 mm outboard of the tire.
    outward = math.atan(100.0 / 180.0)
    got = Corner.of(upright(inclination=outward)).poses(0.0).scrub_radius[0]
    witness(source, "axis 10 mm outboard of it: scrub radius, mm", -10.0, got, 1e-9)


def test_camber_shims_as_a_manual_has_them() -> None:
    # 0.12 in of shim at both upper-arm brackets makes 0.5 degree: a ball-joint height of
    # 13.75 in, a plausibility check. Equal shims leave the caster as it was.
    source = "US Army TM 9-2320-280-34, para 20-4b"
    before = Layout(upright(math.radians(3.0)))
    after = aligned(before, math.radians(0.5))
    moved = after.left[names.UPPER_INNER].over - before.left[names.UPPER_INNER].over
    witness(source, "shim for +0.5° of camber, in", 0.12, moved / 25.4, 0.001)
    pose = Corner.of(after.left).poses(0.0)
    witness(source, "camber gained, degrees", 0.5, math.degrees(pose.camber[0]), 1e-9)
    change = math.degrees(pose.caster[0]) - 3.0
    witness(source, "caster gained, degrees", 0.0, change, 0.05)


@pytest.mark.parametrize(
    ("size", "diameter", "allowed", "source"),
    [
        ("205/55R16", 631.9, 0.05, "Designation's own meaning (seen)"),
        ("205/65R15", 647.0, 0.55, "Designation's own meaning (seen)"),
        ("155/80R13", 578.0, 1.5, "ETRTO Standards Manual (from memory)"),
        ("195/65R15", 635.0, 1.5, "ETRTO Standards Manual (from memory)"),
        ("225/45R17", 634.0, 1.5, "ETRTO Standards Manual (from memory)"),
        ("235/75R15", 733.0, 1.5, "ETRTO Standards Manual (from memory)"),
        ("265/70R16", 778.0, 1.5, "ETRTO Standards Manual (from memory)"),
    ],
)
def test_tire_sizes(size: str, diameter: float, allowed: float, source: str) -> None:
    read = parse_tire_size(size)
    witness(source, f"{size}: overall diameter, mm", diameter, read.diameter, allowed)
    assert np.isclose(read.width, float(size[:3]))
