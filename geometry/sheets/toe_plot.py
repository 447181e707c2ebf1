"""Toe through the travel as a picture for paper: found dashed, planned solid, tolerance tinted."""

from __future__ import annotations

import math
from collections.abc import Iterator

import numpy as np

from geometry.curves import BY_KEY
from geometry.drawing import Bounds, Drawing, Item, Line, Polygon, Polyline, Style, Text
from geometry.finding_checks.wording import Wording
from geometry.layout import MM_PER_INCH, SideName, UnitName
from geometry.lengths import format_length
from geometry.linkage import Array
from geometry.sheets.look import BAND, BLUE, HAIR, INK, SMALL, SOFT, VERMILLION, ink
from geometry.solution import Solution

FOUND = Style(VERMILLION, 0.45, (2.6, 1.2), layer="as found")
PLANNED = Style(BLUE, 0.6, layer="as planned")
_LEADS = (1.0, 2.0, 2.5, 5.0)
_FINE_LEADS = (1.0, 1.5, 2.0, 2.5, 3.0, 4.0, 5.0, 6.0, 8.0)
_LEFT, _FOOT, _HEAD = 16.0, 10.0, 6.0


def toe_change(solution: Solution, side: SideName) -> Array:
    """Toe against its ride-height value (n,), mm at the tire over the sweep; NaN out of reach."""
    return BY_KEY["toe change"].read(solution, side)


def toe_plot(
    cars: tuple[tuple[str, Solution], ...], side: SideName, width: float, height: float,
    alike: tuple[SideName, ...] = (),
) -> Drawing:
    """One wheel's toe change over the travel for each car, in paper mm.

    ``cars`` are (words, solution), the planned car last; a lone car is drawn as planned.
    ``alike`` names the sides whose plots should have one scale.
    """
    planned = cars[-1][1]
    units = planned.layout.units
    span = planned.span
    curves = [(words, toe_change(car, side), car.left.sweep.travel) for words, car in cars]
    band = 0.5 * _band(planned)
    reach = _reach([toe_change(car, s) for s in {side, *alike} for _, car in cars], band, units)
    box = Bounds(_LEFT, _FOOT, width - 4.0, height - _HEAD)

    def place(travel: float, toe: float) -> tuple[float, float]:
        x = box.left + (travel + span) / (2.0 * span) * box.width
        return x, box.center[1] + toe / reach * 0.5 * box.height

    items: list[Item] = [
        Polygon(
            Bounds(box.left, place(0, -band)[1], box.right, place(0, band)[1]).corners,
            style=Style(None, fill=BAND, layer="tolerance"),
        ),
        *_grid(box, span, reach, units),
    ]
    for number, (words, values, travels) in enumerate(curves):
        style = PLANNED if number == len(curves) - 1 else FOUND
        items += _curve([place(t, v) for t, v in zip(travels, values, strict=True)], style)
        at = (box.left + number * 34.0, height - 3.2)
        items += [
            Line((at[0], at[1] + 0.9), (at[0] + 9.0, at[1] + 0.9), style),
            Text((at[0] + 10.5, at[1]), words, SMALL, style=ink()),
        ]
    items.append(_band_key(box, height, units, 2.0 * band, len(curves)))
    items.append(
        Polygon(
            Bounds(
                box.left + len(curves) * 34.0, height - 3.4,
                box.left + len(curves) * 34.0 + 6.0, height - 1.2,
            ).corners,
            style=Style("#8FAF98", 0.15, fill=BAND, layer="tolerance"),
        )
    )
    return Drawing(tuple(items), Bounds(0.0, 0.0, width, height))


def _band(solution: Solution) -> float:
    band = BY_KEY["toe"].band
    return 2.0 * band(solution) if band is not None else 0.0


def _band_key(box: Bounds, height: float, units: UnitName, band: float, count: int) -> Text:
    size = Wording(units).toe(band)
    x = box.left + count * 34.0 + 7.5
    return Text((x, height - 3.2), f"within {size} in all", SMALL, style=ink())


def _reach(curves: list[Array], band: float, units: UnitName) -> float:
    """Half the height of the plot, mm of toe: a round number that holds every curve."""
    sizes = [np.abs(values[np.isfinite(values)]) for values in curves]
    most = max([2.0 * band, *(float(size.max()) for size in sizes if size.size)])
    unit = MM_PER_INCH if units == "in" else 1.0
    step = 2.0 * _round_step(1.06 * most / unit / 2.0, _FINE_LEADS)
    return step * unit


def _round_step(size: float, leads: tuple[float, ...] = _LEADS) -> float:
    """The next of some leading figures times a power of ten."""
    power = 10.0 ** math.floor(math.log10(max(size, 1e-9)))
    for lead in leads:
        if size <= lead * power * (1 + 1e-9):
            return lead * power
    return 10.0 * power


def _grid(box: Bounds, span: float, reach: float, units: UnitName) -> Iterator[Item]:
    """Frame, ride-height cross and the figures along the two edges."""
    middle = box.center
    for share in (0.0, 0.25, 0.5, 0.75, 1.0):
        y = box.bottom + share * box.height
        yield Line((box.left, y), (box.right, y), HAIR)
        value = (2.0 * share - 1.0) * reach
        unit = MM_PER_INCH if units == "in" else 1.0
        text = f"{abs(value) / unit:.3f}" if units == "in" else f"{abs(value):.2f}"
        text = "0" if value == 0.0 else text
        yield Text((box.left - 1.2, y), text, SMALL, "right", "middle", style=ink(SOFT))
    for travel in _travels(span, units):
        x = box.left + (travel + span) / (2.0 * span) * box.width
        yield Line((x, box.bottom), (x, box.top), HAIR)
        text = "0" if travel == 0.0 else format_length(abs(travel), units)
        yield Text((x, box.bottom - 3.4), text, SMALL, "center", style=ink(SOFT))
    strong = Style(INK, 0.25, layer="rules")
    yield Line((box.left, middle[1]), (box.right, middle[1]), strong)
    yield Line((middle[0], box.bottom), (middle[0], box.top), strong)
    low = box.bottom - 7.4
    yield Text((box.left, low), "← wheel down (droop)", SMALL, style=ink(SOFT))
    words = f"wheel up (bump), {units} →"
    yield Text((box.right, low), words, SMALL, "right", style=ink(SOFT))
    x = box.left + 1.0
    for word in (
        Text((x, box.top - 1.0), f"↑ toe-in, {units}", SMALL, "left", "top", style=ink(SOFT)),
        Text((x, box.bottom + 1.0), "↓ toe-out", SMALL, "left", "bottom", style=ink(SOFT)),
    ):
        back = word.bounds.padded(0.3)
        yield Polygon(back.corners, style=Style(None, fill="#FFFFFF", layer="labels"))
        yield word


def _travels(span: float, units: UnitName) -> list[float]:
    """Round travels to mark, mm, both ways from ride height."""
    unit = MM_PER_INCH if units == "in" else 1.0
    step = _round_step(span / unit / 3.5) * unit
    if units == "in" and step < MM_PER_INCH:
        step = next((MM_PER_INCH / d for d in (2, 4, 8) if MM_PER_INCH / d >= step), step)
    count = int(span / step + 1e-9)
    return [k * step for k in range(-count, count + 1)]


def _curve(places: list[tuple[float, float]], style: Style) -> Iterator[Item]:
    """The curve, broken where there is no pose."""
    run: list[tuple[float, float]] = []
    for place in [*places, (math.nan, math.nan)]:
        if math.isfinite(place[0] + place[1]):
            run.append(place)
            continue
        if len(run) > 1:
            yield Polyline(tuple(run), style=style)
        run = []
