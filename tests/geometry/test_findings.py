"""Findings: each car here is built to have one fault, and each cure is made and re-solved."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest

from geometry import layout as names
from geometry.finding_checks.finding import Finding
from geometry.finding_checks.roll import roll_center_by_path
from geometry.findings import SEVERITIES, findings
from geometry.layout import SIDES, Layout, Point, RelayRod, Side, Target, Tire
from geometry.lengths import parse_length
from geometry.solution import Solution, solve
from geometry.tolerances import FIGURES, TOLERANCES, camber_gain, toe_length, tolerance
from tests.sample_cars import CARS

HEALTHY = Side(
    {
        names.LOWER_INNER: (230, 170),
        names.LOWER_BALL: (630, 185, 5),
        names.UPPER_INNER: (330, 385),
        names.UPPER_BALL: (585, 440, -10),
        names.TIE_OUTER: (640, 350, -127),
        names.TIE_INNER: (331.7, 304.8, -127),
        names.WHEEL_CENTER: (700, 310),
    },
    Tire(310),
    math.radians(-0.5),
    math.radians(0.1),
)
STRUT = Side(
    {
        names.LOWER_INNER: (250, 185),
        names.LOWER_BALL: (660, 180, 5),
        names.STRUT_TOP: (560, 800, -30),
        names.STRUT_LOWER: (625, 400, -10),
        names.TIE_OUTER: (640, 350, -127),
        names.TIE_INNER: (300, 330, -127),
        names.WHEEL_CENTER: (720, 310),
    },
    Tire(310),
)
CAR = Layout(HEALTHY)


def car(side: Side = HEALTHY, **moves: tuple[float, float]) -> Layout:
    """A linked car with points moved by (over, up): keys are names with underscores."""
    for key, (over, up) in moves.items():
        name = key.replace("_", " ")
        old = side[name]
        side = side.moved(name, Point(old.over + over, old.up + up, old.fore))
    return Layout(side)


def codes(solution: Solution) -> list[str]:
    return [finding.code for finding in findings(solution)]


def the(code: str, solution: Solution) -> Finding:
    found = [finding for finding in findings(solution) if finding.code == code]
    assert len(found) == 1, [f.text for f in findings(solution)]
    return found[0]


# --- the whole list --------------------------------------------------------------------


@pytest.mark.parametrize("units", ["in", "mm"])
def test_a_healthy_car_has_nothing_above_a_note(units: str) -> None:
    found = findings(solve(replace(CAR, units=units)))
    assert [f.text for f in found if f.severity != "note"] == []


@pytest.mark.parametrize(
    ("name", "above_notes"),
    [
        ("healthy-roadster", set()),
        ("strut-hatch", set()),
        ("skewed-arms", set()),
        ("steering-box-sedan", set()),
        ("front-steer-coupe", set()),
        ("parallel-equal-arms", set()),
        ("rack-set-low", {"inner-pivot-off"}),
        ("knuckle-swap", {"inner-pivot-off"}),
        ("cut-springs", {"inner-pivot-off", "lower-arm-not-level", "roll-center-low"}),
        ("arms-sloping-wrong", {"instant-center-outboard", "roll-center-low"}),
        ("unequal-sides", {"inner-pivot-off", "sides-differ"}),
    ],
)
def test_sample_cars_have_the_faults_they_were_made_with(name: str, above_notes: set[str]) -> None:
    found = findings(solve(CARS[name]))
    assert {f.code for f in found if f.severity != "note"} == above_notes


def test_findings_come_worst_first() -> None:
    found = findings(solve(car(tie_rod_inner=(0, 60), wheel_center=(120, 0))))
    ranks = [SEVERITIES.index(f.severity) for f in found]
    assert ranks == sorted(ranks) and len(set(ranks)) > 1


def test_linked_sides_share_one_finding_and_unlinked_ones_have_their_own() -> None:
    low = car(tie_rod_inner=(0, -8))
    assert the("inner-pivot-off", solve(low)).side is None
    apart = low.unlinked()
    assert [f.side for f in findings(solve(apart)) if f.code == "inner-pivot-off"] == [
        "left", "right",
    ]
    one = CAR.unlinked().with_point("right", names.TIE_INNER, low.left[names.TIE_INNER])
    only = the("inner-pivot-off", solve(one))
    assert only.side == "right"
    assert only.headline.startswith("Right inner tie-rod pivot")
    assert "right end of the rack" in only.text


def test_every_finding_with_a_limit_says_it_and_its_source() -> None:
    for finding in findings(solve(car(tie_rod_inner=(0, 60), wheel_center=(120, 0)))):
        if finding.tolerance_key:
            source = TOLERANCES[finding.tolerance_key].source
            assert finding.tolerance_source == source
            assert finding.detail.endswith(f"({source}).")


def test_a_layouts_own_tolerance_overrides_the_table_and_is_named() -> None:
    strict = replace(CAR, tolerances={"toe range": 0.05})
    finding = the("inner-pivot-off", solve(strict))
    assert finding.tolerance == 0.05 == tolerance(strict, "toe range")
    assert "set in this layout" in finding.detail
    assert "inner-pivot-off" not in codes(solve(CAR))


def test_sizes_are_in_the_layouts_own_units() -> None:
    low = car(tie_rod_inner=(0, -8))
    inch = the("inner-pivot-off", solve(low)).text
    metric = the("inner-pivot-off", solve(replace(low, units="mm"))).text
    assert "5/16 in low" in inch and "first inch of bump" in inch and " mm" not in inch
    assert " mm low" in metric and "first 25 mm of bump" in metric and " in low" not in metric


# --- inner pivot and aim ---------------------------------------------------------------


@pytest.mark.parametrize(
    ("over", "up", "where", "do"),
    [
        (0, -8, "low", "Raise the rack"),
        (0, 8, "high", "Lower the rack"),
        (-30, 0, "inboard", "farther outboard"),
        (30, 0, "outboard", "farther inboard"),
    ],
)
@pytest.mark.parametrize("side", [HEALTHY, STRUT], ids=["arms", "strut"])
def test_inner_pivot_is_sent_back_to_its_best_spot(
    side: Side, over: float, up: float, where: str, do: str
) -> None:
    best = solve(Layout(side)).left.pivots.place("best fit")
    assert best is not None
    off = Layout(side.moved(names.TIE_INNER, Point(best[0] + over, best[1] + up, -127)))
    solution = solve(off)
    finding = the("inner-pivot-off", solution)
    assert where in finding.headline
    assert finding.cure is not None and do in finding.cure.text
    cured = solve(finding.cure.applied(off))
    assert cured.left.pivots.ranges["as is"] == pytest.approx(
        solution.left.pivots.ranges["best fit"], rel=1e-6
    )
    assert "inner-pivot-off" not in codes(cured)


@pytest.mark.parametrize("up", [-8.0, 8.0])
def test_toe_in_the_first_inch_has_the_direction_and_size_of_the_solve(up: float) -> None:
    off = car(tie_rod_inner=(0, up))
    solution = solve(off)
    moved = solve(off, travel=25.4).left
    gained = float(toe_length(HEALTHY, moved.now.toe[0]) - toe_length(HEALTHY, moved.ride.toe[0]))
    said = the("inner-pivot-off", solution).headline
    assert f"{abs(gained) / 25.4:.3f} in toe-{'in' if gained > 0 else 'out'} in the first" in said


def test_toe_findings_do_not_change_with_the_steering_or_the_pose() -> None:
    off = car(tie_rod_inner=(0, -8))
    straight, steered = (the("inner-pivot-off", solve(off, t, r)) for t, r in ((0, 0), (20, 30)))
    assert straight == steered


def test_toe_change_that_no_inner_pivot_cures_is_said_so() -> None:
    best = solve(CAR).left.pivots.place("best fit")
    assert best is not None
    at_best = CAR.with_point("left", names.TIE_INNER, Point(*best, -127))
    finding = the("toe-change-remains", solve(replace(at_best, tolerances={"toe range": 1e-4})))
    assert finding.cure is None


@pytest.mark.parametrize("up", [-12.0, 12.0])
def test_aiming_the_tie_rod_takes_the_toes_slope_away(up: float) -> None:
    off = car(tie_rod_inner=(0, up))
    finding = the("tie-rod-aim", solve(off))
    # The string from the inner end through the outer one runs on inboard: a low inner end
    # points below the instant center.
    assert ("below" if up < 0 else "above") in finding.headline
    assert finding.severity == "note"  # the inner pivot's own finding carries the fault
    assert finding.cure is not None
    cured = solve(finding.cure.applied(off), span=1.0).left.sweep
    before = solve(off, span=1.0).left.sweep
    assert np.ptp(cured.toe) < 0.02 * np.ptp(before.toe)
    assert "tie-rod-aim" not in codes(solve(finding.cure.applied(off)))


def test_a_bad_aim_within_the_range_is_a_warning_of_its_own() -> None:
    off = replace(car(tie_rod_inner=(0, -8)), tolerances={"toe range": 1e3})
    assert the("tie-rod-aim", solve(off)).severity == "warn"


# --- arms ------------------------------------------------------------------------------


@pytest.mark.parametrize(("rise", "way"), [(80, "down"), (-80, "up")])
def test_a_steep_lower_arm_is_brought_back_toward_level(rise: float, way: str) -> None:
    steep = car(lower_inner_pivot=(0, rise))
    finding = the("lower-arm-not-level", solve(steep))
    assert f"slopes {way} " in finding.headline
    assert finding.cure is not None
    assert "lower-arm-not-level" not in codes(solve(finding.cure.applied(steep)))


def test_instant_center_outboard_is_brought_inboard() -> None:
    wrong = car(upper_inner_pivot=(0, 90))
    solution = solve(wrong)
    finding = the("instant-center-outboard", solution)
    # The same by the solve itself: the wheel leans its top out in bump.
    sweep = solve(wrong, span=1.0).left.sweep
    assert sweep.camber[-1] > sweep.camber[0]
    assert finding.cure is not None
    cured = camber_gain(solve(finding.cure.applied(wrong)).left)
    limits = [tolerance(wrong, f"camber gain {end}") for end in ("low", "high")]
    assert cured == pytest.approx(sum(limits) / 2, rel=1e-9)
    assert "camber-gain-wrong-way" not in codes(solution)  # one fault, one finding


def test_camber_that_turns_back_in_bump_is_found() -> None:
    lost = car(STRUT, lower_inner_pivot=(0, -60))
    finding = the("camber-gain-wrong-way", solve(lost))
    state = solve(lost).left
    middle = state.sweep.travel.size // 2
    assert state.sweep.camber[-1] > state.sweep.camber[middle]
    assert finding.figure == pytest.approx(
        state.sweep.camber[-1] - state.sweep.camber[middle], abs=2e-3
    )


def test_parallel_arms_are_a_note() -> None:
    level = HEALTHY.moved(names.LOWER_INNER, Point(230, 185)).moved(
        names.UPPER_INNER, Point(330, 440)
    )
    finding = the("parallel-arms", solve(Layout(level)))
    assert finding.severity == "note"
    assert finding.cure is not None
    gain = camber_gain(solve(finding.cure.applied(Layout(level))).left)
    assert gain is not None and gain > 0.0


def test_a_very_short_swing_arm_warns_and_its_cure_lengthens_it() -> None:
    short = car(upper_inner_pivot=(0, -60))
    finding = the("swing-arm-short", solve(short))
    assert finding.figure is not None and finding.figure < 1016
    assert finding.cure is not None
    assert "swing-arm-short" not in codes(solve(finding.cure.applied(short)))


@pytest.mark.parametrize(("rise", "code"), [(30, "camber-gain-low"), (-20, "camber-gain-high")])
def test_camber_gain_off_the_usual_is_a_note_with_a_cure(rise: float, code: str) -> None:
    off = car(upper_inner_pivot=(0, rise))
    finding = the(code, solve(off))
    assert finding.severity == "note"
    assert finding.cure is not None
    assert not {"camber-gain-low", "camber-gain-high"} & set(
        codes(solve(finding.cure.applied(off)))
    )


@pytest.mark.parametrize(("out", "where"), [(90, "outboard"), (-120, "inboard")])
def test_large_scrub_is_brought_to_its_limit_by_the_wheel(out: float, where: str) -> None:
    off = car(wheel_center=(out, 0))
    finding = the("scrub-radius-large", solve(off))
    assert f"floor {where} of the kingpin axis" in finding.headline
    assert finding.cure is not None
    scrub = float(solve(finding.cure.applied(off)).left.ride.scrub_radius[0])
    assert abs(scrub) == pytest.approx(tolerance(off, "scrub radius"), abs=0.2)


# --- roll center -----------------------------------------------------------------------


@pytest.mark.parametrize("side", [HEALTHY, STRUT], ids=["arms", "strut"])
@pytest.mark.parametrize(("rise", "code"), [(70, "roll-center-high"), (-70, "roll-center-low")])
@pytest.mark.parametrize("linked", [True, False])
def test_roll_center_cure_reaches_the_height_it_names(
    side: Side, rise: float, code: str, linked: bool
) -> None:
    moves = {"lower_inner_pivot": (0.0, float(rise))}
    if not side.is_strut:
        moves["upper_inner_pivot"] = (0.0, float(rise))
    off = car(side, **moves)
    off = off if linked else off.unlinked()
    solution = solve(off)
    finding = the(code, solution)
    assert finding.side is None and finding.cure is not None
    cured = solve(finding.cure.applied(off))
    assert cured.ride_roll_center is not None
    low, high = (tolerance(off, f"roll center {end}") for end in ("low", "high"))
    share = 0.25 if rise < 0 else 0.75
    assert cured.ride_roll_center[1] == pytest.approx(low + share * (high - low), abs=1e-6)
    if not side.is_strut:
        assert camber_gain(cured.left) == pytest.approx(camber_gain(solution.left), rel=1e-9)


def test_skewed_bushings_take_the_same_cures() -> None:
    points = dict(HEALTHY.points)
    del points[names.LOWER_INNER], points[names.UPPER_INNER]
    points |= {
        names.LOWER_INNER_FRONT: Point(215, 250, 120),
        names.LOWER_INNER_REAR: Point(240, 235, -180),
        names.UPPER_INNER_FRONT: Point(340, 455, 90),
        names.UPPER_INNER_REAR: Point(325, 440, -110),
    }
    off = Layout(replace(HEALTHY, points=points))
    finding = the("roll-center-high", solve(off))
    assert finding.cure is not None and len(finding.cure.moves) == 4
    cured = solve(finding.cure.applied(off)).ride_roll_center
    assert cured is not None and cured[1] == pytest.approx(57.15, abs=1e-6)


def test_vertical_contact_lines_have_no_roll_center() -> None:
    # Both arm lines pass a point straight above the contact.
    over = float(solve(CAR).left.ride.contact[1, 0])
    side = HEALTHY
    for arm, ball in ((names.LOWER_INNER, names.LOWER_BALL), (names.UPPER_INNER, names.UPPER_BALL)):
        end = side[ball]
        slope = (600.0 - end.up) / (over - end.over)
        side = side.moved(arm, Point(230.0, end.up + slope * (230.0 - end.over)))
    finding = the("no-roll-center", solve(Layout(side)))
    assert finding.severity == "warn"


def test_a_planar_cars_path_gives_the_constructions_roll_center() -> None:
    # All points in one transverse plane but the tie rod, no static angles: a plane linkage.
    flat = {
        name: Point(p.over, p.up, 0.0 if name not in (names.TIE_INNER, names.TIE_OUTER) else -127.0)
        for name, p in HEALTHY.points.items()
    }
    for rise in (0.0, 15.0):
        solution = solve(
            car(Side(flat, Tire(310)), tie_rod_inner=(0, rise)), span=2.0
        )
        center = solution.ride_roll_center
        assert center is not None
        assert roll_center_by_path(solution) == pytest.approx(center[1], abs=0.02)


def test_path_with_the_toe_held_is_that_of_a_tie_rod_with_no_toe_slope() -> None:
    skewed = _skewed()
    aimed = skewed
    for _ in range(3):
        found = [f for f in findings(solve(
            replace(aimed, tolerances={"toe rate": 1e-7, "toe range": 1e3}), span=2.0
        )) if f.code == "tie-rod-aim"]
        if found and found[0].cure is not None:
            aimed = found[0].cure.applied(aimed)
    near = solve(aimed, span=2.0).left.sweep
    middle = near.travel.size // 2
    path = near.contact[1:, middle + 1] - near.contact[1:, middle - 1]
    half_track = float(near.contact[1, middle])
    plain = half_track * path[0] / path[1]
    assert roll_center_by_path(solve(skewed, span=2.0)) == pytest.approx(plain, abs=0.05)


def _skewed() -> Layout:
    points = dict(HEALTHY.points)
    del points[names.LOWER_INNER], points[names.UPPER_INNER]
    points |= {
        names.LOWER_INNER_FRONT: Point(180, 230, 200),
        names.LOWER_INNER_REAR: Point(280, 110, -250),
        names.UPPER_INNER_FRONT: Point(365, 350, 120),
        names.UPPER_INNER_REAR: Point(295, 420, -150),
    }
    return Layout(replace(HEALTHY, points=points))


def test_skewed_arms_are_told_where_path_and_construction_differ() -> None:
    solution = solve(_skewed())
    center, by_path = solution.ride_roll_center, roll_center_by_path(solution)
    assert center is not None and by_path is not None
    apart = by_path - center[1]
    assert abs(apart) > 0.5
    told = replace(_skewed(), tolerances={"roll center path": 0.9 * abs(apart)})
    finding = the("roll-center-path", solve(told))
    assert finding.severity == "note" and finding.figure == pytest.approx(apart)
    quiet = replace(_skewed(), tolerances={"roll center path": 1.1 * abs(apart)})
    assert "roll-center-path" not in codes(solve(quiet))
    assert roll_center_by_path(solve(_skewed(), rack=20.0)) == pytest.approx(by_path, abs=0.02)


# --- reach -----------------------------------------------------------------------------


def test_travel_beyond_reach_names_where_it_stops() -> None:
    solution = solve(CAR, span=400.0)
    droop, bump = solution.left.stops
    found = {f.headline.split(" of ")[1].split(",")[0]: f for f in findings(solution)
             if f.code == "travel-out-of-reach"}
    assert found
    for way, finding in found.items():
        stop = bump if way == "bump" else -droop
        assert finding.figure == pytest.approx(stop, abs=400.0 / 40 / 32)


def test_a_chosen_pose_out_of_reach_is_wrong() -> None:
    finding = the("pose-out-of-reach", solve(CAR, travel=500.0))
    assert finding.severity == "wrong" and "of bump" in finding.headline
    bump = solve(CAR).left.stops[1]
    said = finding.detail.removeprefix("The parts stop meeting at ").removesuffix(" of that.")
    assert parse_length(said, "in") == pytest.approx(bump, abs=1.3)
    assert "of droop" in the("pose-out-of-reach", solve(CAR, travel=-500.0)).headline


def test_reach_is_each_sides_own_in_a_one_wheel_pose() -> None:
    found = [f for f in findings(solve(CAR, travel={"left": 500.0, "right": 0.0}))
             if f.code == "pose-out-of-reach"]
    assert [f.side for f in found] == ["left"]


# --- slips -----------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("layout", "code"),
    [
        (car(lower_inner_pivot=(420, 0)), "inner-outboard-of-outer"),
        (car(tie_rod_inner=(340, 0)), "inner-outboard-of-outer"),
        (car(lower_inner_pivot=(0, -180)), "point-below-floor"),
        (Layout(HEALTHY.moved(names.LOWER_BALL, Point(231, 170, 0))), "points-coincide"),
        (car(wheel_center=(-100, 0)), "wheel-inboard"),
        (car(tie_rod_outer=(-640 + 640 / 25.4, -350 + 350 / 25.4)), "point-far-from-wheel"),
        (car(upper_inner_pivot=(210, 305)), "arm-toggled"),
        (Layout(replace(HEALTHY, static_camber=math.radians(-12))), "static-camber-large"),
        (Layout(replace(HEALTHY, static_toe=math.radians(3))), "static-toe-large"),
        (Layout(replace(HEALTHY, tire=Tire(280))), "tire-off-floor"),
        (Layout(HEALTHY.moved(names.TIE_OUTER, Point(609, 350, -5))), "tie-rod-no-lever"),
    ],
)
def test_slips_of_the_tape_are_named(layout: Layout, code: str) -> None:
    assert code not in codes(solve(CAR))
    assert code in codes(solve(layout))


@pytest.mark.parametrize("factor", [25.4, 1 / 25.4])
def test_a_car_in_the_wrong_unit_is_told_so(factor: float) -> None:
    points = {name: Point(*(factor * v for v in p)) for name, p in HEALTHY.points.items()}
    wrong = Layout(replace(HEALTHY, points=points, tire=Tire(310 * factor)))
    said = the("units-mixed", solve(wrong)).headline
    meant = "millimeters read as inches" if factor > 1 else "inches read as millimeters"
    assert meant in said


def test_sides_that_differ_are_told_by_their_worst_point() -> None:
    apart = CAR.unlinked()
    assert "sides-differ" not in codes(solve(apart))
    moved = apart.with_point("right", names.UPPER_INNER, Point(330, 395)).with_point(
        "right", names.LOWER_INNER, Point(235, 170)
    )
    finding = the("sides-differ", solve(moved))
    assert finding.points == (names.UPPER_INNER, names.LOWER_INNER)
    assert finding.figure == pytest.approx(10.0)


# --- relay rod and targets -------------------------------------------------------------


def relay(**changes: Point) -> Layout:
    arms = RelayRod(
        Point(260, 300, -250), Point(250, 304.8, -127),
        Point(260, 300, -250), Point(250, 304.8, -127),
    )
    return replace(CAR, steering=replace(arms, **changes))


def test_equal_relay_arms_pass() -> None:
    assert "relay-arms-unequal" not in codes(solve(relay()))


@pytest.mark.parametrize(
    ("change", "word"),
    [
        ({"idler_end": Point(250, 324.8, -127)}, "higher"),
        ({"idler_end": Point(250, 284.8, -127)}, "lower"),
        ({"idler_pivot": Point(260, 300, -280)}, "longer"),
        ({"idler_pivot": Point(260, 300, -220)}, "shorter"),
    ],
)
def test_unequal_relay_arms_say_the_toe_they_cause(change: dict[str, Point], word: str) -> None:
    built = relay(**change)
    finding = the("relay-arms-unequal", solve(built))
    assert f"{word} than the pitman arm" in finding.headline
    assert finding.figure is not None

    def total(layout: Layout, rack: float) -> float:
        solution = solve(layout, rack=rack)
        return sum(float(toe_length(HEALTHY, solution.sides[s].now.toe[0])) for s in SIDES)

    assert finding.cure is not None
    matched = finding.cure.applied(built)
    apart = [total(built, rack) - total(matched, rack) for rack in (-25.4, 25.4)]
    assert finding.figure == pytest.approx(max(apart, key=abs), abs=1e-6)
    if abs(finding.figure) < 0.005:  # a rod that only leans steers both wheels alike
        assert "no toe comes of it" in finding.headline
    else:
        assert f"toe {'in' if finding.figure > 0 else 'out'}" in finding.headline
    assert ("length" if word in ("longer", "shorter") else "height") in finding.cure.text
    assert "relay-arms-unequal" not in codes(solve(matched))


def test_targets_are_met_missed_or_not_judged() -> None:
    targets = (
        Target("roll center height", 40.0, 80.0),
        Target("camber gain", low=1.0),
        Target("scrub radius", high=0.0),
        Target("hat size", 1.0, 2.0),
    )
    solution = solve(replace(CAR, targets=targets))
    assert the("target-met", solution).headline.startswith("Roll center height")
    assert {f.headline.split(" misses")[0]: f.headline.split("too ")[1]
            for f in findings(solution) if f.code == "target-missed"} == {
        "Camber gain (top in, in bump)": "low.", "Scrub radius": "high.",
    }
    assert the("target-unknown", solution).severity == "note"


def test_every_figure_reads_a_number_from_a_healthy_car() -> None:
    solution = solve(CAR)
    for figure in FIGURES.values():
        assert figure.value(solution) is not None, figure.key
    assert FIGURES["toe range"].value(solution) == pytest.approx(
        np.ptp(toe_length(HEALTHY, solution.left.sweep.toe)), rel=1e-3
    )
    slope = FIGURES["lower arm slope"].value(solution)
    assert slope == pytest.approx(math.atan2(15, 400), rel=1e-9)


def test_toe_is_not_judged_over_a_travel_that_is_out_of_reach() -> None:
    solution = solve(car(tie_rod_inner=(0, 8)), span=330.0)
    found = codes(solution)
    assert "travel-out-of-reach" in found
    assert not {"inner-pivot-off", "toe-change-remains"} & set(found)
    assert "tie-rod-aim" in found
