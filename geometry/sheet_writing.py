"""Measure sheets written: a car as CSV that reads back as the same car, and blank ones."""

from __future__ import annotations

import csv
import io
from collections.abc import Iterable
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
    Layout,
    Point,
    RelayRod,
    SideName,
)
from geometry.lengths import format_angle_exact, format_exact
from geometry.sheet_assumptions import (
    ASSUMED_OUTER_FORE,
    BOX_LEFT,
    IDLER_MIRRORED,
    NO_CAMBER_OR_TOE,
    OUTER_FORE,
    TIRE_RADIUS,
    assumed_fores,
    is_assumed,
)
from geometry.sheet_rows import ANGLES, BOX_SIDE, CAR_LENGTHS, COLUMNS, HEADER, TIRE_LENGTHS
from geometry.text_file import write_text_file


def write_measure_sheet(path: Path | str, layout: Layout) -> None:
    """Export a car as a measure sheet; an old file stands until the new one is safe. OSError."""
    write_text_file(path, measure_sheet_to_text(layout))


def measure_sheet_to_text(layout: Layout) -> str:
    """A car as a measure sheet: points, wheel, steering, wheelbase and center of gravity.

    It reads back as the same car in those measures, float for float; what was assumed is
    left blank again. Springs' rates, loads, targets and shapes have no place in a sheet.
    """
    columns = COLUMNS[:-1] if layout.linked else COLUMNS
    out = io.StringIO()
    writer = csv.DictWriter(out, columns, restval="", lineterminator="\n")
    writer.writeheader()
    for row in _rows(layout):
        writer.writerow(row)
    return out.getvalue()


def _rows(layout: Layout) -> Iterable[dict[str, str]]:
    unit = layout.units
    yield {"item": "units", "value": unit}
    # One row is one line; a title of several lines becomes one.
    yield {"item": "title", "value": " ".join(layout.title.split())}
    for item, attribute in CAR_LENGTHS.items():
        value = getattr(layout, attribute)
        if value is not None:
            yield {"item": item, "value": format_exact(value, unit)}
    for name in SIDES[:1] if layout.linked else SIDES:
        yield from _side_rows(layout, name)
    if isinstance(layout.steering, RelayRod):
        yield from _relay_rows(layout, layout.steering)


def _side_rows(layout: Layout, name: SideName) -> Iterable[dict[str, str]]:
    side = layout.side(name)
    only = None if layout.linked else name
    label = {} if only is None else {"side": name}
    for point_name in SIDE_POINTS:
        if point_name in side.points:
            yield _point_row(layout, point_name, side[point_name], only) | label
    for item, attribute in TIRE_LENGTHS.items():
        value = getattr(side.tire, attribute)
        told = item == "tire radius" and is_assumed(layout.assumed, TIRE_RADIUS, only)
        if not (told and value == side[WHEEL_CENTER].up):
            yield {"item": item, "value": format_exact(value, layout.units)} | label
    for item, attribute in ANGLES.items():
        value = getattr(side, attribute)
        if value or not is_assumed(layout.assumed, NO_CAMBER_OR_TOE[item], only):
            yield {"item": item, "value": format_angle_exact(value)} | label


def _point_row(
    layout: Layout, name: str, point: Point, side: SideName | None
) -> dict[str, str]:
    over, up, fore = (format_exact(value, layout.units) for value in point)
    if name == TIE_OUTER:
        told = is_assumed(layout.assumed, OUTER_FORE, side)
        blank = told and point.fore == ASSUMED_OUTER_FORE
    else:
        told = name in assumed_fores(layout.assumed, side) or name == WHEEL_CENTER
        blank = told and point.fore == 0.0
    return {"item": name, "over": over, "up": up, "fore": "" if blank else fore}


def _relay_rows(layout: Layout, relay: RelayRod) -> Iterable[dict[str, str]]:
    if not (is_assumed(layout.assumed, BOX_LEFT, None) and relay.box_side == "left"):
        yield {"item": BOX_SIDE, "value": relay.box_side}
    mirrored = {IDLER_PIVOT: PITMAN_PIVOT, IDLER_END: PITMAN_END}
    for name in RELAY_POINTS:
        told = name in mirrored and is_assumed(layout.assumed, IDLER_MIRRORED[name], None)
        if not (told and relay[name] == relay[mirrored[name]]):
            yield _point_row(layout, name, relay[name], None)


# --- sheets to start from --------------------------------------------------------------

KINDS = ("A-arm", "strut", "relay rod")
_HEAD = """\
# The car: over = from the centerline, up = from the floor, fore = ahead of the axle line
# (behind it negative). Tape fractions are fine, and so are mm behind a number.
"""
_COMMON = """\
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
_TIE_ROD = """\
tie rod inner,,11 3/8,9 13/16,-5
tie rod outer,,24 1/2,10 3/16,-5
wheel center,,28 1/2,12 1/2,0
"""
_UPPER_ARM = """\
upper inner pivot,,14,16 1/4,-1/2
upper ball joint,,23 1/4,17 1/4,-1/2
"""
_STRUT = """\
strut top mount,,22,33,-1
strut lower mount,,24 1/4,15,-1/4
"""
_RELAY = """\
steering box side,left,,,
pitman arm pivot,,12,10 1/2,-10
pitman arm end,,11 3/4,9 13/16,-5
idler arm pivot,,12,10 1/2,-10
idler arm end,,11 3/4,9 13/16,-5
"""


def _plausible_rows(kind: str) -> str:
    if kind not in KINDS:
        raise ValueError(f"A sheet can be started for {', '.join(KINDS)}.")
    upper = _STRUT if kind == "strut" else _UPPER_ARM
    return _COMMON + upper + _TIE_ROD + (_RELAY if kind == "relay rod" else "")


def starting_sheet(kind: str) -> str:
    """A sheet with plausible numbers to draw at once and change: one of KINDS."""
    return f"{_HEAD}# These numbers are only plausible; change every one.\n{HEADER}\n" + (
        _plausible_rows(kind)
    )


def blank_measure_sheet(kind: str) -> str:
    """A sheet to fill in, plausible numbers in a remark above each blank row: one of KINDS."""
    lines = [_HEAD + "# Above each row stands what it may look like.", HEADER]
    for row in _plausible_rows(kind).splitlines():
        item, value, *place = row.split(",")
        hint = value if value else "over {}, up {}, fore {}".format(*place)
        lines += [f"# {hint}", row if item == "units" else f"{item},,,,"]
    return "\n".join(lines) + "\n"
