"""The measure sheet: what a person types from tape, floor and plumb bob, as CSV.

Header ``item,value,over,up,fore`` with an optional ``side`` column; see FILES.md.
"""

from __future__ import annotations

import csv
import io
from collections.abc import Callable, Iterable
from dataclasses import dataclass, field, replace
from pathlib import Path

from geometry.layout import (
    IDLER_END,
    IDLER_PIVOT,
    PITMAN_END,
    PITMAN_PIVOT,
    RELAY_POINTS,
    SIDE_POINTS,
    SIDES,
    TIE_OUTER,
    WHEEL_CENTER,
    Job,
    Layout,
    Point,
    Rack,
    RelayRod,
    Side,
    SideName,
    Tire,
    UnitName,
    needed_points,
)
from geometry.lengths import format_angle_exact, format_exact, parse_angle, parse_length
from geometry.text_file import TextFileError, read_text_file

SIZE_LIMIT = 2_000_000
ROW_LIMIT = 2000
COLUMNS = ("item", "value", "over", "up", "fore", "side")
ASSUMED_OUTER_FORE = -127.0
"""Five inches behind the axle, where most rear-steer knuckles have their arm's end."""

_LENGTHS = {
    "tire radius": "radius",
    "tire width": "width",
    "rim diameter": "rim_diameter",
    "rim width": "rim_width",
}
_CAR_LENGTHS = {"wheelbase": "wheelbase", "center of gravity height": "cg_height"}
_ANGLES = {"static camber": "static_camber", "static toe": "static_toe"}
_VALUES = ("units", "title", "steering box side", *_LENGTHS, *_CAR_LENGTHS, *_ANGLES)
_PER_SIDE = (*SIDE_POINTS, *_LENGTHS, *_ANGLES)


class MeasureSheetError(ValueError):
    """A text that is no measure sheet; ``faults`` holds every fault as a plain sentence."""

    def __init__(self, *faults: str) -> None:
        super().__init__("\n".join(faults))
        self.faults = faults


@dataclass
class _Row:
    line: int
    item: str
    side: SideName | None
    cells: dict[str, str]


@dataclass
class _Reading:
    """What has been read so far, by (item, side); side None stands for both."""

    units: UnitName = "in"
    faults: list[str] = field(default_factory=list)
    points: dict[tuple[str, SideName | None], dict[str, float]] = field(default_factory=dict)
    numbers: dict[tuple[str, SideName | None], float] = field(default_factory=dict)
    words: dict[str, str] = field(default_factory=dict)

    def fault(self, line: int, words: str) -> None:
        self.faults.append(f"Line {line}: {words}")


def read_measure_sheet(path: Path | str) -> Job:
    """A job from a measure sheet file. Raises MeasureSheetError with all faults, or OSError."""
    try:
        text = read_text_file(path, SIZE_LIMIT)
    except TextFileError as error:
        raise MeasureSheetError(*error.faults) from None
    return measure_sheet_from_text(text)


def measure_sheet_from_text(text: str) -> Job:
    """A job from the text of a measure sheet. Raises MeasureSheetError with all faults."""
    reading = _Reading()
    rows = _rows(text, reading)
    _read_units(rows, reading)
    for row in rows:
        _read_row(row, reading)
    if reading.faults:
        raise MeasureSheetError(*reading.faults)
    return Job(_layout(reading))


# --- rows --------------------------------------------------------------------------


def _separator(header: str) -> str:
    return max(";\t,", key=header.count)


def looks_like_sheet(text: str) -> bool:
    """True if the first line that is no remark is a measure sheet's header."""
    for line in text.splitlines():
        if line.strip() and not line.lstrip().startswith("#"):
            cells = [c.strip().strip('"').lower() for c in line.split(_separator(line))]
            return "item" in cells
    return False


def _records(text: str, reading: _Reading) -> list[tuple[int, list[str]]]:
    """The rows that are no remarks, split into cells, with their line numbers.

    Every row stands on one line, so that a stray inch mark can't swallow the lines below.
    """
    out: list[tuple[int, list[str]]] = []
    separator: str | None = None
    for number, line in enumerate(text.splitlines(), 1):
        if not line.strip() or line.lstrip().startswith("#"):
            continue
        separator = separator or _separator(line)
        try:
            cells = _cells(line, separator)
        except csv.Error as error:
            reading.fault(number, f"can't be split into cells ({error}).")
            continue
        if any(cells):
            out.append((number, cells))
        if len(out) > ROW_LIMIT:
            reading.fault(number, f"a measure sheet has at most {ROW_LIMIT} rows.")
            break
    return out


def _cells(line: str, separator: str) -> list[str]:
    """One line's cells; inch marks inside an unquoted cell stay as they are."""
    quoted = line.lstrip().startswith('"') or f'{separator}"' in line.replace(" ", "")
    if not quoted:
        return [cell.strip() for cell in line.split(separator)]
    return [cell.strip() for cell in next(csv.reader(io.StringIO(line), delimiter=separator))]


def _rows(text: str, reading: _Reading) -> list[_Row]:
    records = _records(text, reading)
    if not records:
        reading.faults.append(
            "The sheet is empty. It should start with the header item,value,over,up,fore."
        )
        return []
    line, header = records[0]
    names = [name.lower() for name in header]
    unknown = [name for name in names if name and name not in COLUMNS]
    if "item" not in names or unknown or len(set(filter(None, names))) < len([*filter(None, names)]):
        reading.fault(
            line,
            f'read "{" ".join(header)[:60]}", expected the header item,value,over,up,fore '
            "(and side, where the sides differ).",
        )
        return []
    rows: list[_Row] = []
    for line, cells in records[1:]:
        if any(cells[len(names):]):
            reading.fault(line, f"has {len(cells)} cells, but the header names {len(names)}.")
            continue
        by_name = dict(zip(names, cells, strict=False))
        side_text = by_name.pop("side", "").lower()
        item = " ".join(by_name.pop("item", "").lower().split())
        if side_text not in ("", "left", "right", "both"):
            reading.fault(line, f'read side "{side_text[:40]}", expected left, right or blank.')
            continue
        side: SideName | None = None
        if side_text in SIDES:
            side = "left" if side_text == "left" else "right"
        rows.append(_Row(line, item, side, by_name))
    return rows


def _read_units(rows: Iterable[_Row], reading: _Reading) -> None:
    """Units first: the row may stand anywhere, but every plain number depends on it."""
    for row in rows:
        if row.item == "units":
            value = row.cells.get("value", "").lower().strip('."')
            words = {"in": "in", "inch": "in", "inches": "in", "mm": "mm", "millimeters": "mm"}
            if value not in words:
                reading.fault(row.line, f'read units "{value[:40]}", expected in or mm.')
            else:
                reading.units = "mm" if words[value] == "mm" else "in"


def _read_row(row: _Row, reading: _Reading) -> None:
    known = row.item in SIDE_POINTS or row.item in RELAY_POINTS or row.item in _VALUES
    if not known:
        reading.fault(row.line, f'read item "{row.item[:40]}", which is not known. {_nearest(row)}')
        return
    if row.side is not None and row.item not in _PER_SIDE:
        reading.fault(row.line, f"“{row.item}” belongs to the whole car; leave its side blank.")
        return
    if _repeated(row, reading):
        reading.fault(row.line, f"“{row.item}” stands in the sheet twice.")
        return
    if row.item in SIDE_POINTS or row.item in RELAY_POINTS:
        _read_point(row, reading)
    else:
        _read_value(row, reading)


def _nearest(row: _Row) -> str:
    import difflib

    names = [*SIDE_POINTS, *RELAY_POINTS, *_VALUES]
    close = difflib.get_close_matches(row.item, names, 1, 0.6)
    return f"Was “{close[0]}” meant?" if close else "See FILES.md for the names."


def _repeated(row: _Row, reading: _Reading) -> bool:
    if row.item in ("units", "title", "steering box side"):
        if row.item in reading.words:
            return True
        reading.words[row.item] = row.cells.get("value", "")
        return False
    store = {**dict.fromkeys(reading.points), **dict.fromkeys(reading.numbers)}
    return (row.item, row.side) in store


def _read_point(row: _Row, reading: _Reading) -> None:
    place: dict[str, float] = {}
    if row.cells.get("value"):
        reading.fault(
            row.line, f"“{row.item}” is a point: fill over, up and fore and leave value blank."
        )
    for column in ("over", "up", "fore"):
        text = row.cells.get(column, "")
        if not text:
            if column != "fore":
                reading.fault(row.line, f"{column} is blank, expected a length.")
            continue
        try:
            place[column] = parse_length(text, reading.units)
        except ValueError as error:
            reading.fault(row.line, f"{column}: {error}")
    reading.points[row.item, row.side] = place


def _read_value(row: _Row, reading: _Reading) -> None:
    text = row.cells.get("value", "")
    if any(row.cells.get(column) for column in ("over", "up", "fore")):
        reading.fault(row.line, f"“{row.item}” is a single value: fill only the value column.")
        return
    if row.item in ("units", "title"):
        return
    if row.item == "steering box side":
        if text.lower() not in SIDES:
            reading.fault(row.line, f'read side "{text[:40]}", expected left or right.')
        return
    if not text:
        return
    parse: Callable[[str], float]
    if row.item in _ANGLES:
        parse = parse_angle
    else:

        def parse(text: str) -> float:
            return parse_length(text, reading.units)

    try:
        value = parse(text)
    except ValueError as error:
        reading.fault(row.line, f"{row.item}: {error}")
        return
    if row.item in _ANGLES and abs(value) > 0.785:
        reading.fault(row.line, f"read {row.item} {text}, expected degrees from -45 to 45.")
    elif row.item not in _ANGLES and value <= 0.0:
        reading.fault(row.line, f"read {row.item} {text}, expected a length above zero.")
    reading.numbers[row.item, row.side] = value


# --- the car -----------------------------------------------------------------------


class _Assumed:
    """What was not measured, gathered over both sides and said once each."""

    def __init__(self) -> None:
        self.fores: list[str] = []
        self.others: list[str] = []

    def add(self, words: str) -> None:
        if words not in self.others:
            self.others.append(words)

    def sentences(self) -> tuple[str, ...]:
        out = list(self.others)
        if self.fores:
            out.append(
                "Fore was not measured for " + ", ".join(dict.fromkeys(self.fores))
                + ": taken as 0, on the axle line."
            )
        return tuple(out)


def _layout(reading: _Reading) -> Layout:
    assumed = _Assumed()
    uneven = any(side is not None for _, side in [*reading.points, *reading.numbers])
    missing: list[str] = []
    sides: list[Side] = []
    for name in SIDES if uneven else SIDES[:1]:
        points = _side_points(reading, name, assumed)
        words = " on the " + name if uneven else ""
        missing += [f"The point “{n}” is missing{words}." for n in needed_points(points)]
        missing += _clashes(points)
        if WHEEL_CENTER in points:
            sides.append(_side(reading, name, points, assumed))
    if missing:
        raise MeasureSheetError(*missing)
    steering = _steering(reading, assumed)
    return Layout(
        left=sides[0],
        right=sides[1] if uneven else None,
        steering=steering,
        title=reading.words.get("title") or "Untitled",
        units=reading.units,
        wheelbase=reading.numbers.get(("wheelbase", None)),
        cg_height=reading.numbers.get(("center of gravity height", None)),
        assumed=assumed.sentences(),
    )


def _clashes(points: dict[str, Point]) -> list[str]:
    out = []
    for arm in ("lower", "upper"):
        single = f"{arm} inner pivot"
        if single in points and (f"{single} front" in points or f"{single} rear" in points):
            out.append(f"“{single}” and its front or rear bushing are both given; give one kind.")
    if any(n.startswith("strut") for n in points) and any(n.startswith("upper") for n in points):
        out.append("Both a strut and an upper arm are given; give one of them.")
    return out


def _side_points(reading: _Reading, side: SideName, assumed: _Assumed) -> dict[str, Point]:
    points: dict[str, Point] = {}
    for name in SIDE_POINTS:
        place = reading.points.get((name, side), reading.points.get((name, None)))
        if place is None:
            continue
        fore = place.get("fore")
        if fore is None and name == TIE_OUTER:
            fore = ASSUMED_OUTER_FORE
            assumed.add(
                "Fore of the outer tie rod was not measured: taken as 5 in (127 mm) behind the "
                "axle line. Toe as an angle rests on it."
            )
        elif fore is None:
            assumed.fores.append(name)
        points[name] = Point(place["over"], place["up"], fore or 0.0)
    return points


def _side(
    reading: _Reading, side: SideName, points: dict[str, Point], assumed: _Assumed
) -> Side:
    def value(item: str) -> float | None:
        return reading.numbers.get((item, side), reading.numbers.get((item, None)))

    radius = value("tire radius")
    if radius is None:
        radius = points[WHEEL_CENTER].up
        assumed.add("Tire radius was not measured: taken as the height of the wheel center.")
        if radius <= 0.0:
            raise MeasureSheetError(
                "The wheel center is not above the floor, and no tire radius was given."
            )
    tire = Tire(radius)
    for item, attribute in _LENGTHS.items():
        given = value(item)
        if given is not None:
            tire = replace(tire, **{attribute: given})
    angles: dict[str, float] = {}
    for item, attribute in _ANGLES.items():
        given = value(item)
        if given is None:
            assumed.add(f"{item.capitalize()} was not measured: taken as 0.")
        angles[attribute] = given or 0.0
    return Side(points, tire, angles["static_camber"], angles["static_toe"])


def _steering(reading: _Reading, assumed: _Assumed) -> Rack | RelayRod:
    relay = {
        name: Point(p["over"], p["up"], p.get("fore", 0.0))
        for (name, _), p in reading.points.items()
        if name in RELAY_POINTS
    }
    if not relay:
        return Rack()
    missing = [n for n in (PITMAN_PIVOT, PITMAN_END) if n not in relay]
    if missing:
        raise MeasureSheetError(*(f"The point “{name}” is missing." for name in missing))
    for idler, pitman in ((IDLER_PIVOT, PITMAN_PIVOT), (IDLER_END, PITMAN_END)):
        if idler not in relay:
            relay[idler] = relay[pitman]
            assumed.add(f"The {idler} was not measured: taken as the pitman arm's, mirrored.")
    box: SideName = "right" if reading.words.get("steering box side") == "right" else "left"
    if "steering box side" not in reading.words:
        assumed.add("The steering box's side was not given: taken as left.")
    return RelayRod(
        relay[PITMAN_PIVOT], relay[PITMAN_END], relay[IDLER_PIVOT], relay[IDLER_END], box
    )


# --- writing -----------------------------------------------------------------------


def measure_sheet_to_text(layout: Layout) -> str:
    """The car as a measure sheet that reads back as the same car (points, wheel, steering)."""
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\n")
    uneven = not layout.linked
    writer.writerow(COLUMNS if uneven else COLUMNS[:-1])

    def row(*cells: str, side: str = "") -> None:
        writer.writerow([*cells, side] if uneven else cells)

    def shown(mm: float) -> str:
        return format_exact(mm, layout.units)

    def point_row(name: str, point: Point, side: str = "") -> None:
        row(name, "", *(shown(v) for v in point), side=side)

    row("units", layout.units, "", "", "")
    row("title", layout.title, "", "", "")
    for item, attribute in _CAR_LENGTHS.items():
        value = getattr(layout, attribute)
        if value is not None:
            row(item, shown(value), "", "", "")
    for name in SIDES if uneven else SIDES[:1]:
        side = layout.side(name)
        label = name if uneven else ""
        for point_name in SIDE_POINTS:
            if point_name in side.points:
                point_row(point_name, side[point_name], label)
        for item, attribute in _LENGTHS.items():
            row(item, shown(getattr(side.tire, attribute)), "", "", "", side=label)
        for item, attribute in _ANGLES.items():
            row(item, format_angle_exact(getattr(side, attribute)), "", "", "", side=label)
    if isinstance(layout.steering, RelayRod):
        row("steering box side", layout.steering.box_side, "", "", "")
        for name in RELAY_POINTS:
            point_row(name, layout.steering[name])
    return out.getvalue()


_BLANK_HEAD = """\
# Fill in what you measured: over = from the centerline, up = from the floor,
# fore = ahead of the axle line (behind it negative). Tape fractions are fine.
# The numbers here are only plausible hints for a mid-size car; change every one.
item,value,over,up,fore
units,in,,,
title,New car,,,
wheelbase,108,,,
center of gravity height,20,,,
tire radius,12 1/2,,,
static camber,-0.5,,,
static toe,0.05,,,
lower inner pivot,,9 1/2,8,0
lower ball joint,,25,7 1/2,3/8
"""
_BLANK_TIE = """\
tie rod inner,,11 3/8,9 13/16,-5
tie rod outer,,24 1/2,10 3/16,-5
wheel center,,28 1/2,12 1/2,0
"""
_BLANK_UPPER = """\
upper inner pivot,,14,16 1/4,-1/2
upper ball joint,,23 1/4,17 1/4,-1/2
"""
_BLANK_STRUT = """\
strut top mount,,22,33,-1
strut lower mount,,24 1/4,15,-1/4
"""
_BLANK_RELAY = """\
steering box side,left,,,
pitman arm pivot,,12,10 1/2,-10
pitman arm end,,11 3/4,9 13/16,-5
idler arm pivot,,12,10 1/2,-10
idler arm end,,11 3/4,9 13/16,-5
"""
KINDS = ("A-arm", "strut", "relay rod")


def blank_measure_sheet(kind: str) -> str:
    """The text of a sheet to start from, with plausible hints: "A-arm", "strut", "relay rod"."""
    if kind not in KINDS:
        raise ValueError(f"A sheet can be started for {', '.join(KINDS)}.")
    upper = _BLANK_STRUT if kind == "strut" else _BLANK_UPPER
    return _BLANK_HEAD + upper + _BLANK_TIE + (_BLANK_RELAY if kind == "relay rod" else "")


