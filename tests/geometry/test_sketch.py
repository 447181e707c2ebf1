"""A front end from nothing: what was wanted is what the solved car has."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from geometry.joints import joint_swings
from geometry.layout import LayoutError, Tire
from geometry.sketch import Brief, sketch
from geometry.solution import solve
from geometry.steering_arm import string_check

BRIEF = Brief(
    tire=Tire(317.5),
    track=1422.4,
    lower_up=170.0,
    upper_up=430.0,
    kingpin_inclination=math.radians(8.0),
    scrub_radius=65.0,
    caster=math.radians(5.0),
    steering_arm=130.0,
    tie_up=255.0,
    frame_half=240.0,
    roll_center=60.0,
    camber_gain=math.radians(0.8) / 25.4,
    wheelbase=2844.8,
    static_camber=math.radians(-0.5),
    static_toe=math.radians(0.05),
)


def test_the_car_has_what_the_brief_wanted():
    made = sketch(BRIEF)
    ride = solve(made.layout).left
    assert ride.ride.half_track[0] == pytest.approx(711.2, abs=1e-6)
    assert ride.ride.contact[2, 0] == pytest.approx(0.0, abs=0.02)
    assert ride.ride.scrub_radius[0] == pytest.approx(65.0, abs=0.2)
    assert np.degrees(ride.ride.kingpin_inclination[0]) == pytest.approx(8.0, abs=1e-9)
    assert np.degrees(ride.ride.caster[0]) == pytest.approx(5.0, abs=1e-9)
    assert solve(made.layout).ride_roll_center[1] == pytest.approx(60.0, abs=0.1)
    assert 1.0 / ride.ride_view.swing_arm[0] == pytest.approx(BRIEF.camber_gain, rel=1e-3)
    assert made.missed == ()
    # Met is only what was wanted; how far the roll center moves is told without a judgment.
    assert [words.split()[0] for words in made.met] == ["Roll", "Camber", "Toe"]
    assert any("roll center moves" in words for words in made.facts)


def test_the_tie_rod_stands_at_its_best_fit():
    made = sketch(BRIEF)
    pivots = solve(made.layout, span=BRIEF.span).left.pivots
    assert pivots.ranges["as is"] == pytest.approx(pivots.ranges["best fit"], rel=1e-6)


def test_the_steering_arm_meets_the_string():
    check = string_check(sketch(BRIEF).layout, "left")
    assert check.off == pytest.approx(0.0, abs=0.5)


def test_a_front_steer_arm_leans_outboard():
    rear = sketch(BRIEF).layout.left["tie rod outer"]
    front = sketch(replace(BRIEF, steering_arm=-130.0)).layout.left["tie rod outer"]
    assert rear.fore < 0.0 < front.fore
    assert front.over > rear.over


@pytest.mark.parametrize(
    ("change", "words"),
    [
        ({"upper_up": 190.0}, "well above"),
        ({"frame_half": 600.0}, "no lower arm fits"),
        ({"camber_gain": 0.0}, "more than nothing"),
        ({"steering_arm": 5.0}, "longer"),
        ({"lower_up": -10.0}, "above the floor"),
        ({"camber_gain": 1.0 / 200.0}, "right at the ball joints"),
        ({"camber_gain": math.nan}, "plain number"),
        ({"frame_half": math.inf}, "plain number"),
        ({"track": 0.0, "frame_half": -900.0}, "more than nothing"),
        ({"tire": Tire(0.0)}, "more than nothing"),
        ({"longest_lower": 60.0}, "shorter than any"),
    ],
)
def test_a_brief_that_contradicts_itself_is_refused_in_words(change, words):
    with pytest.raises(LayoutError, match=words):
        sketch(replace(BRIEF, **change))


def test_a_lower_arm_is_no_longer_than_wanted_and_the_bracket_is_said():
    full = sketch(BRIEF).layout.left
    length = math.dist(full["lower inner pivot"], full["lower ball joint"])
    made = sketch(replace(BRIEF, longest_lower=300.0))
    short = made.layout.left
    assert math.dist(short["lower inner pivot"], short["lower ball joint"]) == pytest.approx(300.0)
    assert any("short of the frame" in said for said in made.missed)
    # Still on the line to the same instant center.
    assert solve(made.layout).ride_roll_center[1] == pytest.approx(60.0, abs=0.1)
    assert sketch(replace(BRIEF, longest_lower=length + 1.0)).layout == sketch(BRIEF).layout


@settings(max_examples=25, deadline=None)
@given(
    st.floats(0.0, 120.0),
    st.floats(0.3, 1.5),
    st.floats(150.0, 300.0),
    st.floats(4.0, 12.0),
    st.floats(200.0, 300.0),
)
def test_any_sensible_brief_is_met_or_said_to_be_missed(center, gain, frame, inclination, tie_up):
    brief = replace(
        BRIEF,
        roll_center=center,
        camber_gain=math.radians(gain) / 25.4,
        frame_half=frame,
        kingpin_inclination=math.radians(inclination),
        tie_up=tie_up,
    )
    try:
        made = sketch(brief)
    except LayoutError as refused:
        reason = str(refused)
    else:
        reason = ""
    if reason:
        assert reason.endswith(".")
        return
    assert solve(made.layout).assembles
    assert not any("nan" in words for words in (*made.met, *made.missed, *made.facts))


def test_a_ball_joint_that_can_not_follow_is_no_choice():
    """Left to itself the search keeps the joints' limit; a place that is asked for is judged."""
    brief = replace(BRIEF, roll_center=38.1, camber_gain=math.radians(1.0) / 25.4)
    limit = math.radians(25.0)

    def swing(made) -> float:
        state = solve(made.layout, span=brief.span).left
        return max(float(j.swing.max()) for j in joint_swings(state.corner, state.sweep)[:2])

    made = sketch(brief)
    assert swing(made) <= limit
    assert not any("swings" in words for words in made.missed)
    ball = made.layout.left["upper ball joint"].over
    short = sketch(replace(brief, upper_frame_half=ball - 130.0))
    assert swing(short) > limit
    assert any("ball joint swings" in words for words in short.missed)
