"""Fills pages from the top down: paragraphs, tables and pictures, with headers and numbers."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import Literal

from geometry.drawing import Bounds, Drawing, Item, Line, Place, Polygon, Style, Text
from geometry.lettering import LINE_SPACING, shortened, text_width, wrapped
from geometry.pages import Page, Pages, PageSize
from geometry.sheets.look import (
    BODY,
    HAIR,
    HEAD,
    INK,
    RULE_LINE,
    SMALL,
    SOFT,
    TINT,
    TITLE,
    ink,
)
from geometry.sheets.options import Heading

_FOOT = 8.0
_RISE = 1.25
"""From the top of a line's room down to its baseline, over its capitals' height."""
_READING = re.compile(r"\d+ \d+/\d+(?: (?:in|ft)\b)?|\d(?: (?:in|mm|ft|m|g)\b)")
_HARD = "\N{NO-BREAK SPACE}"
_PAD = 3.0
"""Clear room between columns of a table."""

Align = Literal["left", "right", "center"]


@dataclass(frozen=True)
class Cell:
    """One cell of a table: its words and how they are inked."""

    text: str
    bold: bool = False
    color: str = INK


@dataclass(frozen=True)
class Column:
    """A column of a table; ``share`` of the width that is left over by fixed widths."""

    title: str
    share: float = 1.0
    align: Align = "left"


Row = Sequence[str | Cell]


@dataclass
class _Sheet:
    items: list[Item] = field(default_factory=list)
    placed: list[tuple[Drawing, Place, Bounds | None]] = field(default_factory=list)


class Flow:
    """Writes down a page and goes on to the next; ``finish`` numbers them.

    ``y`` is the top of what is still free on the page, mm from the sheet's bottom.
    """

    def __init__(self, heading: Heading, size: PageSize, foot: str = "") -> None:
        self.heading, self.size, self.foot = heading, size, foot
        box = Page(size).printable
        self.box = Bounds(box.left, box.bottom + _FOOT, box.right, box.top)
        self._sheets: list[_Sheet] = []
        self.y = 0.0
        self.new_page()

    @property
    def width(self) -> float:
        return self.box.width

    @property
    def left(self) -> float:
        return self.box.left

    @property
    def room(self) -> float:
        """Free height on this page."""
        return self.y - self.box.bottom

    def add(self, *items: Item) -> None:
        """Put items on this page, in its own coordinates."""
        self._sheets[-1].items += items

    def new_page(self) -> None:
        """Go on to a fresh page, with its header."""
        self._sheets.append(_Sheet())
        self.y = self.box.top
        if len(self._sheets) == 1:
            self._first_header()
        else:
            self._running_header()

    def keep(self, height: float) -> None:
        """Go on to the next page unless this much height is free here."""
        if self.room < height and self.y < self.box.top - 12.0:
            self.new_page()

    def skip(self, height: float) -> None:
        self.y -= height

    # --- headers ------------------------------------------------------------------------

    def _first_header(self) -> None:
        heading = self.heading
        half = 0.6 * self.width
        date_room = self.width - half
        self._at(self.box.right, shortened(heading.date, date_room, BODY), BODY, h="right")
        self.line(shortened(heading.shop, half, HEAD, bold=True), HEAD, bold=True)
        self.skip(1.0)
        kind = heading.kind
        kind_room = text_width(kind, HEAD) + 4.0
        self._at(self.box.right, kind, HEAD, h="right", down=TITLE, color=SOFT)
        car = shortened(heading.car, self.width - kind_room, TITLE, bold=True)
        self.line(car, TITLE, bold=True)
        if heading.customer:
            self.line(shortened(f"For {heading.customer}", self.width, BODY), BODY)
        self.rule()
        self.skip(1.0)

    def _running_header(self) -> None:
        heading = self.heading
        words = " · ".join(part for part in (heading.shop, heading.car, heading.kind) if part)
        self.line(shortened(words, self.width, SMALL), SMALL, color=SOFT)
        self.rule()
        self.skip(1.0)

    def rule(self, style: Style = RULE_LINE) -> None:
        """A line across the page."""
        self.add(Line((self.box.left, self.y), (self.box.right, self.y), style))

    def _at(
        self, x: float, text: str, height: float, h: Align = "left", down: float | None = None,
        bold: bool = False, color: str = INK,
    ) -> None:
        base = self.y - _RISE * (down or height)
        self.add(Text((x, base), text, height, h, bold=bold, style=ink(color)))

    # --- text ---------------------------------------------------------------------------

    def line(
        self, text: str, height: float = BODY, bold: bool = False, color: str = INK,
        indent: float = 0.0,
    ) -> None:
        """One line, which has to fit."""
        if text:
            self._at(self.left + indent, text, height, bold=bold, color=color)
        self.skip(LINE_SPACING * height)

    def paragraph(
        self, text: str, height: float = BODY, bold: bool = False, color: str = INK,
        indent: float = 0.0, mark: str = "",
    ) -> None:
        """A text broken into lines, with a mark before its first one if there is one."""
        hang = indent + (text_width("•", height) + height if mark else 0.0)
        lines = broken(text, self.width - hang, height, bold)
        self.keep(min(len(lines), 2) * LINE_SPACING * height)
        for number, words in enumerate(lines):
            self.keep(LINE_SPACING * height)
            if mark and number == 0:
                self._at(self.left + indent, mark, height, bold=bold, color=color)
            self.line(words, height, bold, color, hang)

    def title(self, text: str, room: float = 20.0) -> None:
        """A section's title, kept together with ``room`` mm of what follows."""
        self.keep(LINE_SPACING * HEAD + 2.5 + room)
        self.skip(2.5)
        self.line(text, HEAD, bold=True)
        self.skip(0.5)

    def bullets(self, texts: Sequence[str], height: float = BODY) -> None:
        for text in texts:
            self.paragraph(text, height, mark="•")

    def two_columns(self, texts: Sequence[str], height: float = BODY) -> None:
        """Short texts side by side, down the left column first."""
        half = (len(texts) + 1) // 2
        hang = text_width("•", height) + 0.7 * height
        width = 0.5 * self.width - _PAD
        for left in range(half):
            pair = [texts[left], *texts[left + half : left + half + 1]]
            lines = [broken(text, width - hang, height) for text in pair]
            tall = max(map(len, lines)) * LINE_SPACING * height
            self.keep(tall)
            top = self.y
            for place, words in enumerate(lines):
                x = self.left + place * 0.5 * self.width
                self.y = top
                self._at(x, "•", height)
                for text in words:
                    self._at(x + hang, text, height)
                    self.skip(LINE_SPACING * height)
            self.y = top - tall

    def box_of(self, title: str, texts: Sequence[str], height: float = SMALL) -> None:
        """A tinted box of short paragraphs that stays in one piece."""
        inner = self.width - 6.0
        lines = [broken(text, inner, height) for text in texts]
        step = LINE_SPACING * height
        count = sum(map(len, lines))
        tall = 4.0 + LINE_SPACING * BODY + count * step + 1.0 * (len(lines) - 1)
        self.keep(tall + 2.0)
        self.skip(2.0)
        box = Bounds(self.box.left, self.y - tall, self.box.right, self.y)
        self.add(Polygon(box.corners, style=Style(None, fill=TINT, layer="rules")))
        self.skip(2.0)
        self.line(title, BODY, bold=True, indent=3.0)
        for words in lines:
            for text in words:
                self.line(text, height, indent=3.0)
            self.skip(1.0)
        self.y = box.bottom

    # --- pictures -----------------------------------------------------------------------

    def picture(self, drawing: Drawing, align: Align = "center", clip: bool = True) -> None:
        """A drawing in paper mm, framed, at the left, in the middle or at the right."""
        frame = drawing.shown()
        self.keep(frame.height)
        share = {"left": 0.0, "center": 0.5, "right": 1.0}[align]
        x = self.left + share * (self.width - frame.width)
        self.put(drawing, x, clip)
        self.skip(frame.height)

    def put(self, drawing: Drawing, x: float, clip: bool = True) -> None:
        """A framed drawing with its top left corner at ``x`` and the present height."""
        frame = drawing.shown()
        at = (x - frame.left, self.y - frame.top)
        shown = Bounds(x, self.y - frame.height, x + frame.width, self.y)
        self._sheets[-1].placed.append((drawing, at, shown if clip else None))

    # --- tables -------------------------------------------------------------------------

    def table(self, columns: Sequence[Column], rows: Sequence[Row], height: float = BODY) -> None:
        """A ruled table; a cell too long for its column is broken into lines."""
        total = sum(column.share for column in columns)
        widths = [self.width * column.share / total for column in columns]
        header: Row = [Cell(column.title, bold=True, color=SOFT) for column in columns]
        has_header = any(column.title for column in columns)
        first = True
        for row in rows:
            lines = _broken(row, widths, height)
            tall = _tall(lines, height)
            if first and has_header:
                self.keep(tall + _tall(_broken(header, widths, SMALL), SMALL))
            if has_header and (first or self.room < tall):
                self.keep(tall)
                self._row(columns, widths, header, SMALL)
                self.rule(Style(INK, 0.25, layer="rules"))
            first = False
            self.keep(tall)
            self._row(columns, widths, row, height)
            self.rule(HAIR)

    def _row(
        self, columns: Sequence[Column], widths: Sequence[float], row: Row, height: float
    ) -> None:
        lines = _broken(row, widths, height)
        x = self.left
        top = self.y
        for column, width, cell, words in zip(columns, widths, row, lines, strict=True):
            look = cell if isinstance(cell, Cell) else Cell(cell)
            share = {"left": 0.0, "center": 0.5, "right": 1.0}[column.align]
            at = x + share * (width - _PAD)
            self.y = top - 0.6
            for text in words:
                self._at(at, text, height, column.align, bold=look.bold, color=look.color)
                self.skip(LINE_SPACING * height)
            x += width
        self.y = top - _tall(lines, height)

    # --- the end ------------------------------------------------------------------------

    def finish(self, more: int = 0) -> Pages:
        """The pages, each with its number at the foot; ``more`` pages follow them."""
        count = len(self._sheets) + more
        pages = []
        for number, sheet in enumerate(self._sheets, 1):
            base = self.box.bottom - _FOOT + 1.0
            words = f"Page {number} of {count}"
            room = self.width - text_width(words, SMALL) - 6.0
            foot: list[Item] = [
                Line((self.box.left, base + 4.0), (self.box.right, base + 4.0), HAIR),
                Text((self.box.right, base), words, SMALL, "right", style=ink(SOFT)),
                Text(
                    (self.box.left, base), shortened(self.foot, room, SMALL), SMALL,
                    style=ink(SOFT),
                ),
            ]
            page = Page(self.size, title=self.heading.title)
            page = page.with_placed(Drawing((*sheet.items, *foot)))
            for drawing, at, clip in sheet.placed:
                page = page.with_placed(drawing, at, clip)
            pages.append(page)
        return Pages(tuple(pages), self.heading.title)


def _broken(row: Row, widths: Sequence[float], height: float) -> list[list[str]]:
    cells = [cell if isinstance(cell, Cell) else Cell(cell) for cell in row]
    return [
        broken(cell.text, width - _PAD, height, cell.bold)
        for cell, width in zip(cells, widths, strict=True)
    ]


def broken(text: str, width: float, height: float, bold: bool = False) -> list[str]:
    """The text in lines, a tape reading ("6 7/16 in") never torn between two."""
    bound = _READING.sub(lambda found: found[0].replace(" ", _HARD), text)
    return [line.replace(_HARD, " ") for line in wrapped(bound, width, height, bold)]


def _tall(lines: Sequence[Sequence[str]], height: float) -> float:
    return max(map(len, lines)) * LINE_SPACING * height + 0.8
