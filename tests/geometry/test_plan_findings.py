"""Findings on the steering from above: each car here is built to have one fault."""

from dataclasses import replace

import numpy as np
import pytest

from geometry.finding_checks.wording import Wording
from geometry.layout import (
    LOWER_BALL,
    LOWER_INNER,
    TIE_INNER,
    TIE_OUTER,
    UPPER_BALL,
    UPPER_INNER,
    WHEEL_CENTER,
    Layout,
    Point,
    RelayRod,
    Side,
    Tire,
)
from geometry.plan_findings import plan_findings
from geometry.plan_view import plan_of
from geometry.solution import solve
from geometry.steering_arm import swapped_knuckles

ARMS = Side(
    {
        LOWER_INNER: (230, 200),
        LOWER_BALL: (620, 190, 5),
        UPPER_INNER: (330, 410),
        UPPER_BALL: (580, 440, -10),
        TIE_OUTER: (565, 350, -127),
        TIE_INNER: (300, 330.3, -127),
        WHEEL_CENTER: (700, 310),
    },
    Tire(310),
)
SOUND = Layout(ARMS, wheelbase=2800.0)
RELAY = RelayRod((260, 300, -220), (250, 330, -100), (260, 300, -220), (250, 330, -100))


def codes(layout: Layout) -> list[str]:
    return [finding.code for finding in plan_findings(plan_of(layout))]


@pytest.mark.parametrize(
    "layout", [SOUND, replace(SOUND, wheelbase=None), SOUND.unlinked()], ids=str
)
def test_a_sound_steering_has_none(layout: Layout) -> None:
    assert codes(layout) == []


@pytest.mark.parametrize("units", ["in", "mm"])
def test_knuckles_on_the_wrong_side_are_found_and_the_cure_cures(units: str) -> None:
    swapped = swapped_knuckles(replace(SOUND, units=units))
    (finding,) = plan_findings(plan_of(swapped))
    assert finding.code == "reverse-ackermann"
    assert "ahead of the axle must lean outboard" in finding.detail
    assert finding.cure is not None
    assert "outboard" in finding.cure.text and "don't heat or bend" in finding.cure.text
    cured = finding.cure.applied(swapped)
    assert codes(cured) == []
    # What it does to Ackermann and to bump steer is told in the same breath.
    words, text = Wording(swapped.units), finding.cure.text
    before, after = (
        words.fine(2.0 * 310.0 * float(np.ptp(solve(car).left.sweep.toe)))
        for car in (swapped, cured)
    )
    assert f"toe range {before} becomes {after}" in text
    percent = plan_of(cured).percent_at(float(np.radians(20.0)))
    assert percent is not None and f"becomes {round(percent)} %" in text


def test_arms_behind_the_axle_that_lean_outboard_are_found() -> None:
    layout = replace(SOUND, left=ARMS.moved(TIE_OUTER, Point(620, 350, -127)))
    (finding,) = plan_findings(plan_of(layout))
    assert finding.code == "reverse-ackermann"
    assert "behind the axle must lean inboard" in finding.detail
    assert finding.cure is not None and "inboard" in finding.cure.text


def test_a_tie_rod_that_comes_into_line_before_the_rack_stops_is_wrong() -> None:
    short = ARMS.moved(TIE_OUTER, Point(590, 350, -60)).moved(TIE_INNER, Point(300, 330, -60))
    car = replace(SOUND, left=short, tolerances={"rack travel": 75.0})
    found = plan_findings(plan_of(car))
    dead = [finding for finding in found if finding.code == "steering-dead-center"]
    assert len(dead) == 2 and dead[0].severity == "wrong"
    assert "into line with its steering arm" in dead[0].headline
    assert dead[0].tolerance == 75.0 and dead[0].figure is not None and dead[0].figure < 75.0
    # Where nobody measured the rack's travel it is only a warning.
    assumed = plan_findings(plan_of(replace(car, tolerances={})))
    assert {f.severity for f in assumed if f.code == "steering-dead-center"} == {"warn"}


def test_unlike_arms_turn_unevenly() -> None:
    bent = replace(SOUND, right=ARMS.moved(TIE_OUTER, Point(570, 350, -105)))
    assert "toe-out-uneven" in codes(bent)


def test_a_pitman_arm_without_length_is_said_in_a_sentence() -> None:
    stuck = replace(SOUND, steering=replace(RELAY, pitman_end=Point(260, 330, -220)))
    (finding,) = plan_findings(plan_of(stuck))
    assert finding.code == "steering-stuck" and "no length" in finding.headline
    short = replace(SOUND, steering=RELAY, tolerances={"rack travel": 50.0})
    assert codes(short) == []
