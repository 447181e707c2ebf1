"""The measure sheet: what a person types from tape, floor and plumb bob, as CSV.

Header ``item,value,over,up,fore`` with an optional ``side`` column; see FILES.md.
"""

from __future__ import annotations

import difflib
import math
from dataclasses import dataclass, field
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
    clashing_points,
    needed_points,
)
from geometry.lengths import AngleTextError, LengthTextError, parse_angle, parse_length
from geometry.sheet_assumptions import (
    ASSUMED_OUTER_FORE,
    BOX_LEFT,
    IDLER_MIRRORED,
    NO_CAMBER_OR_TOE,
    OUTER_FORE,
    TIRE_RADIUS,
    UNITS,
    Assumed,
)
from geometry.sheet_rows import (
    ANGLES,
    BOX_SIDE,
    ITEMS,
    PER_SIDE,
    PLACE,
    POINTS,
    WORDS,
    MeasureSheetError,
    Row,
    has_header,
    split_rows,
)
from geometry.sheet_writing import (
    KINDS,
    blank_measure_sheet,
    measure_sheet_to_text,
    starting_sheet,
    write_measure_sheet,
)
from geometry.text_file import TextFileError, printable, read_text_file

__all__ = [
    "ASSUMED_OUTER_FORE",
    "KINDS",
    "SIZE_LIMIT",
    "MeasureSheetError",
    "blank_measure_sheet",
    "has_header",
    "measure_sheet_from_text",
    "measure_sheet_to_text",
    "read_measure_sheet",
    "starting_sheet",
    "write_measure_sheet",
]

SIZE_LIMIT = 2_000_000
FAULT_LIMIT = 200
TITLE_LIMIT = 200
LEAST_WHEELBASE = 1.0
"""The shortest wheelbase a layout file takes, mm: what is read must be fit to be saved."""

_UNIT_WORDS: dict[str, UnitName] = {
    "in": "in",
    "inch": "in",
    "inches": "in",
    "mm": "mm",
    "millimeters": "mm",
}

Key = tuple[str, SideName | None]


@dataclass
class _Reading:
    """What has been read so far, by (item, side); side None stands for both."""

    units: UnitName = "in"
    decimal_comma: bool = False
    faults: list[str] = field(default_factory=list)
    lines: dict[Key, int] = field(default_factory=dict)
    points: dict[Key, dict[str, float]] = field(default_factory=dict)
    numbers: dict[Key, float] = field(default_factory=dict)
    words: dict[str, str] = field(default_factory=dict)

    def fault(self, row: Row, words: str) -> None:
        self.faults.append(f"Line {row.line}: {words}")

    def number(self, row: Row, column: str) -> float | None:
        """The length or angle in a cell; None after telling what is wrong with it."""
        text = row.cells[column]
        try:
            if row.item in ANGLES:
                return parse_angle(text)
            return parse_length(text, self.units, decimal_comma=self.decimal_comma)
        except (LengthTextError, AngleTextError) as error:
            self.fault(row, f"{row.item}, {column}: {error}")
            return None

    @property
    def is_uneven(self) -> bool:
        """True if any row is for one side only."""
        return any(side is not None for _, side in self.lines)


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
    rows, reading.decimal_comma = split_rows(text, reading.faults)
    for row in rows:
        if row.item == "units":
            # Units first: the row may stand anywhere, but every plain number depends on it.
            reading.units = _UNIT_WORDS.get(_unit_word(row), reading.units)
    for row in rows:
        _read_row(row, reading)
    if rows or not reading.faults:
        reading.faults += _missing(reading)
    if reading.faults:
        more = len(reading.faults) - FAULT_LIMIT
        shown = reading.faults[:FAULT_LIMIT]
        raise MeasureSheetError(*shown, *([f"And {more} faults more."] if more > 0 else []))
    return Job(_layout(reading))


# --- rows --------------------------------------------------------------------------


def _unit_word(row: Row) -> str:
    return row.cells.get("value", "").lower().strip('".')


def _read_row(row: Row, reading: _Reading) -> None:
    if row.item not in ITEMS:
        close = difflib.get_close_matches(row.item[:40], ITEMS, 1, 0.6)
        expected = f"“{close[0]}”, perhaps" if close else "one of the names in FILES.md"
        reading.fault(row, f'read item "{printable(row.item)}", expected {expected}.')
        return
    if row.side is not None and row.item not in PER_SIDE:
        reading.fault(row, f"“{row.item}” belongs to the whole car; leave its side blank.")
        return
    if row.is_blank:
        return
    first = reading.lines.setdefault((row.item, row.side), row.line)
    if first != row.line:
        reading.fault(row, f"“{row.item}” stands in the sheet twice, first in line {first}.")
    elif row.item in POINTS:
        _read_point(row, reading)
    elif any(row.cells.get(column) for column in PLACE):
        reading.fault(row, f"“{row.item}” is a single value: fill only its value.")
    elif row.item in WORDS:
        _read_word(row, reading)
    else:
        _read_number(row, reading)


def _read_point(row: Row, reading: _Reading) -> None:
    if row.cells.get("value"):
        reading.fault(row, f"“{row.item}” is a point: fill over, up and fore, not value.")
    place: dict[str, float] = {}
    for column in PLACE:
        if row.cells.get(column):
            value = reading.number(row, column)
            if value is not None:
                place[column] = value
        elif column != "fore":
            reading.fault(row, f"{row.item}, {column}: read nothing, expected a length.")
    reading.points[row.item, row.side] = place


def _read_word(row: Row, reading: _Reading) -> None:
    text = row.cells.get("value", "")
    if row.item == "units" and _unit_word(row) not in _UNIT_WORDS:
        reading.fault(row, f'read units "{printable(text)}", expected in or mm.')
    elif row.item == BOX_SIDE and text.lower() not in SIDES:
        reading.fault(row, f'read side "{printable(text)}", expected left or right.')
    elif row.item == "title" and len(text) > TITLE_LIMIT:
        reading.fault(row, f"read a title of {len(text)} letters, expected {TITLE_LIMIT} at most.")
    elif any(0xD800 <= ord(letter) <= 0xDFFF for letter in text):
        reading.fault(row, f"the {row.item} holds half a letter that can't be written.")
    reading.words[row.item] = text.lower() if row.item == BOX_SIDE else text


def _read_number(row: Row, reading: _Reading) -> None:
    value = reading.number(row, "value")
    if value is None:
        return
    shown = printable(row.cells["value"])
    if row.item in ANGLES and abs(value) > math.radians(45.0):
        reading.fault(row, f"read {row.item} {shown}, expected degrees from -45 to 45.")
    elif row.item not in ANGLES and value <= 0.0:
        reading.fault(row, f"read {row.item} {shown}, expected a length above zero.")
    elif row.item == "wheelbase" and value < LEAST_WHEELBASE:
        reading.fault(row, f"read {row.item} {shown}, expected a car's length. Is the unit right?")
    reading.numbers[row.item, row.side] = value


# --- the car -----------------------------------------------------------------------


def _missing(reading: _Reading) -> list[str]:
    """What the sheet as a whole lacks or has too much of."""
    faults = []
    for name in SIDES if reading.is_uneven else SIDES[:1]:
        where = f" on the {name}" if reading.is_uneven else ""
        present = {item: True for item, side in reading.points if side in (None, name)}
        faults += [
            f"The point “{point}” is missing{where}." for point in needed_points(present)
        ]
        faults += [
            f"{clash[:1].upper()}{clash[1:]}{where}." for clash in clashing_points(present)
        ]
        center = _given(reading, WHEEL_CENTER, name)
        radius = _number(reading, "tire radius", name)
        if radius is None and center is not None and center.get("up", 1.0) <= 0.0:
            faults.append(
                f"The wheel center is not above the floor{where}, and no tire radius was given."
            )
    relay = [name for name in RELAY_POINTS if (name, None) in reading.points]
    if relay or BOX_SIDE in reading.words:
        wanted = [name for name in (PITMAN_PIVOT, PITMAN_END) if name not in relay]
        faults += [f"The point “{name}” is missing." for name in wanted]
    return faults


def _given(reading: _Reading, item: str, side: SideName) -> dict[str, float] | None:
    """A point's measures for a side: its own row, or the one for both."""
    return reading.points.get((item, side), reading.points.get((item, None)))


def _number(reading: _Reading, item: str, side: SideName) -> float | None:
    return reading.numbers.get((item, side), reading.numbers.get((item, None)))


def _layout(reading: _Reading) -> Layout:
    assumed = Assumed()
    if "units" not in reading.words:
        assumed.add(UNITS)
    left = _side(reading, "left", assumed)
    right = _side(reading, "right", assumed) if reading.is_uneven else None
    return Layout(
        left=left,
        right=right,
        steering=_steering(reading, assumed),
        title=reading.words.get("title") or "Untitled",
        units=reading.units,
        wheelbase=reading.numbers.get(("wheelbase", None)),
        cg_height=reading.numbers.get(("center of gravity height", None)),
        assumed=assumed.sentences(),
    )


def _side(reading: _Reading, name: SideName, assumed: Assumed) -> Side:
    only = name if reading.is_uneven else None
    points: dict[str, Point] = {}
    for point in SIDE_POINTS:
        place = _given(reading, point, name)
        if place is not None:
            points[point] = _point(point, place, only, assumed)
    radius = _number(reading, "tire radius", name)
    if radius is None:
        radius = points[WHEEL_CENTER].up
        assumed.add(TIRE_RADIUS, only)
    tire = Tire(
        radius,
        _number(reading, "tire width", name) or Tire.width,
        _number(reading, "rim diameter", name) or Tire.rim_diameter,
        _number(reading, "rim width", name) or Tire.rim_width,
    )
    for item in ANGLES:
        if _number(reading, item, name) is None:
            assumed.add(NO_CAMBER_OR_TOE[item], only)
    return Side(
        points,
        tire,
        static_camber=_number(reading, "static camber", name) or 0.0,
        static_toe=_number(reading, "static toe", name) or 0.0,
    )


def _point(
    name: str, place: dict[str, float], side: SideName | None, assumed: Assumed
) -> Point:
    fore = place.get("fore")
    if fore is None and name == TIE_OUTER:
        fore = ASSUMED_OUTER_FORE
        assumed.add(OUTER_FORE, side)
    elif fore is None and name != WHEEL_CENTER:
        # The wheel centers make the axle line, so that theirs is 0 without assuming it.
        assumed.add_fore(name, side)
    return Point(place["over"], place["up"], fore or 0.0)


def _steering(reading: _Reading, assumed: Assumed) -> Rack | RelayRod:
    if (PITMAN_PIVOT, None) not in reading.points:
        return Rack()
    relay = {
        name: _point(name, reading.points[name, None], None, assumed)
        for name in RELAY_POINTS
        if (name, None) in reading.points
    }
    for idler, pitman in ((IDLER_PIVOT, PITMAN_PIVOT), (IDLER_END, PITMAN_END)):
        if idler not in relay:
            relay[idler] = relay[pitman]
            assumed.add(IDLER_MIRRORED[idler])
    if BOX_SIDE not in reading.words:
        assumed.add(BOX_LEFT)
    return RelayRod(
        relay[PITMAN_PIVOT],
        relay[PITMAN_END],
        relay[IDLER_PIVOT],
        relay[IDLER_END],
        "right" if reading.words.get(BOX_SIDE) == "right" else "left",
    )
