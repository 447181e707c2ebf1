"""Weights, rates and shares as a shop writes them, and back; lengths live in lengths.py.

Inside: kg, N/mm, a share from 0 to 1, Hz. Shown beside inches: lb, lb/in; beside
millimeters: kg, N/mm.
"""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from typing import Literal

from geometry.layout import MM_PER_INCH, UnitName

Quantity = Literal["mass", "rate", "share", "frequency"]

KG_PER_POUND = 0.45359237
"""Exact: the international avoirdupois pound of 1959."""
STANDARD_GRAVITY = 9.80665
N_PER_POUND = KG_PER_POUND * STANDARD_GRAVITY
"""Pound-force, exact with standard gravity."""

_NUMBER = re.compile(r"\s*([+-]?(?:\d+(?:[.,]\d*)?|[.,]\d+))\s*([a-zA-Z/%]*)\s*")


class QuantityError(ValueError):
    """A text that is no such quantity; the message is a plain reason."""


@dataclass(frozen=True)
class _Kind:
    example: str
    low: float
    high: float
    units: dict[str, float]


_RATE = N_PER_POUND / MM_PER_INCH
_KINDS: dict[Quantity, _Kind] = {
    "mass": _Kind("2820 lb or 1280 kg", 0.0, 1e5,
                  {"kg": 1.0, "lb": KG_PER_POUND, "lbs": KG_PER_POUND}),
    "rate": _Kind("400 lb/in or 70 N/mm", 0.0, 1e5,
                  {"n/mm": 1.0, "lb/in": _RATE, "lbs/in": _RATE, "lb": _RATE}),
    "share": _Kind("54 %", 0.0, 1.0, {"%": 0.01}),
    "frequency": _Kind("1.2 Hz", 0.0, 50.0, {"hz": 1.0}),
}


def unit_of(kind: Quantity, units: UnitName) -> str:
    """The unit that a plain number is read in and shown in."""
    inch = {"mass": "lb", "rate": "lb/in", "share": "%", "frequency": "Hz"}
    metric = {"mass": "kg", "rate": "N/mm", "share": "%", "frequency": "Hz"}
    return (inch if units == "in" else metric)[kind]


def parse_quantity(text: str, kind: Quantity, units: UnitName) -> float:
    """The quantity that a text says, in kg, N/mm, a share or Hz.

    Raises QuantityError with a plain reason.
    """
    about = _KINDS[kind]
    like = f"It should look like {about.example}."
    match = _NUMBER.fullmatch(text) if len(text) <= 40 else None
    if match is None:
        raise QuantityError(f"Can't read “{text.strip()[:40]}”. {like}")
    word = (match[2] or unit_of(kind, units)).lower()
    if word not in about.units:
        raise QuantityError(f"“{match[2]}” does not fit here. {like}")
    value = float(match[1].replace(",", ".")) * about.units[word]
    if not about.low <= value <= about.high:
        raise QuantityError(f"“{text.strip()}” is out of range. {like}")
    return value


def format_quantity(value: float, kind: Quantity, units: UnitName) -> str:
    """A quantity as it is shown, without its unit: four good digits."""
    if not math.isfinite(value):
        return "–"
    shown = value / _KINDS[kind].units[unit_of(kind, units).lower()]
    decimals = max(0, 3 - math.floor(math.log10(abs(shown)))) if shown else 0
    text = f"{shown:.{min(decimals, 4)}f}"
    return text.rstrip("0").rstrip(".") if "." in text else text
