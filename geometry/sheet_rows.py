"""The rows of a measure sheet: CSV text split into named cells, faults told by line.

The sheet's items and columns stand here too, for reading and writing alike.
"""

from __future__ import annotations

import csv
import re
from dataclasses import dataclass
from itertools import zip_longest

from geometry.layout import RELAY_POINTS, SIDE_POINTS, SIDES, SideName
from geometry.text_file import printable

ROW_LIMIT = 2000
HEADER = "item,value,over,up,fore"
COLUMNS = ("item", "value", "over", "up", "fore", "side")
PLACE = ("over", "up", "fore")

TIRE_LENGTHS = {
    "tire radius": "radius",
    "tire width": "width",
    "rim diameter": "rim_diameter",
    "rim width": "rim_width",
}
CAR_LENGTHS = {"wheelbase": "wheelbase", "center of gravity height": "cg_height"}
ANGLES = {"static camber": "static_camber", "static toe": "static_toe"}
BOX_SIDE = "steering box side"
WORDS = ("units", "title", BOX_SIDE)
POINTS = (*SIDE_POINTS, *RELAY_POINTS)
ITEMS = (*WORDS, *TIRE_LENGTHS, *CAR_LENGTHS, *ANGLES, *POINTS)
PER_SIDE = (*SIDE_POINTS, *TIRE_LENGTHS, *ANGLES)
"""Items that a ``side`` can be given for; the others belong to the whole car."""


class MeasureSheetError(ValueError):
    """A text that is no measure sheet; ``faults`` holds every fault as a plain sentence."""

    def __init__(self, *faults: str) -> None:
        super().__init__("\n".join(faults))
        self.faults = faults


class _RowError(ValueError):
    """What is wrong with one row."""


@dataclass(frozen=True)
class Row:
    """One row: the line it stands on, its item, its side (None: both) and its other cells."""

    line: int
    item: str
    side: SideName | None
    cells: dict[str, str]

    @property
    def is_blank(self) -> bool:
        """True if nothing was filled in: the item was not measured."""
        return not any(self.cells.values())


def split_rows(text: str, faults: list[str]) -> tuple[list[Row], bool]:
    """The rows below the header, and whether a comma in a number is a decimal comma.

    Faults are added to ``faults``. Only where commas don't separate the cells can a comma
    before three digits be taken for a decimal comma.
    """
    lines = _lines(text)
    if not lines:
        faults.append(f"The sheet is empty. It should start with the header {HEADER}.")
        return [], False
    separator = _separator(lines[0][1])
    names = _header(*lines[0], separator, faults)
    rows: list[Row] = []
    for number, line in lines[1:] if names else []:
        if len(rows) >= ROW_LIMIT:
            faults.append(f"Line {number}: a measure sheet has at most {ROW_LIMIT} rows.")
            break
        try:
            rows.append(_row(number, line, separator, names))
        except _RowError as fault:
            faults.append(f"Line {number}: {fault}")
    return rows, separator != ","


def has_header(text: str) -> bool:
    """True if the first line that is no remark names the column ``item``."""
    lines = _lines(text)
    if not lines:
        return False
    cells = re.split(r"[,;\t]", lines[0][1])
    return "item" in [cell.strip().strip('"').lower() for cell in cells]


def _lines(text: str) -> list[tuple[int, str]]:
    """The lines that are no remarks, with their numbers.

    Every row stands on one line, so that a stray inch mark can't swallow the lines below.
    A spreadsheet may have put quote marks around a remark, or told the separator on top.
    """
    lines = enumerate(re.split(r"\r\n|\r|\n", text), 1)
    return [
        (number, line)
        for number, line in lines
        if line.strip(' ,;\t"') and not re.match(r'[\s"]*(#|sep=.$)', line)
    ]


def _separator(header: str) -> str:
    return max(",;\t", key=header.count)


def _cells(line: str, separator: str) -> list[str]:
    """One line's cells; inch marks behind a number stay as they are. Raises csv.Error."""
    reader = csv.reader([line], delimiter=separator, skipinitialspace=True, strict=True)
    return [cell.strip() for cell in next(reader)]


def _header(number: int, line: str, separator: str, faults: list[str]) -> list[str]:
    try:
        names = [name.lower() for name in _cells(line, separator)]
    except csv.Error:
        names = []
    given = [name for name in names if name]
    if "item" in given and set(given) <= set(COLUMNS) and len(set(given)) == len(given):
        return names
    faults.append(
        f'Line {number}: read "{printable(line.strip(), 60)}", expected the header {HEADER} '
        "(and side, where the sides differ)."
    )
    return []


def _row(number: int, line: str, separator: str, names: list[str]) -> Row:
    if len(line) > csv.field_size_limit():
        raise _RowError(f"read {len(line):,} letters, expected one row of measures.")
    try:
        cells = _cells(line, separator)
    except csv.Error:
        raise _RowError(
            f'read "{printable(line.strip())}", expected quote marks around whole cells only.'
        ) from None
    by_name = {name: cell for name, cell in zip(names, cells, strict=False) if name}
    unnamed = zip_longest(cells, names[: len(cells)], fillvalue="")
    stray = [cell for cell, name in unnamed if cell and not name]
    if stray:
        raise _RowError(
            f'read "{printable(stray[0])}" in a column that the header does not name, '
            "expected nothing there."
        )
    side = by_name.pop("side", "").lower()
    item = " ".join(re.split(r"[\s_-]+", by_name.pop("item", "").lower())).strip()
    if not item:
        raise _RowError("read no item, expected its name.")
    if side not in ("", "both", *SIDES):
        raise _RowError(f'read side "{printable(side)}", expected left, right or blank.')
    one_side: SideName | None = {"left": SIDES[0], "right": SIDES[1]}.get(side)
    return Row(number, item, one_side, by_name)
