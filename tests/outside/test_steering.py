"""Steering in plan against published figures and an exact mechanism.

Where a source was only remembered, it says so beside the check.
"""

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy.optimize import brentq

from geometry.ackermann import ideal_inner, ideal_outer, percent_ackermann
from geometry.corner import Corner
from geometry.layout import (
    LOWER_BALL,
    LOWER_INNER,
    MM_PER_INCH,
    TIE_INNER,
    TIE_OUTER,
    UPPER_BALL,
    UPPER_INNER,
    WHEEL_CENTER,
    Layout,
    Point,
    Side,
    Tire,
)
from geometry.plan_view import TOE_OUT_ANGLE, plan_of
from geometry.solution import solve
from geometry.steering_arm import arm_for_percent, string_check
from tests.outside.witness import witness

pytestmark = pytest.mark.outside

SPACING = 56.0 * MM_PER_INCH
BASE = 112.0 * MM_PER_INCH
ARM = 6.0 * MM_PER_INCH


def test_ackermann_condition_as_worked_in_textbooks() -> None:
    # From memory: R. N. Jazar, Vehicle Dynamics (2008), ch. 7: wheelbase 103.1, track 61.6,
    # inner 0.209 rad gives outer 0.186 rad.
    jazar = "R. N. Jazar, Vehicle Dynamics, ch. 7 (from memory)"
    outer = float(ideal_outer(0.209, 61.6 / 103.1))
    witness(jazar, "inner wheel at 0.209: outer, rad", 0.186, outer, 5e-4)
    # From memory: S. S. Rattan, Theory of Machines: ratio 0.44, inner 18 gives outer 15.9.
    outer = np.degrees(ideal_outer(np.radians(18.0), 0.44))
    rattan = "S. S. Rattan, Theory of Machines (from memory)"
    witness(rattan, "inner wheel at 18°: outer, degrees", 15.9, float(outer), 0.05)


def test_ideal_toe_out_on_turns() -> None:
    # US Army TM 9-8000, para 33-17: the inner wheel's excess with the outer at 20 degrees.
    # cot(outer) - cot(inner) = spacing / wheelbase; spacing 56, wheelbase 112 gives 23.986.
    assert pytest.approx(np.radians(20.0)) == TOE_OUT_ANGLE
    inner = np.degrees(ideal_inner(TOE_OUT_ANGLE, 56.0 / 112.0))
    manual = "US Army TM 9-8000, para 33-17"
    witness(manual, "outer wheel at 20°: ideal inner, degrees", 23.986, float(inner), 5e-4)


def test_davis_gear_meets_the_condition_at_every_angle() -> None:
    # Davis's steering gear is exact when tan(arm angle) = spacing / (2 wheelbase). Its arms
    # end on one bar that slides straight across the car, a fixed distance from the axle.
    ratio, depth = 0.5, 1.0
    lean = ratio / 2.0
    slide = np.linspace(0.02, 0.6, 30) * depth
    inner = np.arctan(lean + slide / depth) - np.arctan(lean)
    outer = np.arctan(lean) - np.arctan(lean - slide / depth)
    larger, smaller = np.maximum(inner, outer), np.minimum(inner, outer)
    percent = percent_ackermann(larger, smaller, ratio)
    davis = "Davis's steering gear, exact"
    witness(davis, "least percent Ackermann of 30 places", 100.0, float(percent.min()), 1e-9)
    witness(davis, "most percent Ackermann of 30 places", 100.0, float(percent.max()), 1e-9)


def upright_corner(lean: float, tie_inner: Point | None = None) -> Side:
    """Upright kingpins 56 in apart, 6 in arms behind the axle leaning in by ``lean`` rad."""
    half = SPACING / 2.0
    end = Point(half - ARM * np.sin(lean), 300.0, -ARM * np.cos(lean))
    return Side(
        {
            LOWER_INNER: (half - 350.0, 200.0),
            LOWER_BALL: (half, 200.0),
            UPPER_INNER: (half - 350.0, 400.0),
            UPPER_BALL: (half, 400.0),
            TIE_OUTER: end,
            # One piece: the rod's inner end is the other side's arm end.
            TIE_INNER: tie_inner or Point(-end.over, end.up, end.fore),
            WHEEL_CENTER: (half + 60.0, 300.0),
        },
        Tire(300.0),
    )


def one_piece_rod(
    side: Side, pushed: NDArray[np.float64]
) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Both wheels' turned angles (inner, outer), (n,) rad, of a car with a one-piece tie rod.

    Both corners are the spatial solver's: the right one is steered into a left turn by
    ``pushed`` (n,) mm of some rod, and the left one's tie rod then ends on the right one's arm.
    """
    half = SPACING / 2.0
    steered = Corner.of(side.moved(TIE_INNER, Point(half - 400.0, 300.0, -ARM)))
    right = steered.poses(0.0, np.stack([0.0 * pushed, pushed, 0.0 * pushed]))
    end = right.tie_outer * np.array([[1.0], [-1.0], [1.0]])
    corner = Corner.of(side)
    left = corner.poses(0.0, end - corner.tie_inner)
    assert right.assembles.all()
    assert left.assembles.all()
    return -left.toe, right.toe


def test_a_one_piece_tie_rod_on_the_string_has_little_more_than_half_of_ackermann() -> None:
    # The string check is common practice. For kingpin spacing 56, wheelbase 112 and a 6 in
    # arm behind the axle with a one-piece tie rod it leaves 52.7 percent near straight ahead,
    # and more with lock.
    lean = np.arctan2(SPACING / 2.0, BASE)
    side = upright_corner(lean)
    check = string_check(Layout(side, wheelbase=BASE), "left")
    assert check is not None
    assert check.off == pytest.approx(0.0, abs=1e-9)
    assert check.arm.length == pytest.approx(ARM)
    inner, outer = one_piece_rod(side, np.array([1.0, 2.0, 25.0, 50.0, 75.0]))
    percent = percent_ackermann(inner, outer, SPACING / BASE)
    near = percent[0] - outer[0] * (percent[1] - percent[0]) / (outer[1] - outer[0])
    trapezium = "Trapezium of a one-piece tie rod, worked on its own"
    witness(trapezium, "percent Ackermann near straight ahead", 52.7, float(near), 0.05)
    assert np.all(np.diff(percent) > 0.0)
    assert outer[-1] > np.radians(25.0)


def test_a_one_piece_tie_rod_agrees_with_the_trapezium_solved_on_its_own() -> None:
    """The same trapezium as four bars in a plane, its rod's length kept by a root finder."""
    lean = np.arctan2(SPACING / 2.0, BASE)
    inner, outer = one_piece_rod(upright_corner(lean), np.array([10.0, 40.0, 70.0]))

    def end(center: float, sign: float, turned: float) -> NDArray[np.float64]:
        start = -np.pi / 2.0 - sign * lean
        return np.array([center, 0.0]) + ARM * np.array(
            [np.cos(start + turned), np.sin(start + turned)]
        )

    # Plane axes: first to the right, second forward; left turns are counterclockwise.
    half = SPACING / 2.0
    rod = np.linalg.norm(end(half, 1.0, 0.0) - end(-half, -1.0, 0.0))
    for out, found in zip(outer, inner, strict=True):

        def longer(turned: float, out: float = float(out)) -> float:
            gap = end(half, 1.0, out) - end(-half, -1.0, turned)
            return float(np.linalg.norm(gap) - rod)

        expected = brentq(longer, 0.0, 1.2, xtol=1e-14)
        words = f"outer wheel at {np.degrees(out):.1f}°: inner, rad"
        witness("Four bars in a plane, by a root finder", words, expected, float(found), 1e-10)


def test_string_check_lean_is_davis_s_arm_angle() -> None:
    # Davis: tan(arm angle) = spacing / (2 wheelbase); with upright kingpins on the axle line
    # the string to the middle of the rear axle makes the same angle.
    check = string_check(Layout(upright_corner(0.0), wheelbase=BASE), "left")
    assert check is not None
    lean = float(np.tan(-check.needed.lean))
    witness("Davis's steering gear, exact", "tangent of the arm's lean", 0.25, lean, 1e-12)


def test_an_arm_cut_for_full_ackermann_shows_the_manual_s_toe_out() -> None:
    # US Army TM 9-8000, para 33-17 with the Ackermann condition: an outer wheel at 20 degrees
    # beside an inner one at 23.986 is 100 percent, by the whole chain of the program.
    half = SPACING / 2.0
    rack = Point(half - 400.0, 300.0, -ARM - 40.0)
    layout = Layout(upright_corner(0.1, rack), wheelbase=BASE)
    wanted = float(np.radians(23.986))
    moved = arm_for_percent(solve(layout), plan_of(layout), 100.0, wanted)
    plan = plan_of(moved.layout)
    assert plan.spacing == pytest.approx(SPACING)
    toe_out = plan.toe_out["left"]
    assert toe_out is not None
    manual, inner = "US Army TM 9-8000, para 33-17", float(np.degrees(toe_out.inner))
    witness(manual, "arm cut for it: inner wheel with the outer at 20°", 23.986, inner, 1e-3)
    assert np.degrees(toe_out.excess) == pytest.approx(3.986, abs=1e-3)
