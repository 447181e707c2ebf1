"""Racks and relay rods: where the inner ends go, and where the steering stops."""

from dataclasses import replace

import numpy as np
import pytest

from geometry.corner import Corner
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
from geometry.steering import (
    DEFAULT_RACK_TRAVEL,
    inner_shifts,
    rack_limits,
    steering_faults,
)

CORNER = Side(
    {
        LOWER_INNER: (230, 200),
        LOWER_BALL: (620, 190, 5),
        UPPER_INNER: (330, 410),
        UPPER_BALL: (580, 440, -10),
        TIE_OUTER: (600, 350, -127),
        TIE_INNER: (300, 330.3, -127),
        WHEEL_CENTER: (700, 310),
    },
    Tire(310),
)
RELAY = RelayRod((260, 300, -220), (250, 330, -100), (260, 300, -220), (250, 330, -100))


def test_a_rack_carries_both_inner_ends_to_the_left() -> None:
    shifts = inner_shifts(Layout(CORNER), np.array([-10.0, 20.0]))
    assert shifts["left"].tolist() == [[0, 0], [-10, 20], [0, 0]]
    assert shifts["right"].tolist() == [[0, 0], [10, -20], [0, 0]]


def test_the_rack_s_own_travel_is_the_stop_unless_the_parts_stop_first() -> None:
    limits = rack_limits(Layout(CORNER))
    assert limits.left == pytest.approx(-limits.right, abs=1e-3)
    assert limits.left > DEFAULT_RACK_TRAVEL == limits.lock_left == -limits.lock_right
    far = rack_limits(Layout(CORNER, tolerances={"rack travel": 300.0}))
    assert far.lock_left == far.left < 300.0
    assert "into line with its steering arm" in far.why_left


@pytest.mark.parametrize("end", ["left", "right"])
def test_the_parts_meet_just_inside_the_limit_and_not_just_outside(end: str) -> None:
    layout = Layout(CORNER, steering=RELAY)
    limits = rack_limits(layout)
    limit = limits.left if end == "left" else limits.right

    def meets(rack: float) -> bool:
        shifts = inner_shifts(layout, rack)
        return all(
            bool(Corner.of(layout.side(side)).poses(0.0, shifts[side]).assembles[0])
            for side in ("left", "right")
        )

    assert meets(limit - np.sign(limit) * 1e-3)
    assert not meets(limit + np.sign(limit) * 1e-3)


def test_a_linkage_in_line_still_stands_where_it_was_measured() -> None:
    """Relay rod and idler arm in one line: the branch is open, ride height is not lost."""
    in_line = replace(RELAY, idler_pivot=Point(370, 300, -100))
    shifts = inner_shifts(Layout(CORNER, steering=in_line), 0.0)
    assert np.abs(shifts["left"]).max() < 1e-6
    assert "in line with the relay rod" in steering_faults(Layout(CORNER, steering=in_line))[0]


@pytest.mark.parametrize(
    ("relay", "words"),
    [
        (replace(RELAY, pitman_end=Point(260, 330, -220)), "pitman arm has no length"),
        (replace(RELAY, idler_end=Point(260, 330, -220)), "idler arm has no length"),
        (replace(RELAY, idler_end=Point(-250, 330, -100)), "relay rod has no length"),
        (replace(RELAY, pitman_end=Point(150, 330, -220)), "points straight across the car"),
    ],
)
def test_arms_that_cannot_move_are_named(relay: RelayRod, words: str) -> None:
    layout = Layout(CORNER, steering=relay)
    assert words in " ".join(steering_faults(layout))
    limits = rack_limits(layout)
    assert np.isfinite(limits.left) and np.isfinite(limits.right)
    assert limits.right <= 0.0 <= limits.left


def test_a_side_that_does_not_go_together_leaves_no_rack_travel() -> None:
    limits = rack_limits(Layout(CORNER), travel=2000.0)
    assert limits.left == limits.right == 0.0
    assert limits.why_left == "The left side does not go together at this travel."


def test_a_sound_steering_has_no_faults() -> None:
    assert steering_faults(Layout(CORNER)) == []
    assert steering_faults(Layout(CORNER, steering=RELAY)) == []


def test_a_pose_does_not_depend_on_what_else_is_solved_beside_it() -> None:
    """Racks far out of reach in the same array must not throw the ones that are in reach."""
    corner = Corner.of(CORNER)
    racks = np.arange(-400.0, 401.0, 5.0)
    shifts = inner_shifts(Layout(CORNER), racks)["left"]
    together = corner.poses(0.0, shifts)
    for k in range(racks.size):
        alone = corner.poses(0.0, shifts[:, k : k + 1])
        assert alone.assembles[0] == together.assembles[k]
        if alone.assembles[0]:
            assert alone.toe[0] == pytest.approx(together.toe[k], abs=1e-11)
