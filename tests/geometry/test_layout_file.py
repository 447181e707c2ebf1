"""Layout files: what is written reads back, and every fault is told at its place."""

from __future__ import annotations

import json
from collections.abc import Callable
from dataclasses import fields, replace
from math import nan, radians
from pathlib import Path
from typing import Any

import jsonschema
import pytest

from geometry import layout_file
from geometry.layout import Job, Layout, Loads, NoGo, Point, RelayRod, Side, Spring, Target, Tire
from geometry.layout_file import (
    LayoutFileError,
    job_from_text,
    job_to_text,
    layout_schema,
    layout_schema_text,
    read_job,
    write_job,
)
from tests.sample_cars import DEGENERATE, RELAY_CAR, ROADSTER, SAMPLES

FULL = Job(
    planned=replace(
        RELAY_CAR.unlinked(),
        loads=Loads(1040.0, 0.52, 80.0, 110.0, 310.0, 320.0, 25.0, 22.0, 12.0, 3.0, 240.0, 1420.0),
        no_go=(
            NoGo("rail", ((1.0, 2.0), (3.5, 2.0), (3.5, 9.25)), "above", "right", 6.0),
            NoGo("oil pan", ((0.0, 0.0), (10.0, 0.0), (10.0, 5.0))),
        ),
        targets=(
            Target("roll center height", 10.0, 50.0),
            Target("camber gain", low=radians(0.5) / 25.4),
        ),
        tolerances={"toe range": 1.0, "lower arm slope": radians(7.0), "camber gain low": 0.001},
        locked=frozenset({"tie rod outer", "wheel center"}),
        assumed=("Fore of the outer tie rod was not measured.",),
    ),
    found=ROADSTER,
    shop="Harrow Lane",
    customer="Ünal “the wrench”",
    notes="Two lines,\nand a tab\t.",
    stance="1 in lower by spring",
)
JOBS = {
    **SAMPLES,
    "full": FULL,
    **{name: Job(car) for name, car in DEGENERATE.items()},
}


@pytest.mark.parametrize("name", JOBS)
def test_a_job_reads_back_the_same_and_writes_the_same_bytes(name: str) -> None:
    text = job_to_text(JOBS[name])
    assert job_from_text(text) == JOBS[name]
    assert job_to_text(job_from_text(text)) == text


@pytest.mark.parametrize("name", JOBS)
def test_what_is_written_fits_the_schema(name: str) -> None:
    validator = jsonschema.Draft202012Validator(layout_schema())
    validator.validate(json.loads(job_to_text(JOBS[name])))


def test_the_schema_file_is_the_one_that_the_table_makes() -> None:
    # Written anew by `python -m tests.write_layout_schema`, after any new tolerance or entry.
    file = Path(layout_file.__file__).with_name("layout.schema.json")
    assert file.read_text(encoding="utf-8") == layout_schema_text()
    jsonschema.Draft202012Validator.check_schema(layout_schema())


@pytest.mark.parametrize(
    ("record", "kind"),
    [
        (layout_file._JOB, Job),
        (layout_file._LAYOUT, Layout),
        (layout_file._SIDE, Side),
        (layout_file._TIRE, Tire),
        (layout_file._SPRING, Spring),
        (layout_file._LOADS, Loads),
        (layout_file._NO_GO, NoGo),
        (layout_file._RELAY, RelayRod),
    ],
)
def test_no_attribute_of_the_car_is_left_out_of_the_file(record: Any, kind: Any) -> None:
    assert {f.attribute for f in record.fields} == {f.name for f in fields(kind)}


def test_the_file_states_its_units_and_holds_angles_in_degrees() -> None:
    data = json.loads(job_to_text(FULL))
    assert (data["lengths"], data["angles"]) == ("mm", "deg")
    planned = data["as planned"]
    assert planned["left"]["static camber"] == -0.5
    assert planned["tolerances"]["lower arm slope"] == 7
    assert planned["targets"][1]["low"] * 25.4 == pytest.approx(0.5, rel=1e-15)
    assert planned["left"]["points"]["lower ball joint"] == {
        "over": 620.7125, "up": 171.45, "fore": 6.35
    }


def test_a_negative_zero_is_written_as_zero() -> None:
    job = Job(ROADSTER.with_point("left", "wheel center", Point(711.2, 317.5, -0.0)))
    assert '"fore": -0' not in job_to_text(job)


def test_very_small_numbers_come_back_exactly() -> None:
    side = replace(ROADSTER.left, static_toe=5e-324, static_camber=1.234e-17)
    job = Job(replace(ROADSTER, left=side.moved("wheel center", Point(700.0, 300.0, 1e-300))))
    assert job_from_text(job_to_text(job)) == job


def test_left_out_entries_mean_their_defaults() -> None:
    data = json.loads(job_to_text(Job(ROADSTER)))
    for key in ("as found", "shop", "customer", "notes", "stance"):
        del data[key]
    planned = data["as planned"]
    for key in ("right", "steering", "loads", "no-go shapes", "targets", "assumed"):
        del planned[key]
    del planned["left"]["points"]["lower inner pivot"]["fore"]
    job = job_from_text(json.dumps(data))
    assert job.planned.loads == Loads()
    assert job == Job(replace(ROADSTER, loads=Loads(), no_go=(), targets=(), assumed=()))


# --- faults ------------------------------------------------------------------------


def faults_after(change: Callable[[dict[str, Any]], None], job: Job = FULL) -> tuple[str, ...]:
    data = json.loads(job_to_text(job))
    change(data)
    with pytest.raises(LayoutFileError) as caught:
        job_from_text(json.dumps(data))
    return caught.value.faults


def put(*path: Any, value: Any) -> Callable[[dict[str, Any]], None]:
    def change(data: Any) -> None:
        for key in path[:-1]:
            data = data[key]
        data[path[-1]] = value

    return change


def cut(*path: Any) -> Callable[[dict[str, Any]], None]:
    def change(data: Any) -> None:
        for key in path[:-1]:
            data = data[key]
        del data[path[-1]]

    return change


BALL = ("as planned", "left", "points", "lower ball joint")
BALL_AT = "as planned › left › points › lower ball joint"
RANGE = f"{BALL_AT} › over: expected a length in mm from -1,000,000 to 1,000,000"


@pytest.mark.parametrize(
    ("change", "fault"),
    [
        (put(*BALL, "over", value="abc"), f'{BALL_AT} › over: expected a length in mm, got "abc".'),
        (put(*BALL, "over", value=True), f"{BALL_AT} › over: expected a length in mm, got true."),
        (put(*BALL, "over", value=None), f"{BALL_AT} › over: expected a length in mm, got null."),
        (
            put(*BALL, "over", value=[1]),
            f"{BALL_AT} › over: expected a length in mm, got a list of 1.",
        ),
        (
            put(*BALL, "over", value=nan),
            f"{RANGE}, got NaN.",
        ),
        (
            put(*BALL, "over", value=float("inf")),
            f"{RANGE}, got Infinity.",
        ),
        (
            put(*BALL, "over", value=-1000001),
            f"{RANGE}, got -1000001.",
        ),
        (put(*BALL, value=7), f"{BALL_AT}: expected a group of entries, got 7."),
        (cut(*BALL, "up"), f"{BALL_AT} › up: is missing."),
        (
            put(*BALL, "fwd", value=1),
            f"{BALL_AT} › fwd: is not known here. Known are: over, up, fore.",
        ),
        (cut(*BALL), "as planned › left › points: the point “lower ball joint” is missing."),
        (
            put("as planned", "left", "points", "lower inner pivot front",
                value={"over": 1, "up": 2}),
            (
                "as planned › left › points: both “lower inner pivot” and its front or rear "
                "bushing are given."
            ),
        ),
        (
            put("as planned", "left", "static camber", value=46),
            (
                "as planned › left › static camber: expected an angle in degrees from -45 to 45, "
                "got 46."
            ),
        ),
        (
            put("as planned", "shown in", value="cm"),
            'as planned › shown in: expected "in" or "mm", got "cm".',
        ),
        (put("as planned", "title", value=3), "as planned › title: expected text, got 3."),
        (
            put("as planned", "title", value="x" * 2001),
            "as planned › title: expected text of at most 2000 letters, got 2001.",
        ),
        (
            put("as planned", "title", value="\ud800"),
            "as planned › title: holds half a letter that can't be written.",
        ),
        (
            put("as planned", "no-go shapes", 0, "outline", value=[[1, 2], [3, 4]]),
            (
                "as planned › no-go shapes › 1 › outline: expected a list of 3 to 2000 entries, "
                "got a list of 2."
            ),
        ),
        (
            put("as planned", "no-go shapes", 0, "outline", 1, value=[1, 2, 3]),
            (
                "as planned › no-go shapes › 1 › outline › 2: expected two lengths in mm, "
                "got a list of 3."
            ),
        ),
        (
            put("as planned", "steering", "kind", value="tiller"),
            'as planned › steering › kind: expected "rack" or "relay rod", got "tiller".',
        ),
        (
            put("as planned", "loads", "front share", value=1.5),
            "as planned › loads › front share: expected a share from 0 to 1, got 1.5.",
        ),
        (put("lengths", value="in"), 'lengths: expected "mm", got "in".'),
        (cut("angles"), 'angles: is missing; expected "deg".'),
        (cut("as planned"), "as planned: is missing."),
        (
            put("version", value=2),
            "This layout was made by a newer Bobline. Update to open it.",
        ),
        (put("version", value="1"), 'version: expected 1, got "1".'),
        (put("version", value=True), "version: expected 1, got true."),
        (cut("version"), "version: is missing; expected 1."),
        (
            put("format", value="cake"),
            'This is not a layout file: it does not hold "format": "bobline layout".',
        ),
    ],
)
def test_a_fault_is_told_with_its_place(
    change: Callable[[dict[str, Any]], None], fault: str
) -> None:
    assert faults_after(change) == (fault,)


def test_an_unknown_figure_or_tolerance_is_told_with_the_known_ones() -> None:
    (fault,) = faults_after(put("as planned", "targets", 0, "figure", value="hat size"))
    assert fault.startswith("as planned › targets › 1 › figure: expected ")
    assert '"camber gain"' in fault and '"roll center height"' in fault
    (fault,) = faults_after(put("as planned", "tolerances", "luck", value=1))
    assert fault.startswith("as planned › tolerances › luck: is not known here.")
    assert "toe range" in fault


def test_a_strut_beside_an_upper_arm_is_told() -> None:
    strut = put("as planned", "left", "points", "strut top mount", value={"over": 1, "up": 2})
    assert faults_after(strut) == (
        "as planned › left › points: the point “strut lower mount” is missing.",
        "as planned › left › points: both a strut and an upper arm are given.",
    )


def test_all_faults_are_told_at_once() -> None:
    def change(data: dict[str, Any]) -> None:
        put(*BALL, "over", value="abc")(data)
        put("as found", "wheelbase", value=-3)(data)
        put("color", value="red")(data)

    assert [fault.split(":")[0] for fault in faults_after(change)] == [
        "color", f"{BALL_AT} › over", "as found › wheelbase"
    ]


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("", "Line 1, column 1: the text breaks off or is no JSON"),
        ('{"format": "bobline layout",\n"version": 1', "Line 2, column"),
        ("[]", "This is not a layout file"),
        ("[" * 200_000, "nested too deep"),
        ('{"a":' * 200_000, "nested too deep"),
        ("9" * 500, "is too long"),
        ('{"format": "bobline layout", "version": 1, "version": 1}',
         'The entry "version" stands twice in one group.'),
    ],
)
def test_a_text_that_is_no_layout_is_refused(text: str, words: str) -> None:
    with pytest.raises(LayoutFileError, match=words):
        job_from_text(text)


@pytest.mark.parametrize("number", ["1e400", "-1e999999999", "1e99999999999999999999", "1" * 100])
def test_huge_numbers_are_refused_at_their_place(number: str) -> None:
    text = job_to_text(Job(ROADSTER)).replace('"over": 711.2', f'"over": {number}')
    with pytest.raises(LayoutFileError, match="wheel center › over: expected a length in mm from"):
        job_from_text(text)


def test_tiny_numbers_cost_nothing() -> None:
    text = job_to_text(Job(ROADSTER)).replace(
        '"static camber": -0.5', '"static camber": 1e-999999999'
    )
    assert job_from_text(text).planned.left.static_camber == 0.0


def test_faults_hold_no_control_letters() -> None:
    (fault,) = faults_after(put("\x1b[2J\ud800", value=1))
    assert fault.isprintable()


def test_a_job_that_could_not_be_read_again_does_not_replace_a_good_file(tmp_path: Path) -> None:
    file = tmp_path / "a.bobline"
    write_job(file, FULL)
    before = file.read_bytes()
    bad = Job(ROADSTER.with_point("left", "wheel center", Point(nan, 317.5)))
    with pytest.raises(LayoutFileError, match=r"wheel center › over: .* got NaN"):
        write_job(file, bad)
    with pytest.raises(LayoutFileError, match="tolerances › luck: is not known"):
        write_job(file, Job(replace(ROADSTER, tolerances={"luck": 1.0})))
    assert file.read_bytes() == before
    assert read_job(file) == FULL


def test_a_file_with_a_byte_order_mark_is_read(tmp_path: Path) -> None:
    file = tmp_path / "a.bobline"
    file.write_text(job_to_text(FULL), encoding="utf-8-sig")
    assert read_job(file) == FULL


def test_files_that_can_not_be_read_are_layout_faults(tmp_path: Path) -> None:
    with pytest.raises(LayoutFileError, match="folder"):
        read_job(tmp_path)
    (tmp_path / "a").write_bytes(b"x" * (layout_file.SIZE_LIMIT + 1))
    with pytest.raises(LayoutFileError, match="larger than 8 MB"):
        read_job(tmp_path / "a")
    (tmp_path / "a").write_bytes(b"\xff\xfe\x7b\x00")
    with pytest.raises(LayoutFileError, match="UTF-16"):
        read_job(tmp_path / "a")
