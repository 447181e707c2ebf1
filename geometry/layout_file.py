"""Layout files: a Job as JSON text with a version, and back, with every fault in words.

The format is described for people in FILES.md and for programs in layout.schema.json,
which is made from the same table as the reading and writing here.
"""

from __future__ import annotations

import json
from collections import Counter
from collections.abc import Mapping
from dataclasses import dataclass
from decimal import Decimal, InvalidOperation
from pathlib import Path
from typing import Any

from geometry import records
from geometry.layout import (
    LONGEST_NAME,
    RELAY_POINTS,
    SIDE_POINTS,
    SIDES,
    Job,
    Layout,
    Loads,
    NoGo,
    Rack,
    RelayRod,
    Side,
    Spring,
    Target,
    TieRod,
    Tire,
    clashing_points,
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
from geometry.text_file import TextFileError, printable, read_text_file, write_text_file
from geometry.tolerances import FIGURES, TOLERANCES

FORMAT = "bobline layout"
VERSION = 1
SIZE_LIMIT = 8_000_000


class LayoutFileError(ValueError):
    """A text that is no layout file; ``faults`` holds every fault as a plain sentence."""

    def __init__(self, *faults: str) -> None:
        super().__init__("\n".join(faults))
        self.faults = faults


def _check_points(present: Mapping[str, Any]) -> list[str]:
    words = [f"the point “{name}” is missing." for name in needed_points(present)]
    words += [f"{clash}." for clash in clashing_points(present)]
    return words


_TIRE = Record(
    Tire,
    (
        Field("loaded radius", "radius", length(low=0.0)),
        Field("width", "width", length(low=0.0), Tire.width),
        Field("rim diameter", "rim_diameter", length(low=0.0), Tire.rim_diameter),
        Field("rim width", "rim_width", length(low=0.0), Tire.rim_width),
        Field("wheel offset", "offset", length(), 0.0),
        Field("size", "size", Text(60), ""),
    ),
    name="tire",
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
    name="spring",
)
_THREAD = Maybe(length(low=0.0))
_TIE_ROD = Record(
    TieRod,
    (
        Field("thread engaged", "thread_engaged", _THREAD, None),
        Field("thread diameter", "thread_diameter", _THREAD, None),
        Field("least engaged", "least_engaged", _THREAD, None),
        Field("measured length", "measured_length", _THREAD, None),
    ),
    name="tie rod",
)
_SIDE = Record(
    Side,
    (
        Field("points", "points", Named(dict.fromkeys(SIDE_POINTS, records.POINT), _check_points)),
        Field("static camber", "static_camber", Angle(45.0), 0.0),
        Field("static toe", "static_toe", Angle(45.0), 0.0),
        Field("tire", "tire", _TIRE),
        Field("spring", "spring", _SPRING, Spring()),
        Field("tie rod", "tie_rod", _TIE_ROD, TieRod()),
    ),
    name="side",
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
    name="relay rod",
)
_RACK = Record(Rack, (), fixed=(("kind", "rack"),), name="rack")


@dataclass(frozen=True)
class _Steering:
    """A rack or a relay rod, told apart by the entry ``kind``."""

    def write(self, value: Rack | RelayRod) -> Any:
        return _RELAY.write(value) if isinstance(value, RelayRod) else _RACK.write(value)

    def read(self, raw: Any, place: str, faults: Faults) -> Any:
        kind = raw.get("kind") if isinstance(raw, dict) else None
        if kind is not None and kind not in ("rack", "relay rod"):
            Choice(("rack", "relay rod")).read(kind, f"{place} › kind", faults)
            return None
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
    name="loads",
)
_NO_GO = Record(
    NoGo,
    (
        Field("name", "name", Text(LONGEST_NAME)),
        Field("outline", "outline", Items(Pair(), least=3)),
        Field("view", "view", Choice(("front", "above")), "front"),
        Field("side", "side", Maybe(Choice(SIDES)), None),
        Field("clearance", "clearance", length(low=0.0), NoGo.clearance),
    ),
    name="no-go shape",
)


def _limit(kind: str) -> Number | Angle:
    """How a limit of a kind of tolerances.Kind stands in the file."""
    return Angle() if kind in ("angle", "rate") else Number()


def _target(angular: bool) -> Record[Target]:
    keys = [k for k, figure in FIGURES.items() if (figure.kind in ("angle", "rate")) == angular]
    limit = Maybe(_limit("angle" if angular else "length"))
    return Record(
        Target,
        (
            Field("figure", "figure", Choice(tuple(keys))),
            Field("low", "low", limit, None),
            Field("high", "high", limit, None),
        ),
        note="Limits in degrees, or degrees per mm." if angular else "Limits in mm, or mm per mm.",
        name="target for an angle" if angular else "target for a length",
    )


@dataclass(frozen=True)
class _Target:
    """A target, its limits in the unit of the figure it names."""

    records = (_target(angular=False), _target(angular=True))

    def _record(self, figure: object) -> Record[Target]:
        known = FIGURES.get(figure) if isinstance(figure, str) else None
        return self.records[known is not None and known.kind in ("angle", "rate")]

    def write(self, value: Target) -> Any:
        return self._record(value.figure).write(value)

    def read(self, raw: Any, place: str, faults: Faults) -> Any:
        figure = raw.get("figure") if isinstance(raw, dict) else None
        if figure is not None and figure not in FIGURES:
            Choice(tuple(FIGURES)).read(figure, f"{place} › figure", faults)
            return None
        return self._record(figure).read(raw, place, faults)

    def schema(self) -> Schema:
        return {"oneOf": [record.schema() for record in self.records]}


_LAYOUT = Record(
    Layout,
    (
        Field("title", "title", Text(), "Untitled"),
        Field("shown in", "units", Choice(("in", "mm")), "in"),
        Field("left", "left", _SIDE),
        Field("right", "right", Maybe(_SIDE), None),
        Field("steering", "steering", _Steering(), Rack()),
        Field("wheelbase", "wheelbase", Maybe(length(low=1.0)), None),
        Field("center of gravity height", "cg_height", Maybe(length()), None),
        Field("loads", "loads", _LOADS, Loads()),
        Field("no-go shapes", "no_go", Items(_NO_GO), ()),
        Field("targets", "targets", Items(_Target()), ()),
        Field(
            "tolerances", "tolerances",
            Named({key: _limit(entry.kind) for key, entry in TOLERANCES.items()}), {},
        ),
        Field(
            "locked nails", "locked",
            Items(Choice(SIDE_POINTS + RELAY_POINTS), sort=True), frozenset(),
        ),
        Field("assumed", "assumed", Items(Text()), ()),
    ),
    note="One car. Right is null while it mirrors the left.",
    name="layout",
)
_JOB = Record(
    Job,
    (
        Field("as planned", "planned", _LAYOUT),
        Field("as found", "found", Maybe(_LAYOUT), None),
        Field("shop", "shop", Text(), ""),
        Field("customer", "customer", Text(), ""),
        Field("notes", "notes", Text(200_000), ""),
        Field("stance", "stance", Text(), ""),
    ),
    fixed=(("format", FORMAT), ("lengths", "mm"), ("angles", "deg")),
)


_RECORDS: tuple[Record[Any], ...] = (
    _LAYOUT, _SIDE, records.POINT, _TIRE, _SPRING, _TIE_ROD, _RACK, _RELAY, _LOADS, _NO_GO,
    *_Target.records,
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
        "$defs": {record.name: record.definition() for record in _RECORDS},
    }


def layout_schema_text() -> str:
    """The text of layout.schema.json."""
    return json.dumps(layout_schema(), indent=1, ensure_ascii=False) + "\n"


# --- writing -----------------------------------------------------------------------


def job_to_text(job: Job) -> str:
    """A job as the text of a layout file; the same job always gives the same text.

    Raises LayoutFileError, with places, for a job that could not be read again (a figure
    that is not finite, say): such a text must not replace a good file.
    """
    record = _JOB.write(job)
    head = {"format": record.pop("format"), "version": Raw(str(VERSION))}
    text = _json({**head, **record}, "") + "\n"
    job_from_text(text)
    return text


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
    """Save a job; the old file stands until the new one is safely on disk.

    Raises OSError, or LayoutFileError for a job that could not be read again.
    """
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
    faults = Faults()
    raw = _parse(text, faults)
    if not isinstance(raw, dict) or raw.get("format") != FORMAT:
        raise LayoutFileError(
            f'This is not a layout file: it does not hold "format": "{FORMAT}".'
        )
    if "version" not in raw:
        raise LayoutFileError(f"version: is missing; expected {VERSION}.")
    version = raw.pop("version")
    if version != VERSION or isinstance(version, bool):
        if isinstance(version, int) and version > VERSION:
            raise LayoutFileError("This layout was made by a newer Bobline. Update to open it.")
        raise LayoutFileError(f"version: expected {VERSION}, got {describe(version)}.")
    job = _JOB.read(raw, "", faults)
    if faults.found:
        raise LayoutFileError(*faults.found)
    assert isinstance(job, Job)
    return job


def _number(text: str) -> Decimal:
    if len(text) > 400:
        raise LayoutFileError(f"The number {text[:20]}… is too long.")
    try:
        return Decimal(text)
    except InvalidOperation:
        # An exponent beyond what can be counted.
        return Decimal("Infinity")


def _whole_number(text: str) -> int | Decimal:
    return int(text) if len(text) < 19 else _number(text)


def _parse(text: str, faults: Faults) -> Any:
    """JSON text as plain data, numbers exact; LayoutFileError if it is no JSON at all.

    NaN and Infinity pass as decimals, to be refused at their place in the file.
    """

    def group(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
        entries = dict(pairs)
        if len(entries) != len(pairs):
            counts = Counter(key for key, _ in pairs)
            for key in (key for key, count in counts.items() if count > 1):
                faults.add("", f'The entry "{printable(key)}" stands twice in one group.')
        return entries

    try:
        return json.loads(
            text,
            parse_float=_number,
            parse_int=_whole_number,
            parse_constant=Decimal,
            object_pairs_hook=group,
        )
    except json.JSONDecodeError as error:
        raise LayoutFileError(
            f"Line {error.lineno}, column {error.colno}: the text breaks off or is no JSON "
            f"({error.msg[:1].lower()}{error.msg[1:]})."
        ) from None
    except RecursionError:
        raise LayoutFileError(
            "The groups in this file are nested too deep for a layout."
        ) from None
