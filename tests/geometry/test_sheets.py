"""Sheets as pages: words apart and on the paper, figures that agree, tiles that join."""

from __future__ import annotations

import csv
import datetime
import io
import math
import re
from dataclasses import replace
from itertools import combinations, pairwise, permutations

import numpy as np
import pytest
import shapely
from ezdxf import readfile

from geometry import layout as names
from geometry.compare import bump_toe_change
from geometry.drawing import Circle, DrawingError, Line, Text
from geometry.dxf import write_dxf
from geometry.layout import Job
from geometry.lengths import parse_length
from geometry.pages import A3, A4, LETTER, TABLOID
from geometry.sheets import cautions
from geometry.sheets.build_figures import part_lengths, rod_for, shim_for, toe_cost
from geometry.sheets.catalog import SHEETS
from geometry.sheets.customer import customer_sheet
from geometry.sheets.flow import broken
from geometry.sheets.options import SheetOptions, long_date
from geometry.sheets.ordinates import spread
from geometry.sheets.pattern_sheet import pattern_sheet
from geometry.sheets.patterns import PATTERNS, kinds_for, pattern
from geometry.sheets.set_out import checks, set_out_csv
from geometry.sheets.tiles import OVERLAP, bar_for, grid_for, row_name
from geometry.solution import solve
from tests.sample_cars import (
    CARS,
    DEGENERATE,
    RACK_LOW,
    ROADSTER,
    SAMPLES,
    SKEWED_ARMS,
    STRUT_CAR,
    UNEQUAL_SIDES,
)

DATE = datetime.date(2026, 12, 1)
OPTIONS = SheetOptions(date=DATE, customer="The owner")
FLOWING = [kind for kind in SHEETS if kind != "pattern"]
ALL_JOBS = {**SAMPLES, **{name: Job(car) for name, car in DEGENERATE.items()}}


def pages_of(kind, job, options=OPTIONS):
    return SHEETS[kind].make(job, options)


def texts(page):
    """Every text of a page in its own coordinates, with the area it may stand in."""
    return [
        (item, placed.clip or page.printable)
        for placed in page.placed
        for item in placed.on_page
        if isinstance(item, Text) and item.text.strip()
    ]


def words(pages):
    return [item.text for page in pages for item, _ in texts(page)]


def shape(text):
    """A text's own box, turned as it is."""
    level = replace(text, at=(0.0, 0.0), angle=0.0).bounds
    box = shapely.box(*level)
    turned = shapely.affinity.rotate(box, text.angle, (0.0, 0.0), use_radians=True)
    # Boxes that share less than a fifth of a millimeter do not touch in ink.
    return shapely.affinity.translate(turned, *text.at).buffer(-0.2)


def check_words(page):
    found = texts(page)
    for text, area in found:
        box = text.bounds
        assert area.left - 0.01 <= box.left and box.right <= area.right + 0.01, text.text
        assert area.bottom - 0.01 <= box.bottom and box.top <= area.top + 0.01, text.text
        assert not re.search(r"\b(nan|inf|None)\b", text.text), text.text
    shapes = [shape(text) for text, _ in found]
    tree = shapely.STRtree(shapes)
    for first, second in tree.query(shapes, predicate="intersects").T:
        if first < second:
            assert not shapes[first].intersects(shapes[second]), (
                found[first][0].text, found[second][0].text,
            )


# --- every sheet of every car -----------------------------------------------------------


@pytest.mark.parametrize("kind", FLOWING)
@pytest.mark.parametrize("name", ALL_JOBS)
def test_words_stay_apart_and_on_the_paper(kind, name):
    pages = pages_of(kind, ALL_JOBS[name])
    for page in pages:
        check_words(page)


@pytest.mark.parametrize("kind", FLOWING)
@pytest.mark.parametrize("name", ["cut-springs", "unequal-sides", "strut-hatch"])
def test_the_other_unit_and_paper_hold_the_words_too(kind, name):
    job = SAMPLES[name]
    unit = "mm" if job.planned.units == "in" else "in"
    job = replace(job, planned=replace(job.planned, units=unit))
    for paper in (None, TABLOID, A3):
        for page in pages_of(kind, job, replace(OPTIONS, paper=paper)):
            check_words(page)


def test_long_words_never_run_off():
    long = "a very long name that goes on and on " * 6
    job = replace(
        SAMPLES["unequal-sides"], shop=long, customer=long, notes=long + "x" * 300,
        planned=replace(UNEQUAL_SIDES, title=long, assumed=(long, long)),
    )
    for kind in SHEETS:
        # A tile's own words may run on over its joint to the next one.
        for page in pages_of(kind, job)[:1] if kind == "pattern" else pages_of(kind, job):
            check_words(page)


@pytest.mark.parametrize("kind", SHEETS)
def test_every_page_is_numbered_and_cautions_are_said_once(kind):
    pages = pages_of(kind, SAMPLES["cut-springs"])
    for number, page in enumerate(pages, 1):
        said = [item.text for item, _ in texts(page)]
        assert said.count(f"Page {number} of {len(pages)}") == 1
    all_words = " ".join(words(pages))
    assert all_words.count("Have the finished work inspected") == 1
    if kind == "customer":
        assert all_words.count("not a road test, and they do not judge") == 1
    else:
        assert all_words.count(cautions.SUPPORT[:40]) == 1
        assert all_words.count("Heating, bending or welding") == 1


@pytest.mark.parametrize(("name", "size"), [("cut-springs", LETTER), ("strut-hatch", A4)])
@pytest.mark.parametrize("kind", SHEETS)
def test_paper_follows_the_unit(kind, name, size):
    pages = pages_of(kind, SAMPLES[name])
    assert all(page.size.portrait == size for page in pages)
    other = pages_of(kind, SAMPLES[name], replace(OPTIONS, paper=A3))
    assert all(page.size.portrait == A3 for page in other)


@pytest.mark.parametrize("name", SAMPLES)
def test_the_customer_sheet_takes_at_most_two_pages(name):
    assert len(customer_sheet(SAMPLES[name], OPTIONS)) <= 2


def test_heading_says_shop_customer_car_and_date():
    said = words(pages_of("customer", SAMPLES["cut-springs"]))
    for expected in ("Harrow Lane", "For The owner", "Cut springs", "December 1, 2026"):
        assert expected in said
    assert long_date(None) == ""


# --- words that agree with figures --------------------------------------------------------


def verdict_rows(pages):
    """Each figure's sentence and verdict word as they stand in the table."""
    said = words(pages[:1])
    start = said.index("Four figures that matter")
    rows, sentence = {}, []
    for text in said[start + 1:]:
        if text in ("Better", "Worse", "No change", "Changed", "Can't be told"):
            joined = " ".join(sentence)
            rows[next(k for k in HEADINGS if joined.startswith(k))] = (joined, text)
            sentence = []
        elif len(rows) < len(HEADINGS):
            sentence.append(text)
    return rows


HEADINGS = ("Bump steer", "Wheel lean over a bump", "Roll center", "Scrub radius")
PAIRED = ["healthy-roadster", "rack-set-low", "cut-springs", "knuckle-swap", "skewed-arms",
          "arms-sloping-wrong", "unequal-sides"]


@pytest.mark.parametrize(("before", "after"), list(permutations(PAIRED, 2)))
def test_words_agree_with_the_figures(before, after):
    found, planned = CARS[before], CARS[after]
    pages = customer_sheet(Job(planned, found=found), OPTIONS)
    rows = verdict_rows(pages)
    assert set(rows) == set(HEADINGS)
    summary = " ".join(words(pages)).split("As found, seen")[0]
    sentence, verdict = rows["Bump steer"]
    was, now = (
        max(abs(bump_toe_change(state)) for state in solve(car, span=76.2).sides.values()) / 25.4
        for car in (found, planned)
    )
    if verdict == "No change":
        assert abs(was - now) < 0.0055 and f"{now:.3f} in, no change" in sentence
    else:
        assert f"Was {was:.3f} in, now {now:.3f} in." in sentence
        assert verdict == ("Better" if now < was else "Worse")
    for heading, (sentence, verdict) in rows.items():
        short = heading.split(" over ")[0].lower()
        better, worse = (part in summary.lower().split("worse in")[k] if "worse in" in
                         summary.lower() else (k == 0 and part in summary.lower())
                         for k, part in ((0, short), (1, short)))
        if verdict == "Better":
            assert better and "Better in" in summary
        elif verdict == "Worse":
            assert worse and "orse in" in summary
        else:
            assert not better or "nothing" in summary
            assert ("no change" in sentence) == (verdict == "No change")


def test_a_car_made_better_and_one_made_worse():
    better = " ".join(words(customer_sheet(Job(ROADSTER, found=RACK_LOW), OPTIONS)))
    worse = " ".join(words(customer_sheet(Job(RACK_LOW, found=ROADSTER), OPTIONS)))
    assert "Better in bump steer, and nothing worse in these figures." in better
    assert "Worse in bump steer, and nothing better in these figures." in worse
    assert "Tie rod inner moved 1/2 in up." in better
    assert "Tie rod inner moved 1/2 in down." in worse


@pytest.mark.parametrize("job", [Job(ROADSTER), Job(ROADSTER, found=ROADSTER)])
def test_a_lone_car_is_not_compared(job):
    said = " ".join(words(customer_sheet(job, OPTIONS)))
    assert "As planned" not in said and "Better" not in said and "Was " not in said
    assert ("As found" in said) == (job.found is not None)


def test_nothing_is_said_of_a_turn_without_weights():
    bare = replace(ROADSTER, cg_height=None)
    assert "In a turn" not in words(customer_sheet(Job(bare), OPTIONS))
    assert "In a turn" in words(customer_sheet(Job(ROADSTER), OPTIONS))


def test_the_lowering_sheet_has_the_three_ways_apart():
    said = words(pages_of("lowering", SAMPLES["healthy-roadster"]))
    assert {"By spring", "By dropped knuckle", "By smaller tire", "As it is"} <= set(said)
    assert any("2 1/2 in down" in text for text in said)
    raised = words(pages_of("lowering", Job(ROADSTER), replace(OPTIONS, drop=-25.4)))
    assert any("1 in up" in text for text in raised) and "Three ways to raise" in raised


# --- build figures --------------------------------------------------------------------------


def test_lengths_are_from_center_to_center():
    lower = next(row for row in part_lengths(ROADSTER, "left") if row.label == "Lower arm")
    inner, ball = ROADSTER.left[names.LOWER_INNER], ROADSTER.left[names.LOWER_BALL]
    assert abs(parse_length(lower.value, "in") - math.dist(inner, ball)) <= 25.4 / 32


def test_a_shim_leans_the_knuckle_by_its_share_of_the_ball_joints_height():
    own = ROADSTER.left
    height = own[names.UPPER_BALL].up - own[names.LOWER_BALL].up
    shim = shim_for(ROADSTER, "left", math.radians(0.5))
    assert shim == pytest.approx(-height * math.radians(0.5), rel=0.1)


@pytest.mark.parametrize("car", [ROADSTER, STRUT_CAR, SKEWED_ARMS])
def test_a_longer_tie_rod_gives_the_toe_it_promises(car):
    state = solve(car).left
    longer = rod_for(state, 1.5875)
    # Pushing the inner pivot along the rod by as much turns the wheel as a longer rod does.
    way = (state.corner.tie_outer - state.corner.tie_inner)[:, 0]
    shift = (longer * way / np.linalg.norm(way))[:, None]
    toe = state.corner.poses(0.0, shift).toe - state.ride.toe
    assert 2 * car.left.tire.radius * math.sin(float(toe[0])) == pytest.approx(1.5875, rel=0.03)


def test_what_an_error_costs_is_the_worst_of_four_moves():
    solution = solve(ROADSTER, span=76.2)
    cost = toe_cost(solution, "left", names.TIE_INNER)
    place = ROADSTER.left[names.TIE_INNER]
    step = 25.4 / 16

    def toe_range(car):
        state = solve(car, span=76.2).left
        return 2 * car.left.tire.radius * float(np.ptp(np.sin(state.sweep.toe)))

    moves = [(step, 0), (-step, 0), (0, step), (0, -step)]
    cars = [
        ROADSTER.with_point("left", names.TIE_INNER,
                            place._replace(over=place.over + o, up=place.up + u))
        for o, u in moves
    ]
    assert cost == pytest.approx(max(map(toe_range, cars)) - toe_range(ROADSTER), abs=1e-9)


@pytest.mark.parametrize("values", [[0, 0, 0], [0, 1, 5, 5.5, 20], [-3.0], []])
def test_spread_labels_keep_their_gap_and_their_middle(values):
    places = spread(values, 4.0)
    assert all(b - a >= 4.0 - 1e-9 for a, b in pairwise(places))
    assert sum(places) == pytest.approx(sum(values))


def test_a_tape_reading_is_never_torn():
    lines = broken("the string crosses the centerline 13 1/16 in up", 41.0, 2.3)
    assert any("13 1/16 in" in line for line in lines)
    assert len(lines) > 1


# --- set-out --------------------------------------------------------------------------------


def line_meeting(a, b, c, d):
    """Where the lines a-b and c-d cross."""
    matrix = np.array([[b[0] - a[0], c[0] - d[0]], [b[1] - a[1], c[1] - d[1]]])
    share = np.linalg.solve(matrix, [c[0] - a[0], c[1] - a[1]])[0]
    return a[0] + share * (b[0] - a[0]), a[1] + share * (b[1] - a[1])


def test_strings_meet_where_two_plain_lines_do():
    own = ROADSTER.left
    solution = solve(ROADSTER)
    found = {check.title: check for check in checks(solution)}
    lower = own[names.LOWER_INNER][:2], own[names.LOWER_BALL][:2]
    upper = own[names.UPPER_INNER][:2], own[names.UPPER_BALL][:2]
    center = line_meeting(*lower, *upper)
    assert (found["Instant center"].over, found["Instant center"].up) == pytest.approx(center)
    middle = ((0.0, 0.0), (0.0, 1.0))
    for title, string in (("Lower arm string", lower), ("Upper arm string", upper)):
        assert found[title].up == pytest.approx(line_meeting(*string, *middle)[1])
    contact = solution.left.ride.contact[1:, 0]
    roll = line_meeting(contact, center, *middle)[1]
    assert found["Contact string"].up == pytest.approx(roll)
    # The tire leans, so its contact is not quite on the line the nails are measured from.
    assert found["Roll center"].up == pytest.approx(roll - contact[1])
    rod = own[names.TIE_INNER][:2], own[names.TIE_OUTER][:2]
    upright = ((center[0], 0.0), (center[0], 1.0))
    assert found["Tie-rod string"].up == pytest.approx(line_meeting(*rod, *upright)[1])
    assert "41 11/16 in past the centerline, 5 15/16 in up" in found["Instant center"].sentence


def test_parallel_arms_are_said_to_be_parallel():
    found = {check.title: check for check in checks(solve(CARS["parallel-equal-arms"]))}
    assert "parallel" in found["Instant center"].sentence and found["Instant center"].over is None


@pytest.mark.parametrize("car", [ROADSTER, STRUT_CAR, UNEQUAL_SIDES])
def test_the_csv_gives_every_nail_back(car):
    rows = list(csv.DictReader(io.StringIO(set_out_csv(solve(car)))))
    unit = car.units
    nails = [row for row in rows if row["kind"] == "nail"]
    for row in nails:
        point = car.side(row["side"] or "left")[row["item"]]
        for field, value in zip(("over", "up", "fore"), point, strict=True):
            assert parse_length(row[f"{field} ({unit})"], unit) == pytest.approx(value, abs=0.006)
            tape = parse_length(row[f"{field} on tape"], unit)
            assert abs(tape - value) <= (25.4 / 32 if unit == "in" else 0.05) + 1e-9
    sides = 1 if car.linked else 2
    assert len(nails) == len(car.left.points) * sides
    assert [row for row in rows if row["kind"] == "check"]


# --- patterns and tiles -----------------------------------------------------------------------


@pytest.mark.parametrize("name", ALL_JOBS)
def test_every_pattern_is_drawn_or_refused_in_a_sentence(name):
    car = ALL_JOBS[name].planned
    solution = solve(car)
    for kind in PATTERNS:
        if kind not in kinds_for(car):
            with pytest.raises(DrawingError, match=r"\.$"):
                pattern(solution, kind)
            continue
        try:
            drawing = pattern(solution, kind)
        except DrawingError:
            # A part of no length has no pattern; every sound car has all of its own.
            if name in DEGENERATE:
                continue
            raise
        frame = drawing.shown()
        for item in drawing:
            if isinstance(item, Text):
                box = item.bounds
                assert frame.left - 1 <= box.left and box.right <= frame.right + 1, item.text


def holes(drawing):
    """The centers of all holes: center marks are circles on their own layer."""
    return [i.center for i in drawing if isinstance(i, Circle) and i.style.layer == "holes"]


def test_an_arm_pattern_has_its_true_lengths():
    side = SKEWED_ARMS.left
    front, rear = side.arm_pivots("lower")
    ball = side[names.LOWER_BALL]
    found = holes(pattern(solve(SKEWED_ARMS), "lower arm"))
    lengths = sorted(math.dist(a, b) for a, b in combinations(found, 2))
    expected = sorted(math.dist(a, b) for a, b in combinations((front, rear, ball), 2))
    assert lengths == pytest.approx(expected)


def test_bracket_and_steering_arm_patterns_are_where_the_car_has_them():
    own = ROADSTER.left
    found = holes(pattern(solve(ROADSTER), "brackets"))
    for name in (names.LOWER_INNER, names.UPPER_INNER, names.TIE_INNER):
        assert any(math.dist(own[name][:2], hole) < 1e-9 for hole in found)
    end = own[names.TIE_OUTER]
    found = holes(pattern(solve(ROADSTER), "steering arm"))
    assert any(math.dist((end.over, -end.fore), hole) < 1e-9 for hole in found)


@pytest.mark.parametrize("unit", ["in", "mm"])
def test_a_pattern_in_dxf_is_sound_and_true_size(tmp_path, unit):
    drawing = pattern(solve(ROADSTER), "front view")
    path = tmp_path / "front.dxf"
    write_dxf(drawing, path, unit)
    document = readfile(path)
    assert not document.audit().errors
    factor = 25.4 if unit == "in" else 1.0
    circles = [e for e in document.modelspace() if e.dxftype() == "CIRCLE"
               and e.dxf.layer == "holes"]
    own = ROADSTER.left
    for name in (names.LOWER_INNER, names.UPPER_BALL, names.TIE_OUTER):
        for sign in (1.0, -1.0):
            want = (sign * own[name].over, own[name].up)
            assert any(
                math.dist((c.dxf.center.x * factor, c.dxf.center.y * factor), want) < 1e-6
                for c in circles
            )
    layers = {e.dxf.layer for e in document.modelspace()}
    assert {"arms", "knuckles", "tie rods", "rack", "tires", "strings", "holes", "floor",
            "centerline"} <= layers


@pytest.mark.parametrize("paper", [LETTER, A4, A3, TABLOID])
def test_a_line_across_a_joint_stands_on_both_tiles_at_one_place(paper):
    drawing = pattern(solve(ROADSTER), "front view")
    grid = grid_for(drawing, paper)
    lines = [i for i in drawing if isinstance(i, Line)]
    joints = 0
    for tile in grid.tiles:
        other = grid.at(tile.row, tile.column + 1)
        if other is None:
            continue
        assert other.cell.left == pytest.approx(tile.cell.right)
        (ax, ay), (bx, by) = grid.shift(tile), grid.shift(other)
        for line in lines:
            (x1, y1), (x2, y2) = line.start, line.end
            edge = tile.cell.right
            if not min(x1, x2) < edge < max(x1, x2):
                continue
            y = y1 + (edge - x1) / (x2 - x1) * (y2 - y1)
            if not tile.cell.bottom < y < tile.cell.top:
                continue
            joints += 1
            on_this, on_that = (edge + ax, y + ay), (edge + bx, y + by)
            # Inside both inked areas, half an overlap from their edges, at one height.
            assert grid.area.right - on_this[0] == pytest.approx(0.5 * OVERLAP)
            assert on_that[0] - grid.area.left == pytest.approx(0.5 * OVERLAP)
            assert on_this[1] == pytest.approx(on_that[1])
            assert grid.area.bottom < on_this[1] < grid.area.top
    assert joints > 3


def test_tiles_cover_the_whole_drawing():
    drawing = pattern(solve(ROADSTER), "one side")
    grid = grid_for(drawing, LETTER)
    covered = shapely.union_all([shapely.box(*tile.cell) for tile in grid.tiles])
    for item in drawing:
        if isinstance(item, Line):
            assert covered.buffer(1e-6).covers(shapely.LineString([item.start, item.end]))


def test_neighbors_are_named_and_the_map_shows_every_tile():
    pages = pattern_sheet(SAMPLES["healthy-roadster"], OPTIONS, "one side")
    grid = grid_for(pattern(solve(ROADSTER, span=76.2), "one side"), LETTER)
    guide = [item.text for item, _ in texts(pages[0])]
    assert all(tile.name in guide for tile in grid.tiles)
    for page, tile in zip(pages[1:], grid.tiles, strict=True):
        said = {item.text for item, _ in texts(page)}
        assert tile.name in said
        for step in ((0, 1), (0, -1), (1, 0), (-1, 0)):
            other = grid.at(tile.row + step[0], tile.column + step[1])
            if other is not None:
                assert f"joins {other.name}" in said


@pytest.mark.parametrize("tile", [True, False])
def test_the_bar_comes_first_and_is_true(tile):
    for name, unit in (("healthy-roadster", "in"), ("strut-hatch", "mm")):
        pages = pattern_sheet(SAMPLES[name], OPTIONS, "lower arm", tile=tile)
        length, said = bar_for(unit)
        bars = [i for i in pages[0].drawing if isinstance(i, Line) and
                i.style.layer == "check bar" and i.start[1] == i.end[1]]
        assert any(math.dist(bar.start, bar.end) == pytest.approx(length) for bar in bars)
        assert f"This bar must measure exactly {said}." in words(pages[:1])


def test_pattern_words_stay_off_the_tiles_strips():
    for page in pattern_sheet(SAMPLES["healthy-roadster"], OPTIONS, "lower arm"):
        own = [item for placed in page.placed if placed.clip is None for item in placed.on_page
               if isinstance(item, Text)]
        for first, second in combinations(own, 2):
            assert not shape(first).intersects(shape(second)), (first.text, second.text)


def test_rows_are_named_like_a_spreadsheets_columns():
    assert [row_name(k) for k in (0, 25, 26, 27, 52)] == ["A", "Z", "AA", "AB", "BA"]


def test_too_many_sheets_are_refused_with_a_way_out():
    far = ROADSTER.with_point("left", names.WHEEL_CENTER,
                              ROADSTER.left[names.WHEEL_CENTER]._replace(over=9000.0))
    with pytest.raises(DrawingError, match="Choose larger paper"):
        grid_for(pattern(solve(far), "front view"), LETTER)
