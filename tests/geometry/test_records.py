"""Kinds of values in a layout file: what each takes, refuses with its place, and describes."""

from __future__ import annotations

import json
import math
from dataclasses import dataclass
from decimal import Decimal
from typing import Any

import jsonschema
import pytest

from geometry.records import (
    POINT,
    Angle,
    Choice,
    Faults,
    Field,
    Items,
    Maybe,
    Named,
    Number,
    Pair,
    Raw,
    Record,
    Text,
    describe,
    length,
    number_text,
)


def read(kind: Any, raw: Any) -> tuple[Any, list[str]]:
    faults = Faults()
    value = kind.read(raw, "here", faults)
    return value, faults.found


TAKEN: list[tuple[Any, Any, Any]] = [
    (Number(), Decimal("1.5"), 1.5),
    (Number(), 7, 7.0),
    (Number(low=0.0, high=1.0), Decimal(1), 1.0),
    (length(), Decimal("-1000000"), -1e6),
    (Angle(), Decimal("180"), math.pi),
    (Angle(), Decimal("1e-500"), 0.0),
    (Text(), "Harrow Lane", "Harrow Lane"),
    (Choice(("in", "mm")), "mm", "mm"),
    (Maybe(Number()), None, None),
    (Maybe(Number()), 2, 2.0),
    (Items(Number()), [1, 2], (1.0, 2.0)),
    (Pair(), [1, Decimal("2.5")], (1.0, 2.5)),
    (POINT, {"over": 1, "up": 2}, (1.0, 2.0, 0.0)),
    (Named({"a": Number(), "b": Number()}), {"b": 2}, {"b": 2.0}),
]


@pytest.mark.parametrize(("kind", "raw", "value"), TAKEN)
def test_what_fits_is_taken_and_allowed_by_the_schema(kind: Any, raw: Any, value: Any) -> None:
    got, faults = read(kind, raw)
    assert got == value
    assert faults == []
    schema = kind.definition() if isinstance(kind, Record) else kind.schema()
    jsonschema.validate(json.loads(json.dumps(raw, default=float)), schema)


REFUSED: list[tuple[Any, Any, str]] = [
    (Number(), "1", 'here: expected a number, got "1".'),
    (Number(), True, "here: expected a number, got true."),
    (Number(), None, "here: expected a number, got null."),
    (Number(low=0.0, high=1.0), 2, "here: expected a number from 0 to 1, got 2."),
    (Number(), Decimal("NaN"), "got NaN."),
    (length(), Decimal("Infinity"), "got Infinity."),
    (Angle(45.0), 50, "here: expected an angle in degrees from -45 to 45, got 50."),
    (Angle(), Decimal("NaN"), "got NaN."),
    (Text(), 3, "here: expected text, got 3."),
    (Text(4), "abcde", "here: expected text of at most 4 letters, got 5."),
    (Text(), "\ud800", "here: holds half a letter that can't be written."),
    (Choice(("in", "mm")), "cm", 'here: expected "in" or "mm", got "cm".'),
    (Choice(("in", "mm")), ["in"], "got a list of 1."),
    (Maybe(Number()), False, "here: expected a number, got false."),
    (Items(Number(), least=1), [], "here: expected a list of 1 to 2000 entries, got a list of 0."),
    (Items(Number(), most=1), [1, 2], "expected a list of 0 to 1 entries, got a list of 2."),
    (Items(Number()), {}, "got a group of entries."),
    (Items(Number()), [1, "x"], 'here › 2: expected a number, got "x".'),
    (Pair(), [1], "here: expected two lengths in mm, got a list of 1."),
    (Pair(), [1, "x"], 'here: expected a length in mm, got "x".'),
    (POINT, [], "here: expected a group of entries, got a list of 0."),
    (POINT, {"over": 1}, "here › up: is missing."),
    (POINT, {"over": 1, "up": 2, "left": 3}, "here › left: is not known here. Known are: over,"),
    (Named({"a": Number()}), [], "here: expected a group of entries, got a list of 0."),
    (Named({"a": Number()}), {"z": 1}, "here › z: is not known here. Known are: a."),
    (Named({"a": Number()}), {"a": "x"}, 'here › a: expected a number, got "x".'),
    (Named({"a": Number()}, lambda _: ["it is wrong."]), {}, "here: it is wrong."),
]


@pytest.mark.parametrize(("kind", "raw", "words"), REFUSED)
def test_what_does_not_fit_is_told_with_its_place(kind: Any, raw: Any, words: str) -> None:
    _, faults = read(kind, raw)
    assert len(faults) == 1
    assert words in faults[0]


def test_all_faults_of_a_group_are_told_at_once_and_nothing_is_made() -> None:
    value, faults = read(POINT, {"over": "x", "fore": None, "z": 1})
    assert value is None
    assert [fault.split(":")[0] for fault in faults] == [
        "here › z", "here › over", "here › up", "here › fore",
    ]  # fmt: skip


def test_faults_end_somewhere_and_places_can_be_nothing() -> None:
    faults = Faults()
    for number in range(500):
        faults.add("", f"fault {number}.")
    assert len(faults.found) == 200
    assert faults.found[0] == "fault 0."


@dataclass(frozen=True)
class Even:
    size: float

    def __post_init__(self) -> None:
        if self.size % 2:
            raise ValueError("It must be even.")


EVEN = Record(Even, (Field("size", "size", Number()),), fixed=(("kind", "even"),), note="Even.")


def test_an_object_that_can_not_be_made_is_a_fault() -> None:
    assert read(EVEN, {"kind": "even", "size": 4}) == (Even(4.0), [])
    assert read(EVEN, {"kind": "even", "size": 3}) == (None, ["here: It must be even."])
    assert read(EVEN, {"size": 4})[1] == ['here › kind: is missing; expected "even".']
    assert read(EVEN, {"kind": [], "size": 4})[1] == [
        'here › kind: expected "even", got a list of 0.'
    ]
    assert EVEN.schema()["description"] == "Even."
    assert EVEN.write(Even(2.0)) == {"kind": "even", "size": "2"}


def test_values_are_written_as_they_are_read() -> None:
    assert Angle().write(math.radians(0.5)) == "0.5"
    assert Angle().write(math.nan) == "NaN"
    assert Angle().write(1e-15) == str(Angle().write(1e-15)).upper() != "0"
    assert Items(Choice(("b", "a")), sort=True).write(("b", "a")) == ["a", "b"]
    assert Pair().write((1.0, 2.5)) == ["1", "2.5"]
    assert Maybe(Number()).write(None) is None
    assert Named({"a": Number()}).write({"a": 1.0, "lost": 2.0}) == {"a": "1", "lost": None}
    for value in (0.0, -0.0, 1e-300, 1e300, 0.1, 12345.0):
        assert float(number_text(value)) == value
    assert number_text(-0.0) == "0"
    assert number_text(-math.inf) == "Infinity"
    assert isinstance(number_text(1.0), Raw)


def test_what_was_found_is_said_shortly() -> None:
    assert describe("x" * 100) == '"' + "x" * 40 + '"'
    assert describe(Decimal("1" * 100)) == "1" * 40
    assert describe({}) == "a group of entries"
    assert describe("\x1b[31m") == '"\ufffd[31m"'
