"""Layout files: a Job as JSON text with a version, and back, with every fault in words.

The format is described for people in FILES.md and for programs in layout.schema.json,
which is made from the same table as the reading and writing here.
"""

from __future__ import annotations

import json
from collections.abc import Mapping
from dataclasses import dataclass
from decimal import Decimal, InvalidOperation
from pathlib import Path
from typing import Any

from geometry import records
from geometry.layout import (
    SIDE_POINTS,
    SIDES,
    RELAY_POINTS,
    Job,
    Layout,
    Loads,
    NoGo,
    Rack,
    RelayRod,
    Side,
    Spring,
    Target,
    Tire,
    needed_points,
)
from geometry.records import (
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
    Schema,
    Text,
    describe,
    length,
)
from geometry.text_file import TextFileError, read_text_file, write_text_file
from geometry.tolerances import FIGURES, TOLERANCES

FORMAT = "bobline layout"
VERSION = 1
SIZE_LIMIT = 8_000_000
DEPTH_LIMIT = 40


class LayoutFileError(ValueError):
    """A text that is no layout file; ``faults`` holds every fault as a plain sentence."""

    def __init__(self, *faults: str) -> None:
        super().__init__("\n".join(faults))
        self.faults = faults


def _check_points(present: Mapping[str, Any]) -> list[str]:
    words = [f"the point “{name}” is missing." for name in needed_points(present)]
    for arm in ("lower", "upper"):
        single = f"{arm} inner pivot"
        if single in present and (f"{single} front" in present or f"{single} rear" in present):
            words.append(f"has both “{single}” and its front or rear bushing; give one kind.")
    strut = "strut top mount" in present or "strut lower mount" in present
    if strut and any(name.startswith("upper ") for name in present):
        words.append("has both a strut and an upper arm; give one of them.")
    return words


_TIRE = Record(
    Tire,
    (
        Field("loaded radius", "radius", length("a length in mm above zero", 1.0)),
        Field("width", "width", length("a length in mm above zero", 1.0), Tire.width),
        Field("rim diameter", "rim_diameter", length(low=0.0), Tire.rim_diameter),
        Field("rim width", "rim_width", length(low=0.0), Tire.rim_width),
        Field("wheel offset", "offset", length(), 0.0),
        Field("size", "size", Text(60), ""),
    ),
)
_RATE = Number("a rate in N/mm", 0.0, 1e6)
_MASS = Number("a mass in kg", 0.0, 1e6)
_SPRING = Record(
    Spring,
    (
        Field("rate N/mm", "rate", Maybe(_RATE), None),
        Field(
            "lower mount on", "lower_mount_on",
            Choice(("lower arm", "upper arm", "knuckle")), "lower arm",
        ),
        Field("shortest", "shortest", Maybe(length(low=0.0)), None),
        Field("longest", "longest", Maybe(length(low=0.0)), None),
    ),
)
_SIDE = Record(
    Side,
    (
        Field("points", "points", Named(SIDE_POINTS, records.POINT, _check_points)),
        Field("static camber", "static_camber", Angle(45.0), 0.0),
        Field("static toe", "static_toe", Angle(45.0), 0.0),
        Field("tire", "tire", _TIRE),
        Field("spring", "spring", _SPRING, Spring()),
    ),
)
_RELAY_KEYS = dict(
    zip(RELAY_POINTS, ("pitman_pivot", "pitman_end", "idler_pivot", "idler_end"), strict=True)
)
_RELAY = Record(
    RelayRod,
    (
        *(Field(name, attribute, records.POINT) for name, attribute in _RELAY_KEYS.items()),
        Field("steering box side", "box_side", Choice(SIDES), "left"),
    ),
    fixed=(("kind", "relay rod"),),
)
_RACK = Record(Rack, (), fixed=(("kind", "rack"),))


@dataclass(frozen=True)
class _Steering:
    """A rack or a relay rod, told apart by the entry ``kind``."""

    def write(self, value: Rack | RelayRod) -> Any:
        return _RELAY.write(value) if isinstance(value, RelayRod) else _RACK.write(value)

    def read(self, raw: Any, place: str, faults: Faults) -> Any:
        kind = raw.get("kind") if isinstance(raw, dict) else None
        record: Record[Any] = _RELAY if kind == "relay rod" else _RACK
        return record.read(raw, place, faults)

    def schema(self) -> Schema:
        return {"oneOf": [_RACK.schema(), _RELAY.schema()]}


_LOADS = Record(
    Loads,
    (
        Field("sprung mass kg", "sprung_mass", Maybe(_MASS), None),
        Field("front share", "front_share", Maybe(Number("a share", 0.0, 1.0)), None),
        Field("unsprung mass front kg", "unsprung_front", _MASS, 0.0),
        Field("unsprung mass rear kg", "unsprung_rear", _MASS, 0.0),
        Field("unsprung height front", "unsprung_front_height", Maybe(length()), None),
        Field("unsprung height rear", "unsprung_rear_height", Maybe(length()), None),
        Field("front wheel rate N/mm", "front_wheel_rate", Maybe(_RATE), None),
        Field("rear wheel rate N/mm", "rear_wheel_rate", Maybe(_RATE), None),
        Field("front bar rate N/mm", "front_bar_rate", _RATE, 0.0),
        Field("rear bar rate N/mm", "rear_bar_rate", _RATE, 0.0),
        Field("rear roll center height", "rear_roll_center_height", Maybe(length()), None),
        Field("rear track", "rear_track", Maybe(length(low=1.0)), None),
    ),
)
_NO_GO = Record(
    NoGo,
    (
        Field("name", "name", Text(200)),
        Field("outline", "outline", Items(Pair(), least=3)),
        Field("view", "view", Choice(("front", "above")), "front"),
        Field("side", "side", Maybe(Choice(SIDES)), None),
        Field("clearance", "clearance", length(low=0.0), NoGo.clearance),
    ),
)
_TARGET = Record(
    Target,
    (
        Field("figure", "figure", Choice(tuple(FIGURES))),
        Field("low", "low", Maybe(Number()), None),
        Field("high", "high", Maybe(Number()), None),
    ),
    note="Limits in mm, rad, or per mm of travel.",
)
_LAYOUT = Record(
    Layout,
    (
        Field("title", "title", Text(200), "Untitled"),
        Field("shown in", "units", Choice(("in", "mm")), "in"),
        Field("left", "left", _SIDE),
        Field("right", "right", Maybe(_SIDE), None),
        Field("steering", "steering", _Steering(), Rack()),
        Field("wheelbase", "wheelbase", Maybe(length(low=1.0)), None),
        Field("center of gravity height", "cg_height", Maybe(length()), None),
        Field("loads", "loads", _LOADS, Loads()),
        Field("no-go shapes", "no_go", Items(_NO_GO), ()),
        Field("targets", "targets", Items(_TARGET), ()),
        Field("tolerances", "tolerances", Named(tuple(TOLERANCES), Number()), {}),
        Field(
            "locked nails", "locked",
            Items(Choice(SIDE_POINTS + RELAY_POINTS), sort=True), frozenset(),
        ),
        Field("assumed", "assumed", Items(Text()), ()),
    ),
    note="One car. Right is null while it mirrors the left.",
)
_JOB = Record(
    Job,
    (
        Field("as planned", "planned", _LAYOUT),
        Field("as found", "found", Maybe(_LAYOUT), None),
        Field("shop", "shop", Text(200), ""),
        Field("customer", "customer", Text(200), ""),
        Field("notes", "notes", Text(20_000), ""),
        Field("stance", "stance", Text(200), ""),
    ),
    fixed=(("format", FORMAT), ("lengths", "mm"), ("angles", "deg")),
)


def layout_schema() -> Schema:
    """The JSON Schema of layout files, from the same table that reads and writes them."""
    schema = _JOB.schema()
    schema["properties"] = {"version": {"const": VERSION}, **schema["properties"]}
    schema["required"].append("version")
    return {
        "$schema": "https://json-schema.org/draft/2020-12/schema",
        "title": "Bobline layout file",
        "description": "Lengths in mm, angles in degrees. See FILES.md.",
        **schema,
    }


# --- writing -----------------------------------------------------------------------


def job_to_text(job: Job) -> str:
    """A job as the text of a layout file; the same job always gives the same text."""
    record = _JOB.write(job)
    head = {"format": record.pop("format"), "version": Raw(str(VERSION))}
    return _json({**head, **record}, "") + "\n"


def _json(value: Any, indent: str) -> str:
    """JSON text with numbers as they were written; small groups of numbers on one line."""
    if isinstance(value, Raw):
        return str(value)
    if not isinstance(value, dict | list):
        return json.dumps(value, ensure_ascii=False)
    if not value:
        return "{}" if isinstance(value, dict) else "[]"
    deeper = indent + "  "
    if isinstance(value, dict):
        parts = [
            f"{json.dumps(k, ensure_ascii=False)}: {_json(v, deeper)}" for k, v in value.items()
        ]
    else:
        parts = [_json(v, deeper) for v in value]
    opening, closing = ("{", "}") if isinstance(value, dict) else ("[", "]")
    members = list(value.values()) if isinstance(value, dict) else value
    if all(isinstance(member, Raw) for member in members) and len(members) <= 4:
        return f"{opening}{', '.join(parts)}{closing}"
    separator = f",\n{deeper}"
    return f"{opening}\n{deeper}{separator.join(parts)}\n{indent}{closing}"


def write_job(path: Path | str, job: Job) -> None:
    """Save a job; the old file stands until the new one is safely on disk. Raises OSError."""
    write_text_file(path, job_to_text(job))


# --- reading -----------------------------------------------------------------------


def read_job(path: Path | str) -> Job:
    """A job from a layout file. Raises LayoutFileError with every fault, or OSError."""
    try:
        text = read_text_file(path, SIZE_LIMIT)
    except TextFileError as error:
        raise LayoutFileError(*error.faults) from None
    return job_from_text(text)


def job_from_text(text: str) -> Job:
    """A job from the text of a layout file. Raises LayoutFileError with every fault."""
    raw = _parse(text)
    if not isinstance(raw, dict) or raw.get("format") != FORMAT:
        raise LayoutFileError(
            f'This is not a layout file: it does not start with "format": "{FORMAT}".'
        )
    version = raw.pop("version", None)
    if version != VERSION or isinstance(version, bool):
        if isinstance(version, int) and version > VERSION:
            raise LayoutFileError("This layout was made by a newer Bobline. Update to open it.")
        raise LayoutFileError(f"version: expected {VERSION}, got {describe(version)}.")
    faults = Faults()
    job = _JOB.read(raw, "", faults)
    if faults.found:
        raise LayoutFileError(*faults.found)
    assert isinstance(job, Job)
    return job


def _number(text: str) -> Decimal:
    if len(text) > 400:
        raise LayoutFileError(f"The number {text[:20]}… is too long.")
    try:
        value = Decimal(text)
    except InvalidOperation:
        raise LayoutFileError(f"The number {text[:20]}… can't be read.") from None
    # An exponent out of any car's range would cost time and memory as an exact fraction.
    if not -60 <= value.adjusted() <= 60 and value != 0:
        raise LayoutFileError(f"The number {text[:40]} is out of any range.")
    return value


def _constant(text: str) -> Any:
    raise LayoutFileError(f"{text} is not a number that a layout can hold.")


def _group(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    group = dict(pairs)
    if len(group) != len(pairs):
        seen: set[str] = set()
        for key, _ in pairs:
            if key in seen:
                raise LayoutFileError(f'The entry "{key[:60]}" stands twice in one group.')
            seen.add(key)
    return group


def _parse(text: str) -> Any:
    """JSON text as plain data, numbers exact; every trouble as a LayoutFileError."""
    if _depth(text) > DEPTH_LIMIT:
        raise LayoutFileError("The groups in this file are nested too deep for a layout.")
    try:
        return json.loads(
            text,
            parse_float=_number,
            parse_int=_number_or_int,
            parse_constant=_constant,
            object_pairs_hook=_group,
        )
    except json.JSONDecodeError as error:
        raise LayoutFileError(
            f"Line {error.lineno}, column {error.colno}: the text breaks off or is no JSON "
            f"({error.msg[:1].lower()}{error.msg[1:]})."
        ) from None


def _number_or_int(text: str) -> int | Decimal:
    return int(text) if len(text) < 19 else _number(text)


def _depth(text: str) -> int:
    """How deep brackets are nested, strings left out."""
    depth = deepest = 0
    inside = skip = False
    for letter in text:
        if skip:
            skip = False
        elif inside:
            if letter == "\\":
                skip = True
            elif letter == '"':
                inside = False
        elif letter == '"':
            inside = True
        elif letter in "[{":
            depth += 1
            deepest = max(deepest, depth)
        elif letter in "]}":
            depth -= 1
    return deepest
