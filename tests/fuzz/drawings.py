"""Damaged DXF drawings: pairs of lines, a code and its value, put out of order."""

from __future__ import annotations

import io
from functools import cache

import ezdxf

from tests.fuzz.damage import JUNK, WAYS, Step

_VALUES = ("0", "-1", "1e308", "1e400", "nan", "-inf", "999999999999", "1e-320", "70", "LINE",
           "CIRCLE", "SPLINE", "INSERT", "ENDSEC", "EOF", "POLYLINE", "VERTEX",
           "SEQEND")  # fmt: skip
"""What a DXF reader may stumble over besides the junk of all files."""


def _fill(drawing: ezdxf.document.Drawing) -> None:
    model = drawing.modelspace()
    model.add_polyline2d([(0, 0), (100, 0), (100, 50), (0, 50)], close=True)
    model.add_circle((5, 5), 30)
    for start, end in (((0, 0), (10, 0)), ((10, 0), (10, 10)), ((10, 10), (0, 0))):
        model.add_line(start, end)
    model.add_arc((5, 5), 3, 0, 90)


def _text_of(drawing: ezdxf.document.Drawing) -> str:
    out = io.StringIO()
    drawing.write(out)
    return out.getvalue()


@cache
def drawing_texts() -> tuple[str, ...]:
    """Sound drawings: the oldest kind, and a newer one with curves."""
    old, new = ezdxf.new("R12"), ezdxf.new("R2010", units=4)
    for drawing in (old, new):
        _fill(drawing)
    model = new.modelspace()
    model.add_lwpolyline([(0, 0, 0.5), (90, 0, 0), (90, 40, 0)], format="xyb", close=True)
    model.add_ellipse((0, 0), (10, 0), 0.5)
    model.add_spline([(0, 0), (5, 5), (10, 0), (0, 0)])
    return _text_of(old), _text_of(new)


def damaged_drawing(which: int, steps: list[Step]) -> str:
    """One of the sound drawings after some damages, most of them among its shapes."""
    texts = drawing_texts()
    text = texts[which % len(texts)]
    for way, place, junk in steps:
        at = text.rfind("\nENTITIES\n")
        if way % 3 == 2 or at < 0:
            text = WAYS[way % len(WAYS)](text, place, JUNK[junk % len(JUNK)])
        else:
            text = text[:at] + _one_line(text[at:], way, place, junk)
    return text[:1_000_000]


def _one_line(text: str, way: int, place: int, junk: int) -> str:
    """One line of a drawing's shapes becomes another value, goes, or comes again."""
    # A line end, the section's name, and then a code and its value by turns.
    lines = text.split("\n")
    at = place % len(lines)
    value = (_VALUES + JUNK)[junk % len(_VALUES + JUNK)]
    if way % 2:
        lines[(at | 1) % len(lines)] = value
        return "\n".join(lines)
    if way % 4 == 0:
        del lines[at]
    elif way % 8 == 2:
        lines[at:at] = lines[max(0, at - 8) : at] * (1 + place % 40)
    else:
        lines[at] = value
    return "\n".join(lines)
