"""Ways to damage the text of a layout file or measure sheet, knowing how it is built.

Every way is a function of the text, a number that says where, and a piece of junk, so that
a random draw, a hypothesis strategy and a coverage-guided fuzzer can all drive the same ones.
"""

from __future__ import annotations

import json
import re
from collections.abc import Callable
from typing import Any

from geometry.layout import SIDE_POINTS
from geometry.layout_file import job_to_text
from geometry.measure_sheet import KINDS, blank_measure_sheet, measure_sheet_to_text, starting_sheet
from tests.sample_cars import SAMPLES

JUNK: tuple[str, ...] = (
    "", " ", "0", "-0", "-0.0", "1", "-1", "3.5", "1e308", "-1e308", "1.8e308", "1e309", "1e999999",
    "1e-999999", "1E+400", "5e-324", "9" * 30, "9" * 399, "9" * 500, "0." + "3" * 390, "NaN",
    "-NaN",
    "nan", "Infinity", "-Infinity", "inf", "1e99999999999999999999", "00", "01", "+1",
    "1_000", "0x10",
    "true", "false", "null", "[]", "{}", "[[]]", '{"over": 1}', "[1, 2]", "[0, 0, 0]",
    '""', '"x"', '"\\ud800"', '"\\udc00\\ud800"', '"\\u0000"', '"\\u202e"', "'x'", '"', "'", '""""',
    "\ud800", "\x00", "\x1b[31m", "\u202e", "\ufeff", "\u2028", "é", "🚗", "٣", "½", "9 1/16",
    "9 1/0", "1/0", "1'2\"", "9-1/16", "1,234", "1.234,5", "12in", "12 mm", "3 ft", "-",
    "--1", "1e5",
    "=1+1", '=HYPERLINK("x")', "@SUM(1)", "../../etc/passwd", "file:///dev/zero", "$HOME", "%s%n",
    "left", "right", "both", "in", "mm", "knuckle", "relay rod", "rack", "bobline layout",
    ",", ";", "\t", ",,,,,", "\r", "\n", "\r\n", "{", "}", "[", "]", ":", "#", "sep=;",
    "1e1000000", "-" * 50, "x" * 5000, "a," * 300, "__class__", "__proto__", '{"__class__": "os"}',
)  # fmt: skip

LAYOUT_TEXTS: tuple[str, ...] = tuple(job_to_text(job) for job in SAMPLES.values())
SHEET_TEXTS: tuple[str, ...] = (
    *(measure_sheet_to_text(job.planned) for job in SAMPLES.values()),
    *(starting_sheet(kind) for kind in KINDS),
    *(blank_measure_sheet(kind) for kind in KINDS),
)

_TOKEN = re.compile(r'"(?:[^"\\]|\\.)*"|-?\d+(?:\.\d+)?(?:[eE][-+]?\d+)?|[a-z]+|[{}\[\],:]')
_CELL = re.compile(r"[^,\r\n]*")


def _spot(text: str, place: int) -> int:
    return place % (len(text) + 1)


def truncated(text: str, place: int, junk: str) -> str:
    return text[: _spot(text, place)]


def beheaded(text: str, place: int, junk: str) -> str:
    return text[_spot(text, place) :]


def inserted(text: str, place: int, junk: str) -> str:
    at = _spot(text, place)
    return text[:at] + junk + text[at:]


def cut_out(text: str, place: int, junk: str) -> str:
    at = _spot(text, place)
    return text[:at] + text[at + 1 + place % 23 :]


def one_letter(text: str, place: int, junk: str) -> str:
    at = _spot(text, place)
    return text[:at] + (junk[:1] or "z") + text[at + 1 :]


def _swapped(pattern: re.Pattern[str], text: str, place: int, new: str | None) -> str:
    found = list(pattern.finditer(text))
    if not found:
        return text
    match = found[place % len(found)]
    return text[: match.start()] + (match[0] * 2 if new is None else new) + text[match.end() :]


def token(text: str, place: int, junk: str) -> str:
    """One JSON token, or word or number of a sheet, becomes junk."""
    return _swapped(_TOKEN, text, place, junk)


def cell(text: str, place: int, junk: str) -> str:
    """One cell between commas becomes junk."""
    return _swapped(_CELL, text, place, junk)


def token_twice(text: str, place: int, junk: str) -> str:
    return _swapped(_TOKEN, text, place, None)


def nested(text: str, place: int, junk: str) -> str:
    """One token goes into many brackets."""
    deep = (1, 3, 60, 900, 5000)[place % 5]
    opening, closing = (("[", "]"), ('{"over":', "}"))[place % 2]
    found = list(_TOKEN.finditer(text))
    if not found:
        return opening * deep
    match = found[place // 10 % len(found)]
    inside = opening * deep + match[0] + closing * deep
    return text[: match.start()] + inside + text[match.end() :]


def _lines(text: str, place: int) -> tuple[list[str], int]:
    lines = text.split("\n")
    return lines, place % len(lines)


def line_twice(text: str, place: int, junk: str) -> str:
    """A row, or a JSON entry with its key, stands twice."""
    lines, at = _lines(text, place)
    return "\n".join([*lines[: at + 1], *lines[at:]])


def line_gone(text: str, place: int, junk: str) -> str:
    lines, at = _lines(text, place)
    return "\n".join([*lines[:at], *lines[at + 1 :]])


def line_junk(text: str, place: int, junk: str) -> str:
    lines, at = _lines(text, place)
    return "\n".join([*lines[:at], junk, *lines[at:]])


def lines_swapped(text: str, place: int, junk: str) -> str:
    lines, at = _lines(text, place)
    other = place // 7 % len(lines)
    lines[at], lines[other] = lines[other], lines[at]
    return "\n".join(lines)


def point_row(text: str, place: int, junk: str) -> str:
    """A row for some point and side, as a sheet might hold."""
    name = SIDE_POINTS[place % len(SIDE_POINTS)]
    return f"{text}\n{name},,{junk},{place % 900},1,{('', 'left', 'right', junk)[place % 4]}"


def line_ends(text: str, place: int, junk: str) -> str:
    return text.replace("\n", ("\r\n", "\r", "\n\n", "\u2028", " ")[place % 5])


def separators(text: str, place: int, junk: str) -> str:
    return text.replace(",", (";", "\t", ",,", '","', "，")[place % 5])


def quoted(text: str, place: int, junk: str) -> str:
    """Quote marks around, inside, or instead of what stands there."""
    return _swapped(_TOKEN, text, place, ('"' * (1 + place % 4)) + junk + '"')


def repeated(text: str, place: int, junk: str) -> str:
    at = _spot(text, place)
    return text[:at] + text[at : at + 40] * (place % 300) + text[at:]


def entry(text: str, place: int, junk: str) -> str:
    """One entry of a JSON tree, with all below it, replaced, dropped, renamed or doubled."""
    try:
        tree = json.loads(text)
    except (ValueError, RecursionError):
        return inserted(text, place, junk)
    mark = "\u0001"
    here: Any = tree
    rest = place
    while isinstance(here, dict | list) and here:
        keys = list(here) if isinstance(here, dict) else list(range(len(here)))
        key = keys[rest % len(keys)]
        rest //= len(keys)
        below = here[key]
        if isinstance(below, dict | list) and below and rest % 4:
            here = below
            continue
        _damage_entry(here, key, rest, mark)
        break
    return json.dumps(tree, indent=1).replace(json.dumps(mark), junk)


def _damage_entry(here: Any, key: Any, how: int, mark: str) -> None:
    if how % 5 == 1:
        del here[key]
    elif how % 5 == 2 and isinstance(here, dict):
        here[mark + "new"] = here.pop(key)
    elif how % 5 == 3 and isinstance(here, list):
        here.extend([here[key]] * (how % 3000))
    elif how % 5 == 4:
        here[key] = [here[key]]
    else:
        here[key] = mark


WAYS: tuple[Callable[[str, int, str], str], ...] = (
    truncated, beheaded, inserted, cut_out, one_letter, token, token, token, cell, cell,
    token_twice, nested, line_twice, line_gone, line_junk, lines_swapped, point_row, line_ends,
    separators, quoted, repeated, entry, entry, entry, entry,
)  # fmt: skip

Step = tuple[int, int, int]
"""One damage: which way, where, and which junk."""

PLACES = 10**6
ENCODINGS = ("utf-8", "utf-8", "utf-8", "utf-8-sig", "utf-16", "utf-16-le", "utf-32", "latin-1",
             "cp1252", "cp437", "shift-jis", "utf-7")  # fmt: skip


def damaged(text: str, steps: list[Step]) -> str:
    """A text after some damages; kept below a megabyte."""
    for way, place, junk in steps:
        text = WAYS[way % len(WAYS)](text, place, JUNK[junk % len(JUNK)])[:1_000_000]
    return text


def encoded(text: str, encoding: int) -> bytes:
    """A text in one of some encodings, halves of letters included."""
    name = ENCODINGS[encoding % len(ENCODINGS)]
    keep = "surrogatepass" if name.startswith("utf") and name != "utf-7" else "replace"
    return text.encode(name, keep)
