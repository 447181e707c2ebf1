"""A tape's marks: which ticks and numerals a zoom can carry, and what a hand snaps to."""

from __future__ import annotations

import math
from dataclasses import dataclass
from fractions import Fraction

from geometry.layout import UnitName
from geometry.lengths import format_length, inch_steps

_UNIT = {"in": Fraction(254, 10), "mm": Fraction(1)}
SNAP = {"in": Fraction(1, 16), "mm": Fraction(1)}
"""The tape's fraction that dragging snaps to, in the unit."""
NUDGES: dict[UnitName, dict[str, Fraction]] = {
    "in": {"plain": Fraction(1, 16), "large": Fraction(1, 2), "fine": Fraction(1, 64)},
    "mm": {"plain": Fraction(1), "large": Fraction(10), "fine": Fraction(1, 10)},
}
"""Steps of the arrow keys, in the unit."""

_TICKS = {
    "in": [Fraction(1, k) for k in (64, 32, 16, 8, 4, 2)] + [Fraction(k) for k in (1, 6, 12, 60)],
    "mm": [Fraction(1, 2), *(Fraction(k) for k in (1, 5, 10, 50, 100, 500, 1000))],
}
_NUMERALS = {
    "in": [Fraction(k) for k in (1, 2, 4, 12, 24, 60, 120, 240)],
    "mm": [Fraction(k) for k in (5, 10, 20, 50, 100, 200, 500, 1000, 2000, 5000)],
}
_ROUND = {"in": 12, "mm": 100}


@dataclass(frozen=True)
class Mark:
    """One tick: its place, mm, how long it is (0 to 1) and its numeral, if it has one."""

    at: float
    size: float
    numeral: str
    round: bool


def _multiple(mm: float, step: Fraction) -> int:
    return round(Fraction(mm) / step)


def snapped(mm: float, unit: UnitName) -> float:
    """The nearest place on the tape's fraction, as the very float that typing it gives."""
    step = SNAP[unit] * _UNIT[unit]
    return float(_multiple(mm, step) * step) + 0.0


def nudged(mm: float, steps: int, size: str, unit: UnitName) -> float:
    """A place moved by arrow-key steps of ``size`` ("plain", "large" or "fine").

    A place that stands on a 64th (a tenth of a millimeter) stays on one exactly.
    """
    fine = NUDGES[unit]["fine"] * _UNIT[unit]
    near = _multiple(mm, fine) * fine
    start = near if abs(float(near) - mm) < 1e-9 else Fraction(mm)
    return float(start + steps * NUDGES[unit][size] * _UNIT[unit]) + 0.0


def tape_text(mm: float, unit: UnitName) -> str:
    """A length as a tape shows it, in the coarsest of 16ths, 32nds and 64ths that it meets.

    Lengths between the marks are rounded to a 16th, or to a tenth of a millimeter.
    """
    if unit == "in":
        for denominator in (16, 32, 64):
            if abs(inch_steps(mm, denominator) * 25.4 / denominator - mm) < 1e-6:
                return format_length(mm, unit, denominator)
    return format_length(mm, unit)


def _first(steps: list[Fraction], unit: UnitName, dots_per_mm: float, room: float) -> Fraction:
    for step in steps:
        if float(step * _UNIT[unit]) * dots_per_mm >= room:
            return step
    return steps[-1]


def marks(
    low: float,
    high: float,
    unit: UnitName,
    dots_per_mm: float,
    numeral_room: float = 34.0,
    tick_room: float = 4.5,
) -> list[Mark]:
    """The ticks of a tape between two places, mm, at a zoom (pixels per mm).

    Ticks stand at least ``tick_room`` and numerals ``numeral_room`` pixels apart.
    """
    tick = _first(_TICKS[unit], unit, dots_per_mm, tick_room)
    numeral = _first(_NUMERALS[unit], unit, dots_per_mm, numeral_room)
    every = _ROUND[unit] if unit == "in" or numeral < 100 else 5 * int(numeral)
    step = tick * _UNIT[unit]
    out: list[Mark] = []
    for count in range(math.ceil(low / float(step)), math.floor(high / float(step)) + 1):
        value = count * tick
        labelled = value % numeral == 0
        out.append(
            Mark(
                float(count * step),
                _size(value, tick, unit),
                str(abs(int(value))) if labelled else "",
                labelled and value % every == 0,
            )
        )
    return out


def _size(value: Fraction, tick: Fraction, unit: UnitName) -> float:
    """How long a tick is: inches longest, then halves, quarters and so on."""
    ladder = (
        ((Fraction(12), 1.0), (Fraction(1), 0.75), (Fraction(1, 2), 0.55), (Fraction(1, 4), 0.42),
         (Fraction(1, 8), 0.32), (Fraction(1, 16), 0.24))
        if unit == "in"
        else ((Fraction(100), 1.0), (Fraction(50), 0.8), (Fraction(10), 0.65), (Fraction(5), 0.45),
              (Fraction(1), 0.28))
    )
    for step, size in ladder:
        if value % step == 0:
            return size
    return 0.18
