"""A-arm corners as four-bar linkages, whose figures textbooks and theorems give."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest

from geometry.corner import Corner
from geometry.front_view import front_view
from geometry.inner_pivot import curvature_center
from geometry.layout import (
    LOWER_BALL,
    LOWER_INNER,
    TIE_INNER,
    TIE_OUTER,
    UPPER_BALL,
    UPPER_INNER,
    WHEEL_CENTER,
    Side,
    Tire,
)
from tests.outside.witness import witness

pytestmark = pytest.mark.outside

XY = tuple[float, float]

# MathGroup Archive, Feb 2006, msg00373, "[mg64453] Re: Solve or Reduce?", table by David
# Park: lower arm 13 from (0, 0), upper arm 8 from (5, 7), 7 between their ends. By the lower
# arm's angle: the two roots for the upper arm's, sorted (so that they change places at 60).
PARK = {
    0: (0, 277.628), 5: (8.14157, 279.009), 10: (16.3816, 281.034), 15: (24.8218, 283.798),
    20: (33.5778, 287.445), 25: (42.7897, 292.171), 30: (52.6316, 298.233),
    35: (63.3125, 305.928), 40: (75.0545, 315.54), 45: (88.0132, 327.201),
    50: (102.111, 340.683), 55: (116.839, 355.264), 60: (9.92425, 131.266),
    65: (23.8027, 144.4), 70: (36.4951, 155.625), 75: (47.9915, 164.805),
    80: (58.473, 172.123), 85: (68.1628, 177.873), 90: (77.2632, 182.348),
}  # fmt: skip


def four_bar(
    lower: XY, low_end: XY, upper: XY, high_end: XY, scale: float, arm: XY | None = None
) -> Corner:
    """A corner whose front view is a four-bar; the steering arm ends at ``arm``, 100 mm back."""

    def at(place: XY, fore: float = 0.0) -> tuple[float, float, float]:
        return scale * place[0], scale * place[1], fore

    end = arm or (low_end[0], 0.5 * (low_end[1] + high_end[1]))
    return Corner.of(
        Side(
            {
                LOWER_INNER: at(lower),
                LOWER_BALL: at(low_end),
                UPPER_INNER: at(upper),
                UPPER_BALL: at(high_end),
                TIE_INNER: at((end[0] - 10.0, end[1]), -100.0),
                TIE_OUTER: at(end, -100.0),
                WHEEL_CENTER: at((low_end[0] + 3.0, end[1])),
            },
            Tire(300.0),
        )
    )


def test_both_assemblies_of_a_double_arm_linkage_stay_themselves() -> None:
    source = "MathGroup Archive, Feb 2006, msg00373"
    rooted = np.radians(PARK[0][1])
    first = [v[0] if a < 60 else v[1] for a, v in PARK.items()]
    second = [v[1] if a < 60 else v[0] for a, v in PARK.items()]
    for name, start, roots in (
        ("upper arm built at 0°", 0.0, first),
        ("upper arm built at 277.628°", rooted, second),
    ):
        high = (5.0 + 8.0 * float(np.cos(start)), 7.0 + 8.0 * float(np.sin(start)))
        corner = four_bar((0, 0), (13, 0), (5, 7), high, 10.0)
        swing = np.radians([*PARK])
        upper = corner.guide.upper(corner.lower_ball_at(swing))[0]
        angle = np.degrees(np.arctan2(upper[2] - 70.0, upper[1] - 50.0))
        off = (angle - roots + 180.0) % 360.0 - 180.0
        for a, root, miss in zip(PARK, roots, off, strict=True):
            # The second assembly is built from an angle that is itself printed to 0.001 degree.
            allowed = 0.0006 if start == 0.0 else 0.003
            witness(source, f"{name}, lower arm at {a}°, degrees", root, root + miss, allowed)


def test_position_of_a_four_bar_in_a_textbook() -> None:
    source = "R. L. Norton, Design of Machinery, ch. 4 (from memory)"
    crank = np.radians(40.0)
    for words, coupler, rocker in (("open", 20.298, 57.325), ("crossed", -60.98, -98.01)):
        low = 40.0 * np.array([np.cos(crank), np.sin(crank)])
        turned = np.radians(coupler)
        built = low + 120.0 * np.array([np.cos(turned), np.sin(turned)])
        # Built at the printed figure to a hundredth, the exact rocker length settles the rest.
        fit = np.hypot(built[0] - 100.0, built[1])
        witness(source, f"{words}: rocker's length from the printed coupler angle", 80.0, fit, 0.01)
        corner = four_bar((0, 0), tuple(low), (100, 0), tuple(built), 1.0)
        upper = corner.guide.upper(corner.lower_ball_at(np.zeros(1)))[0][:, 0]
        angle = np.degrees(np.arctan2(upper[2], upper[1] - 100.0))
        witness(source, f"{words}: rocker, degrees", rocker, angle, 0.02)


def test_instant_centers_in_whole_numbers() -> None:
    source = "Aronhold and Kennedy's theorem, exact"
    for bars, center in (
        (((0, 0), (3, 4), (12, 0), (12, 8)), (12.0, 16.0)),
        (((0, 0), (3, 4), (10, 0), (7, 4)), (5.0, 20.0 / 3.0)),
    ):
        corner = four_bar(*bars, 100.0)
        view = front_view(corner, corner.poses(0.0))
        for axis, expected, got in zip(
            ("over", "up"), center, view.instant_center[:2, 0] / 100.0, strict=True
        ):
            witness(source, f"instant center {axis} of {bars}", expected, got, 1e-9)


def test_rates_of_the_bars_are_those_of_kennedy_s_theorem() -> None:
    source = "Aronhold and Kennedy's theorem, exact"
    for bars, coupler, rocker in (
        (((0, 0), (3, 4), (12, 0), (12, 8)), -1 / 3, 1 / 3),
        (((0, 0), (3, 4), (10, 0), (7, 4)), -3 / 2, 1.0),
    ):
        corner = four_bar(*bars, 100.0)
        step = 1e-5
        lower = corner.lower_ball_at(np.array([-step, step]))
        upper = corner.guide.upper(lower)[0]
        pivot = 100.0 * np.array(bars[2], dtype=float)
        turned = np.arctan2(upper[2] - pivot[1], upper[1] - pivot[0])
        leaned = np.arctan2((upper - lower)[2], (upper - lower)[1])
        rates = [float(np.diff(angle)[0]) / (2 * step) for angle in (turned, leaned)]
        witness(source, f"rocker per crank of {bars}", rocker, rates[0], 1e-8)
        witness(source, f"coupler per crank of {bars}", coupler, rates[1], 1e-8)


def test_centers_of_curvature_in_whole_numbers() -> None:
    kennedy = ((0, 0), (3, 4), (12, 0), (12, 8))
    bobillier = "Theorems of Bobillier and Euler-Savary, exact"
    for source, bars, arm, center in (
        (bobillier, kennedy, (7, 10), (Fraction(1616, 257), Fraction(11752, 1285))),
        (bobillier, kennedy, (10, 2), (Fraction(265, 34), Fraction(-457, 34))),
        # Ground 4, arms 5, coupler 2, crossed; laid on its side so that the coupler stands up.
        ("Chebyshev's straight-line linkage, exact", ((0, 0), (4, -3), (0, -4), (4, -1)), (4, -2),
         (Fraction(36), Fraction(-2))),
    ):  # fmt: skip
        found = curvature_center(four_bar(*bars, 100.0, arm)) / 100.0
        for axis, expected, got in zip(("over", "up"), center, found, strict=True):
            witness(source, f"path of {arm}: its center's {axis}", float(expected), got, 1e-5)


def test_curvature_where_the_arms_are_parallel() -> None:
    source = "Parallel arms, exact"
    for up, expected in ((0.10, Fraction(7, 26)), (0.12, Fraction(35, 136))):
        for over in (0.2, 0.33, 0.5):
            corner = four_bar((0, 0), (0.35, 0), (0.10, 0.25), (0.30, 0.25), 1000.0, (over, up))
            center = curvature_center(corner) / 1000.0
            got = np.hypot(center[0] - over, center[1] - up)
            words = f"radius of the path at height {up}, over {over}"
            witness(source, words, float(expected), got, 1e-7)
    corner = four_bar((0, 0), (0.35, 0), (0, 0.25), (0.35, 0.25), 1000.0, (0.45, 0.08))
    center = curvature_center(corner) / 1000.0
    got = np.hypot(center[0] - 0.45, center[1] - 0.08)
    witness(source, "equal arms of 0.35: radius of every path", 0.35, got, 1e-7)
