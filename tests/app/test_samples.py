"""Every sample opens through the one door, and shows what its name says."""

from __future__ import annotations

import math
from pathlib import Path

import numpy as np
import pytest

from app.resources import data_path, sample_paths
from geometry.findings import findings
from geometry.layout import TIE_INNER, Job
from geometry.layout_file import job_to_text
from geometry.open_file import open_job
from geometry.solution import Solution, solve
from tests.sample_cars import CARS, CUT, ROADSTER, SAMPLES
from tests.write_sample_layouts import write

SPAN = 76.2
"""Three inches each way, mm."""
INCH = 25.4


def solved(name: str) -> Solution:
    return solve(open_job(data_path("sample_layouts") / name).planned, 0.0, 0.0, SPAN)


def codes(solution: Solution) -> set[str]:
    return {finding.code for finding in findings(solution) if finding.severity != "note"}


def test_the_files_are_what_the_table_of_sample_cars_gives(tmp_path: Path):
    written = {path.name: path.read_text(encoding="utf-8") for path in write(tmp_path)}
    there = {
        path.name: path.read_text(encoding="utf-8")
        for path in sample_paths()
        if path.suffix == ".bobline"
    }
    assert there.keys() == written.keys()
    # Numbers may differ in their last digits from one machine's arithmetic to another's.
    for name in written:
        fresh, kept = SAMPLES[Path(name).stem], open_job(data_path("sample_layouts") / name)
        assert_same_car(fresh, kept)


def assert_same_car(first: Job, second: Job) -> None:
    for side, name in first.planned.nails():
        assert first.planned.point(side, name) == pytest.approx(
            second.planned.point(side, name), abs=1e-6
        )
    assert (first.found is None) == (second.found is None)
    assert (first.shop, first.notes, first.stance, first.planned.title) == (
        second.shop, second.notes, second.stance, second.planned.title,
    )  # fmt: skip


@pytest.mark.parametrize("path", sample_paths(), ids=lambda p: p.name)
def test_every_sample_opens_and_assembles_over_three_inches_each_way(path: Path):
    job = open_job(path)
    assert job.planned.title
    assert job.planned.assumed == ()
    solution = solve(job.planned, 0.0, 0.0, SPAN)
    for state in solution.sides.values():
        assert state.sweep.assembles.all()
        assert abs(float(state.ride.contact[2, 0])) < 0.1, "the tire stands on the floor"
        assert 0.0 < math.degrees(float(state.ride.caster[0])) < 6.0
    assert not codes(solution) & {"does-not-assemble", "points-coincide", "units-mixed"}


@pytest.mark.parametrize("path", sample_paths(), ids=lambda p: p.name)
def test_a_sample_survives_being_saved_again(path: Path, tmp_path: Path):
    job = open_job(path)
    again = tmp_path / "again.bobline"
    again.write_text(job_to_text(job), encoding="utf-8")
    assert open_job(again) == job


def test_the_healthy_roadster_is_healthy():
    solution = solved("healthy-roadster.bobline")
    state = solution.left
    assert not codes(solution)
    # A hundredth of an inch or so of toe at the tire, peak to peak, at best-fit level.
    diameter = 2.0 * state.side.tire.radius
    as_is, best = (diameter * np.sin(state.pivots.ranges[kind]) for kind in ("as is", "best fit"))
    assert as_is < 0.015 * INCH
    assert as_is < 1.25 * best
    assert solution.ride_roll_center is not None
    assert 1.0 < solution.ride_roll_center[1] / INCH < 3.0
    gain = math.degrees(INCH / float(state.ride_view.swing_arm[0]))
    assert 0.7 < gain < 0.9
    assert 2.0 < float(state.ride.scrub_radius[0]) / INCH < 3.0
    assert 7.0 < math.degrees(float(state.ride.kingpin_inclination[0])) < 9.0
    assert 3.0 < math.degrees(float(state.ride.caster[0])) < 5.0
    assert state.side[TIE_INNER].fore < 0.0, "the tie rod is behind the axle"


def test_the_measure_sheet_is_the_healthy_roadster():
    sheet = open_job(data_path("sample_layouts") / "roadster-measure-sheet.csv").planned
    assert sheet.units == "in"
    for name, point in sheet.left.points.items():
        assert point == pytest.approx(ROADSTER.left[name], abs=1e-12), name
    assert sheet.left.static_toe == ROADSTER.left.static_toe
    assert (sheet.wheelbase, sheet.cg_height) == (ROADSTER.wheelbase, ROADSTER.cg_height)
    assert not codes(solve(sheet, 0.0, 0.0, SPAN))


def test_the_low_rack_is_found_half_an_inch_low_and_its_cure_is_healthy():
    solution = solved("rack-set-low.bobline")
    assert codes(solution) == {"inner-pivot-off"}
    here, best = solution.left.side[TIE_INNER], solution.left.pivots.place("best fit")
    assert best is not None
    assert (best[1] - here.up) / INCH == pytest.approx(0.5, abs=1 / 16)
    cure = next(f.cure for f in findings(solution) if f.code == "inner-pivot-off")
    assert cure is not None
    cured = cure.applied(solution.layout)
    assert not codes(solve(cured, 0.0, 0.0, SPAN))


def test_cut_springs_stand_lower_with_the_roll_center_under_the_floor():
    job = open_job(data_path("sample_layouts") / "cut-springs.bobline")
    assert job.found is not None
    found, planned = (solve(car, 0.0, 0.0, SPAN) for car in (job.found, job.planned))
    drop = job.found.left["lower inner pivot"].up - job.planned.left["lower inner pivot"].up
    assert drop == pytest.approx(CUT, abs=1.0)
    assert {"roll-center-low", "lower-arm-not-level", "inner-pivot-off"} <= codes(planned)
    assert not codes(found)


@pytest.mark.parametrize(
    ("name", "wanted"),
    [
        ("knuckle-swap", "inner-pivot-off"),
        ("arms-sloping-wrong", "instant-center-outboard"),
        ("unequal-sides", "sides-differ"),
    ],
)
def test_a_faulty_sample_shows_its_fault(name: str, wanted: str):
    assert wanted in codes(solved(f"{name}.bobline"))


def test_parallel_equal_arms_have_neither_instant_center_nor_bump_steer():
    solution = solved("parallel-equal-arms.bobline")
    assert solution.left.ride_view.instant_center[2, 0] == 0.0
    assert solution.left.pivots.ranges["as is"] == pytest.approx(0.0, abs=1e-9)


@pytest.mark.parametrize("name", ["steering-box-sedan", "front-steer-coupe", "strut-hatch"])
def test_the_other_kinds_of_front_end_are_sound(name: str):
    assert not codes(solved(f"{name}.bobline"))


def test_the_front_steer_car_has_its_rack_ahead_and_arms_leaning_outboard():
    side = CARS["front-steer-coupe"].left
    assert side[TIE_INNER].fore > 0.0
    assert side["tie rod outer"].over > side["lower ball joint"].over


def test_missing_data_is_said_in_words():
    with pytest.raises(FileNotFoundError, match="no such folder"):
        data_path("no such folder")


def test_the_readme_lists_every_sample():
    readme = (Path(__file__).parent.parent.parent / "README.md").read_text(encoding="utf-8")
    listed = {line.split("`")[1] for line in readme.splitlines() if line.startswith("| `")}
    assert listed == {path.name for path in sample_paths()}
