"""Any job at all comes back from its file exactly, and any damage is told in words."""

from __future__ import annotations

import json
from typing import Any

import jsonschema
from hypothesis import given, settings
from hypothesis import strategies as st

from geometry.layout import (
    RELAY_POINTS,
    SIDE_POINTS,
    Job,
    Layout,
    Loads,
    NoGo,
    Point,
    Rack,
    RelayRod,
    Side,
    Spring,
    Target,
    Tire,
)
from geometry.layout_file import LayoutFileError, job_from_text, job_to_text, layout_schema
from geometry.tolerances import FIGURES, TOLERANCES

LENGTH = st.floats(-1e6, 1e6)
SIZE = st.floats(0.0, 1e6)
ANGLE = st.floats(-0.785, 0.785)
RATE = st.floats(0.0, 1e6)
MAYBE = st.none() | LENGTH
TEXT = st.text(st.characters(exclude_categories=["Cs"]), max_size=30)
POINT = st.builds(Point, LENGTH, LENGTH, LENGTH)
NAME_SETS = st.sampled_from(
    [
        ("lower inner pivot", "upper inner pivot", "upper ball joint"),
        (
            "lower inner pivot front", "lower inner pivot rear",
            "upper inner pivot front", "upper inner pivot rear", "upper ball joint",
        ),
        ("lower inner pivot", "strut top mount", "strut lower mount"),
    ]
)
COMMON = ("lower ball joint", "tie rod inner", "tie rod outer", "wheel center")
SPRINGS = st.sampled_from([(), ("spring top mount", "spring lower mount")])
SIDE = st.builds(
    Side,
    points=st.tuples(NAME_SETS, SPRINGS).flatmap(
        lambda sets: st.fixed_dictionaries(dict.fromkeys((*COMMON, *sets[0], *sets[1]), POINT))
    ),
    tire=st.builds(Tire, SIZE, SIZE, SIZE, SIZE, LENGTH, TEXT),
    static_camber=ANGLE,
    static_toe=ANGLE,
    spring=st.builds(
        Spring,
        st.none() | RATE,
        st.sampled_from(["lower arm", "upper arm", "knuckle"]),
        st.none() | SIZE,
        st.none() | SIZE,
    ),
)
LAYOUT = st.builds(
    Layout,
    left=SIDE,
    right=st.none() | SIDE,
    steering=st.builds(Rack)
    | st.builds(RelayRod, POINT, POINT, POINT, POINT, st.sampled_from(["left", "right"])),
    title=TEXT,
    units=st.sampled_from(["in", "mm"]),
    wheelbase=st.none() | st.floats(1.0, 1e6),
    cg_height=MAYBE,
    loads=st.builds(
        Loads, st.none() | RATE, st.none() | st.floats(0, 1), RATE, RATE, MAYBE, MAYBE,
        st.none() | RATE, st.none() | RATE, RATE, RATE, MAYBE, st.none() | st.floats(1.0, 1e6),
    ),
    no_go=st.lists(
        st.builds(
            NoGo,
            TEXT,
            st.lists(st.tuples(LENGTH, LENGTH), min_size=3, max_size=5).map(tuple),
            st.sampled_from(["front", "above"]),
            st.sampled_from([None, "left", "right"]),
            SIZE,
        ),
        max_size=2,
    ).map(tuple),
    targets=st.lists(
        st.builds(
            Target,
            st.sampled_from(sorted(FIGURES)),
            st.none() | st.floats(-6, 6),
            st.none() | st.floats(-6, 6),
        ),
        max_size=3,
    ).map(tuple),
    tolerances=st.dictionaries(st.sampled_from(sorted(TOLERANCES)), st.floats(-6, 6), max_size=3),
    locked=st.frozensets(st.sampled_from(SIDE_POINTS + RELAY_POINTS), max_size=4),
    assumed=st.lists(TEXT, max_size=2).map(tuple),
)
JOB = st.builds(Job, LAYOUT, st.none() | LAYOUT, TEXT, TEXT, TEXT, TEXT)
VALIDATOR = jsonschema.Draft202012Validator(layout_schema())


@settings(deadline=None, max_examples=40)
@given(JOB)
def test_any_job_comes_back_exactly(job: Job) -> None:
    text = job_to_text(job)
    again = job_from_text(text)
    assert again == job
    assert job_to_text(again) == text
    VALIDATOR.validate(json.loads(text))


JUNK = st.sampled_from(
    [None, True, -1, 3.5, 1e7, "", "left", [], [1, 2], {}, {"over": 1}, {"kind": []}, float("nan")]
)


@settings(deadline=None, max_examples=40)
@given(JOB, st.data())
def test_any_damage_is_told_in_words_or_harmless(job: Job, data: st.DataObject) -> None:
    tree = json.loads(job_to_text(job))
    here: Any = tree
    while True:
        keys = list(here) if isinstance(here, dict) else list(range(len(here)))
        key = data.draw(st.sampled_from(keys))
        if isinstance(here[key], dict | list) and here[key] and data.draw(st.booleans()):
            here = here[key]
            continue
        here[key] = data.draw(JUNK)
        break
    faults: tuple[str, ...] = ()
    read = None
    try:
        read = job_from_text(json.dumps(tree))
    except LayoutFileError as error:
        faults = error.faults
    assert isinstance(read, Job) or (all(fault.endswith(".") for fault in faults) and faults)


@settings(deadline=None)
@given(st.text(max_size=200) | st.binary(max_size=200).map(lambda b: b.decode("latin-1")))
def test_any_text_is_refused_in_words(text: str) -> None:
    faults: tuple[str, ...] = ()
    try:
        job_from_text(text)
    except LayoutFileError as error:
        faults = error.faults
    assert faults
