"""Tape text to millimeters and back, exactly; and the same for degrees.

A length may be typed the way a tape is read (``9 1/16``, ``9-1/16``, ``1' 2 1/2"``), as a
decimal (``9.0625``, ``230 mm``), in the unit that was set or with its own unit mark. Text is
read with exact fractions and rounded to a float once.
"""

from __future__ import annotations

import math
import re
from decimal import Decimal
from fractions import Fraction

from geometry.layout import UnitName

LIMIT_MM = 1e6
"""The longest length taken, mm: a kilometer is no car."""

LIMIT_DEG = 360.0

_PI = Fraction(31415926535897932384626433832795028841971, 10**40)
"""Pi to 40 decimals: degrees typed or read become the nearest float of radians."""

_UNIT_MM = {
    "mm": Fraction(1),
    "cm": Fraction(10),
    "in": Fraction(254, 10),
    "ft": Fraction(3048, 10),
}
_MARKS = {
    "″": '"', "”": '"', "“": '"', "''": '"', "′": "'", "’": "'", "‘": "'",
    "−": "-", "–": "-", "—": "-", "⁄": "/", "\u00a0": " ", "\u2009": " ", "\u202f": " ",
    "½": " 1/2", "¼": " 1/4", "¾": " 3/4", "⅛": " 1/8", "⅜": " 3/8", "⅝": " 5/8", "⅞": " 7/8",
}
_UNIT_WORDS = {
    '"': "in", "in": "in", "in.": "in", "inch": "in", "inches": "in",
    "'": "ft", "ft": "ft", "ft.": "ft", "foot": "ft", "feet": "ft",
    "mm": "mm", "cm": "cm",
}
_NUMBER = r"(?:\d+(?:[.,]\d*)?|[.,]\d+)"
_QUANTITY = re.compile(
    rf"\s*(?:(?P<whole>{_NUMBER})(?:\s+|\s*-\s*)(?P<top2>\d+)\s*/\s*(?P<bottom2>\d+)"
    rf"|(?P<top>\d+)\s*/\s*(?P<bottom>\d+)"
    rf"|(?P<decimal>{_NUMBER}))"
    r"\s*(?P<unit>\"|'|[a-zA-Z]+\.?)?"
)


class LengthTextError(ValueError):
    """A text that is no length; the message is a plain reason."""


class AngleTextError(ValueError):
    """A text that is no angle; the message is a plain reason."""


def _decimal(text: str) -> Fraction:
    return Fraction("0" + text.replace(",", ".") + ("0" if text[-1] in ".," else ""))


def parse_length(text: str, unit: UnitName) -> float:
    """The length, mm, that ``text`` says, read in ``unit`` unless it has its own marks.

    Raises LengthTextError with a plain reason.
    """
    shown = text.strip()
    if len(shown) > 60:
        raise LengthTextError("Can't read this: it is too long for a length.")
    rest = shown
    for mark, plain in _MARKS.items():
        rest = rest.replace(mark, plain)
    rest = rest.strip()
    if not rest:
        raise LengthTextError("Nothing was typed. A length such as 9 1/16 or 230 mm was expected.")
    sign = 1
    if rest[0] in "+-":
        sign, rest = (-1 if rest[0] == "-" else 1), rest[1:].strip()
    total = Fraction(0)
    last_unit: Fraction | None = None
    while rest:
        match = _QUANTITY.match(rest)
        if match is None or (last_unit is not None and match["unit"] is None and len(rest) == 0):
            raise _unreadable(shown)
        scale = _scale(match["unit"], unit, last_unit, shown)
        if last_unit is not None and scale >= last_unit:
            raise _unreadable(shown)
        total += _amount(match, shown) * scale
        last_unit = scale
        rest = rest[match.end():].strip()
        # Between feet and inches a dash may stand, as on a drawing: 1'-2 1/2".
        if rest.startswith("-") and scale == _UNIT_MM["ft"]:
            rest = rest[1:].strip()
    if total > LIMIT_MM:
        raise LengthTextError(f"{shown} is longer than any car. Is the unit right?")
    value = float(sign * total)
    return 0.0 if value == 0.0 else value


def _scale(word: str | None, unit: UnitName, before: Fraction | None, shown: str) -> Fraction:
    if word is None:
        # A bare number behind feet is inches, whatever the unit setting.
        return _UNIT_MM["in"] if before == _UNIT_MM["ft"] else _UNIT_MM[unit]
    known = _UNIT_WORDS.get(word.lower())
    if known is None:
        if re.fullmatch(r"(?i)nan|inf(inity)?|e\d*", word):
            raise _unreadable(shown)
        raise LengthTextError(
            f"Can't read “{shown}”: “{word}” is no unit. Use in, ft, mm or cm, or none."
        )
    return _UNIT_MM[known]


def _amount(match: re.Match[str], shown: str) -> Fraction:
    for top, bottom in (("top2", "bottom2"), ("top", "bottom")):
        if match[top] is not None:
            if int(match[bottom]) == 0:
                raise LengthTextError(f"Can't read “{shown}”: a fraction can't be over zero.")
            part = Fraction(int(match[top]), int(match[bottom]))
            if top == "top2":
                whole = _decimal(match["whole"])
                if whole.denominator != 1 or "." in match["whole"] or "," in match["whole"]:
                    raise LengthTextError(
                        f"Can't read “{shown}”: a decimal and a fraction don't go together."
                    )
                return whole + part
            return part
    return _decimal(match["decimal"])


def _unreadable(shown: str) -> LengthTextError:
    return LengthTextError(
        f"Can't read “{shown}” as a length. It should look like 9 1/16, 9.0625 or 230 mm."
    )


def format_length(
    mm: float,
    unit: UnitName,
    denominator: int = 16,
    *,
    mark: bool = False,
    decimals: int = 1,
) -> str:
    """A length as a tape shows it: ``9 1/16`` or, in millimeters, ``230.2``.

    Inches are rounded to the nearest ``1/denominator`` and reduced; millimeters to
    ``decimals``, trailing zeros dropped. ``mark`` adds the unit.
    """
    if not math.isfinite(mm):
        return "–"
    text = _tape(mm, denominator) if unit == "in" else _plain(round(mm, decimals), decimals)
    return f"{text} {unit}" if mark else text


def _tape(mm: float, denominator: int) -> str:
    steps = round(Fraction(mm) / _UNIT_MM["in"] * denominator)
    whole, part = divmod(abs(steps), denominator)
    sign = "-" if steps < 0 else ""
    if part == 0:
        return f"{sign}{whole}"
    fraction = Fraction(part, denominator)
    text = f"{fraction.numerator}/{fraction.denominator}"
    return f"{sign}{whole} {text}" if whole else f"{sign}{text}"


def _plain(value: float, decimals: int) -> str:
    text = f"{value:.{decimals}f}"
    if "." in text:
        text = text.rstrip("0").rstrip(".")
    return "0" if text in ("-0", "") else text


def format_exact(mm: float, unit: UnitName) -> str:
    """The shortest text that ``parse_length`` reads back as the very same float.

    A fraction where the length is exactly one of a 64th or coarser; else a decimal in
    ``unit``; in millimeters with their mark where no decimal inch gives the same float.
    """
    if unit == "in":
        for denominator in (16, 32, 64):
            text = _tape(mm, denominator)
            if parse_length(text, "in") == mm:
                return text
        inches = mm / 25.4
        for digits in range(1, 18):
            text = format(Decimal(f"{inches:.{digits}g}"), "f")
            if parse_length(text, "in") == mm:
                return text
        return f"{_digits_until(mm, 'mm')} mm"
    return _digits_until(mm, "mm")


def _digits_until(mm: float, unit: UnitName) -> str:
    # Below a thousandth of a nanometer the last text is only the nearest.
    for decimals in range(0, 26):
        text = _plain(mm, decimals)
        if parse_length(text, unit) == mm:
            break
    return text


_ANGLE = re.compile(
    rf"\s*(?P<sign>[+-]?)\s*(?:(?P<deg>{_NUMBER})\s*(?:°|deg|degrees?)?)"
    rf"(?:\s*(?P<min>{_NUMBER})\s*')?\s*"
)


def parse_angle(text: str) -> float:
    """The angle, rad, that a text in degrees says: ``0.5``, ``-1/2``, ``0.5°``, ``0°30'``.

    Raises AngleTextError with a plain reason.
    """
    shown = text.strip()
    plain = shown
    for mark, usual in _MARKS.items():
        plain = plain.replace(mark, usual)
    plain = plain.strip()
    fraction = re.fullmatch(r"([+-]?)\s*(?:(\d+)\s+)?(\d+)\s*/\s*(\d+)\s*(?:°|deg)?", plain)
    if fraction is not None and len(plain) <= 40 and int(fraction[4]) != 0:
        degrees = Fraction(int(fraction[2] or 0)) + Fraction(int(fraction[3]), int(fraction[4]))
        sign = fraction[1]
    else:
        match = _ANGLE.fullmatch(plain) if len(plain) <= 40 else None
        if match is None:
            raise AngleTextError(
                f"Can't read “{shown[:40]}” as an angle. It should look like -0.5 or 0°30'."
            )
        degrees = _decimal(match["deg"])
        if match["min"] is not None:
            degrees += _decimal(match["min"]) / 60
        sign = match["sign"]
    if degrees > LIMIT_DEG:
        raise AngleTextError(f"{shown} is more than a whole turn.")
    value = radians_of(degrees)
    return -value if sign == "-" and value else value


def radians_of(degrees: Fraction) -> float:
    """Exact degrees as the nearest float of radians."""
    return float(degrees * _PI / 180)


def format_angle(radians: float, decimals: int = 2) -> str:
    """An angle in degrees with its mark: ``-0.5°``."""
    if not math.isfinite(radians):
        return "–"
    return _plain(round(math.degrees(radians), decimals), decimals) + "°"


def format_angle_exact(radians: float) -> str:
    """The shortest plain decimal of degrees that reads back as the very same float.

    Degrees are read with exact decimals (``radians_of``), so that every float has one.
    """
    degrees = Fraction(radians) * 180 / _PI
    for decimals in range(0, 30):
        scaled = round(degrees * 10**decimals)
        if radians_of(Fraction(scaled, 10**decimals)) == radians:
            break
    digits = str(abs(scaled)).rjust(decimals + 1, "0")
    sign = "-" if scaled < 0 else ""
    return f"{sign}{digits[:-decimals]}.{digits[-decimals:]}" if decimals else f"{sign}{digits}"
